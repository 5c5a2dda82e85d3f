//! Small problems whose fields are known by hand, for tests.

#![allow(clippy::unwrap_used)]

use ventrise_mesh::{Geometry, Layout, Mesh, Rectangle, Side, SlotSpan};

use crate::{Air, AirModel, Block, Description, Problem, SideCondition, Slot, Solid, State};

/// Air with round numbers.
pub(crate) fn air() -> Air {
    Air {
        density: 1.2,
        viscosity: 2e-5,
        conductivity: 0.025,
        specific_heat: 1000.0,
        expansion: 0.003,
    }
}

/// A description without blocks, slots or heat: adiabatic sides, ambient 300 K.
pub(crate) fn bare(mesh: Mesh) -> Description {
    Description {
        mesh,
        air: AirModel::Given(air()),
        ambient: 300.0,
        gravity: [0.0, -10.0],
        solids: Vec::new(),
        blocks: Vec::new(),
        slots: Vec::new(),
        fans: Vec::new(),
        sides: [SideCondition::Adiabatic; 4],
        parts: Vec::new(),
        joints: Vec::new(),
        sources: None,
        radiation: None,
        heat_laws: Vec::new(),
    }
}

/// A layout with slip nowhere.
pub(crate) fn layout(geometry: Geometry, width: f64, height: f64) -> Layout {
    Layout {
        geometry,
        width,
        height,
        blocks: Vec::new(),
        slots: Vec::new(),
        x_lines: Vec::new(),
        y_lines: Vec::new(),
        walls: [true; 4],
    }
}

/// 3 × 2 cells of 0.1 m: slot 0 is the whole bottom, slot 1 the whole top.
pub(crate) fn duct(depth: f64) -> (Problem, State) {
    let span = [0.0, 0.3];
    let mut layout = layout(Geometry::Planar { depth }, 0.3, 0.2);
    layout.slots = vec![SlotSpan { side: Side::Bottom, span }, SlotSpan { side: Side::Top, span }];
    let mesh = Mesh::from_lines(&layout, vec![0.0, 0.1, 0.2, 0.3], vec![0.0, 0.1, 0.2]).unwrap();
    let state = State::rest(&mesh);
    let slot = Slot::with_loss(1.5);
    let problem = Problem::new(Description { slots: vec![slot; 2], ..bare(mesh) }).unwrap();
    (problem, state)
}

/// A solid wall 0.4 m × 0.1 m × 1 m, k = 2 W/(m·K), 2 W in it; left side at ambient, right side
/// a film of 5 W/(m²·K) to ambient. Returns the heat leaving left and right [W] too.
pub(crate) fn wall() -> (Problem, State, [f64; 2]) {
    let mut layout = layout(Geometry::Planar { depth: 1.0 }, 0.4, 0.1);
    layout.blocks = vec![Rectangle { x: [0.0, 0.4], y: [0.0, 0.1] }];
    let mesh = Mesh::from_lines(&layout, vec![0.0, 0.1, 0.2, 0.3, 0.4], vec![0.0, 0.1]).unwrap();
    let mut state = State::rest(&mesh);
    let mut description = bare(mesh);
    description.solids =
        vec![Solid { conductivity: [2.0; 2], density: 1000.0, specific_heat: 1000.0 }];
    description.blocks = vec![Block { solid: 0, heat: 2.0 }];
    description.parts = vec![vec![0]];
    description.sides[0] = SideCondition::Temperature(300.0);
    description.sides[1] = SideCondition::Film { coefficient: 5.0, temperature: 300.0 };
    // Conductances [W/K], area 0.1 m²: half a cell 4, between centres 2, right half cell and film
    // in series 0.1/(0.05/2 + 1/5). L leaves left, then L − 0.5, L − 1, L − 1.5 cross the inner
    // faces leftward, and 2 − L leaves right, which fixes L.
    let (half, inner, film) = (4.0, 2.0, 0.1 / 0.225);
    let left = (2.0 + film * 3.0 / inner) / (1.0 + film * (1.0 / half + 3.0 / inner));
    state.t[0] = left / half;
    for n in 1..4 {
        state.t[n] = state.t[n - 1] + (left - 0.5 * n as f64) / inner;
    }
    (Problem::new(description).unwrap(), state, [left, 2.0 - left])
}
