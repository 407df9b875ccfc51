//! Steps of a settlement plate as long as a rod.

use super::super::Imported;
use super::super::report::utc;
use super::super::series::Sample;
use super::{Suspicion, SuspicionKind};
use crate::site::{Instrument, InstrumentKind, SiteFile};
use crate::units::UnitName;

/// Lengths in which rods are cut, m: metric, and 1, 3, 5 and 10 feet.
const RODS_M: [f64; 9] = [0.5, 1.0, 1.5, 2.0, 3.0, 0.3048, 0.9144, 1.524, 3.048];
/// How well an extension is measured, m, beside the noise of the readings.
const TOLERANCE_M: f64 = 0.005;

pub(super) fn find(site: &SiteFile, imported: &Imported) -> Vec<Suspicion> {
    let plates = site.instruments.iter().filter(|i| i.kind == InstrumentKind::SettlementPlate);
    plates
        .filter_map(|plate| Some((plate, imported.instrument(&plate.id)?)))
        .flat_map(|(plate, series)| steps(plate, &series.points))
        .collect()
}

fn steps(plate: &Instrument, points: &[Sample]) -> Vec<Suspicion> {
    let unit = UnitName::from(plate.unit);
    let metres = |value: f64| unit.convert(value, UnitName::Metre).unwrap_or(value);
    let noise_m = metres(plate.noise_sd);
    let tolerance_m = TOLERANCE_M + 4.0 * noise_m;
    let mut found = Vec::new();
    for (at, pair) in points.windows(2).enumerate() {
        let step_m = metres(pair[1].value - pair[0].value);
        let equals_rod = |rod: &&f64| (step_m.abs() - **rod).abs() <= tolerance_m;
        let Some(rod_m) = RODS_M.iter().find(equals_rod) else { continue };
        // A rod stays; a spike comes back.
        let next = points.get(at + 2);
        let comes_back =
            next.is_some_and(|next| metres(next.value - pair[0].value).abs() < 0.5 * rod_m);
        // Neither is the way back from a spike a rod.
        let before = at.checked_sub(1).and_then(|before| points.get(before));
        let came =
            before.is_some_and(|before| metres(pair[1].value - before.value).abs() < 0.5 * rod_m);
        if !comes_back && !came {
            found.push(suspicion(plate, step_m, *rod_m, pair[0].time_s, pair[1].time_s));
        }
    }
    found
}

fn suspicion(plate: &Instrument, step_m: f64, rod_m: f64, from_s: i64, to_s: i64) -> Suspicion {
    let message = format!(
        "{}: step of {step_m:.3} m between {} and {} equals one rod of {rod_m} m. Enter an extension? \
         Nothing was changed.",
        plate.id,
        utc(from_s),
        utc(to_s),
    );
    let kind = SuspicionKind::Rod { step_m, from_s, to_s };
    Suspicion { kind, instruments: vec![plate.id.clone()], message }
}
