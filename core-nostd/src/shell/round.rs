//! Whether a levelling round may be used: its closure, and whether the benchmarks agree.
//!
//! A benchmark that has moved moves every point of the round alike and looks like uniform
//! settlement; a sight read wrongly moves all points after it. Both are found before settlements
//! are reported, or not at all.

use crate::quantity::{Bounded, OutOfRange};
use crate::working::{Silent, Step, Working};

/// A staff reading.
pub static STAFF_READING: Bounded = Bounded {
    name: "staff reading",
    unit: "m",
    min: -10.0,
    max: 10.0,
    remedy: "Height on the staff in metres; negative for a staff held upside down.",
};
/// Coefficient of an allowed misclosure.
pub static CLOSURE_COEFFICIENT: Bounded = Bounded {
    name: "coefficient of the allowed misclosure",
    unit: "m",
    min: 1e-6,
    max: 0.1,
    remedy: "Metres per root of a set-up or of a kilometre: 0.004 is quoted for first-order, 0.012 \
             for third-order levelling per root km.",
};
/// Length of a round.
pub static ROUND_LENGTH: Bounded = Bounded {
    name: "length of the round",
    unit: "km",
    min: 1e-3,
    max: 1e3,
    remedy: "Sum of all sight lengths, in kilometres.",
};
/// Level of a benchmark.
pub static BENCHMARK_LEVEL: Bounded = Bounded {
    name: "level of the benchmark",
    unit: "m",
    min: -1e4,
    max: 1e4,
    remedy: "Level above the site's datum, upwards positive, in metres.",
};
/// Difference between benchmarks that is put down to levelling.
pub static BENCHMARK_ALLOWANCE: Bounded = Bounded {
    name: "allowed difference between benchmarks",
    unit: "m",
    min: 1e-5,
    max: 0.1,
    remedy: "What the levelling between them can be wrong by, in metres.",
};

/// The two readings of one set-up of the level.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SetUp {
    /// Staff on the point before, m.
    pub backsight_m: f64,
    /// Staff on the point after, m.
    pub foresight_m: f64,
}

/// How much misclosure is allowed.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum ClosureRule {
    /// `k sqrt(n)` with n set-ups.
    PerRootSetUp {
        /// k, m.
        coefficient_m: f64,
    },
    /// `k sqrt(K)` with the length K of the round in kilometres.
    PerRootKilometre {
        /// k, m.
        coefficient_m: f64,
        /// Length of the round, km.
        length_km: f64,
    },
}

/// How a round closes.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Closure {
    /// Rise found on coming back less the true one, m.
    pub misclosure_m: f64,
    /// Allowed magnitude, m.
    pub allowed_m: f64,
    /// Whether the misclosure is allowed; a round without set-ups does not close.
    pub closes: bool,
}

/// Closure of a round from one benchmark to another whose level lies `true_rise_m` higher (0 for a
/// round that comes back to where it began): `sum (backsight - foresight) - true rise`.
///
/// # Errors
/// A value outside its range.
pub fn closure(
    set_ups: &[SetUp],
    true_rise_m: f64,
    rule: ClosureRule,
) -> Result<Closure, OutOfRange> {
    closure_with(set_ups, true_rise_m, rule, &mut Silent)
}

/// As [`closure`], writing its step.
///
/// # Errors
/// As [`closure`].
pub fn closure_with(
    set_ups: &[SetUp],
    true_rise_m: f64,
    rule: ClosureRule,
    working: &mut impl Working,
) -> Result<Closure, OutOfRange> {
    let mut rise_m = 0.0;
    for (index, set_up) in set_ups.iter().enumerate() {
        STAFF_READING.check_at(set_up.backsight_m, index)?;
        STAFF_READING.check_at(set_up.foresight_m, index)?;
        rise_m += set_up.backsight_m - set_up.foresight_m;
    }
    BENCHMARK_LEVEL.check(true_rise_m)?;
    let (coefficient_m, measure) = match rule {
        ClosureRule::PerRootSetUp { coefficient_m } => (coefficient_m, set_ups.len() as f64),
        ClosureRule::PerRootKilometre { coefficient_m, length_km } => {
            (coefficient_m, ROUND_LENGTH.check(length_km)?)
        }
    };
    let allowed_m = CLOSURE_COEFFICIENT.check(coefficient_m)? * libm::sqrt(measure);
    let misclosure_m = rise_m - true_rise_m;
    working.step(Step {
        name: "misclosure of the levelling round",
        value: misclosure_m,
        unit: "m",
        formula: "sum (backsight - foresight) - rise; allowed k sqrt(n)",
        inputs: &[("rise", true_rise_m), ("k", coefficient_m), ("n", measure)],
        source: "",
    });
    Ok(Closure {
        misclosure_m,
        allowed_m,
        closes: !set_ups.is_empty() && misclosure_m.abs() <= allowed_m,
    })
}

/// A benchmark as it was agreed and as this round finds it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Benchmark {
    /// Level of the baseline, m.
    pub baseline_level_m: f64,
    /// Level found in this round, m.
    pub level_now_m: f64,
}

impl Benchmark {
    fn shift_m(&self) -> f64 {
        self.level_now_m - self.baseline_level_m
    }
}

/// What the benchmarks of a round say about each other.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum BenchmarkAgreement {
    /// Fewer than two were observed: nothing is known about the datum.
    Unchecked,
    /// All agree.
    Agree {
        /// Largest difference between two, m.
        largest_difference_m: f64,
    },
    /// The others agree with each other, and this one does not.
    OneMoved {
        /// Which, counted from 0.
        index: usize,
        /// Its shift against the mean of the others, upwards positive, m.
        shift_m: f64,
    },
    /// Two or more disagree, and it cannot be told which has moved: no settlement may be reported.
    Disagree {
        /// Largest difference between two, m.
        largest_difference_m: f64,
    },
}

/// Compares the benchmarks of a round, allowing for a difference from levelling.
///
/// With two benchmarks a disagreement does not tell which moved; with three or more the odd one out
/// is named, which is likelier than that all others moved together, but not certain.
///
/// # Errors
/// A value outside its range.
pub fn benchmark_agreement(
    benchmarks: &[Benchmark],
    allowed_m: f64,
) -> Result<BenchmarkAgreement, OutOfRange> {
    BENCHMARK_ALLOWANCE.check(allowed_m)?;
    for (index, benchmark) in benchmarks.iter().enumerate() {
        BENCHMARK_LEVEL.check_at(benchmark.baseline_level_m, index)?;
        BENCHMARK_LEVEL.check_at(benchmark.level_now_m, index)?;
    }
    if benchmarks.len() < 2 {
        return Ok(BenchmarkAgreement::Unchecked);
    }
    let largest_difference_m = spread_without(benchmarks, None).0;
    if largest_difference_m <= allowed_m {
        return Ok(BenchmarkAgreement::Agree { largest_difference_m });
    }
    if benchmarks.len() > 2 {
        let mut odd = benchmarks.iter().enumerate().filter_map(|(index, benchmark)| {
            let (spread_m, mean_m) = spread_without(benchmarks, Some(index));
            (spread_m <= allowed_m).then_some((index, benchmark.shift_m() - mean_m))
        });
        if let (Some((index, shift_m)), None) = (odd.next(), odd.next()) {
            return Ok(BenchmarkAgreement::OneMoved { index, shift_m });
        }
    }
    Ok(BenchmarkAgreement::Disagree { largest_difference_m })
}

/// Largest difference between the shifts of all but one, and their mean.
fn spread_without(benchmarks: &[Benchmark], without: Option<usize>) -> (f64, f64) {
    let (mut low, mut high) = (f64::INFINITY, f64::NEG_INFINITY);
    let (mut sum, mut count) = (0.0, 0.0);
    for (index, benchmark) in benchmarks.iter().enumerate() {
        if Some(index) != without {
            let shift_m = benchmark.shift_m();
            (low, high) = (low.min(shift_m), high.max(shift_m));
            sum += shift_m;
            count += 1.0;
        }
    }
    (high - low, sum / count)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn round(misread_m: f64) -> [SetUp; 4] {
        [(1.512, 1.204), (0.998, 1.771), (1.640, 1.105), (1.233, 1.303 + misread_m)]
            .map(|(backsight_m, foresight_m)| SetUp { backsight_m, foresight_m })
    }

    #[test]
    fn a_round_closes_within_its_rule_and_not_beyond() {
        let rule = ClosureRule::PerRootSetUp { coefficient_m: 0.001 };
        let good = closure(&round(0.001), 0.0, rule).unwrap();
        assert!(good.closes && (good.misclosure_m + 0.001).abs() < 1e-12, "{good:?}");
        let bad = closure(&round(0.1), 0.0, rule).unwrap();
        assert!(!bad.closes && (bad.misclosure_m + 0.1).abs() < 1e-12, "{bad:?}");
        assert!(!closure(&[], 0.0, rule).unwrap().closes, "nothing was levelled");
    }

    /// US federal third order: 12 mm per root km; 10 km allows 37.9 mm (worked exercise in print).
    #[test]
    fn allowed_misclosure_grows_with_the_root_of_the_length() {
        let rule = ClosureRule::PerRootKilometre { coefficient_m: 0.012, length_km: 10.0 };
        let found = closure(&round(0.0), 0.0, rule).unwrap();
        assert!((found.allowed_m - 0.0379).abs() < 5e-5, "{found:?}");
    }

    fn benchmarks<const N: usize>(shifts_m: [f64; N]) -> [Benchmark; N] {
        shifts_m.map(|shift_m| Benchmark { baseline_level_m: 4.0, level_now_m: 4.0 + shift_m })
    }

    #[test]
    fn benchmarks_agree_or_the_odd_one_is_named_or_nobody_is() {
        let asked = |benchmarks: &[Benchmark]| benchmark_agreement(benchmarks, 0.002).unwrap();
        assert_eq!(asked(&benchmarks([0.0])), BenchmarkAgreement::Unchecked);
        assert!(matches!(
            asked(&benchmarks([0.0, 0.001])),
            BenchmarkAgreement::Agree { largest_difference_m } if largest_difference_m < 0.0011
        ));
        assert!(matches!(
            asked(&benchmarks([0.0, 0.006])),
            BenchmarkAgreement::Disagree { largest_difference_m } if largest_difference_m > 0.0059
        ));
        assert!(matches!(
            asked(&benchmarks([0.0, -0.006, 0.001])),
            BenchmarkAgreement::OneMoved { index: 1, shift_m } if (shift_m + 0.0065).abs() < 1e-12
        ));
        assert!(matches!(
            asked(&benchmarks([0.0, 0.006, 0.012])),
            BenchmarkAgreement::Disagree { .. }
        ));
    }
}
