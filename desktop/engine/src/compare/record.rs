//! A comparison as JSON for programs: the report and every judged reading, in the unit of each
//! instrument.

use super::{Comparison, Row, Timeline};
use crate::compare::words::{kind_word, unit_word};
use crate::report::ReportPage;
use serde::Serialize;
use serde_json::{Value, json};

#[derive(Serialize)]
struct Reading {
    time_s: i64,
    raw: Option<f64>,
    value: Option<f64>,
    data_state: &'static str,
    #[serde(skip_serializing_if = "Option::is_none")]
    doubt: Option<String>,
    expected: Option<f64>,
    band_low: Option<f64>,
    band_high: Option<f64>,
    liquid_level_m: Option<f64>,
    applied_pressure_kpa: Option<f64>,
    trigger: &'static str,
    confirmed: bool,
}

fn reading(timeline: &Timeline, row: &Row) -> Reading {
    let scale = timeline.scale();
    Reading {
        time_s: row.time_s,
        raw: row.raw,
        value: row.value.map(|value| value * scale),
        data_state: row.data_state.name(),
        doubt: row.doubt.map(|doubt| doubt.to_string()),
        expected: row.expected.map(|band| band.likely * scale),
        band_low: row.expected.map(|band| band.low * scale),
        band_high: row.expected.map(|band| band.high * scale),
        liquid_level_m: row.liquid_level_m,
        applied_pressure_kpa: row.applied_pressure_kpa,
        trigger: row.trigger.name(),
        confirmed: row.judgement.is_some_and(|judgement| judgement.confirmed),
    }
}

fn instrument(timeline: &Timeline) -> Value {
    let readings: Vec<Reading> = timeline.rows.iter().map(|row| reading(timeline, row)).collect();
    let changes: Vec<Value> = timeline
        .changes
        .iter()
        .map(|change| {
            json!({
                "time_s": change.time_s,
                "from": change.from.name(),
                "to": change.to.name(),
                "confirmed": change.confirmed,
            })
        })
        .collect();
    let faults: Vec<Value> = timeline
        .faults
        .iter()
        .map(|fault| {
            json!({
                "from_s": fault.from_s,
                "to_s": fault.to_s,
                "data_state": fault.state.name(),
                "doubt": fault.doubt.map(|doubt| doubt.to_string()),
            })
        })
        .collect();
    json!({
        "id": timeline.id,
        "kind": kind_word(timeline.kind),
        "unit": unit_word(timeline.unit),
        "highest_trigger": timeline.highest_reached().name(),
        "trigger_changes": changes,
        "equipment_faults": faults,
        "readings": readings,
    })
}

/// The whole comparison. Instants are whole seconds of Unix time, UTC.
///
/// # Errors
/// When a value cannot be written; a comparison made of finite numbers always can.
pub fn to_json(report: &ReportPage, comparison: &Comparison) -> Result<String, serde_json::Error> {
    let report: Value = serde_json::from_str(&report.to_json()?)?;
    let instruments: Vec<Value> = comparison.timelines.iter().map(instrument).collect();
    serde_json::to_string(&json!({
        "format": "brimstead-comparison/1",
        "report": report,
        "highest_trigger": comparison.highest_reached().name(),
        "instruments": instruments,
    }))
}
