//! Vents and fans in a shaft without friction, where pressures add up by hand.

#![allow(clippy::print_stdout, clippy::unwrap_used)]

mod proof;

use proof::{solved, within};
use ventrise_mesh::Geometry;
use ventrise_solver::samples::Shaft;
use ventrise_solver::{Air, Fan, LossLaw, Vent, VentKind, fan_points};

const BOTH: [Geometry; 2] = [Geometry::Planar { depth: 0.3 }, Geometry::Axisymmetric];

fn air() -> Air {
    Air::dry(303.15, 101_325.0)
}

fn law(loss: f64) -> LossLaw {
    LossLaw { loss, friction: 0.0 }
}

/// Dirty perforated sheet in the floor, mesh in the roof, driven by 0.05 Pa: u solves
/// ½·ρ·(1 + a)·u² + ½·μ·b·u = Δp, the root of a quadratic equation. Band 0.01 %: the equations of
/// the shaft hold without approximation on any mesh.
#[test]
fn vents_cost_what_their_laws_say() {
    let sheet = Vent {
        kind: VentKind::Perforated { hole: 3e-3, sheet: 1e-3 },
        free_share: 0.4,
        blocked: 0.2,
    };
    let mesh = Vent { kind: VentKind::Mesh { wire: 0.4e-3 }, free_share: 0.5, blocked: 0.0 };
    for geometry in BOTH {
        let drive = 0.05;
        let shaft =
            Shaft { geometry, air: air(), laws: [sheet.law(), mesh.law()], drive, fan: None };
        let problem = shaft.problem().unwrap();
        let solution = solved(&problem, 1e-8);
        let a = 0.5 * air().density * (1.0 + sheet.law().loss + mesh.law().loss);
        let b = 0.5 * air().viscosity * (sheet.law().friction + mesh.law().friction);
        let speed = (-b + (b * b + 4.0 * a * drive).sqrt()) / (2.0 * a);
        within("flow", Shaft::flow(&problem, &solution.state), speed * shaft.area(), 1e-4);
        // What summaries tell of the sheet belongs to this speed: K·½·ρ·u² is its pressure.
        let lost = 0.5 * air().density * speed * speed * sheet.law().at(speed, &air());
        let rest = 0.5 * air().density * speed * speed * (1.0 + mesh.law().at(speed, &air()));
        within("pressure", lost + rest, drive, 1e-12);
    }
}
