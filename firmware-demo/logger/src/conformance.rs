//! The numbers by which a logger and a desktop show that they compute the same to the last bit.
//!
//! Both run [`write_bits`] and compare the text. What the numbers should be is tested in the core
//! against published values; here only sameness counts, so the inputs are an invented tank.

use brimstead_core::config::Name;
use brimstead_core::load::{PlanPosition, Tank};
use brimstead_core::working::Silent;
use core::fmt;

/// What the numbers are computed from.
#[derive(Debug, Clone)]
pub struct Inputs {
    tank: Tank,
    neighbour: PlanPosition,
    liquid_levels_m: [f64; 5],
    water_kn_m3: f64,
}

impl Inputs {
    /// The invented tank. `None` only when its name outgrows the core's names.
    #[must_use]
    pub fn invented() -> Option<Self> {
        let tank = Tank {
            name: Name::try_from("conformance").ok()?,
            axis: PlanPosition { x_m: 0.1, y_m: 0.2 },
            diameter_m: 52.3,
            shell_height_m: 18.1,
            loaded_depth_m: 0.0,
            floor_pressure_kpa: 0.79,
            pad_pressure_kpa: 21.3,
            excavation_relief_kpa: 4.9,
            shell_line_load_kn_m: 41.7,
            ring_line_load_kn_m: 9.3,
        };
        Some(Self {
            tank,
            neighbour: PlanPosition { x_m: 61.3, y_m: -22.9 },
            liquid_levels_m: [0.0, 1.0 / 3.0, 4.7, 11.113, 17.9],
            water_kn_m3: 9.81,
        })
    }
}

/// Computes every number and hands it on with its name; `None` when the core refuses an input.
pub fn compute(inputs: &Inputs, mut each: impl FnMut(&'static str, f64)) -> Option<()> {
    let tank = &inputs.tank;
    for level_m in inputs.liquid_levels_m {
        let pressure_kpa =
            tank.applied_pressure_kpa(level_m, inputs.water_kn_m3, &mut Silent).ok()?;
        each("applied pressure kPa", pressure_kpa);
    }
    each("tank area m2", tank.area_m2());
    each("axis distance m", tank.axis.distance_to_m(&inputs.neighbour));
    Some(())
}

/// Writes one line a number: what it is, and its bits in hexadecimal. Numbers are not written as
/// decimals, because formatting a float costs the logger two kilobytes of stack.
///
/// # Errors
/// [`fmt::Error`] when the sink refuses or when the core refuses an input, which it must not.
pub fn write_bits(sink: &mut impl fmt::Write) -> fmt::Result {
    let inputs = Inputs::invented().ok_or(fmt::Error)?;
    let mut written = Ok(());
    let computed = compute(&inputs, |name, value| {
        written = written.and_then(|()| writeln!(sink, "{name} {:016x}", value.to_bits()));
    });
    written.and(computed.ok_or(fmt::Error))
}

#[cfg(test)]
mod tests {
    extern crate std;
    use super::*;
    use std::string::String;

    #[test]
    fn every_line_is_a_name_and_a_finite_number() {
        let mut text = String::new();
        write_bits(&mut text).unwrap();
        assert!(text.lines().count() >= 7);
        for line in text.lines() {
            let (name, bits) = line.rsplit_once(' ').unwrap();
            let value = f64::from_bits(u64::from_str_radix(bits, 16).unwrap());
            assert!(!name.is_empty() && value.is_finite(), "{line}");
        }
    }

    #[test]
    fn a_refused_input_is_an_error_and_not_a_shorter_list() {
        let mut inputs = Inputs::invented().unwrap();
        inputs.liquid_levels_m[4] = 99.0;
        assert_eq!(compute(&inputs, |_, _| {}), None);
    }
}
