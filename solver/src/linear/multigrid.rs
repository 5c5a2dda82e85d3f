//! A multigrid cycle for five-point systems, used to precondition the Krylov methods.
//!
//! The coarse systems follow from the fine one alone: parallel links across a coarse face add, and
//! each is weakened by the ratio of the distances it spans (fine over coarse), as if the equation
//! were written anew on the coarse mesh. Corrections are carried back unchanged to all children.

use ventrise_mesh::{Coarsening, Mesh};

use super::relaxation::{self, LineWork};
use super::stencil::{self, Stencil};
use crate::par;

/// Sweeps on the coarsest system, few enough cells to be solved by them.
const COARSEST_SWEEPS: usize = 12;

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
    x_ratio: Vec<f32>,
    y_ratio: Vec<f32>,
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
    pub fn restrict_sum<T>(&self, fine: &[T], coarse: &mut [T])
    where
        T: Copy + Default + Send + Sync + std::ops::AddAssign,
    {
        par::each_row(coarse, self.coarse_nx, |jc, out| {
            out.fill(T::default());
            for j in self.y_first[jc]..self.y_first[jc + 1] {
                let row = &fine[j * self.nx..(j + 1) * self.nx];
                row.iter().zip(&self.x_parent).for_each(|(f, ic)| out[*ic] += *f);
            }
        });
    }

    /// Adds every coarse value to its children.
    fn add_to_children(&self, coarse: &[f32], fine: &mut [f32]) {
        par::each_row(fine, self.nx, |j, row| {
            let c = &coarse[self.y_parent[j] * self.coarse_nx..][..self.coarse_nx];
            row.iter_mut().zip(&self.x_parent).for_each(|(f, i)| *f += c[*i]);
        });
    }

    /// The coarse system of a fine one.
    fn coarsen(&self, fine: &Stencil, coarse: &mut Stencil) {
        par::each_rows(coarse.arrays(), |jc, [rest, w, e, s, n]| {
            let (j0, j1) = (self.y_first[jc], self.y_first[jc + 1]);
            for ic in 0..self.coarse_nx {
                let (i0, i1) = (self.x_first[ic], self.x_first[ic + 1]);
                let [mut sum_rest, mut sum_w, mut sum_e] = [0.0; 3];
                for j in j0..j1 {
                    let row = j * self.nx;
                    sum_w += fine.w[i0 + row];
                    sum_e += fine.e[i1 - 1 + row];
                    sum_rest += fine.rest[i0 + row..i1 + row].iter().sum::<f32>();
                }
                let along = |a: &[f32], j: usize| -> f32 {
                    a[i0 + j * self.nx..i1 + j * self.nx].iter().sum()
                };
                rest[ic] = sum_rest;
                w[ic] = sum_w * self.x_ratio[ic];
                e[ic] = sum_e * self.x_ratio[ic + 1];
                s[ic] = along(&fine.s, j0) * self.y_ratio[jc];
                n[ic] = along(&fine.n, j1 - 1) * self.y_ratio[jc + 1];
            }
        });
    }
}

fn lines(fine: &[f64], coarse: &[f64], parent: &[usize]) -> (Vec<usize>, Vec<f32>) {
    let count = coarse.len() - 1;
    let mut first: Vec<usize> = (0..count).map(|c| parent.partition_point(|p| *p < c)).collect();
    first.push(parent.len());
    let ratio = (0..=count)
        .map(|c| {
            if c == 0 || c == count {
                return 1.0;
            }
            let f = first[c];
            ((fine[f + 1] - fine[f - 1]) / (coarse[c + 1] - coarse[c - 1])) as f32
        })
        .collect();
    (first, ratio)
}

#[derive(Debug)]
struct Coarse {
    link: Link,
    a: Stencil,
    x: Vec<f32>,
    b: Vec<f32>,
}

/// The cycle with its coarse systems; the finest system stays with the caller.
#[derive(Debug)]
pub(crate) struct Multigrid {
    coarse: Vec<Coarse>,
    work: LineWork,
    residual: Vec<f32>,
}

impl Multigrid {
    /// For a mesh of `len` cells with the chain of coarser meshes below it.
    pub fn new(len: usize, chain: &[Link]) -> Multigrid {
        let coarse = chain
            .iter()
            .map(|link| {
                let len = link.coarse_nx * link.coarse_ny;
                Coarse {
                    link: link.clone(),
                    a: Stencil::new(link.coarse_nx, len),
                    x: vec![0.0; len],
                    b: vec![0.0; len],
                }
            })
            .collect();
        Multigrid { coarse, work: LineWork::new(len), residual: vec![0.0; len] }
    }

    /// Makes the coarse systems of a new fine one.
    pub fn set(&mut self, a: &Stencil) {
        let mut fine = a;
        for level in &mut self.coarse {
            level.link.coarsen(fine, &mut level.a);
            fine = &level.a;
        }
    }

    /// One V-cycle from zero: x ≈ A⁻¹ b.
    pub fn cycle(&mut self, a: &Stencil, x: &mut [f32], b: &[f32]) {
        let Multigrid { coarse, work, residual } = self;
        x.fill(0.0);
        cycle(a, x, b, coarse, work, residual);
    }
}

fn cycle(
    a: &Stencil,
    x: &mut [f32],
    b: &[f32],
    coarse: &mut [Coarse],
    work: &mut LineWork,
    residual: &mut [f32],
) {
    let Some((next, deeper)) = coarse.split_first_mut() else {
        for _ in 0..COARSEST_SWEEPS {
            relaxation::sweep(a, x, b, work);
            relaxation::sweep_back(a, x, b, work);
        }
        return;
    };
    relaxation::sweep(a, x, b, work);
    let r = &mut residual[..x.len()];
    stencil::residual(a, x, b, r);
    let Coarse { link, a: coarse_a, x: coarse_x, b: coarse_b } = next;
    link.restrict_sum(r, coarse_b);
    coarse_x.fill(0.0);
    cycle(coarse_a, coarse_x, coarse_b, deeper, work, residual);
    link.add_to_children(coarse_x, x);
    relaxation::sweep_back(a, x, b, work);
}
