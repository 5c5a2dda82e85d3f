//! Files and screen: what a run leaves behind.

pub mod vtk;
