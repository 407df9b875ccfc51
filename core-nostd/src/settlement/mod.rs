//! Settlement of the ground: immediate, primary and secondary, and methods for sand.
//!
//! | part | what moves | where |
//! |---|---|---|
//! | immediate | saturated soil changes shape, not volume, as the load comes | [`immediate`] |
//! | primary | soil gives up pore water until effective stress has taken the load | [`primary`], [`strain`] |
//! | secondary | the skeleton creeps at constant effective stress | [`secondary`] |
//! | sand | strain influence and modulus-number methods | [`sand`], [`modulus`] |
//!
//! Settlement and compression are positive, heave negative. What happens between the beginning
//! and the end of primary settlement is a matter of `consolidation`: it hands the effective stress
//! of each cell to [`strain::StressStrain::strain_at`].
//!
//! # Not covered
//! Lateral yield of soft ground near failure (the lateral part of undrained settlement beyond
//! elasticity), collapse on wetting, desiccation, cyclic loading.

mod error;
pub mod immediate;
pub mod modulus;
pub mod primary;
mod quadrature;
pub mod sand;
pub mod secondary;
pub mod strain;

pub use error::SettlementError;

/// Refuses what a load gives at a depth when it is not a number.
fn finite_at(value: f64, depth_m: f64) -> Result<f64, SettlementError> {
    if value.is_finite() {
        Ok(value)
    } else {
        Err(SettlementError::LoadEffectNotFinite { depth_m })
    }
}
