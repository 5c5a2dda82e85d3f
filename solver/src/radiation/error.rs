//! What can be wrong with surfaces.

use ventrise_mesh::Side;

/// Why no exchange of radiation could be computed.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum RadiationError {
    /// An emissivity outside 0 to 1.
    #[error("the emissivity of {of} must be 0 to 1, not {value}")]
    Emissivity {
        /// Whose.
        of: RadiationSource,
        /// Its value.
        value: f64,
    },
    /// A block of the mesh has no emissivity.
    #[error("block {block} has no emissivity ({count} are given)")]
    NoEmissivity {
        /// Index of the block.
        block: usize,
        /// How many emissivities there are.
        count: usize,
    },
    /// The view factors of a patch do not add up to one, by far more than round-off and
    /// quadrature explain.
    #[error("the view factors of patch {patch} add up to {sum} instead of 1")]
    NotClosed {
        /// Index of the patch.
        patch: usize,
        /// What they add up to.
        sum: f64,
    },
}

/// Whose emissivity is wrong.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum RadiationSource {
    /// A block.
    Block(usize),
    /// A side.
    Side(Side),
}

impl std::fmt::Display for RadiationSource {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        match self {
            RadiationSource::Block(block) => write!(f, "block {block}"),
            RadiationSource::Side(side) => write!(f, "the {side:?} side"),
        }
    }
}
