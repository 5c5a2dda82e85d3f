//! Conjugate gradients preconditioned by multigrid.

use super::multigrid::Multigrid;
use super::stencil::{self, Stencil};
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
    arrays: [Vec<f32>; 4],
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
    a: &Stencil,
    x: &mut [f32],
    b: &[f32],
    (tolerance, limit): (f64, usize),
    multigrid: &mut Multigrid,
    work: &mut KrylovWork,
) -> Info {
    let nx = a.nx;
    let [r, z, p, q] = &mut work.arrays;
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
        let pq = stencil::apply(a, p, q);
        if pq <= 0.0 || !pq.is_finite() {
            break;
        }
        let step = rz / pq;
        par::add_scaled(x, step as f32, p, nx);
        par::add_scaled(r, -step as f32, q, nx);
        info.iterations += 1;
        info.residual = par::dot(r, r, nx).sqrt() / b_norm;
        if info.residual <= tolerance || info.iterations == limit {
            break;
        }
        multigrid.cycle(a, z, r);
        // (r_new − r_old)·z = −step·q·z
        let beta = (-step * par::dot(q, z, nx) / rz).max(0.0);
        rz = par::dot(r, z, nx);
        par::each_row(p, nx, |j, row| {
            let z = &z[j * nx..(j + 1) * nx];
            row.iter_mut().zip(z).for_each(|(p, z)| *p = z + beta as f32 * *p);
        });
    }
    info
}
