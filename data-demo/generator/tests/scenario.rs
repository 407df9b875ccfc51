//! What the two runs are meant to show, measured on the invented truth before noise and faults:
//! the site file's band, worked out by the generator's own route, against the ground as it is.

use brimstead_demo::ground::{GroundHistory, TRUTH};
use brimstead_demo::level::LevelHistory;
use brimstead_demo::site::{Factors, Instrument, Kind, Site};
use brimstead_demo::{read_site, run};
use std::path::{Path, PathBuf};

const HOUR_S: i64 = 3600;
/// Instruments in or beside the wedge that yields.
const EAST_EDGE: [&str; 14] = [
    "PE1", "PE2", "PF1", "PF2", "PO1", "SC3", "SV04", "SV05", "SV06", "SV03", "SP2", "SO1", "ME1",
    "ME2",
];

fn site_path() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("../site.json")
}

fn site() -> Site {
    read_site(&site_path()).unwrap()
}

/// Truth and band of one run.
struct Comparison<'a> {
    truth: GroundHistory<'a>,
    likely: GroundHistory<'a>,
    cases: Vec<GroundHistory<'a>>,
}

impl<'a> Comparison<'a> {
    fn new(site: &'a Site, run: &run::Run, level: &'a LevelHistory) -> Self {
        let likely = Factors {
            compressibility: 1.0,
            cv: 1.0,
            ch: 1.0,
            pore_pressure_response: 1.0,
            young: 1.0,
        };
        let even = |factors: &Factors| GroundHistory::new(site, factors, false, level, None);
        Comparison {
            truth: GroundHistory::new(site, &TRUTH, true, level, run.edge.clone()),
            likely: even(&likely),
            cases: site.band.cases.iter().map(even).collect(),
        }
    }

    /// Departure from the likely value in half bands of its side; none where the half band is
    /// within the instrument's own noise, or where the site file limits the value itself.
    fn band_multiple(&self, instrument: &Instrument, at_s: i64) -> Option<f64> {
        if ["PO1", "PB1", "SO1", "SO2"].contains(&instrument.id.as_str()) {
            return None;
        }
        let likely = self.likely.value(instrument, at_s);
        let departure = self.truth.value(instrument, at_s) - likely;
        let half_band = self
            .cases
            .iter()
            .map(|case| (case.value(instrument, at_s) - likely) * departure.signum())
            .fold(0.0, f64::max);
        (half_band > 3.0 * instrument.noise_sd).then(|| departure.abs() / half_band)
    }
}

/// Rate of the truth over a window, mm/day; 0 for a piezometer.
fn rate_mm_per_day(
    truth: &GroundHistory,
    instrument: &Instrument,
    at_s: i64,
    window_h: i64,
) -> f64 {
    if instrument.kind == Kind::Piezometer {
        return 0.0;
    }
    let since_s = at_s - window_h * HOUR_S;
    let moved = truth.value(instrument, at_s) - truth.value(instrument, since_s);
    moved * 24.0 / window_h as f64
}

fn ground_instruments(site: &Site) -> impl Iterator<Item = &Instrument> {
    site.instruments.iter().filter(|i| i.kind != Kind::LevelGauge)
}

#[test]
fn good_ground_stays_inside_the_band() {
    let (site, run) = (site(), run::good());
    let level = LevelHistory::new(&site, &run.afterwards, run.end_s);
    let comparison = Comparison::new(&site, &run, &level);
    let mut compared = 0;
    for instrument in ground_instruments(&site) {
        for at_s in (site.baseline.as_second()..=run.end_s).step_by(6 * HOUR_S as usize) {
            if let Some(multiple) = comparison.band_multiple(instrument, at_s) {
                assert!(multiple < 0.95, "{} at {at_s}: {multiple:.2} half bands", instrument.id);
                compared += 1;
            }
        }
    }
    assert!(compared > 10_000, "the comparison covers the run: {compared}");
}

#[test]
fn good_ground_never_moves_at_the_rate_of_review() {
    let (site, run) = (site(), run::good());
    let level = LevelHistory::new(&site, &run.afterwards, run.end_s);
    let truth = GroundHistory::new(&site, &TRUTH, true, &level, None);
    let limits = Limits::read();
    let first_s = site.baseline.as_second() + 36 * HOUR_S;
    for instrument in ground_instruments(&site) {
        let (window_h, review) = limits.rate(instrument.kind, "review");
        for at_s in (first_s..=run.end_s).step_by(3 * HOUR_S as usize) {
            let rate = rate_mm_per_day(&truth, instrument, at_s, window_h);
            assert!(rate < 0.85 * review, "{} at {at_s}: {rate:.1} mm/day", instrument.id);
        }
    }
}

/// The limits that the site file sets by default for a kind of instrument.
struct Limits(serde_json::Value);

impl Limits {
    fn read() -> Self {
        let text = std::fs::read_to_string(site_path()).unwrap();
        let site: serde_json::Value = serde_json::from_str(&text).unwrap();
        Limits(site["limit_defaults"].clone())
    }

    fn rule(&self, kind: Kind, trigger: &str, quantity: &str) -> Option<&serde_json::Value> {
        let name = match kind {
            Kind::Piezometer => "piezometer",
            Kind::SettlementPlate => "settlement_plate",
            Kind::SettlementCell => "settlement_cell",
            Kind::Magnet => "magnet",
            Kind::SurveyPoint => "survey_point",
            Kind::LevelGauge => "level_gauge",
        };
        let limits = self.0[name]["limits"].as_array().unwrap();
        let rules = limits.iter().filter(|l| l["trigger"] == trigger).map(|l| &l["rule"]);
        rules.into_iter().find(|rule| rule.get(quantity).is_some())
    }

    fn band_multiple(&self, kind: Kind, trigger: &str) -> f64 {
        self.rule(kind, trigger, "band_multiple").unwrap()["band_multiple"].as_f64().unwrap()
    }

    /// Window in hours and rate in mm/day; no rate limits a piezometer.
    fn rate(&self, kind: Kind, trigger: &str) -> (i64, f64) {
        self.rule(kind, trigger, "rate_per_day").map_or((24, f64::INFINITY), |rule| {
            (rule["window_h"].as_i64().unwrap(), rule["rate_per_day"].as_f64().unwrap())
        })
    }
}

#[test]
fn bad_run_passes_review_hours_before_stop_and_only_at_the_east_edge() {
    let (site, run) = (site(), run::bad());
    let edge = run.edge.clone().unwrap();
    let level = LevelHistory::new(&site, &run.afterwards, run.end_s);
    let comparison = Comparison::new(&site, &run, &level);
    let limits = Limits::read();
    let (mut first_review_s, mut first_stop_s) = (i64::MAX, i64::MAX);
    let mut reached_review = std::collections::BTreeSet::new();
    for at_s in (edge.onset_s..edge.lowered_s).step_by(HOUR_S as usize) {
        for instrument in ground_instruments(&site) {
            let multiple = comparison.band_multiple(instrument, at_s).unwrap_or(0.0);
            let passes = |trigger: &str| {
                let (window_h, limit) = limits.rate(instrument.kind, trigger);
                let rate = rate_mm_per_day(&comparison.truth, instrument, at_s, window_h);
                multiple > limits.band_multiple(instrument.kind, trigger) || rate > limit
            };
            if passes("review") {
                first_review_s = first_review_s.min(at_s);
                reached_review.insert(instrument.id.as_str());
            }
            if passes("stop") {
                first_stop_s = first_stop_s.min(at_s);
            }
            if !EAST_EDGE.contains(&instrument.id.as_str()) {
                assert!(multiple < 0.95, "{} is beside the story: {multiple:.2}", instrument.id);
            }
        }
    }
    let warning_h = (first_stop_s - first_review_s) / HOUR_S;
    assert!((6..=40).contains(&warning_h), "hours from review to stop: {warning_h}");
    for id in ["PE1", "PE2", "PF1", "SC3", "SV04", "SV05"] {
        assert!(reached_review.contains(id), "{id} passes review");
    }
}
