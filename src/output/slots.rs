//! Slots as results tell them: air, heat, areas, the loss used and the speed it refers to.

use serde::Serialize;
use ventrise_solver::{OpeningFlow, Verdict};

use crate::case::units::rounded;
use crate::case::{Case, Resistance, kind_words, side_name};

use super::readings::Readings;
use super::words::{fixed, mm};

/// A slot.
#[derive(Debug, Clone, Serialize)]
pub struct Slot {
    /// Name.
    pub name: String,
    /// Side it lies in.
    pub side: &'static str,
    /// Air that enters [m³/s].
    pub in_m3_s: f64,
    /// Air that leaves [m³/s].
    pub out_m3_s: f64,
    /// Mean temperature of the leaving air [°C].
    pub out_mean_c: Option<f64>,
    /// Mean pressure behind the slot [Pa].
    pub mean_pressure_pa: f64,
    /// Heat carried out [W].
    pub heat_w: f64,
    /// Whole (gross) area [m²].
    pub area_m2: f64,
    /// Free area of its vent, what is blocked taken off; the whole area where a loss is given [m²].
    pub free_area_m2: f64,
    /// Mean speed through the whole area, to which `loss` refers; the larger of in and out [m/s].
    pub speed_m_s: f64,
    /// Loss coefficient at this speed; `null` for a vent that no air passes.
    pub loss: Option<f64>,
    /// Reynolds number: of the vent's gaps, holes or wires; of the slot where a loss is given.
    pub reynolds: f64,
    /// `louvre`, `perforated` or `mesh`; `null` where a loss is given.
    pub vent: Option<&'static str>,
    /// Lowest and highest net flow in while the flow sways [m³/s].
    pub net_in_band_m3_s: Option<[f64; 2]>,
}

/// All slots of a run, in the case's order.
pub fn slots(
    case: &Case,
    air: &ventrise_solver::Air,
    readings: &Readings,
    verdict: &Verdict,
) -> Vec<Slot> {
    let band = |n: usize| match verdict {
        Verdict::Swaying { slot_band, .. } => slot_band.get(n).copied(),
        _ => None,
    };
    let one = |(n, (slot, flow)): (usize, (&crate::case::Slot, &OpeningFlow))| {
        let law = slot.resistance.law();
        let vent = slot.resistance.vent();
        let speed = if flow.area > 0.0 { flow.inflow.max(flow.outflow) / flow.area } else { 0.0 };
        Slot {
            name: slot.name.clone(),
            side: side_name(slot.side),
            in_m3_s: flow.inflow,
            out_m3_s: flow.outflow,
            out_mean_c: flow.out_mean_rise.map(|rise| readings.ambient + rise),
            mean_pressure_pa: flow.mean_pressure,
            heat_w: flow.heat,
            area_m2: flow.area,
            free_area_m2: flow.area * slot.resistance.open_share(),
            speed_m_s: speed,
            loss: Some(law.at(speed, air)).filter(|loss| loss.is_finite()),
            reynolds: vent.map_or(readings.slot_reynolds[n], |vent| vent.reynolds(speed, air)),
            vent: vent.map(|vent| kind_words(&vent.kind).0),
            net_in_band_m3_s: band(n),
        }
    };
    case.slots().iter().zip(&readings.slots).enumerate().map(one).collect()
}

/// What is doubtful about the slots of a run.
pub fn warnings(case: &Case, slots: &[Slot]) -> Vec<String> {
    let mut warnings = Vec::new();
    for (slot, told) in case.slots().iter().zip(slots) {
        let (more, less) = (told.in_m3_s.max(told.out_m3_s), told.in_m3_s.min(told.out_m3_s));
        if less > 0.02 * more {
            warnings.push(format!("slot \"{}\" breathes in and out at once", slot.name));
        }
        if let Some(vent) = slot.resistance.vent() {
            let [low, high] = vent.range();
            if more > 0.0 && !(low..=high).contains(&told.reynolds) {
                warnings.push(format!(
                    "the Reynolds number in the vent of slot \"{}\" is {}; its loss is known from \
                     {low} to {high}",
                    slot.name,
                    rounded(told.reynolds, 2)
                ));
            }
        }
    }
    warnings
}

/// What a slot costs in words: `loss 3`, or its vent with its sizes.
pub fn resistance_words(resistance: &Resistance) -> String {
    let vent = match resistance {
        Resistance::Loss(loss) => return format!("loss {}", rounded(*loss, 6)),
        Resistance::Vent(vent) => vent,
    };
    let (kind, sizes) = kind_words(&vent.kind);
    let mut text = format!("{kind}, {} % free", fixed(100.0 * vent.free_share, 1));
    if vent.blocked > 0.0 {
        text += &format!(", {} % of it blocked", fixed(100.0 * vent.blocked, 1));
    }
    for (key, size) in sizes {
        text += &format!(", {key} {} mm", mm(size));
    }
    text
}
