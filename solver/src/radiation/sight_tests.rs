use super::*;

fn level(at: f64, span: [f64; 2], facing: f64) -> Segment {
    Segment { upright: false, at, span, facing }
}

fn upright(at: f64, span: [f64; 2], facing: f64) -> Segment {
    Segment { upright: true, at, span, facing }
}

fn distance(y: f64, h: f64) -> f64 {
    y.hypot(h)
}

fn lines(base: &Segment, target: &Segment, obstacles: &[Obstacle]) -> f64 {
    Sight::new(1.0).lines(base, target, obstacles, distance)
}

#[test]
fn facing_plates_follow_the_crossed_strings() {
    let (base, target) = (level(0.0, [0.0, 1.0], 1.0), level(1.0, [0.0, 1.0], -1.0));
    // crossed 2·√2, uncrossed 2·1
    let expected = 2.0 * 2f64.sqrt() - 2.0;
    assert!((lines(&base, &target, &[]) - expected).abs() < 1e-14);
    assert_eq!(lines(&level(0.0, [0.0, 1.0], -1.0), &target, &[]), 0.0);
    assert_eq!(lines(&base, &level(1.0, [0.0, 1.0], 1.0), &[]), 0.0);
}

#[test]
fn a_surface_that_reaches_behind_the_base_counts_with_its_front_part_only() {
    let base = upright(0.5, [0.5, 1.0], 1.0);
    let whole = lines(&base, &level(0.0, [0.0, 1.0], 1.0), &[]);
    let front = lines(&base, &level(0.0, [0.5, 1.0], 1.0), &[]);
    // strings of [0.5, 1] on the floor and the base from 0.5 to 1 above it
    let expected = (0.5f64.hypot(0.5) + 1.0) - (0.5 + 0.5f64.hypot(1.0));
    assert!((front - expected).abs() < 1e-14, "{front} {expected}");
    assert_eq!(whole, front);
}

#[test]
fn every_pair_is_the_same_both_ways() {
    let block = [Obstacle { x: [0.3, 0.45], y: [0.35, 0.6] }];
    let surfaces = [
        level(0.0, [0.1, 0.9], 1.0),
        level(1.0, [0.0, 0.4], -1.0),
        upright(1.0, [0.2, 1.0], -1.0),
        upright(0.45, [0.35, 0.6], 1.0),
    ];
    for a in &surfaces {
        for b in &surfaces {
            let (there, back) = (lines(a, b, &block), lines(b, a, &block));
            assert!((there - back).abs() < 1e-13, "{a:?} {b:?}: {there} {back}");
        }
    }
}

/// A square of half the width in the middle between two plates leaves two channels. On the left
///
/// ```text
///   c ──────────── d  y = 1      seen past the block on the left: lines from the floor
///       ┌──────┐                 to the ceiling through the gap x < 0.25
///       │      │
///       └──────┘
///   a ──────────── b  y = 0
/// ```
///
/// strings tight around the left channel: crossed a-d and b-c bend at the block's corners.
#[test]
fn strings_bend_around_a_block() {
    let block = Obstacle { x: [0.25, 0.75], y: [0.25, 0.75] };
    let (base, target) = (level(0.0, [0.0, 1.0], 1.0), level(1.0, [0.0, 1.0], -1.0));
    // From a to d and from b to c around the left of the block: with corners (0.25, 0.25) and
    // (0.25, 0.75), a to d = |a − (0.25, 0.75)| + |(0.25, 0.75) − d|; b to c likewise. Uncrossed:
    // a to c straight, b to d around both left corners.
    let crossed = 2.0 * (0.25f64.hypot(0.75) + 0.75f64.hypot(0.25));
    let uncrossed = 1.0 + 2.0 * 0.75f64.hypot(0.25) + 0.5;
    let expected = 2.0 * (crossed - uncrossed);
    let found = lines(&base, &target, &[block]);
    assert!((found - expected).abs() < 1e-13, "{found} {expected}");
    // Cut into four the block still hides the same.
    let quarter = |x: f64, y: f64| Obstacle { x: [x, x + 0.25], y: [y, y + 0.25] };
    let quarters = [quarter(0.25, 0.25), quarter(0.5, 0.25), quarter(0.25, 0.5), quarter(0.5, 0.5)];
    assert!((lines(&base, &target, &quarters) - expected).abs() < 1e-13);
}

#[test]
fn a_sheet_without_thickness_hides_what_is_behind_it() {
    let (base, target) = (level(0.0, [0.0, 1.0], 1.0), level(1.0, [0.0, 1.0], -1.0));
    let whole = Obstacle { x: [0.0, 1.0], y: [0.5, 0.5] };
    assert!(lines(&base, &target, &[whole]).abs() < 1e-14);
    // Half a sheet: strings through the gap 0.5 to 1 at half height.
    let half = Obstacle { x: [0.0, 0.5], y: [0.5, 0.5] };
    let crossed = 2.0 * (0.5f64.hypot(0.5) + 0.5f64.hypot(0.5));
    let uncrossed = 1.0 + 2.0 * 0.5f64.hypot(0.5);
    let found = lines(&base, &target, &[half]);
    assert!((found - (crossed - uncrossed)).abs() < 1e-13, "{found}");
}

/// Many small blocks at random places: the same number by the midpoint rule on 4000 points of the
/// base and 4000 directions.
#[test]
fn a_thicket_of_blocks_agrees_with_brute_force() {
    let mut seed: u64 = 20_261_207;
    let mut random = move || {
        seed = seed.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        (seed >> 11) as f64 / (1u64 << 53) as f64
    };
    let blocks: Vec<Obstacle> = (0..9)
        .map(|_| {
            let (x, y) = (0.9 * random(), 0.15 + 0.6 * random());
            Obstacle { x: [x, x + 0.08 * random()], y: [y, y + 0.1 * random()] }
        })
        .collect();
    let base = level(0.0, [0.0, 1.0], 1.0);
    let points = 3000;
    for target in [level(1.0, [0.2, 0.7], -1.0), upright(1.0, [0.0, 1.0], -1.0)] {
        let mut sum = 0.0;
        for k in 0..points {
            let x = (k as f64 + 0.5) / points as f64;
            for l in 0..points {
                // Equal steps of sin φ have equal weight.
                let s = -1.0 + 2.0 * (l as f64 + 0.5) / points as f64;
                let t = s / (1.0 - s * s).sqrt();
                let end = if target.upright {
                    let y = (1.0 - x) / t;
                    (t > 0.0 && y < 1.0).then_some(y)
                } else {
                    let u = x + t;
                    (u > 0.2 && u < 0.7).then_some(1.0)
                };
                let hits = |o: &Obstacle| {
                    // x + t·y between y0 and y1 against [x0, x1]
                    let (p, q) = (x + t * o.y[0], x + t * o.y[1]);
                    p.min(q) < o.x[1] && p.max(q) > o.x[0]
                };
                let is_seen = end.is_some_and(|y| {
                    !blocks.iter().filter(|o| o.y[0] < y).any(|o| {
                        let low = Obstacle { y: [o.y[0], o.y[1].min(y)], ..*o };
                        hits(&low)
                    })
                });
                sum += f64::from(u8::from(is_seen));
            }
        }
        let brute = 2.0 * sum / (points * points) as f64;
        let found = lines(&base, &target, &blocks);
        // Every edge of the seen region is off by half a cell at most, at random.
        assert!((found / brute - 1.0).abs() < 5e-4, "{target:?}: {found} {brute}");
        assert!(brute > 0.02 && brute < 0.6, "half hidden: {brute}");
    }
}
