//! Threads: the only file that knows rayon.
//!
//! Work is shared by bands of whole rows, the same bands for any number of threads, and sums are
//! added row by row in row order, so every number has the same bits for any thread count.

use rayon::prelude::*;

/// Fewest cells worth a task of their own.
const GRAIN: usize = 6000;

/// Rows of a band of rows of `width` cells: even, and enough for lines solved side by side.
pub(crate) fn band_rows(width: usize) -> usize {
    GRAIN.div_ceil(width.max(1)).max(8).next_multiple_of(2)
}

/// Calls `work(first row, the arrays' shares)` for every band of `rows` rows; `arrays` holds each
/// array with the width of its rows. An array may have fewer rows than the longest.
pub(crate) fn each_band<T: Send, const N: usize>(
    arrays: [(&mut [T], usize); N],
    rows: usize,
    work: impl Fn(usize, [&mut [T]; N]) + Sync + Send,
) {
    let bands_of = |(a, width): &(&mut [T], usize)| a.len().div_ceil(width * rows);
    let count = arrays.iter().map(bands_of).max().unwrap_or(0);
    if count <= 1 {
        work(0, arrays.map(|(a, _)| a));
        return;
    }
    let mut shares = arrays.map(|(a, width)| a.chunks_mut(width * rows));
    let bands: Vec<[&mut [T]; N]> = (0..count)
        .map(|_| shares.each_mut().map(|share| share.next().unwrap_or_default()))
        .collect();
    bands.into_par_iter().enumerate().for_each(|(k, band)| work(k * rows, band));
}

/// Calls `work(j, rows j of the arrays)` for every row of the first array.
pub(crate) fn each_rows<T: Send, const N: usize>(
    arrays: [(&mut [T], usize); N],
    work: impl Fn(usize, [&mut [T]; N]) + Sync + Send,
) {
    let widths = arrays.each_ref().map(|(_, width)| *width);
    each_band(arrays, band_rows(widths[0]), |first, mut band| {
        for j in first.. {
            let mut n = 0;
            let row = band.each_mut().map(|rest| {
                let width = widths[n].min(rest.len());
                n += 1;
                let (row, others) = std::mem::take(rest).split_at_mut(width);
                *rest = others;
                row
            });
            if row[0].is_empty() {
                break;
            }
            work(j, row);
        }
    });
}

/// Calls `work(j, row)` for every row of `out`.
pub(crate) fn each_row<T: Send>(
    out: &mut [T],
    width: usize,
    work: impl Fn(usize, &mut [T]) + Sync + Send,
) {
    each_rows([(out, width)], |j, [row]| work(j, row));
}

/// Calls `work(first place, shares)` for shares of two arrays of the same length.
pub(crate) fn each_pair<A: Send, B: Send>(
    a: &mut [A],
    b: &mut [B],
    work: impl Fn(usize, &mut [A], &mut [B]) + Sync + Send,
) {
    let shares = a.par_chunks_mut(GRAIN).zip(b.par_chunks_mut(GRAIN)).enumerate();
    shares.for_each(|(k, (a, b))| work(k * GRAIN, a, b));
}

/// Sum of `part(j)` over rows 0..count, each row about `width` cells of work; added in row order.
pub(crate) fn sum_rows<const N: usize>(
    count: usize,
    width: usize,
    part: impl Fn(usize) -> [f64; N] + Sync + Send,
) -> [f64; N] {
    let rows = band_rows(width);
    let add = |mut sum: [f64; N], row: [f64; N]| {
        sum.iter_mut().zip(row).for_each(|(s, r)| *s += r);
        sum
    };
    if count <= rows {
        return (0..count).map(part).fold([0.0; N], add);
    }
    let parts: Vec<[f64; N]> = (0..count).into_par_iter().with_min_len(rows).map(part).collect();
    parts.into_iter().fold([0.0; N], add)
}

/// Scalar product, summed in double precision.
pub(crate) fn dot(a: &[f32], b: &[f32], width: usize) -> f64 {
    let [sum] = sum_rows(a.len() / width, width, |j| {
        let span = j * width..(j + 1) * width;
        [row_product(&a[span.clone()], &b[span])]
    });
    sum
}

/// Product of two rows, in eight partial sums.
pub(crate) fn row_product(a: &[f32], b: &[f32]) -> f64 {
    const LANES: usize = 8;
    let mut lanes = [0.0_f64; LANES];
    let (a, b) = (a.chunks(LANES), b.chunks(LANES));
    for (a, b) in a.zip(b) {
        lanes.iter_mut().zip(a.iter().zip(b)).for_each(|(l, (a, b))| *l += f64::from(a * b));
    }
    lanes.iter().sum()
}

/// y ← y + s·x.
pub(crate) fn add_scaled(y: &mut [f32], s: f32, x: &[f32], width: usize) {
    each_row(y, width, |j, row| {
        let x = &x[j * width..(j + 1) * width];
        row.iter_mut().zip(x).for_each(|(y, x)| *y += s * x);
    });
}

/// y ← y + x, x in single precision.
pub(crate) fn add(y: &mut [f64], x: &[f32], width: usize) {
    each_row(y, width, |j, row| {
        let x = &x[j * width..(j + 1) * width];
        row.iter_mut().zip(x).for_each(|(y, x)| *y += f64::from(*x));
    });
}
