//! Structured meshes of planar and axisymmetric sections: shapes in, cells and faces out.
//!
//! A [`Layout`] of rectangles and edge slots, all in metres, becomes a [`Mesh`] whose lines fall
//! exactly on every edge. No physics and no files here.

mod crossing;
mod error;
mod generate;
mod geometry;
mod mesh;
mod refine;
mod spacing;
mod uniform;

pub use crossing::{Axis, Crossed, Crossing, GapEnd};
pub use error::MeshError;
pub use generate::{CELL_LIMIT, Generated, Spacing, generate};
pub use geometry::{Geometry, Layout, Rectangle, Side, SlotSpan};
pub use mesh::{AIR, Coarsening, Mesh};
