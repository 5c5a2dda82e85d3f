//! Charts: a panel with axes, curves and their names beside it.

use super::colour::{DASHES, FAINT, GRID, INK, LINES};
use super::frame::{SMALL, WIDTH};
use super::lettering::shortened;
use super::names::spread;
use super::svg::{Anchor, Box, Stroke, Svg, Type};
use super::ticks::{Ticks, power};

/// Room left of a panel for the numbers of its axis.
const LEFT: f64 = 52.0;
/// Room right of a panel for names of curves.
const RIGHT: f64 = 136.0;
/// Most points of a curve that are drawn.
const POINTS: usize = 700;

/// A panel: an area of the page with scales along its edges.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Panel {
    place: Box,
    x: [f64; 2],
    y: [f64; 2],
    powers: bool,
}

/// A curve with its name; gaps where there is no value.
#[derive(Debug, Clone, PartialEq)]
pub struct Curve {
    /// Name.
    pub name: String,
    /// Points (x, y).
    pub points: Vec<(f64, Option<f64>)>,
}

impl Panel {
    /// A panel of a height below `top` for ranges of x and y; ranges that are nothing are widened.
    pub fn new(top: f64, height: f64, x: [f64; 2], y: [f64; 2]) -> Panel {
        let place = Box { x: LEFT, y: top, w: WIDTH - LEFT - RIGHT, h: height };
        Panel { place, x: widened(x), y: widened(y), powers: false }
    }

    /// The same with y in powers of ten, from a lower to an upper one.
    pub fn in_powers(self, [low, high]: [i32; 2]) -> Panel {
        let y = [f64::from(low), f64::from(high.max(low + 1))];
        Panel { y, powers: true, ..self }
    }

    /// Where the panel ends below, its numbers and name included.
    pub fn bottom(&self) -> f64 {
        self.place.y + self.place.h + 42.0
    }

    /// Page position of a point.
    fn at(&self, x: f64, y: f64) -> [f64; 2] {
        let Box { x: left, y: top, w, h } = self.place;
        let y = if self.powers { y.max(f64::MIN_POSITIVE).log10() } else { y };
        let share = |v: f64, [from, to]: [f64; 2]| ((v - from) / (to - from)).clamp(0.0, 1.0);
        [left + w * share(x, self.x), top + h * (1.0 - share(y, self.y))]
    }

    /// Grid and numbers; `across` names the axis below, `up` the one on the left.
    pub fn axes(&self, svg: &mut Svg, across: &str, up: &str) {
        let Box { x, y, w, h } = self.place;
        let letters = Type::new(SMALL).coloured(FAINT);
        let level = |svg: &mut Svg, at: f64, text: Option<&str>| {
            svg.line([x, at], [x + w, at], Stroke::new(GRID, 0.8));
            if let Some(text) = text {
                svg.text([x - 7.0, at + 4.4], text, letters.anchored(Anchor::End));
            }
        };
        if self.powers {
            let powers = Ticks::powers(10f64.powf(self.y[0]), 10f64.powf(self.y[1]));
            let stride = (powers.len() as f64 * 20.0 / h).ceil().max(1.0) as usize;
            for (n, p) in powers.iter().enumerate() {
                let at = self.at(self.x[0], 10f64.powi(*p))[1];
                level(svg, at, n.is_multiple_of(stride).then(|| power(*p)).as_deref());
            }
        } else {
            let ticks = Ticks::of(self.y[0], self.y[1], (h / 30.0) as usize);
            for t in &ticks.at {
                level(svg, self.at(self.x[0], *t)[1], Some(&ticks.text(*t)));
            }
        }
        let ticks = Ticks::of(self.x[0], self.x[1], 6);
        for t in &ticks.at {
            let at = self.at(*t, 0.0)[0];
            svg.line([at, y + h], [at, y + h + 4.0], Stroke::new(FAINT, 1.0));
            let set = letters.anchored(Anchor::Middle);
            svg.text([at, y + h + 17.0], &ticks.text(*t), set);
        }
        svg.line([x, y + h], [x + w, y + h], Stroke::new(FAINT, 1.0));
        svg.text([4.0, y - 10.0], up, letters);
        svg.text([x + 0.5 * w, y + h + 34.0], across, letters.anchored(Anchor::Middle));
        svg.reach(self.bottom());
    }

    /// An upright line over the panel's whole height.
    pub fn upright(&self, svg: &mut Svg, x: f64) {
        let at = self.at(x, 0.0)[0];
        let Box { y, h, .. } = self.place;
        svg.line([at, y], [at, y + h], Stroke::new(FAINT, 0.8).dashed("1 3"));
    }

    /// A shaded range of x.
    pub fn shade(&self, svg: &mut Svg, from: f64, to: f64, fill: &str) {
        let (a, b) = (self.at(from, 0.0)[0], self.at(to, 0.0)[0]);
        let Box { y, h, .. } = self.place;
        svg.rect(Box { x: a, y, w: b - a, h }, fill, None);
    }

    /// Curves in their own colours and dashes, named at their right ends; `level` is a value with
    /// its name that a level line is drawn at.
    pub fn curves(&self, svg: &mut Svg, curves: &[Curve], level: Option<(f64, &str)>) {
        let Box { x, y, w, h } = self.place;
        let right = x + w;
        let mut ends: Vec<(f64, &str, Stroke)> = Vec::new();
        if let Some((value, name)) = level {
            let at = self.at(self.x[0], value)[1];
            let stroke = Stroke::new(INK, 1.0).dashed("1.5 3");
            svg.line([x, at], [right, at], stroke);
            ends.push((at, name, stroke));
        }
        for (n, curve) in curves.iter().enumerate() {
            let runs = self.runs(&curve.points);
            let end = runs.last().and_then(|r| r.last()).map(|p| p[1]);
            svg.lines(&runs, stroke(n));
            ends.extend(end.map(|end| (end, curve.name.as_str(), stroke(n))));
        }
        ends.sort_by(|a, b| a.0.total_cmp(&b.0));
        let wanted: Vec<f64> = ends.iter().map(|e| e.0).collect();
        let levels = spread(&wanted, 17.0, y + 6.0, y + h - 4.0);
        for ((end, name, stroke), level) in ends.iter().zip(&levels) {
            let lead = vec![vec![[right + 2.0, *end], [right + 12.0, *level]]];
            svg.lines(&lead, Stroke::new(FAINT, 0.7));
            svg.line([right + 13.0, *level], [right + 35.0, *level], *stroke);
            let text = shortened(name, SMALL, false, WIDTH - right - 44.0);
            svg.text([right + 40.0, level + 4.3], &text, Type::new(SMALL));
        }
        if let Some(last) = levels.last() {
            svg.reach(last + 8.0);
        }
    }

    /// Runs of points on the page without gaps, thinned to what can be seen.
    fn runs(&self, points: &[(f64, Option<f64>)]) -> Vec<Vec<[f64; 2]>> {
        let stride = points.len().div_ceil(POINTS).max(1);
        let mut runs = vec![Vec::new()];
        for (n, (x, y)) in points.iter().enumerate() {
            let shown = n.is_multiple_of(stride) || n + 1 == points.len();
            match y.filter(|y| !self.powers || *y > 0.0) {
                Some(y) if shown => {
                    if let Some(run) = runs.last_mut() {
                        run.push(self.at(*x, y));
                    }
                }
                Some(_) => {}
                None => runs.push(Vec::new()),
            }
        }
        runs.retain(|run| !run.is_empty());
        runs
    }
}

/// The manner of curve `n`.
fn stroke(n: usize) -> Stroke {
    Stroke::new(LINES[n % LINES.len()], 1.7).dashed(DASHES[n % DASHES.len()])
}

fn widened([from, to]: [f64; 2]) -> [f64; 2] {
    if to - from > 1e-9 * from.abs().max(to.abs()) {
        return [from, to];
    }
    let by = (0.01 * from.abs()).max(1e-3);
    [from - by, to + by]
}

/// Smallest and largest of some values; `None` when there are none.
pub fn range(values: impl IntoIterator<Item = f64>) -> Option<[f64; 2]> {
    values.into_iter().filter(|v| v.is_finite()).fold(None, |range, v| match range {
        None => Some([v, v]),
        Some([a, b]) => Some([f64::min(a, v), f64::max(b, v)]),
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn points_lie_where_the_scales_say_and_gaps_stay_gaps() {
        let panel = Panel::new(50.0, 100.0, [0.0, 10.0], [20.0, 40.0]);
        let Box { x, w, .. } = panel.place;
        assert_eq!(panel.at(5.0, 30.0), [x + 0.5 * w, 100.0]);
        let runs = panel.runs(&[(0.0, Some(20.0)), (1.0, None), (2.0, Some(40.0))]);
        assert_eq!(runs, [[[x, 150.0]], [[x + 0.2 * w, 50.0]]]);
        let powers = panel.in_powers([-4, 0]);
        assert!((powers.at(0.0, 1e-2)[1] - 100.0).abs() < 1e-9);
        assert!(powers.runs(&[(0.0, Some(0.0))]).is_empty());
    }

    #[test]
    fn long_curves_are_thinned_but_keep_their_end() {
        let panel = Panel::new(0.0, 100.0, [0.0, 9999.0], [0.0, 1.0]);
        let points: Vec<(f64, Option<f64>)> =
            (0..10_000).map(|n| (f64::from(n), Some(0.5))).collect();
        let runs = panel.runs(&points);
        assert!(runs[0].len() <= POINTS + 1);
        assert_eq!(runs[0].last(), Some(&panel.at(9999.0, 0.5)));
    }

    #[test]
    fn a_range_of_nothing_is_widened() {
        let [a, b] = widened([50.0, 50.0]);
        assert!(a < 50.0 && 50.0 < b);
        assert_eq!(range([f64::NAN]), None);
        assert_eq!(range([2.0, 1.0]), Some([1.0, 2.0]));
    }
}
