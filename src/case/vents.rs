//! What a slot costs: its loss coefficient, or the vent that covers it in the words of the trade.

use std::ops::RangeInclusive;

use ventrise_solver::{Vent, VentKind};

use super::error::{CaseError, Cause};
use super::model::Resistance;
use super::parse::{Reader, Scope};
use super::units::Dimension;

/// Words of `kind`, each with the keys of its sizes and an example of each.
const KINDS: [(&str, &[(&str, &str)]); 3] = [
    ("louvre", &[("gap", "6 mm"), ("blade", "12 mm")]),
    ("perforated", &[("hole", "3 mm"), ("sheet", "1 mm")]),
    ("mesh", &[("wire", "0.4 mm")]),
];
/// Clear width between two wires; stands in place of `free-area`.
const OPENING: &str = "opening";
/// Keys that describe a vent.
const VENT_KEYS: [&str; 9] =
    ["kind", "free-area", "blocked", "gap", "blade", "hole", "sheet", "wire", OPENING];

/// Sizes of what vents are made of [m].
const SIZE: (RangeInclusive<f64>, &str) = (1e-5..=0.5, "from 0.01 mm to 500 mm");
const FREE: (RangeInclusive<f64>, &str) = (0.01..=1.0, "from 1 % to 100 %");
const BLOCKED: (RangeInclusive<f64>, &str) = (0.0..=0.95, "from 0 % to 95 %");

/// Reads what a `[[slot]]` says of its resistance.
pub(super) fn read_resistance(reader: &mut Reader, slot: &Scope) -> Option<Resistance> {
    let written = VENT_KEYS.iter().find(|key| slot.has(key));
    let loss = reader.number(slot, "loss").filter(|loss| {
        let good = (0.0..=1e6).contains(&loss.value);
        reader.within(slot, "loss", loss, good, "from 0 to 1e6")
    });
    match (slot.has("loss"), written) {
        (false, None) => {
            let example = "1.5, or kind = \"louvre\", \"perforated\" or \"mesh\" with its sizes";
            reader.missing(slot, "loss", example);
            None
        }
        (true, None) => Some(Resistance::Loss(loss?.value)),
        (true, Some(key)) => {
            let message = format!("loss and {key} are both given");
            let error = CaseError::new(Cause::Conflict, &slot.place, message);
            let hint = "keep loss alone, or describe the vent by kind, free-area and its sizes";
            reader.report(error.at(slot.span_of(key)).hint(hint));
            None
        }
        (false, Some(_)) => read_vent(reader, slot).map(Resistance::Vent),
    }
}

fn read_vent(reader: &mut Reader, slot: &Scope) -> Option<Vent> {
    if !slot.has("kind") {
        reader.missing(slot, "kind", "\"louvre\", \"perforated\" or \"mesh\"");
    }
    let kind = reader.word(slot, "kind", &KINDS.map(|k| k.0), &[]);
    let free = reader.bounded(slot, "free-area", Dimension::Share, FREE);
    let blocked = reader.bounded(slot, "blocked", Dimension::Share, BLOCKED);
    let clean = !slot.has("blocked");
    let opening = reader.bounded(slot, OPENING, Dimension::Length, SIZE);
    let mut sizes = Vec::new();
    for (word, keys) in KINDS {
        for (key, example) in keys {
            let size = reader.bounded(slot, key, Dimension::Length, SIZE);
            match &kind {
                Some(kind) if kind.value == word => {
                    if !slot.has(key) {
                        reader.missing(slot, key, &format!("\"{example}\""));
                    }
                    sizes.push(size.map(|s| s.value));
                }
                Some(kind) if slot.has(key) => stranger(reader, slot, key, word, kind.value),
                _ => {}
            }
        }
    }
    let kind = kind?.value;
    if slot.has(OPENING) && kind != "mesh" {
        stranger(reader, slot, OPENING, "mesh", kind);
    }
    let free_share = if slot.has(OPENING) && slot.has("free-area") {
        let message = "free-area and opening are both given";
        let error = CaseError::new(Cause::Conflict, &slot.place, message);
        let hint = "keep one: with wires of one size the other follows from it";
        reader.report(error.at(slot.span_of(OPENING)).hint(hint));
        None
    } else if slot.has(OPENING) {
        // Square mesh: the clear square over the square of the pitch.
        let opening = opening?.value;
        sizes.first().copied().flatten().map(|wire| (opening / (opening + wire)).powi(2))
    } else {
        if !slot.has("free-area") {
            let or = if kind == "mesh" { ", or opening = \"1.5 mm\"" } else { "" };
            reader.missing(slot, "free-area", &format!("\"60 %\"{or}"));
        }
        free.map(|f| f.value)
    };
    let size = |n: usize| sizes.get(n).copied().flatten();
    Some(Vent {
        kind: match kind {
            "louvre" => VentKind::Louvre { gap: size(0)?, blade: size(1)? },
            "perforated" => VentKind::Perforated { hole: size(0)?, sheet: size(1)? },
            _ => VentKind::Mesh { wire: size(0)? },
        },
        free_share: free_share?,
        blocked: if clean { 0.0 } else { blocked?.value },
    })
}

/// Reports a size that another kind of vent has.
fn stranger(reader: &mut Reader, slot: &Scope, key: &str, owner: &str, kind: &str) {
    let message = format!("{key} belongs to kind = \"{owner}\", not to \"{kind}\"");
    let keys = KINDS.iter().find(|k| k.0 == kind).map_or(&[][..], |k| k.1);
    let keys: Vec<&str> = keys.iter().map(|k| k.0).collect();
    let error = CaseError::new(Cause::Conflict, &slot.place, message).at(slot.span_of(key));
    reader.report(error.hint(format!("the sizes of \"{kind}\": {}", keys.join(", "))));
}

/// Word of the case file for a kind of vent, and its sizes by key [m].
pub fn kind_words(kind: &VentKind) -> (&'static str, Vec<(&'static str, f64)>) {
    match *kind {
        VentKind::Louvre { gap, blade } => ("louvre", vec![("gap", gap), ("blade", blade)]),
        VentKind::Perforated { hole, sheet } => {
            ("perforated", vec![("hole", hole), ("sheet", sheet)])
        }
        VentKind::Mesh { wire } => ("mesh", vec![("wire", wire)]),
    }
}
