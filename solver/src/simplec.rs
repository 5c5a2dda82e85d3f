//! One SIMPLEC iteration: momentum with the old pressure, a pressure correction that restores the
//! mass balance, then energy.
//!
//! All equations are solved for changes: the exact (second-order) residual on the right, the
//! positive implicit coefficients on the left, so that a standing iteration solves the exact
//! equations whatever the left side is.
//!
//! # Source
//! van-doormaal-1984 (SIMPLEC), patankar-1980 (SIMPLE).

use crate::equations::{energy, mass, momentum};
use crate::level::Level;
use crate::linear::krylov::{self, KrylovWork};
use crate::linear::multigrid::{Link, Multigrid};
use crate::linear::relaxation::{self, LineWork};
use crate::linear::stencil::{Coefficients, Stencil};
use crate::{State, par};

/// How strongly an iteration is damped and how much it does.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Smoothing {
    /// Under-relaxation of the velocities, in (0, 1).
    pub velocity: f64,
    /// Under-relaxation of the air's temperature, in (0, 1].
    pub temperature: f64,
    /// Line sweeps of the momentum and of the energy equation.
    pub sweeps: usize,
    /// Reduction asked of the pressure correction, and its iteration limit.
    pub pressure: (f64, usize),
    /// Iterations before and after a coarse correction.
    pub iterations: [usize; 2],
}

impl Smoothing {
    /// The usual choice.
    pub const STANDARD: Smoothing = Smoothing {
        velocity: 0.65,
        temperature: 0.95,
        sweeps: 1,
        pressure: (0.1, 3),
        iterations: [2, 2],
    };
}

/// Fields and work arrays of one mesh.
pub(crate) struct Work {
    pub state: State,
    pub rhs: State,
    /// The state restricted from the finer mesh, then the change carried back to it.
    pub start: State,
    pub residual: State,
    stencil: Stencil,
    right: Vec<f32>,
    change: Vec<f32>,
    x_response: Vec<f32>,
    y_response: Vec<f32>,
    line: LineWork,
    multigrid: Multigrid,
    krylov: KrylovWork,
}

impl Work {
    /// For a level with the chain of coarser meshes below it.
    pub fn new(level: &Level, chain: &[Link]) -> Work {
        let (u, v, cells) = (level.u_open.len(), level.v_open.len(), level.fluid.len());
        let most = u.max(v);
        let fields =
            || State { u: vec![0.0; u], v: vec![0.0; v], p: vec![0.0; cells], t: vec![0.0; cells] };
        Work {
            state: fields(),
            rhs: fields(),
            start: fields(),
            residual: fields(),
            stencil: Stencil::new(level.nx, most),
            right: vec![0.0; most],
            change: vec![0.0; most],
            x_response: vec![0.0; u],
            y_response: vec![0.0; v],
            line: LineWork::new(most),
            multigrid: Multigrid::new(cells, chain),
            krylov: KrylovWork::new(cells),
        }
    }
}

/// One iteration.
pub(crate) fn smooth(level: &Level, work: &mut Work, smoothing: &Smoothing) {
    momentum_step(level, work, smoothing);
    pressure_step(level, work, smoothing.pressure);
    energy_step(level, work, smoothing);
}

fn momentum_step(level: &Level, work: &mut Work, smoothing: &Smoothing) {
    let Work { state, rhs, stencil, right, change, x_response, y_response, line, .. } = work;
    let nx = level.nx;
    let relaxation = smoothing.velocity;
    // A velocity's answer to a pressure difference: area over the diagonal less the neighbours.
    let response = |area: f64, open: f64, c: &Coefficients| (area * open / c.rest) as f32;

    stencil.shape(nx + 1, state.u.len());
    let [rest, w, e, s, n] = stencil.arrays();
    let right_u = &mut right[..state.u.len()];
    let arrays = [rest, w, e, s, n, (&mut *right_u, nx + 1), (&mut x_response[..], nx + 1)];
    par::each_rows(arrays, |j, [rest, w, e, s, n, right, answer]| {
        let open = &level.u_open[j * (nx + 1)..(j + 1) * (nx + 1)];
        momentum::x_row(level, state, &rhs.u, j, |i, r, c| {
            let c = if open[i] > 0.0 { c.relaxed(relaxation) } else { c };
            store(i, &c, [rest, w, e, s, n]);
            right[i] = r as f32;
            answer[i] = response(level.x_area[i] * level.dy[j], open[i], &c);
        });
    });
    for fan in level.fans.iter().filter(|fan| fan.along_x) {
        fan.each_face(state, |face, force, area, stiffness| {
            right_u[face] += force as f32;
            stencil.rest[face] += stiffness as f32;
            x_response[face] = area as f32 / stencil.rest[face];
        });
    }
    solve(stencil, change, right_u, smoothing.sweeps, line);
    par::add(&mut state.u, &change[..right_u.len()], nx + 1);

    stencil.shape(nx, state.v.len());
    let [rest, w, e, s, n] = stencil.arrays();
    let right_v = &mut right[..state.v.len()];
    let arrays = [rest, w, e, s, n, (&mut *right_v, nx), (&mut y_response[..], nx)];
    par::each_rows(arrays, |j, [rest, w, e, s, n, right, answer]| {
        let open = &level.v_open[j * nx..(j + 1) * nx];
        momentum::y_row(level, state, &rhs.v, j, |i, r, c| {
            let c = if open[i] > 0.0 { c.relaxed(relaxation) } else { c };
            store(i, &c, [rest, w, e, s, n]);
            right[i] = r as f32;
            answer[i] = response(level.y_area[i], open[i], &c);
        });
    });
    for fan in level.fans.iter().filter(|fan| !fan.along_x) {
        fan.each_face(state, |face, force, area, stiffness| {
            right_v[face] += force as f32;
            stencil.rest[face] += stiffness as f32;
            y_response[face] = area as f32 / stencil.rest[face];
        });
    }
    solve(stencil, change, right_v, smoothing.sweeps, line);
    par::add(&mut state.v, &change[..right_v.len()], nx);
}

/// Puts a row's coefficients into place i of the stencil's arrays.
#[inline(always)]
fn store(i: usize, c: &Coefficients, arrays: [&mut [f32]; 5]) {
    let values = [c.rest, c.w, c.e, c.s, c.n];
    arrays.into_iter().zip(values).for_each(|(array, value)| array[i] = value as f32);
}

/// The change that so many line sweeps find from zero.
fn solve(a: &Stencil, change: &mut [f32], right: &[f32], sweeps: usize, line: &mut LineWork) {
    let change = &mut change[..right.len()];
    change.fill(0.0);
    for _ in 0..sweeps {
        relaxation::sweep(a, change, right, line);
    }
}

/// The pressure correction of one iteration alone.
pub(crate) fn correct_pressure(level: &Level, work: &mut Work, smoothing: &Smoothing) {
    pressure_step(level, work, smoothing.pressure);
}

/// Restores the mass balance of every cell to round-off, with the responses of the last iteration.
pub(crate) fn restore_mass(level: &Level, work: &mut Work) {
    pressure_step(level, work, MASS_RESTORED);
}

/// Reduction asked of the last pressure correction of an outer iteration, and its limit.
const MASS_RESTORED: (f64, usize) = (1e-6, 30);

/// Corrects pressure and velocities so that every cell's mass balance is met to the reduction
/// asked; returns the reduction reached.
fn pressure_step(level: &Level, work: &mut Work, limits: (f64, usize)) -> f64 {
    let Work { state, rhs, stencil, right, change, x_response, y_response, .. } = work;
    let (nx, ny) = (level.nx, level.ny);
    let cells = nx * ny;
    stencil.shape(nx, cells);
    let right = &mut right[..cells];
    let [rest, w, e, s, n] = stencil.arrays();
    let arrays = [rest, w, e, s, n, (&mut *right, nx)];
    par::each_rows(arrays, |j, [rest, w, e, s, n, right]| {
        let fluid = &level.fluid[j * nx..(j + 1) * nx];
        let x_answer = &x_response[j * (nx + 1)..(j + 1) * (nx + 1)];
        let (low, high) = y_response[j * nx..(j + 2) * nx].split_at(nx);
        let density = level.air.density as f32;
        let height = density * level.dy[j] as f32;
        let (at_bottom, at_top) = (j == 0, j + 1 == ny);
        mass::row(level, state, &rhs.p, j, |i, r| {
            right[i] = r as f32;
            let flat = level.y_area[i] as f32 * density;
            let links = [
                height * level.x_area[i] as f32 * x_answer[i],
                height * level.x_area[i + 1] as f32 * x_answer[i + 1],
                flat * low[i],
                flat * high[i],
            ];
            // Outside the section the correction is zero.
            let outside = [i == 0, i + 1 == nx, at_bottom, at_top];
            let mut out = if fluid[i] { f32::MIN_POSITIVE } else { 1.0 };
            let mut inside = [0.0; 4];
            for k in 0..4 {
                if outside[k] {
                    out += links[k];
                } else {
                    inside[k] = links[k];
                }
            }
            rest[i] = out;
            [w[i], e[i], s[i], n[i]] = inside;
        });
    });
    for region in &level.closed_regions {
        balance(region, right);
    }
    let change = &mut change[..cells];
    let info = krylov::conjugate_gradients(
        stencil,
        change,
        right,
        limits,
        &mut work.multigrid,
        &mut work.krylov,
    );
    for region in &level.closed_regions {
        balance(region, change);
    }
    let change = &*change;
    par::add(&mut state.p, change, nx);
    par::each_row(&mut state.u, nx + 1, |j, row| {
        let change = &change[j * nx..(j + 1) * nx];
        let answer = &x_response[j * (nx + 1)..(j + 1) * (nx + 1)];
        row[0] -= f64::from(answer[0] * change[0]);
        row[nx] += f64::from(answer[nx] * change[nx - 1]);
        for i in 1..nx {
            row[i] += f64::from(answer[i] * (change[i - 1] - change[i]));
        }
    });
    par::each_row(&mut state.v, nx, |j, row| {
        let answer = &y_response[j * nx..(j + 1) * nx];
        if j > 0 {
            let below = &change[(j - 1) * nx..j * nx];
            row.iter_mut().zip(answer.iter().zip(below)).for_each(|(v, (d, p))| {
                *v += f64::from(d * p);
            });
        }
        if j < ny {
            let above = &change[j * nx..(j + 1) * nx];
            row.iter_mut().zip(answer.iter().zip(above)).for_each(|(v, (d, p))| {
                *v -= f64::from(d * p);
            });
        }
    });
    info.residual
}

/// Takes the mean out of the values in a closed region.
fn balance(region: &[u32], values: &mut [f32]) {
    let sum: f64 = region.iter().map(|n| f64::from(values[*n as usize])).sum();
    let mean = (sum / region.len() as f64) as f32;
    region.iter().for_each(|n| values[*n as usize] -= mean);
}

fn energy_step(level: &Level, work: &mut Work, smoothing: &Smoothing) {
    let Work { state, rhs, residual, stencil, right, change, line, .. } = work;
    let nx = level.nx;
    let cells = state.t.len();
    stencil.shape(nx, cells);
    let right = &mut right[..cells];
    let [rest, w, e, s, n] = stencil.arrays();
    let arrays = [rest, w, e, s, n, (&mut *right, nx)];
    par::each_rows(arrays, |j, [rest, w, e, s, n, right]| {
        let fluid = &level.fluid[j * nx..(j + 1) * nx];
        energy::row(level, state, &rhs.t, j, |i, r, c| {
            // Blocks are never relaxed: their heat must find its way out at once.
            let c = if fluid[i] { c.relaxed(smoothing.temperature) } else { c };
            store(i, &c, [rest, w, e, s, n]);
            right[i] = r as f32;
        });
    });
    if let Some(radiant) = &level.radiant {
        residual.t.fill(0.0);
        let patches = radiant.patches(&state.t);
        radiant.add(&patches, &mut residual.t);
        right.iter_mut().zip(&residual.t).for_each(|(r, heat)| *r += *heat as f32);
        radiant.films(&patches, |air, solid, share, film| {
            stencil.rest[air] += ((1.0 - share).powi(2) * film) as f32;
            if let Some(solid) = solid {
                stencil.rest[solid] += (share * share * film) as f32;
            }
        });
    }
    solve(stencil, change, right, smoothing.sweeps, line);
    par::add(&mut state.t, &change[..cells], nx);
}
