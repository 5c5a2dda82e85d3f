//! Conductances between cell centres and from cells to the section's sides.
//!
//! Everything that asks for a heat flow (energy equation, balances, heat flux field) takes it from
//! here, so that the flows cancel exactly between neighbours.

use ventrise_mesh::{AIR, Side};

use crate::outer::Outer;
use crate::{Air, Problem, SideCondition};

/// Conductance between two cell centres [W/K], two half cells in series:
/// A / (d₀/k₀ + R + d₁/k₁). `area` A [m²]; `dist` d, centre to face [m]; `k` [W/(m·K)], > 0; `joint`
/// R, resistance of the joint between them [K·m²/W].
pub(crate) fn face_conductance(area: f64, dist: [f64; 2], k: [f64; 2], joint: f64) -> f64 {
    area / (dist[0] / k[0] + joint + dist[1] / k[1])
}

/// Resistance of the joint between two cells [K·m²/W]; none between cells of one block or air.
fn joint(problem: &Problem, cells: [usize; 2]) -> f64 {
    let joints = &problem.description().joints;
    let regions = cells.map(|n| problem.mesh().regions()[n]);
    if joints.is_empty() || regions[0] == regions[1] || regions.contains(&AIR) {
        return 0.0;
    }
    let pair = regions.map(|r| r as usize);
    let of = |j: &&crate::Joint| j.blocks == pair || j.blocks == [pair[1], pair[0]];
    joints.iter().filter(of).map(|j| j.resistance).sum()
}

/// Conductivity of a cell along x and y [W/(m·K)].
pub(crate) fn cell_conductivity(problem: &Problem, air: &Air, cell: usize) -> [f64; 2] {
    match problem.mesh().regions()[cell] {
        AIR => [air.conductivity; 2],
        block => {
            let d = problem.description();
            d.solids[d.blocks[block as usize].solid].conductivity
        }
    }
}

/// Conductance through the interior x-face (i, j), 0 < i < nx [W/K].
pub(crate) fn x_conductance(problem: &Problem, air: &Air, i: usize, j: usize) -> f64 {
    let mesh = problem.mesh();
    let cells = [i - 1, i].map(|c| mesh.cell(c, j));
    let k = cells.map(|n| cell_conductivity(problem, air, n)[0]);
    let dist = [0.5 * mesh.dx(i - 1), 0.5 * mesh.dx(i)];
    face_conductance(mesh.x_area(i) * mesh.dy(j), dist, k, joint(problem, cells))
}

/// Conductance through the interior y-face (i, j), 0 < j < ny [W/K].
pub(crate) fn y_conductance(problem: &Problem, air: &Air, i: usize, j: usize) -> f64 {
    let mesh = problem.mesh();
    let cells = [j - 1, j].map(|c| mesh.cell(i, c));
    let k = cells.map(|n| cell_conductivity(problem, air, n)[1]);
    let dist = [0.5 * mesh.dy(j - 1), 0.5 * mesh.dy(j)];
    face_conductance(mesh.y_area(i), dist, k, joint(problem, cells))
}

/// Heat exchange of a boundary face: conductance · (rise − T) + heat enters the cell beside it.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub(crate) struct SideExchange {
    /// From the cell centre to outside [W/K].
    pub conductance: f64,
    /// Outside temperature rise [K].
    pub rise: f64,
    /// Given heat into the section [W].
    pub heat: f64,
}

/// The cell beside boundary face `n` of a side (n counts along y or x from zero).
pub(crate) fn side_cell(problem: &Problem, side: Side, n: usize) -> (usize, usize) {
    let mesh = problem.mesh();
    match side {
        Side::Left => (0, n),
        Side::Right => (mesh.nx() - 1, n),
        Side::Bottom => (n, 0),
        Side::Top => (n, mesh.ny() - 1),
    }
}

/// Area of boundary face `n` of a side [m²].
pub(crate) fn side_area(problem: &Problem, side: Side, n: usize) -> f64 {
    let mesh = problem.mesh();
    match side {
        Side::Left => mesh.x_area(0) * mesh.dy(n),
        Side::Right => mesh.x_area(mesh.nx()) * mesh.dy(n),
        Side::Bottom | Side::Top => mesh.y_area(n),
    }
}

/// From the centre of the cell beside boundary face `n` of a side to the face [K·m²/W].
pub(crate) fn half_resistance(problem: &Problem, air: &Air, side: Side, n: usize) -> f64 {
    let mesh = problem.mesh();
    let (i, j) = side_cell(problem, side, n);
    let k = cell_conductivity(problem, air, mesh.cell(i, j));
    match side {
        Side::Left | Side::Right => 0.5 * mesh.dx(i) / k[0],
        Side::Bottom | Side::Top => 0.5 * mesh.dy(j) / k[1],
    }
}

/// Conduction through boundary face `n` of a side; nothing through slots and open sides. `outer`
/// holds the outer faces, where sides have them.
pub(crate) fn side_exchange(
    problem: &Problem,
    air: &Air,
    outer: &Outer,
    side: Side,
    n: usize,
) -> SideExchange {
    let d = problem.description();
    if problem.mesh().slots(side)[n].is_some() {
        return SideExchange::default();
    }
    let half = half_resistance(problem, air, side, n);
    let area = side_area(problem, side, n);
    match d.sides[side.index()] {
        SideCondition::Temperature(t) => {
            SideExchange { conductance: area / half, rise: t - d.ambient, heat: 0.0 }
        }
        SideCondition::Film { coefficient, temperature } => SideExchange {
            conductance: area / (half + 1.0 / coefficient),
            rise: temperature - d.ambient,
            heat: 0.0,
        },
        SideCondition::Outside(_) => {
            outer.face(side, n).map_or_else(SideExchange::default, |face| face.exchange)
        }
        SideCondition::Flux(q) => SideExchange { heat: q * area, ..Default::default() },
        _ => SideExchange::default(),
    }
}
