//! Ventrise: from a case file to part temperatures, vent flows and fields.

pub mod benchmark;
pub mod case;
pub mod cli;
pub mod manual;
pub mod memory;
pub mod new;
pub mod output;
pub mod progress;
pub mod run;
