//! Pieces of a run: reading a case, its mesh, iterations of the solver, what is read off a state.
//!
//! Throughput is in cells. The pieces of an iteration are those of [`ventrise_solver::Pieces`]; the
//! cost of ten iterations is also the difference between two of the cases of `iterations`.

#![allow(clippy::unwrap_used)]

use std::sync::OnceLock;

use divan::counter::ItemsCount;
use ventrise::case::{Case, setup};
use ventrise_solver::samples::SquareCavity;
use ventrise_solver::{
    Control, Pieces, Problem, Settings, Solution, State, balance, cell_velocities, heat_fluxes,
    numbers, solve,
};

fn main() {
    divan::main();
}

const HOUSINGS: [&str; 2] = ["vented-planar", "vented-axisymmetric"];

fn text(housing: &str) -> &'static str {
    match housing {
        "vented-planar" => include_str!("../tests/reference/vented-planar.toml"),
        _ => include_str!("../tests/reference/vented-axisymmetric.toml"),
    }
}

fn case(housing: &str) -> Case {
    Case::parse(text(housing), "case.toml").unwrap()
}

/// Text to a checked case.
#[divan::bench(args = HOUSINGS)]
fn read_case(housing: &str) -> Case {
    case(housing)
}

/// A checked case to its mesh.
#[divan::bench(args = HOUSINGS)]
fn make_mesh(bencher: divan::Bencher, housing: &str) {
    let case = case(housing);
    let cells = setup::mesh(&case).unwrap().mesh.cell_count();
    bencher.counter(ItemsCount::new(cells)).bench(|| setup::mesh(&case).unwrap());
}

/// A mesh to the next coarser one.
#[divan::bench]
fn coarsen_mesh(bencher: divan::Bencher) {
    let mesh = setup::mesh(&case("vented-planar")).unwrap().mesh;
    bencher.counter(ItemsCount::new(mesh.cell_count())).bench(|| mesh.coarsened(2).unwrap());
}

/// The square cavity at Rayleigh number 1e6 with its solution.
fn cavity() -> &'static (Problem, Solution) {
    static SOLVED: OnceLock<(Problem, Solution)> = OnceLock::new();
    SOLVED.get_or_init(|| {
        let problem = SquareCavity { cells: 128, ..SquareCavity::default() }.problem().unwrap();
        let settings = Settings::default();
        let solution = solve(&problem, &settings, None, &mut |_| Control::Continue).unwrap();
        (problem, solution)
    })
}

/// So many outer iterations from the solution itself, with the set-up of the chain of meshes.
#[divan::bench(args = [1, 11], sample_count = 10, sample_size = 1)]
fn iterations(bencher: divan::Bencher, count: usize) {
    let (problem, solution) = cavity();
    // A bound that cannot be met, so that exactly `count` iterations are made.
    let settings = Settings { tolerance: 0.0, max_iterations: count, ..Settings::default() };
    bencher.counter(ItemsCount::new(count * problem.mesh().cell_count())).bench_local(|| {
        let start = Some(solution.state.clone());
        let run = solve(problem, &settings, start, &mut |_| Control::Continue).unwrap();
        assert_eq!(run.history.len(), count);
        run
    });
}

/// Pieces of one iteration on the finest mesh, cells along each side.
fn piece(bencher: divan::Bencher, cells: usize, mut work: impl FnMut(&mut Pieces)) {
    let problem = SquareCavity { cells, ..SquareCavity::default() }.problem().unwrap();
    let mut pieces = Pieces::new(&problem, &State::rest(problem.mesh()));
    pieces.cycle().unwrap();
    bencher.counter(ItemsCount::new(cells * cells)).bench_local(|| work(&mut pieces));
}

#[divan::bench(args = [128, 512])]
fn residual(bencher: divan::Bencher, cells: usize) {
    piece(bencher, cells, Pieces::residual);
}

#[divan::bench(args = [128, 512])]
fn smoother(bencher: divan::Bencher, cells: usize) {
    piece(bencher, cells, Pieces::smooth);
}

/// The linear multigrid: one pressure correction.
#[divan::bench(args = [128, 512])]
fn pressure(bencher: divan::Bencher, cells: usize) {
    piece(bencher, cells, Pieces::pressure);
}

#[divan::bench(args = [128, 512], sample_count = 10, sample_size = 1)]
fn cycle(bencher: divan::Bencher, cells: usize) {
    piece(bencher, cells, |pieces| pieces.cycle().unwrap());
}

/// What is read off a state: balances, characteristic numbers, cell fields.
#[divan::bench]
fn read_balance(bencher: divan::Bencher) {
    let (problem, s) = cavity();
    let cells = ItemsCount::new(problem.mesh().cell_count());
    bencher.counter(cells).bench(|| balance(problem, &s.air, &s.state));
}

#[divan::bench]
fn read_numbers(bencher: divan::Bencher) {
    let (problem, s) = cavity();
    let cells = ItemsCount::new(problem.mesh().cell_count());
    bencher.counter(cells).bench(|| numbers(problem, &s.air, &s.state));
}

#[divan::bench]
fn read_heat_fluxes(bencher: divan::Bencher) {
    let (problem, s) = cavity();
    let cells = ItemsCount::new(problem.mesh().cell_count());
    bencher.counter(cells).bench(|| heat_fluxes(problem, &s.air, &s.state));
}

#[divan::bench]
fn read_velocities(bencher: divan::Bencher) {
    let (problem, s) = cavity();
    let cells = ItemsCount::new(problem.mesh().cell_count());
    bencher.counter(cells).bench(|| cell_velocities(problem, &s.state));
}
