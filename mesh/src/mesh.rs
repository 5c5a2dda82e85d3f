//! Cells and faces of a structured mesh.
//!
//! ```text
//!  y[ny] +-----+-----+-----+     cell (i, j): between x[i], x[i+1] and y[j], y[j+1]
//!        |     |     |     |     its flat index n = i + j·nx
//!        +-----+-----+-----+     x-face (i, j): on line x[i], i = 0..=nx; flat i + j·(nx+1)
//!        |(0,0)|(1,0)|     |     y-face (i, j): on line y[j], j = 0..=ny; flat i + j·nx
//!   y[0] +-----+-----+-----+
//!       x[0]              x[nx]
//! ```
//! Planar and axisymmetric sections differ in areas and volumes only, and these factorise: the
//! x-face (i, j) has area `x_area(i)·dy(j)`, the y-face (i, j) `y_area(i)`, the cell
//! `y_area(i)·dy(j)`.

use std::f64::consts::PI;

use crate::{Axis, Geometry, Layout, MeshError, Side};

/// Region number of air in [`Mesh::regions`]; block b is region b.
pub const AIR: u32 = u32::MAX;

/// A structured mesh with its regions. Fixed once built.
#[derive(Debug, Clone, PartialEq)]
pub struct Mesh {
    pub(crate) geometry: Geometry,
    pub(crate) x: Vec<f64>,
    pub(crate) y: Vec<f64>,
    /// Lines that a coarser mesh must keep (edges of blocks, slots and the section).
    pub(crate) x_kept: Vec<bool>,
    pub(crate) y_kept: Vec<bool>,
    /// One per cell: block index or `AIR`.
    pub(crate) regions: Vec<u32>,
    /// One per boundary face of each side: slot index or `None`.
    pub(crate) slots: [Vec<Option<u32>>; 4],
}

/// A coarser mesh and which coarse cell each fine cell lies in.
#[derive(Debug, Clone, PartialEq)]
pub struct Coarsening {
    /// The coarser mesh: its lines are a subset of the finer one's.
    pub mesh: Mesh,
    /// Coarse column of each fine column, length nx of the finer mesh.
    pub x_parent: Vec<usize>,
    /// Coarse row of each fine row.
    pub y_parent: Vec<usize>,
}

/// Relative distance below which an edge counts as lying on a line.
pub(crate) const ON_LINE: f64 = 1e-9;

impl Mesh {
    /// Builds a mesh from its lines, which must include every edge of the layout.
    ///
    /// # Errors
    /// Lines that do not rise, edges that fall on no line, slots on the axis.
    pub fn from_lines(layout: &Layout, x: Vec<f64>, y: Vec<f64>) -> Result<Self, MeshError> {
        check_lines('x', &x)?;
        check_lines('y', &y)?;
        let (nx, ny) = (x.len() - 1, y.len() - 1);
        let mut x_kept = vec![false; nx + 1];
        let mut y_kept = vec![false; ny + 1];
        for at in [0.0, layout.width].iter().chain(&layout.x_lines) {
            x_kept[line_at('x', &x, *at)?] = true;
        }
        for at in [0.0, layout.height].iter().chain(&layout.y_lines) {
            y_kept[line_at('y', &y, *at)?] = true;
        }
        let mut regions = vec![AIR; nx * ny];
        for (b, block) in layout.blocks.iter().enumerate() {
            let [i0, i1] = extent_at('x', &x, block.x)?;
            let [j0, j1] = extent_at('y', &y, block.y)?;
            (x_kept[i0], x_kept[i1], y_kept[j0], y_kept[j1]) = (true, true, true, true);
            for row in regions.chunks_exact_mut(nx).take(j1).skip(j0) {
                row[i0..i1].fill(b as u32);
            }
        }
        let mut slots = [vec![None; ny], vec![None; ny], vec![None; nx], vec![None; nx]];
        for (s, slot) in layout.slots.iter().enumerate() {
            if layout.geometry == Geometry::Axisymmetric && slot.side == Side::Left {
                return Err(MeshError::SlotSide { slot: s, side: slot.side });
            }
            let (axis, lines, kept) = match slot.side {
                Side::Left | Side::Right => ('y', &y, &mut y_kept),
                Side::Bottom | Side::Top => ('x', &x, &mut x_kept),
            };
            let [from, to] = extent_at(axis, lines, slot.span)?;
            (kept[from], kept[to]) = (true, true);
            slots[slot.side.index()][from..to].fill(Some(s as u32));
        }
        Ok(Mesh { geometry: layout.geometry, x, y, x_kept, y_kept, regions, slots })
    }

    /// Planar or axisymmetric.
    pub fn geometry(&self) -> Geometry {
        self.geometry
    }

    /// Cells along x.
    pub fn nx(&self) -> usize {
        self.x.len() - 1
    }

    /// Cells along y.
    pub fn ny(&self) -> usize {
        self.y.len() - 1
    }

    /// Number of cells, nx·ny.
    pub fn cell_count(&self) -> usize {
        self.nx() * self.ny()
    }

    /// Flat index of cell (i, j).
    pub fn cell(&self, i: usize, j: usize) -> usize {
        i + j * self.nx()
    }

    /// Lines along x [m], nx + 1.
    pub fn x(&self) -> &[f64] {
        &self.x
    }

    /// Lines along y [m], ny + 1.
    pub fn y(&self) -> &[f64] {
        &self.y
    }

    /// Width of column i [m].
    pub fn dx(&self, i: usize) -> f64 {
        self.x[i + 1] - self.x[i]
    }

    /// Height of row j [m].
    pub fn dy(&self, j: usize) -> f64 {
        self.y[j + 1] - self.y[j]
    }

    /// Centre of column i [m].
    pub fn x_centre(&self, i: usize) -> f64 {
        0.5 * (self.x[i] + self.x[i + 1])
    }

    /// Centre of row j [m].
    pub fn y_centre(&self, j: usize) -> f64 {
        0.5 * (self.y[j] + self.y[j + 1])
    }

    /// Area normal to x per unit height at position x [m²/m]: depth, or 2π·x.
    pub fn x_area_at(&self, x: f64) -> f64 {
        match self.geometry {
            Geometry::Planar { depth } => depth,
            Geometry::Axisymmetric => 2.0 * PI * x,
        }
    }

    /// Area normal to y between two positions along x [m²]: depth·(b − a), or π·(b² − a²).
    pub fn y_area_between(&self, a: f64, b: f64) -> f64 {
        match self.geometry {
            Geometry::Planar { depth } => depth * (b - a),
            Geometry::Axisymmetric => PI * (b - a) * (a + b),
        }
    }

    /// Area of the x-faces on line i per unit height [m²/m].
    pub fn x_area(&self, i: usize) -> f64 {
        self.x_area_at(self.x[i])
    }

    /// Area of the y-faces in column i [m²].
    pub fn y_area(&self, i: usize) -> f64 {
        self.y_area_between(self.x[i], self.x[i + 1])
    }

    /// Volume of cell (i, j) [m³].
    pub fn volume(&self, i: usize, j: usize) -> f64 {
        self.y_area(i) * self.dy(j)
    }

    /// Volume of the section [m³]: width·height·depth, or π·width²·height.
    pub fn section_volume(&self) -> f64 {
        self.y_area_between(0.0, self.x[self.nx()]) * self.y[self.ny()]
    }

    /// Lines along x that are edges of blocks, slots, probe lines or the section; nx + 1.
    pub fn x_kept(&self) -> &[bool] {
        &self.x_kept
    }

    /// Lines along y that are edges; ny + 1.
    pub fn y_kept(&self) -> &[bool] {
        &self.y_kept
    }

    /// Column that holds a position along x [m]; on a line, the column above it; clamped.
    pub fn column_at(&self, x: f64) -> usize {
        self.x.partition_point(|l| *l <= x).clamp(1, self.nx()) - 1
    }

    /// Row that holds a position along y [m]; on a line, the row above it; clamped.
    pub fn row_at(&self, y: f64) -> usize {
        self.y.partition_point(|l| *l <= y).clamp(1, self.ny()) - 1
    }

    /// Index of the line at a position along an axis [m].
    ///
    /// # Errors
    /// [`MeshError::OffLine`] when there is none within round-off.
    pub fn line_at(&self, axis: Axis, at: f64) -> Result<usize, MeshError> {
        match axis {
            Axis::X => line_at('x', &self.x, at),
            Axis::Y => line_at('y', &self.y, at),
        }
    }

    /// Region of each cell: block index or [`AIR`]; row-major, nx·ny.
    pub fn regions(&self) -> &[u32] {
        &self.regions
    }

    /// Slot index of each boundary face of a side; length ny (left, right) or nx (bottom, top).
    pub fn slots(&self, side: Side) -> &[Option<u32>] {
        &self.slots[side.index()]
    }

    /// Smallest and largest cell edge [m].
    pub fn cell_sizes(&self) -> [f64; 2] {
        let sizes = (0..self.nx()).map(|i| self.dx(i)).chain((0..self.ny()).map(|j| self.dy(j)));
        sizes.fold([f64::INFINITY, 0.0], |[low, high], d| [low.min(d), high.max(d)])
    }

    /// The next coarser mesh: in every segment between kept lines, neighbouring cells merge in
    /// pairs from both ends (in the middle of an odd count, one or three), so that a mirrored
    /// segment coarsens mirrored; a segment that would fall below `least` cells stays as it is.
    /// `None` when nothing merges.
    pub fn coarsened(&self, least: usize) -> Option<Coarsening> {
        let (x_lines, x_parent) = coarse_lines(&self.x_kept, least);
        let (y_lines, y_parent) = coarse_lines(&self.y_kept, least);
        if x_lines.len() == self.x.len() && y_lines.len() == self.y.len() {
            return None;
        }
        let pick = |lines: &[usize], values: &[f64]| lines.iter().map(|l| values[*l]).collect();
        let keep = |lines: &[usize], kept: &[bool]| lines.iter().map(|l| kept[*l]).collect();
        let regions = y_lines[..y_lines.len() - 1]
            .iter()
            .flat_map(|j| {
                x_lines[..x_lines.len() - 1].iter().map(|i| self.regions[self.cell(*i, *j)])
            })
            .collect();
        let slots = Side::ALL.map(|side| {
            let lines = if matches!(side, Side::Left | Side::Right) { &y_lines } else { &x_lines };
            lines[..lines.len() - 1].iter().map(|l| self.slots[side.index()][*l]).collect()
        });
        let mesh = Mesh {
            geometry: self.geometry,
            x: pick(&x_lines, &self.x),
            y: pick(&y_lines, &self.y),
            x_kept: keep(&x_lines, &self.x_kept),
            y_kept: keep(&y_lines, &self.y_kept),
            regions,
            slots,
        };
        Some(Coarsening { mesh, x_parent, y_parent })
    }
}

fn check_lines(axis: char, lines: &[f64]) -> Result<(), MeshError> {
    let rising = lines.windows(2).all(|w| w[0] < w[1]) && lines.iter().all(|l| l.is_finite());
    if lines.len() < 2 || !rising { Err(MeshError::Lines { axis }) } else { Ok(()) }
}

/// Index of the line at a position.
fn line_at(axis: char, lines: &[f64], at: f64) -> Result<usize, MeshError> {
    let extent = lines[lines.len() - 1] - lines[0];
    let i = lines.partition_point(|l| *l < at - ON_LINE * extent);
    match lines.get(i) {
        Some(line) if (line - at).abs() <= ON_LINE * extent => Ok(i),
        _ => Err(MeshError::OffLine { axis, at }),
    }
}

/// Indices of the lines at both ends of an extent.
fn extent_at(axis: char, lines: &[f64], at: [f64; 2]) -> Result<[usize; 2], MeshError> {
    let [from, to] = [line_at(axis, lines, at[0])?, line_at(axis, lines, at[1])?];
    if from < to { Ok([from, to]) } else { Err(MeshError::Extent { axis, from: at[0], to: at[1] }) }
}

/// Lines of the coarser mesh (indices into the finer) and the coarse index of each fine cell.
fn coarse_lines(kept: &[bool], least: usize) -> (Vec<usize>, Vec<usize>) {
    let edges: Vec<usize> = (0..kept.len()).filter(|i| kept[*i]).collect();
    let mut lines = vec![0];
    for segment in edges.windows(2) {
        let (from, to) = (segment[0], segment[1]);
        let count = to - from;
        let step = if count / 2 < least { 1 } else { 2 };
        let half = count / 2;
        let mut inner: Vec<usize> = (step..=half).step_by(step).map(|k| from + k).collect();
        let mirrored: Vec<usize> = inner.iter().rev().map(|l| from + to - l).collect();
        inner.extend(mirrored);
        inner.dedup();
        lines.extend(inner);
        lines.push(to);
    }
    let mut parent = vec![0; kept.len() - 1];
    for (coarse, pair) in lines.windows(2).enumerate() {
        parent[pair[0]..pair[1]].fill(coarse);
    }
    (lines, parent)
}
