//! Newton's method with a sparse direct solution: the solver of the coarsest mesh.
//!
//! Far from the solution the steady equations may have no good linear model (an opening's loss has
//! no slope at rest), so a pseudo-time term V·ρ/Δt is added to the air's equations and fades as the
//! residual falls. Near it, a factorisation serves several steps.

use sprs::TriMat;

use crate::level::Level;
use crate::linear::direct::{Factors, Order, Singular};
use crate::residual::{self, Scales};
use crate::{Control, Residuals, SolveError, State};

/// Which unknown of the system a place in a field is; `None` where the value is fixed.
#[derive(Debug)]
pub(crate) struct Numbering {
    u: Vec<Option<u32>>,
    v: Vec<Option<u32>>,
    p: Vec<Option<u32>>,
    t: Vec<Option<u32>>,
    /// Column and row of the cell that every unknown is counted to.
    cells: Vec<(u32, u32)>,
    count: usize,
}

/// Newton's method on one mesh, with its last factorisation.
pub(crate) struct Newton {
    numbers: Numbering,
    order: Option<Order>,
    factors: Option<Factors>,
    residual: State,
    trial: State,
    trial_residual: State,
    /// Factorisations so far.
    pub factorisations: usize,
}

/// What a solution is to reach.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Aim {
    /// Relative residual to get below.
    pub target: f64,
    /// Steps at the most.
    pub limit: usize,
    /// Whether to begin with short pseudo-time steps.
    pub from_rest: bool,
}

/// Columns of one colour are this far apart, so that their rows do not meet.
const COLOUR_STEP: usize = 3;

impl Newton {
    pub fn new(level: &Level) -> Newton {
        Newton {
            numbers: Numbering::new(level),
            order: None,
            factors: None,
            residual: rest(level),
            trial: rest(level),
            trial_residual: rest(level),
            factorisations: 0,
        }
    }

    /// Improves `state` until the largest relative residual is below `target` or `limit` steps are
    /// done or `each`, asked after every step, says stop. `scales` serve where the state's own are
    /// nothing yet. Returns the largest relative residual reached.
    pub fn solve(
        &mut self,
        level: &Level,
        state: &mut State,
        rhs: &State,
        scales: &Scales,
        Aim { target, limit, from_rest }: Aim,
        each: &mut dyn FnMut(Residuals) -> Control,
    ) -> Result<f64, SolveError> {
        residual::evaluate(level, state, rhs, &mut self.residual);
        let mut norm = size(level, &self.residual, state, scales).largest();
        // Pseudo-time step in units of the buoyant transit time; none is infinite.
        let mut pseudo = if from_rest { FIRST_STEP * transit_time(level) } else { f64::INFINITY };
        let mut stale = self.factors.is_some() && !from_rest;
        let mut steps = 0;
        let mut failures = 0;
        while norm > target && steps < limit {
            if !stale {
                self.factorise(level, state, rhs, pseudo)?;
            }
            steps += 1;
            let step = self.step(level)?;
            self.trial.clone_from(state);
            self.numbers.add(&step, 1.0, &mut self.trial);
            residual::evaluate(level, &self.trial, rhs, &mut self.trial_residual);
            let trial_residuals = size(level, &self.trial_residual, &self.trial, scales);
            let trial_norm = trial_residuals.largest();
            let allowed = if pseudo.is_finite() { 3.0 } else { 1.0 };
            if trial_norm.is_finite() && trial_norm <= allowed * norm {
                std::mem::swap(state, &mut self.trial);
                std::mem::swap(&mut self.residual, &mut self.trial_residual);
                let ratio = trial_norm / norm;
                norm = trial_norm;
                if each(trial_residuals) == Control::Stop {
                    break;
                }
                failures = 0;
                if pseudo.is_finite() {
                    pseudo *= (1.0 / ratio).clamp(1.5, 10.0);
                    if pseudo > LAST_STEP * transit_time(level) {
                        pseudo = f64::INFINITY;
                    }
                    stale = false;
                } else {
                    stale = ratio < STALE_RATIO;
                }
            } else if stale {
                stale = false;
            } else if norm < ROUND_OFF {
                break;
            } else {
                failures += 1;
                if failures > MOST_FAILURES || (norm < NEARLY && failures > 1) {
                    break;
                }
                pseudo = if pseudo.is_finite() { 0.2 * pseudo } else { transit_time(level) };
            }
        }
        Ok(norm)
    }

    /// Solves J·δ = r with the current factors.
    fn step(&self, level: &Level) -> Result<Vec<f64>, SolveError> {
        let mut right = vec![0.0; self.numbers.count];
        self.numbers.gather(&self.residual, &mut right);
        self.drop_pinned(level, &mut right);
        let Some(factors) = &self.factors else {
            return Err(SolveError::Factorisation { reason: "no factors".into() });
        };
        factors.solve(&mut right);
        Ok(right)
    }

    /// The order of the unknowns.
    pub fn numbers(&self) -> &Numbering {
        &self.numbers
    }

    /// Zeroes the rows of the pinned pressures.
    pub fn drop_pinned(&self, level: &Level, right: &mut [f64]) {
        for region in &level.closed_regions {
            if let Some(n) = self.numbers.p[region[0] as usize] {
                right[n as usize] = 0.0;
            }
        }
    }

    /// Factorises J + M/Δt at a state, M being the air's inertia and heat capacity only.
    fn factorise(
        &mut self,
        level: &Level,
        state: &State,
        rhs: &State,
        pseudo: f64,
    ) -> Result<(), SolveError> {
        let mut matrix = self.jacobian(level, state, rhs);
        let rate = if pseudo.is_finite() { 1.0 / pseudo } else { 0.0 };
        let masses = self.masses(level, false);
        masses.iter().enumerate().for_each(|(n, m)| matrix.add_triplet(n, n, rate * m));
        self.factors = Some(self.factors_of(&matrix)?);
        Ok(())
    }

    /// Factors of J + rate·M at a state, M with the blocks' heat capacity: the operator of the
    /// linear stability analysis and of time steps.
    pub fn shifted(
        &mut self,
        level: &Level,
        state: &State,
        rhs: &State,
        rate: f64,
    ) -> Result<(Factors, Vec<f64>), SolveError> {
        residual::evaluate(level, state, rhs, &mut self.residual);
        let mut matrix = self.jacobian(level, state, rhs);
        let masses = self.masses(level, true);
        masses.iter().enumerate().for_each(|(n, m)| matrix.add_triplet(n, n, rate * m));
        Ok((self.factors_of(&matrix)?, masses))
    }

    fn factors_of(&mut self, matrix: &TriMat<f64>) -> Result<Factors, SolveError> {
        let order = self.order.get_or_insert_with(|| Order::new(&self.numbers.cells, matrix));
        self.factorisations += 1;
        order
            .factorise(matrix)
            .map_err(|e: Singular| SolveError::Factorisation { reason: e.to_string() })
    }

    /// Inertia ρ·V [kg] and heat capacity [J/K] of every unknown (zero for pressures).
    fn masses(&self, level: &Level, with_blocks: bool) -> Vec<f64> {
        let (nx, ny) = (level.nx, level.ny);
        let numbers = &self.numbers;
        let mut masses = vec![0.0; numbers.count];
        let mut set = |n: Option<u32>, mass: f64| {
            if let Some(n) = n {
                masses[n as usize] = mass;
            }
        };
        let density = level.air.density;
        for j in 0..ny {
            for i in 0..=nx {
                let mass = density * level.u_area[i] * level.dy[j];
                set(numbers.u[i + j * (nx + 1)], mass);
            }
        }
        for j in 0..=ny {
            for i in 0..nx {
                set(numbers.v[i + j * nx], density * level.y_area[i] * level.v_height[j]);
            }
        }
        for n in 0..nx * ny {
            if with_blocks || level.fluid[n] {
                set(numbers.t[n], level.heat_capacity[n]);
            }
        }
        masses
    }

    /// J = −∂r/∂x at a state. Its pattern never depends on the values.
    fn jacobian(&self, level: &Level, state: &State, rhs: &State) -> TriMat<f64> {
        let (nx, ny) = (level.nx, level.ny);
        let numbers = &self.numbers;
        let n = numbers.count;
        let mut matrix = TriMat::with_capacity((n, n), 30 * n);
        let (mut moved, mut changed) = (state.clone(), rest(level));
        let mut here = rest(level);
        residual::evaluate_local(level, state, rhs, &mut here);
        let largest = |f: &[f64]| f.iter().fold(0.0_f64, |a, b| a.max(b.abs()));
        let speed = largest(&state.u).max(largest(&state.v));
        let speed = speed.max(1e-3 * reference_speed(level).max(level.driven_speed));
        // Pressure and temperature stand linearly in every equation: large steps lose nothing.
        let warmth = largest(&state.t).max(source_warmth(level, rhs)).max(1e-6);
        let buoyancy = reference_speed(level).powi(2) * warmth;
        let pressure = level.air.density * (speed * speed).max(buoyancy);
        let steps = [1e-6 * speed, 1e-6 * speed, pressure, warmth];
        let pinned: Vec<u32> =
            level.closed_regions.iter().filter_map(|r| numbers.p[r[0] as usize]).collect();
        for field in 0..4 {
            let step = steps[field];
            let width = if field == 0 { nx + 1 } else { nx };
            let height = if field == 1 { ny + 1 } else { ny };
            for colour in 0..COLOUR_STEP * COLOUR_STEP {
                let (ci, cj) = (colour % COLOUR_STEP, colour / COLOUR_STEP);
                let places = || {
                    (cj..height)
                        .step_by(COLOUR_STEP)
                        .flat_map(move |j| (ci..width).step_by(COLOUR_STEP).map(move |i| (i, j)))
                };
                for (i, j) in places() {
                    field_of(&mut moved, field)[i + j * width] += step;
                }
                residual::evaluate_local(level, &moved, rhs, &mut changed);
                for (i, j) in places() {
                    let value = field_ref(state, field)[i + j * width];
                    field_of(&mut moved, field)[i + j * width] = value;
                    let Some(column) = numbers.of(field)[i + j * width] else { continue };
                    // Every row within one place in each direction may depend on it.
                    for row_field in 0..4 {
                        let row_width = if row_field == 0 { nx + 1 } else { nx };
                        let row_height = if row_field == 1 { ny + 1 } else { ny };
                        for jr in j.saturating_sub(1)..(j + 2).min(row_height) {
                            for ir in i.saturating_sub(1)..(i + 2).min(row_width) {
                                if !may_depend(row_field, field, ir, jr, i, j) {
                                    continue;
                                }
                                let place = ir + jr * row_width;
                                let Some(row) = numbers.of(row_field)[place] else { continue };
                                if row_field == 2 && pinned.contains(&row) {
                                    continue;
                                }
                                let slope = (field_ref(&here, row_field)[place]
                                    - field_ref(&changed, row_field)[place])
                                    / step;
                                matrix.add_triplet(row as usize, column as usize, slope);
                            }
                        }
                    }
                }
            }
        }
        // Radiation: every surface's own film; what it receives is left to the iteration.
        if let Some(radiant) = &level.radiant {
            radiant.films(&radiant.patches(&state.t), |air, solid, share, film| {
                let cells = [solid.map(|n| (n, share)), Some((air, 1.0 - share))];
                for (row, a) in cells.into_iter().flatten() {
                    for (column, b) in cells.into_iter().flatten() {
                        let at = |n: usize| numbers.t[n].map(|n| n as usize);
                        if let (Some(row), Some(column)) = (at(row), at(column)) {
                            matrix.add_triplet(row, column, a * b * film);
                        }
                    }
                }
            });
        }
        // Fans: every face of the slot answers to the flow through all of them.
        for fan in &level.fans {
            let numbers = if fan.along_x { &numbers.u } else { &numbers.v };
            fan.each_pair(state, |row, column, slope| {
                if let (Some(row), Some(column)) = (numbers[row], numbers[column]) {
                    matrix.add_triplet(row as usize, column as usize, slope);
                }
            });
        }
        // One pressure of every closed region keeps its value.
        for row in pinned {
            matrix.add_triplet(row as usize, row as usize, 1.0);
        }
        matrix
    }
}

/// First and last pseudo-time step over the transit time.
const FIRST_STEP: f64 = 0.3;
const LAST_STEP: f64 = 300.0;
/// Relative residual below which a step that does not improve it has met round-off; below which
/// two such steps have; and refused steps in a row that end it anyway.
const ROUND_OFF: f64 = 1e-9;
const NEARLY: f64 = 1e-5;
const MOST_FAILURES: usize = 12;
/// A factorisation is kept while a step cuts the residual to this.
const STALE_RATIO: f64 = 0.2;

/// Whether the residual of `row` at (ir, jr) can depend on `field` at (i, j): the fixed pattern.
fn may_depend(row: usize, field: usize, ir: usize, jr: usize, i: usize, j: usize) -> bool {
    let (di, dj) = (i as isize - ir as isize, j as isize - jr as isize);
    match (row, field) {
        // Own velocity and temperature: the five-point star.
        (0, 0) | (1, 1) | (3, 3) => di == 0 || dj == 0,
        // x-momentum at a face: the four y-faces around it, the two cells beside it.
        (0, 1) => (di == -1 || di == 0) && (dj == 0 || dj == 1),
        (0, 2) | (0, 3) => (di == -1 || di == 0) && dj == 0,
        (1, 0) => (di == 0 || di == 1) && (dj == -1 || dj == 0),
        (1, 2) | (1, 3) => di == 0 && (dj == -1 || dj == 0),
        // Mass and energy of a cell: its own faces.
        (2, 0) | (3, 0) => dj == 0 && (di == 0 || di == 1),
        (2, 1) | (3, 1) => di == 0 && (dj == 0 || dj == 1),
        // The pinned pressure needs its diagonal.
        (2, 2) => di == 0 && dj == 0,
        _ => false,
    }
}

/// Rise that a cell's own source would hold against its neighbours and sides, at the most [K].
fn source_warmth(level: &Level, rhs: &State) -> f64 {
    let nx = level.nx;
    rhs.t.iter().enumerate().fold(0.0_f64, |most, (n, source)| {
        let (i, j) = (n % nx, n / nx);
        let west = i + j * (nx + 1);
        let conductance = level.x_conductance[west]
            + level.x_conductance[west + 1]
            + level.y_conductance[n]
            + level.y_conductance[n + nx]
            + level.side_conductance[n];
        if conductance > 0.0 { most.max(source.abs() / conductance) } else { most }
    })
}

/// Free-fall speed √(βg·ΔT·L) for ΔT = 1 K, with a viscous floor.
fn reference_speed(level: &Level) -> f64 {
    let height: f64 = level.dy.iter().sum();
    let g = level.gravity[0].hypot(level.gravity[1]);
    let viscous = level.air.viscosity / level.air.density / height;
    (level.air.expansion * g * height).sqrt().max(viscous)
}

/// Time that a parcel in free fall, or driven through a slot, takes through the section [s].
fn transit_time(level: &Level) -> f64 {
    level.dy.iter().sum::<f64>() / reference_speed(level).max(level.driven_speed)
}

/// Relative residuals by the state's own scales; `scales` where those are nothing yet.
fn size(level: &Level, residual: &State, state: &State, scales: &Scales) -> Residuals {
    let own = residual::scales(level, state);
    let either = |own: f64, given: f64| if own > 0.0 { own } else { given };
    let scales = Scales {
        mass: either(own.mass, scales.mass),
        force: either(own.force, scales.force),
        heat: either(own.heat, scales.heat),
    };
    residual::relative(level, residual, &scales)
}

fn rest(level: &Level) -> State {
    State {
        u: vec![0.0; level.u_open.len()],
        v: vec![0.0; level.v_open.len()],
        p: vec![0.0; level.fluid.len()],
        t: vec![0.0; level.fluid.len()],
    }
}

fn field_of(state: &mut State, field: usize) -> &mut [f64] {
    match field {
        0 => &mut state.u,
        1 => &mut state.v,
        2 => &mut state.p,
        _ => &mut state.t,
    }
}

fn field_ref(state: &State, field: usize) -> &[f64] {
    match field {
        0 => &state.u,
        1 => &state.v,
        2 => &state.p,
        _ => &state.t,
    }
}

impl Numbering {
    fn new(level: &Level) -> Numbering {
        let (nx, ny) = (level.nx, level.ny);
        let mut n = Numbering {
            u: vec![None; level.u_open.len()],
            v: vec![None; level.v_open.len()],
            p: vec![None; nx * ny],
            t: vec![None; nx * ny],
            cells: Vec::new(),
            count: 0,
        };
        let cells = &mut n.cells;
        for j in 0..=ny {
            for i in 0..=nx {
                let mut next = |there: bool| {
                    there.then(|| {
                        cells.push((i.min(nx - 1) as u32, j.min(ny - 1) as u32));
                        cells.len() as u32 - 1
                    })
                };
                if j < ny {
                    let f = i + j * (nx + 1);
                    n.u[f] = next(level.u_open[f] > 0.0);
                }
                if i < nx {
                    let f = i + j * nx;
                    n.v[f] = next(level.v_open[f] > 0.0);
                }
                if i < nx && j < ny {
                    let c = i + j * nx;
                    n.t[c] = next(true);
                    n.p[c] = next(level.fluid[c]);
                }
            }
        }
        n.count = n.cells.len();
        n
    }

    fn of(&self, field: usize) -> &[Option<u32>] {
        match field {
            0 => &self.u,
            1 => &self.v,
            2 => &self.p,
            _ => &self.t,
        }
    }

    /// Values of a state's fields in the unknowns' order.
    pub fn gather(&self, from: &State, to: &mut [f64]) {
        for field in 0..4 {
            for (n, value) in self.of(field).iter().zip(field_ref(from, field)) {
                if let Some(n) = n {
                    to[*n as usize] = *value;
                }
            }
        }
    }

    /// Adds `scale` times the unknowns to a state's fields.
    pub fn add(&self, step: &[f64], scale: f64, to: &mut State) {
        for field in 0..4 {
            for (n, value) in self.of(field).iter().zip(field_of(to, field)) {
                if let Some(n) = n {
                    *value += scale * step[*n as usize];
                }
            }
        }
    }
}
