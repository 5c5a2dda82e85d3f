//! A frictionless shaft between two slots: what a vent costs and where a fan works, by hand.
//!
//! Slots cover the whole floor and the whole roof and the walls do not hold the air, so that the
//! speed u is the same everywhere and pressures add up without approximation:
//! P = ½·ρ·u² + Δp_floor(u) + Δp_roof(u), the ½·ρ·u² being what leaves with the air.

use ventrise_mesh::{Geometry, Side, SlotSpan};

use super::lines::uniform;
use super::{SampleError, empty_layout, plain};
use crate::{Air, Fan, LossLaw, Problem, SideCondition, Slot, State};

/// Width (radius) and height of the shaft [m].
const SIZE: [f64; 2] = [0.1, 0.2];
/// Cells along x and y.
const CELLS: [usize; 2] = [16, 32];

/// A shaft.
#[derive(Debug, Clone, PartialEq)]
pub struct Shaft {
    /// Planar, or round about its axis.
    pub geometry: Geometry,
    /// Air.
    pub air: Air,
    /// Losses of floor and roof.
    pub laws: [LossLaw; 2],
    /// Pressure that drives air in through the floor [Pa].
    pub drive: f64,
    /// Fan in the floor when it blows inward, else in the roof.
    pub fan: Option<Fan>,
}

impl Shaft {
    /// The problem.
    ///
    /// # Errors
    /// Numbers out of range.
    pub fn problem(&self) -> Result<Problem, SampleError> {
        let [width, height] = SIZE;
        let mut layout = empty_layout(self.geometry, width, height);
        for side in [Side::Bottom, Side::Top] {
            layout.slots.push(SlotSpan { side, span: [0.0, width] });
        }
        let (x, y) = (uniform(0.0, width, CELLS[0]), uniform(0.0, height, CELLS[1]));
        let mut d = plain(&layout, x, y, self.air)?;
        let [floor, roof] = self.laws.map(|law| Slot { law, ..Slot::with_loss(0.0) });
        d.slots = vec![Slot { drive: self.drive, ..floor }, roof];
        if let Some(fan) = &self.fan {
            d.slots[usize::from(!fan.inward)].fan = Some(0);
            d.fans = vec![fan.clone()];
        }
        d.sides[Side::Left.index()] = SideCondition::Symmetry;
        d.sides[Side::Right.index()] = SideCondition::Symmetry;
        Ok(Problem::new(d)?)
    }

    /// Area of the shaft and of both slots [m²].
    pub fn area(&self) -> f64 {
        match self.geometry {
            Geometry::Planar { depth } => depth * SIZE[0],
            Geometry::Axisymmetric => std::f64::consts::PI * SIZE[0] * SIZE[0],
        }
    }

    /// Pressure that a mean speed u takes [Pa].
    pub fn pressure_at(&self, speed: f64) -> f64 {
        let Air { density, viscosity, .. } = self.air;
        let [floor, roof] = self.laws;
        let quadratic = 1.0 + floor.loss + roof.loss;
        0.5 * density * quadratic * speed * speed
            + 0.5 * viscosity * (floor.friction + roof.friction) * speed
    }

    /// Flow upward through the shaft [m³/s].
    pub fn flow(problem: &Problem, state: &State) -> f64 {
        let mesh = problem.mesh();
        (0..mesh.nx()).map(|i| state.v[i] * mesh.y_area(i)).sum()
    }
}
