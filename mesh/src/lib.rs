//! Structured meshes of planar and axisymmetric sections: shapes in, cells and faces out.
//!
//! A [`Layout`] of rectangles and edge slots, all in metres, becomes a [`Mesh`] whose lines fall
//! exactly on every edge. No physics and no files here.

mod error;
mod generate;
mod geometry;
mod mesh;

pub use error::MeshError;
pub use generate::{Generated, Spacing, generate};
pub use geometry::{Geometry, Layout, Rectangle, Side, SlotSpan};
pub use mesh::{AIR, Coarsening, Mesh};
