//! The hand estimate of a case beside what was computed.

use serde::Serialize;

use crate::case::{Case, Estimate};

use super::words::{fixed, shortened, sized};

/// Seconds in an hour: flows are shown per hour.
const HOUR: f64 = 3600.0;
/// Most columns of a part's name.
const NAME: usize = 32;

/// A hand estimate, good to a factor of two, without radiation.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct ByHand {
    /// Rise of the heated surfaces above the air beside them [K].
    pub surface_rise_k: f64,
    /// Draught through the slots, an upper bound [m³/s].
    pub flow_m3_s: Option<f64>,
    /// Rise of the leaving air above ambient at that draught [K].
    pub exit_rise_k: Option<f64>,
}

impl ByHand {
    /// The estimate of a case with air in it; `None` without heat.
    pub fn of(case: &Case) -> Option<ByHand> {
        let estimate = Estimate::of(case);
        (estimate.rise > 0.0).then(|| ByHand {
            surface_rise_k: estimate.rise,
            flow_m3_s: estimate.draught.map(|d| d.flow),
            exit_rise_k: estimate.draught.map(|d| d.rise),
        })
    }

    /// In a sentence, beside the computed rise of the hottest part above ambient [K].
    pub fn beside(&self, part: &str, rise: f64) -> String {
        let air = match (self.exit_rise_k, self.flow_m3_s) {
            (Some(rise), Some(flow)) => format!(
                ", which leaves {} K above ambient or more ({} m3/h at most)",
                fixed(rise, 1),
                sized(HOUR * flow, 2, 0.0)
            ),
            _ => String::new(),
        };
        format!(
            "surfaces about {} K above the air{air}. Computed: \"{}\" {} K above ambient.",
            fixed(self.surface_rise_k, 0),
            shortened(part, NAME),
            fixed(rise, 1)
        )
    }
}
