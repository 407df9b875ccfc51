//! Vibrating-wire pressure gauges.

use super::{BAROMETER, FACTOR, ReductionError, TEMPERATURE, finite, needed};
use crate::instrument::CorrectionInput;
use crate::quantity::{Bounded, OutOfRange};
use crate::working::{Silent, Step, Working};
use serde::{Deserialize, Serialize};

static FREQUENCY: Bounded = Bounded {
    name: "wire frequency",
    unit: "Hz",
    min: 300.0,
    max: 7_000.0,
    remedy: "A live wire answers between about 400 and 6500 Hz; check cable and excitation.",
};

static DIGITS: Bounded = Bounded {
    name: "wire digits (f^2/1000)",
    unit: "digits",
    min: 90.0,
    max: 49_000.0,
    remedy: "Digits are the square of the frequency in Hz over 1000.",
};

/// Digits of a wire, `R = f^2 / 1000` with the frequency in Hz.
///
/// # Errors
/// A frequency no live wire gives.
pub fn digits_from_frequency(frequency_hz: f64) -> Result<f64, OutOfRange> {
    let frequency_hz = FREQUENCY.check(frequency_hz)?;
    Ok(frequency_hz * frequency_hz / 1000.0)
}

/// How digits become pressure.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum WireConversion {
    /// `P = G (R0 - R)`. G is positive for a gauge whose digits fall as pressure rises; a sheet
    /// that is written for `R - R0` gives the same number with the other sign.
    Linear {
        /// Gauge factor G, kPa per digit.
        factor_kpa_per_digit: f64,
    },
    /// `P = A R^2 + B R + C`, with C from the zero reading on site ([`site_zeroed_constant`]).
    Polynomial {
        /// A, kPa per digit squared.
        a: f64,
        /// B, kPa per digit.
        b: f64,
        /// C, kPa.
        c: f64,
    },
}

/// The constant C that makes the polynomial zero at the zero reading: `C = -(A R0^2 + B R0)`.
#[must_use]
pub fn site_zeroed_constant(a: f64, b: f64, digits_zero: f64) -> f64 {
    -(a * digits_zero * digits_zero + b * digits_zero)
}

/// Calibration, zero reading and switches of one gauge.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct WireCalibration {
    /// Digits at the zero reading, R0.
    pub digits_zero: f64,
    /// Conversion of digits.
    pub conversion: WireConversion,
    /// Temperature at the zero reading, T0, C.
    pub temperature_zero_c: f64,
    /// Temperature factor K, kPa per C.
    pub temperature_factor_kpa_per_c: f64,
    /// Air pressure at the zero reading, kPa.
    pub barometer_zero_kpa: f64,
    /// Whether `K (T - T0)` is added.
    pub apply_temperature: bool,
    /// Whether the change of air pressure is taken off: right for an unvented gauge that feels the
    /// air, wrong for one sealed so deep that it does not.
    pub apply_barometer: bool,
}

/// What is read from the gauge at one moment.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct WireInput {
    /// Digits, R.
    pub digits: f64,
    /// Temperature of the gauge, C.
    pub temperature_c: Option<f64>,
    /// Air pressure, kPa.
    pub barometer_kpa: Option<f64>,
}

/// Pressure relative to the zero reading, with the part of each step.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct WirePressure {
    /// The sum of the parts, kPa.
    pub pressure_kpa: f64,
    /// From digits alone, kPa.
    pub from_digits_kpa: f64,
    /// Added for temperature, kPa (0 when switched off).
    pub temperature_part_kpa: f64,
    /// Added for air pressure, kPa (negative when the air pressure has risen; 0 when off).
    pub barometer_part_kpa: f64,
}

/// A checked vibrating-wire gauge.
///
/// `P = G (R0 - R) + K (T - T0) - (S - S0)`, or the polynomial in place of the first term.
/// Pressure is relative to the zero reading and rises when digits fall.
///
/// # References
/// Form and sign as commonly printed on calibration sheets of wire gauges; checked against
/// `tests/reference/time/t10_vibrating_wire.csv`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct VibratingWire {
    calibration: WireCalibration,
}

impl VibratingWire {
    /// Checks a calibration.
    ///
    /// # Errors
    /// A value outside its range; the zero temperature and zero air pressure are checked only
    /// where their step is switched on.
    pub fn new(calibration: &WireCalibration) -> Result<Self, ReductionError> {
        DIGITS.check(calibration.digits_zero)?;
        match calibration.conversion {
            WireConversion::Linear { factor_kpa_per_digit } => {
                FACTOR.check(factor_kpa_per_digit)?;
            }
            WireConversion::Polynomial { a, b, c } => {
                for factor in [a, b, c] {
                    FACTOR.check(factor)?;
                }
            }
        }
        if calibration.apply_temperature {
            TEMPERATURE.check(calibration.temperature_zero_c)?;
            FACTOR.check(calibration.temperature_factor_kpa_per_c)?;
        }
        if calibration.apply_barometer {
            BAROMETER.check(calibration.barometer_zero_kpa)?;
        }
        Ok(Self { calibration: *calibration })
    }

    /// What the gauge would show at its own zero reading, kPa: 0 for the linear form; for the
    /// polynomial anything but 0 means that C was not set on site.
    #[must_use]
    pub fn offset_at_zero_kpa(&self) -> f64 {
        self.digits_part(self.calibration.digits_zero)
    }

    /// Pressure relative to the zero reading.
    ///
    /// # Errors
    /// Digits no wire gives, or a missing input of a step that is switched on.
    pub fn pressure(&self, input: &WireInput) -> Result<WirePressure, ReductionError> {
        self.pressure_with(input, &mut Silent)
    }

    /// As [`VibratingWire::pressure`], writing each step.
    ///
    /// # Errors
    /// As [`VibratingWire::pressure`].
    pub fn pressure_with(
        &self,
        input: &WireInput,
        working: &mut impl Working,
    ) -> Result<WirePressure, ReductionError> {
        let digits = DIGITS.check(input.digits)?;
        let from_digits_kpa = finite(self.digits_part(digits))?;
        self.write_conversion(digits, from_digits_kpa, working);
        let temperature_part_kpa = self.temperature_part(input, working)?;
        let barometer_part_kpa = self.barometer_part(input, working)?;
        let pressure_kpa = finite(from_digits_kpa + temperature_part_kpa + barometer_part_kpa)?;
        working.step(Step {
            name: "pressure relative to the zero reading",
            value: pressure_kpa,
            unit: "kPa",
            formula: "P = PR + PT + PS",
            inputs: &[
                ("PR", from_digits_kpa),
                ("PT", temperature_part_kpa),
                ("PS", barometer_part_kpa),
            ],
            source: "",
        });
        Ok(WirePressure { pressure_kpa, from_digits_kpa, temperature_part_kpa, barometer_part_kpa })
    }

    fn digits_part(&self, digits: f64) -> f64 {
        match self.calibration.conversion {
            WireConversion::Linear { factor_kpa_per_digit } => {
                factor_kpa_per_digit * (self.calibration.digits_zero - digits)
            }
            WireConversion::Polynomial { a, b, c } => a * digits * digits + b * digits + c,
        }
    }

    fn write_conversion(&self, digits: f64, value: f64, working: &mut impl Working) {
        let (formula, inputs): (_, &[(&'static str, f64)]) = match self.calibration.conversion {
            WireConversion::Linear { factor_kpa_per_digit: g } => (
                "PR = G (R0 - R)",
                &[("G", g), ("R0", self.calibration.digits_zero), ("R", digits)],
            ),
            WireConversion::Polynomial { a, b, c } => {
                ("PR = A R^2 + B R + C", &[("A", a), ("R", digits), ("B", b), ("C", c)])
            }
        };
        working.step(Step {
            name: "pressure from digits",
            value,
            unit: "kPa",
            formula,
            inputs,
            source: "calibration sheet",
        });
    }

    fn temperature_part(
        &self,
        input: &WireInput,
        working: &mut impl Working,
    ) -> Result<f64, ReductionError> {
        let c = &self.calibration;
        if !c.apply_temperature {
            return Ok(0.0);
        }
        let t = needed(&TEMPERATURE, input.temperature_c, CorrectionInput::Temperature)?;
        let part = c.temperature_factor_kpa_per_c * (t - c.temperature_zero_c);
        working.step(Step {
            name: "temperature correction",
            value: part,
            unit: "kPa",
            formula: "PT = K (T - T0)",
            inputs: &[
                ("K", c.temperature_factor_kpa_per_c),
                ("T", t),
                ("T0", c.temperature_zero_c),
            ],
            source: "calibration sheet",
        });
        Ok(part)
    }

    fn barometer_part(
        &self,
        input: &WireInput,
        working: &mut impl Working,
    ) -> Result<f64, ReductionError> {
        let c = &self.calibration;
        if !c.apply_barometer {
            return Ok(0.0);
        }
        let s = needed(&BAROMETER, input.barometer_kpa, CorrectionInput::Barometer)?;
        let part = -(s - c.barometer_zero_kpa);
        working.step(Step {
            name: "air pressure correction",
            value: part,
            unit: "kPa",
            formula: "PS = -(S - S0)",
            inputs: &[("S", s), ("S0", c.barometer_zero_kpa)],
            source: "",
        });
        Ok(part)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn calibration() -> WireCalibration {
        WireCalibration {
            digits_zero: 9123.4,
            conversion: WireConversion::Linear { factor_kpa_per_digit: 0.07021 },
            temperature_zero_c: 21.3,
            temperature_factor_kpa_per_c: -0.0453,
            barometer_zero_kpa: 99.87,
            apply_temperature: true,
            apply_barometer: true,
        }
    }

    #[test]
    fn a_step_that_is_off_needs_no_input_and_adds_nothing() {
        let bare = WireInput { digits: 8500.0, temperature_c: None, barometer_kpa: None };
        let on = VibratingWire::new(&calibration()).unwrap();
        assert_eq!(on.pressure(&bare), Err(ReductionError::Missing(CorrectionInput::Temperature)));
        let off =
            WireCalibration { apply_temperature: false, apply_barometer: false, ..calibration() };
        let result = VibratingWire::new(&off).unwrap().pressure(&bare).unwrap();
        assert_eq!(result.pressure_kpa, 0.07021 * (9123.4 - 8500.0));
        assert_eq!((result.temperature_part_kpa, result.barometer_part_kpa), (0.0, 0.0));
    }

    #[test]
    fn falling_digits_mean_rising_pressure_and_a_rising_barometer_takes_off() {
        let wire = VibratingWire::new(&calibration()).unwrap();
        let at = |digits, barometer_kpa| {
            let input =
                WireInput { digits, temperature_c: Some(21.3), barometer_kpa: Some(barometer_kpa) };
            wire.pressure(&input).unwrap().pressure_kpa
        };
        assert!(at(9000.0, 99.87) > at(9100.0, 99.87));
        assert!((at(9000.0, 99.87) - at(9000.0, 102.87) - 3.0).abs() < 1e-12);
    }

    #[test]
    fn a_polynomial_that_was_not_zeroed_on_site_shows_its_offset() {
        let (a, b) = (-4.812e-9, -0.07012);
        let zeroed = site_zeroed_constant(a, b, 9123.4);
        let offset = |c| {
            let conversion = WireConversion::Polynomial { a, b, c };
            VibratingWire::new(&WireCalibration { conversion, ..calibration() })
                .unwrap()
                .offset_at_zero_kpa()
        };
        assert!(offset(zeroed).abs() < 1e-12);
        assert!((offset(645.0) - (645.0 - zeroed)).abs() < 1e-9);
    }

    #[test]
    fn a_dead_wire_is_no_pressure() {
        for frequency_hz in [0.0, 12.0, 9000.0, f64::NAN] {
            assert!(digits_from_frequency(frequency_hz).is_err());
        }
        let wire = VibratingWire::new(&calibration()).unwrap();
        let dead = WireInput { digits: 0.0, temperature_c: Some(20.0), barometer_kpa: Some(100.0) };
        assert!(wire.pressure(&dead).is_err());
        let open =
            WireInput { digits: 9000.0, temperature_c: Some(-273.0), barometer_kpa: Some(100.0) };
        assert!(wire.pressure(&open).is_err(), "an open thermistor must not correct a pressure");
    }
}
