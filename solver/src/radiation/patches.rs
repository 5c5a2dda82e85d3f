//! Faces in a row become patches, so that thousands of faces stay affordable.

use std::ops::Range;

use super::faces::{Face, Owner, segment};
use super::sight::Segment;
use super::surfaces::Surfaces;

/// A straight strip of faces of one owner, with one temperature and one radiosity.
#[derive(Debug, Clone, PartialEq)]
pub struct Patch {
    /// What it belongs to.
    pub owner: Owner,
    /// Whether it is an opening: black, at the radiant temperature of the surroundings.
    pub is_opening: bool,
    /// Emissivity, 0 to 1.
    pub emissivity: f64,
    /// Area [m²].
    pub area: f64,
    /// Its ends in the section, (x, y) [m], in rising order.
    pub ends: [[f64; 2]; 2],
    /// Unit normal, into the air.
    pub normal: [f64; 2],
    /// Which of the faces it consists of.
    pub faces: Range<usize>,
    pub(super) segment: Segment,
}

/// Groups faces to about `count` patches. A patch never spans two owners, lines or directions, so
/// there may be more. An opening is one patch as far as it is straight: all of it has one
/// temperature and reflects nothing.
///
/// Patches are to be small where the view changes fast, which is over lengths of the gap in front
/// of a face; on the other hand, narrow gaps must not take them all. Their length is therefore
/// proportional to the root of the gap (our choice).
pub(super) fn patches(faces: &[Face], surfaces: &Surfaces, count: usize) -> Vec<Patch> {
    let runs = runs(faces);
    let weight = |f: &Face| f.length() / f.gap.sqrt();
    let weights: Vec<f64> = runs
        .iter()
        .map(|run| match surfaces.is_opening(faces[run.start].owner) {
            true => 0.0,
            false => faces[run.clone()].iter().map(weight).sum(),
        })
        .collect();
    let shares = |density: f64| -> Vec<usize> {
        let share = |(run, w): (&Range<usize>, &f64)| {
            ((density * w).ceil().min(run.len() as f64) as usize).max(1)
        };
        runs.iter().zip(&weights).map(share).collect()
    };
    let fits = |density: f64| shares(density).iter().sum::<usize>() <= count;
    let smallest = faces.iter().map(weight).fold(f64::INFINITY, f64::min);
    // At the upper end every face is a patch of its own.
    let (mut low, mut high) = (0.0, faces.len() as f64 / smallest);
    if fits(high) {
        low = high;
    } else {
        for _ in 0..60 {
            let middle = 0.5 * (low + high);
            if fits(middle) { low = middle } else { high = middle }
        }
    }
    let mut patches = Vec::new();
    for (run, share) in runs.iter().zip(shares(low)) {
        for part in cut(&faces[run.clone()], share, weight) {
            let part = run.start + part.start..run.start + part.end;
            patches.push(patch(faces, part, surfaces));
        }
    }
    patches
}

/// Ranges of faces that continue each other.
fn runs(faces: &[Face]) -> Vec<Range<usize>> {
    let mut runs: Vec<Range<usize>> = Vec::new();
    for (k, face) in faces.iter().enumerate() {
        match runs.last_mut() {
            Some(run) if face.continues(&faces[run.end - 1]) => run.end = k + 1,
            _ => runs.push(k..k + 1),
        }
    }
    runs
}

/// Cuts a run into `share` parts of about the same weight, none of them empty.
fn cut(run: &[Face], share: usize, weight: impl Fn(&Face) -> f64) -> Vec<Range<usize>> {
    let total: f64 = run.iter().map(&weight).sum();
    let mut parts: Vec<Range<usize>> = Vec::with_capacity(share);
    let (mut start, mut sum) = (0, 0.0);
    for (k, face) in run.iter().enumerate() {
        let half = 0.5 * weight(face);
        let parts_left = share - parts.len();
        let is_due = sum + half > total * (parts.len() + 1) as f64 / share as f64;
        // Every part still to come needs a face.
        let is_forced = run.len() - k < parts_left;
        if k > start && parts_left > 1 && (is_due || is_forced) {
            parts.push(start..k);
            start = k;
        }
        sum += 2.0 * half;
    }
    parts.push(start..run.len());
    parts
}

fn patch(faces: &[Face], range: Range<usize>, surfaces: &Surfaces) -> Patch {
    let (first, last) = (&faces[range.start], &faces[range.end - 1]);
    Patch {
        owner: first.owner,
        is_opening: surfaces.is_opening(first.owner),
        emissivity: surfaces.emissivity(first.owner),
        area: faces[range.clone()].iter().map(|f| f.area).sum(),
        ends: [first.ends[0], last.ends[1]],
        normal: first.normal,
        segment: segment(first, last),
        faces: range,
    }
}
