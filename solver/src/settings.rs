//! Choices of a run, with their defaults.

/// How the value on a face is found for convection.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Convection {
    /// Second order, by linear interpolation between the two neighbours.
    Central,
    /// First order, the upwind neighbour's value.
    Upwind,
}

/// Bound of a settled run for |heat in − heat out| over heat in.
pub const HEAT_BOUND: f64 = 1e-6;
/// Bound of a settled run for |air in − air out| over air in.
pub const MASS_BOUND: f64 = 1e-9;
/// Bound of a settled run for the change of any part's highest temperature over the last outer
/// iteration, relative to the largest rise of any part.
pub const DRIFT_BOUND: f64 = 1e-4;
/// Bound of a settled run for the change of any fan's flow over the last outer iteration, relative
/// to the flow.
pub const FAN_BOUND: f64 = 1e-4;

/// Largest relative residual with which a state may be read as a solution at all, settled or not.
pub const SOLVED: f64 = 1e-2;

/// Settings of a run.
#[derive(Debug, Clone, PartialEq)]
pub struct Settings {
    /// Bound for all residuals, relative to their scales [-].
    pub tolerance: f64,
    /// Bound for the number of outer iterations.
    pub max_iterations: usize,
    /// Convection scheme.
    pub convection: Convection,
    /// Whether to find out if the steady flow is stable.
    pub assess_stability: bool,
}

impl Default for Settings {
    fn default() -> Self {
        Settings {
            tolerance: 1e-6,
            max_iterations: 20_000,
            convection: Convection::Central,
            assess_stability: true,
        }
    }
}
