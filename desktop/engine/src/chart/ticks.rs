//! Where an axis of numbers is divided and how the values are written.

/// One division of an axis.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Tick {
    pub at: f64,
    pub label: String,
    /// Second line, where something larger begins: the date under the hour, the year under the day.
    pub under: Option<String>,
}

/// Minus sign as wide as the plus, as set in print.
const MINUS: &str = "\u{2212}";

/// The smallest of 1, 2, 2.5, 5 times a power of ten that cuts `span` into at most `most` steps.
fn step_for(span: f64, most: usize) -> f64 {
    let least = span / most.max(1) as f64;
    let power = 10f64.powf(least.log10().floor());
    let factors = [1.0, 2.0, 2.5, 5.0, 10.0];
    // The allowance keeps a span of exactly n steps from rounding up to the next step.
    let fits = |factor: &&f64| **factor * power >= least * (1.0 - 1e-9);
    factors.iter().find(fits).unwrap_or(&10.0) * power
}

/// A range rounded outwards to whole steps.
pub(crate) fn rounded(low: f64, high: f64, most: usize) -> (f64, f64) {
    let step = step_for(high - low, most);
    let (low, high) = ((low / step + 1e-9).floor() * step, (high / step - 1e-9).ceil() * step);
    // Minus zero would be written with its sign.
    (low + 0.0, high + 0.0)
}

/// As many decimals as tell the steps apart: 0.25 needs one more than 0.2.
fn decimals_of(step: f64) -> usize {
    let power = step.log10().floor();
    let leading = step / 10f64.powf(power);
    let quarter = (leading - 2.5).abs() < 1e-6;
    (if quarter { 1.0 - power } else { -power }).clamp(0.0, 12.0) as usize
}

/// Equal divisions between `low` and `high`.
pub(crate) fn linear(low: f64, high: f64, most: usize) -> Vec<Tick> {
    let step = step_for(high - low, most);
    let decimals = decimals_of(step);
    let first = (low / step - 1e-6).ceil() as i64;
    let last = (high / step + 1e-6).floor() as i64;
    (first..=last)
        .map(|count| {
            let at = count as f64 * step;
            Tick { at, label: number(at, decimals), under: None }
        })
        .collect()
}

/// Divisions of a logarithmic axis: powers of ten, with 2 and 5 between when there are few.
pub(crate) fn log(low: f64, high: f64, most: usize) -> Vec<Tick> {
    let powers = low.log10().floor() as i32..=high.log10().ceil() as i32;
    let count = powers.clone().count();
    let stride = count.div_ceil(most.max(1)).max(1);
    let factors: &[f64] = if count * 3 <= most.max(3) { &[1.0, 2.0, 5.0] } else { &[1.0] };
    powers
        .step_by(stride)
        .flat_map(|power| {
            let decimals = (-power).clamp(0, 12) as usize;
            factors.iter().map(move |factor| (factor * 10f64.powi(power), decimals))
        })
        .filter(|(at, _)| (low * (1.0 - 1e-9)..=high * (1.0 + 1e-9)).contains(at))
        .map(|(at, decimals)| Tick { at, label: number(at, decimals), under: None })
        .collect()
}

/// A number with a fixed count of decimals, a proper minus and groups of thousands.
pub fn number(value: f64, decimals: usize) -> String {
    let text = format!("{:.decimals$}", value.abs());
    let zero = text.chars().all(|letter| matches!(letter, '0' | '.'));
    let (whole, part) = text.split_once('.').unwrap_or((&text, ""));
    let mut written = String::from(if value < 0.0 && !zero { MINUS } else { "" });
    for (index, digit) in whole.chars().enumerate() {
        // Four digits are read at a glance; longer numbers get a thin gap every three.
        if whole.len() > 4 && index > 0 && (whole.len() - index) % 3 == 0 {
            written.push('\u{a0}');
        }
        written.push(digit);
    }
    if !part.is_empty() {
        written.push('.');
        written.push_str(part);
    }
    written
}

#[cfg(test)]
mod tests {
    use super::*;

    fn labels(ticks: &[Tick]) -> Vec<&str> {
        ticks.iter().map(|tick| tick.label.as_str()).collect()
    }

    #[test]
    fn steps_are_round_and_few() {
        assert_eq!(labels(&linear(0.0, 120.0, 6)), ["0", "20", "40", "60", "80", "100", "120"]);
        assert_eq!(labels(&linear(0.0, 100.0, 4)), ["0", "25", "50", "75", "100"]);
        assert_eq!(labels(&linear(0.0, 1.0, 4)), ["0.00", "0.25", "0.50", "0.75", "1.00"]);
        assert_eq!(labels(&linear(-0.02, 0.06, 4)), ["−0.02", "0.00", "0.02", "0.04", "0.06"]);
        assert_eq!(
            labels(&linear(9_000.0, 21_000.0, 3)),
            ["10\u{a0}000", "15\u{a0}000", "20\u{a0}000"]
        );
    }

    #[test]
    fn ranges_round_outwards_and_stay_when_round() {
        assert_eq!(rounded(3.0, 117.0, 6), (0.0, 120.0));
        assert_eq!(rounded(0.0, 120.0, 6), (0.0, 120.0));
        assert!(rounded(-1e-12, 1.0, 5).0.is_sign_positive());
    }

    #[test]
    fn a_logarithmic_axis_is_labelled_at_powers_of_ten() {
        assert_eq!(labels(&log(1.0, 10_000.0, 8)), ["1", "10", "100", "1000", "10\u{a0}000"]);
        assert_eq!(labels(&log(0.1, 1.0, 9)), ["0.1", "0.2", "0.5", "1"]);
    }

    #[test]
    fn a_value_that_rounds_to_zero_has_no_sign() {
        assert_eq!(number(-0.0004, 2), "0.00");
        assert_eq!(number(-1234.5, 1), "−1234.5");
    }
}
