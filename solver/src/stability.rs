//! Whether the steady flow is stable: the leading growth rate of small disturbances.
//!
//! About a steady state a disturbance x obeys M·dx/dt = −J·x with the inertia M and the Jacobian J.
//! Growth rates λ (x ~ e^{λt}) nearest to a shift σ > 0 are the largest eigenvalues
//! θ = 1/(σ − λ) of (J + σM)⁻¹M, found by Arnoldi's method in the inner product of M.
//!
//! # Source
//! saad-1992 (shift-and-invert Arnoldi).

use faer::{Mat, c64};

use crate::level::Level;
use crate::newton::Newton;
use crate::{SolveError, State};

/// Size of the Krylov space.
const KRYLOV: usize = 60;
/// Relative residual below which a Ritz pair counts.
const RITZ_BOUND: f64 = 1e-3;

/// A leading mode.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Mode {
    /// Growth rate [1/s].
    pub growth: f64,
    /// Angular frequency [rad/s], ≥ 0.
    pub frequency: f64,
    /// Its real part, in the order of Newton's unknowns, of any size.
    pub shape: Vec<f64>,
}

/// The fastest growing mode found near a shift σ [1/s] about a state of a level; `None` when
/// nothing moves.
pub(crate) fn leading_mode(
    level: &Level,
    state: &State,
    newton: &mut Newton,
    shift: f64,
) -> Result<Option<Mode>, SolveError> {
    let (factors, masses) = newton.shifted(level, state, &level.source, shift)?;
    let dot = |a: &[f64], b: &[f64]| -> f64 {
        a.iter().zip(b).zip(&masses).map(|((a, b), m)| a * b * m).sum()
    };
    let apply = |x: &[f64]| -> Vec<f64> {
        let mut y: Vec<f64> = x.iter().zip(&masses).map(|(x, m)| x * m).collect();
        newton.drop_pinned(level, &mut y);
        factors.solve(&mut y);
        y
    };
    let mut first = apply(&rough_vector(masses.len()));
    let norm = dot(&first, &first).sqrt();
    if norm == 0.0 || !norm.is_finite() {
        return Ok(None);
    }
    first.iter_mut().for_each(|x| *x /= norm);
    let mut basis = vec![first];
    let mut h = Mat::<f64>::zeros(KRYLOV + 1, KRYLOV);
    let mut size = 0;
    for k in 0..KRYLOV {
        let mut w = apply(&basis[k]);
        // Twice, against the loss of orthogonality.
        for _ in 0..2 {
            for (i, v) in basis.iter().enumerate() {
                let c = dot(v, &w);
                h[(i, k)] += c;
                w.iter_mut().zip(v).for_each(|(w, v)| *w -= c * v);
            }
        }
        let norm = dot(&w, &w).sqrt();
        h[(k + 1, k)] = norm;
        size = k + 1;
        if norm < 1e-14 * h[(0, 0)].abs() || !norm.is_finite() {
            break;
        }
        w.iter_mut().for_each(|x| *x /= norm);
        basis.push(w);
    }
    let square = h.as_ref().submatrix(0, 0, size, size).to_owned();
    let Ok(eigen) = square.eigen() else { return Ok(None) };
    let (values, vectors) = (eigen.S().column_vector(), eigen.U());
    let last = h[(size, size - 1)];
    let mut leading: Option<(c64, usize)> = None;
    for k in 0..size {
        let theta = values[k];
        let length = (0..size).map(|i| vectors[(i, k)].norm_sqr()).sum::<f64>().sqrt();
        let error = last * vectors[(size - 1, k)].norm() / length / theta.norm();
        let lambda = c64::new(shift, 0.0) - c64::new(1.0, 0.0) / theta;
        if error < RITZ_BOUND && leading.is_none_or(|(l, _)| lambda.re > l.re) {
            leading = Some((lambda, k));
        }
    }
    Ok(leading.map(|(lambda, k)| {
        let mut shape = vec![0.0; masses.len()];
        for (i, v) in basis.iter().take(size).enumerate() {
            let c = vectors[(i, k)].re;
            shape.iter_mut().zip(v).for_each(|(s, v)| *s += c * v);
        }
        Mode { growth: lambda.re, frequency: lambda.im.abs(), shape }
    }))
}

/// A fixed vector with all wave lengths in it (xorshift), so that runs repeat bit by bit.
fn rough_vector(len: usize) -> Vec<f64> {
    let mut seed = 0x2545_f491_4f6c_dd1d_u64;
    let mut next = || {
        seed ^= seed << 13;
        seed ^= seed >> 7;
        seed ^= seed << 17;
        (seed >> 11) as f64 / (1u64 << 53) as f64 - 0.5
    };
    (0..len).map(|_| next()).collect()
}
