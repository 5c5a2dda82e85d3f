//! Shadows and mirror images: against strings drawn by hand, against sections drawn in full, and
//! against counts of random rays.

#![allow(clippy::print_stdout)]
#![allow(clippy::unwrap_used)]

mod enclosure;
mod proof;
mod rays;

use enclosure::{BAND, BLACK, MIRROR, OPEN, PLANAR, RING, factor, on, radiation, section};
use proof::within;
use rays::{Body, count_planar, count_rings};
use ventrise_mesh::{Rectangle, Side};
use ventrise_solver::{Owner, Patch, Radiation, SideSurface};

/// Half the cavity with its mirror is the whole cavity.
#[test]
fn a_mirror_stands_for_the_other_half() {
    let block = Rectangle { x: [0.25, 0.75], y: [0.25, 0.5] };
    let whole = section(PLANAR, [1.0, 1.0], [32, 32], &[block], &[]);
    let whole = radiation(&whole, &[1.0], [BLACK; 4], 10_000);
    let half_block = Rectangle { x: [0.0, 0.25], y: [0.25, 0.5] };
    let half = section(PLANAR, [0.5, 1.0], [16, 32], &[half_block], &[]);
    let half = radiation(&half, &[1.0], [MIRROR, BLACK, BLACK, BLACK], 10_000);
    let block = |p: &Patch| p.owner == Owner::Block(0);
    for side in [Side::Bottom, Side::Top] {
        let f = |r: &Radiation| factor(r, block, on(side));
        within("block to floor or ceiling", f(&half), f(&whole), 1e-12);
    }
    let across = |p: &Patch| matches!(p.owner, Owner::Side(Side::Left | Side::Right));
    within("block to sides", factor(&half, block, across), factor(&whole, block, across), 1e-12);
    within(
        "floor to ceiling",
        factor(&half, on(Side::Bottom), on(Side::Top)),
        factor(&whole, on(Side::Bottom), on(Side::Top)),
        1e-12,
    );
}

/// A quarter of the cavity with two mirrors is the whole cavity.
#[test]
fn mirrors_along_both_axes_stand_for_the_other_quarters() {
    let block = Rectangle { x: [0.25, 0.75], y: [0.375, 0.625] };
    let whole = section(PLANAR, [1.0, 1.0], [16, 16], &[block], &[]);
    let whole = radiation(&whole, &[1.0], [BLACK; 4], 10_000);
    let quarter = Rectangle { x: [0.25, 0.5], y: [0.0, 0.125] };
    let quarter = section(PLANAR, [0.5, 0.5], [8, 8], &[quarter], &[]);
    // Of the four quarters, the one with the mirrors right and below: the section's right end is
    // the middle, its floor as well.
    let quarter = radiation(&quarter, &[1.0], [BLACK, MIRROR, MIRROR, BLACK], 10_000);
    let block = |p: &Patch| p.owner == Owner::Block(0);
    let upright = |p: &Patch| matches!(p.owner, Owner::Side(Side::Left | Side::Right));
    let level = |p: &Patch| matches!(p.owner, Owner::Side(Side::Bottom | Side::Top));
    let both = |f: &dyn Fn(&Radiation) -> f64| [f(&quarter), f(&whole)];
    for [part, all] in [
        both(&|r| factor(r, block, upright)),
        both(&|r| factor(r, block, level)),
        both(&|r| factor(r, upright, upright)),
        both(&|r| factor(r, upright, level)),
        both(&|r| factor(r, level, level)),
    ] {
        within("quarter", part, all, 1e-12);
    }
}

/// Bars in an endless row, by half of one between mirrors, and by drawing forty-one. There the
/// view ends at the open ends, 40 widths away: of a bar's view less than 1e-4 gets there.
#[test]
fn images_between_opposite_mirrors_are_a_row_of_blocks() {
    let bar = Rectangle { x: [0.0, 0.25], y: [0.125, 0.25] };
    let cell = section(PLANAR, [1.0, 0.5], [16, 16], &[bar], &[]);
    let cell = radiation(&cell, &[1.0], [MIRROR, MIRROR, BLACK, BLACK], 10_000);
    assert!(cell.correction().defect < 1e-3, "{:?}", cell.correction());
    let place = |k: usize| [2.0 * k as f64, 2.0 * k as f64 + 0.5];
    let bars: Vec<Rectangle> = (0..41).map(|k| Rectangle { x: place(k), ..bar }).collect();
    let row = section(PLANAR, [80.5, 0.5], [322, 16], &bars, &[]);
    let row = radiation(&row, &[1.0; 41], [OPEN, OPEN, BLACK, BLACK], 1);
    let other = |b: usize| move |p: &Patch| matches!(p.owner, Owner::Block(o) if o != b);
    let is = |b: usize| move |p: &Patch| p.owner == Owner::Block(b);
    for side in [Side::Bottom, Side::Top] {
        let drawn = factor(&row, is(20), on(side));
        within("bar to floor or ceiling", factor(&cell, is(0), on(side)), drawn, BAND);
    }
    // Its own images are the other bars.
    within("bar to bars", factor(&cell, is(0), is(0)), factor(&row, is(20), other(20)), BAND);
}

/// A shelf from the left wall hides half of the ceiling. Strings around its tips e and f:
///
/// ```text
///   c ──────────── d   y = 1       crossed   a-d, the diagonal, which touches e = (0.5, 0.5),
///   │═════f                                  and b-f-c, which bends at f = (0.5, 0.75)
///   │═════e                        uncrossed b-d and a-e-f-c
///   a ──────────── b   y = 0
/// ```
#[test]
fn a_shelf_between_floor_and_ceiling() {
    let shelf = Rectangle { x: [0.0, 0.5], y: [0.5, 0.75] };
    let mesh = section(PLANAR, [1.0, 1.0], [64, 64], &[shelf], &[]);
    let r = radiation(&mesh, &[0.7], [BLACK; 4], 400);
    let (ae, bf, fc) = (0.5f64.hypot(0.5), 0.5f64.hypot(0.75), 0.5f64.hypot(0.25));
    let crossed = 2f64.sqrt() + bf + fc;
    let uncrossed = 1.0 + ae + 0.25 + fc;
    let f = factor(&r, on(Side::Bottom), on(Side::Top));
    // Exact but for round-off.
    within("floor to ceiling", f, 0.5 * (crossed - uncrossed), 1e-12);
    assert!(r.correction().defect < 1e-12, "{:?}", r.correction());
}

/// Boards and a bar between walls and an open top: view areas between all owners against a count
/// of random rays.
#[test]
fn a_planar_arrangement_with_shadows_against_random_rays() {
    let blocks = [
        Rectangle { x: [0.125, 0.1875], y: [0.125, 0.75] },
        Rectangle { x: [0.375, 0.4375], y: [0.25, 0.875] },
        Rectangle { x: [0.4375, 0.625], y: [0.25, 0.3125] },
        Rectangle { x: [0.75, 0.875], y: [0.5, 0.625] },
    ];
    let mesh = section(PLANAR, [1.0, 1.0], [64, 64], &blocks, &[]);
    let r = radiation(&mesh, &[1.0; 4], [BLACK, BLACK, BLACK, OPEN], 300);
    assert!(r.correction().defect < 1e-11, "{:?}", r.correction());
    let bodies: Vec<Body> = blocks.iter().map(|b| Body { x: b.x, y: b.y }).collect();
    let count = 2_000_000;
    compare(&r, &bodies, count, count_planar(&bodies, [1.0, 1.0], count, 20_260_731));
}

/// A disc below, an annular fin on a rod that does not reach the disc, a collar and the tube
/// around them.
#[test]
fn annular_shadows_against_random_rays() {
    let blocks = [
        Rectangle { x: [0.0, 0.25], y: [0.25, 1.0] },
        Rectangle { x: [0.25, 0.625], y: [0.5, 0.5625] },
        Rectangle { x: [0.75, 0.875], y: [0.625, 0.8125] },
    ];
    let mesh = section(RING, [1.0, 1.0], [64, 64], &blocks, &[]);
    let r = radiation(&mesh, &[1.0; 3], [MIRROR, BLACK, BLACK, OPEN], 200);
    assert!(r.correction().defect < 1e-3, "{:?}", r.correction());
    let bodies: Vec<Body> = blocks.iter().map(|b| Body { x: b.x, y: b.y }).collect();
    let count = 2_000_000;
    compare(&r, &bodies, count, count_rings(&bodies, [1.0, 1.0], count, 20_261_203));
}

/// Owners as the rays name them: blocks first, then left, right, bottom, top.
fn named(owner: Owner, blocks: usize) -> usize {
    match owner {
        Owner::Block(b) => b,
        Owner::Side(side) => blocks + side.index(),
        Owner::Slot(_) => usize::MAX,
    }
}

/// View factors between all owners within four standard deviations of the count (about fifty
/// pairs are compared: three would fail one time in eight), and half of them within one.
fn compare(r: &Radiation, bodies: &[Body], count: usize, hits: Vec<Vec<usize>>) {
    let blocks = bodies.len();
    let (mut far, mut compared) = (0, 0);
    for (from, row) in hits.iter().enumerate() {
        let sent: usize = row.iter().sum();
        if sent == 0 {
            continue;
        }
        assert_eq!(sent, count);
        for (to, hit) in row.iter().enumerate() {
            let is = |of: usize| move |p: &Patch| named(p.owner, blocks) == of;
            let f = factor(r, is(from), is(to));
            let share = *hit as f64 / sent as f64;
            // At least that of a single hit.
            let sigma = (f.max(1.0 / sent as f64) * (1.0 - f) / sent as f64).sqrt();
            let off = (f - share) / sigma;
            println!("{from} to {to}: {f:.5} counted {share:.5}, {off:+.2} σ ({sigma:.1e})");
            assert!(off.abs() < 4.0, "{from} to {to}: {f} counted {share}");
            if f > 0.0 {
                compared += 1;
                far += usize::from(off.abs() > 1.0);
            }
        }
    }
    assert!(compared > 20 && 2 * far < compared, "{far} of {compared} are off by more than σ");
}

/// The numbers have the same bits for any number of threads.
#[test]
fn any_number_of_threads_gives_the_same_bits() {
    let block = Rectangle { x: [0.25, 0.5], y: [0.25, 0.75] };
    for geometry in [PLANAR, RING] {
        let mesh = section(geometry, [1.0, 1.0], [32, 32], &[block], &[]);
        let with = |threads: usize| {
            let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build().unwrap();
            pool.install(|| radiation(&mesh, &[0.6], [SideSurface::Wall(0.8); 4], 120))
        };
        assert_eq!(with(1), with(3));
    }
}
