//! Whole runs: the square cavity from rest, the two reference housings on their default meshes.
//!
//! `cargo bench --bench cases` measures, `cargo bench --bench cases -- housing` some of them.

#![allow(clippy::unwrap_used)]

use std::path::Path;

use ventrise::case::{Case, setup};
use ventrise_solver::samples::SquareCavity;
use ventrise_solver::{Control, Problem, Settings, Solution, StopReason, solve};

fn main() {
    divan::main();
}

/// Solves from rest and insists on convergence: a run that gave up would look fast.
fn solved(problem: &Problem, settings: &Settings) -> Solution {
    let solution = solve(problem, settings, None, &mut |_| Control::Continue).unwrap();
    assert_eq!(solution.stop, StopReason::Converged);
    solution
}

/// Rayleigh number 1e6, cells along each side.
#[divan::bench(args = [64, 128, 256], sample_count = 3, sample_size = 1)]
fn square_cavity(bencher: divan::Bencher, cells: usize) {
    let problem = SquareCavity { cells, ..SquareCavity::default() }.problem().unwrap();
    let settings = Settings::default();
    bencher.bench_local(|| solved(&problem, &settings));
}

/// From the case file's text to the solution.
#[divan::bench(args = ["vented-planar", "vented-axisymmetric"], sample_count = 3, sample_size = 1)]
fn housing(bencher: divan::Bencher, name: &str) {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/reference");
    let path = folder.join(name).with_extension("toml");
    bencher.bench_local(|| {
        let case = Case::read(&path).unwrap();
        let mesh = setup::mesh(&case).unwrap().mesh;
        let problem = setup::problem(&case, mesh).unwrap();
        solved(&problem, &setup::settings(&case))
    });
}
