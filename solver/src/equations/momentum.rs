//! Momentum: ρ₀(u·∇)u = −∇p + ∇·(μ∇u) + ρ₀β(T − T_a)g·e, integrated over the staggered volumes.
//!
//! In an axisymmetric section the radial equation has the further term −μ·u/r², which stands in the
//! wall coefficient. With constant μ and div u = 0 the transposed gradient drops out.

use super::link;
use crate::State;
use crate::level::Level;
use crate::linear::stencil::Coefficients;

/// One control volume of a velocity component. Its neighbours: before and after along the
/// velocity, low and high across it.
struct Volume {
    here: f64,
    neighbours: [f64; 4],
    /// 0 where the neighbour is a closed face.
    open: [f64; 4],
    /// Viscous conductances to the neighbours [kg/s].
    conductances: [f64; 4],
    /// Mass flows outward [kg/s].
    flows: [f64; 4],
    /// Weights of the neighbours' values across the velocity, low and high.
    weights: [f64; 2],
    /// To no-slip surfaces, and the slope of an opening's force [kg/s].
    wall: f64,
    /// 1 where there is a wall (or a slot) in place of the neighbour low and high.
    sticks: [f64; 2],
    /// Given force, pressure, buoyancy, opening [N].
    force: f64,
    /// 1 when the velocity is an unknown.
    unknown: f64,
}

impl Volume {
    /// Residual, rest of the diagonal, implicit coefficients of the neighbours.
    #[inline(always)]
    fn equation<
        const CENTRAL: bool,
        const BEFORE: bool,
        const AFTER: bool,
        const LOW: bool,
        const HIGH: bool,
    >(
        &self,
        slack: f64,
        wall_slope: f64,
    ) -> (f64, f64, [f64; 4]) {
        let there = [BEFORE, AFTER, LOW, HIGH];
        let weights = [0.5, 0.5, self.weights[0], self.weights[1]];
        let (mut r, mut diagonal, mut shut) = (self.force, self.wall, 0.0);
        let mut coefficients = [0.0; 4];
        for k in 0..4 {
            let flow = self.flows[k];
            if there[k] {
                let [exact, implicit] =
                    link::<CENTRAL>(slack, self.conductances[k], flow, weights[k]);
                r += exact * (self.neighbours[k] - self.here);
                // Closed neighbours stay at rest: their share acts like a wall.
                coefficients[k] = implicit * self.open[k] * self.unknown;
                shut += implicit * (1.0 - self.open[k]);
            } else if k > 1 {
                diagonal += self.sticks[k - 2] * (-flow).max(0.0);
            }
        }
        let rest = diagonal + shut + wall_slope;
        let rest = if self.unknown > 0.0 { rest } else { 1.0 };
        ((r - diagonal * self.here) * self.unknown, rest, coefficients)
    }
}

/// Residual [N] (net force less net momentum outflow) and implicit coefficients [kg/s] of row j of
/// the x-momentum equation: `emit(i, residual, coefficients)` for i = 0..=nx.
#[inline(always)]
pub(crate) fn x_row(
    level: &Level,
    state: &State,
    rhs: &[f64],
    j: usize,
    emit: impl FnMut(usize, f64, Coefficients),
) {
    let row = XRow::new(level, state, rhs, j);
    with_constants!(level.convection, j > 0, j + 1 < level.ny, row.run(emit));
}

/// A row of x-faces; where there is no row below (above), this one stands for it, unused.
struct XRow<'a> {
    level: &'a Level,
    j: usize,
    density: f64,
    height: f64,
    lift: f64,
    weights: [f64; 2],
    x_area: &'a [f64],
    u_area: &'a [f64],
    y_area: &'a [f64],
    u: [&'a [f64]; 3],
    open: [&'a [f64]; 3],
    v_low: &'a [f64],
    v_high: &'a [f64],
    p: &'a [f64],
    t: &'a [f64],
    along: &'a [f64],
    across_low: &'a [f64],
    across_high: &'a [f64],
    wall: &'a [f64],
    rhs: &'a [f64],
}

impl<'a> XRow<'a> {
    #[inline(always)]
    fn new(level: &'a Level, state: &'a State, rhs: &'a [f64], j: usize) -> XRow<'a> {
        let (nx, ny) = (level.nx, level.ny);
        let faces = |j: usize| j * (nx + 1)..(j + 1) * (nx + 1);
        let cells = |j: usize| j * nx..(j + 1) * nx;
        let rows = [j.saturating_sub(1), j, (j + 1).min(ny - 1)];
        XRow {
            level,
            j,
            density: level.air.density,
            height: level.dy[j],
            lift: -level.air.density * level.air.expansion * level.gravity[0] * level.dy[j],
            weights: [1.0 - level.y_weight[j], level.y_weight[j + 1]],
            x_area: &level.x_area[..nx + 1],
            u_area: &level.u_area[..nx + 1],
            y_area: &level.y_area[..nx],
            u: rows.map(|j| &state.u[faces(j)]),
            open: rows.map(|j| &level.u_open[faces(j)]),
            v_low: &state.v[cells(j)],
            v_high: &state.v[cells(j + 1)],
            p: &state.p[cells(j)],
            t: &state.t[cells(j)],
            along: &level.u_along[cells(j)],
            across_low: &level.u_across[faces(j)],
            across_high: &level.u_across[faces(j + 1)],
            wall: &level.u_wall[faces(j)],
            rhs: &rhs[faces(j)],
        }
    }

    #[inline(always)]
    fn run<const CENTRAL: bool, const LOW: bool, const HIGH: bool>(
        &self,
        mut emit: impl FnMut(usize, f64, Coefficients),
    ) {
        along_row!(self.face::<CENTRAL, LOW, HIGH>, self.y_area.len(), emit);
    }

    #[inline(always)]
    fn face<
        const CENTRAL: bool,
        const LOW: bool,
        const HIGH: bool,
        const LEFT: bool,
        const RIGHT: bool,
    >(
        &self,
        i: usize,
    ) -> (f64, Coefficients) {
        let [below, u, above] = self.u;
        let flow = |i: usize| self.density * self.height * self.x_area[i] * u[i];
        let here = u[i];
        let area = self.x_area[i] * self.height;
        let (mut neighbours, mut open) = ([0.0; 4], [1.0; 4]);
        let (mut conductances, mut flows) = ([0.0; 4], [0.0; 4]);
        let (mut force, mut warmth) = (self.rhs[i], 0.0);
        let half = 0.5 * self.density;
        if LEFT {
            (neighbours[0], open[0]) = (u[i - 1], self.open[1][i - 1]);
            conductances[0] = self.along[i - 1];
            flows[0] = -0.5 * (flow(i - 1) + flow(i));
            flows[2] -= half * self.y_area[i - 1] * self.v_low[i - 1];
            flows[3] += half * self.y_area[i - 1] * self.v_high[i - 1];
            force += area * self.p[i - 1];
            warmth += self.t[i - 1];
        }
        if RIGHT {
            (neighbours[1], open[1]) = (u[i + 1], self.open[1][i + 1]);
            conductances[1] = self.along[i];
            flows[1] = 0.5 * (flow(i) + flow(i + 1));
            flows[2] -= half * self.y_area[i] * self.v_low[i];
            flows[3] += half * self.y_area[i] * self.v_high[i];
            force -= area * self.p[i];
            warmth += self.t[i];
        }
        if LOW {
            (neighbours[2], open[2]) = (below[i], self.open[0][i]);
            conductances[2] = self.across_low[i];
        }
        if HIGH {
            (neighbours[3], open[3]) = (above[i], self.open[2][i]);
            conductances[3] = self.across_high[i];
        }
        force += self.lift * self.u_area[i] * if LEFT && RIGHT { 0.5 * warmth } else { warmth };
        let mut slope = 0.0;
        if !(LEFT && RIGHT) {
            let (side, outward) = if LEFT { (1, 1.0) } else { (0, -1.0) };
            let law = [self.level.loss[side][self.j], self.level.drag[side][self.j]];
            let [thrust, stiffness] = opening_force(self.density, area, law, outward, here);
            force += thrust;
            slope = stiffness;
        }
        let volume = Volume {
            here,
            neighbours,
            open,
            conductances,
            flows,
            weights: self.weights,
            wall: self.wall[i],
            sticks: [self.level.sticks[2], self.level.sticks[3]],
            force,
            unknown: self.open[1][i],
        };
        let (r, rest, [w, e, s, n]) =
            volume.equation::<CENTRAL, LEFT, RIGHT, LOW, HIGH>(self.level.slack, slope);
        (r, Coefficients { rest, w, e, s, n })
    }
}

/// As [`x_row`] for the y-momentum equation on the y-faces of line j = 0..=ny, i = 0..nx.
#[inline(always)]
pub(crate) fn y_row(
    level: &Level,
    state: &State,
    rhs: &[f64],
    j: usize,
    emit: impl FnMut(usize, f64, Coefficients),
) {
    let row = YRow::new(level, state, rhs, j);
    with_constants!(level.convection, j > 0, j < level.ny, row.run(emit));
}

/// A line of y-faces with the rows of cells below and above it; where there is none, the other one
/// stands for it, unused.
struct YRow<'a> {
    level: &'a Level,
    density: f64,
    heights: [f64; 2],
    lift: f64,
    x_area: &'a [f64],
    y_area: &'a [f64],
    x_weight: &'a [f64],
    v: [&'a [f64]; 3],
    open: [&'a [f64]; 3],
    u: [&'a [f64]; 2],
    p: [&'a [f64]; 2],
    t: [&'a [f64]; 2],
    along: [&'a [f64]; 2],
    across: &'a [f64],
    wall: &'a [f64],
    loss: &'a [f64],
    drag: &'a [f64],
    rhs: &'a [f64],
}

impl<'a> YRow<'a> {
    #[inline(always)]
    fn new(level: &'a Level, state: &'a State, rhs: &'a [f64], j: usize) -> YRow<'a> {
        let (nx, ny) = (level.nx, level.ny);
        let cells = |j: usize| j * nx..(j + 1) * nx;
        let corners = |j: usize| j * (nx + 1)..(j + 1) * (nx + 1);
        let lines = [j.saturating_sub(1), j, (j + 1).min(ny)];
        let rows = [j.saturating_sub(1), j.min(ny - 1)];
        YRow {
            level,
            density: level.air.density,
            heights: rows.map(|j| level.dy[j]),
            lift: -level.air.density * level.air.expansion * level.gravity[1] * level.v_height[j],
            x_area: &level.x_area[..nx + 1],
            y_area: &level.y_area[..nx],
            x_weight: &level.x_weight[..nx + 1],
            v: lines.map(|j| &state.v[cells(j)]),
            open: lines.map(|j| &level.v_open[cells(j)]),
            u: rows.map(|j| &state.u[corners(j)]),
            p: rows.map(|j| &state.p[cells(j)]),
            t: rows.map(|j| &state.t[cells(j)]),
            along: rows.map(|j| &level.v_along[cells(j)]),
            across: &level.v_across[corners(j)],
            wall: &level.v_wall[cells(j)],
            loss: &level.loss[if j == 0 { 2 } else { 3 }][..nx],
            drag: &level.drag[if j == 0 { 2 } else { 3 }][..nx],
            rhs: &rhs[cells(j)],
        }
    }

    #[inline(always)]
    fn run<const CENTRAL: bool, const LOW: bool, const HIGH: bool>(
        &self,
        mut emit: impl FnMut(usize, f64, Coefficients),
    ) {
        along_row!(self.face::<CENTRAL, LOW, HIGH>, self.y_area.len() - 1, emit);
    }

    #[inline(always)]
    fn face<
        const CENTRAL: bool,
        const LOW: bool,
        const HIGH: bool,
        const LEFT: bool,
        const RIGHT: bool,
    >(
        &self,
        i: usize,
    ) -> (f64, Coefficients) {
        let [below, v, above] = self.v;
        let here = v[i];
        let area = self.y_area[i];
        let (mut neighbours, mut open) = ([0.0; 4], [1.0; 4]);
        let (mut conductances, mut flows) = ([0.0; 4], [0.0; 4]);
        let (mut force, mut warmth) = (self.rhs[i], 0.0);
        let half = 0.5 * self.density;
        let [left, right] = [self.x_area[i], self.x_area[i + 1]];
        if LOW {
            (neighbours[0], open[0]) = (below[i], self.open[0][i]);
            conductances[0] = self.along[0][i];
            flows[0] = -half * area * (below[i] + here);
            flows[2] -= half * self.heights[0] * left * self.u[0][i];
            flows[3] += half * self.heights[0] * right * self.u[0][i + 1];
            force += area * self.p[0][i];
            warmth += self.t[0][i];
        }
        if HIGH {
            (neighbours[1], open[1]) = (above[i], self.open[2][i]);
            conductances[1] = self.along[1][i];
            flows[1] = half * area * (here + above[i]);
            flows[2] -= half * self.heights[1] * left * self.u[1][i];
            flows[3] += half * self.heights[1] * right * self.u[1][i + 1];
            force -= area * self.p[1][i];
            warmth += self.t[1][i];
        }
        if LEFT {
            (neighbours[2], open[2]) = (v[i - 1], self.open[1][i - 1]);
            conductances[2] = self.across[i];
        }
        if RIGHT {
            (neighbours[3], open[3]) = (v[i + 1], self.open[1][i + 1]);
            conductances[3] = self.across[i + 1];
        }
        force += self.lift * area * if LOW && HIGH { 0.5 * warmth } else { warmth };
        let mut slope = 0.0;
        if !(LOW && HIGH) {
            let outward = if LOW { 1.0 } else { -1.0 };
            let law = [self.loss[i], self.drag[i]];
            let [thrust, stiffness] = opening_force(self.density, area, law, outward, here);
            force += thrust;
            slope = stiffness;
        }
        let volume = Volume {
            here,
            neighbours,
            open,
            conductances,
            flows,
            weights: [1.0 - self.x_weight[i], self.x_weight[i + 1]],
            wall: self.wall[i],
            sticks: [self.level.sticks[0], self.level.sticks[1]],
            force,
            unknown: self.open[1][i],
        };
        let (r, rest, [s, n, w, e]) =
            volume.equation::<CENTRAL, LOW, HIGH, LEFT, RIGHT>(self.level.slack, slope);
        (r, Coefficients { rest, w, e, s, n })
    }
}

/// Force of an opening on its half control volume [N] and the size of its slope [kg/s].
///
/// The pressure outside the face is −(1 + K)·ρ₀u_n²/2 for air entering (ambient total pressure
/// through the loss) and +K·ρ₀u_n²/2 for air leaving, and in a vent `drag`·u_n more; all oppose
/// the flow.
#[inline(always)]
fn opening_force(
    density: f64,
    area: f64,
    [loss, drag]: [f64; 2],
    outward: f64,
    speed: f64,
) -> [f64; 2] {
    let factor = if speed * outward < 0.0 { 1.0 + loss } else { loss };
    let slope = factor * density * area * speed.abs();
    let drag = drag * area;
    [-0.5 * slope * speed - drag * speed, slope + drag]
}
