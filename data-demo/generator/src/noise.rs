//! Seeded randomness: one independent stream for each purpose, so that a new instrument leaves
//! the readings of the others as they were. All maths by libm, so that every machine gives the
//! same bits.

use core::f64::consts::PI;
use rand_chacha::ChaCha8Rng;
use rand_chacha::rand_core::{Rng, SeedableRng};

/// The seed of both runs.
pub const SEED: u64 = 20_260_302;

/// A stream of random numbers.
#[derive(Debug)]
pub struct Noise(ChaCha8Rng);

impl Noise {
    /// The stream of a purpose, such as "good/PC1".
    pub fn for_purpose(purpose: &str) -> Self {
        // FNV-1a, 64 bit: only to number the streams.
        let stream = purpose.bytes().fold(0xcbf2_9ce4_8422_2325_u64, |hash, byte| {
            (hash ^ u64::from(byte)).wrapping_mul(0x0100_0000_01b3)
        });
        let mut generator = ChaCha8Rng::seed_from_u64(SEED);
        generator.set_stream(stream);
        Noise(generator)
    }

    /// Even between 0 and 1.
    pub fn even(&mut self) -> f64 {
        (self.0.next_u64() >> 11) as f64 / (1_u64 << 53) as f64
    }

    /// Normal with mean 0 and the given standard deviation (Box and Muller 1958).
    pub fn normal(&mut self, standard_deviation: f64) -> f64 {
        let radius = libm::sqrt(-2.0 * libm::log(1.0 - self.even()));
        standard_deviation * radius * libm::cos(2.0 * PI * self.even())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn normal_has_its_mean_and_spread() {
        let mut noise = Noise::for_purpose("test");
        let values: Vec<f64> = (0..20_000).map(|_| noise.normal(2.0)).collect();
        let mean = values.iter().sum::<f64>() / 20_000.0;
        let spread = (values.iter().map(|v| (v - mean).powi(2)).sum::<f64>() / 20_000.0).sqrt();
        assert!(mean.abs() < 0.05, "mean {mean}");
        assert!((spread - 2.0).abs() < 0.04, "standard deviation {spread}");
    }

    #[test]
    fn purposes_have_streams_of_their_own() {
        assert_ne!(Noise::for_purpose("a").even(), Noise::for_purpose("b").even());
    }
}
