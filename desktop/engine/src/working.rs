//! The hand-check sheet: the working of the core with the numbers put in, line by line.

use crate::compare::words::{kind_word, place_words};
use crate::expect::{ExpectError, LoadHistory, Model, state_at};
use crate::report::CAUTIONS;
use crate::site::SiteFile;
use brimstead_core::expectation::explain;
use brimstead_core::units::WATER_UNIT_WEIGHT_KN_M3;
use brimstead_core::working::{Step, Working};
use serde::Serialize;

/// One line of a sheet.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Line {
    /// What was computed.
    pub name: String,
    /// Its value.
    pub value: f64,
    /// Its unit.
    pub unit: &'static str,
    /// The formula in symbols.
    pub formula: &'static str,
    /// The numbers put in, by symbol.
    pub inputs: Vec<(&'static str, f64)>,
    /// Source of the method.
    pub source: &'static str,
}

/// A hand-check sheet.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Sheet {
    /// What it works out, for which instrument, when.
    pub title: String,
    /// Line by line.
    pub lines: Vec<Line>,
    /// What goes with it.
    pub cautions: [&'static str; 6],
}

/// Collects the steps of the core.
#[derive(Debug, Default)]
pub struct Collected {
    /// The lines so far.
    pub lines: Vec<Line>,
}

impl Working for Collected {
    fn step(&mut self, step: Step<'_>) {
        self.lines.push(Line {
            name: step.name.to_owned(),
            value: step.value,
            unit: step.unit,
            formula: step.formula,
            inputs: step.inputs.to_vec(),
            source: step.source,
        });
    }
}

/// Six significant digits, without a trailing tail of zeros.
#[must_use]
pub fn number(value: f64) -> String {
    if value == 0.0 || !value.is_finite() {
        return format!("{value}");
    }
    let magnitude = value.abs().log10().floor() as i32;
    if !(-5..9).contains(&magnitude) {
        return format!("{value:.5e}");
    }
    let places = (5 - magnitude).max(0) as usize;
    let text = format!("{value:.places$}");
    if text.contains('.') {
        text.trim_end_matches('0').trim_end_matches('.').to_owned()
    } else {
        text
    }
}

/// Works one instrument out at a moment: applied pressure, stress, excess pore pressure,
/// settlement, expected reading.
///
/// # Errors
/// When the site cannot be calculated or nothing is expected of the instrument.
pub fn sheet_of(
    site: &SiteFile,
    model: &Model,
    history: &LoadHistory,
    instrument: usize,
    at_s: i64,
) -> Result<Sheet, ExpectError> {
    let given = &site.instruments[instrument];
    let refused = |source| ExpectError::Instrument { id: given.id.clone(), source };
    let reached = state_at(model, history, instrument, at_s)?;
    let mut collected = Collected::default();
    let unit_weight = model.liquid_unit_weight_kn_m3(at_s);
    if let Some(tank) = model.likely().tanks.first() {
        let level_m = reached.moment.liquid_level_m;
        tank.applied_pressure_kpa(level_m, unit_weight, &mut collected)
            .map_err(|source| refused(source.into()))?;
    }
    explain(
        model.likely(),
        &reached.point,
        (&reached.column, &reached.state),
        reached.zero,
        &reached.moment,
        &mut collected,
    )
    .map_err(refused)?;
    let zone = crate::time::zone(&site.site.time_zone).unwrap_or(jiff::tz::TimeZone::UTC);
    Ok(Sheet {
        title: format!(
            "{}, {} {}, {} at {}, liquid level {:.2} m",
            site.site.name,
            kind_word(given.kind),
            given.id,
            place_words(site, given),
            crate::chart::stamp(at_s, &zone),
            reached.moment.liquid_level_m
        ),
        lines: collected.lines,
        cautions: CAUTIONS,
    })
}

impl Sheet {
    /// As a page of a calculation book.
    #[must_use]
    pub fn to_text(&self) -> String {
        let mut text = format!(
            "{}\nExpected reading of the best estimate, step by step; unit weight of water {WATER_UNIT_WEIGHT_KN_M3} kN/m3 unless the site says otherwise.\n",
            self.title
        );
        for (place, line) in self.lines.iter().enumerate() {
            let inputs: Vec<String> = line
                .inputs
                .iter()
                .map(|(symbol, value)| format!("{symbol} = {}", number(*value)))
                .collect();
            text += &format!("\n{:3}. {}\n     {}\n", place + 1, line.name, line.formula);
            if !inputs.is_empty() {
                text += &format!("     with {}\n", inputs.join(", "));
            }
            text += &format!("     = {} {}", number(line.value), line.unit);
            if !line.source.is_empty() {
                text += &format!("   [{}]", line.source);
            }
            text.push('\n');
        }
        text.push('\n');
        for caution in self.cautions {
            text += caution;
            text.push('\n');
        }
        text
    }
}

#[cfg(test)]
mod tests {
    use super::number;

    #[test]
    fn numbers_keep_six_digits() {
        assert_eq!(number(139.800_000_1), "139.8");
        assert_eq!(number(0.000_123_456_78), "0.000123457");
        assert_eq!(number(1.0e-9), "1.00000e-9");
        assert_eq!(number(0.0), "0");
        assert_eq!(number(-12_345.678), "-12345.7");
    }
}
