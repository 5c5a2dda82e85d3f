//! Pieces of a grid and the order in which their unknowns are eliminated.

use std::ops::Range;

/// Pieces of at most so many unknowns are not cut further.
const LEAST_PIECE: usize = 48;
/// A cut lies within this share of a piece's width around its middle, on the line with the fewest
/// unknowns.
const SLACK: f64 = 0.2;

/// A part of the grid: a cutting line, or a piece too small to be cut.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(super) struct Piece {
    /// Positions of its own unknowns.
    pub own: Range<u32>,
    /// Positions of later unknowns that the elimination reaches, in rising order.
    pub later: Vec<u32>,
    /// The piece that takes what is left.
    pub parent: Option<u32>,
    /// Place of every later unknown in the parent's front.
    pub in_parent: Vec<u32>,
}

impl Piece {
    /// Place of an unknown in the front: its own ones first, then the later ones.
    fn place(&self, position: u32) -> u32 {
        if self.own.contains(&position) {
            return position - self.own.start;
        }
        let own = self.own.end - self.own.start;
        own + self.later.partition_point(|p| *p < position) as u32
    }
}

/// All pieces in the order of elimination.
#[derive(Debug, Clone)]
pub(super) struct Dissection {
    /// Position of every unknown in the elimination.
    pub position: Vec<u32>,
    pub pieces: Vec<Piece>,
    /// The piece whose own unknown stands at a position.
    pub piece_at: Vec<u32>,
}

impl Dissection {
    pub fn new(cells: &[(u32, u32)], rows: &[usize], columns: &[usize]) -> Dissection {
        let mut cutting = Cutting { cells, sequence: Vec::new(), pieces: Vec::new() };
        let all: Vec<u32> = (0..cells.len() as u32).collect();
        cutting.cut(all);
        let Cutting { sequence, mut pieces, .. } = cutting;
        let mut position = vec![0; cells.len()];
        sequence.iter().enumerate().for_each(|(p, n)| position[*n as usize] = p as u32);
        let piece_at: Vec<u32> = (pieces.iter().enumerate())
            .flat_map(|(k, piece)| piece.own.clone().map(move |_| k as u32))
            .collect();
        for (row, column) in rows.iter().zip(columns) {
            let (a, b) = (position[*row], position[*column]);
            let (first, last) = (a.min(b), a.max(b));
            let piece = &mut pieces[piece_at[first as usize] as usize];
            if last >= piece.own.end {
                piece.later.push(last);
            }
        }
        for k in 0..pieces.len() {
            let piece = &mut pieces[k];
            piece.later.sort_unstable();
            piece.later.dedup();
            // Its first later unknown is eliminated in the smallest piece that can take the rest.
            let Some(first) = piece.later.first().copied() else { continue };
            let parent = piece_at[first as usize] as usize;
            piece.parent = Some(parent as u32);
            let (piece, parent) = two(&mut pieces, k, parent);
            parent.later.extend(piece.later.iter().filter(|p| **p >= parent.own.end));
        }
        for k in 0..pieces.len() {
            let Some(parent) = pieces[k].parent else { continue };
            let parent = &pieces[parent as usize];
            pieces[k].in_parent = pieces[k].later.iter().map(|p| parent.place(*p)).collect();
        }
        Dissection { position, pieces, piece_at }
    }
}

/// Pieces a < b.
fn two(pieces: &mut [Piece], a: usize, b: usize) -> (&Piece, &mut Piece) {
    let (before, after) = pieces.split_at_mut(b);
    (&before[a], &mut after[0])
}

/// The cutting under way.
struct Cutting<'a> {
    cells: &'a [(u32, u32)],
    /// Unknowns in the order of elimination.
    sequence: Vec<u32>,
    pieces: Vec<Piece>,
}

impl Cutting<'_> {
    /// Cuts the unknowns of a piece: first one half, then the other, then the line between them.
    fn cut(&mut self, unknowns: Vec<u32>) {
        if unknowns.is_empty() {
            return;
        }
        let Some((upright, line)) = self.line(&unknowns) else { return self.take(unknowns) };
        let at = |n: &u32| {
            let (i, j) = self.cells[*n as usize];
            if upright { i } else { j }
        };
        let part = |pick: &dyn Fn(u32) -> bool| -> Vec<u32> {
            unknowns.iter().copied().filter(|n| pick(at(n))).collect()
        };
        let parts = [part(&|x| x < line), part(&|x| x > line), part(&|x| x == line)];
        let [before, after, between] = parts;
        self.cut(before);
        self.cut(after);
        self.take(between);
    }

    fn take(&mut self, unknowns: Vec<u32>) {
        let start = self.sequence.len() as u32;
        let own = start..start + unknowns.len() as u32;
        self.sequence.extend(unknowns);
        let (later, in_parent) = (Vec::new(), Vec::new());
        self.pieces.push(Piece { own, later, parent: None, in_parent });
    }

    /// Where to cut a piece, and whether along an upright line; `None` where it is small enough.
    fn line(&self, unknowns: &[u32]) -> Option<(bool, u32)> {
        if unknowns.len() <= LEAST_PIECE {
            return None;
        }
        let span = |along: &dyn Fn(&(u32, u32)) -> u32| {
            let values = unknowns.iter().map(|n| along(&self.cells[*n as usize]));
            let (low, high) = values.fold((u32::MAX, 0), |(l, h), x| (l.min(x), h.max(x)));
            (low, high)
        };
        let (x, y) = (span(&|c| c.0), span(&|c| c.1));
        let upright = x.1 - x.0 >= y.1 - y.0;
        let (low, high) = if upright { x } else { y };
        if high - low < 2 {
            return None;
        }
        let mut counts = vec![0_usize; (high - low + 1) as usize];
        for n in unknowns {
            let (i, j) = self.cells[*n as usize];
            counts[((if upright { i } else { j }) - low) as usize] += 1;
        }
        let middle = 0.5 * f64::from(low + high);
        let reach = SLACK * f64::from(high - low);
        // Of equal ones that nearest to the middle.
        let best = (low + 1..high)
            .filter(|at| (f64::from(*at) - middle).abs() <= reach.max(0.5))
            .min_by(|a, b| {
            let key = |at: u32| (counts[(at - low) as usize], (f64::from(at) - middle).abs());
            let ((na, da), (nb, db)) = (key(*a), key(*b));
            na.cmp(&nb).then(da.total_cmp(&db))
        })?;
        Some((upright, best))
    }
}
