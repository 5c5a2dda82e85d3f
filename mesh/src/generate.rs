//! From a layout to mesh lines: one spacing per segment between neighbouring edges.

use crate::{Layout, Mesh, MeshError};

/// How fine the mesh is to be.
#[derive(Debug, Clone, PartialEq)]
pub enum Spacing {
    /// Graded from the surfaces.
    Graded {
        /// Largest cell [m].
        cell: f64,
        /// First cell at solid surfaces [m].
        wall: f64,
        /// Largest ratio of neighbouring cell sizes, > 1.
        growth: f64,
        /// Least number of cells across every gap, slot and block.
        across: usize,
        /// Cell counts of every segment are multiples of this (a power of two).
        multiple: usize,
    },
    /// Equal cells as far as the edges allow.
    Uniform {
        /// Cells along x.
        nx: usize,
        /// Cells along y.
        ny: usize,
    },
}

/// A mesh and what was done to get it.
#[derive(Debug, Clone)]
pub struct Generated {
    /// The mesh.
    pub mesh: Mesh,
    /// Sentences for the user about compromises (segments with fewer cells than asked, ...).
    pub notes: Vec<String>,
}

/// Makes the mesh of a layout.
///
/// # Errors
/// A spacing out of range, or a mesh beyond the cell limit.
pub fn generate(layout: &Layout, spacing: &Spacing) -> Result<Generated, MeshError> {
    let _ = (layout, spacing);
    Err(MeshError::Lines { axis: 'x' })
}
