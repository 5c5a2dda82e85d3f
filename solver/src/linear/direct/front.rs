//! Elimination of dense fronts.

use super::Singular;
use super::dissection::Dissection;

/// Least pivot over the largest entry of its column, those of later unknowns' rows included. What
/// is smaller waits for the next larger piece.
const LEAST_PIVOT: f64 = 0.01;
/// Pivots below this are none (every row and column is scaled to a largest entry of about one).
const NO_PIVOT: f64 = 1e-30;
/// Columns eliminated before the rest of the front follows.
const PANEL: usize = 16;

/// What is kept of an eliminated front of n rows, e of them with a pivot.
#[derive(Debug)]
pub(super) struct Front {
    pivots: usize,
    /// Positions of the unknowns whose equations are the rows, and of the columns' unknowns;
    /// those with a pivot first.
    rows: Vec<u32>,
    columns: Vec<u32>,
    /// The first e rows, row-major e × n.
    upper: Vec<f64>,
    /// Left part of the others, row-major (n − e) × e.
    lower: Vec<f64>,
}

/// What a piece leaves to its parent: a dense square matrix, of unknowns without a pivot first.
struct Rest {
    /// Positions of the waiting rows and columns.
    waiting: [Vec<u32>; 2],
    /// Place of the others in the parent's front.
    places: Vec<u32>,
    values: Vec<f64>,
}

/// Eliminates all pieces in order. `entries` of every piece: number in `values`, row and column of
/// the front.
pub(super) fn factorise(
    dissection: &Dissection,
    entries: &[Vec<(u32, u32, u32)>],
    values: &[(u32, u32, f64)],
) -> Result<Vec<Front>, Singular> {
    let mut rests: Vec<Vec<Rest>> = dissection.pieces.iter().map(|_| Vec::new()).collect();
    let mut fronts = Vec::with_capacity(dissection.pieces.len());
    for (k, piece) in dissection.pieces.iter().enumerate() {
        let children = std::mem::take(&mut rests[k]);
        let waiting: usize = children.iter().map(|c| c.waiting[0].len()).sum();
        let own = piece.own.len();
        let complete = own + waiting;
        let size = complete + piece.later.len();
        // Own unknowns first, then those that waited, then the later ones.
        let shift = |place: u32| place as usize + if place as usize >= own { waiting } else { 0 };
        let mut front = Dense { values: vec![0.0; size * size], size };
        for (value, row, column) in &entries[k] {
            *front.at(shift(*row), shift(*column)) += values[*value as usize].2;
        }
        let ids = |which: usize| -> Vec<u32> {
            let waited = children.iter().flat_map(|c| c.waiting[which].iter().copied());
            piece.own.clone().chain(waited).chain(piece.later.iter().copied()).collect()
        };
        let (mut rows, mut columns) = (ids(0), ids(1));
        let mut next = own;
        for child in &children {
            let count = child.waiting[0].len();
            let places: Vec<usize> =
                (next..next + count).chain(child.places.iter().map(|p| shift(*p))).collect();
            next += count;
            for (row, part) in places.iter().zip(child.values.chunks_exact(places.len())) {
                let row = &mut front.values[row * size..(row + 1) * size];
                part.iter().zip(&places).for_each(|(value, column)| row[*column] += value);
            }
        }
        let pivots = front.eliminate(complete, &mut rows, &mut columns);
        if piece.parent.is_none() && pivots < size {
            return Err(Singular);
        }
        if let Some(parent) = piece.parent {
            rests[parent as usize].push(Rest {
                waiting: [&rows, &columns].map(|ids| ids[pivots..complete].to_vec()),
                places: piece.in_parent.clone(),
                values: front.part(pivots..size, pivots..size),
            });
        }
        fronts.push(Front {
            pivots,
            rows,
            columns,
            upper: front.part(0..pivots, 0..size),
            lower: front.part(pivots..size, 0..pivots),
        });
    }
    let sound = fronts.iter().all(|f| f.upper.iter().all(|x| x.is_finite()));
    if sound { Ok(fronts) } else { Err(Singular) }
}

/// A dense square matrix, row-major.
struct Dense {
    values: Vec<f64>,
    size: usize,
}

impl Dense {
    fn at(&mut self, row: usize, column: usize) -> &mut f64 {
        &mut self.values[row * self.size + column]
    }

    fn part(&self, rows: std::ops::Range<usize>, columns: std::ops::Range<usize>) -> Vec<f64> {
        let row = |r: usize| &self.values[r * self.size..][columns.clone()];
        rows.flat_map(|r| row(r).iter().copied()).collect()
    }

    fn swap_rows(&mut self, a: usize, b: usize) {
        if a != b {
            let (low, high) = (a.min(b), a.max(b));
            let (first, second) = self.values.split_at_mut(high * self.size);
            first[low * self.size..][..self.size].swap_with_slice(&mut second[..self.size]);
        }
    }

    /// Eliminates the first `complete` rows and columns as far as they have pivots; returns how
    /// many. `rows` and `columns` follow the exchanges.
    fn eliminate(&mut self, complete: usize, rows: &mut [u32], columns: &mut [u32]) -> usize {
        let n = self.size;
        let (mut done, mut last) = (0, complete);
        while done < last {
            let end = (done + PANEL).min(last);
            let mut k = done;
            while k < end {
                let Some(pivot) = self.pivot(k, complete) else { break };
                self.swap_rows(k, pivot);
                rows.swap(k, pivot);
                let (upper, lower) = self.values.split_at_mut((k + 1) * n);
                let pivot_row = &upper[k * n..];
                let inverse = 1.0 / pivot_row[k];
                for row in lower.chunks_exact_mut(n) {
                    let factor = row[k] * inverse;
                    row[k] = factor;
                    subtract(&mut row[k + 1..end], factor, &pivot_row[k + 1..end]);
                }
                k += 1;
            }
            for r in done + 1..n {
                let (upper, row) = self.values.split_at_mut(r * n);
                let panel = done..k.min(r);
                let (factors, row) = row[..n].split_at_mut(end);
                subtract_rows(row, &factors[panel.clone()], &upper[panel.start * n..], (end, n));
            }
            if k < end {
                last -= 1;
                columns.swap(k, last);
                self.values.chunks_exact_mut(n).for_each(|row| row.swap(k, last));
            }
            done = k;
        }
        done
    }

    /// The row of the best pivot for column k among the complete ones, if it is good enough.
    fn pivot(&self, k: usize, complete: usize) -> Option<usize> {
        let largest = |rows: std::ops::Range<usize>| {
            let sizes = rows.map(|r| (r, self.values[r * self.size + k].abs()));
            sizes.fold((k, 0.0), |best, x| if x.1 > best.1 { x } else { best })
        };
        let (pivot, size) = largest(k..complete);
        let (_, later) = largest(complete..self.size);
        (size > NO_PIVOT && size >= LEAST_PIVOT * later).then_some(pivot)
    }
}

/// y ← y − a·x.
#[inline(always)]
fn subtract(y: &mut [f64], a: f64, x: &[f64]) {
    y.iter_mut().zip(x).for_each(|(y, x)| *y -= a * x);
}

/// y ← y − Σ aₖ·xₖ, the rows xₖ lying `step` apart in `rows`, each from `offset` on.
fn subtract_rows(y: &mut [f64], factors: &[f64], rows: &[f64], (offset, step): (usize, usize)) {
    let row = |k: usize| &rows[k * step + offset..(k + 1) * step];
    let mut k = 0;
    while k + 4 <= factors.len() {
        let [a, b, c, d] = [0, 1, 2, 3].map(|m| factors[k + m]);
        let rows = row(k).iter().zip(row(k + 1)).zip(row(k + 2).iter().zip(row(k + 3)));
        for (y, ((p, q), (r, s))) in y.iter_mut().zip(rows) {
            *y -= (a * p + b * q) + (c * r + d * s);
        }
        k += 4;
    }
    for k in k..factors.len() {
        subtract(y, factors[k], row(k));
    }
}

impl Front {
    /// Takes the pivots' share out of the right-hand sides of its rows.
    pub fn forward(&self, right: &mut [f64], work: &mut Vec<f64>) {
        let (e, n) = (self.pivots, self.rows.len());
        work.clear();
        work.extend(self.rows.iter().map(|p| right[*p as usize]));
        for r in 1..n {
            let (known, rest) = work.split_at_mut(r.min(e));
            let left =
                if r < e { &self.upper[r * n..][..r] } else { &self.lower[(r - e) * e..][..e] };
            rest[r - r.min(e)] -= product(left, known);
        }
        self.rows.iter().zip(&*work).for_each(|(p, value)| right[*p as usize] = *value);
    }

    /// Finds its unknowns, all later ones being known.
    pub fn backward(&self, right: &[f64], solution: &mut [f64]) {
        let n = self.columns.len();
        let mut known: Vec<f64> = self.columns.iter().map(|p| solution[*p as usize]).collect();
        for k in (0..self.pivots).rev() {
            let row = &self.upper[k * n..(k + 1) * n];
            let value = right[self.rows[k] as usize] - product(&row[k + 1..], &known[k + 1..]);
            known[k] = value / row[k];
            solution[self.columns[k] as usize] = known[k];
        }
    }
}

/// Scalar product in four partial sums.
fn product(a: &[f64], b: &[f64]) -> f64 {
    let mut sums = [0.0; 4];
    let (a4, b4) = (a.chunks_exact(4), b.chunks_exact(4));
    let rest: f64 = a4.remainder().iter().zip(b4.remainder()).map(|(a, b)| a * b).sum();
    for (a, b) in a4.zip(b4) {
        sums.iter_mut().zip(a.iter().zip(b)).for_each(|(s, (a, b))| *s += a * b);
    }
    sums.iter().sum::<f64>() + rest
}
