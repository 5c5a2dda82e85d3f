//! `summary.json`: everything a script may ask, under stable keys.
//!
//! SI, temperatures in °C, unless the key says otherwise. Heat of slots and sides is positive when
//! it leaves the section. A value that does not exist (no limit, no outflow) is `null`.

use serde::Serialize;
use ventrise_mesh::Side;
use ventrise_solver::{SOLVED, Sample, Solution, StopReason, Verdict};

use crate::case::{Case, LimitAt, ProbeShape};

use super::by_hand::ByHand;
use super::fans::{Fan, fans};
use super::outer_heat::OuterHeat;
use super::readings::{Interruption, Readings, Run};
use super::side_name;
use super::slots::{Slot, slots};
use super::warnings::warnings;

/// Spread of temperatures beyond which the linear density law is off by more than a tenth [K]:
/// D. D. Gray, A. Giorgini, Int. J. Heat Mass Transfer 19 (1976) 545-551, air at 15 °C and 1 atm.
pub const BOUSSINESQ_SPREAD: f64 = 28.6;
/// Reynolds number of a duct beyond which flow may turn turbulent (common practice, no source).
pub const TURBULENT_REYNOLDS: f64 = 2300.0;

/// The whole summary; fields in the order of the file.
#[derive(Debug, Clone, Serialize)]
pub struct Summary {
    /// Version of the program.
    pub ventrise: &'static str,
    /// Which case.
    pub case: CaseName,
    /// Whether the equations are met well enough for the numbers to mean anything; if not, they are
    /// the last attempt and no margin is given.
    pub solved: bool,
    /// `settled`, `swaying`, `runs away`, `drifting` or `stopped early`.
    pub verdict: &'static str,
    /// What ended the iteration early: `signal`, `time limit`, `iteration limit` or `stalled`
    /// (residuals no longer fell).
    #[serde(skip_serializing_if = "Option::is_none")]
    pub stopped_by: Option<&'static str>,
    /// Where heat follows temperature: how much more one watt more makes of itself [-].
    #[serde(skip_serializing_if = "Option::is_none")]
    pub heat_growth: Option<f64>,
    /// About heat that has no steady answer.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub runaway: Option<HeatRunaway>,
    /// About a swaying flow.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub sway: Option<Sway>,
    /// The mesh.
    pub mesh: MeshSize,
    /// The air.
    pub air: AirNumbers,
    /// Dimensionless numbers.
    pub numbers: Dimensionless,
    /// Outer iterations on all meshes.
    pub iterations: usize,
    /// Elapsed time [s].
    pub wall_seconds: f64,
    /// Processor time [s].
    pub cpu_seconds: f64,
    /// Last residuals, relative.
    pub residuals: LastResiduals,
    /// In against out.
    pub balance: InOut,
    /// Net heat that leaves by each path [W].
    pub heat_paths_w: HeatPaths,
    /// Parts, in the case's order.
    pub parts: Vec<Part>,
    /// Slots, in the case's order.
    pub slots: Vec<Slot>,
    /// Fans, in the case's order.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub fans: Vec<Fan>,
    /// Sides: left, right, bottom, top.
    pub sides: Vec<SideHeat>,
    /// Probes, in the case's order.
    pub probes: Vec<Probe>,
    /// Blocks, by the index used in the field files.
    pub blocks: Vec<Block>,
    /// Names of materials, by the index used in the field files.
    pub materials: Vec<String>,
    /// What a hand estimate gives for the same case, where there is heat in air.
    pub by_hand: Option<ByHand>,
    /// Sentences about what makes the numbers doubtful.
    pub warnings: Vec<String>,
}

/// Title and fingerprint of a case.
#[derive(Debug, Clone, Serialize)]
pub struct CaseName {
    /// Title.
    pub title: String,
    /// SHA-256 of the case file, hexadecimal.
    pub sha256: String,
}

/// What is known of a sway.
#[derive(Debug, Clone, Serialize)]
pub struct Sway {
    /// Period [s].
    pub period_s: Option<f64>,
    /// Growth rate about the steady solution [1/s].
    pub growth_per_s: Option<f64>,
}

/// Heat that grows faster with temperature than it is carried away.
#[derive(Debug, Clone, Serialize)]
pub struct HeatRunaway {
    /// How much more one watt more makes of itself [-], 1 or more.
    pub growth: f64,
    /// The block that was hottest when it was given up, if it has a name.
    pub block: Option<String>,
    /// Its mean temperature then [°C].
    pub given_up_at_c: f64,
}

/// Size of the mesh.
#[derive(Debug, Clone, Serialize)]
pub struct MeshSize {
    /// Cells along x.
    pub nx: usize,
    /// Cells along y.
    pub ny: usize,
    /// Cells.
    pub cells: usize,
    /// Smallest cell edge [m].
    pub smallest_m: f64,
    /// Largest cell edge [m].
    pub largest_m: f64,
}

/// Constants of the air and its extremes.
#[derive(Debug, Clone, Serialize)]
pub struct AirNumbers {
    /// [kg/m³].
    pub density: f64,
    /// [Pa·s].
    pub viscosity: f64,
    /// [W/(m·K)].
    pub conductivity: f64,
    /// [J/(kg·K)].
    pub specific_heat: f64,
    /// [1/K].
    pub expansion: f64,
    /// Highest speed in a cell [m/s].
    pub max_speed_m_s: f64,
    /// Highest temperature of the air [°C].
    pub max_temperature_c: Option<f64>,
    /// Lowest temperature of the air [°C].
    pub min_temperature_c: Option<f64>,
    /// Pressure of the warm column between lowest and highest opening [Pa].
    pub stack_pressure_pa: f64,
}

/// Dimensionless numbers.
#[derive(Debug, Clone, Serialize)]
pub struct Dimensionless {
    /// On the section's height and the highest rise.
    pub rayleigh: f64,
    /// Of the air.
    pub prandtl: f64,
    /// Largest of all slots, on the hydraulic diameter.
    pub vent_reynolds: f64,
}

/// Residuals of the last iteration.
#[derive(Debug, Clone, Serialize)]
pub struct LastResiduals {
    /// Mass.
    pub mass: f64,
    /// Momentum along x.
    pub momentum_x: f64,
    /// Momentum along y.
    pub momentum_y: f64,
    /// Energy.
    pub energy: f64,
}

/// In against out.
#[derive(Debug, Clone, Serialize)]
pub struct InOut {
    /// [W].
    pub heat_in_w: f64,
    /// [W].
    pub heat_out_w: f64,
    /// Relative.
    pub heat_error: f64,
    /// [kg/s].
    pub mass_in_kg_s: f64,
    /// [kg/s].
    pub mass_out_kg_s: f64,
    /// Relative.
    pub mass_error: f64,
}

/// Net heat that leaves by each path [W].
#[derive(Debug, Clone, Serialize)]
pub struct HeatPaths {
    /// Carried by air through the slots.
    pub slots: f64,
    /// Through the sides: conducted, and carried by air through open ones.
    pub sides: f64,
    /// Radiated through slots and open sides; zero where radiation is not modelled.
    pub radiation: f64,
}

/// A part against its limit.
#[derive(Debug, Clone, Serialize)]
pub struct Part {
    /// Name.
    pub name: String,
    /// Heat released in it [W].
    pub heat_w: f64,
    /// Net heat radiated from its surfaces [W]; `null` where radiation is not modelled.
    pub radiated_w: Option<f64>,
    /// Lowest temperature [°C].
    pub min_c: Option<f64>,
    /// Mean over the volume [°C].
    pub mean_c: Option<f64>,
    /// Highest temperature [°C].
    pub max_c: Option<f64>,
    /// Temperature of the hottest junction in it [°C].
    #[serde(skip_serializing_if = "Option::is_none")]
    pub junction_c: Option<f64>,
    /// Lowest and highest `max_c` over the last oscillations of a swaying flow [°C].
    #[serde(skip_serializing_if = "Option::is_none")]
    pub band_c: Option<[f64; 2]>,
    /// Limit [°C].
    pub limit_c: Option<f64>,
    /// `junction` where the limit holds there.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub limit_at: Option<&'static str>,
    /// Limit minus highest temperature (of the band, when swaying) [K].
    pub margin_k: Option<f64>,
    /// Highest rise over heat [K/W].
    pub resistance_k_w: Option<f64>,
}

/// A side.
#[derive(Debug, Clone, Serialize)]
pub struct SideHeat {
    /// `left`, `right`, `bottom` or `top`.
    pub name: &'static str,
    /// Heat that leaves [W].
    pub heat_w: f64,
    /// Of it conducted [W].
    pub conduction_w: f64,
    /// Of it carried by air where the side is open [W].
    pub convection_w: f64,
    /// Air that enters where the side is open [m³/s].
    pub in_m3_s: f64,
    /// Air that leaves where the side is open [m³/s].
    pub out_m3_s: f64,
    /// Mean temperature of the air that leaves, when the side is open [°C].
    pub out_mean_c: Option<f64>,
    /// How the conducted heat leaves the outer face, where the side has one.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub outer: Option<OuterHeat>,
}

/// A probe: a point, or a line with its extremes.
#[derive(Debug, Clone, Serialize)]
pub struct Probe {
    /// Name.
    pub name: String,
    /// Temperature; mean along a line [°C].
    pub temperature_c: Option<f64>,
    /// Speed; mean along a line [m/s].
    pub speed_m_s: Option<f64>,
    /// Point, or ends of a line, (x, y) [m].
    pub at_m: Vec<[f64; 2]>,
    /// Velocity along x and y at a point [m/s].
    #[serde(skip_serializing_if = "Option::is_none")]
    pub velocity_m_s: Option<[f64; 2]>,
    /// Pressure at a point in air [Pa].
    #[serde(skip_serializing_if = "Option::is_none")]
    pub pressure_pa: Option<f64>,
    /// Lowest temperature along a line [°C].
    #[serde(skip_serializing_if = "Option::is_none")]
    pub min_c: Option<f64>,
    /// Highest temperature along a line [°C].
    #[serde(skip_serializing_if = "Option::is_none")]
    pub max_c: Option<f64>,
    /// Highest speed along a line [m/s].
    #[serde(skip_serializing_if = "Option::is_none")]
    pub max_speed_m_s: Option<f64>,
}

/// A block.
#[derive(Debug, Clone, Serialize)]
pub struct Block {
    /// Name, if it has one.
    pub name: Option<String>,
    /// Its part.
    pub part: Option<String>,
    /// Its material.
    pub material: String,
    /// Heat released in it [W].
    pub heat_w: f64,
    /// Highest temperature [°C].
    pub max_c: Option<f64>,
}

impl Summary {
    /// Gathers the summary of a run.
    pub fn of(run: &Run, readings: &Readings) -> Summary {
        let (case, solution) = (run.case, run.solution);
        let mesh = run.problem.mesh();
        let [smallest_m, largest_m] = mesh.cell_sizes();
        let celsius = |rise: f64| readings.ambient + rise;
        let last = solution.history.last().cloned().unwrap_or_default();
        let (air, numbers, balance) = (&solution.air, &readings.numbers, &readings.balance);
        let heat_of = |side: &ventrise_solver::SideFlow| side.heat();
        let mut summary = Summary {
            ventrise: env!("CARGO_PKG_VERSION"),
            case: CaseName { title: case.title().into(), sha256: case.sha256().into() },
            solved: solved(solution),
            verdict: verdict_word(&solution.verdict),
            stopped_by: stopped_by(run),
            heat_growth: solution.heat_growth,
            runaway: match solution.verdict {
                Verdict::RunsAway(r) => Some(HeatRunaway {
                    growth: r.growth,
                    block: case.blocks().get(r.block).and_then(|b| b.name.clone()),
                    given_up_at_c: super::readings::celsius(r.temperature),
                }),
                _ => None,
            },
            sway: match solution.verdict {
                Verdict::Swaying { period, growth, .. } => {
                    Some(Sway { period_s: period, growth_per_s: growth })
                }
                _ => None,
            },
            mesh: MeshSize {
                nx: mesh.nx(),
                ny: mesh.ny(),
                cells: mesh.cell_count(),
                smallest_m,
                largest_m,
            },
            air: AirNumbers {
                density: air.density,
                viscosity: air.viscosity,
                conductivity: air.conductivity,
                specific_heat: air.specific_heat,
                expansion: air.expansion,
                max_speed_m_s: numbers.max_speed,
                max_temperature_c: numbers.max_air_rise.map(celsius),
                min_temperature_c: readings.min_air_rise.map(celsius),
                stack_pressure_pa: numbers.stack_pressure,
            },
            numbers: Dimensionless {
                rayleigh: numbers.rayleigh,
                prandtl: numbers.prandtl,
                vent_reynolds: numbers.vent_reynolds,
            },
            iterations: last.iteration,
            wall_seconds: run.wall_seconds,
            cpu_seconds: run.cpu_seconds,
            residuals: LastResiduals {
                mass: last.residuals.mass,
                momentum_x: last.residuals.momentum_x,
                momentum_y: last.residuals.momentum_y,
                energy: last.residuals.energy,
            },
            balance: InOut {
                heat_in_w: balance.heat_in,
                heat_out_w: balance.heat_out,
                heat_error: balance.heat_error,
                mass_in_kg_s: balance.mass_in,
                mass_out_kg_s: balance.mass_out,
                mass_error: balance.mass_error,
            },
            heat_paths_w: HeatPaths {
                slots: readings.slots.iter().map(|s| s.heat).sum(),
                sides: readings.sides.iter().map(heat_of).sum(),
                radiation: readings.radiant.as_ref().map_or(0.0, |r| r.openings),
            },
            parts: parts(case, readings, solution),
            slots: slots(case, air, readings, &solution.verdict),
            fans: fans(case, readings),
            sides: sides(readings),
            probes: probes(case, readings),
            blocks: blocks(case, readings),
            materials: case.materials().iter().map(|m| m.name.clone()).collect(),
            by_hand: numbers.max_air_rise.and_then(|_| ByHand::of(case)),
            warnings: Vec::new(),
        };
        summary.warnings = warnings(run, readings, &summary.slots);
        summary
    }

    /// The file's text.
    ///
    /// # Errors
    /// What the serialiser reports.
    pub fn to_json(&self) -> serde_json::Result<String> {
        serde_json::to_string_pretty(self).map(|mut text| {
            text.push('\n');
            text
        })
    }

    /// The least margin of all parts with a limit [K].
    pub fn least_margin(&self) -> Option<f64> {
        self.parts.iter().filter_map(|p| p.margin_k).min_by(f64::total_cmp)
    }
}

/// The verdict in the words of the files.
pub fn verdict_word(verdict: &Verdict) -> &'static str {
    match verdict {
        Verdict::Settled => "settled",
        Verdict::Swaying { .. } => "swaying",
        Verdict::RunsAway(_) => "runs away",
        Verdict::Drifting => "drifting",
        Verdict::StoppedEarly => "stopped early",
    }
}

fn solved(solution: &Solution) -> bool {
    if matches!(solution.verdict, Verdict::RunsAway(_)) {
        return false;
    }
    let bounded = matches!(&solution.verdict, Verdict::Swaying { band, .. } if !band.is_empty());
    bounded || solution.history.last().is_some_and(|row| row.residuals.largest() <= SOLVED)
}

fn stopped_by(run: &Run) -> Option<&'static str> {
    match (run.interruption, run.solution.stop) {
        (Some(Interruption::Signal), _) => Some("signal"),
        (Some(Interruption::TimeLimit), _) => Some("time limit"),
        (None, StopReason::IterationLimit) => Some("iteration limit"),
        (None, StopReason::Stalled) => Some("stalled"),
        (None, StopReason::Converged | StopReason::Asked | StopReason::RanAway) => None,
    }
}

fn parts(case: &Case, readings: &Readings, solution: &Solution) -> Vec<Part> {
    let (verdict, solved) = (&solution.verdict, solved(solution));
    let band = |n: usize| match verdict {
        Verdict::Swaying { band, .. } => band.get(n).map(|b| b.map(|r| readings.ambient + r)),
        _ => None,
    };
    let part = |(n, part): (usize, &crate::case::Part)| {
        let runs_away = matches!(verdict, Verdict::RunsAway(_));
        let found = readings.parts.get(n).copied().flatten().filter(|_| !runs_away);
        let celsius = |rise: f64| readings.ambient + rise;
        let max_c = found.map(|f| celsius(f.max));
        let limit_c = part.limit.map(super::readings::celsius);
        let follows = part.blocks.iter().any(|b| case.blocks()[*b].curve.is_some());
        let heat =
            if follows { part.blocks.iter().map(|b| readings.heats[*b]).sum() } else { part.heat };
        let junction_c = hottest_junction(case, readings, part).filter(|_| !runs_away);
        let hottest = max_c.map(|max| band(n).map_or(max, |b| max.max(b[1])));
        let hottest = match part.limit_at {
            LimitAt::Part => hottest,
            // A junction sways with its part.
            LimitAt::Junction => {
                let sway = hottest.zip(max_c).map_or(0.0, |(high, max)| high - max);
                junction_c.map(|t| t + sway)
            }
        };
        Part {
            name: part.name.clone(),
            heat_w: heat,
            radiated_w: readings
                .radiant
                .as_ref()
                .map(|r| part.blocks.iter().map(|b| r.blocks[*b]).sum()),
            min_c: found.map(|f| celsius(f.min)),
            mean_c: found.map(|f| celsius(f.mean)),
            max_c,
            junction_c,
            band_c: band(n),
            limit_c,
            limit_at: (part.limit_at == LimitAt::Junction).then_some("junction"),
            margin_k: limit_c
                .zip(hottest)
                .filter(|_| solved)
                .map(|(limit, hottest)| limit - hottest),
            resistance_k_w: found.filter(|_| heat > 0.0).map(|f| f.max / heat),
        }
    };
    case.parts().iter().enumerate().map(part).collect()
}

/// Temperature of the hottest junction in a part [°C]: the hottest place of its block, and the
/// block's heat over the way from there.
fn hottest_junction(case: &Case, readings: &Readings, part: &crate::case::Part) -> Option<f64> {
    let of = |b: &usize| {
        let junction = case.blocks()[*b].junction?;
        let hottest = readings.ambient + readings.blocks[*b]?.max;
        Some(hottest + junction.resistance * readings.heats[*b])
    };
    part.blocks.iter().filter_map(of).max_by(f64::total_cmp)
}

fn sides(readings: &Readings) -> Vec<SideHeat> {
    let side = |side: Side| {
        let flow = readings.sides[side.index()];
        SideHeat {
            name: side_name(side),
            heat_w: flow.heat(),
            conduction_w: flow.conduction,
            convection_w: flow.open.heat,
            in_m3_s: flow.open.inflow,
            out_m3_s: flow.open.outflow,
            out_mean_c: flow.open.out_mean_rise.map(|rise| readings.ambient + rise),
            outer: flow.outer.map(|o| OuterHeat::of(&o, readings.ambient)),
        }
    };
    Side::ALL.map(side).to_vec()
}

fn probes(case: &Case, readings: &Readings) -> Vec<Probe> {
    let probe = |(probe, samples): (&crate::case::Probe, &Vec<Sample>)| {
        let mean = |of: &dyn Fn(&Sample) -> f64| {
            let sum: f64 = samples.iter().map(of).sum();
            (!samples.is_empty()).then(|| sum / samples.len() as f64)
        };
        let extreme = |of: &dyn Fn(&Sample) -> f64| samples.iter().map(of).max_by(f64::total_cmp);
        let (at_m, point) = match probe.shape {
            ProbeShape::Point(at) => (vec![at], samples.first()),
            ProbeShape::Line { from, to } => (vec![from, to], None),
        };
        let line = |value: Option<f64>| value.filter(|_| at_m.len() == 2);
        Probe {
            name: probe.name.clone(),
            temperature_c: mean(&|s| readings.ambient + s.rise),
            speed_m_s: mean(&Sample::speed),
            velocity_m_s: point.map(|s| s.velocity),
            pressure_pa: point.and_then(|s| s.pressure),
            min_c: line(extreme(&|s| -s.rise).map(|rise| readings.ambient - rise)),
            max_c: line(extreme(&|s| s.rise).map(|rise| readings.ambient + rise)),
            max_speed_m_s: line(extreme(&Sample::speed)),
            at_m,
        }
    };
    case.probes().iter().zip(&readings.probes).map(probe).collect()
}

fn blocks(case: &Case, readings: &Readings) -> Vec<Block> {
    let block = |((block, found), heat): ((&crate::case::Block, &Option<_>), f64)| Block {
        name: block.name.clone(),
        part: block.part.map(|p| case.parts()[p].name.clone()),
        material: case.materials()[block.material].name.clone(),
        heat_w: heat,
        max_c: found.map(|f: ventrise_solver::PartTemperature| readings.ambient + f.max),
    };
    let heats = readings.heats.iter().copied();
    case.blocks().iter().zip(&readings.blocks).zip(heats).map(block).collect()
}
