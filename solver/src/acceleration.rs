//! Acceleration of the cycles: the combination of their latest results with the least residual.
//!
//! After every cycle the pair (y, r(y)) is kept as a difference from the one before. Near the
//! solution r is linear in y, so x = yₙ + Σ γₖ·Δyₖ has the residual rₙ + Σ γₖ·Δrₖ; the γₖ that make
//! it smallest (each equation measured by its scale) give the start of the next cycle. A
//! combination whose true residual is no better is refused.
//!
//! # Source
//! oosterlee-2000 (Krylov acceleration of nonlinear multigrid), anderson-1965.

use crate::level::Level;
use crate::residual::{self, Scales};
use crate::{State, par};

/// Differences kept.
const DEPTH: usize = 6;
/// Ridge of the least-squares problem, relative to its diagonal.
const RIDGE: f64 = 1e-10;

/// All four fields of a difference one after the other, in single precision.
type Difference = Vec<f32>;

/// The latest results of the cycles on one mesh.
pub(crate) struct Acceleration {
    latest: Option<(State, State)>,
    changes: Vec<(Difference, Difference)>,
}

impl Acceleration {
    pub fn new() -> Self {
        Acceleration { latest: None, changes: Vec::new() }
    }

    /// Takes in the result `state` of a cycle with its `residual` and replaces it by the best
    /// combination, if that is better. `residual` is left as that of the state chosen.
    pub fn step(
        &mut self,
        level: &Level,
        state: &mut State,
        rhs: &State,
        residual: &mut State,
        scales: &Scales,
    ) {
        let Some((old_state, old_residual)) = &mut self.latest else {
            self.latest = Some((state.clone(), residual.clone()));
            return;
        };
        let mut slot = if self.changes.len() == DEPTH {
            self.changes.remove(0)
        } else {
            let len = fields(state).iter().map(|f| f.len()).sum();
            (vec![0.0; len], vec![0.0; len])
        };
        advance(old_state, state, &mut slot.0);
        advance(old_residual, residual, &mut slot.1);
        self.changes.push(slot);
        let weights = [scales.force, scales.force, scales.mass, scales.heat]
            .map(|s| if s > 0.0 { 1.0 / (s * s) } else { 0.0 });
        let Some(gamma) = self.coefficients(residual, &weights) else { return };
        for ((change, _), g) in self.changes.iter().zip(&gamma) {
            add(state, *g, change);
        }
        residual::evaluate(level, state, rhs, residual);
        let size = |r: &State| residual::relative(level, r, scales).largest();
        let Some((old_state, old_residual)) = &self.latest else { return };
        let (new, old) = (size(residual), size(old_residual));
        if new.is_nan() || new > old {
            state.clone_from(old_state);
            residual.clone_from(old_residual);
        }
    }

    /// The γ that minimise ‖r + Σ γₖ·Δrₖ‖.
    fn coefficients(&self, residual: &State, weights: &[f64; 4]) -> Option<Vec<f64>> {
        let m = self.changes.len();
        let mut gram = vec![vec![0.0; m + 1]; m];
        for a in 0..m {
            for b in 0..=a {
                gram[a][b] = product(residual, &self.changes[a].1, &self.changes[b].1, weights);
                gram[b][a] = gram[a][b];
            }
            gram[a][m] = -with_residual(residual, &self.changes[a].1, weights);
        }
        for (a, row) in gram.iter_mut().enumerate() {
            row[a] *= 1.0 + RIDGE;
        }
        eliminate(gram)
    }
}

fn fields(state: &State) -> [&[f64]; 4] {
    [&state.u, &state.v, &state.p, &state.t]
}

/// Makes `old` the same as `new`; what it takes goes to `change`.
fn advance(old: &mut State, new: &State, change: &mut [f32]) {
    let mut rest = change;
    let pairs =
        [(&mut old.u, &new.u), (&mut old.v, &new.v), (&mut old.p, &new.p), (&mut old.t, &new.t)];
    for (old, new) in pairs {
        let (change, others) = rest.split_at_mut(old.len());
        rest = others;
        par::each_pair(old, change, |start, old, change| {
            for ((old, new), change) in old.iter_mut().zip(&new[start..]).zip(change) {
                *change = (new - *old) as f32;
                *old = *new;
            }
        });
    }
}

fn add(state: &mut State, scale: f64, change: &[f32]) {
    let mut start = 0;
    for field in [&mut state.u, &mut state.v, &mut state.p, &mut state.t] {
        let change = &change[start..start + field.len()];
        par::each_row(field, BLOCK, |k, field| {
            let change = &change[k * BLOCK..];
            field.iter_mut().zip(change).for_each(|(f, c)| *f += scale * f64::from(*c));
        });
        start += change.len();
    }
}

/// Values summed per block, blocks added in order: the same bits for any thread count.
const BLOCK: usize = 4096;

/// Weighted product of two differences laid out like `like`.
fn product(like: &State, a: &[f32], b: &[f32], weights: &[f64; 4]) -> f64 {
    let mut start = 0;
    let mut sum = 0.0;
    for (field, weight) in fields(like).into_iter().zip(weights) {
        let (a, b) = (&a[start..start + field.len()], &b[start..start + field.len()]);
        start += field.len();
        let [part] = par::sum_rows(a.len().div_ceil(BLOCK), BLOCK, |k| {
            let span = k * BLOCK..a.len().min((k + 1) * BLOCK);
            [a[span.clone()].iter().zip(&b[span]).map(|(a, b)| f64::from(*a) * f64::from(*b)).sum()]
        });
        sum += weight * part;
    }
    sum
}

fn with_residual(residual: &State, a: &[f32], weights: &[f64; 4]) -> f64 {
    let mut start = 0;
    let mut sum = 0.0;
    for (field, weight) in fields(residual).into_iter().zip(weights) {
        let a = &a[start..start + field.len()];
        start += field.len();
        let [part] = par::sum_rows(a.len().div_ceil(BLOCK), BLOCK, |k| {
            let span = k * BLOCK..a.len().min((k + 1) * BLOCK);
            [a[span.clone()].iter().zip(&field[span]).map(|(a, r)| f64::from(*a) * r).sum()]
        });
        sum += weight * part;
    }
    sum
}

/// Solves the small system [A | b] by elimination with row exchange; `None` when singular.
fn eliminate(mut rows: Vec<Vec<f64>>) -> Option<Vec<f64>> {
    let m = rows.len();
    for k in 0..m {
        let pivot = (k..m).max_by(|a, b| rows[*a][k].abs().total_cmp(&rows[*b][k].abs()))?;
        rows.swap(k, pivot);
        if rows[k][k] == 0.0 || !rows[k][k].is_finite() {
            return None;
        }
        for r in k + 1..m {
            let factor = rows[r][k] / rows[k][k];
            for c in k..=m {
                rows[r][c] -= factor * rows[k][c];
            }
        }
    }
    let mut x = vec![0.0; m];
    for k in (0..m).rev() {
        let known: f64 = (k + 1..m).map(|c| rows[k][c] * x[c]).sum();
        x[k] = (rows[k][m] - known) / rows[k][k];
    }
    x.iter().all(|v| v.is_finite()).then_some(x)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn elimination_solves_a_small_system_and_refuses_a_singular_one() {
        let x = eliminate(vec![vec![0.0, 2.0, 4.0], vec![3.0, 1.0, 11.0]]);
        assert_eq!(x, Some(vec![3.0, 2.0]));
        assert_eq!(eliminate(vec![vec![1.0, 2.0, 1.0], vec![2.0, 4.0, 2.0]]), None);
    }
}
