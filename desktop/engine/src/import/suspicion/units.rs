//! Units mixed up: values that fit another unit of the same dimension.

use super::super::Imported;
use super::super::series::Series;
use super::fill::Fill;
use super::{
    Suspicion, SuspicionKind, engineering, is_loaded, measures_settlement, median, radii_from_axis,
};
use crate::site::{Column, Instrument, InstrumentKind, InstrumentUnit, SiteFile};
use crate::units::UnitName;
use brimstead_core::ground::Profile;
use brimstead_core::units::WATER_UNIT_WEIGHT_KN_M3;
use std::collections::BTreeMap;

const PRESSURES: [UnitName; 8] = [
    UnitName::Kpa,
    UnitName::Psi,
    UnitName::MetreWater,
    UnitName::Mbar,
    UnitName::Bar,
    UnitName::FootWater,
    UnitName::Mpa,
    UnitName::Pa,
];
const LENGTHS: [UnitName; 6] = [
    UnitName::Metre,
    UnitName::Millimetre,
    UnitName::Centimetre,
    UnitName::Foot,
    UnitName::Inch,
    UnitName::Decimetre,
];

/// The unit given for an instrument in the site file: that of its column, or its own.
fn given_unit(site: &SiteFile, instrument: &Instrument) -> UnitName {
    let columns = site.readings.iter().flat_map(|layout| layout.columns.values());
    let of_column = columns.filter_map(|column| match column {
        Column::Instrument { instrument: id, unit, .. } if *id == instrument.id => Some(*unit),
        _ => None,
    });
    of_column.into_iter().next().unwrap_or_else(|| UnitName::from(instrument.unit))
}

/// Another unit than the one given, with what the readings would be multiplied by, and how many
/// times that is more or less than what is wanted.
#[derive(Debug, Clone, Copy)]
struct Candidate {
    unit: UnitName,
    factor: f64,
    off: f64,
}

/// The units whose factor is the one wanted within a share either way.
fn candidates(given: UnitName, wanted: f64, units: &[UnitName], within: f64) -> Vec<Candidate> {
    let factors = units.iter().filter(|&&unit| unit != given).filter_map(|&unit| {
        let factor = unit.convert(1.0, given)?;
        Some(Candidate { unit, factor, off: (wanted / factor).max(factor / wanted) })
    });
    factors.filter(|candidate| candidate.off <= within).collect()
}

/// Tests the level against shell and plan. Gives the factor that would put it right.
pub(super) fn of_level(site: &SiteFile, level: &Series) -> Option<(f64, Suspicion)> {
    let planned: Vec<f64> = level
        .points
        .iter()
        .step_by(1 + level.points.len() / 2000)
        .filter_map(|point| {
            let planned = planned_level_m(site, point.time_s)?;
            (planned > 1.0 && point.value > 0.0).then(|| planned / point.value)
        })
        .collect();
    let wanted = median(planned)?;
    // A test may run well beside its plan, but not by half.
    if (0.6..=1.6).contains(&wanted) {
        return None;
    }
    let instrument = site.instruments.iter().find(|instrument| instrument.id == level.of.name())?;
    let given = given_unit(site, instrument);
    let Candidate { unit: fits, factor, .. } = candidates(given, wanted, &LENGTHS, 1.25)
        .into_iter()
        .min_by(|a, b| a.off.total_cmp(&b.off))?;
    let message = format!(
        "{}: values fit {fits}, not {given} ({} against the planned stages). Confirm the unit; \
         nothing was changed.",
        instrument.id,
        times_off(factor)
    );
    let kind = SuspicionKind::Unit { given, fits, factor };
    Some((factor, Suspicion { kind, instruments: vec![instrument.id.clone()], message }))
}

/// The planned level, m, from the start of the first stage to the end of the last hold.
fn planned_level_m(site: &SiteFile, time_s: i64) -> Option<f64> {
    let mut from_m = 0.0;
    for stage in &site.stages {
        if time_s < stage.start.time_s {
            return (from_m > 0.0).then_some(from_m);
        }
        if time_s < stage.end.time_s {
            let share = (time_s - stage.start.time_s) as f64
                / (stage.end.time_s - stage.start.time_s) as f64;
            return Some(from_m + share * (stage.to_level_m - from_m));
        }
        from_m = stage.to_level_m;
    }
    let last = site.stages.last()?;
    (time_s <= last.hold_until.time_s).then_some(from_m)
}

fn times_off(factor: f64) -> String {
    if factor >= 1.0 {
        format!("{factor:.1} times too small")
    } else {
        format!("{:.1} times too large", 1.0 / factor)
    }
}

/// An instrument whose values do not fit its unit, with the units that they do fit.
#[derive(Debug)]
struct Misfit {
    id: String,
    given: UnitName,
    candidates: Vec<Candidate>,
}

/// Tests piezometers against the pore pressure of the ground before filling, and the answer to the
/// fill against the load.
pub(super) fn of_piezometers(site: &SiteFile, imported: &Imported, fill: &Fill) -> Vec<Suspicion> {
    let Ok(ground) = site.ground() else { return Vec::new() };
    let Ok(profile) = Profile::new(&ground) else { return Vec::new() };
    let piezometers = site.instruments.iter().filter(|i| i.kind == InstrumentKind::Piezometer);
    let misfits = piezometers.filter_map(|instrument| {
        let series = engineering(imported, instrument)?;
        let in_situ = profile.pore_pressure_kpa(instrument.depth_m).ok()?;
        let given = given_unit(site, instrument);
        let candidates = piezometer(series, given, in_situ, is_loaded(site, instrument), fill);
        Some(Misfit { id: instrument.id.clone(), given, candidates })
    });
    grouped(misfits.collect(), "against depth and load")
}

fn piezometer(
    series: &Series,
    given: UnitName,
    in_situ_kpa: f64,
    loaded: bool,
    fill: &Fill,
) -> Vec<Candidate> {
    /// Below that a ratio to the in-situ pressure says nothing.
    const LEAST_KPA: f64 = 10.0;
    // Share of the load that the pressure may hold when the readings begin, at most and likely.
    let (most, likely) = if loaded { (1.3, 0.4) } else { (0.5, 0.1) };
    let Some(first) = series.points.first() else { return Vec::new() };
    let start =
        median(series.points.iter().take(9).map(|point| point.value).collect()).unwrap_or(0.0);
    let load_kpa = WATER_UNIT_WEIGHT_KN_M3 * fill.level_m(first.time_s).unwrap_or(0.0).max(0.0);
    let plausible = 0.5 * in_situ_kpa..=1.6 * in_situ_kpa + most * load_kpa + 5.0;
    // At or below zero: a gauge zeroed in place, which tells nothing about its unit.
    if in_situ_kpa < LEAST_KPA || start <= 0.0 || plausible.contains(&start) {
        return Vec::new();
    }
    let wanted = (in_situ_kpa + likely * load_kpa) / start;
    let answer = fill.response_per_m(series).map(|per_m| per_m / WATER_UNIT_WEIGHT_KN_M3);
    // The load must agree: an answer of more than the load, or of nothing under the tank, does not.
    let agrees = |factor: f64| {
        answer.is_none_or(|share| share * factor < 1.6 && (!loaded || share * factor > 0.02))
    };
    let fitting = candidates(given, wanted, &PRESSURES, 1.6);
    fitting.into_iter().filter(|candidate| agrees(candidate.factor)).collect()
}

/// Tests how far things settle against those near the surface in the same ring. Instruments whose
/// readings have a `step` are left out: it is not settlement.
pub(super) fn of_settlement(
    site: &SiteFile,
    imported: &Imported,
    stepped: &[String],
) -> Vec<Suspicion> {
    let mut settled: Vec<(&Instrument, bool, f64)> = Vec::new();
    for instrument in &site.instruments {
        let apt = measures_settlement(instrument.kind) && is_shallow(site, instrument);
        if !apt || stepped.contains(&instrument.id) {
            continue;
        }
        let Some(change) = engineering(imported, instrument).and_then(change) else { continue };
        let unit = UnitName::from(instrument.unit);
        let Some(mm) = unit.convert(change.abs(), UnitName::Millimetre) else { continue };
        if change.abs() > 4.0 * instrument.noise_sd {
            settled.push((instrument, radii_from_axis(site, instrument) > 0.8, mm));
        }
    }
    let misfits = settled.iter().filter_map(|&(instrument, edge, own)| {
        let in_ring = settled
            .iter()
            .filter(|(peer, at_edge, _)| *at_edge == edge && peer.id != instrument.id);
        let peers: Vec<f64> = in_ring.map(|&(.., mm)| mm).collect();
        // Two of three must agree for the third to be doubted; and settlements of one ring differ,
        // but hardly by five times.
        let wanted = if peers.len() < 2 { 1.0 } else { median(peers)? / own };
        let given = given_unit(site, instrument);
        let differs = !(0.2..=5.0).contains(&wanted);
        let candidates =
            if differs { candidates(given, wanted, &LENGTHS, 1.4) } else { Vec::new() };
        Some(Misfit { id: instrument.id.clone(), given, candidates })
    });
    grouped(misfits.collect(), "against its neighbours in the same ring")
}

/// From the first readings to the last.
fn change(series: &Series) -> Option<f64> {
    const FEWEST: usize = 6;
    let values = || series.points.iter().map(|point| point.value);
    if series.points.len() < FEWEST {
        return None;
    }
    Some(median(values().rev().take(3).collect())? - median(values().take(3).collect())?)
}

/// Near the surface and by the tank, where settlements differ by less than units do.
fn is_shallow(site: &SiteFile, instrument: &Instrument) -> bool {
    instrument.depth_m <= 2.0
        && is_loaded(site, instrument)
        && instrument.unit != InstrumentUnit::Kpa
}

/// One suspicion for all instruments with the same mistake: the unit that explains most of them
/// first, and among equals the one that fits best.
fn grouped(mut misfits: Vec<Misfit>, evidence: &str) -> Vec<Suspicion> {
    let mut found = Vec::new();
    loop {
        let mut groups: BTreeMap<(UnitName, UnitName), (usize, f64, f64)> = BTreeMap::new();
        for misfit in &misfits {
            for candidate in &misfit.candidates {
                let group = groups.entry((misfit.given, candidate.unit)).or_default();
                *group = (group.0 + 1, group.1 + candidate.off, candidate.factor);
            }
        }
        let best =
            groups.into_iter().max_by(|(_, a), (_, b)| a.0.cmp(&b.0).then(b.1.total_cmp(&a.1)));
        let Some(((given, fits), (_, _, factor))) = best else { return found };
        let explained = |misfit: &Misfit| {
            misfit.given == given
                && misfit.candidates.iter().any(|candidate| candidate.unit == fits)
        };
        let instruments: Vec<String> = misfits
            .iter()
            .filter(|misfit| explained(misfit))
            .map(|misfit| misfit.id.clone())
            .collect();
        misfits.retain(|misfit| !explained(misfit));
        let message = format!(
            "{}: values fit {fits}, not {given} ({} {evidence}). Confirm the unit; nothing was changed.",
            instruments.join(", "),
            times_off(factor)
        );
        found.push(Suspicion {
            kind: SuspicionKind::Unit { given, fits, factor },
            instruments,
            message,
        });
    }
}
