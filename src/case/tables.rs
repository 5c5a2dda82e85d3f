//! The tables that occur once ([section], [ambient], [air], [mesh], [solve]) and [[material]].

use std::ops::{Range, RangeInclusive};

use ventrise_mesh::{CELL_LIMIT, Geometry};
use ventrise_solver::{Air, standard_pressure};

use super::error::{CaseError, Cause};
use super::model::{AirChoice, Ambient, Material, MeshChoice, Section, SolveChoice};
use super::parse::{Located, Reader, Scope};
use super::units::Dimension;
use super::vocabulary::{AIR, AMBIENT, MATERIAL, MESH, SECTION, SOLVE};

/// Extent of a section along any direction [m]; anything beyond is a slip of the unit.
const EXTENT: (RangeInclusive<f64>, &str) = (1e-6..=100.0, "from 0.001 mm to 100 m");

/// Reads `[section]`.
pub(super) fn read_section(reader: &mut Reader, top: &Scope) -> Option<Section> {
    if !top.has("section") {
        let error = CaseError::new(Cause::Missing, "", "[section] is missing");
        reader.report(error.hint("write [section] with geometry, width and height"));
    }
    let scope = reader.table(top, "section", "section")?;
    reader.check_keys(&scope, &SECTION);
    if !scope.has("geometry") {
        reader.missing(&scope, "geometry", "\"planar\" or \"axisymmetric\"");
    }
    let geometry = reader.word(&scope, "geometry", &["planar", "axisymmetric"], &[]);
    let mut extent = |key: &str| {
        let length = reader.required(&scope, key, Dimension::Length, "100 mm")?;
        let good = EXTENT.0.contains(&length.value);
        reader.within(&scope, key, &length, good, EXTENT.1).then_some(length.value)
    };
    let (width, height) = (extent("width"), extent("height"));
    if let Some(tilt) = reader.quantity(&scope, "tilt", Dimension::Angle)
        && tilt.value != 0.0
    {
        let typed = reader.typed(&tilt.span);
        let message = format!("tilt = {typed}: this version does not have tilted sections yet");
        let error = CaseError::new(Cause::NotYet, &scope.place, message).at(tilt.span);
        reader.report(error.hint("leave tilt out, or write tilt = \"0 deg\""));
    }
    let depth = reader.bounded(&scope, "depth", Dimension::Length, EXTENT);
    let geometry = match geometry?.value {
        "planar" => {
            if !scope.has("depth") {
                reader.missing(&scope, "depth", "\"100 mm\"");
            }
            Geometry::Planar { depth: depth?.value }
        }
        _ => {
            if scope.has("depth") {
                let message = "depth belongs to planar sections only; an axisymmetric section \
                               stands for the full revolution";
                let error = CaseError::new(Cause::Conflict, &scope.place, message);
                reader.report(error.at(scope.span_of("depth")).hint("remove depth"));
            }
            Geometry::Axisymmetric
        }
    };
    Some(Section { geometry, width: width?, height: height? })
}

/// Reads `[ambient]`.
pub(super) fn read_ambient(reader: &mut Reader, top: &Scope) -> Option<Ambient> {
    if !top.has("ambient") {
        let error = CaseError::new(Cause::Missing, "", "[ambient] is missing");
        reader.report(error.hint("write [ambient] with temperature = \"40 degC\""));
    }
    let scope = reader.table(top, "ambient", "ambient")?;
    reader.check_keys(&scope, &AMBIENT);
    if !scope.has("temperature") {
        reader.missing(&scope, "temperature", "\"40 degC\"");
    }
    let temperature = reader.temperature(&scope, "temperature").filter(|t| {
        let good = (183.15..=573.15).contains(&t.value);
        reader.within(&scope, "temperature", t, good, "from -90 degC to 300 degC")
    });
    let altitude = reader.quantity(&scope, "altitude", Dimension::Length);
    let pressure = reader.quantity(&scope, "pressure", Dimension::Pressure);
    if let (Some(altitude), Some(_)) = (&altitude, &pressure) {
        let message = "altitude and pressure are both given";
        let error = CaseError::new(Cause::Conflict, &scope.place, message);
        reader.report(error.at(altitude.span.clone()).hint("keep one of the two"));
    }
    if let Some(altitude) = &altitude {
        let good = (-500.0..=11_000.0).contains(&altitude.value);
        reader.within(&scope, "altitude", altitude, good, "from -500 m to 11000 m");
    }
    if let Some(pressure) = &pressure {
        let good = (1e3..=1e6).contains(&pressure.value);
        reader.within(&scope, "pressure", pressure, good, "from 1 kPa to 1000 kPa");
    }
    let altitude = altitude.map(|a| a.value);
    let pressure = pressure.map(|p| p.value);
    Some(Ambient {
        temperature: temperature?.value,
        pressure: pressure.unwrap_or_else(|| standard_pressure(altitude.unwrap_or(0.0))),
        altitude: altitude.or(if pressure.is_none() { Some(0.0) } else { None }),
    })
}

/// Key, dimension, example and range of the given air's numbers: from a thin gas to oil and
/// liquid metal, with room on both sides.
type AirNumber = (&'static str, Dimension, &'static str, (RangeInclusive<f64>, &'static str));
const AIR_NUMBERS: [AirNumber; 5] = [
    ("density", Dimension::Density, "1.1 kg/m3", (1e-4..=1e5, "from 1e-4 kg/m3 to 1e5 kg/m3")),
    (
        "viscosity",
        Dimension::Viscosity,
        "1.95e-5 Pa s",
        (1e-8..=1e3, "from 1e-8 Pa s to 1000 Pa s"),
    ),
    (
        "conductivity",
        Dimension::Conductivity,
        "0.0275 W/(m K)",
        (1e-5..=1e4, "from 1e-5 W/(m K) to 1e4 W/(m K)"),
    ),
    (
        "specific-heat",
        Dimension::SpecificHeat,
        "1007 J/(kg K)",
        (1.0..=1e6, "from 1 J/(kg K) to 1e6 J/(kg K)"),
    ),
    ("expansion", Dimension::Expansion, "0.0032 1/K", (0.0..=1.0, "from 0 1/K to 1 1/K")),
];

/// Reads `[air]`.
pub(super) fn read_air(
    reader: &mut Reader,
    top: &Scope,
    ambient: Option<&Ambient>,
) -> Option<AirChoice> {
    if !top.has("air") {
        return Some(AirChoice::Film);
    }
    let scope = reader.table(top, "air", "air")?;
    reader.check_keys(&scope, &AIR);
    let properties = if scope.has("properties") {
        reader.word(&scope, "properties", &["film", "given"], &["variable"])?.value
    } else {
        "film"
    };
    if properties == "film" {
        let given = AIR.names().filter(|k| *k != "properties" && scope.has(k));
        for key in given {
            let typed = reader.typed(&scope.span_of(key));
            let message = format!(
                "{key} = {typed} is used only with properties = \"given\"; film properties are \
                 those of dry air"
            );
            let error = CaseError::new(Cause::Conflict, &scope.place, message);
            let error = error.at(scope.span_of(key));
            reader.report(error.hint("write properties = \"given\", or remove the number"));
        }
        return Some(AirChoice::Film);
    }
    let numbers = AIR_NUMBERS.map(|(key, dimension, example, (range, bound))| {
        let number = reader.required(&scope, key, dimension, example)?;
        let good = range.contains(&number.value);
        reader.within(&scope, key, &number, good, bound).then_some(number.value)
    });
    if let Some(ambient) = top.table("ambient") {
        for key in ["altitude", "pressure"].into_iter().filter(|key| ambient.has(key)) {
            let span = ambient.span_of(key);
            let message = format!(
                "{key} = {} has no effect: the air's properties are given, and nothing else \
                 depends on the pressure",
                reader.typed(&span)
            );
            reader.warn(&ambient, span, message);
        }
    }
    let reference = reader.temperature(&scope, "reference-temperature");
    let [density, viscosity, conductivity, specific_heat, expansion] = numbers;
    let air = Air {
        density: density?,
        viscosity: viscosity?,
        conductivity: conductivity?,
        specific_heat: specific_heat?,
        expansion: expansion?,
    };
    let ambient = ambient?.temperature;
    if let Some(reference) = &reference {
        let change = air.expansion * (ambient - reference.value);
        if change.abs() > 0.02 {
            let message = format!(
                "the density holds at the reference temperature and is used as given; at ambient \
                 temperature it would be {:.1} % {}",
                100.0 * change.abs(),
                if change > 0.0 { "lower" } else { "higher" }
            );
            reader.warn(&scope, reference.span.clone(), message);
        }
    }
    let reference_temperature = reference.map_or(ambient, |r| r.value);
    Some(AirChoice::Given { air, reference_temperature })
}

/// Ranges of solids, from an evacuated panel to a heat pipe taken as a solid.
const CONDUCTIVITY: (RangeInclusive<f64>, &str) = (1e-4..=1e6, "from 1e-4 W/(m K) to 1e6 W/(m K)");
const DENSITY: (RangeInclusive<f64>, &str) = (1e-2..=1e5, "from 0.01 kg/m3 to 1e5 kg/m3");
const SPECIFIC_HEAT: (RangeInclusive<f64>, &str) = (1.0..=1e6, "from 1 J/(kg K) to 1e6 J/(kg K)");

/// Reads the `[[material]]` tables.
pub(super) fn read_materials(reader: &mut Reader, top: &Scope) -> Vec<Located<Material>> {
    let mut materials: Vec<Located<Material>> = Vec::new();
    for mut scope in reader.tables(top, "material") {
        let name = reader.text(&scope, "name");
        if !scope.has("name") {
            reader.missing(&scope, "name", "\"...\"");
        }
        if let Some(name) = &name {
            scope.place = format!("material \"{}\"", name.value);
        }
        reader.check_keys(&scope, &MATERIAL);
        let mut conductivity =
            |key: &str| reader.bounded(&scope, key, Dimension::Conductivity, CONDUCTIVITY);
        let both = conductivity("conductivity");
        let (x, y) = (conductivity("conductivity-x"), conductivity("conductivity-y"));
        let density = reader.bounded(&scope, "density", Dimension::Density, DENSITY);
        let specific_heat =
            reader.bounded(&scope, "specific-heat", Dimension::SpecificHeat, SPECIFIC_HEAT);
        let emissivity = reader.emissivity(&scope);
        let has = ["conductivity", "conductivity-x", "conductivity-y"].map(|k| scope.has(k));
        match has {
            [true, false, false] | [false, true, true] => {}
            [true, ..] => {
                let message = "conductivity stands for both directions, so conductivity-x and \
                               conductivity-y cannot be given beside it";
                let error = CaseError::new(Cause::Conflict, &scope.place, message);
                let error = error.at(scope.span_of("conductivity"));
                reader.report(error.hint("keep conductivity, or the other two"));
            }
            [false, true, false] => {
                reader.missing(&scope, "conductivity-y", "\"0.35 W/(m K)\"");
            }
            [false, false, true] => {
                reader.missing(&scope, "conductivity-x", "\"25 W/(m K)\"");
            }
            [false, false, false] => {
                reader.missing(&scope, "conductivity", "\"0.2 W/(m K)\"");
            }
        }
        let Some(name) = name else { continue };
        if name.value.eq_ignore_ascii_case("air") {
            let message = "air is no solid material";
            let error = CaseError::new(Cause::Name, &scope.place, message).at(name.span.clone());
            reader.report(error.hint("air fills the section wherever no block is; see [air]"));
        }
        if materials.iter().any(|m| m.value.name == name.value) {
            let message = format!("the name \"{}\" is used by two materials", name.value);
            let error = CaseError::new(Cause::Name, &scope.place, message).at(name.span.clone());
            reader.report(error.hint("give every material a name of its own"));
            continue;
        }
        // A conductivity that could not be read is reported already; the name still counts.
        let conductivity = match (both, x, y) {
            (Some(k), ..) => [k.value, k.value],
            (None, Some(x), Some(y)) => [x.value, y.value],
            _ => [f64::NAN, f64::NAN],
        };
        materials.push(Located {
            value: Material {
                name: name.value,
                conductivity,
                density: density.map(|d| d.value),
                specific_heat: specific_heat.map(|c| c.value),
                emissivity,
                source: None,
            },
            span: name.span,
        });
    }
    materials
}

/// Reads `[mesh]`.
pub(super) fn read_mesh(
    reader: &mut Reader,
    top: &Scope,
    section: Option<&Section>,
) -> Option<MeshChoice> {
    let defaults = MeshChoice::default();
    if !top.has("mesh") {
        return Some(defaults);
    }
    let scope = reader.table(top, "mesh", "mesh")?;
    reader.check_keys(&scope, &MESH);
    let cell = reader.positive(&scope, "cell", Dimension::Length);
    let cells = reader.two_counts(&scope, "cells");
    let wall = reader.positive(&scope, "wall", Dimension::Length);
    let growth = reader.number(&scope, "growth");
    let across = reader.count(&scope, "across", 1..=64);
    if let Some(growth) = &growth {
        let good = growth.value > 1.0 && growth.value <= 2.0;
        reader.within(&scope, "growth", growth, good, "more than 1 and at most 2");
    }
    if let Some(cells) = &cells {
        let good = cells.value.iter().all(|n| (1..=20_000).contains(n))
            && cells.value[0] * cells.value[1] <= CELL_LIMIT;
        let bound = format!(
            "from 1 to 20000 along each direction and {} million in all",
            CELL_LIMIT / 1_000_000
        );
        reader.within(&scope, "cells", cells, good, &bound);
        for key in ["cell", "wall", "growth", "across"] {
            if scope.has(key) {
                let message = format!("{key} has no meaning beside cells, a plain uniform mesh");
                let error = CaseError::new(Cause::Conflict, &scope.place, message);
                let error = error.at(scope.span_of(key));
                reader.report(error.hint(format!("remove {key}, or remove cells")));
            }
        }
    }
    if let (Some(cell), Some(section)) = (&cell, section) {
        let good = cell.value <= section.width.max(section.height);
        reader.within(&scope, "cell", cell, good, "no larger than the section");
        let good = cell.value >= 1e-5 * section.width.max(section.height);
        reader.within(&scope, "cell", cell, good, "at least 1/100000 of the section");
    }
    if let (Some(wall), Some(cell)) = (&wall, &cell) {
        let good = wall.value <= cell.value;
        reader.within(&scope, "wall", wall, good, "no larger than cell");
    }
    if let (Some(wall), Some(section)) = (&wall, section) {
        let good = wall.value >= 1e-6 * section.width.min(section.height);
        reader.within(&scope, "wall", wall, good, "at least 1/1000000 of the section");
    }
    Some(MeshChoice {
        cell: cell.map(|c| c.value),
        cells: cells.map(|c| c.value),
        wall: wall.map(|w| w.value),
        growth: growth.map_or(defaults.growth, |g| g.value),
        across: across.map_or(defaults.across, |a| a.value),
    })
}

/// The keys of `[mesh]` that are given, and where their values are written.
pub(super) fn mesh_keys(top: &Scope) -> Vec<(&'static str, Range<usize>)> {
    let Some(scope) = top.table("mesh") else { return Vec::new() };
    let given = MESH.names().filter(|key| scope.has(key));
    given.map(|key| (key, scope.span_of(key))).collect()
}

/// Reads `[solve]`.
pub(super) fn read_solve(reader: &mut Reader, top: &Scope) -> Option<SolveChoice> {
    let defaults = SolveChoice::default();
    if !top.has("solve") {
        return Some(defaults);
    }
    let scope = reader.table(top, "solve", "solve")?;
    reader.check_keys(&scope, &SOLVE);
    let tolerance = reader.number(&scope, "tolerance");
    let max_iterations = reader.count(&scope, "max-iterations", 1..=10_000_000);
    if let Some(tolerance) = &tolerance {
        let good = (1e-12..=1e-2).contains(&tolerance.value);
        reader.within(&scope, "tolerance", tolerance, good, "from 1e-12 to 1e-2");
    }
    Some(SolveChoice {
        tolerance: tolerance.map_or(defaults.tolerance, |t| t.value),
        max_iterations: max_iterations.map_or(defaults.max_iterations, |m| m.value),
    })
}
