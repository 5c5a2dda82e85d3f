//! The outer iteration: nested start from the coarsest mesh, cycles on every finer one, bounds.

use crate::acceleration::Acceleration;
use crate::balance::balance;
use crate::fan::fan_points;
use crate::fas::{COARSEST_CELLS, Stack};
use crate::numbers::part_temperatures;
use crate::renewal::Renewal;
use crate::residual::Scales;
use crate::settings::{DRIFT_BOUND, FAN_BOUND, HEAT_BOUND, MASS_BOUND, SOLVED};
use crate::simplec::Smoothing;
use crate::sway::{self, Finding};
use crate::{
    Air, AirModel, Control, Problem, Progress, Residuals, Settings, Solution, SolveError, State,
    StopReason, Verdict,
};

/// Residual that the nested start asks of the meshes before the finest.
const NESTED_TARGET: f64 = 1e-3;
/// Cycles spent on each of them at the most.
const NESTED_CYCLES: usize = 6;
/// Residual asked of the coarsest mesh's own solution.
const COARSEST_TARGET: f64 = 1e-8;
/// Steady flows tried when the one found is unstable against another.
const BRANCHES: usize = 4;
/// Building up the sources: first share, largest and smallest factor between shares, most steps.
const BUILD_UP: [f64; 3] = [1.0 / 1024.0, 8.0, 1.05];
const BUILD_UP_STEPS: usize = 30;
/// Residual at which the film temperature of the finest mesh is first taken, and the reduction
/// after which it is taken again.
const FIRST_FILM_CHECK: f64 = 3e-2;
const FILM_CHECKS: f64 = 0.03;
/// Residual with which a stalled iteration is taken for a flow without a steady state, and the
/// largest error of the heat balance with which following it in time can be worth while.
const NO_STEADY: f64 = 1e-4;
const WANDER_HEAT: f64 = 0.05;
/// Flow of a fan that counts as none [m³/s].
const REST_FLOW: f64 = 1e-12;
/// Cycles within which the residual must at least halve; else the smoothing is damped more.
const PATIENCE: usize = 12;
/// Growth of the residual over the best one that counts as divergence.
const DIVERGED: f64 = 1e4;

/// Smoothing tried in turn: each is slower and steadier than the one before.
const LADDER: [Smoothing; 3] = [
    Smoothing::STANDARD,
    Smoothing { velocity: 0.45, temperature: 0.8, iterations: [3, 3], ..Smoothing::STANDARD },
    Smoothing { velocity: 0.3, temperature: 0.6, iterations: [5, 5], ..Smoothing::STANDARD },
];

/// Solves a problem from a start (rest when `None`). `watch` is asked after every outer iteration.
///
/// The iteration ends as converged when, on the finest mesh, every residual is within
/// `settings.tolerance` of its scale, the heat balance within [`HEAT_BOUND`], the mass balance
/// within [`MASS_BOUND`], no part's temperature moved by more than [`DRIFT_BOUND`] of the largest
/// rise in the last iteration, no fan's flow by more than [`FAN_BOUND`] of itself, and the film
/// temperature stands.
///
/// # Errors
/// A breakdown that no damping cured.
pub fn solve(
    problem: &Problem,
    settings: &Settings,
    start: Option<State>,
    watch: &mut dyn FnMut(&Progress) -> Control,
) -> Result<Solution, SolveError> {
    let mut run = Run::new(problem, settings, watch, COARSEST_CELLS[0]);
    let mut ended = match start {
        Some(state) if state.fits(problem.mesh()) => run.resume(&state),
        _ => run.start_from_rest(),
    };
    let failed = matches!(ended, Ok(StopReason::Stalled) | Err(SolveError::Broke { .. }));
    if failed && run.go_down_less() {
        ended = run.start_from_rest();
    }
    let (stop, verdict) = run.judge(ended?)?;
    Ok(run.solution(stop, verdict))
}

/// A run under way.
struct Run<'a> {
    problem: &'a Problem,
    settings: &'a Settings,
    watch: &'a mut dyn FnMut(&Progress) -> Control,
    stack: Stack,
    history: Vec<Progress>,
    notes: Vec<String>,
    renewal: Renewal,
}

/// How the cycles on one mesh ended.
enum Cycles {
    Reached,
    Limit,
    Asked,
    Stalled,
    RanAway,
    Broke { field: &'static str, cell: usize },
}

impl<'a> Run<'a> {
    fn new(
        problem: &'a Problem,
        settings: &'a Settings,
        watch: &'a mut dyn FnMut(&Progress) -> Control,
        coarsest_cells: usize,
    ) -> Self {
        let d = problem.description();
        let air = match d.air {
            AirModel::Given(air) => air,
            AirModel::Film { pressure } => Air::dry(d.ambient, pressure),
        };
        let stack = Stack::new(problem, &air, settings.convection, coarsest_cells);
        let (history, notes) = (Vec::new(), Vec::new());
        Run { problem, settings, watch, stack, history, notes, renewal: Renewal::new(problem) }
    }

    /// Ends the cycles on a finer mesh than before, where there is one; all else begins anew.
    fn go_down_less(&mut self) -> bool {
        let air = self.stack.level(0).air;
        let convection = self.settings.convection;
        let stack = Stack::new(self.problem, &air, convection, COARSEST_CELLS[1]);
        if stack.bottom() >= self.stack.bottom() {
            return false;
        }
        self.stack = stack;
        self.renewal.restart();
        self.note("the coarsest mesh was too coarse for this flow: begun again on a finer".into());
        true
    }

    /// Coarsest mesh first, each finer one from the next coarser.
    fn start_from_rest(&mut self) -> Result<StopReason, SolveError> {
        let bottom = self.stack.bottom();
        let mut from_rest = true;
        for l in (bottom + 1..self.stack.depth()).rev() {
            if !from_rest {
                self.stack.start_from_coarser(l);
            }
            let (end, stop) = self.newton(l, NESTED_TARGET, from_rest, 1.0)?;
            if let Some(stop) = stop {
                self.lift_to_finest(l);
                return Ok(stop);
            }
            // What a coarser mesh could not solve is no start for a finer one.
            from_rest = end > NESTED_TARGET;
            self.renew(l, f64::INFINITY);
        }
        if !from_rest {
            self.stack.start_from_coarser(bottom);
        }
        if let Some(stop) = self.start_bottom(bottom, from_rest)? {
            return Ok(stop);
        }
        self.climb(bottom)
    }

    /// From the state of level `from` to the finest, each level from the next coarser.
    fn climb(&mut self, from: usize) -> Result<StopReason, SolveError> {
        for l in (0..from).rev() {
            let coarser = self.stack.state(l + 1).clone();
            let mut reached = Cycles::Limit;
            for (step, smoothing) in LADDER.iter().enumerate() {
                self.stack.smoothing = *smoothing;
                self.stack.set_state(l + 1, &coarser);
                self.stack.start_from_coarser(l);
                self.stack.pose(l);
                reached = self.cycles(l)?;
                let Cycles::Broke { field, .. } = &reached else { break };
                if step + 1 < LADDER.len() {
                    self.note(format!("{field} diverged: started again with stronger damping"));
                }
            }
            match reached {
                Cycles::Broke { field, cell } => return Err(self.broke(l, field, cell)),
                Cycles::Asked => {
                    self.lift_to_finest(l);
                    return Ok(StopReason::Asked);
                }
                Cycles::Stalled if l == 0 => return Ok(StopReason::Stalled),
                Cycles::Limit if l == 0 => return Ok(StopReason::IterationLimit),
                Cycles::RanAway => return Ok(StopReason::RanAway),
                _ => {}
            }
            if l > 0 {
                self.renew(l, f64::INFINITY);
            }
        }
        Ok(StopReason::Converged)
    }

    /// From a given state on the finest mesh.
    fn resume(&mut self, state: &State) -> Result<StopReason, SolveError> {
        self.stack.set_state(0, state);
        self.stack.pose(0);
        if self.stack.bottom() == 0 {
            let ended = self.start_bottom(0, false)?;
            return Ok(ended.unwrap_or(StopReason::Converged));
        }
        self.renew(0, f64::INFINITY);
        self.finest()
    }

    /// Cycles on the finest level from the state it has.
    fn finest(&mut self) -> Result<StopReason, SolveError> {
        match self.cycles(0)? {
            Cycles::Reached => Ok(StopReason::Converged),
            Cycles::Limit => Ok(StopReason::IterationLimit),
            Cycles::Asked => Ok(StopReason::Asked),
            Cycles::Stalled => Ok(StopReason::Stalled),
            Cycles::RanAway => Ok(StopReason::RanAway),
            Cycles::Broke { .. } => {
                self.note("the given start diverged: started again from rest".into());
                self.start_from_rest()
            }
        }
    }

    /// Newton's method on the coarsest mesh of the cycles, with what follows the result.
    fn start_bottom(
        &mut self,
        l: usize,
        from_rest: bool,
    ) -> Result<Option<StopReason>, SolveError> {
        let finest = l == 0;
        let target = if finest { 1e-2 * self.settings.tolerance } else { COARSEST_TARGET };
        let mut fresh = from_rest;
        let mut end = 0.0;
        let mut converged = false;
        for _ in 0..self.renewal.most() {
            let mut stop;
            (end, stop) = self.newton(l, target, fresh, 1.0)?;
            if !fresh && end > NESTED_TARGET && stop.is_none() {
                (end, stop) = self.newton(l, target, true, 1.0)?;
                fresh = true;
            }
            if fresh && end > NESTED_TARGET && stop.is_none() {
                (end, stop) = self.build_up(l, target)?;
            }
            if stop.is_some() {
                self.lift_to_finest(l);
                return Ok(stop);
            }
            fresh = false;
            converged = end <= self.settings.tolerance.max(target);
            if !self.renew(l, end) {
                break;
            }
            converged = false;
            if self.renewal.ran_away() {
                break;
            }
        }
        // Heat still on its way up, or up to where no flow was found.
        let lost = end > NESTED_TARGET && self.renewal.climb().is_some();
        if lost || (!converged && self.renewal.climbs().is_some()) {
            self.lift_to_finest(l);
            return Ok(Some(StopReason::RanAway));
        }
        if finest {
            let parts = highest(self.problem, self.stack.state(l));
            let (row, _) = self.progress(l, Some(&parts));
            self.history.push(row);
            return Ok((!converged).then_some(StopReason::Stalled));
        }
        if end > NESTED_TARGET {
            self.note(format!(
                "the coarsest mesh was solved to {end:.0e} only; finer meshes go on from there"
            ));
        }
        Ok(None)
    }

    /// Newton's method on level `l`, from rest or from the state it has; the residual reached and why it was stopped, if it was.
    fn newton(
        &mut self,
        l: usize,
        target: f64,
        from_rest: bool,
        strength: f64,
    ) -> Result<(f64, Option<StopReason>), SolveError> {
        if from_rest {
            let rest = State::rest(self.stack.problem(l).unwrap_or(self.problem).mesh());
            self.stack.set_state(l, &rest);
        }
        let (mut rows, mut stop) = (Vec::new(), None);
        let (before, cells) = (self.history.len(), self.stack.cells(l));
        let limit = self.settings.max_iterations;
        let watch = &mut self.watch;
        let mut each = |residuals: Residuals| {
            let iteration = before + rows.len() + 1;
            let row = Progress { iteration, cells, residuals, ..Progress::default() };
            if watch(&row) == Control::Stop {
                stop = Some(StopReason::Asked);
            } else if iteration >= limit {
                stop = Some(StopReason::IterationLimit);
            }
            rows.push(row);
            if stop.is_some() { Control::Stop } else { Control::Continue }
        };
        let end = self.stack.solve_directly(l, target, from_rest, strength, &mut each)?;
        self.history.append(&mut rows);
        Ok((end, stop))
    }

    /// Where Newton's method does not get there from rest at once: all sources grow from a small
    /// share of theirs to the whole, each solution being the start of the next.
    fn build_up(&mut self, l: usize, target: f64) -> Result<(f64, Option<StopReason>), SolveError> {
        let mut good = State::rest(self.stack.problem(l).unwrap_or(self.problem).mesh());
        let (mut reached, mut factor) = (0.0, BUILD_UP[1]);
        let mut end = f64::INFINITY;
        for _ in 0..BUILD_UP_STEPS {
            let first = reached == 0.0;
            let strength = if first { BUILD_UP[0] } else { f64::min(1.0, reached * factor) };
            let mut start = good.clone();
            if !first {
                start.t.iter_mut().for_each(|t| *t *= strength / reached);
            }
            self.stack.set_state(l, &start);
            let goal = if strength < 1.0 { NESTED_TARGET * strength } else { target };
            let (residual, stop) = self.newton(l, goal, first, strength)?;
            end = residual;
            if stop.is_some() {
                return Ok((end, stop));
            }
            if residual <= NESTED_TARGET * strength {
                if strength == 1.0 {
                    self.note("the sources were built up step by step to get started".into());
                    return Ok((end, None));
                }
                good = self.stack.state(l).clone();
                reached = strength;
                factor = (1.5 * factor).min(BUILD_UP[1]);
            } else if first {
                break;
            } else {
                factor = factor.sqrt();
                if factor < BUILD_UP[2] {
                    break;
                }
            }
        }
        // The nearest solution known, for the finer meshes to go on from.
        good.t.iter_mut().for_each(|t| *t /= f64::max(reached, BUILD_UP[0]));
        self.stack.set_state(l, &good);
        Ok((end, None))
    }

    /// Cycles on level `l` until its target, the limit, a stall or a breakdown.
    fn cycles(&mut self, l: usize) -> Result<Cycles, SolveError> {
        let finest = l == 0;
        let limit = if finest { self.settings.max_iterations } else { NESTED_CYCLES };
        let mut best = f64::INFINITY;
        let (mut mark, mut since, mut rung) = (f64::INFINITY, 0, 0);
        let mut parts = None;
        let mut acceleration = Acceleration::new();
        // The film temperature follows early: late news would undo most of the work.
        let mut film_check = FIRST_FILM_CHECK;
        for _ in 0..limit {
            if self.history.len() >= self.settings.max_iterations {
                return Ok(Cycles::Limit);
            }
            self.stack.cycle(l)?;
            if let Some((field, cell)) = self.stack.broken(l) {
                return Ok(Cycles::Broke { field, cell });
            }
            let (mut row, mut scales) = self.progress(l, parts.as_deref());
            // Air in equals air out to round-off: asked of the last states only.
            let is_last = finest && row.residuals.largest() <= self.settings.tolerance;
            if is_last && (row.mass_error > MASS_BOUND || row.heat_error > HEAT_BOUND) {
                self.stack.restore_mass(l);
                (row, scales) = self.progress(l, parts.as_deref());
            }
            parts = Some(row.part_max.clone());
            let largest = row.residuals.largest();
            let done = if finest { self.within_bounds(&row) } else { largest < NESTED_TARGET };
            let control = (self.watch)(&row);
            self.history.push(row);
            // What follows the result may still be behind it when the residuals are done.
            let behind = self.renewal.follows() && largest <= self.settings.tolerance;
            if finest && !done && (largest < film_check || behind) {
                film_check = FILM_CHECKS * largest;
                if self.renew(l, largest) {
                    if self.renewal.ran_away() {
                        return Ok(Cycles::RanAway);
                    }
                    acceleration = Acceleration::new();
                    continue;
                }
            }
            if done {
                if !(finest && self.renew(l, largest)) {
                    return Ok(Cycles::Reached);
                }
                acceleration = Acceleration::new();
                continue;
            }
            if control == Control::Stop {
                return Ok(Cycles::Asked);
            }
            if !largest.is_finite() || largest > DIVERGED * best {
                return Ok(Cycles::Broke { field: "the residual", cell: 0 });
            }
            best = best.min(largest);
            since += 1;
            if best < 0.5 * mark {
                (mark, since) = (best, 0);
            } else if since >= PATIENCE {
                rung += 1;
                since = 0;
                if rung == LADDER.len() {
                    return Ok(Cycles::Stalled);
                }
                self.stack.smoothing = LADDER[rung];
                self.note("the residual stood still: damped more strongly".into());
            }
            self.stack.accelerate(l, &mut acceleration, &scales);
        }
        Ok(Cycles::Limit)
    }

    /// Whether a row of the finest mesh meets all bounds.
    fn within_bounds(&self, row: &Progress) -> bool {
        let rise = row.part_max.iter().fold(0.0_f64, |a, b| a.max(b.abs()));
        row.residuals.largest() <= self.settings.tolerance
            && row.heat_error <= HEAT_BOUND
            && row.mass_error <= MASS_BOUND
            && row.drift <= DRIFT_BOUND * rise.max(1e-9)
            && row.fan_drift <= FAN_BOUND
    }

    fn progress(&mut self, l: usize, before: Option<&[f64]>) -> (Progress, Scales) {
        let (residuals, scales) = self.stack.residuals(l);
        let problem = self.stack.problem(l).unwrap_or(self.problem);
        let (air, state) = (&self.stack.level(l).air, self.stack.state(l));
        let b = balance(problem, air, state);
        let part_max: Vec<f64> =
            part_temperatures(problem, state).iter().map(|p| p.map_or(0.0, |p| p.max)).collect();
        let drift = before.map_or(f64::INFINITY, |before| {
            part_max.iter().zip(before).fold(0.0, |d: f64, (a, b)| d.max((a - b).abs()))
        });
        let fans = fan_points(problem, air, state);
        let fan_flows: Vec<f64> = fans.iter().flatten().map(|point| point.flow).collect();
        let fan_drift = fan_drift(&fan_flows, self.history.last());
        let row = Progress {
            iteration: self.history.len() + 1,
            cells: self.stack.cells(l),
            residuals,
            heat_error: b.heat_error,
            mass_error: b.mass_error,
            flow_in: b.mass_in / air.density,
            part_max,
            drift,
            fan_flows,
            fan_drift,
        };
        (row, scales)
    }

    /// Renews what follows level `l`'s state, whose residual is known; true when it changed.
    fn renew(&mut self, l: usize, residual: f64) -> bool {
        let tolerance = self.settings.tolerance;
        self.renewal.renew(&mut self.stack, self.problem, l, residual, tolerance)
    }

    /// Carries an unfinished state of a coarser level up to the finest.
    fn lift_to_finest(&mut self, l: usize) {
        for finer in (0..l).rev() {
            self.stack.start_from_coarser(finer);
        }
        self.stack.pose(0);
    }

    fn note(&mut self, text: String) {
        if !self.notes.contains(&text) {
            self.notes.push(text);
        }
    }

    fn broke(&self, l: usize, field: &'static str, cell: usize) -> SolveError {
        let nx = self.stack.level(l).nx;
        SolveError::Broke { field, i: cell % nx, j: cell / nx, iteration: self.history.len() }
    }

    /// The verdict; goes on to another steady flow where the one found is unstable against it.
    fn judge(&mut self, mut stop: StopReason) -> Result<(StopReason, Verdict), SolveError> {
        for _ in 0..BRANCHES {
            // Heat in balance that would grow at the least disturbance is no answer either.
            let runaway = match stop {
                StopReason::Converged => self.renewal.climbs(),
                StopReason::RanAway | StopReason::Stalled => self.renewal.climb(),
                _ => None,
            };
            if let Some(runaway) = runaway {
                return Ok((StopReason::RanAway, Verdict::RunsAway(runaway)));
            }
            let verdict = match stop {
                StopReason::Converged => Verdict::Settled,
                StopReason::Stalled | StopReason::RanAway => Verdict::Drifting,
                StopReason::IterationLimit | StopReason::Asked => Verdict::StoppedEarly,
            };
            // Only a solution has a stability.
            let unsolved = self.history.last().is_none_or(|row| row.residuals.largest() > SOLVED);
            if verdict == Verdict::Drifting && self.settings.assess_stability {
                let last = self.history.last().cloned().unwrap_or_default();
                if last.residuals.largest() > NO_STEADY && last.heat_error < WANDER_HEAT {
                    let watch = &mut self.watch;
                    let mut going_on = || watch(&last);
                    let (stack, notes) = (&mut self.stack, &mut self.notes);
                    let found = sway::wander(stack, self.problem, notes, &mut going_on);
                    return Ok((stop, found.unwrap_or(verdict)));
                }
            }
            let ended = verdict == Verdict::StoppedEarly || unsolved;
            if ended || !self.settings.assess_stability {
                return Ok((stop, verdict));
            }
            let last = self.history.last().cloned().unwrap_or_default();
            let watch = &mut self.watch;
            let mut going_on = || watch(&last);
            let (stack, notes) = (&mut self.stack, &mut self.notes);
            let found = sway::assess(stack, self.problem, notes, &mut going_on);
            (0..stack.depth()).for_each(|l| stack.set_exact(l, false));
            match found? {
                Finding::Stable => return Ok((stop, verdict)),
                Finding::Swaying(found) => return Ok((stop, found)),
                Finding::Leaves(l, state) => stop = self.go_on_from(l, &state)?,
            }
        }
        self.note("no stable steady flow was found".into());
        let band = highest(self.problem, self.stack.state(0)).iter().map(|t| [*t, *t]).collect();
        Ok((stop, Verdict::Swaying { period: None, growth: None, band, slot_band: Vec::new() }))
    }

    /// Solves again, from a state on level `l`.
    fn go_on_from(&mut self, l: usize, state: &State) -> Result<StopReason, SolveError> {
        self.renewal.turn();
        self.stack.set_state(l, state);
        self.stack.pose(l);
        let coarsest = self.stack.bottom();
        if l == coarsest {
            if let Some(stop) = self.start_bottom(l, false)? {
                return Ok(stop);
            }
        } else if l > 0 {
            self.cycles(l)?;
        }
        if l == 0 && coarsest > 0 { self.finest() } else { self.climb(l) }
    }

    fn solution(self, stop: StopReason, verdict: Verdict) -> Solution {
        Solution {
            state: self.stack.state(0).clone(),
            air: self.stack.level(0).air,
            heat_growth: self.renewal.growth().filter(|_| stop != StopReason::RanAway),
            stop,
            verdict,
            history: self.history,
            notes: self.notes,
        }
    }
}

/// Largest relative change of a fan's flow since the row before; zero without fans.
fn fan_drift(flows: &[f64], last: Option<&Progress>) -> f64 {
    if flows.is_empty() {
        return 0.0;
    }
    match last.filter(|row| row.fan_flows.len() == flows.len()) {
        Some(row) => (row.fan_flows.iter().zip(flows))
            .fold(0.0, |d: f64, (a, b)| d.max((a - b).abs() / b.abs().max(REST_FLOW))),
        None => f64::INFINITY,
    }
}

/// Highest rise of every part [K].
pub(crate) fn highest(problem: &Problem, state: &State) -> Vec<f64> {
    part_temperatures(problem, state).iter().map(|p| p.map_or(0.0, |p| p.max)).collect()
}
