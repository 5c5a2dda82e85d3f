#![allow(clippy::all, missing_docs)]
use std::time::Instant;
use ventrise_solver::samples::*;
use ventrise_solver::*;
fn main() {
    let a: Vec<String> = std::env::args().collect();
    let threads = a[4].parse().unwrap();
    let n: usize = a[2].parse().unwrap();
    let x: f64 = a[3].parse().unwrap();
    let problem = match a[1].as_str() {
        "uni" => SquareCavity { cells: n, grading: Grading::Uniform, rayleigh: x, ..Default::default() }.problem().unwrap(),
        "gra" => SquareCavity { cells: n, rayleigh: x, ..Default::default() }.problem().unwrap(),
        "p2" => SlotHousing { scale: n, heat: x }.problem().unwrap(),
        "ring" => RingHousing { scale: n, heat: x }.problem().unwrap(),
        _ => panic!(),
    };
    let settings = Settings { assess_stability: a.len() > 5, ..Default::default() };
    let t0 = Instant::now();
    let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build().unwrap();
    let s = pool.install(|| solve(&problem, &settings, None, &mut |r| {
        println!("{:3} {:8} t {:.3} mass {:.1e} mx {:.1e} my {:.1e} en {:.1e} heat {:.1e} drift {:.1e} T {:?}", r.iteration, r.cells, t0.elapsed().as_secs_f64(), r.residuals.mass, r.residuals.momentum_x, r.residuals.momentum_y, r.residuals.energy, r.heat_error, r.drift, r.part_max.first());
        Control::Continue })).unwrap();
    println!("{:?} total {:.3} notes {:?}", s.stop, t0.elapsed().as_secs_f64(), s.notes);
}
