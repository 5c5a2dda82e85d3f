//! Properties that hold for the mesh of any layout.
#![allow(clippy::unwrap_used, missing_docs)]

use proptest::prelude::*;
use ventrise_mesh::{
    AIR, Axis, Crossed, Geometry, Layout, Mesh, Rectangle, Side, SlotSpan, Spacing, generate,
};

/// Layouts on a random grid of cuts: lengths between cuts from 0.02 to 60 mm, a random choice of
/// the rectangles between cuts solid, slots between neighbouring cuts.
fn layout() -> impl Strategy<Value = Layout> {
    let lengths =
        || prop::collection::vec((-1.7_f64..1.78).prop_map(|e| 1e-3 * 10_f64.powf(e)), 2..7);
    (lengths(), lengths(), any::<u64>(), any::<bool>(), any::<[bool; 4]>(), any::<[u8; 3]>())
        .prop_map(|(dx, dy, solid, planar, walls, slot)| {
            let cuts = |lengths: &[f64]| -> Vec<f64> {
                let sum = |sum: &mut f64, l: &f64| {
                    *sum += l;
                    Some(*sum)
                };
                std::iter::once(0.0).chain(lengths.iter().scan(0.0, sum)).collect()
            };
            let (x, y) = (cuts(&dx), cuts(&dy));
            let blocks = (0..dx.len() * dy.len())
                .filter(|n| solid >> n & 1 == 1 && solid >> (n + 20) & 1 == 1)
                .map(|n| {
                    let (i, j) = (n % dx.len(), n / dx.len());
                    Rectangle { x: [x[i], x[i + 1]], y: [y[j], y[j + 1]] }
                })
                .collect();
            let slot_in = |side: Side, cuts: &[f64], pick: u8| {
                let k = pick as usize % (cuts.len() - 1);
                SlotSpan { side, span: [cuts[k], cuts[k + 1]] }
            };
            Layout {
                geometry: if planar {
                    Geometry::Planar { depth: 0.3 }
                } else {
                    Geometry::Axisymmetric
                },
                width: x[dx.len()],
                height: y[dy.len()],
                blocks,
                slots: vec![
                    slot_in(Side::Bottom, &x, slot[0]),
                    slot_in(Side::Top, &x, slot[1]),
                    slot_in(Side::Right, &y, slot[2]),
                ],
                x_lines: vec![x[1]],
                y_lines: vec![y[1]],
                walls,
            }
        })
}

fn spacing() -> impl Strategy<Value = Spacing> {
    (0.3..8.0_f64, 0.05..1.0_f64, 1.05..1.5_f64, 1..12_usize, 0..5_u32).prop_map(
        |(cell, wall, growth, across, power)| Spacing::Graded {
            cell: 1e-3 * cell,
            wall: 1e-3 * cell * wall,
            growth,
            across,
            multiple: 1 << power,
        },
    )
}

/// The layout mirrored left to right.
fn mirrored(layout: &Layout) -> Layout {
    let flip = |[from, to]: [f64; 2]| [layout.width - to, layout.width - from];
    let mut mirror = layout.clone();
    mirror.blocks.iter_mut().for_each(|b| b.x = flip(b.x));
    for slot in &mut mirror.slots {
        match slot.side {
            Side::Left => slot.side = Side::Right,
            Side::Right => slot.side = Side::Left,
            Side::Bottom | Side::Top => slot.span = flip(slot.span),
        }
    }
    mirror.x_lines.iter_mut().for_each(|x| *x = layout.width - *x);
    mirror.walls.swap(Side::Left.index(), Side::Right.index());
    mirror
}

fn total_volume(mesh: &Mesh) -> f64 {
    (0..mesh.ny()).flat_map(|j| (0..mesh.nx()).map(move |i| mesh.volume(i, j))).sum()
}

fn close(a: f64, b: f64, tolerance: f64) -> bool {
    (a - b).abs() <= tolerance * a.abs().max(b.abs())
}

/// Edge lines of an axis, as indices.
fn edges(kept: &[bool]) -> Vec<usize> {
    (0..kept.len()).filter(|i| kept[*i]).collect()
}

fn exact_section_volume(layout: &Layout) -> f64 {
    match layout.geometry {
        Geometry::Planar { depth } => layout.width * layout.height * depth,
        Geometry::Axisymmetric => std::f64::consts::PI * layout.width.powi(2) * layout.height,
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 400, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn volumes_sum_to_the_section_and_to_each_block(layout in layout(), spacing in spacing()) {
        let mesh = generate(&layout, &spacing).unwrap().mesh;
        let exact = exact_section_volume(&layout);
        prop_assert!(close(total_volume(&mesh), exact, 1e-11));
        prop_assert!(close(mesh.section_volume(), exact, 1e-13));
        for (b, block) in layout.blocks.iter().enumerate() {
            let volume: f64 = (0..mesh.ny())
                .flat_map(|j| (0..mesh.nx()).map(move |i| (i, j)))
                .filter(|(i, j)| mesh.regions()[mesh.cell(*i, *j)] == b as u32)
                .map(|(i, j)| mesh.volume(i, j))
                .sum();
            let base = mesh.y_area_between(block.x[0], block.x[1]);
            prop_assert!(close(volume, base * (block.y[1] - block.y[0]), 1e-9));
        }
    }

    #[test]
    fn every_edge_is_a_line_bit_by_bit(layout in layout(), spacing in spacing()) {
        let mesh = generate(&layout, &spacing).unwrap().mesh;
        for block in &layout.blocks {
            prop_assert!(block.x.iter().all(|e| mesh.x().contains(e)));
            prop_assert!(block.y.iter().all(|e| mesh.y().contains(e)));
        }
        for slot in &layout.slots {
            let lines = match slot.side {
                Side::Left | Side::Right => mesh.y(),
                Side::Bottom | Side::Top => mesh.x(),
            };
            prop_assert!(slot.span.iter().all(|e| lines.contains(e)));
        }
        prop_assert!(layout.x_lines.iter().all(|e| mesh.x().contains(e)));
        prop_assert!(layout.y_lines.iter().all(|e| mesh.y().contains(e)));
    }

    #[test]
    fn neighbours_grow_within_the_bound_except_at_slivers(layout in layout(), spacing in spacing()) {
        let Spacing::Graded { growth, cell, .. } = spacing else { unreachable!() };
        let generated = generate(&layout, &spacing).unwrap();
        let mesh = &generated.mesh;
        prop_assert!(mesh.cell_sizes()[1] <= cell * (1.0 + growth.ln()));
        let mut exceeded = false;
        for (lines, kept) in [(mesh.x(), mesh.x_kept()), (mesh.y(), mesh.y_kept())] {
            for i in 1..lines.len() - 1 {
                let ratio = (lines[i + 1] - lines[i]) / (lines[i] - lines[i - 1]);
                let beside_sliver = kept[i] && (kept[i - 1] || kept[i + 1]);
                if ratio.max(1.0 / ratio) > growth * (1.0 + 1e-6) {
                    exceeded = true;
                    prop_assert!(beside_sliver, "ratio {ratio} at line {i} of {}", lines.len());
                }
            }
        }
        let noted = generated.notes.iter().any(|n| n.starts_with("neighbouring cells"));
        prop_assert_eq!(noted, exceeded);
    }

    #[test]
    fn first_cells_at_graded_edges_are_no_larger_than_wall(layout in layout(), spacing in spacing()) {
        let Spacing::Graded { wall, growth, .. } = spacing else { unreachable!() };
        let mesh = generate(&layout, &spacing).unwrap().mesh;
        for j in 0..mesh.ny() {
            for i in 1..mesh.nx() {
                let pair = [mesh.cell(i - 1, j), mesh.cell(i, j)].map(|n| mesh.regions()[n] == AIR);
                if pair[0] != pair[1] {
                    let largest = mesh.dx(i - 1).max(mesh.dx(i));
                    prop_assert!(largest <= wall * (1.0 + 0.02 * growth.ln()), "{largest}");
                }
            }
        }
    }

    #[test]
    fn blocks_slots_and_gaps_have_their_cells(layout in layout(), spacing in spacing()) {
        let Spacing::Graded { across, .. } = spacing else { unreachable!() };
        let mesh = generate(&layout, &spacing).unwrap().mesh;
        let crossings = mesh.crossings(&layout).unwrap();
        let blocks = crossings.iter().filter(|c| matches!(c.crossed, Crossed::Block(_))).count();
        prop_assert_eq!(blocks, 2 * layout.blocks.len());
        for crossing in crossings {
            let wanted = crossing.crossed.wanted(across);
            prop_assert!(crossing.cells >= wanted, "{crossing:?} wants {wanted}");
        }
    }

    #[test]
    fn counts_are_multiples_or_a_note_says_not(layout in layout(), spacing in spacing()) {
        let Spacing::Graded { multiple, .. } = spacing else { unreachable!() };
        let generated = generate(&layout, &spacing).unwrap();
        for (kept, axis) in [(generated.mesh.x_kept(), 'x'), (generated.mesh.y_kept(), 'y')] {
            let odd = edges(kept).windows(2).any(|e| !(e[1] - e[0]).is_multiple_of(multiple));
            let start = format!("edges close together along {axis}:");
            let noted = generated.notes.iter().any(|n| n.starts_with(&start));
            prop_assert!(noted || !odd);
        }
    }

    #[test]
    fn a_mirrored_layout_gives_a_mirrored_mesh(layout in layout(), spacing in spacing()) {
        let mut layout = layout;
        layout.geometry = Geometry::Planar { depth: 1.0 };
        let mesh = generate(&layout, &spacing).unwrap().mesh;
        let mirror = generate(&mirrored(&layout), &spacing).unwrap().mesh;
        prop_assert_eq!(mesh.nx(), mirror.nx());
        prop_assert_eq!(mesh.y(), mirror.y());
        for (x, m) in mesh.x().iter().zip(mirror.x().iter().rev()) {
            prop_assert!((x - (layout.width - m)).abs() <= 1e-11 * layout.width);
        }
        for (row, m) in mesh.regions().chunks(mesh.nx()).zip(mirror.regions().chunks(mesh.nx())) {
            prop_assert!(row.iter().eq(m.iter().rev()));
        }
        let (coarse, coarse_mirror) = (mesh.coarsened(1), mirror.coarsened(1));
        prop_assert_eq!(coarse.is_some(), coarse_mirror.is_some());
        if let (Some(c), Some(m)) = (coarse, coarse_mirror) {
            prop_assert_eq!(c.mesh.nx(), m.mesh.nx());
            for (x, m) in c.mesh.x().iter().zip(m.mesh.x().iter().rev()) {
                prop_assert!((x - (layout.width - m)).abs() <= 1e-11 * layout.width);
            }
        }
    }

    #[test]
    fn coarser_meshes_keep_edges_regions_slots_and_volumes(
        layout in layout(), spacing in spacing(), least in 1..5_usize,
    ) {
        let mut fine = generate(&layout, &spacing).unwrap().mesh;
        let volume = exact_section_volume(&layout);
        while let Some(coarsening) = fine.coarsened(least) {
            let coarse = &coarsening.mesh;
            prop_assert!(coarse.cell_count() < fine.cell_count());
            prop_assert!(close(total_volume(coarse), volume, 1e-11));
            for (lines, kept, coarse_lines, coarse_kept) in [
                (fine.x(), fine.x_kept(), coarse.x(), coarse.x_kept()),
                (fine.y(), fine.y_kept(), coarse.y(), coarse.y_kept()),
            ] {
                let at = |lines: &[f64], kept: &[bool]| -> Vec<f64> {
                    edges(kept).iter().map(|i| lines[*i]).collect()
                };
                prop_assert_eq!(at(lines, kept), at(coarse_lines, coarse_kept));
            }
            for j in 0..fine.ny() {
                let parent_row = coarsening.y_parent[j];
                for i in 0..fine.nx() {
                    let parent = coarse.cell(coarsening.x_parent[i], parent_row);
                    prop_assert_eq!(fine.regions()[fine.cell(i, j)], coarse.regions()[parent]);
                }
            }
            for i in 0..fine.nx() {
                let parent = coarsening.x_parent[i];
                prop_assert_eq!(fine.slots(Side::Top)[i], coarse.slots(Side::Top)[parent]);
                prop_assert!(coarse.x()[parent] <= fine.x()[i] && fine.x()[i + 1] <= coarse.x()[parent + 1]);
            }
            fine = coarsening.mesh;
        }
    }

    #[test]
    fn refining_by_two_and_merging_pairs_is_the_identity(layout in layout(), spacing in spacing()) {
        let Spacing::Graded { growth, .. } = spacing else { unreachable!() };
        let mesh = generate(&layout, &spacing).unwrap();
        let fine = mesh.mesh.refined(2);
        prop_assert_eq!(fine.cell_count(), 4 * mesh.mesh.cell_count());
        prop_assert!(close(total_volume(&fine), exact_section_volume(&layout), 1e-11));
        let back = fine.coarsened(1).unwrap();
        prop_assert!(back.mesh == mesh.mesh);
        if !mesh.notes.iter().any(|n| n.starts_with("neighbouring cells")) {
            // About sqrt(growth) along a ramp; never more than growth, which sizes that go up
            // and down by turns would reach.
            let bound = growth * (1.0 + 1e-6);
            for lines in [fine.x(), fine.y()] {
                for l in lines.windows(3) {
                    let ratio = (l[2] - l[1]) / (l[1] - l[0]);
                    prop_assert!(ratio.max(1.0 / ratio) <= bound, "{ratio} beyond {bound}");
                }
            }
        }
    }

    #[test]
    fn refining_keeps_every_line(layout in layout(), spacing in spacing(), factor in 1..6_usize) {
        let mesh = generate(&layout, &spacing).unwrap().mesh;
        prop_assume!(mesh.cell_count() < 200_000);
        let fine = mesh.refined(factor);
        for (lines, fine_lines) in [(mesh.x(), fine.x()), (mesh.y(), fine.y())] {
            prop_assert_eq!((lines.len() - 1) * factor, fine_lines.len() - 1);
            prop_assert!(fine_lines.windows(2).all(|l| l[0] < l[1]));
            prop_assert!(lines.iter().enumerate().all(|(i, l)| fine_lines[i * factor] == *l));
        }
        // The same mesh as one made from these lines: regions, slots and edges included.
        let made = Mesh::from_lines(&layout, fine.x().to_vec(), fine.y().to_vec()).unwrap();
        prop_assert!(made == fine);
    }

    #[test]
    fn uniform_counts_are_exact(layout in layout(), nx in 6..200_usize, ny in 6..200_usize) {
        let layout = Layout { geometry: Geometry::Planar { depth: 1.0 }, ..layout };
        let generated = generate(&layout, &Spacing::Uniform { nx, ny }).unwrap();
        let mesh = &generated.mesh;
        prop_assert_eq!((mesh.nx(), mesh.ny()), (nx, ny));
        for (lines, kept) in [(mesh.x(), mesh.x_kept()), (mesh.y(), mesh.y_kept())] {
            for e in edges(kept).windows(2) {
                let size = (lines[e[1]] - lines[e[0]]) / (e[1] - e[0]) as f64;
                prop_assert!((e[0]..e[1]).all(|i| close(lines[i + 1] - lines[i], size, 1e-9)));
            }
        }
        let mirror = generate(&mirrored(&layout), &Spacing::Uniform { nx, ny }).unwrap().mesh;
        for (x, m) in mesh.x().iter().zip(mirror.x().iter().rev()) {
            prop_assert!((x - (layout.width - m)).abs() <= 1e-11 * layout.width);
        }
    }

    #[test]
    fn multiples_do_not_multiply_the_cells(layout in layout(), spacing in spacing()) {
        let Spacing::Graded { cell, wall, growth, across, multiple } = spacing else { unreachable!() };
        let plain = Spacing::Graded { cell, wall, growth, across, multiple: 1 };
        let plain = generate(&layout, &plain).unwrap().mesh;
        let mesh = generate(&layout, &spacing).unwrap().mesh;
        for axis in [Axis::X, Axis::Y] {
            let (few, many, kept) = match axis {
                Axis::X => (plain.nx(), mesh.nx(), mesh.x_kept()),
                Axis::Y => (plain.ny(), mesh.ny(), mesh.y_kept()),
            };
            let segments = edges(kept).len() - 1;
            prop_assert!(many <= 2 * (few + multiple * segments), "{many} for {few}, {segments} segments");
        }
    }
}
