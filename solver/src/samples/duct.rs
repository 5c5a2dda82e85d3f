//! Forced flow through straight ducts: friction and heat transfer far from the entrance.
//!
//! The duct stands upright without gravity; a pressure rise in the floor slot drives air of
//! density 1 through it at a mean speed of about 1 m/s. Hydraulic diameter D_h = 2 m.

use ventrise_mesh::{Geometry, Rectangle, Side, SlotSpan};

use super::lines::{Grading, graded, joined, uniform};
use super::read::{extreme, interpolate};
use super::{AMBIENT, SampleError, empty_layout, plain, solid, unit_air};
use crate::conduction::side_exchange;
use crate::outer::Outer;
use crate::{Air, Block, Problem, SideCondition, Slot, State};

/// Cross-section of a duct.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum DuctShape {
    /// Between parallel plates.
    Plates,
    /// A pipe.
    Pipe,
    /// Between coaxial cylinders of this radius ratio κ = r_i/r_o, outer gap width 1.
    Annulus(f64),
}

/// Which walls are 1 K above the entering air; the others are adiabatic.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum HeatedWalls {
    /// None (no heat at all).
    None,
    /// The right (outer) wall.
    Outer,
    /// Both plates.
    Both,
}

/// A duct.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Duct {
    /// Cross-section.
    pub shape: DuctShape,
    /// Heated walls.
    pub heated: HeatedWalls,
    /// Reynolds number on hydraulic diameter and 1 m/s [-].
    pub reynolds: f64,
    /// Prandtl number [-].
    pub prandtl: f64,
    /// Length over hydraulic diameter [-].
    pub length: f64,
    /// Cells across the air.
    pub across: usize,
    /// Cells along the duct, finer at the entrance.
    pub along: usize,
}

/// Hydraulic diameter of every duct [m].
const DIAMETER: f64 = 2.0;

impl Duct {
    /// The problem.
    ///
    /// # Errors
    /// Numbers out of range.
    pub fn problem(&self) -> Result<Problem, SampleError> {
        let height = self.length * DIAMETER;
        let geometry = match self.shape {
            DuctShape::Plates => Geometry::Planar { depth: 1.0 },
            DuctShape::Pipe | DuctShape::Annulus(_) => Geometry::Axisymmetric,
        };
        let inner = self.inner();
        let outer = inner + 1.0;
        let mut layout = empty_layout(geometry, outer, height);
        let air_lines = uniform(inner, outer, self.across);
        let x = if inner > 0.0 {
            layout.blocks.push(Rectangle { x: [0.0, inner], y: [0.0, height] });
            joined(&[uniform(0.0, inner, 4), air_lines])
        } else {
            air_lines
        };
        for side in [Side::Bottom, Side::Top] {
            layout.slots.push(SlotSpan { side, span: [inner, outer] });
        }
        let y = graded(0.0, height, self.along, Grading::Start(1.5));
        let viscosity = DIAMETER / self.reynolds;
        let mut air = unit_air(viscosity);
        air.conductivity = viscosity / self.prandtl;
        let mut d = plain(&layout, x, y, air)?;
        if inner > 0.0 {
            d.solids.push(solid(air.conductivity));
            d.blocks.push(Block { solid: 0, heat: 0.0 });
        }
        // Friction of the developed flow plus the kinetic energy it takes.
        let friction = self.friction() / self.reynolds * self.length;
        let drive = 0.5 * (friction + 2.0);
        d.slots = vec![Slot { drive, ..Slot::with_loss(0.0) }, Slot::with_loss(0.0)];
        let hot = SideCondition::Temperature(AMBIENT + 1.0);
        if self.heated != HeatedWalls::None {
            d.sides[Side::Right.index()] = hot;
        }
        if self.heated == HeatedWalls::Both {
            d.sides[Side::Left.index()] = hot;
        }
        Ok(Problem::new(d)?)
    }

    /// Exact f·Re of the developed flow (Darcy friction factor on the hydraulic diameter).
    pub fn friction(&self) -> f64 {
        match self.shape {
            DuctShape::Plates => 96.0,
            DuctShape::Pipe => 64.0,
            DuctShape::Annulus(k) => {
                64.0 * (1.0 - k).powi(2) / (1.0 + k * k - (1.0 - k * k) / (1.0 / k).ln())
            }
        }
    }

    fn inner(&self) -> f64 {
        match self.shape {
            DuctShape::Annulus(k) => k / (1.0 - k),
            _ => 0.0,
        }
    }

    /// Volume flow over area [m/s].
    pub fn mean_speed(&self, problem: &Problem, state: &State) -> f64 {
        let mesh = problem.mesh();
        let flow: f64 = (0..mesh.nx()).map(|i| state.v[i] * mesh.y_area(i)).sum();
        flow / mesh.y_area_between(self.inner(), self.inner() + 1.0)
    }

    /// f·Re between two heights, given as shares of the length [-].
    pub fn friction_between(&self, problem: &Problem, state: &State, shares: [f64; 2]) -> f64 {
        let mesh = problem.mesh();
        let speed = self.mean_speed(problem, state);
        let rows = shares.map(|share| self.row_at(problem, share));
        let centre = mesh.nx() - self.across.div_ceil(2);
        let [low, high] = rows.map(|j| [mesh.y_centre(j), state.p[mesh.cell(centre, j)]]);
        let gradient = (low[1] - high[1]) / (high[0] - low[0]);
        gradient * 2.0 * DIAMETER.powi(2) * self.reynolds / (DIAMETER * speed)
    }

    /// Highest over mean speed at a height, given as share of the length [-].
    pub fn peak_ratio(&self, problem: &Problem, state: &State, share: f64) -> f64 {
        let mesh = problem.mesh();
        let j = self.row_at(problem, share);
        let profile: Vec<[f64; 2]> =
            (0..mesh.nx()).map(|i| [mesh.x_centre(i), state.v[i + j * mesh.nx()]]).collect();
        // Mirror images, so that the peak of a pipe lies inside the profile.
        let images = profile.iter().rev().map(|[x, v]| [-x, *v]);
        let mirrored: Vec<[f64; 2]> = images.chain(profile.iter().copied()).collect();
        let peak = match self.shape {
            DuctShape::Pipe => interpolate(&mirrored, 0.0),
            _ => extreme(&profile).value,
        };
        peak / self.mean_speed(problem, state)
    }

    /// Nusselt number on the hydraulic diameter at a height, given as share of the length: wall
    /// flux over wall minus bulk temperature [-].
    pub fn nusselt_at(&self, problem: &Problem, air: &Air, state: &State, share: f64) -> f64 {
        let mesh = problem.mesh();
        let nx = mesh.nx();
        let j = self.row_at(problem, share);
        let (mut heat, mut flow) = (0.0, 0.0);
        for i in 0..nx {
            // Both at the cell's centre height.
            let v = 0.5 * (state.v[i + j * nx] + state.v[i + (j + 1) * nx]);
            heat += v * mesh.y_area(i) * state.t[mesh.cell(i, j)];
            flow += v * mesh.y_area(i);
        }
        let bulk = heat / flow;
        let mut flux = 0.0;
        let mut area = 0.0;
        for (side, i) in [(Side::Left, 0), (Side::Right, nx - 1)] {
            let exchange = side_exchange(problem, air, &Outer::default(), side, j);
            if exchange.conductance > 0.0 {
                flux += exchange.conductance * (exchange.rise - state.t[mesh.cell(i, j)]);
                area += crate::conduction::side_area(problem, side, j);
            }
        }
        flux / area * DIAMETER / (air.conductivity * (1.0 - bulk))
    }

    fn row_at(&self, problem: &Problem, share: f64) -> usize {
        let mesh = problem.mesh();
        let y = share * self.length * DIAMETER;
        mesh.y().partition_point(|line| *line <= y).clamp(1, mesh.ny()) - 1
    }
}
