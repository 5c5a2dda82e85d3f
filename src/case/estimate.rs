//! Hand estimates: how warm, how thick the boundary layer, how far from laminar.

use ventrise_solver::{Air, SideCondition};

use super::model::{AirChoice, Case};

/// Acceleration of gravity [m/s²], standard value (ISO 80000-3).
pub const GRAVITY: f64 = 9.80665;

/// Rayleigh number of a vertical plate beyond which its layer turns turbulent (Gr·Pr = 1e9;
/// handbook value, from memory).
const TURBULENT: f64 = 1e9;

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
    /// level (handbook value, from memory); sides at a temperature count with their difference to
    /// ambient. The layer is 5·L·(Gr/4)^(-1/4), where Ostrach's similarity profiles for air have
    /// died out (S. Ostrach, NACA Report 1111, 1953; from memory).
    pub fn of(case: &Case) -> Estimate {
        let ambient = case.ambient();
        let air = match case.air() {
            AirChoice::Film => Air::dry(ambient.temperature, ambient.pressure),
            AirChoice::Given { air, .. } => *air,
        };
        let section = case.section();
        let depth = |x: f64| match section.geometry {
            ventrise_mesh::Geometry::Planar { depth } => depth,
            ventrise_mesh::Geometry::Axisymmetric => std::f64::consts::TAU * x,
        };
        let (mut heat, mut area, mut length) = (0.0, 0.0, 0.0_f64);
        for block in case.blocks() {
            let hot_part = block.part.is_some_and(|p| case.parts()[p].heat != 0.0);
            if block.heat == 0.0 && !hot_part {
                continue;
            }
            let [x0, x1] = block.rectangle.x;
            let tall = block.rectangle.y[1] - block.rectangle.y[0];
            heat += block.heat.abs();
            area += (depth(x0) + depth(x1)) * tall + 2.0 * depth(0.5 * (x0 + x1)) * (x1 - x0);
            length = length.max(tall);
        }
        let mut rise = 0.0_f64;
        if area > 0.0 {
            rise = (heat / area * length.powf(0.25) / 1.4).powf(0.8);
        }
        for side in case.sides() {
            let side_rise = match side {
                SideCondition::Temperature(t) => (t - ambient.temperature).abs(),
                SideCondition::Flux(q) => (q.abs() * section.height.powf(0.25) / 1.4).powf(0.8),
                _ => 0.0,
            };
            if side_rise > 0.0 {
                length = section.height;
            }
            rise = rise.max(side_rise);
        }
        if length == 0.0 {
            length = section.height;
        }
        let viscosity = air.viscosity / air.density;
        let diffusivity = air.conductivity / (air.density * air.specific_heat);
        let drive = GRAVITY * air.expansion * length.powi(3);
        let rayleigh = drive * rise / (viscosity * diffusivity);
        // At least 2 K, so that a cold case gets a usable mesh too.
        let grashof = drive * rise.clamp(2.0, 200.0) / (viscosity * viscosity);
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
        let conductance = case.slot_area(slot) / (1.0 + slot.loss).sqrt();
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
