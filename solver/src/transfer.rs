//! Between a mesh and the next coarser one: restriction of states and residuals, prolongation of
//! corrections.
//!
//! Coarse lines are fine lines, so a coarse face is a row of fine faces and keeps their flow.
//! Residuals are integrals: those of cells add; those of a fine face between two coarse faces are
//! shared by distance. Corrections are interpolated linearly, for temperatures by thermal
//! resistance (exact across interfaces), for pressures only among air cells, for velocities with
//! zero at walls.

use ventrise_mesh::{Coarsening, Mesh, Side};

use crate::level::Level;
use crate::linear::multigrid::Link;
use crate::{State, par};

/// Where a fine position lies along one axis: coarse index, the neighbour it leans to (if any),
/// its distance from the coarse centre towards it, and that centre's distance to the face.
#[derive(Debug, Clone, Copy)]
struct Lean {
    parent: usize,
    /// Whether it leans to lower indices.
    back: bool,
    other: Option<usize>,
    offset: f64,
    half: f64,
    other_half: f64,
}

impl Lean {
    /// The side it leans to at the section's edge, of [before the first, behind the last].
    fn side(&self, sides: [Side; 2]) -> Side {
        sides[usize::from(!self.back)]
    }
}

/// A fine line between coarse lines `left` and `left + 1`, `share` of the way to the latter.
#[derive(Debug, Clone, Copy)]
struct Between {
    left: usize,
    share: f64,
}

/// The maps between two meshes.
#[derive(Debug)]
pub(crate) struct Transfer {
    pub link: Link,
    x: Vec<Lean>,
    y: Vec<Lean>,
    x_lines: Vec<Between>,
    y_lines: Vec<Between>,
}

impl Transfer {
    pub fn new(fine: &Mesh, coarsening: &Coarsening) -> Transfer {
        let coarse = &coarsening.mesh;
        Transfer {
            link: Link::new(fine, coarsening),
            x: leans(fine.x(), coarse.x(), &coarsening.x_parent),
            y: leans(fine.y(), coarse.y(), &coarsening.y_parent),
            x_lines: betweens(fine.x(), coarse.x()),
            y_lines: betweens(fine.y(), coarse.y()),
        }
    }

    /// Coarse state: cell means by volume, face means by area.
    pub fn restrict_state(&self, fine: &Level, coarse: &Level, from: &State, to: &mut State) {
        let l = &self.link;
        let (nx, cx) = (fine.nx, coarse.nx);
        for (from, to) in [(&from.p, &mut to.p), (&from.t, &mut to.t)] {
            par::each_row(to, cx, |jc, out| {
                out.fill(0.0);
                for j in l.y_first[jc]..l.y_first[jc + 1] {
                    for i in 0..nx {
                        out[l.x_parent[i]] += fine.y_area[i] * fine.dy[j] * from[i + j * nx];
                    }
                }
                for (ic, o) in out.iter_mut().enumerate() {
                    *o /= coarse.y_area[ic] * coarse.dy[jc];
                }
            });
        }
        par::each_row(&mut to.u, cx + 1, |jc, out| {
            out.fill(0.0);
            for j in l.y_first[jc]..l.y_first[jc + 1] {
                let share = fine.dy[j] / coarse.dy[jc];
                for (ic, o) in out.iter_mut().enumerate() {
                    *o += share * from.u[l.x_first[ic] + j * (nx + 1)];
                }
            }
        });
        par::each_row(&mut to.v, cx, |jc, out| {
            out.fill(0.0);
            let j = l.y_first[jc];
            for i in 0..nx {
                let ic = l.x_parent[i];
                out[ic] += fine.y_area[i] / coarse.y_area[ic] * from.v[i + j * nx];
            }
        });
    }

    /// Coarse residual of a fine one; closed coarse faces get none.
    pub fn restrict_residual(&self, fine: &Level, coarse: &Level, from: &State, to: &mut State) {
        let l = &self.link;
        let (nx, cx) = (fine.nx, coarse.nx);
        l.restrict_sum(&from.p, &mut to.p);
        l.restrict_sum(&from.t, &mut to.t);
        par::each_row(&mut to.u, cx + 1, |jc, out| {
            out.fill(0.0);
            for j in l.y_first[jc]..l.y_first[jc + 1] {
                for (i, b) in self.x_lines.iter().enumerate() {
                    let r = from.u[i + j * (nx + 1)];
                    out[b.left] += (1.0 - b.share) * r;
                    if b.share > 0.0 {
                        out[b.left + 1] += b.share * r;
                    }
                }
            }
            let open = &coarse.u_open[jc * (cx + 1)..];
            out.iter_mut().zip(open).for_each(|(o, open)| *o *= open);
        });
        let fine_rows = |jc: usize| {
            let from = if jc > 0 { l.y_first[jc - 1] + 1 } else { 0 };
            let to = if jc < coarse.ny { l.y_first[jc + 1] } else { fine.ny + 1 };
            from..to
        };
        par::each_row(&mut to.v, cx, |jc, out| {
            out.fill(0.0);
            for j in fine_rows(jc) {
                let b = self.y_lines[j];
                let share = if b.left == jc { 1.0 - b.share } else { b.share };
                for i in 0..nx {
                    out[l.x_parent[i]] += share * from.v[i + j * nx];
                }
            }
            let open = &coarse.v_open[jc * cx..];
            out.iter_mut().zip(open).for_each(|(o, open)| *o *= open);
        });
    }

    /// Adds the interpolated coarse state (`whole`) or change of a state to a fine one.
    pub fn prolong(&self, fine: &Level, coarse: &Level, from: &State, to: &mut State, whole: bool) {
        let (nx, cx) = (fine.nx, coarse.nx);
        // At the section's edge a temperature leans to what lies outside, its change to none.
        let outside = |side: Side, n: usize| {
            let edge = coarse.edges[side.index()][n];
            (edge.share, if whole { edge.rise } else { 0.0 })
        };
        par::each_row(&mut to.t, nx, |j, row| {
            let y = self.y[j];
            for (i, t) in row.iter_mut().enumerate() {
                let x = self.x[i];
                let k = |n: usize, axis: usize| f64::from(coarse.conductivity[n][axis]);
                let edges = [
                    outside(x.side([Side::Left, Side::Right]), y.parent),
                    outside(y.side([Side::Bottom, Side::Top]), x.parent),
                ];
                *t += cell_value(&from.t, cx, x, y, k, edges);
            }
        });
        par::each_row(&mut to.p, nx, |j, row| {
            let y = self.y[j];
            for (i, p) in row.iter_mut().enumerate() {
                if fine.fluid[i + j * nx] {
                    let k = |n: usize, _| if coarse.fluid[n] { 1.0 } else { 0.0 };
                    *p += cell_value(&from.p, cx, self.x[i], y, k, [(0.0, 0.0); 2]);
                }
            }
        });
        par::each_row(&mut to.u, nx + 1, |j, row| {
            let y = self.y[j];
            let value = |ic: usize| {
                let at = |jc: usize| ic + jc * (cx + 1);
                across(
                    &from.u,
                    at(y.parent),
                    y,
                    y.other.map(at),
                    |n| coarse.u_open[n] > 0.0,
                    || coarse.u_wall[at(y.parent)] > 0.0,
                )
            };
            for (i, u) in row.iter_mut().enumerate() {
                if fine.u_open[i + j * (nx + 1)] > 0.0 {
                    *u += blend(self.x_lines[i], value);
                }
            }
        });
        par::each_row(&mut to.v, nx, |j, row| {
            let b = self.y_lines[j];
            for (i, v) in row.iter_mut().enumerate() {
                if fine.v_open[i + j * nx] == 0.0 {
                    continue;
                }
                let x = self.x[i];
                let value = |jc: usize| {
                    let at = |ic: usize| ic + jc * cx;
                    across(
                        &from.v,
                        at(x.parent),
                        x,
                        x.other.map(at),
                        |n| coarse.v_open[n] > 0.0,
                        || coarse.v_wall[at(x.parent)] > 0.0,
                    )
                };
                *v += blend(b, value);
            }
        });
    }
}

/// Value between two coarse lines.
fn blend(b: Between, value: impl Fn(usize) -> f64) -> f64 {
    let left = if b.share < 1.0 { (1.0 - b.share) * value(b.left) } else { 0.0 };
    if b.share > 0.0 { left + b.share * value(b.left + 1) } else { left }
}

/// Velocity interpolated across its direction: to the neighbour, or to zero at a wall.
fn across(
    c: &[f64],
    here: usize,
    lean: Lean,
    other: Option<usize>,
    open: impl Fn(usize) -> bool,
    wall: impl Fn() -> bool,
) -> f64 {
    match other.filter(|o| open(*o)) {
        Some(o) => {
            let w = lean.offset / (lean.half + lean.other_half);
            (1.0 - w) * c[here] + w * c[o]
        }
        None if wall() => c[here] * (1.0 - lean.offset / lean.half),
        None => c[here],
    }
}

/// Cell value interpolated by resistance along both axes; conductivity `k(cell, axis)`, zero where
/// there is no value. Beyond the section's edge along x and y: `edges`, each the half cell's share
/// of the resistance and the value outside.
fn cell_value(
    c: &[f64],
    cx: usize,
    x: Lean,
    y: Lean,
    k: impl Fn(usize, usize) -> f64,
    edges: [(f64, f64); 2],
) -> f64 {
    let here = x.parent + y.parent * cx;
    let weight = |lean: Lean, other: Option<usize>, axis: usize| {
        let Some(other) = other else { return lean.offset / lean.half * edges[axis].0 };
        let (k0, k1) = (k(here, axis), k(other, axis));
        if k0 == 0.0 || k1 == 0.0 {
            return 0.0;
        }
        lean.offset / (lean.half + lean.other_half * k0 / k1)
    };
    let beside = x.other.map(|o| o + y.parent * cx);
    let above = y.other.map(|o| x.parent + o * cx);
    let (wx, wy) = (weight(x, beside, 0), weight(y, above, 1));
    let along = |here: f64, beside: f64| (1.0 - wx) * here + wx * beside;
    let row = along(c[here], beside.map_or(edges[0].1, |n| c[n]));
    if wy == 0.0 {
        return row;
    }
    let next = match (above, beside) {
        (None, _) => edges[1].1,
        (Some(above), None) => along(c[above], edges[0].1),
        (Some(above), Some(beside)) => {
            let far = above + beside - here;
            along(c[above], c[if k(far, 0) == 0.0 { here } else { far }])
        }
    };
    (1.0 - wy) * row + wy * next
}

fn leans(fine: &[f64], coarse: &[f64], parent: &[usize]) -> Vec<Lean> {
    let count = coarse.len() - 1;
    let half = |c: usize| 0.5 * (coarse[c + 1] - coarse[c]);
    parent
        .iter()
        .enumerate()
        .map(|(f, p)| {
            let offset = 0.5 * (fine[f] + fine[f + 1]) - 0.5 * (coarse[*p] + coarse[p + 1]);
            let other =
                if offset > 0.0 { (p + 1 < count).then_some(p + 1) } else { p.checked_sub(1) };
            Lean {
                parent: *p,
                back: offset <= 0.0,
                other,
                offset: offset.abs(),
                half: half(*p),
                other_half: other.map_or(0.0, half),
            }
        })
        .collect()
}

fn betweens(fine: &[f64], coarse: &[f64]) -> Vec<Between> {
    let last = coarse.len() - 1;
    fine.iter()
        .map(|x| {
            let left = coarse.partition_point(|c| c <= x).saturating_sub(1).min(last);
            if coarse[left] == *x || left == last {
                return Between { left, share: 0.0 };
            }
            Between { left, share: (x - coarse[left]) / (coarse[left + 1] - coarse[left]) }
        })
        .collect()
}
