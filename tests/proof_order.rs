//! Order of accuracy against a manufactured solution with a solid beside the air.

#![allow(clippy::print_stdout)]
#![allow(clippy::unwrap_used)]

mod proof;

use proof::{error_order, solved};
use ventrise_solver::samples::{FieldErrors, Manufactured};

fn errors(axisymmetric: bool, upright: bool, strength: f64) -> [FieldErrors; 3] {
    [32, 64, 128].map(|cells| {
        let sample = Manufactured { axisymmetric, upright, cells, strength };
        let problem = sample.problem().unwrap();
        let solution = solved(&problem, 1e-9);
        let errors = sample.errors(&problem, &solution.state);
        println!("{sample:?}: {errors:?}");
        errors
    })
}

/// Every field must show order 2 ± 0.1 between the finer two meshes: the scheme is second order
/// and the fields are smooth on either side of the face.
fn assert_second_order(axisymmetric: bool, upright: bool, strength: f64) {
    let e = errors(axisymmetric, upright, strength);
    for (name, of) in [("u", (|e| e.u) as fn(FieldErrors) -> f64), ("v", |e| e.v), ("t", |e| e.t)] {
        let order = error_order([of(e[1]), of(e[2])]);
        assert!((order - 2.0).abs() < 0.1, "{name}: order {order}");
        assert!(of(e[2]) < 5e-3, "{name}: {}", of(e[2]));
    }
}

#[test]
fn planar_beside_an_upright_solid() {
    assert_second_order(false, true, 0.0);
}

#[test]
fn planar_above_a_lying_solid() {
    assert_second_order(false, false, 0.0);
}

#[test]
fn annulus_around_a_core() {
    assert_second_order(true, true, 0.0);
}

#[test]
fn cylinder_with_the_axis_above_a_lying_solid() {
    assert_second_order(true, false, 0.0);
}

#[test]
fn planar_on_graded_meshes() {
    assert_second_order(false, true, 1.2);
}

#[test]
fn cylinder_on_graded_meshes() {
    assert_second_order(true, false, 1.2);
}
