//! Plain electrical signals: voltage, current loop, thermistor.

use super::{FACTOR, ReductionError, finite};
use crate::quantity::Bounded;
use crate::units::ZERO_CELSIUS_K;
use core::fmt;
use serde::{Deserialize, Serialize};

static RESISTANCE: Bounded = Bounded {
    name: "thermistor resistance",
    unit: "ohm",
    min: 10.0,
    max: 5_000_000.0,
    remedy: "An open circuit or a short is no temperature; check the cable.",
};

/// A signal that says by itself that it is no measurement.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum SignalFault {
    /// Loop current in the low failure band: broken wire or failed transmitter.
    LoopLow {
        /// The current, mA.
        current_ma: f64,
    },
    /// Loop current in the high failure band: short or failed transmitter.
    LoopHigh {
        /// The current, mA.
        current_ma: f64,
    },
}

impl fmt::Display for SignalFault {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::LoopLow { current_ma } => write!(
                f,
                "loop current {current_ma:.2} mA is in the low failure band; check for a broken \
                 wire or a failed transmitter"
            ),
            Self::LoopHigh { current_ma } => write!(
                f,
                "loop current {current_ma:.2} mA is in the high failure band; check for a short \
                 or a failed transmitter"
            ),
        }
    }
}

/// A straight line between two ends of a signal: voltage, ratio, count.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct LinearSignal {
    /// Signal at the low end.
    pub signal_low: f64,
    /// Signal at the high end.
    pub signal_high: f64,
    /// Value at the low end.
    pub value_low: f64,
    /// Value at the high end.
    pub value_high: f64,
}

impl LinearSignal {
    /// Checks the four ends.
    ///
    /// # Errors
    /// An end that is not finite, or a signal span of zero.
    pub fn new(
        (signal_low, signal_high): (f64, f64),
        (value_low, value_high): (f64, f64),
    ) -> Result<Self, ReductionError> {
        for end in [signal_low, signal_high, value_low, value_high] {
            FACTOR.check(end)?;
        }
        if signal_low == signal_high {
            return Err(ReductionError::EmptyScale);
        }
        Ok(Self { signal_low, signal_high, value_low, value_high })
    }

    /// The value of a signal, on the same line beyond the ends; whether that is still a reading is
    /// for the range check.
    ///
    /// # Errors
    /// A result that is not finite.
    pub fn value(&self, signal: f64) -> Result<f64, ReductionError> {
        let share = (signal - self.signal_low) / (self.signal_high - self.signal_low);
        finite(self.value_low + share * (self.value_high - self.value_low))
    }
}

/// A 4 to 20 mA loop. Currents at or below 3.6 mA and at or above 21 mA are failure signals, not
/// values.
///
/// # References
/// NAMUR recommendation NE 43, failure bands, as given in public summaries; the recommendation
/// itself was not read.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct CurrentLoop {
    line: LinearSignal,
}

impl CurrentLoop {
    /// Highest current of the low failure band, mA.
    pub const FAILURE_LOW_MA: f64 = 3.6;
    /// Lowest current of the high failure band, mA.
    pub const FAILURE_HIGH_MA: f64 = 21.0;

    /// A loop by its values at 4 mA and at 20 mA.
    ///
    /// # Errors
    /// A value that is not finite.
    pub fn new(value_at_4_ma: f64, value_at_20_ma: f64) -> Result<Self, ReductionError> {
        let line = LinearSignal::new((4.0, 20.0), (value_at_4_ma, value_at_20_ma))?;
        Ok(Self { line })
    }

    /// The value of a current, mA.
    ///
    /// # Errors
    /// [`SignalFault`] in the failure bands; not finite otherwise.
    pub fn value(&self, current_ma: f64) -> Result<f64, ReductionError> {
        if current_ma <= Self::FAILURE_LOW_MA {
            return Err(ReductionError::Signal(SignalFault::LoopLow { current_ma }));
        }
        if current_ma >= Self::FAILURE_HIGH_MA {
            return Err(ReductionError::Signal(SignalFault::LoopHigh { current_ma }));
        }
        self.line.value(current_ma)
    }
}

/// A thermistor by the equation of Steinhart and Hart,
/// `1/T = A + B ln R + C (ln R)^3`, T in kelvin, R in ohm.
///
/// # References
/// Steinhart and Hart 1968.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Thermistor {
    a: f64,
    b: f64,
    c: f64,
}

impl Thermistor {
    /// The common thermistor of 3000 ohm at 25 C in wire gauges, 0 to 70 C within about 0.1 C.
    /// From memory: compare with the calibration sheet of the gauge.
    pub const OHM_3000: Self = Self { a: 1.4051e-3, b: 2.369e-4, c: 1.019e-7 };

    /// A thermistor by its three coefficients.
    ///
    /// # Errors
    /// A coefficient that is not finite.
    pub fn new(a: f64, b: f64, c: f64) -> Result<Self, ReductionError> {
        for coefficient in [a, b, c] {
            FACTOR.check(coefficient)?;
        }
        Ok(Self { a, b, c })
    }

    /// Temperature, C.
    ///
    /// # Errors
    /// A resistance no thermistor has, or coefficients that give no temperature above absolute
    /// zero.
    pub fn temperature_c(&self, resistance_ohm: f64) -> Result<f64, ReductionError> {
        let ln_r = libm::log(RESISTANCE.check(resistance_ohm)?);
        let inverse = self.a + self.b * ln_r + self.c * ln_r * ln_r * ln_r;
        if inverse <= 0.0 {
            return Err(ReductionError::NotFinite);
        }
        finite(1.0 / inverse - ZERO_CELSIUS_K)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_loop_in_a_failure_band_is_a_fault_and_never_a_value() {
        let gauge = CurrentLoop::new(0.0, 20.0).unwrap();
        assert_eq!(gauge.value(4.0), Ok(0.0));
        assert_eq!(gauge.value(12.0), Ok(10.0));
        assert!((gauge.value(20.5).unwrap() - 20.625).abs() < 1e-12);
        for current_ma in [0.0, 3.6, 21.0, 24.0] {
            let error = gauge.value(current_ma).unwrap_err();
            assert_eq!(error.doubt(), crate::instrument::Doubt::NoSignal, "{current_ma} mA");
        }
        assert!(gauge.value(f64::NAN).is_err());
    }

    #[test]
    fn a_scale_without_length_is_refused() {
        assert_eq!(LinearSignal::new((5.0, 5.0), (0.0, 1.0)), Err(ReductionError::EmptyScale));
        let falling = LinearSignal::new((10.0, 0.0), (0.0, 350.0)).unwrap();
        assert_eq!(falling.value(5.0), Ok(175.0));
    }

    /// A thermistor through three points of a table.
    fn through(fixed: [(f64, f64); 3]) -> Thermistor {
        let [(l1, y1), (l2, y2), (l3, y3)] =
            fixed.map(|(ohm, celsius)| (ohm.ln(), 1.0 / (celsius + ZERO_CELSIUS_K)));
        // Divided differences of y = A + B L + C L^3.
        let (g2, g3) = ((y2 - y1) / (l2 - l1), (y3 - y1) / (l3 - l1));
        let c = ((g3 - g2) / (l3 - l2)) / (l1 + l2 + l3);
        let b = g2 - c * (l1 * l1 + l1 * l2 + l2 * l2);
        Thermistor::new(y1 - (b + l1 * l1 * c) * l1, b, c).unwrap()
    }

    /// Two published tables: three points of each fix the coefficients, the others must follow.
    /// The 10 kohm thermistor of a temperature controller's manual (appendix on the equation,
    /// which claims 0.01 C; its row for 40 C, 5331 ohm, breaks the otherwise smooth ratios of the
    /// table by 2 % and is left out as a misprint), and the 10K3MCD1 thermistor as printed in the
    /// manual of an air temperature probe (appendix C), where 40 degrees of span allow 0.05 C.
    #[test]
    fn three_points_of_a_published_table_give_the_others() {
        let warm = through([(32128.0, 0.0), (9814.0, 25.0), (3542.0, 50.0)]);
        for (ohm, celsius) in [(19549.0, 10.0), (12262.0, 20.0), (7908.0, 30.0)] {
            let computed = warm.temperature_c(ohm).unwrap();
            assert!((computed - celsius).abs() < 0.01, "{ohm} ohm: {computed} for {celsius} C");
        }
        let cold = through([(336_103.2, -40.0), (97_006.9, -20.0), (32_650.9, 0.0)]);
        for (ohm, celsius) in
            [(242_430.2, -35.0), (176_804.8, -30.0), (72_911.1, -15.0), (55_303.9, -10.0)]
        {
            let computed = cold.temperature_c(ohm).unwrap();
            assert!((computed - celsius).abs() < 0.05, "{ohm} ohm: {computed} for {celsius} C");
        }
    }

    /// Resistances of the 3000 ohm curve from memory, to 0.2 C.
    #[test]
    fn the_common_thermistor_reads_25_c_at_3000_ohm() {
        for (ohm, celsius) in
            [(9796.0, 0.0), (5971.0, 10.0), (3748.0, 20.0), (3000.0, 25.0), (2417.0, 30.0)]
        {
            let computed = Thermistor::OHM_3000.temperature_c(ohm).unwrap();
            assert!((computed - celsius).abs() < 0.2, "{ohm} ohm: {computed} for {celsius} C");
        }
        for open in [f64::INFINITY, f64::NAN, 0.0, -5.0] {
            assert!(Thermistor::OHM_3000.temperature_c(open).is_err());
        }
    }
}
