//! Zebra relaxation by lines: every second row (column) is solved exactly at once, then the others.
//!
//! Lines carry the strong coupling of stretched cells; the two colours make the result independent
//! of the order, hence of the threads.

use super::stencil::Coefficients;
use crate::par;

/// Columns solved side by side in one task.
const BLOCK: usize = 64;

/// Least pivot relative to the diagonal: a lone line of a closed region is singular, and its
/// constant part is taken out elsewhere.
const LEAST_PIVOT: f64 = 1e-12;

/// Two work arrays of the system's length, kept between calls.
#[derive(Debug, Default)]
pub(crate) struct LineWork {
    right: Vec<f64>,
    upper: Vec<f64>,
}

impl LineWork {
    /// For systems of up to `len` unknowns.
    pub fn new(len: usize) -> Self {
        LineWork { right: vec![0.0; len], upper: vec![0.0; len] }
    }
}

/// One sweep over all rows, then all columns.
pub(crate) fn sweep(a: &[Coefficients], x: &mut [f64], b: &[f64], nx: usize, work: &mut LineWork) {
    for colour in 0..2 {
        rows(a, x, b, nx, colour, work);
    }
    for colour in 0..2 {
        columns(a, x, b, nx, colour, work);
    }
}

/// The same in reverse order, so that `sweep` and `sweep_back` around a coarse correction make a
/// symmetric whole.
pub(crate) fn sweep_back(
    a: &[Coefficients],
    x: &mut [f64],
    b: &[f64],
    nx: usize,
    work: &mut LineWork,
) {
    for colour in [1, 0] {
        columns(a, x, b, nx, colour, work);
    }
    for colour in [1, 0] {
        rows(a, x, b, nx, colour, work);
    }
}

fn rows(
    a: &[Coefficients],
    x: &mut [f64],
    b: &[f64],
    nx: usize,
    colour: usize,
    work: &mut LineWork,
) {
    let len = x.len();
    let (right, upper) = (&mut work.right[..len], &mut work.upper[..len]);
    {
        let x = &*x;
        par::each_row(right, nx, |j, row| {
            if j % 2 != colour {
                return;
            }
            let n0 = j * nx;
            for (i, r) in row.iter_mut().enumerate() {
                let n = n0 + i;
                let mut sum = b[n];
                if n >= nx {
                    sum += a[n].s * x[n - nx];
                }
                if n + nx < len {
                    sum += a[n].n * x[n + nx];
                }
                *r = sum;
            }
        });
    }
    let right = &*right;
    par::each_row2((x, nx), (upper, nx), |j, x, upper| {
        if j % 2 != colour {
            return;
        }
        let (a, right) = (&a[j * nx..(j + 1) * nx], &right[j * nx..(j + 1) * nx]);
        let (mut before, mut ratio) = (0.0, 0.0);
        for i in 0..nx {
            let pivot = 1.0 / (a[i].p - a[i].w * ratio).max(LEAST_PIVOT * a[i].p);
            before = (right[i] + a[i].w * before) * pivot;
            ratio = a[i].e * pivot;
            x[i] = before;
            upper[i] = ratio;
        }
        for i in (0..nx - 1).rev() {
            x[i] += upper[i] * x[i + 1];
        }
    });
}

fn columns(
    a: &[Coefficients],
    x: &mut [f64],
    b: &[f64],
    nx: usize,
    colour: usize,
    work: &mut LineWork,
) {
    let len = x.len();
    let ny = len / nx;
    let (value, upper) = (&mut work.right[..len], &mut work.upper[..len]);
    {
        let x = &*x;
        // Block k holds columns k·BLOCK.. as a ny × width array of its own.
        par::each_row2((value, BLOCK * ny), (upper, BLOCK * ny), |k, value, upper| {
            let first = k * BLOCK;
            let width = value.len() / ny;
            let start = (first + colour) % 2;
            for j in 0..ny {
                for c in (start..width).step_by(2) {
                    let (i, m) = (first + c, j * width + c);
                    let n = i + j * nx;
                    let co = &a[n];
                    let mut right = b[n];
                    if i > 0 {
                        right += co.w * x[n - 1];
                    }
                    if i + 1 < nx {
                        right += co.e * x[n + 1];
                    }
                    let (before, ratio) =
                        if j > 0 { (value[m - width], upper[m - width]) } else { (0.0, 0.0) };
                    let pivot = 1.0 / (co.p - co.s * ratio).max(LEAST_PIVOT * co.p);
                    value[m] = (right + co.s * before) * pivot;
                    upper[m] = co.n * pivot;
                }
            }
            for j in (0..ny - 1).rev() {
                for c in (start..width).step_by(2) {
                    let m = j * width + c;
                    value[m] += upper[m] * value[m + width];
                }
            }
        });
    }
    let value = &*value;
    par::each_row(x, nx, |j, row| {
        for (k, part) in row.chunks_mut(BLOCK).enumerate() {
            let width = part.len();
            let from = k * BLOCK * ny + j * width;
            let start = (k * BLOCK + colour) % 2;
            for c in (start..width).step_by(2) {
                part[c] = value[from + c];
            }
        }
    });
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::linear::stencil;

    #[test]
    fn a_single_row_or_column_is_solved_exactly() {
        let c = Coefficients { p: 3.0, w: 1.0, e: 1.0, s: 0.0, n: 0.0 };
        let a = [Coefficients { w: 0.0, ..c }, c, c, Coefficients { e: 0.0, ..c }];
        let b = [1.0, -2.0, 3.0, 0.5];
        let mut x = [0.0; 4];
        sweep(&a, &mut x, &b, 4, &mut LineWork::new(4));
        let mut r = [0.0; 4];
        stencil::residual(&a, &x, &b, &mut r, 4);
        assert!(r.iter().all(|r| r.abs() < 1e-14), "{r:?}");
        let a = a.map(|c| Coefficients { p: c.p, w: 0.0, e: 0.0, s: c.w, n: c.e });
        let mut x = [0.0; 4];
        sweep(&a, &mut x, &b, 1, &mut LineWork::new(4));
        stencil::residual(&a, &x, &b, &mut r, 1);
        assert!(r.iter().all(|r| r.abs() < 1e-14), "{r:?}");
    }

    #[test]
    fn sweeps_solve_a_wide_poisson_system_across_block_borders() {
        let (nx, ny) = (150, 9);
        let a: Vec<_> = (0..nx * ny)
            .map(|n| {
                let (i, j) = (n % nx, n / nx);
                let link = |there: bool| if there { 1.0 } else { 0.0 };
                let c = Coefficients {
                    p: 0.0,
                    w: link(i > 0),
                    e: link(i + 1 < nx),
                    s: link(j > 0),
                    n: link(j + 1 < ny),
                };
                Coefficients { p: c.neighbours() + 0.5, ..c }
            })
            .collect();
        let b: Vec<f64> = (0..nx * ny).map(|n| ((n * 37) % 11) as f64 - 5.0).collect();
        let (mut x, mut r) = (vec![0.0; nx * ny], vec![0.0; nx * ny]);
        let mut work = LineWork::new(nx * ny);
        for _ in 0..30 {
            sweep(&a, &mut x, &b, nx, &mut work);
        }
        stencil::residual(&a, &x, &b, &mut r, nx);
        assert!(r.iter().all(|r| r.abs() < 1e-10));
    }
}
