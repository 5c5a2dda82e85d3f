//! Writes a case back as TOML, all defaults resolved and patterns expanded.

use std::fmt::Write as _;

use ventrise_mesh::{Geometry, Side, Spacing};
use ventrise_solver::{OuterFilm, Outside, SideCondition, Vent};

use super::model::{
    AirChoice, Block, Case, Fan, HeatCurve, JunctionBy, LimitAt, ProbeShape, Resistance, side_name,
};
use super::setup::spacing;
use super::units::{Dimension, number, write};
use super::vents::kind_words;

/// Lines of a TOML text.
#[derive(Default)]
struct Lines(String);

impl Lines {
    fn line(&mut self, text: &str) {
        let written = writeln!(self.0, "{text}");
        debug_assert!(written.is_ok());
    }

    fn header(&mut self, header: &str) {
        self.line("");
        self.line(header);
    }

    fn text(&mut self, key: &str, value: &str) {
        self.line(&format!("{key} = {}", quoted(value)));
    }

    fn quantity(&mut self, key: &str, si: f64, dimension: Dimension) {
        self.line(&format!("{key} = {}", quoted(&write(si, dimension.usual_unit()))));
    }

    fn lengths(&mut self, key: &str, lengths: [f64; 2]) {
        let [a, b] = lengths.map(|l| quoted(&write(l, "mm")));
        self.line(&format!("{key} = [{a}, {b}]"));
    }
}

fn write_vent(lines: &mut Lines, vent: &Vent) {
    let (kind, sizes) = kind_words(&vent.kind);
    lines.text("kind", kind);
    lines.quantity("free-area", vent.free_share, Dimension::Share);
    if vent.blocked > 0.0 {
        lines.quantity("blocked", vent.blocked, Dimension::Share);
    }
    for (key, size) in sizes {
        lines.quantity(key, size, Dimension::Length);
    }
}

fn write_fan(lines: &mut Lines, fan: &Fan) {
    lines.header("[[fan]]");
    lines.text("name", &fan.name);
    let point = |[flow, pressure]: &[f64; 2]| {
        format!("[{}, {}]", quoted(&write(*flow, "m3/h")), quoted(&write(*pressure, "Pa")))
    };
    let points: Vec<String> = fan.curve.iter().map(point).collect();
    lines.line(&format!("curve = [{}]", points.join(", ")));
    lines.quantity("density", fan.density, Dimension::Density);
    lines.quantity("speed", fan.speed, Dimension::Share);
    lines.text("direction", if fan.inward { "in" } else { "out" });
    if let Some(loss) = fan.stopped_loss {
        lines.line(&format!("stopped-loss = {}", number(loss)));
    }
}

/// A TOML basic string.
fn quoted(text: &str) -> String {
    let mut out = String::from("\"");
    for c in text.chars() {
        match c {
            '"' => out.push_str("\\\""),
            '\\' => out.push_str("\\\\"),
            c if c.is_control() => {
                let written = write!(out, "\\u{:04X}", u32::from(c));
                debug_assert!(written.is_ok());
            }
            c => out.push(c),
        }
    }
    out.push('"');
    out
}

impl Case {
    /// The case as TOML with every default written out: it reads back to the same case.
    pub fn resolved(&self) -> String {
        let mut lines = Lines::default();
        lines.text("title", &self.title);
        lines.header("[section]");
        let axisymmetric = self.section.geometry == Geometry::Axisymmetric;
        lines.text("geometry", if axisymmetric { "axisymmetric" } else { "planar" });
        lines.quantity("width", self.section.width, Dimension::Length);
        lines.quantity("height", self.section.height, Dimension::Length);
        if let Geometry::Planar { depth } = self.section.geometry {
            lines.quantity("depth", depth, Dimension::Length);
        }
        lines.header("[ambient]");
        lines.quantity("temperature", self.ambient.temperature, Dimension::Temperature);
        match self.ambient.altitude {
            // Given properties do not depend on it; written, it would be warned of.
            Some(0.0) if matches!(self.air, AirChoice::Given { .. }) => {}
            Some(altitude) => lines.line(&format!("altitude = {}", quoted(&write(altitude, "m")))),
            None => lines.quantity("pressure", self.ambient.pressure, Dimension::Pressure),
        }
        self.write_air(&mut lines);
        self.write_bodies(&mut lines);
        self.write_joints(&mut lines);
        self.write_edge(&mut lines);
        for probe in &self.probes {
            lines.header("[[probe]]");
            lines.text("name", &probe.name);
            match probe.shape {
                ProbeShape::Point(at) => lines.lengths("at", at),
                ProbeShape::Line { from, to } => {
                    lines.lengths("from", from);
                    lines.lengths("to", to);
                }
            }
        }
        lines.header("[mesh]");
        match spacing(self) {
            Spacing::Uniform { nx, ny } => lines.line(&format!("cells = [{nx}, {ny}]")),
            Spacing::Graded { cell, wall, growth, across, .. } => {
                lines.quantity("cell", cell, Dimension::Length);
                lines.quantity("wall", wall, Dimension::Length);
                lines.line(&format!("growth = {}", number(growth)));
                lines.line(&format!("across = {across}"));
            }
        }
        lines.header("[solve]");
        lines.line(&format!("tolerance = {}", number(self.solve.tolerance)));
        lines.line(&format!("max-iterations = {}", self.solve.max_iterations));
        lines.0
    }

    fn write_air(&self, lines: &mut Lines) {
        lines.header("[air]");
        match &self.air {
            AirChoice::Film => lines.text("properties", "film"),
            AirChoice::Given { air, reference_temperature } => {
                lines.text("properties", "given");
                lines.quantity("density", air.density, Dimension::Density);
                lines.quantity("viscosity", air.viscosity, Dimension::Viscosity);
                lines.quantity("conductivity", air.conductivity, Dimension::Conductivity);
                lines.quantity("specific-heat", air.specific_heat, Dimension::SpecificHeat);
                lines.quantity("expansion", air.expansion, Dimension::Expansion);
                lines.quantity(
                    "reference-temperature",
                    *reference_temperature,
                    Dimension::Temperature,
                );
            }
        }
    }

    fn write_bodies(&self, lines: &mut Lines) {
        for material in &self.materials {
            lines.header("[[material]]");
            if let Some(source) = material.source {
                lines.line(&format!("# from the built-in library: {source}"));
            }
            lines.text("name", &material.name);
            let [x, y] = material.conductivity;
            if x == y {
                lines.quantity("conductivity", x, Dimension::Conductivity);
            } else {
                lines.quantity("conductivity-x", x, Dimension::Conductivity);
                lines.quantity("conductivity-y", y, Dimension::Conductivity);
            }
            if let Some(density) = material.density {
                lines.quantity("density", density, Dimension::Density);
            }
            if let Some(specific_heat) = material.specific_heat {
                lines.quantity("specific-heat", specific_heat, Dimension::SpecificHeat);
            }
            if let Some(emissivity) = material.emissivity {
                lines.line(&format!("emissivity = {}", number(emissivity)));
            }
        }
        for block in &self.blocks {
            lines.header("[[block]]");
            if let Some(name) = &block.name {
                lines.text("name", name);
            }
            if let Some(part) = block.part {
                lines.text("part", &self.parts[part].name);
            }
            lines.text("material", &self.materials[block.material].name);
            lines.lengths("x", block.rectangle.x);
            lines.lengths("y", block.rectangle.y);
            self.write_heat(lines, block);
            let own = block.emissivity.or(self.materials[block.material].emissivity);
            if self.radiates()
                && let Some(emissivity) = self.emissivity(block)
                && (block.emissivity.is_some() || own.is_none())
            {
                lines.line(&format!("emissivity = {}", number(emissivity)));
            }
            if let Some(limit) = block.part.and_then(|p| self.parts[p].limit) {
                match block.part.map(|p| self.parts[p].limit_at) {
                    Some(LimitAt::Junction) => {
                        let limit = quoted(&write(limit, "degC"));
                        let at = quoted("junction");
                        lines.line(&format!("limit = {{ temperature = {limit}, at = {at} }}"));
                    }
                    _ => lines.quantity("limit", limit, Dimension::Temperature),
                }
            }
        }
    }

    fn write_heat(&self, lines: &mut Lines, block: &Block) {
        match &block.curve {
            Some(HeatCurve::Points(points)) => {
                let pair = |[t, q]: &[f64; 2]| {
                    format!("[{}, {}]", quoted(&write(*t, "degC")), quoted(&write(*q, "W")))
                };
                let pairs: Vec<String> = points.iter().map(pair).collect();
                lines.line(&format!("heat-points = [{}]", pairs.join(", ")));
            }
            curve => {
                lines.quantity("heat", block.heat, Dimension::Power);
                if let Some(HeatCurve::Slope { slope, at }) = curve {
                    lines.quantity("heat-slope", *slope, Dimension::Slope);
                    lines.quantity("heat-at", *at, Dimension::Temperature);
                }
            }
        }
        if let Some(junction) = block.junction {
            let key = match junction.by {
                JunctionBy::ThetaJc => "theta-jc",
                JunctionBy::PsiJt => "psi-jt",
            };
            lines.quantity(key, junction.resistance, Dimension::Resistance);
        }
    }

    fn write_joints(&self, lines: &mut Lines) {
        let mut written: Vec<[&str; 2]> = Vec::new();
        for joint in &self.joints {
            let names = joint.blocks.map(|b| {
                let block = &self.blocks[b];
                let part = block.part.map(|p| self.parts[p].name.as_str());
                block.name.as_deref().or(part).unwrap_or_default()
            });
            if written.contains(&names) {
                continue;
            }
            written.push(names);
            lines.header("[[joint]]");
            lines.line(&format!("between = [{}, {}]", quoted(names[0]), quoted(names[1])));
            lines.quantity("resistance", joint.resistance, Dimension::AreaResistance);
        }
    }

    /// A side with an outer face; `with` is what its inner face adds.
    fn outside(&self, side: Side, outside: &Outside, with: &str) -> String {
        let film = match outside.film {
            OuterFilm::Given(h) => quoted(&write(h, "W/(m2 K)")),
            OuterFilm::StillAir => quoted("still air"),
        };
        let mut keys = format!("film = {film}{with}");
        let mut add = |key: &str, value: String| {
            let written = write!(keys, ", {key} = {value}");
            debug_assert!(written.is_ok());
        };
        if outside.emissivity > 0.0 {
            add("outer-emissivity", number(outside.emissivity));
            add("surroundings", quoted(&write(outside.surroundings, "degC")));
        }
        let outer = self.outer_sides[side.index()].as_ref();
        if let Some((sun, absorptance)) = outer.and_then(|o| o.sun) {
            add("sun", quoted(&write(sun, "W/m2")));
            add("absorptance", number(absorptance));
        }
        if let Some(wall) = outer.and_then(|o| o.wall.as_ref()) {
            let [material, thickness] =
                [quoted(&wall.material), quoted(&write(wall.thickness, "mm"))];
            add("wall", format!("{{ material = {material}, thickness = {thickness} }}"));
        }
        format!("{{ {keys} }}")
    }

    fn write_edge(&self, lines: &mut Lines) {
        for slot in &self.slots {
            lines.header("[[slot]]");
            lines.text("name", &slot.name);
            lines.text("side", side_name(slot.side));
            lines.quantity("from", slot.span[0], Dimension::Length);
            lines.quantity("to", slot.span[1], Dimension::Length);
            match &slot.resistance {
                Resistance::Loss(loss) => lines.line(&format!("loss = {}", number(*loss))),
                Resistance::Vent(vent) => write_vent(lines, vent),
            }
            if let Some(fan) = slot.fan {
                lines.text("fan", &self.fans[fan].name);
            }
        }
        self.fans.iter().for_each(|fan| write_fan(lines, fan));
        lines.header("[sides]");
        for side in Side::ALL {
            let emissivity = self.side_emissivities[side.index()];
            let with =
                emissivity.map_or(String::new(), |e| format!(", emissivity = {}", number(e)));
            let value = match self.sides[side.index()] {
                SideCondition::Adiabatic | SideCondition::Sliding(_) => match emissivity {
                    Some(e) => format!("{{ emissivity = {} }}", number(e)),
                    None => quoted("adiabatic"),
                },
                SideCondition::Symmetry => quoted("symmetry"),
                SideCondition::Open => quoted("open"),
                SideCondition::Temperature(t) => {
                    format!("{{ temperature = {}{with} }}", quoted(&write(t, "degC")))
                }
                SideCondition::Flux(q) => {
                    format!("{{ flux = {}{with} }}", quoted(&write(q, "W/m2")))
                }
                SideCondition::Film { coefficient, .. } => {
                    format!("{{ film = {}{with} }}", quoted(&write(coefficient, "W/(m2 K)")))
                }
                SideCondition::Outside(outside) => self.outside(side, &outside, &with),
            };
            lines.line(&format!("{} = {value}", side_name(side)));
        }
    }
}
