//! Conduction with closed-form answers.

use std::f64::consts::PI;

use ventrise_mesh::{Geometry, Rectangle, Side};

use super::lines::{joined, uniform};
use super::read::{block_mean, interpolate};
use super::{AMBIENT, SampleError, empty_layout, plain, solid, unit_air};
use crate::{Block, Problem, SideCondition, State};

/// A cylindrical shell around a heated core that conducts 1e4 times as well, ends adiabatic,
/// outer face at ambient temperature: Q·ln(r_o/r_i)/(2π·k·H) over the shell, and the core's mean
/// Q/(8π·k_core·H) above its surface.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Shell {
    /// Inner and outer radius [m].
    pub radii: [f64; 2],
    /// Height [m].
    pub height: f64,
    /// Conductivity of the shell [W/(m·K)].
    pub conductivity: f64,
    /// Heat from the core [W].
    pub heat: f64,
    /// Cells across the shell.
    pub cells: usize,
}

/// Conductivity of the core over that of the shell [-].
const CORE: f64 = 1e4;

impl Shell {
    /// The problem.
    ///
    /// # Errors
    /// Numbers out of range.
    pub fn problem(&self) -> Result<Problem, SampleError> {
        let [inner, outer] = self.radii;
        let mut layout = empty_layout(Geometry::Axisymmetric, outer, self.height);
        layout.blocks.push(Rectangle { x: [0.0, inner], y: [0.0, self.height] });
        layout.blocks.push(Rectangle { x: [inner, outer], y: [0.0, self.height] });
        let x = joined(&[uniform(0.0, inner, self.cells), uniform(inner, outer, self.cells)]);
        let mut d = plain(&layout, x, uniform(0.0, self.height, 4), unit_air(0.71))?;
        d.solids = vec![solid(CORE * self.conductivity), solid(self.conductivity)];
        d.blocks = vec![Block { solid: 0, heat: self.heat }, Block { solid: 1, heat: 0.0 }];
        d.sides[Side::Right.index()] = SideCondition::Temperature(AMBIENT);
        Ok(Problem::new(d)?)
    }

    /// Temperature of the core above the outer face [K].
    pub fn difference(problem: &Problem, state: &State) -> f64 {
        block_mean(problem.mesh(), state, 0)
    }

    /// The exact difference over the shell [K].
    pub fn exact_shell(&self) -> f64 {
        let ratio = self.radii[1] / self.radii[0];
        self.heat * ratio.ln() / (2.0 * PI * self.conductivity * self.height)
    }

    /// The exact difference between the core's mean and the outer face [K].
    pub fn exact(&self) -> f64 {
        self.exact_shell() + self.heat / (8.0 * PI * CORE * self.conductivity * self.height)
    }
}

/// A heated rod, its surface at ambient temperature, ends adiabatic: centre above surface
/// q·R²/(4k).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Rod {
    /// Radius R [m].
    pub radius: f64,
    /// Conductivity k [W/(m·K)].
    pub conductivity: f64,
    /// Heat per volume q [W/m³].
    pub heat_density: f64,
    /// Cells along the radius.
    pub cells: usize,
}

impl Rod {
    /// The problem.
    ///
    /// # Errors
    /// Numbers out of range.
    pub fn problem(&self) -> Result<Problem, SampleError> {
        let heat = self.heat_density * PI * self.radius.powi(3);
        heated_layer(Geometry::Axisymmetric, self.radius, self.conductivity, heat, self.cells)
    }

    /// Temperature at the axis [K above the surface].
    pub fn centre(problem: &Problem, state: &State) -> f64 {
        value_at_left(problem, state)
    }

    /// The exact value [K].
    pub fn exact(&self) -> f64 {
        self.heat_density * self.radius.powi(2) / (4.0 * self.conductivity)
    }
}

/// Half a heated slab with a mirror plane on the left, right face at ambient temperature: mirror
/// plane above surface q·L²/(2k).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Slab {
    /// Half thickness L [m].
    pub half_thickness: f64,
    /// Conductivity k [W/(m·K)].
    pub conductivity: f64,
    /// Heat per volume q [W/m³].
    pub heat_density: f64,
    /// Cells along the half thickness.
    pub cells: usize,
}

impl Slab {
    /// The problem (depth 1 m).
    ///
    /// # Errors
    /// Numbers out of range.
    pub fn problem(&self) -> Result<Problem, SampleError> {
        let heat = self.heat_density * self.half_thickness.powi(2);
        let geometry = Geometry::Planar { depth: 1.0 };
        heated_layer(geometry, self.half_thickness, self.conductivity, heat, self.cells)
    }

    /// Temperature on the mirror plane [K above the surface].
    pub fn centre(problem: &Problem, state: &State) -> f64 {
        value_at_left(problem, state)
    }

    /// The exact value [K].
    pub fn exact(&self) -> f64 {
        self.heat_density * self.half_thickness.powi(2) / (2.0 * self.conductivity)
    }
}

/// A heated block as wide as high, left mirror plane or axis, right face at ambient temperature.
fn heated_layer(
    geometry: Geometry,
    width: f64,
    conductivity: f64,
    heat: f64,
    cells: usize,
) -> Result<Problem, SampleError> {
    let mut layout = empty_layout(geometry, width, width);
    layout.blocks.push(Rectangle { x: [0.0, width], y: [0.0, width] });
    let (x, y) = (uniform(0.0, width, cells), uniform(0.0, width, 4));
    let mut d = plain(&layout, x, y, unit_air(0.71))?;
    d.solids.push(solid(conductivity));
    d.blocks.push(Block { solid: 0, heat });
    d.sides[Side::Left.index()] = SideCondition::Symmetry;
    d.sides[Side::Right.index()] = SideCondition::Temperature(AMBIENT);
    Ok(Problem::new(d)?)
}

/// Temperature rise at x = 0 of an even profile, from the first row's cells and their mirror
/// images [K].
fn value_at_left(problem: &Problem, state: &State) -> f64 {
    let mesh = problem.mesh();
    let row: Vec<[f64; 2]> = (0..mesh.nx()).map(|i| [mesh.x_centre(i), state.t[i]]).collect();
    let images = row.iter().rev().map(|[x, t]| [-x, *t]);
    interpolate(&images.chain(row.iter().copied()).collect::<Vec<_>>(), 0.0)
}

/// Layers one behind the other, one of them still air, left face 10 K above the right one
/// (1 m high, depth 1 m): heat flux 10 K / Σ (thickness/conductivity).
#[derive(Debug, Clone, PartialEq)]
pub struct Layers {
    /// Thickness [m] and conductivity [W/(m·K)] of each layer; a solid unless `air`.
    pub layers: Vec<[f64; 2]>,
    /// Which layer is air.
    pub air: Option<usize>,
    /// Cells across each layer.
    pub cells: usize,
}

impl Layers {
    /// The problem (no gravity).
    ///
    /// # Errors
    /// Numbers out of range.
    pub fn problem(&self) -> Result<Problem, SampleError> {
        let width = self.layers.iter().map(|[thickness, _]| thickness).sum();
        let mut layout = empty_layout(Geometry::Planar { depth: 1.0 }, width, 1.0);
        let mut air = unit_air(0.71);
        let mut segments = Vec::new();
        let mut conductivities = Vec::new();
        let mut at = 0.0;
        for (n, [thickness, conductivity]) in self.layers.iter().enumerate() {
            let end = if n + 1 == self.layers.len() { width } else { at + thickness };
            segments.push(uniform(at, end, self.cells));
            if self.air == Some(n) {
                air.conductivity = *conductivity;
            } else {
                layout.blocks.push(Rectangle { x: [at, end], y: [0.0, 1.0] });
                conductivities.push(*conductivity);
            }
            at = end;
        }
        let mut d = plain(&layout, joined(&segments), uniform(0.0, 1.0, 4), air)?;
        d.solids = conductivities.iter().map(|k| solid(*k)).collect();
        d.blocks = (0..conductivities.len()).map(|solid| Block { solid, heat: 0.0 }).collect();
        d.sides[Side::Left.index()] = SideCondition::Temperature(AMBIENT + 10.0);
        d.sides[Side::Right.index()] = SideCondition::Temperature(AMBIENT);
        Ok(Problem::new(d)?)
    }

    /// Thermal resistance of one square metre [m²·K/W].
    pub fn resistance(&self) -> f64 {
        self.layers.iter().map(|[thickness, conductivity]| thickness / conductivity).sum()
    }
}
