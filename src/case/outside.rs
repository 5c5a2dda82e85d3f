//! The keys of a side's outer face: `film = "still air"`, `wall`, `sun`, `absorptance`,
//! `outer-emissivity`, `surroundings`.

use toml::de::DeValue;
use ventrise_mesh::Side;
use ventrise_solver::{OuterFilm, Outside, SideCondition};

use super::error::{CaseError, Cause, nearest};
use super::materials;
use super::model::{Ambient, Material, OuterSide, Wall};
use super::parse::{Located, Reader, Scope};
use super::units::Dimension;
use super::vocabulary::WALL;

/// Keys that say more about an outer face than its film does.
pub(super) const OUTER_KEYS: [&str; 5] =
    ["wall", "sun", "absorptance", "outer-emissivity", "surroundings"];
const STILL_AIR: &str = "still air";

/// The film as written: a coefficient or still air.
pub(super) fn read_film(reader: &mut Reader, scope: &Scope) -> Option<OuterFilm> {
    let value = scope.get("film")?;
    if let DeValue::String(word) = value.get_ref() {
        if word.trim() == STILL_AIR {
            return Some(OuterFilm::StillAir);
        }
        if !word.trim().is_empty() && !word.contains(|c: char| c.is_ascii_digit()) {
            let typed = reader.typed(&value.span());
            let message = format!("film = {typed} is no film");
            let error = CaseError::new(Cause::UnknownWord, &scope.place, message);
            reader.report(
                error.at(value.span()).hint("write \"still air\", or a number: \"8 W/(m2 K)\""),
            );
            return None;
        }
    }
    let bound = (1e-3..=1e6, "from 0.001 W/(m2 K) to 1e6 W/(m2 K)");
    let film = reader.bounded(scope, "film", Dimension::Film, bound)?;
    Some(OuterFilm::Given(film.value))
}

/// The condition of a side with a film, and what the case says about its outer face. Mistakes are
/// reported; the condition then is not to be used.
pub(super) fn read_outside(
    reader: &mut Reader,
    scope: &Scope,
    side: Side,
    film: OuterFilm,
    ambient: &Ambient,
    own: &[Located<Material>],
) -> (SideCondition, Option<OuterSide>) {
    let temperature = ambient.temperature;
    let written = OUTER_KEYS.iter().any(|key| scope.has(key));
    if let (OuterFilm::Given(coefficient), false) = (film, written) {
        return (SideCondition::Film { coefficient, temperature }, None);
    }
    for (key, other, example) in [
        ("sun", "absorptance", "0.6"),
        ("absorptance", "sun", "\"800 W/m2\""),
        ("surroundings", "outer-emissivity", "0.9"),
    ] {
        if scope.has(key) && !scope.has(other) {
            let message = format!("{key} needs {other} beside it");
            let error = CaseError::new(Cause::Missing, &scope.place, message);
            let error = error.at(scope.span_of(key));
            reader.report(error.hint(format!("write {other} = {example} or so")));
        }
    }
    // The sun above the atmosphere brings 1361 W/m2.
    let bound = (0.0..=2000.0, "from 0 W/m2 to 2000 W/m2");
    let sun = reader.bounded(scope, "sun", Dimension::Flux, bound).map(|s| s.value);
    let absorptance = reader.share(scope, "absorptance");
    let emissivity = reader.share(scope, "outer-emissivity");
    let surroundings = reader.temperature(scope, "surroundings").filter(|t| {
        let good = (123.15..=2273.15).contains(&t.value);
        reader.within(scope, "surroundings", t, good, "from -150 degC to 2000 degC")
    });
    let wall = read_wall(reader, scope, own);
    let resistance = wall.as_ref().map_or(0.0, |wall| {
        let across = if matches!(side, Side::Left | Side::Right) { 0 } else { 1 };
        wall.thickness / wall.conductivity[across]
    });
    let outside = Outside {
        film,
        air: temperature,
        emissivity: emissivity.unwrap_or(0.0),
        surroundings: surroundings.map_or(temperature, |t| t.value),
        sun: sun.zip(absorptance).map_or(0.0, |(sun, share)| sun * share),
        wall: resistance,
    };
    let outer = OuterSide { wall, sun: sun.zip(absorptance) };
    (SideCondition::Outside(outside), Some(outer))
}

/// Reports keys of the outer face beside a condition that leaves no outer face.
pub(super) fn refuse_outer_keys(reader: &mut Reader, scope: &Scope) {
    for key in OUTER_KEYS.iter().filter(|key| scope.has(key)) {
        let message = format!("{key} describes an outer face, which needs a film");
        let error = CaseError::new(Cause::Conflict, &scope.place, message);
        reader.report(
            error
                .at(scope.span_of(key))
                .hint("write film = \"still air\", or film = \"8 W/(m2 K)\", in the same braces"),
        );
    }
}

fn read_wall(reader: &mut Reader, scope: &Scope, own: &[Located<Material>]) -> Option<Wall> {
    let inner = reader.table(scope, "wall", &format!("{}, wall", scope.place))?;
    reader.check_keys(&inner, &WALL);
    if !inner.has("material") {
        reader.missing(&inner, "material", "\"PC/ABS\"");
    }
    if !inner.has("thickness") {
        reader.missing(&inner, "thickness", "\"2 mm\"");
    }
    let bound = (1e-6..=0.1, "from 0.001 mm to 100 mm");
    let thickness = reader.bounded(&inner, "thickness", Dimension::Length, bound);
    let name = reader.text(&inner, "material")?;
    let of_own = own.iter().find(|m| m.value.name == name.value);
    let conductivity = match (of_own, materials::find(&name.value)) {
        (Some(own), _) => own.value.conductivity,
        (None, Some(found)) => found.conductivity,
        (None, None) => {
            let message = format!("material = \"{}\" is not known", name.value);
            let error = CaseError::new(Cause::UnknownWord, &inner.place, message);
            let own = own.iter().map(|m| m.value.name.as_str());
            let library = materials::library().iter().map(|m| m.name);
            let hint = nearest(&name.value, own.chain(library)).map_or_else(
                || "describe it in a [[material]] table of its own".to_string(),
                |near| format!("the nearest is \"{near}\""),
            );
            reader.report(error.at(name.span).hint(hint));
            return None;
        }
    };
    Some(Wall { material: name.value, thickness: thickness?.value, conductivity })
}
