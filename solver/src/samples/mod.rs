//! Model problems with known answers, and how to read the compared numbers off a solution.
//!
//! Most are built in simple numbers: ρ₀ = c_p = k = β = 1 and L = 1 m, so that velocities come out
//! in units of α/L and heat flows in units of k·ΔT·L; the Prandtl number is then the viscosity and
//! g·β·ΔT the product of Rayleigh and Prandtl number.

mod cavity;
mod conduction;
mod duct;
mod lid;
mod lines;
mod manufactured;
mod read;
mod shaft;
mod vented;

pub use cavity::{
    Annulus, AnnulusNusselt, ConductingBlock, ConductingWall, HeatedFromBelow, SquareCavity,
    hot_wall, overturning_start,
};
pub use conduction::{Layers, Rod, Shell, Slab};
pub use duct::{Duct, DuctShape, HeatedWalls};
pub use lid::LidCavity;
pub use lines::{Grading, graded, joined, uniform};
pub use manufactured::{FieldErrors, Manufactured};
pub use read::{
    Extreme, SlotFlow, WallHeat, block_mean, block_range, centre_rise, extreme, max_speed,
    side_heat, slot_flow, stream_at, stream_function, u_along_y, v_along_x, wall_flux,
    x_plane_heat,
};
pub use shaft::Shaft;
pub use vented::{Channel, HousingResult, RingHousing, SlotHousing, Stack};

use ventrise_mesh::{Layout, Mesh, MeshError};

use crate::{Air, AirModel, Description, ProblemError, SideCondition};

/// Ambient temperature of the samples in simple numbers [K].
pub const AMBIENT: f64 = 300.0;

/// Why a sample could not be built.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum SampleError {
    /// Its mesh.
    #[error(transparent)]
    Mesh(#[from] MeshError),
    /// Its description.
    #[error(transparent)]
    Problem(#[from] ProblemError),
}

/// Air with ρ₀ = c_p = k = β = 1 and viscosity Pr.
fn unit_air(prandtl: f64) -> Air {
    Air { density: 1.0, viscosity: prandtl, conductivity: 1.0, specific_heat: 1.0, expansion: 1.0 }
}

/// A description without blocks, slots and gravity, all sides adiabatic.
fn plain(layout: &Layout, x: Vec<f64>, y: Vec<f64>, air: Air) -> Result<Description, MeshError> {
    Ok(Description {
        mesh: Mesh::from_lines(layout, x, y)?,
        air: AirModel::Given(air),
        ambient: AMBIENT,
        gravity: [0.0; 2],
        solids: Vec::new(),
        blocks: Vec::new(),
        slots: Vec::new(),
        fans: Vec::new(),
        sides: [SideCondition::Adiabatic; 4],
        parts: Vec::new(),
        joints: Vec::new(),
        sources: None,
        radiation: None,
        heat_laws: Vec::new(),
    })
}

/// A layout without blocks, slots and extra lines.
fn empty_layout(geometry: ventrise_mesh::Geometry, width: f64, height: f64) -> Layout {
    Layout {
        geometry,
        width,
        height,
        blocks: Vec::new(),
        slots: Vec::new(),
        x_lines: Vec::new(),
        y_lines: Vec::new(),
        walls: [true; 4],
    }
}

/// An isotropic solid for steady runs.
fn solid(conductivity: f64) -> crate::Solid {
    crate::Solid { conductivity: [conductivity; 2], density: 1.0, specific_heat: 1.0 }
}
