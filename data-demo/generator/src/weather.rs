//! Air pressure and temperature at the invented terminal, the same in both runs.

use crate::noise::Noise;
use core::f64::consts::PI;

const DAY_S: f64 = 86_400.0;
/// Swings of air pressure: period in days and amplitude in kPa.
const SWINGS: [(f64, f64); 5] = [(2.7, 0.25), (4.1, 0.45), (6.3, 0.6), (9.7, 0.55), (0.5, 0.06)];

/// Weather from the start of the run.
#[derive(Debug)]
pub struct Weather {
    start_s: i64,
    phases: [f64; SWINGS.len()],
}

impl Weather {
    /// Weather whose season starts at `start_s`.
    pub fn new(start_s: i64) -> Self {
        let mut noise = Noise::for_purpose("weather");
        Weather { start_s, phases: core::array::from_fn(|_| 2.0 * PI * noise.even()) }
    }

    fn days(&self, at_s: i64) -> f64 {
        (at_s - self.start_s) as f64 / DAY_S
    }

    /// Air pressure, kPa.
    pub fn barometer_kpa(&self, at_s: i64) -> f64 {
        let days = self.days(at_s);
        let swing: f64 = SWINGS
            .iter()
            .zip(&self.phases)
            .map(|((period, amplitude), phase)| {
                amplitude * libm::sin(2.0 * PI * days / period + phase)
            })
            .sum();
        101.4 + swing
    }

    /// How far the air is above the mean of the day, C: warmest at 13 h UTC.
    pub fn warmth_of_the_hour_c(&self, at_s: i64) -> f64 {
        let hour = at_s.rem_euclid(86_400) as f64 / 3600.0;
        4.5 * libm::cos(2.0 * PI * (hour - 13.0) / 24.0)
    }

    /// Air temperature, C: early spring to early summer.
    pub fn air_c(&self, at_s: i64) -> f64 {
        let cold_spells = libm::sin(2.0 * PI * self.days(at_s) / 8.3 + self.phases[0]);
        2.0 + 0.14 * self.days(at_s) + 2.5 * cold_spells + self.warmth_of_the_hour_c(at_s)
    }

    /// Temperature of the ground some metres down, C.
    pub fn ground_c(&self, at_s: i64) -> f64 {
        8.6 + 0.006 * self.days(at_s)
    }
}
