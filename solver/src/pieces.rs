//! The pieces of an iteration one by one, for benchmarks: what a number in a profile stands for.

use crate::fas::{COARSEST_CELLS, Stack};
use crate::{Air, AirModel, Convection, Problem, SolveError, State};

/// A problem on its chain of meshes, at a state, with every piece of a cycle callable alone.
pub struct Pieces {
    stack: Stack,
}

impl Pieces {
    /// The chain of meshes of a problem, the finest at `state`.
    pub fn new(problem: &Problem, state: &State) -> Pieces {
        let d = problem.description();
        let air = match d.air {
            AirModel::Given(air) => air,
            AirModel::Film { pressure } => Air::dry(d.ambient, pressure),
        };
        let mut stack = Stack::new(problem, &air, Convection::Central, COARSEST_CELLS[0]);
        stack.set_state(0, state);
        stack.pose(0);
        Pieces { stack }
    }

    /// Evaluates the residuals of all equations on the finest mesh.
    pub fn residual(&mut self) {
        self.stack.evaluate(0);
    }

    /// One smoothing iteration on the finest mesh.
    pub fn smooth(&mut self) {
        self.stack.smooth(0);
    }

    /// One pressure correction on the finest mesh, with the responses of the last smoothing.
    pub fn pressure(&mut self) {
        self.stack.correct_pressure(0);
    }

    /// One cycle over all meshes.
    ///
    /// # Errors
    /// A breakdown of the direct solution on the coarsest mesh.
    pub fn cycle(&mut self) -> Result<(), SolveError> {
        self.stack.cycle(0)
    }
}
