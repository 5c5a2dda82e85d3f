//! Steps in time: second-order backward differences, each step solved by SIMPLEC iterations.
//!
//! M·(3xⁿ⁺¹ − 4xⁿ + xⁿ⁻¹)/(2Δt) = r(xⁿ⁺¹), M the inertia of the air and the heat capacity of air and
//! blocks. The term in xⁿ⁺¹ stands like a wall (for temperatures like a film) on every unknown, the
//! others on the right-hand side, so that the steady equations serve unchanged.

use ventrise_mesh::AIR;

use crate::following::Following;
use crate::level::Level;
use crate::linear::multigrid::Link;
use crate::simplec::{self, Smoothing, Work};
use crate::{Air, Convection, Problem, State, residual};

/// Iterations of a step: the time term leaves little to damp.
const STEP: Smoothing = Smoothing {
    velocity: 0.85,
    temperature: 1.0,
    sweeps: 1,
    pressure: (0.05, 4),
    ..Smoothing::STANDARD
};
/// Iterations of a step, at the least and at the most.
const ITERATIONS: [usize; 2] = [2, 12];
/// Change in an iteration that ends a step, as a share of the largest speed.
const STEP_BOUND: f64 = 1e-3;

/// A run in time on one mesh with steps of one length.
pub(crate) struct Transient {
    level: Level,
    work: Work,
    /// Inertia [kg] and heat capacity [J/K] over Δt; none for pressures.
    rate: State,
    now: State,
    before: State,
    /// The block of every cell, and what a uniform rise of a block costs [W/K].
    regions: Vec<u32>,
    stiffness: Vec<f64>,
}

impl Transient {
    /// From a state at rest in time, with steps of `step` [s].
    pub fn new(problem: &Problem, air: &Air, scheme: Convection, start: &State, step: f64) -> Self {
        let mut level = Level::with(problem, air, scheme, Following::at(problem, air, start));
        let (nx, ny) = (level.nx, level.ny);
        let density = air.density / step;
        let mut rate = start.clone();
        rate.clear();
        for j in 0..ny {
            for i in 0..=nx {
                rate.u[i + j * (nx + 1)] = density * level.u_area[i] * level.dy[j];
            }
        }
        for j in 0..=ny {
            for i in 0..nx {
                rate.v[i + j * nx] = density * level.y_area[i] * level.v_height[j];
            }
        }
        rate.t.iter_mut().zip(&level.heat_capacity).for_each(|(r, c)| *r = c / step);
        let stiffen = |diagonal: &mut [f64], rate: &[f64]| {
            diagonal.iter_mut().zip(rate).for_each(|(d, r)| *d += 1.5 * r);
        };
        stiffen(&mut level.u_wall, &rate.u);
        stiffen(&mut level.v_wall, &rate.v);
        stiffen(&mut level.side_conductance, &rate.t);
        let regions = problem.mesh().regions().to_vec();
        let stiffness = stiffness(&level, &regions, problem.description().blocks.len());
        let mut links = Vec::new();
        let mut mesh = problem.mesh().clone();
        while let Some(coarsening) = mesh.coarsened(1) {
            links.push(Link::new(&mesh, &coarsening));
            mesh = coarsening.mesh;
        }
        let mut work = Work::new(&level, &links);
        work.state.clone_from(start);
        let (now, before) = (start.clone(), start.clone());
        Transient { level, work, rate, now, before, regions, stiffness }
    }

    /// The state now.
    pub fn state(&self) -> &State {
        &self.now
    }

    /// One step in time.
    pub fn step(&mut self) {
        let Transient { level, work, rate, now, before, regions, stiffness } = self;
        let fields = [
            (&mut work.rhs.u, &level.source.u, &rate.u, &now.u, &before.u, &mut work.state.u),
            (&mut work.rhs.v, &level.source.v, &rate.v, &now.v, &before.v, &mut work.state.v),
            (&mut work.rhs.t, &level.source.t, &rate.t, &now.t, &before.t, &mut work.state.t),
        ];
        for (rhs, source, rate, now, before, state) in fields {
            for n in 0..rhs.len() {
                rhs[n] = source[n] + rate[n] * (2.0 * now[n] - 0.5 * before[n]);
                // Extrapolated start of the step.
                state[n] = 2.0 * now[n] - before[n];
            }
        }
        work.rhs.p.clone_from(&level.source.p);
        let mut last = work.state.v.clone();
        for k in 0..ITERATIONS[1] {
            simplec::smooth(level, work, &STEP);
            shift_blocks(level, work, regions, stiffness);
            let (mut change, mut speed) = (0.0_f64, 0.0_f64);
            for (v, last) in work.state.v.iter().zip(&last) {
                change = change.max((v - last).abs());
                speed = speed.max(v.abs());
            }
            if k + 1 >= ITERATIONS[0] && change < STEP_BOUND * speed {
                break;
            }
            last.clone_from(&work.state.v);
        }
        std::mem::swap(before, now);
        now.clone_from(&work.state);
    }
}

/// Conductance from every block to all that is not it, with its sides and its heat capacity over
/// the step [W/K].
fn stiffness(level: &Level, regions: &[u32], blocks: usize) -> Vec<f64> {
    let nx = level.nx;
    let mut found = vec![0.0; blocks];
    let mut add = |region: u32, conductance: f64| {
        if region != AIR {
            found[region as usize] += conductance;
        }
    };
    for n in 0..regions.len() {
        let (i, j) = (n % nx, n / nx);
        add(regions[n], level.side_conductance[n]);
        let east = (i + 1 < nx).then(|| (n + 1, level.x_conductance[i + 1 + j * (nx + 1)]));
        let north = (n + nx < regions.len()).then(|| (n + nx, level.y_conductance[n + nx]));
        for (m, conductance) in [east, north].into_iter().flatten() {
            if regions[m] != regions[n] {
                add(regions[n], conductance);
                add(regions[m], conductance);
            }
        }
    }
    found
}

/// Moves every block's temperature as a whole by what its heat balance lacks: lines carry heat
/// through a well conducting block, but hardly change its level.
fn shift_blocks(level: &Level, work: &mut Work, regions: &[u32], stiffness: &[f64]) {
    let Work { state, rhs, residual, .. } = work;
    residual::evaluate(level, state, rhs, residual);
    let mut lacking = vec![0.0; stiffness.len()];
    for (region, heat) in regions.iter().zip(&residual.t).filter(|(r, _)| **r != AIR) {
        lacking[*region as usize] += heat;
    }
    for (region, t) in regions.iter().zip(&mut state.t).filter(|(r, _)| **r != AIR) {
        let block = *region as usize;
        if stiffness[block] > 0.0 {
            *t += lacking[block] / stiffness[block];
        }
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use std::f64::consts::PI;

    use ventrise_mesh::{Geometry, Mesh, Rectangle};

    use super::*;
    use crate::by_hand::{air, bare, layout};
    use crate::{Block, SideCondition, Solid};

    fn lines(count: usize, length: f64) -> Vec<f64> {
        (0..=count).map(|n| length * n as f64 / count as f64).collect()
    }

    /// A body of one temperature in a film cools as exp(−t/τ), τ = ρ·c·V/(h·A) (closed form).
    #[test]
    fn a_lump_cools_by_the_exponential_law() {
        let side = 0.02;
        let mut shapes = layout(Geometry::Planar { depth: 1.0 }, side, side);
        shapes.blocks = vec![Rectangle { x: [0.0, side], y: [0.0, side] }];
        let mesh = Mesh::from_lines(&shapes, lines(4, side), lines(4, side)).unwrap();
        let mut start = State::rest(&mesh);
        start.t.fill(10.0);
        let mut d = bare(mesh);
        d.solids = vec![Solid { conductivity: [1e6; 2], density: 1000.0, specific_heat: 1000.0 }];
        d.blocks = vec![Block { solid: 0, heat: 0.0 }];
        d.sides = [SideCondition::Film { coefficient: 10.0, temperature: d.ambient }; 4];
        let tau = 1000.0 * 1000.0 * side * side / (10.0 * 4.0 * side);
        let problem = Problem::new(d).unwrap();
        let step = tau / 100.0;
        let mut run = Transient::new(&problem, &air(), Convection::Central, &start, step);
        (0..10).for_each(|_| run.step());
        let before = run.state().t[5];
        (0..100).for_each(|_| run.step());
        // Each step is off by (Δt/τ)³/3 of the temperature, a hundred of them by 3e-5.
        let kept = run.state().t[5] / before;
        assert!((kept / (-1.0_f64).exp() - 1.0).abs() < 1e-4, "{kept}");
    }

    /// A wall begins to slide along still air: v/U = x/h + Σ 2/(nπ)·(−1)ⁿ·exp(−n²π²νt/h²)·
    /// sin(nπx/h) (closed form).
    #[test]
    fn air_beside_a_wall_that_begins_to_slide() {
        // Along y beside the right side, along x below the top.
        for upright in [true, false] {
            let (h, speed) = (0.01, 1e-5);
            let [wide, tall] = if upright { [h, 2.0 * h] } else { [2.0 * h, h] };
            let [nx, ny] = if upright { [40, 10] } else { [10, 40] };
            let mut shapes = layout(Geometry::Planar { depth: 1.0 }, wide, tall);
            shapes.walls = [upright, upright, !upright, !upright];
            let mesh = Mesh::from_lines(&shapes, lines(nx, wide), lines(ny, tall)).unwrap();
            let start = State::rest(&mesh);
            let mut d = bare(mesh);
            d.gravity = [0.0; 2];
            let (sliding, open) = if upright { (1, [2, 3]) } else { (3, [0, 1]) };
            d.sides[sliding] = SideCondition::Sliding(speed);
            for side in open {
                d.sides[side] = SideCondition::Open;
            }
            let problem = Problem::new(d).unwrap();
            let unit = h * h * air().density / air().viscosity;
            let mut run =
                Transient::new(&problem, &air(), Convection::Central, &start, 1e-3 * unit);
            (0..100).for_each(|_| run.step());
            let mut worst = 0.0_f64;
            for n in 0..40 {
                let x = (n as f64 + 0.5) / 40.0;
                let mut exact = x;
                for k in 1..30 {
                    let w = f64::from(k) * PI;
                    let sign = if k % 2 == 0 { 1.0 } else { -1.0 };
                    exact += 2.0 / w * sign * (-w * w * 0.1).exp() * (w * x).sin();
                }
                let state = run.state();
                let here = if upright { state.v[n + 5 * nx] } else { state.u[5 + n * (nx + 1)] };
                worst = worst.max((here / speed - exact).abs());
            }
            // The first step, from rest in time, lags by a third of its length: 8e-4 here; cells
            // of h/40 add as much.
            assert!(worst < 3e-3, "upright {upright}: {worst}");
        }
    }
}
