//! `layout.svg`: the section to scale, with everything that the case names and the mesh.

use ventrise_mesh::{Geometry, Side};
use ventrise_solver::{OuterFilm, SideCondition};

use crate::case::units::rounded;
use crate::case::{Case, ProbeShape, Slot, side_name};
use crate::output::readings::celsius;
use crate::output::slots::resistance_words;
use crate::output::words::mm;

use super::colour::{AIR_MARK, COOLED, FAINT, HEATED, INK, MESH, PAPER, SOLID};
use super::frame::{Frame, SMALL, WIDTH, side_line};
use super::lettering::{shortened, width};
use super::names::{Named, beside, boxes, by_name};
use super::svg::{Anchor, Box, Stroke, Svg, Type};

/// Least distance of mesh lines that are drawn.
const MESH_APART: f64 = 3.2;
/// Most entries of a kind below the drawing.
const LISTED: usize = 12;
/// Height of a line of text.
const LINE: f64 = 19.0;

/// Draws a case on its mesh lines [m].
pub fn draw(case: &Case, x: &[f64], y: &[f64]) -> String {
    let mut svg = Svg::new("layout", WIDTH);
    let title = Type::new(15.0).bold();
    svg.text([4.0, 18.0], "Layout", title);
    let subtitle = shortened(case.title(), SMALL, false, WIDTH - 8.0);
    svg.text([4.0, 36.0], &subtitle, Type::new(SMALL).coloured(FAINT));
    let frame = Frame::fit(case, 96.0);
    mesh(&mut svg, &frame, x, y);
    blocks(&mut svg, &frame, case);
    frame.edge(&mut svg, case);
    let base = frame.axes(&mut svg, 26.0);
    slot_letters(&mut svg, &frame, case);
    let taken = beside(&mut svg, &frame, named(&frame, case));
    probes(&mut svg, &frame, case, taken);
    let base = base.max(svg.bottom()) + 12.0;
    let base = key(&mut svg, case, base);
    svg.reach(base);
    let told = format!(
        "Section of {} to scale with {} blocks, {} slots and {} probes",
        case.title(),
        case.blocks().len(),
        case.slots().len(),
        case.probes().len()
    );
    svg.finish("Layout of the section", &told)
}

/// Every line of the mesh that keeps a distance to the one drawn before, and the first and last.
fn mesh(svg: &mut Svg, frame: &Frame, x: &[f64], y: &[f64]) {
    let Box { x: left, y: top, w, h } = frame.section;
    let mut runs = Vec::new();
    let mut last = f64::NEG_INFINITY;
    for line in x {
        let [at, _] = frame.at([*line, 0.0]);
        if at - last < MESH_APART {
            continue;
        }
        last = at;
        runs.push(vec![[at, top], [at, top + h]]);
        if frame.is_mirrored() {
            let [other, _] = frame.opposite([at, 0.0]);
            runs.push(vec![[other, top], [other, top + h]]);
        }
    }
    let mut last = f64::INFINITY;
    for line in y {
        let [_, at] = frame.at([0.0, *line]);
        if last - at < MESH_APART {
            continue;
        }
        last = at;
        runs.push(vec![[left, at], [left + w, at]]);
    }
    svg.lines(&runs, Stroke::new(MESH, 0.4));
}

fn blocks(svg: &mut Svg, frame: &Frame, case: &Case) {
    for block in case.blocks() {
        let fill = match block.heat {
            q if q > 0.0 => HEATED,
            q if q < 0.0 => COOLED,
            _ => SOLID,
        };
        for place in frame.rects(&block.rectangle) {
            svg.rect(place, fill, Some(Stroke::new(INK, 0.8)));
        }
    }
}

fn named(frame: &Frame, case: &Case) -> Vec<Named> {
    let named = |group: super::names::Group| {
        let first = &case.blocks()[group.blocks[0]];
        let heat: f64 = group.blocks.iter().map(|b| case.blocks()[*b].heat).sum();
        let boxes = boxes(frame, case, &group);
        let limit = group.part.and_then(|p| case.parts()[p].limit);
        let mut judged: Vec<String> = Vec::new();
        if heat != 0.0 {
            judged.push(format!("{} W", number(heat)));
        }
        if let Some(limit) = limit {
            judged.push(format!("limit {} °C", number(celsius(limit))));
        }
        let mut details = vec![case.materials()[first.material].name.clone()];
        if !judged.is_empty() {
            details.insert(0, judged.join(", "));
        }
        let area: f64 = boxes.iter().map(|b| b.w * b.h).sum();
        // Heat first, then limits, then size.
        let weight = area + if heat == 0.0 { 0.0 } else { 1e9 } + limit.map_or(0.0, |_| 1e8);
        Named { name: group.name, details, boxes, weight }
    };
    by_name(case).into_iter().map(named).collect()
}

/// Up to six significant digits, no more than it takes.
fn number(value: f64) -> String {
    rounded(value, 6).replace('-', "−")
}

fn millimetres(metres: f64) -> String {
    mm(metres).replace('-', "−")
}

/// Letter of a slot: A to Z, then A2 to Z2 and so on.
fn letter(n: usize) -> String {
    let letter = char::from(b'A' + (n % 26) as u8);
    if n < 26 { letter.into() } else { format!("{letter}{}", n / 26 + 1) }
}

/// A letter outside each slot; one that would lie on another is left out.
fn slot_letters(svg: &mut Svg, frame: &Frame, case: &Case) {
    let mut taken: Vec<[f64; 2]> = Vec::new();
    for (n, slot) in case.slots().iter().enumerate() {
        let at = outside(frame, case, slot);
        if taken.iter().any(|t| (t[0] - at[0]).hypot(t[1] - at[1]) < 17.0) {
            continue;
        }
        taken.push(at);
        badge(svg, at, &letter(n));
    }
}

/// Where the letter of a slot lies.
fn outside(frame: &Frame, case: &Case, slot: &Slot) -> [f64; 2] {
    let middle = 0.5 * (slot.span[0] + slot.span[1]);
    let [x, y] = frame.on_side(case, slot.side, middle);
    let [ox, oy] = frame.outward(slot.side);
    [x + 13.0 * ox, y + 13.0 * oy]
}

fn badge(svg: &mut Svg, at: [f64; 2], letter: &str) {
    svg.circle(at, 8.0, PAPER, Some(Stroke::new(INK, 1.0)));
    let set = Type::new(10.5).anchored(Anchor::Middle).bold();
    svg.text([at[0], at[1] + 3.8], letter, set);
}

/// Mark of a probe.
fn mark(n: usize) -> String {
    format!("P{}", n + 1)
}

/// Probes with their marks; a mark that finds no free place is left out.
fn probes(svg: &mut Svg, frame: &Frame, case: &Case, mut taken: Vec<Box>) {
    for (n, probe) in case.probes().iter().enumerate() {
        let (place, corners) = match probe.shape {
            ProbeShape::Point(at) => {
                let at = frame.at(at);
                svg.circle(at, 3.6, PAPER, Some(Stroke::new(AIR_MARK, 1.6)));
                svg.circle(at, 1.2, AIR_MARK, None);
                (at, [[6.0, -6.0], [-6.0, -6.0], [6.0, 14.0], [-6.0, 14.0]])
            }
            ProbeShape::Line { from, to } => {
                let ends = [frame.at(from), frame.at(to)];
                svg.line(ends[0], ends[1], Stroke::new(PAPER, 3.0));
                svg.line(ends[0], ends[1], Stroke::new(AIR_MARK, 1.8).dashed("5 3"));
                let middle = [0, 1].map(|k| 0.5 * (ends[0][k] + ends[1][k]));
                (middle, [[5.0, -5.0], [-5.0, -5.0], [5.0, 14.0], [-5.0, 14.0]])
            }
        };
        let text = mark(n);
        let w = width(&text, 12.0, true);
        let free = corners.iter().find_map(|[dx, dy]| {
            let x = if *dx > 0.0 { place[0] + dx } else { place[0] + dx - w };
            let place = Box { x, y: place[1] + dy - 10.0, w, h: 12.0 };
            (!taken.iter().any(|t| t.overlaps(&place))).then_some(place)
        });
        if let Some(place) = free {
            taken.push(place);
            let set = Type::new(12.0).bold().coloured(AIR_MARK);
            svg.haloed([place.x, place.y + 10.0], &text, set);
        }
    }
}

/// What letters, numbers and kinds of lines mean; returns where it ends.
fn key(svg: &mut Svg, case: &Case, top: f64) -> f64 {
    svg.line([4.0, top], [WIDTH - 4.0, top], Stroke::new(MESH, 0.8));
    let mut y = top + LINE + 2.0;
    let mut row = |svg: &mut Svg, text: &str, mark: &dyn Fn(&mut Svg, f64)| {
        mark(svg, y);
        let text = shortened(text, SMALL, false, WIDTH - 48.0);
        svg.text([44.0, y], &text, Type::new(SMALL));
        y += LINE;
    };
    for (condition, sides) in sides(case) {
        let text = format!("{}: {}", sides.join(", "), told(&condition));
        row(svg, &text, &|svg, y| {
            side_line(svg, [[8.0, y - 3.0], [36.0, y - 3.0]], [0.0, -1.0], condition);
        });
    }
    for (n, slot) in case.slots().iter().enumerate().take(LISTED) {
        let fan = slot.fan.map_or(String::new(), |f| format!(", fan {}", case.fans()[f].name));
        let text = format!(
            "{}: {}, {} to {} mm, {} cm², {}{fan}",
            slot.name,
            side_name(slot.side),
            millimetres(slot.span[0]),
            millimetres(slot.span[1]),
            significant(1e4 * case.slot_area(slot)),
            resistance_words(&slot.resistance)
        );
        row(svg, &text, &|svg, y| badge(svg, [22.0, y - 4.5], &letter(n)));
    }
    for (n, probe) in case.probes().iter().enumerate().take(LISTED) {
        let place = |p: [f64; 2]| format!("({}, {})", millimetres(p[0]), millimetres(p[1]));
        let text = match probe.shape {
            ProbeShape::Point(at) => format!("{}: at {} mm", probe.name, place(at)),
            ProbeShape::Line { from, to } => {
                format!("{}: from {} to {} mm", probe.name, place(from), place(to))
            }
        };
        row(svg, &text, &|svg, y| {
            let set = Type::new(12.0).bold().coloured(AIR_MARK).anchored(Anchor::Middle);
            svg.text([22.0, y], &mark(n), set);
        });
    }
    let left = |count: usize| count.saturating_sub(LISTED);
    let more = left(case.slots().len()) + left(case.probes().len());
    if more > 0 {
        row(svg, &format!("and {more} more slots and probes"), &|_, _| {});
    }
    for (fill, what, is) in [
        (HEATED, "block that releases heat", is_heated as fn(f64) -> bool),
        (COOLED, "block that is cooled", is_cooled),
        (SOLID, "block without heat", is_plain),
    ] {
        if case.blocks().iter().any(|b| is(b.heat)) {
            row(svg, what, &|svg, y| {
                let place = Box { x: 13.0, y: y - 10.0, w: 18.0, h: 11.0 };
                svg.rect(place, fill, Some(Stroke::new(INK, 0.8)));
            });
        }
    }
    let what = "mesh lines; where they lie close, some are left out";
    row(svg, what, &|svg, y| {
        svg.line([8.0, y - 4.0], [36.0, y - 4.0], Stroke::new(MESH, 1.0));
    });
    y
}

fn is_heated(heat: f64) -> bool {
    heat > 0.0
}

fn is_cooled(heat: f64) -> bool {
    heat < 0.0
}

fn is_plain(heat: f64) -> bool {
    heat == 0.0
}

fn significant(value: f64) -> String {
    let decimals = if value >= 100.0 { 0 } else { 1 };
    format!("{value:.decimals$}")
}

/// Sides with the same condition together.
fn sides(case: &Case) -> Vec<(SideCondition, Vec<&'static str>)> {
    let axisymmetric = case.section().geometry == Geometry::Axisymmetric;
    let mut found: Vec<(SideCondition, Vec<&'static str>)> = Vec::new();
    if axisymmetric {
        found.push((SideCondition::Symmetry, vec!["axis"]));
    }
    for side in Side::ALL {
        if axisymmetric && side == Side::Left {
            continue;
        }
        let condition = case.sides()[side.index()];
        match found.iter_mut().find(|(c, names)| *c == condition && names[0] != "axis") {
            Some((_, names)) => names.push(side_name(side)),
            None => found.push((condition, vec![side_name(side)])),
        }
    }
    found
}

/// A condition in words.
fn told(condition: &SideCondition) -> String {
    let degrees = |kelvin: f64| format!("{} °C", number(celsius(kelvin)));
    match *condition {
        SideCondition::Adiabatic => "adiabatic wall".into(),
        SideCondition::Symmetry => "symmetry".into(),
        SideCondition::Open => "open to outside air".into(),
        SideCondition::Temperature(t) => format!("wall at {}", degrees(t)),
        SideCondition::Flux(q) => format!("wall with {} W/m² coming in", number(q)),
        SideCondition::Film { coefficient, temperature } => format!(
            "wall with a film of {} W/(m² K) to {}",
            number(coefficient),
            degrees(temperature)
        ),
        SideCondition::Outside(o) => {
            let film = match o.film {
                OuterFilm::Given(h) => format!("a film of {} W/(m² K) to", number(h)),
                OuterFilm::StillAir => "still air of".into(),
            };
            let sun = if o.sun > 0.0 {
                format!(", {} W/m² of sun absorbed", number(o.sun))
            } else {
                String::new()
            };
            format!("wall with {film} {}{sun}", degrees(o.air))
        }
        SideCondition::Sliding(speed) => format!("wall sliding at {} m/s", number(speed)),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn letters_go_on_after_z() {
        assert_eq!([0, 25, 26, 52].map(letter), ["A", "Z", "A2", "A3"]);
    }
}
