//! What a person reads at the end of a run.

use std::io::{self, Write};
use std::path::Path;

use unicode_width::UnicodeWidthStr;

use super::fans::cells as fan_cells;
use super::readings::Readings;
use super::summary::{Part, Summary};
pub(super) use super::words::fixed;
use super::words::{counted, in_column, shortened, sized};

/// Seconds in an hour: flows are shown per hour.
const HOUR: f64 = 3600.0;
/// Temperatures below ambient by more than this get a place of their own [K].
const SHOWN_COLD: f64 = 0.05;
/// Limits beyond which a table's name column is not widened [characters].
const NAME_WIDTH: std::ops::RangeInclusive<usize> = 12..=32;

/// Writes the end of a run: parts against limits, slots, heat, balances, verdict, warnings, files.
///
/// # Errors
/// What the stream reports.
pub fn report(
    out: &mut dyn Write,
    summary: &Summary,
    readings: &Readings,
    target: &Path,
    files: &[&str],
) -> io::Result<()> {
    writeln!(out, "{}", summary.case.title)?;
    writeln!(out)?;
    parts(out, summary, readings)?;
    slots(out, summary)?;
    vents(out, summary)?;
    fans(out, summary)?;
    outer(out, summary)?;
    heat(out, summary)?;
    balances(out, summary, readings)?;
    writeln!(out, "Verdict: {}", verdict(summary))?;
    let warmest = summary.parts.iter().filter_map(|p| Some((p, p.max_c?)));
    let warmest = warmest.max_by(|a, b| a.1.total_cmp(&b.1));
    if let (Some(by_hand), Some((part, max))) =
        (summary.by_hand.filter(|_| summary.solved), warmest)
    {
        writeln!(out, "By hand: {}", by_hand.beside(&part.name, max - readings.ambient))?;
    }
    if !summary.warnings.is_empty() {
        writeln!(out, "\nWarnings")?;
        for warning in &summary.warnings {
            writeln!(out, "  - {warning}")?;
        }
    }
    writeln!(
        out,
        "\nCare: hot surfaces burn, mains voltage kills, sealed batteries can vent. These"
    )?;
    writeln!(out, "numbers inform only; local codes and licensed practice decide.")?;
    writeln!(out, "\nResults in {}", target.display())?;
    writeln!(out, "  {}", files.join("  "))
}

fn name_width<'a>(names: impl Iterator<Item = &'a str>) -> usize {
    let longest = names.map(|name| name.width()).max().unwrap_or(0);
    longest.clamp(*NAME_WIDTH.start(), *NAME_WIDTH.end())
}

/// A value to so many decimals, or a dash.
fn shown(value: Option<f64>, decimals: usize) -> String {
    value.map_or_else(|| "-".into(), |v| fixed(v, decimals))
}

fn columns(cells: &[String]) -> String {
    cells.iter().map(|c| format!("{c:>12}")).collect()
}

/// The largest heat that enters or leaves: what is round-off beside it is shown as zero.
fn heat_scale(summary: &Summary) -> f64 {
    summary.balance.heat_in_w.abs().max(summary.balance.heat_out_w.abs())
}

/// Whether a temperature is so far below ambient that it must be seen.
fn is_cold(celsius: Option<f64>, readings: &Readings) -> bool {
    celsius.is_some_and(|c| c < readings.ambient - SHOWN_COLD)
}

fn parts(out: &mut dyn Write, summary: &Summary, readings: &Readings) -> io::Result<()> {
    if summary.parts.is_empty() {
        return Ok(());
    }
    let mut parts: Vec<&Part> = summary.parts.iter().collect();
    let key = |p: &Part| p.margin_k.unwrap_or(f64::INFINITY);
    parts.sort_by(|a, b| key(a).total_cmp(&key(b)));
    let w = name_width(parts.iter().map(|p| p.name.as_str()));
    let cold = parts.iter().any(|p| is_cold(p.min_c, readings));
    let junctions = parts.iter().any(|p| p.junction_c.is_some());
    let row = |heat: String, min: String, rest: [String; 4]| {
        let min = cold.then_some(min);
        let [max, junction, limit, margin] = rest;
        let rest = [Some(max), junctions.then_some(junction), Some(limit), Some(margin)];
        let cells = std::iter::once(Some(heat)).chain([min]).chain(rest).flatten();
        columns(&cells.collect::<Vec<_>>())
    };
    let rest = ["max degC", "junction", "limit degC", "margin K"].map(String::from);
    writeln!(out, "{:w$}{}", "Part", row("heat W".into(), "min degC".into(), rest))?;
    let scale = parts.iter().fold(0.0_f64, |scale, p| scale.max(p.heat_w.abs()));
    for part in parts {
        let rest = [part.max_c, part.junction_c, part.limit_c, part.margin_k];
        let rest = rest.map(|value| shown(value, 1));
        let cells = row(sized(part.heat_w, 2, scale), shown(part.min_c, 1), rest);
        let over = if part.margin_k.is_some_and(|m| m < 0.0) { "  over its limit" } else { "" };
        let band = part.band_c.map_or_else(String::new, |b| {
            format!("  sways from {} to {}", fixed(b[0], 1), fixed(b[1], 1))
        });
        let at = if part.limit_at.is_some() { "  at the junction" } else { "" };
        writeln!(out, "{}{cells}{over}{at}{band}", in_column(&part.name, w))?;
    }
    writeln!(out)
}

/// Slots, and sides that are open.
fn slots(out: &mut dyn Write, summary: &Summary) -> io::Result<()> {
    let open = summary.sides.iter().filter(|s| s.in_m3_s + s.out_m3_s > 0.0);
    let open: Vec<(String, _)> = open.map(|s| (format!("{} side", s.name), s)).collect();
    if summary.slots.is_empty() && open.is_empty() {
        return Ok(());
    }
    let names = summary.slots.iter().map(|s| s.name.as_str());
    let w = name_width(names.chain(open.iter().map(|(name, _)| name.as_str())));
    let header = ["in m3/h", "out m3/h", "out degC", "heat out W"].map(String::from);
    writeln!(out, "{:w$}{}", "Slot", columns(&header))?;
    let flows = summary.slots.iter().map(|s| s.in_m3_s + s.out_m3_s);
    let flow_scale = flows
        .chain(open.iter().map(|(_, s)| s.in_m3_s + s.out_m3_s))
        .fold(0.0_f64, |scale, flow| scale.max(HOUR * flow));
    let heat_scale = heat_scale(summary);
    let mut row = |name: &str, flows: [f64; 2], mean: Option<f64>, heat: f64| {
        let [inflow, outflow] = flows.map(|f| sized(HOUR * f, 2, flow_scale));
        let cells = [inflow, outflow, shown(mean, 1), sized(heat, 2, heat_scale)];
        writeln!(out, "{}{}", in_column(name, w), columns(&cells))
    };
    for slot in &summary.slots {
        row(&slot.name, [slot.in_m3_s, slot.out_m3_s], slot.out_mean_c, slot.heat_w)?;
    }
    for (name, side) in &open {
        row(name, [side.in_m3_s, side.out_m3_s], side.out_mean_c, side.convection_w)?;
    }
    writeln!(out)
}

/// Sides with an outer face.
fn outer(out: &mut dyn Write, summary: &Summary) -> io::Result<()> {
    let sides: Vec<_> = summary.sides.iter().filter_map(|s| Some((s, s.outer.as_ref()?))).collect();
    if sides.is_empty() {
        return Ok(());
    }
    let header = ["film W", "radiated W", "sun W", "mean degC", "max degC", "W/(m2 K)"];
    let w = *NAME_WIDTH.start();
    writeln!(out, "{:w$}{}", "Outer face", columns(&header.map(String::from)))?;
    let scale = heat_scale(summary);
    for (side, o) in sides {
        let heat = [o.film_w, o.radiation_w, -o.sun_w].map(|heat| sized(heat, 2, scale));
        let rest = [o.surface_mean_c, o.surface_max_c].map(|c| fixed(c, 1));
        let film = std::iter::once(sized(o.film_w_m2_k, 2, 0.0));
        let cells: Vec<String> = heat.into_iter().chain(rest).chain(film).collect();
        writeln!(out, "{}{}", in_column(&format!("{} side", side.name), w), columns(&cells))?;
    }
    writeln!(out)
}

/// Areas and losses of the slots, where a vent covers one of them.
fn vents(out: &mut dyn Write, summary: &Summary) -> io::Result<()> {
    if summary.slots.iter().all(|s| s.vent.is_none()) {
        return Ok(());
    }
    let w = name_width(summary.slots.iter().map(|s| s.name.as_str()));
    let header = ["gross cm2", "free cm2", "m/s", "loss K", "Re"].map(String::from);
    writeln!(out, "{:w$}{}", "Vent", columns(&header))?;
    for slot in &summary.slots {
        let cells = [
            fixed(1e4 * slot.area_m2, 2),
            fixed(1e4 * slot.free_area_m2, 2),
            sized(slot.speed_m_s, 3, 0.0),
            shown(slot.loss, 2),
            fixed(slot.reynolds, 0),
        ];
        let kind = slot.vent.unwrap_or("loss as given");
        writeln!(out, "{}{}  {kind}", in_column(&slot.name, w), columns(&cells))?;
    }
    writeln!(out, "  m/s and K on the gross area; Re of gaps, holes or wires")?;
    writeln!(out)
}

/// Where fans work.
fn fans(out: &mut dyn Write, summary: &Summary) -> io::Result<()> {
    if summary.fans.is_empty() {
        return Ok(());
    }
    let w = name_width(summary.fans.iter().map(|f| f.name.as_str()));
    let header = ["speed %", "m3/h", "Pa", "free m3/h", "of it %"].map(String::from);
    writeln!(out, "{:w$}{}", "Fan", columns(&header))?;
    for fan in &summary.fans {
        let point = [fan.speed, fan.flow_m3_s, fan.pressure_pa];
        let cells = fan_cells(point, [fan.free_delivery_m3_s, fan.free_delivery_share]);
        let place = format!("{} at \"{}\"", fan.direction, fan.slot);
        writeln!(out, "{}{}  {place}", in_column(&fan.name, w), columns(&cells))?;
    }
    writeln!(out)
}

fn heat(out: &mut dyn Write, summary: &Summary) -> io::Result<()> {
    writeln!(out, "Heat leaves (W; below zero it enters)")?;
    let scale = heat_scale(summary);
    if !summary.slots.is_empty() {
        let slots = sized(summary.heat_paths_w.slots, 2, scale);
        writeln!(out, "  {:22}{slots:>10}", "with air, slots")?;
    }
    for side in &summary.sides {
        for (what, heat) in [("through", side.conduction_w), ("with air,", side.convection_w)] {
            if heat != 0.0 {
                let path = format!("{what} {} side", side.name);
                writeln!(out, "  {path:22}{:>10}", sized(heat, 2, scale))?;
            }
        }
    }
    if summary.parts.iter().any(|p| p.radiated_w.is_some()) {
        // A closed box has no opening to radiate through.
        if summary.heat_paths_w.radiation != 0.0 {
            let radiated = sized(summary.heat_paths_w.radiation, 2, scale);
            writeln!(out, "  {:22}{radiated:>10}", "radiated, openings")?;
        }
        for part in &summary.parts {
            if let Some(heat) = part.radiated_w {
                let what = format!("of \"{}\" radiated", part.name);
                writeln!(out, "    {what:20}{:>10}", sized(heat, 2, scale))?;
            }
        }
    }
    writeln!(out)
}

fn balances(out: &mut dyn Write, summary: &Summary, readings: &Readings) -> io::Result<()> {
    let (b, air, mesh) = (&summary.balance, &summary.air, &summary.mesh);
    writeln!(
        out,
        "Heat balance   in {} W, out {} W, off by {:.1e}",
        sized(b.heat_in_w, 3, 0.0),
        sized(b.heat_out_w, 3, 0.0),
        b.heat_error
    )?;
    if b.mass_in_kg_s > 0.0 {
        let flow = HOUR * b.mass_in_kg_s / air.density;
        writeln!(
            out,
            "Air balance    in {} m3/h, off by {:.1e}",
            sized(flow, 3, 0.0),
            b.mass_error
        )?;
    }
    if let Some(growth) = summary.heat_growth {
        writeln!(
            out,
            "Heat           follows temperature: one watt more makes {} W more",
            fixed(growth, 2)
        )?;
    }
    if let Some(warmest) = air.max_temperature_c {
        let coldest = air.min_temperature_c.filter(|c| is_cold(Some(*c), readings));
        let coldest = coldest.map(|c| format!("coldest {} degC, ", fixed(c, 1)));
        writeln!(
            out,
            "Air            ambient {} degC, {}warmest {} degC, fastest {} m/s, column {} Pa",
            fixed(readings.ambient, 1),
            coldest.unwrap_or_default(),
            fixed(warmest, 1),
            sized(air.max_speed_m_s, 3, 0.0),
            sized(air.stack_pressure_pa, 3, 0.0)
        )?;
    }
    writeln!(
        out,
        "Work           {}, {}, {} s ({} s of processor time)",
        counted(mesh.cells, "cell"),
        counted(summary.iterations, "iteration"),
        fixed(summary.wall_seconds, 1),
        fixed(summary.cpu_seconds, 1)
    )?;
    writeln!(out)
}

/// The verdict in a sentence.
fn verdict(summary: &Summary) -> String {
    if let Some(runaway) = &summary.runaway {
        return format!(
            "runs away. At {} degC{} one watt more of heat makes {} W more: the heat grows faster \
             with temperature than the housing carries it away, and no steady temperature was \
             found. Lower the heat or its slope, or give it a better way out.",
            fixed(runaway.given_up_at_c, 0),
            runaway.block.as_ref().map_or(String::new(), |name| {
                format!(" in \"{}\"", shortened(name, *NAME_WIDTH.end()))
            }),
            fixed(runaway.growth, 2)
        );
    }
    if !summary.solved {
        let r = &summary.residuals;
        let worst = r.mass.max(r.momentum_x).max(r.momentum_y).max(r.energy);
        let by = summary.stopped_by.filter(|by| *by != "stalled");
        return format!(
            "{}{}. No solution was found: the equations are off by {worst:.0e} of their scale. The \
             numbers above are the last attempt, no basis for a decision. Try a finer mesh, and \
             see whether the heat has a way out.",
            summary.verdict,
            by.map_or(String::new(), |by| format!(" by the {by}"))
        );
    }
    let sentence = match (summary.verdict, summary.stopped_by) {
        ("settled", _) => "settled. Every bound is met and the temperatures stand still".into(),
        ("swaying", _) => match summary.sway.as_ref().and_then(|s| s.period_s) {
            Some(period) => format!(
                "swaying. The flow keeps moving, about once in {} s; read the bands",
                fixed(period, 1)
            ),
            None => "swaying. The flow keeps moving in a bounded way; read the bands".into(),
        },
        ("drifting", Some("stalled")) => {
            "drifting. The residuals no longer fell before every bound was met; see the balances"
                .into()
        }
        ("drifting", _) => "drifting. Temperatures still creep; the numbers are not final".into(),
        (_, Some("stalled")) => {
            "stopped early. The residuals no longer fell; the numbers are not final".into()
        }
        (_, Some(by)) => format!("stopped early by the {by}. The numbers are not final"),
        (_, None) => "stopped early. The numbers are not final".into(),
    };
    match hottest(summary) {
        Some(part) => format!("{sentence}. {part}."),
        None => format!("{sentence}."),
    }
}

/// What the verdict says of the limits.
fn hottest(summary: &Summary) -> Option<String> {
    let judged = summary.parts.iter().filter_map(|p| Some((p, p.margin_k?)));
    let (part, margin) = judged.min_by(|a, b| a.1.total_cmp(&b.1))?;
    let name = |part: &Part| shortened(&part.name, *NAME_WIDTH.end());
    Some(if margin < 0.0 {
        format!("\"{}\" is {} K over its limit", name(part), fixed(-margin, 1))
    } else {
        let final_numbers = matches!(summary.verdict, "settled" | "swaying");
        format!(
            "{} limits are kept; \"{}\" has the least margin, {} K",
            if final_numbers { "All" } else { "So far all" },
            name(part),
            fixed(margin, 1)
        )
    })
}
