//! `profiles.svg`: temperature and speed along every probe line.

use crate::case::ProbeShape;
use crate::output::results::Results;

use super::chart::{Curve, Panel, range};
use super::colour::FAINT;
use super::frame::{SMALL, WIDTH};
use super::lettering::shortened;
use super::svg::{Svg, Type};

/// Most lines shown.
const MOST: usize = 6;
/// Shade of what lies in a block.
const BLOCK: &str = "#ebe9e2";

/// Draws the lines; `None` when there are none.
pub fn draw(results: &Results) -> Option<String> {
    let lines: Vec<&str> = results
        .case
        .probes()
        .iter()
        .filter(|p| matches!(p.shape, ProbeShape::Line { .. }))
        .map(|p| p.name.as_str())
        .collect();
    let mut svg = Svg::new("profiles", WIDTH);
    svg.text([4.0, 18.0], "Along the probe lines", Type::new(15.0).bold());
    let mut drawn = 0;
    for name in lines.iter().take(MOST) {
        let top = svg.bottom().max(22.0) + 18.0;
        drawn += usize::from(line(&mut svg, results, name, top));
    }
    if drawn == 0 {
        return None;
    }
    if lines.len() > MOST {
        let y = svg.bottom() + 18.0;
        let more = format!("{} more lines are in probes.csv", lines.len() - MOST);
        svg.text([4.0, y], &more, Type::new(SMALL).coloured(FAINT));
        svg.reach(y + 8.0);
    }
    Some(svg.finish("Along the probe lines", &format!("{drawn} probe lines")))
}

/// Both panels of a line; `false` when it has no samples.
fn line(svg: &mut Svg, results: &Results, name: &str, top: f64) -> bool {
    let table = &results.probes;
    let Some(probe) = table.column("probe") else { return false };
    let is_here: Vec<bool> = table.rows.iter().map(|row| row[probe] == name).collect();
    let column = |key: &str| {
        let values = table.numbers(key);
        values.into_iter().zip(&is_here).filter(|(_, here)| **here).map(|(v, _)| v)
    };
    let distance: Vec<f64> = column("distance_m").map(|d| 1e3 * d.unwrap_or(0.0)).collect();
    let points = |key: &str| distance.iter().copied().zip(column(key)).collect::<Vec<_>>();
    let Some(across) = range(distance.iter().copied()).filter(|[a, b]| b > a) else {
        return false;
    };
    let blocks = shaded(results, &is_here, &distance);
    let heading = shortened(name, 13.5, true, WIDTH - 8.0);
    svg.text([4.0, top], &heading, Type::new(13.5).bold());
    let mut top = top + 34.0;
    for (key, what, up) in
        [("temperature_c", "temperature", "temperature, °C"), ("speed_m_s", "speed", "speed, m/s")]
    {
        let points = points(key);
        let Some(values) = range(points.iter().filter_map(|p| p.1)) else { continue };
        if key == "speed_m_s" && values[1] <= 0.0 {
            continue;
        }
        let panel = Panel::new(top, 112.0, across, values);
        for [from, to] in &blocks {
            panel.shade(svg, *from, *to, BLOCK);
        }
        panel.axes(svg, "distance, mm", up);
        panel.curves(svg, &[Curve { name: what.into(), points }], None);
        top = panel.bottom() + 28.0;
    }
    true
}

/// Ranges of the distance that lie in blocks.
fn shaded(results: &Results, is_here: &[bool], distance: &[f64]) -> Vec<[f64; 2]> {
    let Some(inside) = results.probes.column("inside") else { return Vec::new() };
    let rows = results.probes.rows.iter().zip(is_here).filter(|(_, here)| **here);
    let mut ranges: Vec<[f64; 2]> = Vec::new();
    let mut before = false;
    for ((row, _), at) in rows.zip(distance) {
        let solid = row[inside] != "air";
        match ranges.last_mut() {
            Some(range) if solid && before => range[1] = *at,
            _ if solid => ranges.push([*at, *at]),
            _ => {}
        }
        before = solid;
    }
    ranges
}
