//! Tables for spreadsheets: comma separated, one header row with units, names quoted where needed.
//!
//! A name that a spreadsheet would take for a formula, because it begins with `=`, `+`, `-` or `@`,
//! gets an apostrophe in front: spreadsheets then read a text.

use ventrise_mesh::AIR;
use ventrise_solver::{Progress, Sample};

use crate::case::Case;

use super::outer_heat::OuterHeat;
use super::readings::Readings;
use super::summary::Summary;

/// A table under construction.
struct Table(String);

impl Table {
    fn new(header: &[&str]) -> Table {
        let mut table = Table(String::new());
        table.row(header.iter().map(|h| quoted(h)));
        table
    }

    fn row(&mut self, cells: impl IntoIterator<Item = String>) {
        let cells: Vec<String> = cells.into_iter().collect();
        self.0.push_str(&cells.join(","));
        self.0.push('\n');
    }
}

/// A text cell; quoted when it holds a comma, a quote or a line break, never a formula.
fn quoted(text: &str) -> String {
    let guard = if text.starts_with(['=', '+', '-', '@']) { "'" } else { "" };
    let text = format!("{guard}{text}");
    if text.contains([',', '"', '\n', '\r']) {
        format!("\"{}\"", text.replace('"', "\"\""))
    } else {
        text
    }
}

/// A number with all its digits; nothing when it is not finite.
fn number(value: f64) -> String {
    let size = value.abs();
    match value {
        v if !v.is_finite() => String::new(),
        v if size > 0.0 && !(1e-4..1e15).contains(&size) => format!("{v:e}"),
        v => format!("{v}"),
    }
}

fn perhaps(value: Option<f64>) -> String {
    value.map(number).unwrap_or_default()
}

/// `history.csv`: one row per outer iteration.
pub fn history(case: &Case, ambient: f64, rows: &[Progress]) -> String {
    let parts: Vec<String> = case.parts().iter().map(|p| format!("{} max_c", p.name)).collect();
    let mut header = vec![
        "iteration",
        "cells",
        "mass",
        "momentum_x",
        "momentum_y",
        "energy",
        "heat_error",
        "mass_error",
        "flow_in_m3_s",
        "drift_k",
    ];
    header.extend(parts.iter().map(String::as_str));
    let mut table = Table::new(&header);
    for p in rows {
        let r = &p.residuals;
        let mut cells = vec![p.iteration.to_string(), p.cells.to_string()];
        let values = [r.mass, r.momentum_x, r.momentum_y, r.energy, p.heat_error, p.mass_error];
        cells.extend(values.map(number));
        cells.extend([number(p.flow_in), number(p.drift)]);
        // Rows of a coarser mesh may come without part temperatures.
        let rises = (0..parts.len()).map(|n| p.part_max.get(n));
        cells.extend(rises.map(|rise| perhaps(rise.map(|rise| ambient + rise))));
        table.row(cells);
    }
    table.0
}

/// `parts.csv`.
pub fn parts(summary: &Summary) -> String {
    // A column of junctions only where there are any.
    let junctions = summary.parts.iter().any(|p| p.junction_c.is_some());
    let columns = [
        "part",
        "heat_w",
        "min_c",
        "mean_c",
        "max_c",
        "limit_c",
        "margin_k",
        "resistance_k_w",
        "junction_c",
    ];
    let mut table = Table::new(&columns[..if junctions { 9 } else { 8 }]);
    for p in &summary.parts {
        let values = [p.min_c, p.mean_c, p.max_c, p.limit_c, p.margin_k, p.resistance_k_w];
        let start = [quoted(&p.name), number(p.heat_w)];
        let junction = junctions.then(|| perhaps(p.junction_c));
        table.row(start.into_iter().chain(values.map(perhaps)).chain(junction));
    }
    table.0
}

/// `slots.csv`.
pub fn slots(summary: &Summary) -> String {
    let mut table = Table::new(&[
        "slot",
        "side",
        "in_m3_s",
        "out_m3_s",
        "out_mean_c",
        "mean_pressure_pa",
        "heat_w",
        "area_m2",
        "free_area_m2",
        "speed_m_s",
        "loss",
        "reynolds",
    ]);
    for s in &summary.slots {
        table.row([
            quoted(&s.name),
            s.side.to_string(),
            number(s.in_m3_s),
            number(s.out_m3_s),
            perhaps(s.out_mean_c),
            number(s.mean_pressure_pa),
            number(s.heat_w),
            number(s.area_m2),
            number(s.free_area_m2),
            number(s.speed_m_s),
            perhaps(s.loss),
            number(s.reynolds),
        ]);
    }
    table.0
}

/// `sides.csv`.
pub fn sides(summary: &Summary) -> String {
    // Columns of outer faces only where there are any.
    let outer = summary.sides.iter().any(|s| s.outer.is_some());
    let columns = [
        "side",
        "heat_w",
        "conduction_w",
        "convection_w",
        "in_m3_s",
        "out_m3_s",
        "out_mean_c",
        "film_w",
        "radiation_w",
        "sun_w",
        "surface_mean_c",
        "surface_max_c",
        "film_w_m2_k",
    ];
    let mut table = Table::new(if outer { &columns } else { &columns[..7] });
    for s in &summary.sides {
        let values = [s.heat_w, s.conduction_w, s.convection_w, s.in_m3_s, s.out_m3_s];
        let name = std::iter::once(s.name.to_string());
        let o = s.outer.as_ref();
        let of = |value: fn(&OuterHeat) -> f64| perhaps(o.map(value));
        let rest = [
            of(|o| o.film_w),
            of(|o| o.radiation_w),
            of(|o| o.sun_w),
            of(|o| o.surface_mean_c),
            of(|o| o.surface_max_c),
            of(|o| o.film_w_m2_k),
        ];
        let rest = rest.into_iter().filter(|_| outer);
        table.row(name.chain(values.map(number)).chain([perhaps(s.out_mean_c)]).chain(rest));
    }
    table.0
}

/// `probes.csv`: one row for a point, a row for every sample of a line.
pub fn probes(case: &Case, readings: &Readings) -> String {
    let mut table = Table::new(&[
        "probe",
        "distance_m",
        "x_m",
        "y_m",
        "temperature_c",
        "u_m_s",
        "v_m_s",
        "speed_m_s",
        "pressure_pa",
        "inside",
    ]);
    for (probe, samples) in case.probes().iter().zip(&readings.probes) {
        let start = samples.first().map_or([0.0; 2], |s| s.at);
        for s in samples {
            table.row([
                quoted(&probe.name),
                number((s.at[0] - start[0]).hypot(s.at[1] - start[1])),
                number(s.at[0]),
                number(s.at[1]),
                number(readings.ambient + s.rise),
                number(s.velocity[0]),
                number(s.velocity[1]),
                number(s.speed()),
                perhaps(s.pressure),
                quoted(&inside(case, s)),
            ]);
        }
    }
    table.0
}

/// Name of the block that a sample lies in; its number when it has none.
fn inside(case: &Case, sample: &Sample) -> String {
    if sample.region == AIR {
        return "air".into();
    }
    let name = case.blocks().get(sample.region as usize).and_then(|b| b.name.clone());
    name.unwrap_or_else(|| format!("block {}", sample.region))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn cells_are_quoted_and_numbers_short() {
        assert_eq!(
            (quoted("core"), quoted("a, \"b\"")),
            ("core".into(), "\"a, \"\"b\"\"\"".into())
        );
        let formulas = ["=1+1", "+x", "-x", "@x", "=a,b"].map(quoted);
        assert_eq!(formulas, ["'=1+1", "'+x", "'-x", "'@x", "\"'=a,b\""]);
        let shown = [0.0, 70.5, -1.5e-9, f64::INFINITY, f64::NAN].map(number);
        assert_eq!(shown, ["0", "70.5", "-1.5e-9", "", ""]);
    }
}
