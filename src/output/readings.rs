//! One finished run with everything its files and its screen are made from.

use ventrise_mesh::AIR;
use ventrise_solver::{
    Balance, FanPoint, Numbers, OpeningFlow, PartTemperature, Problem, RadiantHeat,
    STEFAN_BOLTZMANN, Sample, Sampler, SideFlow, Solution, balance, block_heats,
    block_temperatures, cell_velocities, fan_points, heat_fluxes, numbers, part_temperatures,
    radiant_heat, side_flows, slot_flows, slot_reynolds,
};

use crate::case::{Case, ProbeShape};

use super::vtk::{Field, Fields, Values};

/// Absolute temperature of 0 °C [K].
const ZERO_CELSIUS: f64 = 273.15;
/// Places sampled along a line probe.
const LINE_SAMPLES: usize = 101;

/// Who ended the iteration before its end.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Interruption {
    /// A signal (Ctrl-C, termination).
    Signal,
    /// The time limit.
    TimeLimit,
}

/// A run and what it cost.
#[derive(Debug, Clone, Copy)]
pub struct Run<'a> {
    /// The case.
    pub case: &'a Case,
    /// Its problem.
    pub problem: &'a Problem,
    /// The solution.
    pub solution: &'a Solution,
    /// Sentences about the mesh.
    pub mesh_notes: &'a [String],
    /// Who ended it early.
    pub interruption: Option<Interruption>,
    /// Elapsed time [s].
    pub wall_seconds: f64,
    /// Processor time of all threads [s].
    pub cpu_seconds: f64,
}

/// Painted and plastic surfaces, 0.8 to 0.95 (common practice, no source).
const UNKNOWN_EMISSIVITY: f64 = 0.9;

/// Numbers read off a run once, for all its files.
#[derive(Debug, Clone)]
pub struct Readings {
    /// Ambient temperature [°C].
    pub ambient: f64,
    /// Parts, in the case's order.
    pub parts: Vec<Option<PartTemperature>>,
    /// Blocks, in the case's order.
    pub blocks: Vec<Option<PartTemperature>>,
    /// Heat of the blocks at the result [W], in the case's order.
    pub heats: Vec<f64>,
    /// Slots, in the case's order.
    pub slots: Vec<OpeningFlow>,
    /// Reynolds number of every slot [-], in the case's order.
    pub slot_reynolds: Vec<f64>,
    /// Operating points of the fans, in the case's order.
    pub fans: Vec<Option<FanPoint>>,
    /// Sides.
    pub sides: [SideFlow; 4],
    /// Balance.
    pub balance: Balance,
    /// Numbers.
    pub numbers: Numbers,
    /// Lowest temperature rise of the air in a cell [K]; `None` without air.
    pub min_air_rise: Option<f64>,
    /// Heat carried by radiation; `None` where it is not modelled.
    pub radiant: Option<RadiantHeat>,
    /// Samples of every probe, in the case's order; one for a point.
    pub probes: Vec<Vec<Sample>>,
}

/// Celsius temperature of an absolute one [K], free of the subtraction's last digits.
pub fn celsius(kelvin: f64) -> f64 {
    ((kelvin - ZERO_CELSIUS) * 1e9).round() / 1e9
}

impl Run<'_> {
    /// Reads everything off the solution.
    pub fn readings(&self) -> Readings {
        let (problem, air, state) = (self.problem, &self.solution.air, &self.solution.state);
        let sampler = Sampler::new(problem, air, state);
        let sample = |shape: &ProbeShape| match *shape {
            ProbeShape::Point(at) => sampler.at(at).into_iter().collect(),
            ProbeShape::Line { from, to } => sampler.line(from, to, LINE_SAMPLES),
        };
        Readings {
            ambient: celsius(problem.description().ambient),
            parts: part_temperatures(problem, state),
            blocks: block_temperatures(problem, state),
            heats: block_heats(problem, state),
            slots: slot_flows(problem, air, state),
            slot_reynolds: slot_reynolds(problem, air, state),
            fans: fan_points(problem, air, state),
            sides: side_flows(problem, air, state),
            balance: balance(problem, air, state),
            numbers: numbers(problem, air, state),
            min_air_rise: (problem.mesh().regions().iter().zip(&state.t))
                .filter(|(region, _)| **region == AIR)
                .map(|(_, rise)| *rise)
                .min_by(f64::total_cmp),
            radiant: radiant_heat(problem, air, &state.t),
            probes: self.case.probes().iter().map(|p| sample(&p.shape)).collect(),
        }
    }

    /// Heat that the blocks' surfaces would radiate to black surroundings at ambient temperature
    /// [W], where radiation is not modelled: more than they would in truth, since they see each
    /// other too. Emissivities that nobody knows count as [`UNKNOWN_EMISSIVITY`].
    pub fn radiation_left_out(&self) -> Option<f64> {
        if self.case.radiates() {
            return None;
        }
        let (mesh, t) = (self.problem.mesh(), &self.solution.state.t);
        let ambient = self.problem.description().ambient;
        let (nx, ny) = (mesh.nx(), mesh.ny());
        let regions = mesh.regions();
        let per_area = |n: usize| {
            let block = &self.case.blocks()[regions[n] as usize];
            let emissivity = self.case.emissivity(block).unwrap_or(UNKNOWN_EMISSIVITY);
            emissivity * STEFAN_BOLTZMANN * ((ambient + t[n]).powi(4) - ambient.powi(4))
        };
        let mut heat = 0.0;
        let mut face = |a: usize, b: usize, area: f64| match (regions[a] == AIR, regions[b] == AIR)
        {
            (true, false) => heat += area * per_area(b),
            (false, true) => heat += area * per_area(a),
            _ => {}
        };
        for j in 0..ny {
            for i in 0..nx {
                let n = i + j * nx;
                if i + 1 < nx {
                    face(n, n + 1, mesh.x_area(i + 1) * mesh.dy(j));
                }
                if j + 1 < ny {
                    face(n, n + nx, mesh.y_area(i));
                }
            }
        }
        Some(heat)
    }

    /// Cell fields in the units of the files: °C, m/s, Pa, W/m²; indices are −1 in air.
    pub fn fields(&self) -> Fields {
        let (problem, air, state) = (self.problem, &self.solution.air, &self.solution.state);
        let mesh = problem.mesh();
        let ambient = celsius(problem.description().ambient);
        let velocities = cell_velocities(problem, state);
        let blocks = &problem.description().blocks;
        let index = |of: &dyn Fn(usize) -> usize| {
            let regions = mesh.regions().iter();
            regions.map(|r| if *r == AIR { -1 } else { of(*r as usize) as i32 }).collect()
        };
        let field = |name, values| Field { name, values };
        Fields {
            x: mesh.x().to_vec(),
            y: mesh.y().to_vec(),
            fields: vec![
                field(
                    "temperature",
                    Values::Scalar(state.t.iter().map(|rise| ambient + rise).collect()),
                ),
                field("velocity", Values::Vector(velocities.clone())),
                field(
                    "speed",
                    Values::Scalar(velocities.iter().map(|v| v[0].hypot(v[1])).collect()),
                ),
                field("pressure", Values::Scalar(state.p.clone())),
                field("block", Values::Index(index(&|b| b))),
                field("material", Values::Index(index(&|b| blocks[b].solid))),
                field("heat_flux", Values::Vector(heat_fluxes(problem, air, state))),
            ],
        }
    }
}
