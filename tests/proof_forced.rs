//! Forced flow: ducts far from their entrance, pressure-driven vents, the lid-driven cavity.

#![allow(clippy::print_stdout)]
#![allow(clippy::unwrap_used)]

mod proof;

use proof::{solved, within};
use ventrise::benchmark::compute;
use ventrise_solver::samples::{Duct, DuctShape, HeatedWalls};

fn duct(shape: DuctShape, heated: HeatedWalls) -> Duct {
    // Reynolds number 10: the entrance is over after about one hydraulic diameter.
    let (reynolds, prandtl) = match heated {
        HeatedWalls::None => (10.0, 1.0),
        // Péclet number 100: conduction along the duct moves the Nusselt number by about 1/Pe².
        _ => (10.0, 10.0),
    };
    let length = if heated == HeatedWalls::None { 4.0 } else { 25.0 };
    let along = if heated == HeatedWalls::None { 64 } else { 128 };
    Duct { shape, heated, reynolds, prandtl, length, across: 40, along }
}

/// f·Re of the developed flow, closed forms (R. K. Shah & A. L. London, Laminar Flow Forced
/// Convection in Ducts, 1978, from memory; derived in docs/equations.md), band 0.5 %; u_max/u_m.
#[test]
fn friction_of_developed_flow() {
    for (shape, friction, peak) in [
        (DuctShape::Plates, 96.0, 1.5),
        (DuctShape::Pipe, 64.0, 2.0),
        (DuctShape::Annulus(0.5), 95.2502, 1.50778),
        (DuctShape::Annulus(0.1), 89.3718, 1.56731),
    ] {
        let duct = duct(shape, HeatedWalls::None);
        within("closed form", duct.friction(), friction, 1e-5);
        let problem = duct.problem().unwrap();
        let state = solved(&problem, 1e-9).state;
        let name = format!("{shape:?}");
        within(&name, duct.friction_between(&problem, &state, [0.5, 0.8]), friction, 0.005);
        within(&name, duct.peak_ratio(&problem, &state, 0.7), peak, 0.005);
    }
}

/// Nusselt numbers far from the entrance, from the eigenvalues of the Graetz problem: both plates
/// hot 7.5407, one hot and one adiabatic 4.8607, pipe 3.6568; band 0.5 % at x* > 0.1.
#[test]
fn heat_transfer_far_from_the_entrance() {
    for (shape, heated, nusselt) in [
        (DuctShape::Plates, HeatedWalls::Both, 7.5407),
        (DuctShape::Plates, HeatedWalls::Outer, 4.8607),
        (DuctShape::Pipe, HeatedWalls::Outer, 3.6568),
    ] {
        let duct = duct(shape, heated);
        let problem = duct.problem().unwrap();
        let solution = solved(&problem, 1e-9);
        let name = format!("{shape:?} {heated:?}");
        let at = |share| duct.nusselt_at(&problem, &solution.air, &solution.state, share);
        within(&name, at(0.8), nusselt, 0.005);
    }
}

/// Lid-driven cavity: extremes on the centre lines. Bands 0.5 % (Reynolds number 100), 1 % (400),
/// 2 % (1000), as the boundary layers thin; positions half a percent of the side.
#[test]
fn lid_driven_cavity() {
    for (name, band) in
        [("lid-cavity-100", 0.005), ("lid-cavity-400", 0.01), ("lid-cavity-1000", 0.02)]
    {
        let c = compute(name, 96, false).unwrap();
        assert!(c.settled, "{name}");
        for q in &c.quantities {
            let reference = q.references[0].value;
            let band = if q.name.ends_with("_at") { 0.005 / reference } else { band };
            within(&format!("{name} {}", q.name), q.computed, reference, band);
        }
    }
}
