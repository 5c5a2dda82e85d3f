//! Linear five-point systems: relaxation by lines, multigrid, Krylov methods.

pub(crate) mod krylov;
pub(crate) mod multigrid;
pub(crate) mod relaxation;
pub(crate) mod stencil;
