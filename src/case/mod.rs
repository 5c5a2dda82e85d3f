//! The case file: text in, a checked [`Case`] in SI out.
//!
//! TOML with a unit on every physical number. All mistakes are collected with their places and
//! shown together ([`CaseErrors`]); what passes is fixed and needs no further checks downstream.

mod blocks;
mod check;
mod doubts;
mod edge;
mod error;
mod estimate;
mod fans;
mod joints;
pub mod materials;
mod meshing;
mod model;
mod overlap;
mod parse;
mod read;
mod resolved;
pub mod setup;
mod surfaces;
mod tables;
pub mod units;
mod vents;

pub use error::{CaseError, CaseErrors, Cause};
pub use estimate::Estimate;
pub use model::{
    AirChoice, Ambient, Block, Case, Fan, Material, MeshChoice, Part, Probe, ProbeShape,
    Resistance, Section, Slot, SolveChoice, side_name,
};
pub use vents::kind_words;
