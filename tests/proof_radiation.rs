//! Radiation between surfaces: view factors and enclosures against closed forms.
//!
//! The digits in the tests are those of the tables the checks come from; closed forms are computed
//! anew from their formulas (keys in docs/references.md).

#![allow(clippy::print_stdout)]
#![allow(clippy::unwrap_used)]

mod enclosure;
mod proof;

use std::f64::consts::PI;

use enclosure::{BAND, BLACK, MIRROR, OPEN, PLANAR, RING, factor, heat, on, radiation, section};
use proof::within;
use ventrise_mesh::{Rectangle, Side};
use ventrise_solver::{Owner, Patch, STEFAN_BOLTZMANN, SideSurface};

#[test]
fn facing_plates() {
    for (ratio, expected) in [
        (0.1, 0.049876),
        (0.5, 0.236068),
        (1.0, 0.414214),
        (2.0, 0.618034),
        (5.0, 0.819804),
        (10.0, 0.904988),
    ] {
        let mesh = section(PLANAR, [ratio, 1.0], [24, 24], &[], &[]);
        let r = radiation(&mesh, &[], [OPEN, OPEN, BLACK, BLACK], 100);
        let f = factor(&r, on(Side::Bottom), on(Side::Top));
        within(&format!("w/h = {ratio}"), f, expected, BAND);
        let exact = (f64::hypot(1.0, ratio) - 1.0) / ratio;
        assert!((f - exact).abs() < 1e-12, "{f} {exact}");
    }
}

#[test]
fn plates_at_right_angles() {
    for (ratio, expected) in [(0.5, 0.190983), (1.0, 0.292893), (2.0, 0.381966)] {
        let mesh = section(PLANAR, [1.0, ratio], [24, 24], &[], &[]);
        let r = radiation(&mesh, &[], [BLACK, OPEN, BLACK, OPEN], 100);
        let f = factor(&r, on(Side::Bottom), on(Side::Left));
        within(&format!("h/w = {ratio}"), f, expected, BAND);
        assert!((f - 0.5 * (1.0 + ratio - f64::hypot(1.0, ratio))).abs() < 1e-12);
    }
}

#[test]
fn square_cavity() {
    let mesh = section(PLANAR, [1.0, 1.0], [40, 40], &[], &[]);
    let r = radiation(&mesh, &[], [BLACK; 4], 1000);
    assert_eq!(r.patches().len(), 160);
    assert!(r.correction().defect < 1e-12, "row sums before any correction");
    within("opposite", factor(&r, on(Side::Left), on(Side::Right)), 2f64.sqrt() - 1.0, 1e-12);
    let adjacent = 1.0 - 0.5 * 2f64.sqrt();
    within("adjacent", factor(&r, on(Side::Left), on(Side::Top)), adjacent, 1e-12);
}

/// Coaxial discs of radii a and b at distance h: X = 1 + (1 + (b/h)²)/(a/h)²,
/// F = ½ (X − √(X² − 4 (b/a)²)).
fn discs(a: f64, b: f64, h: f64) -> f64 {
    let x = 1.0 + (h * h + b * b) / (a * a);
    0.5 * (x - (x * x - 4.0 * (b / a).powi(2)).sqrt())
}

#[test]
fn coaxial_discs() {
    for (height, expected) in [(1.0, 0.381966), (2.0, 0.171573), (4.0, 0.055728)] {
        let mesh = section(RING, [1.0, height], [16, 16], &[], &[]);
        let r = radiation(&mesh, &[], [MIRROR, OPEN, BLACK, BLACK], 200);
        let f = factor(&r, on(Side::Bottom), on(Side::Top));
        within(&format!("h/r = {height}"), f, expected, BAND);
        within("closed form", f, discs(1.0, 1.0, height), 2e-5);
    }
    let mesh = section(RING, [1.0, 1.0], [16, 16], &[], &[0.5]);
    let r = radiation(&mesh, &[], [MIRROR, OPEN, BLACK, BLACK], 10_000);
    let inner = |p: &Patch| on(Side::Bottom)(p) && p.ends[1][0] <= 0.5;
    let f = factor(&r, inner, on(Side::Top));
    within("r1 = 0.5 to r2 = 1, h = 1", f, 0.468871, BAND);
    within("closed form", f, discs(0.5, 1.0, 1.0), 2e-5);
}

#[test]
fn closed_cylinder() {
    for (height, ends, end, own) in [
        (1.0, 0.618034, 0.309017, 0.381966),
        (2.0, 0.828427, 0.207107, 0.585786),
        (4.0, 0.944272, 0.118034, 0.763932),
    ] {
        let mesh = section(RING, [1.0, height], [12, 24], &[], &[]);
        let r = radiation(&mesh, &[], [MIRROR, BLACK, BLACK, BLACK], 100);
        assert!(r.correction().defect < 1e-4, "{:?}", r.correction());
        let side = on(Side::Right);
        within("disc to side", factor(&r, on(Side::Top), &side), ends, BAND);
        within("side to one end", factor(&r, &side, on(Side::Bottom)), end, BAND);
        within("side to side", factor(&r, &side, &side), own, BAND);
        let exact = 1.0 + 0.5 * height - (1.0 + 0.25 * height * height).sqrt();
        within("closed form", factor(&r, &side, &side), exact, 2e-5);
    }
}

#[test]
fn concentric_cylinders_of_finite_length() {
    for (outer, length, cells, inward, own) in [
        (2.0, 2.0, 16, 0.337106, 0.228481),
        (2.0, 4.0, 16, 0.412628, 0.328598),
        (1.5, 3.0, 18, 0.583752, 0.234134),
    ] {
        let core = Rectangle { x: [0.0, 1.0], y: [0.0, length] };
        let mesh = section(RING, [outer, length], [cells, 32], &[core], &[]);
        let r = radiation(&mesh, &[1.0], [MIRROR, BLACK, OPEN, OPEN], 100);
        let core = |p: &Patch| p.owner == Owner::Block(0);
        within("outer to inner", factor(&r, on(Side::Right), core), inward, BAND);
        within("outer to itself", factor(&r, on(Side::Right), on(Side::Right)), own, BAND);
        // The same without the tables' last digit.
        let [to_inner, to_itself] = concentric(outer, length);
        within("closed form", factor(&r, on(Side::Right), core), to_inner, 1e-4);
        within("closed form", factor(&r, on(Side::Right), on(Side::Right)), to_itself, 1e-4);
    }
}

/// View factors of the inside of a cylinder of radius r and a length, to a core of radius 1 in it
/// and to itself [howell], C-91 and C-92; from memory, confirmed by random rays.
fn concentric(r: f64, length: f64) -> [f64; 2] {
    let l2 = length * length;
    let (a, b) = (l2 + r * r - 1.0, l2 - r * r + 1.0);
    let bent = ((a + 2.0).powi(2) - 4.0 * r * r).sqrt() * (b / (r * a)).acos()
        + b * (1.0 / r).asin()
        - 0.5 * PI * a;
    let to_core = (1.0 - ((b / a).acos() - bent / (2.0 * length)) / PI) / r;
    let (ring, s) = (r * r - 1.0, (4.0 * r * r + l2).sqrt() / length);
    let arc = ((4.0 * ring + l2 / (r * r) * (r * r - 2.0)) / (l2 + 4.0 * ring)).asin();
    let ends = s * arc - ((r * r - 2.0) / (r * r)).asin() + 0.5 * PI * (s - 1.0);
    let own = 1.0 - 1.0 / r + 2.0 / (PI * r) * (2.0 * ring.sqrt() / length).atan()
        - length / (2.0 * PI * r) * ends;
    [to_core, own]
}

/// σ (T₁⁴ − T₂⁴) over the resistances of two surfaces that see only each other, `ratio` A₁/A₂,
/// for 350 K and 300 K [W/m² of A₁].
fn two_surfaces(e1: f64, e2: f64, ratio: f64) -> f64 {
    let power = STEFAN_BOLTZMANN * (350f64.powi(4) - 300f64.powi(4));
    power / (1.0 / e1 + ratio * (1.0 / e2 - 1.0))
}

#[test]
fn endless_plates_between_mirrors() {
    for (emissivity, expected) in [(0.9, 320.408), (0.1, 38.731)] {
        for width in [0.2, 1.0, 5.0] {
            let [a, b] = [emissivity, 0.9].map(SideSurface::Wall);
            for (size, sides, hot) in [
                ([width, 1.0], [MIRROR, MIRROR, a, b], Side::Bottom),
                ([1.0, width], [a, b, MIRROR, MIRROR], Side::Left),
            ] {
                let mesh = section(PLANAR, size, [8, 8], &[], &[]);
                let r = radiation(&mesh, &[], sides, 1000);
                let t = |p: &Patch| if on(hot)(p) { 350.0 } else { 300.0 };
                let q = heat(&r, on(hot), t) / width;
                within(&format!("ε = {emissivity}, 0.9"), q, expected, BAND);
                // They see nothing else, so closing leaves no error at all.
                within("two surfaces", q, two_surfaces(emissivity, 0.9, 1.0), 1e-9);
                assert!(r.correction().defect < 2e-3, "{:?}", r.correction());
            }
        }
    }
}

#[test]
fn endless_concentric_cylinders_between_mirrors() {
    let core = Rectangle { x: [0.0, 0.5], y: [0.0, 1.0] };
    let mesh = section(RING, [1.0, 1.0], [8, 8], &[core], &[]);
    let r = radiation(&mesh, &[0.8], [MIRROR, SideSurface::Wall(0.8), MIRROR, MIRROR], 1000);
    let core = |p: &Patch| p.owner == Owner::Block(0);
    let t = |p: &Patch| if core(p) { 350.0 } else { 300.0 };
    let q = heat(&r, core, t) / PI;
    within("ε = 0.8, r1/r2 = 0.5", q, 284.807, BAND);
    within("two surfaces", q, two_surfaces(0.8, 0.8, 0.5), BAND);
    within("outer to inner", factor(&r, on(Side::Right), core), 0.5, BAND);
}

/// One patch per side, so that the adiabatic sides are isothermal as in the closed form:
/// F = (1 + F₁₂)/2.
#[test]
fn black_square_with_two_reradiating_sides() {
    let mesh = section(PLANAR, [1.0, 1.0], [8, 8], &[], &[]);
    let r = radiation(&mesh, &[], [BLACK; 4], 1);
    assert_eq!(r.patches().len(), 4);
    // By symmetry the sides float at the mean of the fourth powers.
    let floating = (0.5 * (350f64.powi(4) + 300f64.powi(4))).powf(0.25);
    let t = |p: &Patch| match p.owner {
        Owner::Side(Side::Bottom) => 350.0,
        Owner::Side(Side::Top) => 300.0,
        _ => floating,
    };
    let q = heat(&r, on(Side::Bottom), t);
    within("floor", q, 276.910, BAND);
    let power = STEFAN_BOLTZMANN * (350f64.powi(4) - 300f64.powi(4));
    within("factor", q / power, 0.5 * 2f64.sqrt(), 1e-9);
    assert!(heat(&r, on(Side::Left), t).abs() < 1e-9 * q, "sides float");
}
