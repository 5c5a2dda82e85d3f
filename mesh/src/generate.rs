//! From a layout to its mesh: edges, what is crossed, lines along each axis, cells.

use crate::crossing::{self, Axis, Crossing, Span};
use crate::spacing::{self, Lines};
use crate::{Layout, Mesh, MeshError, uniform};

/// Most cells a mesh may have: 20 million, about ten times what a workstation solves overnight.
pub const CELL_LIMIT: usize = 20_000_000;

/// Blocks, slots and gaps thinner than this share of the section's longer extent are not given
/// their cells: 1e-5, 5 µm in half a metre, is a mistake in the drawing and no sheet or film.
const THINNEST: f64 = 1e-5;

/// Below this share of `wall`, the cells across a block, slot or gap are worth a word: 1/16 is
/// what a 0.3 mm sheet with 8 cells and a first cell of 0.6 mm comes to.
const FINE: f64 = 0.0625;

/// Places listed one by one in a note before the rest is only counted.
const LISTED: usize = 6;

/// How fine the mesh is to be.
#[derive(Debug, Clone, PartialEq)]
pub enum Spacing {
    /// Graded from the surfaces.
    Graded {
        /// Largest cell [m], > 0.
        cell: f64,
        /// First cell at surfaces touched by air and at the ends of slots [m], > 0; `cell` when
        /// larger than that.
        wall: f64,
        /// Largest ratio of neighbouring cell sizes, > 1 and at most 3.
        growth: f64,
        /// Least number of cells across every gap, slot and block.
        across: usize,
        /// Cell counts of every segment are multiples of this (a power of two).
        multiple: usize,
    },
    /// Equal cells as far as the edges allow.
    Uniform {
        /// Cells along x.
        nx: usize,
        /// Cells along y.
        ny: usize,
    },
}

/// A mesh and what was done to get it.
#[derive(Debug, Clone)]
pub struct Generated {
    /// The mesh.
    pub mesh: Mesh,
    /// Sentences for the user about compromises (segments with fewer cells than asked, ...).
    pub notes: Vec<String>,
}

/// Makes the mesh of a layout. The laws of the lines are in the modules `spacing` (graded) and
/// `uniform`.
///
/// # Errors
/// A spacing out of range, edges outside the section, or a mesh beyond [`CELL_LIMIT`].
pub fn generate(layout: &Layout, spacing: &Spacing) -> Result<Generated, MeshError> {
    spacing.check()?;
    let outline = crossing::outline(layout)?;
    let mut notes = Vec::new();
    let (x, y) = match *spacing {
        Spacing::Uniform { nx, ny } => {
            within_limit(nx, ny)?;
            let x = uniform::uniform_lines(Axis::X, outline.x(), nx)?;
            let y = uniform::uniform_lines(Axis::Y, outline.y(), ny)?;
            notes.extend(x.note.into_iter().chain(y.note));
            (x.lines, y.lines)
        }
        Spacing::Graded { growth, .. } => {
            let spans = crossing::spans(layout, &outline)?;
            let x = graded_axis(layout, &outline, &spans, spacing, Axis::X)?;
            let y = graded_axis(layout, &outline, &spans, spacing, Axis::Y)?;
            within_limit(x.lines.len() - 1, y.lines.len() - 1)?;
            for (axis, edges, lines) in [(Axis::X, outline.x(), &x), (Axis::Y, outline.y(), &y)] {
                notes.extend(sliver_note(axis, edges, lines));
                notes.extend(multiple_note(axis, edges, lines));
                notes.extend(growth_note(axis, &lines.lines, growth));
            }
            (x.lines, y.lines)
        }
    };
    let mesh = Mesh::from_lines(layout, x, y)?;
    if let Spacing::Graded { wall, cell, across, .. } = *spacing {
        let crossings = mesh.crossings(layout)?;
        notes.extend(across_note(&crossings, across));
        notes.extend(fine_note(&crossings, wall.min(cell)));
    }
    Ok(Generated { mesh, notes })
}

impl Spacing {
    fn check(&self) -> Result<(), MeshError> {
        let bound = |name, value: f64, holds: bool, bound| {
            if holds && value.is_finite() {
                Ok(())
            } else {
                Err(MeshError::Spacing { name, value, bound })
            }
        };
        match *self {
            Spacing::Uniform { nx, ny } => {
                bound("cells along x", nx as f64, nx > 0, "at least 1")?;
                bound("cells along y", ny as f64, ny > 0, "at least 1")
            }
            Spacing::Graded { cell, wall, growth, across: _, multiple } => {
                bound("cell", cell, cell > 0.0, "positive")?;
                bound("wall", wall, wall > 0.0, "positive")?;
                bound("growth", growth, growth > 1.0 && growth <= 3.0, "above 1 and at most 3")?;
                let is_power = multiple.is_power_of_two();
                bound("multiple", multiple as f64, is_power, "a power of two")
            }
        }
    }
}

fn within_limit(nx: usize, ny: usize) -> Result<(), MeshError> {
    let needed = nx.saturating_mul(ny);
    let limit = CELL_LIMIT;
    if needed > limit { Err(MeshError::TooMany { needed, limit }) } else { Ok(()) }
}

/// Graded lines along one axis.
fn graded_axis(
    layout: &Layout,
    outline: &Mesh,
    spans: &[Span],
    spacing: &Spacing,
    axis: Axis,
) -> Result<Lines, MeshError> {
    let Spacing::Graded { cell, wall, growth, across, multiple } = *spacing else {
        return Ok(Lines { lines: Vec::new(), slivers: Vec::new(), unaligned: Vec::new() });
    };
    let edges = match axis {
        Axis::X => outline.x(),
        Axis::Y => outline.y(),
    };
    let thinnest = THINNEST * layout.width.max(layout.height);
    let least: Vec<([usize; 2], usize)> = spans
        .iter()
        .filter(|s| s.axis == axis && edges[s.edges[1]] - edges[s.edges[0]] >= thinnest)
        .map(|s| (s.edges, s.crossed.wanted(across)))
        .collect();
    spacing::graded_lines(
        &spacing::AxisRequest {
            edges,
            graded: &crossing::graded_edges(layout, outline, axis),
            spans: &least,
            cell,
            wall: wall.min(cell),
            growth,
            multiple,
        },
        CELL_LIMIT,
    )
}

/// A position in mm: nine digits, so that edges close together are told apart.
pub(crate) fn mm(metres: f64) -> String {
    significant(1e3 * metres, 9)
}

/// A size in mm: four digits.
pub(crate) fn size_mm(metres: f64) -> String {
    significant(1e3 * metres, 4)
}

/// A value rounded to so many significant digits, in its shortest text.
fn significant(value: f64, digits: usize) -> String {
    let text = format!("{value:.*e}", digits - 1);
    match text.parse::<f64>() {
        Ok(0.0) => "0".into(),
        Ok(rounded) if rounded.abs() < 1e-4 => format!("{rounded:e}"),
        Ok(rounded) => format!("{rounded}"),
        Err(_) => text,
    }
}

/// Lists the first few of many places.
fn listed(places: &[String]) -> String {
    let mut text = places[..places.len().min(LISTED)].join(", ");
    if places.len() > LISTED {
        text += &format!(" and {} more", places.len() - LISTED);
    }
    text
}

fn segments(edges: &[f64], which: &[usize], lines: &Lines) -> Vec<String> {
    let place = |k: &usize| {
        let (from, to) = (edges[*k], edges[*k + 1]);
        let cells = lines.lines.iter().filter(|l| **l > from && **l <= to).count();
        let cells = if cells == 1 { String::new() } else { format!(", {cells} cells") };
        format!("{} to {} mm ({} mm wide{cells})", mm(from), mm(to), size_mm(to - from))
    };
    which.iter().map(place).collect()
}

fn sliver_note(axis: Axis, edges: &[f64], lines: &Lines) -> Option<String> {
    let places = segments(edges, &lines.slivers, lines);
    (!places.is_empty()).then(|| {
        format!(
            "edges close together along {}: a single cell between them, much smaller than the cells \
             beside it: {}",
            axis.letter(),
            listed(&places)
        )
    })
}

fn multiple_note(axis: Axis, edges: &[f64], lines: &Lines) -> Option<String> {
    let places = segments(edges, &lines.unaligned, lines);
    (!places.is_empty()).then(|| {
        format!(
            "edges close together along {}: few cells fit between them, and the solution may take \
             longer: {}",
            axis.letter(),
            listed(&places)
        )
    })
}

/// Largest ratio of neighbouring cells where it exceeds the bound.
fn growth_note(axis: Axis, lines: &[f64], growth: f64) -> Option<String> {
    let ratios = lines.windows(3).map(|l| {
        let ratio = (l[2] - l[1]) / (l[1] - l[0]);
        (ratio.max(1.0 / ratio), l[1])
    });
    let over: Vec<(f64, f64)> = ratios.filter(|(r, _)| *r > growth * (1.0 + 1e-6)).collect();
    let (ratio, at) = over.iter().copied().max_by(|a, b| a.0.total_cmp(&b.0))?;
    Some(format!(
        "neighbouring cells along {} differ by more than the growth {growth} at {}, by at most a \
         factor of {ratio:.2} at {} mm",
        axis.letter(),
        if over.len() == 1 { "1 line".into() } else { format!("{} lines", over.len()) },
        size_mm(at)
    ))
}

fn across_note(crossings: &[Crossing], across: usize) -> Option<String> {
    let short: Vec<String> = crossings
        .iter()
        .filter(|c| c.cells < c.crossed.wanted(across))
        .map(|c| format!("{}: {} instead of {}", place(c), c.cells, c.crossed.wanted(across)))
        .collect();
    (!short.is_empty()).then(|| format!("too few cells across: {}", listed(&short)))
}

/// Blocks, slots and gaps that force the mesh to be far finer than the surfaces do.
fn fine_note(crossings: &[Crossing], wall: f64) -> Option<String> {
    let fine: Vec<String> = crossings
        .iter()
        .filter(|c| c.cells > 1 && c.size() < FINE * wall * c.cells as f64)
        .map(|c| format!("{}: cells of {} mm", place(c), size_mm(c.size() / c.cells as f64)))
        .collect();
    (!fine.is_empty()).then(|| {
        format!(
            "very fine cells because something is very thin (should it be closed or left out?): {}",
            listed(&fine)
        )
    })
}

/// What is crossed and where.
fn place(crossing: &Crossing) -> String {
    format!(
        "{} from {} to {} mm along {} ({} mm)",
        crossing.crossed.word(),
        mm(crossing.from),
        mm(crossing.to),
        crossing.axis.letter(),
        size_mm(crossing.size())
    )
}
