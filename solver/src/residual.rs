//! Residuals of all equations and the scales they are measured by.

use crate::equations::{energy, mass, momentum};
use crate::level::Level;
use crate::{Residuals, State, par};

/// All residuals of a state with the given right-hand sides, into `out` (mass in `p`).
pub(crate) fn evaluate(level: &Level, state: &State, rhs: &State, out: &mut State) {
    evaluate_local(level, state, rhs, out);
    if let Some(radiant) = &level.radiant {
        radiant.add(&radiant.patches(&state.t), &mut out.t);
    }
    level.fans.iter().for_each(|fan| fan.add_lack(state, out));
}

/// The same without radiation, which couples all surfaces, and without what fans lack at a flow,
/// which couples all faces of a slot: what remains couples neighbours only.
/// One pass: what a row reads stays near for all four equations.
pub(crate) fn evaluate_local(level: &Level, state: &State, rhs: &State, out: &mut State) {
    let (nx, ny) = (level.nx, level.ny);
    let State { u, v, p, t } = out;
    let (v, v_last) = v.split_at_mut(nx * ny);
    let arrays = [(&mut p[..], nx), (&mut t[..], nx), (v, nx), (&mut u[..], nx + 1)];
    par::each_rows(arrays, |j, [p, t, v, u]| {
        momentum::x_row(level, state, &rhs.u, j, |i, r, _| u[i] = r);
        momentum::y_row(level, state, &rhs.v, j, |i, r, _| v[i] = r);
        mass::row(level, state, &rhs.p, j, |i, r| p[i] = r);
        energy::row(level, state, &rhs.t, j, |i, r, _| t[i] = r);
    });
    momentum::y_row(level, state, &rhs.v, ny, |i, r, _| v_last[i] = r);
}

/// What the residuals are compared with.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Scales {
    /// Largest mass flow across any mesh line or through all openings [kg/s].
    pub mass: f64,
    /// Sum of the sizes of buoyancy and pressure forces over the control volumes, and of what
    /// drives air in slots [N].
    pub force: f64,
    /// Heat put in by blocks and sides, or taken out by them, whichever is more [W].
    pub heat: f64,
}

/// Least heat scale as a share of all that sides at their temperatures could exchange.
const LEAST_HEAT: f64 = 1e-10;

/// Speeds below this share of the diffusive speed α/L count as rest.
const LEAST_SPEED: f64 = 1e-8;

/// Flow of the diffusive speed α/L through the section [m³/s].
fn creep(level: &Level) -> f64 {
    let air = &level.air;
    let height: f64 = level.dy.iter().sum();
    let side = level.x_area.iter().fold(0.0_f64, |a, b| a.max(*b)) * height;
    let area = side.max(level.y_area.iter().sum());
    air.conductivity / (air.density * air.specific_heat) / level.extent() * area
}

/// The scales of a state.
pub(crate) fn scales(level: &Level, state: &State) -> Scales {
    let (nx, ny) = (level.nx, level.ny);
    let lift = level.gravity.map(|g| (level.air.density * level.air.expansion * g).abs());
    let [force, heat_in, heat_out, gross] = par::sum_rows(ny, nx, |j| {
        let (mut force, mut heat_in, mut heat_out, mut gross) = (0.0, 0.0, 0.0, 0.0);
        for i in 0..nx {
            let n = i + j * nx;
            let (t, p) = (state.t[n], state.p[n]);
            if level.fluid[n] {
                let volume = level.y_area[i] * level.dy[j];
                force += (lift[0] + lift[1]) * volume * t.abs();
                if i > 0 && level.fluid[n - 1] {
                    force += level.x_area[i] * level.dy[j] * (p - state.p[n - 1]).abs();
                }
                if j > 0 && level.fluid[n - nx] {
                    force += level.y_area[i] * (p - state.p[n - nx]).abs();
                }
            }
            gross += level.source.t[n].abs();
            let heat = level.source.t[n] - level.side_conductance[n] * t;
            heat_in += heat.max(0.0);
            heat_out += (-heat).max(0.0);
        }
        [force, heat_in, heat_out, gross]
    });
    // Half of the flows' sizes across a line is what circulates through it in a closed cavity.
    let mut through = 0.0_f64;
    for j in 1..ny {
        let across: f64 = (0..nx).map(|i| level.y_flow(&state.v, i, j).abs()).sum();
        through = through.max(0.5 * across);
    }
    let mut columns = vec![0.0; nx + 1];
    for j in 0..ny {
        columns.iter_mut().enumerate().for_each(|(i, c)| *c += level.x_flow(&state.u, i, j).abs());
    }
    let given = level.openings.iter().flatten().map(|o| o.drive.abs() * o.area);
    let fans = level.fans.iter().map(|fan| fan.force(state));
    let force = force + given.chain(fans).sum::<f64>();
    let across = columns.iter().fold(0.0_f64, |a, b| a.max(*b));
    // A section at one temperature exchanges nothing but round-off, and air at rest moves by no
    // more than that.
    let creep = LEAST_SPEED * creep(level);
    Scales {
        mass: through.max(0.5 * across).max(level.air.density * creep),
        force: force.max(level.air.viscosity / level.extent() * creep),
        heat: heat_in.max(heat_out).max(LEAST_HEAT * gross),
    }
}

/// Sums of the residuals' sizes over their scales.
pub(crate) fn relative(level: &Level, residual: &State, scales: &Scales) -> Residuals {
    let nx = level.nx;
    let sum = |values: &[f64], width: usize| {
        let [s] = par::sum_rows(values.len() / width, width, |j| {
            [values[j * width..(j + 1) * width].iter().map(|r| r.abs()).sum()]
        });
        s
    };
    let over = |sum: f64, scale: f64| if sum == 0.0 { 0.0 } else { sum / scale };
    Residuals {
        mass: over(sum(&residual.p, nx), scales.mass),
        momentum_x: over(sum(&residual.u, nx + 1), scales.force),
        momentum_y: over(sum(&residual.v, nx), scales.force),
        energy: over(sum(&residual.t, nx), scales.heat),
    }
}
