//! Mathematics shared by the rooms: complete elliptic integrals, quadrature nodes, root finding.
//! Nothing here knows about the ground.

pub mod elliptic;
pub(crate) mod lanes;
pub mod quadrature;
pub mod root;
