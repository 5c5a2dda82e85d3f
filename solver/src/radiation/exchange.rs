//! Exchange areas of grey-diffuse surfaces: reflections summed up once and for all.
//!
//! With emissive powers E = σT⁴, irradiation H and radiosity J = ε·E + (1 − ε)·H per patch, and view
//! areas S_ij = A_i·F_ij,
//!
//! ```text
//! A_i H_i = Σ_j S_ij J_j    ⇒   (diag A − S·diag(1 − ε)) H = S·diag ε · E,   H = K·E
//! q_i = A_i ε_i (E_i − H_i) = Σ_j G_ij (E_i − E_j),   G_ij = A_i ε_i K_ij
//! ```
//!
//! G is symmetric and its rows add up to ε_i·A_i when those of S add up to A_i
//! [hottel-1954, gebhart-1961].

use faer::Mat;
use faer::linalg::solvers::{PartialPivLu, Solve};

/// Least emissivity in the left side, so that an enclosure without any emission can be solved;
/// such patches get zero rows all the same.
const LEAST_EMISSIVITY: f64 = 1e-9;

/// Exchange areas G [m²], row-major n × n, from view areas `s` (closed, symmetric) [m²], areas
/// [m²] and emissivities.
pub(super) fn exchange_areas(s: &[f64], areas: &[f64], emissivities: &[f64]) -> Vec<f64> {
    let n = areas.len();
    if n == 0 {
        return Vec::new();
    }
    let reflected: Vec<f64> = emissivities.iter().map(|e| 1.0 - e.max(LEAST_EMISSIVITY)).collect();
    let left = Mat::from_fn(n, n, |i, j| {
        let own = if i == j { areas[i] } else { 0.0 };
        own - s[i * n + j] * reflected[j]
    });
    let right = Mat::from_fn(n, n, |i, j| s[i * n + j] * emissivities[j]);
    let irradiation = PartialPivLu::new(left.as_ref()).solve(&right);
    let one_way = |i: usize, j: usize| areas[i] * emissivities[i] * irradiation[(i, j)];
    let mut exchange = vec![0.0; n * n];
    for i in 0..n {
        for j in 0..n {
            // Both ways differ by round-off only.
            exchange[i * n + j] = 0.5 * (one_way(i, j) + one_way(j, i));
        }
    }
    // What a patch exchanges with itself carries no net heat; it takes up the round-off.
    for i in 0..n {
        let others: f64 = (0..n).filter(|j| *j != i).map(|j| exchange[i * n + j]).sum();
        exchange[i * n + i] = areas[i] * emissivities[i] - others;
    }
    exchange
}
