//! What the surfaces see: the section with its mirror images, and the rectangles in the way.
//!
//! A mirror side continues the section by its image. With mirrors on opposite sides the images
//! repeat without end, in tiles
//!
//! ```text
//!   tile    -1      0      1      2
//!        |  ┘  |  └  |  ┘  |  └  |      0: the section itself, odd ones mirrored
//! ```

use ventrise_mesh::{AIR, Geometry, Mesh, Side};

use super::faces::is_mirror;
use super::sight::{Obstacle, Segment};
use super::surfaces::Surfaces;

/// Between opposite mirrors images are followed as far as this many times the extent along the
/// mirrors, or until the view has faded ([`FADED`]). What is left falls with the square of the
/// distance, the more slowly the smaller a patch at the edge of a free lane is; it is spread by
/// closing the view factors.
const REACH: f64 = 100.0;

/// Most tiles on one side, for sections that are very narrow between their mirrors.
const TILE_LIMIT: f64 = 200.0;

/// The same where mirrors lie opposite along both axes: the images fill the plane.
const TILE_LIMIT_BOTH: f64 = 3.0;

/// Images further out are left away when less than this share of a patch's view gets there.
pub(super) const FADED: f64 = 2e-4;

/// A mirror image: x ↦ offset + sign·x, the same along y.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Image {
    /// Tile along the scene's long axis.
    pub tile: i32,
    x: [f64; 2],
    y: [f64; 2],
}

impl Image {
    /// The image of a segment.
    pub fn segment(&self, of: &Segment) -> Segment {
        let (across, along) = if of.upright { (self.x, self.y) } else { (self.y, self.x) };
        Segment {
            upright: of.upright,
            at: across[0] + across[1] * of.at,
            span: mapped(along, of.span),
            facing: across[1] * of.facing,
        }
    }

    fn obstacle(&self, of: &Obstacle) -> Obstacle {
        Obstacle { x: mapped(self.x, of.x), y: mapped(self.y, of.y) }
    }
}

fn mapped([offset, sign]: [f64; 2], span: [f64; 2]) -> [f64; 2] {
    let [a, b] = span.map(|v| offset + sign * v);
    if sign > 0.0 { [a, b] } else { [b, a] }
}

/// Images and obstacles. The long axis is the one with mirrors at both ends, if any.
#[derive(Debug)]
pub(super) struct Scene {
    /// All images, those of tile 0 first, then outwards in turn.
    pub images: Vec<Image>,
    /// Largest extent of the section [m].
    pub extent: f64,
    long_is_x: bool,
    /// Length of a tile along the long axis [m].
    pitch: f64,
    /// Extent of all tiles along the other axis.
    across: [f64; 2],
    /// Tiles along the long axis, [first, last].
    tiles: [i32; 2],
    /// Obstacles by tile, and where each tile's begin.
    obstacles: Vec<Obstacle>,
    starts: Vec<usize>,
}

impl Scene {
    pub fn new(mesh: &Mesh, surfaces: &Surfaces) -> Self {
        let (width, height) = (mesh.x()[mesh.nx()], mesh.y()[mesh.ny()]);
        let [left, right, bottom, top] = Side::ALL.map(|s| is_mirror(mesh, surfaces, s));
        let endless = [left && right, bottom && top];
        let own = obstacles(mesh, surfaces);
        let limit = if endless == [true, true] { TILE_LIMIT_BOTH } else { TILE_LIMIT };
        // Where a ring section is the body of revolution, the extent seen is the diameter.
        let seen_width = if mesh.geometry() == Geometry::Axisymmetric { 2.0 } else { 1.0 } * width;
        let tiles = |low: bool, high: bool, along: f64, across: f64| {
            let far = (REACH * across / along).ceil().min(limit) as i32;
            if low && high { [-far, far] } else { [-i32::from(low), i32::from(high)] }
        };
        let x_tiles = tiles(left, right, width, height);
        let y_tiles = tiles(bottom, top, height, seen_width);
        let long_is_x = endless[0] || (!endless[1] && (left || right));
        let [long, short] = if long_is_x { [x_tiles, y_tiles] } else { [y_tiles, x_tiles] };
        let [pitch, short_pitch] = if long_is_x { [width, height] } else { [height, width] };
        let (mut by_tile, mut starts) = (Vec::new(), vec![0]);
        let mut images = Vec::new();
        for tile in long[0]..=long[1] {
            for other in short[0]..=short[1] {
                let (along, across) = (placed(tile, pitch), placed(other, short_pitch));
                let [x, y] = if long_is_x { [along, across] } else { [across, along] };
                let image = Image { tile, x, y };
                images.push(image);
                by_tile.extend(own.iter().map(|o| image.obstacle(o)));
            }
            starts.push(by_tile.len());
        }
        images.sort_by_key(|i| (i.tile.abs(), i.tile));
        let across = short.map(f64::from);
        Scene {
            images,
            extent: width.max(height),
            long_is_x,
            pitch,
            across: [across[0] * short_pitch, (across[1] + 1.0) * short_pitch],
            tiles: long,
            obstacles: by_tile,
            starts,
        }
    }

    /// Share of a patch's view that may be left out. Without endless images, a tenth is no matter
    /// of round-off and quadrature any more; with them, what lies beyond the last image can be as
    /// much as a half where the view along the mirrors is free.
    pub fn left_out(&self) -> f64 {
        let is_endless = self.tiles[0] < 0 && self.tiles[1] > 0;
        if is_endless { 0.5 } else { 0.1 }
    }

    /// Obstacles that can lie between tile 0 and another.
    pub fn obstacles_to(&self, tile: i32) -> &[Obstacle] {
        let at = |t: i32| self.starts[(t - self.tiles[0]) as usize];
        &self.obstacles[at(tile.min(0))..at(tile.max(0) + 1)]
    }

    /// The line through which light goes on beyond a tile, seen from tile 0; `None` beyond the
    /// last one and where there is no mirror opposite a mirror.
    pub fn portal(&self, tile: i32) -> Option<Segment> {
        let is_endless = self.tiles[0] < 0 && self.tiles[1] > 0;
        let is_last = tile == self.tiles[0] || tile == self.tiles[1];
        let (at, facing) =
            if tile < 0 { (f64::from(tile), 1.0) } else { (f64::from(tile) + 1.0, -1.0) };
        let span = self.across;
        (is_endless && !is_last && tile != 0).then_some(Segment {
            upright: self.long_is_x,
            at: at * self.pitch,
            span,
            facing,
        })
    }
}

/// Offset and sign of a tile.
fn placed(tile: i32, pitch: f64) -> [f64; 2] {
    match tile.rem_euclid(2) {
        0 => [f64::from(tile) * pitch, 1.0],
        _ => [f64::from(tile + 1) * pitch, -1.0],
    }
}

/// Rectangles of solid; and slots in mirrors, which hide the image behind them.
fn obstacles(mesh: &Mesh, surfaces: &Surfaces) -> Vec<Obstacle> {
    let nx = mesh.nx();
    // First and last cell of each block along x and y; blocks are rectangles.
    let mut boxes: Vec<Option<[usize; 4]>> = Vec::new();
    for (n, region) in mesh.regions().iter().enumerate().filter(|(_, r)| **r != AIR) {
        let (b, i, j) = (*region as usize, n % nx, n / nx);
        boxes.resize(boxes.len().max(b + 1), None);
        let [i0, i1, j0, j1] = boxes[b].unwrap_or([i, i, j, j]);
        boxes[b] = Some([i0.min(i), i1.max(i), j0.min(j), j1.max(j)]);
    }
    let solid = boxes.iter().flatten().map(|[i0, i1, j0, j1]| Obstacle {
        x: [mesh.x()[*i0], mesh.x()[i1 + 1]],
        y: [mesh.y()[*j0], mesh.y()[j1 + 1]],
    });
    let mut obstacles = joined(solid.collect());
    for side in Side::ALL.into_iter().filter(|s| is_mirror(mesh, surfaces, *s)) {
        for (n, slot) in mesh.slots(side).iter().enumerate() {
            if slot.is_none() {
                continue;
            }
            let (x, y) = (mesh.x(), mesh.y());
            obstacles.push(match side {
                Side::Left => Obstacle { x: [x[0]; 2], y: [y[n], y[n + 1]] },
                Side::Right => Obstacle { x: [x[nx]; 2], y: [y[n], y[n + 1]] },
                Side::Bottom => Obstacle { x: [x[n], x[n + 1]], y: [y[0]; 2] },
                Side::Top => Obstacle { x: [x[n], x[n + 1]], y: [y[mesh.ny()]; 2] },
            });
        }
    }
    obstacles
}

/// Rectangles that share a whole edge become one.
fn joined(mut boxes: Vec<Obstacle>) -> Vec<Obstacle> {
    let mut k = 0;
    while k < boxes.len() {
        let a = boxes[k];
        let touch = |p: [f64; 2], q: [f64; 2]| p[0] == q[1] || p[1] == q[0];
        let fits =
            |b: &Obstacle| (a.x == b.x && touch(a.y, b.y)) || (a.y == b.y && touch(a.x, b.x));
        match boxes.iter().position(fits) {
            Some(other) => {
                let b = boxes[other];
                boxes[k] = Obstacle {
                    x: [a.x[0].min(b.x[0]), a.x[1].max(b.x[1])],
                    y: [a.y[0].min(b.y[0]), a.y[1].max(b.y[1])],
                };
                boxes.swap_remove(other);
                k = 0;
            }
            None => k += 1,
        }
    }
    boxes
}
