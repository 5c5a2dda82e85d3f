//! `temperature.svg`, `speed.svg`, `heat-flux.svg`: a field in colours with its scale, the blocks'
//! outlines and the flow.

use std::io;

use crate::output::results::Results;

use super::colour::{FAINT, INK, PAPER, SOLID, Scale};
use super::frame::{Frame, LEFT, SMALL, WIDTH};
use super::lettering::shortened;
use super::names::{Named, beside, boxes, by_name, by_part};
use super::raster::{between, image, strip};
use super::svg::{Anchor, Box, Stroke, Svg, Type};
use super::ticks::{Ticks, decimal, power};
use super::trace;

/// Air slower than this share of the fastest gets no lines.
const STILL: f64 = 0.01;
/// Most powers of ten shown of a heat flux.
const DECADES: i32 = 4;

/// Temperatures with the lines of the flow.
///
/// # Errors
/// What the image encoder reports.
pub fn temperature(results: &Results) -> io::Result<String> {
    let values = results.scalar("temperature");
    let range = extremes(values);
    let ticks = Ticks::of(range[0], range[1], 6);
    let span = (range[1] - range[0]).max(f64::MIN_POSITIVE);
    let mut picture = Picture::begin(results, "temperature", "Temperature");
    // Not at the ends of the range, where round-off alone would draw them.
    let inside = |t: &f64| (0.02..0.98).contains(&((t - range[0]) / span));
    let bands: Vec<f64> = ticks.at.iter().copied().filter(inside).collect();
    picture.field(values, Scale::Temperature, &|v| (v - range[0]) / span, &bands)?;
    picture.outlines("none");
    picture.flow(26.0, [INK, PAPER]);
    let named = by_part(&results.case).into_iter().filter_map(|group| {
        let max = results.told.parts.iter().find(|p| p.name == group.name)?.max_c?;
        let boxes = boxes(&picture.frame, &results.case, &group);
        Some(Named {
            name: group.name,
            details: vec![format!("{} °C at most", decimal(max, 1))],
            weight: max,
            boxes,
        })
    });
    let named = named.collect();
    picture.names(named);
    let at = |v: &f64| (v - range[0]) / span;
    let marks: Vec<(f64, String)> = ticks.at.iter().map(|t| (at(t), ticks.text(*t))).collect();
    picture.scale(Scale::Temperature, "temperature, °C", &marks)?;
    let told = format!("Temperatures from {:.1} to {:.1} °C", range[0], range[1]);
    Ok(picture.svg.finish("Temperature", &told))
}

/// Speeds with the lines of the flow; `None` when no air moves.
///
/// # Errors
/// What the image encoder reports.
pub fn speed(results: &Results) -> io::Result<Option<String>> {
    let values = results.scalar("speed");
    let [_, most] = extremes(values);
    if most <= 0.0 {
        return Ok(None);
    }
    let ticks = Ticks::of(0.0, most, 6);
    let mut picture = Picture::begin(results, "speed", "Speed of the air");
    picture.field(values, Scale::Speed, &|v| v / most, &[])?;
    picture.outlines(SOLID);
    picture.flow(17.0, [PAPER, INK]);
    let named = picture.blocks();
    picture.names(named);
    let marks: Vec<(f64, String)> = ticks.at.iter().map(|t| (t / most, ticks.text(*t))).collect();
    picture.scale(Scale::Speed, "speed, m/s", &marks)?;
    let told = format!("Speeds of the air up to {most:.3} m/s");
    Ok(Some(picture.svg.finish("Speed of the air", &told)))
}

/// Sizes of the conducted heat flux; `None` when none flows.
///
/// # Errors
/// What the image encoder reports.
pub fn heat_flux(results: &Results) -> io::Result<Option<String>> {
    let sizes: Vec<f64> = results.vector("heat_flux").iter().map(|q| q[0].hypot(q[1])).collect();
    let [_, most] = extremes(&sizes);
    if most <= 0.0 {
        return Ok(None);
    }
    let top = most.log10();
    let powers = Ticks::powers(10f64.powf(top - f64::from(DECADES)), most);
    let place = |v: f64| (v.max(f64::MIN_POSITIVE).log10() - top) / f64::from(DECADES) + 1.0;
    let mut picture = Picture::begin(results, "heat-flux", "Heat flux");
    picture.field(&sizes, Scale::HeatFlux, &place, &[])?;
    picture.outlines("none");
    let named = picture.blocks();
    picture.names(named);
    let marks: Vec<(f64, String)> =
        powers.iter().map(|p| (place(10f64.powi(*p)), power(*p))).collect();
    picture.scale(Scale::HeatFlux, "conducted heat flux, W/m², in powers of ten", &marks)?;
    let told = format!("Conducted heat fluxes up to {most:.3e} W/m²");
    Ok(Some(picture.svg.finish("Heat flux", &told)))
}

fn extremes(values: &[f64]) -> [f64; 2] {
    let finite = values.iter().copied().filter(|v| v.is_finite());
    let [low, high] =
        finite.fold([f64::INFINITY, f64::NEG_INFINITY], |[a, b], v| [a.min(v), b.max(v)]);
    if low <= high { [low, high] } else { [0.0, 0.0] }
}

/// A picture under construction.
struct Picture<'a> {
    results: &'a Results,
    frame: Frame,
    svg: Svg,
}

impl<'a> Picture<'a> {
    fn begin(results: &'a Results, name: &'static str, title: &str) -> Picture<'a> {
        let mut svg = Svg::new(name, WIDTH);
        svg.text([4.0, 18.0], title, Type::new(15.0).bold());
        let subtitle = shortened(results.case.title(), SMALL, false, WIDTH - 8.0);
        svg.text([4.0, 36.0], &subtitle, Type::new(SMALL).coloured(FAINT));
        Picture { results, frame: Frame::fit(&results.case, 86.0), svg }
    }

    fn field(
        &mut self,
        values: &[f64],
        scale: Scale,
        position: &dyn Fn(f64) -> f64,
        bands: &[f64],
    ) -> io::Result<()> {
        let lines = [&self.results.fields.x[..], &self.results.fields.y[..]];
        let mirror = self.frame.is_mirrored();
        let png = image(lines, values, &scale.colours(), position, bands, mirror)?;
        self.svg.image(self.frame.section, &png);
        Ok(())
    }

    /// Blocks, filled or as outlines, and the section's edge with its axes.
    fn outlines(&mut self, fill: &str) {
        for block in self.results.case.blocks() {
            for place in self.frame.rects(&block.rectangle) {
                if fill == "none" {
                    self.svg.raw("<g stroke-opacity=\"0.5\">");
                    self.svg.rect(place, "none", Some(Stroke::new(PAPER, 2.6)));
                    self.svg.raw("</g>");
                }
                self.svg.rect(place, fill, Some(Stroke::new(INK, 1.0)));
            }
        }
    }

    /// Lines along the flow, at most `apart` from each other, with heads that tell its direction;
    /// the first colour lies under the second.
    fn flow(&mut self, apart: f64, [under, over]: [&'static str; 2]) {
        let area = self.frame.computed();
        let apart = apart.min(area.w / 5.0).max(8.0);
        let (x, y) = (&self.results.fields.x, &self.results.fields.y);
        let (velocity, blocks) = (self.results.vector("velocity"), self.results.blocks());
        let [nx, _] = self.results.size();
        let still = STILL * extremes(self.results.scalar("speed"))[1];
        if still <= 0.0 {
            return;
        }
        // Page places from the upper left corner of the computed area to metres.
        let metres = |p: [f64; 2]| {
            let share = |v: f64, extent: f64, lines: &[f64]| {
                lines[0] + v / extent * (lines[lines.len() - 1] - lines[0])
            };
            [share(p[0], area.w, x), share(area.h - p[1], area.h, y)]
        };
        let direction = |p: [f64; 2]| {
            let [mx, my] = metres(p);
            let cell = |lines: &[f64], at: f64| {
                lines.partition_point(|l| *l <= at).clamp(1, lines.len() - 1) - 1
            };
            if blocks[cell(x, mx) + cell(y, my) * nx] >= 0 {
                return None;
            }
            let ((i0, i1, s), (j0, j1, t)) = (between(x, mx), between(y, my));
            let mix = |k: usize| {
                let row = |j: usize| {
                    let (a, b) = (velocity[i0 + j * nx][k], velocity[i1 + j * nx][k]);
                    a + s * (b - a)
                };
                row(j0) + t * (row(j1) - row(j0))
            };
            let (u, v) = (mix(0), -mix(1));
            let speed = u.hypot(v);
            (speed > still).then(|| [u / speed, v / speed])
        };
        let seeds = seeds([area.w, area.h], apart);
        let found = trace::lines([area.w, area.h], apart, &seeds, direction);
        let mut runs = Vec::new();
        let mut heads = Vec::new();
        for line in &found {
            let mut run = trace::thinned(line, 3);
            run.iter_mut().for_each(|p| *p = [p[0] + area.x, p[1] + area.y]);
            heads.extend(arrow_heads(line).map(|h| h.map(|p| [p[0] + area.x, p[1] + area.y])));
            runs.push(run);
        }
        if self.frame.is_mirrored() {
            let opposite: Vec<Vec<[f64; 2]>> =
                runs.iter().map(|r| r.iter().map(|p| self.frame.opposite(*p)).collect()).collect();
            runs.extend(opposite);
            let opposite: Vec<[[f64; 2]; 4]> =
                heads.iter().map(|h| h.map(|p| self.frame.opposite(p))).collect();
            heads.extend(opposite);
        }
        self.svg.raw("<g stroke-opacity=\"0.45\" stroke-linecap=\"round\">");
        self.svg.lines(&runs, Stroke::new(under, 2.4));
        self.svg.raw("</g><g stroke-opacity=\"0.9\">");
        self.svg.lines(&runs, Stroke::new(over, 0.9));
        self.svg.raw(&format!(
            "</g><g stroke=\"{under}\" stroke-width=\"1.2\" stroke-opacity=\"0.6\" \
             paint-order=\"stroke\">"
        ));
        for head in &heads {
            self.svg.polygon(head, over);
        }
        self.svg.raw("</g>");
    }

    /// Names of blocks without numbers.
    fn blocks(&self) -> Vec<Named> {
        let case = &self.results.case;
        let named = |group: super::names::Group| {
            let boxes = boxes(&self.frame, case, &group);
            let weight = boxes.iter().map(|b| b.w * b.h).sum();
            Named { name: group.name, details: Vec::new(), boxes, weight }
        };
        by_name(case).into_iter().map(named).collect()
    }

    /// Edge, axes and names.
    fn names(&mut self, named: Vec<Named>) {
        self.frame.edge(&mut self.svg, &self.results.case);
        self.frame.axes(&mut self.svg, 12.0);
        beside(&mut self.svg, &self.frame, named);
    }

    /// The colour scale below everything, with marks at places 0 to 1.
    fn scale(&mut self, scale: Scale, name: &str, marks: &[(f64, String)]) -> io::Result<()> {
        let top = self.svg.bottom() + 16.0;
        let place = Box { x: LEFT, y: top + 8.0, w: WIDTH - 2.0 * LEFT, h: 13.0 };
        let name = shortened(name, SMALL, false, WIDTH - LEFT - 4.0);
        self.svg.text([LEFT, top], &name, Type::new(SMALL).coloured(FAINT));
        self.svg.image(place, &strip(&scale.colours())?);
        self.svg.rect(place, "none", Some(Stroke::new(INK, 0.8)));
        for (at, text) in marks.iter().filter(|(at, _)| (-1e-9..=1.0 + 1e-9).contains(at)) {
            let x = place.x + at * place.w;
            let bottom = place.y + place.h;
            self.svg.line([x, bottom], [x, bottom + 4.0], Stroke::new(INK, 0.8));
            let set = Type::new(SMALL).anchored(Anchor::Middle);
            self.svg.text([x, bottom + 17.0], text, set);
        }
        self.svg.reach(place.y + place.h + 26.0);
        Ok(())
    }
}

/// Places over an area, half a distance between lines apart.
fn seeds([w, h]: [f64; 2], apart: f64) -> Vec<[f64; 2]> {
    let step = 0.5 * apart;
    let count = |extent: f64| (extent / step) as usize + 1;
    let place = |n: usize| (n as f64 + 0.5) * step;
    (0..count(h)).rev().flat_map(|j| (0..count(w)).map(move |i| [place(i), place(j)])).collect()
}

/// Heads along a line: in its middle, or every so often on a long one.
fn arrow_heads(line: &[[f64; 2]]) -> impl Iterator<Item = [[f64; 2]; 4]> + '_ {
    let apart = 130.0;
    let length = trace::length(line);
    let count = ((length / apart) as usize).max(1);
    (0..count).filter_map(move |n| {
        let at = ((n as f64 + 0.5) / count as f64 * (line.len() - 1) as f64) as usize;
        let (from, to) = (line.get(at.saturating_sub(2))?, line.get(at + 2)?);
        let size = (to[0] - from[0]).hypot(to[1] - from[1]);
        let [dx, dy] = [(to[0] - from[0]) / size, (to[1] - from[1]) / size];
        let point = |ahead: f64, aside: f64| {
            [line[at][0] + ahead * dx - aside * dy, line[at][1] + ahead * dy + aside * dx]
        };
        Some([point(4.2, 0.0), point(-3.2, 2.7), point(-1.8, 0.0), point(-3.2, -2.7)])
    })
}
