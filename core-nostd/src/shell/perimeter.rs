//! Uniform settlement, tilt and what is out of plane, from a survey of the shell's perimeter.
//!
//! ```text
//! s = A + B cos t + C sin t                        least squares, at the true angles
//! uniform A        tilt across the diameter 2 sqrt(B^2 + C^2), lower side at atan2(C, B)
//! U_i = s_i - fit                                  residual
//! D_i = U_i - (b U_{i-1} + a U_{i+1})/(a + b)      out of plane; a, b arcs to both neighbours
//! ```
//! D is the second difference: what is left when a smooth line through the neighbours is taken
//! away. The shell's curvature is about -2 D/(a b).
//!
//! # Limit
//! `11 a b Y/(2 E H)` with Y and E of the shell's steel and H its height: for equal arcs the
//! formula of the older editions of API Standard 653, Annex B.3.2 (`11 L^2 Y/(2 E H)`). The product
//! a b in place of L^2 for unequal arcs keeps the curvature the same; it is an extension made here
//! and not in the standard. Later editions use another rule, cap the value, and want the planar fit
//! to be good (R2 of 0.9 or more is quoted); which one counts is for the owner's standard to say.
//!
//! # Noise
//! With a standard deviation of one settlement, the deviation of D follows through the fit:
//! `var D = sd^2 [w'w - (X'w)' (X'X)^-1 (X'w)]`, w being the weights of D and X the columns of the
//! fit. The largest of n values of D goes beyond [`PointShape::noise_limit_m`] in one survey of 20
//! from noise alone (Bonferroni's bound).
//!
//! # References
//! De Beer 1969, Proc. 7th ICSMFE (definition of the out-of-plane deflection); Marr, Ramos & Lambe
//! 1982, J. Geotech. Eng. Div. ASCE 108 (GT8), 1017-1039.

use super::{
    ANGLE, SETTLEMENT, SETTLEMENT_DEVIATION, SHELL_DIAMETER, SHELL_HEIGHT, STEEL, ShellError,
};
use crate::math::distribution::normal_quantile;
use crate::math::least_squares::{Fit, LeastSquares};
use crate::quantity::OutOfRange;
use crate::working::{Silent, Step, Working};
use core::f64::consts::PI;

/// Of 20 surveys that show noise only, one may have a value beyond the noise limit.
const NOISE_CONFIDENCE: f64 = 0.95;

/// A point of the perimeter.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PerimeterPoint {
    /// Angle in plan, clockwise from north, rad.
    pub angle_rad: f64,
    /// Settlement since the baseline, m; `None` where it was not read. The out-of-plane value is
    /// then not given here and at both neighbours: a wider arc would answer another question.
    pub settlement_m: Option<f64>,
}

/// The planar part of the settlement.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Tilt {
    /// From the higher side to the lower, across the diameter, m.
    pub across_diameter_m: f64,
    /// The same over the diameter.
    pub slope: f64,
    /// Angle at which the lower side lies, 0 to 2 pi rad; `None` without tilt.
    pub azimuth_rad: Option<f64>,
    /// Standard deviation of the tilt across the diameter from the survey alone, m.
    pub noise_deviation_m: f64,
}

/// What a point shows beside uniform settlement and tilt.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PointShape {
    /// Planar fit at the point, m.
    pub planar_m: f64,
    /// Settlement less the planar fit, m.
    pub residual_m: Option<f64>,
    /// Arc to the point before, m.
    pub arc_before_m: f64,
    /// Arc to the point after, m.
    pub arc_after_m: f64,
    /// Second difference with both neighbours, positive where the point lies below them, m.
    pub out_of_plane_m: Option<f64>,
    /// Standard deviation of the second difference from the survey alone, m.
    pub noise_deviation_m: f64,
    /// Value that noise alone passes anywhere on the perimeter in 1 survey of 20, m.
    pub noise_limit_m: f64,
}

/// A second difference beside its limit.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct OutOfPlaneLimit {
    /// Permitted magnitude, m.
    pub permitted_m: f64,
    /// Magnitude over the permitted one; `None` where there is no value.
    pub utilisation: Option<f64>,
    /// The limit is no larger than what noise alone can show: the survey is too coarse for it.
    pub inside_noise: bool,
}

/// The steel shell, for its limit.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ShellSteel {
    height_m: f64,
    yield_mpa: f64,
    young_mpa: f64,
}

impl ShellSteel {
    /// Height, m, yield strength and Young's modulus, MPa.
    ///
    /// # Errors
    /// A value outside its range.
    pub fn new(height_m: f64, yield_mpa: f64, young_mpa: f64) -> Result<Self, OutOfRange> {
        SHELL_HEIGHT.check(height_m)?;
        STEEL.check(yield_mpa)?;
        STEEL.check(young_mpa)?;
        Ok(Self { height_m, yield_mpa, young_mpa })
    }

    /// Permitted out-of-plane deflection, m, between neighbours at these arcs, m.
    #[must_use]
    pub fn permitted_m(&self, arc_before_m: f64, arc_after_m: f64) -> f64 {
        11.0 * arc_before_m * arc_after_m * self.yield_mpa / (2.0 * self.young_mpa * self.height_m)
    }
}

/// Planar fit of a perimeter survey.
#[derive(Debug, Clone, PartialEq)]
pub struct PerimeterFit<'a> {
    points: &'a [PerimeterPoint],
    radius_m: f64,
    deviation_m: f64,
    noise_quantile: f64,
    fit: Fit<3>,
    r_squared: Option<f64>,
    largest_residual_m: f64,
}

impl<'a> PerimeterFit<'a> {
    /// Fits the plane. Points are listed once around by growing angle, wherever the list starts;
    /// `settlement_deviation_m` is the standard deviation of one settlement, m (of the difference
    /// of two levellings, not of one).
    ///
    /// # Errors
    /// Fewer than three points read, points out of order, or a value outside its range.
    pub fn new(
        points: &'a [PerimeterPoint],
        diameter_m: f64,
        settlement_deviation_m: f64,
    ) -> Result<Self, ShellError> {
        let radius_m = 0.5 * SHELL_DIAMETER.check(diameter_m)?;
        SETTLEMENT_DEVIATION.check(settlement_deviation_m)?;
        check_points(points)?;
        let read = || points.iter().filter_map(|p| Some((p.angle_rad, p.settlement_m?)));
        let mut sums = LeastSquares::new();
        read().for_each(|(angle, settlement_m)| sums.add(columns(angle), settlement_m));
        let fit = sums.solve()?;
        let count = read().count() as f64;
        let mean = read().map(|(_, s)| s).sum::<f64>() / count;
        let spread: f64 = read().map(|(_, s)| (s - mean) * (s - mean)).sum();
        let largest_residual_m = read()
            .map(|(angle, s)| (s - planar_m(&fit, angle)).abs())
            .fold(0.0, |largest: f64, residual| largest.max(residual));
        let all = points.len().max(1) as f64;
        Ok(Self {
            points,
            radius_m,
            deviation_m: settlement_deviation_m,
            noise_quantile: normal_quantile(1.0 - (1.0 - NOISE_CONFIDENCE) / all)?,
            r_squared: (spread > 0.0).then(|| 1.0 - fit.residual_sum / spread),
            fit,
            largest_residual_m,
        })
    }

    /// Writes uniform settlement, tilt and goodness of fit.
    pub fn write(&self, working: &mut impl Working) {
        let [a, b, c] = self.fit.coefficients;
        working.step(Step {
            name: "uniform settlement of the shell",
            value: a,
            unit: "m",
            formula: "A of the least-squares fit s = A + B cos t + C sin t",
            inputs: &[("A", a), ("B", b), ("C", c)],
            source: "",
        });
        working.step(Step {
            name: "tilt across the diameter",
            value: self.tilt().across_diameter_m,
            unit: "m",
            formula: "2 sqrt(B^2 + C^2)",
            inputs: &[("B", b), ("C", c)],
            source: "",
        });
        if let Some(r_squared) = self.r_squared {
            working.step(Step {
                name: "coefficient of determination of the planar fit",
                value: r_squared,
                unit: "",
                formula: "1 - sum U^2 / sum (s - mean)^2",
                inputs: &[("sum U^2", self.fit.residual_sum)],
                source: "",
            });
        }
    }

    /// Uniform settlement, m.
    #[must_use]
    pub fn uniform_m(&self) -> f64 {
        let [uniform, ..] = self.fit.coefficients;
        uniform
    }

    /// Coefficients of cosine and sine of the angle, m.
    #[must_use]
    pub fn planar_coefficients_m(&self) -> (f64, f64) {
        let [_, cosine, sine] = self.fit.coefficients;
        (cosine, sine)
    }

    /// The tilt.
    #[must_use]
    pub fn tilt(&self) -> Tilt {
        let [uniform, b, c] = self.fit.coefficients;
        let amplitude = libm::hypot(b, c);
        // What rounding leaves of an even settlement has no direction.
        let tilted = amplitude > 1e-13 * (uniform.abs() + amplitude);
        let (cosine, sine) = if tilted { (b / amplitude, c / amplitude) } else { (1.0, 0.0) };
        let variance = self.fit.variance_factor(&[0.0, cosine, sine]);
        Tilt {
            across_diameter_m: 2.0 * amplitude,
            slope: amplitude / self.radius_m,
            azimuth_rad: tilted.then(|| within_turn(libm::atan2(c, b))),
            noise_deviation_m: 2.0 * self.deviation_m * libm::sqrt(variance),
        }
    }

    /// Share of the scatter that the plane explains; `None` when all points settled alike.
    #[must_use]
    pub fn r_squared(&self) -> Option<f64> {
        self.r_squared
    }

    /// Sum of the squared residuals, m2.
    #[must_use]
    pub fn residual_sum_m2(&self) -> f64 {
        self.fit.residual_sum
    }

    /// Largest residual, either way, m.
    #[must_use]
    pub fn largest_residual_m(&self) -> f64 {
        self.largest_residual_m
    }

    /// Longest arc between neighbouring points of the list, m.
    #[must_use]
    pub fn longest_arc_m(&self) -> f64 {
        (0..self.points.len())
            .filter_map(|index| self.neighbours(index))
            .fold(0.0, |longest, n| longest.max(n.arc_after_m))
    }

    /// Shape at each point, in the order of the list.
    pub fn shapes(&self) -> impl Iterator<Item = PointShape> + '_ {
        (0..self.points.len()).filter_map(|index| self.shape(index))
    }

    /// Shape at one point, counted from 0; `None` beyond the list.
    #[must_use]
    pub fn shape(&self, index: usize) -> Option<PointShape> {
        self.shape_with(index, &mut Silent)
    }

    /// As [`PerimeterFit::shape`], writing residual and second difference.
    pub fn shape_with(&self, index: usize, working: &mut impl Working) -> Option<PointShape> {
        let n = self.neighbours(index)?;
        let planar_m = planar_m(&self.fit, n.here.angle_rad);
        let residual_m = n.here.settlement_m.map(|s| s - planar_m);
        let (a, b) = (n.arc_before_m, n.arc_after_m);
        let (share_before, share_after) = (b / (a + b), a / (a + b));
        let residual =
            |point: &PerimeterPoint| Some(point.settlement_m? - self.planar_m(point.angle_rad));
        let out_of_plane_m = match (residual_m, residual(n.before), residual(n.after)) {
            (Some(here), Some(before), Some(after)) => {
                let value = here - (share_before * before + share_after * after);
                working.step(Step {
                    name: "out-of-plane deflection",
                    value,
                    unit: "m",
                    formula: "U_i - (b U_before + a U_after)/(a + b)",
                    inputs: &[
                        ("point", index as f64 + 1.0),
                        ("U_i", here),
                        ("U_before", before),
                        ("U_after", after),
                        ("a", a),
                        ("b", b),
                    ],
                    source: "De Beer 1969, for unequal arcs",
                });
                Some(value)
            }
            _ => None,
        };
        let noise_deviation_m = self.noise_deviation_m(&n, share_before, share_after);
        Some(PointShape {
            planar_m,
            residual_m,
            arc_before_m: a,
            arc_after_m: b,
            out_of_plane_m,
            noise_deviation_m,
            noise_limit_m: self.noise_quantile * noise_deviation_m,
        })
    }

    /// A point's second difference beside the limit of the shell.
    #[must_use]
    pub fn limit(&self, shape: &PointShape, steel: &ShellSteel) -> OutOfPlaneLimit {
        self.limit_with(shape, steel, &mut Silent)
    }

    /// As [`PerimeterFit::limit`], writing the limit and what noise can show.
    pub fn limit_with(
        &self,
        shape: &PointShape,
        steel: &ShellSteel,
        working: &mut impl Working,
    ) -> OutOfPlaneLimit {
        let permitted_m = steel.permitted_m(shape.arc_before_m, shape.arc_after_m);
        working.step(Step {
            name: "permitted out-of-plane deflection",
            value: permitted_m,
            unit: "m",
            formula: "11 a b Y/(2 E H)",
            inputs: &[
                ("a", shape.arc_before_m),
                ("b", shape.arc_after_m),
                ("Y", steel.yield_mpa),
                ("E", steel.young_mpa),
                ("H", steel.height_m),
            ],
            source: "API 653 Annex B.3.2, older editions; a b for unequal arcs",
        });
        working.step(Step {
            name: "out-of-plane deflection that survey noise alone can show",
            value: shape.noise_limit_m,
            unit: "m",
            formula: "z sd_D, passed anywhere in 1 survey of 20",
            inputs: &[("z", self.noise_quantile), ("sd_D", shape.noise_deviation_m)],
            source: "",
        });
        OutOfPlaneLimit {
            permitted_m,
            utilisation: shape.out_of_plane_m.map(|value| value.abs() / permitted_m),
            inside_noise: permitted_m <= shape.noise_limit_m,
        }
    }

    fn planar_m(&self, angle_rad: f64) -> f64 {
        planar_m(&self.fit, angle_rad)
    }

    fn noise_deviation_m(&self, n: &Neighbours<'_>, before: f64, after: f64) -> f64 {
        let weights = [(n.before, -before), (n.here, 1.0), (n.after, -after)];
        let mut across = [0.0; 3];
        for (point, weight) in weights {
            for (sum, column) in across.iter_mut().zip(columns(point.angle_rad)) {
                *sum += weight * column;
            }
        }
        let own = 1.0 + before * before + after * after;
        // With three points the fit takes everything; rounding must not leave less than nothing.
        let variance = (own - self.fit.variance_factor(&across)).max(0.0);
        self.deviation_m * libm::sqrt(variance)
    }

    fn neighbours(&self, index: usize) -> Option<Neighbours<'a>> {
        let here = self.points.get(index)?;
        let before = match index.checked_sub(1) {
            Some(before) => self.points.get(before)?,
            None => self.points.last()?,
        };
        let after = self.points.get(index.saturating_add(1)).or_else(|| self.points.first())?;
        let arc = |from: &PerimeterPoint, to: &PerimeterPoint| {
            self.radius_m * within_turn(to.angle_rad - from.angle_rad)
        };
        Some(Neighbours {
            before,
            here,
            after,
            arc_before_m: arc(before, here),
            arc_after_m: arc(here, after),
        })
    }
}

/// A point between its neighbours on the ring.
struct Neighbours<'a> {
    before: &'a PerimeterPoint,
    here: &'a PerimeterPoint,
    after: &'a PerimeterPoint,
    arc_before_m: f64,
    arc_after_m: f64,
}

/// Every value, and that the points go once around.
pub(super) fn check_points(points: &[PerimeterPoint]) -> Result<(), ShellError> {
    let mut turned = 0.0;
    let mut before = None;
    for (index, point) in points.iter().enumerate() {
        ANGLE.check_at(point.angle_rad, index)?;
        if let Some(settlement_m) = point.settlement_m {
            SETTLEMENT.check_at(settlement_m, index)?;
        }
        if let Some(before) = before {
            let step = within_turn(point.angle_rad - before);
            turned += step;
            // Points closer than this (2 mm on the largest tank) are one.
            if step < 1e-5 || turned > 2.0 * PI - 1e-5 {
                return Err(ShellError::NotOnceAround { index });
            }
        }
        before = Some(point.angle_rad);
    }
    Ok(())
}

/// Columns of the planar fit.
fn columns(angle_rad: f64) -> [f64; 3] {
    [1.0, libm::cos(angle_rad), libm::sin(angle_rad)]
}

fn planar_m(fit: &Fit<3>, angle_rad: f64) -> f64 {
    columns(angle_rad).iter().zip(&fit.coefficients).map(|(x, c)| x * c).sum()
}

/// The angle in 0..2 pi.
pub(super) fn within_turn(angle_rad: f64) -> f64 {
    let turned = libm::fmod(angle_rad, 2.0 * PI);
    if turned < 0.0 { turned + 2.0 * PI } else { turned }
}
