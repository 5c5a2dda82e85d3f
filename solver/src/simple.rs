//! The outer iteration.

use crate::{Control, Problem, Progress, Settings, Solution, SolveError, State};

/// Solves a problem from a start (rest when `None`). `watch` is asked after every outer iteration.
///
/// # Errors
/// A breakdown that no damping cured.
pub fn solve(
    problem: &Problem,
    settings: &Settings,
    start: Option<State>,
    watch: &mut dyn FnMut(&Progress) -> Control,
) -> Result<Solution, SolveError> {
    let _ = (problem, settings, start, watch);
    Err(SolveError::Factorisation { reason: "not built yet".into() })
}
