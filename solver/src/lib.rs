//! Steady laminar buoyant air flow coupled with conduction in solid blocks.
//!
//! A [`Problem`] (mesh, materials, boundaries) becomes a [`Solution`]: velocities, pressure and
//! temperature rise, with the numbers read off them. No files, no screen, no clock here.

mod acceleration;
mod air;
mod balance;
mod boundary;
#[cfg(test)]
mod by_hand;
mod conduction;
mod contacts;
mod equations;
mod error;
mod fan;
mod fas;
mod film;
mod following;
mod heat_law;
mod level;
mod linear;
mod newton;
mod numbers;
mod outer;
mod par;
mod pieces;
mod probe;
mod problem;
mod radiant;
mod radiation;
mod renewal;
mod residual;
pub mod samples;
mod settings;
mod simplec;
mod solution;
mod solve;
mod stability;
mod state;
mod still_air;
mod sway;
mod transfer;
mod transient;
mod vent;

pub use air::{Air, AirModel, standard_pressure};
pub use balance::{Balance, OpeningFlow, REST_SPEED, SideFlow, balance, side_flows, slot_flows};
pub use boundary::{OuterFilm, Outside, SideCondition, Slot};
pub use contacts::{Contact, contacts};
pub use error::{ProblemError, SolveError};
pub use fan::{Fan, FanPoint, fan_points};
pub use heat_law::{HeatLaw, Runaway, block_heats};
pub use numbers::{
    Numbers, PartTemperature, block_temperatures, cell_velocities, heat_fluxes, numbers,
    part_temperatures, slot_reynolds,
};
pub use outer::OuterFlow;
pub use pieces::Pieces;
pub use probe::{Sample, Sampler};
pub use problem::{Block, Description, Joint, Problem, Solid, Sources};
pub use radiant::{RadiantHeat, radiant_heat};
pub use radiation::{
    Backing, Correction, Face, Owner, PATCH_COUNT, Patch, Radiation, RadiationError,
    RadiationSource, STEFAN_BOLTZMANN, SideSurface, Surfaces,
};
pub use settings::{Convection, DRIFT_BOUND, FAN_BOUND, HEAT_BOUND, MASS_BOUND, SOLVED, Settings};
pub use solution::{Control, Progress, Residuals, Solution, StopReason, Verdict};
pub use solve::solve;
pub use state::State;
pub use still_air::{Facing, still_air_film};
pub use vent::{LossLaw, Vent, VentKind};
