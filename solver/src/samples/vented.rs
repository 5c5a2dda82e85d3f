//! Natural draught: open channel, stack, and two vented housings.

use std::f64::consts::PI;

use ventrise_mesh::{Geometry, Rectangle, Side, SlotSpan};

use super::duct::HeatedWalls;
use super::lines::{Grading, graded, joined, uniform};
use super::read::{side_heat, slot_flow};
use super::{AMBIENT, SampleError, empty_layout, plain, solid, unit_air};
use crate::{Air, Block, Problem, SideCondition, Slot, Sources, State};

/// Upright channel of spacing 1 between plates 1 K above ambient, open at both ends.
///
/// # Source
/// Aung 1972; Bar-Cohen & Rohsenow 1984: fully developed Nu = El/24 with both plates heated,
/// El/12 with one.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Channel {
    /// Channel Rayleigh (Elenbaas) number g·β·ΔT·S⁴/(ν·α·L) [-].
    pub elenbaas: f64,
    /// Height over spacing [-].
    pub height: f64,
    /// Heated plates.
    pub heated: HeatedWalls,
    /// Cells across.
    pub across: usize,
    /// Cells along the height, finer at both ends.
    pub along: usize,
}

impl Channel {
    /// The problem.
    ///
    /// # Errors
    /// Numbers out of range.
    pub fn problem(&self) -> Result<Problem, SampleError> {
        let layout = empty_layout(Geometry::Planar { depth: 1.0 }, 1.0, self.height);
        let x = graded(0.0, 1.0, self.across, Grading::Both(1.0));
        let y = graded(0.0, self.height, self.along, Grading::Both(2.0));
        let mut d = plain(&layout, x, y, unit_air(0.7))?;
        d.gravity = [0.0, -self.elenbaas * 0.7 * self.height];
        d.sides[Side::Bottom.index()] = SideCondition::Open;
        d.sides[Side::Top.index()] = SideCondition::Open;
        let hot = SideCondition::Temperature(AMBIENT + 1.0);
        if self.heated != HeatedWalls::None {
            d.sides[Side::Right.index()] = hot;
        }
        if self.heated == HeatedWalls::Both {
            d.sides[Side::Left.index()] = hot;
        }
        Ok(Problem::new(d)?)
    }

    /// Mean Nusselt number of the heated plates on spacing and wall minus ambient [-].
    pub fn nusselt(&self, problem: &Problem, air: &Air, state: &State) -> f64 {
        let heat = [Side::Left, Side::Right].map(|s| side_heat(problem, air, state, s));
        let plates = if self.heated == HeatedWalls::Both { 2.0 } else { 1.0 };
        (heat[0] + heat[1]) / (plates * self.height)
    }
}

/// A frictionless shaft, warm above its lowest part: vents with losses over the whole floor and
/// roof, heat spread over the lowest tenth. The flow is uniform over the section, so that
/// ρ·g·β·ΔT·H = ½·ρ·u²·(1 + K_in + K_out) holds without approximation.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Stack {
    /// Area of the section and of both vents [m²].
    pub area: f64,
    /// Height of the warm column H, from the middle of the heated part [m].
    pub height: f64,
    /// Loss coefficients of floor and roof vent [-].
    pub loss: [f64; 2],
    /// Heat [W].
    pub heat: f64,
    /// Ambient temperature [K].
    pub ambient: f64,
    /// Air.
    pub air: Air,
    /// Gravity [m/s²].
    pub gravity: f64,
    /// Cells along the height, a multiple of 20.
    pub along: usize,
}

impl Stack {
    /// The problem.
    ///
    /// # Errors
    /// Numbers out of range.
    pub fn problem(&self) -> Result<Problem, SampleError> {
        let width = 0.1 * self.height;
        // The middle of the heated tenth lies a twentieth above the floor.
        let total = self.height / 0.95;
        let mut layout = empty_layout(Geometry::Planar { depth: self.area / width }, width, total);
        for side in [Side::Bottom, Side::Top] {
            layout.slots.push(SlotSpan { side, span: [0.0, width] });
        }
        let (x, y) = (uniform(0.0, width, 4), uniform(0.0, total, self.along));
        let mut d = plain(&layout, x, y, self.air)?;
        d.ambient = self.ambient;
        d.gravity = [0.0, -self.gravity];
        d.slots = self.loss.map(Slot::with_loss).to_vec();
        d.sides[Side::Left.index()] = SideCondition::Symmetry;
        d.sides[Side::Right.index()] = SideCondition::Symmetry;
        let (nx, ny) = (d.mesh.nx(), d.mesh.ny());
        let heated = nx * (ny / 10);
        let mut heat = vec![0.0; nx * ny];
        heat[..heated].fill(self.heat / heated as f64);
        d.sources = Some(Sources {
            x_force: vec![0.0; (nx + 1) * ny],
            y_force: vec![0.0; nx * (ny + 1)],
            heat,
        });
        Ok(Problem::new(d)?)
    }

    /// Exact flow [m³/s]: (2·g·β·H·Q·A² / (ρ·c_p·(1 + K_in + K_out)))^(1/3).
    pub fn exact_flow(&self) -> f64 {
        let loss = 1.0 + self.loss[0] + self.loss[1];
        let draught = 2.0 * self.gravity * self.air.expansion * self.height * self.heat;
        let a = &self.air;
        (draught * self.area.powi(2) / (a.density * a.specific_heat * loss)).cbrt()
    }
}

/// What a vented housing shows.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct HousingResult {
    /// Highest rise of the heated block [K].
    pub rise_max: f64,
    /// Its mean rise [K].
    pub rise_mean: f64,
    /// Air through the housing [m³/s].
    pub flow: f64,
    /// Mean rise of the air that leaves [K].
    pub outlet_rise: f64,
}

/// Air of both housings.
const HOUSING_AIR: Air = Air {
    density: 1.1,
    viscosity: 1.95e-5,
    conductivity: 0.0275,
    specific_heat: 1007.0,
    expansion: 1.0 / 313.15,
};
/// Gravity of both housings [m/s²].
const HOUSING_GRAVITY: f64 = 9.81;

/// Segments between edges [m], each with `cells` times `scale` cells.
fn segments(edges: &[f64], cells: &[usize], scale: usize, grading: Grading) -> Vec<f64> {
    let spans = edges.windows(2).zip(cells);
    joined(&spans.map(|(e, n)| graded(e[0], e[1], n * scale, grading)).collect::<Vec<_>>())
}

fn housing_result(
    problem: &Problem,
    air: &Air,
    state: &State,
    slots: u32,
    core: u32,
) -> HousingResult {
    let (mut flow, mut heat) = (0.0, 0.0);
    for slot in 0..slots {
        let passed = slot_flow(problem, air, state, slot);
        flow += passed.outflow;
        heat += passed.heat_out;
    }
    HousingResult {
        rise_max: super::block_range(problem.mesh(), state, core)[1],
        rise_mean: super::block_mean(problem.mesh(), state, core),
        flow,
        outlet_rise: heat / (air.density * air.specific_heat * flow),
    }
}

/// A planar housing, 120 × 160 mm, 1 m deep: two slots in the floor, two in the roof, a metal
/// block of 15 W in the middle; outer walls adiabatic.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SlotHousing {
    /// Multiplier of the 70 × 92 base cells.
    pub scale: usize,
    /// Heat in the block [W].
    pub heat: f64,
}

impl SlotHousing {
    /// The problem.
    ///
    /// # Errors
    /// Numbers out of range.
    pub fn problem(&self) -> Result<Problem, SampleError> {
        let mut layout = empty_layout(Geometry::Planar { depth: 1.0 }, 0.12, 0.16);
        layout.blocks.push(Rectangle { x: [0.04, 0.08], y: [0.04, 0.12] });
        for side in [Side::Bottom, Side::Top] {
            layout.slots.push(SlotSpan { side, span: [0.01, 0.03] });
            layout.slots.push(SlotSpan { side, span: [0.09, 0.11] });
        }
        let grading = Grading::Both(1.2);
        let x_edges = [0.0, 0.01, 0.03, 0.04, 0.08, 0.09, 0.11, 0.12];
        let x = segments(&x_edges, &[6, 14, 6, 18, 6, 14, 6], self.scale, grading);
        let y = segments(&[0.0, 0.04, 0.12, 0.16], &[28, 36, 28], self.scale, grading);
        let mut d = plain(&layout, x, y, HOUSING_AIR)?;
        d.ambient = 313.15;
        d.gravity = [0.0, -HOUSING_GRAVITY];
        d.solids.push(solid(180.0));
        d.blocks.push(Block { solid: 0, heat: self.heat });
        d.slots = vec![Slot::with_loss(1.5); 4];
        d.parts.push(vec![0]);
        Ok(Problem::new(d)?)
    }

    /// What a solution shows.
    pub fn result(problem: &Problem, air: &Air, state: &State) -> HousingResult {
        housing_result(problem, air, state, 4, 0)
    }
}

/// An axisymmetric housing, inner radius 50 mm, height 150 mm: a ring slot in floor and roof, a
/// core of 5 W with six disc fins; outer walls adiabatic.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct RingHousing {
    /// Multiplier of the 28 × 90 base cells.
    pub scale: usize,
    /// Heat in the core [W].
    pub heat: f64,
}

impl RingHousing {
    /// The problem.
    ///
    /// # Errors
    /// Numbers out of range.
    pub fn problem(&self) -> Result<Problem, SampleError> {
        let mut layout = empty_layout(Geometry::Axisymmetric, 0.05, 0.15);
        layout.blocks.push(Rectangle { x: [0.0, 0.02], y: [0.03, 0.12] });
        let mut y_edges = vec![0.0, 0.03];
        let mut y_cells = vec![14, 6];
        for fin in 0..6 {
            let low = 0.001 * (38.0 + 15.0 * f64::from(fin));
            layout.blocks.push(Rectangle { x: [0.02, 0.032], y: [low, low + 0.002] });
            y_edges.extend([low, low + 0.002]);
            y_cells.extend([2, if fin < 5 { 8 } else { 4 }]);
        }
        y_edges.extend([0.12, 0.15]);
        y_cells.push(14);
        for side in [Side::Bottom, Side::Top] {
            layout.slots.push(SlotSpan { side, span: [0.03, 0.045] });
        }
        let grading = Grading::Both(1.0);
        let x_edges = [0.0, 0.02, 0.03, 0.032, 0.045, 0.05];
        let x = segments(&x_edges, &[4, 8, 2, 10, 4], self.scale, grading);
        let y = segments(&y_edges, &y_cells, self.scale, grading);
        let mut d = plain(&layout, x, y, HOUSING_AIR)?;
        d.ambient = 313.15;
        d.gravity = [0.0, -HOUSING_GRAVITY];
        d.solids.push(solid(180.0));
        d.blocks.push(Block { solid: 0, heat: self.heat });
        d.blocks.extend(vec![Block { solid: 0, heat: 0.0 }; 6]);
        d.slots = vec![Slot::with_loss(1.5); 2];
        d.parts.push(vec![0]);
        Ok(Problem::new(d)?)
    }

    /// What a solution shows.
    pub fn result(problem: &Problem, air: &Air, state: &State) -> HousingResult {
        housing_result(problem, air, state, 2, 0)
    }

    /// Volume of the core [m³].
    pub fn core_volume() -> f64 {
        PI * 0.02 * 0.02 * 0.09
    }
}
