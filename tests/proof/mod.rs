//! What all proofs share: solving to the end, observed orders, comparisons with a stated band.

#![allow(dead_code, clippy::unwrap_used, clippy::expect_used, clippy::print_stdout)]

use ventrise_solver::{Control, Problem, Settings, Solution, State, StopReason, solve};

/// Solves from a start and insists on convergence.
pub fn solved_from(problem: &Problem, tolerance: f64, start: Option<State>) -> Solution {
    let settings = Settings { tolerance, ..Settings::default() };
    let solution = solve(problem, &settings, start, &mut |_| Control::Continue).unwrap();
    assert_eq!(solution.stop, StopReason::Converged, "{:?}", solution.history.last());
    solution
}

/// Solves from rest and insists on convergence.
pub fn solved(problem: &Problem, tolerance: f64) -> Solution {
    solved_from(problem, tolerance, None)
}

/// Order seen in three values on meshes of h, h/2, h/4.
pub fn observed_order(values: [f64; 3]) -> f64 {
    ((values[0] - values[1]) / (values[1] - values[2])).abs().log2()
}

/// Order seen in two errors on meshes of h, h/2.
pub fn error_order(errors: [f64; 2]) -> f64 {
    (errors[0] / errors[1]).log2()
}

/// Value at zero cell size of a second-order method from meshes of h and h/2.
pub fn extrapolated(values: [f64; 2]) -> f64 {
    values[1] + (values[1] - values[0]) / 3.0
}

/// Insists that a value lies within a relative band about a reference.
#[track_caller]
pub fn within(what: &str, value: f64, reference: f64, band: f64) {
    let off = (value - reference) / reference;
    println!(
        "{what}: {value:.6} against {reference:.6}, {:+.4} % (band {:.3} %)",
        100.0 * off,
        100.0 * band
    );
    assert!(off.abs() <= band, "{what}: {value} is {off:+.2e} off {reference}, more than {band}");
}
