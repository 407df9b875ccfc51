//! What happened, in sentences made by rules from facts: against which load, since when, who agrees
//! and who is silent.

use super::moment::{Cursor, fault_words};
use super::session::Session;
use super::shown::Shown;
use crate::compare::words::{joined, kind_word};
use crate::compare::{Row, Timeline};
use brimstead_core::instrument::DataState;
use brimstead_core::watch::Trigger;

/// Names in one sentence before the rest is counted.
const MOST_NAMES: usize = 6;
/// Movement within so many standard deviations of the noise is none.
const MOVES_SD: f64 = 4.0;

impl Session {
    /// The moment, the gravest first.
    pub(super) fn headline(&self, cursor: Cursor) -> Vec<String> {
        let mut lines = Vec::new();
        if cursor.planned {
            lines.push(self.planned_line(cursor));
        } else if let Some(line) = self.unknown_load_line(cursor) {
            lines.push(line);
        }
        let highest = self.highest(cursor);
        if highest == Trigger::Normal {
            if !cursor.planned {
                lines.push(self.normal_line(cursor));
            }
        } else {
            lines.extend(self.raised_lines(highest, cursor));
        }
        lines.extend(self.silent_line(cursor));
        lines
    }

    fn planned_line(&self, cursor: Cursor) -> String {
        let last = self.stamp(self.comparison.last_s);
        let highest = self.highest(cursor);
        let stands = match highest {
            Trigger::Normal => String::new(),
            raised => format!(" {raised} of then still stands until a reading clears it."),
        };
        format!(
            "Planned: the last reading is of {last}; after it only the plan and what would be expected are shown.{stands}"
        )
    }

    fn unknown_load_line(&self, cursor: Cursor) -> Option<String> {
        let load = self.comparison.load.at(cursor.time_s);
        match load {
            Some(load) if load.gauge.is_some() => None,
            Some(load) => Some(format!(
                "The load is unknown: no level gauge can be believed; the last level was {}. Dip by hand; the next rise is blocked.",
                Shown::level(cursor.units).text(load.liquid_level_m)
            )),
            None => Some("The load is unknown: no level gauge was read yet.".to_owned()),
        }
    }

    fn normal_line(&self, cursor: Cursor) -> String {
        let judged = |timeline: &&Timeline| {
            let row = timeline.row_at(cursor.time_s);
            row.is_some_and(|row| row.judgement.is_some() && row.data_state == DataState::Good)
        };
        let judged = self.comparison.timelines.iter().filter(judged).count();
        let all = self.comparison.timelines.len();
        if judged == 0 {
            return "No instrument was judged yet: nothing is known.".to_owned();
        }
        format!(
            "{judged} of {all} instruments are inside their limits on good readings; none is outside."
        )
    }

    fn raised_lines(&self, highest: Trigger, cursor: Cursor) -> Vec<String> {
        let at: Vec<usize> = (0..self.comparison.timelines.len())
            .filter(|index| self.timeline(*index).trigger_at(cursor.time_s) == highest)
            .collect();
        let gravest = at.iter().copied().max_by(|a, b| {
            let position = |index: &usize| self.outside_by(*index, cursor);
            position(a).total_cmp(&position(b))
        });
        let names: Vec<&str> = at.iter().map(|index| self.timeline(*index).id.as_str()).collect();
        let mut lines = vec![format!("{highest} at {}.", listed(&names))];
        if let Some(index) = gravest {
            lines.extend(self.instrument_lines(index, cursor));
        }
        lines
    }

    /// How far outside its band an instrument reads.
    fn outside_by(&self, index: usize, cursor: Cursor) -> f64 {
        let row = self.timeline(index).value_at(cursor.time_s);
        let judgement = row.and_then(|row| row.judgement);
        judgement.and_then(|judgement| judgement.position_in_band).map_or(0.0, f64::abs)
    }

    /// One instrument in at most three sentences.
    pub(super) fn instrument_lines(&self, index: usize, cursor: Cursor) -> Vec<String> {
        let timeline = self.timeline(index);
        let Some(row) = timeline.value_at(cursor.time_s) else {
            return vec![format!("{} was never read up to this moment.", timeline.id)];
        };
        let mut lines = vec![self.evidence(timeline, row, cursor)];
        if row.trigger > Trigger::Normal {
            lines.extend(self.since_line(index, row, cursor));
            lines.push(self.agreement_line(timeline, cursor));
        }
        lines
    }

    /// "PE1 reads 91.6 kPa, 17.4 kPa above the expected 74.2 kPa (band 68.0 to 81.0 kPa), at
    /// 139.8 kPa applied pressure."
    fn evidence(&self, timeline: &Timeline, row: &Row, cursor: Cursor) -> String {
        let shown = Shown::reading(timeline.unit, cursor.units);
        let scale = timeline.scale();
        let value = row.value.map_or(f64::NAN, |value| value * scale);
        let mut text = format!("{} reads {}", timeline.id, shown.text(value));
        match row.expected {
            Some(band) => {
                let likely = band.likely * scale;
                let side = if value < likely { "below" } else { "above" };
                text += &format!(
                    ", {} {side} the expected {} (band {})",
                    shown.small((value - likely).abs()),
                    shown.text(likely),
                    shown.range(band.low * scale, band.high * scale)
                );
            }
            None => text += "; nothing is expected of it here",
        }
        match row.applied_pressure_kpa {
            Some(kpa) => {
                text +=
                    &format!(", at {} applied pressure.", Shown::pressure(cursor.units).text(kpa));
            }
            None => text += "; the load is unknown.",
        }
        text
    }

    /// Since when it is out, at which load, and how it moved since.
    fn since_line(&self, index: usize, row: &Row, cursor: Cursor) -> Option<String> {
        let timeline = self.timeline(index);
        let left = timeline
            .changes
            .iter()
            .rev()
            .find(|change| change.time_s <= cursor.time_s && change.from == Trigger::Normal)?;
        let then = timeline.row_at(left.time_s)?;
        let load = then.applied_pressure_kpa.map_or(String::new(), |kpa| {
            format!(", at {}", Shown::pressure(cursor.units).text(kpa))
        });
        let moved = self.moved_since(index, then, row, cursor);
        let unconfirmed = match row.judgement {
            Some(judgement) if !judgement.confirmed => " Unconfirmed: read again.",
            _ => "",
        };
        Some(format!(
            "Outside its limits since {}{load}{moved}.{unconfirmed}",
            self.stamp(left.time_s)
        ))
    }

    /// How it moved against what was expected.
    fn moved_since(&self, index: usize, then: &Row, row: &Row, cursor: Cursor) -> String {
        let noise = self.comparison.model.instruments[index].noise_sd;
        let (Some(from), Some(to)) = (then.value.zip(then.expected), row.value.zip(row.expected))
        else {
            return String::new();
        };
        let (moved, expected) = (to.0 - from.0, to.1.likely - from.1.likely);
        if moved.abs() < MOVES_SD * noise {
            return String::new();
        }
        let ratio = moved / expected;
        if expected.abs() > MOVES_SD * noise && (1.05..100.0).contains(&ratio) {
            return format!("; since then it moved {ratio:.1} times as far as expected");
        }
        let timeline = self.timeline(index);
        let shown = Shown::reading(timeline.unit, cursor.units);
        let scale = timeline.scale();
        format!(
            "; since then it moved by {} where {} was expected",
            shown.text(moved * scale),
            shown.text(expected * scale)
        )
    }

    fn agreement_line(&self, of: &Timeline, cursor: Cursor) -> String {
        let time_s = cursor.time_s;
        let names = |wanted: &dyn Fn(&Timeline) -> bool| -> Vec<&str> {
            let neighbours = of.neighbours.iter().map(|place| self.timeline(*place));
            neighbours.filter(|one| wanted(one)).map(|one| one.id.as_str()).collect()
        };
        let silent =
            |one: &Timeline| one.fault_at(time_s).is_some() || one.row_at(time_s).is_none();
        let agree = names(&|one| !silent(one) && one.trigger_at(time_s) >= Trigger::Watch);
        let inside = names(&|one| !silent(one) && one.trigger_at(time_s) == Trigger::Normal);
        let silent = names(&silent);
        let mut parts = Vec::new();
        if !agree.is_empty() {
            let verb = if agree.len() == 1 { "agrees" } else { "agree" };
            parts.push(format!("{} beside it {verb}", joined(&agree)));
        }
        if !inside.is_empty() {
            let verb = if inside.len() == 1 { "is" } else { "are" };
            parts.push(format!("{} beside it {verb} inside limits", joined(&inside)));
        }
        if !silent.is_empty() {
            let verb = if silent.len() == 1 { "is" } else { "are" };
            parts.push(format!("{} {verb} silent", joined(&silent)));
        }
        if parts.is_empty() {
            return format!("{} has no neighbour to confirm it: read it by another means.", of.id);
        }
        format!("{}.", parts.join("; "))
    }

    fn silent_line(&self, cursor: Cursor) -> Option<String> {
        if cursor.planned {
            return None;
        }
        let faulty: Vec<String> = self
            .comparison
            .timelines
            .iter()
            .filter_map(|one| {
                let fault = one.fault_at(cursor.time_s)?;
                Some(format!("{} {} ({})", kind_word(one.kind), one.id, fault.state))
            })
            .collect();
        if faulty.is_empty() {
            return None;
        }
        let names: Vec<&str> = faulty.iter().map(String::as_str).collect();
        Some(format!(
            "Equipment, not ground: {}. Missing or doubtful data are not good news.",
            listed(&names)
        ))
    }

    /// The fault of an instrument, as a sentence of its reading.
    pub(super) fn fault_line(&self, index: usize, cursor: Cursor) -> Option<String> {
        let timeline = self.timeline(index);
        let fault = timeline.fault_at(cursor.time_s).filter(|_| !cursor.planned)?;
        Some(format!("Equipment, not ground: {} is {}", timeline.id, fault_words(fault)))
    }
}

/// Names in words; many are cut and counted.
fn listed(names: &[&str]) -> String {
    if names.len() <= MOST_NAMES {
        return joined(names);
    }
    format!("{} and {} more", names[..MOST_NAMES].join(", "), names.len() - MOST_NAMES)
}

#[cfg(test)]
mod tests {
    use super::listed;

    #[test]
    fn a_long_list_is_cut_and_counted() {
        assert_eq!(listed(&["A"]), "A");
        assert_eq!(listed(&["A", "B"]), "A and B");
        assert_eq!(
            listed(&["A", "B", "C", "D", "E", "F", "G", "H"]),
            "A, B, C, D, E, F and 2 more"
        );
    }
}
