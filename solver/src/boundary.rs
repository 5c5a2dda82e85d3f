//! What the section's edge does: the sides and the slots in them.

use crate::LossLaw;

/// Condition on a side of the section, where no slot is.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum SideCondition {
    /// No-slip wall without heat flow.
    Adiabatic,
    /// Mirror plane: no flow through it, no shear, no heat flow. The axis of an axisymmetric
    /// section is one too.
    Symmetry,
    /// Outside air: inflow from still ambient air (total pressure), outflow to ambient pressure.
    Open,
    /// No-slip wall at a fixed temperature [K].
    Temperature(f64),
    /// No-slip wall through which heat enters [W/m²].
    Flux(f64),
    /// No-slip wall with a film coefficient to outside.
    Film {
        /// Film coefficient [W/(m²·K)].
        coefficient: f64,
        /// Outside temperature [K].
        temperature: f64,
    },
    /// No-slip wall whose outer face is a surface of its own.
    Outside(Outside),
    /// Adiabatic no-slip wall sliding along itself (model problems) [m/s], positive along x or y.
    Sliding(f64),
}

/// The film on an outer face.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum OuterFilm {
    /// A given coefficient [W/(m²·K)].
    Given(f64),
    /// Still air, which the side warms: see [`crate::still_air_film`].
    StillAir,
}

/// What surrounds the outer face of a side: film · (T_s − air) + radiation − sun leaves there.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Outside {
    /// The film.
    pub film: OuterFilm,
    /// Temperature of the outside air [K].
    pub air: f64,
    /// Emissivity of the outer face [-]; 0: it does not radiate.
    pub emissivity: f64,
    /// Radiant temperature of the surroundings [K].
    pub surroundings: f64,
    /// Heat of the sun that the outer face absorbs [W/m²].
    pub sun: f64,
    /// Resistance of the wall between the section's edge and the outer face [K·m²/W].
    pub wall: f64,
}

impl SideCondition {
    /// Whether air sticks to the side.
    pub fn is_wall(&self) -> bool {
        !matches!(self, SideCondition::Symmetry | SideCondition::Open)
    }
}

/// What happens in a slot.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Slot {
    /// Loss on the speed through the opening.
    pub law: LossLaw,
    /// Pressure rise that drives air into the section through the slot [Pa] (zero: none).
    pub drive: f64,
    /// Fan in the slot, an index into [`crate::Description::fans`].
    pub fan: Option<usize>,
}

impl Slot {
    /// A slot of one loss coefficient K on the speed through the opening [-].
    pub fn with_loss(loss: f64) -> Slot {
        Slot { law: LossLaw { loss, friction: 0.0 }, drive: 0.0, fan: None }
    }
}
