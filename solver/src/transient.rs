//! Steps in time: second-order backward differences, each step solved by SIMPLEC iterations.
//!
//! M·(3xⁿ⁺¹ − 4xⁿ + xⁿ⁻¹)/(2Δt) = r(xⁿ⁺¹), M the inertia of the air and the heat capacity of air and
//! blocks. The term in xⁿ⁺¹ stands like a wall (for temperatures like a film) on every unknown, the
//! others on the right-hand side, so that the steady equations serve unchanged.

use crate::level::Level;
use crate::linear::multigrid::Link;
use crate::simplec::{self, Smoothing, Work};
use crate::{Air, Convection, Problem, State};

/// Iterations of a step: the time term leaves little to damp.
const STEP: Smoothing = Smoothing {
    velocity: 0.85,
    temperature: 1.0,
    sweeps: 1,
    pressure: (0.05, 4),
    iterations: [2, 12],
};
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
}

impl Transient {
    /// From a state at rest in time, with steps of `step` [s].
    pub fn new(problem: &Problem, air: &Air, scheme: Convection, start: &State, step: f64) -> Self {
        let mut level = Level::new(problem, air, scheme);
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
        let mut links = Vec::new();
        let mut mesh = problem.mesh().clone();
        while let Some(coarsening) = mesh.coarsened(1) {
            links.push(Link::new(&mesh, &coarsening));
            mesh = coarsening.mesh;
        }
        let mut work = Work::new(&level, &links);
        work.state.clone_from(start);
        Transient { level, work, rate, now: start.clone(), before: start.clone() }
    }

    /// The state now.
    pub fn state(&self) -> &State {
        &self.now
    }

    /// One step in time.
    pub fn step(&mut self) {
        let Transient { level, work, rate, now, before } = self;
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
        for k in 0..STEP.iterations[1] {
            simplec::smooth(level, work, &STEP);
            let (mut change, mut speed) = (0.0_f64, 0.0_f64);
            for (v, last) in work.state.v.iter().zip(&last) {
                change = change.max((v - last).abs());
                speed = speed.max(v.abs());
            }
            if k + 1 >= STEP.iterations[0] && change < STEP_BOUND * speed {
                break;
            }
            last.clone_from(&work.state.v);
        }
        std::mem::swap(before, now);
        now.clone_from(&work.state);
    }
}
