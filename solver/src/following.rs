//! What of a problem follows its result, besides the air's constants: held while the equations are
//! solved, renewed in between until it stands.

use crate::heat_law::{block_heats, cold_heats};
use crate::outer::Outer;
use crate::{Air, Problem, State};

/// Heat through outer faces stands when it moves by less than this share of it [-]: a tenth of what
/// the heat balance may be off by.
const OUTER_BOUND: f64 = 1e-7;

/// What a mesh's equations hold fixed.
#[derive(Debug, Clone, PartialEq, Default)]
pub(crate) struct Following {
    /// Outer faces of the sides.
    pub outer: Outer,
    /// Heat of every block [W]; empty where none follows its temperature.
    pub heats: Vec<f64>,
}

impl Following {
    /// Whether anything in a problem follows its result.
    pub fn any(problem: &Problem) -> bool {
        !Outer::guess(problem).is_empty() || !problem.description().heat_laws.is_empty()
    }

    /// Before anything is known of the result.
    pub fn guess(problem: &Problem) -> Following {
        Following { outer: Outer::guess(problem), heats: cold_heats(problem) }
    }

    /// As it is in a state.
    pub fn at(problem: &Problem, air: &Air, state: &State) -> Following {
        let laws = !problem.description().heat_laws.is_empty();
        let heats = if laws { block_heats(problem, state) } else { Vec::new() };
        Following { outer: Outer::at(problem, air, &state.t), heats }
    }

    /// The same for another mesh of the layout, where no state is known yet.
    pub fn carried(&self, problem: &Problem, air: &Air) -> Following {
        let heats = self.heats.clone();
        Following { outer: Outer::around(problem, air, &self.outer.means()), heats }
    }

    /// How far the heats are from those before, over their sum [-].
    pub fn heat_gap(&self, before: &Following) -> f64 {
        let apart = self.heats.iter().zip(&before.heats).map(|(a, b)| (a - b).abs()).sum::<f64>();
        let sum: f64 = self.heats.iter().map(|q| q.abs()).sum();
        if apart > 0.0 { apart / sum.max(f64::MIN_POSITIVE) } else { 0.0 }
    }

    /// Whether the outer faces are the same as before, to what matters in a state.
    pub fn outer_stands(&self, before: &Following, problem: &Problem, state: &State) -> bool {
        self.outer.distance(&before.outer, problem, &state.t) <= OUTER_BOUND
    }
}
