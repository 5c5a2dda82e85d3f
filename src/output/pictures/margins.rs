//! `margins.svg`: every part's highest temperature against its limit.

use crate::output::results::Results;
use crate::output::told::ToldPart;

use super::chart::range;
use super::colour::{ALARM, FAINT, GRID, HEATED, INK, LINES, PAPER, SOLID};
use super::frame::{SMALL, WIDTH};
use super::lettering::{shortened, width};
use super::svg::{Anchor, Box, Stroke, Svg, Type};
use super::ticks::{Ticks, decimal};

/// Height of a part's row.
const ROW: f64 = 48.0;
/// Most parts shown.
const MOST: usize = 24;

/// Draws the margins; `None` when there is no part with a temperature.
pub fn draw(results: &Results) -> Option<String> {
    let ambient = results.ambient();
    let mut parts: Vec<&ToldPart> =
        results.told.parts.iter().filter(|p| p.judged_c().is_some()).collect();
    if parts.is_empty() {
        return None;
    }
    // The least margin first, parts without limit by their temperature last.
    let key = |p: &ToldPart| {
        (p.margin_k.unwrap_or(f64::INFINITY), -p.judged_c().unwrap_or(f64::NEG_INFINITY))
    };
    parts.sort_by(|a, b| {
        let (a, b) = (key(a), key(b));
        a.0.total_cmp(&b.0).then(a.1.total_cmp(&b.1))
    });
    let left_out = parts.len().saturating_sub(MOST);
    parts.truncate(MOST);
    let values = parts.iter().flat_map(|p| [p.judged_c(), p.limit_c]).flatten();
    let bands = parts.iter().filter_map(|p| p.band_c).flatten();
    let [low, high] = range(values.chain(bands).chain([ambient]))?;
    let room = (high - low).max(1.0);
    let scale = [low - if low < ambient { 0.03 * room } else { 0.0 }, high + 0.03 * room];
    let (left, right) = (16.0, WIDTH - 16.0);
    let at = |t: f64| left + (right - left) * (t - scale[0]) / (scale[1] - scale[0]);

    let mut svg = Svg::new("margins", WIDTH);
    svg.text([4.0, 18.0], "Parts and their limits", Type::new(15.0).bold());
    let top = 34.0;
    let bottom = top + ROW * parts.len() as f64 + 4.0;
    let ticks = Ticks::of(scale[0], scale[1], 8);
    for t in &ticks.at {
        let set = Type::new(SMALL).coloured(FAINT).anchored(Anchor::Middle);
        let half = 0.5 * width(&ticks.text(*t), SMALL, false);
        let x = at(*t).clamp(half + 2.0, WIDTH - half - 2.0);
        svg.text([x, bottom + 16.0], &ticks.text(*t), set);
    }
    for (n, part) in parts.iter().enumerate() {
        let level = top + ROW * n as f64;
        let bar = [level + 20.0, level + 43.0];
        for t in &ticks.at {
            svg.line([at(*t), bar[0]], [at(*t), bar[1]], Stroke::new(GRID, 0.8));
        }
        row(&mut svg, part, ambient, level, &at);
        svg.line([at(ambient), bar[0]], [at(ambient), bar[1]], Stroke::new(INK, 1.6));
    }
    let named = format!("temperature, °C; the bars begin at ambient, {} °C", decimal(ambient, 1));
    let set = Type::new(SMALL).coloured(FAINT);
    svg.text([left, bottom + 34.0], &named, set);
    let mut end = bottom + 42.0;
    if left_out > 0 {
        svg.text([left, end + 10.0], &format!("and {left_out} more parts"), set);
        end += 18.0;
    }
    svg.reach(end);
    let told = format!("Highest temperatures and limits of {} parts", parts.len());
    Some(svg.finish("Parts and their limits", &told))
}

fn row(svg: &mut Svg, part: &ToldPart, ambient: f64, top: f64, at: &dyn Fn(f64) -> f64) {
    let Some(max) = part.judged_c() else { return };
    let over = part.margin_k.is_some_and(|m| m < 0.0);
    let hottest = decimal(max, 1);
    let (said, colour) = match (part.margin_k, part.limit_c) {
        (Some(margin), Some(limit)) => {
            let (by, limit) = (decimal(margin.abs(), 1), decimal(limit, 1));
            let (what, colour) = if over { ("over", ALARM) } else { ("below", INK) };
            (format!("{hottest} °C, {by} K {what} its limit of {limit}"), colour)
        }
        (None, Some(limit)) => {
            (format!("{hottest} °C, limit {}, not judged", decimal(limit, 1)), FAINT)
        }
        (_, None) => (format!("{hottest} °C, no limit"), FAINT),
    };
    let end = WIDTH - 8.0;
    let set = Type { bold: over, ..Type::new(SMALL) };
    svg.text([end, top + 14.0], &said, set.anchored(Anchor::End).coloured(colour));
    let room = end - width(&said, SMALL, over) - 18.0 - 12.0;
    let name = shortened(&part.name, 13.5, true, room);
    svg.text([18.0, top + 14.0], &name, Type::new(13.5).bold());

    let (y, h) = (top + 25.0, 13.0);
    let (from, to) = (at(ambient.min(max)), at(ambient.max(max)));
    let fill = if part.limit_c.is_some() { HEATED } else { SOLID };
    svg.rect(Box { x: from, y, w: to - from, h }, fill, Some(Stroke::new(INK, 0.8)));
    if let Some(limit) = part.limit_c {
        let x = at(limit);
        if over {
            // What is beyond the limit is hatched.
            let count = ((to - x) / 5.0) as usize;
            let hatch = |n: usize| {
                let foot = x + 5.0 * n as f64;
                vec![[foot, y + h], [(foot + 5.0).min(to), y]]
            };
            svg.rect(Box { x, y, w: to - x, h }, PAPER, Some(Stroke::new(ALARM, 1.0)));
            let hatches: Vec<Vec<[f64; 2]>> = (0..count).map(hatch).collect();
            svg.lines(&hatches, Stroke::new(ALARM, 1.2));
        }
        svg.line([x, y - 5.0], [x, y + h + 5.0], Stroke::new(ALARM, 3.0));
    }
    if let Some([low, high]) = part.band_c {
        let middle = y + 0.5 * h;
        svg.line([at(low), middle], [at(high), middle], Stroke::new(LINES[0], 2.0));
        for end in [low, high] {
            let x = at(end);
            svg.line([x, middle - 4.0], [x, middle + 4.0], Stroke::new(LINES[0], 2.0));
        }
    }
}
