//! Energy: ρ₀c_p u·∇T = ∇·(k∇T) in air, 0 = ∇·(k∇T) + heat/volume in blocks; T is the rise above
//! ambient.

use super::link;
use crate::State;
use crate::level::Level;
use crate::linear::stencil::Coefficients;

/// Residual [W] (heat put in less heat leaving) and implicit coefficients [W/K] of row j:
/// `emit(i, residual, coefficients)`. Air entering through an opening has rise zero.
#[inline(always)]
pub(crate) fn row(
    level: &Level,
    state: &State,
    rhs: &[f64],
    j: usize,
    mut emit: impl FnMut(usize, f64, Coefficients),
) {
    let (nx, ny) = (level.nx, level.ny);
    let (u, v, t) = (&state.u[..], &state.v[..], &state.t[..]);
    let heat = level.air.specific_heat;
    let scheme = (level.convection, level.peclet_limit);
    for i in 0..nx {
        let n = i + j * nx;
        let here = t[n];
        let mut c = Coefficients::default();
        let mut r = rhs[n];
        let mut diagonal = level.side_conductance[n];
        let west = -heat * level.x_flow(u, i, j);
        if i > 0 {
            let conductance = level.x_conductance[i + j * (nx + 1)];
            let [exact, implicit] = link(scheme, conductance, west, 1.0 - level.x_weight[i]);
            r += exact * (t[n - 1] - here);
            c.w = implicit;
        } else {
            diagonal += (-west).max(0.0);
        }
        let east = heat * level.x_flow(u, i + 1, j);
        if i + 1 < nx {
            let conductance = level.x_conductance[i + 1 + j * (nx + 1)];
            let [exact, implicit] = link(scheme, conductance, east, level.x_weight[i + 1]);
            r += exact * (t[n + 1] - here);
            c.e = implicit;
        } else {
            diagonal += (-east).max(0.0);
        }
        let south = -heat * level.y_flow(v, i, j);
        if j > 0 {
            let [exact, implicit] =
                link(scheme, level.y_conductance[n], south, 1.0 - level.y_weight[j]);
            r += exact * (t[n - nx] - here);
            c.s = implicit;
        } else {
            diagonal += (-south).max(0.0);
        }
        let north = heat * level.y_flow(v, i, j + 1);
        if j + 1 < ny {
            let [exact, implicit] =
                link(scheme, level.y_conductance[n + nx], north, level.y_weight[j + 1]);
            r += exact * (t[n + nx] - here);
            c.n = implicit;
        } else {
            diagonal += (-north).max(0.0);
        }
        c.p = c.neighbours() + diagonal;
        emit(i, r - diagonal * here, c);
    }
}
