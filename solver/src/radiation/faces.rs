//! Which faces of a mesh radiate: those between air and a solid, and those between air and the
//! section's edge.

use ventrise_mesh::{AIR, Geometry, Mesh, Side};

use super::sight::Segment;
use super::surfaces::{SideSurface, Surfaces};

/// What a radiating face belongs to.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Owner {
    /// A block.
    Block(usize),
    /// A slot.
    Slot(usize),
    /// A side, where no slot is.
    Side(Side),
}

/// What lies behind a radiating face.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Backing {
    /// A solid cell (flat index).
    Cell(usize),
    /// The section's edge: boundary face `n` of a side.
    Edge {
        /// The side.
        side: Side,
        /// Number of the face along it.
        n: usize,
    },
}

/// A radiating face.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Face {
    /// What it belongs to.
    pub owner: Owner,
    /// The air cell in front of it (flat index).
    pub air_cell: usize,
    /// What lies behind it.
    pub backing: Backing,
    /// Area [m²].
    pub area: f64,
    /// Its ends in the section, (x, y) [m], in rising order.
    pub ends: [[f64; 2]; 2],
    /// Unit normal, into the air.
    pub normal: [f64; 2],
    /// Distance along the normal to whatever lies there [m].
    pub gap: f64,
}

impl Face {
    /// Whether it continues a face on the same line, of the same owner and direction.
    pub(super) fn continues(&self, last: &Face) -> bool {
        self.owner == last.owner && self.normal == last.normal && self.ends[0] == last.ends[1]
    }

    /// Length in the section [m].
    pub(super) fn length(&self) -> f64 {
        let [[x0, y0], [x1, y1]] = self.ends;
        (x1 - x0) + (y1 - y0)
    }
}

/// The surface from the first to the last face of a run.
pub(super) fn segment(first: &Face, last: &Face) -> Segment {
    let upright = first.normal[0] != 0.0;
    let (across, along) = if upright { (0, 1) } else { (1, 0) };
    Segment {
        upright,
        at: first.ends[0][across],
        span: [first.ends[0][along], last.ends[1][along]],
        facing: first.normal[across],
    }
}

/// All radiating faces, upright ones first; along each line the faces of either direction follow
/// each other.
pub(super) fn radiating_faces(mesh: &Mesh, surfaces: &Surfaces) -> Vec<Face> {
    let mut faces = Vec::new();
    for i in 0..=mesh.nx() {
        for facing in [-1.0, 1.0] {
            faces.extend((0..mesh.ny()).filter_map(|j| x_face(mesh, surfaces, i, j, facing)));
        }
    }
    for j in 0..=mesh.ny() {
        for facing in [-1.0, 1.0] {
            faces.extend((0..mesh.nx()).filter_map(|i| y_face(mesh, surfaces, i, j, facing)));
        }
    }
    faces
}

/// The face on line x[i] in row j whose air lies towards `facing`.
fn x_face(mesh: &Mesh, surfaces: &Surfaces, i: usize, j: usize, facing: f64) -> Option<Face> {
    let (nx, outward) = (mesh.nx(), facing > 0.0);
    let (front, behind) =
        if outward { (i, i.checked_sub(1)) } else { (i.checked_sub(1)?, Some(i)) };
    if front >= nx || mesh.regions()[mesh.cell(front, j)] != AIR {
        return None;
    }
    let (side, axis) = if outward { (Side::Left, 0) } else { (Side::Right, nx) };
    if i == 0 && axis == 0 && mesh.geometry() == Geometry::Axisymmetric {
        return None;
    }
    let behind = behind.filter(|b| *b < nx).map(|b| mesh.cell(b, j));
    let (owner, backing) = backed(mesh, surfaces, behind, side, j)?;
    let is_solid = |k: usize| mesh.regions()[mesh.cell(k, j)] != AIR;
    let end = if outward {
        (front..nx).find(|k| is_solid(*k)).unwrap_or(nx)
    } else {
        (0..=front).rev().find(|k| is_solid(*k)).map_or(0, |k| k + 1)
    };
    Some(Face {
        owner,
        air_cell: mesh.cell(front, j),
        backing,
        area: mesh.x_area(i) * mesh.dy(j),
        ends: [[mesh.x()[i], mesh.y()[j]], [mesh.x()[i], mesh.y()[j + 1]]],
        normal: [facing, 0.0],
        gap: (mesh.x()[end] - mesh.x()[i]).abs(),
    })
}

/// The face on line y[j] in column i whose air lies towards `facing`.
fn y_face(mesh: &Mesh, surfaces: &Surfaces, i: usize, j: usize, facing: f64) -> Option<Face> {
    let (ny, outward) = (mesh.ny(), facing > 0.0);
    let (front, behind) =
        if outward { (j, j.checked_sub(1)) } else { (j.checked_sub(1)?, Some(j)) };
    if front >= ny || mesh.regions()[mesh.cell(i, front)] != AIR {
        return None;
    }
    let side = if outward { Side::Bottom } else { Side::Top };
    let behind = behind.filter(|b| *b < ny).map(|b| mesh.cell(i, b));
    let (owner, backing) = backed(mesh, surfaces, behind, side, i)?;
    let is_solid = |k: usize| mesh.regions()[mesh.cell(i, k)] != AIR;
    let end = if outward {
        (front..ny).find(|k| is_solid(*k)).unwrap_or(ny)
    } else {
        (0..=front).rev().find(|k| is_solid(*k)).map_or(0, |k| k + 1)
    };
    Some(Face {
        owner,
        air_cell: mesh.cell(i, front),
        backing,
        area: mesh.y_area(i),
        ends: [[mesh.x()[i], mesh.y()[j]], [mesh.x()[i + 1], mesh.y()[j]]],
        normal: [0.0, facing],
        gap: (mesh.y()[end] - mesh.y()[j]).abs(),
    })
}

/// Owner and backing of a face with the cell `behind` it, or on boundary face `n` of a side;
/// `None` where air meets air or a mirror.
fn backed(
    mesh: &Mesh,
    surfaces: &Surfaces,
    behind: Option<usize>,
    side: Side,
    n: usize,
) -> Option<(Owner, Backing)> {
    if let Some(cell) = behind {
        let region = mesh.regions()[cell];
        return (region != AIR).then_some((Owner::Block(region as usize), Backing::Cell(cell)));
    }
    let edge = Backing::Edge { side, n };
    match mesh.slots(side)[n] {
        Some(slot) => Some((Owner::Slot(slot as usize), edge)),
        None if is_mirror(mesh, surfaces, side) => None,
        None => Some((Owner::Side(side), edge)),
    }
}

/// Whether a side mirrors the section. The curved side of an axisymmetric section has no image
/// and is a white wall instead.
pub(super) fn is_mirror(mesh: &Mesh, surfaces: &Surfaces, side: Side) -> bool {
    let curved = mesh.geometry() == Geometry::Axisymmetric && side == Side::Right;
    let axis = mesh.geometry() == Geometry::Axisymmetric && side == Side::Left;
    surfaces.sides[side.index()] == SideSurface::Mirror && !curved && !axis
}
