//! What a run ends with.

use crate::{Air, Runaway, State};

/// Residuals relative to their scales [-].
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Residuals {
    /// Mass.
    pub mass: f64,
    /// Momentum along x.
    pub momentum_x: f64,
    /// Momentum along y.
    pub momentum_y: f64,
    /// Energy.
    pub energy: f64,
}

impl Residuals {
    /// The largest of the four.
    pub fn largest(&self) -> f64 {
        let all = [self.mass, self.momentum_x, self.momentum_y, self.energy];
        // Not a number must not pass for small.
        let nan = all.iter().any(|r| r.is_nan());
        if nan { f64::NAN } else { all.into_iter().fold(0.0, f64::max) }
    }
}

/// What is known after an outer iteration on the finest mesh so far (also a history row).
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Progress {
    /// Outer iterations so far.
    pub iteration: usize,
    /// Cells of the mesh being worked on (nested start: coarser meshes come first).
    pub cells: usize,
    /// Residuals.
    pub residuals: Residuals,
    /// |heat in − heat out| over heat in.
    pub heat_error: f64,
    /// |air in − air out| over air in, all slots and open sides.
    pub mass_error: f64,
    /// Air in through slots and open sides [m³/s].
    pub flow_in: f64,
    /// Highest temperature rise of every part [K], in the order of `Description::parts`.
    pub part_max: Vec<f64>,
    /// Largest change of any part's temperature over the last iteration [K].
    pub drift: f64,
    /// Flow of every fan in its direction [m³/s].
    pub fan_flows: Vec<f64>,
    /// Largest relative change of a fan's flow over the last iteration [-].
    pub fan_drift: f64,
}

/// Whether to go on, answered by the caller after every outer iteration.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Control {
    /// Go on.
    Continue,
    /// End with what there is.
    Stop,
}

/// Why the iteration ended.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum StopReason {
    /// All bounds met.
    Converged,
    /// The iteration limit.
    IterationLimit,
    /// Residuals no longer fell.
    Stalled,
    /// The caller said stop.
    Asked,
    /// Heat that follows its block's temperature grows without end.
    RanAway,
}

/// Physics and numerics in one word.
#[derive(Debug, Clone, PartialEq)]
pub enum Verdict {
    /// Steady, every bound met, not known to be unstable.
    Settled,
    /// The flow keeps moving in a bounded way.
    Swaying {
        /// Period [s], when known.
        period: Option<f64>,
        /// Growth rate of the disturbance about the steady solution [1/s], when known.
        growth: Option<f64>,
        /// Lowest and highest `part_max` [K] of every part over the last oscillations.
        band: Vec<[f64; 2]>,
        /// Lowest and highest net flow in through every slot [m³/s] over them.
        slot_band: Vec<[f64; 2]>,
    },
    /// No steady answer: heat grows faster with temperature than it is carried away.
    RunsAway(Runaway),
    /// Temperatures still creep.
    Drifting,
    /// The limit or the caller ended it.
    StoppedEarly,
}

/// The result of a run.
#[derive(Debug, Clone)]
pub struct Solution {
    /// The fields.
    pub state: State,
    /// The air's constants as finally used.
    pub air: Air,
    /// Why the iteration ended.
    pub stop: StopReason,
    /// The verdict.
    pub verdict: Verdict,
    /// One row per outer iteration.
    pub history: Vec<Progress>,
    /// Where heat follows temperature: what one watt more makes more [-], below 1.
    pub heat_growth: Option<f64>,
    /// Sentences worth telling (fallbacks taken, ...).
    pub notes: Vec<String>,
}
