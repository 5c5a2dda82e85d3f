#![allow(clippy::all, missing_docs)]
use std::time::Instant;
use ventrise_solver::samples::*;
use ventrise_solver::*;
fn main() {
    let a: Vec<String> = std::env::args().collect();
    let n: usize = a[1].parse().unwrap();
    let pool = rayon::ThreadPoolBuilder::new().num_threads(a[2].parse().unwrap()).build().unwrap();
    pool.install(|| {
        let problem = SquareCavity { cells: n, grading: Grading::Uniform, ..Default::default() }.problem().unwrap();
        let mut p = Pieces::new(&problem, &State::rest(problem.mesh()));
        for _ in 0..2 { p.cycle().unwrap(); }
        let cells = (n * n) as f64;
        let time = |name: &str, f: &mut dyn FnMut()| {
            let mut best = f64::INFINITY;
            for _ in 0..5 { let t = Instant::now(); f(); best = best.min(t.elapsed().as_secs_f64()); }
            println!("{name:12} {:8.1} ns/cell", best * 1e9 / cells);
        };
        time("residual", &mut || p.residual());
        time("smooth", &mut || p.smooth());
        time("pressure", &mut || p.pressure());
        time("cycle", &mut || p.cycle().unwrap());
    });
}
