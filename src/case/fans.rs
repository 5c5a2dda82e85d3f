//! `[[fan]]`: a curve of pressure over flow, the speed it runs at, and the slot it stands in.

use std::ops::RangeInclusive;

use toml::de::DeValue;

use super::edge::SlotDraft;
use super::error::{CaseError, Cause, nearest};
use super::model::Fan;
use super::parse::{Located, Reader, Scope};
use super::units::Dimension;
use super::vocabulary::FAN;

/// Density that curves are stated for where the case says nothing [kg/m³]: standard air of the fan
/// trade (ISO 5801, from memory).
const STANDARD_DENSITY: f64 = 1.2;

const SPEED: (RangeInclusive<f64>, &str) = (0.0..=2.0, "from 0 % to 200 %");
const DENSITY: (RangeInclusive<f64>, &str) = (0.1..=5.0, "from 0.1 kg/m3 to 5 kg/m3");
/// Largest flow [m³/s] and pressure [Pa] of a curve; beyond, the unit is a slip.
const MOST: [(f64, &str); 2] = [(100.0, "at most 360000 m3/h"), (1e5, "at most 100 kPa")];

/// A `[[fan]]` table as read.
#[derive(Debug)]
pub(super) struct FanDraft {
    /// How messages call it.
    pub place: String,
    pub name: Option<Located<String>>,
    pub fan: Option<Fan>,
}

/// Reads the `[[fan]]` tables.
pub(super) fn read_fans(reader: &mut Reader, top: &Scope) -> Vec<FanDraft> {
    let mut fans: Vec<FanDraft> = Vec::new();
    for mut scope in reader.tables(top, "fan") {
        let name = reader.text(&scope, "name");
        if let Some(name) = &name {
            scope.place = format!("fan \"{}\"", name.value);
            if fans.iter().flat_map(|f| &f.name).any(|n| n.value == name.value) {
                let error = CaseError::new(Cause::Name, &scope.place, "two fans have this name");
                let error = error.at(name.span.clone());
                reader.report(error.hint("give every fan a name of its own"));
            }
        }
        reader.check_keys(&scope, &FAN);
        let examples =
            [("name", "\"backup\""), ("curve", EXAMPLE), ("direction", "\"in\" or \"out\"")];
        for (key, example) in examples {
            if !scope.has(key) {
                reader.missing(&scope, key, example);
            }
        }
        let fan = read_fan(reader, &scope, name.as_ref().map(|n| n.value.as_str()));
        fans.push(FanDraft { place: scope.place, name, fan });
    }
    fans
}

const EXAMPLE: &str = "[[\"0 m3/h\", \"14 Pa\"], [\"38 m3/h\", \"0 Pa\"]]";

fn read_fan(reader: &mut Reader, scope: &Scope, name: Option<&str>) -> Option<Fan> {
    let curve = curve(reader, scope);
    let density = match scope.has("density") {
        true => reader.bounded(scope, "density", Dimension::Density, DENSITY).map(|d| d.value),
        false => Some(STANDARD_DENSITY),
    };
    let speed = match scope.has("speed") {
        true => reader.bounded(scope, "speed", Dimension::Share, SPEED).map(|s| s.value),
        false => Some(1.0),
    };
    let direction = reader.word(scope, "direction", &["in", "out"], &[]);
    let stopped_loss = reader.number(scope, "stopped-loss").filter(|loss| {
        let good = (0.0..=1e6).contains(&loss.value);
        reader.within(scope, "stopped-loss", loss, good, "from 0 to 1e6")
    });
    if speed == Some(0.0) && !scope.has("stopped-loss") {
        let message = "the fan stands (speed = 0) and has no stopped-loss";
        let error = CaseError::new(Cause::Missing, &scope.place, message);
        let hint = "write stopped-loss = 8 or so: the loss coefficient of the standing fan on the \
                    speed through the slot";
        reader.report(error.at(scope.span_of("speed")).hint(hint));
    }
    Some(Fan {
        name: name?.to_string(),
        curve: curve?,
        density: density?,
        speed: speed?,
        inward: direction?.value == "in",
        stopped_loss: stopped_loss.map(|l| l.value),
    })
}

/// The curve's points (flow [m³/s], pressure [Pa]): flows rise from zero.
fn curve(reader: &mut Reader, scope: &Scope) -> Option<Vec<[f64; 2]>> {
    let value = scope.get("curve")?;
    let wanted = format!("points of flow and pressure belong here, such as {EXAMPLE}");
    let DeValue::Array(list) = value.get_ref() else {
        reader.wrong_kind(scope, "curve", value, &wanted);
        return None;
    };
    let mut points: Vec<[Located<f64>; 2]> = Vec::new();
    let mut whole = true;
    for point in list.iter() {
        let pair: Vec<_> = match point.get_ref() {
            DeValue::Array(pair) => pair.iter().collect(),
            _ => Vec::new(),
        };
        let [flow, pressure] = pair.as_slice() else {
            reader.wrong_kind(scope, "curve", point, &wanted);
            whole = false;
            continue;
        };
        let flow = reader.quantity_of(scope, "curve", flow, Dimension::VolumeFlow);
        let pressure = reader.quantity_of(scope, "curve", pressure, Dimension::Pressure);
        match (flow, pressure) {
            (Some(flow), Some(pressure)) => points.push([flow, pressure]),
            _ => whole = false,
        }
    }
    if whole && points.len() < 2 {
        let message = format!("curve has {} point(s); it needs two or more", points.len());
        let error = CaseError::new(Cause::Range, &scope.place, message).at(value.span());
        reader.report(error.hint(format!("write curve = {EXAMPLE}")));
        whole = false;
    }
    // Of a curve that was read in part, nobody knows which point is the first.
    let judged = if whole { points.as_slice() } else { &[] };
    let mut before: Option<f64> = None;
    for [flow, pressure] in judged {
        let rises = before.is_none_or(|before| flow.value > before);
        let checks = [
            (flow, before.is_some() || flow.value == 0.0, "0 m3/h at the curve's first point"),
            (flow, rises, "more than the flow of the point before"),
            (flow, flow.value <= MOST[0].0, MOST[0].1),
            (pressure, before.is_some() || pressure.value > 0.0, "more than 0 Pa at no flow"),
            (pressure, pressure.value >= 0.0, "0 Pa or more"),
            (pressure, pressure.value <= MOST[1].0, MOST[1].1),
        ];
        for (value, good, bound) in checks {
            if !reader.within(scope, "curve", value, good, bound) {
                whole = false;
                break;
            }
        }
        before = Some(flow.value);
    }
    whole.then(|| points.into_iter().map(|[flow, pressure]| [flow.value, pressure.value]).collect())
}

/// Reports slots whose fan does not exist or stands in another slot too; warns of fans in no slot.
pub(super) fn place(reader: &mut Reader, fans: &[FanDraft], slots: &[SlotDraft]) {
    let names = || fans.iter().flat_map(|f| &f.name).map(|n| n.value.as_str());
    for (n, slot) in slots.iter().enumerate() {
        let Some(fan) = &slot.fan else { continue };
        if !names().any(|name| name == fan.value) {
            let message = format!("fan = \"{}\" is not known", fan.value);
            let error = CaseError::new(Cause::UnknownWord, &slot.place, message);
            let error = error.at(fan.span.clone());
            reader.report(match nearest(&fan.value, names()) {
                Some(near) => error.hint(format!("the nearest is \"{near}\"")),
                None => error.hint("describe it in a [[fan]] table of its own"),
            });
        }
        let same = |s: &&SlotDraft| s.fan.as_ref().is_some_and(|f| f.value == fan.value);
        if let Some(other) = slots[..n].iter().find(same) {
            let message = format!("fan \"{}\" stands in {} already", fan.value, other.place);
            let error = CaseError::new(Cause::Conflict, &slot.place, message);
            let hint = "a fan serves one slot: write a second [[fan]] with a name of its own";
            reader.report(error.at(fan.span.clone()).hint(hint));
        }
    }
    for fan in fans {
        let Some(name) = &fan.name else { continue };
        if !slots.iter().flat_map(|s| &s.fan).any(|f| f.value == name.value) {
            let message = "the fan stands in no slot and does nothing";
            let warning = CaseError::new(Cause::Range, &fan.place, message);
            reader.warnings.push(warning.at(name.span.clone()));
        }
    }
}
