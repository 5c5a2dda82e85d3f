//! What makes the numbers of a run doubtful, in sentences.

use ventrise_mesh::{AIR, Side};
use ventrise_solver::contacts;

use crate::case::HeatCurve;

use super::fans;
use super::readings::{Readings, Run};
use super::side_name;
use super::slots::{self, Slot};
use super::summary::{BOUSSINESQ_SPREAD, TURBULENT_REYNOLDS};

/// Radiation left out that is worth a warning, as a share of the heat put in.
const LEAST_RADIATION: f64 = 0.01;
/// Heat flux across touching blocks from which on a joint without resistance is worth a warning:
/// every K cm²/W would cost half a kelvin [W/m²].
const JOINT_FLUX: f64 = 5e3;
/// Burn threshold of bare metal touched for ten seconds [°C]: ISO 13732-1, from memory.
const TOUCHED: f64 = 55.0;
/// View factors that add up to one within this are as good as the stated 0.1 %.
const WORST_VIEW_DEFECT: f64 = 2e-3;

/// Sentences about the case, the mesh, the run and its result.
pub(super) fn warnings(run: &Run, readings: &Readings, slots: &[Slot]) -> Vec<String> {
    let mut warnings = run.case.warnings();
    warnings.extend_from_slice(run.mesh_notes);
    warnings.extend_from_slice(&run.solution.notes);
    let numbers = &readings.numbers;
    let regions = run.problem.mesh().regions();
    if let Some(rise) = numbers.max_air_rise
        && regions.contains(&AIR)
        && rise > BOUSSINESQ_SPREAD
    {
        warnings.push(format!(
            "the air gets {rise:.0} K above ambient; the linear density law is within a tenth up \
             to {BOUSSINESQ_SPREAD} K"
        ));
    }
    let heat = readings.balance.heat_in;
    if let Some(left_out) = run.radiation_left_out().filter(|q| *q > LEAST_RADIATION * heat) {
        let rise = readings.parts.iter().flatten().map(|p| p.max).fold(0.0, f64::max);
        warnings.push(format!(
            "radiation is not modelled, since the case gives no emissivity: the blocks' surfaces \
             would radiate up to {left_out:.2} W, and the hottest part may read up to {:.1} K too \
             high. Give materials, blocks or sides an emissivity to model it",
            rise * left_out / (left_out + heat)
        ));
    }
    if let Some(radiation) = run.problem.radiation() {
        let correction = radiation.correction();
        if correction.defect > WORST_VIEW_DEFECT {
            warnings.push(format!(
                "view factors of a surface added up to one within {:.1e} only before they were \
                 corrected; mirror sides opposite each other are followed so far and no further",
                correction.defect
            ));
        }
    }
    for contact in contacts(run.problem, &run.solution.air, &run.solution.state) {
        let flux = contact.heat.abs() / contact.area;
        if !contact.has_joint && flux > JOINT_FLUX {
            let of = |b: usize| match &run.case.blocks()[b].name {
                Some(name) => format!("\"{name}\""),
                None => format!("block {}", b + 1),
            };
            warnings.push(format!(
                "between {} and {} {:.1} W cross {:.1} cm2 and no joint is given: every K cm2/W \
                 would cost {:.1} K",
                of(contact.blocks[0]),
                of(contact.blocks[1]),
                contact.heat.abs(),
                1e4 * contact.area,
                1e-4 * flux
            ));
        }
    }
    for side in Side::ALL {
        let Some(outer) = readings.sides[side.index()].outer else { continue };
        let hottest = readings.ambient + outer.max_rise;
        if hottest > TOUCHED {
            warnings.push(format!(
                "the outer face of the {} side reaches {hottest:.0} degC; bare metal burns the \
                 skin from about {TOUCHED:.0} degC on when touched for ten seconds (for \
                 information: no statement of conformity)",
                side_name(side)
            ));
        }
    }
    for (block, found) in run.case.blocks().iter().zip(&readings.blocks) {
        let (Some(HeatCurve::Points(points)), Some(found)) = (&block.curve, found) else {
            continue;
        };
        let mean = run.case.ambient().temperature + found.mean;
        let [first, last] = [points.first(), points.last()].map(|p| p.map_or(mean, |p| p[0]));
        if !(first..=last).contains(&mean) {
            warnings.push(format!(
                "{} is at {:.0} degC in the mean, beyond the heat-points given for it; the last two \
                 were drawn on",
                block.name.as_deref().map_or("a block".into(), |name| format!("\"{name}\"")),
                super::readings::celsius(mean)
            ));
        }
    }
    if numbers.vent_reynolds > TURBULENT_REYNOLDS {
        warnings.push(format!(
            "the Reynolds number in a slot is {:.0}; the laminar model holds up to about \
             {TURBULENT_REYNOLDS}",
            numbers.vent_reynolds
        ));
    }
    for (slot, flow) in run.case.slots().iter().zip(&readings.slots) {
        let smaller = flow.inflow.min(flow.outflow);
        if smaller > 0.02 * flow.inflow.max(flow.outflow) {
            warnings.push(format!("slot \"{}\" breathes in and out at once", slot.name));
        }
    }
    warnings.extend(slots::warnings(run.case, slots));
    warnings.extend(fans::warnings(run.case, readings));
    warnings
}
