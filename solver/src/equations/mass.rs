//! Mass: what flows out of a cell less what flows in is nothing.

use crate::State;
use crate::level::Level;

/// Residual [kg/s] of row j: given source less net outflow; zero in solid cells.
#[inline(always)]
pub(crate) fn row(
    level: &Level,
    state: &State,
    rhs: &[f64],
    j: usize,
    mut emit: impl FnMut(usize, f64),
) {
    let nx = level.nx;
    let cells = j * nx..(j + 1) * nx;
    let u = &state.u[j * (nx + 1)..(j + 1) * (nx + 1)];
    let (low, high) = (&state.v[cells.clone()], &state.v[cells.end..cells.end + nx]);
    let (fluid, rhs) = (&level.fluid[cells.clone()], &rhs[cells]);
    let (x_area, y_area) = (&level.x_area[..nx + 1], &level.y_area[..nx]);
    let density = level.air.density;
    let height = density * level.dy[j];
    for i in 0..nx {
        let east = height * (x_area[i + 1] * u[i + 1] - x_area[i] * u[i]);
        let north = density * y_area[i] * (high[i] - low[i]);
        emit(i, if fluid[i] { rhs[i] - east - north } else { 0.0 });
    }
}
