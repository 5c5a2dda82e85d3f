//! The outer faces of sides: film, radiation and sun there, in balance with what the wall brings.
//!
//! ```text
//!  cell      edge        outer face                     per area [W/m²], q leaves:
//!  T_P ─ d/k ─ · ─ wall ─ T_s ─┬─ h ──── outside air      q = (T_P − T_s)/(d/k + R)
//!              ↑               ├─ ε σ ── surroundings     q = h(T_s − T_a) + ε·σ(T_s⁴ − T_u⁴) − S
//!         radiation inside     └─ ← S    sun
//! ```
//! Every face has its own T_s; the film h of still air is one for the side, at its mean T_s. The
//! energy equation sees the tangent at the latest T_s: a conductance to an outside temperature
//! T_s − q/s with the slope s = dq/dT_s. It is renewed until it stands; heat flows that are read off
//! a state are solved for exactly.

use ventrise_mesh::Side;

use crate::conduction::{SideExchange, half_resistance, side_area, side_cell};
use crate::radiant::Radiant;
use crate::still_air::plate_length;
use crate::{
    Air, AirModel, Facing, OuterFilm, Outside, Problem, STEFAN_BOLTZMANN, SideCondition,
    still_air_film,
};

/// Steps of the balances at the most, and the relative change of the film or of T_s that ends them.
const STEPS: usize = 60;
const BOUND: f64 = 1e-14;
/// Steps between radiation inside and outer faces at the most, and the change of T_s that ends
/// them [K].
const INNER_STEPS: usize = 30;
const INNER_BOUND: f64 = 1e-9;
/// A first guess of how much warmer than the outside air a side is [K].
const FIRST_RISE: f64 = 10.0;
/// The film's slope is taken over this relative change of the difference to the air.
const SLOPE_STEP: f64 = 1e-3;

/// One face of an outer side.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct OuterFace {
    /// What the energy equation sees.
    pub exchange: SideExchange,
    /// From the edge of the section to outside [W/(m²·K)], what a radiating inner face sees.
    pub behind: f64,
    area: f64,
    /// T_s [K].
    surface: f64,
    /// Heat that leaves by the film and by radiation [W/m²].
    film: f64,
    radiated: f64,
}

/// What leaves a side by its outer face.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct OuterFlow {
    /// Area without slots [m²].
    pub area: f64,
    /// Heat that the outside air takes [W].
    pub film: f64,
    /// Heat radiated to the surroundings, net [W].
    pub radiation: f64,
    /// Heat of the sun absorbed [W].
    pub sun: f64,
    /// Mean rise of the outer face [K].
    pub mean_rise: f64,
    /// Its highest rise [K].
    pub max_rise: f64,
    /// Film coefficient used [W/(m²·K)].
    pub coefficient: f64,
}

/// The outer faces of all sides that have them; by [`Side::index`], faces along the side (`None` in
/// slots).
#[derive(Debug, Clone, PartialEq, Default)]
pub(crate) struct Outer {
    faces: [Vec<Option<OuterFace>>; 4],
    coefficient: [f64; 4],
}

/// The sides with outer faces.
fn outsides(problem: &Problem) -> impl Iterator<Item = (Side, Outside)> {
    let sides = problem.description().sides;
    Side::ALL.into_iter().filter_map(move |side| match sides[side.index()] {
        SideCondition::Outside(outside) => Some((side, outside)),
        _ => None,
    })
}

impl Outer {
    /// A first guess, before anything is known of the temperatures inside.
    pub fn guess(problem: &Problem) -> Outer {
        let mut means = [0.0; 4];
        outsides(problem).for_each(|(side, o)| means[side.index()] = o.air + FIRST_RISE);
        let air = match problem.description().air {
            AirModel::Given(air) => air,
            AirModel::Film { pressure } => Air::dry(problem.description().ambient, pressure),
        };
        Outer::around(problem, &air, &means)
    }

    /// As if every outer face had its side's mean temperature `means` [K].
    pub fn around(problem: &Problem, air: &Air, means: &[f64; 4]) -> Outer {
        let mut outer = Outer::default();
        for (side, outside) in outsides(problem) {
            let mean = means[side.index()];
            let (film, stiffening) = film(problem, side, &outside, mean);
            let count = problem.mesh().slots(side).len();
            outer.faces[side.index()] = (0..count)
                .map(|n| {
                    let face = Face::new(problem, air, side, n, &outside)?;
                    Some(face.at(problem, &outside, film, stiffening, mean))
                })
                .collect();
            outer.coefficient[side.index()] = film;
        }
        outer
    }

    /// The outer faces in balance with a state of the section's cells, `t` their rises [K].
    pub fn at(problem: &Problem, air: &Air, t: &[f64]) -> Outer {
        let mut outer = Outer::default();
        if outsides(problem).next().is_none() {
            return outer;
        }
        let taken_up = Side::ALL.map(|side| vec![0.0; problem.mesh().slots(side).len()]);
        outer.balance(problem, air, t, &taken_up);
        if problem.radiant().is_none() {
            return outer;
        }
        for _ in 0..INNER_STEPS {
            let Some(radiant) = Radiant::new(problem, air, &outer) else { break };
            let before = outer.clone();
            outer.balance(problem, air, t, &radiant.taken_up_at_sides(problem, t));
            let faces = |o: &Outer| o.faces.iter().flatten().flatten().map(|f| f.surface).collect();
            let (old, new): (Vec<f64>, Vec<f64>) = (faces(&before), faces(&outer));
            let change = old.iter().zip(&new).fold(0.0_f64, |c, (a, b)| c.max((a - b).abs()));
            if change.is_nan() || change <= INNER_BOUND {
                break;
            }
        }
        outer
    }

    /// Solves the balances; `taken_up` is radiation from inside that the edge takes up [W], by side
    /// and face.
    fn balance(&mut self, problem: &Problem, air: &Air, t: &[f64], taken_up: &[Vec<f64>; 4]) {
        let ambient = problem.description().ambient;
        for (side, outside) in outsides(problem) {
            let index = side.index();
            let faces: Vec<(Option<Face>, f64)> = (0..taken_up[index].len())
                .map(|n| match Face::new(problem, air, side, n, &outside) {
                    Some(face) => {
                        let (i, j) = side_cell(problem, side, n);
                        let inside = ambient + t[problem.mesh().cell(i, j)];
                        let warmed = face.half * taken_up[index][n] / face.area;
                        (Some(face), inside + warmed)
                    }
                    None => (None, 0.0),
                })
                .collect();
            let mut surfaces = vec![outside.air + FIRST_RISE; faces.len()];
            let mut mean = outside.air + FIRST_RISE;
            let (mut h, mut stiffening) = film(problem, side, &outside, mean);
            for _ in 0..STEPS {
                let (mut area, mut sum) = (0.0, 0.0);
                for ((face, inside), surface) in faces.iter().zip(&mut surfaces) {
                    if let Some(face) = face {
                        *surface = face.surface(&outside, h, *inside, *surface);
                        area += face.area;
                        sum += face.area * *surface;
                    }
                }
                if area == 0.0 {
                    break;
                }
                mean = sum / area;
                let before = h;
                (h, stiffening) = film(problem, side, &outside, mean);
                let change = (h - before).abs();
                if change.is_nan() || change <= BOUND * h {
                    break;
                }
            }
            self.coefficient[index] = h;
            self.faces[index] = faces
                .iter()
                .zip(&surfaces)
                .map(|((face, _), surface)| {
                    Some(face.as_ref()?.at(problem, &outside, h, stiffening, *surface))
                })
                .collect();
        }
    }

    /// Whether a side has outer faces.
    pub fn is_empty(&self) -> bool {
        self.faces.iter().all(Vec::is_empty)
    }

    /// Face `n` of a side; `None` in slots and where the side has no outer face.
    pub fn face(&self, side: Side, n: usize) -> Option<&OuterFace> {
        self.faces[side.index()].get(n)?.as_ref()
    }

    /// Mean temperatures of the outer faces [K].
    pub fn means(&self) -> [f64; 4] {
        Side::ALL.map(|side| {
            let faces = || self.faces[side.index()].iter().flatten();
            let area: f64 = faces().map(|f| f.area).sum();
            if area > 0.0 { faces().map(|f| f.area * f.surface).sum::<f64>() / area } else { 0.0 }
        })
    }

    /// Sum over the faces of how far the heat through them differs from that of `other`, over the
    /// sum of their sizes: film, radiation and sun [-].
    pub fn distance(&self, other: &Outer, problem: &Problem, t: &[f64]) -> f64 {
        let (mut change, mut size) = (0.0, 0.0);
        for (side, outside) in outsides(problem) {
            for (n, (a, b)) in
                self.faces[side.index()].iter().zip(&other.faces[side.index()]).enumerate()
            {
                if let (Some(a), Some(b)) = (a, b) {
                    let (i, j) = side_cell(problem, side, n);
                    let t = t[problem.mesh().cell(i, j)];
                    let heat = |f: &OuterFace| f.exchange.conductance * (t - f.exchange.rise);
                    change += (heat(a) - heat(b)).abs();
                    size += a.area * (a.film.abs() + a.radiated.abs() + outside.sun);
                }
            }
        }
        if size > 0.0 { change / size } else { 0.0 }
    }

    /// What leaves a side by its outer face; `None` where it has none.
    pub fn flow(&self, problem: &Problem, side: Side) -> Option<OuterFlow> {
        let (_, outside) = outsides(problem).find(|(s, _)| *s == side)?;
        let faces = || self.faces[side.index()].iter().flatten();
        let sum = |of: &dyn Fn(&OuterFace) -> f64| faces().map(|f| f.area * of(f)).sum::<f64>();
        let area = sum(&|_| 1.0);
        let ambient = problem.description().ambient;
        let mean = if area > 0.0 { sum(&|f| f.surface) / area } else { outside.air };
        let hottest = faces().map(|f| f.surface).max_by(f64::total_cmp).unwrap_or(outside.air);
        Some(OuterFlow {
            area,
            film: sum(&|f| f.film),
            radiation: sum(&|f| f.radiated),
            sun: area * outside.sun,
            mean_rise: mean - ambient,
            max_rise: hottest - ambient,
            coefficient: self.coefficient[side.index()],
        })
    }
}

/// Film coefficient at a mean surface temperature [K] and how much steeper the film's heat grows
/// than the coefficient says: d ln(h·ΔT)/d ln ΔT.
fn film(problem: &Problem, side: Side, outside: &Outside, mean: f64) -> (f64, f64) {
    let d = problem.description();
    let length = plate_length(problem.mesh(), &d.sides, side);
    let gravity = d.gravity[0].hypot(d.gravity[1]);
    let at = |difference: f64| {
        let air = match d.air {
            AirModel::Given(air) => air,
            AirModel::Film { pressure } => Air::dry(outside.air + 0.5 * difference, pressure),
        };
        still_air_film(Facing::of(side), length, difference, &air, gravity)
    };
    match outside.film {
        OuterFilm::Given(h) => (h, 1.0),
        OuterFilm::StillAir => {
            let difference = mean - outside.air;
            let h = at(difference);
            let step = at(difference * (1.0 + SLOPE_STEP)) / h;
            (h, (1.0 + step.ln() / SLOPE_STEP.ln_1p()).max(1.0))
        }
    }
}

/// A face before its balance is known.
struct Face {
    area: f64,
    /// From the cell centre to the edge [K·m²/W].
    half: f64,
    /// From there to the outer face, the half cell included [K·m²/W].
    resistance: f64,
}

impl Face {
    fn new(problem: &Problem, air: &Air, side: Side, n: usize, outside: &Outside) -> Option<Face> {
        if problem.mesh().slots(side)[n].is_some() {
            return None;
        }
        let half = half_resistance(problem, air, side, n);
        let area = side_area(problem, side, n);
        Some(Face { area, half, resistance: half + outside.wall })
    }

    /// T_s [K] for a film and a temperature `inside` [K], by Newton's method.
    fn surface(&self, outside: &Outside, film: f64, inside: f64, start: f64) -> f64 {
        let (g, radiant) = (1.0 / self.resistance, outside.emissivity * STEFAN_BOLTZMANN);
        let brought =
            g * inside + film * outside.air + radiant * outside.surroundings.powi(4) + outside.sun;
        let mut surface = start;
        for _ in 0..STEPS {
            let excess = (g + film) * surface + radiant * surface.powi(4) - brought;
            let slope = g + film + 4.0 * radiant * surface.powi(3);
            let next = (surface - excess / slope).max(1.0);
            let change = (next - surface).abs();
            surface = next;
            if change.is_nan() || change <= BOUND * surface {
                break;
            }
        }
        surface
    }

    /// The face with the outer surface at `surface` [K].
    fn at(
        &self,
        problem: &Problem,
        outside: &Outside,
        film: f64,
        stiffening: f64,
        surface: f64,
    ) -> OuterFace {
        let radiant = outside.emissivity * STEFAN_BOLTZMANN;
        let by_film = film * (surface - outside.air);
        let radiated = radiant * (surface.powi(4) - outside.surroundings.powi(4));
        let slope = film * stiffening + 4.0 * radiant * surface.powi(3);
        let beyond = surface - (by_film + radiated - outside.sun) / slope;
        OuterFace {
            exchange: SideExchange {
                conductance: self.area / (self.resistance + 1.0 / slope),
                rise: beyond - problem.description().ambient,
                heat: 0.0,
            },
            behind: 1.0 / (outside.wall + 1.0 / slope),
            area: self.area,
            surface,
            film: by_film,
            radiated,
        }
    }
}
