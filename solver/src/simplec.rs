//! One SIMPLEC iteration: momentum with the old pressure, a pressure correction that restores the
//! mass balance, then energy.
//!
//! All equations are solved for changes: the exact (second-order) residual on the right, the
//! positive implicit coefficients on the left, so that a standing iteration solves the exact
//! equations whatever the left side is.
//!
//! # Source
//! van-doormaal-1984 (SIMPLEC), patankar-1980 (SIMPLE).

use ventrise_mesh::Side;

use crate::equations::{energy, mass, momentum};
use crate::level::Level;
use crate::linear::krylov::{self, KrylovWork};
use crate::linear::multigrid::{Link, Multigrid};
use crate::linear::relaxation::{self, LineWork};
use crate::linear::stencil::Coefficients;
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
        velocity: 0.6,
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
    stencil: Vec<Coefficients>,
    change: Vec<f64>,
    x_response: Vec<f64>,
    y_response: Vec<f64>,
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
            stencil: vec![Coefficients::default(); most],
            change: vec![0.0; most],
            x_response: vec![0.0; u],
            y_response: vec![0.0; v],
            line: LineWork::new(most),
            multigrid: Multigrid::new(level.nx, cells, chain),
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
    let Work { state, rhs, residual, stencil, change, x_response, y_response, line, .. } = work;
    let nx = level.nx;
    let relaxation = smoothing.velocity;
    {
        let stencil = &mut stencil[..state.u.len()];
        par::each_row2((stencil, nx + 1), (&mut residual.u, nx + 1), |j, stencil, row| {
            momentum::x_row(level, state, &rhs.u, j, |i, r, c| (row[i], stencil[i]) = (r, c));
        });
        open_faces(level, [Side::Left, Side::Right], &state.u, stencil, &mut residual.u);
        par::each_row2((stencil, nx + 1), (x_response, nx + 1), |j, stencil, response| {
            for (i, (c, d)) in stencil.iter_mut().zip(response).enumerate() {
                let area = level.x_area[i] * level.dy[j] * level.u_open[i + j * (nx + 1)];
                relax(c, relaxation);
                *d = area / (c.p - c.neighbours());
            }
        });
        let change = &mut change[..state.u.len()];
        change.fill(0.0);
        for _ in 0..smoothing.sweeps {
            relaxation::sweep(stencil, change, &residual.u, nx + 1, line);
        }
        par::add_scaled(&mut state.u, 1.0, change, nx + 1);
    }
    let stencil = &mut stencil[..state.v.len()];
    par::each_row2((stencil, nx), (&mut residual.v, nx), |j, stencil, row| {
        momentum::y_row(level, state, &rhs.v, j, |i, r, c| (row[i], stencil[i]) = (r, c));
    });
    open_faces(level, [Side::Bottom, Side::Top], &state.v, stencil, &mut residual.v);
    par::each_row2((stencil, nx), (y_response, nx), |j, stencil, response| {
        for (i, (c, d)) in stencil.iter_mut().zip(response).enumerate() {
            let area = level.y_area[i] * level.v_open[i + j * nx];
            relax(c, relaxation);
            *d = area / (c.p - c.neighbours());
        }
    });
    let change = &mut change[..state.v.len()];
    change.fill(0.0);
    for _ in 0..smoothing.sweeps {
        relaxation::sweep(stencil, change, &residual.v, nx, line);
    }
    par::add_scaled(&mut state.v, 1.0, change, nx);
}

/// Divides the diagonal of an unknown by the under-relaxation.
fn relax(c: &mut Coefficients, relaxation: f64) {
    if *c != Coefficients::FIXED {
        c.p /= relaxation;
    }
}

/// Adds the openings' forces and their slopes.
fn open_faces(
    level: &Level,
    sides: [Side; 2],
    speeds: &[f64],
    stencil: &mut [Coefficients],
    residual: &mut [f64],
) {
    for side in sides {
        for o in &level.openings[side.index()] {
            let [force, slope] = momentum::opening_force(
                level.air.density,
                o.area,
                o.loss,
                o.outward,
                speeds[o.face],
            );
            residual[o.face] += force;
            stencil[o.face].p += slope;
        }
    }
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
    let Work { state, rhs, residual, stencil, change, x_response, y_response, .. } = work;
    let (nx, ny) = (level.nx, level.ny);
    let cells = nx * ny;
    let density = level.air.density;
    let stencil = &mut stencil[..cells];
    par::each_row2((stencil, nx), (&mut residual.p, nx), |j, stencil, row| {
        mass::row(level, state, &rhs.p, j, row);
        for (i, c) in stencil.iter_mut().enumerate() {
            if !level.fluid[i + j * nx] {
                *c = Coefficients::FIXED;
                continue;
            }
            let f = i + j * (nx + 1);
            let west = density * level.x_area[i] * level.dy[j] * x_response[f];
            let east = density * level.x_area[i + 1] * level.dy[j] * x_response[f + 1];
            let south = density * level.y_area[i] * y_response[i + j * nx];
            let north = density * level.y_area[i] * y_response[i + (j + 1) * nx];
            // Outside the section the correction is zero.
            *c = Coefficients {
                p: (west + east + south + north).max(f64::MIN_POSITIVE),
                w: if i > 0 { west } else { 0.0 },
                e: if i + 1 < nx { east } else { 0.0 },
                s: if j > 0 { south } else { 0.0 },
                n: if j + 1 < ny { north } else { 0.0 },
            };
        }
    });
    for region in &level.closed_regions {
        balance(region, &mut residual.p);
    }
    let change = &mut change[..cells];
    let info = krylov::conjugate_gradients(
        (stencil, nx),
        change,
        &residual.p,
        limits,
        &mut work.multigrid,
        &mut work.krylov,
    );
    for region in &level.closed_regions {
        balance(region, change);
    }
    let change = &*change;
    par::add_scaled(&mut state.p, 1.0, change, nx);
    par::each_row(&mut state.u, nx + 1, |j, row| {
        for (i, u) in row.iter_mut().enumerate() {
            let west = if i > 0 { change[i - 1 + j * nx] } else { 0.0 };
            let east = if i < nx { change[i + j * nx] } else { 0.0 };
            *u += x_response[i + j * (nx + 1)] * (west - east);
        }
    });
    par::each_row(&mut state.v, nx, |j, row| {
        for (i, v) in row.iter_mut().enumerate() {
            let south = if j > 0 { change[i + (j - 1) * nx] } else { 0.0 };
            let north = if j < ny { change[i + j * nx] } else { 0.0 };
            *v += y_response[i + j * nx] * (south - north);
        }
    });
    info.residual
}

/// Takes the mean out of the values in a closed region.
fn balance(region: &[u32], values: &mut [f64]) {
    let sum: f64 = region.iter().map(|n| values[*n as usize]).sum();
    let mean = sum / region.len() as f64;
    region.iter().for_each(|n| values[*n as usize] -= mean);
}

fn energy_step(level: &Level, work: &mut Work, smoothing: &Smoothing) {
    let Work { state, rhs, residual, stencil, change, line, .. } = work;
    let nx = level.nx;
    let cells = state.t.len();
    let stencil = &mut stencil[..cells];
    par::each_row2((stencil, nx), (&mut residual.t, nx), |j, stencil, row| {
        energy::row(level, state, &rhs.t, j, |i, r, mut c| {
            // Blocks are never relaxed: their heat must find its way out at once.
            if level.fluid[i + j * nx] {
                c.p /= smoothing.temperature;
            }
            (row[i], stencil[i]) = (r, c);
        });
    });
    let change = &mut change[..cells];
    change.fill(0.0);
    for _ in 0..smoothing.sweeps {
        relaxation::sweep(stencil, change, &residual.t, nx, line);
    }
    par::add_scaled(&mut state.t, 1.0, change, nx);
}
