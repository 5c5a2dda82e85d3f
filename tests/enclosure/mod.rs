//! Sections with radiating surfaces, and what the radiation proofs read off them.

#![allow(dead_code, clippy::unwrap_used, clippy::print_stdout)]

use ventrise_mesh::{Geometry, Layout, Mesh, Rectangle, Side};
use ventrise_solver::samples::uniform;
use ventrise_solver::{Owner, Patch, Radiation, SideSurface, Surfaces};

pub const PLANAR: Geometry = Geometry::Planar { depth: 1.0 };
pub const RING: Geometry = Geometry::Axisymmetric;

/// Exact view factors and closed forms: what is left is round-off in planar sections and the
/// quadrature over p in axisymmetric ones.
pub const BAND: f64 = 1e-3;

pub const BLACK: SideSurface = SideSurface::Wall(1.0);
pub const OPEN: SideSurface = SideSurface::Opening;
pub const MIRROR: SideSurface = SideSurface::Mirror;

pub fn section(
    geometry: Geometry,
    size: [f64; 2],
    cells: [usize; 2],
    blocks: &[Rectangle],
    x_lines: &[f64],
) -> Mesh {
    let layout = Layout {
        geometry,
        width: size[0],
        height: size[1],
        blocks: blocks.to_vec(),
        slots: Vec::new(),
        x_lines: x_lines.to_vec(),
        y_lines: Vec::new(),
        walls: [true; 4],
    };
    Mesh::from_lines(&layout, uniform(0.0, size[0], cells[0]), uniform(0.0, size[1], cells[1]))
        .unwrap()
}

pub fn radiation(
    mesh: &Mesh,
    blocks: &[f64],
    sides: [SideSurface; 4],
    patches: usize,
) -> Radiation {
    let radiation = Radiation::new(mesh, &Surfaces { blocks: blocks.to_vec(), sides }, patches);
    let radiation = radiation.unwrap();
    let correction = radiation.correction();
    println!("{} patches, {correction:?}", radiation.patches().len());
    assert!(correction.left < 1e-10, "rows do not add up");
    radiation
}

pub fn on(side: Side) -> impl Fn(&Patch) -> bool {
    move |p| p.owner == Owner::Side(side)
}

/// View factor between two groups of patches, Σ A_i·F_ij over Σ A_i.
pub fn factor(r: &Radiation, from: impl Fn(&Patch) -> bool, to: impl Fn(&Patch) -> bool) -> f64 {
    let (mut view, mut area) = (0.0, 0.0);
    for (i, p) in r.patches().iter().enumerate().filter(|(_, p)| from(p)) {
        area += p.area;
        view +=
            r.patches().iter().zip(r.view(i)).filter(|(q, _)| to(q)).map(|(_, v)| v).sum::<f64>();
    }
    view / area
}

/// Net heat that leaves a group of patches [W] when the temperature is one by owner.
pub fn heat(r: &Radiation, of: impl Fn(&Patch) -> bool, t: impl Fn(&Patch) -> f64) -> f64 {
    let temperatures: Vec<f64> = r.patches().iter().map(t).collect();
    let heat = r.net_heat(&temperatures);
    let total: f64 = heat.iter().sum();
    let size: f64 = heat.iter().map(|q| q.abs()).sum();
    assert!(total.abs() < 1e-12 * size, "heat does not balance: {total} of {size}");
    r.patches().iter().zip(heat).filter(|(p, _)| of(p)).map(|(_, q)| q).sum()
}
