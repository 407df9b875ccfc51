//! From the units of the core and of the instruments to those on the screen: the one place where
//! the companion converts.

use super::views::{Quantity, Units};
use crate::chart::number;
use crate::site::InstrumentUnit;
use crate::units::UnitName;

/// How a kind of value is shown: converted, rounded, named.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Shown {
    from: UnitName,
    to: UnitName,
    decimals: usize,
}

impl Shown {
    /// Values in the unit of an instrument.
    #[must_use]
    pub fn reading(unit: InstrumentUnit, units: Units) -> Self {
        let (from, us, si_decimals, us_decimals) = match unit {
            InstrumentUnit::Kpa => (UnitName::Kpa, UnitName::Psf, 1, 0),
            InstrumentUnit::Metre => (UnitName::Metre, UnitName::Foot, 3, 2),
            InstrumentUnit::Millimetre => (UnitName::Millimetre, UnitName::Inch, 0, 2),
        };
        Self::choose(from, us, (si_decimals, us_decimals), units)
    }

    /// Pressures, kPa.
    #[must_use]
    pub fn pressure(units: Units) -> Self {
        Self::choose(UnitName::Kpa, UnitName::Psf, (1, 0), units)
    }

    /// The liquid level, m.
    #[must_use]
    pub fn level(units: Units) -> Self {
        Self::choose(UnitName::Metre, UnitName::Foot, (2, 2), units)
    }

    /// Lengths on the site, m.
    #[must_use]
    pub fn length(units: Units) -> Self {
        Self::choose(UnitName::Metre, UnitName::Foot, (1, 1), units)
    }

    /// Settlement given in m.
    #[must_use]
    pub fn settlement(units: Units) -> Self {
        let to = match units {
            Units::Si => UnitName::Millimetre,
            Units::UsCustomary => UnitName::Inch,
        };
        let decimals = if units == Units::Si { 0 } else { 2 };
        Self { from: UnitName::Metre, to, decimals }
    }

    fn choose(from: UnitName, us: UnitName, decimals: (usize, usize), units: Units) -> Self {
        match units {
            Units::Si => Self { from, to: from, decimals: decimals.0 },
            Units::UsCustomary => Self { from, to: us, decimals: decimals.1 },
        }
    }

    /// The unit's name.
    #[must_use]
    pub fn unit(self) -> &'static str {
        self.to.word()
    }

    /// Decimals that values are written with.
    #[must_use]
    pub fn decimals(self) -> usize {
        self.decimals
    }

    /// A value in the unit shown.
    #[must_use]
    pub fn value(self, value: f64) -> f64 {
        // Both units are fixed above and of one dimension.
        self.from.convert(value, self.to).unwrap_or(f64::NAN)
    }

    /// The number alone, as written.
    #[must_use]
    pub fn number(self, value: f64) -> String {
        number(self.value(value), self.decimals)
    }

    /// Number and unit.
    #[must_use]
    pub fn text(self, value: f64) -> String {
        format!("{} {}", self.number(value), self.unit())
    }

    /// As [`Shown::text`], with more decimals where the value would be written as none although
    /// there is one: a margin that is left never reads as nothing.
    #[must_use]
    pub fn small(self, value: f64) -> String {
        let shown = self.value(value);
        let vanishes = shown != 0.0 && shown.abs() < 0.5 * 10_f64.powi(-(self.decimals as i32));
        let decimals = self.decimals + if vanishes { 2 } else { 0 };
        format!("{} {}", number(shown, decimals), self.unit())
    }

    /// "68.0 to 81.0 kPa".
    #[must_use]
    pub fn range(self, low: f64, high: f64) -> String {
        format!("{} to {} {}", self.number(low), self.number(high), self.unit())
    }

    /// A value as a view gives it.
    #[must_use]
    pub fn quantity(self, value: f64) -> Quantity {
        Quantity { value: self.value(value), unit: self.unit().to_owned(), text: self.text(value) }
    }
}

/// A length of time in the two largest units that matter: "1 h 40 min", "3 days 4 h".
#[must_use]
pub fn duration(seconds: f64) -> String {
    let minutes = (seconds / 60.0).round().max(0.0) as i64;
    let (days, hours, rest) = (minutes / 1440, minutes % 1440 / 60, minutes % 60);
    let days_word = if days == 1 { "day" } else { "days" };
    match (days, hours, rest) {
        (0, 0, 0) => "under 1 min".to_owned(),
        (0, 0, _) => format!("{rest} min"),
        (0, _, 0) => format!("{hours} h"),
        (0, _, _) => format!("{hours} h {rest} min"),
        (_, 0, _) => format!("{days} {days_word}"),
        _ => format!("{days} {days_word} {hours} h"),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// 1 ft is 0.3048 m and 1 in 25.4 mm by definition; 1 psf is 0.04788026 kPa (NIST SP 811,
    /// appendix B.8, from memory).
    #[test]
    fn us_customary_is_converted_and_named() {
        let level = Shown::level(Units::UsCustomary);
        assert_eq!(level.text(13.42), "44.03 ft");
        assert_eq!(Shown::pressure(Units::UsCustomary).text(100.0), "2089 psf");
        let plate = Shown::reading(InstrumentUnit::Millimetre, Units::UsCustomary);
        assert_eq!(plate.text(254.0), "10.00 in");
        assert_eq!(Shown::settlement(Units::UsCustomary).text(0.254), "10.00 in");
        assert_eq!(Shown::settlement(Units::Si).text(0.254), "254 mm");
    }

    #[test]
    fn si_keeps_the_bits() {
        let shown = Shown::reading(InstrumentUnit::Kpa, Units::Si);
        assert_eq!(shown.value(0.1 + 0.2), 0.1 + 0.2);
        assert_eq!(shown.range(68.0, 81.04), "68.0 to 81.0 kPa");
    }

    #[test]
    fn a_margin_that_is_left_is_not_written_as_none() {
        let shown = Shown::reading(InstrumentUnit::Kpa, Units::Si);
        assert_eq!(shown.small(0.02), "0.020 kPa");
        assert_eq!(shown.small(0.0), "0.0 kPa");
        assert_eq!(shown.small(4.4), "4.4 kPa");
    }

    #[test]
    fn times_are_said_in_two_units_at_most() {
        let said = [20.0, 100.0 * 60.0, 7200.0, 86_400.0, 100_000.0, 3.0 * 86_400.0 + 14_400.0];
        assert_eq!(
            said.map(duration),
            ["under 1 min", "1 h 40 min", "2 h", "1 day", "1 day 3 h", "3 days 4 h"]
        );
    }
}
