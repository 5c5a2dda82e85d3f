//! `[[slot]]`, `[sides]` and `[[probe]]`.

use std::ops::Range;

use toml::de::DeValue;
use ventrise_mesh::{Geometry, Side};
use ventrise_solver::SideCondition;

use super::error::{CaseError, Cause};
use super::model::{
    Ambient, Fan, Material, OuterSide, Probe, ProbeShape, Resistance, Section, Slot, side_name,
};
use super::outside::{read_film, read_outside, refuse_outer_keys};
use super::parse::{Located, Reader, Scope};
use super::units::Dimension;
use super::vents::read_resistance;
use super::vocabulary::{PROBE, SIDE, SIDE_NAMES, SIDE_WORDS, SIDES, SLOT};

/// A `[[slot]]` table as read.
#[derive(Debug)]
pub(super) struct SlotDraft {
    /// How messages call it.
    pub place: String,
    pub name: String,
    pub side: Option<Located<Side>>,
    pub from: Option<Located<f64>>,
    pub to: Option<Located<f64>>,
    pub resistance: Option<Resistance>,
    /// Name of the fan in it.
    pub fan: Option<Located<String>>,
}

impl SlotDraft {
    /// The slot, when everything was read; its fan is one of `fans`.
    pub fn finish(self, fans: &[Fan]) -> Option<Slot> {
        Some(Slot {
            name: self.name,
            side: self.side?.value,
            span: [self.from?.value, self.to?.value],
            resistance: self.resistance?,
            fan: self.fan.and_then(|fan| fans.iter().position(|f| f.name == fan.value)),
        })
    }
}

/// Reads the `[[slot]]` tables.
pub(super) fn read_slots(reader: &mut Reader, top: &Scope) -> Vec<SlotDraft> {
    let mut slots: Vec<SlotDraft> = Vec::new();
    for (n, mut scope) in reader.tables(top, "slot").into_iter().enumerate() {
        let name = reader.text(&scope, "name");
        if let Some(name) = &name {
            scope.place = format!("slot \"{}\"", name.value);
        }
        reader.check_keys(&scope, &SLOT);
        if !scope.has("side") {
            reader.missing(&scope, "side", "\"bottom\"");
        }
        let side = reader.word(&scope, "side", &SIDE_NAMES, &[]).and_then(|word| {
            let side = Side::ALL.into_iter().find(|s| side_name(*s) == word.value)?;
            Some(Located { value: side, span: word.span })
        });
        let from = reader.required(&scope, "from", Dimension::Length, "10 mm");
        let to = reader.required(&scope, "to", Dimension::Length, "30 mm");
        let rising = match (&from, &to) {
            (Some(from), Some(to)) => {
                let bound = "more than from";
                reader.within(&scope, "to", to, to.value > from.value, bound)
            }
            _ => false,
        };
        let resistance = read_resistance(reader, &scope);
        let fan = reader.text(&scope, "fan");
        if let Some(name) = &name
            && slots.iter().any(|s| s.name == name.value)
        {
            let message = "two slots have this name";
            let error = CaseError::new(Cause::Name, &scope.place, message).at(name.span.clone());
            reader.report(error.hint("give every slot a name of its own"));
        }
        slots.push(SlotDraft {
            place: scope.place,
            name: name.map_or_else(|| format!("slot {}", n + 1), |n| n.value),
            side,
            from: from.filter(|_| rising),
            to: to.filter(|_| rising),
            resistance,
            fan,
        });
    }
    slots
}

/// The conditions of the sides, by [`Side::index`], and where they are written.
#[derive(Debug)]
pub(super) struct Sides {
    pub conditions: [SideCondition; 4],
    /// Of their inner faces, where written.
    pub emissivities: [Option<f64>; 4],
    /// Their outer faces, where written.
    pub outer: [Option<OuterSide>; 4],
    pub spans: [Option<Range<usize>>; 4],
}

/// Keys of a side that say what it is; the others go with one of these.
const CONDITIONS: [&str; 3] = ["temperature", "flux", "film"];

/// Reads `[sides]`.
pub(super) fn read_sides(
    reader: &mut Reader,
    top: &Scope,
    section: Option<&Section>,
    ambient: Option<&Ambient>,
    own: &[Located<Material>],
) -> Option<Sides> {
    let mut conditions = [SideCondition::Adiabatic; 4];
    let mut emissivities = [None; 4];
    let mut outer = [None, None, None, None];
    let mut spans = [None, None, None, None];
    let mut whole = true;
    if top.has("sides") {
        let scope = reader.table(top, "sides", "sides")?;
        reader.check_keys(&scope, &SIDES);
        for side in Side::ALL.into_iter().filter(|s| scope.has(side_name(*s))) {
            let key = side_name(side);
            spans[side.index()] = Some(scope.span_of(key));
            match read_side(reader, &scope, side, ambient, own) {
                Some((condition, emissivity, face)) => {
                    conditions[side.index()] = condition;
                    emissivities[side.index()] = emissivity;
                    outer[side.index()] = face;
                }
                None => whole = false,
            }
        }
        axis(reader, &scope, section, &mut conditions);
    } else if section.is_some_and(|s| s.geometry == Geometry::Axisymmetric) {
        conditions[Side::Left.index()] = SideCondition::Symmetry;
    }
    whole.then_some(Sides { conditions, emissivities, outer, spans })
}

/// The left side of an axisymmetric section is its axis.
fn axis(
    reader: &mut Reader,
    scope: &Scope,
    section: Option<&Section>,
    conditions: &mut [SideCondition; 4],
) {
    if section.is_none_or(|s| s.geometry != Geometry::Axisymmetric) {
        return;
    }
    let left = Side::Left.index();
    if !matches!(conditions[left], SideCondition::Adiabatic | SideCondition::Symmetry) {
        let typed = reader.typed(&scope.span_of("left"));
        let message =
            format!("left = {typed}: the left side of an axisymmetric section is its axis");
        let error = CaseError::new(Cause::Conflict, &scope.place, message);
        let error = error.at(scope.span_of("left"));
        reader.report(error.hint("leave left out, or write left = \"symmetry\""));
    } else if conditions[left] == SideCondition::Adiabatic && scope.has("left") {
        let message = "the left side of an axisymmetric section is its axis; taken as symmetry";
        reader.warn(scope, scope.span_of("left"), message);
    }
    conditions[left] = SideCondition::Symmetry;
}

/// A side's condition, the emissivity of its inner face, its outer face.
type SideRead = (SideCondition, Option<f64>, Option<OuterSide>);

fn read_side(
    reader: &mut Reader,
    scope: &Scope,
    side: Side,
    ambient: Option<&Ambient>,
    own: &[Located<Material>],
) -> Option<SideRead> {
    let key = side_name(side);
    let value = scope.get(key)?;
    let DeValue::Table(table) = value.get_ref() else {
        if !matches!(value.get_ref(), DeValue::String(_)) {
            let typed = reader.typed(&value.span());
            let message = format!("{key} = {typed} is no condition");
            let error = CaseError::new(Cause::Kind, &scope.place, message).at(value.span());
            reader.report(error.hint(
                "write \"adiabatic\", \"symmetry\", \"open\", or { temperature = \"40 degC\" }, \
                 { flux = \"100 W/m2\" }, { film = \"8 W/(m2 K)\" }",
            ));
            return None;
        }
        let word = reader.text(scope, key)?;
        return match word.value.as_str() {
            "adiabatic" => Some((SideCondition::Adiabatic, None, None)),
            "symmetry" => Some((SideCondition::Symmetry, None, None)),
            "open" => Some((SideCondition::Open, None, None)),
            "temperature" | "flux" | "film" => {
                let message = format!("{key} = \"{}\" needs its number", word.value);
                let error = CaseError::new(Cause::Kind, &scope.place, message).at(word.span);
                let example = match word.value.as_str() {
                    "temperature" => "40 degC",
                    "flux" => "100 W/m2",
                    _ => "8 W/(m2 K)",
                };
                reader.report(
                    error.hint(format!("write {key} = {{ {} = \"{example}\" }}", word.value)),
                );
                None
            }
            _ => {
                reader.not_a_word(scope, key, &word, &SIDE_WORDS, &[]);
                None
            }
        };
    };
    let inner = Scope::new(table, value.span(), &format!("sides, {key}"));
    reader.check_keys(&inner, &SIDE);
    let emissivity = reader.emissivity(&inner);
    let given: Vec<&str> = CONDITIONS.into_iter().filter(|k| inner.has(k)).collect();
    if !inner.has("film") {
        refuse_outer_keys(reader, &inner);
    }
    if given.is_empty() && inner.has("emissivity") {
        return Some((SideCondition::Adiabatic, emissivity, None));
    }
    if given.len() != 1 {
        let (cause, message) = if given.is_empty() {
            (Cause::Missing, "the side has no condition".to_string())
        } else {
            (Cause::Conflict, format!("{} cannot be given together", given.join(" and ")))
        };
        let error = CaseError::new(cause, &inner.place, message).at(inner.span.clone());
        reader.report(error.hint("give one of temperature, flux and film, or emissivity alone"));
    }
    let temperature = reader.temperature(&inner, "temperature");
    let flux = reader.quantity(&inner, "flux", Dimension::Flux);
    let film = read_film(reader, &inner);
    if let Some(temperature) = &temperature {
        let good = temperature.value <= 2273.15;
        reader.within(&inner, "temperature", temperature, good, "at most 2000 degC");
    }
    if let Some(flux) = &flux {
        let good = flux.value == 0.0 || (1e-6..=1e7).contains(&flux.value.abs());
        reader.within(&inner, "flux", flux, good, "0 W/m2, or from 1e-6 W/m2 to 1e7 W/m2 in size");
    }
    let (condition, outer) = match (temperature, flux, film) {
        (Some(t), None, None) => (SideCondition::Temperature(t.value), None),
        (None, Some(q), None) => (SideCondition::Flux(q.value), None),
        (None, None, Some(film)) => read_outside(reader, &inner, side, film, ambient?, own),
        _ => return None,
    };
    Some((condition, emissivity, outer))
}

/// A `[[probe]]` table as read.
#[derive(Debug)]
pub(super) struct ProbeDraft {
    /// How messages call it.
    pub place: String,
    pub name: String,
    pub shape: Option<ProbeShape>,
    /// Its points and where they are written.
    pub points: Vec<(&'static str, Located<[f64; 2]>)>,
}

impl ProbeDraft {
    /// The probe, when everything was read.
    pub fn finish(self) -> Option<Probe> {
        Some(Probe { name: self.name, shape: self.shape? })
    }
}

/// Reads the `[[probe]]` tables.
pub(super) fn read_probes(reader: &mut Reader, top: &Scope) -> Vec<ProbeDraft> {
    let mut probes: Vec<ProbeDraft> = Vec::new();
    for (n, mut scope) in reader.tables(top, "probe").into_iter().enumerate() {
        let name = reader.text(&scope, "name");
        if let Some(name) = &name {
            scope.place = format!("probe \"{}\"", name.value);
        }
        reader.check_keys(&scope, &PROBE);
        let at = reader.two_lengths(&scope, "at");
        let from = reader.two_lengths(&scope, "from");
        let to = reader.two_lengths(&scope, "to");
        match ["at", "from", "to"].map(|k| scope.has(k)) {
            [true, false, false] | [false, true, true] => {}
            [true, ..] => {
                let message = "at makes a point, from and to make a line; not both";
                let error = CaseError::new(Cause::Conflict, &scope.place, message);
                reader.report(error.at(scope.span_of("at")).hint("keep at, or from and to"));
            }
            [false, true, false] => reader.missing(&scope, "to", "[\"60 mm\", \"310 mm\"]"),
            [false, false, true] => reader.missing(&scope, "from", "[\"0 mm\", \"310 mm\"]"),
            [false, false, false] => reader.missing(&scope, "at", "[\"62 mm\", \"310 mm\"]"),
        }
        if let (Some(from), Some(to)) = (&from, &to) {
            let bound = "another point than from";
            reader.within(&scope, "to", to, from.value != to.value, bound);
        }
        if let Some(name) = &name
            && probes.iter().any(|p| p.name == name.value)
        {
            let message = "two probes have this name";
            let error = CaseError::new(Cause::Name, &scope.place, message).at(name.span.clone());
            reader.report(error.hint("give every probe a name of its own"));
        }
        let shape = match (&at, &from, &to) {
            (Some(at), ..) => Some(ProbeShape::Point(at.value)),
            (None, Some(from), Some(to)) => {
                Some(ProbeShape::Line { from: from.value, to: to.value })
            }
            _ => None,
        };
        let points = [("at", at), ("from", from), ("to", to)];
        probes.push(ProbeDraft {
            place: scope.place,
            name: name.map_or_else(|| format!("probe {}", n + 1), |n| n.value),
            shape,
            points: points.into_iter().filter_map(|(k, p)| Some((k, p?))).collect(),
        });
    }
    probes
}
