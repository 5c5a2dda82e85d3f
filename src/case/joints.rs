//! `[[joint]]`: contact resistance between touching blocks.

use ventrise_mesh::Rectangle;

use super::check::Placed;
use super::error::{CaseError, Cause};
use super::model::{Joint, Part};
use super::parse::{Reader, Scope};
use super::units::Dimension;
use super::vocabulary::JOINT;

/// Overlap of two edges that counts as touching [m].
const TOUCH: f64 = 1e-9;

/// Reads the `[[joint]]` tables; every pair of touching blocks of the two names gets one.
pub(super) fn read_joints(
    reader: &mut Reader,
    top: &Scope,
    names: &[Option<String>],
    blocks: &[Placed],
    parts: &[Part],
) -> Vec<Joint> {
    let mut joints: Vec<Joint> = Vec::new();
    for (n, mut scope) in reader.tables(top, "joint").into_iter().enumerate() {
        scope.place = format!("joint {}", n + 1);
        reader.check_keys(&scope, &JOINT);
        for (key, example) in
            [("between", "[\"core\", \"heater\"]"), ("resistance", "\"0.6 K cm2/W\"")]
        {
            if !scope.has(key) {
                reader.missing(&scope, key, example);
            }
        }
        let resistance = reader.bounded(
            &scope,
            "resistance",
            Dimension::AreaResistance,
            (0.0..=1.0, "from 0 to 10000 K cm2/W"),
        );
        let between = reader.two_texts(&scope, "between");
        let (Some(between), Some(resistance)) = (between, resistance) else { continue };
        let mut fail = |message: String, hint: &str| {
            let error = CaseError::new(Cause::Name, &scope.place, message);
            reader.report(error.at(between.span.clone()).hint(hint));
        };
        // A block's own name, that of its pattern, or its part's.
        let of = |name: &str| -> Vec<usize> {
            let is = |(n, b): (usize, &Placed)| {
                let part = b.block.part.map(|p| parts[p].name.as_str());
                let own = b.block.name.as_deref();
                let pattern = names[b.draft].as_deref();
                [own, pattern, part].contains(&Some(name)).then_some(n)
            };
            blocks.iter().enumerate().filter_map(is).collect()
        };
        let [first, second] = &between.value;
        let groups = [first, second].map(|name| of(name));
        if let Some(n) = groups.iter().position(Vec::is_empty) {
            let name = &between.value[n];
            fail(format!("there is no block or part \"{name}\""), "name two blocks or parts");
            continue;
        }
        let before = joints.len();
        for a in &groups[0] {
            for b in &groups[1] {
                let shapes = [a, b].map(|n| &blocks[*n].block.rectangle);
                let pair = [*a.min(b), *a.max(b)];
                let is_new = joints[before..].iter().all(|j| j.blocks != pair);
                if a != b && touch(shapes[0], shapes[1]) && is_new {
                    joints.push(Joint { blocks: pair, resistance: resistance.value });
                }
            }
        }
        if joints.len() == before {
            fail(
                format!("\"{first}\" and \"{second}\" touch nowhere"),
                "a joint lies where two blocks share an edge; air between them is computed anyway",
            );
        }
        let twice = joints[before..]
            .iter()
            .find(|j| joints[..before].iter().any(|earlier| earlier.blocks == j.blocks));
        if twice.is_some() {
            fail(
                format!("\"{first}\" and \"{second}\" have a joint already"),
                "give every pair of blocks one joint",
            );
        }
    }
    joints
}

/// Whether two rectangles share a piece of an edge.
fn touch(a: &Rectangle, b: &Rectangle) -> bool {
    let meet =
        |a: [f64; 2], b: [f64; 2]| (a[1] - b[0]).abs() < TOUCH || (b[1] - a[0]).abs() < TOUCH;
    let share = |a: [f64; 2], b: [f64; 2]| a[1].min(b[1]) - a[0].max(b[0]) > TOUCH;
    (meet(a.x, b.x) && share(a.y, b.y)) || (meet(a.y, b.y) && share(a.x, b.x))
}
