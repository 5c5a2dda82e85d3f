//! Vents and fans in a shaft without friction, where pressures add up by hand.

#![allow(clippy::print_stdout, clippy::unwrap_used)]

mod proof;

use proof::{solved, within};
use ventrise_mesh::Geometry;
use ventrise_solver::samples::{RingHousing, Shaft};
use ventrise_solver::{
    Air, Description, Fan, LossLaw, Problem, Vent, VentKind, fan_points, slot_flows,
};

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

/// A shaft of 1.7 and 2.7 velocity heads, and a fan whose curve has its points at 0, 0.5 and
/// 1.2 m/s through the slot.
fn driven(geometry: Geometry, air: Air, inward: bool, speed: f64) -> Shaft {
    let plain = Shaft { geometry, air, laws: [law(1.7), law(2.7)], drive: 0.0, fan: None };
    let at = |speed: f64, pressure: f64| [speed * plain.area(), pressure];
    let curve = vec![at(0.0, 6.0), at(0.5, 4.5), at(1.2, 0.0)];
    let fan = Fan { curve, density: 1.2, speed, inward, stopped_loss: 20.0 };
    Shaft { fan: Some(fan), ..plain }
}

/// Mean speed through the shaft and the fan's pressure rise.
fn point(shaft: &Shaft) -> [f64; 2] {
    let problem = shaft.problem().unwrap();
    let solution = solved(&problem, 1e-8);
    let at = fan_points(&problem, &solution.air, &solution.state)[0].unwrap();
    let flow = Shaft::flow(&problem, &solution.state);
    within("the fan's flow is the shaft's", at.flow, flow, 1e-9);
    [flow / shaft.area(), at.pressure]
}

/// The second line of the curve, at this air's density, meets ½·ρ·(1 + K)·u²: a quadratic
/// equation. Band 0.1 %.
#[test]
fn a_fan_works_where_its_curve_meets_the_losses() {
    for geometry in BOTH {
        for inward in [true, false] {
            let a = 0.5 * air().density * (1.0 + 1.7 + 2.7);
            // Pa and Pa/(m/s): P = c − s·u between 0.5 and 1.2 m/s.
            let s = 4.5 / 0.7 * air().density / 1.2;
            let c = s * 1.2;
            let speed = (-s + (s * s + 4.0 * a * c).sqrt()) / (2.0 * a);
            assert!((0.5..1.2).contains(&speed));
            let [found, pressure] = point(&driven(geometry, air(), inward, 1.0));
            within("speed", found, speed, 1e-3);
            within("pressure", pressure, c - s * speed, 1e-3);
        }
    }
}

/// Fan laws. Where all losses go with the square of the speed, half the fan's speed moves half the
/// air at a quarter of the pressure; thinner air at 3000 m (70121 Pa, ISO 2533) is moved in the
/// same volume at a pressure less by the densities' ratio. Exact; the band is the iteration's.
#[test]
fn speed_and_altitude_follow_the_fan_laws() {
    for geometry in BOTH {
        let [full, pressure] = point(&driven(geometry, air(), true, 1.0));
        let [half, quarter] = point(&driven(geometry, air(), true, 0.5));
        within("half the flow", half, 0.5 * full, 1e-5);
        within("a quarter of the pressure", quarter, 0.25 * pressure, 1e-5);
        let high = Air::dry(303.15, 70_121.0);
        let [same, less] = point(&driven(geometry, high, true, 1.0));
        within("the same flow", same, full, 1e-5);
        within("less pressure", less, pressure * 70_121.0 / 101_325.0, 1e-5);
    }
}

/// A fan that stands is a loss: ½·ρ·(1 + ΣK + 20)·u² against 0.5 Pa.
#[test]
fn a_standing_fan_costs_its_stopped_loss() {
    for geometry in BOTH {
        let shaft = Shaft { drive: 0.5, ..driven(geometry, air(), true, 0.0) };
        let exact = (0.5 / (0.5 * air().density * (1.0 + 1.7 + 2.7 + 20.0))).sqrt();
        let [speed, pressure] = point(&shaft);
        within("speed", speed, exact, 1e-4);
        assert_eq!(pressure, 0.0);
    }
}

/// Curves from nearly a given pressure to nearly a given flow: the operating point stands within
/// the band of a settled run whatever the slope.
#[test]
fn flat_and_steep_curves_settle() {
    for (shut_off, free) in [(1.0, 100.0), (50.0, 2.0), (2e3, 0.5), (1e5, 0.1)] {
        let plain = driven(Geometry::Planar { depth: 0.3 }, air(), true, 1.0);
        let a = 0.5 * air().density * (1.0 + 1.7 + 2.7);
        let scale = air().density / 1.2;
        let [c, s] = [shut_off * scale, shut_off * scale / free];
        // a·u² + s·u = c, written so that a steep line loses no digits.
        let speed = 2.0 * c / (s + (s * s + 4.0 * a * c).sqrt());
        let curve = vec![[0.0, shut_off], [free * plain.area(), 0.0]];
        let fan = Fan { curve, density: 1.2, speed: 1.0, inward: true, stopped_loss: 0.0 };
        let [found, _] = point(&Shaft { fan: Some(fan), ..plain });
        within(&format!("{shut_off} Pa, {free} m/s"), found, speed, 1e-4);
    }
}

/// In a heated housing, whose slots are passed unevenly, the fan's pressure as a given one drives
/// the same air: every face of the slot gets the pressure that belongs to the whole flow.
#[test]
fn a_fan_in_a_housing_is_the_pressure_of_its_operating_point() {
    let bare = RingHousing { scale: 2, heat: 5.0 }.problem().unwrap();
    let with = |change: &dyn Fn(&mut Description)| {
        let mut d = bare.description().clone();
        change(&mut d);
        let problem = Problem::new(d).unwrap();
        let solution = solved(&problem, 1e-8);
        let flow = slot_flows(&problem, &solution.air, &solution.state)[0].inflow;
        (flow, fan_points(&problem, &solution.air, &solution.state))
    };
    let (natural, _) = with(&|_| {});
    let curve = vec![[0.0, 0.05], [2.0 * natural, 0.03], [4.0 * natural, 0.0]];
    let fan = Fan { curve, density: 1.2, speed: 1.0, inward: true, stopped_loss: 8.0 };
    let (assisted, points) = with(&|d| {
        d.fans = vec![fan.clone()];
        d.slots[0].fan = Some(0);
    });
    let at = points[0].unwrap();
    assert!(assisted > 1.1 * natural, "{natural} {assisted}");
    within("flow", at.flow, assisted, 1e-6);
    let (same, _) = with(&|d| d.slots[0].drive = at.pressure);
    within("given pressure", same, assisted, 1e-5);
}
