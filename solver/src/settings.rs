//! Choices of a run, with their defaults.

/// How the value on a face is found for convection.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Convection {
    /// Second order, by linear interpolation between the two neighbours.
    Central,
    /// First order, the upwind neighbour's value.
    Upwind,
}

/// Settings of a run.
#[derive(Debug, Clone, PartialEq)]
pub struct Settings {
    /// Bound for all residuals, relative to their scales [-].
    pub tolerance: f64,
    /// Bound for the number of outer iterations.
    pub max_iterations: usize,
    /// Convection scheme.
    pub convection: Convection,
}

impl Default for Settings {
    fn default() -> Self {
        Settings { tolerance: 1e-6, max_iterations: 20_000, convection: Convection::Central }
    }
}
