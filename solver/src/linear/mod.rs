//! Linear five-point systems: relaxation by lines, multigrid, Krylov methods; direct solution of the
//! coarsest mesh's whole system.

pub(crate) mod direct;
pub(crate) mod krylov;
pub(crate) mod multigrid;
pub(crate) mod relaxation;
pub(crate) mod stencil;
