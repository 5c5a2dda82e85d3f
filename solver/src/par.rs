//! Threads: the only file that knows rayon.
//!
//! Work is shared by whole rows, and sums are added row by row in row order, so every number has
//! the same bits for any thread count.

use rayon::prelude::*;

/// Fewest cells worth a task of their own.
const GRAIN: usize = 6000;

fn rows_per_task(width: usize) -> usize {
    GRAIN.div_ceil(width.max(1))
}

/// Calls `work(j, row)` for every row of `out`.
pub(crate) fn each_row<T: Send>(
    out: &mut [T],
    width: usize,
    work: impl Fn(usize, &mut [T]) + Sync + Send,
) {
    out.par_chunks_mut(width)
        .enumerate()
        .with_min_len(rows_per_task(width))
        .for_each(|(j, row)| work(j, row));
}

/// Calls `work(j, row of a, row of b)` for every row; the widths may differ.
pub(crate) fn each_row2<A: Send, B: Send>(
    (a, a_width): (&mut [A], usize),
    (b, b_width): (&mut [B], usize),
    work: impl Fn(usize, &mut [A], &mut [B]) + Sync + Send,
) {
    a.par_chunks_mut(a_width)
        .zip(b.par_chunks_mut(b_width))
        .enumerate()
        .with_min_len(rows_per_task(a_width))
        .for_each(|(j, (a, b))| work(j, a, b));
}

/// Sum of `part(j)` over rows 0..count, each row about `width` cells of work; added in row order.
pub(crate) fn sum_rows<const N: usize>(
    count: usize,
    width: usize,
    part: impl Fn(usize) -> [f64; N] + Sync + Send,
) -> [f64; N] {
    let parts: Vec<[f64; N]> =
        (0..count).into_par_iter().with_min_len(rows_per_task(width)).map(part).collect();
    parts.iter().fold([0.0; N], |mut sum, row| {
        sum.iter_mut().zip(row).for_each(|(s, r)| *s += r);
        sum
    })
}

/// Scalar product.
pub(crate) fn dot(a: &[f64], b: &[f64], width: usize) -> f64 {
    let [sum] = sum_rows(a.len() / width, width, |j| {
        let span = j * width..(j + 1) * width;
        [a[span.clone()].iter().zip(&b[span]).map(|(x, y)| x * y).sum()]
    });
    sum
}

/// y ← y + s·x.
pub(crate) fn add_scaled(y: &mut [f64], s: f64, x: &[f64], width: usize) {
    each_row(y, width, |j, row| {
        let x = &x[j * width..(j + 1) * width];
        row.iter_mut().zip(x).for_each(|(y, x)| *y += s * x);
    });
}
