//! The sentences of a comparison, written by rules from facts: what happened, against which load,
//! who agrees, who is silent, what the site's plan says.

use super::words::{decimals, joined, kind_word, plan_words, unit_word};
use super::{Comparison, Row, Timeline};
use crate::chart::stamp;
use crate::site::SiteFile;
use brimstead_core::watch::Trigger;
use jiff::tz::TimeZone;

/// The moment in at most four sentences: the gravest first.
#[must_use]
pub fn headline_at(
    site: &SiteFile,
    comparison: &Comparison,
    zone: &TimeZone,
    time_s: i64,
) -> Vec<String> {
    let mut lines = Vec::new();
    let highest = comparison.timelines.iter().map(|one| one.trigger_at(time_s)).max();
    let highest = highest.unwrap_or_default();
    lines.push(load_line(comparison, time_s));
    if highest == Trigger::Normal {
        lines.push("No instrument is outside its limits.".to_owned());
    } else {
        let at: Vec<&Timeline> =
            comparison.timelines.iter().filter(|one| one.trigger_at(time_s) == highest).collect();
        lines.push(raised_line(highest, &at, zone, time_s));
        if let Some(first) = at.first() {
            lines.push(agreement_line(comparison, first, time_s));
        }
        lines.push(plan_words(highest).to_owned());
    }
    if let Some(line) = silent_line(site, comparison, time_s) {
        lines.push(line);
    }
    lines
}

fn load_line(comparison: &Comparison, time_s: i64) -> String {
    match comparison.load.at(time_s) {
        None => "No liquid level is known: the load is unknown.".to_owned(),
        Some(load) => match load.gauge {
            Some(gauge) => format!(
                "Liquid level {:.2} m by {}, applied pressure {:.1} kPa.",
                load.liquid_level_m, comparison.timelines[gauge].id, load.applied_pressure_kpa
            ),
            None => format!(
                "The load is unknown: no gauge can be believed. Last level {:.2} m. Dip by hand; the next rise is blocked.",
                load.liquid_level_m
            ),
        },
    }
}

fn raised_line(trigger: Trigger, at: &[&Timeline], zone: &TimeZone, time_s: i64) -> String {
    let ids: Vec<&str> = at.iter().map(|one| one.id.as_str()).collect();
    let Some(first) = at.first() else { return String::new() };
    let since = first.changes.iter().rev().find(|change| change.time_s <= time_s);
    let since =
        since.map_or(String::new(), |change| format!(" since {}", stamp(change.time_s, zone)));
    let evidence = first.value_at(time_s).map_or(String::new(), |row| evidence(first, row));
    format!("{trigger} at {}; {}{since}{evidence}", joined(&ids), first.id)
}

/// ": reading 91.6 kPa, expected 74.2 kPa (68.0 to 81.0) at 139.8 kPa."
fn evidence(timeline: &Timeline, row: &Row) -> String {
    let Some(value) = row.value else { return ".".to_owned() };
    let (scale, unit) = (timeline.scale(), unit_word(timeline.unit));
    let places = decimals(timeline.unit);
    let mut text = format!(": reading {:.places$} {unit}", value * scale);
    if let Some(band) = row.expected {
        text += &format!(
            ", expected {:.places$} {unit} ({:.places$} to {:.places$})",
            band.likely * scale,
            band.low * scale,
            band.high * scale
        );
    }
    if let Some(load) = row.applied_pressure_kpa {
        text += &format!(" at {load:.1} kPa applied");
    }
    let rate = row.judgement.as_ref().and_then(|judgement| judgement.rate);
    if let Some(rate) = rate {
        let hours = rate.span_s as f64 / 3600.0;
        text += &format!(", rate {:.1} {unit} a day over {hours:.0} h", rate.per_day * scale);
    }
    text + "."
}

fn agreement_line(comparison: &Comparison, of: &Timeline, time_s: i64) -> String {
    let neighbours = || of.neighbours.iter().map(|place| &comparison.timelines[*place]);
    let agree: Vec<&str> = neighbours()
        .filter(|one| one.trigger_at(time_s) >= Trigger::Watch && one.fault_at(time_s).is_none())
        .map(|one| one.id.as_str())
        .collect();
    let silent: Vec<&str> = neighbours()
        .filter(|one| one.fault_at(time_s).is_some())
        .map(|one| one.id.as_str())
        .collect();
    let inside: Vec<&str> = neighbours()
        .filter(|one| one.trigger_at(time_s) == Trigger::Normal && one.fault_at(time_s).is_none())
        .map(|one| one.id.as_str())
        .collect();
    let mut parts = Vec::new();
    if !agree.is_empty() {
        parts.push(format!("{} beside it agree", joined(&agree)));
    }
    if !inside.is_empty() {
        parts.push(format!("{} beside it inside limits", joined(&inside)));
    }
    if !silent.is_empty() {
        parts.push(format!("{} cannot be believed", joined(&silent)));
    }
    if parts.is_empty() {
        return format!("{} has no neighbour to confirm it: re-read by another means.", of.id);
    }
    format!("{}.", parts.join("; "))
}

fn silent_line(site: &SiteFile, comparison: &Comparison, time_s: i64) -> Option<String> {
    let faulty: Vec<String> = comparison
        .timelines
        .iter()
        .zip(&site.instruments)
        .filter_map(|(one, given)| {
            let fault = one.fault_at(time_s)?;
            Some(format!("{} {} ({})", kind_word(given.kind), one.id, fault.state))
        })
        .collect();
    if faulty.is_empty() {
        return None;
    }
    let names: Vec<&str> = faulty.iter().map(String::as_str).collect();
    Some(format!(
        "Equipment, not ground: {}. Missing or doubtful data are not good news.",
        joined(&names)
    ))
}

/// The whole run in a few sentences: the highest trigger, who had it, and how long the warning was.
#[must_use]
pub fn run_story(comparison: &Comparison, zone: &TimeZone) -> Vec<String> {
    let mut lines = Vec::new();
    for trigger in [Trigger::Stop, Trigger::Review, Trigger::Watch] {
        let at: Vec<&str> = comparison
            .timelines
            .iter()
            .filter(|one| one.highest_reached() == trigger)
            .map(|one| one.id.as_str())
            .collect();
        if !at.is_empty() {
            lines.push(format!("Over the run {trigger} was the highest at {}.", joined(&at)));
        }
    }
    if lines.is_empty() {
        lines.push("Over the run no instrument left Normal.".to_owned());
    }
    let first = |trigger| comparison.first_at(trigger);
    if let (Some((review, review_s)), Some((stop, stop_s))) =
        (first(Trigger::Review), first(Trigger::Stop))
    {
        lines.push(format!(
            "Review first at {} on {}, {:.0} h before Stop first at {} on {}.",
            review.id,
            stamp(review_s, zone),
            (stop_s - review_s) as f64 / 3600.0,
            stop.id,
            stamp(stop_s, zone)
        ));
    } else if let Some((review, review_s)) = first(Trigger::Review) {
        lines.push(format!("Review first at {} on {}.", review.id, stamp(review_s, zone)));
    }
    let faulty: Vec<&str> = comparison
        .timelines
        .iter()
        .filter(|one| !one.faults.is_empty())
        .map(|one| one.id.as_str())
        .collect();
    if !faulty.is_empty() {
        lines.push(format!(
            "Equipment faults, now or earlier: {} of {} instruments.",
            faulty.len(),
            comparison.timelines.len()
        ));
    }
    lines
}
