//! View areas made to add up: every patch sees the whole of its area, no more and no less.
//!
//! Wanted are S_ij ≥ 0, symmetric, with Σ_j S_ij = A_i. The least change to computed values S, each
//! weighed by its own size, min Σ δ_ij²/S_ij, is δ_ij = S_ij (λ_i + λ_j) with
//!
//! ```text
//! λ_i Σ_j S_ij + Σ_j S_ij λ_j = A_i − Σ_j S_ij
//! ```
//!
//! (Lagrange's multipliers of the sums.) Zeros stay zeros, so what does not see each other goes on
//! not doing so. The system is symmetric and not indefinite, and solved by conjugate gradients.

use super::error::RadiationError;
use crate::par;

/// How far the view factors were from adding up to one, and what was done about it.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Correction {
    /// Largest |1 − Σ_j F_ij| as computed.
    pub defect: f64,
    /// Largest relative change of a view area.
    pub change: f64,
    /// Largest |1 − Σ_j F_ij| afterwards.
    pub left: f64,
}

/// Row sums end up as near to the areas as this.
const CLOSED: f64 = 1e-13;

/// Corrects view areas `s` (row-major, symmetric) of patches with the given areas [m²].
///
/// # Errors
/// When a patch's view is off by more than the share `limit`.
pub(super) fn close(
    s: &mut [f64],
    areas: &[f64],
    limit: f64,
) -> Result<Correction, RadiationError> {
    let n = areas.len();
    let defects = |s: &[f64]| -> Vec<f64> {
        areas.iter().zip(row_sums(s, n)).map(|(a, sum)| a - sum).collect()
    };
    let worst = |defects: &[f64]| {
        let share = |(d, a): (&f64, &f64)| (d / a).abs();
        defects.iter().zip(areas).map(share).enumerate().max_by(|p, q| p.1.total_cmp(&q.1))
    };
    let mut defect = defects(s);
    let Some((patch, first)) = worst(&defect) else { return Ok(Correction::default()) };
    if first.is_nan() || first > limit {
        return Err(RadiationError::NotClosed { patch, sum: 1.0 - defect[patch] / areas[patch] });
    }
    let mut factors = vec![0.0; n];
    // Once is enough but for round-off, unless a patch sees nothing else than few others.
    for _ in 0..4 {
        if worst(&defect).is_none_or(|(_, d)| d <= CLOSED) {
            break;
        }
        let lambda = multipliers(s, &defect, areas);
        for i in 0..n {
            for j in 0..n {
                s[i * n + j] *= (1.0 + (lambda[i] + lambda[j])).max(0.0);
            }
            factors[i] += lambda[i];
        }
        defect = defects(s);
    }
    let changes = (0..n).flat_map(|i| {
        let (row, factors) = (&s[i * n..(i + 1) * n], &factors);
        row.iter().zip(factors).filter(|(s, _)| **s > 0.0).map(move |(_, f)| (factors[i] + f).abs())
    });
    Ok(Correction {
        defect: first,
        change: changes.fold(0.0, f64::max),
        left: worst(&defect).map_or(0.0, |(_, d)| d),
    })
}

fn row_sums(s: &[f64], n: usize) -> Vec<f64> {
    s.chunks_exact(n).map(|row| row.iter().sum()).collect()
}

/// λ by conjugate gradients, with the diagonal as preconditioner.
fn multipliers(s: &[f64], defect: &[f64], areas: &[f64]) -> Vec<f64> {
    let n = areas.len();
    let sums = row_sums(s, n);
    let apply = |x: &[f64]| -> Vec<f64> {
        let mut y = vec![0.0; n];
        par::each_row(&mut y, 1, |i, y| {
            let row = &s[i * n..(i + 1) * n];
            y[0] = sums[i] * x[i] + row.iter().zip(x).map(|(s, x)| s * x).sum::<f64>();
        });
        y
    };
    let dot = |a: &[f64], b: &[f64]| a.iter().zip(b).map(|(a, b)| a * b).sum::<f64>();
    let mut lambda = vec![0.0; n];
    let mut residual = defect.to_vec();
    let scaled = |r: &[f64]| -> Vec<f64> { r.iter().zip(areas).map(|(r, a)| r / a).collect() };
    let mut z = scaled(&residual);
    let mut way = z.clone();
    let mut size = dot(&residual, &z);
    let enough = CLOSED * CLOSED * 1e-2 * areas.iter().sum::<f64>() / n as f64;
    for _ in 0..4 * n {
        if size <= enough {
            break;
        }
        let image = apply(&way);
        let curvature = dot(&way, &image);
        if curvature <= 0.0 {
            break;
        }
        let step = size / curvature;
        lambda.iter_mut().zip(&way).for_each(|(l, w)| *l += step * w);
        residual.iter_mut().zip(&image).for_each(|(r, i)| *r -= step * i);
        z = scaled(&residual);
        let next = dot(&residual, &z);
        let ratio = next / size;
        way.iter_mut().zip(&z).for_each(|(w, z)| *w = z + ratio * *w);
        size = next;
    }
    lambda
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    #[test]
    fn rows_of_a_disturbed_enclosure_add_up_again_and_stay_symmetric() {
        // Square cavity with sides of 1 m: opposite √2 − 1, adjacent 1 − √2/2.
        let (o, a) = (2f64.sqrt() - 1.0, 1.0 - 0.5 * 2f64.sqrt());
        let exact = [0.0, a, o, a, a, 0.0, a, o, o, a, 0.0, a, a, o, a, 0.0];
        let mut s = exact;
        for (i, j, by) in [(0, 1, 1.002), (0, 2, 0.999), (1, 3, 1.001)] {
            s[4 * i + j] *= by;
            s[4 * j + i] *= by;
        }
        let correction = close(&mut s, &[1.0; 4], 0.1).unwrap();
        for i in 0..4 {
            let sum: f64 = s[4 * i..4 * i + 4].iter().sum();
            assert!((sum - 1.0).abs() < 1e-13, "{sum}");
            for j in 0..4 {
                assert_eq!(s[4 * i + j], s[4 * j + i]);
                assert!((s[4 * i + j] - exact[4 * i + j]).abs() < 2e-3 * exact[4 * i + j].max(0.1));
            }
        }
        assert_eq!(s[0], 0.0);
        assert!(correction.defect > 5e-5 && correction.change < 2e-3, "{correction:?}");
        assert!(correction.left < 1e-13);
    }

    #[test]
    fn plates_that_see_nothing_but_each_other_close_although_the_system_is_singular() {
        let mut s = [0.0, 0.98, 0.98, 0.0];
        let correction = close(&mut s, &[1.0, 1.0], 0.1).unwrap();
        assert!((s[1] - 1.0).abs() < 1e-13 && s[1] == s[2], "{s:?}");
        assert!((correction.change - 0.02 / 0.98).abs() < 1e-12, "{correction:?}");
    }

    #[test]
    fn a_patch_that_misses_a_fifth_of_its_view_is_an_error() {
        let mut s = [0.0, 0.8, 0.8, 0.0];
        let error = close(&mut s, &[1.0, 1.0], 0.1).unwrap_err();
        assert!(
            matches!(error, RadiationError::NotClosed { sum, .. } if (sum - 0.8).abs() < 1e-12)
        );
    }
}
