//! Fans as results tell them: where each works on its curve.

use serde::Serialize;

use crate::case::Case;

use super::readings::Readings;
use super::words::{fixed, sized};

/// Seconds in an hour: flows are shown per hour.
const HOUR: f64 = 3600.0;

/// A fan's operating point.
#[derive(Debug, Clone, Serialize)]
pub struct Fan {
    /// Name.
    pub name: String,
    /// Its slot.
    pub slot: String,
    /// `in` or `out`.
    pub direction: &'static str,
    /// Share of full speed; zero: it stands.
    pub speed: f64,
    /// Flow in its direction [m³/s].
    pub flow_m3_s: f64,
    /// Pressure rise at this flow, speed and density of the air [Pa]; zero when it stands.
    pub pressure_pa: f64,
    /// Flow without any pressure rise, at this speed [m³/s]; `null` where the curve does not lead
    /// there or the fan stands.
    pub free_delivery_m3_s: Option<f64>,
    /// The flow as a share of free delivery.
    pub free_delivery_share: Option<f64>,
}

/// All fans that stand in a slot, in the case's order.
pub fn fans(case: &Case, readings: &Readings) -> Vec<Fan> {
    let one = |(fan, at): (&ventrise_solver::Fan, &ventrise_solver::FanPoint), name: &str| {
        let free = Some(fan).filter(|fan| fan.runs()).and_then(|fan| fan.free_delivery());
        Fan {
            name: name.into(),
            slot: case.slots()[at.slot].name.clone(),
            direction: if fan.inward { "in" } else { "out" },
            speed: fan.speed,
            flow_m3_s: at.flow,
            pressure_pa: at.pressure,
            free_delivery_m3_s: free,
            free_delivery_share: free.map(|free| at.flow / free),
        }
    };
    let fans = case.fans().iter().zip(&readings.fans);
    fans.filter_map(|(fan, at)| Some(one((&fan.curve_fan(), at.as_ref()?), &fan.name))).collect()
}

/// What is doubtful about the operating points.
pub fn warnings(case: &Case, readings: &Readings) -> Vec<String> {
    let mut warnings = Vec::new();
    for (fan, at) in case.fans().iter().zip(&readings.fans) {
        let (name, fan) = (&fan.name, fan.curve_fan());
        let Some(at) = at.filter(|_| fan.runs()) else { continue };
        let per_hour = |flow: f64| format!("{} m3/h", sized(HOUR * flow, 2, 0.0));
        let flow = per_hour(at.flow.abs());
        if at.flow < 0.0 {
            warnings.push(format!(
                "fan \"{name}\": {flow} go back through it; the curve says nothing of that, and \
                 its pressure at no flow is taken"
            ));
        } else if at.flow > fan.last_flow() * (1.0 + 1e-9) {
            warnings.push(format!(
                "fan \"{name}\" works at {flow}, beyond its curve, which ends at {}; the last line \
                 of the curve is drawn on",
                per_hour(fan.last_flow())
            ));
        } else if at.flow < fan.dip_end() {
            warnings.push(format!(
                "fan \"{name}\" works at {flow}, left of the dip: up to {} its pressure rises with \
                 the flow somewhere, and a real fan may surge or find another point",
                per_hour(fan.dip_end())
            ));
        }
    }
    warnings
}

/// A fan's line for tables: speed [%], flow [m³/h], pressure [Pa], free delivery [m³/h], share [%].
pub fn cells(fan: [f64; 3], free: [Option<f64>; 2]) -> [String; 5] {
    let [speed, flow, pressure] = fan;
    let dash = || "-".to_string();
    [
        fixed(100.0 * speed, 0),
        sized(HOUR * flow, 2, 0.0),
        sized(pressure, 3, 0.0),
        free[0].map_or_else(dash, |free| sized(HOUR * free, 2, 0.0)),
        free[1].map_or_else(dash, |share| fixed(100.0 * share, 1)),
    ]
}
