//! Cost against cells: cycles, seconds, work units and memory on a series of meshes.
//!
//! `cargo bench --bench scaling` runs everything, `cargo bench --bench scaling -- cavity` the
//! problems whose names contain a word; `--threads N` sets the threads, `--most N` the largest
//! mesh [cells]. A work unit is the time of one evaluation of all residuals on the same mesh.

#![allow(clippy::unwrap_used, clippy::print_stdout)]

use std::time::Instant;

use ventrise::case::{Case, setup};
use ventrise_mesh::Side;
use ventrise_solver::samples::{Grading, SquareCavity, side_heat};
use ventrise_solver::{Control, Pieces, Problem, Settings, Solution, part_temperatures, solve};

type Make = fn() -> Series;

/// One problem on a series of meshes.
struct Series {
    name: &'static str,
    answer: &'static str,
    meshes: Vec<Problem>,
    read: fn(&Problem, &Solution) -> f64,
}

fn cavity(name: &'static str, grading: Grading) -> Series {
    let mesh =
        |cells| SquareCavity { cells, grading, ..SquareCavity::default() }.problem().unwrap();
    Series {
        name,
        answer: "mean Nu",
        meshes: [128, 256, 512, 1024].map(mesh).into(),
        read: |p, s| side_heat(p, &s.air, &s.state, Side::Left),
    }
}

const HOUSING: &str = include_str!("../tests/reference/vented-planar.toml");

fn housing(name: &'static str, watts: &str) -> Series {
    let mesh = |(nx, ny): (usize, usize)| {
        let text = HOUSING.replace("heat = \"15 W\"", &format!("heat = \"{watts} W\""));
        let case = Case::parse(&format!("{text}\n[mesh]\ncells = [{nx}, {ny}]\n"), "housing.toml");
        let case = case.unwrap();
        let mesh = setup::mesh(&case).unwrap().mesh;
        setup::problem(&case, mesh).unwrap()
    };
    Series {
        name,
        answer: "rise [K]",
        meshes: [(120, 160), (240, 320), (480, 640), (960, 1280)].map(mesh).into(),
        read: |p, s| part_temperatures(p, &s.state)[0].map_or(f64::NAN, |t| t.max),
    }
}

fn main() {
    let args: Vec<String> = std::env::args().skip(1).filter(|a| a != "--bench").collect();
    let option = |name: &str| {
        let at = args.iter().position(|a| a == name)?;
        args.get(at + 1)?.parse::<usize>().ok()
    };
    let threads = option("--threads").unwrap_or(0);
    let most = option("--most").unwrap_or(usize::MAX);
    let words: Vec<&String> =
        args.iter().filter(|a| a.chars().next().is_some_and(char::is_alphabetic)).collect();
    let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build().unwrap();
    println!("threads: {}", pool.current_num_threads());
    let series: [(&str, Make); 4] = [
        ("cavity-uniform", || cavity("square cavity, Rayleigh 1e6, equal cells", Grading::Uniform)),
        ("cavity-graded", || cavity("square cavity, Rayleigh 1e6, graded", Grading::Both(2.0))),
        ("housing-60W", || housing("vented housing, 60 W/m, equal cells", "60")),
        ("housing-6W", || housing("vented housing, 6 W/m, equal cells", "6")),
    ];
    for (name, make) in series {
        if words.is_empty() || words.iter().any(|w| name.contains(w.as_str())) {
            pool.install(|| measure(&make(), most));
        }
    }
}

fn measure(series: &Series, most: usize) {
    println!("\n{}", series.name);
    println!(
        "{:>12} {:>8} {:>7} {:>9} {:>9} {:>8} {:>11} {:>8} {:>11}",
        "mesh",
        "cells",
        "cycles",
        "seconds",
        "CPU s",
        "ns/cell",
        "work units",
        "B/cell",
        series.answer
    );
    let mut points = Vec::new();
    for problem in series.meshes.iter().filter(|p| p.mesh().cell_count() <= most) {
        let mesh = problem.mesh();
        let cells = mesh.cell_count();
        let settings = Settings { assess_stability: false, ..Settings::default() };
        let before = memory::start();
        let (wall, cpu) = (Instant::now(), cpu_time::ProcessTime::now());
        let solution = solve(problem, &settings, None, &mut |_| Control::Continue).unwrap();
        let (seconds, cpu) = (wall.elapsed().as_secs_f64(), cpu.elapsed().as_secs_f64());
        let bytes = memory::peak().saturating_sub(before) as f64 / cells as f64;
        let cycles = solution.history.iter().filter(|row| row.cells == cells).count();
        let unit = residual_seconds(problem, &solution);
        println!(
            "{:>12} {:>8} {:>7} {:>9.3} {:>9.3} {:>8.0} {:>11.0} {:>8.0} {:>11.5}{}",
            format!("{} x {}", mesh.nx(), mesh.ny()),
            cells,
            cycles,
            seconds,
            cpu,
            1e9 * seconds / cells as f64,
            seconds / unit,
            bytes,
            (series.read)(problem, &solution),
            if solution.stop == ventrise_solver::StopReason::Converged {
                ""
            } else {
                "  NOT SETTLED"
            },
        );
        points.push(((cells as f64).ln(), seconds.ln()));
    }
    if points.len() > 1 {
        println!("seconds grow as cells to the power {:.2}", slope(&points));
    }
}

/// Seconds of one evaluation of all residuals, the least of several.
fn residual_seconds(problem: &Problem, solution: &Solution) -> f64 {
    let mut pieces = Pieces::new(problem, &solution.state);
    let mut least = f64::INFINITY;
    for _ in 0..10 {
        let clock = Instant::now();
        pieces.residual();
        least = least.min(clock.elapsed().as_secs_f64());
    }
    least
}

/// Slope of the line of least squares.
fn slope(points: &[(f64, f64)]) -> f64 {
    let n = points.len() as f64;
    let mean = |f: fn(&(f64, f64)) -> f64| points.iter().map(f).sum::<f64>() / n;
    let (x, y) = (mean(|p| p.0), mean(|p| p.1));
    let above: f64 = points.iter().map(|p| (p.0 - x) * (p.1 - y)).sum();
    above / points.iter().map(|p| (p.0 - x).powi(2)).sum::<f64>()
}

/// The process's memory, where the system tells it.
mod memory {
    fn field(name: &str) -> u64 {
        let status = std::fs::read_to_string("/proc/self/status").unwrap_or_default();
        let line = status.lines().find(|l| l.starts_with(name)).unwrap_or_default();
        let kib = line.split_whitespace().nth(1).and_then(|s| s.parse::<u64>().ok());
        1024 * kib.unwrap_or(0)
    }

    /// Resets the peak; the memory in use now [bytes].
    pub fn start() -> u64 {
        let _ = std::fs::write("/proc/self/clear_refs", "5");
        field("VmRSS")
    }

    /// The peak since [`start`] [bytes].
    pub fn peak() -> u64 {
        field("VmHWM")
    }
}
