//! Limits: those in force, their versions, and new ones as people propose them. What is looser
//! needs two approvers and a reason; the store sees to that.

use super::failure::WindowError;
use super::records::{InstrumentInfo, LimitProposal, LimitRowView, LimitVersionView, LimitsView};
use super::session::Session;
use super::shown::{Shown, duration};
use super::views::{TriggerView, Units};
use crate::chart::number;
use crate::site::{Direction, Instrument, Limit, LimitRule, Persistence, Trigger};
use crate::store::{Change, LimitSet, LimitVersion, NewLimits, Recorded, Store};

impl From<Trigger> for TriggerView {
    fn from(trigger: Trigger) -> Self {
        match trigger {
            Trigger::Watch => Self::Watch,
            Trigger::Review => Self::Review,
            Trigger::Stop => Self::Stop,
        }
    }
}

impl Session {
    /// The limits by which the readings were judged, and all versions, the newest first.
    ///
    /// # Errors
    /// A store that cannot be read.
    pub fn limits(&self, units: Units) -> Result<LimitsView, WindowError> {
        let (in_force, mut versions) = {
            let store = self.store();
            (store.limits_at(self.comparison.last_s)?, store.limit_versions()?)
        };
        versions.reverse();
        let number = in_force.as_ref().map(|version| version.id);
        let set = in_force.map_or_else(|| LimitSet::of_site(&self.site), |found| found.what.limits);
        let text = serde_json::to_string_pretty(&set);
        let views = versions.into_iter().map(|version| self.version(version, number));
        Ok(LimitsView {
            versions: views.collect(),
            rows: (0..self.known.len()).map(|index| self.limit_row(index, units)).collect(),
            // What the store gave can be written again: its numbers are finite.
            text: text.unwrap_or_default() + "\n",
        })
    }

    fn version(&self, version: Recorded<LimitVersion>, in_force: Option<i64>) -> LimitVersionView {
        LimitVersionView {
            number: u32::try_from(version.id).unwrap_or(u32::MAX),
            effective_text: self.stamp(version.what.effective_from_s),
            entered_text: self.stamp(version.at_s),
            who: version.who,
            why: version.why,
            approvers: version.what.approvers,
            loosens: version.what.loosens,
            in_force: in_force == Some(version.id),
        }
    }

    fn limit_row(&self, index: usize, units: Units) -> LimitRowView {
        let given = &self.site.instruments[index];
        let shown = Shown::reading(given.unit, units);
        let (limits, persistence, hysteresis) = self.limits_of(given);
        let words = |limit: &Limit| (limit.trigger.into(), limit_words(limit, shown, units));
        LimitRowView {
            id: given.id.clone(),
            kind: self.known[index].kind.to_owned(),
            place: self.known[index].place.clone(),
            limits: limits.iter().map(words).collect(),
            persistence: persistence.map_or_else(|| "at once".to_owned(), persistence_words),
            hysteresis: hysteresis.map_or_else(String::new, |value| shown.text(value)),
        }
    }

    fn limits_of<'a>(
        &'a self,
        given: &'a Instrument,
    ) -> (&'a [Limit], Option<&'a Persistence>, Option<f64>) {
        let kind = self.site.limit_defaults.get(&given.kind);
        let limits = given.limits.as_ref().or(kind.map(|kind| &kind.limits));
        let persistence = given.persistence.as_ref().or(kind.map(|kind| &kind.persistence));
        let hysteresis = given.hysteresis.or(kind.map(|kind| kind.hysteresis));
        (limits.map_or(&[], Vec::as_slice), persistence, hysteresis)
    }

    /// Enters new limits. They judge readings made from their moment on.
    ///
    /// # Errors
    /// When the document is not good, counts from a time that is past, or is looser without two
    /// approvers.
    pub fn propose_limits(
        &self,
        proposal: &LimitProposal,
        now_s: i64,
        units: Units,
    ) -> Result<LimitsView, WindowError> {
        let set = LimitSet::parse(&proposal.text, "limits")?;
        let effective = proposal.effective.trim();
        let effective_from_s = if effective.is_empty() {
            now_s
        } else {
            crate::time::instant(effective, &self.zone)
                .ok_or_else(|| WindowError::Time { text: effective.to_owned() })?
        };
        let approvers: Vec<&str> = proposal.approvers.iter().map(String::as_str).collect();
        let new = NewLimits {
            limits: &set,
            effective_from_s,
            approvers: &approvers,
            loosens: proposal.loosens,
        };
        let change = Change { who: &proposal.who, at_s: now_s, why: &proposal.why };
        self.store().add_limits(&new, &change)?;
        self.limits(units)
    }

    /// What does not change with the cursor, of every instrument.
    #[must_use]
    pub fn instruments(&self, units: Units) -> Vec<InstrumentInfo> {
        (0..self.known.len()).map(|index| self.info(index, units)).collect()
    }

    fn info(&self, index: usize, units: Units) -> InstrumentInfo {
        let given = &self.site.instruments[index];
        let shown = Shown::reading(given.unit, units);
        InstrumentInfo {
            id: given.id.clone(),
            kind: self.known[index].kind.to_owned(),
            place: self.known[index].place.clone(),
            unit: shown.unit().to_owned(),
            range: shown.range(given.range.0, given.range.1),
            stale_after: duration(given.stale_after_min * 60.0),
            neighbours: given.neighbours.clone(),
            correction: correction_words(given),
            judged_by: judged_by(self.limits_of(given).0),
        }
    }
}

/// "1.3 times the band, above".
fn limit_words(limit: &Limit, shown: Shown, units: Units) -> String {
    let value = match &limit.rule {
        LimitRule::Band { band_multiple } if *band_multiple == 1.0 => "edge of the band".to_owned(),
        LimitRule::Band { band_multiple } => format!("{} times the band", plain(*band_multiple)),
        LimitRule::Value { value } => shown.text(*value),
        LimitRule::Rate { rate_per_day, window_h } => {
            format!("{} a day over {} h", shown.text(*rate_per_day), plain(*window_h))
        }
        LimitRule::Curve { applied_pressure_curve } => {
            let points = applied_pressure_curve.iter().map(|(kpa, value)| {
                format!("{} at {}", shown.text(*value), Shown::pressure(units).text(*kpa))
            });
            points.collect::<Vec<_>>().join(", ")
        }
    };
    let side = match limit.direction {
        Direction::Above => "above",
        Direction::Below => "below",
        Direction::Either => "either side",
    };
    format!("{value}, {side}")
}

fn plain(value: f64) -> String {
    number(value, usize::from(value.fract() != 0.0) * 2)
}

fn persistence_words(persistence: &Persistence) -> String {
    let noun = if persistence.readings == 1 { "reading" } else { "readings" };
    match persistence.minutes {
        0.0 => format!("{} {noun}", persistence.readings),
        minutes => format!("{} {noun} and {}", persistence.readings, duration(minutes * 60.0)),
    }
}

fn correction_words(given: &Instrument) -> Option<String> {
    let calibration = given.calibration.as_ref()?;
    let mut parts = vec!["digits"];
    if calibration.apply_temperature {
        parts.push("temperature");
    }
    if calibration.apply_barometer {
        parts.push("air pressure");
    }
    Some(crate::compare::words::joined(&parts))
}

fn judged_by(limits: &[Limit]) -> String {
    let mut bases: Vec<&str> = limits
        .iter()
        .map(|limit| match limit.rule {
            LimitRule::Band { .. } => "band",
            LimitRule::Curve { .. } => "curve over applied pressure",
            LimitRule::Value { .. } => "fixed value",
            LimitRule::Rate { .. } => "rate",
        })
        .collect();
    bases.dedup();
    if bases.is_empty() {
        return "no limits: it is never judged".to_owned();
    }
    crate::compare::words::joined(&bases)
}
