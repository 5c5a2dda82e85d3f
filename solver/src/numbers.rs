//! Numbers and cell fields read off a solution: temperatures of parts, heat flux, draught.

use ventrise_mesh::{AIR, Side};

use crate::balance::{side_face_heat, slot_flows};
use crate::conduction::{side_area, side_cell, x_conductance, y_conductance};
use crate::outer::Outer;
use crate::{Air, OpeningFlow, Problem, SideCondition, State};

/// Temperatures of a group of blocks, as rises above ambient, and its heat.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PartTemperature {
    /// Lowest cell [K].
    pub min: f64,
    /// Mean over the volume [K].
    pub mean: f64,
    /// Highest cell [K].
    pub max: f64,
    /// Heat released in the group [W].
    pub heat: f64,
}

/// What characterises the flow as a whole.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Numbers {
    /// ρ₀²·c_p·g·β·ΔT·H³/(μ·k), ΔT the highest rise anywhere [K], H the section's height [m].
    pub rayleigh: f64,
    /// μ·c_p/k.
    pub prandtl: f64,
    /// ρ₀·w·D/μ, the largest of all slots: w the mean speed through the whole area [m/s], D the
    /// hydraulic diameter [m] (twice the width of a slot or ring, the diameter of a round hole).
    pub vent_reynolds: f64,
    /// Highest speed in a cell [m/s].
    pub max_speed: f64,
    /// Highest rise anywhere [K].
    pub max_rise: f64,
    /// Highest rise of the air [K]; `None` when there is none.
    pub max_air_rise: Option<f64>,
    /// Pressure of the warm air's column between the lowest and the highest opening [Pa]; over
    /// the whole height when there are no two openings at different heights.
    pub stack_pressure: f64,
}

/// Temperatures of every block, in order; `None` for a block without cells.
pub fn block_temperatures(problem: &Problem, state: &State) -> Vec<Option<PartTemperature>> {
    let groups: Vec<Vec<usize>> =
        (0..problem.description().blocks.len()).map(|b| vec![b]).collect();
    group_temperatures(problem, state, &groups)
}

/// Temperatures of every part, in the order of [`crate::Description::parts`].
pub fn part_temperatures(problem: &Problem, state: &State) -> Vec<Option<PartTemperature>> {
    group_temperatures(problem, state, &problem.description().parts)
}

fn group_temperatures(
    problem: &Problem,
    state: &State,
    groups: &[Vec<usize>],
) -> Vec<Option<PartTemperature>> {
    let mesh = problem.mesh();
    let blocks = &problem.description().blocks;
    // Per block: lowest, highest, volume, volume × rise.
    let mut sums = vec![(f64::INFINITY, f64::NEG_INFINITY, 0.0, 0.0); blocks.len()];
    for j in 0..mesh.ny() {
        for i in 0..mesh.nx() {
            let region = mesh.regions()[mesh.cell(i, j)];
            if region == AIR {
                continue;
            }
            let (rise, volume) = (state.t[mesh.cell(i, j)], mesh.volume(i, j));
            let sum = &mut sums[region as usize];
            *sum = (sum.0.min(rise), sum.1.max(rise), sum.2 + volume, sum.3 + volume * rise);
        }
    }
    let judge = |group: &Vec<usize>| {
        let mut all = (f64::INFINITY, f64::NEG_INFINITY, 0.0, 0.0);
        for b in group {
            let sum = sums[*b];
            all = (all.0.min(sum.0), all.1.max(sum.1), all.2 + sum.2, all.3 + sum.3);
        }
        let heat = group.iter().map(|b| blocks[*b].heat).sum();
        (all.2 > 0.0).then(|| PartTemperature { min: all.0, mean: all.3 / all.2, max: all.1, heat })
    };
    groups.iter().map(judge).collect()
}

/// Velocity at every cell's centre [m/s], the mean of its faces; zero in blocks. nx·ny.
pub fn cell_velocities(problem: &Problem, state: &State) -> Vec<[f64; 2]> {
    let mesh = problem.mesh();
    let (nx, ny) = (mesh.nx(), mesh.ny());
    let mut velocities = vec![[0.0; 2]; nx * ny];
    for (n, velocity) in velocities.iter_mut().enumerate() {
        let (i, j) = (n % nx, n / nx);
        if mesh.regions()[n] == AIR {
            let west = i + j * (nx + 1);
            *velocity =
                [0.5 * (state.u[west] + state.u[west + 1]), 0.5 * (state.v[n] + state.v[n + nx])];
        }
    }
    velocities
}

/// Conductive heat flux at every cell's centre [W/m²], positive along x and y: the mean of the
/// fluxes through its two faces, from the energy equation's own conductances. nx·ny.
pub fn heat_fluxes(problem: &Problem, air: &Air, state: &State) -> Vec<[f64; 2]> {
    let mesh = problem.mesh();
    let (nx, ny) = (mesh.nx(), mesh.ny());
    let outer = Outer::at(problem, air, &state.t);
    let edge = |side: Side, n: usize| {
        let area = side_area(problem, side, n);
        let out = side_face_heat(problem, air, &outer, state, side, n);
        let outward = if matches!(side, Side::Left | Side::Bottom) { -1.0 } else { 1.0 };
        if area > 0.0 { outward * out / area } else { 0.0 } // the axis has no area
    };
    let x_flux = |i: usize, j: usize| match i {
        0 => edge(Side::Left, j),
        i if i == nx => edge(Side::Right, j),
        _ => {
            let drop = state.t[mesh.cell(i - 1, j)] - state.t[mesh.cell(i, j)];
            x_conductance(problem, air, i, j) * drop / (mesh.x_area(i) * mesh.dy(j))
        }
    };
    let y_flux = |i: usize, j: usize| match j {
        0 => edge(Side::Bottom, i),
        j if j == ny => edge(Side::Top, i),
        _ => {
            let drop = state.t[mesh.cell(i, j - 1)] - state.t[mesh.cell(i, j)];
            y_conductance(problem, air, i, j) * drop / mesh.y_area(i)
        }
    };
    let mut fluxes = Vec::with_capacity(nx * ny);
    for j in 0..ny {
        for i in 0..nx {
            fluxes.push([
                0.5 * (x_flux(i, j) + x_flux(i + 1, j)),
                0.5 * (y_flux(i, j) + y_flux(i, j + 1)),
            ]);
        }
    }
    fluxes
}

/// The numbers of a solution.
pub fn numbers(problem: &Problem, air: &Air, state: &State) -> Numbers {
    let mesh = problem.mesh();
    let d = problem.description();
    let max_rise = state.t.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    let is_air = |(rise, region): (&f64, &u32)| (*region == AIR).then_some(*rise);
    let air_rises = state.t.iter().zip(mesh.regions()).filter_map(is_air);
    let height = mesh.y()[mesh.ny()] - mesh.y()[0];
    let gravity = d.gravity[0].hypot(d.gravity[1]);
    let speeds = cell_velocities(problem, state);
    let drive = air.density.powi(2) * gravity * air.expansion * max_rise.max(0.0);
    Numbers {
        rayleigh: drive * air.specific_heat * height.powi(3) / (air.viscosity * air.conductivity),
        prandtl: air.viscosity * air.specific_heat / air.conductivity,
        vent_reynolds: slot_reynolds(problem, air, state).into_iter().fold(0.0, f64::max),
        max_speed: speeds.iter().map(|v| v[0].hypot(v[1])).fold(0.0, f64::max),
        max_rise,
        max_air_rise: air_rises.max_by(f64::total_cmp),
        stack_pressure: stack_pressure(problem, air, state),
    }
}

/// Reynolds number of every slot, ρ₀·w·D/μ: w the mean speed through its whole area [m/s], D its
/// hydraulic diameter [m].
pub fn slot_reynolds(problem: &Problem, air: &Air, state: &State) -> Vec<f64> {
    let diameters = slot_diameters(problem);
    let flows = slot_flows(problem, air, state);
    let of = |(flow, d): (&OpeningFlow, f64)| match flow.area > 0.0 {
        true => air.density * flow.inflow.max(flow.outflow) / flow.area * d / air.viscosity,
        false => 0.0,
    };
    flows.iter().zip(diameters).map(of).collect()
}

/// Hydraulic diameter of every slot [m]: four times the area over the wetted edge, ends of a long
/// planar slot left out.
fn slot_diameters(problem: &Problem) -> Vec<f64> {
    let mesh = problem.mesh();
    let mut diameters = vec![0.0; problem.description().slots.len()];
    for side in Side::ALL {
        let lines = match side {
            Side::Left | Side::Right => mesh.y(),
            Side::Bottom | Side::Top => mesh.x(),
        };
        for (n, slot) in mesh.slots(side).iter().enumerate() {
            if let Some(s) = slot {
                // A hole around the axis has one edge only: 4·πR²/(2πR) = 2R, the same formula.
                diameters[*s as usize] += 2.0 * (lines[n + 1] - lines[n]);
            }
        }
    }
    diameters
}

/// Centres of the lowest and the highest opening face, by height against gravity [m].
fn opening_extremes(problem: &Problem) -> Option<[[f64; 2]; 2]> {
    let mesh = problem.mesh();
    let d = problem.description();
    let mut found: Option<[(f64, [f64; 2]); 2]> = None;
    for side in Side::ALL {
        let is_open = d.sides[side.index()] == SideCondition::Open;
        for (n, slot) in mesh.slots(side).iter().enumerate() {
            let (i, j) = side_cell(problem, side, n);
            if slot.is_none() && !(is_open && mesh.regions()[mesh.cell(i, j)] == AIR) {
                continue;
            }
            let at = match side {
                Side::Left => [mesh.x()[0], mesh.y_centre(j)],
                Side::Right => [mesh.x()[mesh.nx()], mesh.y_centre(j)],
                Side::Bottom => [mesh.x_centre(i), mesh.y()[0]],
                Side::Top => [mesh.x_centre(i), mesh.y()[mesh.ny()]],
            };
            let up = -(d.gravity[0] * at[0] + d.gravity[1] * at[1]);
            let [low, high] = found.get_or_insert([(up, at); 2]);
            if up < low.0 {
                *low = (up, at);
            }
            if up > high.0 {
                *high = (up, at);
            }
        }
    }
    found.filter(|[low, high]| high.0 > low.0).map(|[low, high]| [low.1, high.1])
}

/// −ρ₀·β·∫ T̄ g·ds from the lowest to the highest opening: up through the rows' mean rise of the
/// air, then across through the columns' (which counts in tilted sections only) [Pa].
fn stack_pressure(problem: &Problem, air: &Air, state: &State) -> f64 {
    let mesh = problem.mesh();
    let d = problem.description();
    let (nx, ny) = (mesh.nx(), mesh.ny());
    let mut rows = vec![(0.0, 0.0); ny];
    let mut columns = vec![(0.0, 0.0); nx];
    for (n, region) in mesh.regions().iter().enumerate() {
        let (i, j) = (n % nx, n / nx);
        if *region == AIR {
            let volume = mesh.volume(i, j);
            for sum in [&mut rows[j], &mut columns[i]] {
                *sum = (sum.0 + volume, sum.1 + volume * state.t[n]);
            }
        }
    }
    let middle = 0.5 * (mesh.x()[0] + mesh.x()[nx]);
    let [low, high] =
        opening_extremes(problem).unwrap_or([[middle, mesh.y()[0]], [middle, mesh.y()[ny]]]);
    let up = column_integral(mesh.y(), &rows, low[1], high[1]);
    let across = column_integral(mesh.x(), &columns, low[0], high[0]);
    -air.density * air.expansion * (d.gravity[1] * up + d.gravity[0] * across)
}

/// ∫ mean ds from `from` to `to` over cells with (volume, volume × value) sums; signed.
fn column_integral(lines: &[f64], sums: &[(f64, f64)], from: f64, to: f64) -> f64 {
    let (low, high) = (from.min(to), from.max(to));
    let parts = lines.windows(2).zip(sums).map(|(line, (volume, value))| {
        let length = (line[1].min(high) - line[0].max(low)).max(0.0);
        if *volume > 0.0 { length * value / volume } else { 0.0 }
    });
    let integral: f64 = parts.sum();
    if to >= from { integral } else { -integral }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;
    use crate::by_hand::{air, bare, duct, layout, wall};
    use ventrise_mesh::{Geometry, Mesh};

    #[test]
    fn part_temperatures_weigh_by_volume() {
        let (problem, mut state, _) = wall();
        state.t.copy_from_slice(&[1.0, 2.0, 3.0, 6.0]);
        let part = part_temperatures(&problem, &state)[0].unwrap();
        assert_eq!((part.min, part.mean, part.max, part.heat), (1.0, 3.0, 6.0, 2.0));
        assert_eq!(block_temperatures(&problem, &state)[0], Some(part));
    }

    #[test]
    fn heat_flux_of_the_wall_is_the_mean_of_its_face_flows() {
        // Face flows by hand [W], positive along x: −L, −(L − 0.5), ..., 2 − L; area 0.1 m².
        let (problem, state, [left, _]) = wall();
        let fluxes = heat_fluxes(&problem, &air(), &state);
        for (n, flux) in fluxes.iter().enumerate() {
            let west = -(left - 0.5 * n as f64);
            let expected = 0.5 * (west + west + 0.5) / 0.1;
            assert!((flux[0] - expected).abs() < 1e-10, "{n}: {flux:?} {expected}");
            assert_eq!(flux[1], 0.0);
        }
    }

    #[test]
    fn radial_flux_falls_with_the_radius_and_vanishes_on_the_axis() {
        // T = −x² between uniform cells: face flux k·(x_e + x_w) with both centres' mean slope,
        // 2·k·x_face; the axis face carries nothing.
        let mesh_layout = layout(Geometry::Axisymmetric, 0.3, 0.1);
        let lines = vec![0.0, 0.1, 0.2, 0.3];
        let mesh = Mesh::from_lines(&mesh_layout, lines, vec![0.0, 0.1]).unwrap();
        let mut state = State::rest(&mesh);
        for i in 0..3 {
            state.t[i] = -mesh.x_centre(i).powi(2);
        }
        let mut d = bare(mesh);
        d.sides[Side::Top.index()] = SideCondition::Temperature(300.0);
        let problem = Problem::new(d).unwrap();
        let fluxes = heat_fluxes(&problem, &air(), &state);
        let k = air().conductivity;
        assert!((fluxes[0][0] - 0.5 * k * 2.0 * 0.1).abs() < 1e-14, "{fluxes:?}");
        assert!((fluxes[1][0] - 0.5 * k * 2.0 * (0.1 + 0.2)).abs() < 1e-14, "{fluxes:?}");
    }

    #[test]
    fn duct_numbers_by_hand() {
        let (problem, mut state) = duct(0.5);
        state.v.fill(0.2);
        state.t.fill(30.0);
        let n = numbers(&problem, &air(), &state);
        // ρ²·c_p·g·β·ΔT·H³/(μ·k) with ρ 1.2, c_p 1000, g 10, β 0.003, ΔT 30, H 0.2
        let rayleigh = 1.44 * 1000.0 * 10.0 * 0.003 * 30.0 * 0.008 / (2e-5 * 0.025);
        assert!((n.rayleigh / rayleigh - 1.0).abs() < 1e-12);
        assert!((n.prandtl - 0.8).abs() < 1e-15);
        assert!((n.vent_reynolds - 1.2 * 0.2 * 0.6 / 2e-5).abs() < 1e-8);
        assert!((n.max_speed - 0.2).abs() < 1e-15);
        assert!((n.stack_pressure - 1.2 * 0.003 * 30.0 * 10.0 * 0.2).abs() < 1e-12);
    }

    #[test]
    fn the_air_column_counts_between_the_openings_only() {
        // Right side open from 0 to 0.2 m, 2 rows: opening centres at 0.05 and 0.15 m; rows at 0
        // and 20 K give 0.05·0 + 0.05·20 = 1 K·m.
        let mesh_layout = layout(Geometry::Planar { depth: 1.0 }, 0.1, 0.2);
        let mesh = Mesh::from_lines(&mesh_layout, vec![0.0, 0.1], vec![0.0, 0.1, 0.2]).unwrap();
        let mut state = State::rest(&mesh);
        state.t[1] = 20.0;
        let mut d = bare(mesh);
        d.sides[Side::Right.index()] = SideCondition::Open;
        let problem = Problem::new(d).unwrap();
        let pressure = numbers(&problem, &air(), &state).stack_pressure;
        assert!((pressure - 1.2 * 0.003 * 10.0).abs() < 1e-15, "{pressure}");
    }
}
