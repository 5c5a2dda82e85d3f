//! From a steady solution to its verdict: is it stable, and if not, how far does it sway?
//!
//! Both questions are answered on a mesh of moderate size by the factorised Jacobian: the leading
//! mode tells whether disturbances grow, and a short time-accurate run from the disturbed state
//! (second-order backward differences) follows them until the oscillation keeps its size.

use crate::fas::Stack;
use crate::level::Level;
use crate::newton::Newton;
use crate::solve::highest;
use crate::stability::{Mode, leading_mode};
use crate::transient::Transient;
use crate::{Air, Control, Convection, Problem, SolveError, State, Verdict, residual, slot_flows};

/// Meshes up to this size are analysed [cells].
const CELLS: usize = 8_000;
/// Time steps per period of the leading mode, and most periods followed.
const STEPS_PER_PERIOD: usize = 20;
const MOST_PERIODS: usize = 6;
/// Size of the disturbance to start with, as a share of the largest speed.
const DISTURBANCE: f64 = 0.1;
/// Size of the disturbance that leaves an unstable steady flow, as a share of the temperatures'
/// spread, and time steps of 0.4 over the growth rate it is followed for.
const LEAVING: f64 = 0.03;
const LEAVING_STEPS: usize = 14;
/// Below this Rayleigh number (on the whole section) air at rest is stable: a layer heated from
/// below needs 1708 on its height.
const LEAST_RAYLEIGH: f64 = 500.0;
/// A flow whose velocities change by less than this share of the largest speed in a step stands.
const LEAST_MOTION: f64 = 1e-3;
/// Speeds and rises beyond so many times those of the steady flow are no sway.
const RUNAWAY: f64 = 4.0;

/// What the analysis says about a steady solution.
pub(crate) enum Finding {
    /// It is stable, or nothing says otherwise.
    Stable,
    /// It is unstable and the flow sways about it.
    Swaying(Verdict),
    /// It is unstable and the flow leaves it for another steady one: the level and a state there.
    Leaves(usize, State),
}

/// Looks for disturbances that grow about the finest state. `going_on` is asked between time
/// steps.
pub(crate) fn assess(
    stack: &mut Stack,
    problem: &Problem,
    notes: &mut Vec<String>,
    going_on: &mut dyn FnMut() -> Control,
) -> Result<Finding, SolveError> {
    let (l, state) = stack.restricted(CELLS);
    stack.set_exact(l, true);
    let level = stack.level(l);
    let coarse = stack.problem(l).unwrap_or(problem);
    let speed = largest(&state.u).max(largest(&state.v));
    let extent = level.extent();
    let air = &level.air;
    let diffusivity = air.conductivity / (air.density * air.specific_heat);
    let viscosity = air.viscosity / air.density;
    let spread = state
        .t
        .iter()
        .fold([f64::INFINITY, f64::NEG_INFINITY], |[low, high], t| [low.min(*t), high.max(*t)]);
    let gravity = level.gravity[0].hypot(level.gravity[1]);
    let rayleigh = air.expansion * gravity * (spread[1] - spread[0]).max(0.0) * extent.powi(3)
        / (viscosity * diffusivity);
    if !level.fluid.contains(&true) || (speed * extent < viscosity && rayleigh < LEAST_RAYLEIGH) {
        return Ok(Finding::Stable);
    }
    let mut newton = Newton::new(level);
    let shift = 2.0 * speed.max(5.0 * diffusivity / extent) / extent;
    let Some(mode) = leading_mode(level, &state, &mut newton, shift)? else {
        return Ok(Finding::Stable);
    };
    if mode.growth <= 1e-6 * shift {
        return Ok(Finding::Stable);
    }
    if mode.frequency < 1e-3 * shift {
        notes.push(format!(
            "a steady flow was found unstable (growth {:.2e} per second) and left for another",
            mode.growth
        ));
        let state = leave(level, &state, &mut newton, &mode, spread[1] - spread[0])?;
        return Ok(Finding::Leaves(l, state));
    }
    let period = std::f64::consts::TAU / mode.frequency;
    let mut shape = state.clone();
    shape.clear();
    newton.numbers().add(&mode.shape, 1.0, &mut shape);
    let scheme = (air, level.convection);
    let size = DISTURBANCE * speed / largest(&shape.u).max(largest(&shape.v));
    let mut start = state.clone();
    for (to, from) in [(&mut start.u, &shape.u), (&mut start.v, &shape.v), (&mut start.t, &shape.t)]
    {
        to.iter_mut().zip(from).for_each(|(t, f)| *t += size * f);
    }
    let swing = follow(coarse, scheme, &state, &start, period, going_on);
    let (band, slot_band) = bands(stack, problem, l, &state, swing.as_ref());
    notes.push(format!(
        "the steady flow is unstable: disturbances grow by {:.2} per second and sway with a period \
         of {period:.2} s (found on a mesh of {} x {} cells)",
        mode.growth, level.nx, level.ny
    ));
    let growth = Some(mode.growth);
    Ok(Finding::Swaying(Verdict::Swaying { period: Some(period), growth, band, slot_band }))
}

/// Where the iteration found no steady flow: follows the flow in time from the state it has. The
/// verdict when the flow stays bounded, with the bands over the last of several turnovers.
pub(crate) fn wander(
    stack: &mut Stack,
    problem: &Problem,
    notes: &mut Vec<String>,
    going_on: &mut dyn FnMut() -> Control,
) -> Option<Verdict> {
    let (l, state) = stack.restricted(CELLS);
    let level = stack.level(l);
    let coarse = stack.problem(l).unwrap_or(problem);
    let speed = largest(&state.u).max(largest(&state.v));
    let turnover = level.extent() / speed;
    if !turnover.is_finite() {
        return None;
    }
    let scheme = (&level.air, level.convection);
    let swing = follow(coarse, scheme, &state, &state, turnover, going_on)?;
    if swing.motion < LEAST_MOTION {
        return None;
    }
    let (band, slot_band) = bands(stack, problem, l, &state, Some(&swing));
    notes.push(format!(
        "no steady flow was found; followed in time for several turnovers of {turnover:.1} s it \
         keeps moving and stays bounded"
    ));
    Some(Verdict::Swaying { period: None, growth: None, band, slot_band })
}

/// Bands of parts and slots on the finest mesh: its own values moved as those of level `l` swing
/// about their own at `state`; both belong to the band.
fn bands(
    stack: &Stack,
    problem: &Problem,
    l: usize,
    state: &State,
    swing: Option<&Swing>,
) -> (Vec<[f64; 2]>, Vec<[f64; 2]>) {
    let Some(swing) = swing else { return (Vec::new(), Vec::new()) };
    let coarse = stack.problem(l).unwrap_or(problem);
    let air = &stack.level(l).air;
    let net = |problem: &Problem, state: &State| -> Vec<f64> {
        slot_flows(problem, air, state).iter().map(|s| s.inflow - s.outflow).collect()
    };
    let all = |fine: &[f64], own: &[f64], swing: &[[f64; 2]]| -> Vec<[f64; 2]> {
        let moved = |((fine, own), [low, high]): ((&f64, &f64), &[f64; 2])| {
            [fine + (low - own).min(0.0), fine + (high - own).max(0.0)]
        };
        fine.iter().zip(own).zip(swing).map(moved).collect()
    };
    let finest = stack.state(0);
    (
        all(&highest(problem, finest), &highest(coarse, state), &swing.parts),
        all(&net(problem, finest), &net(coarse, state), &swing.slots),
    )
}

/// Follows a growing disturbance in time (backward Euler, one factorisation a step) until it is no
/// longer small.
fn leave(
    level: &Level,
    steady: &State,
    newton: &mut Newton,
    mode: &Mode,
    spread: f64,
) -> Result<State, SolveError> {
    let mut moved = steady.clone();
    moved.clear();
    newton.numbers().add(&mode.shape, 1.0, &mut moved);
    let speed = largest(&steady.u).max(largest(&steady.v));
    let mode_speed = largest(&moved.u).max(largest(&moved.v));
    let warmth = largest(&moved.t);
    let size = if warmth > 0.0 { LEAVING * spread / warmth } else { LEAVING * speed / mode_speed };
    let mut now = steady.clone();
    newton.numbers().add(&mode.shape, size, &mut now);
    let mut residual = steady.clone();
    let step = 0.4 / mode.growth;
    for _ in 0..LEAVING_STEPS {
        // One Newton step of the implicit time step: (J + M/Δt)·δ = r.
        let (factors, masses) = newton.shifted(level, &now, &level.source, 1.0 / step)?;
        residual::evaluate(level, &now, &level.source, &mut residual);
        let mut right = vec![0.0; masses.len()];
        newton.numbers().gather(&residual, &mut right);
        newton.drop_pinned(level, &mut right);
        factors.solve(&mut right);
        newton.numbers().add(&right, 1.0, &mut now);
    }
    Ok(now)
}

/// What a run in time from the disturbed state shows over its last two periods.
struct Swing {
    /// Lowest and highest temperature of every part [K].
    parts: Vec<[f64; 2]>,
    /// Lowest and highest flow into the section through every slot [m³/s].
    slots: Vec<[f64; 2]>,
    /// Largest change of a velocity in a step of the last period, over the largest speed.
    motion: f64,
}

/// Follows the disturbed flow until it keeps its size; nothing when the run was ended before.
fn follow(
    problem: &Problem,
    (air, scheme): (&Air, Convection),
    steady: &State,
    start: &State,
    period: f64,
    going_on: &mut dyn FnMut() -> Control,
) -> Option<Swing> {
    let speed = largest(&steady.u).max(largest(&steady.v));
    let step = period / STEPS_PER_PERIOD as f64;
    let mut run = Transient::new(problem, air, scheme, start, step);
    let mut bands: Vec<Vec<[f64; 2]>> = Vec::new();
    let mut sizes: Vec<f64> = Vec::new();
    let mut motion = 0.0_f64;
    for _ in 0..MOST_PERIODS {
        let mut band = Vec::new();
        let mut size = 0.0_f64;
        motion = 0.0;
        for _ in 0..STEPS_PER_PERIOD {
            let before = run.state().v.clone();
            run.step();
            let now = run.state();
            let moved = before.iter().zip(&now.v).map(|(a, b)| (a - b).abs());
            motion = moved.fold(motion, f64::max);
            // Bounded: a run that leaves all measure is no finding about the flow.
            let fastest = largest(&now.u).max(largest(&now.v));
            let kept = fastest <= RUNAWAY * speed
                && largest(&now.t) <= RUNAWAY * largest(&steady.t).max(1e-9);
            if going_on() == Control::Stop || !kept {
                return None;
            }
            let mut values = highest(problem, now);
            values.extend(slot_flows(problem, air, now).iter().map(|s| s.inflow - s.outflow));
            band.resize(values.len(), [f64::INFINITY, f64::NEG_INFINITY]);
            for (b, value) in band.iter_mut().zip(values) {
                *b = [b[0].min(value), b[1].max(value)];
            }
            let away = now.v.iter().zip(&steady.v).map(|(a, b)| (a - b).powi(2)).sum::<f64>();
            size = size.max(away.sqrt());
        }
        bands.push(band);
        sizes.push(size);
        // The sway keeps its size: two periods in a row within a tenth.
        let n = sizes.len();
        if n >= 4
            && (sizes[n - 1] / sizes[n - 2] - 1.0).abs() < 0.1
            && (sizes[n - 2] / sizes[n - 3] - 1.0).abs() < 0.1
        {
            break;
        }
    }
    let n = bands.len();
    let widest = |(a, b): (&[f64; 2], &[f64; 2])| [a[0].min(b[0]), a[1].max(b[1])];
    let mut parts: Vec<_> = bands[n - 1].iter().zip(&bands[n - 2]).map(widest).collect();
    let slots = parts.split_off(problem.description().parts.len());
    Some(Swing { parts, slots, motion: motion / speed })
}

fn largest(values: &[f64]) -> f64 {
    values
        .iter()
        .fold(0.0, |a: f64, b| if a.is_nan() || b.is_nan() { f64::NAN } else { a.max(b.abs()) })
}
