//! Refinement by an exact factor.
//!
//! The lines x_i are read as samples at whole ξ = i of a smooth mapping x(ξ), a monotone cubic
//! with the slopes
//!
//! ```text
//!   m_i = sqrt(d_{i-1}·d_i),  at the ends  m_0 = d_0·sqrt(d_0/d_1),  d_i = x_{i+1} - x_i
//! ```
//!
//! (exact to order a² for cells that grow by exp(a)), each at most 1.5 times the smaller of its
//! two cells, which keeps the cubic rising. The finer lines are x(j/factor): cells that grew by a
//! ratio g now grow by about g^(1/factor) (by at most g where sizes go up and down by turns), and
//! every line of the coarser mesh is kept bit by bit.

use crate::{Mesh, Side};

/// Bound of a slope, as a multiple of the smaller neighbouring cell.
const STEEPEST: f64 = 1.5;

impl Mesh {
    /// The mesh with every cell cut into `factor`·`factor`; factors 0 and 1 give a copy.
    pub fn refined(&self, factor: usize) -> Mesh {
        let factor = factor.max(1);
        let fine_row = |row: &[u32]| -> Vec<u32> {
            row.iter().flat_map(|r| std::iter::repeat_n(*r, factor)).collect()
        };
        let mut regions = Vec::with_capacity(self.cell_count() * factor * factor);
        for row in self.regions.chunks_exact(self.nx()) {
            let row = fine_row(row);
            (0..factor).for_each(|_| regions.extend_from_slice(&row));
        }
        let slots = Side::ALL.map(|side| {
            let faces = &self.slots[side.index()];
            faces.iter().flat_map(|s| std::iter::repeat_n(*s, factor)).collect()
        });
        Mesh {
            geometry: self.geometry,
            x: fine_lines(&self.x, factor),
            y: fine_lines(&self.y, factor),
            x_kept: fine_kept(&self.x_kept, factor),
            y_kept: fine_kept(&self.y_kept, factor),
            regions,
            slots,
        }
    }
}

fn fine_kept(kept: &[bool], factor: usize) -> Vec<bool> {
    let mut fine = vec![false; (kept.len() - 1) * factor + 1];
    kept.iter().enumerate().for_each(|(i, k)| fine[i * factor] = *k);
    fine
}

fn fine_lines(lines: &[f64], factor: usize) -> Vec<f64> {
    let slopes = slopes(lines);
    let mut fine = Vec::with_capacity((lines.len() - 1) * factor + 1);
    for (ends, slope) in lines.windows(2).zip(slopes.windows(2)) {
        let size = ends[1] - ends[0];
        fine.push(ends[0]);
        for j in 1..factor {
            // The cubic from the nearer end: t·m + t²·(3·d - 2·m - m') + t³·(m + m' - 2·d).
            let from = |near: f64, far: f64, j: usize| {
                let t = j as f64 / factor as f64;
                t * (near + t * (3.0 * size - 2.0 * near - far + t * (near + far - 2.0 * size)))
            };
            let up = || ends[0] + from(slope[0], slope[1], j);
            let down = || ends[1] - from(slope[1], slope[0], factor - j);
            fine.push(match (2 * j).cmp(&factor) {
                std::cmp::Ordering::Less => up(),
                std::cmp::Ordering::Equal => 0.5 * (up() + down()),
                std::cmp::Ordering::Greater => down(),
            });
        }
    }
    fine.extend(lines.last());
    fine
}

/// Slope dx/dξ at each line.
fn slopes(lines: &[f64]) -> Vec<f64> {
    let sizes: Vec<f64> = lines.windows(2).map(|l| l[1] - l[0]).collect();
    let n = sizes.len();
    let end = |first: f64, second: f64| {
        let ratio = (first / second).sqrt();
        first * ratio.clamp(1.0 / STEEPEST, STEEPEST)
    };
    if n == 1 {
        return vec![sizes[0]; 2];
    }
    let mut slopes = Vec::with_capacity(n + 1);
    slopes.push(end(sizes[0], sizes[1]));
    for d in sizes.windows(2) {
        slopes.push((d[0] * d[1]).sqrt().min(STEEPEST * d[0].min(d[1])));
    }
    slopes.push(end(sizes[n - 1], sizes[n - 2]));
    slopes
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn equal_cells_stay_equal() {
        let lines: Vec<f64> = (0..=8).map(|i| f64::from(i) * 0.125).collect();
        let fine = fine_lines(&lines, 5);
        assert!(fine.windows(2).all(|l| (l[1] - l[0] - 0.025).abs() < 1e-15));
    }

    #[test]
    fn geometric_cells_stay_geometric() {
        let growth: f64 = 1.2;
        let mut lines = vec![0.0, 1.0];
        for i in 1..20 {
            lines.push(lines[i] + growth.powi(i as i32));
        }
        let fine = fine_lines(&lines, 2);
        let ratios: Vec<f64> = fine.windows(3).map(|l| (l[2] - l[1]) / (l[1] - l[0])).collect();
        // The exact family has the ratio sqrt(1.2) everywhere; the slopes are off by a²/24 of
        // themselves, a = ln 1.2, which shows as 2·a²/24 in a ratio at most.
        let off = growth.ln().powi(2) / 12.0;
        assert!(ratios.iter().all(|r| (r / growth.sqrt() - 1.0).abs() < off), "{ratios:?}");
    }

    #[test]
    fn a_jump_in_size_does_not_fold_the_lines() {
        let fine = fine_lines(&[0.0, 1.0, 1.0 + 1e-6, 2.0, 2.5], 7);
        assert!(fine.windows(2).all(|l| l[1] > l[0]), "{fine:?}");
        assert_eq!(fine.len(), 29);
    }
}
