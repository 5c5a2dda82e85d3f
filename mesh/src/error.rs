//! What can be wrong with a layout or a spacing.

use crate::geometry::Side;

/// Why no mesh could be made. Lengths in metres.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum MeshError {
    /// Mesh lines are fewer than two, not finite or not rising.
    #[error("mesh lines along {axis} must be at least two, finite and rising")]
    Lines {
        /// `x` or `y`.
        axis: char,
    },
    /// An edge of a block or slot does not fall on a mesh line.
    #[error("the edge at {at} m along {axis} falls on no mesh line")]
    OffLine {
        /// `x` or `y`.
        axis: char,
        /// Position of the edge [m].
        at: f64,
    },
    /// A block or slot has no extent.
    #[error("the extent from {from} to {to} m along {axis} is empty or reversed")]
    Extent {
        /// `x` or `y`.
        axis: char,
        /// Its lower end as given [m].
        from: f64,
        /// Its upper end as given [m].
        to: f64,
    },
    /// A slot lies on an edge where none can be (the axis of an axisymmetric section).
    #[error("slot {slot} lies on the {side:?} side, where no slot can be")]
    SlotSide {
        /// Index of the slot.
        slot: usize,
        /// The side.
        side: Side,
    },
    /// The mesh would need more cells than allowed.
    #[error("the mesh would need {needed} cells, more than {limit}")]
    TooMany {
        /// Cells needed.
        needed: usize,
        /// The limit.
        limit: usize,
    },
    /// A uniform mesh has fewer cells than there are segments between edges.
    #[error("{cells} cells along {axis} are fewer than the {segments} segments between edges")]
    TooFew {
        /// `x` or `y`.
        axis: char,
        /// Cells asked for.
        cells: usize,
        /// Segments between edges.
        segments: usize,
    },
    /// A number of the spacing is outside its range.
    #[error("{name} must be {bound}, not {value}")]
    Spacing {
        /// Which number.
        name: &'static str,
        /// Its value.
        value: f64,
        /// The bound, in words.
        bound: &'static str,
    },
}
