//! Which blocks overlap, found by a line that sweeps along x.

use super::blocks::Draft;
use super::check::{Placed, SAME, millimetres};
use super::error::{CaseError, Cause};
use super::model::Section;
use super::parse::Reader;

/// Most messages about one table: a drawing with a slip overlaps itself everywhere.
const PER_TABLE: usize = 3;

/// Two blocks (indices, the earlier one of the file first) and what they share along x and y [m].
struct Overlap {
    pair: [usize; 2],
    common: [f64; 2],
}

/// Reports overlapping blocks: each pair of tables once, each table at most [`PER_TABLE`] times.
pub(super) fn report(reader: &mut Reader, section: &Section, drafts: &[Draft], blocks: &[Placed]) {
    let slack = SAME * section.width.max(section.height);
    // By table, what it overlaps: the tables before it and itself.
    let mut found: Vec<Vec<Overlap>> = drafts.iter().map(|_| Vec::new()).collect();
    sweep(blocks, slack, |overlap| {
        let [a, b] = overlap.pair.map(|n| blocks[n].draft);
        let known = &mut found[b];
        match known.iter().position(|o| blocks[o.pair[0]].draft == a) {
            Some(n) if overlap.pair < known[n].pair => known[n] = overlap,
            None if known.len() <= PER_TABLE => known.push(overlap),
            _ => {}
        }
    });
    for (table, mut overlaps) in drafts.iter().zip(found) {
        let others = overlaps.len() > PER_TABLE;
        overlaps.truncate(PER_TABLE);
        overlaps.sort_by_key(|o| o.pair);
        let count = overlaps.len();
        for (n, Overlap { pair: [a, b], common }) in overlaps.into_iter().enumerate() {
            let message = format!(
                "overlaps {} over {} by {}{}",
                blocks[a].place,
                millimetres(common[0]),
                millimetres(common[1]),
                if others && n + 1 == count { ", and more blocks" } else { "" }
            );
            let span = match (&table.repeat, &table.x) {
                (Some(repeat), _) => repeat.span.clone(),
                (None, Some(x)) => x.span.clone(),
                (None, None) => table.span.clone(),
            };
            let error = CaseError::new(Cause::Shape, &blocks[b].place, message).at(span);
            reader.report(error.hint("blocks may touch but not overlap"));
        }
    }
}

/// Every pair of blocks that share more than `slack` along both axes. Blocks are taken by their
/// left ends; those whose right end has been passed can meet no later one.
fn sweep(blocks: &[Placed], slack: f64, mut meet: impl FnMut(Overlap)) {
    let rectangle = |n: usize| &blocks[n].block.rectangle;
    let mut order: Vec<usize> = (0..blocks.len()).collect();
    order.sort_by(|a, b| rectangle(*a).x[0].total_cmp(&rectangle(*b).x[0]));
    let shared = |a: [f64; 2], b: [f64; 2]| a[1].min(b[1]) - a[0].max(b[0]);
    let mut passed: Vec<usize> = Vec::new();
    for b in order {
        let right = rectangle(b);
        passed.retain(|a| rectangle(*a).x[1] > right.x[0] + slack);
        for a in &passed {
            let left = rectangle(*a);
            let common = [shared(left.x, right.x), shared(left.y, right.y)];
            if common.iter().all(|c| *c > slack) {
                meet(Overlap { pair: [b.min(*a), b.max(*a)], common });
            }
        }
        passed.push(b);
    }
}
