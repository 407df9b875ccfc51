//! The east edge beginning to yield: what it adds to each instrument beyond consolidation.
//!
//! A wedge below the shell, some 11 m deep and a fifth of the rim wide, shears. It adds pore
//! pressure and settlement near the edge, lifts the ground outside the berm, and leaves the
//! centre, the deep clay and the other sides alone. Shape and pace are invented; the signs and
//! the order of the signs follow the literature on edge failures of tanks (pressure first, then
//! the rate of edge settlement, then heave outside).

use crate::site::{Instrument, Kind, Site};
use core::f64::consts::PI;

/// Direction of the middle of the wedge as seen from the axis, degrees clockwise from north.
const BEARING_DEG: f64 = 84.0;
/// Half width of the wedge, degrees.
const HALF_WIDTH_DEG: f64 = 26.0;
/// Excess pore pressure in the middle of the wedge after one pace, kPa.
const PRESSURE_KPA: f64 = 44.0;
/// Settlement of the edge in the middle of the wedge after one pace, mm.
const SETTLEMENT_MM: f64 = 105.0;
/// Heave outside the berm after one pace, mm.
const HEAVE_MM: f64 = 40.0;
/// Depth of the slip, m.
const DEPTH_M: f64 = 11.0;
/// How fast creep fades once the level is lowered, s.
const FADING_S: f64 = 10.0 * 3600.0;

/// When it began and how it grew.
#[derive(Debug, Clone)]
pub struct EdgeYield {
    /// Onset, Unix s.
    pub onset_s: i64,
    /// Time in which the movement grows to its unit, s. It grows with the square of time.
    pub pace_s: f64,
    /// When the level began to be lowered, Unix s.
    pub lowered_s: i64,
}

impl EdgeYield {
    /// How far it has come: 0 before the onset, 1 after one pace.
    fn progress(&self, at_s: i64) -> f64 {
        let grown = |t: i64| {
            let paces = (t - self.onset_s).max(0) as f64 / self.pace_s;
            paces * paces
        };
        if at_s <= self.lowered_s {
            return grown(at_s);
        }
        let last_rate = 2.0 * (self.lowered_s - self.onset_s) as f64 / (self.pace_s * self.pace_s);
        let since = (at_s - self.lowered_s) as f64;
        grown(self.lowered_s) + last_rate * FADING_S * (1.0 - libm::exp(-since / FADING_S))
    }

    /// Added excess pore pressure at an instrument, kPa; it falls with the load once lowered.
    pub fn pressure_kpa(&self, site: &Site, instrument: &Instrument, at_s: i64) -> f64 {
        let (radius_m, across) = place(site, instrument);
        let since = (at_s - self.lowered_s).max(0) as f64;
        let kept = libm::exp(-since / (4.0 * FADING_S));
        let progress = self.progress(at_s.min(self.lowered_s));
        PRESSURE_KPA
            * progress
            * kept
            * across
            * bell(radius_m - 25.5, 6.0)
            * bell(instrument.depth_m - 5.5, 4.5)
    }

    /// Added settlement at an instrument, mm; negative where the ground is pushed up.
    pub fn settlement_mm(&self, site: &Site, instrument: &Instrument, at_s: i64) -> f64 {
        if instrument.kind == Kind::LevelGauge {
            return 0.0;
        }
        let (radius_m, across) = place(site, instrument);
        let shallow = (1.0 - instrument.depth_m / DEPTH_M).max(0.0);
        let down = SETTLEMENT_MM * bell(radius_m - 24.0, 4.5);
        let up = HEAVE_MM * bell(radius_m - 36.0, 4.0);
        (down - up) * self.progress(at_s) * across * shallow
    }
}

/// Distance from the axis and how much of the wedge is there, around the rim.
fn place(site: &Site, instrument: &Instrument) -> (f64, f64) {
    let (east_m, north_m) =
        (instrument.x_m - site.tanks[0].x_m, instrument.y_m - site.tanks[0].y_m);
    let bearing_deg = libm::atan2(east_m, north_m) * 180.0 / PI;
    let away_deg = (bearing_deg - BEARING_DEG + 540.0).rem_euclid(360.0) - 180.0;
    (libm::hypot(east_m, north_m), bell(away_deg, HALF_WIDTH_DEG))
}

fn bell(distance: f64, width: f64) -> f64 {
    libm::exp(-(distance / width) * (distance / width))
}
