//! The square cavity near the end of its steady range, from rest on a stretched mesh.
//!
//! P. Le Quéré, Computers & Fluids 20 (1991) 29-41, as quoted in A. D. Demou, C. Frantzis,
//! D. G. E. Grigoriadis, Int. J. Heat Mass Transfer 125 (2018), table 2: mean Nusselt number 30.225
//! at Rayleigh number 1e8, Prandtl number 0.71.
#![allow(clippy::unwrap_used, clippy::print_stdout)]

use ventrise_mesh::Side;
use ventrise_solver::samples::{SquareCavity, side_heat};
use ventrise_solver::{Control, Settings, StopReason, solve};

#[test]
fn mean_nusselt_number_at_1e8() {
    let cells = 256;
    let problem =
        SquareCavity { rayleigh: 1e8, cells, ..SquareCavity::default() }.problem().unwrap();
    let settings = Settings { assess_stability: false, ..Settings::default() };
    let solution = solve(&problem, &settings, None, &mut |_| Control::Continue).unwrap();
    assert_eq!(solution.stop, StopReason::Converged);
    let nusselt = side_heat(&problem, &solution.air, &solution.state, Side::Left);
    let cycles = solution.history.iter().filter(|row| row.cells == cells * cells).count();
    println!("{nusselt}, {cycles} cycles");
    // 256 cells in a boundary layer of Ra^(-1/4) = 0.01: a tenth of a per cent is expected.
    assert!((nusselt / 30.225 - 1.0).abs() < 1e-3, "{nusselt}");
}
