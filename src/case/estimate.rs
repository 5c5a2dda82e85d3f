//! Hand estimates: how warm, how thick the boundary layer, how far from laminar.

use ventrise_solver::{Air, SideCondition};

use super::model::{AirChoice, Case};
use super::surfaces::{Gap, Surface, heated_surfaces};

/// Acceleration of gravity [m/s²], standard value (ISO 80000-3).
pub const GRAVITY: f64 = 9.80665;

/// Rayleigh number of a vertical plate beyond which its layer turns turbulent (Gr·Pr = 1e9;
/// handbook value, from memory).
const TURBULENT: f64 = 1e9;

/// Factor of the hand formula for vertical surfaces h = 1.4·(ΔT/L)^(1/4) [W/(m^(7/4)·K^(5/4))].
const PLATE: f64 = 1.4;

/// Speed of a natural draught in vents, at which their loss is taken [m/s] (common practice, no
/// source).
const USUAL_SPEED: f64 = 0.1;

/// A rise [K] beyond which it does not matter how much more it is.
const HOPELESS: f64 = 1e4;

/// A first idea of a case before anything is solved. Good to a factor of two at best.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Estimate {
    /// Height of the heated surfaces L [m].
    pub length: f64,
    /// Rise of the heated surfaces above the air beside them ΔT [K].
    pub rise: f64,
    /// Air at ambient temperature.
    pub air: Air,
    /// Rayleigh number g·β·ΔT·L³/(ν·α) [-].
    pub rayleigh: f64,
    /// Thickness of the natural-convection layer at the top of a heated surface [m].
    pub layer: f64,
    /// Draught through the slots, when some lie above others.
    pub draught: Option<Draught>,
}

/// The draught that heat drives through slots, all air mixed: an upper bound.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Draught {
    /// Volume flow [m³/s].
    pub flow: f64,
    /// Rise of the leaving air above ambient [K].
    pub rise: f64,
}

impl Estimate {
    /// Estimates a case.
    ///
    /// The rise follows from the heat over the air-side area A of the heated blocks with
    /// h = 1.4·(ΔT/L)^(1/4) W/(m²·K), the usual hand formula for vertical surfaces in air at sea
    /// level (handbook value, from memory), bounded in gaps by the limit of narrow channels (see
    /// `choked_rise`); sides at a temperature count with their difference to ambient. The layer is 5·L·(Gr/4)^(-1/4), where Ostrach's similarity profiles for air have
    /// died out (S. Ostrach, NACA Report 1111, 1953; from memory).
    pub fn of(case: &Case) -> Estimate {
        let ambient = case.ambient();
        let air = match case.air() {
            AirChoice::Film => Air::dry(ambient.temperature, ambient.pressure),
            AirChoice::Given { air, .. } => *air,
        };
        let section = case.section();
        let viscosity = air.viscosity / air.density;
        let diffusivity = air.conductivity / (air.density * air.specific_heat);
        let surfaces = heated_surfaces(case);
        let heat: f64 = case.blocks().iter().map(|b| b.heat.abs()).sum();
        let area: f64 = surfaces.iter().map(|s| s.area).sum();
        let mut length = surfaces.iter().fold(0.0_f64, |length, s| length.max(s.height));
        let (mut free_rise, mut rise) = (0.0_f64, 0.0_f64);
        if area > 0.0 {
            free_rise = (heat / area * length.powf(0.25) / PLATE).powf(0.8);
            let channel = GRAVITY * air.expansion * air.conductivity / (viscosity * diffusivity);
            rise = choked_rise(&surfaces, heat, length, channel, free_rise);
        }
        for side in case.sides() {
            let side_rise = match side {
                SideCondition::Temperature(t) => (t - ambient.temperature).abs(),
                SideCondition::Flux(q) => (q.abs() * section.height.powf(0.25) / PLATE).powf(0.8),
                _ => 0.0,
            };
            if side_rise > 0.0 {
                length = section.height;
            }
            (free_rise, rise) = (free_rise.max(side_rise), rise.max(side_rise));
        }
        if length == 0.0 {
            length = section.height;
        }
        // Gaps narrower than the layer have no layer: its numbers are those of the free surface.
        let drive = GRAVITY * air.expansion * length.powi(3);
        let rayleigh = drive * free_rise / (viscosity * diffusivity);
        // At least 2 K, so that a cold case gets a usable mesh too.
        let grashof = drive * free_rise.clamp(2.0, 200.0) / (viscosity * viscosity);
        let layer = 5.0 * length * (grashof.max(4.0) / 4.0).powf(-0.25);
        let layer = layer.min(section.width.max(section.height));
        Estimate { length, rise, air, rayleigh, layer, draught: draught(case, &air) }
    }

    /// Sentences about what the estimate makes doubtful.
    pub fn doubts(&self) -> Vec<String> {
        let mut doubts = Vec::new();
        if self.rayleigh > TURBULENT {
            doubts.push(format!(
                "by hand the Rayleigh number is about {:.0e}, beyond the laminar range (1e9)",
                self.rayleigh
            ));
        }
        if self.rise > 150.0 {
            doubts.push(format!(
                "by hand the surfaces get about {:.0} K above the air; check the heat",
                self.rise
            ));
        }
        doubts
    }
}

/// The rise at which all surfaces together give off the heat, none more than the fully developed
/// flow of the gap in front of it can carry away: h = k·Nu/b with Nu = El/24 between two heated
/// faces, El/12 when one is heated, and the channel Rayleigh number El = g·β·ΔT·b⁴/(ν·α·L) on the
/// gap's width b (aung-1972, bar-cohen-1984 in docs/references.md). `channel` is
/// g·β·k/(ν·α) [W/(m⁴·K²)], `free` the rise were there no gaps.
fn choked_rise(surfaces: &[Surface], heat: f64, length: f64, channel: f64, free: f64) -> f64 {
    let given_off = |rise: f64| -> f64 {
        let plate = PLATE * (rise / length).powf(0.25);
        let coefficient = |surface: &Surface| match surface.gap {
            Some(Gap { width, both_heated }) => {
                let share = if both_heated { 24.0 } else { 12.0 };
                plate.min(channel * rise * width.powi(3) / (share * surface.height))
            }
            None => plate,
        };
        surfaces.iter().map(|s| s.area * coefficient(s) * rise).sum()
    };
    let enough = heat * (1.0 - 1e-9);
    let (mut low, mut high) = (free, free);
    while given_off(high) < enough && high < HOPELESS {
        (low, high) = (high, 2.0 * high);
    }
    if high == free {
        return free;
    }
    for _ in 0..60 {
        let middle = 0.5 * (low + high);
        if given_off(middle) < enough { low = middle } else { high = middle }
    }
    high.min(HOPELESS)
}

/// Balance of draught and losses for air heated all at once at the middle height of the heat:
/// ρ·g·β·ΔT·H = ρ/2·V²·(C_in + C_out) with C = 1/(Σ A/√(1 + K))² of the slots below and above, and
/// heat = ρ·c_p·V·ΔT, so V³ = 2·g·β·H·heat/(ρ·c_p·(C_in + C_out)).
fn draught(case: &Case, air: &Air) -> Option<Draught> {
    let heat: f64 = case.blocks().iter().map(|b| b.heat.max(0.0)).sum();
    let middle =
        case.blocks().iter().map(|b| b.heat.max(0.0) * 0.5 * (b.rectangle.y[0] + b.rectangle.y[1]));
    let middle = middle.sum::<f64>() / heat;
    // Conductance A/sqrt(1 + K) and its mean height, below and above the heat.
    let (mut below, mut above, mut top) = (0.0, 0.0, 0.0);
    for slot in case.slots() {
        let conductance =
            case.slot_area(slot) / (1.0 + slot.resistance.law().at(USUAL_SPEED, air)).sqrt();
        let height = case.slot_height(slot);
        if height < middle {
            below += conductance;
        } else {
            above += conductance;
            top += conductance * height;
        }
    }
    if !(heat > 0.0 && below > 0.0 && above > 0.0) {
        return None;
    }
    let chimney = top / above - middle;
    let resistance = below.powi(-2) + above.powi(-2);
    let capacity = air.density * air.specific_heat;
    let flow = (2.0 * GRAVITY * air.expansion * chimney * heat / (capacity * resistance)).cbrt();
    (flow > 0.0).then(|| Draught { flow, rise: heat / (capacity * flow) })
}
