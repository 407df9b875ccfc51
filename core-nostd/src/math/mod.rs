//! Mathematics shared by the rooms: complete elliptic integrals, error function integrals,
//! quadrature nodes, root finding, minimisation, least squares, quantiles, chains of linear
//! equations. Nothing here knows about the ground.

pub mod distribution;
pub mod elliptic;
pub mod error_integrals;
pub(crate) mod lanes;
pub mod least_squares;
pub mod minimum;
pub mod quadrature;
pub mod root;
pub mod tridiagonal;
