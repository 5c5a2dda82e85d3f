//! A multigrid cycle for five-point systems, used to precondition the Krylov methods.
//!
//! The coarse systems follow from the fine one alone: parallel links across a coarse face add, and
//! each is weakened by the ratio of the distances it spans (fine over coarse), as if the equation
//! were written anew on the coarse mesh. Corrections are carried back unchanged to all children.

use ventrise_mesh::{Coarsening, Mesh};

use super::relaxation::{self, LineWork};
use super::stencil::{self, Coefficients};
use crate::par;

/// Sweeps on the coarsest system, few enough cells to be solved by them.
const COARSEST_SWEEPS: usize = 12;
/// Relative shift of the coarse diagonals, which keeps closed (singular) regions solvable.
const SHIFT: f64 = 1e-10;

/// How one mesh of the chain lies in the next coarser one.
#[derive(Debug, Clone)]
pub(crate) struct Link {
    pub nx: usize,
    pub coarse_nx: usize,
    pub coarse_ny: usize,
    pub x_parent: Vec<usize>,
    pub y_parent: Vec<usize>,
    /// First fine column of every coarse one, and the end.
    pub x_first: Vec<usize>,
    pub y_first: Vec<usize>,
    /// Per coarse line: distance of the fine centres beside it over that of the coarse ones.
    x_ratio: Vec<f64>,
    y_ratio: Vec<f64>,
}

impl Link {
    pub fn new(fine: &Mesh, c: &Coarsening) -> Link {
        let (x_first, x_ratio) = lines(fine.x(), c.mesh.x(), &c.x_parent);
        let (y_first, y_ratio) = lines(fine.y(), c.mesh.y(), &c.y_parent);
        Link {
            nx: fine.nx(),
            coarse_nx: c.mesh.nx(),
            coarse_ny: c.mesh.ny(),
            x_parent: c.x_parent.clone(),
            y_parent: c.y_parent.clone(),
            x_first,
            y_first,
            x_ratio,
            y_ratio,
        }
    }

    /// Sums of the children, cell by cell.
    pub fn restrict_sum(&self, fine: &[f64], coarse: &mut [f64]) {
        par::each_row(coarse, self.coarse_nx, |jc, out| {
            out.fill(0.0);
            for j in self.y_first[jc]..self.y_first[jc + 1] {
                let row = &fine[j * self.nx..(j + 1) * self.nx];
                for (i, f) in row.iter().enumerate() {
                    out[self.x_parent[i]] += f;
                }
            }
        });
    }

    /// Adds every coarse value to its children.
    fn add_to_children(&self, coarse: &[f64], fine: &mut [f64]) {
        par::each_row(fine, self.nx, |j, row| {
            let c = &coarse[self.y_parent[j] * self.coarse_nx..][..self.coarse_nx];
            row.iter_mut().zip(&self.x_parent).for_each(|(f, i)| *f += c[*i]);
        });
    }

    /// The coarse system of a fine one.
    fn coarsen(&self, fine: &[Coefficients], coarse: &mut [Coefficients]) {
        par::each_row(coarse, self.coarse_nx, |jc, out| {
            for (ic, c) in out.iter_mut().enumerate() {
                let mut sum = Coefficients::default();
                let mut rest = 0.0;
                let (i0, i1) = (self.x_first[ic], self.x_first[ic + 1]);
                let (j0, j1) = (self.y_first[jc], self.y_first[jc + 1]);
                for j in j0..j1 {
                    sum.w += fine[i0 + j * self.nx].w;
                    sum.e += fine[i1 - 1 + j * self.nx].e;
                    for f in &fine[i0 + j * self.nx..i1 + j * self.nx] {
                        rest += f.p - f.neighbours();
                    }
                }
                for i in i0..i1 {
                    sum.s += fine[i + j0 * self.nx].s;
                    sum.n += fine[i + (j1 - 1) * self.nx].n;
                }
                sum.w *= self.x_ratio[ic];
                sum.e *= self.x_ratio[ic + 1];
                sum.s *= self.y_ratio[jc];
                sum.n *= self.y_ratio[jc + 1];
                let links = sum.neighbours();
                sum.p = links + rest.max(0.0) + SHIFT * (links + rest.abs());
                *c = sum;
            }
        });
    }
}

fn lines(fine: &[f64], coarse: &[f64], parent: &[usize]) -> (Vec<usize>, Vec<f64>) {
    let count = coarse.len() - 1;
    let mut first: Vec<usize> = (0..count).map(|c| parent.partition_point(|p| *p < c)).collect();
    first.push(parent.len());
    let ratio = (0..=count)
        .map(|c| {
            if c == 0 || c == count {
                return 1.0;
            }
            let f = first[c];
            (fine[f + 1] - fine[f - 1]) / (coarse[c + 1] - coarse[c - 1])
        })
        .collect();
    (first, ratio)
}

#[derive(Debug)]
struct Coarse {
    link: Link,
    a: Vec<Coefficients>,
    x: Vec<f64>,
    b: Vec<f64>,
}

/// The cycle with its coarse systems; the finest system stays with the caller.
#[derive(Debug)]
pub(crate) struct Multigrid {
    nx: usize,
    coarse: Vec<Coarse>,
    work: LineWork,
    residual: Vec<f64>,
}

impl Multigrid {
    /// For a mesh of `nx` columns and `len` cells with the chain of coarser meshes below it.
    pub fn new(nx: usize, len: usize, chain: &[Link]) -> Multigrid {
        let coarse = chain
            .iter()
            .map(|link| {
                let len = link.coarse_nx * link.coarse_ny;
                Coarse {
                    link: link.clone(),
                    a: vec![Coefficients::default(); len],
                    x: vec![0.0; len],
                    b: vec![0.0; len],
                }
            })
            .collect();
        Multigrid { nx, coarse, work: LineWork::new(len), residual: vec![0.0; len] }
    }

    /// Makes the coarse systems of a new fine one.
    pub fn set(&mut self, a: &[Coefficients]) {
        let mut fine = a;
        for level in &mut self.coarse {
            level.link.coarsen(fine, &mut level.a);
            fine = &level.a;
        }
    }

    /// One V-cycle from zero: x ≈ A⁻¹ b.
    pub fn cycle(&mut self, a: &[Coefficients], x: &mut [f64], b: &[f64]) {
        let Multigrid { nx, coarse, work, residual } = self;
        x.fill(0.0);
        cycle(a, x, b, *nx, coarse, work, residual);
    }
}

fn cycle(
    a: &[Coefficients],
    x: &mut [f64],
    b: &[f64],
    nx: usize,
    coarse: &mut [Coarse],
    work: &mut LineWork,
    residual: &mut [f64],
) {
    let Some((next, deeper)) = coarse.split_first_mut() else {
        for _ in 0..COARSEST_SWEEPS {
            relaxation::sweep(a, x, b, nx, work);
            relaxation::sweep_back(a, x, b, nx, work);
        }
        return;
    };
    relaxation::sweep(a, x, b, nx, work);
    let r = &mut residual[..x.len()];
    stencil::residual(a, x, b, r, nx);
    let Coarse { link, a: coarse_a, x: coarse_x, b: coarse_b } = next;
    link.restrict_sum(r, coarse_b);
    coarse_x.fill(0.0);
    cycle(coarse_a, coarse_x, coarse_b, link.coarse_nx, deeper, work, residual);
    link.add_to_children(coarse_x, x);
    relaxation::sweep_back(a, x, b, nx, work);
}
