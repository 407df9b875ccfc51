//! Series made ready for drawing: broken where data are missing, thinned to what a screen shows.
//!
//! ```text
//! raw points -> runs (split at missing values and gaps) -> thinned runs -> chart
//! ```
//!
//! # Contract
//! - A point that is not finite is no point: the curve breaks there.
//! - A step in `x` longer than the largest gap, or backwards, breaks the curve too. Nothing is
//!   interpolated across a break.
//! - Thinning only leaves points out, in order; it never makes one up or moves one.
//! - The first and last point of every run stay.
//! - The span of `x` is cut into equal columns (one a pixel, say). In every column the lowest and
//!   the highest point stay, so that no peak is hidden, however narrow. On top of these the points
//!   that matter most for the shape stay, one per bucket, chosen by the largest triangle.
//!
//! # References
//! Largest-triangle-three-buckets: S. Steinarsson, Downsampling time series for visual
//! representation, University of Iceland, 2013, section 4.2. Keeping the extremes beside it is the
//! min-max preselection of J. Van Der Donckt and others, 2023; here the extremes are not only
//! preselected but always kept, because a chart of alarms must not lose a peak.

mod thin;

pub use thin::{thin, thin_path};

use std::ops::Range;

/// A point `(x, y)`; on a time axis `x` is in seconds of Unix time.
pub type Point = (f64, f64);

/// The runs of points that may be joined by a line, as index ranges in order.
///
/// `max_gap` is the longest step in `x` that still counts as continuous; `None` joins across any
/// step forwards. A run can be a single point: draw it as a dot, or it is lost.
pub fn runs(points: &[Point], max_gap: Option<f64>) -> Vec<Range<usize>> {
    split(points, |before, after| after < before || max_gap.is_some_and(|gap| after - before > gap))
}

/// As [`runs`], for a path whose `x` may go both ways: only missing values break it.
pub fn path_runs(points: &[Point]) -> Vec<Range<usize>> {
    split(points, |_, _| false)
}

/// Splits at missing values and between neighbours whose `x` is `apart`.
fn split(points: &[Point], apart: impl Fn(f64, f64) -> bool) -> Vec<Range<usize>> {
    let mut runs = Vec::new();
    let mut start = None;
    for (index, point) in points.iter().enumerate() {
        if !is_finite(point) {
            close(&mut runs, &mut start, index);
        } else if start.is_none() {
            start = Some(index);
        } else if apart(points[index - 1].0, point.0) {
            close(&mut runs, &mut start, index);
            start = Some(index);
        }
    }
    close(&mut runs, &mut start, points.len());
    runs
}

fn is_finite(point: &Point) -> bool {
    point.0.is_finite() && point.1.is_finite()
}

fn close(runs: &mut Vec<Range<usize>>, start: &mut Option<usize>, end: usize) {
    if let Some(start) = start.take() {
        runs.push(start..end);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_missing_value_breaks_the_curve() {
        let points = [(0.0, 1.0), (1.0, f64::NAN), (2.0, 1.0), (3.0, 2.0), (4.0, f64::INFINITY)];
        assert_eq!(runs(&points, None), [0..1, 2..4]);
    }

    #[test]
    fn a_gap_and_a_step_back_break_the_curve() {
        let points = [(0.0, 1.0), (1.0, 1.0), (9.0, 1.0), (9.5, 1.0), (2.0, 1.0)];
        assert_eq!(runs(&points, Some(2.0)), [0..2, 2..4, 4..5]);
        assert_eq!(runs(&points, None), [0..4, 4..5]);
        assert_eq!(path_runs(&points).first(), Some(&(0..5)), "a path may turn back");
    }

    #[test]
    fn nothing_in_nothing_out() {
        assert!(runs(&[], None).is_empty());
        assert!(runs(&[(f64::NAN, 0.0)], None).is_empty());
    }
}
