//! The discrete equations: one routine per equation gives its residual and its coefficients.
//!
//! Convection is written as Σ F·(φ_face − φ_P), F outward [kg/s]: the flux form less φ_P times the
//! cell's mass imbalance. Both agree once mass is conserved, and this form keeps temperatures
//! between their neighbours before.
//!
//! What lies where is known before a row begins: whether there are rows below and above it, and
//! columns beside it, are constants of the routines, so that no question is asked per cell.

/// Calls a routine with the constants that fit: the scheme, rows below, rows above.
macro_rules! with_constants {
    ($convection:expr, $low:expr, $high:expr, $row:ident.$run:ident($emit:expr)) => {
        match ($convection, $low, $high) {
            ($crate::Convection::Central, false, false) => $row.$run::<true, false, false>($emit),
            ($crate::Convection::Central, false, true) => $row.$run::<true, false, true>($emit),
            ($crate::Convection::Central, true, false) => $row.$run::<true, true, false>($emit),
            ($crate::Convection::Central, true, true) => $row.$run::<true, true, true>($emit),
            ($crate::Convection::Upwind, false, false) => $row.$run::<false, false, false>($emit),
            ($crate::Convection::Upwind, false, true) => $row.$run::<false, false, true>($emit),
            ($crate::Convection::Upwind, true, false) => $row.$run::<false, true, false>($emit),
            ($crate::Convection::Upwind, true, true) => $row.$run::<false, true, true>($emit),
        }
    };
}
/// Emits every place of a row, 0 to `last`, by the row's method for one place; whether there are
/// neighbours left and right are constants to it.
macro_rules! along_row {
    ($row:ident.$place:ident::<$central:ident, $low:ident, $high:ident>, $last:expr, $emit:ident) => {
        let last = $last;
        if last == 0 {
            let (r, c) = $row.$place::<$central, $low, $high, false, false>(0);
            $emit(0, r, c);
            return;
        }
        let (r, c) = $row.$place::<$central, $low, $high, false, true>(0);
        $emit(0, r, c);
        for i in 1..last {
            let (r, c) = $row.$place::<$central, $low, $high, true, true>(i);
            $emit(i, r, c);
        }
        let (r, c) = $row.$place::<$central, $low, $high, true, false>(last);
        $emit(last, r, c);
    };
}

pub(crate) mod energy;
pub(crate) mod mass;
pub(crate) mod momentum;

/// One neighbour's share: [exact, implicit] coefficients of (φ_nb − φ_P).
///
/// Exact: D − F·w with w the neighbour's weight in the face value. Implicit: the same while
/// positive, else upwind, so that relaxation stays stable. On coarser meshes D is raised until
/// |F|/D is within a limit, `slack` being its inverse: central differences there would show waves,
/// not the flow. `conductance` D, outward `flow` F.
#[inline(always)]
pub(crate) fn link<const CENTRAL: bool>(
    slack: f64,
    conductance: f64,
    flow: f64,
    weight: f64,
) -> [f64; 2] {
    let conductance = conductance.max(flow.abs() * slack);
    let inward = (-flow).max(0.0);
    if CENTRAL {
        let central = conductance - flow * weight;
        [central, central.max(inward)]
    } else {
        [conductance + inward; 2]
    }
}
