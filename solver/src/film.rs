//! The film temperature: where the air's constants are taken when they follow the result.

use ventrise_mesh::Side;

use crate::balance::slot_flows;
use crate::conduction::{side_area, side_cell, side_exchange, x_conductance, y_conductance};
use crate::outer::Outer;
use crate::{Air, Problem, State};

/// Heat and heat-weighted temperature of the places where air takes up or gives off heat.
#[derive(Default)]
struct Exchange {
    heat: f64,
    weighted: f64,
}

impl Exchange {
    fn add(&mut self, heat: f64, rise: f64) {
        self.heat += heat;
        self.weighted += heat * rise;
    }

    fn mean(&self) -> f64 {
        if self.heat > 0.0 { self.weighted / self.heat } else { 0.0 }
    }
}

/// Film rise above ambient [K]: the mean of the temperature at which the air takes up its heat and
/// that at which it gives it off again.
///
/// Both are means over all surfaces in touch with air, weighted by their heat flow; air that leaves
/// through an opening gives its heat off at ambient temperature, that of the air drawn in for it.
/// For one hot plate in ambient air this is the usual (T_s + T_a)/2.
pub(crate) fn film_rise(problem: &Problem, air: &Air, state: &State) -> f64 {
    let mesh = problem.mesh();
    let (nx, ny) = (mesh.nx(), mesh.ny());
    let fluid = |n: usize| mesh.regions()[n] == ventrise_mesh::AIR;
    let (mut hot, mut cold) = (Exchange::default(), Exchange::default());
    // `heat` flows into the air cell; `half` is the resistance from its centre to the surface.
    let mut surface = |heat: f64, air_rise: f64, half: f64| {
        let rise = air_rise + heat * half;
        if heat > 0.0 { hot.add(heat, rise) } else { cold.add(-heat, rise) }
    };
    for j in 0..ny {
        for i in 0..nx {
            let n = mesh.cell(i, j);
            if !fluid(n) {
                continue;
            }
            let t = state.t[n];
            let across = |line: usize| {
                0.5 * mesh.dx(i) / (air.conductivity * mesh.x_area(line) * mesh.dy(j))
            };
            let along = 0.5 * mesh.dy(j) / (air.conductivity * mesh.y_area(i));
            if i > 0 && !fluid(n - 1) {
                surface(x_conductance(problem, air, i, j) * (state.t[n - 1] - t), t, across(i));
            }
            if i + 1 < nx && !fluid(n + 1) {
                let g = x_conductance(problem, air, i + 1, j);
                surface(g * (state.t[n + 1] - t), t, across(i + 1));
            }
            if j > 0 && !fluid(n - nx) {
                surface(y_conductance(problem, air, i, j) * (state.t[n - nx] - t), t, along);
            }
            if j + 1 < ny && !fluid(n + nx) {
                surface(y_conductance(problem, air, i, j + 1) * (state.t[n + nx] - t), t, along);
            }
        }
    }
    let outer = Outer::at(problem, air, &state.t);
    for side in Side::ALL {
        for face in 0..mesh.slots(side).len() {
            let (i, j) = side_cell(problem, side, face);
            let n = mesh.cell(i, j);
            if !fluid(n) {
                continue;
            }
            let exchange = side_exchange(problem, air, &outer, side, face);
            let heat = exchange.conductance * (exchange.rise - state.t[n]) + exchange.heat;
            let distance = match side {
                Side::Left | Side::Right => mesh.dx(i),
                Side::Bottom | Side::Top => mesh.dy(j),
            };
            let area = side_area(problem, side, face);
            if heat != 0.0 {
                surface(heat, state.t[n], 0.5 * distance / (air.conductivity * area));
            }
        }
    }
    let carried: f64 = slot_flows(problem, air, state).iter().map(|s| s.heat.max(0.0)).sum();
    cold.add(carried, 0.0);
    let open: f64 =
        crate::side_flows(problem, air, state).iter().map(|s| s.open.heat.max(0.0)).sum();
    cold.add(open, 0.0);
    0.5 * (hot.mean() + cold.mean())
}
