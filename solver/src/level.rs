//! The equations' constant data on one mesh: what is open, areas, conductances, openings, sources.
//!
//! ```text
//!         v(i,j+1)                 u on x-faces: its control volume spans from the centre of
//!       +----^----+                cell i−1 to that of cell i (half as wide at the section's edge)
//! u(i,j)>  p,T    > u(i+1,j)       v on y-faces: from the centre of cell j−1 to that of cell j
//!       +----^----+
//!         v(i,j)
//! ```
//! Faces beside a solid cell are closed: their velocity is zero and no unknown. Shear on a solid
//! face acts at half a cell's distance. Solids, slots and air thus differ in coefficients only.

use ventrise_mesh::{AIR, Geometry, Side};

use crate::conduction::{side_area, side_cell, side_exchange, x_conductance, y_conductance};
use crate::fan::SlotFan;
use crate::following::Following;
use crate::radiant::Radiant;
use crate::{Air, Convection, Problem, SideCondition, Slot, State};

/// A boundary face through which the section breathes.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Opening {
    /// The cell inside.
    pub cell: usize,
    /// The face: index into `u` (left, right) or `v` (bottom, top).
    pub face: usize,
    /// Its place along the side.
    pub place: usize,
    /// +1 where the outward direction is that of the axis, else −1.
    pub outward: f64,
    /// Area [m²].
    pub area: f64,
    /// Loss coefficient K [-].
    pub loss: f64,
    /// Viscous resistance of a vent ½·μ·b [Pa/(m/s)].
    pub drag: f64,
    /// Pressure that drives air in [Pa].
    pub drive: f64,
}

/// Everything constant about the equations on one mesh.
#[derive(Debug)]
pub(crate) struct Level {
    pub nx: usize,
    pub ny: usize,
    pub air: Air,
    /// What else follows the result.
    pub following: Following,
    pub gravity: [f64; 2],
    pub convection: Convection,
    /// Inverse of the largest flow over conductance of a face [-]; beyond that diffusion is added.
    /// Zero on the finest mesh, whose equations are to be exact.
    pub slack: f64,
    pub dx: Vec<f64>,
    pub dy: Vec<f64>,
    /// Area of x-faces per height [m²/m], nx + 1.
    pub x_area: Vec<f64>,
    /// Area of y-faces [m²], nx.
    pub y_area: Vec<f64>,
    /// Cross-section of the u control volumes [m²], nx + 1.
    pub u_area: Vec<f64>,
    /// Height of the v control volumes [m], ny + 1.
    pub v_height: Vec<f64>,
    /// Weight of cell i in the linear value on x-line i, nx + 1 (that of cell i − 1 is the rest).
    pub x_weight: Vec<f64>,
    pub y_weight: Vec<f64>,
    pub fluid: Vec<bool>,
    /// 1 where the face's velocity is unknown, else 0.
    pub u_open: Vec<f64>,
    pub v_open: Vec<f64>,
    /// Viscous conductances μ·A/d [kg/s]: through cells along the velocity, at corners across it,
    /// to no-slip surfaces.
    pub u_along: Vec<f64>,
    pub u_across: Vec<f64>,
    pub u_wall: Vec<f64>,
    pub v_along: Vec<f64>,
    pub v_across: Vec<f64>,
    pub v_wall: Vec<f64>,
    /// Thermal conductances [W/K] on x-faces, y-faces and to the sides (per cell).
    pub x_conductance: Vec<f64>,
    pub y_conductance: Vec<f64>,
    pub side_conductance: Vec<f64>,
    /// What the temperature of the cells beside every side leans to, by side.
    pub edges: [Vec<Edge>; 4],
    /// Heat capacity of the cells [J/K].
    pub heat_capacity: Vec<f64>,
    /// Conductivities of the cells [W/(m·K)], for interpolation across interfaces.
    pub conductivity: Vec<[f32; 2]>,
    pub openings: [Vec<Opening>; 4],
    /// Loss coefficient K of every boundary face by side, zero where it is closed.
    pub loss: [Vec<f64>; 4],
    /// Viscous resistance of the vent in it [Pa/(m/s)], likewise.
    pub drag: [Vec<f64>; 4],
    /// 0 on open sides, where air moves freely along the side; 1 elsewhere. By side.
    pub sticks: [f64; 4],
    /// Given forces [N], mass [kg/s] and heat [W] of this mesh's own problem.
    pub source: State,
    /// Running fans.
    pub fans: Vec<SlotFan>,
    /// Largest speed that a pressure in a slot, or a fan, can drive [m/s]; zero without.
    pub driven_speed: f64,
    /// For every air region without an opening: its cells.
    pub closed_regions: Vec<Vec<u32>>,
    /// Heat put in by blocks and sides [W].
    pub heat_in: f64,
    /// Radiation between surfaces, where it is modelled.
    pub radiant: Option<Radiant>,
}

/// A boundary face seen from its cell's centre.
#[derive(Debug, Clone, Copy, Default)]
pub(crate) struct Edge {
    /// Share of the resistance to what lies outside that the half cell has; 0 where no heat passes.
    pub share: f64,
    /// Rise outside [K].
    pub rise: f64,
}

impl Level {
    /// Before anything is known of the result.
    pub fn new(problem: &Problem, air: &Air, convection: Convection) -> Level {
        Level::with(problem, air, convection, Following::guess(problem))
    }

    pub fn with(
        problem: &Problem,
        air: &Air,
        convection: Convection,
        following: Following,
    ) -> Level {
        let mesh = problem.mesh();
        let d = problem.description();
        let (nx, ny) = (mesh.nx(), mesh.ny());
        let fluid: Vec<bool> = mesh.regions().iter().map(|r| *r == AIR).collect();
        let openings = Side::ALL.map(|side| openings(problem, air, side));
        let by_face = |of: fn(&Opening) -> f64| {
            Side::ALL.map(|side| {
                let mut values = vec![0.0; mesh.slots(side).len()];
                openings[side.index()].iter().for_each(|o| values[o.place] = of(o));
                values
            })
        };
        let (loss, drag) = (by_face(|o| o.loss), by_face(|o| o.drag));
        let (mut u_open, mut v_open) = (vec![0.0; (nx + 1) * ny], vec![0.0; nx * (ny + 1)]);
        for j in 0..ny {
            for i in 1..nx {
                if fluid[i - 1 + j * nx] && fluid[i + j * nx] {
                    u_open[i + j * (nx + 1)] = 1.0;
                }
            }
        }
        for n in nx..nx * ny {
            if fluid[n - nx] && fluid[n] {
                v_open[n] = 1.0;
            }
        }
        for side in Side::ALL {
            let open = if is_vertical(side) { &mut u_open } else { &mut v_open };
            openings[side.index()].iter().for_each(|o| open[o.face] = 1.0);
        }
        let half = |i: usize, right: bool| {
            let (a, b) = if right {
                (mesh.x_centre(i), mesh.x()[i + 1])
            } else {
                (mesh.x()[i], mesh.x_centre(i))
            };
            mesh.y_area_between(a, b)
        };
        let u_area = (0..=nx)
            .map(|i| {
                (if i > 0 { half(i - 1, true) } else { 0.0 })
                    + (if i < nx { half(i, false) } else { 0.0 })
            })
            .collect();
        let v_height = (0..=ny)
            .map(|j| {
                0.5 * ((if j > 0 { mesh.dy(j - 1) } else { 0.0 })
                    + (if j < ny { mesh.dy(j) } else { 0.0 }))
            })
            .collect();
        let mut level = Level {
            nx,
            ny,
            air: *air,
            gravity: d.gravity,
            convection,
            slack: 0.0,
            dx: (0..nx).map(|i| mesh.dx(i)).collect(),
            dy: (0..ny).map(|j| mesh.dy(j)).collect(),
            x_area: (0..=nx).map(|i| mesh.x_area(i)).collect(),
            y_area: (0..nx).map(|i| mesh.y_area(i)).collect(),
            u_area,
            v_height,
            x_weight: weights(mesh.x()),
            y_weight: weights(mesh.y()),
            u_open,
            v_open,
            u_along: vec![0.0; nx * ny],
            u_across: vec![0.0; (nx + 1) * (ny + 1)],
            u_wall: vec![0.0; (nx + 1) * ny],
            v_along: vec![0.0; nx * ny],
            v_across: vec![0.0; (nx + 1) * (ny + 1)],
            v_wall: vec![0.0; nx * (ny + 1)],
            x_conductance: vec![0.0; (nx + 1) * ny],
            y_conductance: vec![0.0; nx * (ny + 1)],
            side_conductance: vec![0.0; nx * ny],
            edges: Default::default(),
            heat_capacity: vec![0.0; nx * ny],
            conductivity: (0..nx * ny)
                .map(|n| crate::conduction::cell_conductivity(problem, air, n).map(|k| k as f32))
                .collect(),
            openings,
            loss,
            drag,
            sticks: Side::ALL.map(|s| match d.sides[s.index()] {
                SideCondition::Open => 0.0,
                _ => 1.0,
            }),
            source: State::rest(mesh),
            fans: Vec::new(),
            driven_speed: 0.0,
            closed_regions: Vec::new(),
            heat_in: 0.0,
            radiant: Radiant::new(problem, air, &following.outer),
            following,
            fluid,
        };
        level.set_viscous(problem);
        level.set_thermal(problem);
        level.fans = running_fans(problem, &level);
        for fan in &level.fans {
            fan.add_shut_off(&mut level.source);
        }
        let given = level.openings.iter().flatten().map(|o| o.drive.abs());
        let given = given.map(|drive| (2.0 * drive / air.density).sqrt());
        let speeds = given.chain(level.fans.iter().map(SlotFan::largest_speed));
        level.driven_speed = speeds.fold(0.0, f64::max);
        level.closed_regions = closed_regions(&level);
        level
    }

    /// The larger of the section's width and height [m].
    pub fn extent(&self) -> f64 {
        self.dx.iter().sum::<f64>().max(self.dy.iter().sum())
    }

    /// Mass flow through x-face (i, j) [kg/s], positive along x.
    #[inline(always)]
    pub fn x_flow(&self, u: &[f64], i: usize, j: usize) -> f64 {
        self.air.density * self.x_area[i] * self.dy[j] * u[i + j * (self.nx + 1)]
    }

    /// Mass flow through y-face (i, j) [kg/s], positive along y.
    #[inline(always)]
    pub fn y_flow(&self, v: &[f64], i: usize, j: usize) -> f64 {
        self.air.density * self.y_area[i] * v[i + j * self.nx]
    }

    fn set_viscous(&mut self, problem: &Problem) {
        let (nx, ny, mu) = (self.nx, self.ny, self.air.viscosity);
        let mesh = problem.mesh();
        // No-slip along a boundary face: wall or slot, with the wall's own speed.
        let wall = |side: Side, n: usize| -> Option<f64> {
            if mesh.slots(side)[n].is_some() {
                return Some(0.0);
            }
            match problem.description().sides[side.index()] {
                SideCondition::Sliding(speed) => Some(speed),
                condition if condition.is_wall() => Some(0.0),
                _ => None,
            }
        };
        for j in 0..ny {
            for i in 0..nx {
                let n = i + j * nx;
                if self.fluid[n] {
                    let area = mesh.x_area_at(mesh.x_centre(i)) * self.dy[j];
                    self.u_along[n] = mu * area / self.dx[i];
                    self.v_along[n] = mu * self.y_area[i] / self.dy[j];
                }
            }
        }
        // Every u control volume has up to two halves (left and right of its face); each half
        // meets air, a solid or the section's edge above and below.
        for j in 0..ny {
            for i in 0..=nx {
                let f = i + j * (nx + 1);
                if self.u_open[f] == 0.0 {
                    continue;
                }
                for column in i.saturating_sub(1)..=i.min(nx - 1) {
                    let (from, to) = if column < i {
                        (mesh.x_centre(column), mesh.x()[i])
                    } else {
                        (mesh.x()[i], mesh.x_centre(column))
                    };
                    let area = mesh.y_area_between(from, to);
                    let at_wall = mu * area / (0.5 * self.dy[j]);
                    for (up, side) in [(false, Side::Bottom), (true, Side::Top)] {
                        let at_edge = if up { j + 1 == ny } else { j == 0 };
                        if at_edge {
                            if let Some(speed) = wall(side, column) {
                                self.u_wall[f] += at_wall;
                                self.source.u[f] += at_wall * speed;
                            }
                            continue;
                        }
                        let beside = if up { j + 1 } else { j - 1 };
                        if self.fluid[column + beside * nx] {
                            let distance = 0.5 * (self.dy[j] + self.dy[beside]);
                            // Both neighbours on a corner write the same sum: count it from below.
                            if up {
                                self.u_across[i + (j + 1) * (nx + 1)] += mu * area / distance;
                            } else if self.u_open[i + beside * (nx + 1)] == 0.0 {
                                self.u_across[i + j * (nx + 1)] += mu * area / distance;
                            }
                        } else {
                            self.u_wall[f] += at_wall;
                        }
                    }
                }
                if mesh.geometry() == Geometry::Axisymmetric && i > 0 {
                    let r = mesh.x()[i];
                    self.u_wall[f] += mu * self.u_area[i] * self.dy[j] / (r * r);
                    if i == nx && mesh.slots(Side::Right)[j].is_some() {
                        // Along a slot u_r/r balances the normal gradient: ∂u/∂r = −u/r.
                        self.u_wall[f] += mu * self.x_area[i] * self.dy[j] / r;
                    }
                }
            }
        }
        for j in 0..=ny {
            for i in 0..nx {
                let f = i + j * nx;
                if self.v_open[f] == 0.0 {
                    continue;
                }
                for row in j.saturating_sub(1)..=j.min(ny - 1) {
                    let half = 0.5 * self.dy[row];
                    for (right, side) in [(false, Side::Left), (true, Side::Right)] {
                        let line = if right { i + 1 } else { i };
                        let area = self.x_area[line] * half;
                        let at_wall = mu * area / (0.5 * self.dx[i]);
                        let at_edge = if right { i + 1 == nx } else { i == 0 };
                        if at_edge {
                            if let Some(speed) = wall(side, row) {
                                self.v_wall[f] += at_wall;
                                self.source.v[f] += at_wall * speed;
                            }
                            continue;
                        }
                        let beside = if right { i + 1 } else { i - 1 };
                        if self.fluid[beside + row * nx] {
                            let distance = 0.5 * (self.dx[i] + self.dx[beside]);
                            if right {
                                self.v_across[i + 1 + j * (nx + 1)] += mu * area / distance;
                            } else if self.v_open[beside + j * nx] == 0.0 {
                                self.v_across[i + j * (nx + 1)] += mu * area / distance;
                            }
                        } else {
                            self.v_wall[f] += at_wall;
                        }
                    }
                }
            }
        }
        for side in Side::ALL {
            let source = if is_vertical(side) { &mut self.source.u } else { &mut self.source.v };
            for o in &self.openings[side.index()] {
                source[o.face] -= o.outward * o.drive * o.area;
            }
        }
        if let Some(s) = &problem.description().sources {
            add(&mut self.source.u, &s.x_force);
            add(&mut self.source.v, &s.y_force);
        }
    }

    fn set_thermal(&mut self, problem: &Problem) {
        let (nx, ny) = (self.nx, self.ny);
        let mesh = problem.mesh();
        let d = problem.description();
        for j in 0..ny {
            for i in 1..nx {
                self.x_conductance[i + j * (nx + 1)] = x_conductance(problem, &self.air, i, j);
            }
        }
        for j in 1..ny {
            for i in 0..nx {
                self.y_conductance[i + j * nx] = y_conductance(problem, &self.air, i, j);
            }
        }
        let followed = self.following.heats.clone();
        let heat = |block: usize| followed.get(block).copied().unwrap_or(d.blocks[block].heat);
        let mut volumes = vec![0.0; d.blocks.len()];
        for j in 0..ny {
            for i in 0..nx {
                let region = mesh.regions()[i + j * nx];
                let capacity = match region {
                    AIR => self.air.density * self.air.specific_heat,
                    block => {
                        let solid = &d.solids[d.blocks[block as usize].solid];
                        solid.density * solid.specific_heat
                    }
                };
                self.heat_capacity[i + j * nx] = capacity * mesh.volume(i, j);
                if region != AIR {
                    volumes[region as usize] += mesh.volume(i, j);
                }
            }
        }
        for j in 0..ny {
            for i in 0..nx {
                let n = i + j * nx;
                let region = mesh.regions()[n];
                if region != AIR {
                    let block = region as usize;
                    self.source.t[n] += heat(block) * mesh.volume(i, j) / volumes[block];
                }
            }
        }
        for side in Side::ALL {
            for n in 0..mesh.slots(side).len() {
                let exchange = side_exchange(problem, &self.air, &self.following.outer, side, n);
                let (i, j) = side_cell(problem, side, n);
                let cell = i + j * nx;
                self.side_conductance[cell] += exchange.conductance;
                self.source.t[cell] += exchange.heat + exchange.conductance * exchange.rise;
                let across = matches!(side, Side::Left | Side::Right);
                let half = 0.5 * if across { self.dx[i] } else { self.dy[j] };
                let k = f64::from(self.conductivity[cell][usize::from(!across)]);
                let full = k * side_area(problem, side, n) / half; // none at an axis
                let share = if full > 0.0 { exchange.conductance / full } else { 0.0 };
                self.edges[side.index()].push(Edge { share, rise: exchange.rise });
            }
        }
        if let Some(s) = &d.sources {
            add(&mut self.source.t, &s.heat);
        }
        self.heat_in = (0..d.blocks.len()).map(|b| heat(b).abs()).sum();
    }
}

pub(crate) fn is_vertical(side: Side) -> bool {
    matches!(side, Side::Left | Side::Right)
}

fn add(to: &mut [f64], from: &[f64]) {
    to.iter_mut().zip(from).for_each(|(t, f)| *t += f);
}

/// Linear weights of the upper cell at each line.
fn weights(lines: &[f64]) -> Vec<f64> {
    let n = lines.len() - 1;
    (0..=n)
        .map(|l| {
            if l == 0 || l == n {
                return 0.5;
            }
            (lines[l] - lines[l - 1]) / (lines[l + 1] - lines[l - 1])
        })
        .collect()
}

fn openings(problem: &Problem, air: &Air, side: Side) -> Vec<Opening> {
    let mesh = problem.mesh();
    let d = problem.description();
    let (nx, ny) = (mesh.nx(), mesh.ny());
    let open_side = d.sides[side.index()] == SideCondition::Open;
    let mut found = Vec::new();
    for (n, slot) in mesh.slots(side).iter().enumerate() {
        let slot = match slot {
            Some(s) => d.slots[*s as usize],
            None if open_side => Slot::with_loss(0.0),
            None => continue,
        };
        let standing = slot.fan.map(|f| &d.fans[f]).filter(|fan| !fan.runs());
        let (i, j) = side_cell(problem, side, n);
        let cell = i + j * nx;
        if mesh.regions()[cell] != AIR {
            continue;
        }
        let (face, outward) = match side {
            Side::Left => (n * (nx + 1), -1.0),
            Side::Right => (nx + n * (nx + 1), 1.0),
            Side::Bottom => (n, -1.0),
            Side::Top => (n + ny * nx, 1.0),
        };
        let place = n;
        found.push(Opening {
            cell,
            face,
            place,
            outward,
            area: side_area(problem, side, n),
            loss: slot.law.loss + standing.map_or(0.0, |fan| fan.stopped_loss),
            drag: 0.5 * air.viscosity * slot.law.friction,
            drive: slot.drive,
        });
    }
    found
}

/// Fans that turn, each over the open faces of its slot.
fn running_fans(problem: &Problem, level: &Level) -> Vec<SlotFan> {
    let d = problem.description();
    let mut fans = Vec::new();
    for (s, slot) in d.slots.iter().enumerate() {
        let Some(fan) = slot.fan.map(|f| &d.fans[f]).filter(|fan| fan.runs()) else { continue };
        for side in Side::ALL {
            let places = problem.mesh().slots(side);
            let of_slot = |o: &&Opening| places[o.place] == Some(s as u32);
            let openings: Vec<&Opening> =
                level.openings[side.index()].iter().filter(of_slot).collect();
            if !openings.is_empty() {
                fans.push(SlotFan::new(fan, level.air.density, is_vertical(side), &openings));
            }
        }
    }
    fans
}

/// Cells of every air region that has no opening.
fn closed_regions(level: &Level) -> Vec<Vec<u32>> {
    let (nx, ny) = (level.nx, level.ny);
    let mut seen: Vec<bool> = level.fluid.iter().map(|f| !f).collect();
    let mut breathes = vec![false; nx * ny];
    level.openings.iter().flatten().for_each(|o| breathes[o.cell] = true);
    let mut closed = Vec::new();
    for first in 0..nx * ny {
        if seen[first] {
            continue;
        }
        let (mut cells, mut open) = (vec![first as u32], false);
        seen[first] = true;
        let mut next = 0;
        while next < cells.len() {
            let n = cells[next] as usize;
            next += 1;
            open |= breathes[n];
            let (i, j) = (n % nx, n / nx);
            let mut visit = |there: bool, m: usize| {
                if there && !seen[m] {
                    seen[m] = true;
                    cells.push(m as u32);
                }
            };
            visit(i > 0, n.wrapping_sub(1));
            visit(i + 1 < nx, n + 1);
            visit(j > 0, n.wrapping_sub(nx));
            visit(j + 1 < ny, n + nx);
        }
        if !open {
            cells.sort_unstable();
            closed.push(cells);
        }
    }
    closed
}
