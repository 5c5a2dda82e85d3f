//! How surfaces radiate.

use ventrise_mesh::{AIR, Mesh, Side};

use super::error::{RadiationError, RadiationSource};
use super::faces::Owner;

/// How a side radiates where no slot is.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum SideSurface {
    /// A grey-diffuse wall of an emissivity 0 to 1.
    Wall(f64),
    /// Open: black, at the radiant temperature of the surroundings.
    Opening,
    /// Mirror plane. On the curved side of an axisymmetric section: a white wall, which takes up
    /// no heat but reflects diffusely.
    Mirror,
}

/// How all surfaces radiate. Slots are openings.
#[derive(Debug, Clone, PartialEq)]
pub struct Surfaces {
    /// Emissivity of each block, 0 to 1.
    pub blocks: Vec<f64>,
    /// By [`Side::index`]; the axis of an axisymmetric section is not asked for.
    pub sides: [SideSurface; 4],
}

impl Surfaces {
    pub(super) fn check(&self, mesh: &Mesh) -> Result<(), RadiationError> {
        let within = |value: f64, of| {
            if (0.0..=1.0).contains(&value) {
                Ok(())
            } else {
                Err(RadiationError::Emissivity { of, value })
            }
        };
        for (b, value) in self.blocks.iter().enumerate() {
            within(*value, RadiationSource::Block(b))?;
        }
        for side in Side::ALL {
            if let SideSurface::Wall(value) = self.sides[side.index()] {
                within(value, RadiationSource::Side(side))?;
            }
        }
        let count = self.blocks.len();
        match mesh.regions().iter().filter(|r| **r != AIR).max() {
            Some(last) if *last as usize >= count => {
                Err(RadiationError::NoEmissivity { block: *last as usize, count })
            }
            _ => Ok(()),
        }
    }

    /// Emissivity of what a face belongs to.
    pub(super) fn emissivity(&self, owner: Owner) -> f64 {
        match owner {
            Owner::Block(block) => self.blocks[block],
            Owner::Slot(_) => 1.0,
            Owner::Side(side) => match self.sides[side.index()] {
                SideSurface::Wall(emissivity) => emissivity,
                SideSurface::Opening => 1.0,
                SideSurface::Mirror => 0.0,
            },
        }
    }

    /// Whether the surroundings are seen there.
    pub(super) fn is_opening(&self, owner: Owner) -> bool {
        match owner {
            Owner::Block(_) => false,
            Owner::Slot(_) => true,
            Owner::Side(side) => self.sides[side.index()] == SideSurface::Opening,
        }
    }
}
