//! Instruments and their limits.

use super::super::model::{
    Direction, Instrument, InstrumentKind, InstrumentUnit, Limit, LimitRule, SiteParts, Trigger,
};
use super::super::reader::{Reading, nearest};
use super::ground::{bottom, rising};
use super::{quoted, unique};

pub(super) fn check(reading: &Reading<'_>, parts: &SiteParts<'_>) {
    if let Some(defaults) = parts.limit_defaults {
        for (kind, default) in defaults {
            limits(reading, &format!("limit_defaults.{kind}.limits"), &default.limits);
        }
    }
    let Some(instruments) = parts.instruments else { return };
    unique(
        reading,
        "instruments",
        "id",
        instruments.iter().map(|instrument| instrument.id.as_str()),
    );
    let ids: Vec<&str> = instruments.iter().map(|instrument| instrument.id.as_str()).collect();
    for (index, instrument) in instruments.iter().enumerate() {
        let path = format!("instruments[{index}]");
        range(reading, &path, instrument);
        unit(reading, &path, instrument);
        open_to_air_and_sinking(reading, &path, instrument);
        neighbours(reading, &path, instrument, &ids);
        if let Some(own) = &instrument.limits {
            limits(reading, &format!("{path}.limits"), own);
        }
        calibration(reading, &path, instrument);
        if let Some(bottom) = parts.layers.and_then(|layers| bottom(layers)) {
            depth(reading, &path, instrument, bottom);
        }
    }
    master(reading, instruments);
}

fn range(reading: &Reading<'_>, path: &str, instrument: &Instrument) {
    let (low, high) = instrument.range;
    if low >= high {
        let found = format!("[{low}, {high}]");
        reading.report(
            &format!("{path}.range"),
            found,
            "the lowest reading first, then the highest",
            "Exchange them.",
        );
    }
}

fn unit(reading: &Reading<'_>, path: &str, instrument: &Instrument) {
    let fits: &[InstrumentUnit] = match instrument.kind {
        InstrumentKind::Piezometer => &[InstrumentUnit::Kpa],
        InstrumentKind::LevelGauge => &[InstrumentUnit::Metre],
        InstrumentKind::SettlementPlate
        | InstrumentKind::SettlementCell
        | InstrumentKind::Magnet
        | InstrumentKind::SurveyPoint => &[InstrumentUnit::Millimetre, InstrumentUnit::Metre],
    };
    if !fits.contains(&instrument.unit) {
        let words: Vec<_> = fits.iter().map(|unit| quoted(unit.word())).collect();
        let allowed = format!("{} for a {}", words.join(" or "), instrument.kind);
        let remedy = "The unit in the files may differ: it is given with each column.";
        reading.report(&format!("{path}.unit"), quoted(instrument.unit.word()), allowed, remedy);
    }
}

fn open_to_air_and_sinking(reading: &Reading<'_>, path: &str, instrument: &Instrument) {
    if instrument.kind != InstrumentKind::Piezometer {
        return;
    }
    let given = [("tip_sinks", instrument.tip_sinks), ("vented", instrument.vented)];
    for (key, _) in given.iter().filter(|(_, value)| value.is_none()) {
        let found = format!("no \"{key}\" for the piezometer \"{}\"", instrument.id);
        let remedy = "Its readings cannot be reduced to excess pore pressure without it.";
        reading.report(&format!("{path}.id"), found, format!("\"{key}\": true or false"), remedy);
    }
}

fn neighbours(reading: &Reading<'_>, path: &str, instrument: &Instrument, ids: &[&str]) {
    for (index, neighbour) in instrument.neighbours.iter().enumerate() {
        let path = format!("{path}.neighbours[{index}]");
        if *neighbour == instrument.id {
            reading.report(
                &path,
                quoted(neighbour),
                "another instrument",
                "An instrument cannot confirm itself.",
            );
        } else if !ids.contains(&neighbour.as_str()) {
            unknown_instrument(reading, &path, neighbour, ids);
        }
    }
}

/// Reports an id that no instrument has.
pub(super) fn unknown_instrument(reading: &Reading<'_>, path: &str, id: &str, ids: &[&str]) {
    let remedy = nearest(id, ids).map_or_else(
        || format!("The instruments are {}.", ids.join(", ")),
        |near| format!("Did you mean \"{near}\"?"),
    );
    reading.report(path, quoted(id), "the id of an instrument of this file", remedy);
}

fn calibration(reading: &Reading<'_>, path: &str, instrument: &Instrument) {
    let Some(calibration) = &instrument.calibration else { return };
    let path = format!("{path}.calibration");
    let pressure =
        matches!(instrument.kind, InstrumentKind::Piezometer | InstrumentKind::SettlementCell);
    if !pressure {
        let found = format!("a pressure calibration for a {}", instrument.kind);
        reading.report(&path, found, "only for a piezometer or a settlement cell", "Take it out.");
    }
    if calibration.factor_kpa_per_digit == 0.0 {
        let allowed = "a factor other than 0";
        reading.report(
            &format!("{path}.factor_kpa_per_digit"),
            "0",
            allowed,
            "Every reading would be 0.",
        );
    }
    if instrument.vented == Some(true) && calibration.apply_barometer {
        let found = "true for a vented instrument";
        let allowed = "false, or an instrument that is not vented";
        let remedy =
            "A vented gauge already takes the air pressure off; correcting again adds error.";
        reading.report(&format!("{path}.apply_barometer"), found, allowed, remedy);
    }
}

fn depth(reading: &Reading<'_>, path: &str, instrument: &Instrument, bottom: f64) {
    if instrument.depth_m > bottom {
        let allowed = format!("not below the base of the lowest layer at {bottom} m");
        let remedy = "Nothing is expected there; add the layer it stands in.";
        reading.report(&format!("{path}.depth_m"), instrument.depth_m.to_string(), allowed, remedy);
    }
}

fn master(reading: &Reading<'_>, instruments: &[Instrument]) {
    let gauges = instruments.iter().filter(|i| i.kind == InstrumentKind::LevelGauge).count();
    let is_master = |instrument: &Instrument| instrument.master == Some(true);
    let masters = instruments.iter().filter(|i| is_master(i)).count();
    for (index, instrument) in instruments.iter().enumerate() {
        if is_master(instrument) && instrument.kind != InstrumentKind::LevelGauge {
            let found = format!("true for a {}", instrument.kind);
            reading.report(
                &format!("instruments[{index}].master"),
                found,
                "only for a level gauge",
                "Take it out.",
            );
        }
    }
    if !instruments.is_empty() && gauges == 0 {
        let remedy = "Without a liquid level no reading has a load, and none can be judged.";
        reading.report("instruments", "no level_gauge", "at least one", remedy);
    } else if gauges > 1 && masters != 1 {
        let found = format!("{gauges} level gauges with {masters} masters");
        let remedy = "Set \"master\": true on the one that gives the load.";
        reading.report("instruments", found, "exactly one master", remedy);
    }
}

/// Limits of one instrument or kind: each given once, and in the order watch, review, stop.
pub(crate) fn limits(reading: &Reading<'_>, path: &str, limits: &[Limit]) {
    for (index, limit) in limits.iter().enumerate() {
        let here = format!("{path}[{index}]");
        limit_itself(reading, &here, limit);
        for (earlier_index, earlier) in limits.iter().enumerate().take(index) {
            if !comparable(earlier, limit) {
                continue;
            }
            if earlier.trigger == limit.trigger {
                let allowed =
                    format!("each limit once; {path}[{earlier_index}] is of the same kind");
                reading.report(
                    &format!("{here}.trigger"),
                    quoted(limit.trigger.word()),
                    allowed,
                    "Keep one of the two.",
                );
                continue;
            }
            let (lower, upper) =
                if earlier.trigger < limit.trigger { (earlier, limit) } else { (limit, earlier) };
            if let Some((lower_value, upper_value)) = out_of_order(lower, upper) {
                order_refused(
                    reading,
                    &here,
                    (lower.trigger, lower_value),
                    (upper.trigger, upper_value),
                );
            }
        }
    }
}

fn limit_itself(reading: &Reading<'_>, path: &str, limit: &Limit) {
    if let LimitRule::Curve { applied_pressure_curve } = &limit.rule {
        rising(
            reading,
            &format!("{path}.rule.applied_pressure_curve"),
            "applied pressure",
            applied_pressure_curve,
        );
    }
    let magnitude = match limit.rule {
        LimitRule::Rate { rate_per_day, .. } => rate_per_day,
        LimitRule::Value { value } => value,
        LimitRule::Band { .. } | LimitRule::Curve { .. } => return,
    };
    if limit.direction == Direction::Either && magnitude <= 0.0 {
        let allowed = "a positive number when the direction is \"either\"";
        reading.report(
            &format!("{path}.rule"),
            magnitude.to_string(),
            allowed,
            "It bounds the size, whatever the sign.",
        );
    }
}

/// Of the same kind and direction, and for rates over the same window.
fn comparable(a: &Limit, b: &Limit) -> bool {
    let same_rule = match (&a.rule, &b.rule) {
        (LimitRule::Rate { window_h: a, .. }, LimitRule::Rate { window_h: b, .. }) => a == b,
        (a, b) => std::mem::discriminant(a) == std::mem::discriminant(b),
    };
    same_rule && a.direction == b.direction
}

/// A place where the more serious limit would be reached first: (less serious, more serious).
fn out_of_order(lower: &Limit, upper: &Limit) -> Option<(f64, f64)> {
    let wrong = |&(low, high): &(f64, f64)| match lower.direction {
        Direction::Above | Direction::Either => high <= low,
        Direction::Below => high >= low,
    };
    match (&lower.rule, &upper.rule) {
        // A band multiple counts outwards whatever the direction.
        (LimitRule::Band { band_multiple: low }, LimitRule::Band { band_multiple: high }) => {
            Some((*low, *high)).filter(|(low, high)| high <= low)
        }
        (LimitRule::Value { value: low }, LimitRule::Value { value: high }) => {
            Some((*low, *high)).filter(wrong)
        }
        (LimitRule::Rate { rate_per_day: low, .. }, LimitRule::Rate { rate_per_day: high, .. }) => {
            Some((*low, *high)).filter(wrong)
        }
        (
            LimitRule::Curve { applied_pressure_curve: low },
            LimitRule::Curve { applied_pressure_curve: high },
        ) => {
            // Both are linear between their points, so the points of either are enough.
            low.iter()
                .chain(high)
                .map(|&(at, _)| (on_curve(low, at), on_curve(high, at)))
                .find(wrong)
        }
        _ => None,
    }
}

/// Linear between points, level beyond the ends.
pub(crate) fn on_curve(points: &[(f64, f64)], at: f64) -> f64 {
    let after = points.partition_point(|&(x, _)| x < at);
    match (after.checked_sub(1).and_then(|before| points.get(before)), points.get(after)) {
        (Some(&(x0, y0)), Some(&(x1, y1))) if x1 > x0 => y0 + (y1 - y0) * (at - x0) / (x1 - x0),
        (_, Some(&(_, y))) | (Some(&(_, y)), None) => y,
        (None, None) => f64::NAN,
    }
}

fn order_refused(reading: &Reading<'_>, path: &str, lower: (Trigger, f64), upper: (Trigger, f64)) {
    let found = format!("{} at {} and {} at {}", lower.0, lower.1, upper.0, upper.1);
    let allowed =
        format!("limits reached in the order watch, review, stop: {} before {}", lower.0, upper.0);
    reading.report(&format!("{path}.rule"), found, allowed, "Exchange the values or correct one.");
}
