//! Closed cavities: natural convection between walls of different temperature.

use ventrise_mesh::{Geometry, Rectangle, Side};

use super::lines::{Grading, graded, joined, uniform};
use super::read::{Extreme, WallHeat, block_mean, extreme, side_heat, wall_flux};
use super::{AMBIENT, SampleError, empty_layout, plain, solid, unit_air};
use crate::{Air, Block, Problem, SideCondition, State};

const HOT: SideCondition = SideCondition::Temperature(AMBIENT + 0.5);
const COLD: SideCondition = SideCondition::Temperature(AMBIENT - 0.5);

/// Unit square, left wall hot, right wall cold, floor and roof adiabatic. Prandtl number 0.71 and
/// Rayleigh number 1e6 by default. Nusselt numbers are heat flows in W, speeds in α/L.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SquareCavity {
    /// Rayleigh number [-].
    pub rayleigh: f64,
    /// Prandtl number [-].
    pub prandtl: f64,
    /// Cells along each side.
    pub cells: usize,
    /// Their grading.
    pub grading: Grading,
    /// Cold wall left and hot wall right instead.
    pub mirrored: bool,
}

impl Default for SquareCavity {
    fn default() -> Self {
        SquareCavity {
            rayleigh: 1e6,
            prandtl: 0.71,
            cells: 64,
            grading: Grading::Both(2.0),
            mirrored: false,
        }
    }
}

impl SquareCavity {
    /// The problem.
    ///
    /// # Errors
    /// Numbers out of range.
    pub fn problem(&self) -> Result<Problem, SampleError> {
        let lines = graded(0.0, 1.0, self.cells, self.grading);
        let layout = empty_layout(Geometry::Planar { depth: 1.0 }, 1.0, 1.0);
        let mut d = plain(&layout, lines.clone(), lines, unit_air(self.prandtl))?;
        d.gravity = [0.0, -self.rayleigh * self.prandtl];
        let [hot, cold] =
            if self.mirrored { [Side::Right, Side::Left] } else { [Side::Left, Side::Right] };
        d.sides[hot.index()] = HOT;
        d.sides[cold.index()] = COLD;
        Ok(Problem::new(d)?)
    }
}

/// Highest local flux of a wall, and the one at its upper end (where the neighbouring wall is
/// adiabatic, so the flux is even about the corner) [W/m²].
pub fn hot_wall(
    problem: &Problem,
    air: &Air,
    state: &State,
    side: Side,
) -> (WallHeat, Extreme, f64) {
    let wall = wall_flux(problem, air, state, side);
    let highest = extreme(&wall.local);
    let mesh = problem.mesh();
    let end = match side {
        Side::Left | Side::Right => mesh.y()[mesh.ny()],
        Side::Bottom | Side::Top => mesh.x()[mesh.nx()],
    };
    let corner = match wall.local[..] {
        [.., [y2, q2], [y1, q1]] => {
            let [s1, s2] = [y1, y2].map(|y| (end - y).powi(2));
            (q1 * s2 - q2 * s1) / (s2 - s1)
        }
        _ => f64::NAN,
    };
    (wall, highest, corner)
}

/// Unit square heated from below, cooled from above, side walls adiabatic; Prandtl number 0.71.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct HeatedFromBelow {
    /// Rayleigh number [-].
    pub rayleigh: f64,
    /// Cells along each side.
    pub cells: usize,
    /// Their grading.
    pub grading: Grading,
}

impl HeatedFromBelow {
    /// The problem.
    ///
    /// # Errors
    /// Numbers out of range.
    pub fn problem(&self) -> Result<Problem, SampleError> {
        let lines = graded(0.0, 1.0, self.cells, self.grading);
        let layout = empty_layout(Geometry::Planar { depth: 1.0 }, 1.0, 1.0);
        let mut d = plain(&layout, lines.clone(), lines, unit_air(0.71))?;
        d.gravity = [0.0, -self.rayleigh * 0.71];
        d.sides[Side::Bottom.index()] = HOT;
        d.sides[Side::Top.index()] = COLD;
        Ok(Problem::new(d)?)
    }
}

/// A start that turns over once: stream function strength·sin²(πx)·sin²(πy) in a unit square
/// [m³/s] on the straight temperature profile from hot floor to cold roof, tilted along.
pub fn overturning_start(problem: &Problem, strength: f64) -> State {
    use std::f64::consts::PI;
    let mesh = problem.mesh();
    let (nx, ny) = (mesh.nx(), mesh.ny());
    let psi = |x: f64, y: f64| strength * ((PI * x).sin() * (PI * y).sin()).powi(2);
    let mut state = State::rest(mesh);
    for j in 0..ny {
        for i in 0..=nx {
            let x = mesh.x()[i];
            state.u[i + j * (nx + 1)] =
                (psi(x, mesh.y()[j + 1]) - psi(x, mesh.y()[j])) / mesh.dy(j);
        }
    }
    for j in 0..=ny {
        for i in 0..nx {
            let y = mesh.y()[j];
            state.v[i + j * nx] = -(psi(mesh.x()[i + 1], y) - psi(mesh.x()[i], y)) / mesh.dx(i);
        }
    }
    for j in 0..ny {
        for i in 0..nx {
            let (x, y) = (mesh.x_centre(i), mesh.y_centre(j));
            // Warm where the roll rises: v = −∂ψ/∂x.
            let tilt = -0.05 * strength * (2.0 * PI * x).sin() * (PI * y).sin();
            state.t[mesh.cell(i, j)] = 0.5 - y + tilt.clamp(-0.2, 0.2);
        }
    }
    state
}

/// Unit square of air beside a conducting wall 0.2 thick (left, outside the square) whose outer
/// face is cold; right wall hot, floor and roof adiabatic; Prandtl number 0.7.
///
/// # Source
/// Kaminski & Prakash 1986.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ConductingWall {
    /// Grashof number on the overall temperature difference [-].
    pub grashof: f64,
    /// Conductivity of the wall over that of air [-].
    pub ratio: f64,
    /// Cells along each side of the air.
    pub cells: usize,
    /// Their grading.
    pub grading: Grading,
}

impl ConductingWall {
    /// The problem.
    ///
    /// # Errors
    /// Numbers out of range.
    pub fn problem(&self) -> Result<Problem, SampleError> {
        let mut layout = empty_layout(Geometry::Planar { depth: 1.0 }, 1.2, 1.0);
        layout.blocks.push(Rectangle { x: [0.0, 0.2], y: [0.0, 1.0] });
        let x = joined(&[
            uniform(0.0, 0.2, (self.cells / 4).max(2)),
            graded(0.2, 1.2, self.cells, self.grading),
        ]);
        let y = graded(0.0, 1.0, self.cells, self.grading);
        let mut d = plain(&layout, x, y, unit_air(0.7))?;
        d.gravity = [0.0, -self.grashof * 0.7 * 0.7];
        d.solids.push(solid(self.ratio));
        d.blocks.push(Block { solid: 0, heat: 0.0 });
        d.sides[Side::Left.index()] = COLD;
        d.sides[Side::Right.index()] = HOT;
        Ok(Problem::new(d)?)
    }
}

/// The square cavity with a centred conducting square in it; Prandtl number 0.71.
///
/// # Source
/// House, Beckermann & Smith 1990.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ConductingBlock {
    /// Rayleigh number on the cavity [-].
    pub rayleigh: f64,
    /// Side of the block over that of the cavity, ζ [-].
    pub size: f64,
    /// Conductivity of the block over that of air [-].
    pub ratio: f64,
    /// Cells across each gap beside the block.
    pub gap_cells: usize,
    /// Cells across the block.
    pub block_cells: usize,
    /// Grading of every segment.
    pub grading: Grading,
    /// Heat in the block [W]; with heat, all four walls are cold.
    pub heat: f64,
}

impl Default for ConductingBlock {
    fn default() -> Self {
        ConductingBlock {
            rayleigh: 1e5,
            size: 0.5,
            ratio: 1.0,
            gap_cells: 24,
            block_cells: 32,
            grading: Grading::Both(1.0),
            heat: 0.0,
        }
    }
}

impl ConductingBlock {
    /// The problem.
    ///
    /// # Errors
    /// Numbers out of range.
    pub fn problem(&self) -> Result<Problem, SampleError> {
        let [from, to] = [0.5 * (1.0 - self.size), 0.5 * (1.0 + self.size)];
        let mut layout = empty_layout(Geometry::Planar { depth: 1.0 }, 1.0, 1.0);
        layout.blocks.push(Rectangle { x: [from, to], y: [from, to] });
        let lines = joined(&[
            graded(0.0, from, self.gap_cells, self.grading),
            graded(from, to, self.block_cells, self.grading),
            graded(to, 1.0, self.gap_cells, self.grading),
        ]);
        let mut d = plain(&layout, lines.clone(), lines, unit_air(0.71))?;
        d.gravity = [0.0, -self.rayleigh * 0.71];
        d.solids.push(solid(self.ratio));
        d.blocks.push(Block { solid: 0, heat: self.heat });
        d.parts.push(vec![0]);
        if self.heat == 0.0 {
            d.sides[Side::Left.index()] = HOT;
            d.sides[Side::Right.index()] = COLD;
        } else {
            d.sides = [SideCondition::Temperature(AMBIENT); 4];
        }
        Ok(Problem::new(d)?)
    }
}

/// Vertical annulus of gap 1 and height `aspect`: inner wall hot, outer wall cold, ends
/// adiabatic.
///
/// The inner wall is the surface of a core that conducts 1e4 times as well as air and is heated
/// throughout; its temperature comes out, 1 K above the cold wall when the heat belongs to the
/// Rayleigh number asked for. `nusselt_guess` is the guess of Nu_i that sets the heat.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Annulus {
    /// Rayleigh number on the gap at a temperature difference of 1 K [-].
    pub rayleigh: f64,
    /// Prandtl number [-].
    pub prandtl: f64,
    /// Outer over inner radius [-].
    pub radius_ratio: f64,
    /// Height over gap [-].
    pub aspect: f64,
    /// Nusselt number at the inner wall that sets the heat [-].
    pub nusselt_guess: f64,
    /// Cells across the gap; times `aspect` along the height.
    pub cells: usize,
    /// Their grading.
    pub grading: Grading,
}

/// Conductivity of the core over that of air [-].
const CORE: f64 = 1e4;

/// What an annulus shows.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct AnnulusNusselt {
    /// Nusselt number at the inner wall on the gap [-].
    pub inner: f64,
    /// The same at the outer wall [-].
    pub outer: f64,
    /// Rayleigh number on the temperature difference that came out [-].
    pub rayleigh: f64,
}

impl Annulus {
    /// Inner radius [m].
    pub fn inner_radius(&self) -> f64 {
        1.0 / (self.radius_ratio - 1.0)
    }

    /// The problem.
    ///
    /// # Errors
    /// Numbers out of range.
    pub fn problem(&self) -> Result<Problem, SampleError> {
        let [inner, outer] = [self.inner_radius(), self.inner_radius() + 1.0];
        let mut layout = empty_layout(Geometry::Axisymmetric, outer, self.aspect);
        layout.blocks.push(Rectangle { x: [0.0, inner], y: [0.0, self.aspect] });
        let x = joined(&[
            graded(0.0, inner, (self.cells / 4).max(4), Grading::End(1.5)),
            graded(inner, outer, self.cells, self.grading),
        ]);
        let along = (self.cells as f64 * self.aspect).round() as usize;
        let y = graded(0.0, self.aspect, along, self.grading);
        let mut d = plain(&layout, x, y, unit_air(self.prandtl))?;
        d.gravity = [0.0, -self.rayleigh * self.prandtl];
        d.solids.push(solid(CORE));
        let area = 2.0 * std::f64::consts::PI * inner * self.aspect;
        d.blocks.push(Block { solid: 0, heat: self.nusselt_guess * area });
        d.parts.push(vec![0]);
        d.sides[Side::Right.index()] = SideCondition::Temperature(AMBIENT);
        Ok(Problem::new(d)?)
    }

    /// Nusselt numbers of a solution.
    pub fn nusselt(&self, problem: &Problem, air: &Air, state: &State) -> AnnulusNusselt {
        // The core's mean lies Q/(8π·k·H) above its surface.
        let heat = problem.description().blocks[0].heat;
        let inside = heat / (8.0 * std::f64::consts::PI * CORE * self.aspect);
        let difference = block_mean(problem.mesh(), state, 0) - inside;
        let per_radius = 2.0 * std::f64::consts::PI * self.aspect * difference;
        AnnulusNusselt {
            inner: heat / (per_radius * self.inner_radius()),
            outer: -side_heat(problem, air, state, Side::Right)
                / (per_radius * (self.inner_radius() + 1.0)),
            rayleigh: self.rayleigh * difference,
        }
    }
}
