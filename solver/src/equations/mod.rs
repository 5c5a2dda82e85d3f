//! The discrete equations: one routine per equation gives its residual and its coefficients.
//!
//! Convection is written as Σ F·(φ_face − φ_P), F outward [kg/s]: the flux form less φ_P times the
//! cell's mass imbalance. Both agree once mass is conserved, and this form keeps temperatures
//! between their neighbours before.

pub(crate) mod energy;
pub(crate) mod mass;
pub(crate) mod momentum;

use crate::Convection;

/// One neighbour's share: [exact, implicit] coefficients of (φ_nb − φ_P).
///
/// Exact: D − F·w with w the neighbour's weight in the face value. Implicit: the same while
/// positive, else upwind, so that relaxation stays stable. On coarser meshes D is raised until
/// |F|/D is within `peclet_limit`: central differences there would show waves, not the flow. `conductance` D, outward `flow` F.
#[inline(always)]
pub(crate) fn link(
    (scheme, peclet_limit): (Convection, f64),
    conductance: f64,
    flow: f64,
    weight: f64,
) -> [f64; 2] {
    let conductance = conductance.max(flow.abs() / peclet_limit);
    let upwind = conductance + (-flow).max(0.0);
    match scheme {
        Convection::Central => {
            let central = conductance - flow * weight;
            [central, central.max((-flow).max(0.0))]
        }
        Convection::Upwind => [upwind, upwind],
    }
}
