//! The cases by name: what each builds and which numbers are read.

use ventrise_mesh::Side;
use ventrise_solver::samples::{
    Annulus, ConductingBlock, ConductingWall, Grading, HeatedFromBelow, LidCavity, SampleError,
    SquareCavity, extreme, hot_wall, overturning_start, side_heat, stream_at, stream_function,
    u_along_y, v_along_x,
};
use ventrise_solver::{Air, Problem, State};

/// A case of the benchmark.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Case {
    name: &'static str,
    kind: Kind,
}

#[derive(Debug, Clone, Copy, PartialEq)]
enum Kind {
    Square { rayleigh: f64 },
    Below { rayleigh: f64 },
    Wall { grashof: f64, ratio: f64 },
    Block { rayleigh: f64, ratio: f64 },
    Annulus { rayleigh: f64, slim: bool, guess: f64, slope: f64 },
    Lid { reynolds: f64 },
}

/// What is read off a solution.
pub(super) struct Readings {
    pub quantities: Vec<(&'static str, f64)>,
    pub heat_error: f64,
}

const fn square(name: &'static str, rayleigh: f64) -> Case {
    Case { name, kind: Kind::Square { rayleigh } }
}

const fn below(name: &'static str, rayleigh: f64) -> Case {
    Case { name, kind: Kind::Below { rayleigh } }
}

const fn wall(name: &'static str, grashof: f64, ratio: f64) -> Case {
    Case { name, kind: Kind::Wall { grashof, ratio } }
}

const fn block(name: &'static str, rayleigh: f64, ratio: f64) -> Case {
    Case { name, kind: Kind::Block { rayleigh, ratio } }
}

/// `guess` sets the heat of the core, `slope` = d ln Nu / d ln Ra carries the small remaining
/// difference in Rayleigh number over (both from the table, read to two digits).
const fn annulus(name: &'static str, rayleigh: f64, slim: bool, guess: f64, slope: f64) -> Case {
    Case { name, kind: Kind::Annulus { rayleigh, slim, guess, slope } }
}

const fn lid(name: &'static str, reynolds: f64) -> Case {
    Case { name, kind: Kind::Lid { reynolds } }
}

const CASES: [Case; 39] = [
    square("square-cavity-1e3", 1e3),
    square("square-cavity-1e4", 1e4),
    square("square-cavity-1e5", 1e5),
    square("square-cavity-1e6", 1e6),
    square("square-cavity-1e7", 1e7),
    below("heated-from-below-1e4", 1e4),
    below("heated-from-below-3e4", 3e4),
    below("heated-from-below-1e5", 1e5),
    wall("conducting-wall-gr1e3-k1", 1e3, 1.0),
    wall("conducting-wall-gr1e3-k5", 1e3, 5.0),
    wall("conducting-wall-gr1e3-k10", 1e3, 10.0),
    wall("conducting-wall-gr1e4-k1", 1e4, 1.0),
    wall("conducting-wall-gr1e4-k5", 1e4, 5.0),
    wall("conducting-wall-gr1e4-k10", 1e4, 10.0),
    wall("conducting-wall-gr1e5-k1", 1e5, 1.0),
    wall("conducting-wall-gr1e5-k5", 1e5, 5.0),
    wall("conducting-wall-gr1e5-k10", 1e5, 10.0),
    wall("conducting-wall-gr1e7-k1", 1e7, 1.0),
    wall("conducting-wall-gr1e7-k5", 1e7, 5.0),
    wall("conducting-wall-gr1e7-k10", 1e7, 10.0),
    block("conducting-block-1e3-k0.2", 1e3, 0.2),
    block("conducting-block-1e3-k1", 1e3, 1.0),
    block("conducting-block-1e3-k5", 1e3, 5.0),
    block("conducting-block-1e4-k0.2", 1e4, 0.2),
    block("conducting-block-1e4-k1", 1e4, 1.0),
    block("conducting-block-1e4-k5", 1e4, 5.0),
    block("conducting-block-1e5-k0.2", 1e5, 0.2),
    block("conducting-block-1e5-k1", 1e5, 1.0),
    block("conducting-block-1e5-k5", 1e5, 5.0),
    annulus("annulus-1e3", 1e3, false, 1.6, 0.13),
    annulus("annulus-1e4", 1e4, false, 3.1, 0.31),
    annulus("annulus-1e5", 1e5, false, 6.1, 0.29),
    annulus("annulus-1e6", 1e6, false, 11.7, 0.28),
    annulus("annulus-slim-1e3", 1e3, true, 1.17, 0.15),
    annulus("annulus-slim-1e4", 1e4, true, 2.35, 0.32),
    annulus("annulus-slim-1e5", 1e5, true, 4.7, 0.30),
    lid("lid-cavity-100", 100.0),
    lid("lid-cavity-400", 400.0),
    lid("lid-cavity-1000", 1000.0),
];

/// Names of all cases.
pub fn names() -> Vec<&'static str> {
    CASES.iter().map(|case| case.name).collect()
}

impl Case {
    /// The case of a name.
    pub fn named(name: &str) -> Option<Case> {
        CASES.into_iter().find(|case| case.name == name)
    }

    /// Its name.
    pub fn name(&self) -> &'static str {
        self.name
    }

    /// A name without its numbers: `square-cavity` of `square-cavity-1e6`.
    pub(super) fn group_of(name: &str) -> &str {
        let numbered = |part: &str| {
            let digits = part.trim_start_matches("gr").trim_start_matches('k');
            digits.starts_with(|c: char| c.is_ascii_digit())
        };
        let start = name.match_indices('-').map(|(at, _)| at).find(|at| numbered(&name[at + 1..]));
        &name[..start.unwrap_or(name.len())]
    }

    /// Rayleigh, Grashof or Reynolds number [-].
    pub(super) fn number(&self) -> f64 {
        match self.kind {
            Kind::Square { rayleigh }
            | Kind::Below { rayleigh }
            | Kind::Block { rayleigh, .. }
            | Kind::Annulus { rayleigh, .. } => rayleigh,
            Kind::Wall { grashof, .. } => grashof,
            Kind::Lid { reynolds } => reynolds,
        }
    }

    pub(super) fn number_name(&self) -> &'static str {
        match self.kind {
            Kind::Wall { .. } => "grashof",
            Kind::Lid { .. } => "reynolds",
            _ => "rayleigh",
        }
    }

    /// The problem on a mesh of about `cells` along each side.
    pub(super) fn problem(&self, cells: usize, uniform: bool) -> Result<Problem, SampleError> {
        // Stronger grading for thinner boundary layers.
        let grading = |thin: bool| match (uniform, thin) {
            (true, _) => Grading::Uniform,
            (false, true) => Grading::Both(2.0),
            (false, false) => Grading::Both(1.5),
        };
        match self.kind {
            Kind::Square { rayleigh } => SquareCavity {
                rayleigh,
                cells,
                grading: grading(rayleigh >= 1e6),
                ..SquareCavity::default()
            }
            .problem(),
            Kind::Below { rayleigh } => {
                HeatedFromBelow { rayleigh, cells, grading: grading(false) }.problem()
            }
            Kind::Wall { grashof, ratio } => {
                ConductingWall { grashof, ratio, cells, grading: grading(grashof >= 1e6) }.problem()
            }
            Kind::Block { rayleigh, ratio } => ConductingBlock {
                rayleigh,
                ratio,
                gap_cells: 3 * cells / 8,
                block_cells: cells / 4,
                grading: if uniform { Grading::Uniform } else { Grading::Both(1.0) },
                ..ConductingBlock::default()
            }
            .problem(),
            Kind::Annulus { .. } => self.annulus(cells, grading(self.number() >= 1e6)).problem(),
            Kind::Lid { reynolds } => {
                LidCavity { reynolds, cells, grading: grading(false) }.problem()
            }
        }
    }

    fn annulus(&self, cells: usize, grading: Grading) -> Annulus {
        let (slim, guess) = match self.kind {
            Kind::Annulus { slim, guess, .. } => (slim, guess),
            _ => (false, 1.0),
        };
        Annulus {
            rayleigh: self.number(),
            prandtl: if slim { 0.71 } else { 0.7 },
            radius_ratio: if slim { 1.1 } else { 2.0 },
            aspect: 1.0,
            nusselt_guess: guess,
            cells,
            grading,
        }
    }

    /// Where to start from: rest, or a roll where rest would be a solution.
    pub(super) fn start(&self, problem: &Problem) -> Option<State> {
        match self.kind {
            Kind::Below { .. } => Some(overturning_start(problem, 2.0)),
            _ => None,
        }
    }

    pub(super) fn read(&self, problem: &Problem, air: &Air, state: &State) -> Readings {
        let between = |hot: Side, cold: Side| {
            let [hot, cold] = [hot, cold].map(|side| side_heat(problem, air, state, side));
            Readings { quantities: vec![("nu_mean", hot)], heat_error: (hot + cold) / hot }
        };
        match self.kind {
            Kind::Square { .. } => {
                let mut read = between(Side::Left, Side::Right);
                read.quantities.extend(square_readings(problem, air, state));
                read
            }
            Kind::Below { .. } => between(Side::Bottom, Side::Top),
            Kind::Wall { .. } => between(Side::Right, Side::Left),
            Kind::Block { .. } => between(Side::Left, Side::Right),
            Kind::Annulus { rayleigh, slope, .. } => {
                let nusselt = self.annulus(8, Grading::Uniform).nusselt(problem, air, state);
                let here = nusselt.inner * (rayleigh / nusselt.rayleigh).powf(slope);
                let ratio = self.annulus(8, Grading::Uniform).radius_ratio;
                let heat_error = 1.0 - ratio * nusselt.outer / nusselt.inner;
                Readings { quantities: vec![("nu_mean", here)], heat_error }
            }
            Kind::Lid { .. } => {
                let [u, high, low] = LidCavity::extremes(problem, state);
                let quantities = vec![
                    ("u_min", u.value),
                    ("u_min_at", u.at),
                    ("v_max", high.value),
                    ("v_max_at", high.at),
                    ("v_min", low.value),
                    ("v_min_at", low.at),
                ];
                Readings { quantities, heat_error: 0.0 }
            }
        }
    }
}

fn square_readings(problem: &Problem, air: &Air, state: &State) -> Vec<(&'static str, f64)> {
    let mesh = problem.mesh();
    let u = extreme(&u_along_y(problem, state, 0.5));
    let v = extreme(&v_along_x(problem, state, 0.5));
    let (_, highest, lowest) = hot_wall(problem, air, state, Side::Left);
    let psi = stream_at(mesh, &stream_function(mesh, state), 0.5, 0.5);
    vec![
        ("u_max", u.value),
        ("u_max_at", u.at),
        ("v_max", v.value),
        ("v_max_at", v.at),
        ("nu_max", highest.value),
        ("nu_max_at", highest.at),
        ("nu_min", lowest),
        ("psi_mid", psi.abs()),
    ]
}
