//! Heat across the faces where two blocks touch.

use std::collections::BTreeMap;

use ventrise_mesh::AIR;

use crate::conduction::{x_conductance, y_conductance};
use crate::{Air, Problem, State};

/// Where two blocks touch.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Contact {
    /// The two blocks, the lower index first.
    pub blocks: [usize; 2],
    /// Area [m²].
    pub area: f64,
    /// Heat from the first to the second [W].
    pub heat: f64,
    /// Whether a joint is given for it.
    pub has_joint: bool,
}

/// All pairs of touching blocks, by their indices.
pub fn contacts(problem: &Problem, air: &Air, state: &State) -> Vec<Contact> {
    let mesh = problem.mesh();
    let (nx, ny) = (mesh.nx(), mesh.ny());
    let regions = mesh.regions();
    let mut found: BTreeMap<[usize; 2], [f64; 2]> = BTreeMap::new();
    let mut face = |a: usize, b: usize, area: f64, conductance: &dyn Fn() -> f64| {
        if regions[a] == regions[b] || regions[a] == AIR || regions[b] == AIR {
            return;
        }
        let heat = conductance() * (state.t[a] - state.t[b]);
        let pair = [regions[a] as usize, regions[b] as usize];
        let (pair, heat) =
            if pair[0] < pair[1] { (pair, heat) } else { ([pair[1], pair[0]], -heat) };
        let sums = found.entry(pair).or_default();
        *sums = [sums[0] + area, sums[1] + heat];
    };
    for j in 0..ny {
        for i in 0..nx {
            let n = i + j * nx;
            if i + 1 < nx {
                let area = mesh.x_area(i + 1) * mesh.dy(j);
                face(n, n + 1, area, &|| x_conductance(problem, air, i + 1, j));
            }
            if j + 1 < ny {
                face(n, n + nx, mesh.y_area(i), &|| y_conductance(problem, air, i, j + 1));
            }
        }
    }
    let joints = &problem.description().joints;
    let joined = |p: [usize; 2]| joints.iter().any(|j| j.blocks == p || j.blocks == [p[1], p[0]]);
    found
        .into_iter()
        .map(|(blocks, [area, heat])| Contact { blocks, area, heat, has_joint: joined(blocks) })
        .collect()
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use ventrise_mesh::{Geometry, Mesh, Rectangle};

    use super::*;
    use crate::by_hand::{bare, layout};
    use crate::{Block, Control, Joint, Settings, SideCondition, Solid, solve};

    /// 0.2 m of k = 2 and 0.2 m of k = 4 W/(m·K), 0.1 m² between sides at 320 K and 300 K, a joint
    /// of 0.05 K·m²/W between them: R = (0.1 + 0.05 + 0.05)/0.1 = 2 K/W, so 10 W, and the joint
    /// takes 10 · 0.05/0.1 = 5 K.
    #[test]
    fn a_joint_takes_its_share_of_the_drop() {
        let mut shapes = layout(Geometry::Planar { depth: 1.0 }, 0.4, 0.1);
        shapes.blocks = vec![
            Rectangle { x: [0.0, 0.2], y: [0.0, 0.1] },
            Rectangle { x: [0.2, 0.4], y: [0.0, 0.1] },
        ];
        let x = (0..=8).map(|i| 0.05 * f64::from(i)).collect();
        let mesh = Mesh::from_lines(&shapes, x, vec![0.0, 0.05, 0.1]).unwrap();
        let mut d = bare(mesh);
        let solid = |k: f64| Solid { conductivity: [k; 2], density: 1000.0, specific_heat: 1000.0 };
        d.solids = vec![solid(2.0), solid(4.0)];
        d.blocks = vec![Block { solid: 0, heat: 0.0 }, Block { solid: 1, heat: 0.0 }];
        d.sides[0] = SideCondition::Temperature(320.0);
        d.sides[1] = SideCondition::Temperature(300.0);
        d.joints = vec![Joint { blocks: [1, 0], resistance: 0.05 }];
        let problem = Problem::new(d).unwrap();
        let solution =
            solve(&problem, &Settings::default(), None, &mut |_| Control::Continue).unwrap();
        let found = contacts(&problem, &solution.air, &solution.state);
        assert_eq!(found.len(), 1);
        let contact = found[0];
        assert!((contact.heat - 10.0).abs() < 1e-6, "{contact:?}");
        assert!((contact.area - 0.1).abs() < 1e-12 && contact.has_joint);
        // Half a cell of 0.025 m on either side: 10 W over 0.1 m² makes 1.25 K and 0.625 K.
        let drop = solution.state.t[3] - solution.state.t[4];
        assert!((drop - 1.25 - 0.625 - 5.0).abs() < 1e-5, "{drop}");
    }
}
