//! Values as they are read aloud.

use super::{ImportFile, ImportMessage, InstrumentRow, LoadAtReading, Margin};
use crate::chart::number;

/// An age in words, in one unit: `2 min`, `5 h`, `3 days`.
pub fn age_in_words(age_s: i64) -> String {
    const MINUTE_S: i64 = 60;
    const HOUR_S: i64 = 60 * MINUTE_S;
    const DAY_S: i64 = 24 * HOUR_S;
    // Each unit serves until two of the next are full, so that no age is off by a half.
    match age_s {
        ..0 => "after this moment".to_owned(),
        0..MINUTE_S => "under 1 min".to_owned(),
        _ if age_s < 2 * HOUR_S => format!("{} min", age_s / MINUTE_S),
        _ if age_s < 2 * DAY_S => format!("{} h", age_s / HOUR_S),
        _ => format!("{} days", age_s / DAY_S),
    }
}

/// A value with its unit, or a dash where there is none.
pub(super) fn value(value: Option<f64>, row: &InstrumentRow) -> String {
    match value.filter(|value| value.is_finite()) {
        Some(value) => with_unit(&number(value, row.decimals), &row.unit),
        None => "–".to_owned(),
    }
}

/// `68 to 81 kPa`.
pub(super) fn band(row: &InstrumentRow) -> String {
    match (row.band_low, row.band_high) {
        (Some(low), Some(high)) => {
            let ends = format!("{} to {}", number(low, row.decimals), number(high, row.decimals));
            with_unit(&ends, &row.unit)
        }
        _ => "–".to_owned(),
    }
}

/// `4.4 kPa (5 %)` and `to Stop`, or by how much the limit is passed.
pub(super) fn margin(row: &InstrumentRow) -> Option<(String, String)> {
    let Margin { to, value, percent } = row.margin.as_ref()?;
    // A margin that is left is never written as none.
    let vanishes = value.abs() < 0.5 * 10f64.powi(-(row.decimals as i32)) && *value != 0.0;
    let decimals = row.decimals + usize::from(vanishes);
    let distance = with_unit(&number(value.abs(), decimals), &row.unit);
    let percent = percent.map(|percent| format!(" ({} %)", number(percent.abs(), 0)));
    let way = if *value < 0.0 { "beyond" } else { "to" };
    Some((distance + &percent.unwrap_or_default(), format!("{way} {}", to.name())))
}

/// Before the load that most readings share.
pub(super) const READ_AT: &str = "Read at, unless a row says otherwise: ";

/// `13.42 m, 139.8 kPa, stage 4, 6.5 h in`.
pub(super) fn load(load: &LoadAtReading) -> String {
    format!(
        "{} m, {} kPa, {}, {} h in",
        number(load.liquid_level_m, 2),
        number(load.applied_pressure_kpa, 1),
        load.stage,
        number(load.hours_in_stage, 1)
    )
}

/// What became of one file.
pub(super) fn import(file: &ImportFile) -> String {
    format!(
        "{}: {} rows, {} readings kept, {} duplicates ignored, {} rows refused.",
        file.name, file.rows, file.kept, file.duplicates, file.refused
    )
}

/// `line 17, data lost: ...`.
pub(super) fn import_message(message: &ImportMessage) -> String {
    let line = message.line.map(|line| format!("line {line}"));
    let lost = message.lost_data.then(|| "data lost".to_owned());
    let lead: Vec<_> = line.into_iter().chain(lost).collect();
    if lead.is_empty() {
        message.text.clone()
    } else {
        format!("{}: {}", lead.join(", "), message.text)
    }
}

pub(super) fn age(age_s: Option<i64>) -> String {
    age_s.map_or_else(|| "–".to_owned(), age_in_words)
}

fn with_unit(text: &str, unit: &str) -> String {
    if unit.is_empty() { text.to_owned() } else { format!("{text} {unit}") }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ages_are_never_rounded_up() {
        let ages = [-1, 0, 59, 60, 7_199, 7_200, 172_799, 172_800].map(age_in_words);
        assert_eq!(
            ages,
            [
                "after this moment",
                "under 1 min",
                "under 1 min",
                "1 min",
                "119 min",
                "2 h",
                "47 h",
                "2 days"
            ]
        );
    }
}
