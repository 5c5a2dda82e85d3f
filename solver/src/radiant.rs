//! Radiation in the energy equation: what every radiating face takes from the cells beside it.
//!
//! ```text
//!   solid or outside        face          air
//!        T_s ──── g_s ────── T_f ── g_a ──── T_a        g [W/K] to the cell centres, or outside
//!                             └─► q: net heat it radiates
//! ```
//! The face's own balance g_s(T_s − T_f) + g_a(T_a − T_f) = q gives T_f; of q the share
//! g_s/(g_s + g_a) is drawn from the solid (or outside), the rest from the air. Temperatures of a
//! patch are the mean of its faces', which radiate alike:
//! T_p = C_p − R_p·q_p, C_p the mean without radiation. These few nonlinear equations are solved
//! whenever residuals are evaluated, so that radiation is exact on every mesh at any time; only the
//! linear solvers see a film in its place.

use std::sync::Arc;

use ventrise_mesh::{Coarsening, Mesh, Side};

use crate::conduction::cell_conductivity;
use crate::outer::Outer;
use crate::radiation::emissive_power;
use crate::{Air, Backing, Owner, Problem, Radiation, STEFAN_BOLTZMANN, SideCondition};

/// Iterations for the patches' temperatures at the most, and the change that ends them [K].
const PATCH_STEPS: usize = 60;
const PATCH_BOUND: f64 = 1e-8;

/// A radiating face of one mesh: faces of a finer mesh with the same cells beside them are one.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct RadiantFace {
    air: usize,
    backing: Backing,
    patch: usize,
    area: f64,
    /// Whether the normal lies along x.
    upright: bool,
}

/// Radiation with its faces on one mesh.
#[derive(Debug, Clone)]
pub(crate) struct RadiantMap {
    radiation: Arc<Radiation>,
    faces: Vec<RadiantFace>,
}

impl RadiantMap {
    pub fn new(radiation: Radiation) -> RadiantMap {
        let mut faces = Vec::with_capacity(radiation.faces().len());
        for (patch, p) in radiation.patches().iter().enumerate() {
            if p.is_opening {
                continue;
            }
            faces.extend(radiation.faces()[p.faces.clone()].iter().map(|f| RadiantFace {
                air: f.air_cell,
                backing: f.backing,
                patch,
                area: f.area,
                upright: f.normal[0] != 0.0,
            }));
        }
        RadiantMap { radiation: Arc::new(radiation), faces }
    }

    pub fn radiation(&self) -> &Radiation {
        &self.radiation
    }

    /// The same on a coarser mesh.
    pub fn coarsened(&self, fine: &Mesh, c: &Coarsening) -> RadiantMap {
        let parent = |cell: usize| {
            let (i, j) = (cell % fine.nx(), cell / fine.nx());
            c.x_parent[i] + c.y_parent[j] * c.mesh.nx()
        };
        let mut faces: Vec<RadiantFace> = Vec::new();
        for f in &self.faces {
            let backing = match f.backing {
                Backing::Cell(cell) => Backing::Cell(parent(cell)),
                Backing::Edge { side, n } => {
                    let parents = match side {
                        Side::Left | Side::Right => &c.y_parent,
                        Side::Bottom | Side::Top => &c.x_parent,
                    };
                    Backing::Edge { side, n: parents[n] }
                }
            };
            let coarse = RadiantFace { air: parent(f.air), backing, ..*f };
            match faces.last_mut() {
                Some(last)
                    if last.air == coarse.air
                        && last.backing == coarse.backing
                        && last.patch == coarse.patch =>
                {
                    last.area += coarse.area;
                }
                _ => faces.push(coarse),
            }
        }
        RadiantMap { radiation: self.radiation.clone(), faces }
    }
}

/// A face with its conductances.
#[derive(Debug, Clone, Copy)]
struct Coupling {
    air: usize,
    /// The solid cell behind, where there is one.
    solid: Option<usize>,
    side: Option<Side>,
    patch: usize,
    /// Its part of the patch's area.
    part: f64,
    /// Share of the radiated heat that is drawn from the solid or from outside; the air gives the
    /// rest.
    share: f64,
    /// Temperature rise outside [K], where there is no solid cell.
    outside: f64,
    /// g_s + g_a [W/K]; infinite at a surface of fixed temperature.
    conductance: f64,
}

/// Radiation on one mesh with given air.
#[derive(Debug)]
pub(crate) struct Radiant {
    radiation: Arc<Radiation>,
    couplings: Vec<Coupling>,
    /// R_p [K/W].
    resistance: Vec<f64>,
    /// Σ_q G_pq over the others [m²].
    reach: Vec<f64>,
    ambient: f64,
}

/// Net heat radiated by every patch [W] and its absolute temperature [K].
pub(crate) struct Patches {
    heat: Vec<f64>,
    temperature: Vec<f64>,
}

/// Heat that radiation carries [W].
#[derive(Debug, Clone, PartialEq, Default)]
pub struct RadiantHeat {
    /// Net heat radiated by every block.
    pub blocks: Vec<f64>,
    /// Heat that leaves through slots and open sides.
    pub openings: f64,
    /// Heat that leaves through walls of the section's sides, taken up there from other surfaces;
    /// by [`Side::index`].
    pub sides: [f64; 4],
}

impl Radiant {
    pub fn new(problem: &Problem, air: &Air, outer: &Outer) -> Option<Radiant> {
        let map = problem.radiant()?;
        let d = problem.description();
        let patches = map.radiation.patches();
        let count = patches.len();
        let mesh = problem.mesh();
        let half = |cell: usize, upright: bool| {
            let (i, j) = (cell % mesh.nx(), cell / mesh.nx());
            0.5 * if upright { mesh.dx(i) } else { mesh.dy(j) }
        };
        let mut resistance = vec![0.0; count];
        let couplings: Vec<Coupling> = map
            .faces
            .iter()
            .map(|f| {
                let to_air = air.conductivity * f.area / half(f.air, f.upright);
                let (behind, solid, side, outside) = match f.backing {
                    Backing::Cell(cell) => {
                        let k = cell_conductivity(problem, air, cell);
                        let k = if f.upright { k[0] } else { k[1] };
                        (k * f.area / half(cell, f.upright), Some(cell), None, 0.0)
                    }
                    Backing::Edge { side, n } => {
                        let (g, t) = match d.sides[side.index()] {
                            SideCondition::Temperature(t) => (f64::INFINITY, t),
                            SideCondition::Film { coefficient, temperature } => {
                                (coefficient * f.area, temperature)
                            }
                            SideCondition::Outside(_) => {
                                outer.face(side, n).map_or((0.0, d.ambient), |o| {
                                    (o.behind * f.area, d.ambient + o.exchange.rise)
                                })
                            }
                            _ => (0.0, d.ambient),
                        };
                        (g, None, Some(side), t - d.ambient)
                    }
                };
                let share = if behind.is_finite() { behind / (behind + to_air) } else { 1.0 };
                let part = f.area / patches[f.patch].area;
                resistance[f.patch] += part * part / (behind + to_air);
                Coupling {
                    air: f.air,
                    solid,
                    side,
                    patch: f.patch,
                    part,
                    share,
                    outside,
                    conductance: behind + to_air,
                }
            })
            .collect();
        let reach = (0..count)
            .map(|p| {
                let row = map.radiation.exchange(p);
                row.iter().sum::<f64>() - row[p]
            })
            .collect();
        let radiation = map.radiation.clone();
        Some(Radiant { radiation, couplings, resistance, reach, ambient: d.ambient })
    }

    /// The patches at the cells' rises `t` [K].
    pub fn patches(&self, t: &[f64]) -> Patches {
        let mut free = vec![0.0; self.resistance.len()];
        for c in &self.couplings {
            let behind = c.solid.map_or(c.outside, |n| t[n]);
            free[c.patch] += c.part * (c.share * behind + (1.0 - c.share) * t[c.air]);
        }
        free.iter_mut().for_each(|t| *t += self.ambient);
        let mut now = free.clone();
        let mut power: Vec<f64> = now.iter().map(|t| emissive_power(*t)).collect();
        for _ in 0..PATCH_STEPS {
            let mut change = 0.0_f64;
            for p in 0..now.len() {
                // One step of Newton's method for each patch, the others as they are by now.
                let film = 4.0 * STEFAN_BOLTZMANN * now[p].powi(3) * self.reach[p];
                let heat = self.radiation.net_heat_of(p, &power);
                let step = (free[p] - now[p] - self.resistance[p] * heat)
                    / (1.0 + self.resistance[p] * film);
                change = change.max(step.abs());
                now[p] += step;
                power[p] = emissive_power(now[p]);
            }
            if change.is_nan() || change <= PATCH_BOUND {
                break;
            }
        }
        let heat = (0..now.len()).map(|p| self.radiation.net_heat_of(p, &power)).collect();
        Patches { heat, temperature: now }
    }

    /// Takes the radiated heat from the residuals `out` [W] of the cells.
    pub fn add(&self, patches: &Patches, out: &mut [f64]) {
        for c in &self.couplings {
            let heat = c.part * patches.heat[c.patch];
            if let Some(solid) = c.solid {
                out[solid] -= c.share * heat;
            }
            out[c.air] -= (1.0 - c.share) * heat;
        }
    }

    /// Heat that the section's sides take up at their edge [W] at the cells' rises `t`; by
    /// [`Side::index`] and face.
    pub fn taken_up_at_sides(&self, problem: &Problem, t: &[f64]) -> [Vec<f64>; 4] {
        let mut taken = Side::ALL.map(|side| vec![0.0; problem.mesh().slots(side).len()]);
        let heat = self.patches(t).heat;
        let faces = problem.radiant().map_or(&[][..], |map| &map.faces);
        for (face, c) in faces.iter().zip(&self.couplings) {
            if let Backing::Edge { side, n } = face.backing {
                taken[side.index()][n] -= c.part * heat[c.patch];
            }
        }
        taken
    }

    /// Calls `each(air cell, solid cell, share of the solid, film [W/K])`: a change of the face's
    /// unradiated temperature changes its heat by the film times that change, other faces kept.
    pub fn films(&self, patches: &Patches, mut each: impl FnMut(usize, Option<usize>, f64, f64)) {
        for c in &self.couplings {
            let film = 4.0
                * STEFAN_BOLTZMANN
                * patches.temperature[c.patch].powi(3)
                * self.reach[c.patch]
                * c.part;
            each(c.air, c.solid, c.share, film / (1.0 + film / c.conductance));
        }
    }
}

/// Heat carried by radiation in a state; `None` where it is not modelled.
pub fn radiant_heat(problem: &Problem, air: &Air, t: &[f64]) -> Option<RadiantHeat> {
    radiant_heat_with(problem, air, &Outer::at(problem, air, t), t)
}

/// The same with the outer faces known.
pub(crate) fn radiant_heat_with(
    problem: &Problem,
    air: &Air,
    outer: &Outer,
    t: &[f64],
) -> Option<RadiantHeat> {
    let radiant = Radiant::new(problem, air, outer)?;
    let heat = radiant.patches(t).heat;
    let blocks = problem.description().blocks.len();
    let mut found = RadiantHeat { blocks: vec![0.0; blocks], ..RadiantHeat::default() };
    for (patch, heat) in radiant.radiation.patches().iter().zip(&heat) {
        match patch.owner {
            Owner::Block(block) => found.blocks[block] += heat,
            _ if patch.is_opening => found.openings -= heat,
            _ => {}
        }
    }
    for c in &radiant.couplings {
        if let Some(side) = c.side {
            found.sides[side.index()] -= c.part * heat[c.patch] * c.share;
        }
    }
    Some(found)
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use ventrise_mesh::{Geometry, Rectangle, SlotSpan};

    use super::*;
    use crate::by_hand::{air, bare, layout};
    use crate::level::Level;
    use crate::{
        Block, Control, Convection, Settings, SideSurface, Slot, Solid, State, StopReason,
        Surfaces, contacts, residual, solve,
    };

    /// Two plates of 50 mm, k = 0.2 W/(m·K), at 350 K and 300 K outside, 20 mm of still air between
    /// them, wide between mirrors: the flux q through the first plate, the gap and the second is
    /// q = (T₁ − a)·k/L = k_air·(a − b)/d + σ·(a⁴ − b⁴)/(1/ε₁ + 1/ε₂ − 1) = (b − T₂)·k/L (closed
    /// form but for one root).
    #[test]
    fn radiation_between_plates_passes_through_them() {
        let (plate, gap, wide) = (0.05, 0.02, 0.4);
        let (k, emissivities) = (0.2, [0.9, 0.7]);
        let across = |q: f64| {
            let (a, b) = (350.0 - q * plate / k, 300.0 + q * plate / k);
            let grey = 1.0 / emissivities[0] + 1.0 / emissivities[1] - 1.0;
            let radiated = STEFAN_BOLTZMANN * (a.powi(4) - b.powi(4)) / grey;
            (air().conductivity * (a - b) / gap + radiated, radiated)
        };
        let (mut low, mut high) = (0.0, 100.0);
        for _ in 0..60 {
            let q = 0.5 * (low + high);
            if across(q).0 > q { low = q } else { high = q }
        }
        let exact = low;
        // The plates lie side by side, then one above the other.
        for upright in [true, false] {
            let along = [0.0, plate, plate + gap, 2.0 * plate + gap];
            let turn = |x: [f64; 2]| {
                if upright {
                    Rectangle { x, y: [0.0, wide] }
                } else {
                    Rectangle { x: [0.0, wide], y: x }
                }
            };
            let [width, height] = if upright { [along[3], wide] } else { [wide, along[3]] };
            let mut shapes = layout(Geometry::Planar { depth: 1.0 }, width, height);
            shapes.blocks = vec![turn([along[0], along[1]]), turn([along[2], along[3]])];
            let lines: Vec<f64> = (0..=24).map(|n| 0.005 * f64::from(n)).collect();
            let other: Vec<f64> = (0..=20).map(|n| 0.02 * f64::from(n)).collect();
            let [x, y] = if upright { [lines, other] } else { [other, lines] };
            let mut d = bare(Mesh::from_lines(&shapes, x, y).unwrap());
            d.gravity = [0.0; 2];
            d.solids = vec![Solid { conductivity: [k; 2], density: 1000.0, specific_heat: 1000.0 }];
            d.blocks = vec![Block { solid: 0, heat: 0.0 }; 2];
            d.sides = [SideCondition::Symmetry; 4];
            let [first, last] = if upright { [0, 1] } else { [2, 3] };
            d.sides[first] = SideCondition::Temperature(350.0);
            d.sides[last] = SideCondition::Temperature(300.0);
            let mut sides = [SideSurface::Mirror; 4];
            for side in [first, last] {
                sides[side] = SideSurface::Wall(0.5); // behind the plates
            }
            d.radiation = Some(Surfaces { blocks: emissivities.to_vec(), sides });
            let problem = Problem::new(d).unwrap();
            let solution =
                solve(&problem, &Settings::default(), None, &mut |_| Control::Continue).unwrap();
            assert_eq!(solution.stop, StopReason::Converged);
            let (air, state) = (&solution.air, &solution.state);
            let flux = crate::side_flows(&problem, air, state)[last].conduction / wide;
            let radiated = radiant_heat(&problem, air, &state.t).unwrap().blocks[0] / wide;
            // Mirrors are followed until 2e-4 of the view is left.
            assert!((flux / exact - 1.0).abs() < 1e-3, "{flux} against {exact}");
            let expected = across(exact).1;
            assert!((radiated / expected - 1.0).abs() < 1e-3, "{radiated} against {expected}");
            assert!(contacts(&problem, air, state).is_empty());
        }
    }

    /// Whatever the temperatures: what all cells together miss is what the section's edge counts as
    /// not balanced, to round-off; radiation loses nothing between faces, patches and openings.
    #[test]
    fn radiation_keeps_the_heat_of_any_state() {
        let geometries = [Geometry::Planar { depth: 0.3 }, Geometry::Axisymmetric];
        for geometry in geometries {
            let mut shapes = layout(geometry, 0.09, 0.24);
            shapes.blocks = vec![
                Rectangle { x: [0.016, 0.022], y: [0.06, 0.16] },
                Rectangle { x: [0.04, 0.042], y: [0.06, 0.15] },
                Rectangle { x: [0.06, 0.062], y: [0.06, 0.15] },
            ];
            let span = [0.01, 0.08];
            shapes.slots =
                vec![SlotSpan { side: Side::Bottom, span }, SlotSpan { side: Side::Top, span }];
            let line = |n: i32| 0.001 * f64::from(n);
            let [x, y] = [(0..=90).map(line).collect(), (0..=240).map(line).collect()];
            let mut d = bare(Mesh::from_lines(&shapes, x, y).unwrap());
            d.solids = vec![Solid { conductivity: [5.0, 90.0], density: 1e3, specific_heat: 1e3 }];
            d.blocks = [3.0, 2.0, -1.0].map(|heat| Block { solid: 0, heat }).to_vec();
            d.parts = vec![vec![0], vec![1], vec![2]];
            d.slots = vec![Slot::with_loss(1.0); 2];
            d.sides[1] = SideCondition::Film { coefficient: 8.0, temperature: 290.0 };
            let sides = [0.3, 0.8, 0.9, 0.5].map(SideSurface::Wall);
            d.radiation = Some(Surfaces { blocks: vec![0.9, 0.2, 0.6], sides });
            let problem = Problem::new(d).unwrap();
            let mut state = State::rest(problem.mesh());
            for (n, t) in state.t.iter_mut().enumerate() {
                *t = 40.0 * (0.37 * n as f64).sin().abs();
            }
            let level = Level::new(&problem, &air(), Convection::Central);
            let mut out = State::rest(problem.mesh());
            residual::evaluate(&level, &state, &level.source, &mut out);
            let missed: f64 = out.t.iter().sum();
            let b = crate::balance(&problem, &air(), &state);
            let scale = b.heat_in.max(b.heat_out);
            assert!((missed - (b.heat_in - b.heat_out)).abs() < 1e-10 * scale, "{missed} {b:?}");
        }
    }
}
