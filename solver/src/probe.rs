//! Values at points and along lines.
//!
//! A cell's quadrant is spanned by the cell's centre, the middles of two of its faces and the
//! corner between them; inside it every field is bilinear. Face temperatures follow from the
//! conductances of the two half cells, so that temperature is continuous and kinks where the
//! conductivity changes. Velocity components are known on faces; they vanish on solid surfaces
//! and no-slip sides. Linear fields come out exactly.

use ventrise_mesh::{AIR, Side};

use crate::balance::side_face_heat;
use crate::conduction::{cell_conductivity, side_area};
use crate::outer::Outer;
use crate::{Air, Problem, SideCondition, State};

/// The fields at one place.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sample {
    /// Where [m].
    pub at: [f64; 2],
    /// Temperature rise above ambient [K].
    pub rise: f64,
    /// Velocity along x and y [m/s]; zero in blocks.
    pub velocity: [f64; 2],
    /// Pressure above the ambient column [Pa]; `None` in blocks.
    pub pressure: Option<f64>,
    /// Block index or [`AIR`].
    pub region: u32,
}

impl Sample {
    /// Speed [m/s].
    pub fn speed(&self) -> f64 {
        self.velocity[0].hypot(self.velocity[1])
    }
}

/// Reads values off a solution.
#[derive(Debug, Clone)]
pub struct Sampler<'a> {
    problem: &'a Problem,
    air: &'a Air,
    state: &'a State,
    outer: Outer,
}

/// A place within its cell: offsets from the centre in half cells, −1 to 1.
struct Place {
    cell: [usize; 2],
    offset: [f64; 2],
}

impl<'a> Sampler<'a> {
    /// A sampler of a solution's fields.
    pub fn new(problem: &'a Problem, air: &'a Air, state: &'a State) -> Self {
        let outer = Outer::at(problem, air, &state.t);
        Sampler { problem, air, state, outer }
    }

    /// The fields at a place [m]; `None` outside the section.
    pub fn at(&self, at: [f64; 2]) -> Option<Sample> {
        let mesh = self.problem.mesh();
        let place = self.locate(at)?;
        let [i, j] = place.cell;
        let region = mesh.regions()[mesh.cell(i, j)];
        Some(Sample {
            at,
            rise: self.rise(&place),
            velocity: if region == AIR { self.velocity(&place) } else { [0.0; 2] },
            pressure: (region == AIR).then(|| self.pressure(&place)),
            region,
        })
    }

    /// The fields at `count` ≥ 2 equally spaced places of a line, ends included; places outside
    /// the section are left out.
    pub fn line(&self, from: [f64; 2], to: [f64; 2], count: usize) -> Vec<Sample> {
        let steps = count.max(2) - 1;
        let place = |n: usize| {
            let s = n as f64 / steps as f64;
            [0, 1].map(|a| if n == steps { to[a] } else { from[a] + s * (to[a] - from[a]) })
        };
        (0..=steps).filter_map(|n| self.at(place(n))).collect()
    }

    fn locate(&self, at: [f64; 2]) -> Option<Place> {
        let mesh = self.problem.mesh();
        let find = |lines: &[f64], at: f64| {
            let last = lines.len() - 1;
            let slack = 1e-9 * (lines[last] - lines[0]);
            if !(lines[0] - slack..=lines[last] + slack).contains(&at) {
                return None;
            }
            let cell = lines.partition_point(|line| *line <= at).clamp(1, last) - 1;
            let half = 0.5 * (lines[cell + 1] - lines[cell]);
            Some((cell, ((at - lines[cell]) / half - 1.0).clamp(-1.0, 1.0)))
        };
        let (i, x) = find(mesh.x(), at[0])?;
        let (j, y) = find(mesh.y(), at[1])?;
        Some(Place { cell: [i, j], offset: [x, y] })
    }

    fn rise(&self, place: &Place) -> f64 {
        let [i, j] = place.cell;
        let [right, above] = place.offset.map(|o| usize::from(o >= 0.0));
        let corner = self.corner_rise(i + right, j + above);
        let centre = self.state.t[self.problem.mesh().cell(i, j)];
        let faces = [self.x_face_rise(i + right, j), self.y_face_rise(i, j + above)];
        quadrant(place.offset, centre, faces, corner)
    }

    /// Conductance of half a cell per area, k/d [W/(m²·K)], along axis 0 (x) or 1 (y).
    fn half_conductance(&self, i: usize, j: usize, axis: usize) -> f64 {
        let mesh = self.problem.mesh();
        let k = cell_conductivity(self.problem, self.air, mesh.cell(i, j))[axis];
        k / (0.5 * if axis == 0 { mesh.dx(i) } else { mesh.dy(j) })
    }

    fn x_face_rise(&self, line: usize, j: usize) -> f64 {
        let mesh = self.problem.mesh();
        if line == 0 {
            return self.side_rise(Side::Left, j, (0, j), 0);
        }
        if line == mesh.nx() {
            return self.side_rise(Side::Right, j, (line - 1, j), 0);
        }
        let pair = [line - 1, line];
        let rises = pair.map(|i| self.state.t[mesh.cell(i, j)]);
        weighted(rises, pair.map(|i| self.half_conductance(i, j, 0)))
    }

    fn y_face_rise(&self, i: usize, line: usize) -> f64 {
        let mesh = self.problem.mesh();
        if line == 0 {
            return self.side_rise(Side::Bottom, i, (i, 0), 1);
        }
        if line == mesh.ny() {
            return self.side_rise(Side::Top, i, (i, line - 1), 1);
        }
        let pair = [line - 1, line];
        let rises = pair.map(|j| self.state.t[mesh.cell(i, j)]);
        weighted(rises, pair.map(|j| self.half_conductance(i, j, 1)))
    }

    /// On the section's edge: the cell's rise less the drop of the heat that leaves through it.
    fn side_rise(&self, side: Side, n: usize, (i, j): (usize, usize), axis: usize) -> f64 {
        let rise = self.state.t[self.problem.mesh().cell(i, j)];
        let area = side_area(self.problem, side, n);
        let out = side_face_heat(self.problem, self.air, &self.outer, self.state, side, n);
        if area > 0.0 { rise - out / area / self.half_conductance(i, j, axis) } else { rise }
    }

    /// Where mesh lines cross: the mean of what the faces along x and along y say.
    fn corner_rise(&self, line_x: usize, line_y: usize) -> f64 {
        let mesh = self.problem.mesh();
        let on_x_edge = line_x == 0 || line_x == mesh.nx();
        let on_y_edge = line_y == 0 || line_y == mesh.ny();
        let (i, j) = (line_x.min(mesh.nx() - 1), line_y.min(mesh.ny() - 1));
        if on_x_edge && on_y_edge {
            let centre = self.state.t[mesh.cell(i, j)];
            return self.x_face_rise(line_x, j) + self.y_face_rise(i, line_y) - centre;
        }
        let columns = if on_x_edge { [i, i] } else { [line_x - 1, line_x] };
        let rows = if on_y_edge { [j, j] } else { [line_y - 1, line_y] };
        let across = |axis: usize, a: (usize, usize), b: (usize, usize)| {
            self.half_conductance(a.0, a.1, axis) + self.half_conductance(b.0, b.1, axis)
        };
        let along_y = || {
            let faces = rows.map(|j| self.x_face_rise(line_x, j));
            weighted(faces, rows.map(|j| across(1, (columns[0], j), (columns[1], j))))
        };
        let along_x = || {
            let faces = columns.map(|i| self.y_face_rise(i, line_y));
            weighted(faces, columns.map(|i| across(0, (i, rows[0]), (i, rows[1]))))
        };
        match (on_x_edge, on_y_edge) {
            (true, _) => along_y(),
            (_, true) => along_x(),
            _ => 0.5 * (along_x() + along_y()),
        }
    }

    fn velocity(&self, place: &Place) -> [f64; 2] {
        let mesh = self.problem.mesh();
        let (nx, [i, j], [x, y]) = (mesh.nx(), place.cell, place.offset);
        let u = [i, i + 1].map(|line| {
            let face = self.state.u[line + j * (nx + 1)];
            let corner = self.corner_u(line, j + usize::from(y >= 0.0));
            face + y.abs() * (corner - face)
        });
        let v = [j, j + 1].map(|line| {
            let face = self.state.v[i + line * nx];
            let corner = self.corner_v(i + usize::from(x >= 0.0), line);
            face + x.abs() * (corner - face)
        });
        let mix =
            |ends: [f64; 2], offset: f64| ends[0] + 0.5 * (1.0 + offset) * (ends[1] - ends[0]);
        [mix(u, x), mix(v, y)]
    }

    /// Cells that meet where mesh lines cross (two on an edge of the section, one in its corner).
    fn cells_around(&self, line_x: usize, line_y: usize) -> impl Iterator<Item = (usize, usize)> {
        let mesh = self.problem.mesh();
        let columns = line_x.saturating_sub(1)..(line_x + 1).min(mesh.nx());
        let rows = line_y.saturating_sub(1)..(line_y + 1).min(mesh.ny());
        rows.flat_map(move |j| columns.clone().map(move |i| (i, j)))
    }

    fn touches_block(&self, line_x: usize, line_y: usize) -> bool {
        let mesh = self.problem.mesh();
        self.cells_around(line_x, line_y).any(|(i, j)| mesh.regions()[mesh.cell(i, j)] != AIR)
    }

    /// Speed along a side at the end of one of its faces; `None` where the side does not say.
    fn speed_along(&self, side: Side, line: usize) -> Option<f64> {
        let slots = self.problem.mesh().slots(side);
        let beside = line.saturating_sub(1)..(line + 1).min(slots.len());
        if slots[beside].iter().any(Option::is_some) {
            return Some(0.0);
        }
        match self.problem.description().sides[side.index()] {
            SideCondition::Sliding(speed) if line > 0 && line < slots.len() => Some(speed),
            condition if condition.is_wall() => Some(0.0),
            _ => None,
        }
    }

    fn corner_u(&self, line_x: usize, line_y: usize) -> f64 {
        let mesh = self.problem.mesh();
        let u = |j: usize| self.state.u[line_x + j * (mesh.nx() + 1)];
        if self.touches_block(line_x, line_y) {
            return 0.0;
        }
        match line_y {
            0 => self.speed_along(Side::Bottom, line_x).unwrap_or_else(|| u(0)),
            line if line == mesh.ny() => {
                self.speed_along(Side::Top, line_x).unwrap_or_else(|| u(line - 1))
            }
            line => weighted([u(line - 1), u(line)], [line - 1, line].map(|j| 1.0 / mesh.dy(j))),
        }
    }

    fn corner_v(&self, line_x: usize, line_y: usize) -> f64 {
        let mesh = self.problem.mesh();
        let v = |i: usize| self.state.v[i + line_y * mesh.nx()];
        if self.touches_block(line_x, line_y) {
            return 0.0;
        }
        match line_x {
            0 => self.speed_along(Side::Left, line_y).unwrap_or_else(|| v(0)),
            line if line == mesh.nx() => {
                self.speed_along(Side::Right, line_y).unwrap_or_else(|| v(line - 1))
            }
            line => weighted([v(line - 1), v(line)], [line - 1, line].map(|i| 1.0 / mesh.dx(i))),
        }
    }

    fn pressure(&self, place: &Place) -> f64 {
        let [i, j] = place.cell;
        let [right, above] = place.offset.map(|o| usize::from(o >= 0.0));
        let centre = self.state.p[self.problem.mesh().cell(i, j)];
        let x_face = self.x_face_pressure(i + right, j).unwrap_or(centre);
        let y_face = self.y_face_pressure(i, j + above).unwrap_or(centre);
        let corner = self.corner_pressure(i + right, j + above).unwrap_or(centre);
        quadrant(place.offset, centre, [x_face, y_face], corner)
    }

    /// Pressure between two cells of air; `None` at blocks and the section's edge.
    fn x_face_pressure(&self, line: usize, j: usize) -> Option<f64> {
        let mesh = self.problem.mesh();
        if line == 0 || line == mesh.nx() {
            return None;
        }
        let pair = [line - 1, line];
        let cells = pair.map(|i| mesh.cell(i, j));
        cells
            .iter()
            .all(|c| mesh.regions()[*c] == AIR)
            .then(|| weighted(cells.map(|c| self.state.p[c]), pair.map(|i| 1.0 / mesh.dx(i))))
    }

    fn y_face_pressure(&self, i: usize, line: usize) -> Option<f64> {
        let mesh = self.problem.mesh();
        if line == 0 || line == mesh.ny() {
            return None;
        }
        let pair = [line - 1, line];
        let cells = pair.map(|j| mesh.cell(i, j));
        cells
            .iter()
            .all(|c| mesh.regions()[*c] == AIR)
            .then(|| weighted(cells.map(|c| self.state.p[c]), pair.map(|j| 1.0 / mesh.dy(j))))
    }

    fn corner_pressure(&self, line_x: usize, line_y: usize) -> Option<f64> {
        let mesh = self.problem.mesh();
        let rows = line_y.saturating_sub(1)..(line_y + 1).min(mesh.ny());
        let columns = line_x.saturating_sub(1)..(line_x + 1).min(mesh.nx());
        let x_faces: Vec<f64> =
            rows.clone().filter_map(|j| self.x_face_pressure(line_x, j)).collect();
        if let [below, above] = x_faces[..]
            && columns.clone().all(|i| self.y_face_pressure(i, line_y).is_some())
        {
            let weights = [line_y - 1, line_y].map(|j| 1.0 / mesh.dy(j));
            return Some(weighted([below, above], weights));
        }
        let y_faces = columns.filter_map(|i| self.y_face_pressure(i, line_y));
        let (sum, count) =
            x_faces.iter().copied().chain(y_faces).fold((0.0, 0), |(s, n), p| (s + p, n + 1));
        (count > 0).then(|| sum / f64::from(count))
    }
}

/// Mean of two values with weights.
fn weighted(values: [f64; 2], weights: [f64; 2]) -> f64 {
    (weights[0] * values[0] + weights[1] * values[1]) / (weights[0] + weights[1])
}

/// Bilinear inside a quadrant; `offset` in half cells from the centre, its sign is the quadrant's.
fn quadrant(offset: [f64; 2], centre: f64, faces: [f64; 2], corner: f64) -> f64 {
    let [x, y] = offset.map(f64::abs);
    (1.0 - x) * ((1.0 - y) * centre + y * faces[1]) + x * ((1.0 - y) * faces[0] + y * corner)
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;
    use crate::by_hand::{air, bare, layout, wall};
    use crate::{Block, Description, Solid};
    use ventrise_mesh::{Geometry, Mesh, Rectangle};

    /// 4 × 4 uneven cells of air in open sides.
    fn open_box() -> (Problem, State) {
        let lines = vec![0.0, 0.1, 0.25, 0.3, 0.5];
        let mesh = Mesh::from_lines(
            &layout(Geometry::Planar { depth: 1.0 }, 0.5, 0.5),
            lines.clone(),
            lines,
        )
        .unwrap();
        let state = State::rest(&mesh);
        let mut d = bare(mesh);
        d.sides = [SideCondition::Open; 4];
        (Problem::new(d).unwrap(), state)
    }

    #[test]
    fn linear_fields_come_out_exactly_between_the_outer_centres() {
        let (problem, mut state) = open_box();
        let mesh = problem.mesh().clone();
        let linear = |a: f64, x: f64, y: f64| a + 3.0 * x - 2.0 * y;
        for j in 0..4 {
            for i in 0..4 {
                state.t[mesh.cell(i, j)] = linear(5.0, mesh.x_centre(i), mesh.y_centre(j));
                state.p[mesh.cell(i, j)] = linear(-1.0, mesh.x_centre(i), mesh.y_centre(j));
            }
            for i in 0..5 {
                state.u[i + 5 * j] = linear(0.3, mesh.x()[i], mesh.y_centre(j));
                state.v[j + 4 * i] = linear(0.7, mesh.x_centre(j), mesh.y()[i]);
            }
        }
        let sampler_air = air();
        let sampler = Sampler::new(&problem, &sampler_air, &state);
        for (x, y) in [(0.06, 0.07), (0.1, 0.25), (0.2, 0.11), (0.27, 0.38), (0.39, 0.3)] {
            let s = sampler.at([x, y]).unwrap();
            assert!((s.rise - linear(5.0, x, y)).abs() < 1e-13, "{s:?}");
            assert!((s.pressure.unwrap() - linear(-1.0, x, y)).abs() < 1e-13, "{s:?}");
            assert!((s.velocity[0] - linear(0.3, x, y)).abs() < 1e-13, "{s:?}");
            assert!((s.velocity[1] - linear(0.7, x, y)).abs() < 1e-13, "{s:?}");
        }
        assert_eq!(sampler.at([0.6, 0.1]), None);
        assert_eq!(sampler.at([0.1, -0.1]), None);
    }

    #[test]
    fn temperature_kinks_at_an_interface_and_meets_the_sides() {
        // A block (k = 1) from 0 to 0.2 m beside air (k = 0.025) from 0.2 to 0.4 m; 0 K at the
        // left, 41 K at the right: in series 0.2/1 + 0.2/0.025 = 8.2 K·m²/W, so 5 W/m², 1 K over
        // the block and 40 K over the air.
        let mut shape = layout(Geometry::Planar { depth: 1.0 }, 0.4, 0.1);
        shape.blocks = vec![Rectangle { x: [0.0, 0.2], y: [0.0, 0.1] }];
        let lines = vec![0.0, 0.05, 0.2, 0.3, 0.4];
        let mesh = Mesh::from_lines(&shape, lines, vec![0.0, 0.04, 0.1]).unwrap();
        let exact = |x: f64| if x < 0.2 { 5.0 * x } else { 1.0 + 200.0 * (x - 0.2) };
        let mut state = State::rest(&mesh);
        for n in 0..8 {
            state.t[n] = exact(mesh.x_centre(n % 4));
        }
        let solid = Solid { conductivity: [1.0; 2], density: 1.0, specific_heat: 1.0 };
        let sides = [
            SideCondition::Temperature(300.0),
            SideCondition::Temperature(341.0),
            SideCondition::Adiabatic,
            SideCondition::Adiabatic,
        ];
        let blocks = vec![Block { solid: 0, heat: 0.0 }];
        let problem =
            Problem::new(Description { solids: vec![solid], blocks, sides, ..bare(mesh) }).unwrap();
        let sampler_air = air();
        let sampler = Sampler::new(&problem, &sampler_air, &state);
        for sample in sampler.line([0.0, 0.0], [0.4, 0.1], 41) {
            let expected = exact(sample.at[0]);
            assert!((sample.rise - expected).abs() < 1e-12, "{sample:?} {expected}");
        }
    }

    #[test]
    fn heat_through_a_film_shows_in_the_surface_temperature() {
        // The wall's right face: its heat over film coefficient × area, 5 · 0.1 W/K.
        let (problem, state, [_, right]) = wall();
        let sampler_air = air();
        let sampler = Sampler::new(&problem, &sampler_air, &state);
        let surface = sampler.at([0.4, 0.05]).unwrap();
        assert!((surface.rise - right / 0.5).abs() < 1e-12, "{surface:?}");
        assert_eq!((surface.region, surface.pressure, surface.speed()), (0, None, 0.0));
    }

    #[test]
    fn air_sticks_to_walls_and_blocks_and_slips_along_a_symmetry_side() {
        let mut shape = layout(Geometry::Planar { depth: 1.0 }, 0.3, 0.3);
        shape.blocks = vec![Rectangle { x: [0.2, 0.3], y: [0.0, 0.3] }];
        let lines = vec![0.0, 0.1, 0.2, 0.3];
        let mesh = Mesh::from_lines(&shape, lines.clone(), lines).unwrap();
        let mut state = State::rest(&mesh);
        for row in state.v.chunks_exact_mut(3) {
            row.copy_from_slice(&[0.4, 0.2, 0.0]);
        }
        let solid = Solid { conductivity: [1.0; 2], density: 1.0, specific_heat: 1.0 };
        let mut d = Description {
            solids: vec![solid],
            blocks: vec![Block { solid: 0, heat: 0.0 }],
            ..bare(mesh)
        };
        d.sides[0] = SideCondition::Symmetry;
        d.sides[3] = SideCondition::Temperature(300.0);
        let at = |d: &Description, x: f64| {
            let problem = Problem::new(d.clone()).unwrap();
            Sampler::new(&problem, &air(), &state).at([x, 0.15]).unwrap().velocity[1]
        };
        for (x, v) in [(0.0, 0.4), (0.05, 0.4), (0.1, 0.3), (0.15, 0.2), (0.175, 0.1), (0.2, 0.0)] {
            assert!((at(&d, x) - v).abs() < 1e-14, "{x}");
        }
        d.sides[0] = SideCondition::Adiabatic;
        assert!(at(&d, 0.0).abs() < 1e-14 && (at(&d, 0.025) - 0.2).abs() < 1e-14);
        d.sides[0] = SideCondition::Sliding(-1.0);
        assert!((at(&d, 0.0) + 1.0).abs() < 1e-14);
    }
}
