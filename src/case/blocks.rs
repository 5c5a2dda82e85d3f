//! `[[block]]`: solid rectangles, patterns of them, and what they are judged by.

use std::ops::Range;

use ventrise_solver::HeatLaw;

use super::error::{CaseError, Cause};
use super::heat::{read_curve, read_junction, read_limit};
use super::model::{Ambient, HeatCurve, Junction, LimitAt};
use super::parse::{Located, Reader, Scope};
use super::units::Dimension;
use super::vocabulary::{BLOCK, REPEAT};

/// Most copies of one pattern.
const COPIES: usize = 1000;

/// A `[[block]]` table as read; what could not be read is `None` and reported.
#[derive(Debug)]
pub(super) struct Draft {
    /// How messages call it.
    pub place: String,
    /// Byte range of its header.
    pub span: Range<usize>,
    pub name: Option<Located<String>>,
    pub part: Option<Located<String>>,
    pub material: Option<Located<String>>,
    pub x: Option<Located<[f64; 2]>>,
    pub y: Option<Located<[f64; 2]>>,
    pub heat: f64,
    pub curve: Option<HeatCurve>,
    pub junction: Option<Junction>,
    pub limit: Option<Located<f64>>,
    pub limit_at: LimitAt,
    pub emissivity: Option<f64>,
    pub repeat: Option<Repeat>,
}

/// A pattern: `count` copies, each a step further.
#[derive(Debug, Clone)]
pub(super) struct Repeat {
    pub count: usize,
    /// Step along x and y [m].
    pub step: [f64; 2],
    pub span: Range<usize>,
}

/// Reads the `[[block]]` tables.
pub(super) fn read_blocks(
    reader: &mut Reader,
    top: &Scope,
    ambient: Option<&Ambient>,
) -> Vec<Draft> {
    let scopes = reader.tables(top, "block");
    scopes.into_iter().map(|scope| read_block(reader, scope, ambient)).collect()
}

fn read_block(reader: &mut Reader, mut scope: Scope, ambient: Option<&Ambient>) -> Draft {
    let name = reader.text(&scope, "name");
    if let Some(name) = &name {
        scope.place = format!("block \"{}\"", name.value);
    }
    reader.check_keys(&scope, &BLOCK);
    let part = reader.text(&scope, "part");
    let material = reader.text(&scope, "material");
    let x = extent(reader, &scope, "x");
    let y = extent(reader, &scope, "y");
    for (key, example) in [
        ("material", "\"aluminium\""),
        ("x", "[\"0 mm\", \"60 mm\"]"),
        ("y", "[\"30 mm\", \"290 mm\"]"),
    ] {
        if !scope.has(key) {
            reader.missing(&scope, key, example);
        }
    }
    let heat = reader.quantity(&scope, "heat", Dimension::Power);
    if let Some(heat) = &heat {
        let good = heat.value == 0.0 || (1e-9..=1e6).contains(&heat.value.abs());
        reader.within(&scope, "heat", heat, good, "0 W, or from 1e-9 W to 1000 kW in size");
        if heat.value < 0.0 {
            reader.warn(&scope, heat.span.clone(), "heat below zero: the block is cooled");
        }
    }
    let curve = read_curve(reader, &scope, heat.as_ref());
    let junction = read_junction(reader, &scope);
    let (limit, limit_at) = read_limit(reader, &scope);
    if let Some(limit) = &limit
        && !scope.has("name")
        && !scope.has("part")
    {
        let message = "limit is given, but the block belongs to no part that could be judged";
        let error = CaseError::new(Cause::Conflict, &scope.place, message).at(limit.span.clone());
        reader.report(error.hint("give the block a name or a part"));
    }
    let emissivity = reader.emissivity(&scope);
    let repeat = read_repeat(reader, &scope);
    Draft {
        place: scope.place,
        span: scope.span,
        name,
        part,
        material,
        x,
        y,
        heat: match (&curve, heat) {
            (Some(HeatCurve::Points(points)), _) => {
                let law = HeatLaw { block: 0, points: points.clone() };
                law.heat(ambient.map_or(points[0][0], |a| a.temperature))
            }
            (_, heat) => heat.map_or(0.0, |h| h.value),
        },
        curve,
        junction,
        limit,
        limit_at,
        emissivity,
        repeat,
    }
}

/// An extent [lower, upper]; reported when the upper end is not above the lower one.
fn extent(reader: &mut Reader, scope: &Scope, key: &str) -> Option<Located<[f64; 2]>> {
    let extent = reader.two_lengths(scope, key)?;
    let [low, high] = extent.value;
    let rising = reader.within(scope, key, &extent, low < high, "a smaller and a larger length");
    rising.then_some(extent)
}

fn read_repeat(reader: &mut Reader, scope: &Scope) -> Option<Repeat> {
    let place = format!("{}, repeat", scope.place);
    let inner = reader.table(scope, "repeat", &place)?;
    reader.check_keys(&inner, &REPEAT);
    if !inner.has("count") {
        reader.missing(&inner, "count", "12");
    }
    let count = reader.count(&inner, "count", 1..=COPIES);
    let has_step = inner.has("step-x") || inner.has("step-y");
    let x = reader.quantity(&inner, "step-x", Dimension::Length);
    let y = reader.quantity(&inner, "step-y", Dimension::Length);
    if !has_step {
        let message = "repeat has no step";
        let error = CaseError::new(Cause::Missing, &scope.place, message).at(inner.span.clone());
        reader.report(error.hint("write step-x = \"20 mm\", step-y, or both"));
        return None;
    }
    if (inner.has("step-x") && x.is_none()) || (inner.has("step-y") && y.is_none()) {
        return None;
    }
    let step = [x.map_or(0.0, |x| x.value), y.map_or(0.0, |y| y.value)];
    Some(Repeat { count: count?.value, step, span: inner.span })
}
