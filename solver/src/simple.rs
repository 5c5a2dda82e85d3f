//! The outer iteration: nested start, cycles on the finest mesh.

use crate::fas::Stack;
use crate::{
    Air, AirModel, Control, Problem, Progress, Settings, Solution, SolveError, State, StopReason,
    Verdict,
};

/// Solves a problem from a start (rest when `None`). `watch` is asked after every outer iteration.
///
/// # Errors
/// A breakdown that no damping cured.
pub fn solve(
    problem: &Problem,
    settings: &Settings,
    start: Option<State>,
    watch: &mut dyn FnMut(&Progress) -> Control,
) -> Result<Solution, SolveError> {
    let d = problem.description();
    let air = match d.air {
        AirModel::Given(air) => air,
        AirModel::Film { pressure } => Air::dry(d.ambient, pressure),
    };
    let _ = start;
    let mut stack = Stack::new(problem, &air, settings.convection);
    let mut history = Vec::new();
    let debug = std::env::var("VDEBUG").is_ok();
    let coarsest = stack.depth() - 1;
    let end = stack.solve_coarsest(1e-9, true)?;
    if debug {
        eprintln!(
            "coarsest {}x{} newton -> {end:.2e}",
            stack.level(coarsest).nx,
            stack.level(coarsest).ny
        );
    }
    let mut iteration = 0;
    for l in (0..coarsest).rev() {
        stack.start_from_coarser(l);
        stack.pose(l);
        let target = if l == 0 { settings.tolerance } else { 1e-3 };
        let limit = if l == 0 { settings.max_iterations } else { 6 };
        for _ in 0..limit {
            stack.cycle(l)?;
            let (residuals, _) = stack.residuals(l);
            iteration += 1;
            let progress = Progress {
                iteration,
                cells: stack.level(l).nx * stack.level(l).ny,
                residuals,
                ..Progress::default()
            };
            if debug {
                eprintln!(
                    "{} {} {:.2e} {:.2e} {:.2e} {:.2e}",
                    iteration,
                    progress.cells,
                    residuals.mass,
                    residuals.momentum_x,
                    residuals.momentum_y,
                    residuals.energy
                );
            }
            let control = watch(&progress);
            history.push(progress);
            if residuals.largest() < target || control == Control::Stop {
                break;
            }
        }
    }
    Ok(Solution {
        state: stack.state(0).clone(),
        air,
        stop: StopReason::Converged,
        verdict: Verdict::Settled,
        history,
        notes: Vec::new(),
    })
}
