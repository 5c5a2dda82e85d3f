//! Names of blocks and parts, in a column beside the section, each with a line to what it names.
//!
//! Names keep the order of heights, and every line first runs level to the section's edge; so no
//! two lines cross, and no name lies on another. Names that do not find room beside a flat section
//! are listed below it, by numbers.

use std::collections::BTreeMap;

use crate::case::Case;

use super::colour::{FAINT, INK, PAPER};
use super::frame::{Frame, SMALL, WIDTH};
use super::lettering::{shortened, width};
use super::svg::{Anchor, Box, Stroke, Svg, Type};

/// Most names of one picture; further ones are counted.
const MOST: usize = 14;
/// Up to so many names get two further lines.
const FEW: usize = 7;
/// Distance of further lines.
const BELOW: f64 = 15.5;
/// How much further than the section names may reach before they are listed below.
const OVER: f64 = 50.0;
/// Size of numbers on blocks.
const NUMBER: f64 = 11.0;
/// Size of names.
const SIZE: f64 = 13.5;

/// Something with a name.
#[derive(Debug, Clone, PartialEq)]
pub struct Named {
    /// Name.
    pub name: String,
    /// Further lines.
    pub details: Vec<String>,
    /// Its rectangles on the page.
    pub boxes: Vec<Box>,
    /// Which to keep when there are too many: the largest.
    pub weight: f64,
}

/// Blocks that belong together: copies of a pattern, or all of a part.
#[derive(Debug, Clone, PartialEq)]
pub struct Group {
    /// Name.
    pub name: String,
    /// Index of its part.
    pub part: Option<usize>,
    /// Its blocks.
    pub blocks: Vec<usize>,
}

/// Blocks by part.
pub fn by_part(case: &Case) -> Vec<Group> {
    let group = |(n, part): (usize, &crate::case::Part)| Group {
        name: part.name.clone(),
        part: Some(n),
        blocks: part.blocks.clone(),
    };
    case.parts().iter().enumerate().map(group).collect()
}

/// Blocks by name, copies of a pattern ("fin 1", "fin 2") together; blocks without a name are
/// named after their part or material.
pub fn by_name(case: &Case) -> Vec<Group> {
    let mut groups: Vec<Group> = Vec::new();
    let mut at: BTreeMap<(Option<usize>, usize, String), usize> = BTreeMap::new();
    for (n, block) in case.blocks().iter().enumerate() {
        let own = block.name.as_deref().map(stem);
        let part = block.part.map(|p| case.parts()[p].name.clone());
        let name = own
            .map(str::to_string)
            .or(part)
            .unwrap_or_else(|| case.materials()[block.material].name.clone());
        let key = (block.part, block.material, name.clone());
        let group = *at.entry(key).or_insert_with(|| {
            groups.push(Group { name, part: block.part, blocks: Vec::new() });
            groups.len() - 1
        });
        groups[group].blocks.push(n);
    }
    for group in &mut groups {
        match group.blocks[..] {
            // A single "unit 2" keeps its number.
            [only] => {
                if let Some(name) = &case.blocks()[only].name {
                    group.name.clone_from(name);
                }
            }
            _ => group.name = format!("{} × {}", group.name, group.blocks.len()),
        }
    }
    groups
}

/// A name without the number at its end.
fn stem(name: &str) -> &str {
    match name.rsplit_once(' ') {
        Some((stem, number)) if number.chars().all(|c| c.is_ascii_digit()) => stem,
        _ => name,
    }
}

/// Rectangles of a group on the page, right of the axis.
pub fn boxes(frame: &Frame, case: &Case, group: &Group) -> Vec<Box> {
    group.blocks.iter().map(|b| frame.rect(&case.blocks()[*b].rectangle)).collect()
}

/// Draws names beside the section, or numbers on it; returns the places of numbers.
pub fn beside(svg: &mut Svg, frame: &Frame, mut named: Vec<Named>) -> Vec<Box> {
    named.retain(|n| !n.boxes.is_empty() && !n.name.is_empty());
    let all = named.len();
    named.sort_by(|a, b| b.weight.total_cmp(&a.weight));
    named.truncate(MOST);
    let mut named: Vec<(f64, Named)> = named.into_iter().map(|n| (middle(&n.boxes), n)).collect();
    named.sort_by(|a, b| a.0.total_cmp(&b.0));

    let section = frame.section;
    let column = section.x + section.w + 28.0;
    let room = WIDTH - column - 2.0;
    // With many names there is room for one further line each.
    let most = if named.len() > FEW { 1 } else { 2 };
    let lines = named.iter().map(|n| n.1.details.len().min(most)).max().unwrap_or(0);
    let row = 20.0 + BELOW * lines as f64;
    if frame.is_flat() || row * named.len() as f64 > section.h + OVER {
        let named: Vec<Named> = named.into_iter().map(|n| n.1).collect();
        let taken = listed(svg, &named);
        more(svg, all, [44.0, svg.bottom() + 4.0]);
        return taken;
    }
    let wanted: Vec<f64> = named.iter().map(|n| n.0).collect();
    let levels = spread(&wanted, row, section.y + 4.0, section.y + section.h - 4.0);
    let mut last = section.y;
    for ((_, named), level) in named.iter().zip(&levels) {
        lead(svg, section, target(&named.boxes, *level), [column - 4.0, *level]);
        let name = shortened(&named.name, SIZE, true, room);
        svg.text([column, level + 4.7], &name, Type::new(SIZE).bold());
        for (n, detail) in named.details.iter().take(most).enumerate() {
            let at = [column, level + 5.0 + BELOW * (n + 1) as f64];
            let detail = shortened(detail, SMALL, false, room);
            svg.text(at, &detail, Type::new(SMALL).coloured(FAINT));
        }
        last = level + row - 14.0;
    }
    svg.reach(last + 6.0);
    more(svg, all, [column, last + 16.0]);
    Vec::new()
}

/// How many names are left out.
fn more(svg: &mut Svg, all: usize, at: [f64; 2]) {
    if all > MOST {
        let text = format!("and {} more", all - MOST);
        svg.text(at, &text, Type::new(SMALL).coloured(FAINT));
        svg.reach(at[1] + 8.0);
    }
}

/// Numbers on what is named and names with their numbers below everything; returns the places of
/// the numbers. A number that would lie on another one is left out.
fn listed(svg: &mut Svg, named: &[Named]) -> Vec<Box> {
    let mut taken: Vec<Box> = Vec::new();
    let mut y = svg.bottom() + 12.0;
    for (n, named) in named.iter().enumerate() {
        let number = (n + 1).to_string();
        let w = width(&number, NUMBER, true);
        for b in &named.boxes {
            let x = b.x + 0.5 * b.w;
            let base = b.y + 0.5 * b.h + 0.36 * NUMBER;
            let place = Box { x: x - 0.5 * w, y: base - NUMBER, w, h: NUMBER + 3.0 };
            if taken.iter().any(|t| t.overlaps(&place)) {
                continue;
            }
            taken.push(place);
            let set = Type::new(NUMBER).bold().anchored(Anchor::Middle);
            svg.haloed([x, base], &number, set);
        }
        let set = Type::new(SMALL).bold();
        svg.text([30.0, y], &number, set.anchored(Anchor::End));
        let details = named.details.join(", ");
        let room = WIDTH - 44.0 - 4.0;
        let name = shortened(&named.name, SMALL, true, 0.62 * room);
        svg.text([44.0, y], &name, set);
        let after = 44.0 + width(&name, SMALL, true) + 8.0;
        let details = shortened(&details, SMALL, false, WIDTH - after - 4.0);
        svg.text([after, y], &details, Type::new(SMALL).coloured(FAINT));
        y += 18.0;
    }
    svg.reach(y - 4.0);
    taken
}

/// Mean height of rectangles on the page.
fn middle(boxes: &[Box]) -> f64 {
    boxes.iter().map(|b| b.y + 0.5 * b.h).sum::<f64>() / boxes.len() as f64
}

/// Where the line to a name at a level ends: in the rectangle nearest to it, of several the one
/// furthest to the right, as level as possible.
fn target(boxes: &[Box], level: f64) -> [f64; 2] {
    let off = |b: &Box| (b.y - level).max(level - b.y - b.h).max(0.0).round();
    let order =
        |a: &&Box, b: &&Box| off(a).total_cmp(&off(b)).then((b.x + b.w).total_cmp(&(a.x + a.w)));
    let Some(b) = boxes.iter().min_by(order) else { return [0.0, level] };
    let inset = (0.5 * b.h).min(5.0);
    // Not `clamp`: round-off may put the bounds of a thin block the wrong way round.
    [b.x + b.w - (0.5 * b.w).min(7.0), level.min(b.y + b.h - inset).max(b.y + inset)]
}

/// A line from a place level to the section's edge and on to its name.
fn lead(svg: &mut Svg, section: Box, from: [f64; 2], to: [f64; 2]) {
    let edge = section.x + section.w + 8.0;
    let run = vec![vec![from, [edge, from[1]], [to[0] - 6.0, to[1]], to]];
    svg.raw("<g stroke-opacity=\"0.75\">");
    svg.lines(&run, Stroke::new(PAPER, 3.0));
    svg.raw("</g>");
    svg.lines(&run, Stroke::new(INK, 0.9));
    svg.circle(from, 2.4, INK, Some(Stroke::new(PAPER, 1.0)));
}

/// Levels at least `row` apart, in order, as near to the wanted ones (rising) as a shift of whole
/// runs allows, and within a range if it is long enough; else they go beyond its end.
pub fn spread(wanted: &[f64], row: f64, from: f64, to: f64) -> Vec<f64> {
    // Runs of rows that touch: (middle wanted, count).
    let mut runs: Vec<(f64, usize)> = Vec::new();
    for level in wanted {
        runs.push((*level, 1));
        while let [.., (a, n), (b, m)] = runs[..] {
            let apart = 0.5 * row * (n + m) as f64;
            if b - a >= apart {
                break;
            }
            runs.truncate(runs.len() - 2);
            let count = n + m;
            // Every row's wish counts the same.
            let middle = (n as f64 * (a + 0.5 * row * m as f64)
                + m as f64 * (b - 0.5 * row * n as f64))
                / count as f64;
            runs.push((middle, count));
        }
    }
    let mut levels: Vec<f64> = runs
        .iter()
        .flat_map(|(middle, count)| {
            let first = middle - 0.5 * row * (*count as f64 - 1.0);
            (0..*count).map(move |n| first + row * n as f64)
        })
        .collect();
    let mut limit = to;
    for level in levels.iter_mut().rev() {
        *level = level.min(limit);
        limit = *level - row;
    }
    let mut limit = from;
    for level in &mut levels {
        *level = level.max(limit);
        limit = *level + row;
    }
    levels
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_are_spread_without_overlap_and_stay_where_they_can() {
        assert_eq!(spread(&[10.0, 50.0, 90.0], 20.0, 0.0, 100.0), [10.0, 50.0, 90.0]);
        let levels = spread(&[50.0, 50.0, 50.0], 20.0, 0.0, 100.0);
        assert_eq!(levels, [30.0, 50.0, 70.0]);
        let levels = spread(&[95.0, 96.0, 97.0], 20.0, 0.0, 100.0);
        assert_eq!(levels, [60.0, 80.0, 100.0]);
        let crowded = spread(&[10.0; 8], 20.0, 0.0, 100.0);
        assert!(crowded[0] >= 0.0 && crowded.windows(2).all(|w| w[1] - w[0] >= 20.0 - 1e-9));
    }

    #[test]
    fn lines_end_in_what_they_name() {
        let b = |x, y| Box { x, y, w: 10.0, h: 40.0 };
        let [x, y] = target(&[b(0.0, 0.0), b(50.0, 0.0), b(50.0, 200.0)], 60.0);
        assert!((50.0..60.0).contains(&x) && (0.0..40.0).contains(&y), "{x} {y}");
    }

    #[test]
    fn blocks_thinner_than_a_line_can_be_pointed_at() {
        for n in 0..2000 {
            let y = 61.3 + 0.037_1 * f64::from(n);
            let b = Box { x: 100.0, y, w: 0.01, h: 0.013 * f64::from(n % 7) };
            for level in [0.0, y, 900.0] {
                let at = target(&[b], level)[1];
                assert!((b.y - 1e-9..=b.y + b.h + 1e-9).contains(&at), "{b:?}");
            }
        }
    }

    #[test]
    fn numbers_at_the_end_of_copies_are_dropped() {
        assert_eq!((stem("fin 12"), stem("fin a"), stem("2")), ("fin", "fin a", "2"));
    }
}
