//! Signs turned round: what should go up goes down while the tank fills.

use super::super::Imported;
use super::fill::Fill;
use super::{Suspicion, SuspicionKind, engineering, is_loaded, measures_settlement, plural};
use crate::site::{Instrument, InstrumentKind, SiteFile};
use std::collections::BTreeMap;

pub(super) fn find(site: &SiteFile, imported: &Imported, fill: &Fill) -> Vec<Suspicion> {
    let mut kinds: BTreeMap<InstrumentKind, (Vec<String>, usize)> = BTreeMap::new();
    for instrument in site.instruments.iter().filter(|instrument| must_rise(site, instrument)) {
        let Some(series) = engineering(imported, instrument) else { continue };
        let Some(per_m) = fill.response_per_m(series) else { continue };
        let (reversed, tested) = kinds.entry(instrument.kind).or_default();
        *tested += 1;
        if per_m < -clear_per_m(instrument, fill) {
            reversed.push(instrument.id.clone());
        }
    }
    let found = kinds.into_iter().filter(|(_, (reversed, _))| !reversed.is_empty());
    found.map(|(kind, (reversed, tested))| suspicion(kind, reversed, tested)).collect()
}

/// Where the sign of the answer is beyond doubt: settlement under the tank and at its edge, and
/// pore pressure under the tank. Outside, the ground may well heave.
fn must_rise(site: &SiteFile, instrument: &Instrument) -> bool {
    is_loaded(site, instrument)
        && (measures_settlement(instrument.kind) || instrument.kind == InstrumentKind::Piezometer)
}

/// The change per metre of level that noise alone does not give.
fn clear_per_m(instrument: &Instrument, fill: &Fill) -> f64 {
    let shortest = fill.rises.iter().map(|rise| rise.rise_m).fold(f64::INFINITY, f64::min);
    4.0 * std::f64::consts::SQRT_2 * instrument.noise_sd / shortest
}

fn suspicion(kind: InstrumentKind, reversed: Vec<String>, tested: usize) -> Suspicion {
    let what = match kind {
        InstrumentKind::Piezometer => "show falling pressure",
        _ => "rise",
    };
    let message = format!(
        "{} {what} while the tank fills. Sign may be reversed for {} of {tested} ({}). \
         Confirm it; nothing was changed.",
        plural(kind),
        reversed.len(),
        reversed.join(", "),
    );
    Suspicion { kind: SuspicionKind::Sign, instruments: reversed, message }
}
