//! Momentum: ρ₀(u·∇)u = −∇p + ∇·(μ∇u) + ρ₀β(T − T_a)g·e, integrated over the staggered volumes.
//!
//! In an axisymmetric section the radial equation has the further term −μ·u/r², which stands in the
//! wall coefficient. With constant μ and div u = 0 the transposed gradient drops out.

use super::link;
use crate::State;
use crate::level::Level;
use crate::linear::stencil::Coefficients;

/// Residual [N] (net force less net momentum outflow) and implicit coefficients [kg/s] of row j of
/// the x-momentum equation: `emit(i, residual, coefficients)` for i = 0..=nx.
#[inline(always)]
pub(crate) fn x_row(
    level: &Level,
    state: &State,
    rhs: &[f64],
    j: usize,
    mut emit: impl FnMut(usize, f64, Coefficients),
) {
    let (nx, ny) = (level.nx, level.ny);
    let (u, v) = (&state.u[..], &state.v[..]);
    let scheme = (level.convection, level.peclet_limit);
    let lift = -level.air.density * level.air.expansion * level.gravity[0];
    for i in 0..=nx {
        let f = i + j * (nx + 1);
        if level.u_open[f] == 0.0 {
            emit(i, 0.0, Coefficients::FIXED);
            continue;
        }
        let here = u[f];
        let mut c = Coefficients::default();
        let mut r = rhs[f];
        let mut diagonal = level.u_wall[f];
        let (mut top, mut bottom, mut warmth, mut share) = (0.0, 0.0, 0.0, 0.0);
        if i > 0 {
            let cell = i - 1 + j * nx;
            let flow = -0.5 * (level.x_flow(u, i - 1, j) + level.x_flow(u, i, j));
            let [exact, implicit] = link(scheme, level.u_along[cell], flow, 0.5);
            r += exact * (u[f - 1] - here);
            c.w = implicit;
            top += 0.5 * level.y_flow(v, i - 1, j + 1);
            bottom -= 0.5 * level.y_flow(v, i - 1, j);
            r += level.x_area[i] * level.dy[j] * state.p[cell];
            warmth += state.t[cell];
            share += 1.0;
        }
        if i < nx {
            let cell = i + j * nx;
            let flow = 0.5 * (level.x_flow(u, i, j) + level.x_flow(u, i + 1, j));
            let [exact, implicit] = link(scheme, level.u_along[cell], flow, 0.5);
            r += exact * (u[f + 1] - here);
            c.e = implicit;
            top += 0.5 * level.y_flow(v, i, j + 1);
            bottom -= 0.5 * level.y_flow(v, i, j);
            r -= level.x_area[i] * level.dy[j] * state.p[cell];
            warmth += state.t[cell];
            share += 1.0;
        }
        r += lift * level.u_area[i] * level.dy[j] * warmth / share;
        if j + 1 < ny {
            let conductance = level.u_across[f + nx + 1];
            let [exact, implicit] = link(scheme, conductance, top, level.y_weight[j + 1]);
            r += exact * (u[f + nx + 1] - here);
            c.n = implicit;
        } else {
            diagonal += level.sticks[3] * (-top).max(0.0);
        }
        if j > 0 {
            let [exact, implicit] =
                link(scheme, level.u_across[f], bottom, 1.0 - level.y_weight[j]);
            r += exact * (u[f - nx - 1] - here);
            c.s = implicit;
        } else {
            diagonal += level.sticks[2] * (-bottom).max(0.0);
        }
        c.p = c.neighbours() + diagonal;
        // Closed neighbours stay at rest: their share acts like a wall.
        c.w *= if i > 0 { level.u_open[f - 1] } else { 0.0 };
        c.e *= if i < nx { level.u_open[f + 1] } else { 0.0 };
        c.s *= if j > 0 { level.u_open[f - nx - 1] } else { 0.0 };
        c.n *= if j + 1 < ny { level.u_open[f + nx + 1] } else { 0.0 };
        emit(i, r - diagonal * here, c);
    }
}

/// As [`x_row`] for the y-momentum equation on the y-faces of line j = 0..=ny, i = 0..nx.
#[inline(always)]
pub(crate) fn y_row(
    level: &Level,
    state: &State,
    rhs: &[f64],
    j: usize,
    mut emit: impl FnMut(usize, f64, Coefficients),
) {
    let (nx, ny) = (level.nx, level.ny);
    let (u, v) = (&state.u[..], &state.v[..]);
    let scheme = (level.convection, level.peclet_limit);
    let lift = -level.air.density * level.air.expansion * level.gravity[1];
    for i in 0..nx {
        let f = i + j * nx;
        if level.v_open[f] == 0.0 {
            emit(i, 0.0, Coefficients::FIXED);
            continue;
        }
        let here = v[f];
        let mut c = Coefficients::default();
        let mut r = rhs[f];
        let mut diagonal = level.v_wall[f];
        let (mut east, mut west, mut warmth, mut share) = (0.0, 0.0, 0.0, 0.0);
        if j > 0 {
            let cell = f - nx;
            let flow = -0.5 * (level.y_flow(v, i, j - 1) + level.y_flow(v, i, j));
            let [exact, implicit] = link(scheme, level.v_along[cell], flow, 0.5);
            r += exact * (v[f - nx] - here);
            c.s = implicit;
            east += 0.5 * level.x_flow(u, i + 1, j - 1);
            west -= 0.5 * level.x_flow(u, i, j - 1);
            r += level.y_area[i] * state.p[cell];
            warmth += state.t[cell];
            share += 1.0;
        }
        if j < ny {
            let flow = 0.5 * (level.y_flow(v, i, j) + level.y_flow(v, i, j + 1));
            let [exact, implicit] = link(scheme, level.v_along[f], flow, 0.5);
            r += exact * (v[f + nx] - here);
            c.n = implicit;
            east += 0.5 * level.x_flow(u, i + 1, j);
            west -= 0.5 * level.x_flow(u, i, j);
            r -= level.y_area[i] * state.p[f];
            warmth += state.t[f];
            share += 1.0;
        }
        r += lift * level.y_area[i] * level.v_height[j] * warmth / share;
        let corner = i + j * (nx + 1);
        if i + 1 < nx {
            let conductance = level.v_across[corner + 1];
            let [exact, implicit] = link(scheme, conductance, east, level.x_weight[i + 1]);
            r += exact * (v[f + 1] - here);
            c.e = implicit;
        } else {
            diagonal += level.sticks[1] * (-east).max(0.0);
        }
        if i > 0 {
            let [exact, implicit] =
                link(scheme, level.v_across[corner], west, 1.0 - level.x_weight[i]);
            r += exact * (v[f - 1] - here);
            c.w = implicit;
        } else {
            diagonal += level.sticks[0] * (-west).max(0.0);
        }
        c.p = c.neighbours() + diagonal;
        c.s *= if j > 0 { level.v_open[f - nx] } else { 0.0 };
        c.n *= if j < ny { level.v_open[f + nx] } else { 0.0 };
        c.w *= if i > 0 { level.v_open[f - 1] } else { 0.0 };
        c.e *= if i + 1 < nx { level.v_open[f + 1] } else { 0.0 };
        emit(i, r - diagonal * here, c);
    }
}

/// Force of an opening on its half control volume [N] and the size of its slope [kg/s].
///
/// The pressure outside the face is −(1 + K)·ρ₀u_n²/2 for air entering (ambient total pressure
/// through the loss) and +K·ρ₀u_n²/2 for air leaving; both oppose the flow.
#[inline(always)]
pub(crate) fn opening_force(
    density: f64,
    area: f64,
    loss: f64,
    outward: f64,
    speed: f64,
) -> [f64; 2] {
    let factor = if speed * outward < 0.0 { 1.0 + loss } else { loss };
    let slope = factor * density * area * speed.abs();
    [-0.5 * slope * speed, slope]
}
