//! Layouts worked by hand: what is crossed, what is graded, what is refused, what it costs.
#![allow(clippy::unwrap_used, missing_docs)]

use ventrise_mesh::{
    AIR, Axis, CELL_LIMIT, Crossed, Crossing, GapEnd, Geometry, Layout, Mesh, MeshError, Rectangle,
    Side, SlotSpan, Spacing, generate,
};

const PLANAR: Geometry = Geometry::Planar { depth: 0.2 };

fn section(width: f64, height: f64) -> Layout {
    Layout {
        geometry: PLANAR,
        width,
        height,
        blocks: Vec::new(),
        slots: Vec::new(),
        x_lines: Vec::new(),
        y_lines: Vec::new(),
        walls: [true; 4],
    }
}

fn block(x: [f64; 2], y: [f64; 2]) -> Rectangle {
    Rectangle { x, y }
}

fn graded(cell: f64, wall: f64, across: usize, multiple: usize) -> Spacing {
    Spacing::Graded { cell, wall, growth: 1.2, across, multiple }
}

/// ```text
///   0.10 +--------------+     block 0 stands left, block 1 right of a 20 mm gap; a slot in the
///        |   ##    ##   |     floor below the gap, the axis of symmetry on the left
///   0.04 |   ##    ##   |
///        |              |
///      0 +-----====-----+
///        0  .02 .03 .05 .06 .10
/// ```
fn two_blocks() -> Layout {
    Layout {
        blocks: vec![block([0.02, 0.03], [0.04, 0.1]), block([0.05, 0.06], [0.04, 0.1])],
        slots: vec![SlotSpan { side: Side::Bottom, span: [0.03, 0.05] }],
        walls: [false, true, true, true],
        ..section(0.1, 0.1)
    }
}

#[test]
fn every_block_slot_and_gap_is_listed_once() {
    let layout = two_blocks();
    let mesh = generate(&layout, &graded(4e-3, 1e-3, 8, 1)).unwrap().mesh;
    let crossings = mesh.crossings(&layout).unwrap();
    let [left, right] = [Side::Left, Side::Right].map(GapEnd::Side);
    let [bottom, top] = [Side::Bottom, Side::Top].map(GapEnd::Side);
    let [first, second] = [GapEnd::Block(0), GapEnd::Block(1)];
    let expected = [
        (Crossed::Block(0), Axis::X, 0.02, 0.03),
        (Crossed::Block(0), Axis::Y, 0.04, 0.1),
        (Crossed::Block(1), Axis::X, 0.05, 0.06),
        (Crossed::Block(1), Axis::Y, 0.04, 0.1),
        (Crossed::Slot(0), Axis::X, 0.03, 0.05),
        (Crossed::HalfGap([left, first]), Axis::X, 0.0, 0.02),
        (Crossed::HalfGap([left, right]), Axis::X, 0.0, 0.1),
        (Crossed::Gap([first, second]), Axis::X, 0.03, 0.05),
        (Crossed::Gap([second, right]), Axis::X, 0.06, 0.1),
        (Crossed::Gap([bottom, first]), Axis::Y, 0.0, 0.04),
        (Crossed::Gap([bottom, second]), Axis::Y, 0.0, 0.04),
        (Crossed::Gap([bottom, top]), Axis::Y, 0.0, 0.1),
    ];
    let found: Vec<_> = crossings.iter().map(|c| (c.crossed, c.axis, c.from, c.to)).collect();
    assert_eq!(found.len(), expected.len(), "{found:#?}");
    for wanted in &expected {
        assert!(found.contains(wanted), "{wanted:?} not in {found:#?}");
    }
    for Crossing { crossed, axis, from, to, cells } in crossings {
        let lines = if axis == Axis::X { mesh.x() } else { mesh.y() };
        assert_eq!(cells, lines.iter().filter(|l| **l > from && **l <= to).count(), "{crossed:?}");
    }
}

#[test]
fn only_surfaces_in_air_and_slot_ends_are_graded() {
    // A solid block fills the left half up to the section's edge; a second block touches it from
    // x = 0.05 to 0.06 over its whole height, so x = 0.05 is no surface, x = 0.06 is one.
    let layout = Layout {
        blocks: vec![block([0.0, 0.05], [0.0, 0.1]), block([0.05, 0.06], [0.0, 0.1])],
        x_lines: vec![0.08],
        slots: vec![SlotSpan { side: Side::Top, span: [0.09, 0.095] }],
        ..section(0.1, 0.1)
    };
    let spacing = Spacing::Graded { cell: 2e-3, wall: 2e-4, growth: 1.2, across: 1, multiple: 1 };
    let mesh = generate(&layout, &spacing).unwrap().mesh;
    let beside = |at: f64| {
        let i = mesh.line_at(Axis::X, at).unwrap();
        [i.checked_sub(1).map(|i| mesh.dx(i)), (i < mesh.nx()).then(|| mesh.dx(i))]
    };
    for surface in [0.06, 0.09, 0.095, 0.1] {
        for size in beside(surface).into_iter().flatten() {
            assert!((1.8e-4..=2.01e-4).contains(&size), "{size} at {surface}");
        }
    }
    for other in [0.0, 0.05, 0.08] {
        assert!(beside(other).into_iter().flatten().all(|size| size > 8e-4), "{other}");
    }
    // Nothing but air and wall sides along y within the right half: both ends are graded.
    assert!((mesh.dy(0) - 2e-4).abs() < 4e-6 && (mesh.dy(mesh.ny() - 1) - 2e-4).abs() < 4e-6);
}

#[test]
fn a_thin_sheet_costs_a_logarithm_of_its_thinness() {
    let spacing = graded(5e-3, 5e-4, 8, 4);
    let plain = generate(&section(0.5, 0.5), &spacing).unwrap().mesh;
    let mut last = plain.nx();
    for thickness in [3e-3, 3e-4, 3e-5] {
        let sheet = block([0.2, 0.2 + thickness], [0.1, 0.4]);
        let layout = Layout { blocks: vec![sheet], ..section(0.5, 0.5) };
        let mesh = generate(&layout, &spacing).unwrap().mesh;
        let sheet = mesh.crossings(&layout).unwrap()[0];
        assert!(sheet.cells >= 8 && sheet.cells <= 12, "{sheet:?}");
        // Per tenth of the thickness: ln 10 / (0.97·ln 1.2) = 13 cells on both sides, besides
        // the 8 of the sheet, the ramps of its surfaces at first, and rounding to multiples.
        assert!(mesh.nx() <= last + 2 * 13 + 2 * 13 + 8, "{} after {last}", mesh.nx());
        last = mesh.nx();
    }
}

#[test]
fn edges_a_fraction_of_a_millimetre_apart_hardly_cost_anything() {
    let spacing = graded(5e-3, 5e-4, 8, 4);
    let layout = |step: f64| Layout {
        blocks: vec![block([0.2, 0.25], [0.1, 0.4]), block([0.25, 0.3], [0.1 + step, 0.4])],
        ..section(0.5, 0.5)
    };
    let even = generate(&layout(0.0), &spacing).unwrap();
    assert!(even.notes.is_empty(), "{:?}", even.notes);
    for step in [1e-4, 1e-5, 1e-6] {
        let found = generate(&layout(step), &spacing).unwrap();
        let more = found.mesh.ny() - even.mesh.ny();
        assert!(more <= 40, "{more} more rows for a step of {step} m");
    }
    let found = generate(&layout(1e-5), &spacing).unwrap();
    let place = "100 to 100.01 mm (0.01 mm wide)";
    assert!(found.notes.iter().any(|n| n.contains(place)), "{:?}", found.notes);
}

#[test]
fn a_drawing_mistake_is_no_gap_and_a_narrow_gap_is_named() {
    let spacing = graded(5e-3, 5e-4, 8, 4);
    let layout = |gap: f64| Layout {
        blocks: vec![block([0.2, 0.25], [0.1, 0.4]), block([0.25 + gap, 0.3], [0.1, 0.4])],
        ..section(0.5, 0.5)
    };
    let mistake = generate(&layout(1e-6), &spacing).unwrap();
    let told = "gap from 250 to 250.001 mm along x (0.001 mm): 1 instead of 8";
    assert!(mistake.notes.iter().any(|n| n.contains(told)), "{:?}", mistake.notes);
    let narrow = generate(&layout(2e-5), &spacing).unwrap();
    let told = "gap from 250 to 250.02 mm along x (0.02 mm): cells of 0.0025 mm";
    assert!(narrow.notes.iter().any(|n| n.contains(told)), "{:?}", narrow.notes);
}

#[test]
fn coarse_meshes_of_a_power_of_two_show_every_slot_and_block() {
    let layout = two_blocks();
    let mut mesh = generate(&layout, &graded(2e-3, 5e-4, 8, 8)).unwrap().mesh;
    for _ in 0..3 {
        mesh = mesh.coarsened(1).unwrap().mesh;
        assert!(mesh.crossings(&layout).unwrap().iter().all(|c| c.cells >= 1));
        assert!(mesh.slots(Side::Bottom).contains(&Some(0)));
        assert!([0, 1, AIR].iter().all(|r| mesh.regions().contains(r)));
    }
}

#[test]
fn a_square_cavity_can_have_exactly_the_cells_asked_for() {
    let mesh = generate(&section(0.1, 0.1), &Spacing::Uniform { nx: 128, ny: 96 }).unwrap();
    assert!(mesh.notes.is_empty());
    assert_eq!((mesh.mesh.nx(), mesh.mesh.ny()), (128, 96));
    assert!((0..128).all(|i| (mesh.mesh.dx(i) - 0.1 / 128.0).abs() < 1e-16));
}

#[test]
fn spacings_out_of_range_are_refused() {
    let refused = |spacing: Spacing| generate(&section(0.1, 0.1), &spacing).unwrap_err();
    let with = |cell, wall, growth, multiple| {
        refused(Spacing::Graded { cell, wall, growth, across: 8, multiple })
    };
    let named = |error: MeshError| match error {
        MeshError::Spacing { name, .. } => name,
        other => panic!("{other}"),
    };
    assert_eq!(named(with(0.0, 1e-3, 1.2, 1)), "cell");
    assert_eq!(named(with(f64::INFINITY, 1e-3, 1.2, 1)), "cell");
    assert_eq!(named(with(1e-3, f64::NAN, 1.2, 1)), "wall");
    assert_eq!(named(with(1e-3, 1e-3, 1.0, 1)), "growth");
    assert_eq!(named(with(1e-3, 1e-3, 1.2, 12)), "multiple");
    assert_eq!(named(with(1e-3, 1e-3, 1.2, 0)), "multiple");
    assert_eq!(named(refused(Spacing::Uniform { nx: 0, ny: 3 })), "cells along x");
    let many = Spacing::Graded { cell: 1e-6, wall: 1e-6, growth: 1.2, across: 8, multiple: 1 };
    assert_eq!(refused(many), MeshError::TooMany { needed: 10_000_000_000, limit: CELL_LIMIT });
    let many = Spacing::Uniform { nx: 1 << 40, ny: 1 << 40 };
    assert!(matches!(refused(many), MeshError::TooMany { .. }));
}

#[test]
fn layouts_that_make_no_sense_are_refused() {
    let spacing = graded(5e-3, 1e-3, 2, 1);
    let refused = |layout: &Layout| generate(layout, &spacing).unwrap_err();
    let with = |b: Rectangle| Layout { blocks: vec![b], ..section(0.1, 0.1) };
    let outside = refused(&with(block([0.05, 0.11], [0.02, 0.03])));
    assert_eq!(outside, MeshError::OffLine { axis: 'x', at: 0.11 });
    let below = refused(&with(block([0.05, 0.06], [-0.02, 0.03])));
    assert_eq!(below, MeshError::OffLine { axis: 'y', at: -0.02 });
    let reversed = refused(&with(block([0.06, 0.05], [0.02, 0.03])));
    assert_eq!(reversed, MeshError::Extent { axis: 'x', from: 0.06, to: 0.05 });
    let empty = refused(&with(block([0.05, 0.05], [0.02, 0.03])));
    assert_eq!(empty, MeshError::Extent { axis: 'x', from: 0.05, to: 0.05 });
    assert!(matches!(
        refused(&with(block([0.05, f64::NAN], [0.02, 0.03]))),
        MeshError::OffLine { axis: 'x', .. }
    ));
    assert_eq!(refused(&section(0.0, 0.1)), MeshError::Lines { axis: 'x' });
    assert_eq!(refused(&section(0.1, f64::NAN)), MeshError::Lines { axis: 'y' });
    let on_axis = Layout {
        geometry: Geometry::Axisymmetric,
        slots: vec![SlotSpan { side: Side::Left, span: [0.0, 0.05] }],
        ..section(0.1, 0.1)
    };
    assert_eq!(refused(&on_axis), MeshError::SlotSide { slot: 0, side: Side::Left });
}

#[test]
fn positions_are_found_in_their_column() {
    let mesh = Mesh::from_lines(&section(1.0, 2.0), vec![0.0, 0.25, 1.0], vec![0.0, 2.0]).unwrap();
    assert_eq!([-1.0, 0.0, 0.2, 0.25, 1.0, 5.0].map(|x| mesh.column_at(x)), [0, 0, 0, 1, 1, 1]);
    assert_eq!(mesh.row_at(1.9), 0);
    assert_eq!(mesh.line_at(Axis::X, 0.25), Ok(1));
    assert!(mesh.line_at(Axis::X, 0.3).is_err());
}

#[test]
fn a_million_cells_are_made_at_once() {
    let mut layout = section(0.5, 0.5);
    layout.blocks = (0..40)
        .map(|k| {
            let y = 0.05 + 0.01 * f64::from(k);
            block([0.1, 0.3], [y, y + 2e-3])
        })
        .collect();
    let begun = std::time::Instant::now();
    let mesh = generate(&layout, &graded(1e-3, 1e-4, 8, 8)).unwrap().mesh;
    assert!(mesh.cell_count() > 700_000, "{}", mesh.cell_count());
    // Hundredths of a second in release; the bound leaves room for debug builds and busy machines.
    assert!(begun.elapsed().as_secs_f64() < 2.0, "{:?}", begun.elapsed());
}
