//! Sparse direct solution of systems whose unknowns lie on a grid of cells.
//!
//! The grid is cut in halves by lines of cells again and again (nested dissection): what the two
//! halves have in common is eliminated after them. The elimination of a piece is that of a dense
//! matrix (its *front*): the unknowns of the piece's own cutting line, which are complete there,
//! and those of later lines that they touch. What the elimination leaves of the latter goes to the
//! next larger piece (multifrontal method).
//!
//! Rows change places within a front for a safe pivot. An unknown without one (the level of the
//! pressure in a piece whose edge is not complete yet) is passed on and eliminated later.
//!
//! # Source
//! george-1973 (nested dissection), duff-1983 (multifrontal method).

mod dissection;
mod front;

use sprs::TriMat;

use dissection::Dissection;
use front::Front;

/// A system's matrix has no inverse, or one out of bounds.
#[derive(Debug, Clone, Copy, PartialEq, Eq, thiserror::Error)]
#[error("a matrix without inverse")]
pub(crate) struct Singular;

/// The order of elimination for one pattern, with the places where its entries go.
#[derive(Debug, Clone)]
pub(crate) struct Order {
    dissection: Dissection,
    /// Triplets of every piece: their number, row and column in its front.
    entries: Vec<Vec<(u32, u32, u32)>>,
    triplets: usize,
}

/// Factors of a matrix.
#[derive(Debug)]
pub(crate) struct Factors {
    /// Elimination position of every unknown.
    position: Vec<u32>,
    /// By elimination position.
    row_scale: Vec<f64>,
    column_scale: Vec<f64>,
    fronts: Vec<Front>,
    /// The scaled matrix: row, column and value.
    entries: Vec<(u32, u32, f64)>,
}

impl Order {
    /// For the triplets of `matrix` (its values do not matter), unknown n lying in the cell
    /// `cells[n]` (column, row) of the grid. Unknowns that share an entry should lie in neighbouring
    /// cells; the few that do not (the faces of a fan's slot) make larger fronts.
    pub fn new(cells: &[(u32, u32)], matrix: &TriMat<f64>) -> Order {
        let (rows, columns) = (matrix.row_inds(), matrix.col_inds());
        let dissection = Dissection::new(cells, rows, columns);
        let mut entries = vec![Vec::new(); dissection.pieces.len()];
        for (k, (row, column)) in rows.iter().zip(columns).enumerate() {
            let (row, column) = (dissection.position[*row], dissection.position[*column]);
            let piece = dissection.piece_at[row.min(column) as usize];
            entries[piece as usize].push((k as u32, row, column));
        }
        let mut place = vec![0; cells.len()];
        for (entries, piece) in entries.iter_mut().zip(&dissection.pieces) {
            let positions = piece.own.clone().chain(piece.later.iter().copied());
            positions.enumerate().for_each(|(n, p)| place[p as usize] = n as u32);
            for (_, row, column) in entries {
                (*row, *column) = (place[*row as usize], place[*column as usize]);
            }
        }
        Order { dissection, entries, triplets: rows.len() }
    }

    /// Factors of a matrix with the triplets that the order was made for, in the same sequence.
    pub fn factorise(&self, matrix: &TriMat<f64>) -> Result<Factors, Singular> {
        assert_eq!(matrix.nnz(), self.triplets, "the pattern is fixed");
        let position = &self.dissection.position;
        let (row_scale, column_scale) = scales(matrix, position);
        let entries: Vec<(u32, u32, f64)> = (matrix.data().iter())
            .zip(matrix.row_inds().iter().zip(matrix.col_inds()))
            .map(|(value, (row, column))| {
                let (row, column) = (position[*row], position[*column]);
                let scale = row_scale[row as usize] * column_scale[column as usize];
                (row, column, value * scale)
            })
            .collect();
        let fronts = front::factorise(&self.dissection, &self.entries, &entries)?;
        Ok(Factors { position: position.clone(), row_scale, column_scale, fronts, entries })
    }
}

/// Powers of two by which rows and columns are multiplied, so that the largest entry of each is
/// about one; by elimination position.
fn scales(matrix: &TriMat<f64>, position: &[u32]) -> (Vec<f64>, Vec<f64>) {
    let entries = || {
        let places = matrix.row_inds().iter().zip(matrix.col_inds());
        places
            .zip(matrix.data())
            .map(|((r, c), v)| (position[*r] as usize, position[*c] as usize, v.abs()))
    };
    let inverse = |largest: &mut f64| {
        *largest = if *largest > 0.0 { (-largest.log2().round()).exp2() } else { 1.0 };
    };
    let mut row_scale = vec![0.0_f64; position.len()];
    entries().for_each(|(row, _, value)| row_scale[row] = row_scale[row].max(value));
    row_scale.iter_mut().for_each(inverse);
    let mut column_scale = vec![0.0_f64; position.len()];
    entries().for_each(|(row, column, value)| {
        column_scale[column] = column_scale[column].max(value * row_scale[row]);
    });
    column_scale.iter_mut().for_each(inverse);
    (row_scale, column_scale)
}

impl Factors {
    /// Solves in place. What round-off has left of the right side is solved for once more: pivots
    /// are not always the largest of their column.
    pub fn solve(&self, values: &mut [f64]) {
        let mut right = vec![0.0; values.len()];
        for (value, n) in values.iter().zip(&self.position) {
            right[*n as usize] = value * self.row_scale[*n as usize];
        }
        let mut solution = self.solved(right.clone());
        for (row, column, value) in &self.entries {
            right[*row as usize] -= value * solution[*column as usize];
        }
        let change = self.solved(right);
        solution.iter_mut().zip(change).for_each(|(x, change)| *x += change);
        for (value, n) in values.iter_mut().zip(&self.position) {
            *value = solution[*n as usize] * self.column_scale[*n as usize];
        }
    }

    /// Solution of the scaled system, by elimination position.
    fn solved(&self, mut right: Vec<f64>) -> Vec<f64> {
        let mut work = Vec::new();
        self.fronts.iter().for_each(|front| front.forward(&mut right, &mut work));
        let mut solution = vec![0.0; right.len()];
        self.fronts.iter().rev().for_each(|front| front.backward(&right, &mut solution));
        solution
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests;
