//! What a case may be but is hardly meant to be: sentences, no refusals.

use ventrise_mesh::Side;
use ventrise_solver::{OuterFilm, SideCondition};

use super::estimate::Estimate;
use super::model::{Case, side_name};

/// What is allowed but looks doubtful about a whole case.
pub(super) fn doubts(case: &Case) -> Vec<String> {
    let mut doubts = Vec::new();
    for part in &case.parts {
        if part.limit.is_none() && part.heat > 0.0 {
            doubts.push(format!("part \"{}\" has heat but no limit to be judged by", part.name));
        }
        if let Some(limit) = part.limit
            && limit <= case.ambient.temperature
        {
            doubts.push(format!("the limit of part \"{}\" is not above ambient", part.name));
        }
    }
    let ambient = case.ambient.temperature;
    let fluxes = case.sides.iter().any(|s| matches!(s, SideCondition::Flux(q) if *q != 0.0));
    let driven =
        case.sides.iter().any(|s| matches!(s, SideCondition::Temperature(t) if *t != ambient));
    let sunlit = case.sides.iter().any(|s| matches!(s, SideCondition::Outside(o) if o.sun > 0.0));
    if case.blocks.iter().all(|b| b.heat == 0.0) && !fluxes && !driven && !sunlit {
        let air = if case.is_driven() {
            "only the fan moves the air"
        } else {
            "the air will stay at rest"
        };
        doubts.push(format!("there is no heat at all: {air}"));
    }
    for side in Side::ALL {
        match case.sides[side.index()] {
            SideCondition::Flux(q) if q < 0.0 => doubts.push(format!(
                "the flux of the {} side is below zero: heat leaves the section there",
                side_name(side)
            )),
            SideCondition::Temperature(t) if (t - ambient).abs() > 150.0 => doubts.push(format!(
                "the {} side is {:.0} K from ambient; constant air properties are doubtful there",
                side_name(side),
                (t - ambient).abs()
            )),
            _ => {}
        }
    }
    for side in Side::ALL.into_iter().filter(|_| case.radiates()) {
        let silent = case.side_emissivities[side.index()].is_none();
        if silent && case.sides[side.index()].is_wall() {
            doubts.push(format!(
                "the {} side has no emissivity and counts as white: it reflects all radiation",
                side_name(side)
            ));
        }
    }
    doubts.extend(Side::ALL.into_iter().filter_map(|side| conducting_wall(case, side)));
    let open = case.sides.contains(&SideCondition::Open);
    if case.is_driven() {
        // What follows is about draught alone.
    } else if let Some(doubt) = trapped(case) {
        doubts.push(doubt);
    } else if !open && !case.slots.is_empty() {
        let heights: Vec<f64> = case.slots.iter().map(|s| case.slot_height(s)).collect();
        let low = heights.iter().copied().fold(f64::INFINITY, f64::min);
        let high = heights.iter().copied().fold(f64::NEG_INFINITY, f64::max);
        if case.slots.len() > 1 && high - low < 1e-3 * case.section.height {
            doubts.push("all slots lie at one height, so the draught has no chimney".to_string());
        }
        if case.slots.len() == 1 {
            doubts.push("there is one slot only; it must breathe in and out at once".to_string());
        }
    }
    doubts.extend(Estimate::of(case).doubts());
    doubts
}

/// A film with radiation beside it, upright, some 10 K above still air [W/(m²·K)].
const USUAL_FILM: f64 = 10.0;
/// Share of a side's length beyond which conduction along its wall matters.
const FAR: f64 = 0.1;

/// A side's wall that would carry heat along it, which the model leaves out: √(k·t/h) says how far.
fn conducting_wall(case: &Case, side: Side) -> Option<String> {
    let wall = case.outer_sides[side.index()].as_ref()?.wall.as_ref()?;
    let (along, length) = match side {
        Side::Left | Side::Right => (wall.conductivity[1], case.section.height),
        Side::Bottom | Side::Top => (wall.conductivity[0], case.section.width),
    };
    let film = match case.sides[side.index()] {
        SideCondition::Outside(o) => match o.film {
            OuterFilm::Given(h) => h,
            OuterFilm::StillAir => USUAL_FILM,
        },
        _ => return None,
    };
    let reach = (along * wall.thickness / film).sqrt();
    (reach > FAR * length).then(|| {
        format!(
            "the wall of the {} side conducts heat across only; along it, {} would carry heat some \
             {:.0} mm, and hot places of the wall are told hotter than they are; draw the wall as \
             blocks to have both",
            side_name(side),
            wall.material,
            1e3 * reach
        )
    })
}

/// Heat that has no steady way out although there are openings: warm air cannot leave downwards
/// nor cold air upwards, still layers of it grow without end, and an opening lets no heat through
/// by conduction.
fn trapped(case: &Case) -> Option<String> {
    let condition = |side: Side| &case.sides[side.index()];
    let is_opening = |side: &Side| {
        *condition(*side) == SideCondition::Open || case.slots.iter().any(|s| s.side == *side)
    };
    let heats = case.blocks.iter().map(|b| b.heat);
    let fluxes = Side::ALL.into_iter().filter_map(|side| match condition(side) {
        SideCondition::Flux(q) => Some(*q),
        _ => None,
    });
    let sources: Vec<f64> = heats.chain(fluxes).collect();
    let (heated, cooled) = (sources.iter().any(|q| *q > 0.0), sources.iter().any(|q| *q < 0.0));
    let held = case.sides.iter().any(|s| {
        matches!(
            s,
            SideCondition::Temperature(_) | SideCondition::Film { .. } | SideCondition::Outside(_)
        )
    });
    let openings: Vec<Side> = Side::ALL.into_iter().filter(is_opening).collect();
    let [only] = openings.as_slice() else { return None };
    if held {
        return None;
    }
    let (air, where_it_is, way, trend, remedy) = match only {
        Side::Bottom if heated && !cooled => ("warm", "floor", "downwards", "rise", "higher up"),
        Side::Top if cooled && !heated => ("cold", "ceiling", "upwards", "fall", "lower down"),
        _ => return None,
    };
    Some(format!(
        "the heat has no steady way out: every opening lies in the {where_it_is}, {air} air does \
         not leave {way}, and no side lets heat through, so temperatures would {trend} without end; \
         add a slot {remedy}, or give a side {{ film = \"8 W/(m2 K)\" }} or {{ temperature = ... }}"
    ))
}
