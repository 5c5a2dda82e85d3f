//! Natural-draught air flow and conduction in the section of a fanless housing: case files,
//! results, the command line.

pub mod output;
