//! The unknowns on a mesh.

use ventrise_mesh::Mesh;

/// Velocities on faces, pressure and temperature rise in cells.
#[derive(Debug, Clone, PartialEq)]
pub struct State {
    /// Velocity along x on the x-faces [m/s], (nx + 1)·ny, flat index i + j·(nx + 1).
    pub u: Vec<f64>,
    /// Velocity along y on the y-faces [m/s], nx·(ny + 1), flat index i + j·nx.
    pub v: Vec<f64>,
    /// Pressure above the ambient hydrostatic column [Pa], nx·ny; zero in blocks.
    pub p: Vec<f64>,
    /// Temperature rise above ambient [K], nx·ny.
    pub t: Vec<f64>,
}

impl State {
    /// Still air and blocks at ambient temperature.
    pub fn rest(mesh: &Mesh) -> State {
        let (nx, ny) = (mesh.nx(), mesh.ny());
        State {
            u: vec![0.0; (nx + 1) * ny],
            v: vec![0.0; nx * (ny + 1)],
            p: vec![0.0; nx * ny],
            t: vec![0.0; nx * ny],
        }
    }

    /// Whether the fields have the mesh's lengths.
    pub fn fits(&self, mesh: &Mesh) -> bool {
        let (nx, ny) = (mesh.nx(), mesh.ny());
        self.u.len() == (nx + 1) * ny
            && self.v.len() == nx * (ny + 1)
            && self.p.len() == nx * ny
            && self.t.len() == nx * ny
    }

    /// Sets every value to zero.
    pub(crate) fn clear(&mut self) {
        for field in [&mut self.u, &mut self.v, &mut self.p, &mut self.t] {
            field.fill(0.0);
        }
    }
}
