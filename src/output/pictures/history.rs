//! `history.svg`: residuals and watched temperatures against the iteration.

use crate::output::results::Results;

use super::chart::{Curve, Panel, range};
use super::colour::LINES;
use super::frame::WIDTH;
use super::svg::{Svg, Type};
use super::ticks::power;

/// Columns of residuals and their names.
const RESIDUALS: [(&str, &str); 4] = [
    ("mass", "mass"),
    ("momentum_x", "momentum, x"),
    ("momentum_y", "momentum, y"),
    ("energy", "energy"),
];
/// Residuals so far below the tolerance are drawn at the edge.
const LEAST: f64 = 1e-4;
/// Ending of the names of temperature columns.
const WATCHED: &str = " max_c";

/// Draws the history; `None` when there is not more than one row.
pub fn draw(results: &Results) -> Option<String> {
    let table = &results.history;
    let iterations = table.numbers("iteration");
    let column = |name: &str| -> Vec<(f64, Option<f64>)> {
        let values = table.numbers(name);
        iterations.iter().zip(values).filter_map(|(x, y)| Some(((*x)?, y))).collect()
    };
    let across = range(iterations.iter().flatten().copied()).filter(|[a, b]| b > a)?;
    let mut svg = Svg::new("history", WIDTH);
    svg.text([4.0, 18.0], "How the solve went", Type::new(15.0).bold());

    let curve = |(key, name): &(&str, &str)| Curve { name: (*name).into(), points: column(key) };
    let residuals: Vec<Curve> = RESIDUALS.iter().map(curve).collect();
    let tolerance = results.case.solve_choice().tolerance;
    let values = residuals.iter().flat_map(|c| &c.points).filter_map(|p| p.1);
    let [low, high] = range(values.filter(|v| *v > LEAST * tolerance).chain([tolerance]))?;
    let decades = [low.log10().floor() as i32, high.log10().ceil() as i32];
    let panel = Panel::new(58.0, 190.0, across, [0.0, 1.0]).in_powers(decades);
    panel.axes(&mut svg, "iteration", "residuals, relative");
    passages(&mut svg, &panel, results);
    let exponent = tolerance.log10();
    let name = if (exponent - exponent.round()).abs() < 1e-9 {
        power(exponent.round() as i32)
    } else {
        format!("{tolerance:e}")
    };
    let name = format!("tolerance {name}");
    panel.curves(&mut svg, &residuals, Some((tolerance, &name)));

    let mut watched: Vec<(f64, Curve)> = Vec::new();
    for name in table.header.iter().filter(|h| h.ends_with(WATCHED)) {
        let points = column(name);
        let last = points.iter().rev().find_map(|p| p.1);
        let name = name.trim_end_matches(WATCHED).to_string();
        watched.extend(last.map(|last| (last, Curve { name, points })));
    }
    watched.sort_by(|a, b| b.0.total_cmp(&a.0));
    let all = watched.len();
    watched.truncate(LINES.len());
    let watched: Vec<Curve> = watched.into_iter().map(|w| w.1).collect();
    if let Some(up) = range(watched.iter().flat_map(|c| &c.points).filter_map(|p| p.1)) {
        let panel = Panel::new(panel.bottom() + 34.0, 150.0, across, up);
        let name = if all > watched.len() {
            format!("highest temperature of the {} hottest parts, °C", watched.len())
        } else {
            "highest temperature of every part, °C".into()
        };
        panel.axes(&mut svg, "iteration", &name);
        passages(&mut svg, &panel, results);
        panel.curves(&mut svg, &watched, None);
    }
    let told =
        format!("Residuals and part temperatures over {} iterations", results.told.iterations);
    svg.reach(svg.bottom() + 6.0);
    Some(svg.finish("History of the solve", &told))
}

/// Upright lines where the work passed on to another mesh.
fn passages(svg: &mut Svg, panel: &Panel, results: &Results) {
    let cells = results.history.numbers("cells");
    let iterations = results.history.numbers("iteration");
    for (pair, at) in cells.windows(2).zip(iterations.iter().skip(1)) {
        if let ([Some(a), Some(b)], Some(at)) = (pair, at)
            && a != b
        {
            panel.upright(svg, *at);
        }
    }
}
