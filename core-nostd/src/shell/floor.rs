//! Floor of the tank: what is left of its crown, and how far its edge has gone down.

use super::{SETTLEMENT, SHELL_DIAMETER, ShellError};
use crate::math::least_squares::LeastSquares;
use crate::quantity::{Bounded, OutOfRange};
use crate::working::{Silent, Step, Working};
use core::f64::consts::FRAC_PI_2;

/// Distance of a floor point from the shell.
pub static FROM_SHELL: Bounded = Bounded {
    name: "distance from the shell",
    unit: "m",
    min: 0.0,
    max: 100.0,
    remedy: "Measured inwards along a radius, in metres.",
};
/// Width of the settled edge.
pub static EDGE_WIDTH: Bounded = Bounded {
    name: "width of the settled edge",
    unit: "m",
    min: 0.05,
    max: 50.0,
    remedy: "Distance from the shell to where the floor's own slope begins, in metres.",
};
/// Angle of a weld to the radius.
pub static WELD_ANGLE: Bounded = Bounded {
    name: "angle of the floor weld",
    unit: "rad",
    min: 0.0,
    max: FRAC_PI_2,
    remedy: "0 for a weld square to the shell, pi/2 for one along it.",
};

/// Settlement of the centre of the floor against its edge.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Dish {
    /// Centre less edge settlement, m: positive for a dish.
    pub dish_m: f64,
    /// The same over the diameter.
    pub dish_over_diameter: f64,
    /// Height of centre over edge that is left of the crown, m; negative for a hollow.
    pub crown_left_m: f64,
    /// Slope of the floor that is left, from the centre down to the edge.
    pub slope_left: f64,
}

/// Dish of a floor that was built with its centre `crown_m` above its edge (0 for flat, negative
/// for cone-down), from the settlements of centre and edge (the shell's uniform settlement).
///
/// # Errors
/// A value outside its range.
pub fn dish(
    diameter_m: f64,
    crown_m: f64,
    centre_settlement_m: f64,
    edge_settlement_m: f64,
) -> Result<Dish, OutOfRange> {
    dish_with(diameter_m, crown_m, centre_settlement_m, edge_settlement_m, &mut Silent)
}

/// As [`dish`], writing what is left of the crown.
///
/// # Errors
/// As [`dish`].
pub fn dish_with(
    diameter_m: f64,
    crown_m: f64,
    centre_settlement_m: f64,
    edge_settlement_m: f64,
    working: &mut impl Working,
) -> Result<Dish, OutOfRange> {
    SHELL_DIAMETER.check(diameter_m)?;
    SETTLEMENT.check(crown_m)?;
    SETTLEMENT.check(centre_settlement_m)?;
    SETTLEMENT.check(edge_settlement_m)?;
    let dish_m = centre_settlement_m - edge_settlement_m;
    let crown_left_m = crown_m - dish_m;
    working.step(Step {
        name: "crown left",
        value: crown_left_m,
        unit: "m",
        formula: "crown - (s_centre - s_edge)",
        inputs: &[
            ("crown", crown_m),
            ("s_centre", centre_settlement_m),
            ("s_edge", edge_settlement_m),
        ],
        source: "",
    });
    Ok(Dish {
        dish_m,
        dish_over_diameter: dish_m / diameter_m,
        crown_left_m,
        slope_left: crown_left_m / (0.5 * diameter_m),
    })
}

/// A point of the floor on a radius.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FloorPoint {
    /// Distance from the shell inwards, m.
    pub from_shell_m: f64,
    /// Settlement, m.
    pub settlement_m: f64,
}

/// Settlement of the floor's edge beyond that of the floor inside it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct EdgeSettlement {
    /// Settlement at the shell less that of the inner floor continued to the shell, m.
    pub settlement_m: f64,
    /// Width over which it happens, m.
    pub width_m: f64,
    /// Settlement over width.
    pub ratio: f64,
}

/// Edge settlement along a radius: the floor beyond `width_m` from the shell is continued to the
/// shell by a straight line (least squares), and the shell's settlement is compared with it.
///
/// # Errors
/// Fewer than two different places further inside than the width, or a value outside its range.
pub fn edge_settlement(
    shell_settlement_m: f64,
    floor: &[FloorPoint],
    width_m: f64,
) -> Result<EdgeSettlement, ShellError> {
    edge_settlement_with(shell_settlement_m, floor, width_m, &mut Silent)
}

/// As [`edge_settlement`], writing its step.
///
/// # Errors
/// As [`edge_settlement`].
pub fn edge_settlement_with(
    shell_settlement_m: f64,
    floor: &[FloorPoint],
    width_m: f64,
    working: &mut impl Working,
) -> Result<EdgeSettlement, ShellError> {
    SETTLEMENT.check(shell_settlement_m)?;
    EDGE_WIDTH.check(width_m)?;
    let mut sums = LeastSquares::<2>::new();
    for (index, point) in floor.iter().enumerate() {
        FROM_SHELL.check_at(point.from_shell_m, index)?;
        SETTLEMENT.check_at(point.settlement_m, index)?;
        if point.from_shell_m >= width_m {
            sums.add([1.0, point.from_shell_m], point.settlement_m);
        }
    }
    let [continued_m, slope] = sums.solve()?.coefficients;
    let settlement_m = shell_settlement_m - continued_m;
    working.step(Step {
        name: "edge settlement",
        value: settlement_m,
        unit: "m",
        formula: "s_shell - c of the least-squares line s = c + m x beyond the width",
        inputs: &[
            ("s_shell", shell_settlement_m),
            ("c", continued_m),
            ("m", slope),
            ("width", width_m),
        ],
        source: "",
    });
    Ok(EdgeSettlement { settlement_m, width_m, ratio: settlement_m / width_m })
}

/// Permitted edge settlement where the floor's lap weld lies at an angle to the radius, from the
/// permitted values of a weld square to the shell and of one along it:
/// `B = B_square - (B_square - B_along) sin a`.
///
/// API Standard 653, Annex B (the two values are read from its figures by the caller).
///
/// # Errors
/// An angle outside 0 to pi/2, or a value that is no settlement.
pub fn permitted_edge_settlement_m(
    weld_square_m: f64,
    weld_along_m: f64,
    weld_angle_rad: f64,
) -> Result<f64, OutOfRange> {
    SETTLEMENT.check(weld_square_m)?;
    SETTLEMENT.check(weld_along_m)?;
    WELD_ANGLE.check(weld_angle_rad)?;
    Ok(weld_square_m - (weld_square_m - weld_along_m) * libm::sin(weld_angle_rad))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_dish_eats_up_the_crown() {
        // As-built 1.6 % on 100 m with a centre that settles 0.38 m and an edge that settles 0.21 m
        // keeps more than 1 % (engineering note on cone-up floors).
        let found = dish(100.0, 0.8, 0.38, 0.21).unwrap();
        assert!((found.dish_m - 0.17).abs() < 1e-15 && (found.crown_left_m - 0.63).abs() < 1e-15);
        assert!((found.slope_left - 0.0126).abs() < 1e-15);
        assert!((found.dish_over_diameter - 0.0017).abs() < 1e-15);
        assert!(dish(100.0, 0.1, 0.38, 0.21).unwrap().crown_left_m < 0.0, "a hollow");
    }

    #[test]
    fn the_edge_is_measured_from_the_floor_continued() {
        let floor = [(0.3, 0.150), (0.9, 0.100), (2.0, 0.080), (4.0, 0.100), (6.0, 0.120)]
            .map(|(from_shell_m, settlement_m)| FloorPoint { from_shell_m, settlement_m });
        let found = edge_settlement(0.170, &floor, 0.9 + 0.3).unwrap();
        assert!((found.settlement_m - 0.110).abs() < 1e-15, "{found:?}");
        assert!((found.ratio - 0.110 / 1.2).abs() < 1e-15);
        assert!(edge_settlement(0.170, &floor, 5.0).is_err(), "one point makes no line");
    }

    /// API 653 Annex B, figures B-10 and B-11 for D = 120 ft and a width of 3 ft: 3.8 in along the
    /// shell, 4.7 in square to it (as summarised in print).
    #[test]
    fn permitted_edge_settlement_lies_between_its_two_values() {
        let inch = 0.0254;
        let at = |angle| permitted_edge_settlement_m(4.7 * inch, 3.8 * inch, angle).unwrap() / inch;
        assert!((at(0.0) - 4.7).abs() < 1e-14 && (at(FRAC_PI_2) - 3.8).abs() < 1e-14);
        assert!((at(core::f64::consts::FRAC_PI_6) - 4.25).abs() < 1e-14);
        assert!(permitted_edge_settlement_m(0.1, 0.1, 2.0).is_err());
    }
}
