//! Do the pieces fit? Blocks, parts, slots, probes and the way out for the heat.

use std::collections::HashMap;

use ventrise_mesh::{Geometry, Rectangle, Side};
use ventrise_solver::SideCondition;

use super::blocks::Draft;
use super::edge::{ProbeDraft, Sides, SlotDraft};
use super::error::{CaseError, Cause, nearest};
use super::materials;
use super::model::{Block, Case, LimitAt, Material, Part, ProbeShape, Section, Slot, side_name};
use super::overlap;
use super::parse::{Located, Reader, Scope};
use super::units::rounded;

/// Lengths closer than this share of the section's extent are the same.
pub(super) const SAME: f64 = 1e-9;

/// Least extent of a block or slot as a share of the section's: 0.1 µm in a metre.
const THINNEST: f64 = 1e-7;

/// Most blocks of a case, copies counted.
const MOST_BLOCKS: usize = 5000;

/// A block and the draft it came from.
#[derive(Debug)]
pub(super) struct Placed {
    pub block: Block,
    /// How messages call it.
    pub place: String,
    /// Index of its table among the drafts.
    pub draft: usize,
}

/// Materials, blocks and parts that fit together.
#[derive(Debug, Default)]
pub(super) struct Bodies {
    pub materials: Vec<Material>,
    pub blocks: Vec<Placed>,
    pub parts: Vec<Part>,
}

/// Expands patterns, finds materials, groups parts; reports what does not fit.
pub(super) fn assemble(
    reader: &mut Reader,
    section: Option<&Section>,
    own: Vec<Located<Material>>,
    drafts: &[Draft],
) -> Bodies {
    let mut bodies = Bodies::default();
    bodies.materials.extend(own.into_iter().map(|m| with_source(m.value)));
    names(reader, drafts);
    let limits = limits(reader, drafts);
    let mut parts: HashMap<String, usize> = HashMap::new();
    for (index, draft) in drafts.iter().enumerate() {
        let material = material(reader, &mut bodies.materials, draft);
        let part_name = draft.part.as_ref().or(draft.name.as_ref()).map(|n| n.value.clone());
        let part = part_name.map(|name| {
            *parts.entry(name.clone()).or_insert_with(|| {
                let (limit, limit_at) = limits
                    .get(&name)
                    .map_or((None, LimitAt::Part), |(limit, at)| (Some(*limit), *at));
                bodies.parts.push(Part { name, blocks: Vec::new(), limit, limit_at, heat: 0.0 });
                bodies.parts.len() - 1
            })
        });
        let (Some(x), Some(y)) = (&draft.x, &draft.y) else { continue };
        let copies = draft.repeat.as_ref().map_or(1, |r| r.count);
        if bodies.blocks.len() + copies > MOST_BLOCKS {
            let message = format!("with this one the case has more than {MOST_BLOCKS} blocks");
            reader
                .report(CaseError::new(Cause::Range, &draft.place, message).at(draft.span.clone()));
            return bodies;
        }
        for copy in 0..copies {
            let step = draft.repeat.as_ref().map_or([0.0; 2], |r| r.step.map(|s| s * copy as f64));
            let rectangle =
                Rectangle { x: x.value.map(|x| x + step[0]), y: y.value.map(|y| y + step[1]) };
            let numbered = |text: &str| {
                if draft.repeat.is_some() { format!("{text} {}", copy + 1) } else { text.into() }
            };
            let place = if draft.repeat.is_some() {
                format!("{}, copy {}", draft.place, copy + 1)
            } else {
                draft.place.clone()
            };
            let inside = section.is_none_or(|s| inside(reader, s, draft, &rectangle, &place));
            if let Some(part) = part {
                bodies.parts[part].blocks.push(bodies.blocks.len());
                bodies.parts[part].heat += draft.heat;
            }
            bodies.blocks.push(Placed {
                block: Block {
                    name: draft.name.as_ref().map(|n| numbered(&n.value)),
                    rectangle,
                    material: material.unwrap_or(0),
                    part,
                    heat: draft.heat,
                    curve: draft.curve.clone(),
                    junction: draft.junction,
                    emissivity: draft.emissivity,
                },
                place,
                draft: index,
            });
            if !inside {
                break; // one message for a pattern that runs out of the section
            }
        }
    }
    if let Some(section) = section {
        overlap::report(reader, section, drafts, &bodies.blocks);
    }
    bodies
}

/// Reports names used twice, numbered copies included.
fn names(reader: &mut Reader, drafts: &[Draft]) {
    let mut seen: HashMap<String, &str> = HashMap::new();
    for draft in drafts {
        let Some(name) = &draft.name else { continue };
        let copies = draft.repeat.as_ref().map_or(0, |r| r.count);
        let numbered = (1..=copies).map(|n| format!("{} {n}", name.value));
        let mut told = false;
        for full in std::iter::once(name.value.clone()).chain(numbered) {
            let Some(other) = seen.insert(full.clone(), &draft.place) else { continue };
            if !told {
                let message = if *other == draft.place {
                    "two blocks have this name".to_string()
                } else {
                    format!("the name \"{full}\" is also that of a copy of another block")
                };
                let error =
                    CaseError::new(Cause::Name, &draft.place, message).at(name.span.clone());
                reader.report(error.hint(
                    "give every block a name of its own; blocks judged together share a part",
                ));
                told = true;
            }
        }
    }
}

/// The limit of every part; reported when two blocks of one part disagree.
fn limits(reader: &mut Reader, drafts: &[Draft]) -> HashMap<String, (f64, LimitAt)> {
    let mut limits: HashMap<String, ((f64, LimitAt), String)> = HashMap::new();
    for draft in drafts {
        let Some(part) = draft.part.as_ref().or(draft.name.as_ref()) else { continue };
        let Some(limit) = &draft.limit else { continue };
        let typed = reader.typed(&limit.span);
        match limits.get(&part.value) {
            Some((other, other_typed)) if *other != (limit.value, draft.limit_at) => {
                let message = format!(
                    "limit = {typed}, but another block of part \"{}\" has limit = {other_typed}",
                    part.value
                );
                let error = CaseError::new(Cause::Conflict, &draft.place, message);
                let error = error.at(limit.span.clone());
                reader.report(error.hint("a part has one limit: keep one, or use two parts"));
            }
            Some(_) => {}
            None => {
                junction_in(reader, drafts, draft, &part.value);
                limits.insert(part.value.clone(), ((limit.value, draft.limit_at), typed));
            }
        }
    }
    limits.into_iter().map(|(part, (limit, _))| (part, limit)).collect()
}

/// Reports a limit at a junction that no block of the part has.
fn junction_in(reader: &mut Reader, drafts: &[Draft], draft: &Draft, part: &str) {
    let belongs = |d: &&Draft| d.part.as_ref().or(d.name.as_ref()).is_some_and(|n| n.value == part);
    let known = drafts.iter().filter(belongs).any(|d| d.junction.is_some());
    if let (LimitAt::Junction, false, Some(limit)) = (draft.limit_at, known, &draft.limit) {
        let message =
            format!("the limit holds at the junction, but no block of \"{part}\" has one");
        let error = CaseError::new(Cause::Missing, &draft.place, message).at(limit.span.clone());
        reader.report(
            error.hint("write theta-jc = \"1.5 K/W\" or psi-jt in the block with the heat"),
        );
    }
}

/// An own material that repeats one of the library, number by number, keeps its source.
fn with_source(mut own: Material) -> Material {
    own.source = materials::find(&own.name)
        .filter(|m| {
            m.conductivity == own.conductivity
                && Some(m.density) == own.density
                && Some(m.specific_heat) == own.specific_heat
        })
        .map(|m| m.source);
    own
}

/// Where radiation is modelled every surface has an emissivity; none is assumed in silence.
pub(super) fn emissivities(reader: &mut Reader, case: &Case, drafts: &[Draft]) {
    if !case.radiates() {
        return;
    }
    let mut named: Vec<&str> = Vec::new();
    for block in case.blocks() {
        let material = &case.materials()[block.material];
        if case.emissivity(block).is_some() || named.contains(&material.name.as_str()) {
            continue;
        }
        named.push(&material.name);
        let uses = drafts.iter().filter_map(|d| d.material.as_ref());
        let span = uses.filter(|m| m.value == material.name).map(|m| m.span.clone()).next();
        let message = format!(
            "radiation is modelled, since the case gives an emissivity, but material \"{}\" has none",
            material.name
        );
        let place = format!("material \"{}\"", material.name);
        let error = CaseError::new(Cause::Missing, &place, message).at(span.unwrap_or(0..0));
        reader
            .report(error.hint("write emissivity = 0.9 or so in its [[material]] or in the block"));
    }
}

/// Index of a draft's material; the library's are added as they come into use.
fn material(reader: &mut Reader, materials: &mut Vec<Material>, draft: &Draft) -> Option<usize> {
    let name = draft.material.as_ref()?;
    if let Some(index) = materials.iter().position(|m| m.name == name.value) {
        return Some(index);
    }
    if let Some(found) = materials::find(&name.value) {
        materials.push(Material {
            name: found.name.to_string(),
            conductivity: found.conductivity,
            density: Some(found.density),
            specific_heat: Some(found.specific_heat),
            emissivity: None,
            source: Some(found.source),
        });
        return Some(materials.len() - 1);
    }
    let error = if name.value.eq_ignore_ascii_case("air") {
        let message = "material = \"air\": a block is solid; air fills the section by itself";
        CaseError::new(Cause::UnknownWord, &draft.place, message)
            .hint("remove the block, and the air has its place")
    } else {
        let message = format!("material = \"{}\" is not known", name.value);
        let error = CaseError::new(Cause::UnknownWord, &draft.place, message);
        let own = materials.iter().map(|m| m.name.as_str());
        let library = materials::library().iter().map(|m| m.name);
        match nearest(&name.value, own.chain(library)) {
            Some(near) => error.hint(format!("the nearest is \"{near}\"")),
            None => error.hint("describe it in a [[material]] table of its own"),
        }
    };
    reader.report(error.at(name.span.clone()));
    None
}

/// Reports a rectangle that leaves the section.
fn inside(
    reader: &mut Reader,
    section: &Section,
    draft: &Draft,
    rectangle: &Rectangle,
    place: &str,
) -> bool {
    let mut good = true;
    let axes =
        [("x", rectangle.x, section.width, &draft.x), ("y", rectangle.y, section.height, &draft.y)];
    for (key, [low, high], extent, typed) in axes {
        let slack = SAME * extent;
        let over = if high - low < THINNEST * extent {
            "is thinner than a ten-millionth of the section; leave it out or make it thicker".into()
        } else if low < -slack {
            format!("begins {} before the section", millimetres(-low))
        } else if high > extent + slack {
            format!(
                "ends {} beyond the section, which is {} {}",
                millimetres(high - extent),
                millimetres(extent),
                if key == "x" { "wide" } else { "high" }
            )
        } else {
            continue;
        };
        good = false;
        let span = match (&draft.repeat, typed) {
            (Some(repeat), _) => repeat.span.clone(),
            (None, Some(typed)) => typed.span.clone(),
            (None, None) => draft.span.clone(),
        };
        let written = reader.typed(&span);
        let written = match &draft.repeat {
            Some(_) => format!("repeat = {written}: {key}"),
            None => format!("{key} = {written}"),
        };
        let message = format!("{written} {over}");
        reader.report(CaseError::new(Cause::Shape, place, message).at(span));
    }
    good
}

/// Reports slots off the edge, on the axis, over blocks, over each other, in open sides.
pub(super) fn slots(
    reader: &mut Reader,
    section: &Section,
    slots: &[SlotDraft],
    blocks: &[Placed],
    sides: Option<&Sides>,
) {
    for (n, slot) in slots.iter().enumerate() {
        let Some(side) = &slot.side else { continue };
        if section.geometry == Geometry::Axisymmetric && side.value == Side::Left {
            let message = "side = \"left\" is the axis of an axisymmetric section, which has no \
                           opening";
            let error = CaseError::new(Cause::Shape, &slot.place, message).at(side.span.clone());
            reader.report(error.hint("slots lie in \"right\", \"bottom\" or \"top\""));
            continue;
        }
        let condition = sides.map(|s| s.conditions[side.value.index()]);
        if let Some(SideCondition::Open | SideCondition::Symmetry) = condition {
            let (is, hint) = if condition == Some(SideCondition::Open) {
                ("open over its whole length", "remove the slot, or close the side")
            } else {
                ("a symmetry plane", "draw half of the slot in another side, or the whole section")
            };
            let message = format!("side = \"{}\" is {is}", side_name(side.value));
            let error = CaseError::new(Cause::Conflict, &slot.place, message).at(side.span.clone());
            reader.report(error.hint(hint));
        }
        let (Some(from), Some(to)) = (&slot.from, &slot.to) else { continue };
        let extent = side_length(section, side.value);
        let slack = SAME * section.width.max(section.height);
        if from.value < -slack {
            let typed = reader.typed(&from.span);
            let message = format!("from = {typed} lies before the edge, which begins at 0");
            let error = CaseError::new(Cause::Shape, &slot.place, message);
            reader.report(error.at(from.span.clone()));
        }
        if to.value > extent + slack {
            let typed = reader.typed(&to.span);
            let message = format!(
                "to = {typed} lies off the edge; the {} side ends at {}",
                side_name(side.value),
                millimetres(extent)
            );
            let error = CaseError::new(Cause::Shape, &slot.place, message);
            reader.report(error.at(to.span.clone()));
        }
        let span = [from.value, to.value];
        if span[1] - span[0] < THINNEST * extent {
            let typed = reader.typed(&to.span);
            let message = format!(
                "to = {typed} makes the slot narrower than a ten-millionth of the {} side",
                side_name(side.value)
            );
            let error = CaseError::new(Cause::Shape, &slot.place, message);
            reader.report(error.at(to.span.clone()));
        }
        for block in blocks {
            if let Some([low, high]) = contact(section, side.value, &block.block.rectangle)
                && span[1].min(high) - span[0].max(low) > slack
            {
                let message = format!(
                    "lies over {}, which covers the {} side from {} to {}",
                    block.place,
                    side_name(side.value),
                    millimetres(low),
                    millimetres(high)
                );
                let error = CaseError::new(Cause::Shape, &slot.place, message);
                reader.report(
                    error.at(from.span.clone()).hint("end the slot at the block, or move one"),
                );
            }
        }
        for other in &slots[..n] {
            let (Some(s), Some(f), Some(t)) = (&other.side, &other.from, &other.to) else {
                continue;
            };
            if s.value == side.value && span[1].min(t.value) - span[0].max(f.value) > slack {
                let message = format!(
                    "overlaps {}, which reaches from {} to {}",
                    other.place,
                    millimetres(f.value),
                    millimetres(t.value)
                );
                let error = CaseError::new(Cause::Shape, &slot.place, message);
                reader.report(error.at(from.span.clone()));
            }
        }
    }
}

/// Reports probes outside the section.
pub(super) fn probes(reader: &mut Reader, section: &Section, probes: &[ProbeDraft]) {
    for probe in probes {
        for (key, point) in &probe.points {
            let [x, y] = point.value;
            let slack = SAME * section.width.max(section.height);
            let good = x >= -slack
                && x <= section.width + slack
                && y >= -slack
                && y <= section.height + slack;
            if !good {
                let typed = reader.typed(&point.span);
                let message = format!(
                    "{key} = {typed} lies outside the section, which is {} wide and {} high",
                    millimetres(section.width),
                    millimetres(section.height)
                );
                reader.report(
                    CaseError::new(Cause::Shape, &probe.place, message).at(point.span.clone()),
                );
            }
        }
    }
}

/// Reports a section that heat cannot leave, and open sides that blocks close.
pub(super) fn way_out(
    reader: &mut Reader,
    top: &Scope,
    section: &Section,
    sides: &Sides,
    slots: &[SlotDraft],
    blocks: &[Placed],
) {
    let mut way_out = !slots.is_empty();
    for side in Side::ALL {
        match sides.conditions[side.index()] {
            SideCondition::Temperature(_)
            | SideCondition::Film { .. }
            | SideCondition::Outside(_) => way_out = true,
            SideCondition::Open => {
                let length = side_length(section, side);
                let covered: f64 = blocks
                    .iter()
                    .filter_map(|b| contact(section, side, &b.block.rectangle))
                    .map(|[low, high]| high - low)
                    .sum();
                way_out = true;
                if covered >= length * (1.0 - SAME) {
                    let message =
                        format!("{} = \"open\", but blocks cover all of it", side_name(side));
                    let error = CaseError::new(Cause::Shape, "sides", message);
                    let span = sides.spans[side.index()].clone().unwrap_or(0..0);
                    reader.report(error.at(span).hint("leave the side out, or free part of it"));
                }
            }
            _ => {}
        }
    }
    if !way_out {
        let message = "the section has no way out for the heat: no slot, no open side, no side \
                       with a temperature or a film";
        let span = top.get("sides").or(top.get("section")).map_or(0..0, |v| v.span());
        let error = CaseError::new(Cause::NoWayOut, "", message).at(span);
        reader.report(error.hint(
            "add a [[slot]], or give a side { film = \"8 W/(m2 K)\" } or { temperature = ... }",
        ));
    }
}

/// Where a block touches a side, along that side.
fn contact(section: &Section, side: Side, r: &Rectangle) -> Option<[f64; 2]> {
    let slack = SAME * section.width.max(section.height);
    let (touches, along) = match side {
        Side::Left => (r.x[0] <= slack, r.y),
        Side::Right => (r.x[1] >= section.width - slack, r.y),
        Side::Bottom => (r.y[0] <= slack, r.x),
        Side::Top => (r.y[1] >= section.height - slack, r.x),
    };
    touches.then_some(along)
}

fn side_length(section: &Section, side: Side) -> f64 {
    match side {
        Side::Left | Side::Right => section.height,
        Side::Bottom | Side::Top => section.width,
    }
}

/// A length in millimetres, as messages show it.
pub(super) fn millimetres(length: f64) -> String {
    format!("{} mm", rounded(length * 1e3, 6))
}

/// Gives edges that are the same but for round-off the same number.
pub(super) fn join_edges(case: &mut Case) {
    let section = case.section;
    let mut known = [vec![0.0, section.width], vec![0.0, section.height]];
    let mut join = |axis: usize, value: &mut f64| {
        let slack = SAME * [section.width, section.height][axis];
        match known[axis].iter().find(|k| (**k - *value).abs() <= slack) {
            Some(same) => *value = *same,
            None => known[axis].push(*value),
        }
    };
    for block in &mut case.blocks {
        block.rectangle.x.iter_mut().for_each(|x| join(0, x));
        block.rectangle.y.iter_mut().for_each(|y| join(1, y));
    }
    for Slot { side, span, .. } in &mut case.slots {
        let axis = if matches!(side, Side::Left | Side::Right) { 1 } else { 0 };
        span.iter_mut().for_each(|s| join(axis, s));
    }
    for probe in &mut case.probes {
        let mut join_point = |[x, y]: &mut [f64; 2]| {
            join(0, x);
            join(1, y);
        };
        match &mut probe.shape {
            ProbeShape::Point(at) => join_point(at),
            ProbeShape::Line { from, to } => {
                join_point(from);
                join_point(to);
            }
        }
    }
}
