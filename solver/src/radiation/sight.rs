//! Lines of sight between two surfaces of a plane scene, counted exactly.
//!
//! A scene consists of level and upright segments and of rectangles that block the view. Wanted is
//! the measure of all straight lines from a base segment to a target segment that no rectangle
//! blocks,
//!
//! ```text
//! M = ∫ over the base dx ∫ over the seen angles dφ weight(φ)·cos φ
//! ```
//!
//! with φ the angle to the base's normal. From a point x of the base the target is seen between
//! the directions of two vertices, its ends or corners of rectangles. With g(φ) = ∫ weight·cos φ dφ
//! one such piece gives g(φ_w) − g(φ_v), and the integral of g(φ_v(x)) along the base is a function
//! P of the vertex's place only: with weight 1, P is the distance to the vertex, and the result
//! Hottel's crossed strings [hottel-1954]. Which vertices bound the view changes only where the
//! line through two vertices meets the base; between such places the integral is exact.
//!
//! In the base's own coordinates u runs along it and w ≥ 0 away from it:
//!
//! ```text
//!        lo ─────────── hi      target
//!          \   ┌──┐    /
//!           \  └──┘   /         rectangle
//!     ───────a───────b────── u  base
//! ```

/// A rectangle that blocks the view, [lower, upper] [m]; it may have no thickness.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Obstacle {
    /// Extent along x.
    pub x: [f64; 2],
    /// Extent along y.
    pub y: [f64; 2],
}

/// A straight surface, level or upright.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Segment {
    /// Whether it lies on a line x = `at` (else on y = `at`).
    pub upright: bool,
    /// Position of its line [m].
    pub at: f64,
    /// Extent along its line, [lower, upper] [m].
    pub span: [f64; 2],
    /// Direction of its normal, into the air: 1 or −1 along x (upright) or y (level).
    pub facing: f64,
}

/// A point in the base's coordinates, [u, w].
type Point = [f64; 2];

/// Lengths and heights below this share of the scene's extent are none.
const NOTHING: f64 = 1e-13;

/// Places where vertices may line up are kept this generously, as a share of extent².
const SLACK: f64 = 1e-9;

/// With more obstacles than this between them, base and target are halved: work grows with the
/// square of the obstacles, and most halves lose most of them or are hidden altogether.
const MANY: usize = 12;

/// How often they are halved at most.
const HALVINGS: usize = 6;

/// What a rectangle hides from one point of the base: tangents of the first and last direction,
/// and the vertices there.
#[derive(Debug, Clone, Copy)]
struct Shadow {
    tangent: [f64; 2],
    vertex: [Point; 2],
}

/// Counts lines of sight; holds the scratch space.
#[derive(Debug)]
pub(super) struct Sight {
    nothing: f64,
    slack: f64,
    near: Vec<Obstacle>,
    vertices: Vec<Point>,
    places: Vec<f64>,
    shadows: Vec<Shadow>,
}

/// The part of a target that faces the base, and the part of the base that it faces.
struct Facing {
    base: [f64; 2],
    lo: Point,
    hi: Point,
    /// `Some` (line u, side seen) when the target is normal to the base.
    across: Option<(f64, f64)>,
}

impl Sight {
    /// For scenes of about an extent [m].
    pub fn new(extent: f64) -> Self {
        Sight {
            nothing: NOTHING * extent,
            slack: SLACK * extent * extent,
            near: Vec::new(),
            vertices: Vec::new(),
            places: Vec::new(),
            shadows: Vec::new(),
        }
    }

    /// The measure M of lines from `base` to `target`. `p(y, h)` is P for a vertex at distance h
    /// from the base's line and y further along it; it must be even in y.
    pub fn lines(
        &mut self,
        base: &Segment,
        target: &Segment,
        obstacles: &[Obstacle],
        p: impl Fn(f64, f64) -> f64,
    ) -> f64 {
        self.halved(base, target, obstacles, &p, HALVINGS)
    }

    fn halved(
        &mut self,
        base: &Segment,
        target: &Segment,
        obstacles: &[Obstacle],
        p: &impl Fn(f64, f64) -> f64,
        halvings: usize,
    ) -> f64 {
        let Some(facing) = self.facing(base, target) else { return 0.0 };
        if self.blocks(base, &facing, obstacles) {
            return 0.0;
        }
        if self.near.is_empty() {
            return piece(facing.base, facing.lo, facing.hi, p);
        }
        if self.near.len() > MANY && halvings > 0 {
            let near = std::mem::take(&mut self.near);
            let length = |s: &Segment| s.span[1] - s.span[0];
            let sum = if length(base) > length(target) {
                let parts = halves(base).map(|b| self.halved(&b, target, &near, p, halvings - 1));
                parts[0] + parts[1]
            } else {
                let parts = halves(target).map(|t| self.halved(base, &t, &near, p, halvings - 1));
                parts[0] + parts[1]
            };
            self.near = near;
            return sum;
        }
        self.find_places(&facing);
        let mut sum = 0.0;
        for k in 1..self.places.len() {
            let part = [self.places[k - 1], self.places[k]];
            if part[1] - part[0] > self.nothing {
                sum += self.part(part, &facing, p);
            }
        }
        sum
    }

    /// What of both lies in front of the other.
    fn facing(&self, base: &Segment, target: &Segment) -> Option<Facing> {
        let height = |at: f64| base.facing * (at - base.at);
        if base.upright == target.upright {
            let h = height(target.at);
            let opposite = base.facing * target.facing < 0.0;
            let [lo, hi] = target.span.map(|u| [u, h]);
            let facing = Facing { base: base.span, lo, hi, across: None };
            return (opposite && h > self.nothing).then_some(facing);
        }
        let (u, side) = (target.at, target.facing);
        let ends = target.span.map(height);
        let (low, high) = (in_front(ends[0].min(ends[1])), ends[0].max(ends[1]));
        let [mut a, mut b] = base.span;
        // Seen from the base, nearer the base means further out to the target's side.
        let (lo, hi) = if side > 0.0 {
            a = a.max(u);
            ([u, low], [u, high])
        } else {
            b = b.min(u);
            ([u, high], [u, low])
        };
        let any = high - low > self.nothing && b - a > self.nothing;
        any.then_some(Facing { base: [a, b], lo, hi, across: Some((u, side)) })
    }

    /// Collects the obstacles between base and target, and as vertices the target's ends and
    /// their corners. True when a single obstacle hides all.
    fn blocks(&mut self, base: &Segment, facing: &Facing, obstacles: &[Obstacle]) -> bool {
        let Facing { base: [a, b], lo, hi, across } = *facing;
        self.near.clear();
        self.vertices.clear();
        self.vertices.extend([lo, hi]);
        let least = a.min(lo[0]).min(hi[0]);
        let most = b.max(lo[0]).max(hi[0]);
        let top = lo[1].max(hi[1]);
        let left = [lo[0] - a, lo[1]];
        let right = [hi[0] - b, hi[1]];
        let left_margin = self.nothing * (left[0].abs() + left[1]);
        let right_margin = self.nothing * (right[0].abs() + right[1]);
        for obstacle in obstacles {
            let (along, out) =
                if base.upright { (obstacle.y, obstacle.x) } else { (obstacle.x, obstacle.y) };
            let [mut u0, mut u1] = along;
            let [w0, w1] = if base.facing > 0.0 {
                [out[0] - base.at, out[1] - base.at]
            } else {
                [base.at - out[1], base.at - out[0]]
            };
            if w1 <= self.nothing || w0 >= top - self.nothing || u1 <= least || u0 >= most {
                continue;
            }
            // Only what lies in front of both can be between them; then every direction that
            // meets it is blocked.
            match across {
                Some((u, side)) if side > 0.0 => {
                    if u1 <= u + self.nothing {
                        continue;
                    }
                    u0 = u0.max(u);
                }
                Some((u, _)) => {
                    if u0 >= u - self.nothing {
                        continue;
                    }
                    u1 = u1.min(u);
                }
                None => {}
            }
            let (w0, w1) = (in_front(w0), if across.is_none() { w1.min(top) } else { w1 });
            let corners = [[u0, w0], [u1, w0], [u0, w1], [u1, w1]];
            // Positive: on the left of the string.
            let of_left = corners.map(|c| left[0] * c[1] - left[1] * (c[0] - a));
            let of_right = corners.map(|c| right[0] * c[1] - right[1] * (c[0] - b));
            let [left_least, left_most] = range(of_left);
            let [right_least, right_most] = range(of_right);
            if (left_least >= 0.0 && left_most > 0.0) || (right_most <= 0.0 && right_least < 0.0) {
                continue;
            }
            if left_most > left_margin && right_least < -right_margin {
                return true;
            }
            self.near.push(*obstacle);
            self.vertices.extend(corners);
        }
        false
    }

    /// The base's ends and the places on it where two vertices line up on the target.
    fn find_places(&mut self, facing: &Facing) {
        let Facing { base: [a, b], lo, hi, .. } = *facing;
        self.places.clear();
        self.places.push(a);
        for (k, v) in self.vertices.iter().enumerate() {
            for w in &self.vertices[..k] {
                let rise = v[1] - w[1];
                if rise.abs() <= self.nothing {
                    continue;
                }
                let x = v[0] + (w[0] - v[0]) * (v[1] / rise);
                if !(x > a && x < b) {
                    continue;
                }
                let far = if v[1] > w[1] { v } else { w };
                let way = [far[0] - x, far[1]];
                let left = (lo[0] - x) * way[1] - lo[1] * way[0];
                let right = (hi[0] - x) * way[1] - hi[1] * way[0];
                if left <= self.slack && right >= -self.slack {
                    self.places.push(x);
                }
            }
        }
        self.places.push(b);
        self.places.sort_by(f64::total_cmp);
    }

    /// M from a part of the base on which the same vertices bound the view.
    fn part(&mut self, part: [f64; 2], facing: &Facing, p: &impl Fn(f64, f64) -> f64) -> f64 {
        let x = 0.5 * (part[0] + part[1]);
        let tangent = |v: &Point| (v[0] - x) / v[1];
        let (mut seen, end) = (tangent(&facing.lo), tangent(&facing.hi));
        let mut from = facing.lo;
        self.shadows.clear();
        for corners in self.vertices[2..].chunks_exact(4) {
            let mut shadow = Shadow {
                tangent: [f64::INFINITY, f64::NEG_INFINITY],
                vertex: [corners[0], corners[0]],
            };
            for corner in corners {
                let t = tangent(corner);
                if t < shadow.tangent[0] {
                    (shadow.tangent[0], shadow.vertex[0]) = (t, *corner);
                }
                if t > shadow.tangent[1] {
                    (shadow.tangent[1], shadow.vertex[1]) = (t, *corner);
                }
            }
            if shadow.tangent[1] > seen && shadow.tangent[0] < end {
                self.shadows.push(shadow);
            }
        }
        self.shadows.sort_by(|s, t| s.tangent[0].total_cmp(&t.tangent[0]));
        let mut sum = 0.0;
        for shadow in &self.shadows {
            if shadow.tangent[0] > seen {
                sum += piece(part, from, shadow.vertex[0], p);
            }
            if shadow.tangent[1] > seen {
                (seen, from) = (shadow.tangent[1], shadow.vertex[1]);
            }
        }
        if end > seen {
            sum += piece(part, from, facing.hi, p);
        }
        sum
    }
}

fn halves(segment: &Segment) -> [Segment; 2] {
    let [from, to] = segment.span;
    let middle = 0.5 * (from + to);
    [Segment { span: [from, middle], ..*segment }, Segment { span: [middle, to], ..*segment }]
}

/// M between the directions of two vertices from all points of [a, b].
fn piece([a, b]: [f64; 2], lo: Point, hi: Point, p: &impl Fn(f64, f64) -> f64) -> f64 {
    let strung = |v: Point| p(v[0] - a, v[1]) - p(v[0] - b, v[1]);
    strung(hi) - strung(lo)
}

/// Height above the base, from the base on. Never −0: tangents of directions along the base are
/// ±∞ by the sign of u.
fn in_front(w: f64) -> f64 {
    if w > 0.0 { w } else { 0.0 }
}

fn range(values: [f64; 4]) -> [f64; 2] {
    values.iter().fold([f64::INFINITY, f64::NEG_INFINITY], |[l, m], v| [l.min(*v), m.max(*v)])
}

#[cfg(test)]
#[path = "sight_tests.rs"]
mod tests;
