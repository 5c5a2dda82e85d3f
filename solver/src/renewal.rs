//! Renewing what follows the result: the air's constants, outer faces of sides, heats.

use crate::fas::Stack;
use crate::film::film_rise;
use crate::following::Following;
use crate::heat_law::{HeatSearch, block_heats, hottest};
use crate::{Air, AirModel, Problem, Runaway};

/// The air's constants are renewed while the film temperature moves by more than this [K].
const FILM_BOUND: f64 = 0.02;
/// Renewals on the coarsest mesh at the most: of the film temperature, of more that follows.
const RENEWALS: usize = 8;
const FOLLOWING_RENEWALS: usize = 40;
/// Heats stand when they are off their answer by less than this share of them [-]; they are renewed
/// from a residual of this share of what they are off by.
const HEAT_STANDS: f64 = 5e-7;
const HEAT_CLEAR: f64 = 0.03;
/// A block beyond this temperature whose heat still grows by 1 and more runs away [K]: the laws for
/// air end there.
const RUNAWAY: f64 = 700.0;

/// What a run knows of what follows its result.
#[derive(Debug)]
pub(crate) struct Renewal {
    /// Film rise of the air's constants [K].
    film: f64,
    /// Whether more than the air's constants follows.
    follows: bool,
    heats: HeatSearch,
    /// The latest growth of 1 and more that was seen.
    climb: Option<Runaway>,
    ran_away: bool,
    /// The level that heats were last looked at on.
    level: usize,
}

impl Renewal {
    pub fn new(problem: &Problem) -> Renewal {
        let follows = Following::any(problem);
        Renewal {
            film: 0.0,
            follows,
            heats: HeatSearch::default(),
            climb: None,
            ran_away: false,
            level: 0,
        }
    }

    /// Forgets the search for heats, which begins anew.
    pub fn restart(&mut self) {
        self.heats = HeatSearch::default();
        self.ran_away = false;
    }

    /// Another flow on the same meshes comes next.
    pub fn turn(&mut self) {
        self.heats.turn();
    }

    /// Renewals on the coarsest mesh at the most.
    pub fn most(&self) -> usize {
        if self.follows { FOLLOWING_RENEWALS } else { RENEWALS }
    }

    /// Whether more than the air's constants may be behind when the residuals are done.
    pub fn follows(&self) -> bool {
        self.follows
    }

    /// Whether heat grows without end.
    pub fn ran_away(&self) -> bool {
        self.ran_away
    }

    /// The latest growth of 1 and more, where no steady answer was found.
    pub fn climb(&self) -> Option<Runaway> {
        self.climb
    }

    /// The growth of 1 and more at the latest heats.
    pub fn climbs(&self) -> Option<Runaway> {
        self.climb.filter(|_| self.heats.climbs())
    }

    /// Growth factor at the result.
    pub fn growth(&self) -> Option<f64> {
        self.heats.growth
    }

    /// Takes the air's constants at the film temperature of level `l`'s state, and what else follows
    /// it; true when they changed. Heats are renewed where the temperatures tell more than the
    /// `residual` blurs, at `tolerance` at the latest.
    pub fn renew(
        &mut self,
        stack: &mut Stack,
        problem: &Problem,
        l: usize,
        residual: f64,
        tolerance: f64,
    ) -> bool {
        let film = self.moved_film(stack, problem, l);
        let heats = if self.follows {
            self.next_heats(stack, problem, l, residual, tolerance)
        } else {
            None
        };
        let moved = || self.follows && outer_moved(stack, problem, l);
        if film.is_none() && heats.is_none() && !moved() {
            return false;
        }
        let air = film.unwrap_or(stack.level(l).air);
        let heats = heats.unwrap_or_else(|| stack.level(l).following.heats.clone());
        stack.set_constants(problem, &air, l, &heats);
        stack.pose(l);
        true
    }

    /// The air at the film temperature of level `l`'s state, when that has moved.
    fn moved_film(&mut self, stack: &Stack, problem: &Problem, l: usize) -> Option<Air> {
        let d = problem.description();
        let AirModel::Film { pressure } = d.air else { return None };
        let own = stack.problem(l).unwrap_or(problem);
        let film = film_rise(own, &stack.level(l).air, stack.state(l));
        if !film.is_finite() || (film - self.film).abs() <= FILM_BOUND {
            return None;
        }
        self.film = film;
        Some(Air::dry(d.ambient + film, pressure))
    }

    /// Other heats to try, when those of level `l` are not what its temperatures ask for.
    fn next_heats(
        &mut self,
        stack: &Stack,
        problem: &Problem,
        l: usize,
        residual: f64,
        tolerance: f64,
    ) -> Option<Vec<f64>> {
        let own = stack.problem(l).unwrap_or(problem);
        let (used, state) = (&stack.level(l).following, stack.state(l));
        if used.heats.is_empty() {
            return None;
        }
        let now = Following { heats: block_heats(own, state), ..Following::default() };
        let gap = now.heat_gap(used);
        let clear = residual <= (HEAT_CLEAR * gap).max(tolerance);
        if !clear || gap * self.heats.amplification() <= HEAT_STANDS {
            return None;
        }
        if l != self.level {
            self.level = l;
            self.heats.turn();
        }
        let behind = now.heats.iter().sum::<f64>() > used.heats.iter().sum();
        let next = self.heats.next(&used.heats, &now.heats);
        if let (Some(growth), Some((block, temperature))) =
            (self.heats.growth.filter(|g| *g >= 1.0), hottest(own, state))
        {
            self.climb = Some(Runaway { growth, block, temperature });
            self.ran_away = behind && temperature > RUNAWAY;
        }
        Some(next)
    }
}

/// Whether the outer faces at level `l`'s state are no longer what its equations hold.
fn outer_moved(stack: &Stack, problem: &Problem, l: usize) -> bool {
    let own = stack.problem(l).unwrap_or(problem);
    let (level, state) = (stack.level(l), stack.state(l));
    let now = Following::at(own, &level.air, state);
    !now.outer_stands(&level.following, own, state)
}
