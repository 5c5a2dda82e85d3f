//! The checked case, in SI.

use std::ops::Range;

use ventrise_mesh::{Geometry, Rectangle, Side};
use ventrise_solver::{Air, LossLaw, Settings, SideCondition, Vent};

use super::error::CaseError;

/// The computed plane.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Section {
    /// Planar (with its depth) or axisymmetric.
    pub geometry: Geometry,
    /// Extent along x; the outer radius when axisymmetric [m].
    pub width: f64,
    /// Extent along y [m].
    pub height: f64,
}

/// The air outside.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Ambient {
    /// Temperature [K].
    pub temperature: f64,
    /// Absolute pressure [Pa].
    pub pressure: f64,
    /// Altitude that the pressure was derived from [m], when given so.
    pub altitude: Option<f64>,
}

/// Where the air's properties come from.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum AirChoice {
    /// Dry air at the film temperature of the result.
    Film,
    /// The case's own numbers, used exactly as given.
    Given {
        /// The numbers.
        air: Air,
        /// Temperature at which the density holds [K]. It changes nothing in the equations: the
        /// buoyancy ρ₀·β·(T − T_ambient) of the linear density law is the same whatever
        /// temperature ρ₀ belongs to.
        reference_temperature: f64,
    },
}

/// A solid material.
#[derive(Debug, Clone, PartialEq)]
pub struct Material {
    /// Name in the case file.
    pub name: String,
    /// Conductivity along x and y [W/(m·K)].
    pub conductivity: [f64; 2],
    /// Density [kg/m³], when known (a steady solution does not need it).
    pub density: Option<f64>,
    /// Specific heat [J/(kg·K)], when known (a steady solution does not need it).
    pub specific_heat: Option<f64>,
    /// Emissivity, as the case writes it.
    pub emissivity: Option<f64>,
    /// Source of the library's numbers; `None` for the case's own materials.
    pub source: Option<&'static str>,
}

/// A solid rectangle, one per copy of a pattern.
#[derive(Debug, Clone, PartialEq)]
pub struct Block {
    /// Name; copies of a pattern are numbered ("fin 1", "fin 2", ...).
    pub name: Option<String>,
    /// Where it is [m].
    pub rectangle: Rectangle,
    /// Index into [`Case::materials`].
    pub material: usize,
    /// Index into [`Case::parts`].
    pub part: Option<usize>,
    /// Heat released in the whole block [W]; below zero when it is cooled.
    pub heat: f64,
    /// How the heat follows the block's mean temperature; `heat` then is that at `heat-at`, or at
    /// ambient.
    pub curve: Option<HeatCurve>,
    /// The way to a junction in it.
    pub junction: Option<Junction>,
    /// Emissivity of its surface in place of the material's, as the case writes it.
    pub emissivity: Option<f64>,
}

/// Heat that follows temperature.
#[derive(Debug, Clone, PartialEq)]
pub enum HeatCurve {
    /// heat·(1 + slope·(T − at)).
    Slope {
        /// Relative change [1/K].
        slope: f64,
        /// Temperature at which the heat is given [K].
        at: f64,
    },
    /// Temperatures [K], rising, and heats [W], straight between and beyond.
    Points(Vec<[f64; 2]>),
}

impl HeatCurve {
    /// Two or more points of the curve of a block with this heat [K], [W].
    pub fn points(&self, heat: f64) -> Vec<[f64; 2]> {
        match self {
            HeatCurve::Points(points) => points.clone(),
            // Down to half of the heat at the most: no point may lie below zero.
            HeatCurve::Slope { slope, at } => {
                let step = if *slope < 0.0 { -0.5 / slope } else { 100.0 };
                vec![[*at, heat], [at + step, heat * (1.0 + slope * step)]]
            }
        }
    }
}

/// A resistance from the hottest place of a block to a junction in it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Junction {
    /// Which of the data sheet's numbers it is.
    pub by: JunctionBy,
    /// Junction above the block's hottest place, over the block's heat [K/W].
    pub resistance: f64,
}

/// The data sheet's numbers for the way to the junction.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum JunctionBy {
    /// Junction to case, all heat through the case.
    ThetaJc,
    /// Junction to top of case, heat going where it goes on the standard's board.
    PsiJt,
}

/// Where a limit holds.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum LimitAt {
    /// At the part's hottest place.
    #[default]
    Part,
    /// At the hottest junction in it.
    Junction,
}

/// A joint between two touching blocks.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Joint {
    /// Indices into [`Case::blocks`].
    pub blocks: [usize; 2],
    /// Resistance of a unit of area [K·m²/W].
    pub resistance: f64,
}

/// Blocks judged together.
#[derive(Debug, Clone, PartialEq)]
pub struct Part {
    /// Name.
    pub name: String,
    /// Its blocks, indices into [`Case::blocks`].
    pub blocks: Vec<usize>,
    /// Highest allowed temperature [K].
    pub limit: Option<f64>,
    /// Where it holds.
    pub limit_at: LimitAt,
    /// Heat of all its blocks [W].
    pub heat: f64,
}

/// What the case says about the outer face of a side, beside what its condition holds.
#[derive(Debug, Clone, PartialEq)]
pub struct OuterSide {
    /// The wall between the section's edge and the outer face.
    pub wall: Option<Wall>,
    /// Sun on it [W/m²] and the share absorbed.
    pub sun: Option<(f64, f64)>,
}

/// A wall too thin to be drawn as blocks: a resistance across.
#[derive(Debug, Clone, PartialEq)]
pub struct Wall {
    /// Name of its material.
    pub material: String,
    /// Thickness [m].
    pub thickness: f64,
    /// Conductivity along x and y [W/(m·K)].
    pub conductivity: [f64; 2],
}

/// An opening in the section's edge.
#[derive(Debug, Clone, PartialEq)]
pub struct Slot {
    /// Name.
    pub name: String,
    /// The side it lies in.
    pub side: Side,
    /// Extent along the side [m].
    pub span: [f64; 2],
    /// What it costs the air to pass.
    pub resistance: Resistance,
    /// Fan in it, an index into [`Case::fans`].
    pub fan: Option<usize>,
}

/// A fan.
#[derive(Debug, Clone, PartialEq)]
pub struct Fan {
    /// Name.
    pub name: String,
    /// Points (flow [m³/s], pressure [Pa]) at full speed.
    pub curve: Vec<[f64; 2]>,
    /// Density that the curve holds for [kg/m³].
    pub density: f64,
    /// Share of full speed; zero: it stands.
    pub speed: f64,
    /// Whether it blows into the section.
    pub inward: bool,
    /// Loss coefficient of the standing fan on the speed through the slot, when given [-].
    pub stopped_loss: Option<f64>,
}

/// What it costs the air to pass a slot.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Resistance {
    /// Loss coefficient on the speed through the slot's whole area [-].
    Loss(f64),
    /// The vent that covers it.
    Vent(Vent),
}

impl Resistance {
    /// The loss law on the speed through the slot's whole area.
    pub fn law(&self) -> LossLaw {
        match self {
            Resistance::Loss(loss) => LossLaw { loss: *loss, friction: 0.0 },
            Resistance::Vent(vent) => vent.law(),
        }
    }

    /// The vent, where there is one.
    pub fn vent(&self) -> Option<&Vent> {
        match self {
            Resistance::Loss(_) => None,
            Resistance::Vent(vent) => Some(vent),
        }
    }

    /// Share of the slot's area that is free; all of it where a loss is given.
    pub fn open_share(&self) -> f64 {
        self.vent().map_or(1.0, Vent::open_share)
    }
}

/// A named place whose values are reported.
#[derive(Debug, Clone, PartialEq)]
pub struct Probe {
    /// Name.
    pub name: String,
    /// Point or line.
    pub shape: ProbeShape,
}

/// Where a probe is.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum ProbeShape {
    /// A point (x, y) [m].
    Point([f64; 2]),
    /// A straight line between two points [m].
    Line {
        /// First end (x, y).
        from: [f64; 2],
        /// Last end (x, y).
        to: [f64; 2],
    },
}

/// What the case says about the mesh; `None` where the default is to be found.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct MeshChoice {
    /// Largest cell [m].
    pub cell: Option<f64>,
    /// Plain uniform mesh with so many cells along x and y.
    pub cells: Option<[usize; 2]>,
    /// First cell at solid surfaces [m].
    pub wall: Option<f64>,
    /// Largest ratio of neighbouring cell sizes.
    pub growth: f64,
    /// Least number of cells across every gap, slot and fin.
    pub across: usize,
}

impl Default for MeshChoice {
    fn default() -> Self {
        MeshChoice { cell: None, cells: None, wall: None, growth: 1.2, across: 8 }
    }
}

/// When to stop.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SolveChoice {
    /// Bound for all residuals [-].
    pub tolerance: f64,
    /// Bound for the outer iterations.
    pub max_iterations: usize,
}

impl Default for SolveChoice {
    fn default() -> Self {
        let settings = Settings::default();
        SolveChoice { tolerance: settings.tolerance, max_iterations: settings.max_iterations }
    }
}

/// A checked case. Built by [`Case::parse`] and [`Case::read`] only.
#[derive(Debug, Clone, PartialEq)]
pub struct Case {
    pub(super) title: String,
    pub(super) section: Section,
    pub(super) ambient: Ambient,
    pub(super) air: AirChoice,
    pub(super) materials: Vec<Material>,
    pub(super) blocks: Vec<Block>,
    pub(super) parts: Vec<Part>,
    pub(super) joints: Vec<Joint>,
    pub(super) slots: Vec<Slot>,
    pub(super) fans: Vec<Fan>,
    pub(super) sides: [SideCondition; 4],
    pub(super) side_emissivities: [Option<f64>; 4],
    pub(super) outer_sides: [Option<OuterSide>; 4],
    pub(super) probes: Vec<Probe>,
    pub(super) mesh: MeshChoice,
    pub(super) solve: SolveChoice,
    pub(super) origin: Origin,
}

/// The text that a case was read from.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Origin {
    pub file: String,
    pub text: String,
    pub sha256: String,
    pub warnings: Vec<CaseError>,
    /// Keys of `[mesh]` and the byte ranges of their values.
    pub mesh_keys: Vec<(&'static str, Range<usize>)>,
}

impl Case {
    /// Title; the file's name without its ending when the case gives none.
    pub fn title(&self) -> &str {
        &self.title
    }

    /// The computed plane.
    pub fn section(&self) -> &Section {
        &self.section
    }

    /// The air outside.
    pub fn ambient(&self) -> &Ambient {
        &self.ambient
    }

    /// Where the air's properties come from.
    pub fn air(&self) -> &AirChoice {
        &self.air
    }

    /// Materials in use and the case's own ones.
    pub fn materials(&self) -> &[Material] {
        &self.materials
    }

    /// Solid blocks, patterns expanded. Their order is the order of the mesh's regions.
    pub fn blocks(&self) -> &[Block] {
        &self.blocks
    }

    /// Parts, in the order of their first blocks.
    pub fn parts(&self) -> &[Part] {
        &self.parts
    }

    /// Joints, pair by pair of touching blocks.
    pub fn joints(&self) -> &[Joint] {
        &self.joints
    }

    /// Slots, in the order of the file.
    pub fn slots(&self) -> &[Slot] {
        &self.slots
    }

    /// Fans, in the order of the file.
    pub fn fans(&self) -> &[Fan] {
        &self.fans
    }

    /// Whether a fan turns in one of the slots.
    pub fn is_driven(&self) -> bool {
        self.slots.iter().filter_map(|s| s.fan).any(|f| self.fans[f].speed > 0.0)
    }

    /// Conditions of the sides, by [`Side::index`].
    pub fn sides(&self) -> &[SideCondition; 4] {
        &self.sides
    }

    /// Emissivities of the sides' inner faces as the case writes them, by [`Side::index`].
    pub fn side_emissivities(&self) -> &[Option<f64>; 4] {
        &self.side_emissivities
    }

    /// What the case says about the sides' outer faces, by [`Side::index`].
    pub fn outer_sides(&self) -> &[Option<OuterSide>; 4] {
        &self.outer_sides
    }

    /// Whether radiation is modelled: the case writes an emissivity somewhere.
    pub fn radiates(&self) -> bool {
        self.blocks.iter().any(|b| b.emissivity.is_some())
            || self.materials.iter().any(|m| m.emissivity.is_some())
            || self.side_emissivities.iter().any(Option::is_some)
    }

    /// Emissivity of a block's surface: its own, its material's, the library's.
    pub fn emissivity(&self, block: &Block) -> Option<f64> {
        let material = &self.materials[block.material];
        let of_library = || {
            let found = material.source.and_then(|_| super::materials::find(&material.name))?;
            Some(found.emissivity)
        };
        block.emissivity.or(material.emissivity).or_else(of_library)
    }

    /// Probes, in the order of the file.
    pub fn probes(&self) -> &[Probe] {
        &self.probes
    }

    /// What the case says about the mesh.
    pub fn mesh_choice(&self) -> &MeshChoice {
        &self.mesh
    }

    /// When to stop.
    pub fn solve_choice(&self) -> &SolveChoice {
        &self.solve
    }

    /// File name that the case was read under.
    pub fn file(&self) -> &str {
        &self.origin.file
    }

    /// The text of the case file.
    pub fn text(&self) -> &str {
        &self.origin.text
    }

    /// SHA-256 of the text, in hexadecimal.
    pub fn sha256(&self) -> &str {
        &self.origin.sha256
    }

    /// Heat of all blocks [W].
    pub fn heat(&self) -> f64 {
        self.blocks.iter().map(|b| b.heat).sum()
    }

    /// Whole (gross) area of a slot [m²]: over the depth, or around the full revolution.
    pub fn slot_area(&self, slot: &Slot) -> f64 {
        let [from, to] = slot.span;
        match (self.section.geometry, slot.side) {
            (Geometry::Planar { depth }, _) => depth * (to - from),
            (Geometry::Axisymmetric, Side::Bottom | Side::Top) => {
                std::f64::consts::PI * (to - from) * (to + from)
            }
            (Geometry::Axisymmetric, Side::Right) => {
                2.0 * std::f64::consts::PI * self.section.width * (to - from)
            }
            (Geometry::Axisymmetric, Side::Left) => 0.0,
        }
    }

    /// Middle height of a slot [m].
    pub fn slot_height(&self, slot: &Slot) -> f64 {
        match slot.side {
            Side::Bottom => 0.0,
            Side::Top => self.section.height,
            Side::Left | Side::Right => 0.5 * (slot.span[0] + slot.span[1]),
        }
    }
}

/// Name of a side in the case file and in results.
pub fn side_name(side: Side) -> &'static str {
    match side {
        Side::Left => "left",
        Side::Right => "right",
        Side::Bottom => "bottom",
        Side::Top => "top",
    }
}
