//! Zebra relaxation by lines: every second row (column) is solved exactly at once, then the others.
//!
//! Lines carry the strong coupling of stretched cells; the two colours make the result independent
//! of the order, hence of the threads. A line's elimination keeps the rest r of every pivot apart:
//! with q = (pivot − e)/pivot of the cell before, pivot = r + w·q + e, a sum of non-negative
//! terms, so nothing cancels however weakly a line hangs on its surroundings.
//!
//! # Source
//! grassmann-1985 (elimination without subtractions).

use super::stencil::Stencil;
use crate::par;

/// Rows solved side by side: their chains of divisions overlap.
const LANES: usize = 4;
/// Columns solved side by side in one task; even.
const BLOCK: usize = 128;
/// Pivots up to this are none: the last cell of a line that hangs on nothing is kept at zero.
const NO_PIVOT: f32 = 1e-30;

/// Work arrays, kept between calls.
#[derive(Debug, Default)]
pub(crate) struct LineWork {
    value: Vec<f32>,
    halo: Vec<f32>,
}

impl LineWork {
    /// For systems of up to `len` unknowns.
    pub fn new(len: usize) -> Self {
        LineWork { value: vec![0.0; len], halo: Vec::new() }
    }
}

/// One sweep over all rows, then all columns.
pub(crate) fn sweep(a: &Stencil, x: &mut [f32], b: &[f32], work: &mut LineWork) {
    for colour in 0..2 {
        rows(a, x, b, colour, &mut work.halo);
    }
    columns(a, x, b, 0, &mut work.value);
}

/// The same in reverse order, so that `sweep` and `sweep_back` around a coarse correction make a
/// symmetric whole.
pub(crate) fn sweep_back(a: &Stencil, x: &mut [f32], b: &[f32], work: &mut LineWork) {
    columns(a, x, b, 1, &mut work.value);
    for colour in [1, 0] {
        rows(a, x, b, colour, &mut work.halo);
    }
}

#[inline(always)]
fn inverse(pivot: f32) -> f32 {
    if pivot > NO_PIVOT { 1.0 / pivot } else { 0.0 }
}

/// Solves every second row, in place.
fn rows(a: &Stencil, x: &mut [f32], b: &[f32], colour: usize, halo: &mut Vec<f32>) {
    let nx = a.nx;
    let band = par::band_rows(nx);
    let ny = x.len() / nx;
    // A band's first (last) row may lean on the last (first) row of its neighbour, which is of the
    // other colour: a copy of it serves.
    halo.clear();
    for first in (0..ny).step_by(band) {
        let beyond = if colour == 0 { first.saturating_sub(1) } else { (first + band).min(ny - 1) };
        halo.extend_from_slice(&x[beyond * nx..(beyond + 1) * nx]);
    }
    let halo = &*halo;
    par::each_band([(x, nx)], band, |first, [x]| {
        let count = x.len() / nx;
        let beyond = &halo[first / band * nx..][..nx];
        let mut scratch = vec![0.0; 2 * LANES * nx];
        let mut j = colour;
        while j < count {
            let lanes = (count - j).div_ceil(2).min(LANES);
            if lanes == LANES {
                solve_rows::<LANES>(a, x, b, (first, j), beyond, &mut scratch);
                j += 2 * LANES;
            } else {
                solve_rows::<1>(a, x, b, (first, j), beyond, &mut scratch);
                j += 2;
            }
        }
    });
}

/// Solves the rows j, j + 2, ... (K of them) of the band that begins at row `first`.
fn solve_rows<const K: usize>(
    a: &Stencil,
    x: &mut [f32],
    b: &[f32],
    (first, j): (usize, usize),
    beyond: &[f32],
    scratch: &mut [f32],
) {
    let nx = a.nx;
    let (value, upper) = scratch.split_at_mut(K * nx);
    let (value, upper) = (&mut value[..K * nx], &mut upper[..K * nx]);
    let row = |f: &'_ [f32], k: usize| -> std::ops::Range<usize> {
        let start = (first + j + 2 * k) * nx;
        debug_assert!(start + nx <= f.len());
        start..start + nx
    };
    for k in 0..K {
        let span = row(b, k);
        let (b, s, n) = (&b[span.clone()], &a.s[span.clone()], &a.n[span]);
        let local = j + 2 * k;
        let below = if local > 0 { &x[(local - 1) * nx..local * nx] } else { beyond };
        let end = (local + 1) * nx;
        let above = if end < x.len() { &x[end..end + nx] } else { beyond };
        for i in 0..nx {
            value[i * K + k] = b[i] + s[i] * below[i] + n[i] * above[i];
        }
    }
    let of = |f: &'_ [f32]| -> [std::ops::Range<usize>; K] { std::array::from_fn(|k| row(f, k)) };
    let spans = of(b);
    let rest: [&[f32]; K] = spans.each_ref().map(|s| &a.rest[s.clone()]);
    let w: [&[f32]; K] = spans.each_ref().map(|s| &a.w[s.clone()]);
    let e: [&[f32]; K] = spans.each_ref().map(|s| &a.e[s.clone()]);
    let south: [&[f32]; K] = spans.each_ref().map(|s| &a.s[s.clone()]);
    let north: [&[f32]; K] = spans.each_ref().map(|s| &a.n[s.clone()]);
    let (mut before, mut q) = ([0.0_f32; K], [0.0_f32; K]);
    for i in 0..nx {
        let (value, upper) = (&mut value[i * K..(i + 1) * K], &mut upper[i * K..(i + 1) * K]);
        for k in 0..K {
            let (west, east) = (w[k][i], e[k][i]);
            let kept = rest[k][i] + south[k][i] + north[k][i] + west * q[k];
            let pivot = inverse(kept + east);
            q[k] = kept * pivot;
            before[k] = (value[k] + west * before[k]) * pivot;
            value[k] = before[k];
            upper[k] = east * pivot;
        }
    }
    let mut after = [0.0_f32; K];
    for i in (0..nx).rev() {
        let (value, upper) = (&value[i * K..(i + 1) * K], &upper[i * K..(i + 1) * K]);
        for k in 0..K {
            after[k] = value[k] + upper[k] * after[k];
            x[(j + 2 * k) * nx + i] = after[k];
        }
    }
}

/// Solves the columns of colour `first`, then the others.
///
/// Both colours are solved for all columns of a block, which keeps the loops free of questions; of
/// each solution the columns of its colour are taken.
fn columns(a: &Stencil, x: &mut [f32], b: &[f32], first: usize, value: &mut [f32]) {
    let nx = a.nx;
    let len = x.len();
    let ny = len / nx;
    let value = &mut value[..len];
    let old = &*x;
    // Block k of the result holds columns k·BLOCK.. as an array of ny rows of its own.
    par::each_band([(&mut *value, BLOCK * ny)], 1, |k, [out]| {
        let from = k * BLOCK;
        let width = out.len() / ny;
        // The second colour needs the first one's new values beside the block too.
        let (lo, hi) = (from.saturating_sub(1), (from + width + 1).min(nx));
        let wide = hi - lo;
        let [mut values, mut others, mut upper] = [(); 3].map(|()| vec![0.0; wide * ny]);
        // Beyond the edge the coefficients are zero: any value serves.
        let (left, right) = (lo.saturating_sub(1), (hi + 1).min(nx));
        solve_columns(a, b, lo, wide, (&mut values, &mut upper), |j, row| {
            let beside = &old[j * nx + left..j * nx + right];
            row[left + 1 - lo..][..beside.len()].copy_from_slice(beside);
        });
        solve_columns(a, b, lo, wide, (&mut others, &mut upper), |j, row| {
            row[1..=wide].copy_from_slice(&values[j * wide..(j + 1) * wide]);
        });
        for (j, out) in out.chunks_exact_mut(width).enumerate() {
            let span = j * wide + from - lo..j * wide + from - lo + width;
            let pairs = values[span.clone()].iter().zip(&others[span]);
            // A block begins with an even column.
            for (c, (o, (one, other))) in out.iter_mut().zip(pairs).enumerate() {
                *o = if c % 2 == first { *one } else { *other };
            }
        }
    });
    let value = &*value;
    par::each_row(x, nx, |j, row| {
        for (k, part) in row.chunks_mut(BLOCK).enumerate() {
            let from = k * BLOCK * ny + j * part.len();
            part.copy_from_slice(&value[from..from + part.len()]);
        }
    });
}

/// Solves all of the `wide` columns from `lo` on; `beside(j, row)` puts the values of row j into
/// row[1..=wide] and those of the columns next to them before and after.
fn solve_columns(
    a: &Stencil,
    b: &[f32],
    lo: usize,
    wide: usize,
    (values, upper): (&mut [f32], &mut [f32]),
    beside: impl Fn(usize, &mut [f32]),
) {
    let mut row = vec![0.0; wide + 2];
    let (mut kept, mut last) = (vec![0.0; wide], vec![0.0; wide]);
    let rows = values.chunks_exact_mut(wide).zip(upper.chunks_exact_mut(wide)).enumerate();
    for (j, (values, upper)) in rows {
        beside(j, &mut row);
        let span = j * a.nx + lo..j * a.nx + lo + wide;
        eliminate(
            [&a.rest, &a.w, &a.e, &a.s, &a.n, b].map(|f| &f[span.clone()]),
            &row,
            (&mut kept, &mut last),
            (values, upper),
        );
    }
    let ny = values.len() / wide;
    for j in (0..ny - 1).rev() {
        let (here, above) = values[j * wide..(j + 2) * wide].split_at_mut(wide);
        let upper = &upper[j * wide..(j + 1) * wide];
        here.iter_mut().zip(upper.iter().zip(above)).for_each(|(x, (u, above))| *x += u * *above);
    }
}

/// One row of the forward elimination of columns: `kept` q and `last` value of the row before are
/// replaced by this one's. Apart, so that its arrays are known not to overlap.
#[inline(never)]
fn eliminate(
    [rest, w, e, s, n, b]: [&[f32]; 6],
    row: &[f32],
    (kept, last): (&mut [f32], &mut [f32]),
    (values, upper): (&mut [f32], &mut [f32]),
) {
    let wide = values.len();
    let (rest, w, e) = (&rest[..wide], &w[..wide], &e[..wide]);
    let (s, n, b) = (&s[..wide], &n[..wide], &b[..wide]);
    let (west, east) = (&row[..wide], &row[2..wide + 2]);
    let (kept, last, upper) = (&mut kept[..wide], &mut last[..wide], &mut upper[..wide]);
    for c in 0..wide {
        let own = rest[c] + w[c] + e[c] + s[c] * kept[c];
        let pivot = inverse(own + n[c]);
        kept[c] = own * pivot;
        last[c] = (b[c] + w[c] * west[c] + e[c] * east[c] + s[c] * last[c]) * pivot;
        values[c] = last[c];
        upper[c] = n[c] * pivot;
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::linear::stencil;

    fn system(nx: usize, ny: usize, link: [f32; 4], rest: f32) -> Stencil {
        let mut a = Stencil::new(nx, nx * ny);
        for n in 0..nx * ny {
            let (i, j) = (n % nx, n / nx);
            let there = |is: bool, c: f32| if is { c } else { 0.0 };
            a.rest[n] = rest;
            a.w[n] = there(i > 0, link[0]);
            a.e[n] = there(i + 1 < nx, link[1]);
            a.s[n] = there(j > 0, link[2]);
            a.n[n] = there(j + 1 < ny, link[3]);
        }
        a
    }

    #[test]
    fn a_single_row_or_column_is_solved_exactly() {
        let b = [1.0, -2.0, 3.0, 0.5];
        for (nx, link) in [(4, [1.0, 0.5, 0.0, 0.0]), (1, [0.0, 0.0, 1.0, 0.5])] {
            let a = system(nx, 4 / nx, link, 1.0);
            let (mut x, mut r) = ([0.0; 4], [0.0; 4]);
            sweep(&a, &mut x, &b, &mut LineWork::new(4));
            stencil::residual(&a, &x, &b, &mut r);
            assert!(r.iter().all(|r| r.abs() < 1e-6), "{r:?}");
        }
    }

    #[test]
    fn a_plate_that_hangs_on_a_thread_keeps_its_level() {
        // A row with links of 1 whose rest is 1e-9: x = sum(b)/sum(rest) on average.
        let a = system(50, 1, [1.0, 1.0, 0.0, 0.0], 1e-9);
        let mut x = vec![0.0; 50];
        sweep(&a, &mut x, &[1.0; 50], &mut LineWork::new(50));
        assert!(x.iter().all(|x| (x * 1e-9 - 1.0).abs() < 1e-4), "{x:?}");
    }

    #[test]
    fn sweeps_solve_a_wide_system_across_block_and_band_borders() {
        let (nx, ny) = (150, 90);
        let a = system(nx, ny, [1.0; 4], 0.5);
        let b: Vec<f32> = (0..nx * ny).map(|n| ((n * 37) % 11) as f32 - 5.0).collect();
        let (mut x, mut r) = (vec![0.0; nx * ny], vec![0.0; nx * ny]);
        let mut work = LineWork::new(nx * ny);
        for n in 0..24 {
            if n % 2 == 0 {
                sweep(&a, &mut x, &b, &mut work);
            } else {
                sweep_back(&a, &mut x, &b, &mut work);
            }
        }
        stencil::residual(&a, &x, &b, &mut r);
        assert!(r.iter().all(|r| r.abs() < 1e-5));
    }
}
