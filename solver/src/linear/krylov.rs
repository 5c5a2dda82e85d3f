//! Krylov methods preconditioned by multigrid.

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

/// Work arrays of the methods.
#[derive(Debug)]
pub(crate) struct KrylovWork {
    arrays: [Vec<f64>; 7],
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
    let [r, z, p, q, r_old, ..] = &mut work.arrays;
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

/// Stabilised bi-conjugate gradients for systems that are not symmetric. Starts from x = 0 and
/// keeps the best iterate. Stops as `conjugate_gradients` does.
pub(crate) fn bicgstab(
    (a, nx): (&[Coefficients], usize),
    x: &mut [f64],
    b: &[f64],
    (tolerance, limit): (f64, usize),
    multigrid: &mut Multigrid,
    work: &mut KrylovWork,
) -> Info {
    let [r, shadow, p, v, y, t, z] = &mut work.arrays;
    x.fill(0.0);
    r.copy_from_slice(b);
    shadow.copy_from_slice(b);
    let b_norm = par::dot(b, b, nx).sqrt();
    let mut info = Info { iterations: 0, residual: if b_norm > 0.0 { 1.0 } else { 0.0 } };
    if b_norm == 0.0 {
        return info;
    }
    multigrid.set(a);
    p.copy_from_slice(r);
    let mut rho = par::dot(shadow, r, nx);
    while info.iterations < limit {
        multigrid.cycle(a, y, p);
        stencil::apply(a, y, v, nx);
        let alpha = rho / par::dot(shadow, v, nx);
        if !alpha.is_finite() {
            break;
        }
        par::add_scaled(r, -alpha, v, nx);
        multigrid.cycle(a, z, r);
        stencil::apply(a, z, t, nx);
        let tt = par::dot(t, t, nx);
        let omega = if tt > 0.0 { par::dot(t, r, nx) / tt } else { 0.0 };
        par::add_scaled(x, alpha, y, nx);
        par::add_scaled(x, omega, z, nx);
        par::add_scaled(r, -omega, t, nx);
        info.iterations += 1;
        info.residual = par::dot(r, r, nx).sqrt() / b_norm;
        if info.residual <= tolerance || omega == 0.0 || !info.residual.is_finite() {
            break;
        }
        let rho_new = par::dot(shadow, r, nx);
        let beta = rho_new / rho * alpha / omega;
        rho = rho_new;
        par::each_row(p, nx, |j, row| {
            let span = j * nx..(j + 1) * nx;
            let (r, v) = (&r[span.clone()], &v[span]);
            for ((p, r), v) in row.iter_mut().zip(r).zip(v) {
                *p = r + beta * (*p - omega * v);
            }
        });
    }
    info
}
