//! The problem: a mesh with materials, heat and boundaries. Checked once, then fixed.

use ventrise_mesh::{AIR, Coarsening, Geometry, Mesh, Side};

use crate::radiant::RadiantMap;
use crate::{
    AirModel, Fan, HeatLaw, LossLaw, OuterFilm, PATCH_COUNT, ProblemError, Radiation,
    SideCondition, Slot, Surfaces,
};

/// A solid material.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Solid {
    /// Conductivity along x and y [W/(m·K)], > 0.
    pub conductivity: [f64; 2],
    /// Density [kg/m³].
    pub density: f64,
    /// Specific heat [J/(kg·K)].
    pub specific_heat: f64,
}

/// What a block of the mesh is made of and the heat released in it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Block {
    /// Index into [`Description::solids`].
    pub solid: usize,
    /// Heat in the whole block [W], spread evenly over its volume.
    pub heat: f64,
}

/// A joint: contact resistance wherever two blocks touch.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Joint {
    /// The two blocks, indices into [`Description::blocks`].
    pub blocks: [usize; 2],
    /// Resistance of a unit of area [K·m²/W], ≥ 0.
    pub resistance: f64,
}

/// Extra sources of manufactured solutions: integrals over each control volume.
#[derive(Debug, Clone, PartialEq)]
pub struct Sources {
    /// Force along x on each x-face's volume [N], (nx + 1)·ny.
    pub x_force: Vec<f64>,
    /// Force along y on each y-face's volume [N], nx·(ny + 1).
    pub y_force: Vec<f64>,
    /// Heat in each cell [W], nx·ny.
    pub heat: Vec<f64>,
}

impl Sources {
    /// The same on a coarser mesh: cells add, a face between two coarse lines is shared by
    /// distance.
    fn coarsened(&self, fine: &Mesh, coarsening: &Coarsening) -> Sources {
        let coarse = &coarsening.mesh;
        let (nx, ny, cx, cy) = (fine.nx(), fine.ny(), coarse.nx(), coarse.ny());
        let (x_parent, y_parent) = (&coarsening.x_parent, &coarsening.y_parent);
        let x_share = shares(fine.x(), coarse.x());
        let y_share = shares(fine.y(), coarse.y());
        let mut sources = Sources {
            x_force: vec![0.0; (cx + 1) * cy],
            y_force: vec![0.0; cx * (cy + 1)],
            heat: vec![0.0; cx * cy],
        };
        for j in 0..ny {
            for i in 0..nx {
                sources.heat[x_parent[i] + y_parent[j] * cx] += self.heat[i + j * nx];
            }
            for (i, (line, share)) in x_share.iter().enumerate() {
                let (force, to) = (self.x_force[i + j * (nx + 1)], line + y_parent[j] * (cx + 1));
                sources.x_force[to] += (1.0 - share) * force;
                if *share > 0.0 {
                    sources.x_force[to + 1] += share * force;
                }
            }
        }
        for (j, (line, share)) in y_share.iter().enumerate() {
            for (i, parent) in x_parent.iter().enumerate() {
                let (force, to) = (self.y_force[i + j * nx], parent + line * cx);
                sources.y_force[to] += (1.0 - share) * force;
                if *share > 0.0 {
                    sources.y_force[to + cx] += share * force;
                }
            }
        }
        sources
    }
}

/// For every fine line the coarse line at or before it and how far it lies towards the next.
fn shares(fine: &[f64], coarse: &[f64]) -> Vec<(usize, f64)> {
    let place = |x: &f64| {
        let line = coarse.partition_point(|c| c <= x) - 1;
        match coarse.get(line + 1) {
            Some(next) => (line, (x - coarse[line]) / (next - coarse[line])),
            None => (line, 0.0),
        }
    };
    fine.iter().map(place).collect()
}

/// All that a problem consists of.
#[derive(Debug, Clone)]
pub struct Description {
    /// The mesh.
    pub mesh: Mesh,
    /// The air.
    pub air: AirModel,
    /// Ambient temperature [K]; temperatures are solved as rises above it.
    pub ambient: f64,
    /// Acceleration of gravity along x and y [m/s²], usually [0, −9.80665].
    pub gravity: [f64; 2],
    /// Materials.
    pub solids: Vec<Solid>,
    /// One per block of the mesh, in its order.
    pub blocks: Vec<Block>,
    /// One per slot of the mesh, in its order.
    pub slots: Vec<Slot>,
    /// Fans; each stands in one slot.
    pub fans: Vec<Fan>,
    /// Conditions by [`Side::index`].
    pub sides: [SideCondition; 4],
    /// Groups of blocks whose temperatures are watched.
    pub parts: Vec<Vec<usize>>,
    /// Joints between touching blocks.
    pub joints: Vec<Joint>,
    /// Heat that follows its block's temperature; a block has one law at most.
    pub heat_laws: Vec<HeatLaw>,
    /// Extra sources, for manufactured solutions.
    pub sources: Option<Sources>,
    /// How the surfaces radiate; nothing: radiation is not modelled.
    pub radiation: Option<Surfaces>,
}

/// A checked description.
#[derive(Debug, Clone)]
pub struct Problem {
    description: Description,
    radiant: Option<RadiantMap>,
}

impl Problem {
    /// Checks a description.
    ///
    /// # Errors
    /// Numbers out of range, indices that point nowhere, heat without a way out, emissivities that
    /// are missing.
    pub fn new(mut description: Description) -> Result<Self, ProblemError> {
        if description.mesh.geometry() == Geometry::Axisymmetric {
            description.sides[Side::Left.index()] = SideCondition::Symmetry;
        }
        check(&description)?;
        let radiant = match &description.radiation {
            Some(surfaces) => {
                Some(RadiantMap::new(Radiation::new(&description.mesh, surfaces, PATCH_COUNT)?))
            }
            None => None,
        };
        Ok(Problem { description, radiant })
    }

    /// The mesh.
    pub fn mesh(&self) -> &Mesh {
        &self.description.mesh
    }

    /// The same problem on another mesh of the same layout; extra sources belong to one mesh only
    /// and are dropped.
    pub(crate) fn coarsened(&self, coarsening: &Coarsening) -> Problem {
        let sources = self.description.sources.as_ref();
        let sources = sources.map(|s| s.coarsened(self.mesh(), coarsening));
        let mesh = coarsening.mesh.clone();
        let radiant = self.radiant.as_ref().map(|r| r.coarsened(self.mesh(), coarsening));
        let description = Description { mesh, sources, ..self.description.clone() };
        Problem { description, radiant }
    }

    /// Radiation between its surfaces, where it is modelled: view factors and exchange areas.
    pub fn radiation(&self) -> Option<&Radiation> {
        self.radiant.as_ref().map(RadiantMap::radiation)
    }

    pub(crate) fn radiant(&self) -> Option<&RadiantMap> {
        self.radiant.as_ref()
    }

    /// Everything else, as checked.
    pub fn description(&self) -> &Description {
        &self.description
    }
}

fn check(d: &Description) -> Result<(), ProblemError> {
    let number = |what, value: f64, good: bool, bound| {
        if good && value.is_finite() {
            Ok(())
        } else {
            Err(ProblemError::Number { what, value, bound })
        }
    };
    number("ambient temperature", d.ambient, d.ambient > 0.0, "above absolute zero")?;
    if let AirModel::Given(air) = d.air {
        number("air density", air.density, air.density > 0.0, "positive")?;
        number("air viscosity", air.viscosity, air.viscosity > 0.0, "positive")?;
        number("air conductivity", air.conductivity, air.conductivity > 0.0, "positive")?;
        number("air specific heat", air.specific_heat, air.specific_heat > 0.0, "positive")?;
        number("air expansion", air.expansion, air.expansion >= 0.0, "zero or more")?;
    }
    for solid in &d.solids {
        for k in solid.conductivity {
            number("conductivity", k, k > 0.0, "positive")?;
        }
        number("density", solid.density, solid.density > 0.0, "positive")?;
        number("specific heat", solid.specific_heat, solid.specific_heat > 0.0, "positive")?;
    }
    for block in &d.blocks {
        let count = d.solids.len();
        if block.solid >= count {
            return Err(ProblemError::Index { what: "material", index: block.solid, count });
        }
        number("heat", block.heat, true, "finite")?;
    }
    for law in &d.heat_laws {
        let count = d.blocks.len();
        if law.block >= count {
            return Err(ProblemError::Index { what: "block", index: law.block, count });
        }
        let points = law.points.len();
        number("points of a heat law", points as f64, points >= 2, "two or more")?;
        for [t, q] in &law.points {
            number("temperature", *t, *t > 0.0, "positive")?;
            number("heat", *q, *q >= 0.0, "zero or more")?;
        }
        for pair in law.points.windows(2) {
            number("temperature", pair[1][0], pair[1][0] > pair[0][0], "rising")?;
        }
    }
    for joint in &d.joints {
        let r = joint.resistance;
        number("joint resistance", r, r >= 0.0, "zero or more")?;
        let count = d.blocks.len();
        if let Some(index) = joint.blocks.into_iter().find(|b| *b >= count) {
            return Err(ProblemError::Index { what: "block", index, count });
        }
    }
    let regions = d.mesh.regions();
    if let Some(b) = regions.iter().filter(|r| **r != AIR).map(|r| *r as usize).max() {
        let count = d.blocks.len();
        if b >= count {
            return Err(ProblemError::Index { what: "block", index: b, count });
        }
    }
    for side in Side::ALL {
        if let Some(s) = d.mesh.slots(side).iter().flatten().max() {
            let (index, count) = (*s as usize, d.slots.len());
            if index >= count {
                return Err(ProblemError::Index { what: "slot", index, count });
            }
        }
    }
    for slot in &d.slots {
        let LossLaw { loss, friction } = slot.law;
        number("loss", loss, loss >= 0.0, "zero or more")?;
        number("friction", friction, friction >= 0.0, "zero or more")?;
        number("drive", slot.drive, true, "finite")?;
    }
    for (index, fan) in d.fans.iter().enumerate() {
        fan.check()?;
        let uses = d.slots.iter().filter(|s| s.fan == Some(index)).count();
        number("slots of a fan", uses as f64, uses <= 1, "one at the most")?;
    }
    let count = d.fans.len();
    if let Some(index) = d.slots.iter().filter_map(|s| s.fan).find(|f| *f >= count) {
        return Err(ProblemError::Index { what: "fan", index, count });
    }
    let mut way_out = !d.slots.is_empty();
    for side in &d.sides {
        match *side {
            SideCondition::Temperature(t) => number("temperature", t, t > 0.0, "positive")?,
            SideCondition::Flux(q) => number("flux", q, true, "finite")?,
            SideCondition::Film { coefficient, temperature } => {
                number("film coefficient", coefficient, coefficient > 0.0, "positive")?;
                number("temperature", temperature, temperature > 0.0, "positive")?;
            }
            SideCondition::Outside(o) => {
                if let OuterFilm::Given(h) = o.film {
                    number("film coefficient", h, h > 0.0, "positive")?;
                }
                number("temperature", o.air, o.air > 0.0, "positive")?;
                number("temperature", o.surroundings, o.surroundings > 0.0, "positive")?;
                let good = (0.0..=1.0).contains(&o.emissivity);
                number("emissivity", o.emissivity, good, "from 0 to 1")?;
                number("sun", o.sun, o.sun >= 0.0, "zero or more")?;
                number("wall resistance", o.wall, o.wall >= 0.0, "zero or more")?;
            }
            SideCondition::Sliding(u) => number("speed", u, true, "finite")?,
            _ => {}
        }
        way_out |= matches!(
            side,
            SideCondition::Open
                | SideCondition::Temperature(_)
                | SideCondition::Film { .. }
                | SideCondition::Outside(_)
        );
    }
    if way_out { Ok(()) } else { Err(ProblemError::NoWayOut) }
}
