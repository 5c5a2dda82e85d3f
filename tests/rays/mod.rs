//! View factors by counting random rays: an independent way to the same numbers.
//!
//! Rays start at random places of every surface, in random directions by Lambert's law, and go
//! straight on in space to the first surface they meet. Nothing here is shared with the solver.

#![allow(clippy::print_stdout)]

use std::f64::consts::PI;

/// A rectangle of the section (x is the radius of rings).
#[derive(Debug, Clone, Copy)]
pub struct Body {
    pub x: [f64; 2],
    pub y: [f64; 2],
}

/// Random numbers in [0, 1): xorshift64* [vigna-2016], from memory.
struct Random(u64);

impl Random {
    fn next(&mut self) -> f64 {
        self.0 ^= self.0 >> 12;
        self.0 ^= self.0 << 25;
        self.0 ^= self.0 >> 27;
        (self.0.wrapping_mul(0x2545_F491_4F6C_DD1D) >> 11) as f64 / (1u64 << 53) as f64
    }
}

/// A straight piece of surface in the section.
#[derive(Debug, Clone, Copy)]
struct Piece {
    owner: usize,
    upright: bool,
    at: f64,
    span: [f64; 2],
    facing: f64,
}

/// Edges of the bodies that lie inside the section, less what other bodies cover, and the sides
/// likewise. Owners: bodies, then left, right, bottom, top.
fn pieces(bodies: &[Body], size: [f64; 2], axis: bool) -> Vec<Piece> {
    let mut edges = Vec::new();
    for (owner, b) in bodies.iter().enumerate() {
        for (k, facing) in [(0, -1.0), (1, 1.0)] {
            edges.push(Piece { owner, upright: true, at: b.x[k], span: b.y, facing });
            edges.push(Piece { owner, upright: false, at: b.y[k], span: b.x, facing });
        }
    }
    for (k, facing) in [(0, 1.0), (1, -1.0)] {
        let at = k as f64;
        let (side, level) = (bodies.len() + k, bodies.len() + 2 + k);
        let span = [0.0, size[1]];
        edges.push(Piece { owner: side, upright: true, at: at * size[0], span, facing });
        let span = [0.0, size[0]];
        edges.push(Piece { owner: level, upright: false, at: at * size[1], span, facing });
    }
    edges.retain(|e| !(axis && e.upright && e.at == 0.0));
    edges.into_iter().flat_map(|e| uncovered(e, bodies, size)).collect()
}

/// What of an edge has air in front of it.
fn uncovered(edge: Piece, bodies: &[Body], size: [f64; 2]) -> Vec<Piece> {
    let mut cuts = edge.span.to_vec();
    for b in bodies {
        let along = if edge.upright { b.y } else { b.x };
        cuts.extend(along.iter().filter(|c| **c > edge.span[0] && **c < edge.span[1]));
    }
    cuts.sort_by(f64::total_cmp);
    let is_free = |part: &&[f64]| {
        let (along, across) = (0.5 * (part[0] + part[1]), edge.at + 1e-6 * edge.facing);
        let (x, y) = if edge.upright { (across, along) } else { (along, across) };
        let inside = x > 0.0 && x < size[0] && y > 0.0 && y < size[1];
        let covers = |b: &Body| x > b.x[0] && x < b.x[1] && y > b.y[0] && y < b.y[1];
        part[1] > part[0] && inside && !bodies.iter().any(covers)
    };
    cuts.windows(2).filter(is_free).map(|p| Piece { span: [p[0], p[1]], ..edge }).collect()
}

/// Hits of `count` rays from each owner (row) on each owner; empty rows send none.
fn count(
    pieces: &[Piece],
    owners: usize,
    count: usize,
    seed: u64,
    area: impl Fn(&Piece) -> f64,
    mut shoot: impl FnMut(&Piece, &mut Random) -> Option<usize>,
) -> Vec<Vec<usize>> {
    println!("seed {seed}");
    let mut random = Random(seed);
    let mut hits = vec![vec![0; owners]; owners];
    for (from, row) in hits.iter_mut().enumerate() {
        let own: Vec<&Piece> = pieces.iter().filter(|p| p.owner == from).collect();
        let total: f64 = own.iter().map(|p| area(p)).sum();
        if own.is_empty() {
            continue;
        }
        for _ in 0..count {
            let mut left = random.next() * total;
            let mut chosen = own[own.len() - 1];
            for piece in &own {
                if left < area(piece) {
                    chosen = piece;
                    break;
                }
                left -= area(piece);
            }
            let hit = shoot(chosen, &mut random).map(|k| pieces[k].owner);
            row[hit.unwrap_or_else(|| panic!("a ray from {chosen:?} meets nothing"))] += 1;
        }
    }
    hits
}

/// Counts in a planar section: sin φ is equally spread over (−1, 1).
pub fn count_planar(bodies: &[Body], size: [f64; 2], rays: usize, seed: u64) -> Vec<Vec<usize>> {
    let pieces = pieces(bodies, size, false);
    let length = |p: &Piece| p.span[1] - p.span[0];
    count(&pieces, bodies.len() + 4, rays, seed, length, |from, random| {
        let s = from.span[0] + random.next() * length(from);
        let sine = 2.0 * random.next() - 1.0;
        let along = sine;
        let out = from.facing * (1.0 - sine * sine).sqrt();
        let (at, way) =
            if from.upright { ([from.at, s], [out, along]) } else { ([s, from.at], [along, out]) };
        let meets = |p: &Piece| {
            let (across, along) = if p.upright { (0, 1) } else { (1, 0) };
            let t = (p.at - at[across]) / way[across];
            let place = at[along] + t * way[along];
            (t > 1e-12 && place >= p.span[0] && place <= p.span[1]).then_some(t)
        };
        first(&pieces, meets)
    })
}

/// Counts in an axisymmetric section, with rays in space.
pub fn count_rings(bodies: &[Body], size: [f64; 2], rays: usize, seed: u64) -> Vec<Vec<usize>> {
    let pieces = pieces(bodies, size, true);
    let area = |p: &Piece| {
        let [a, b] = p.span;
        if p.upright { 2.0 * p.at * (b - a) } else { b * b - a * a }
    };
    count(&pieces, bodies.len() + 4, rays, seed, area, |from, random| {
        let [a, b] = from.span;
        let place = random.next();
        let (r, z) = if from.upright {
            (from.at, a + place * (b - a))
        } else {
            ((a * a + place * (b * b - a * a)).sqrt(), from.at)
        };
        // Start at (r, 0, z); Lambert's law about the normal.
        let (sine, turn) = (random.next().sqrt(), 2.0 * PI * random.next());
        let out = from.facing * (1.0 - sine * sine).sqrt();
        let (p, q) = (sine * turn.cos(), sine * turn.sin());
        let way = if from.upright { [out, p, q] } else { [p, q, out] };
        let flat = way[0] * way[0] + way[1] * way[1];
        let radius_at = |t: f64| (r + t * way[0]).hypot(t * way[1]);
        let meets = |piece: &Piece| {
            if !piece.upright {
                let t = (piece.at - z) / way[2];
                let at = radius_at(t);
                return (t > 1e-9 && at >= piece.span[0] && at <= piece.span[1]).then_some(t);
            }
            // |(r, 0) + t·way| = at
            let half = r * way[0] / flat;
            let root = half * half - (r * r - piece.at * piece.at) / flat;
            if root < 0.0 {
                return None;
            }
            [-half - root.sqrt(), -half + root.sqrt()].into_iter().find(|t| {
                let height = z + t * way[2];
                *t > 1e-9 && height >= piece.span[0] && height <= piece.span[1]
            })
        };
        first(&pieces, meets)
    })
}

/// The piece met first.
fn first(pieces: &[Piece], meets: impl Fn(&Piece) -> Option<f64>) -> Option<usize> {
    let met = pieces.iter().enumerate().filter_map(|(k, p)| meets(p).map(|t| (k, t)));
    met.min_by(|a, b| a.1.total_cmp(&b.1)).map(|(k, _)| k)
}
