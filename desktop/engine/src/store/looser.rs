//! Whether one set of limits lets more pass than another.

use crate::site::check::instruments::on_curve;
use crate::site::{Direction, Limit, LimitDefaults, LimitRule, Persistence};
use serde::Serialize;
use std::collections::BTreeMap;
use std::fmt;

/// One way in which limits are looser than those they replace.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord, Serialize)]
pub struct Loosening {
    /// The instrument.
    pub instrument: String,
    /// What is looser.
    pub what: String,
}

impl fmt::Display for Loosening {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}: {}", self.instrument, self.what)
    }
}

/// Everything in which `new` is looser than `old`. Where two limits cannot be set against each
/// other (a fixed value in place of a rate, another window), the change counts as looser: what is
/// not known to be as strict is not taken to be.
#[must_use]
pub fn loosenings(
    old: &BTreeMap<String, LimitDefaults>,
    new: &BTreeMap<String, LimitDefaults>,
) -> Vec<Loosening> {
    let mut found = Vec::new();
    for (instrument, old) in old.iter().filter(|(_, old)| !old.limits.is_empty()) {
        let mut push = |what| found.push(Loosening { instrument: instrument.clone(), what });
        match new.get(instrument) {
            None => push("has no limits any more".to_owned()),
            Some(new) => of_instrument(old, new).for_each(&mut push),
        }
    }
    found
}

fn of_instrument(old: &LimitDefaults, new: &LimitDefaults) -> impl Iterator<Item = String> {
    let lost = old.limits.iter().filter(|limit| !new.limits.iter().any(|by| covers(by, limit)));
    let mut found: Vec<String> = lost.map(|limit| against(limit, &new.limits)).collect();
    let (before, after) = (old.persistence.clone(), new.persistence.clone());
    if after.readings > before.readings || after.minutes > before.minutes {
        found.push(format!("is confirmed after {}, was {}", shown(&after), shown(&before)));
    }
    if new.hysteresis < old.hysteresis {
        found
            .push(format!("falls after coming back by {}, was {}", new.hysteresis, old.hysteresis));
    }
    found.into_iter()
}

fn shown(persistence: &Persistence) -> String {
    format!("{} readings and {} min", persistence.readings, persistence.minutes)
}

/// Whether `new` is reached by every reading that reaches `old`, and raises at least as much.
fn covers(new: &Limit, old: &Limit) -> bool {
    // Which sides of zero of `new` stand for the limit of `old`.
    let sign = match (new.direction, old.direction) {
        (Direction::Below, Direction::Below) => -1.0,
        (a, b) if a == b => 1.0,
        (Direction::Either, Direction::Above) => 1.0,
        (Direction::Either, Direction::Below) => -1.0,
        _ => return false,
    };
    // A limit on both sides is the size of the value, so its lower side lies at minus the value.
    let own = |value: f64| match (new.direction, old.direction) {
        (Direction::Either, Direction::Below) => -value,
        _ => value,
    };
    let tight = |new: f64, old: f64| sign * own(new) <= sign * old;
    let as_tight = match (&new.rule, &old.rule) {
        // A band multiple counts outwards whatever the direction.
        (LimitRule::Band { band_multiple: new }, LimitRule::Band { band_multiple: old }) => {
            new <= old
        }
        (LimitRule::Value { value: new }, LimitRule::Value { value: old }) => tight(*new, *old),
        (
            LimitRule::Rate { rate_per_day: new, window_h: new_window },
            LimitRule::Rate { rate_per_day: old, window_h: old_window },
        ) => new_window == old_window && tight(*new, *old),
        (
            LimitRule::Curve { applied_pressure_curve: new },
            LimitRule::Curve { applied_pressure_curve: old },
        ) => {
            // Both are linear between their points, so the points of the two are enough.
            let points = new.iter().chain(old).map(|&(at, _)| at);
            points.into_iter().all(|at| tight(on_curve(new, at), on_curve(old, at)))
        }
        _ => false,
    };
    new.trigger >= old.trigger && as_tight
}

/// A limit that is not covered, in words, beside what stands in its place.
fn against(old: &Limit, new: &[Limit]) -> String {
    let same = new.iter().find(|limit| {
        limit.trigger == old.trigger
            && std::mem::discriminant(&limit.rule) == std::mem::discriminant(&old.rule)
    });
    let was = described(old);
    match same {
        Some(new) => format!("{} is {}, was {was}", old.trigger, described(new)),
        None => format!("{} at {was} has nothing as strict in its place", old.trigger),
    }
}

fn described(limit: &Limit) -> String {
    let rule = match &limit.rule {
        LimitRule::Band { band_multiple } => format!("{band_multiple} times the band"),
        LimitRule::Value { value } => value.to_string(),
        LimitRule::Rate { rate_per_day, window_h } => {
            format!("{rate_per_day} per day over {window_h} h")
        }
        LimitRule::Curve { applied_pressure_curve } => {
            let points: Vec<String> = applied_pressure_curve
                .iter()
                .map(|(pressure, value)| format!("{value} at {pressure} kPa"))
                .collect();
            format!("the curve {}", points.join(", "))
        }
    };
    format!("{rule} ({})", limit.direction)
}
