//! The five-point stencil (r + w + e + s + n)·x_P − w·x_W − e·x_E − s·x_S − n·x_N = b.
//!
//! The neighbours' coefficients and the rest r of the diagonal are all ≥ 0 and stored as such: no
//! difference of large numbers is ever needed, so single precision serves even where a thin, well
//! conducting plate hangs on its surroundings by a millionth of its own conductance. Systems are
//! solved for changes only, from exact residuals; their precision is not that of the result.

use crate::par;

/// Coefficients of one row, all ≥ 0.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub(crate) struct Coefficients {
    /// Diagonal less the neighbours' sum.
    pub rest: f64,
    pub w: f64,
    pub e: f64,
    pub s: f64,
    pub n: f64,
}

impl Coefficients {
    /// Sum of the neighbours' coefficients.
    #[inline(always)]
    pub fn neighbours(&self) -> f64 {
        self.w + self.e + self.s + self.n
    }

    /// The same row under-relaxed: its diagonal divided by `relaxation`.
    #[inline(always)]
    pub fn relaxed(mut self, relaxation: f64) -> Coefficients {
        self.rest = (self.rest + (1.0 - relaxation) * self.neighbours()) / relaxation;
        self
    }
}

/// A system on an array of `nx` columns; neighbours beyond the edge have coefficient zero.
#[derive(Debug, Default)]
pub(crate) struct Stencil {
    pub nx: usize,
    pub rest: Vec<f32>,
    pub w: Vec<f32>,
    pub e: Vec<f32>,
    pub s: Vec<f32>,
    pub n: Vec<f32>,
}

impl Stencil {
    /// For `len` unknowns in rows of `nx`, all coefficients zero.
    pub fn new(nx: usize, len: usize) -> Self {
        let mut stencil = Stencil::default();
        stencil.shape(nx, len);
        stencil
    }

    /// Takes another shape; what was stored is meaningless afterwards.
    pub fn shape(&mut self, nx: usize, len: usize) {
        self.nx = nx;
        let Stencil { rest, w, e, s, n, .. } = self;
        [rest, w, e, s, n].into_iter().for_each(|a| a.resize(len, 0.0));
    }

    /// The arrays [rest, w, e, s, n] with their row width, for writing by rows.
    pub fn arrays(&mut self) -> [(&mut [f32], usize); 5] {
        let nx = self.nx;
        let Stencil { rest, w, e, s, n, .. } = self;
        [rest, w, e, s, n].map(|a| (&mut a[..], nx))
    }
}

/// b − A·x into `out`.
pub(crate) fn residual(a: &Stencil, x: &[f32], b: &[f32], out: &mut [f32]) {
    let nx = a.nx;
    par::each_row(out, nx, |j, out| {
        apply_row(a, x, j, out);
        out.iter_mut().zip(&b[j * nx..]).for_each(|(o, b)| *o = b - *o);
    });
}

/// A·x into `out`; the product x·A·x.
pub(crate) fn apply(a: &Stencil, x: &[f32], out: &mut [f32]) -> f64 {
    let nx = a.nx;
    par::each_row(out, nx, |j, out| apply_row(a, x, j, out));
    par::dot(x, out, nx)
}

/// Row j of A·x, as flows to the neighbours.
fn apply_row(a: &Stencil, x: &[f32], j: usize, out: &mut [f32]) {
    let nx = a.nx;
    let span = j * nx..(j + 1) * nx;
    let here = &x[span.clone()];
    // Beyond the edge the coefficients are zero: any row serves.
    let below = if j > 0 { &x[span.start - nx..span.start] } else { here };
    let above = if span.end < x.len() { &x[span.end..span.end + nx] } else { here };
    let (rest, w, e) = (&a.rest[span.clone()], &a.w[span.clone()], &a.e[span.clone()]);
    let (s, n) = (&a.s[span.clone()], &a.n[span]);
    for (i, o) in out.iter_mut().enumerate() {
        *o = rest[i] * here[i] + s[i] * (here[i] - below[i]) + n[i] * (here[i] - above[i]);
    }
    for i in 1..nx {
        out[i] += w[i] * (here[i] - here[i - 1]);
    }
    for i in 0..nx - 1 {
        out[i] += e[i] * (here[i] - here[i + 1]);
    }
}
