//! Natural draught: open channel, stack with losses, vented housings, air at rest.

#![allow(clippy::print_stdout, clippy::type_complexity)]
#![allow(clippy::unwrap_used)]

mod proof;

use proof::{solved, within};
use ventrise_mesh::Side;
use ventrise_solver::samples::{
    Channel, HeatedWalls, HousingResult, RingHousing, SlotHousing, Stack, side_heat, slot_flow,
};
use ventrise_solver::{Air, Problem, Solution};

/// Long channel at El = 0.1, fully developed: Nu = El/24 with both plates heated (Aung 1972;
/// Bar-Cohen & Rohsenow 1984), El/12 with one (closed form). At this El the air is at the plates'
/// temperature from the entrance on; the kinetic energy costs El/(288·Pr) = 0.05 %; the ends add
/// about one spacing of friction, 1 in 40 heights. Band 0.5 % as measured against the same
/// channel twice as long, which takes the ends out.
#[test]
fn open_channel_reaches_its_fully_developed_limit() {
    for (heated, share) in [(HeatedWalls::Both, 24.0), (HeatedWalls::Outer, 12.0)] {
        let channel = |height: f64, along: usize| {
            let channel = Channel { elenbaas: 0.1, height, heated, across: 32, along };
            let problem = channel.problem().unwrap();
            let solution = solved(&problem, 1e-9);
            channel.nusselt(&problem, &solution.air, &solution.state)
        };
        let nusselt = channel(60.0, 128);
        within(&format!("{heated:?}"), nusselt, 0.1 / share, 0.005);
    }
}

/// Near the optimum spacing (El = 54.3) the composite relation of Bar-Cohen & Rohsenow gives
/// 1.307; channels without a plenum differ by the treatment of the inlet: 10 %.
#[test]
fn open_channel_at_the_optimum_spacing() {
    let channel =
        Channel { elenbaas: 54.3, height: 10.0, heated: HeatedWalls::Both, across: 48, along: 128 };
    let problem = channel.problem().unwrap();
    let solution = solved(&problem, 1e-8);
    let nusselt = channel.nusselt(&problem, &solution.air, &solution.state);
    within("Nu", nusselt, 1.307, 0.10);
}

/// Draught of a warm column against lumped losses, two formulas from "A practical formula for
/// air-cooled boards in ventilated enclosures", Electronics Cooling, September 1997: 20 W, 0.20 m,
/// 20 cm² and K = 2.7 per vent in all (1.7 at the inlet, whose speed is not lost) give
/// 5.470e-4 m³/s and 30.18 K at 20 °C; band 0.5 %.
#[test]
fn stack_balances_draught_and_losses() {
    let air = Air::dry(293.15, 101_325.0);
    let stack = Stack {
        area: 20e-4,
        height: 0.20,
        loss: [1.7, 2.7],
        heat: 20.0,
        ambient: 293.15,
        air,
        gravity: 9.80665,
        along: 240,
    };
    within("formula", stack.exact_flow(), 5.470e-4, 0.002);
    let problem = stack.problem().unwrap();
    let solution = solved(&problem, 1e-9);
    let floor = slot_flow(&problem, &solution.air, &solution.state, 0);
    let roof = slot_flow(&problem, &solution.air, &solution.state, 1);
    within("flow", floor.inflow, stack.exact_flow(), 0.005);
    within("flow", roof.outflow, floor.inflow, 1e-9);
    assert!(floor.outflow == 0.0 && roof.inflow == 0.0);
    within("heat", roof.heat_out, 20.0, 1e-6);
    let rise = roof.heat_out / (air.density * air.specific_heat * roof.outflow);
    within("rise", rise, 30.18, 0.006);
}

struct Housing {
    problem: Problem,
    solution: Solution,
    result: HousingResult,
    slots: u32,
    heat: f64,
}

fn slot_housing(scale: usize) -> Housing {
    let problem = SlotHousing { scale, heat: 15.0 }.problem().unwrap();
    let solution = solved(&problem, 1e-7);
    let result = SlotHousing::result(&problem, &solution.air, &solution.state);
    Housing { problem, solution, result, slots: 4, heat: 15.0 }
}

fn ring_housing(scale: usize) -> Housing {
    let problem = RingHousing { scale, heat: 5.0 }.problem().unwrap();
    let solution = solved(&problem, 1e-7);
    let result = RingHousing::result(&problem, &solution.air, &solution.state);
    Housing { problem, solution, result, slots: 2, heat: 5.0 }
}

/// Value and uncertainty of tests/reference/housings.csv.
fn reference(case: &str, quantity: &str) -> f64 {
    let table = include_str!("reference/housings.csv");
    let line = table.lines().find(|l| l.starts_with(&format!("{case},{quantity},"))).unwrap();
    line.split(',').nth(2).unwrap().parse().unwrap()
}

/// Rises within 0.5 %, flow within 1 % on about 100 000 cells (the slots' ends make the flow
/// converge about first order with the cell there); errors fall from the coarser mesh.
fn assert_housing(case: &str, coarse: &Housing, fine: &Housing) {
    println!(
        "{case}: {} and {} cells",
        coarse.problem.mesh().cell_count(),
        fine.problem.mesh().cell_count()
    );
    let pick: [(&str, fn(&HousingResult) -> f64, f64); 4] = [
        ("rise_max", |r| r.rise_max, 0.005),
        ("rise_mean", |r| r.rise_mean, 0.005),
        ("flow", |r| r.flow, 0.01),
        ("outlet_rise", |r| r.outlet_rise, 0.01),
    ];
    for (quantity, of, band) in pick {
        let exact = reference(case, quantity);
        let [before, after] = [coarse, fine].map(|h| of(&h.result));
        println!("{quantity} before: {:+.4} %", 100.0 * (before - exact) / exact);
        within(quantity, after, exact, band);
        assert!((after - exact).abs() < (before - exact).abs(), "{quantity} {before} {after}");
    }
    for h in [coarse, fine] {
        let (mut air_in, mut air_out, mut heat) = (0.0, 0.0, 0.0);
        for slot in 0..h.slots {
            let flow = slot_flow(&h.problem, &h.solution.air, &h.solution.state, slot);
            air_in += flow.inflow;
            air_out += flow.outflow;
            heat += flow.heat_out;
        }
        within("heat out", heat, h.heat, 1e-6);
        within("air out", air_out, air_in, 1e-9);
    }
}

#[test]
fn planar_vented_housing() {
    assert_housing("slot-housing", &slot_housing(2), &slot_housing(4));
}

#[test]
fn axisymmetric_vented_housing() {
    let fine = ring_housing(6);
    assert_housing("ring-housing", &ring_housing(4), &fine);
    // The other recomputation: the same bands.
    let first = |quantity| reference("ring-housing-first", quantity);
    within("rise_max", fine.result.rise_max, first("rise_max"), 0.005);
    within("rise_mean", fine.result.rise_mean, first("rise_mean"), 0.005);
    within("flow", fine.result.flow, first("flow"), 0.01);
    within("outlet_rise", fine.result.outlet_rise, first("outlet_rise"), 0.01);
}

/// Without heat nothing moves, in either housing.
#[test]
fn no_heat_no_motion() {
    for problem in [
        SlotHousing { scale: 1, heat: 0.0 }.problem().unwrap(),
        RingHousing { scale: 1, heat: 0.0 }.problem().unwrap(),
    ] {
        let state = solved(&problem, 1e-9).state;
        let fastest = state.u.iter().chain(&state.v).fold(0.0, |a: f64, b| a.max(b.abs()));
        let warmest = state.t.iter().fold(0.0, |a: f64, b| a.max(b.abs()));
        assert!(fastest < 1e-12 && warmest < 1e-12, "{fastest:e} m/s, {warmest:e} K");
    }
}

/// The planar housing is its own mirror image: so is the draught through its slots.
#[test]
fn mirror_image_slots_breathe_alike() {
    let h = slot_housing(1);
    let flow = |slot| slot_flow(&h.problem, &h.solution.air, &h.solution.state, slot);
    // Floor left and right, roof left and right.
    within("floor", flow(0).inflow, flow(1).inflow, 1e-5);
    within("roof", flow(2).outflow, flow(3).outflow, 1e-5);
    let walls: f64 = Side::ALL
        .iter()
        .map(|s| side_heat(&h.problem, &h.solution.air, &h.solution.state, *s).abs())
        .sum();
    assert_eq!(walls, 0.0);
}
