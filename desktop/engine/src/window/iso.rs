//! Lines of equal value on a rectangular grid, with their labels.
//!
//! Marching squares: in each cell the line runs straight between the places on the edges where the
//! value, taken linear along the edge, is reached. A saddle (all four edges crossed) is parted by
//! the mean of the corners. Lines of one value are joined end to end.

use std::collections::HashMap;

/// Most lines on one side of zero.
const MOST_LEVELS: f64 = 9.0;

/// A grid of values: `values[row][column]` at `(xs[column], ys[row])`, both rising.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Grid {
    pub xs: Vec<f64>,
    pub ys: Vec<f64>,
    pub values: Vec<Vec<f64>>,
}

/// One line.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Line {
    pub level: f64,
    pub points: Vec<[f64; 2]>,
}

impl Line {
    /// Where to write its value: at its lowest place, where lines of different value lie apart;
    /// in its middle when it runs out of the drawing there.
    pub fn label_at(&self, bottom: f64) -> [f64; 2] {
        let lower = |a: &&[f64; 2], b: &&[f64; 2]| a[1].total_cmp(&b[1]);
        let lowest = self.points.iter().max_by(lower).copied().unwrap_or_default();
        if lowest[1] < bottom {
            return lowest;
        }
        self.points.get(self.points.len() / 2).copied().unwrap_or(lowest)
    }
}

/// Values worth a line, in steps of 1, 2 or 5 times a power of ten, zero left out.
pub(super) fn levels(grid: &Grid) -> (Vec<f64>, usize) {
    let all = || grid.values.iter().flatten().copied().filter(|value| value.is_finite());
    let largest = all().map(f64::abs).fold(0.0, f64::max);
    if largest <= 0.0 {
        return (Vec::new(), 0);
    }
    let rough = largest / MOST_LEVELS;
    let power = 10_f64.powi(rough.log10().floor() as i32);
    let step = [1.0, 2.0, 5.0, 10.0].map(|times| times * power);
    let step = step.into_iter().find(|step| *step >= rough).unwrap_or(10.0 * power);
    let (low, high) =
        all().fold((f64::INFINITY, f64::NEG_INFINITY), |(l, h), v| (l.min(v), h.max(v)));
    let first = (low / step).ceil() as i64;
    let last = (high / step).floor() as i64;
    let levels = (first..=last).filter(|index| *index != 0).map(|index| index as f64 * step);
    let decimals = (-step.log10().floor()).max(0.0) as usize;
    (levels.collect(), decimals)
}

/// The lines of one value.
pub(super) fn lines(grid: &Grid, level: f64) -> Vec<Line> {
    let mut segments = Vec::new();
    for row in 0..grid.ys.len().saturating_sub(1) {
        for column in 0..grid.xs.len().saturating_sub(1) {
            cell(grid, level, (row, column), &mut segments);
        }
    }
    join(grid, level, &segments)
}

/// An edge of the grid: of the point it starts from, to the right or downwards.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
struct Edge {
    row: usize,
    column: usize,
    down: bool,
}

fn cell(grid: &Grid, level: f64, (row, column): (usize, usize), out: &mut Vec<[Edge; 2]>) {
    let value = |down: usize, right: usize| grid.values[row + down][column + right];
    let corners = [value(0, 0), value(0, 1), value(1, 1), value(1, 0)];
    if corners.iter().any(|value| !value.is_finite()) {
        return;
    }
    let above = corners.map(|value| value >= level);
    // Edges clockwise from the top: each between a corner and the next.
    let edges = [
        Edge { row, column, down: false },
        Edge { row, column: column + 1, down: true },
        Edge { row: row + 1, column, down: false },
        Edge { row, column, down: true },
    ];
    let crossed: Vec<Edge> = (0..4)
        .filter(|side| above[*side] != above[(side + 1) % 4])
        .map(|side| edges[side])
        .collect();
    match crossed[..] {
        [a, b] => out.push([a, b]),
        [a, b, c, d] => {
            let middle = 0.25 * corners.iter().sum::<f64>() >= level;
            // The line goes round those corners that are not of the middle's kind.
            if middle == above[0] {
                out.extend([[a, b], [c, d]]);
            } else {
                out.extend([[d, a], [b, c]]);
            }
        }
        _ => {}
    }
}

/// Where the value is reached along an edge.
fn place(grid: &Grid, level: f64, edge: Edge) -> [f64; 2] {
    let Edge { row, column, down } = edge;
    let (next_row, next_column) = if down { (row + 1, column) } else { (row, column + 1) };
    let (from, to) = (grid.values[row][column], grid.values[next_row][next_column]);
    let share = (level - from) / (to - from);
    let between = |a: f64, b: f64| a + share * (b - a);
    [between(grid.xs[column], grid.xs[next_column]), between(grid.ys[row], grid.ys[next_row])]
}

/// Joins segments that share an edge.
fn join(grid: &Grid, level: f64, segments: &[[Edge; 2]]) -> Vec<Line> {
    let mut at: HashMap<Edge, Vec<usize>> = HashMap::new();
    for (index, segment) in segments.iter().enumerate() {
        for edge in segment {
            at.entry(*edge).or_default().push(index);
        }
    }
    let mut used = vec![false; segments.len()];
    let mut lines = Vec::new();
    for start in 0..segments.len() {
        if used[start] {
            continue;
        }
        used[start] = true;
        let [first, last] = segments[start];
        let mut chain = vec![first, last];
        follow(&mut chain, segments, &at, &mut used);
        chain.reverse();
        follow(&mut chain, segments, &at, &mut used);
        let points = chain.into_iter().map(|edge| place(grid, level, edge)).collect();
        lines.push(Line { level, points });
    }
    lines
}

/// Lengthens a chain at its end as far as it goes.
fn follow(
    chain: &mut Vec<Edge>,
    segments: &[[Edge; 2]],
    at: &HashMap<Edge, Vec<usize>>,
    used: &mut [bool],
) {
    while let Some(end) = chain.last().copied() {
        let next = at.get(&end).into_iter().flatten().copied().find(|index| !used[*index]);
        let Some(index) = next else { break };
        used[index] = true;
        let [a, b] = segments[index];
        chain.push(if a == end { b } else { a });
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn grid(size: usize, value: impl Fn(f64, f64) -> f64) -> Grid {
        let axis: Vec<f64> =
            (0..size).map(|index| 4.0 * index as f64 / (size - 1) as f64 - 2.0).collect();
        let values = axis.iter().map(|y| axis.iter().map(|x| value(*x, *y)).collect()).collect();
        Grid { xs: axis.clone(), ys: axis, values }
    }

    #[test]
    fn a_cone_gives_one_closed_circle() {
        let cone = grid(81, |x, y| 2.0 - x.hypot(y));
        let found = lines(&cone, 1.0);
        assert_eq!(found.len(), 1);
        let points = &found[0].points;
        assert_eq!(points.first(), points.last(), "closed");
        for [x, y] in points {
            assert!((x.hypot(*y) - 1.0).abs() < 2e-3, "{x} {y}");
        }
        let [x, y] = found[0].label_at(2.0);
        assert!(x.abs() < 0.05 && (y - 1.0).abs() < 2e-3, "at its lowest place");
        let plane = lines(&grid(9, |x, _| x), 0.1);
        assert_eq!(plane[0].label_at(2.0), plane[0].points[4], "in the middle");
    }

    #[test]
    fn a_plane_gives_a_straight_line_from_side_to_side() {
        let plane = grid(9, |x, y| x + 0.3 * y);
        let found = lines(&plane, 0.77);
        assert_eq!(found.len(), 1);
        let points = &found[0].points;
        assert!(points.iter().all(|[x, y]| (x + 0.3 * y - 0.77).abs() < 1e-12));
        let ends = [points[0][1], points[points.len() - 1][1]].map(f64::abs);
        assert_eq!(ends, [2.0, 2.0]);
    }

    #[test]
    fn a_saddle_gives_two_branches_that_do_not_cross() {
        // An even number of points, so that the saddle lies inside a cell.
        let saddle = grid(10, |x, y| x * y);
        let found = lines(&saddle, 0.1);
        assert_eq!(found.len(), 2);
        for line in found {
            let signs: Vec<bool> = line.points.iter().map(|point| point[0] > 0.0).collect();
            assert!(signs.iter().all(|sign| *sign == signs[0]), "a branch stays on its side");
        }
    }

    #[test]
    fn levels_are_round_and_few_and_zero_is_left_out() {
        let (found, decimals) = levels(&grid(5, |x, _| 30.0 * x));
        assert_eq!(
            found,
            [-60.0, -50.0, -40.0, -30.0, -20.0, -10.0, 10.0, 20.0, 30.0, 40.0, 50.0, 60.0]
        );
        assert_eq!(decimals, 0);
        let (found, decimals) = levels(&grid(5, |x, _| 0.01 * (x + 2.0)));
        assert_eq!((found.len(), decimals), (8, 3), "{found:?}");
        assert!((found[0] - 0.005).abs() < 1e-12, "{found:?}");
        assert_eq!(levels(&grid(5, |_, _| 0.0)), (vec![], 0));
        assert_eq!(levels(&grid(5, |_, _| f64::NAN)), (vec![], 0));
    }

    #[test]
    fn where_nothing_is_known_there_is_no_line() {
        let holed = grid(21, |x, y| if x > 0.0 { f64::NAN } else { x + y });
        let found = lines(&holed, -1.0);
        assert!(found.iter().flat_map(|line| &line.points).all(|point| point[0] <= 0.0));
        assert!(!found.is_empty());
    }
}
