//! The faces from which heated blocks warm the air, and how wide the air beside them is.

use ventrise_mesh::{Geometry, Side};
use ventrise_solver::SideCondition;

use super::model::Case;

/// Heights at which the gap beside a face is looked up, fewer when there are many blocks.
const HEIGHTS: usize = 8;
/// Blocks times heights beyond which there are fewer heights.
const MOST_LOOKS: usize = 8000;

/// A piece of a heated block's surface.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Surface {
    /// Index into [`Case::blocks`].
    pub block: usize,
    /// Its area [m²].
    pub area: f64,
    /// Height of the block [m].
    pub height: f64,
    /// The air in front of it, when a wall ends it.
    pub gap: Option<Gap>,
}

/// Air between a heated face and what is opposite.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Gap {
    /// Width [m], > 0.
    pub width: f64,
    /// Whether the opposite face is heated too.
    pub both_heated: bool,
}

/// The surfaces of all blocks with heat and of all blocks of their parts. Faces that touch
/// something count as free: heat spreads into what they touch and leaves from there.
pub(super) fn heated_surfaces(case: &Case) -> Vec<Surface> {
    let depth = |x: f64| match case.section().geometry {
        Geometry::Planar { depth } => depth,
        Geometry::Axisymmetric => std::f64::consts::TAU * x,
    };
    let blocks = case.blocks();
    let heated: Vec<bool> = blocks
        .iter()
        .map(|b| b.heat != 0.0 || b.part.is_some_and(|p| case.parts()[p].heat != 0.0))
        .collect();
    let count = heated.iter().filter(|h| **h).count().max(1);
    let heights = (MOST_LOOKS / count).clamp(1, HEIGHTS);
    let mut surfaces = Vec::new();
    for (index, block) in blocks.iter().enumerate().filter(|(n, _)| heated[*n]) {
        let ([x0, x1], [y0, y1]) = (block.rectangle.x, block.rectangle.y);
        let height = y1 - y0;
        for k in 0..heights {
            let y = y0 + height * (k as f64 + 0.5) / heights as f64;
            let mut face = |x: f64, leftwards: bool| {
                let area = depth(x) * height / heights as f64;
                let gap = gap(case, &heated, x, y, leftwards);
                surfaces.push(Surface { block: index, area, height, gap });
            };
            face(x0, true);
            face(x1, false);
        }
        let ends = 2.0 * depth(0.5 * (x0 + x1)) * (x1 - x0);
        surfaces.push(Surface { block: index, area: ends, height, gap: None });
    }
    surfaces
}

/// The air from (x, y) to the next wall on one side; `None` when there is no air, or it is open.
fn gap(case: &Case, heated: &[bool], x: f64, y: f64, leftwards: bool) -> Option<Gap> {
    let width = case.section().width;
    let (side, to_side) = if leftwards { (Side::Left, x) } else { (Side::Right, width - x) };
    let condition = &case.sides()[side.index()];
    let breathes = case.slots().iter().any(|s| s.side == side && s.span[0] <= y && y <= s.span[1]);
    let mut nearest = match condition {
        _ if breathes => None,
        SideCondition::Open => None,
        // The mirror image is as far away and as hot.
        SideCondition::Symmetry => Some(Gap { width: 2.0 * to_side, both_heated: true }),
        _ => Some(Gap { width: to_side, both_heated: false }),
    };
    for (block, hot) in case.blocks().iter().zip(heated) {
        let [low, high] = block.rectangle.y;
        if !(low < y && y < high) {
            continue;
        }
        let distance = if leftwards { x - block.rectangle.x[1] } else { block.rectangle.x[0] - x };
        if distance >= 0.0 && nearest.is_none_or(|n| distance < n.width) {
            nearest = Some(Gap { width: distance, both_heated: *hot });
        }
    }
    nearest.filter(|gap| gap.width > 0.0)
}
