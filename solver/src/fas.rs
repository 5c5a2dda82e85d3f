//! The full approximation scheme: SIMPLEC iterations smooth on every mesh, the coarser mesh brings
//! what they leave, the coarsest is solved by Newton's method.
//!
//! On a coarser mesh the unknowns are full states, not corrections: its right-hand side is chosen
//! so that the restricted fine state is its solution once the fine residual is gone,
//! f_c = R·r − S_c(x̂), x̂ the restricted state, and the change x_c − x̂ is carried back.
//!
//! # Source
//! brandt-1977 (full approximation scheme), van-doormaal-1984 (SIMPLEC).

use crate::acceleration::Acceleration;
use crate::level::Level;
use crate::linear::multigrid::Link;
use crate::newton::{Aim, Newton};
use crate::residual::{self, Scales};
use crate::simplec::{self, Smoothing, Work, smooth};
use crate::transfer::Transfer;
use crate::{Air, Control, Convection, Problem, Residuals, SolveError, State, par};

/// Cycles go down to the first mesh of at most so many cells, few enough for the direct solution.
/// Where that mesh proves too coarse for the flow, the second number is tried.
pub(crate) const COARSEST_CELLS: [usize; 2] = [2000, 6000];
/// The nested start begins on a mesh of about so many cells, where a direct solution costs nearly
/// nothing and many of them do no harm.
const STARTING_CELLS: usize = 200;
/// Largest flow over conductance of a face on coarser meshes: found best of 2, 4 and none on
/// housings whose cells are large for their speeds.
const COARSE_PECLET: f64 = 4.0;
/// Newton steps on the coarsest mesh's own problem at the most.
const COARSEST_STEPS: usize = 50;
/// Coarser meshes keep this many cells across every slot, gap and block.
const LEAST_ACROSS: usize = 2;

/// The chain of meshes with their equations, finest first.
pub(crate) struct Stack {
    levels: Vec<Level>,
    /// The problem on every mesh but the finest.
    coarse_problems: Vec<Problem>,
    transfers: Vec<Transfer>,
    work: Vec<Work>,
    /// The coarsest level of the cycles; those beyond it serve the nested start only.
    bottom: usize,
    /// Of the levels from `bottom` on.
    newton: Vec<Newton>,
    pub smoothing: Smoothing,
}

impl Stack {
    pub fn new(
        problem: &Problem,
        air: &Air,
        convection: Convection,
        coarsest_cells: usize,
    ) -> Stack {
        let mut levels = vec![Level::new(problem, air, convection)];
        let mut transfers = Vec::new();
        let mut links = Vec::new();
        let mut coarse_problems = Vec::new();
        let mut mesh = problem.mesh().clone();
        let mut bottom = 0;
        while mesh.cell_count() > STARTING_CELLS {
            let Some(coarsening) = mesh.coarsened(LEAST_ACROSS) else { break };
            if coarsening.mesh.cell_count() * 5 > mesh.cell_count() * 4 {
                break;
            }
            transfers.push(Transfer::new(&mesh, &coarsening));
            links.push(Link::new(&mesh, &coarsening));
            let coarse = coarse_problems.last().unwrap_or(problem).coarsened(&coarsening);
            bottom += usize::from(mesh.cell_count() > coarsest_cells);
            mesh = coarsening.mesh;
            let mut level = Level::new(&coarse, air, convection);
            level.slack = 1.0 / COARSE_PECLET;
            levels.push(level);
            coarse_problems.push(coarse);
        }
        while let Some(coarsening) = mesh.coarsened(1) {
            links.push(Link::new(&mesh, &coarsening));
            mesh = coarsening.mesh;
        }
        let work =
            levels.iter().enumerate().map(|(l, level)| Work::new(level, &links[l..])).collect();
        let newton = levels[bottom..].iter().map(Newton::new).collect();
        let smoothing = Smoothing::STANDARD;
        Stack { levels, coarse_problems, transfers, work, bottom, newton, smoothing }
    }

    /// Takes other constants for the air on every mesh.
    pub fn set_air(&mut self, problem: &Problem, air: &Air) {
        for (l, level) in self.levels.iter_mut().enumerate() {
            let problem = if l == 0 { problem } else { &self.coarse_problems[l - 1] };
            let slack = level.slack;
            *level = Level::new(problem, air, level.convection);
            level.slack = slack;
        }
    }

    /// Number of meshes.
    pub fn depth(&self) -> usize {
        self.levels.len()
    }

    /// The coarsest level of the cycles, solved directly.
    pub fn bottom(&self) -> usize {
        self.bottom
    }

    pub fn level(&self, l: usize) -> &Level {
        &self.levels[l]
    }

    /// Number of cells of level `l`.
    pub fn cells(&self, l: usize) -> usize {
        self.levels[l].fluid.len()
    }

    /// The problem on level `l`; `None` for the finest, whose problem is the caller's.
    pub fn problem(&self, l: usize) -> Option<&Problem> {
        l.checked_sub(1).map(|l| &self.coarse_problems[l])
    }

    pub fn state(&self, l: usize) -> &State {
        &self.work[l].state
    }

    pub fn set_state(&mut self, l: usize, state: &State) {
        self.work[l].state.clone_from(state);
    }

    /// Makes level `l` the finest in use: its right-hand side is its own problem's.
    pub fn pose(&mut self, l: usize) {
        self.work[l].rhs.clone_from(&self.levels[l].source);
    }

    /// Solves the own problem of level `l` (from `bottom` on), all its sources times `strength`, by
    /// Newton's method; `each` is asked after every step. Returns the largest relative residual
    /// reached.
    pub fn solve_directly(
        &mut self,
        l: usize,
        tolerance: f64,
        from_rest: bool,
        strength: f64,
        each: &mut dyn FnMut(Residuals) -> Control,
    ) -> Result<f64, SolveError> {
        self.pose(l);
        let source = self.levels[l].source.clone();
        each_field(&mut self.work[l].rhs, &source, |rhs, source| *rhs = strength * source);
        let (level, work) = (&self.levels[l], &mut self.work[l]);
        let scales = residual::scales(level, &work.state);
        self.newton[l - self.bottom].solve(
            level,
            &mut work.state,
            &work.rhs,
            &scales,
            Aim { target: tolerance, limit: COARSEST_STEPS, from_rest },
            each,
        )
    }

    /// Writes level `l`'s equations exactly (or with the coarser meshes' added diffusion again).
    pub fn set_exact(&mut self, l: usize, exact: bool) {
        self.levels[l].slack = if exact || l == 0 { 0.0 } else { 1.0 / COARSE_PECLET };
    }

    /// The finest level of at most `cells` cells (else the coarsest), with the finest state
    /// restricted to it.
    pub fn restricted(&mut self, cells: usize) -> (usize, State) {
        let last = self.levels.len() - 1;
        let target = (0..last).find(|l| self.cells(*l) <= cells).unwrap_or(last);
        for l in 0..target {
            let (fine, coarse) = self.work.split_at_mut(l + 1);
            self.transfers[l].restrict_state(
                &self.levels[l],
                &self.levels[l + 1],
                &fine[l].state,
                &mut coarse[0].state,
            );
        }
        (target, self.work[target].state.clone())
    }

    /// Restores the mass balance of level `l` to round-off.
    pub fn restore_mass(&mut self, l: usize) {
        if l < self.bottom {
            simplec::restore_mass(&self.levels[l], &mut self.work[l]);
        }
    }

    /// The first field and cell of level `l` that is not a number.
    pub fn broken(&self, l: usize) -> Option<(&'static str, usize)> {
        let (state, nx) = (&self.work[l].state, self.levels[l].nx);
        let first = |field: &[f64]| field.iter().position(|x| !x.is_finite());
        let u_cell = |n: usize| (n % (nx + 1)).min(nx - 1) + n / (nx + 1) * nx;
        (first(&state.u).map(|n| ("the velocity along x", u_cell(n))))
            .or(first(&state.v).map(|n| ("the velocity along y", n.min(state.p.len() - 1))))
            .or(first(&state.p).map(|n| ("the pressure", n)))
            .or(first(&state.t).map(|n| ("the temperature", n)))
    }

    /// Starts level `l` from the state of the next coarser one.
    pub fn start_from_coarser(&mut self, l: usize) {
        let (fine, coarse) = self.work.split_at_mut(l + 1);
        let fine = &mut fine[l];
        fine.state.clear();
        let state = &coarse[0].state;
        self.transfers[l].prolong(
            &self.levels[l],
            &self.levels[l + 1],
            state,
            &mut fine.state,
            true,
        );
    }

    /// Relative residuals of level `l`, and their scales.
    pub fn residuals(&mut self, l: usize) -> (Residuals, Scales) {
        let (level, work) = (&self.levels[l], &mut self.work[l]);
        residual::evaluate(level, &work.state, &work.rhs, &mut work.residual);
        let scales = residual::scales(level, &work.state);
        (residual::relative(level, &work.residual, &scales), scales)
    }

    /// Replaces level `l`'s state by the best combination of the latest cycles' results; its
    /// residual must be up to date.
    pub fn accelerate(&mut self, l: usize, acceleration: &mut Acceleration, scales: &Scales) {
        let Work { state, rhs, residual, .. } = &mut self.work[l];
        acceleration.step(&self.levels[l], state, rhs, residual, scales);
    }

    /// Residuals of level `l`'s state.
    pub fn evaluate(&mut self, l: usize) {
        let Work { state, rhs, residual, .. } = &mut self.work[l];
        residual::evaluate(&self.levels[l], state, rhs, residual);
    }

    /// One smoothing iteration on level `l`.
    pub fn smooth(&mut self, l: usize) {
        smooth(&self.levels[l], &mut self.work[l], &self.smoothing);
    }

    /// One pressure correction on level `l`, to the reduction the smoothing asks.
    pub fn correct_pressure(&mut self, l: usize) {
        simplec::correct_pressure(&self.levels[l], &mut self.work[l], &self.smoothing);
    }

    /// One cycle from level `l` down to the coarsest and back.
    pub fn cycle(&mut self, l: usize) -> Result<(), SolveError> {
        let smoothing = self.smoothing;
        if l == self.bottom {
            let (level, work) = (&self.levels[l], &mut self.work[l]);
            let scales = residual::scales(level, &work.state);
            residual::evaluate(level, &work.state, &work.rhs, &mut work.residual);
            let now = residual::relative(level, &work.residual, &scales).largest();
            self.newton[0].solve(
                level,
                &mut work.state,
                &work.rhs,
                &scales,
                Aim { target: (0.01 * now).max(1e-13), limit: 6, from_rest: false },
                &mut |_| Control::Continue,
            )?;
            return Ok(());
        }
        for _ in 0..smoothing.iterations[0] {
            smooth(&self.levels[l], &mut self.work[l], &smoothing);
        }
        {
            let (fine, coarse) = self.work.split_at_mut(l + 1);
            let (fine, coarse) = (&mut fine[l], &mut coarse[0]);
            let (fine_level, coarse_level) = (&self.levels[l], &self.levels[l + 1]);
            let transfer = &self.transfers[l];
            residual::evaluate(fine_level, &fine.state, &fine.rhs, &mut fine.residual);
            transfer.restrict_state(fine_level, coarse_level, &fine.state, &mut coarse.state);
            transfer.restrict_residual(fine_level, coarse_level, &fine.residual, &mut coarse.rhs);
            coarse.start.clone_from(&coarse.state);
            // With R·r as right-hand side the coarse residual is R·r + S_c(x̂).
            residual::evaluate(coarse_level, &coarse.state, &coarse.rhs, &mut coarse.residual);
            each_field(&mut coarse.rhs, &coarse.residual, |f, r| *f = 2.0 * *f - r);
        }
        self.cycle(l + 1)?;
        let (fine, coarse) = self.work.split_at_mut(l + 1);
        let (fine, coarse) = (&mut fine[l], &mut coarse[0]);
        let Work { state, start, .. } = coarse;
        each_field(start, state, |start, state| *start = state - *start);
        self.transfers[l].prolong(
            &self.levels[l],
            &self.levels[l + 1],
            start,
            &mut fine.state,
            false,
        );
        for _ in 0..smoothing.iterations[1] {
            smooth(&self.levels[l], &mut self.work[l], &smoothing);
        }
        Ok(())
    }
}

/// Values of a field handled at once.
const SPAN: usize = 4096;

/// Applies `f(a, b)` place by place to all four fields.
fn each_field(a: &mut State, b: &State, f: impl Fn(&mut f64, f64) + Sync) {
    let pairs = [(&mut a.u, &b.u), (&mut a.v, &b.v), (&mut a.p, &b.p), (&mut a.t, &b.t)];
    for (a, b) in pairs {
        par::each_row(a, SPAN, |k, a| {
            a.iter_mut().zip(&b[k * SPAN..]).for_each(|(a, b)| f(a, *b));
        });
    }
}
