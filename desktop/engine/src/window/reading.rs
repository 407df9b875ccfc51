//! One instrument at the cursor: limits, how its number came about, its rate, its story.

use super::failure::WindowError;
use super::session::Session;
use super::shown::Shown;
use super::views::{EntryView, FaultView, ReadingView, TriggerView, Units};
use crate::chart::{LimitKind, number};
use crate::compare::page::{limit_values, next_step};
use crate::compare::words::plan_words;
use crate::compare::{FaultSpan, Row, Timeline, reduction_at};
use crate::store::{LifeEvent, LifeKind, Note, Recorded, Store};
use brimstead_core::instrument::DataState;
use brimstead_core::watch::{Basis, Trigger};

impl Session {
    /// One instrument at the cursor.
    ///
    /// # Errors
    /// An instrument that the site does not have, or a store that cannot be read.
    pub fn reading(
        &self,
        id: &str,
        time_ms: f64,
        units: Units,
    ) -> Result<ReadingView, WindowError> {
        let index = self.index_of(id)?;
        let cursor = self.cursor(time_ms, units);
        let timeline = self.timeline(index);
        let shown = Shown::reading(timeline.unit, units);
        let row = timeline.value_at(cursor.time_s).filter(|_| !cursor.planned);
        let mut sentence: Vec<String> = self.fault_line(index, cursor).into_iter().collect();
        sentence.extend(self.instrument_lines(index, cursor));
        Ok(ReadingView {
            now: self.now(index, cursor),
            limits: row.map(|row| limits(timeline, row, shown)).unwrap_or_default(),
            steps: row.map(|row| self.steps(index, row, shown)).unwrap_or_default(),
            rate: row.and_then(|row| rate_words(timeline, row, shown)),
            changes: timeline
                .changes
                .iter()
                .filter(|change| change.time_s <= cursor.time_s)
                .map(|change| (self.stamp(change.time_s), change.from.into(), change.to.into()))
                .collect(),
            plan: plan_words(timeline.trigger_at(cursor.time_s)).to_owned(),
            sentence,
            story: self.story(id)?,
        })
    }

    /// The number as read, and what was made of it.
    fn steps(&self, index: usize, row: &Row, shown: Shown) -> Vec<(String, String)> {
        let step = |name: &str, value: String| (name.to_owned(), value);
        let timeline = self.timeline(index);
        let scale = timeline.scale();
        let value = row.value.map(|value| value * scale);
        let result = value.map_or_else(|| "none".to_owned(), |value| shown.text(value));
        let raw = row.raw.map_or_else(|| "none".to_owned(), plain);
        let given = &self.site.instruments[index];
        let Some(made) = reduction_at(given, &self.imported, row.time_s) else {
            let same = row.raw == value;
            let mut steps = vec![step("as it stands in the file", raw)];
            if !same || shown.unit() != crate::compare::words::unit_word(timeline.unit) {
                steps.push(step("in the unit shown", result));
            }
            return steps;
        };
        let part = |kpa: f64| shown.text(kpa * scale);
        let mut steps = vec![
            step("as it stands in the file", format!("{raw} digits")),
            step("pressure from digits", part(made.from_digits_kpa)),
        ];
        let calibration = given.calibration.as_ref();
        if calibration.is_some_and(|one| one.apply_temperature) {
            steps.push(step("temperature correction", part(made.temperature_part_kpa)));
        }
        if calibration.is_some_and(|one| one.apply_barometer) {
            steps.push(step("air pressure correction", part(made.barometer_part_kpa)));
        }
        steps.push(step("pore pressure", part(made.pressure_kpa)));
        steps
    }

    /// Life story and notes of an instrument, the latest first.
    fn story(&self, id: &str) -> Result<Vec<EntryView>, WindowError> {
        let store = self.store();
        let mut entries: Vec<(i64, EntryView)> =
            store.life_of(id)?.into_iter().map(|event| self.life_entry(event)).collect();
        let notes = store.notes(i64::MIN, i64::MAX)?;
        let of_it = |note: &Recorded<Note>| note.what.instrument.as_deref() == Some(id);
        entries.extend(notes.into_iter().filter(of_it).map(|note| {
            let entry = EntryView {
                time_text: self.stamp(note.what.moment_s),
                what: "note".to_owned(),
                who: note.who,
                text: note.what.text,
            };
            (note.what.moment_s, entry)
        }));
        entries.sort_by_key(|(time_s, _)| std::cmp::Reverse(*time_s));
        Ok(entries.into_iter().map(|(_, entry)| entry).collect())
    }

    fn life_entry(&self, event: Recorded<LifeEvent>) -> (i64, EntryView) {
        let happened_s = event.what.happened_s;
        let what = match &event.what.kind {
            LifeKind::Installed => "installed".to_owned(),
            LifeKind::Calibrated { .. } => "calibrated".to_owned(),
            LifeKind::RodExtended { length_m } => {
                format!("rod extended by {} m", number(*length_m, 3))
            }
            LifeKind::ReZeroed { .. } => "zero set anew".to_owned(),
            LifeKind::Damaged => "damaged".to_owned(),
            LifeKind::Replaced { by, .. } => format!("replaced by {by}"),
            LifeKind::Noted => "noted".to_owned(),
        };
        let text = match (event.what.note.is_empty(), event.why.is_empty()) {
            (true, _) => event.why,
            (false, true) => event.what.note,
            (false, false) => format!("{} {}", event.what.note, event.why),
        };
        let time_text = self.stamp(happened_s);
        (happened_s, EntryView { time_text, what, who: event.who, text })
    }

    /// Equipment faults, those that go on first, then the latest; never mixed with the ground.
    #[must_use]
    pub fn faults(&self, time_ms: f64, units: Units) -> Vec<FaultView> {
        let cursor = self.cursor(time_ms, units);
        let mut found: Vec<(bool, i64, FaultView)> = Vec::new();
        for (index, timeline) in self.comparison.timelines.iter().enumerate() {
            let begun = timeline.faults.iter().filter(|fault| fault.from_s <= cursor.time_s);
            for fault in begun {
                let over = fault.to_s.filter(|to_s| *to_s <= cursor.time_s);
                let view = FaultView {
                    id: timeline.id.clone(),
                    kind: self.known[index].kind.to_owned(),
                    place: self.known[index].place.clone(),
                    state: fault.state.name().to_owned(),
                    from: self.stamp(fault.from_s),
                    to: over.map_or_else(|| "goes on".to_owned(), |to_s| self.stamp(to_s)),
                    now: over.is_none(),
                    evidence: self.evidence_of(timeline, fault, cursor.units),
                    next_step: next_step(fault.state).to_owned(),
                };
                found.push((over.is_some(), -fault.from_s, view));
            }
        }
        found.sort_by_key(|(over, newest, _)| (*over, *newest));
        found.into_iter().map(|(_, _, view)| view).collect()
    }

    fn evidence_of(&self, timeline: &Timeline, fault: &FaultSpan, units: Units) -> String {
        let doubt = fault.doubt.map_or(String::new(), |doubt| doubt.to_string());
        let before = |row: &&Row| row.time_s < fault.from_s && row.data_state == DataState::Good;
        let good = timeline.rows.iter().rev().find(before);
        match good.and_then(|row| Some((row.time_s, row.value?))) {
            Some((time_s, value)) => {
                let shown = Shown::reading(timeline.unit, units);
                format!(
                    "{doubt} Last good reading before: {}, {}.",
                    shown.text(value * timeline.scale()),
                    self.stamp(time_s)
                )
            }
            None => format!("{doubt} No good reading before."),
        }
        .trim_start()
        .to_owned()
    }
}

/// A number as it stood in a file.
fn plain(value: f64) -> String {
    format!("{value}").replace('-', "\u{2212}")
}

fn trigger_of(kind: LimitKind) -> TriggerView {
    match kind {
        LimitKind::Watch => TriggerView::Watch,
        LimitKind::Review => TriggerView::Review,
        LimitKind::Stop => TriggerView::Stop,
    }
}

/// The limits at the load of a row: values first, then rates.
fn limits(timeline: &Timeline, row: &Row, shown: Shown) -> Vec<(TriggerView, String)> {
    let mut listed: Vec<(TriggerView, String)> = limit_values(timeline, row)
        .into_iter()
        .map(|limit| (trigger_of(limit.trigger), shown.text(limit.value)))
        .collect();
    let Some(watcher) = &timeline.watcher else { return listed };
    let window_h =
        watcher.limits().rate_window.map_or(0.0, |window| window.window_s as f64 / 3600.0);
    for rule in watcher.limits().rules.as_slice() {
        let Basis::Rate { per_day } = &rule.basis else { continue };
        for trigger in Trigger::RAISED {
            if let Some(rate) = per_day.of(trigger) {
                let words = format!(
                    "{} a day over {} h",
                    shown.text(rate * timeline.scale()),
                    number(window_h, 0)
                );
                listed.push((trigger.into(), words));
            }
        }
    }
    listed
}

/// "12.3 mm a day over 24 h, give or take 1.2 mm".
fn rate_words(timeline: &Timeline, row: &Row, shown: Shown) -> Option<String> {
    let rate = row.judgement?.rate?;
    let scale = timeline.scale();
    Some(format!(
        "{} a day over {} h, give or take {}",
        shown.small(rate.per_day * scale),
        number(rate.span_s as f64 / 3600.0, 0),
        shown.small(rate.standard_error_per_day * scale)
    ))
}
