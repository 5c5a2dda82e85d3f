//! Shapes: the section, its rectangles and the slots in its edge. All lengths in metres.

/// How the section stands for a body.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Geometry {
    /// A plane x–y, the same over `depth` [m] normal to it.
    Planar {
        /// Length normal to the section [m].
        depth: f64,
    },
    /// A half plane r–z (x is the radius, y the axis) for the full revolution; the axis is x = 0.
    Axisymmetric,
}

/// A side of the section.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Side {
    /// x = 0 (the axis of an axisymmetric section).
    Left,
    /// x = width.
    Right,
    /// y = 0.
    Bottom,
    /// y = height.
    Top,
}

impl Side {
    /// All four, in the order in which arrays by side are stored.
    pub const ALL: [Side; 4] = [Side::Left, Side::Right, Side::Bottom, Side::Top];

    /// Position in arrays by side.
    pub fn index(self) -> usize {
        self as usize
    }
}

/// A solid rectangle, `x` and `y` as [lower, upper] [m].
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Rectangle {
    /// Extent along x (radius) [m].
    pub x: [f64; 2],
    /// Extent along y (height) [m].
    pub y: [f64; 2],
}

/// A slot: an opening in one side, `span` as [from, to] along that side [m].
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SlotSpan {
    /// The side it lies in.
    pub side: Side,
    /// Extent along the side [m].
    pub span: [f64; 2],
}

/// Everything the mesh must show. Rectangles lie inside the section and do not overlap.
#[derive(Debug, Clone, PartialEq)]
pub struct Layout {
    /// Planar or axisymmetric.
    pub geometry: Geometry,
    /// Extent along x [m].
    pub width: f64,
    /// Extent along y [m].
    pub height: f64,
    /// Solid blocks.
    pub blocks: Vec<Rectangle>,
    /// Slots in the section's edge.
    pub slots: Vec<SlotSpan>,
    /// Further x positions that must fall on mesh lines (ends of probe lines) [m].
    pub x_lines: Vec<f64>,
    /// Further y positions that must fall on mesh lines [m].
    pub y_lines: Vec<f64>,
    /// Sides on which air does not slip (false: symmetry, open or the axis), by [`Side::index`];
    /// the mesh is graded towards these only.
    pub walls: [bool; 4],
}
