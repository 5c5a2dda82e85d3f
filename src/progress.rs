//! What is shown while a run works: in place on a terminal, else a plain line now and then.

use std::collections::VecDeque;
use std::io::{IsTerminal, Write};
use std::time::{Duration, Instant};

use indicatif::{ProgressBar, ProgressDrawTarget, ProgressStyle};
use ventrise_solver::Progress;

use crate::output::words::{counted, shortened, sized};

/// Time between plain lines.
const PLAIN_EVERY: Duration = Duration::from_secs(5);
/// Time between drawings on a terminal.
const DRAW_EVERY: Duration = Duration::from_millis(120);
/// Iterations over which the fall of the residual is judged.
const TREND: usize = 60;
/// Share of a new estimate of the time left in what is shown, and most change at a time.
const TRUST: f64 = 0.25;
const JUMP: f64 = 1.5;
/// Most columns of a part's name.
const NAME: usize = 32;
/// Seconds in an hour.
const HOUR: f64 = 3600.0;

/// A part as far as the display needs it.
#[derive(Debug, Clone)]
pub struct WatchedPart {
    /// Name.
    pub name: String,
    /// Limit as a rise above ambient [K].
    pub limit_rise: Option<f64>,
}

/// Where progress goes.
enum Display {
    Quiet,
    Plain { last: Option<Instant>, shown: usize },
    Terminal { bar: ProgressBar, last: Option<Instant> },
}

/// Shows the progress of one run on standard error.
pub struct ProgressView {
    display: Display,
    parts: Vec<WatchedPart>,
    ambient: f64,
    tolerance: f64,
    begun: Instant,
    trend: Trend,
}

impl ProgressView {
    /// A view for a run; `ambient` [°C], `tolerance` the bound for residuals.
    pub fn new(parts: Vec<WatchedPart>, ambient: f64, tolerance: f64, quiet: bool) -> Self {
        let display = if quiet {
            Display::Quiet
        } else if std::io::stderr().is_terminal() {
            let bar = ProgressBar::with_draw_target(None, ProgressDrawTarget::stderr());
            bar.set_style(
                ProgressStyle::default_spinner()
                    .template("{msg}")
                    .unwrap_or_else(|_| ProgressStyle::default_spinner()),
            );
            Display::Terminal { bar, last: None }
        } else {
            Display::Plain { last: None, shown: 0 }
        };
        let (begun, trend) = (Instant::now(), Trend::default());
        ProgressView { display, parts, ambient, tolerance, begun, trend }
    }

    /// Takes note of an iteration and shows it when it is time to.
    pub fn update(&mut self, progress: &Progress) {
        let now = Instant::now();
        self.trend.note(progress, now);
        let is_due = |last: &Option<Instant>, every| last.is_none_or(|l| now - l >= every);
        match &mut self.display {
            Display::Quiet => {}
            Display::Plain { last, shown } if is_due(last, PLAIN_EVERY) => {
                (*last, *shown) = (Some(now), progress.iteration);
                let line = self.line(progress, now);
                say(&line);
            }
            Display::Terminal { last, .. } if is_due(last, DRAW_EVERY) => {
                *last = Some(now);
                let text = self.lines(progress, now);
                if let Display::Terminal { bar, .. } = &self.display {
                    bar.set_message(text);
                    bar.tick();
                }
            }
            _ => {}
        }
    }

    /// Ends the display, with a last plain line when not on a terminal.
    pub fn finish(&mut self, last: Option<&Progress>) {
        match &self.display {
            Display::Quiet => {}
            Display::Plain { shown, .. } => {
                if let Some(progress) = last.filter(|p| p.iteration != *shown) {
                    say(&self.line(progress, Instant::now()));
                }
            }
            Display::Terminal { bar, .. } => bar.finish_and_clear(),
        }
    }

    fn line(&mut self, p: &Progress, now: Instant) -> String {
        let mut line = format!(
            "iteration {} on {}: residual {:.1e} of {:.0e}",
            p.iteration,
            counted(p.cells, "cell"),
            p.residuals.largest(),
            self.tolerance
        );
        if let Some(error) = heat_error(p) {
            line += &format!(", heat balance {error:.1e}");
        }
        if p.flow_in > 0.0 {
            line += &format!(", slots {} m3/h", sized(HOUR * p.flow_in, 2, 0.0));
        }
        if let Some(hottest) = self.hottest(p) {
            line += &format!(", {hottest}");
        }
        line + &format!(", {}", self.times(now))
    }

    fn lines(&mut self, p: &Progress, now: Instant) -> String {
        let r = &p.residuals;
        let mut text = format!(
            "iteration {} on {}   {}\nresiduals   mass {:.1e}   momentum {:.1e} {:.1e}   \
             energy {:.1e}   bound {:.0e}",
            p.iteration,
            counted(p.cells, "cell"),
            self.times(now),
            r.mass,
            r.momentum_x,
            r.momentum_y,
            r.energy,
            self.tolerance
        );
        let balance = heat_error(p).map(|error| format!("heat balance {error:.1e}"));
        let flow =
            (p.flow_in > 0.0).then(|| format!("slots {} m3/h", sized(HOUR * p.flow_in, 2, 0.0)));
        let whole: Vec<String> = balance.into_iter().chain(flow).collect();
        if !whole.is_empty() {
            text += &format!("\n{}", whole.join("   "));
        }
        if let Some(hottest) = self.hottest(p) {
            text += &format!("\n{hottest}");
        }
        text
    }

    /// The part with the least margin; without limits, the hottest one.
    fn hottest(&self, p: &Progress) -> Option<String> {
        let margin = |part: &WatchedPart, rise: f64| part.limit_rise.map(|limit| limit - rise);
        let watched = || self.parts.iter().zip(&p.part_max);
        let judged = watched().filter_map(|(part, rise)| Some((part, rise, margin(part, *rise)?)));
        // No change is known before a second look.
        let moving = p.drift.is_finite() && p.drift > 0.0;
        let drift =
            if moving { format!(", moving {:.0e} K an iteration", p.drift) } else { String::new() };
        if let Some((part, rise, margin)) = judged.min_by(|a, b| a.2.total_cmp(&b.2)) {
            let celsius = self.ambient + rise;
            let name = shortened(&part.name, NAME);
            return Some(format!("{name} {celsius:.1} degC, margin {margin:.1} K{drift}"));
        }
        let (part, rise) = watched().max_by(|a, b| a.1.total_cmp(b.1))?;
        Some(format!("{} {:.1} degC{drift}", shortened(&part.name, NAME), self.ambient + rise))
    }

    fn times(&mut self, now: Instant) -> String {
        let elapsed = duration((now - self.begun).as_secs_f64());
        match self.trend.steady_seconds_left(self.tolerance, now) {
            Some(left) => format!("{elapsed}, about {} left", duration(left)),
            None => elapsed,
        }
    }
}

/// How far the heat balance is off, once there is one: the start has none.
fn heat_error(p: &Progress) -> Option<f64> {
    Some(p.heat_error).filter(|error| error.is_finite() && *error != 0.0)
}

/// Writes a line to standard error; a closed stream is no reason to stop.
fn say(line: &str) {
    let _ = writeln!(std::io::stderr(), "{line}");
}

/// Seconds in words.
fn duration(seconds: f64) -> String {
    match seconds {
        s if s < 10.0 => format!("{s:.1} s"),
        s if s < 120.0 => format!("{s:.0} s"),
        s if s < 7200.0 => format!("{:.0} min", s / 60.0),
        s => format!("{:.1} h", s / 3600.0),
    }
}

/// The last residuals on one mesh, to see how fast they fall.
#[derive(Debug, Default)]
struct Trend {
    cells: usize,
    /// Logarithm of the largest residual and when it was reached.
    points: VecDeque<(f64, Instant)>,
    /// Time left as shown last [s], and when.
    shown: Option<(f64, Instant)>,
}

impl Trend {
    fn note(&mut self, progress: &Progress, now: Instant) {
        if progress.cells != self.cells {
            self.cells = progress.cells;
            self.points.clear();
            self.shown = None;
        }
        let residual = progress.residuals.largest();
        if residual > 0.0 && residual.is_finite() {
            if self.points.len() == TREND {
                self.points.pop_front();
            }
            self.points.push_back((residual.ln(), now));
        }
    }

    /// [`Trend::seconds_left`] as it is shown: what was shown last, less the time since, moved
    /// towards the new estimate by [`TRUST`] of the difference and by no more than [`JUMP`] times.
    fn steady_seconds_left(&mut self, tolerance: f64, now: Instant) -> Option<f64> {
        let new = self.seconds_left(tolerance)?;
        let left = match self.shown {
            None => new,
            Some((last, at)) => {
                let expected = (last - (now - at).as_secs_f64()).max(0.1 * last).max(0.1);
                let moved = expected + TRUST * (new - expected);
                moved.clamp(expected / JUMP, expected * JUMP)
            }
        };
        self.shown = Some((left, now));
        Some(left)
    }

    /// Time until the bound is met on this mesh if the residual keeps falling as it did: a
    /// straight line fitted to its logarithm against the iterations. `None` when it does not fall, or
    /// has met the bound (what is left then is not iterating).
    fn seconds_left(&self, tolerance: f64) -> Option<f64> {
        let count = self.points.len();
        if count < 5 {
            return None;
        }
        let (first, last) = (self.points.front()?, self.points.back()?);
        let middle = 0.5 * (count - 1) as f64;
        let mean = self.points.iter().map(|p| p.0).sum::<f64>() / count as f64;
        let (mut top, mut bottom) = (0.0, 0.0);
        for (n, point) in self.points.iter().enumerate() {
            let along = n as f64 - middle;
            top += along * (point.0 - mean);
            bottom += along * along;
        }
        let slope = top / bottom;
        let to_go = last.0 - tolerance.ln();
        let each = (last.1 - first.1).as_secs_f64() / (count - 1) as f64;
        let left = to_go / -slope * each;
        (slope < 0.0 && to_go > 0.0 && left < 1e6).then_some(left)
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;
    use ventrise_solver::Residuals;

    fn progress(cells: usize, residual: f64) -> Progress {
        let residuals = Residuals { energy: residual, ..Residuals::default() };
        Progress { cells, residuals, ..Progress::default() }
    }

    #[test]
    fn a_residual_that_falls_tenfold_a_second_has_three_seconds_from_1e3_above_the_bound() {
        let (mut trend, begun) = (Trend::default(), Instant::now());
        for n in 0..=20 {
            let seconds = f64::from(n) * 0.25;
            let residual = 10f64.powf(2.0 - seconds);
            trend.note(&progress(100, residual), begun + Duration::from_secs_f64(seconds));
        }
        let left = trend.seconds_left(1e-6).unwrap();
        assert!((left - 3.0).abs() < 1e-6, "{left}");
        trend.note(&progress(400, 1e-2), begun + Duration::from_secs(6));
        assert_eq!(trend.seconds_left(1e-6), None); // another mesh begins anew
    }

    #[test]
    fn a_residual_that_stands_still_gives_no_time() {
        let (mut trend, begun) = (Trend::default(), Instant::now());
        for n in 0..20 {
            trend.note(&progress(100, 1e-3), begun + Duration::from_secs(n));
        }
        assert_eq!(trend.seconds_left(1e-6), None);
    }

    #[test]
    fn the_time_left_does_not_leap_with_every_estimate() {
        let (mut trend, begun) = (Trend::default(), Instant::now());
        let mut shown = Vec::new();
        for n in 0..40 {
            // A fall that pauses now and then.
            let residual = 10f64.powf(2.0 - 0.1 * f64::from(n - n % 8));
            let now = begun + Duration::from_secs(n as u64);
            trend.note(&progress(100, residual), now);
            shown.extend(trend.steady_seconds_left(1e-6, now));
        }
        assert!(shown.len() > 20, "{shown:?}");
        assert!(shown.windows(2).all(|w| w[1] < 1.6 * w[0] && w[1] > 0.4 * w[0]), "{shown:?}");
    }

    #[test]
    fn a_heat_balance_is_shown_once_there_is_one() {
        let mut view = ProgressView::new(Vec::new(), 40.0, 1e-6, true);
        let none = view.line(&progress(1, 1e-3), Instant::now());
        assert!(!none.contains("heat balance") && none.contains(" on 1 cell: "), "{none}");
        let some = Progress { heat_error: 2e-3, flow_in: 1e-3, ..progress(9, 1e-3) };
        let some = view.line(&some, Instant::now());
        assert!(some.contains("heat balance 2.0e-3, slots 3.60 m3/h"), "{some}");
    }

    #[test]
    fn the_part_with_the_least_margin_is_shown() {
        let part = |name: &str, limit| WatchedPart { name: name.into(), limit_rise: limit };
        let parts = vec![part("core", Some(50.0)), part("board", Some(30.0)), part("lid", None)];
        let view = ProgressView::new(parts, 40.0, 1e-6, true);
        let p = Progress { part_max: vec![31.0, 20.0, 60.0], drift: 0.002, ..Progress::default() };
        let shown = view.hottest(&p).unwrap();
        assert_eq!(shown, "board 60.0 degC, margin 10.0 K, moving 2e-3 K an iteration");
    }
}
