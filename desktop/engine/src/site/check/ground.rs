//! Water, layers and drains.

use super::super::model::{Compressibility, Drains, Layer, SiteParts, Water};
use super::super::reader::Reading;
use super::unique;
use brimstead_core::ground::LAYER_THICKNESS;

pub(super) fn check(reading: &Reading<'_>, parts: &SiteParts<'_>) {
    if let Some(layers) = parts.layers {
        unique(reading, "layers", "name", layers.iter().map(|layer| layer.name.as_str()));
        for (index, layer) in layers.iter().enumerate() {
            compressibility(reading, index, layer);
            saturated_weight(reading, index, layer, parts.water);
        }
        if let (Some(Some(drains)), Some(bottom)) = (parts.drains, bottom(layers)) {
            drains_in_ground(reading, drains, bottom);
        }
    }
    if let Some(Some(profile)) = parts.water.map(|water| &water.profile) {
        rising(reading, "water.profile", "depth", profile);
    }
    if let Some(Some(drains)) = parts.drains {
        drain_geometry(reading, drains);
    }
}

fn compressibility(reading: &Reading<'_>, index: usize, layer: &Layer) {
    let (key, recompression, compression) = match layer.compressibility {
        Compressibility::Index { cc, cr, .. } => ("cr", cr, cc),
        Compressibility::Ratio { compression_ratio, recompression_ratio } => {
            ("recompression_ratio", recompression_ratio, compression_ratio)
        }
        Compressibility::Modulus { .. } => return,
    };
    if recompression > compression {
        let allowed = format!("not more than {compression}, the value for virgin compression");
        let remedy = "The two may be exchanged.";
        reading.report(
            &format!("layers[{index}].compressibility.{key}"),
            recompression.to_string(),
            allowed,
            remedy,
        );
    }
}

fn saturated_weight(reading: &Reading<'_>, index: usize, layer: &Layer, water: Option<&Water>) {
    let below = layer.unit_weight_below_water_kn_m3;
    let above = layer.unit_weight_above_water_kn_m3;
    let water = water.map_or(0.0, |water| water.unit_weight_kn_m3);
    let (allowed, remedy) = if below <= water {
        let allowed = format!("more than the {water} kN/m3 of the ground water");
        (allowed, "Give the bulk (saturated) unit weight, not the submerged one.")
    } else if below < above {
        let allowed = format!("not less than the {above} kN/m3 above the water table");
        (allowed, "Saturated soil is not lighter than the same soil above water.")
    } else {
        return;
    };
    let path = format!("layers[{index}].unit_weight_below_water_kn_m3");
    reading.report(&path, below.to_string(), allowed, remedy);
}

/// Reports every point whose first number is not above the one before.
pub(super) fn rising(reading: &Reading<'_>, path: &str, what: &str, points: &[(f64, f64)]) {
    for (index, pair) in points.windows(2).enumerate() {
        let [before, after] = [pair[0].0, pair[1].0];
        if after <= before {
            let allowed = format!("{what} above {before}, that of the point before");
            reading.report(
                &format!("{path}[{}]", index + 1),
                after.to_string(),
                allowed,
                "List points by rising first number.",
            );
        }
    }
}

/// Depth of the base of the lowest layer; `None` when a thickness was refused, so that one slip
/// does not draw a refusal of everything that stands in the ground.
pub(super) fn bottom(layers: &[Layer]) -> Option<f64> {
    layers.iter().map(|layer| LAYER_THICKNESS.check(layer.thickness_m).ok()).sum()
}

fn drains_in_ground(reading: &Reading<'_>, drains: &Drains, bottom: f64) {
    if drains.base_m > bottom {
        let allowed = format!("not below the base of the lowest layer at {bottom} m");
        reading.report(
            "drains.base_m",
            drains.base_m.to_string(),
            allowed,
            "Add the layers that the drains reach.",
        );
    }
}

fn drain_geometry(reading: &Reading<'_>, drains: &Drains) {
    if drains.base_m <= drains.top_m {
        let allowed = format!("below the top at {} m", drains.top_m);
        reading.report(
            "drains.base_m",
            drains.base_m.to_string(),
            allowed,
            "Depth is positive downwards.",
        );
    }
    let smear_diameter = drains.equivalent_diameter_m * drains.smear_ratio;
    if smear_diameter >= drains.spacing_m {
        let allowed = format!("above {smear_diameter} m, the diameter of the smear zone");
        let remedy = "Spacing and diameter are both in metres, centre to centre.";
        reading.report("drains.spacing_m", drains.spacing_m.to_string(), allowed, remedy);
    }
}
