//! Ventrise: from a case file to part temperatures, vent flows and fields.

pub mod benchmark;
pub mod case;
pub mod check;
pub mod output;
