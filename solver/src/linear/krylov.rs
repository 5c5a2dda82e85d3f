//! Conjugate gradients preconditioned by multigrid.

use super::multigrid::Multigrid;
use super::stencil::{self, Coefficients};
use crate::par;

/// What a linear solution cost and reached.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Info {
    /// Iterations done.
    pub iterations: usize,
    /// ‖b − A·x‖₂ / ‖b‖₂ at the end (zero when b is zero).
    pub residual: f64,
}

/// Work arrays of the method.
#[derive(Debug)]
pub(crate) struct KrylovWork {
    arrays: [Vec<f64>; 5],
}

impl KrylovWork {
    /// For systems of `len` unknowns.
    pub fn new(len: usize) -> Self {
        KrylovWork { arrays: std::array::from_fn(|_| vec![0.0; len]) }
    }
}

/// Conjugate gradients with a flexible (Polak–Ribière) update, since a multigrid cycle is not
/// exactly symmetric. Starts from x = 0. Stops when ‖r‖₂ ≤ tolerance·‖b‖₂ or after `limit` steps.
pub(crate) fn conjugate_gradients(
    (a, nx): (&[Coefficients], usize),
    x: &mut [f64],
    b: &[f64],
    (tolerance, limit): (f64, usize),
    multigrid: &mut Multigrid,
    work: &mut KrylovWork,
) -> Info {
    let [r, z, p, q, r_old] = &mut work.arrays;
    x.fill(0.0);
    r.copy_from_slice(b);
    let b_norm = par::dot(b, b, nx).sqrt();
    let mut info = Info { iterations: 0, residual: if b_norm > 0.0 { 1.0 } else { 0.0 } };
    if b_norm == 0.0 {
        return info;
    }
    multigrid.set(a);
    multigrid.cycle(a, z, r);
    p.copy_from_slice(z);
    let mut rz = par::dot(r, z, nx);
    for _ in 0..limit {
        stencil::apply(a, p, q, nx);
        let pq = par::dot(p, q, nx);
        if pq <= 0.0 || !pq.is_finite() {
            break;
        }
        let step = rz / pq;
        par::add_scaled(x, step, p, nx);
        r_old.copy_from_slice(r);
        par::add_scaled(r, -step, q, nx);
        info.iterations += 1;
        info.residual = par::dot(r, r, nx).sqrt() / b_norm;
        if info.residual <= tolerance || info.iterations == limit {
            break;
        }
        multigrid.cycle(a, z, r);
        let rz_new = par::dot(r, z, nx);
        let beta = ((rz_new - par::dot(r_old, z, nx)) / rz).max(0.0);
        rz = rz_new;
        par::each_row(p, nx, |j, row| {
            let z = &z[j * nx..(j + 1) * nx];
            row.iter_mut().zip(z).for_each(|(p, z)| *p = z + beta * *p);
        });
    }
    info
}
