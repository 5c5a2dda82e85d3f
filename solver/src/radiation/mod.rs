//! Grey-diffuse radiation between all surfaces that see each other through air.
//!
//! In: faces between air and solids or the section's edge, grouped into patches; view factors with
//! shadows, planar or of bodies of revolution, with mirror images; multiple reflection. Left out:
//! absorption by air, wavelength, specular reflection except at mirror sides.
//!
//! ```text
//! mesh, surfaces ─► faces ─► patches ─► views ─► closing ─► exchange ─► heat
//!                           scene (images, obstacles) ┘
//! ```

mod axisymmetric;
mod closing;
mod error;
mod exchange;
mod faces;
mod patches;
mod planar;
mod quadrature;
mod scene;
mod sight;
mod surfaces;
mod views;

pub use closing::Correction;
pub use error::{RadiationError, RadiationSource};
pub use faces::{Backing, Face, Owner};
pub use patches::Patch;
pub use surfaces::{SideSurface, Surfaces};

use ventrise_mesh::Mesh;

/// Stefan–Boltzmann constant [W/(m²·K⁴)]. Origin: [codata-2018], exact in the SI of 2019; from
/// memory.
pub const STEFAN_BOLTZMANN: f64 = 5.670_374_419e-8;

/// Patches of a section unless asked otherwise.
pub const PATCH_COUNT: usize = 500;

/// Who exchanges how much radiation with whom. Fixed once built.
#[derive(Debug, Clone, PartialEq)]
pub struct Radiation {
    faces: Vec<Face>,
    patches: Vec<Patch>,
    view: Vec<f64>,
    exchange: Vec<f64>,
    correction: Correction,
}

impl Radiation {
    /// Finds the radiating surfaces of a mesh, groups their faces to about `patch_count` patches
    /// (see [`PATCH_COUNT`]; every owner, line and direction has at least one) and computes what
    /// they exchange.
    ///
    /// # Errors
    /// Emissivities missing or outside 0 to 1; view factors that do not add up.
    pub fn new(
        mesh: &Mesh,
        surfaces: &Surfaces,
        patch_count: usize,
    ) -> Result<Self, RadiationError> {
        surfaces.check(mesh)?;
        let faces = faces::radiating_faces(mesh, surfaces);
        let patches = patches::patches(&faces, surfaces, patch_count);
        let scene = scene::Scene::new(mesh, surfaces);
        let mut view = views::view_areas(mesh, &patches, &scene);
        let areas: Vec<f64> = patches.iter().map(|p| p.area).collect();
        let emissivities: Vec<f64> = patches.iter().map(|p| p.emissivity).collect();
        let correction = closing::close(&mut view, &areas, scene.left_out())?;
        let exchange = exchange::exchange_areas(&view, &areas, &emissivities);
        Ok(Radiation { faces, patches, view, exchange, correction })
    }

    /// All radiating faces; those of a patch follow each other.
    pub fn faces(&self) -> &[Face] {
        &self.faces
    }

    /// The patches.
    pub fn patches(&self) -> &[Patch] {
        &self.patches
    }

    /// View areas A_i·F_ij from patch `i` to every patch [m²]; they add up to its area.
    ///
    /// # Panics
    /// When there is no such patch.
    pub fn view(&self, i: usize) -> &[f64] {
        &self.view[i * self.patches.len()..(i + 1) * self.patches.len()]
    }

    /// Exchange areas G_ij of patch `i` with every patch [m²], reflections included:
    /// G_ij·σ·(T_i⁴ − T_j⁴) is the net heat from i to j. They add up to its emissivity times area.
    ///
    /// # Panics
    /// When there is no such patch.
    pub fn exchange(&self, i: usize) -> &[f64] {
        &self.exchange[i * self.patches.len()..(i + 1) * self.patches.len()]
    }

    /// What it took to make the view factors add up to one.
    pub fn correction(&self) -> Correction {
        self.correction
    }

    /// Net heat that leaves each patch [W], given the patches' temperatures [K] (openings: radiant
    /// temperature of the surroundings): Σ_j G_ij·σ·(T_i⁴ − T_j⁴). It sums to zero.
    ///
    /// # Panics
    /// When there are not as many temperatures as patches.
    pub fn net_heat(&self, temperatures: &[f64]) -> Vec<f64> {
        assert_eq!(temperatures.len(), self.patches.len(), "one temperature per patch");
        let power: Vec<f64> = temperatures.iter().map(|t| emissive_power(*t)).collect();
        (0..power.len()).map(|i| self.net_heat_of(i, &power)).collect()
    }

    /// Net heat that leaves patch `i` [W], given all patches' emissive powers σT⁴ [W/m²].
    pub(crate) fn net_heat_of(&self, i: usize, power: &[f64]) -> f64 {
        exchanged(self.exchange(i), power[i], power)
    }
}

/// σT⁴ [W/m²].
pub(crate) fn emissive_power(temperature: f64) -> f64 {
    STEFAN_BOLTZMANN * temperature.powi(4)
}

/// Σ_j g_j·(own − p_j), in partial sums.
fn exchanged(g: &[f64], own: f64, power: &[f64]) -> f64 {
    const LANES: usize = 8;
    let mut sums = [0.0; LANES];
    for (g, power) in g.chunks(LANES).zip(power.chunks(LANES)) {
        sums.iter_mut().zip(g.iter().zip(power)).for_each(|(s, (g, p))| *s += g * (own - p));
    }
    sums.iter().sum()
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests;
