//! The lid-driven cavity: a unit square whose roof slides to the right at 1 m/s.

use ventrise_mesh::{Geometry, Side};

use super::lines::{Grading, graded};
use super::read::{Extreme, extreme, u_along_y, v_along_x};
use super::{AMBIENT, SampleError, empty_layout, plain, unit_air};
use crate::{Problem, SideCondition, State};

/// Lid-driven cavity.
///
/// # Source
/// Ghia, Ghia & Shin 1982; Botella & Peyret 1998; Marchi, Suero & Araki 2009.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LidCavity {
    /// Reynolds number on lid speed and side [-].
    pub reynolds: f64,
    /// Cells along each side.
    pub cells: usize,
    /// Their grading.
    pub grading: Grading,
}

impl LidCavity {
    /// The problem.
    ///
    /// # Errors
    /// Numbers out of range.
    pub fn problem(&self) -> Result<Problem, SampleError> {
        let lines = graded(0.0, 1.0, self.cells, self.grading);
        let layout = empty_layout(Geometry::Planar { depth: 1.0 }, 1.0, 1.0);
        let mut d = plain(&layout, lines.clone(), lines, unit_air(1.0 / self.reynolds))?;
        d.sides[Side::Top.index()] = SideCondition::Sliding(1.0);
        // A way out for heat; everything stays at ambient temperature.
        d.sides[Side::Left.index()] = SideCondition::Temperature(AMBIENT);
        Ok(Problem::new(d)?)
    }

    /// Lowest u on x = ½, highest and lowest v on y = ½ [m/s].
    pub fn extremes(problem: &Problem, state: &State) -> [Extreme; 3] {
        let negative = |points: Vec<[f64; 2]>| -> Vec<[f64; 2]> {
            points.iter().map(|[at, value]| [*at, -value]).collect()
        };
        let lowest = |points| {
            let e = extreme(&negative(points));
            Extreme { value: -e.value, at: e.at }
        };
        let v = v_along_x(problem, state, 0.5);
        [lowest(u_along_y(problem, state, 0.5)), extreme(&v), lowest(v)]
    }
}
