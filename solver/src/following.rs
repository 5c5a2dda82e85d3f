//! What of a problem follows its result, besides the air's constants: held while the equations are
//! solved, renewed in between until it stands.

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
}

impl Following {
    /// Whether anything in a problem follows its result.
    pub fn any(problem: &Problem) -> bool {
        !Outer::guess(problem).is_empty()
    }

    /// Before anything is known of the result.
    pub fn guess(problem: &Problem) -> Following {
        Following { outer: Outer::guess(problem) }
    }

    /// As it is in a state.
    pub fn at(problem: &Problem, air: &Air, state: &State) -> Following {
        Following { outer: Outer::at(problem, air, &state.t) }
    }

    /// The same for another mesh of the layout, where no state is known yet.
    pub fn carried(&self, problem: &Problem, air: &Air) -> Following {
        Following { outer: Outer::around(problem, air, &self.outer.means()) }
    }

    /// Whether it is the same as before, to what matters in a state.
    pub fn stands(&self, before: &Following, problem: &Problem, state: &State) -> bool {
        self.outer.distance(&before.outer, problem, &state.t) <= OUTER_BOUND
    }
}
