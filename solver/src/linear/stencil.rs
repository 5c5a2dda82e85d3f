//! The five-point stencil p·x_P − w·x_W − e·x_E − s·x_S − n·x_N = b on an nx × ny array.

use crate::par;

/// Coefficients of one row; neighbours beyond the edge have coefficient zero.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub(crate) struct Coefficients {
    pub p: f64,
    pub w: f64,
    pub e: f64,
    pub s: f64,
    pub n: f64,
}

impl Coefficients {
    /// Row of an unknown that is kept as it is.
    pub const FIXED: Coefficients = Coefficients { p: 1.0, w: 0.0, e: 0.0, s: 0.0, n: 0.0 };

    /// Sum of the neighbours' coefficients.
    pub fn neighbours(&self) -> f64 {
        self.w + self.e + self.s + self.n
    }
}

/// b − A·x into `out`; all of length nx·ny.
pub(crate) fn residual(a: &[Coefficients], x: &[f64], b: &[f64], out: &mut [f64], nx: usize) {
    par::each_row(out, nx, |j, row| {
        for (i, r) in row.iter_mut().enumerate() {
            let n = i + j * nx;
            *r = b[n] - apply_at(a, x, n, i, nx);
        }
    });
}

/// A·x into `out`.
pub(crate) fn apply(a: &[Coefficients], x: &[f64], out: &mut [f64], nx: usize) {
    par::each_row(out, nx, |j, row| {
        for (i, r) in row.iter_mut().enumerate() {
            *r = apply_at(a, x, i + j * nx, i, nx);
        }
    });
}

#[inline(always)]
fn apply_at(a: &[Coefficients], x: &[f64], n: usize, i: usize, nx: usize) -> f64 {
    let c = &a[n];
    let mut sum = c.p * x[n];
    if i > 0 {
        sum -= c.w * x[n - 1];
    }
    if i + 1 < nx {
        sum -= c.e * x[n + 1];
    }
    if n >= nx {
        sum -= c.s * x[n - nx];
    }
    if n + nx < x.len() {
        sum -= c.n * x[n + nx];
    }
    sum
}
