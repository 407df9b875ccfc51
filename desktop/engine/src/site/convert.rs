//! From the site file to what the core calculates with.

use super::model::{
    BaseDrainage, BaseStiffness, Compressibility, Layer, Preconsolidation, SiteFile, Tank,
};
use brimstead_core::config::{MAX_LAYERS, MAX_PROFILE_POINTS, MAX_TANKS, NAME_BYTES, Name};
use brimstead_core::ground::{self, Ground, GroundWater};
use brimstead_core::load::{self, PlanPosition, Tanks};
use brimstead_core::units::YEAR_S;
use thiserror::Error;

/// Why a site does not fit the core's fixed capacities. A site file that was read fits; one that
/// was changed in memory may not.
#[derive(Debug, Clone, PartialEq, Eq, Error)]
pub enum ConversionError {
    /// A name is longer than the core and the loggers hold.
    #[error("the name \"{name}\" has {} bytes; at most {NAME_BYTES} fit. Shorten it (letters beyond plain ASCII count 2 to 4).", name.len())]
    NameTooLong {
        /// The name.
        name: String,
    },
    /// A list is longer than the core and the loggers hold.
    #[error("{count} {what}; at most {most} fit. Join or leave out some.")]
    TooMany {
        /// Entries of the list.
        what: &'static str,
        /// How many there are.
        count: usize,
        /// How many fit.
        most: usize,
    },
}

/// A name as the core holds it.
///
/// # Errors
/// When it is too long.
pub fn name(text: &str) -> Result<Name, ConversionError> {
    Name::try_from(text).map_err(|_| ConversionError::NameTooLong { name: text.to_owned() })
}

fn fitted<T, const N: usize>(
    what: &'static str,
    items: impl ExactSizeIterator<Item = Result<T, ConversionError>>,
) -> Result<heapless::Vec<T, N>, ConversionError> {
    let count = items.len();
    let mut list = heapless::Vec::new();
    for item in items {
        list.push(item?).map_err(|_| ConversionError::TooMany { what, count, most: N })?;
    }
    Ok(list)
}

impl SiteFile {
    /// The ground profile, best estimate.
    ///
    /// # Errors
    /// When a name or a list does not fit the core.
    pub fn ground(&self) -> Result<Ground, ConversionError> {
        Ok(Ground {
            layers: fitted::<_, MAX_LAYERS>("layers", self.layers.iter().map(layer))?,
            water: self.ground_water()?,
            water_unit_weight_kn_m3: self.water.unit_weight_kn_m3,
            base_drainage: match self.base.drainage {
                BaseDrainage::Drained => ground::BaseDrainage::Drained,
                BaseDrainage::Closed => ground::BaseDrainage::Closed,
            },
            base_stiffness: match self.base.stiffness {
                BaseStiffness::Rigid => ground::BaseStiffness::Rigid,
                BaseStiffness::HalfSpace { young_kpa, poisson } => {
                    ground::BaseStiffness::HalfSpace { young_kpa, poisson }
                }
            },
        })
    }

    fn ground_water(&self) -> Result<GroundWater, ConversionError> {
        let water_table_m = self.water.water_table_m;
        Ok(match &self.water.profile {
            None => GroundWater::Hydrostatic { water_table_m },
            Some(points) => {
                let points = points.iter().copied().map(Ok);
                let points =
                    fitted::<_, MAX_PROFILE_POINTS>("points of the pore-pressure profile", points)?;
                GroundWater::Profile { water_table_m, points }
            }
        })
    }

    /// The tanks; the first is the tank under test.
    ///
    /// # Errors
    /// When a name or the list does not fit the core.
    pub fn tanks(&self) -> Result<Tanks, ConversionError> {
        fitted::<_, MAX_TANKS>("tanks", self.tanks.iter().map(tank))
    }
}

fn layer(layer: &Layer) -> Result<ground::Layer, ConversionError> {
    Ok(ground::Layer {
        name: name(&layer.name)?,
        thickness_m: layer.thickness_m,
        unit_weight_above_water_kn_m3: layer.unit_weight_above_water_kn_m3,
        unit_weight_below_water_kn_m3: layer.unit_weight_below_water_kn_m3,
        compressibility: match layer.compressibility {
            Compressibility::Index { void_ratio, cc, cr } => {
                ground::Compressibility::Index { void_ratio, cc, cr }
            }
            Compressibility::Ratio { compression_ratio, recompression_ratio } => {
                ground::Compressibility::Ratio { compression_ratio, recompression_ratio }
            }
            Compressibility::Modulus { constrained_modulus_kpa } => {
                ground::Compressibility::Modulus { constrained_modulus_kpa }
            }
        },
        preconsolidation: match layer.preconsolidation {
            Preconsolidation::Ocr { ocr } => ground::Preconsolidation::Ocr(ocr),
            Preconsolidation::Pop { pop_kpa } => ground::Preconsolidation::PopKpa(pop_kpa),
            Preconsolidation::Value { value_kpa } => ground::Preconsolidation::ValueKpa(value_kpa),
        },
        secondary_ratio: layer.secondary_ratio,
        cv_m2_per_s: layer.cv_m2_per_year / YEAR_S,
        ch_m2_per_s: layer.ch_m2_per_year / YEAR_S,
        permeability_m_per_s: layer.permeability_m_per_s,
        young_undrained_kpa: layer.young_undrained_kpa,
        young_drained_kpa: layer.young_drained_kpa,
        poisson_drained: layer.poisson_drained,
        undrained_strength_kpa: layer.undrained_strength_kpa,
        undrained_strength_gradient_kpa_per_m: layer.undrained_strength_gradient_kpa_per_m,
        pore_pressure_response: layer.pore_pressure_response,
        drained: layer.drained,
    })
}

fn tank(tank: &Tank) -> Result<load::Tank, ConversionError> {
    Ok(load::Tank {
        name: name(&tank.name)?,
        axis: PlanPosition { x_m: tank.x_m, y_m: tank.y_m },
        diameter_m: tank.diameter_m,
        shell_height_m: tank.shell_height_m,
        loaded_depth_m: tank.loaded_depth_m,
        floor_pressure_kpa: tank.floor_pressure_kpa,
        pad_pressure_kpa: tank.pad_pressure_kpa,
        excavation_relief_kpa: tank.excavation_relief_kpa,
        shell_line_load_kn_m: tank.shell_line_load_kn_m,
        ring_line_load_kn_m: tank.ring_line_load_kn_m,
    })
}
