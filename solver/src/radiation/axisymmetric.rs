//! View between rings of an axisymmetric section, with shadows by bodies of revolution.
//!
//! Every straight line lies in one plane parallel to the axis, at some distance p from it. Cut by
//! that plane at the distance τ along it from the point nearest the axis, with r² = p² + τ², a
//! cylinder is a pair of upright lines τ = ±√(r² − p²), a ring a pair of level ones, and a block a
//! rectangle (two, when p is less than its inner radius). The lines between two rings therefore
//! are the lines of sight of a plane scene, added up over p:
//!
//! ```text
//! dA₁ cos θ₁ dω₁ = dp dΘ · cos α · (dq dα),    Θ the azimuth of the plane,
//!                                              α the line's slope, q across it in the plane
//! A₁·F₁₂ = (1/π) ∫ dΘ ∫ dp M(p) = 4 ∫₀ M(p) dp
//! ```
//!
//! with M of weight cos α from the half τ > 0 of the first to both halves of the second. (Θ gives
//! 2π; the halves of the first are alike; p counts from 0.) M is exact, so what is left is one
//! integral over p. M behaves as a root at the radii of what is seen or in the way: the integral
//! is cut there, and p = a + (b − a)·t²·(3 − 2·t) makes it smooth.

use super::quadrature::{Tolerance, integral};
use super::sight::{Obstacle, Segment, Sight};

/// Accuracy of the integral over p, as a share of the view area (estimates are far above the
/// error reached).
const RELATIVE: f64 = 1e-4;

/// The same as a share of the smaller patch.
const ABSOLUTE: f64 = 1e-7;

/// View area A_i·F_ij between two rings [m²]; `x` of segments and obstacles is the radius.
pub(super) fn view_area(
    sight: &mut Sight,
    from: &Segment,
    to: &Segment,
    obstacles: &[Obstacle],
) -> f64 {
    if !can_see(from, to) {
        return 0.0;
    }
    let (outer, levels) = (outermost(from).max(outermost(to)), levels(from, to));
    let between = |o: &&Obstacle| {
        o.x[0] < outer && o.y[0] <= levels[1] && o.y[1] >= levels[0] && o.x[1] > 0.0
    };
    let near: Vec<Obstacle> = obstacles.iter().filter(between).copied().collect();
    let end = outermost(from).min(outermost(to));
    let mut cuts: Vec<f64> = [from, to].into_iter().flat_map(radii).collect();
    cuts.extend(near.iter().flat_map(|o| o.x));
    cuts.retain(|r| *r > 0.0 && *r < end);
    cuts.extend([0.0, end]);
    cuts.sort_by(f64::total_cmp);
    cuts.dedup();
    let mut plane = Vec::with_capacity(2 * near.len());
    let mut lines_at = |p: f64| {
        plane.clear();
        plane.extend(near.iter().flat_map(|o| sections(o, p)).flatten());
        let [Some(base), _] = halves(from, p) else { return 0.0 };
        halves(to, p).iter().flatten().map(|t| lines(sight, &base, t, &plane)).sum()
    };
    let tolerance = Tolerance {
        relative: RELATIVE,
        absolute: ABSOLUTE * 0.25 * ring_area(from).min(ring_area(to)),
    };
    let spans = cuts.windows(2);
    4.0 * spans
        .map(|span| {
            let [a, width] = [span[0], span[1] - span[0]];
            let in_span = |t: f64| {
                let p = a + width * t * t * (3.0 - 2.0 * t);
                6.0 * width * t * (1.0 - t) * lines_at(p)
            };
            integral(in_span, tolerance)
        })
        .sum::<f64>()
}

/// M with weight cos α.
fn lines(sight: &mut Sight, base: &Segment, target: &Segment, obstacles: &[Obstacle]) -> f64 {
    if base.upright {
        sight.lines(base, target, obstacles, from_cylinder)
    } else {
        sight.lines(base, target, obstacles, from_ring)
    }
}

/// P from an upright base, α = φ: g = ∫ cos² φ dφ = ½ (φ + sin φ cos φ), P = ∫ g dy with
/// tan φ = y/h.
fn from_cylinder(y: f64, h: f64) -> f64 {
    0.5 * y * y.atan2(h)
}

/// P from a level base, cos α = |sin φ|: g = ±½ sin² φ, P = ∫ g dy.
fn from_ring(y: f64, h: f64) -> f64 {
    let y = y.abs();
    0.5 * (y - h * y.atan2(h))
}

/// Whether the fronts of two rings face each other at all.
fn can_see(a: &Segment, b: &Segment) -> bool {
    match (a.upright, b.upright) {
        (false, false) => a.facing * b.facing < 0.0 && a.facing * (b.at - a.at) > 0.0,
        (true, true) if a.facing < 0.0 && b.facing < 0.0 => true,
        (true, true) if a.facing > 0.0 && b.facing > 0.0 => false,
        (true, true) => a.facing * (b.at - a.at) > 0.0,
        (true, false) => can_see(b, a),
        (false, true) => {
            // A bore sees out past its ends to any radius.
            let reaches = b.facing < 0.0 || a.span[1] > b.at;
            let height = |z: f64| a.facing * (z - a.at);
            reaches && height(b.span[0]).max(height(b.span[1])) > 0.0
        }
    }
}

/// Largest radius of a ring.
fn outermost(ring: &Segment) -> f64 {
    if ring.upright { ring.at } else { ring.span[1] }
}

fn radii(ring: &Segment) -> [f64; 2] {
    if ring.upright { [ring.at; 2] } else { ring.span }
}

/// Lowest and highest place of two rings.
fn levels(a: &Segment, b: &Segment) -> [f64; 2] {
    let of = |s: &Segment| if s.upright { s.span } else { [s.at; 2] };
    let (a, b) = (of(a), of(b));
    [a[0].min(b[0]), a[1].max(b[1])]
}

/// Area of a ring over π, without regard to units of revolution: 2·r·length or r₂² − r₁².
fn ring_area(ring: &Segment) -> f64 {
    let [a, b] = ring.span;
    if ring.upright { 2.0 * ring.at * (b - a) } else { b * b - a * a }
}

/// τ of a radius in the plane at distance p, which it must reach.
fn along(r: f64, p: f64) -> f64 {
    (r * r - p * p).max(0.0).sqrt()
}

/// What the plane at distance p cuts out of a ring: the halves at τ > 0 and τ < 0.
fn halves(ring: &Segment, p: f64) -> [Option<Segment>; 2] {
    if outermost(ring) <= p {
        return [None, None];
    }
    if ring.upright {
        let tau = along(ring.at, p);
        let other = Segment { at: -tau, facing: -ring.facing, ..*ring };
        return [Some(Segment { at: tau, ..*ring }), Some(other)];
    }
    let [a, b] = ring.span.map(|r| along(r, p));
    let a = if ring.span[0] > p { a } else { 0.0 };
    [Some(Segment { span: [a, b], ..*ring }), Some(Segment { span: [-b, -a], ..*ring })]
}

/// What the plane at distance p cuts out of a block.
fn sections(block: &Obstacle, p: f64) -> [Option<Obstacle>; 2] {
    let [inner, outer] = block.x;
    if outer <= p {
        return [None, None];
    }
    let b = along(outer, p);
    if inner <= p {
        return [Some(Obstacle { x: [-b, b], y: block.y }), None];
    }
    let a = along(inner, p);
    [Some(Obstacle { x: [a, b], y: block.y }), Some(Obstacle { x: [-b, -a], y: block.y })]
}
