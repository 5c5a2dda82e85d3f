//! Air and heat that cross the section's edge, and whether what goes in comes out.
//!
//! Signs: speeds through a boundary face are counted outward; a heat flow [W] is positive when it
//! leaves the section. Air that enters has the ambient temperature and carries no rise; air that
//! leaves carries the rise of the cell it leaves, ρ₀·c_p·V̇·T. Conduction through the sides comes
//! from the same conductances as the energy equation.

use ventrise_mesh::{AIR, Side};

use crate::conduction::{side_area, side_cell, side_exchange};
use crate::heat_law::block_heats;
use crate::outer::{Outer, OuterFlow};
use crate::{Air, Problem, RadiantHeat, SideCondition, State, radiant::radiant_heat_with};

/// Speed below which air counts as being at rest [m/s].
pub const REST_SPEED: f64 = 1e-12;
/// Round-off of a heat flow relative to the terms it is the difference of [-].
const ROUND_OFF: f64 = 1e-13;

/// Air and heat through one opening: a slot, or what is open of a side.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct OpeningFlow {
    /// Whole area [m²].
    pub area: f64,
    /// Air that enters [m³/s], at the reference density, ≥ 0.
    pub inflow: f64,
    /// Air that leaves [m³/s], ≥ 0.
    pub outflow: f64,
    /// Mean rise of the leaving air, weighted by its flow [K]; `None` when none leaves.
    pub out_mean_rise: Option<f64>,
    /// Area mean of the pressure in the cells beside the opening [Pa].
    pub mean_pressure: f64,
    /// Heat carried out [W].
    pub heat: f64,
}

/// What crosses one side outside its slots.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct SideFlow {
    /// Heat that leaves by conduction [W]; negative when heat enters.
    pub conduction: f64,
    /// Air and heat through the side where it is open.
    pub open: OpeningFlow,
    /// How the conducted heat leaves the outer face, where the side has one.
    pub outer: Option<OuterFlow>,
}

impl SideFlow {
    /// All heat that leaves through the side [W].
    pub fn heat(&self) -> f64 {
        self.conduction + self.open.heat
    }
}

/// What goes in against what comes out.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Balance {
    /// Heat that goes in [W]: blocks that release heat, sides and slots through which it enters.
    pub heat_in: f64,
    /// Heat that comes out [W]: sides and slots through which it leaves, blocks that take it up.
    pub heat_out: f64,
    /// |in − out| over the larger of the two [-]; 0 when both are round-off.
    pub heat_error: f64,
    /// Air that enters through slots and open sides [kg/s].
    pub mass_in: f64,
    /// Air that leaves [kg/s].
    pub mass_out: f64,
    /// |in − out| over the larger of the two [-]; 0 when the air is at rest.
    pub mass_error: f64,
}

/// Speed out of the section through boundary face `n` of a side [m/s].
pub(crate) fn outward_speed(problem: &Problem, state: &State, side: Side, n: usize) -> f64 {
    let (nx, ny) = (problem.mesh().nx(), problem.mesh().ny());
    match side {
        Side::Left => -state.u[n * (nx + 1)],
        Side::Right => state.u[nx + n * (nx + 1)],
        Side::Bottom => -state.v[n],
        Side::Top => state.v[n + ny * nx],
    }
}

/// Flow through the boundary faces of a side that `belongs` picks.
fn opening_flow(
    problem: &Problem,
    air: &Air,
    state: &State,
    side: Side,
    belongs: impl Fn(usize) -> bool,
) -> OpeningFlow {
    let mut flow = OpeningFlow::default();
    let (mut carried, mut pressure) = (0.0, 0.0);
    for n in (0..problem.mesh().slots(side).len()).filter(|n| belongs(*n)) {
        let (i, j) = side_cell(problem, side, n);
        let cell = problem.mesh().cell(i, j);
        let area = side_area(problem, side, n);
        let out = outward_speed(problem, state, side, n) * area;
        flow.area += area;
        pressure += area * state.p[cell];
        flow.inflow += (-out).max(0.0);
        flow.outflow += out.max(0.0);
        carried += out.max(0.0) * state.t[cell];
    }
    if flow.outflow > REST_SPEED * flow.area {
        flow.out_mean_rise = Some(carried / flow.outflow);
    }
    if flow.area > 0.0 {
        flow.mean_pressure = pressure / flow.area;
    }
    flow.heat = air.density * air.specific_heat * carried;
    flow
}

/// Flow through every slot, in the order of [`crate::Description::slots`].
pub fn slot_flows(problem: &Problem, air: &Air, state: &State) -> Vec<OpeningFlow> {
    let count = problem.description().slots.len();
    let mut flows = vec![OpeningFlow::default(); count];
    for side in Side::ALL {
        let slots = problem.mesh().slots(side);
        let mut here: Vec<u32> = slots.iter().flatten().copied().collect();
        here.sort_unstable();
        here.dedup();
        for slot in here {
            flows[slot as usize] =
                opening_flow(problem, air, state, side, |n| slots[n] == Some(slot));
        }
    }
    flows
}

/// Conduction (with what a wall takes up by radiation) and open flow through every side outside its
/// slots, by [`Side::index`].
pub fn side_flows(problem: &Problem, air: &Air, state: &State) -> [SideFlow; 4] {
    let outer = Outer::at(problem, air, &state.t);
    let radiant = radiant_heat_with(problem, air, &outer, &state.t).unwrap_or_default();
    sides_with(problem, air, state, &outer, &radiant)
}

fn sides_with(
    problem: &Problem,
    air: &Air,
    state: &State,
    outer: &Outer,
    radiant: &RadiantHeat,
) -> [SideFlow; 4] {
    Side::ALL.map(|side| {
        let slots = problem.mesh().slots(side);
        let is_open = problem.description().sides[side.index()] == SideCondition::Open;
        let open = if is_open {
            opening_flow(problem, air, state, side, |n| {
                let (i, j) = side_cell(problem, side, n);
                slots[n].is_none() && problem.mesh().regions()[problem.mesh().cell(i, j)] == AIR
            })
        } else {
            OpeningFlow::default()
        };
        let conduction =
            (0..slots.len()).map(|n| side_face_heat(problem, air, outer, state, side, n));
        let conduction = conduction.sum::<f64>() + radiant.sides[side.index()];
        SideFlow { conduction, open, outer: outer.flow(problem, side) }
    })
}

/// Heat that leaves by conduction through boundary face `n` of a side [W].
pub(crate) fn side_face_heat(
    problem: &Problem,
    air: &Air,
    outer: &Outer,
    state: &State,
    side: Side,
    n: usize,
) -> f64 {
    let exchange = side_exchange(problem, air, outer, side, n);
    let (i, j) = side_cell(problem, side, n);
    let rise = state.t[problem.mesh().cell(i, j)];
    exchange.conductance * (rise - exchange.rise) - exchange.heat
}

/// Heat and air in against out. Every block, every side's conduction, every open side and every
/// slot counts as going in or coming out by the sign of its own total; of an outer face its film,
/// its radiation and the sun each.
pub fn balance(problem: &Problem, air: &Air, state: &State) -> Balance {
    let d = problem.description();
    let slots = slot_flows(problem, air, state);
    let outer = Outer::at(problem, air, &state.t);
    let radiant = radiant_heat_with(problem, air, &outer, &state.t).unwrap_or_default();
    let sides = sides_with(problem, air, state, &outer, &radiant);
    let (mut heat_in, mut heat_out) = (0.0, 0.0);
    let mut count_out = |heat: f64| {
        heat_in += (-heat).max(0.0);
        heat_out += heat.max(0.0);
    };
    block_heats(problem, state).iter().for_each(|heat| count_out(-heat));
    if let Some(sources) = &d.sources {
        count_out(-sources.heat.iter().sum::<f64>());
    }
    for side in &sides {
        match &side.outer {
            Some(outer) => [outer.film, outer.radiation, -outer.sun].map(&mut count_out),
            None => [count_out(side.conduction), (), ()],
        };
    }
    count_out(radiant.openings);
    let openings = || slots.iter().chain(sides.iter().map(|side| &side.open));
    openings().for_each(|opening| count_out(opening.heat));
    let volume_in: f64 = openings().map(|o| o.inflow).sum();
    let volume_out: f64 = openings().map(|o| o.outflow).sum();
    let area: f64 = openings().map(|o| o.area).sum();
    Balance {
        heat_in,
        heat_out,
        heat_error: relative_gap(heat_in, heat_out, heat_round_off(problem, air, &outer, state)),
        mass_in: air.density * volume_in,
        mass_out: air.density * volume_out,
        mass_error: relative_gap(volume_in, volume_out, REST_SPEED * area),
    }
}

/// |a − b| over the larger, 0 when neither exceeds `nothing`.
fn relative_gap(a: f64, b: f64, nothing: f64) -> f64 {
    let larger = a.max(b);
    if larger <= nothing { 0.0 } else { (a - b).abs() / larger }
}

/// Size of the heat flows that round-off alone makes at the edge [W].
fn heat_round_off(problem: &Problem, air: &Air, outer: &Outer, state: &State) -> f64 {
    let mut sum = 0.0;
    for side in Side::ALL {
        for n in 0..problem.mesh().slots(side).len() {
            let (i, j) = side_cell(problem, side, n);
            let rise = state.t[problem.mesh().cell(i, j)].abs();
            let exchange = side_exchange(problem, air, outer, side, n);
            sum += exchange.conductance * (rise + exchange.rise.abs());
        }
    }
    ROUND_OFF * sum
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;
    use crate::by_hand::{duct, wall};

    #[test]
    fn uniform_flow_through_two_slots_carries_its_heat_out() {
        // 3 × 2 cells, slots over the whole bottom and top, depth 0.5 m, width 0.3 m:
        // 0.2 m/s upward and a rise of 10 K in the upper row.
        let (problem, mut state) = duct(0.5);
        state.v.fill(0.2);
        state.t[3..].fill(10.0);
        state.p[..3].copy_from_slice(&[-1.0, -2.0, -3.0]);
        let air = crate::by_hand::air();
        let flows = slot_flows(&problem, &air, &state);
        let volume = 0.2 * 0.3 * 0.5;
        assert!((flows[0].inflow - volume).abs() < 1e-15 && flows[0].outflow == 0.0);
        assert_eq!(flows[0].out_mean_rise, None);
        assert!((flows[0].mean_pressure + 2.0).abs() < 1e-12, "{flows:?}");
        assert!((flows[1].outflow - volume).abs() < 1e-15 && flows[1].inflow == 0.0);
        assert!((flows[1].out_mean_rise.unwrap() - 10.0).abs() < 1e-12);
        let heat = air.density * air.specific_heat * volume * 10.0;
        assert!((flows[1].heat - heat).abs() < 1e-12 * heat);
        let balance = balance(&problem, &air, &state);
        assert!((balance.mass_in - air.density * volume).abs() < 1e-15);
        assert!(balance.mass_error < 1e-14);
        assert!((balance.heat_out - heat).abs() < 1e-12 * heat && balance.heat_in == 0.0);
        assert_eq!(balance.heat_error, 1.0); // nothing was put in
    }

    #[test]
    fn a_slot_that_breathes_both_ways_counts_both() {
        let (problem, mut state) = duct(1.0);
        state.v[6..].copy_from_slice(&[0.1, -0.3, 0.2]); // top faces, 0.1 m wide each
        state.t[3..].copy_from_slice(&[5.0, 70.0, 20.0]);
        let flow = slot_flows(&problem, &crate::by_hand::air(), &state)[1];
        assert!((flow.outflow - 0.03).abs() < 1e-15 && (flow.inflow - 0.03).abs() < 1e-15);
        assert!((flow.out_mean_rise.unwrap() - 15.0).abs() < 1e-12); // (0.01·5 + 0.02·20)/0.03
    }

    #[test]
    fn rest_has_no_error() {
        let (problem, state) = duct(1.0);
        let balance = balance(&problem, &crate::by_hand::air(), &state);
        assert_eq!(balance, Balance::default());
    }

    #[test]
    fn conduction_through_a_heated_wall_balances() {
        // A solid wall, 0.4 m × 0.1 m × 1 m deep, 2 W in it, left side at ambient, right side a
        // film of 5 W/(m²·K) to ambient. Solved by hand: with the heat q per volume and the wall's
        // temperature a parabola, the finite-volume cell values below are exact.
        let (problem, state, [left, right]) = wall();
        let air = crate::by_hand::air();
        let sides = side_flows(&problem, &air, &state);
        assert!((sides[0].conduction - left).abs() < 1e-12, "{sides:?}");
        assert!((sides[1].conduction - right).abs() < 1e-12, "{sides:?}");
        assert_eq!(sides[2].heat(), 0.0);
        let balance = balance(&problem, &air, &state);
        assert!((balance.heat_in - 2.0).abs() < 1e-15 && balance.heat_error < 1e-13);
    }
}
