//! A chosen solution with a solid beside the air, and the sources that make it one.
//!
//! The air flows by the stream function A·P(x)·Q(y), whose factors have double zeros on walls:
//! u = A·P·Q′/m, v = −A·P′·Q/m with m = 1 (planar) or m = x (axisymmetric), so that there is no
//! divergence and no slip. Temperature rise c(s) + w(s)·cos(π·t), with s normal to the solid's
//! face and t along it; c and w are continuous at the face, k·c′ and k·w′ too. Pressure
//! cos(πx)·cos(πy) in the air. Sources are integrated over each control volume by Gauss's rule.

use std::f64::consts::PI;

use ventrise_mesh::{AIR, Geometry, Mesh, Rectangle, Side};

use super::lines::{Grading, graded, joined};
use super::{AMBIENT, SampleError, empty_layout, plain, solid};
use crate::{Air, Block, Problem, SideCondition, Sources, State};

/// Manufactured problem in the unit square: the solid fills x < ¼ (`upright`) or y < ¼.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Manufactured {
    /// Axisymmetric instead of planar.
    pub axisymmetric: bool,
    /// Solid beside the left side (the core of an annulus) instead of the floor.
    pub upright: bool,
    /// Cells along each side, a multiple of 4.
    pub cells: usize,
    /// Strength of the grading in solid and air, zero for equal cells.
    pub strength: f64,
}

/// Root-mean-square differences from the exact fields over volume, relative to the exact
/// root mean square. Pressure after taking out the means.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FieldErrors {
    /// Of u.
    pub u: f64,
    /// Of v.
    pub v: f64,
    /// Of pressure.
    pub p: f64,
    /// Of temperature rise.
    pub t: f64,
}

/// The solid's face.
const FACE: f64 = 0.25;
/// Conductivity of solid over that of air.
const RATIO: f64 = 5.0;
const RHO: f64 = 1.3;
const CP: f64 = 0.9;
const MU: f64 = 0.06;
const K: f64 = 0.08;
const BETA: f64 = 0.7;
const GRAVITY: f64 = 2.0;
/// Highest stream function, about.
const STRENGTH: f64 = 0.3;

/// Value and derivatives of a function of one variable, up to the third.
type Jet = [f64; 4];

fn polynomial(coefficients: &[f64], x: f64) -> Jet {
    let mut jet = [0.0; 4];
    for (n, derivative) in jet.iter_mut().enumerate() {
        for (power, c) in coefficients.iter().enumerate().skip(n) {
            let factor: f64 = (power + 1 - n..=power).map(|f| f as f64).product();
            *derivative += c * factor * x.powi((power - n) as i32);
        }
    }
    jet
}

fn product(f: Jet, g: Jet) -> Jet {
    [
        f[0] * g[0],
        f[1] * g[0] + f[0] * g[1],
        f[2] * g[0] + 2.0 * f[1] * g[1] + f[0] * g[2],
        f[3] * g[0] + 3.0 * (f[2] * g[1] + f[1] * g[2]) + f[0] * g[3],
    ]
}

fn scaled(f: Jet, by: f64) -> Jet {
    f.map(|d| by * d)
}

/// ((x − a)·(1 − x))² scaled to a highest value of one.
fn between(a: f64, x: f64) -> Jet {
    let hump = product([x - a, 1.0, 0.0, 0.0], [1.0 - x, -1.0, 0.0, 0.0]);
    scaled(product(hump, hump), (2.0 / (1.0 - a)).powi(4))
}

/// cos(π·t) with derivatives.
fn cosine(t: f64) -> Jet {
    let (sin, cos) = (PI * t).sin_cos();
    [cos, -PI * sin, -PI * PI * cos, PI.powi(3) * sin]
}

impl Manufactured {
    /// The problem with its sources.
    ///
    /// # Errors
    /// Numbers out of range.
    pub fn problem(&self) -> Result<Problem, SampleError> {
        let geometry = if self.axisymmetric {
            Geometry::Axisymmetric
        } else {
            Geometry::Planar { depth: 1.0 }
        };
        let mut layout = empty_layout(geometry, 1.0, 1.0);
        let grading =
            if self.strength > 0.0 { Grading::Both(self.strength) } else { Grading::Uniform };
        let across = joined(&[
            graded(0.0, FACE, self.cells / 4, grading),
            graded(FACE, 1.0, 3 * self.cells / 4, grading),
        ]);
        let along = graded(0.0, 1.0, self.cells, grading);
        let (x, y) = if self.upright {
            layout.blocks.push(Rectangle { x: [0.0, FACE], y: [0.0, 1.0] });
            (across, along)
        } else {
            layout.blocks.push(Rectangle { x: [0.0, 1.0], y: [0.0, FACE] });
            (along, across)
        };
        let air = Air {
            density: RHO,
            viscosity: MU,
            conductivity: K,
            specific_heat: CP,
            expansion: BETA,
        };
        let mut d = plain(&layout, x, y, air)?;
        d.gravity = [0.0, -GRAVITY];
        d.solids.push(solid(RATIO * K));
        d.blocks.push(Block { solid: 0, heat: 0.0 });
        let warm = if self.upright { Side::Right } else { Side::Top };
        d.sides[warm.index()] = SideCondition::Temperature(AMBIENT + self.c(1.0)[0]);
        d.sources = Some(self.sources(&d.mesh));
        Ok(Problem::new(d)?)
    }

    /// The exact fields at faces and cell centres.
    pub fn exact(&self, mesh: &Mesh) -> State {
        let (nx, ny) = (mesh.nx(), mesh.ny());
        let mut state = State::rest(mesh);
        for j in 0..ny {
            for i in 0..=nx {
                state.u[i + j * (nx + 1)] = self.u(mesh.x()[i], mesh.y_centre(j))[0];
            }
        }
        for j in 0..=ny {
            for i in 0..nx {
                state.v[i + j * nx] = self.v(mesh.x_centre(i), mesh.y()[j])[0];
            }
        }
        for j in 0..ny {
            for i in 0..nx {
                let (x, y) = (mesh.x_centre(i), mesh.y_centre(j));
                let cell = mesh.cell(i, j);
                state.t[cell] = self.t(x, y)[0];
                if mesh.regions()[cell] == AIR {
                    state.p[cell] = self.p(x, y)[0];
                }
            }
        }
        state
    }

    /// Differences of a state from the exact fields.
    pub fn errors(&self, problem: &Problem, state: &State) -> FieldErrors {
        let mesh = problem.mesh();
        let exact = self.exact(mesh);
        let (nx, ny) = (mesh.nx(), mesh.ny());
        let mut u = Norm::default();
        let mut v = Norm::default();
        let mut t = Norm::default();
        let mut p = Norm::default();
        let mut mean = [0.0; 3];
        for j in 0..ny {
            for i in 0..nx {
                let (cell, volume) = (mesh.cell(i, j), mesh.volume(i, j));
                let x_face = i + j * (nx + 1);
                u.add(volume, state.u[x_face], exact.u[x_face]);
                v.add(volume, state.v[cell], exact.v[cell]);
                t.add(volume, state.t[cell], exact.t[cell]);
                if mesh.regions()[cell] == AIR {
                    mean[0] += volume;
                    mean[1] += volume * state.p[cell];
                    mean[2] += volume * exact.p[cell];
                }
            }
        }
        for cell in (0..nx * ny).filter(|c| mesh.regions()[*c] == AIR) {
            let volume = mesh.volume(cell % nx, cell / nx);
            p.add(volume, state.p[cell] - mean[1] / mean[0], exact.p[cell] - mean[2] / mean[0]);
        }
        FieldErrors { u: u.ratio(), v: v.ratio(), p: p.ratio(), t: t.ratio() }
    }

    fn is_air(&self, x: f64, y: f64) -> bool {
        if self.upright { x > FACE } else { y > FACE }
    }

    /// P(x): double zeros on the walls; on an axis even with a double zero.
    fn across(&self, x: f64) -> Jet {
        if self.upright {
            between(FACE, x)
        } else if self.axisymmetric {
            // 6.75·x²·(1 − x²)² = 6.75·(x² − 2x⁴ + x⁶), highest value one.
            scaled(polynomial(&[0.0, 0.0, 1.0, 0.0, -2.0, 0.0, 1.0], x), 6.75)
        } else {
            product(between(0.0, x), [1.0 + 0.4 * x, 0.4, 0.0, 0.0])
        }
    }

    /// Q(y): double zeros on the walls.
    fn upward(&self, y: f64) -> Jet {
        let from = if self.upright { 0.0 } else { FACE };
        product(between(from, y), [0.7 + 0.6 * y, 0.6, 0.0, 0.0])
    }

    /// u, u_x, u_y, u_xx, u_yy.
    fn u(&self, x: f64, y: f64) -> [f64; 5] {
        if !self.is_air(x, y) {
            return [0.0; 5];
        }
        let p = self.over_metric(self.across(x), x);
        let q = scaled(self.upward(y), STRENGTH);
        [p[0] * q[1], p[1] * q[1], p[0] * q[2], p[2] * q[1], p[0] * q[3]]
    }

    /// v, v_x, v_y, v_xx, v_yy.
    fn v(&self, x: f64, y: f64) -> [f64; 5] {
        if !self.is_air(x, y) {
            return [0.0; 5];
        }
        let f = self.across(x);
        // The third derivative of the quotient is not needed.
        let p = self.over_metric([f[1], f[2], f[3], 0.0], x);
        let q = scaled(self.upward(y), -STRENGTH);
        [p[0] * q[0], p[1] * q[0], p[0] * q[1], p[2] * q[0], p[0] * q[2]]
    }

    /// A function over m with its first two derivatives.
    fn over_metric(&self, f: Jet, x: f64) -> [f64; 3] {
        if !self.axisymmetric {
            return [f[0], f[1], f[2]];
        }
        if x == 0.0 {
            // Only asked for on the axis itself, where u = 0; derivatives are not used there.
            return [0.0; 3];
        }
        [
            f[0] / x,
            f[1] / x - f[0] / (x * x),
            f[2] / x - 2.0 * f[1] / (x * x) + 2.0 * f[0] / x.powi(3),
        ]
    }

    /// p, p_x, p_y.
    fn p(&self, x: f64, y: f64) -> [f64; 3] {
        let (a, b) = (cosine(x), cosine(y));
        [a[0] * b[0], a[1] * b[0], a[0] * b[1]]
    }

    /// c(s) with derivatives.
    fn c(&self, s: f64) -> Jet {
        beside_face(|s| polynomial(&[0.5, 1.1, -0.8, -0.3], s), s)
    }

    /// w(s) with derivatives, zero on the warm side s = 1.
    fn w(&self, s: f64) -> Jet {
        beside_face(|s| product([1.0 - s, -1.0, 0.0, 0.0], [0.3 + s, 1.0, 0.0, 0.0]), s)
    }

    /// T, T_x, T_y, T_xx, T_yy.
    fn t(&self, x: f64, y: f64) -> [f64; 5] {
        let (s, along) = if self.upright { (x, y) } else { (y, x) };
        let (c, w, wave) = (self.c(s), self.w(s), cosine(along));
        let normal: [f64; 3] = std::array::from_fn(|n| c[n] + w[n] * wave[0]);
        let tangential = [w[0] * wave[1], w[0] * wave[2]];
        if self.upright {
            [normal[0], normal[1], tangential[0], normal[2], tangential[1]]
        } else {
            [normal[0], tangential[0], normal[1], tangential[1], normal[2]]
        }
    }

    /// 1/x, zero when planar.
    fn curvature(&self, x: f64) -> f64 {
        if self.axisymmetric { 1.0 / x } else { 0.0 }
    }

    /// Force per volume along x: ρ(u·∇)u + p_x − μ(u_xx + u_x/x + u_yy − u/x²).
    fn x_force(&self, x: f64, y: f64) -> f64 {
        let (u, v, curvature) = (self.u(x, y), self.v(x, y), self.curvature(x));
        let viscous = u[3] + curvature * u[1] + u[4] - curvature * curvature * u[0];
        RHO * (u[0] * u[1] + v[0] * u[2]) + self.p(x, y)[1] - MU * viscous
    }

    /// Force per volume along y: ρ(u·∇)v + p_y − μ(v_xx + v_x/x + v_yy) − ρ·β·T·g.
    fn y_force(&self, x: f64, y: f64) -> f64 {
        let (u, v, curvature) = (self.u(x, y), self.v(x, y), self.curvature(x));
        let viscous = v[3] + curvature * v[1] + v[4];
        RHO * (u[0] * v[1] + v[0] * v[2]) + self.p(x, y)[2]
            - MU * viscous
            - RHO * BETA * GRAVITY * self.t(x, y)[0]
    }

    /// Heat per volume: ρ·c_p·u·∇T − k(T_xx + T_x/x + T_yy).
    fn heat(&self, x: f64, y: f64) -> f64 {
        let (u, v, t) = (self.u(x, y), self.v(x, y), self.t(x, y));
        let k = if self.is_air(x, y) { K } else { RATIO * K };
        let conduction = t[3] + self.curvature(x) * t[1] + t[4];
        RHO * CP * (u[0] * t[1] + v[0] * t[2]) - k * conduction
    }

    /// Integrals over the control volumes: cells, and between the centres on either side of a
    /// face (half of that at the section's edge).
    fn sources(&self, mesh: &Mesh) -> Sources {
        let (nx, ny) = (mesh.nx(), mesh.ny());
        let x_bounds = |i: usize| [mesh.x()[i], mesh.x()[i + 1]];
        let y_bounds = |j: usize| [mesh.y()[j], mesh.y()[j + 1]];
        let x_between = |i: usize| {
            let from = if i == 0 { mesh.x()[0] } else { mesh.x_centre(i - 1) };
            [from, if i == nx { mesh.x()[nx] } else { mesh.x_centre(i) }]
        };
        let y_between = |j: usize| {
            let from = if j == 0 { mesh.y()[0] } else { mesh.y_centre(j - 1) };
            [from, if j == ny { mesh.y()[ny] } else { mesh.y_centre(j) }]
        };
        let integral = |f: &dyn Fn(f64, f64) -> f64, x: [f64; 2], y: [f64; 2]| {
            let weighted = |x: f64, y: f64| mesh.x_area_at(x) * f(x, y);
            gauss(x, |x| gauss(y, |y| weighted(x, y)))
        };
        let mut sources = Sources { x_force: Vec::new(), y_force: Vec::new(), heat: Vec::new() };
        for j in 0..ny {
            for i in 0..=nx {
                let air = self.is_air(mesh.x()[i], mesh.y_centre(j));
                let f = |x: f64, y: f64| self.x_force(x, y);
                sources.x_force.push(if air {
                    integral(&f, x_between(i), y_bounds(j))
                } else {
                    0.0
                });
            }
        }
        for j in 0..=ny {
            for i in 0..nx {
                let air = self.is_air(mesh.x_centre(i), mesh.y()[j]);
                let f = |x: f64, y: f64| self.y_force(x, y);
                sources.y_force.push(if air {
                    integral(&f, x_bounds(i), y_between(j))
                } else {
                    0.0
                });
            }
        }
        for j in 0..ny {
            for i in 0..nx {
                sources.heat.push(integral(&|x, y| self.heat(x, y), x_bounds(i), y_bounds(j)));
            }
        }
        sources
    }
}

/// In the air the given function; in the solid the even parabola that continues it with the flux
/// k·f′, plus (s² − FACE²)², which changes neither.
fn beside_face(in_air: impl Fn(f64) -> Jet, s: f64) -> Jet {
    if s >= FACE {
        return in_air(s);
    }
    let at_face = in_air(FACE);
    let curve = at_face[1] / RATIO / (2.0 * FACE);
    let f2 = FACE * FACE;
    let bump = 8.0;
    let value = at_face[0] - curve * f2;
    polynomial(&[value + bump * f2 * f2, 0.0, curve - 2.0 * bump * f2, 0.0, bump], s)
}

/// Gauss's rule with four points.
fn gauss(bounds: [f64; 2], f: impl Fn(f64) -> f64) -> f64 {
    // Roots and weights of the Legendre polynomial of fourth degree.
    let inner = (3.0 / 7.0 - 2.0 / 7.0 * 1.2_f64.sqrt()).sqrt();
    let outer = (3.0 / 7.0 + 2.0 / 7.0 * 1.2_f64.sqrt()).sqrt();
    let [inner_weight, outer_weight] = [0.5 + 30f64.sqrt() / 36.0, 0.5 - 30f64.sqrt() / 36.0];
    let (centre, half) = (0.5 * (bounds[0] + bounds[1]), 0.5 * (bounds[1] - bounds[0]));
    half * (inner_weight * (f(centre - half * inner) + f(centre + half * inner))
        + outer_weight * (f(centre - half * outer) + f(centre + half * outer)))
}

/// Weighted sums of squares.
#[derive(Default)]
struct Norm {
    difference: f64,
    exact: f64,
}

impl Norm {
    fn add(&mut self, weight: f64, value: f64, exact: f64) {
        self.difference += weight * (value - exact).powi(2);
        self.exact += weight * exact.powi(2);
    }

    fn ratio(&self) -> f64 {
        (self.difference / self.exact).sqrt()
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    const ALL: [[bool; 2]; 4] = [[false, false], [false, true], [true, false], [true, true]];

    fn case([axisymmetric, upright]: [bool; 2]) -> Manufactured {
        Manufactured { axisymmetric, upright, cells: 16, strength: 0.0 }
    }

    /// Central differences of step h agree with the derivatives to h².
    #[test]
    fn derivatives_match_differences() {
        let h = 1e-4;
        for m in ALL.map(case) {
            for (x, y) in [(0.41, 0.62), (0.77, 0.35), (0.13, 0.19)] {
                let check = |f: &dyn Fn(f64, f64) -> [f64; 5], name: &str| {
                    let c = f(x, y);
                    let [w, e, s, n] =
                        [f(x - h, y), f(x + h, y), f(x, y - h), f(x, y + h)].map(|f| f[0]);
                    let numbers = [
                        (e - w) / (2.0 * h),
                        (n - s) / (2.0 * h),
                        (e - 2.0 * c[0] + w) / (h * h),
                        (n - 2.0 * c[0] + s) / (h * h),
                    ];
                    for (number, exact) in numbers.iter().zip(&c[1..]) {
                        assert!((number - exact).abs() < 1e-4, "{name} {m:?}: {number} {exact}");
                    }
                };
                check(&|x, y| m.u(x, y), "u");
                check(&|x, y| m.v(x, y), "v");
                check(&|x, y| m.t(x, y), "t");
            }
        }
    }

    #[test]
    fn flow_has_no_divergence_and_does_not_slip() {
        for m in ALL.map(case) {
            for (x, y) in [(0.31, 0.62), (0.9, 0.35), (0.5, 0.99)] {
                let (u, v) = (m.u(x, y), m.v(x, y));
                let divergence = u[1] + m.curvature(x) * u[0] + v[2];
                assert!(divergence.abs() < 1e-12, "{m:?}");
            }
            let near = 1e-12;
            let left = if m.upright { FACE + near } else { near };
            let floor = if m.upright { near } else { FACE + near };
            for t in [0.35, 0.6, 0.8] {
                for (x, y) in [(left, t), (1.0 - near, t), (t, floor), (t, 1.0 - near)] {
                    let is_axis = m.axisymmetric && !m.upright && x < 0.1;
                    assert!(m.u(x, y)[0].abs() < 1e-9, "{m:?} u at {x} {y}");
                    assert!(is_axis || m.v(x, y)[0].abs() < 1e-9, "{m:?} v at {x} {y}");
                }
            }
        }
    }

    #[test]
    fn temperature_and_flux_continue_through_the_face() {
        for m in ALL.map(case) {
            for along in [0.2, 0.55, 0.9] {
                let at = |s: f64| if m.upright { m.t(s, along) } else { m.t(along, s) };
                let (solid, air) = (at(FACE - 1e-13), at(FACE));
                let normal = if m.upright { 1 } else { 2 };
                assert!((solid[0] - air[0]).abs() < 1e-11);
                assert!((RATIO * solid[normal] - air[normal]).abs() < 1e-11);
                assert!(at(0.0)[normal].abs() < 1e-12 && at(1.0)[0] == at(1.0)[0]);
            }
        }
    }

    /// Heat sources sum to what leaves through the warm side: everything else is closed.
    #[test]
    fn sources_balance_the_warm_side() {
        for m in ALL.map(case) {
            let problem = m.problem().unwrap();
            let sum: f64 = problem.description().sources.as_ref().unwrap().heat.iter().sum();
            let mesh = problem.mesh();
            let flux = |t: f64| {
                if m.upright {
                    -K * m.t(1.0, t)[1] * mesh.x_area_at(1.0)
                } else {
                    -K * m.t(t, 1.0)[2] * mesh.x_area_at(t)
                }
            };
            let parts = (0..16).map(|n| f64::from(n) / 16.0);
            let out: f64 = parts.map(|from| gauss([from, from + 1.0 / 16.0], flux)).sum();
            assert!((sum - out).abs() < 1e-9 * (1.0 + out.abs()), "{m:?}: {sum} {out}");
        }
    }

    #[test]
    fn the_exact_state_has_no_error() {
        let m = case([true, true]);
        let problem = m.problem().unwrap();
        let mut state = m.exact(problem.mesh());
        for p in &mut state.p {
            *p += 3.0;
        }
        let errors = m.errors(&problem, &state);
        assert!(errors.u == 0.0 && errors.v == 0.0 && errors.t == 0.0 && errors.p < 1e-14);
    }
}
