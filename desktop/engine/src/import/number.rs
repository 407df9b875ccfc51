//! A field of a file to a number, or the reason why not.

use crate::site::Decimal;
use serde::Serialize;
use std::fmt;

/// Why a field is not a number.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum NotANumber {
    /// Text.
    Text,
    /// The words for no number or infinity.
    NotFinite,
    /// It would be a number with a decimal comma.
    DecimalComma,
    /// It would be a number with a decimal point.
    DecimalPoint,
    /// It has separators of thousands.
    Thousands,
}

impl fmt::Display for NotANumber {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Text => "text where a number belongs",
            Self::NotFinite => "not a number (NaN or infinity)",
            Self::DecimalComma => "a decimal comma in a file with decimal points",
            Self::DecimalPoint => "a decimal point in a file with decimal commas",
            Self::Thousands => "separators of thousands",
        })
    }
}

/// Longest field that is read as a number.
const LONGEST: usize = 40;

/// Reads a field without surrounding space. Only plain numbers are taken: sign, digits, one
/// decimal mark, exponent.
pub(super) fn read(field: &[u8], decimal: Decimal) -> Result<f64, NotANumber> {
    match plain(field, mark(decimal)) {
        Some(value) if value.is_finite() => Ok(value),
        Some(_) => Err(NotANumber::NotFinite),
        None => Err(reason(field, decimal)),
    }
}

fn mark(decimal: Decimal) -> u8 {
    match decimal {
        Decimal::Point => b'.',
        Decimal::Comma => b',',
    }
}

fn plain(field: &[u8], mark: u8) -> Option<f64> {
    if field.len() > LONGEST {
        return None;
    }
    // Copied with a decimal point, so that the standard library reads it; its words for infinity
    // and its like never get there.
    let mut text = [0u8; LONGEST];
    for (to, &byte) in text.iter_mut().zip(field) {
        *to = match byte {
            b'0'..=b'9' | b'+' | b'-' | b'e' | b'E' => byte,
            _ if byte == mark => b'.',
            _ => return None,
        };
    }
    std::str::from_utf8(text.get(..field.len())?).ok()?.parse().ok()
}

fn reason(field: &[u8], decimal: Decimal) -> NotANumber {
    let other = match decimal {
        Decimal::Point => Decimal::Comma,
        Decimal::Comma => Decimal::Point,
    };
    let text = String::from_utf8_lossy(field).to_ascii_lowercase();
    let word = text.trim_start_matches(['+', '-', '#', '1', '.']);
    if plain(field, mark(other)).is_some() {
        match decimal {
            Decimal::Point => NotANumber::DecimalComma,
            Decimal::Comma => NotANumber::DecimalPoint,
        }
    } else if word.starts_with("nan") || word.starts_with("inf") || word.starts_with("qnan") {
        NotANumber::NotFinite
    } else if field.iter().any(u8::is_ascii_digit)
        && field.iter().all(|byte| byte.is_ascii_digit() || b".,' +-".contains(byte))
    {
        NotANumber::Thousands
    } else {
        NotANumber::Text
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn plain_numbers_are_read() {
        for (text, value) in
            [("12.5", 12.5), ("-0.25", -0.25), ("+3", 3.0), ("1e-3", 0.001), (".5", 0.5)]
        {
            assert_eq!(read(text.as_bytes(), Decimal::Point), Ok(value), "{text}");
        }
        assert_eq!(read(b"-12,5", Decimal::Comma), Ok(-12.5));
    }

    #[test]
    fn everything_else_is_refused_with_its_reason() {
        for (text, decimal, expected) in [
            ("12,5", Decimal::Point, NotANumber::DecimalComma),
            ("12.5", Decimal::Comma, NotANumber::DecimalPoint),
            ("1,234.5", Decimal::Point, NotANumber::Thousands),
            ("1.234,5", Decimal::Comma, NotANumber::Thousands),
            ("1'234.5", Decimal::Point, NotANumber::Thousands),
            ("NaN", Decimal::Point, NotANumber::NotFinite),
            ("-inf", Decimal::Point, NotANumber::NotFinite),
            ("1.#QNAN", Decimal::Point, NotANumber::NotFinite),
            ("1e999", Decimal::Point, NotANumber::NotFinite),
            ("12.5 kPa", Decimal::Point, NotANumber::Text),
            ("#REF!", Decimal::Point, NotANumber::Text),
            ("0x10", Decimal::Point, NotANumber::Text),
            ("--5", Decimal::Point, NotANumber::Thousands),
            ("", Decimal::Point, NotANumber::Text),
            ("\u{2212}5", Decimal::Point, NotANumber::Text),
        ] {
            assert_eq!(read(text.as_bytes(), decimal), Err(expected), "{text}");
        }
    }
}
