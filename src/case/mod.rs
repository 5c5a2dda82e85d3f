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
mod heat;
mod joints;
pub mod judgement;
mod keys;
pub mod materials;
mod meshing;
mod mistakes;
mod model;
mod outside;
mod overlap;
mod parse;
mod read;
mod reference;
mod resolved;
mod schema;
pub mod setup;
mod surfaces;
mod tables;
pub mod units;
mod vents;
mod vocabulary;

pub use error::{CaseError, CaseErrors, Cause};
pub use estimate::Estimate;
pub use model::{
    AirChoice, Ambient, Block, Case, Fan, HeatCurve, Junction, JunctionBy, LimitAt, Material,
    MeshChoice, OuterSide, Part, Probe, ProbeShape, Resistance, Section, Slot, SolveChoice, Wall,
    side_name,
};
pub use reference::reference;
pub use schema::schema;
pub use vents::kind_words;
