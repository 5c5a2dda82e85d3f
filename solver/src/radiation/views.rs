//! View areas A_i·F_ij between all patches of a section.

use ventrise_mesh::{Geometry, Mesh};

use super::patches::Patch;
use super::scene::{FADED, Scene};
use super::sight::{Obstacle, Segment, Sight};
use super::{axisymmetric, planar};
use crate::par;

/// View areas, row-major n × n [m²], symmetric by construction: every pair is computed once, a
/// patch with all images of the other.
pub(super) fn view_areas(mesh: &Mesh, patches: &[Patch], scene: &Scene) -> Vec<f64> {
    match mesh.geometry() {
        Geometry::Planar { depth } => {
            pairs(patches, scene, |sight: &mut Sight, from: &_, to: &_, obstacles: &_| {
                planar::view_area(sight, depth, from, to, obstacles)
            })
        }
        Geometry::Axisymmetric => pairs(patches, scene, axisymmetric::view_area),
    }
}

/// All pairs, by the view area of two segments past obstacles.
fn pairs(
    patches: &[Patch],
    scene: &Scene,
    view: impl Fn(&mut Sight, &Segment, &Segment, &[Obstacle]) -> f64 + Sync + Send,
) -> Vec<f64> {
    let n = patches.len();
    let reaches: Vec<i32> = {
        let mut sight = Sight::new(scene.extent);
        patches.iter().map(|p| reach(&mut sight, p, scene, &view)).collect()
    };
    let mut areas = vec![0.0; n * n];
    par::each_row(&mut areas, n.max(1), |i, row| {
        let mut sight = Sight::new(scene.extent);
        for image in &scene.images {
            let obstacles = scene.obstacles_to(image.tile);
            for (j, to) in patches.iter().enumerate().skip(i) {
                // Seen from either: what is little for a large patch may be much for a small one.
                if image.tile.abs() <= reaches[i].max(reaches[j]) {
                    let to = image.segment(&to.segment);
                    row[j] += view(&mut sight, &patches[i].segment, &to, obstacles);
                }
            }
        }
    });
    for i in 0..n {
        for j in 0..i {
            areas[i * n + j] = areas[j * n + i];
        }
    }
    areas
}

/// How many tiles away a patch sees images: where next to nothing of its view gets through in
/// either direction, they end.
fn reach(
    sight: &mut Sight,
    patch: &Patch,
    scene: &Scene,
    view: &impl Fn(&mut Sight, &Segment, &Segment, &[Obstacle]) -> f64,
) -> i32 {
    let mut reach = 0;
    let mut is_dark = [false; 2];
    // Images come by rising distance.
    for tile in scene.images.iter().map(|i| i.tile) {
        let direction = usize::from(tile > 0);
        if is_dark[direction] && tile != 0 {
            continue;
        }
        reach = tile.abs();
        if let Some(portal) = scene.portal(tile) {
            let through = view(sight, &patch.segment, &portal, scene.obstacles_to(tile));
            is_dark[direction] = through < FADED * patch.area;
        }
    }
    reach
}
