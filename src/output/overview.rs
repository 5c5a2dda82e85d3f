//! What `check` says about a case: what was understood, its mesh, what a solve will take.

use std::io::{self, Write};

use ventrise_mesh::{Crossed, Crossing, GapEnd, Generated, Geometry, MeshError, Side};
use ventrise_solver::{OuterFilm, Outside, SideCondition};

use crate::case::setup::layout;
use crate::case::units::rounded;
use crate::case::{AirChoice, Case, Estimate, ProbeShape, judgement};
use crate::memory;

use super::readings::celsius;
use super::side_name;
use super::slots::resistance_words;
use super::words::{counted, fixed, grouped, mm, shortened, sized};

/// Seconds in an hour: flows are shown per hour.
const HOUR: f64 = 3600.0;
/// Most columns of a name.
const NAME: usize = 40;
/// Most blocks and crossings listed one by one.
const LISTED: usize = 40;

/// A case on its mesh, ready to be described.
#[derive(Debug, Clone)]
pub struct Overview<'a> {
    case: &'a Case,
    generated: &'a Generated,
    crossings: Vec<Crossing>,
}

impl<'a> Overview<'a> {
    /// Looks at a case and its mesh.
    ///
    /// # Errors
    /// A mesh that is not the case's own.
    pub fn of(case: &'a Case, generated: &'a Generated) -> Result<Self, MeshError> {
        let crossings = generated.mesh.crossings(&layout(case))?;
        Ok(Overview { case, generated, crossings })
    }

    /// Writes everything.
    ///
    /// # Errors
    /// What the stream reports.
    pub fn write(&self, out: &mut dyn Write) -> io::Result<()> {
        writeln!(out, "{}\n", self.case.title())?;
        self.surroundings(out)?;
        self.solids(out)?;
        self.edge(out)?;
        self.probes(out)?;
        self.mesh(out)?;
        self.estimate(out)?;
        self.doubts(out)
    }

    fn surroundings(&self, out: &mut dyn Write) -> io::Result<()> {
        let (section, ambient) = (self.case.section(), self.case.ambient());
        let size = format!("{} x {} mm", mm(section.width), mm(section.height));
        match section.geometry {
            Geometry::Planar { depth } => {
                writeln!(out, "Section   planar, {size}, depth {} mm", mm(depth))?;
            }
            Geometry::Axisymmetric => {
                writeln!(out, "Section   axisymmetric, radius x height {size}")?;
            }
        }
        writeln!(
            out,
            "Ambient   {} degC, {} Pa",
            fixed(celsius(ambient.temperature), 1),
            fixed(ambient.pressure, 0)
        )?;
        match self.case.air() {
            AirChoice::Film => {
                writeln!(out, "Air       dry, at the film temperature of the result")
            }
            AirChoice::Given { air, .. } => writeln!(
                out,
                "Air       given: {} kg/m3, {:e} Pa s, {} W/(m K), {} J/(kg K), {:e} 1/K",
                air.density, air.viscosity, air.conductivity, air.specific_heat, air.expansion
            ),
        }
    }

    fn solids(&self, out: &mut dyn Write) -> io::Result<()> {
        let case = self.case;
        writeln!(
            out,
            "Blocks    {} in {}, {} W in all",
            case.blocks().len(),
            counted(case.parts().len(), "part"),
            sized(case.heat(), 3, 0.0)
        )?;
        for block in case.blocks().iter().take(LISTED) {
            let material = &case.materials()[block.material];
            let [x, y] = [block.rectangle.x, block.rectangle.y];
            writeln!(
                out,
                "  {}: {}, x {} to {} mm, y {} to {} mm{}{}",
                block.name.as_deref().map_or("(no name)".into(), |name| shortened(name, NAME)),
                material.name,
                mm(x[0]),
                mm(x[1]),
                mm(y[0]),
                mm(y[1]),
                if block.heat == 0.0 { String::new() } else { format!(", {} W", block.heat) },
                match case.emissivity(block).filter(|_| case.radiates()) {
                    Some(emissivity) => format!(", emissivity {emissivity}"),
                    None => String::new(),
                }
            )?;
        }
        more(out, case.blocks().len())?;
        for part in case.parts() {
            let limit = part.limit.map_or_else(
                || "no limit".into(),
                |limit| format!("limit {} degC", fixed(celsius(limit), 1)),
            );
            writeln!(
                out,
                "  part {}: {}, {} W, {limit}",
                shortened(&part.name, NAME),
                counted(part.blocks.len(), "block"),
                part.heat
            )?;
        }
        Ok(())
    }

    fn edge(&self, out: &mut dyn Write) -> io::Result<()> {
        writeln!(out, "Slots     {}", self.case.slots().len())?;
        for slot in self.case.slots() {
            let gross = 1e4 * self.case.slot_area(slot);
            let free = match slot.resistance.vent() {
                Some(vent) => format!(" gross, {} cm2 free", fixed(gross * vent.open_share(), 2)),
                None => String::new(),
            };
            writeln!(
                out,
                "  {}: {}, {} to {} mm, {} cm2{free}, {}",
                shortened(&slot.name, NAME),
                side_name(slot.side),
                mm(slot.span[0]),
                mm(slot.span[1]),
                fixed(gross, 2),
                resistance_words(&slot.resistance)
            )?;
        }
        self.fans(out)?;
        let sides = Side::ALL.map(|side| {
            let axis = side == Side::Left && self.case.section().geometry == Geometry::Axisymmetric;
            let what =
                if axis { "axis".to_string() } else { condition(&self.case.sides()[side.index()]) };
            let emissivity = self.case.side_emissivities()[side.index()];
            let surface = emissivity.map_or(String::new(), |e| format!(", emissivity {e}"));
            format!("{} {what}{surface}", side_name(side))
        });
        writeln!(out, "Sides     {}", sides.join("; "))?;
        if !self.case.joints().is_empty() {
            writeln!(out, "Joints    {}", self.case.joints().len())?;
        }
        for joint in self.case.joints().iter().take(LISTED) {
            let name = |b: usize| {
                let name = self.case.blocks()[b].name.as_deref();
                name.map_or_else(|| format!("block {}", b + 1), |name| shortened(name, NAME))
            };
            let [a, b] = joint.blocks;
            let resistance = fixed(1e4 * joint.resistance, 2);
            writeln!(out, "  {} and {}: {resistance} K cm2/W", name(a), name(b))?;
        }
        more(out, self.case.joints().len())?;
        let radiation = if self.case.radiates() { "between all surfaces" } else { "not modelled" };
        writeln!(out, "Radiation {radiation}")
    }

    fn fans(&self, out: &mut dyn Write) -> io::Result<()> {
        if !self.case.fans().is_empty() {
            writeln!(out, "Fans      {}", self.case.fans().len())?;
        }
        for (n, fan) in self.case.fans().iter().enumerate() {
            let slot = self.case.slots().iter().find(|s| s.fan == Some(n));
            let place = slot.map_or("in no slot".into(), |s| {
                format!("{} at {}", if fan.inward { "in" } else { "out" }, shortened(&s.name, NAME))
            });
            let name = shortened(&fan.name, NAME);
            if fan.speed == 0.0 {
                let loss = fan.stopped_loss.unwrap_or(0.0);
                writeln!(out, "  {name}: {place}, stands, loss {loss} more")?;
                continue;
            }
            // As the fan laws have it at the ambient's density.
            let curve = fan.curve_fan();
            let density = Estimate::of(self.case).air.density;
            let free = curve
                .free_delivery()
                .map_or("none".into(), |free| format!("{} m3/h", sized(3600.0 * free, 2, 0.0)));
            writeln!(
                out,
                "  {name}: {place}, {} % of full speed, up to {} Pa, free delivery {free}",
                fixed(100.0 * fan.speed, 1),
                sized(curve.pressure(0.0, density)[0], 2, 0.0)
            )?;
        }
        Ok(())
    }

    fn probes(&self, out: &mut dyn Write) -> io::Result<()> {
        if !self.case.probes().is_empty() {
            writeln!(out, "Probes    {}", self.case.probes().len())?;
        }
        for probe in self.case.probes() {
            let place = |at: [f64; 2]| format!("({}, {}) mm", mm(at[0]), mm(at[1]));
            let name = shortened(&probe.name, NAME);
            match probe.shape {
                ProbeShape::Point(at) => writeln!(out, "  {name}: {}", place(at))?,
                ProbeShape::Line { from, to } => {
                    writeln!(out, "  {name}: {} to {}", place(from), place(to))?;
                }
            }
        }
        Ok(())
    }

    fn mesh(&self, out: &mut dyn Write) -> io::Result<()> {
        let mesh = &self.generated.mesh;
        let [smallest, largest] = mesh.cell_sizes();
        writeln!(
            out,
            "Mesh      {} x {} = {}, {} to {} mm",
            mesh.nx(),
            mesh.ny(),
            counted(mesh.cell_count(), "cell"),
            mm(smallest),
            mm(largest)
        )?;
        let needed = memory::of_solve(mesh.cell_count());
        writeln!(out, "  a solve takes up to {} MB of memory", grouped((needed / 1e6) as usize))?;
        let mut crossings: Vec<&Crossing> = self.crossings.iter().collect();
        let wanted = |c: &Crossing| c.crossed.wanted(self.case.mesh_choice().across);
        crossings.sort_by_key(|c| (c.cells >= wanted(c), matches!(c.crossed, Crossed::Block(_))));
        for crossing in crossings.iter().take(LISTED) {
            let few = if crossing.cells < wanted(crossing) {
                format!("  (fewer than {})", wanted(crossing))
            } else {
                String::new()
            };
            writeln!(
                out,
                "  {:>4} {} along {} across {}, {} mm{few}",
                crossing.cells,
                if crossing.cells == 1 { "cell" } else { "cells" },
                crossing.axis.letter(),
                self.crossed(crossing.crossed),
                mm(crossing.size())
            )?;
        }
        more(out, crossings.len())
    }

    fn crossed(&self, crossed: Crossed) -> String {
        let block = |b: usize| {
            let name = self.case.blocks().get(b).and_then(|b| b.name.as_deref());
            name.map_or_else(|| format!("block {}", b + 1), |name| shortened(name, NAME))
        };
        let end = |end: GapEnd| match end {
            GapEnd::Block(b) => block(b),
            GapEnd::Side(side) => format!("the {} side", side_name(side)),
        };
        match crossed {
            Crossed::Block(b) => block(b),
            Crossed::Slot(s) => {
                let name = self.case.slots().get(s).map(|s| s.name.as_str());
                format!("slot {}", shortened(name.unwrap_or_default(), NAME))
            }
            Crossed::Gap([a, b]) | Crossed::HalfGap([a, b]) => {
                format!("the {} between {} and {}", crossed.word(), end(a), end(b))
            }
        }
    }

    fn estimate(&self, out: &mut dyn Write) -> io::Result<()> {
        let estimate = Estimate::of(self.case);
        writeln!(
            out,
            "By hand   surfaces about {} K above the air, layer about {} mm, Rayleigh about {:.0e}",
            fixed(estimate.rise, 0),
            mm((estimate.layer * 1e4).round() / 1e4),
            estimate.rayleigh
        )?;
        if let Some(draught) = &estimate.draught {
            writeln!(
                out,
                "  draught at most {} m3/h, which leaves {} K above ambient or more",
                sized(HOUR * draught.flow, 2, 0.0),
                fixed(draught.rise, 1)
            )?;
        }
        if let Some(gap) = judgement::plate_gap(self.case, &estimate) {
            writeln!(
                out,
                "  heated faces {} mm apart at the closest; at {} mm height about {} mm serve best",
                mm(gap.width),
                mm(gap.height),
                fixed(1e3 * gap.best, 1)
            )?;
        }
        if let Some(share) = judgement::radiated_share(self.case, &estimate) {
            writeln!(
                out,
                "  by radiation up to {} % of the heat{}",
                fixed(100.0 * share, 0),
                if self.case.radiates() { "" } else { ", which is not modelled" }
            )?;
        }
        Ok(())
    }

    fn doubts(&self, out: &mut dyn Write) -> io::Result<()> {
        let mut warnings = self.case.warnings();
        warnings.extend(judgement::questions(self.case, &self.generated.mesh));
        let needed = memory::of_solve(self.generated.mesh.cell_count());
        if let Some(available) = memory::available().filter(|available| needed > *available) {
            warnings.push(format!(
                "a solve on this mesh takes more memory than this machine has left, {} MB",
                grouped((available / 1e6) as usize)
            ));
        }
        if warnings.is_empty() && self.generated.notes.is_empty() {
            return writeln!(out, "\nThe case is in order.");
        }
        writeln!(out, "\nThe case can be solved; look at")?;
        for warning in warnings.iter().chain(&self.generated.notes) {
            writeln!(out, "  - {warning}")?;
        }
        Ok(())
    }
}

fn more(out: &mut dyn Write, count: usize) -> io::Result<()> {
    if count > LISTED { writeln!(out, "  and {} more", count - LISTED) } else { Ok(()) }
}

fn outside(o: &Outside) -> String {
    let mut text = match o.film {
        OuterFilm::Given(h) => format!("film {h} W/(m2 K)"),
        OuterFilm::StillAir => "still air".into(),
    };
    text.push_str(&format!(" at {} degC", fixed(celsius(o.air), 1)));
    if o.wall > 0.0 {
        text.push_str(&format!(", wall {} K m2/W", rounded(o.wall, 3)));
    }
    if o.emissivity > 0.0 {
        let surroundings = fixed(celsius(o.surroundings), 1);
        text.push_str(&format!(", radiates {} to {surroundings} degC", o.emissivity));
    }
    if o.sun > 0.0 {
        text.push_str(&format!(", absorbs {} W/m2", rounded(o.sun, 4)));
    }
    text
}

fn condition(condition: &SideCondition) -> String {
    match condition {
        SideCondition::Adiabatic => "adiabatic".into(),
        SideCondition::Symmetry => "symmetry".into(),
        SideCondition::Open => "open".into(),
        SideCondition::Temperature(t) => format!("at {} degC", fixed(celsius(*t), 1)),
        SideCondition::Flux(q) => format!("flux {q} W/m2"),
        SideCondition::Film { coefficient, temperature } => {
            format!("film {coefficient} W/(m2 K) to {} degC", fixed(celsius(*temperature), 1))
        }
        SideCondition::Outside(o) => outside(o),
        SideCondition::Sliding(speed) => format!("sliding at {speed} m/s"),
    }
}
