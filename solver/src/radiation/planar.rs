//! View between strips of a planar section, which extend without end normal to it.
//!
//! A_i·F_ij = depth·M/2, M the measure of lines of sight with weight 1: from a point, a strip
//! between the directions φ_v and φ_w is seen by ½ (sin φ_w − sin φ_v). Integrated along the other
//! strip this is Hottel's rule of crossed strings [hottel-1954], with every change of what is
//! hidden accounted for, so the result is exact.

use super::sight::{Obstacle, Segment, Sight};

/// View area A_i·F_ij between two strips of length `depth` [m²].
pub(super) fn view_area(
    sight: &mut Sight,
    depth: f64,
    from: &Segment,
    to: &Segment,
    obstacles: &[Obstacle],
) -> f64 {
    0.5 * depth * sight.lines(from, to, obstacles, distance)
}

/// P of weight 1: ∫ sin φ = √(y² + h²).
fn distance(y: f64, h: f64) -> f64 {
    (y * y + h * h).sqrt()
}
