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
use crate::{Control, Problem, SolveError, State, Verdict, residual};

/// Meshes up to this size are analysed [cells].
const CELLS: usize = 12_000;
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
/// Chord iterations of a time step at the most, and the change that ends them (share of the
/// largest speed and rise). A step that is not ended by then renews the factors and may take
/// as many again.
const CHORD_STEPS: usize = 5;
const CHORD_BOUND: f64 = 1e-3;

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
    let swings = follow(level, coarse, &state, &mut newton, &mode, going_on)?;
    let steady = highest(coarse, &state);
    let fine = highest(problem, stack.state(0));
    let band = fine
        .iter()
        .zip(&steady)
        .zip(&swings)
        .map(|((fine, steady), [low, high])| [fine + low - steady, fine + high - steady])
        .collect();
    notes.push(format!(
        "the steady flow is unstable: disturbances grow by {:.2} per second and sway with a period \
         of {period:.2} s (found on a mesh of {} x {} cells)",
        mode.growth, level.nx, level.ny
    ));
    let growth = Some(mode.growth);
    Ok(Finding::Swaying(Verdict::Swaying { period: Some(period), growth, band }))
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

/// Lowest and highest `part_max` over the last two periods of a run from the disturbed state;
/// nothing when the run was ended before.
fn follow(
    level: &Level,
    problem: &Problem,
    steady: &State,
    newton: &mut Newton,
    mode: &Mode,
    going_on: &mut dyn FnMut() -> Control,
) -> Result<Vec<[f64; 2]>, SolveError> {
    let period = std::f64::consts::TAU / mode.frequency;
    let step = period / STEPS_PER_PERIOD as f64;
    let (mut factors, masses) = newton.shifted(level, steady, &level.source, 1.5 / step)?;
    let numbers = newton.numbers();
    let speeds = |shape: &[f64]| {
        let mut moved = steady.clone();
        moved.clear();
        numbers.add(shape, 1.0, &mut moved);
        largest(&moved.u).max(largest(&moved.v))
    };
    let speed = largest(&steady.u).max(largest(&steady.v));
    let rise = largest(&steady.t).max(1e-9);
    let mut now = steady.clone();
    numbers.add(&mode.shape, DISTURBANCE * speed / speeds(&mode.shape), &mut now);
    let mut before = now.clone();
    let mut residual = steady.clone();
    let gather = |newton: &Newton, state: &State| {
        let mut values = vec![0.0; masses.len()];
        newton.numbers().gather(state, &mut values);
        values
    };
    let mut bands: Vec<Vec<[f64; 2]>> = Vec::new();
    let mut sizes: Vec<f64> = Vec::new();

    for _ in 0..MOST_PERIODS {
        let mut band = vec![[f64::INFINITY, f64::NEG_INFINITY]; problem.description().parts.len()];
        let mut size = 0.0_f64;
        for _ in 0..STEPS_PER_PERIOD {
            let (x1, x0) = (gather(newton, &now), gather(newton, &before));
            // Extrapolated start of the step.
            let mut next = now.clone();
            let change: Vec<f64> = x1.iter().zip(&x0).map(|(a, b)| a - b).collect();
            newton.numbers().add(&change, 1.0, &mut next);
            for k in 0..2 * CHORD_STEPS {
                residual::evaluate(level, &next, &level.source, &mut residual);
                let mut right = gather(newton, &residual);
                let x = gather(newton, &next);
                for (n, r) in right.iter_mut().enumerate() {
                    *r -= masses[n] * (1.5 * x[n] - 2.0 * x1[n] + 0.5 * x0[n]) / step;
                }
                newton.drop_pinned(level, &mut right);
                factors.solve(&mut right);
                newton.numbers().add(&right, 1.0, &mut next);
                let mut moved = steady.clone();
                moved.clear();
                newton.numbers().add(&right, 1.0, &mut moved);
                let size = (largest(&moved.u).max(largest(&moved.v)) / speed)
                    .max(largest(&moved.t) / rise);
                if size < CHORD_BOUND {
                    break;
                }
                if k + 1 == CHORD_STEPS {
                    factors = newton.shifted(level, &next, &level.source, 1.5 / step)?.0;
                }
            }
            before = std::mem::replace(&mut now, next);
            if going_on() == Control::Stop || !(largest(&now.v) + largest(&now.t)).is_finite() {
                return Ok(Vec::new());
            }
            for (b, t) in band.iter_mut().zip(highest(problem, &now)) {
                *b = [b[0].min(t), b[1].max(t)];
            }
            let away = |a: &[f64], b: &[f64]| {
                a.iter().zip(b).map(|(a, b)| (a - b).powi(2)).sum::<f64>().sqrt()
            };
            size = size.max(away(&now.v, &steady.v));
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
    Ok(bands[n - 1].iter().zip(&bands[n.saturating_sub(2)]).map(widest).collect())
}

fn largest(values: &[f64]) -> f64 {
    values
        .iter()
        .fold(0.0, |a: f64, b| if a.is_nan() || b.is_nan() { f64::NAN } else { a.max(b.abs()) })
}
