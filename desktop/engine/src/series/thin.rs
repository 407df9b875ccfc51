//! Thinning, see the contract of the room.

use super::{Point, path_runs, runs};

/// Splits `points` into runs and thins each to about three points a column.
///
/// `columns` is the number of equal parts of the whole span of `x`: give the width of the plot in
/// pixels. Few points come back untouched.
pub fn thin(points: &[Point], columns: usize, max_gap: Option<f64>) -> Vec<Vec<Point>> {
    let runs = runs(points, max_gap);
    let total: usize = runs.iter().map(std::ops::Range::len).sum();
    let columns = columns.max(1);
    if total <= 3 * columns {
        return runs.into_iter().map(|run| points[run].to_vec()).collect();
    }
    let grid = Grid::over(runs.iter().map(|run| &points[run.clone()]), columns);
    runs.into_iter()
        .map(|run| {
            let run = &points[run];
            let mut keep = extremes(run, |_, point| grid.column(point.0), |point| point.1);
            // Each run gets its share of the points chosen for shape.
            largest_triangles(run, columns * run.len() / total, &mut keep);
            pick(run, keep)
        })
        .collect()
}

/// As [`thin`], for a path whose `x` may go both ways (a reading against the applied pressure):
/// the columns are stretches of the path, and the extremes in `x` and in `y` stay.
pub fn thin_path(points: &[Point], columns: usize) -> Vec<Vec<Point>> {
    let runs = path_runs(points);
    let total: usize = runs.iter().map(std::ops::Range::len).sum();
    let columns = columns.max(1);
    let stretch = total.div_ceil(columns).max(1);
    runs.into_iter()
        .map(|run| {
            let run = &points[run];
            if total <= 4 * columns {
                return run.to_vec();
            }
            let mut keep = extremes(run, |index, _| index / stretch, |point| point.1);
            keep.extend(extremes(run, |index, _| index / stretch, |point| point.0));
            pick(run, keep)
        })
        .collect()
}

/// Equal columns over a span of `x`.
struct Grid {
    start: f64,
    per_unit: f64,
    last: usize,
}

impl Grid {
    fn over<'a>(runs: impl Iterator<Item = &'a [Point]>, columns: usize) -> Self {
        let (mut start, mut end) = (f64::INFINITY, f64::NEG_INFINITY);
        for run in runs {
            // Within a run x never goes back, so its ends are its extremes.
            start = start.min(run[0].0);
            end = end.max(run[run.len() - 1].0);
        }
        let span = end - start;
        let per_unit = if span > 0.0 { columns as f64 / span } else { 0.0 };
        Self { start, per_unit, last: columns - 1 }
    }

    fn column(&self, x: f64) -> usize {
        (((x - self.start) * self.per_unit) as usize).min(self.last)
    }
}

/// First and last index, and per column the indices of the lowest and highest `value`.
fn extremes(
    run: &[Point],
    column_of: impl Fn(usize, &Point) -> usize,
    value: impl Fn(&Point) -> f64,
) -> Vec<usize> {
    let mut keep = vec![0];
    let mut current = column_of(0, &run[0]);
    let (mut low, mut high) = (0, 0);
    for (index, point) in run.iter().enumerate() {
        let column = column_of(index, point);
        if column != current {
            keep.extend([low, high]);
            (current, low, high) = (column, index, index);
        } else if value(point) < value(&run[low]) {
            low = index;
        } else if value(point) > value(&run[high]) {
            high = index;
        }
    }
    keep.extend([low, high, run.len() - 1]);
    keep
}

/// Adds, per bucket, the point that spans the largest triangle with the point chosen before and
/// the mean of the bucket after.
fn largest_triangles(run: &[Point], buckets: usize, keep: &mut Vec<usize>) {
    if buckets == 0 || run.len() < buckets + 2 {
        return;
    }
    let inner = run.len() - 2;
    let edge = |bucket: usize| 1 + bucket * inner / buckets;
    let mut before = run[0];
    for bucket in 0..buckets {
        let after = mean(&run[edge(bucket + 1)..edge(bucket + 2).min(run.len())]);
        let mut best = (edge(bucket), -1.0);
        for (index, point) in run.iter().enumerate().take(edge(bucket + 1)).skip(edge(bucket)) {
            let area = twice_the_area(before, *point, after);
            if area > best.1 {
                best = (index, area);
            }
        }
        keep.push(best.0);
        before = run[best.0];
    }
}

fn mean(points: &[Point]) -> Point {
    let count = points.len() as f64;
    let sum = points.iter().fold((0.0, 0.0), |sum, point| (sum.0 + point.0, sum.1 + point.1));
    (sum.0 / count, sum.1 / count)
}

fn twice_the_area(a: Point, b: Point, c: Point) -> f64 {
    ((a.0 - c.0) * (b.1 - a.1) - (a.0 - b.0) * (c.1 - a.1)).abs()
}

fn pick(run: &[Point], mut keep: Vec<usize>) -> Vec<Point> {
    keep.sort_unstable();
    keep.dedup();
    keep.into_iter().map(|index| run[index]).collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn wave(count: usize) -> Vec<Point> {
        (0..count).map(|i| (i as f64, (i as f64 * 0.01).sin())).collect()
    }

    #[test]
    fn a_peak_of_one_point_in_a_million_stays() {
        let mut points = wave(1_000_000);
        points[654_321].1 = 9.0;
        points[123_456].1 = -9.0;
        let thinned = thin(&points, 600, None);
        assert_eq!(thinned.len(), 1);
        assert!(thinned[0].contains(&points[654_321]), "the peak must stay");
        assert!(thinned[0].contains(&points[123_456]), "the trough must stay");
        assert!(thinned[0].len() <= 3 * 600 + 2, "{} points", thinned[0].len());
    }

    #[test]
    fn few_points_come_back_untouched() {
        let points = wave(900);
        assert_eq!(thin(&points, 600, None), [points]);
    }

    #[test]
    fn a_path_keeps_its_turning_points() {
        let points: Vec<Point> = (0..20_000)
            .map(|i| {
                let turn = f64::from(i) / 20_000.0 * std::f64::consts::TAU;
                (turn.cos(), turn.sin())
            })
            .collect();
        let thinned = thin_path(&points, 100).concat();
        assert!(thinned.len() <= 402, "{} points", thinned.len());
        for extreme in [0, 5_000, 10_000, 15_000] {
            assert!(thinned.contains(&points[extreme]), "turning point {extreme} must stay");
        }
    }

    /// Values with gaps in time and in value, in order of time.
    fn any_series() -> impl Strategy<Value = Vec<Point>> {
        let value = prop_oneof![9 => -1e3..1e3f64, 1 => Just(f64::NAN)];
        let step = prop_oneof![20 => 0.0..2.0f64, 1 => 20.0..90.0f64];
        prop::collection::vec((step, value), 0..3_000).prop_map(|steps| {
            let mut x = 0.0;
            steps
                .into_iter()
                .map(|(step, y)| {
                    x += step;
                    (x, y)
                })
                .collect()
        })
    }

    proptest! {
        #[test]
        fn thinning_keeps_the_contract(points in any_series(), columns in 1usize..200) {
            let runs = runs(&points, Some(10.0));
            let thinned = thin(&points, columns, Some(10.0));
            prop_assert_eq!(runs.len(), thinned.len(), "no break is lost or added");

            let whole: Vec<&[Point]> = runs.iter().map(|run| &points[run.clone()]).collect();
            let grid = (!whole.is_empty()).then(|| Grid::over(whole.iter().copied(), columns));
            let mut kept = 0;
            for (run, thin_run) in whole.iter().zip(&thinned) {
                kept += thin_run.len();
                prop_assert_eq!(run.first(), thin_run.first());
                prop_assert_eq!(run.last(), thin_run.last());
                let mut rest = run.iter();
                for point in thin_run {
                    prop_assert!(rest.any(|p| p == point), "a point made up or out of order");
                }
                let grid = grid.as_ref().unwrap();
                for column in 0..columns {
                    let inside = |p: &&Point| grid.column(p.0) == column;
                    for sign in [1.0, -1.0] {
                        let top = |points: &[Point]| points.iter().filter(inside)
                            .map(|p| sign * p.1).fold(f64::NEG_INFINITY, f64::max);
                        prop_assert_eq!(top(run), top(thin_run), "a peak is hidden");
                    }
                }
            }
            // Two extremes a column (a column can be shared by two runs), one for shape, two ends.
            prop_assert!(kept <= 3 * columns + 4 * runs.len());
        }
    }
}
