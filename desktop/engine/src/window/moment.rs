//! The moment at the cursor: load, stage, every instrument, and what it comes to.

use super::session::{Known, Session, seconds};
use super::shown::{Shown, duration};
use super::views::{InstrumentNow, MomentView, Quantity, TriggerView, Units};
use crate::chart::number;
use crate::compare::page::{hours_to_lower_one_metre, margin};
use crate::compare::words::{plan_words, stage_at};
use crate::compare::{FaultSpan, Row, Timeline};
use crate::report::age_in_words;
use brimstead_core::instrument::DataState;
use brimstead_core::watch::Trigger;

/// Objections that are listed.
const MOST_OBJECTIONS: usize = 6;
/// A level this near to that of a hold is there, m.
const HELD_M: f64 = 0.05;
/// A rate within so many of its standard errors of nothing is no movement.
const RATE_ERRORS: f64 = 2.0;
/// Beyond this a time to a limit says nothing, days.
const LONGEST_FORECAST_DAYS: f64 = 60.0;

impl From<Trigger> for TriggerView {
    fn from(trigger: Trigger) -> Self {
        match trigger {
            Trigger::Normal => Self::Normal,
            Trigger::Watch => Self::Watch,
            Trigger::Review => Self::Review,
            Trigger::Stop => Self::Stop,
        }
    }
}

/// What a moment is asked for, worked out once.
#[derive(Debug, Clone, Copy)]
pub(super) struct Cursor {
    pub time_s: i64,
    /// After the last reading.
    pub planned: bool,
    pub units: Units,
}

impl Session {
    pub(super) fn cursor(&self, time_ms: f64, units: Units) -> Cursor {
        let time_s = seconds(time_ms);
        Cursor { time_s, planned: time_s > self.comparison.last_s, units }
    }

    /// Everything that hangs on the cursor.
    #[must_use]
    pub fn moment(&self, time_ms: f64, units: Units) -> MomentView {
        let cursor = self.cursor(time_ms, units);
        let load = self.load(cursor);
        let instruments: Vec<InstrumentNow> =
            (0..self.known.len()).map(|index| self.now(index, cursor)).collect();
        let highest = self.highest(cursor);
        let not_ready = self.objections(&load, &instruments, cursor);
        let stage = stage_at(&self.site, cursor.time_s);
        MomentView {
            time_ms,
            time_text: self.stamp(cursor.time_s),
            planned: cursor.planned,
            liquid_level: load.liquid_level,
            liquid_level_m: load.liquid_level_m,
            load_source: load.source,
            load_known: load.known,
            applied_pressure: load.applied_pressure,
            stage: stage.words(),
            stage_detail: stage_detail(stage.hours, stage.next_level_m, load.liquid_level_m, units),
            to_limit: self.to_limit(cursor),
            to_lower: self.to_lower(units),
            counts: counts(&instruments),
            faults: instruments.iter().filter(|one| one.fault.is_some()).count() as u32,
            ready: not_ready.is_empty(),
            not_ready,
            headline: self.headline(cursor),
            plan: plan_words(highest).to_owned(),
            instruments,
        }
    }

    /// One instrument at the cursor.
    pub(super) fn now(&self, index: usize, cursor: Cursor) -> InstrumentNow {
        let timeline = self.timeline(index);
        let Known { kind, place, at } = &self.known[index];
        let row = timeline.row_at(cursor.time_s);
        let read = timeline.value_at(cursor.time_s).filter(|_| !cursor.planned);
        let scale = timeline.scale();
        let shown = Shown::reading(timeline.unit, cursor.units);
        let quantity = |value: f64| shown.quantity(value * scale);
        let expected = match cursor.planned {
            true => self.ahead().at(index, cursor.time_s),
            false => read.and_then(|row| row.expected),
        };
        let judgement = row.and_then(|row| row.judgement);
        let fault = timeline.fault_at(cursor.time_s);
        let trigger = row.map_or(Trigger::Normal, |row| row.trigger);
        InstrumentNow {
            id: timeline.id.clone(),
            kind: (*kind).to_owned(),
            place: place.clone(),
            trigger: trigger.into(),
            confirmed: judgement.is_some_and(|judgement| judgement.confirmed),
            held: trigger > Trigger::Normal
                && (cursor.planned
                    || judgement.is_some_and(|judgement| judgement.held_since_s.is_some())),
            not_judged: timeline.watcher.is_none(),
            data_state: state_at(row, cursor).name().to_owned(),
            fault: fault.map(fault_words),
            reading: read.and_then(|row| row.value).map(quantity),
            expected: expected.map(|band| quantity(band.likely)),
            band_low: expected.map(|band| quantity(band.low)),
            band_high: expected.map(|band| quantity(band.high)),
            band_position: read
                .and_then(|row| row.judgement)
                .and_then(|judgement| judgement.position_in_band),
            margin: read.and_then(|row| margin_words(timeline, row, shown)),
            age: match read {
                Some(row) => age_in_words(cursor.time_s - row.time_s),
                None if cursor.planned => "planned, not read yet".to_owned(),
                None => "never read".to_owned(),
            },
            objection: objection(timeline, row, cursor),
            section_x_m: at.x_m,
            depth_m: at.depth_m,
            off_section_m: at.off_m,
        }
    }

    /// The highest trigger at the cursor.
    pub(super) fn highest(&self, cursor: Cursor) -> Trigger {
        let triggers = self.comparison.timelines.iter().map(|one| one.trigger_at(cursor.time_s));
        triggers.max().unwrap_or_default()
    }

    fn load(&self, cursor: Cursor) -> LoadNow {
        let liquid_level_m = self.level_m(cursor.time_s);
        let kpa = self.comparison.model.applied_pressure_kpa(cursor.time_s, liquid_level_m);
        let in_use = self.comparison.load.at(cursor.time_s);
        let gauge = in_use.and_then(|load| load.gauge);
        let known = cursor.planned || gauge.is_some();
        let source = match (cursor.planned, in_use, gauge) {
            (true, ..) => "by the plan".to_owned(),
            (_, _, Some(gauge)) => format!("by {}", self.timeline(gauge).id),
            (_, Some(_), None) => {
                "load unknown: no gauge can be believed; last known level".to_owned()
            }
            (_, None, None) => "load unknown: no gauge was read yet".to_owned(),
        };
        let unread = !cursor.planned && in_use.is_none();
        let shown = |shown: Shown, value: f64| {
            let quantity = shown.quantity(value);
            if unread { Quantity { text: "unknown".to_owned(), ..quantity } } else { quantity }
        };
        LoadNow {
            liquid_level: shown(Shown::level(cursor.units), liquid_level_m),
            applied_pressure: shown(Shown::pressure(cursor.units), kpa),
            liquid_level_m,
            known,
            source,
        }
    }

    /// What stands against the next rise, the most pressing first.
    fn objections(
        &self,
        load: &LoadNow,
        instruments: &[InstrumentNow],
        cursor: Cursor,
    ) -> Vec<String> {
        if cursor.planned {
            return vec!["This moment is planned: nothing was read at it.".to_owned()];
        }
        let mut found: Vec<(u8, String)> = Vec::new();
        if !load.known {
            found.push((0, "The load is unknown: dip the tank by hand.".to_owned()));
        }
        for one in instruments {
            if let Some(objection) = &one.objection {
                let rank = match one.trigger {
                    TriggerView::Stop => 1,
                    TriggerView::Review => 2,
                    TriggerView::Watch => 3,
                    TriggerView::Normal => 4,
                };
                found.push((rank, format!("{}: {objection}", one.id)));
            }
        }
        found.sort_by_key(|(rank, _)| *rank);
        let left_out = found.len().saturating_sub(MOST_OBJECTIONS);
        let mut listed: Vec<String> =
            found.into_iter().take(MOST_OBJECTIONS).map(|(_, words)| words).collect();
        if left_out > 0 {
            listed.push(format!("and {left_out} more."));
        }
        listed
    }

    /// The shortest time in which a reading that moves reaches its next limit.
    fn to_limit(&self, cursor: Cursor) -> Option<String> {
        if cursor.planned {
            return None;
        }
        let each = self.comparison.timelines.iter().filter_map(|timeline| {
            let (days, next) = days_to_next(timeline.row_at(cursor.time_s)?)?;
            Some((days, next, timeline.id.as_str()))
        });
        let (days, next, id) = each.min_by(|a, b| a.0.total_cmp(&b.0))?;
        Some(format!("{} to {next} at {id}", duration(days * 86_400.0)))
    }

    fn to_lower(&self, units: Units) -> Option<String> {
        const FOOT_M: f64 = 0.3048;
        let hours = hours_to_lower_one_metre(&self.site)?;
        let (share, words) = match units {
            Units::Si => (1.0, "1 m"),
            Units::UsCustomary => (FOOT_M, "1 ft"),
        };
        Some(format!("{} to lower {words}", duration(hours * share * 3600.0)))
    }
}

struct LoadNow {
    liquid_level: Quantity,
    liquid_level_m: f64,
    applied_pressure: Quantity,
    known: bool,
    source: String,
}

fn state_at(row: Option<&Row>, cursor: Cursor) -> DataState {
    match row {
        Some(row) if !cursor.planned => row.data_state,
        _ => DataState::NotRead,
    }
}

/// "frozen: 6 equal readings in a row. ..."
pub(super) fn fault_words(fault: &FaultSpan) -> String {
    match fault.doubt {
        Some(doubt) => format!("{}: {doubt}", fault.state),
        None => fault.state.to_string(),
    }
}

/// "4.4 kPa to Stop".
pub(super) fn margin_words(timeline: &Timeline, row: &Row, shown: Shown) -> Option<String> {
    let margin = margin(timeline, row)?;
    let way = if margin.value < 0.0 { "beyond" } else { "to" };
    Some(format!("{} {way} {}", shown.small(margin.value.abs()), margin.to.name()))
}

/// Days to the next limit and which it is, where the reading is good and really moves.
pub(super) fn days_to_next(row: &Row) -> Option<(f64, Trigger)> {
    let judgement = row.judgement.filter(|_| row.data_state == DataState::Good)?;
    let (governing, rate) = (judgement.governing?, judgement.rate?);
    let moves = rate.per_day.abs() > RATE_ERRORS * rate.standard_error_per_day;
    let days = governing.days_to_next.filter(|days| moves && *days <= LONGEST_FORECAST_DAYS)?;
    (governing.next > judgement.trigger).then_some((days, governing.next))
}

fn objection(timeline: &Timeline, row: Option<&Row>, cursor: Cursor) -> Option<String> {
    if cursor.planned {
        return None;
    }
    let Some(row) = row else { return Some("it was never read.".to_owned()) };
    match row.judgement {
        Some(judgement) => judgement.not_ready.map(|reason| reason.to_string()),
        None if row.data_state != DataState::Good => {
            Some(format!("the reading is {}.", row.data_state))
        }
        None => timeline.watcher.as_ref().map(|_| "it was not judged.".to_owned()),
    }
}

/// Instruments at each trigger; at Normal only those that say so with a good reading.
fn counts(instruments: &[InstrumentNow]) -> [u32; 4] {
    let mut counts = [0; 4];
    for one in instruments {
        let says_so = !one.not_judged && one.data_state == DataState::Good.name();
        match one.trigger {
            TriggerView::Normal => counts[0] += u32::from(says_so),
            TriggerView::Watch => counts[1] += 1,
            TriggerView::Review => counts[2] += 1,
            TriggerView::Stop => counts[3] += 1,
        }
    }
    counts
}

fn stage_detail(hours: f64, next_m: Option<f64>, level_m: f64, units: Units) -> String {
    let shown = Shown::level(units);
    let hours = (hours >= 0.0).then(|| format!("{} h in", number(hours, 1)));
    let way = next_m.filter(|next_m| (next_m - level_m).abs() > HELD_M).map(|next_m| {
        let way = if next_m > level_m { "up" } else { "down" };
        format!("{} {way} to the next hold", shown.text((next_m - level_m).abs()))
    });
    hours.into_iter().chain(way).collect::<Vec<_>>().join(", ")
}
