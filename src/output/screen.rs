//! What a person reads at the end of a run.

use std::io::{self, Write};
use std::path::Path;

use super::readings::Readings;
use super::summary::{Part, Summary};

/// Seconds in an hour: flows are shown per hour.
const HOUR: f64 = 3600.0;
/// Limits beyond which a table's name column is not widened [characters].
const NAME_WIDTH: std::ops::RangeInclusive<usize> = 12..=32;

/// Writes the end of a run: parts against limits, vents, heat, balances, verdict, warnings, files.
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
    parts(out, summary)?;
    vents(out, summary)?;
    heat(out, summary)?;
    balances(out, summary, readings)?;
    writeln!(out, "Verdict: {}", verdict(summary))?;
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
    let longest = names.map(|n| n.chars().count()).max().unwrap_or(0);
    longest.clamp(*NAME_WIDTH.start(), *NAME_WIDTH.end())
}

/// A value to so many decimals, or a dash.
fn shown(value: Option<f64>, decimals: usize) -> String {
    value.map_or_else(|| "-".into(), |v| fixed(v, decimals))
}

/// Fixed decimals without a negative zero.
pub(super) fn fixed(value: f64, decimals: usize) -> String {
    let text = format!("{value:.decimals$}");
    let is_zero = text.starts_with('-') && !text.contains(|c: char| ('1'..='9').contains(&c));
    if is_zero { text[1..].into() } else { text }
}

fn parts(out: &mut dyn Write, summary: &Summary) -> io::Result<()> {
    if summary.parts.is_empty() {
        return Ok(());
    }
    let mut parts: Vec<&Part> = summary.parts.iter().collect();
    let key = |p: &Part| p.margin_k.unwrap_or(f64::INFINITY);
    parts.sort_by(|a, b| key(a).total_cmp(&key(b)));
    let w = name_width(parts.iter().map(|p| p.name.as_str()));
    let header = ["heat W", "max degC", "limit degC", "margin K"];
    writeln!(out, "{:w$}{}", "Part", header.map(|h| format!("{h:>12}")).concat())?;
    for part in parts {
        let cells = [
            fixed(part.heat_w, 2),
            shown(part.max_c, 1),
            shown(part.limit_c, 1),
            shown(part.margin_k, 1),
        ];
        let over = if part.margin_k.is_some_and(|m| m < 0.0) { "  over its limit" } else { "" };
        let band = part.band_c.map_or_else(String::new, |b| {
            format!("  sways from {} to {}", fixed(b[0], 1), fixed(b[1], 1))
        });
        let cells = cells.map(|c| format!("{c:>12}")).concat();
        writeln!(out, "{:w$}{cells}{over}{band}", part.name)?;
    }
    writeln!(out)
}

fn vents(out: &mut dyn Write, summary: &Summary) -> io::Result<()> {
    let open = summary.sides.iter().filter(|s| s.in_m3_s + s.out_m3_s > 0.0);
    let open: Vec<(String, _)> = open.map(|s| (format!("{} side", s.name), s)).collect();
    if summary.slots.is_empty() && open.is_empty() {
        return Ok(());
    }
    let names = summary.slots.iter().map(|s| s.name.as_str());
    let w = name_width(names.chain(open.iter().map(|(name, _)| name.as_str())));
    let header = ["in m3/h", "out m3/h", "out degC", "heat out W"];
    writeln!(out, "{:w$}{}", "Vent", header.map(|h| format!("{h:>12}")).concat())?;
    let mut row = |name: &str, flows: [f64; 2], mean: Option<f64>, heat: f64| {
        let [inflow, outflow] = flows.map(|f| fixed(HOUR * f, 2));
        let cells = [inflow, outflow, shown(mean, 1), fixed(heat, 2)];
        writeln!(out, "{name:w$}{}", cells.map(|c| format!("{c:>12}")).concat())
    };
    for slot in &summary.slots {
        row(&slot.name, [slot.in_m3_s, slot.out_m3_s], slot.out_mean_c, slot.heat_w)?;
    }
    for (name, side) in &open {
        row(name, [side.in_m3_s, side.out_m3_s], None, side.convection_w)?;
    }
    writeln!(out)
}

fn heat(out: &mut dyn Write, summary: &Summary) -> io::Result<()> {
    writeln!(out, "Heat leaves (W; below zero it enters)")?;
    if !summary.slots.is_empty() {
        writeln!(out, "  {:22}{:>10}", "with air, slots", fixed(summary.heat_paths_w.slots, 2))?;
    }
    for side in &summary.sides {
        for (what, heat) in [("through", side.conduction_w), ("with air,", side.convection_w)] {
            if heat != 0.0 {
                let path = format!("{what} {} side", side.name);
                writeln!(out, "  {path:22}{:>10}", fixed(heat, 2))?;
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
        fixed(b.heat_in_w, 3),
        fixed(b.heat_out_w, 3),
        b.heat_error
    )?;
    if b.mass_in_kg_s > 0.0 {
        let flow = HOUR * b.mass_in_kg_s / air.density;
        writeln!(out, "Air balance    in {} m3/h, off by {:.1e}", fixed(flow, 3), b.mass_error)?;
    }
    if let Some(warmest) = air.max_temperature_c {
        writeln!(
            out,
            "Air            ambient {} degC, warmest {} degC, fastest {} m/s, column {} Pa",
            fixed(readings.ambient, 1),
            fixed(warmest, 1),
            fixed(air.max_speed_m_s, 3),
            fixed(air.stack_pressure_pa, 3)
        )?;
    }
    writeln!(
        out,
        "Work           {} cells, {} iterations, {} s ({} s of processor time)",
        grouped(mesh.cells),
        grouped(summary.iterations),
        fixed(summary.wall_seconds, 1),
        fixed(summary.cpu_seconds, 1)
    )?;
    writeln!(out)
}

/// A count with its digits in groups of three.
pub(super) fn grouped(count: usize) -> String {
    let digits = count.to_string();
    let mut text = String::new();
    for (n, digit) in digits.chars().enumerate() {
        if n > 0 && (digits.len() - n).is_multiple_of(3) {
            text.push(' ');
        }
        text.push(digit);
    }
    text
}

/// The verdict in a sentence.
fn verdict(summary: &Summary) -> String {
    if !summary.solved {
        let r = &summary.residuals;
        let worst = r.mass.max(r.momentum_x).max(r.momentum_y).max(r.energy);
        return format!(
            "{}. No solution was found: the equations are off by {worst:.0e} of their scale. The \
             numbers above are the last attempt, no basis for a decision. Try a finer mesh, and \
             see whether the heat has a way out.",
            summary.verdict
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
    Some(if margin < 0.0 {
        format!("\"{}\" is {} K over its limit", part.name, fixed(-margin, 1))
    } else {
        let final_numbers = matches!(summary.verdict, "settled" | "swaying");
        format!(
            "{} limits are kept; \"{}\" has the least margin, {} K",
            if final_numbers { "All" } else { "So far all" },
            part.name,
            fixed(margin, 1)
        )
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_are_shown_without_negative_zeros_and_in_groups() {
        assert_eq!((fixed(-0.04, 1), fixed(-0.06, 1)), ("0.0".into(), "-0.1".into()));
        assert_eq!((grouped(999), grouped(1000)), ("999".into(), "1 000".into()));
        assert_eq!(grouped(1_234_567), "1 234 567");
    }
}
