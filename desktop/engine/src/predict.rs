//! Expected readings along the plan of stages.

use crate::chart::{InstrumentChart, Mark, Quantity, Stretch};
use crate::compare::charts::holds;
use crate::compare::page::NamedChart;
use crate::compare::words::{decimals, kind_word, place_words, quantity_word, unit_word};
use crate::expect::{ExpectError, LoadHistory, LoadPoint, Model, expect, scale_of};
use crate::site::{InstrumentKind, InstrumentUnit, SiteFile};
use brimstead_core::quantity::Expected;
use jiff::tz::TimeZone;
use serde::Serialize;

/// Time between the points of predicted curves, s.
const CURVE_STEP_S: i64 = 6 * 3600;

/// The liquid level of the plan: even rises and holds, from the baseline.
#[must_use]
pub fn planned_history(site: &SiteFile) -> LoadHistory {
    let mut points = vec![LoadPoint { time_s: site.baseline.time_s, liquid_level_m: 0.0 }];
    let mut level_m = 0.0;
    for stage in &site.stages {
        points.push(LoadPoint { time_s: stage.start.time_s, liquid_level_m: level_m });
        level_m = stage.to_level_m;
        points.push(LoadPoint { time_s: stage.end.time_s, liquid_level_m: level_m });
        points.push(LoadPoint { time_s: stage.hold_until.time_s, liquid_level_m: level_m });
    }
    LoadHistory::new(points)
}

/// A moment of the plan.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct PlannedMoment {
    /// "Rise 3, end of rise".
    pub name: String,
    /// Unix time, s.
    pub time_s: i64,
    /// Liquid level, m.
    pub liquid_level_m: f64,
    /// Applied pressure, kPa.
    pub applied_pressure_kpa: f64,
}

/// The band of an instrument, in its own unit.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct Band {
    /// Low end.
    pub low: f64,
    /// Likely.
    pub likely: f64,
    /// High end.
    pub high: f64,
}

/// One instrument along the plan.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct PredictedInstrument {
    /// Its id.
    pub id: String,
    /// Kind in words.
    pub kind: &'static str,
    /// Where, in words.
    pub place: String,
    /// Unit.
    pub unit: &'static str,
    /// Decimals.
    pub decimals: usize,
    /// By planned moment.
    pub bands: Vec<Option<Band>>,
    /// Along the plan: time, band.
    #[serde(skip)]
    curve: Vec<(i64, Band)>,
    #[serde(skip)]
    kind_of: InstrumentKind,
}

/// A whole site along its plan.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Prediction {
    /// Format of this document.
    pub format: &'static str,
    /// Name of the site.
    pub site: String,
    /// The site does not exist.
    pub invented: bool,
    /// Moments of the plan.
    pub moments: Vec<PlannedMoment>,
    /// Instruments in the order of the site file.
    pub instruments: Vec<PredictedInstrument>,
    /// What goes with it.
    pub cautions: [&'static str; 6],
}

fn moments(site: &SiteFile, model: &Model, history: &LoadHistory) -> Vec<PlannedMoment> {
    let mut list = Vec::new();
    for stage in &site.stages {
        for (part, time_s) in [
            ("start", stage.start.time_s),
            ("level reached", stage.end.time_s),
            ("end of hold", stage.hold_until.time_s),
        ] {
            let liquid_level_m = history.level_at(time_s).unwrap_or(0.0);
            list.push(PlannedMoment {
                name: format!("{}, {part}", stage.name),
                time_s,
                liquid_level_m,
                applied_pressure_kpa: model.applied_pressure_kpa(time_s, liquid_level_m),
            });
        }
    }
    // The end of a hold is the start of the next stage where they follow each other.
    list.dedup_by_key(|moment| moment.time_s);
    list
}

fn in_unit(band: Expected, unit: InstrumentUnit) -> Band {
    let scale = scale_of(unit);
    Band { low: band.low * scale, likely: band.likely * scale, high: band.high * scale }
}

/// Predicts every instrument along the plan.
///
/// # Errors
/// When the site cannot be calculated.
pub fn predict(site: &SiteFile) -> Result<Prediction, ExpectError> {
    let model = Model::new(site)?;
    let history = planned_history(site);
    let moments = moments(site, &model, &history);
    let last_s = moments.last().map_or(model.baseline_s, |moment| moment.time_s);
    let mut times: Vec<i64> = moments.iter().map(|moment| moment.time_s).collect();
    times.extend((model.baseline_s..=last_s).step_by(CURVE_STEP_S as usize));
    times.sort_unstable();
    times.dedup();
    let wanted = vec![times.clone(); model.instruments.len()];
    let expected = expect(&model, &history, &wanted)?;
    let instruments = site.instruments.iter().zip(expected.by_instrument).map(|(given, bands)| {
        let at = |time_s: i64| {
            let place = times.binary_search(&time_s).ok()?;
            bands.get(place).copied().flatten().map(|band| in_unit(band, given.unit))
        };
        PredictedInstrument {
            id: given.id.clone(),
            kind: kind_word(given.kind),
            place: place_words(site, given),
            unit: unit_word(given.unit),
            decimals: decimals(given.unit),
            bands: moments.iter().map(|moment| at(moment.time_s)).collect(),
            curve: times.iter().filter_map(|time_s| Some((*time_s, at(*time_s)?))).collect(),
            kind_of: given.kind,
        }
    });
    Ok(Prediction {
        format: "brimstead-prediction/1",
        site: site.site.name.clone(),
        invented: site.site.invented,
        instruments: instruments.collect(),
        moments,
        cautions: crate::report::CAUTIONS,
    })
}

impl PredictedInstrument {
    /// Likely value and band at a planned moment, as text.
    #[must_use]
    pub fn text_at(&self, moment: usize) -> String {
        let places = self.decimals;
        match self.bands.get(moment).copied().flatten() {
            Some(band) => format!(
                "{:.places$} ({:.places$} to {:.places$})",
                band.likely, band.low, band.high
            ),
            None => "none".to_owned(),
        }
    }

    fn chart(&self, zone: &TimeZone, holds: &[Stretch]) -> InstrumentChart {
        let expected = self.curve.iter().map(|(time_s, band)| crate::chart::Expected {
            x: *time_s,
            low: band.low,
            likely: band.likely,
            high: band.high,
        });
        InstrumentChart {
            title: format!("{} {}, expected", self.id, self.kind),
            quantity: Quantity {
                name: quantity_word(self.kind_of).to_owned(),
                unit: self.unit.to_owned(),
                decimals: self.decimals,
                downward: !matches!(
                    self.kind_of,
                    InstrumentKind::Piezometer | InstrumentKind::LevelGauge
                ),
            },
            zone: zone.clone(),
            span_s: None,
            expected: expected.collect(),
            readings: Vec::new(),
            limits: Vec::new(),
            trigger_changes: Vec::new(),
            faults: Vec::new(),
            holds: holds.to_vec(),
            moment: None,
            mark: Mark::NotJudged,
        }
    }
}

impl Prediction {
    /// One chart an instrument.
    #[must_use]
    pub fn charts(&self, site: &SiteFile, zone: &TimeZone) -> Vec<NamedChart> {
        let holds = holds(site);
        self.instruments
            .iter()
            .map(|one| NamedChart {
                name: format!("{}-expected", one.id),
                caption: format!("{}, {}: expected along the plan.", one.id, one.place),
                chart: one.chart(zone, &holds).chart(),
            })
            .collect()
    }
}
