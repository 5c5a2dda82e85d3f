//! Plain uniform lines: equal cells as far as the edges allow.
//!
//! When every edge falls on one of the lines i·L/n, these are the lines. Otherwise each segment
//! between edges is uniform in itself, and the n cells are shared out so that the largest cell is
//! as small as possible: each segment has one, and every further cell goes to the segment whose
//! cells are largest just then.

use crate::MeshError;
use crate::crossing::Axis;
use crate::generate::{mm, size_mm};

/// How far an edge may lie from a uniform line, in cells, to count as lying on it.
const ON_LINE_CELLS: f64 = 1e-6;
/// Relative difference below which two cell sizes, or mirrored segments, count as equal.
const EQUAL: f64 = 1e-9;

/// Lines and what has to be said about them.
pub(crate) struct Uniform {
    pub lines: Vec<f64>,
    pub note: Option<String>,
}

/// `count` cells along an axis.
///
/// # Errors
/// [`MeshError::TooFew`] when there are fewer cells than segments.
pub(crate) fn uniform_lines(axis: Axis, edges: &[f64], count: usize) -> Result<Uniform, MeshError> {
    let lengths: Vec<f64> = edges.windows(2).map(|e| e[1] - e[0]).collect();
    if count < lengths.len() {
        return Err(MeshError::TooFew {
            axis: axis.letter(),
            cells: count,
            segments: lengths.len(),
        });
    }
    let extent = edges[edges.len() - 1];
    let step = extent / count as f64;
    let off: Vec<f64> = (edges.iter().copied())
        .filter(|e| (e / step - (e / step).round()).abs() > ON_LINE_CELLS)
        .collect();
    let counts = if off.is_empty() {
        let line = |e: f64| (e / step).round() as usize;
        edges.windows(2).map(|e| line(e[1]) - line(e[0])).collect()
    } else {
        shared_out(&lengths, count)
    };
    if off.is_empty() && counts.iter().all(|c| *c > 0) {
        let mut lines: Vec<f64> = (0..=count).map(|i| i as f64 * extent / count as f64).collect();
        for edge in edges {
            lines[(edge / step).round() as usize] = *edge;
        }
        return Ok(Uniform { lines, note: None });
    }
    let mut lines = Vec::with_capacity(count + 1);
    for (edge, cells) in edges.windows(2).zip(&counts) {
        let length = edge[1] - edge[0];
        lines.extend((0..*cells).map(|j| edge[0] + length * (j as f64 / *cells as f64)));
    }
    lines.push(extent);
    let sizes = lengths.iter().zip(&counts).map(|(l, c)| l / *c as f64);
    let [low, high] = sizes.fold([f64::INFINITY, 0.0_f64], |[a, b], s| [a.min(s), b.max(s)]);
    let places: Vec<String> = off.iter().take(6).map(|e| mm(*e)).collect();
    let more = if off.len() > 6 { format!(" and {} more", off.len() - 6) } else { String::new() };
    let note = format!(
        "the mesh along {} is not quite uniform, cells measure {} to {} mm: edges between \
         the uniform lines at {} mm{more}",
        axis.letter(),
        size_mm(low),
        size_mm(high),
        places.join(", ")
    );
    Ok(Uniform { lines, note: Some(note) })
}

/// Shares `count` cells out among segments, see the module's text; at least one each. When the
/// segments are their own mirror image, so are the counts, except where an odd cell has no middle
/// segment to go to.
fn shared_out(lengths: &[f64], count: usize) -> Vec<usize> {
    let total: f64 = lengths.iter().sum();
    let n = lengths.len();
    // A start that is certainly not too many anywhere: a tenth below the proportional share.
    let share = |l: &f64| ((0.9 * count as f64 * l / total).floor() as usize).max(1);
    let mut counts: Vec<usize> = lengths.iter().map(share).collect();
    if counts.iter().sum::<usize>() > count {
        counts = vec![1; n];
    }
    let mirror = |k: usize| n - 1 - k;
    let is_mirrored = (0..n).all(|k| (lengths[k] - lengths[mirror(k)]).abs() <= EQUAL * total);
    let mut left = count - counts.iter().sum::<usize>();
    while left > 0 {
        let size = |k: usize| lengths[k] / counts[k] as f64;
        let largest = (0..n).map(size).fold(0.0, f64::max);
        // Of a mirrored pair and the middle, equal in size, the pair comes first.
        let next = (0..n).find(|k| size(*k) >= largest * (1.0 - EQUAL)).unwrap_or(0);
        match (is_mirrored && mirror(next) != next, left) {
            (true, 2..) => {
                counts[next] += 1;
                counts[mirror(next)] += 1;
                left -= 2;
            }
            (true, _) if n % 2 == 1 => {
                counts[n / 2] += 1;
                left -= 1;
            }
            _ => {
                counts[next] += 1;
                left -= 1;
            }
        }
    }
    counts
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    #[test]
    fn edges_on_uniform_lines_give_exactly_equal_cells() {
        let found = uniform_lines(Axis::X, &[0.0, 0.03, 0.1], 10).unwrap();
        assert!(found.note.is_none());
        for (i, line) in found.lines.iter().enumerate() {
            assert!((line - 0.01 * i as f64).abs() < 1e-16, "{line}");
        }
        assert!(found.lines.contains(&0.03));
    }

    #[test]
    fn other_edges_share_the_cells_and_are_named() {
        let found = uniform_lines(Axis::Y, &[0.0, 0.033, 0.1], 10).unwrap();
        assert_eq!(found.lines.len(), 11);
        assert_eq!(found.lines[3], 0.033);
        let note = found.note.unwrap();
        assert!(note.contains("at 33 mm") && note.contains("9.571 to 11 mm"), "{note}");
    }

    #[test]
    fn an_odd_cell_goes_to_the_middle() {
        assert_eq!(shared_out(&[1.0, 1.0, 1.0], 10), [3, 4, 3]);
        assert_eq!(shared_out(&[1.0, 0.5, 1.0], 12), [5, 2, 5]);
        assert_eq!(shared_out(&[1.0, 0.5, 1.0], 11), [4, 3, 4]);
        assert_eq!(shared_out(&[1.0, 1e-9], 5), [4, 1]);
    }

    #[test]
    fn fewer_cells_than_segments_are_refused() {
        let refused = uniform_lines(Axis::X, &[0.0, 0.1, 0.2, 0.3], 2).err();
        assert_eq!(refused, Some(MeshError::TooFew { axis: 'x', cells: 2, segments: 3 }));
    }
}
