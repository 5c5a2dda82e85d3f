//! Reading compared numbers off a state: wall fluxes, profiles and their extremes, stream
//! function, slot flows. Values between cells come from local polynomials of third or fourth
//! degree, so that reading adds no error of second order.

use ventrise_mesh::{Mesh, Side};

use crate::conduction::{side_area, side_cell, side_exchange, x_conductance};
use crate::outer::Outer;
use crate::{Air, Problem, SideCondition, State};

/// A highest (or lowest) value and where it is.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Extreme {
    /// The value.
    pub value: f64,
    /// Its position [m].
    pub at: f64,
}

/// Heat through a wall [W] with its local flux.
#[derive(Debug, Clone, PartialEq)]
pub struct WallHeat {
    /// Heat into the section [W].
    pub total: f64,
    /// Position along the side [m] and heat flux into the section [W/m²], one per boundary face.
    pub local: Vec<[f64; 2]>,
}

/// What passes a slot.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct SlotFlow {
    /// Air into the section [m³/s].
    pub inflow: f64,
    /// Air out of the section [m³/s].
    pub outflow: f64,
    /// Heat carried out above ambient [W].
    pub heat_out: f64,
}

/// Heat that enters through a side's walls by conduction.
pub fn wall_flux(problem: &Problem, air: &Air, state: &State, side: Side) -> WallHeat {
    let mesh = problem.mesh();
    let mut wall = WallHeat { total: 0.0, local: Vec::new() };
    for n in 0..mesh.slots(side).len() {
        let (i, j) = side_cell(problem, side, n);
        let exchange = side_exchange(problem, air, &Outer::default(), side, n);
        let heat =
            exchange.conductance * (exchange.rise - state.t[mesh.cell(i, j)]) + exchange.heat;
        let at = match side {
            Side::Left | Side::Right => mesh.y_centre(j),
            Side::Bottom | Side::Top => mesh.x_centre(i),
        };
        let area = side_area(problem, side, n);
        wall.total += heat;
        wall.local.push([at, if area > 0.0 { heat / area } else { 0.0 }]);
    }
    wall
}

/// Heat that enters through a side's walls by conduction [W].
pub fn side_heat(problem: &Problem, air: &Air, state: &State, side: Side) -> f64 {
    wall_flux(problem, air, state, side).total
}

/// Heat through the interior line x[i] along positive x [W]: conduction and convection.
pub fn x_plane_heat(problem: &Problem, air: &Air, state: &State, i: usize) -> f64 {
    let mesh = problem.mesh();
    let weight = mesh.dx(i - 1) / (mesh.dx(i - 1) + mesh.dx(i));
    (0..mesh.ny())
        .map(|j| {
            let [west, east] = [i - 1, i].map(|c| state.t[mesh.cell(c, j)]);
            let flow = state.u[i + j * (mesh.nx() + 1)] * mesh.x_area(i) * mesh.dy(j);
            x_conductance(problem, air, i, j) * (west - east)
                + air.density * air.specific_heat * flow * (west + weight * (east - west))
        })
        .sum()
}

/// Speed along x on the vertical line at `x`: [y, u] from bottom to top, walls included.
pub fn u_along_y(problem: &Problem, state: &State, x: f64) -> Vec<[f64; 2]> {
    let mesh = problem.mesh();
    let row = |j: usize| {
        let points: Vec<[f64; 2]> = mesh
            .x()
            .iter()
            .enumerate()
            .map(|(i, line)| [*line, state.u[i + j * (mesh.nx() + 1)]])
            .collect();
        interpolate(&points, x)
    };
    let inner = (0..mesh.ny()).map(|j| [mesh.y_centre(j), row(j)]).collect();
    let ends = [mesh.y()[0], mesh.y()[mesh.ny()]];
    with_walls(problem, [Side::Bottom, Side::Top], ends, inner)
}

/// Speed along y on the horizontal line at `y`: [x, v] from left to right, walls included.
pub fn v_along_x(problem: &Problem, state: &State, y: f64) -> Vec<[f64; 2]> {
    let mesh = problem.mesh();
    let column = |i: usize| {
        let points: Vec<[f64; 2]> = mesh
            .y()
            .iter()
            .enumerate()
            .map(|(j, line)| [*line, state.v[i + j * mesh.nx()]])
            .collect();
        interpolate(&points, y)
    };
    let inner = (0..mesh.nx()).map(|i| [mesh.x_centre(i), column(i)]).collect();
    let ends = [mesh.x()[0], mesh.x()[mesh.nx()]];
    with_walls(problem, [Side::Left, Side::Right], ends, inner)
}

fn with_walls(
    problem: &Problem,
    sides: [Side; 2],
    ends: [f64; 2],
    mut points: Vec<[f64; 2]>,
) -> Vec<[f64; 2]> {
    let wall = |side: Side| match problem.description().sides[side.index()] {
        SideCondition::Sliding(speed) => Some(speed),
        condition => condition.is_wall().then_some(0.0),
    };
    if let Some(speed) = wall(sides[0]) {
        points.insert(0, [ends[0], speed]);
    }
    if let Some(speed) = wall(sides[1]) {
        points.push([ends[1], speed]);
    }
    points
}

/// The highest value of a profile of [position, value], between its points by the quartic through
/// the five nearest; for the lowest, negate the values.
pub fn extreme(points: &[[f64; 2]]) -> Extreme {
    let top = (0..points.len()).max_by(|a, b| points[*a][1].total_cmp(&points[*b][1]));
    let Some(top) = top else { return Extreme { value: f64::NAN, at: f64::NAN } };
    let last = points.len() - 1;
    let window = nearest(points, top.saturating_sub(2), 5);
    let [mut low, mut high] = [points[top.saturating_sub(1)][0], points[(top + 1).min(last)][0]];
    for _ in 0..80 {
        let [a, b] = [low + (high - low) / 3.0, high - (high - low) / 3.0];
        if lagrange(window, a) < lagrange(window, b) { low = a } else { high = b }
    }
    let at = 0.5 * (low + high);
    Extreme { value: lagrange(window, at), at }
}

/// Temperature rise at a point [K], by third-degree polynomials through cell centres.
pub fn centre_rise(mesh: &Mesh, state: &State, x: f64, y: f64) -> f64 {
    let columns: Vec<[f64; 2]> = (0..mesh.ny())
        .map(|j| {
            let row: Vec<[f64; 2]> =
                (0..mesh.nx()).map(|i| [mesh.x_centre(i), state.t[mesh.cell(i, j)]]).collect();
            [mesh.y_centre(j), interpolate(&row, x)]
        })
        .collect();
    interpolate(&columns, y)
}

/// Volume flow between the section's lower left corner and every mesh vertex [m³/s],
/// (nx + 1)·(ny + 1), flat i + j·(nx + 1); positive for flow along x below the vertex.
pub fn stream_function(mesh: &Mesh, state: &State) -> Vec<f64> {
    let lines = mesh.nx() + 1;
    let mut psi = vec![0.0; lines * (mesh.ny() + 1)];
    for i in 1..lines {
        psi[i] = psi[i - 1] - state.v[i - 1] * mesh.y_area(i - 1);
    }
    for j in 0..mesh.ny() {
        for i in 0..lines {
            let flow = state.u[i + j * lines] * mesh.x_area(i) * mesh.dy(j);
            psi[i + (j + 1) * lines] = psi[i + j * lines] + flow;
        }
    }
    psi
}

/// The stream function of [`stream_function`] at a point [m³/s].
pub fn stream_at(mesh: &Mesh, psi: &[f64], x: f64, y: f64) -> f64 {
    let rows: Vec<[f64; 2]> = psi
        .chunks_exact(mesh.nx() + 1)
        .zip(mesh.y())
        .map(|(row, y)| {
            let points: Vec<[f64; 2]> = mesh.x().iter().zip(row).map(|(x, p)| [*x, *p]).collect();
            [*y, interpolate(&points, x)]
        })
        .collect();
    interpolate(&rows, y)
}

/// Mean temperature rise of a block over its volume [K].
pub fn block_mean(mesh: &Mesh, state: &State, block: u32) -> f64 {
    let (mut sum, mut volume) = (0.0, 0.0);
    for j in 0..mesh.ny() {
        for i in 0..mesh.nx() {
            if mesh.regions()[mesh.cell(i, j)] == block {
                sum += state.t[mesh.cell(i, j)] * mesh.volume(i, j);
                volume += mesh.volume(i, j);
            }
        }
    }
    sum / volume
}

/// Lowest and highest temperature rise of a block's cells [K].
pub fn block_range(mesh: &Mesh, state: &State, block: u32) -> [f64; 2] {
    let inside = mesh.regions().iter().zip(&state.t).filter(|(region, _)| **region == block);
    inside
        .fold([f64::INFINITY, f64::NEG_INFINITY], |[low, high], (_, t)| [low.min(*t), high.max(*t)])
}

/// What passes a slot: inflow and outflow face by face; inflow brings ambient air, outflow the
/// temperature of the cell it leaves.
pub fn slot_flow(problem: &Problem, air: &Air, state: &State, slot: u32) -> SlotFlow {
    let mesh = problem.mesh();
    let (nx, ny) = (mesh.nx(), mesh.ny());
    let mut sum = SlotFlow::default();
    for side in Side::ALL {
        for n in (0..mesh.slots(side).len()).filter(|n| mesh.slots(side)[*n] == Some(slot)) {
            let outward = match side {
                Side::Left => -state.u[n * (nx + 1)],
                Side::Right => state.u[nx + n * (nx + 1)],
                Side::Bottom => -state.v[n],
                Side::Top => state.v[n + ny * nx],
            };
            let flow = outward * side_area(problem, side, n);
            if flow > 0.0 {
                let (i, j) = side_cell(problem, side, n);
                sum.outflow += flow;
                sum.heat_out += air.density * air.specific_heat * flow * state.t[mesh.cell(i, j)];
            } else {
                sum.inflow -= flow;
            }
        }
    }
    sum
}

/// Highest speed at a cell centre [m/s], both components as means of the faces.
pub fn max_speed(mesh: &Mesh, state: &State) -> f64 {
    let (nx, ny) = (mesh.nx(), mesh.ny());
    let mut highest: f64 = 0.0;
    for j in 0..ny {
        for i in 0..nx {
            let u = 0.5 * (state.u[i + j * (nx + 1)] + state.u[i + 1 + j * (nx + 1)]);
            let v = 0.5 * (state.v[i + j * nx] + state.v[i + (j + 1) * nx]);
            highest = highest.max(u.hypot(v));
        }
    }
    highest
}

/// Third-degree interpolation through the four points around a position (the point itself where
/// one lies there).
pub(super) fn interpolate(points: &[[f64; 2]], at: f64) -> f64 {
    let after = points.partition_point(|p| p[0] < at);
    lagrange(nearest(points, after.saturating_sub(2), 4), at)
}

/// `count` neighbouring points from about `first` on.
fn nearest(points: &[[f64; 2]], first: usize, count: usize) -> &[[f64; 2]] {
    let count = count.min(points.len());
    let first = first.min(points.len() - count);
    &points[first..first + count]
}

/// The polynomial through all points, at a position.
fn lagrange(points: &[[f64; 2]], at: f64) -> f64 {
    let weight = |n: usize| -> f64 {
        let others = points.iter().enumerate().filter(|(m, _)| *m != n);
        others.map(|(_, p)| (at - p[0]) / (points[n][0] - p[0])).product()
    };
    points.iter().enumerate().map(|(n, p)| p[1] * weight(n)).sum()
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;
    use crate::samples::{Grading, SquareCavity};

    fn cavity() -> (Problem, Air) {
        let cavity = SquareCavity { cells: 24, grading: Grading::Both(1.2), ..Default::default() };
        let problem = cavity.problem().unwrap();
        (problem, crate::samples::unit_air(0.71))
    }

    #[test]
    fn interpolation_is_exact_for_cubics() {
        let cubic = |x: f64| 1.0 + x * (2.0 - x * (3.0 - 0.5 * x));
        let points = [0.0, 0.1, 0.35, 0.4, 0.8, 1.0].map(|x| [x, cubic(x)]);
        for x in [0.0, 0.03, 0.37, 0.4, 0.93, 1.0] {
            assert!((interpolate(&points, x) - cubic(x)).abs() < 1e-14, "{x}");
        }
    }

    #[test]
    fn extremes_lie_between_the_points() {
        let quartic = |x: f64| 3.0 - (x - 0.437_f64).powi(2) - 4.0 * (x - 0.437_f64).powi(4);
        let points: Vec<[f64; 2]> =
            (0..9).map(|n| n as f64 * 0.13).map(|x| [x, quartic(x)]).collect();
        let top = extreme(&points);
        assert!((top.value - 3.0).abs() < 1e-12 && (top.at - 0.437).abs() < 1e-6, "{top:?}");
    }

    /// Still air with a straight profile between the walls carries k·ΔT·L = 1 W everywhere.
    #[test]
    fn straight_profile_carries_the_same_heat_through_every_line() {
        let (problem, air) = cavity();
        let mesh = problem.mesh();
        let mut state = State::rest(mesh);
        for j in 0..mesh.ny() {
            for i in 0..mesh.nx() {
                state.t[mesh.cell(i, j)] = 0.5 - mesh.x_centre(i);
            }
        }
        assert!((side_heat(&problem, &air, &state, Side::Left) - 1.0).abs() < 1e-12);
        assert!((side_heat(&problem, &air, &state, Side::Right) + 1.0).abs() < 1e-12);
        assert_eq!(side_heat(&problem, &air, &state, Side::Top), 0.0);
        for i in 1..mesh.nx() {
            assert!((x_plane_heat(&problem, &air, &state, i) - 1.0).abs() < 1e-12);
        }
        assert!((centre_rise(mesh, &state, 0.3, 0.6) - 0.2).abs() < 1e-12);
    }

    /// ψ = sin(πx)·sin(πy) turns into face speeds by differences and comes back exactly.
    #[test]
    fn stream_function_comes_back_from_its_velocities() {
        let (problem, _) = cavity();
        let mesh = problem.mesh();
        let psi =
            |x: f64, y: f64| (x * std::f64::consts::PI).sin() * (y * std::f64::consts::PI).sin();
        let mut state = State::rest(mesh);
        let (nx, ny) = (mesh.nx(), mesh.ny());
        for j in 0..ny {
            for i in 0..=nx {
                let [a, b] = [j, j + 1].map(|j| psi(mesh.x()[i], mesh.y()[j]));
                state.u[i + j * (nx + 1)] = (b - a) / mesh.dy(j);
            }
        }
        for j in 0..=ny {
            for i in 0..nx {
                let [a, b] = [i, i + 1].map(|i| psi(mesh.x()[i], mesh.y()[j]));
                state.v[i + j * nx] = -(b - a) / mesh.dx(i);
            }
        }
        let read = stream_function(mesh, &state);
        assert!((stream_at(mesh, &read, 0.5, 0.5) - 1.0).abs() < 1e-12);
        assert!((stream_at(mesh, &read, 0.31, 0.77) - psi(0.31, 0.77)).abs() < 1e-4);
        // u = π·sin(πx)·cos(πy): highest on the wall; v = −π·cos(πx)·sin(πy).
        let profile = u_along_y(&problem, &state, 0.37);
        assert_eq!(profile.len(), ny + 2);
        let expected = std::f64::consts::PI * (0.37 * std::f64::consts::PI).sin();
        let [y, u] = profile[5];
        assert!((u - expected * (y * std::f64::consts::PI).cos()).abs() < 0.01);
        let across = v_along_x(&problem, &state, 0.5);
        let [x, v] = across[7];
        assert!((v + std::f64::consts::PI * (x * std::f64::consts::PI).cos()).abs() < 0.02);
    }
}
