//! Updating a prediction by readings: two factors, one on its size and one on its pace.
//!
//! ```text
//! s(t) = a S0 U(b t)
//! ```
//! `a` multiplies the predicted settlement, `b` the time axis. Both start at 1 with an uncertainty;
//! each reading moves them towards what was read, by as much as its precision against theirs
//! allows. Linear in a and b about where they stand (extended Kalman filter), one reading at a
//! time; for a prediction that is linear in them this is Bayes' rule to the last digit, whatever
//! the order of the readings.
//!
//! An update changes a forecast. It never changes a limit, and it must not be used to explain away
//! a reading that the prediction cannot give: see [`Surprise`].

use crate::quantity::{Bounded, OutOfRange};
use crate::working::{Silent, Step, Working};

/// Standard deviation of a factor before any reading.
pub static FACTOR_DEVIATION: Bounded = Bounded {
    name: "standard deviation of a factor on the prediction",
    unit: "",
    min: 1e-4,
    max: 3.0,
    remedy: "0.3 says that the prediction may well be wrong by a third.",
};
/// Standard deviation of a reading.
pub static READING_DEVIATION: Bounded = Bounded {
    name: "standard deviation of the reading",
    unit: "m",
    min: 1e-6,
    max: 1.0,
    remedy: "Precision of the survey and what the prediction's shape cannot follow, in metres.",
};
/// A predicted or read value, or a sensitivity.
pub static VALUE: Bounded = Bounded {
    name: "predicted value, reading or sensitivity",
    unit: "m",
    min: -100.0,
    max: 100.0,
    remedy: "Settlement in metres; sensitivities per unit of factor.",
};

/// The two factors with their uncertainty.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Factors {
    /// Factor on settlement, a.
    pub size: f64,
    /// Factor on time, b.
    pub pace: f64,
    /// Variance of a.
    pub size_variance: f64,
    /// Variance of b.
    pub pace_variance: f64,
    /// Covariance of a and b.
    pub covariance: f64,
}

/// What the prediction gives at the time of a reading, for the factors as they stand.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Predicted {
    /// Settlement `a S0 U(b t)`, m.
    pub settlement_m: f64,
    /// Its derivative by a: `S0 U(b t)`, m.
    pub by_size_m: f64,
    /// Its derivative by b: `a S0 t U'(b t)`, m.
    pub by_pace_m: f64,
}

/// How far a reading lay from the prediction before it was taken in.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Surprise {
    /// Reading less prediction, m.
    pub difference_m: f64,
    /// The same in standard deviations of prediction and reading together. Beyond 3 the reading or
    /// the model is wrong: look before updating on.
    pub deviations: f64,
}

impl Factors {
    /// Both 1, independent, with these standard deviations.
    ///
    /// # Errors
    /// A standard deviation outside its range.
    pub fn new(size_deviation: f64, pace_deviation: f64) -> Result<Self, OutOfRange> {
        FACTOR_DEVIATION.check(size_deviation)?;
        FACTOR_DEVIATION.check(pace_deviation)?;
        Ok(Self {
            size: 1.0,
            pace: 1.0,
            size_variance: size_deviation * size_deviation,
            pace_variance: pace_deviation * pace_deviation,
            covariance: 0.0,
        })
    }

    /// Standard deviation of a prediction from the uncertainty of the factors, m.
    #[must_use]
    pub fn deviation_m(&self, predicted: &Predicted) -> f64 {
        let (g, h) = (predicted.by_size_m, predicted.by_pace_m);
        let (p, q) = self.gain(predicted);
        libm::sqrt((g * p + h * q).max(0.0))
    }

    /// Covariance of the factors with the prediction: `P g`.
    fn gain(&self, predicted: &Predicted) -> (f64, f64) {
        let (g, h) = (predicted.by_size_m, predicted.by_pace_m);
        (self.size_variance * g + self.covariance * h, self.covariance * g + self.pace_variance * h)
    }

    /// Covariance after a reading, in Joseph's form `(I - k g') P (I - k g')' + k sd^2 k'`, which
    /// rounding cannot turn negative.
    fn shrink(&mut self, (k, l): (f64, f64), (g, h): (f64, f64), deviation_m: f64) {
        let noise = deviation_m * deviation_m;
        let (v, w, c) = (self.size_variance, self.pace_variance, self.covariance);
        let (a, b) = (1.0 - k * g, -k * h);
        let (d, e) = (-l * g, 1.0 - l * h);
        self.size_variance = a * a * v + 2.0 * a * b * c + b * b * w + noise * k * k;
        self.pace_variance = d * d * v + 2.0 * d * e * c + e * e * w + noise * l * l;
        self.covariance = a * d * v + (a * e + b * d) * c + b * e * w + noise * k * l;
    }

    /// Takes one reading in.
    ///
    /// # Errors
    /// A value outside its range; the factors are then unchanged.
    pub fn take(
        &mut self,
        reading_m: f64,
        reading_deviation_m: f64,
        predicted: &Predicted,
    ) -> Result<Surprise, OutOfRange> {
        self.take_with(reading_m, reading_deviation_m, predicted, &mut Silent)
    }

    /// As [`Factors::take`], writing the new factors.
    ///
    /// # Errors
    /// As [`Factors::take`].
    pub fn take_with(
        &mut self,
        reading_m: f64,
        reading_deviation_m: f64,
        predicted: &Predicted,
        working: &mut impl Working,
    ) -> Result<Surprise, OutOfRange> {
        VALUE.check(reading_m)?;
        READING_DEVIATION.check(reading_deviation_m)?;
        for value in [predicted.settlement_m, predicted.by_size_m, predicted.by_pace_m] {
            VALUE.check(value)?;
        }
        let (p, q) = self.gain(predicted);
        let (g, h) = (predicted.by_size_m, predicted.by_pace_m);
        let variance = g * p + h * q + reading_deviation_m * reading_deviation_m;
        let difference_m = reading_m - predicted.settlement_m;
        let step = difference_m / variance;
        self.size += p * step;
        self.pace += q * step;
        self.shrink((p / variance, q / variance), (g, h), reading_deviation_m);
        for (name, value, gain) in
            [("factor on settlement", self.size, p), ("factor on time", self.pace, q)]
        {
            working.step(Step {
                name,
                value,
                unit: "",
                formula: "factor before + (P g)(s_read - s_predicted)/(g' P g + sd^2)",
                inputs: &[
                    ("P g", gain),
                    ("s_read", reading_m),
                    ("s_predicted", predicted.settlement_m),
                    ("g' P g + sd^2", variance),
                ],
                source: "Kalman 1960; Asaoka 1978 for settlement",
            });
        }
        Ok(Surprise { difference_m, deviations: difference_m / libm::sqrt(variance) })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// A hyperbola as the prediction, `S0 U(t) = t/(100 + 2 t)`.
    fn predicted(factors: &Factors, day: f64) -> Predicted {
        let at = factors.pace * day;
        let divisor = 100.0 + 2.0 * at;
        let by_size_m = at / divisor;
        Predicted {
            settlement_m: factors.size * by_size_m,
            by_size_m,
            by_pace_m: factors.size * day * 100.0 / (divisor * divisor),
        }
    }

    #[test]
    fn readings_of_another_ground_bring_its_factors_out() {
        let truth = Factors { size: 1.25, pace: 0.7, ..Factors::new(0.3, 0.5).unwrap() };
        let mut factors = Factors::new(0.3, 0.5).unwrap();
        for day in [5.0, 10.0, 20.0, 40.0, 80.0, 160.0, 320.0, 640.0] {
            let reading_m = predicted(&truth, day).settlement_m;
            let now = predicted(&factors, day);
            let before = factors;
            factors.take(reading_m, 0.002, &now).unwrap();
            assert!(factors.size_variance <= before.size_variance);
            assert!(factors.pace_variance <= before.pace_variance);
        }
        assert!((factors.size - 1.25).abs() < 0.03, "{factors:?}");
        assert!((factors.pace - 0.7).abs() < 0.08, "{factors:?}");
    }

    #[test]
    fn a_reading_far_off_is_called_a_surprise() {
        let mut factors = Factors::new(0.1, 0.1).unwrap();
        let now = predicted(&factors, 50.0);
        let surprise = factors.take(now.settlement_m + 0.2, 0.002, &now).unwrap();
        assert!(surprise.deviations > 3.0 && (surprise.difference_m - 0.2).abs() < 1e-15);
        let before = factors;
        assert!(factors.take(f64::NAN, 0.002, &now).is_err());
        assert_eq!(factors, before, "unchanged");
    }
}
