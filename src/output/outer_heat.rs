//! What leaves a side by its outer face, for the files.

use serde::Serialize;
use ventrise_solver::OuterFlow;

/// What leaves a side by its outer face.
#[derive(Debug, Clone, Serialize)]
pub struct OuterHeat {
    /// Heat that the outside air takes [W].
    pub film_w: f64,
    /// Heat radiated to the surroundings, net [W].
    pub radiation_w: f64,
    /// Heat of the sun absorbed [W].
    pub sun_w: f64,
    /// Mean temperature of the outer face [°C].
    pub surface_mean_c: f64,
    /// Its highest temperature [°C].
    pub surface_max_c: f64,
    /// Film coefficient used [W/(m²·K)].
    pub film_w_m2_k: f64,
    /// Area without slots [m²].
    pub area_m2: f64,
}

impl OuterHeat {
    /// From the solver's flow and the ambient temperature [°C].
    pub fn of(flow: &OuterFlow, ambient: f64) -> OuterHeat {
        OuterHeat {
            film_w: flow.film,
            radiation_w: flow.radiation,
            sun_w: flow.sun,
            surface_mean_c: ambient + flow.mean_rise,
            surface_max_c: ambient + flow.max_rise,
            film_w_m2_k: flow.coefficient,
            area_m2: flow.area,
        }
    }
}
