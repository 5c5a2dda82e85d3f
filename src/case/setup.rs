//! From a case to a mesh and a problem.

use ventrise_mesh::{Generated, Layout, Mesh, MeshError, Side, SlotSpan, Spacing, generate};
use ventrise_solver::{
    AirModel, Block, Description, Fan, HeatLaw, Joint, Problem, ProblemError, Settings,
    SideCondition, SideSurface, Slot, Solid, Surfaces,
};

use super::estimate::{Estimate, GRAVITY};
use super::model::{AirChoice, Case, ProbeShape};
use super::units::rounded_value;

/// Cell counts of every segment are multiples of this, so that two coarser meshes keep every edge.
const MULTIPLE: usize = 4;

/// Stand-ins where a material gives none [kg/m³], [J/(kg·K)]: no steady result depends on them.
const DENSITY: f64 = 2000.0;
const SPECIFIC_HEAT: f64 = 1000.0;

/// Makes the mesh of a case.
///
/// # Errors
/// What the mesh crate refuses: too many cells, a spacing out of range.
pub fn mesh(case: &Case) -> Result<Generated, MeshError> {
    generate(&layout(case), &spacing(case))
}

/// The shapes that the mesh must show.
pub fn layout(case: &Case) -> Layout {
    let section = case.section();
    let (mut x_lines, mut y_lines) = (Vec::new(), Vec::new());
    for probe in case.probes() {
        if let ProbeShape::Line { from, to } = probe.shape {
            x_lines.extend([from[0], to[0]]);
            y_lines.extend([from[1], to[1]]);
        }
    }
    for lines in [&mut x_lines, &mut y_lines] {
        lines.sort_by(f64::total_cmp);
        lines.dedup();
    }
    Layout {
        geometry: section.geometry,
        width: section.width,
        height: section.height,
        blocks: case.blocks().iter().map(|b| b.rectangle).collect(),
        slots: case.slots().iter().map(|s| SlotSpan { side: s.side, span: s.span }).collect(),
        x_lines,
        y_lines,
        walls: Side::ALL.map(|side| case.sides()[side.index()].is_wall()),
    }
}

/// How fine the mesh is to be, defaults resolved.
///
/// `cell`: 1/80 of the section's larger extent, at most a quarter of the smallest slot.
/// `wall`: so that the estimated boundary layer holds eleven cells at the growth ratio, between
/// 1/40 and the whole of `cell`.
pub fn spacing(case: &Case) -> Spacing {
    let choice = case.mesh_choice();
    if let Some([nx, ny]) = choice.cells {
        return Spacing::Uniform { nx, ny };
    }
    let section = case.section();
    let slots = case.slots().iter().map(|s| s.span[1] - s.span[0]);
    let largest = (section.width.max(section.height) / 80.0)
        .min(slots.fold(f64::INFINITY, f64::min) / 4.0)
        .max(section.width.max(section.height) / 1000.0);
    let largest = rounded_value(largest, 3);
    let cell = choice.cell.unwrap_or_else(|| choice.wall.map_or(largest, |w| w.max(largest)));
    let ratio = choice.growth;
    let cells_in_layer = 11;
    let layer_in_walls = (ratio.powi(cells_in_layer) - 1.0) / (ratio - 1.0);
    let wall = choice.wall.unwrap_or_else(|| {
        let wall = Estimate::of(case).layer / layer_in_walls;
        rounded_value(wall.max(cell / 40.0), 3).min(cell)
    });
    Spacing::Graded { cell, wall, growth: ratio, across: choice.across, multiple: MULTIPLE }
}

/// Makes the problem of a case on its mesh.
///
/// # Errors
/// What the solver crate refuses; a checked case on its own mesh gives no cause.
pub fn problem(case: &Case, mesh: Mesh) -> Result<Problem, ProblemError> {
    let solid = |m: &super::Material| Solid {
        conductivity: m.conductivity,
        density: m.density.unwrap_or(DENSITY),
        specific_heat: m.specific_heat.unwrap_or(SPECIFIC_HEAT),
    };
    Problem::new(Description {
        mesh,
        air: match *case.air() {
            AirChoice::Film => AirModel::Film { pressure: case.ambient().pressure },
            AirChoice::Given { air, .. } => AirModel::Given(air),
        },
        ambient: case.ambient().temperature,
        gravity: [0.0, -GRAVITY],
        solids: case.materials().iter().map(solid).collect(),
        blocks: case.blocks().iter().map(|b| Block { solid: b.material, heat: b.heat }).collect(),
        slots: case.slots().iter().map(slot).collect(),
        fans: case.fans().iter().map(super::Fan::curve_fan).collect(),
        sides: *case.sides(),
        parts: case.parts().iter().map(|p| p.blocks.clone()).collect(),
        joints: case
            .joints()
            .iter()
            .map(|j| Joint { blocks: j.blocks, resistance: j.resistance })
            .collect(),
        heat_laws: (case.blocks().iter().enumerate())
            .filter_map(|(n, b)| Some((n, b, b.curve.as_ref()?)))
            .map(|(n, b, curve)| HeatLaw { block: n, points: curve.points(b.heat) })
            .collect(),
        sources: None,
        radiation: surfaces(case),
    })
}

fn slot(slot: &super::Slot) -> Slot {
    Slot { law: slot.resistance.law(), drive: 0.0, fan: slot.fan }
}

impl super::Fan {
    /// The fan as the equations see it.
    pub fn curve_fan(&self) -> Fan {
        Fan {
            curve: self.curve.clone(),
            density: self.density,
            speed: self.speed,
            inward: self.inward,
            stopped_loss: self.stopped_loss.unwrap_or(0.0),
        }
    }
}

/// How the surfaces radiate; `None` where the case gives no emissivity.
fn surfaces(case: &Case) -> Option<Surfaces> {
    if !case.radiates() {
        return None;
    }
    let side = |side: Side| match case.sides()[side.index()] {
        SideCondition::Symmetry => SideSurface::Mirror,
        SideCondition::Open => SideSurface::Opening,
        _ => SideSurface::Wall(case.side_emissivities()[side.index()].unwrap_or(0.0)),
    };
    let block = |b: &super::Block| case.emissivity(b).unwrap_or(0.0);
    Some(Surfaces { blocks: case.blocks().iter().map(block).collect(), sides: Side::ALL.map(side) })
}

/// The run's settings.
pub fn settings(case: &Case) -> Settings {
    let choice = case.solve_choice();
    Settings {
        tolerance: choice.tolerance,
        max_iterations: choice.max_iterations,
        ..Settings::default()
    }
}
