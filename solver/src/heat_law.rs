//! Heat that depends on the temperature of the block it is released in, and the search for heats
//! that agree with the temperatures they make.
//!
//! The housing answers heats P with mean temperatures T̄(P), the law answers these with heats a(P).
//! Wanted is F(P) = P − a(P) = 0. Broyden's method keeps an approximate inverse H of the slope,
//! P ← P − H·F, with H = 1 to begin with. Along the latest step s the growth factor is
//! g = s·Δa/s·s: what one watt more makes more by the law. Where g reaches 1 heat grows faster with
//! temperature than the housing carries it away.
//!
//! # Source
//! broyden-1965.

use crate::numbers::block_temperatures;
use crate::{Problem, State};

/// Steps below this share of the heat say nothing about slopes.
const LEAST_STEP: f64 = 1e-3;
/// Step along a growth of 1 and more, and the largest step, as shares of the heat.
const CLIMB: f64 = 0.5;
const LARGEST_STEP: f64 = 1.0;
/// Growth factors nearer to 1 than this amplifies are not told from 1 [-].
const LARGEST_AMPLIFICATION: f64 = 100.0;

/// Heat of a block by its mean temperature.
#[derive(Debug, Clone, PartialEq)]
pub struct HeatLaw {
    /// The block, index into [`crate::Description::blocks`]; its own heat is not used.
    pub block: usize,
    /// Temperature [K], rising, and heat [W]: straight between two points and beyond the last ones,
    /// never below zero.
    pub points: Vec<[f64; 2]>,
}

impl HeatLaw {
    /// Heat [W] at a temperature [K].
    pub fn heat(&self, temperature: f64) -> f64 {
        let last = self.points.len().saturating_sub(1);
        let after = self.points.partition_point(|p| p[0] <= temperature).clamp(1, last.max(1));
        match (self.points.get(after - 1), self.points.get(after)) {
            (Some([t0, q0]), Some([t1, q1])) => {
                (q0 + (temperature - t0) / (t1 - t0) * (q1 - q0)).max(0.0)
            }
            (Some([_, q]), None) => *q,
            _ => 0.0,
        }
    }
}

/// Heat released in every block [W], that of blocks with a law at the state's temperatures.
pub fn block_heats(problem: &Problem, state: &State) -> Vec<f64> {
    let d = problem.description();
    let mut heats: Vec<f64> = d.blocks.iter().map(|b| b.heat).collect();
    if !d.heat_laws.is_empty() {
        let found = block_temperatures(problem, state);
        for law in &d.heat_laws {
            let rise = found[law.block].map_or(0.0, |t| t.mean);
            heats[law.block] = law.heat(d.ambient + rise);
        }
    }
    heats
}

/// Heats of the laws at ambient temperature; none without laws.
pub(crate) fn cold_heats(problem: &Problem) -> Vec<f64> {
    let d = problem.description();
    if d.heat_laws.is_empty() { Vec::new() } else { block_heats(problem, &State::rest(&d.mesh)) }
}

/// Heat that grows without end.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Runaway {
    /// What one watt more makes more [-], ≥ 1.
    pub growth: f64,
    /// The hottest block with a law, index into [`crate::Description::blocks`].
    pub block: usize,
    /// Its mean temperature when it was given up [K].
    pub temperature: f64,
}

/// The search for heats that agree with the temperatures.
#[derive(Debug, Default)]
pub(crate) struct HeatSearch {
    /// H, by rows.
    inverse: Vec<Vec<f64>>,
    /// The latest heats and F there.
    last: Option<[Vec<f64>; 2]>,
    /// Growth factor along the latest step worth the name.
    pub growth: Option<f64>,
}

fn dot(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(a, b)| a * b).sum()
}

impl HeatSearch {
    /// Whether heat grows faster with temperature than it is carried away.
    pub fn climbs(&self) -> bool {
        self.growth.is_some_and(|g| g >= 1.0)
    }

    /// What comes next is from another mesh or another flow: no slope to what was before.
    pub fn turn(&mut self) {
        self.last = None;
    }

    /// How far the answer is for each watt that the laws are off: 1/(1 − g).
    pub fn amplification(&self) -> f64 {
        let growth = self.growth.unwrap_or(0.0).clamp(0.0, 1.0);
        (1.0 / (1.0 - growth)).min(LARGEST_AMPLIFICATION)
    }

    /// The heats to try next [W]: `used` made temperatures that the laws answer with `answered`.
    pub fn next(&mut self, used: &[f64], answered: &[f64]) -> Vec<f64> {
        let n = used.len();
        let size = dot(used, used).sqrt();
        let miss: Vec<f64> = used.iter().zip(answered).map(|(u, a)| u - a).collect();
        if self.inverse.len() != n {
            self.inverse = (0..n).map(|i| unit(n, i)).collect();
        }
        if let Some([before, missed]) = &self.last {
            let s: Vec<f64> = used.iter().zip(before).map(|(a, b)| a - b).collect();
            let y: Vec<f64> = miss.iter().zip(missed).map(|(a, b)| a - b).collect();
            if dot(&s, &s).sqrt() > LEAST_STEP * size {
                self.growth = Some(1.0 - dot(&s, &y) / dot(&s, &s));
                self.learn(&s, &y);
            }
        }
        let mut step: Vec<f64> = self.inverse.iter().map(|row| -dot(row, &miss)).collect();
        let rising = miss.iter().sum::<f64>() < 0.0;
        if self.climbs() {
            // No slope to follow: upwards in long steps, downwards as the law says.
            let length = dot(&miss, &miss).sqrt();
            let factor = if rising { (CLIMB * size / length).max(1.0) } else { 1.0 };
            step = miss.iter().map(|m| -factor * m).collect();
        }
        let length = dot(&step, &step).sqrt();
        if length > LARGEST_STEP * size && size > 0.0 {
            step.iter_mut().for_each(|s| *s *= LARGEST_STEP * size / length);
        }
        self.last = Some([used.to_vec(), miss]);
        used.iter().zip(&step).map(|(u, s)| (u + s).max(0.0)).collect()
    }

    /// Broyden's update; begun anew where the slope turns over.
    fn learn(&mut self, s: &[f64], y: &[f64]) {
        let n = s.len();
        let moved: Vec<f64> = self.inverse.iter().map(|row| dot(row, y)).collect();
        let along = dot(s, &moved);
        if self.climbs() || along.abs() < 1e-3 * dot(s, s) {
            self.inverse = (0..n).map(|i| unit(n, i)).collect();
            return;
        }
        let row: Vec<f64> =
            (0..n).map(|j| (0..n).map(|i| s[i] * self.inverse[i][j]).sum()).collect();
        for (i, line) in self.inverse.iter_mut().enumerate() {
            let factor = (s[i] - moved[i]) / along;
            line.iter_mut().zip(&row).for_each(|(h, r)| *h += factor * r);
        }
    }
}

fn unit(n: usize, place: usize) -> Vec<f64> {
    (0..n).map(|j| f64::from(u8::from(j == place))).collect()
}

/// The hottest block with a law and its mean temperature [K].
pub(crate) fn hottest(problem: &Problem, state: &State) -> Option<(usize, f64)> {
    let d = problem.description();
    let found = block_temperatures(problem, state);
    let with_law = d.heat_laws.iter().filter_map(|law| Some((law.block, found[law.block]?.mean)));
    with_law.max_by(|a, b| a.1.total_cmp(&b.1)).map(|(block, rise)| (block, d.ambient + rise))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_law_is_straight_between_points_and_beyond() {
        let law = HeatLaw { block: 0, points: vec![[300.0, 2.0], [320.0, 3.0], [340.0, 7.0]] };
        for (t, q) in [(300.0, 2.0), (310.0, 2.5), (320.0, 3.0), (335.0, 6.0), (350.0, 9.0)] {
            assert!((law.heat(t) - q).abs() < 1e-12, "{t}");
        }
        assert_eq!((law.heat(290.0), law.heat(0.0)), (1.5, 0.0));
    }

    /// Two lumps with heats P = p·(1 + a·R·P_all): a linear map, whose fixed point solves a 2 × 2
    /// system by hand: each T rises by R₁·P + R₂·P_other.
    #[test]
    fn heats_of_two_lumps_are_found_in_few_steps() {
        let (p, a, own, other) = ([3.0, 5.0], 0.004, 40.0, 15.0);
        let answer = |u: &[f64]| -> Vec<f64> {
            (0..2).map(|i| p[i] * (1.0 + a * (own * u[i] + other * u[1 - i]))).collect()
        };
        // (1 − p₁·a·R₁)·x − p₁·a·R₂·y = p₁ and the same for y.
        let (m, n) = (p.map(|p| 1.0 - p * a * own), p.map(|p| p * a * other));
        let determinant = m[0] * m[1] - n[0] * n[1];
        let exact =
            [(p[0] * m[1] + n[0] * p[1]) / determinant, (p[1] * m[0] + n[1] * p[0]) / determinant];
        let mut search = HeatSearch::default();
        let mut used = p.to_vec();
        for _ in 0..12 {
            used = search.next(&used, &answer(&used));
        }
        assert!((0..2).all(|i| (used[i] / exact[i] - 1.0).abs() < 1e-9), "{used:?} {exact:?}");
        assert!(!search.climbs());
    }

    #[test]
    fn a_growth_of_one_and_more_climbs() {
        let mut search = HeatSearch::default();
        let mut used = vec![1.0];
        for _ in 0..4 {
            let answered: Vec<f64> = used.iter().map(|u| 1.0 + 1.2 * u).collect();
            used = search.next(&used, &answered);
        }
        assert!(search.climbs() && (search.growth.unwrap_or(0.0) - 1.2).abs() < 1e-9);
        assert!(used[0] > 3.0);
    }
}
