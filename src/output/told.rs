//! What `summary.json` tells, read back: the keys that pictures and page are made from.
//!
//! Keys that are missing are taken as "nothing there" and keys that are new are passed over, so
//! that a folder of an older or newer version can be shown as far as it goes.

use std::collections::BTreeMap;

use serde::Deserialize;

/// A summary as read.
#[derive(Debug, Clone, Deserialize)]
pub struct Told {
    /// Version that wrote it.
    pub ventrise: String,
    /// Which case.
    pub case: ToldCase,
    /// Whether the equations are met well enough for the numbers to mean anything.
    #[serde(default = "yes")]
    pub solved: bool,
    /// `settled`, `swaying`, `runs away`, `drifting` or `stopped early`.
    pub verdict: String,
    /// What ended it early.
    #[serde(default)]
    pub stopped_by: Option<String>,
    /// About heat that has no steady answer.
    #[serde(default)]
    pub runaway: Option<ToldRunaway>,
    /// About a sway.
    #[serde(default)]
    pub sway: Option<ToldSway>,
    /// The mesh.
    pub mesh: ToldMesh,
    /// The air.
    pub air: ToldAir,
    /// Dimensionless numbers.
    #[serde(default)]
    pub numbers: ToldNumbers,
    /// Outer iterations.
    #[serde(default)]
    pub iterations: usize,
    /// Elapsed time [s].
    #[serde(default)]
    pub wall_seconds: f64,
    /// Processor time [s].
    #[serde(default)]
    pub cpu_seconds: f64,
    /// Last residuals by name.
    #[serde(default)]
    pub residuals: BTreeMap<String, Option<f64>>,
    /// In against out.
    #[serde(default)]
    pub balance: ToldBalance,
    /// Heat by path [W].
    #[serde(default)]
    pub heat_paths_w: BTreeMap<String, Option<f64>>,
    /// Parts.
    #[serde(default)]
    pub parts: Vec<ToldPart>,
    /// Slots.
    #[serde(default)]
    pub slots: Vec<ToldSlot>,
    /// Fans.
    #[serde(default)]
    pub fans: Vec<ToldFan>,
    /// Sides.
    #[serde(default)]
    pub sides: Vec<ToldSide>,
    /// Probes.
    #[serde(default)]
    pub probes: Vec<ToldProbe>,
    /// Blocks.
    #[serde(default)]
    pub blocks: Vec<ToldBlock>,
    /// Warnings.
    #[serde(default)]
    pub warnings: Vec<String>,
}

/// Older summaries tell of solutions only.
fn yes() -> bool {
    true
}

/// Title and fingerprint.
#[derive(Debug, Clone, Deserialize)]
pub struct ToldCase {
    /// Title.
    pub title: String,
    /// SHA-256 of the case file.
    pub sha256: String,
}

/// What is known of a sway.
#[derive(Debug, Clone, Deserialize)]
pub struct ToldSway {
    /// Period [s].
    #[serde(default)]
    pub period_s: Option<f64>,
}

/// Size of the mesh.
#[derive(Debug, Clone, Deserialize)]
pub struct ToldMesh {
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

/// Air.
#[derive(Debug, Clone, Deserialize)]
pub struct ToldAir {
    /// [kg/m³].
    pub density: f64,
    /// [Pa·s].
    pub viscosity: f64,
    /// [W/(m·K)].
    pub conductivity: f64,
    /// [J/(kg·K)].
    pub specific_heat: f64,
    /// Highest speed [m/s].
    #[serde(default)]
    pub max_speed_m_s: Option<f64>,
    /// Highest temperature [°C].
    #[serde(default)]
    pub max_temperature_c: Option<f64>,
    /// Lowest temperature [°C].
    #[serde(default)]
    pub min_temperature_c: Option<f64>,
    /// Pressure of the warm column [Pa].
    #[serde(default)]
    pub stack_pressure_pa: Option<f64>,
}

/// Dimensionless numbers.
#[derive(Debug, Clone, Default, Deserialize)]
pub struct ToldNumbers {
    /// Rayleigh.
    #[serde(default)]
    pub rayleigh: Option<f64>,
    /// Prandtl.
    #[serde(default)]
    pub prandtl: Option<f64>,
    /// Reynolds number of the slots.
    #[serde(default)]
    pub vent_reynolds: Option<f64>,
}

/// In against out.
#[derive(Debug, Clone, Default, Deserialize)]
#[serde(default)]
pub struct ToldBalance {
    /// [W].
    pub heat_in_w: Option<f64>,
    /// [W].
    pub heat_out_w: Option<f64>,
    /// Relative.
    pub heat_error: Option<f64>,
    /// [kg/s].
    pub mass_in_kg_s: Option<f64>,
    /// [kg/s].
    pub mass_out_kg_s: Option<f64>,
    /// Relative.
    pub mass_error: Option<f64>,
}

/// A part.
#[derive(Debug, Clone, Deserialize)]
pub struct ToldPart {
    /// Name.
    pub name: String,
    /// Heat [W].
    #[serde(default)]
    pub heat_w: f64,
    /// Net heat radiated from its surfaces, where that is modelled [W].
    #[serde(default)]
    pub radiated_w: Option<f64>,
    /// Mean temperature [°C].
    #[serde(default)]
    pub mean_c: Option<f64>,
    /// Highest temperature [°C].
    #[serde(default)]
    pub max_c: Option<f64>,
    /// Hottest junction [°C].
    #[serde(default)]
    pub junction_c: Option<f64>,
    /// `junction` where the limit holds there.
    #[serde(default)]
    pub limit_at: Option<String>,
    /// Lowest and highest of `max_c` in a sway [°C].
    #[serde(default)]
    pub band_c: Option<[f64; 2]>,
    /// Limit [°C].
    #[serde(default)]
    pub limit_c: Option<f64>,
    /// Margin [K].
    #[serde(default)]
    pub margin_k: Option<f64>,
    /// Rise over heat [K/W].
    #[serde(default)]
    pub resistance_k_w: Option<f64>,
}

impl ToldPart {
    /// The temperature that the limit judges [°C].
    pub fn judged_c(&self) -> Option<f64> {
        if self.limit_at.is_some() { self.junction_c } else { self.max_c }
    }
}

/// Heat that has no steady answer.
#[derive(Debug, Clone, Deserialize)]
pub struct ToldRunaway {
    /// How much more one watt more makes of itself [-].
    pub growth: f64,
    /// The hottest block.
    #[serde(default)]
    pub block: Option<String>,
    /// Where it was given up [°C].
    pub given_up_at_c: f64,
}

/// A slot.
#[derive(Debug, Clone, Deserialize)]
pub struct ToldSlot {
    /// Name.
    pub name: String,
    /// Its side.
    #[serde(default)]
    pub side: Option<String>,
    /// Air in [m³/s].
    #[serde(default)]
    pub in_m3_s: f64,
    /// Air out [m³/s].
    #[serde(default)]
    pub out_m3_s: f64,
    /// Mean temperature of the leaving air [°C].
    #[serde(default)]
    pub out_mean_c: Option<f64>,
    /// Mean pressure behind it [Pa].
    #[serde(default)]
    pub mean_pressure_pa: Option<f64>,
    /// Heat carried out [W].
    #[serde(default)]
    pub heat_w: f64,
    /// Whole area [m²].
    #[serde(default)]
    pub area_m2: Option<f64>,
    /// Free area [m²].
    #[serde(default)]
    pub free_area_m2: Option<f64>,
    /// Mean speed through the whole area [m/s].
    #[serde(default)]
    pub speed_m_s: Option<f64>,
    /// Loss coefficient on that speed.
    #[serde(default)]
    pub loss: Option<f64>,
    /// Reynolds number.
    #[serde(default)]
    pub reynolds: Option<f64>,
    /// Kind of the vent, if there is one.
    #[serde(default)]
    pub vent: Option<String>,
}

/// A fan.
#[derive(Debug, Clone, Deserialize)]
pub struct ToldFan {
    /// Name.
    pub name: String,
    /// Its slot.
    #[serde(default)]
    pub slot: String,
    /// `in` or `out`.
    #[serde(default)]
    pub direction: String,
    /// Share of full speed.
    #[serde(default)]
    pub speed: f64,
    /// Flow in its direction [m³/s].
    #[serde(default)]
    pub flow_m3_s: f64,
    /// Pressure rise [Pa].
    #[serde(default)]
    pub pressure_pa: f64,
    /// Flow without pressure rise [m³/s].
    #[serde(default)]
    pub free_delivery_m3_s: Option<f64>,
    /// The flow as a share of it.
    #[serde(default)]
    pub free_delivery_share: Option<f64>,
}

/// What leaves an outer face.
#[derive(Debug, Clone, Deserialize)]
pub struct ToldOuter {
    /// Heat that the outside air takes [W].
    pub film_w: f64,
    /// Heat radiated [W].
    pub radiation_w: f64,
    /// Heat of the sun absorbed [W].
    pub sun_w: f64,
    /// Mean temperature [°C].
    pub surface_mean_c: f64,
    /// Highest temperature [°C].
    pub surface_max_c: f64,
    /// Film coefficient used [W/(m²·K)].
    pub film_w_m2_k: f64,
}

/// A side.
#[derive(Debug, Clone, Deserialize)]
pub struct ToldSide {
    /// Name.
    pub name: String,
    /// Heat by conduction [W].
    #[serde(default)]
    pub conduction_w: f64,
    /// Heat with air [W].
    #[serde(default)]
    pub convection_w: f64,
    /// Its outer face, where it has one.
    #[serde(default)]
    pub outer: Option<ToldOuter>,
    /// Air in [m³/s].
    #[serde(default)]
    pub in_m3_s: f64,
    /// Air out [m³/s].
    #[serde(default)]
    pub out_m3_s: f64,
    /// Mean temperature of the leaving air [°C].
    #[serde(default)]
    pub out_mean_c: Option<f64>,
}

/// A probe.
#[derive(Debug, Clone, Deserialize)]
pub struct ToldProbe {
    /// Name.
    pub name: String,
    /// Temperature; mean along a line [°C].
    #[serde(default)]
    pub temperature_c: Option<f64>,
    /// Speed; mean along a line [m/s].
    #[serde(default)]
    pub speed_m_s: Option<f64>,
    /// Lowest along a line [°C].
    #[serde(default)]
    pub min_c: Option<f64>,
    /// Highest along a line [°C].
    #[serde(default)]
    pub max_c: Option<f64>,
}

/// A block.
#[derive(Debug, Clone, Deserialize)]
pub struct ToldBlock {
    /// Highest temperature [°C].
    #[serde(default)]
    pub max_c: Option<f64>,
}
