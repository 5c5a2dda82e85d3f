use ventrise_mesh::{Geometry, Layout, Mesh, Rectangle, Side, SlotSpan};

use super::*;

fn lines(count: usize, length: f64) -> Vec<f64> {
    (0..=count).map(|k| length * k as f64 / count as f64).collect()
}

/// A unit square of air, `count` × `count` cells, with blocks and slots.
fn square(blocks: Vec<Rectangle>, slots: Vec<SlotSpan>, geometry: Geometry, count: usize) -> Mesh {
    let layout = Layout {
        geometry,
        width: 1.0,
        height: 1.0,
        blocks,
        slots,
        x_lines: Vec::new(),
        y_lines: Vec::new(),
        walls: [true; 4],
    };
    Mesh::from_lines(&layout, lines(count, 1.0), lines(count, 1.0)).unwrap()
}

const PLANAR: Geometry = Geometry::Planar { depth: 2.0 };

fn grey(emissivity: f64, blocks: usize) -> Surfaces {
    Surfaces { blocks: vec![emissivity; blocks], sides: [SideSurface::Wall(emissivity); 4] }
}

/// ```text
///   +---+---+---+---+   a block over the middle four of 4 × 4 cells, a slot in the left half of
///   |   |   |   |   |   the floor: 8 faces of the block, 16 of the edge, two of them the slot's
///   +---+---+---+---+
///   |   |###|###|   |
///   +---+---+---+---+
///   |   |###|###|   |
///   +---+---+---+---+
///   |   |   |   |   |
///   +===+===+---+---+
/// ```
#[test]
fn faces_of_a_block_and_a_slot_are_listed_and_grouped() {
    let block = Rectangle { x: [0.25, 0.75], y: [0.25, 0.75] };
    let slot = SlotSpan { side: Side::Bottom, span: [0.0, 0.5] };
    let mesh = square(vec![block], vec![slot], PLANAR, 4);
    let fine = Radiation::new(&mesh, &grey(0.8, 1), 1000).unwrap();
    assert_eq!(fine.faces().len(), 24);
    // One patch per face, but the slot is one patch.
    assert_eq!(fine.patches().len(), 23);
    let coarse = Radiation::new(&mesh, &grey(0.8, 1), 1).unwrap();
    // Four faces of the block, three whole sides, half a floor and the slot.
    assert_eq!(coarse.patches().len(), 9);
    for radiation in [&fine, &coarse] {
        let mut next = 0;
        for patch in radiation.patches() {
            assert_eq!(patch.faces.start, next);
            next = patch.faces.end;
            let faces = &radiation.faces()[patch.faces.clone()];
            assert!(faces.iter().all(|f| f.owner == patch.owner && f.normal == patch.normal));
            let area: f64 = faces.iter().map(|f| f.area).sum();
            assert!((area - patch.area).abs() < 1e-15);
            assert_eq!(patch.is_opening, matches!(patch.owner, Owner::Slot(0)));
            assert_eq!(patch.emissivity, if patch.is_opening { 1.0 } else { 0.8 });
        }
        assert_eq!(next, 24);
        assert!(radiation.correction().defect < 1e-13, "{:?}", radiation.correction());
    }
    // The block's left face, lower half: its air is cell (0, 1), its solid (1, 1).
    let face = fine.faces().iter().find(|f| f.owner == Owner::Block(0)).unwrap();
    assert_eq!((face.air_cell, face.backing), (4, Backing::Cell(5)));
    assert_eq!((face.normal, face.ends), ([-1.0, 0.0], [[0.25, 0.25], [0.25, 0.5]]));
    assert_eq!((face.area, face.gap), (0.5, 0.25));
    let edge = fine.faces().iter().find(|f| f.owner == Owner::Side(Side::Right)).unwrap();
    assert_eq!(edge.backing, Backing::Edge { side: Side::Right, n: 0 });
    assert_eq!((edge.air_cell, edge.normal, edge.gap), (3, [-1.0, 0.0], 1.0));
}

#[test]
fn the_number_of_patches_is_kept_to() {
    let block = Rectangle { x: [0.25, 0.75], y: [0.25, 0.75] };
    for (count, expected) in [(20, 20), (57, 57), (400, 192)] {
        let mesh = square(vec![block], Vec::new(), PLANAR, 32);
        let radiation = Radiation::new(&mesh, &grey(0.8, 1), count).unwrap();
        let found = radiation.patches().len();
        assert!(found <= expected && found + 8 > expected, "{count}: {found}");
    }
}

/// A slot in a mirror is black and hides the image behind it: floor to ceiling, directly and by
/// the free upper half of the mirror, against the crossed strings.
#[test]
fn a_slot_in_a_mirror_hides_the_image_behind_it() {
    let slot = SlotSpan { side: Side::Left, span: [0.0, 0.5] };
    let mesh = square(Vec::new(), vec![slot], PLANAR, 4);
    let mut surfaces = grey(1.0, 0);
    surfaces.sides[Side::Left.index()] = SideSurface::Mirror;
    let radiation = Radiation::new(&mesh, &surfaces, 1).unwrap();
    assert_eq!(radiation.patches().len(), 4);
    assert!(radiation.correction().defect < 1e-13, "{:?}", radiation.correction());
    let at = |owner| radiation.patches().iter().position(|p| p.owner == owner).unwrap();
    let (floor, ceiling) = (at(Owner::Side(Side::Bottom)), at(Owner::Side(Side::Top)));
    // Directly √2 − 1; by the mirror, the strings from the floor [0, 1] to the image [−1, 0] of
    // the ceiling through the upper half of the mirror x = 0, 0.5 < y < 1: crossed (0, 0)-(0, 1)
    // and (1, 0)-(0, 0.5)-(−1, 1), uncrossed (0, 0)-(0, 0.5)-(−1, 1) and (1, 0)-(0, 1).
    let direct = 2f64.sqrt() - 1.0;
    let bent = 0.5f64.hypot(1.0);
    let mirrored = 0.5 * ((1.0 + 2.0 * bent) - (0.5 + bent + 2f64.sqrt()));
    let found = radiation.view(floor)[ceiling] / 2.0;
    assert!((found - direct - mirrored).abs() < 1e-13, "{found} {}", direct + mirrored);
}

#[test]
fn sealed_regions_exchange_nothing_with_each_other() {
    for geometry in [PLANAR, Geometry::Axisymmetric] {
        let wall = Rectangle { x: [0.0, 1.0], y: [0.5, 0.625] };
        let mesh = square(vec![wall], Vec::new(), geometry, 8);
        let radiation = Radiation::new(&mesh, &grey(0.6, 1), 1000).unwrap();
        let below = |p: &Patch| p.ends[1][1] <= 0.5;
        let mut temperatures = vec![300.0; radiation.patches().len()];
        for (t, p) in temperatures.iter_mut().zip(radiation.patches()) {
            if below(p) {
                *t = 400.0;
            }
        }
        for (i, p) in radiation.patches().iter().enumerate() {
            for (j, q) in radiation.patches().iter().enumerate() {
                if below(p) != below(q) {
                    assert_eq!(radiation.exchange(i)[j], 0.0);
                }
            }
        }
        let heat = radiation.net_heat(&temperatures);
        assert!(heat.iter().all(|q| *q == 0.0), "{heat:?}");
    }
}

#[test]
fn exchange_is_symmetric_and_adds_up_to_emissivity_times_area() {
    let block = Rectangle { x: [0.25, 0.5], y: [0.25, 0.75] };
    for geometry in [PLANAR, Geometry::Axisymmetric] {
        let mesh = square(vec![block], Vec::new(), geometry, 8);
        let mut surfaces = grey(0.35, 1);
        surfaces.sides[Side::Top.index()] = SideSurface::Opening;
        surfaces.sides[Side::Right.index()] = SideSurface::Wall(0.0);
        let radiation = Radiation::new(&mesh, &surfaces, 1000).unwrap();
        for (i, p) in radiation.patches().iter().enumerate() {
            let sum: f64 = radiation.exchange(i).iter().sum();
            assert!((sum - p.emissivity * p.area).abs() < 1e-14, "{sum}");
            let seen: f64 = radiation.view(i).iter().sum();
            assert!((seen / p.area - 1.0).abs() < 1e-12, "{seen}");
            for j in 0..radiation.patches().len() {
                assert_eq!(radiation.exchange(i)[j], radiation.exchange(j)[i]);
                assert_eq!(radiation.view(i)[j], radiation.view(j)[i]);
                assert!(radiation.exchange(i)[j] > -1e-12);
            }
        }
        let temperatures: Vec<f64> =
            (0..radiation.patches().len()).map(|i| 300.0 + (i * 7 % 11) as f64).collect();
        let heat = radiation.net_heat(&temperatures);
        let (sum, size) =
            heat.iter().fold((0.0, 0.0), |(s, a): (f64, f64), q| (s + q, a + q.abs()));
        assert!(size > 1.0 && sum.abs() < 1e-12 * size, "{sum} {size}");
    }
}

#[test]
fn a_cavity_without_emission_exchanges_nothing() {
    let mesh = square(Vec::new(), Vec::new(), PLANAR, 4);
    let radiation = Radiation::new(&mesh, &grey(0.0, 0), 100).unwrap();
    assert!((0..16).all(|i| radiation.exchange(i).iter().all(|g| *g == 0.0)));
}

#[test]
fn wrong_emissivities_are_named() {
    let block = Rectangle { x: [0.25, 0.5], y: [0.25, 0.75] };
    let mesh = square(vec![block], Vec::new(), PLANAR, 4);
    let error = |s: &Surfaces| Radiation::new(&mesh, s, 10).unwrap_err().to_string();
    assert_eq!(error(&grey(0.5, 0)), "block 0 has no emissivity (0 are given)");
    assert_eq!(error(&grey(1.2, 1)), "the emissivity of block 0 must be 0 to 1, not 1.2");
    let mut surfaces = grey(0.5, 1);
    surfaces.sides[Side::Top.index()] = SideSurface::Wall(f64::NAN);
    assert_eq!(error(&surfaces), "the emissivity of the Top side must be 0 to 1, not NaN");
}
