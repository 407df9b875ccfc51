//! The report of a comparison at a moment.

use super::charts::{against_pressure, against_time, caption, fill_line, mark_of};
use super::story::{headline_at, run_story};
use super::words::{decimals, kind_word, place_words, stage_at, unit_word};
use super::{Comparison, Row, Timeline};
use crate::chart::theme::LIGHT;
use crate::chart::{Chart, ChartError, LimitKind, Mark, Size};
use crate::import::{FileReport, ImportReport, LayoutUsed};
use crate::report::{
    ChartSection, Fact, FaultRow, ImportFile, ImportMessage, InstrumentRow, LimitValue,
    LoadAtReading, Margin, ReportPage, values,
};
use crate::site::{Instrument, SiteFile};
use brimstead_core::comparison::Side;
use brimstead_core::instrument::DataState;
use brimstead_core::watch::{Basis, Trigger};
use jiff::tz::TimeZone;

/// Size of the charts of a report.
pub const CHART_SIZE: Size = Size { width_px: 720.0, height_px: 330.0 };
/// Most numbers in the table beside a chart.
const TABLE_VALUES: usize = 40;

/// A named chart of a comparison, ready to be drawn.
#[derive(Debug)]
pub struct NamedChart {
    /// Stem of its file name.
    pub name: String,
    /// Words under it.
    pub caption: String,
    /// The chart.
    pub chart: Chart,
}

/// All charts of a comparison: the fill line, then each instrument against time and against
/// applied pressure, those that left Normal or failed first.
#[must_use]
pub fn charts(site: &SiteFile, comparison: &Comparison, zone: &TimeZone) -> Vec<NamedChart> {
    let mut list = vec![NamedChart {
        name: "fill-line".to_owned(),
        caption: "Liquid level above the floor, planned and actual.".to_owned(),
        chart: fill_line(site, comparison, zone).chart(),
    }];
    let mut order: Vec<(&Timeline, &Instrument)> =
        comparison.timelines.iter().zip(&site.instruments).collect();
    order.sort_by_key(|(timeline, _)| {
        (std::cmp::Reverse(timeline.highest_reached()), timeline.faults.is_empty())
    });
    for (timeline, given) in order {
        if timeline.rows.is_empty() {
            continue;
        }
        let place = caption(site, given);
        list.push(NamedChart {
            name: format!("{}-time", timeline.id),
            caption: format!("{place}: against time."),
            chart: against_time(site, comparison, timeline, zone).chart(),
        });
        list.push(NamedChart {
            name: format!("{}-pressure", timeline.id),
            caption: format!("{place}: against applied pressure."),
            chart: against_pressure(timeline).chart(),
        });
    }
    list
}

/// The report at the last instant of the run.
///
/// # Errors
/// A chart that cannot be drawn.
pub fn report_page(
    site: &SiteFile,
    comparison: &Comparison,
    import: &ImportReport,
    charts: &[NamedChart],
) -> Result<ReportPage, ChartError> {
    let zone = crate::time::zone(&site.site.time_zone).unwrap_or(TimeZone::UTC);
    let now_s = comparison.last_s;
    let mut headline = run_story(comparison, &zone);
    headline.extend(headline_at(site, comparison, &zone, now_s));
    let mut instruments: Vec<InstrumentRow> = comparison
        .timelines
        .iter()
        .zip(&site.instruments)
        .map(|(timeline, given)| instrument_row(site, timeline, given, now_s))
        .collect();
    instruments.sort_by_key(|row| std::cmp::Reverse(gravity(row.mark)));
    let sections = charts
        .iter()
        .map(|one| {
            Ok(ChartSection {
                caption: one.caption.clone(),
                svg: one.chart.render(CHART_SIZE, &LIGHT)?.svg,
                values: Some(values(&one.chart, TABLE_VALUES)),
            })
        })
        .collect::<Result<_, ChartError>>()?;
    Ok(ReportPage {
        site: site.site.name.clone(),
        invented: site.site.invented,
        title: "Readings against expectation".to_owned(),
        moment_s: now_s,
        load: load_facts(site, comparison, now_s),
        zone,
        headline,
        instruments,
        faults: fault_rows(site, comparison, import),
        charts: sections,
        import: (import.files.iter().enumerate())
            .map(|(place, file)| import_file(import, place, file))
            .collect(),
    })
}

fn gravity(mark: Mark) -> u8 {
    match mark {
        Mark::Stop { .. } => 5,
        Mark::Review { .. } => 4,
        Mark::Watch { .. } => 3,
        Mark::Fault => 2,
        Mark::NotJudged => 1,
        Mark::Normal => 0,
    }
}

fn load_facts(site: &SiteFile, comparison: &Comparison, now_s: i64) -> Vec<Fact> {
    let stage = stage_at(site, now_s);
    let fact = |name: &str, value: String| Fact { name: name.to_owned(), value };
    let mut facts = Vec::new();
    if let Some(load) = comparison.load.at(now_s) {
        let source = match load.gauge {
            Some(gauge) => format!("by {}", comparison.timelines[gauge].id),
            None => "last known; the load is unknown".to_owned(),
        };
        facts.push(fact("liquid level", format!("{:.2} m, {source}", load.liquid_level_m)));
        facts.push(fact("applied pressure", format!("{:.1} kPa", load.applied_pressure_kpa)));
    }
    facts.push(fact("stage", format!("{}, {:.0} h in it", stage.words(), stage.hours)));
    if let Some(hours) = hours_to_lower_one_metre(site) {
        facts.push(fact("time to lower 1 m", format!("{hours:.1} h at the stated pump rate")));
    }
    facts
}

/// Hours that the stated pump rate takes to lower the tank under test by a metre.
#[must_use]
pub fn hours_to_lower_one_metre(site: &SiteFile) -> Option<f64> {
    let rate_m3_per_h = site.tanks.first()?.pump_rate_m3_per_h?;
    let area_m2 = site.tanks().ok()?.first()?.area_m2();
    (rate_m3_per_h > 0.0).then(|| area_m2 / rate_m3_per_h)
}

fn instrument_row(
    site: &SiteFile,
    timeline: &Timeline,
    given: &Instrument,
    now_s: i64,
) -> InstrumentRow {
    let scale = timeline.scale();
    let latest = timeline.row_at(now_s);
    let read = timeline.value_at(now_s);
    let shown = |value: f64| value * scale;
    let expected = read.and_then(|row| row.expected);
    let stage = |time_s: i64| stage_at(site, time_s);
    InstrumentRow {
        mark: mark_of(timeline, latest),
        id: timeline.id.clone(),
        kind: kind_word(timeline.kind).to_owned(),
        place: place_words(site, given),
        unit: unit_word(timeline.unit).to_owned(),
        decimals: decimals(timeline.unit),
        reading: read.and_then(|row| row.value).map(shown),
        load: read.and_then(|row| {
            Some(LoadAtReading {
                liquid_level_m: row.liquid_level_m?,
                applied_pressure_kpa: row.applied_pressure_kpa?,
                stage: stage(row.time_s).words(),
                hours_in_stage: stage(row.time_s).hours,
            })
        }),
        expected: expected.map(|band| shown(band.likely)),
        band_low: expected.map(|band| shown(band.low)),
        band_high: expected.map(|band| shown(band.high)),
        limits: read.map(|row| limit_values(timeline, row)).unwrap_or_default(),
        margin: read.and_then(|row| margin(timeline, row)),
        data_state: latest.map_or(DataState::NotRead, |row| row.data_state).name().to_owned(),
        age_s: read.map(|row| now_s - row.time_s),
    }
}

fn kind_of(trigger: Trigger) -> Option<LimitKind> {
    match trigger {
        Trigger::Normal => None,
        Trigger::Watch => Some(LimitKind::Watch),
        Trigger::Review => Some(LimitKind::Review),
        Trigger::Stop => Some(LimitKind::Stop),
    }
}

/// The limits at the load of a row that are in the unit of the reading, above before below.
fn limits_now(timeline: &Timeline, row: &Row) -> Vec<brimstead_core::watch::LimitsNow> {
    let Some(watcher) = &timeline.watcher else { return Vec::new() };
    let rules = watcher.limits().rules.as_slice().iter().enumerate();
    rules
        .filter(|(_, rule)| !matches!(rule.basis, Basis::Rate { .. }))
        .filter_map(|(index, _)| {
            watcher.limits_at(index, row.applied_pressure_kpa, row.expected).ok()
        })
        .flatten()
        .flatten()
        .collect()
}

/// Values at which triggers begin, on the upper side.
#[must_use]
pub fn limit_values(timeline: &Timeline, row: &Row) -> Vec<LimitValue> {
    let scale = timeline.scale();
    let mut values: Vec<LimitValue> = Vec::new();
    for now in limits_now(timeline, row) {
        for trigger in Trigger::RAISED {
            if let (Some(kind), Some(value)) = (kind_of(trigger), now.thresholds.of(trigger))
                && now.side == Side::Above
            {
                values.push(LimitValue { trigger: kind, value: value * scale });
            }
        }
    }
    values
}

/// The smallest margin to a limit above the present trigger, of those in the unit of the reading;
/// at Stop, how far beyond it the reading is.
#[must_use]
pub fn margin(timeline: &Timeline, row: &Row) -> Option<Margin> {
    let value = row.value?;
    let scale = timeline.scale();
    limits_now(timeline, row)
        .iter()
        .filter_map(|now| {
            let (trigger, limit) = now.next_above(row.trigger)?;
            let counts = trigger > row.trigger || row.trigger == Trigger::Stop;
            if !counts || trigger < row.trigger {
                return None;
            }
            let margin = now.margin(value, limit);
            Some(Margin {
                to: kind_of(trigger)?,
                value: margin.value * scale,
                percent: margin.percent,
            })
        })
        .min_by(|a, b| a.value.total_cmp(&b.value))
}

/// Equipment faults: those that go on first, then the latest.
fn fault_rows(site: &SiteFile, comparison: &Comparison, import: &ImportReport) -> Vec<FaultRow> {
    let zone = crate::time::zone(&site.site.time_zone).unwrap_or(TimeZone::UTC);
    let mut rows: Vec<(bool, i64, FaultRow)> = Vec::new();
    for (timeline, given) in comparison.timelines.iter().zip(&site.instruments) {
        for fault in &timeline.faults {
            let told = import
                .suspicions
                .iter()
                .find(|suspicion| {
                    suspicion.instruments.contains(&timeline.id) && fault.to_s.is_none()
                })
                .map(|suspicion| suspicion.message.clone());
            let until = fault.to_s.map_or("It goes on.".to_owned(), |to_s| {
                format!("Good again {}.", crate::chart::stamp(to_s, &zone))
            });
            let evidence = fault.doubt.map_or(String::new(), |doubt| format!("{doubt} "));
            rows.push((
                fault.to_s.is_some(),
                -fault.from_s,
                FaultRow {
                    id: timeline.id.clone(),
                    kind: kind_word(timeline.kind).to_owned(),
                    place: place_words(site, given),
                    data_state: fault.state.name().to_owned(),
                    evidence: format!(
                        "{evidence}{}{until}",
                        told.map_or(String::new(), |told| format!("{told} "))
                    ),
                    since_s: Some(fault.from_s),
                    until_s: fault.to_s,
                    next_step: next_step(fault.state).to_owned(),
                },
            ));
        }
    }
    rows.sort_by_key(|(over, newest, _)| (*over, *newest));
    rows.into_iter().map(|(_, _, row)| row).collect()
}

/// What to look at first.
#[must_use]
pub fn next_step(state: DataState) -> &'static str {
    match state {
        DataState::Good => "",
        DataState::Suspect => "Read again by hand, and compare with its neighbours.",
        DataState::Stale | DataState::NotRead => {
            "Check logger power, cable and link; read by hand."
        }
        DataState::Frozen => "Check the instrument by hand; for a level gauge dip the tank.",
        DataState::OutOfRange => "Check rods, re-zero and unit before anything else.",
        DataState::Failed => "Check cable and sensor; read by hand.",
    }
}

/// Lines of one file that are shown; beyond that refusals are counted by reason.
const SHOWN_REFUSALS: usize = 100;

fn import_file(import: &ImportReport, place: usize, file: &FileReport) -> ImportFile {
    let remark = |lost_data, text| ImportMessage { line: None, lost_data, text };
    let mut messages = Vec::new();
    match file.layout {
        LayoutUsed::Named(_) => {}
        LayoutUsed::Guessed => messages.push(remark(
            false,
            "No layout of the site file fits: it was guessed. Check it before use.".to_owned(),
        )),
        LayoutUsed::None => messages.push(remark(
            true,
            "Not understood, nothing taken. Describe it under \"readings\" in the site file."
                .to_owned(),
        )),
    }
    messages.extend(file.columns.iter().map(|column| {
        remark(true, format!("column \"{}\" not taken: {}.", column.header, column.reason))
    }));
    messages.extend(file.notes.iter().map(|note| remark(false, note.clone())));
    if file.out_of_order > 0 {
        messages.push(remark(
            false,
            format!("{} rows stand after later ones; sorted by time.", file.out_of_order),
        ));
    }
    messages.extend(file.refused.iter().take(SHOWN_REFUSALS).map(|refused| ImportMessage {
        line: Some(u64::from(refused.line)),
        lost_data: true,
        text: refused.what(),
    }));
    if file.refused_count() > SHOWN_REFUSALS as u64 {
        messages.extend(file.refused_by_reason.iter().map(|(reason, count)| {
            remark(
                true,
                format!("in all {count} times {reason}; the first {SHOWN_REFUSALS} are listed."),
            )
        }));
    }
    let lost = import.conflicts.iter().filter(|one| one.refused_at.file as usize == place);
    messages.extend(lost.take(SHOWN_REFUSALS).map(|conflict| {
        let kept_at = conflict.kept_at;
        let kept_in = import.files.get(kept_at.file as usize).map_or("", |file| &file.file);
        ImportMessage {
            line: Some(u64::from(conflict.refused_at.line)),
            lost_data: true,
            text: format!(
                "{} has two readings for one time: {} not taken, {} of {kept_in} line {} kept.",
                conflict.of, conflict.refused, conflict.kept, kept_at.line
            ),
        }
    }));
    ImportFile {
        name: file.file.clone(),
        rows: file.rows as usize,
        kept: (file.readings - file.duplicates - file.contradicted) as usize,
        duplicates: file.duplicates as usize,
        refused: file.refused_count() as usize,
        messages,
    }
}
