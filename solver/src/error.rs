//! What can be wrong with a problem, and what can break while solving it.

/// Why a description is no well-posed problem.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum ProblemError {
    /// A number outside its range.
    #[error("{what} must be {bound}, not {value}")]
    Number {
        /// What it is.
        what: &'static str,
        /// Its value (SI).
        value: f64,
        /// The bound in words.
        bound: &'static str,
    },
    /// An index that points nowhere.
    #[error("{what} {index} does not exist ({count} there are)")]
    Index {
        /// What it is.
        what: &'static str,
        /// The index.
        index: usize,
        /// How many there are.
        count: usize,
    },
    /// Heat is put in but cannot leave.
    #[error("the section has no way out for its heat")]
    NoWayOut,
    /// Radiation could not be set up.
    #[error("radiation: {0}")]
    Radiation(#[from] crate::RadiationError),
}

/// Why no solution was reached at all.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum SolveError {
    /// A field became not-a-number or grew without bound, even with the strongest damping.
    #[error("{field} broke down in cell ({i}, {j}) at iteration {iteration}")]
    Broke {
        /// Which field.
        field: &'static str,
        /// Column of the cell.
        i: usize,
        /// Row of the cell.
        j: usize,
        /// Outer iteration.
        iteration: usize,
    },
    /// The direct solution on the coarsest mesh failed.
    #[error("the coarse equations could not be factorised: {reason}")]
    Factorisation {
        /// The library's reason.
        reason: String,
    },
}
