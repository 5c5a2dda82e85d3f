//! Mass: what flows out of a cell less what flows in is nothing.

use crate::State;
use crate::level::Level;

/// Residual [kg/s] of row j: given source less net outflow; zero in solid cells.
#[inline(always)]
pub(crate) fn row(level: &Level, state: &State, rhs: &[f64], j: usize, out: &mut [f64]) {
    let nx = level.nx;
    for (i, r) in out.iter_mut().enumerate() {
        let n = i + j * nx;
        let east = level.x_flow(&state.u, i + 1, j) - level.x_flow(&state.u, i, j);
        let north = level.y_flow(&state.v, i, j + 1) - level.y_flow(&state.v, i, j);
        *r = if level.fluid[n] { rhs[n] - east - north } else { 0.0 };
    }
}
