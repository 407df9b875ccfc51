//! Mathematics shared by the rooms: complete elliptic integrals, error function integrals,
//! quadrature nodes, root finding, chains of linear equations. Nothing here knows about the
//! ground.

pub mod elliptic;
pub mod error_integrals;
pub(crate) mod lanes;
pub mod quadrature;
pub mod root;
pub mod tridiagonal;
