//! Steady laminar buoyant air flow coupled with conduction in solid blocks.
//!
//! A [`Problem`] (mesh, materials, boundaries) becomes a [`Solution`]: velocities, pressure and
//! temperature rise, with the numbers read off them. No files, no screen, no clock here.

mod air;
mod boundary;
mod conduction;
mod equations;
mod error;
mod fas;
mod level;
mod linear;
mod newton;
mod par;
mod problem;
mod residual;
pub mod samples;
mod settings;
mod simple;
mod simplec;
mod solution;
mod state;
mod transfer;

pub use air::{Air, AirModel, standard_pressure};
pub use boundary::{SideCondition, Slot};
pub use error::{ProblemError, SolveError};
pub use problem::{Block, Description, Problem, Solid, Sources};
pub use settings::{Convection, Settings};
pub use simple::solve;
pub use solution::{Control, Progress, Residuals, Solution, StopReason, Verdict};
pub use state::State;
