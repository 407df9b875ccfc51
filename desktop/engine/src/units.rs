//! Units that files of readings are written in, and their exact conversion.

use crate::site::reader::{Choice, choices};

choices! {
    /// A unit of a column.
    pub enum UnitName {
        /// Pascal.
        Pa = "Pa",
        /// Kilopascal.
        Kpa = "kPa",
        /// Megapascal.
        Mpa = "MPa",
        /// Bar, 100 kPa.
        Bar = "bar",
        /// Millibar, 0.1 kPa.
        Mbar = "mbar",
        /// Hectopascal, 0.1 kPa.
        Hpa = "hPa",
        /// Pound-force per square inch.
        Psi = "psi",
        /// Pound-force per square foot.
        Psf = "psf",
        /// Kilogram-force per square centimetre.
        KgfCm2 = "kgf/cm2",
        /// Conventional metre of water, 9.80665 kPa.
        MetreWater = "mH2O",
        /// Conventional foot of water.
        FootWater = "ftH2O",
        /// Conventional inch of water.
        InchWater = "inH2O",
        /// Conventional millimetre of mercury, 133.322387415 Pa.
        MillimetreMercury = "mmHg",
        /// Metre.
        Metre = "m",
        /// Decimetre.
        Decimetre = "dm",
        /// Centimetre.
        Centimetre = "cm",
        /// Millimetre.
        Millimetre = "mm",
        /// Foot, 0.3048 m.
        Foot = "ft",
        /// Inch, 25.4 mm.
        Inch = "in",
        /// Degree Celsius.
        Celsius = "C",
        /// Degree Fahrenheit.
        Fahrenheit = "F",
        /// Kelvin.
        Kelvin = "K",
        /// Raw reading of a gauge.
        Digits = "digits",
    }
}

/// What a unit measures.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Dimension {
    /// Pressure.
    Pressure,
    /// Length.
    Length,
    /// Temperature.
    Temperature,
    /// A raw reading.
    Raw,
}

impl Dimension {
    /// As it reads in a message.
    #[must_use]
    pub fn word(self) -> &'static str {
        match self {
            Self::Pressure => "a pressure",
            Self::Length => "a length",
            Self::Temperature => "a temperature",
            Self::Raw => "a raw reading",
        }
    }
}

/// A unit as `base = (value * multiply + shift) / divide`, with base kPa, m or degree Celsius.
/// Two whole numbers instead of one factor keep decimal conversions exact to the last digit
/// (0.1 and 0.001 are not exact in binary, 10 and 1000 are).
#[derive(Debug, Clone, Copy, PartialEq)]
struct Scale {
    multiply: f64,
    divide: f64,
    shift: f64,
}

const fn scale(multiply: f64, divide: f64) -> Scale {
    Scale { multiply, divide, shift: 0.0 }
}

impl UnitName {
    /// All of them.
    pub fn all() -> impl Iterator<Item = Self> {
        Self::ALL.iter().map(|(unit, _)| *unit)
    }

    /// The unit of a name.
    #[must_use]
    pub fn named(name: &str) -> Option<Self> {
        Self::all().find(|unit| unit.word() == name)
    }

    /// What it measures.
    #[must_use]
    pub fn dimension(self) -> Dimension {
        match self {
            Self::Pa
            | Self::Kpa
            | Self::Mpa
            | Self::Bar
            | Self::Mbar
            | Self::Hpa
            | Self::Psi
            | Self::Psf
            | Self::KgfCm2
            | Self::MetreWater
            | Self::FootWater
            | Self::InchWater
            | Self::MillimetreMercury => Dimension::Pressure,
            Self::Metre
            | Self::Decimetre
            | Self::Centimetre
            | Self::Millimetre
            | Self::Foot
            | Self::Inch => Dimension::Length,
            Self::Celsius | Self::Fahrenheit | Self::Kelvin => Dimension::Temperature,
            Self::Digits => Dimension::Raw,
        }
    }

    /// Factors by definition: inch 25.4 mm and pound 0.45359237 kg (1959 agreement), standard
    /// gravity 9.80665 m/s2, conventional water 1000 kg/m3 and mercury 13595.1 kg/m3 under it.
    fn scale(self) -> Scale {
        // lbf/in2 = 0.45359237 * 9.80665 / 0.0254^2 Pa.
        const PSI_KPA: f64 = 6.894_757_293_168_361;
        const METRE_WATER_KPA: f64 = 9.806_65;
        match self {
            Self::Kpa | Self::Metre | Self::Celsius | Self::Digits => scale(1.0, 1.0),
            Self::Pa | Self::Millimetre => scale(1.0, 1000.0),
            Self::Mpa => scale(1000.0, 1.0),
            Self::Bar => scale(100.0, 1.0),
            Self::Mbar | Self::Hpa | Self::Decimetre => scale(1.0, 10.0),
            Self::Psi => scale(PSI_KPA, 1.0),
            Self::Psf => scale(PSI_KPA, 144.0),
            Self::KgfCm2 => scale(98.0665, 1.0),
            Self::MetreWater => scale(METRE_WATER_KPA, 1.0),
            Self::FootWater => scale(METRE_WATER_KPA * 3048.0, 10_000.0),
            Self::InchWater => scale(METRE_WATER_KPA * 254.0, 10_000.0),
            Self::MillimetreMercury => scale(0.133_322_387_415, 1.0),
            Self::Centimetre => scale(1.0, 100.0),
            Self::Foot => scale(3048.0, 10_000.0),
            Self::Inch => scale(254.0, 10_000.0),
            Self::Fahrenheit => Scale { multiply: 5.0, divide: 9.0, shift: -160.0 },
            Self::Kelvin => Scale { multiply: 1.0, divide: 1.0, shift: -273.15 },
        }
    }

    /// The unit in which a channel that is no instrument is worked with.
    #[must_use]
    pub(crate) fn of_channel(channel: &str) -> Self {
        if channel == "barometer" { Self::Kpa } else { Self::Celsius }
    }

    /// Converts a value of this unit to another of the same dimension; `None` across dimensions.
    /// The same unit gives the same bits back.
    #[must_use]
    pub fn convert(self, value: f64, to: UnitName) -> Option<f64> {
        if self.dimension() != to.dimension() {
            return None;
        }
        if self == to {
            return Some(value);
        }
        let (from, to) = (self.scale(), to.scale());
        if from.shift == 0.0 && to.shift == 0.0 {
            let (up, down) = (from.multiply * to.divide, from.divide * to.multiply);
            // A common factor is taken out, so that cm to mm is times 10, not times 1000 by 100.
            return Some(if up >= down && up % down == 0.0 {
                value * (up / down)
            } else if down % up == 0.0 {
                value / (down / up)
            } else {
                value * up / down
            });
        }
        let base = (value * from.multiply + from.shift) / from.divide;
        Some((base * to.divide - to.shift) / to.multiply)
    }
}

#[cfg(test)]
mod tests {
    use super::UnitName::{self, *};

    /// NIST Special Publication 811 (2008), appendix B.8, to the digits printed there (from
    /// memory); those marked exact there are compared to the last digit in the next test.
    #[test]
    fn factors_agree_with_the_published_table() {
        let printed: [(UnitName, f64, UnitName, f64); 8] = [
            (Psi, 6.894_757, Kpa, 5e-7),
            (Psf, 0.047_880_26, Kpa, 5e-9),
            (KgfCm2, 98.0665, Kpa, 5e-5),
            (MetreWater, 9.806_65, Kpa, 5e-6),
            (FootWater, 2.989_067, Kpa, 5e-7),
            (InchWater, 0.249_088_9, Kpa, 5e-8),
            (MillimetreMercury, 0.133_322_4, Kpa, 5e-8),
            (Bar, 100.0, Kpa, 0.0),
        ];
        for (unit, factor, base, half_digit) in printed {
            let ours = unit.convert(1.0, base).unwrap();
            assert!((ours - factor).abs() <= half_digit, "{unit}: {ours} against {factor}");
        }
    }

    #[test]
    fn decimal_conversions_are_exact_to_the_last_digit() {
        for (value, from, to, expected) in [
            (12.3, Centimetre, Millimetre, 123.0),
            (0.1, Metre, Millimetre, 100.0),
            (1013.25, Mbar, Kpa, 101.325),
            (1013.25, Hpa, Mbar, 1013.25),
            (1.0, Foot, Metre, 0.3048),
            (1.0, Inch, Millimetre, 25.4),
            (12.0, Inch, Foot, 1.0),
            (25.4, Millimetre, Inch, 1.0),
            (77.0, Fahrenheit, Celsius, 25.0),
            (298.15, Kelvin, Celsius, 25.0),
            (25.0, Celsius, Fahrenheit, 77.0),
        ] {
            assert_eq!(from.convert(value, to), Some(expected), "{value} {from} to {to}");
        }
    }

    #[test]
    fn the_same_unit_gives_the_same_bits_and_another_dimension_nothing() {
        assert_eq!(Psi.convert(0.1 + 0.2, Psi), Some(0.1 + 0.2));
        assert_eq!(Metre.convert(1.0, Kpa), None);
        assert_eq!(Celsius.convert(1.0, Digits), None);
    }
}
