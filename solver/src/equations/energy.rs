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
    emit: impl FnMut(usize, f64, Coefficients),
) {
    let row = Row::new(level, state, rhs, j);
    with_constants!(level.convection, j > 0, j + 1 < level.ny, row.run(emit));
}

/// A row's data; where there is no row below (above), this one stands for it, unused.
struct Row<'a> {
    slack: f64,
    /// Heat capacity flow per area and speed, ρ₀·c_p [J/(m³·K)]; times the row's height.
    capacity: f64,
    tall: f64,
    weights: [f64; 2],
    x_area: &'a [f64],
    y_area: &'a [f64],
    x_weight: &'a [f64],
    u: &'a [f64],
    v_low: &'a [f64],
    v_high: &'a [f64],
    t: &'a [f64],
    t_low: &'a [f64],
    t_high: &'a [f64],
    conductance: &'a [f64],
    conductance_low: &'a [f64],
    conductance_high: &'a [f64],
    side: &'a [f64],
    rhs: &'a [f64],
}

impl<'a> Row<'a> {
    #[inline(always)]
    fn new(level: &'a Level, state: &'a State, rhs: &'a [f64], j: usize) -> Row<'a> {
        let (nx, ny) = (level.nx, level.ny);
        let span = |j: usize, width: usize| j * width..(j + 1) * width;
        let cells = span(j, nx);
        let (below, above) = (span(j.saturating_sub(1), nx), span((j + 1).min(ny - 1), nx));
        let capacity = level.air.density * level.air.specific_heat;
        Row {
            slack: level.slack,
            capacity,
            tall: capacity * level.dy[j],
            weights: [1.0 - level.y_weight[j], level.y_weight[j + 1]],
            x_area: &level.x_area[..nx + 1],
            y_area: &level.y_area[..nx],
            x_weight: &level.x_weight[..nx + 1],
            u: &state.u[span(j, nx + 1)],
            v_low: &state.v[cells.clone()],
            v_high: &state.v[span(j + 1, nx)],
            t: &state.t[cells.clone()],
            t_low: &state.t[below],
            t_high: &state.t[above],
            conductance: &level.x_conductance[span(j, nx + 1)],
            conductance_low: &level.y_conductance[cells.clone()],
            conductance_high: &level.y_conductance[span(j + 1, nx)],
            side: &level.side_conductance[cells.clone()],
            rhs: &rhs[cells],
        }
    }

    #[inline(always)]
    fn run<const CENTRAL: bool, const LOW: bool, const HIGH: bool>(
        &self,
        mut emit: impl FnMut(usize, f64, Coefficients),
    ) {
        along_row!(self.cell::<CENTRAL, LOW, HIGH>, self.y_area.len() - 1, emit);
    }

    #[inline(always)]
    fn cell<
        const CENTRAL: bool,
        const LOW: bool,
        const HIGH: bool,
        const LEFT: bool,
        const RIGHT: bool,
    >(
        &self,
        i: usize,
    ) -> (f64, Coefficients) {
        let here = self.t[i];
        let mut c = Coefficients { rest: self.side[i], ..Coefficients::default() };
        let mut r = self.rhs[i];
        let west = -self.tall * self.x_area[i] * self.u[i];
        if LEFT {
            let [exact, implicit] =
                link::<CENTRAL>(self.slack, self.conductance[i], west, 1.0 - self.x_weight[i]);
            r += exact * (self.t[i - 1] - here);
            c.w = implicit;
        } else {
            c.rest += (-west).max(0.0);
        }
        let east = self.tall * self.x_area[i + 1] * self.u[i + 1];
        if RIGHT {
            let [exact, implicit] =
                link::<CENTRAL>(self.slack, self.conductance[i + 1], east, self.x_weight[i + 1]);
            r += exact * (self.t[i + 1] - here);
            c.e = implicit;
        } else {
            c.rest += (-east).max(0.0);
        }
        let area = self.capacity * self.y_area[i];
        let south = -area * self.v_low[i];
        if LOW {
            let [exact, implicit] =
                link::<CENTRAL>(self.slack, self.conductance_low[i], south, self.weights[0]);
            r += exact * (self.t_low[i] - here);
            c.s = implicit;
        } else {
            c.rest += (-south).max(0.0);
        }
        let north = area * self.v_high[i];
        if HIGH {
            let [exact, implicit] =
                link::<CENTRAL>(self.slack, self.conductance_high[i], north, self.weights[1]);
            r += exact * (self.t_high[i] - here);
            c.n = implicit;
        } else {
            c.rest += (-north).max(0.0);
        }
        (r - c.rest * here, c)
    }
}
