//! Everything that should have enough cells across it: blocks, slots and gaps.
//!
//! A gap is air between two surfaces that face each other along an axis: two blocks, a block and
//! a wall side, or two wall sides. Air between a surface and a side that is no wall (symmetry, the
//! axis, an open side) is listed as half a gap, for that is what it is on a plane of symmetry.
//! Where a slot ends the air there is no gap.

use std::collections::BTreeSet;

use crate::{AIR, Layout, Mesh, MeshError, Side};

/// Direction in which something is crossed.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Axis {
    /// Along x (radius).
    X,
    /// Along y (height).
    Y,
}

impl Axis {
    /// `x` or `y`.
    pub fn letter(self) -> char {
        match self {
            Axis::X => 'x',
            Axis::Y => 'y',
        }
    }
}

/// What ends a gap.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum GapEnd {
    /// A block, by index.
    Block(usize),
    /// A side of the section.
    Side(Side),
}

/// What is crossed.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Crossed {
    /// A block, by index.
    Block(usize),
    /// A slot, by index.
    Slot(usize),
    /// Air between two surfaces, lower end first.
    Gap([GapEnd; 2]),
    /// Air between a surface and a side that is no wall, lower end first.
    HalfGap([GapEnd; 2]),
}

impl Crossed {
    /// Cells it should have when `across` are asked for: half as many, rounded up, in half a gap.
    pub fn wanted(self, across: usize) -> usize {
        match self {
            Crossed::HalfGap(_) => across.div_ceil(2),
            _ => across,
        }
    }

    /// `block`, `slot`, `gap` or `half gap`.
    pub fn word(self) -> &'static str {
        match self {
            Crossed::Block(_) => "block",
            Crossed::Slot(_) => "slot",
            Crossed::Gap(_) => "gap",
            Crossed::HalfGap(_) => "half gap",
        }
    }
}

/// Something crossed along one axis.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Crossing {
    /// What is crossed.
    pub crossed: Crossed,
    /// In which direction.
    pub axis: Axis,
    /// Lower end [m].
    pub from: f64,
    /// Upper end [m].
    pub to: f64,
    /// Number of mesh cells from end to end.
    pub cells: usize,
}

impl Crossing {
    /// Size from end to end [m].
    pub fn size(&self) -> f64 {
        self.to - self.from
    }
}

impl Mesh {
    /// Cells across every block (both ways), every slot and every gap of a layout: blocks and
    /// slots in the layout's order, then gaps by axis and position.
    ///
    /// # Errors
    /// [`MeshError::OffLine`] when an edge of the layout falls on no line of this mesh.
    pub fn crossings(&self, layout: &Layout) -> Result<Vec<Crossing>, MeshError> {
        let outline = outline(layout)?;
        let lines = |axis, at: &[f64]| -> Result<Vec<usize>, MeshError> {
            at.iter().map(|at| self.line_at(axis, *at)).collect()
        };
        let x = lines(Axis::X, outline.x())?;
        let y = lines(Axis::Y, outline.y())?;
        let crossings = spans(layout, &outline)?.into_iter().map(|span| {
            let (edges, lines) = match span.axis {
                Axis::X => (outline.x(), &x),
                Axis::Y => (outline.y(), &y),
            };
            let [from, to] = span.edges;
            Crossing {
                crossed: span.crossed,
                axis: span.axis,
                from: edges[from],
                to: edges[to],
                cells: lines[to] - lines[from],
            }
        });
        Ok(crossings.collect())
    }
}

/// Something crossed, between two edges of the outline.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub(crate) struct Span {
    pub axis: Axis,
    pub edges: [usize; 2],
    pub crossed: Crossed,
}

/// The coarsest mesh of a layout: its lines are the edges and nothing else.
pub(crate) fn outline(layout: &Layout) -> Result<Mesh, MeshError> {
    let pair = |slot: &crate::SlotSpan, sides: [Side; 2]| -> Vec<f64> {
        if sides.contains(&slot.side) { slot.span.to_vec() } else { Vec::new() }
    };
    let slots = &layout.slots;
    let x_slots = slots.iter().flat_map(|s| pair(s, [Side::Bottom, Side::Top]));
    let y_slots = slots.iter().flat_map(|s| pair(s, [Side::Left, Side::Right]));
    let x_blocks = layout.blocks.iter().flat_map(|b| b.x);
    let y_blocks = layout.blocks.iter().flat_map(|b| b.y);
    let x = edges(layout.width, x_blocks.chain(x_slots).chain(layout.x_lines.iter().copied()));
    let y = edges(layout.height, y_blocks.chain(y_slots).chain(layout.y_lines.iter().copied()));
    Mesh::from_lines(layout, x, y)
}

/// Edges from 0 to `extent`, rising, those that differ by round-off only once. Positions outside
/// are left out: the mesh reports them.
fn edges(extent: f64, inner: impl Iterator<Item = f64>) -> Vec<f64> {
    let apart = crate::mesh::ON_LINE * extent;
    let mut all: Vec<f64> = inner.filter(|e| *e > apart && *e < extent - apart).collect();
    all.sort_by(f64::total_cmp);
    let mut kept = vec![0.0];
    for edge in all {
        if kept.last().is_none_or(|last| edge - last > apart) {
            kept.push(edge);
        }
    }
    kept.push(extent);
    kept
}

/// Every block, slot and gap of a layout on its outline.
pub(crate) fn spans(layout: &Layout, outline: &Mesh) -> Result<Vec<Span>, MeshError> {
    let edge = |axis, at: [f64; 2]| -> Result<[usize; 2], MeshError> {
        Ok([outline.line_at(axis, at[0])?, outline.line_at(axis, at[1])?])
    };
    let mut spans = Vec::new();
    for (b, block) in layout.blocks.iter().enumerate() {
        for (axis, at) in [(Axis::X, block.x), (Axis::Y, block.y)] {
            spans.push(Span { axis, edges: edge(axis, at)?, crossed: Crossed::Block(b) });
        }
    }
    for (s, slot) in layout.slots.iter().enumerate() {
        let axis = match slot.side {
            Side::Left | Side::Right => Axis::Y,
            Side::Bottom | Side::Top => Axis::X,
        };
        spans.push(Span { axis, edges: edge(axis, slot.span)?, crossed: Crossed::Slot(s) });
    }
    let mut gaps = BTreeSet::new();
    for j in 0..outline.ny() {
        let row = (0..outline.nx()).map(|i| outline.regions()[outline.cell(i, j)]);
        gaps_in_row(layout, outline, Axis::X, j, row, &mut gaps);
    }
    for i in 0..outline.nx() {
        let column = (0..outline.ny()).map(|j| outline.regions()[outline.cell(i, j)]);
        gaps_in_row(layout, outline, Axis::Y, i, column, &mut gaps);
    }
    spans.extend(gaps);
    Ok(spans)
}

/// Gaps along one row (or column) of the outline, the `across`-th.
fn gaps_in_row(
    layout: &Layout,
    outline: &Mesh,
    axis: Axis,
    across: usize,
    regions: impl Iterator<Item = u32>,
    gaps: &mut BTreeSet<Span>,
) {
    let [low, high] = match axis {
        Axis::X => [Side::Left, Side::Right],
        Axis::Y => [Side::Bottom, Side::Top],
    };
    // None: air that ends at a slot.
    let side_end = |side: Side| match outline.slots(side)[across] {
        None => Some(GapEnd::Side(side)),
        Some(_) => None,
    };
    let is_surface = |end: GapEnd| match end {
        GapEnd::Block(_) => true,
        GapEnd::Side(side) => layout.walls[side.index()],
    };
    let mut close = |from: usize, to: usize, ends: [Option<GapEnd>; 2]| {
        let [Some(lower), Some(upper)] = ends else { return };
        let crossed = match (is_surface(lower), is_surface(upper)) {
            (true, true) => Crossed::Gap([lower, upper]),
            (false, false) => return,
            _ => Crossed::HalfGap([lower, upper]),
        };
        gaps.insert(Span { axis, edges: [from, to], crossed });
    };
    let mut from = 0;
    let mut lower = side_end(low);
    let mut count = 0;
    for (k, region) in regions.enumerate() {
        count = k + 1;
        if region != AIR {
            let block = Some(GapEnd::Block(region as usize));
            if k > from {
                close(from, k, [lower, block]);
            }
            (from, lower) = (k + 1, block);
        }
    }
    if count > from {
        close(from, count, [lower, side_end(high)]);
    }
}

/// Whether the mesh is to be graded towards each edge along an axis: somewhere on it air touches
/// a block or a wall side, or a slot ends there.
pub(crate) fn graded_edges(layout: &Layout, outline: &Mesh, axis: Axis) -> Vec<bool> {
    let (count, across, [low, high], ends) = match axis {
        Axis::X => {
            (outline.nx(), outline.ny(), [Side::Left, Side::Right], [Side::Bottom, Side::Top])
        }
        Axis::Y => {
            (outline.ny(), outline.nx(), [Side::Bottom, Side::Top], [Side::Left, Side::Right])
        }
    };
    let region = |k: usize, m: usize| {
        outline.regions()[match axis {
            Axis::X => outline.cell(k, m),
            Axis::Y => outline.cell(m, k),
        }]
    };
    let side_touches_air = |side: Side, k: usize| {
        layout.walls[side.index()]
            && (0..across).any(|m| region(k, m) == AIR && outline.slots(side)[m].is_none())
    };
    let inner = (1..count).map(|k| {
        (0..across).any(|m| (region(k - 1, m) == AIR) != (region(k, m) == AIR))
            || ends.iter().any(|side| outline.slots(*side)[k - 1] != outline.slots(*side)[k])
    });
    std::iter::once(side_touches_air(low, 0))
        .chain(inner)
        .chain(std::iter::once(side_touches_air(high, count - 1)))
        .collect()
}
