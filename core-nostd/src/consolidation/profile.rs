//! Between cells and depths: point values of a state, cell means of a profile.

use super::error::{DEPTH, RATIO};
use super::grid::Cell;
use super::{Boundary, Error, Stepper};
use crate::quantity::Bounded;

/// Depth and pressure.
type Node = (f64, f64);

/// Value at `z_m` of the polynomial through the nodes (Neville's scheme). Depths differ.
fn through<const NODES: usize>(nodes: [Node; NODES], z_m: f64) -> f64 {
    let mut values = nodes.map(|node| node.1);
    for span in 1..NODES {
        // Each value becomes that of the polynomial through it and the `span` nodes below.
        let mut rest = values.iter_mut().peekable();
        for (upper, lower) in nodes.iter().zip(nodes.iter().skip(span)) {
            let Some(here) = rest.next() else { break };
            let next = rest.peek().map_or(*here, |next| **next);
            *here = ((lower.0 - z_m) * *here + (z_m - upper.0) * next) / (lower.0 - upper.0);
        }
    }
    values.first().copied().unwrap_or(0.0)
}

/// A column with one state of it.
struct Filled<'a, const CELLS: usize> {
    stepper: &'a Stepper<CELLS>,
    excess_kpa: &'a [f64; CELLS],
}

/// One cell of it.
#[derive(Clone, Copy)]
struct Seen {
    cell: Cell,
    excess_kpa: f64,
    half_cell: f64,
    holds: bool,
}

impl Seen {
    fn centre_m(&self) -> f64 {
        self.cell.top_m + 0.5 * self.cell.thickness_m
    }

    fn node(&self) -> Node {
        (self.centre_m(), self.excess_kpa)
    }

    /// Flow out of a face at pressure `u` into this cell and the next one behind it, by the
    /// parabola through the three: `weight u - drive`. Both are returned, weight last.
    fn flow_from(&self, behind: &Self, face_m: f64) -> (f64, f64) {
        let near = (self.centre_m() - face_m).abs();
        let far = (behind.centre_m() - face_m).abs();
        let conductivity = 0.5 * self.half_cell * self.cell.thickness_m;
        let scale = conductivity / (near * far * (far - near));
        let drive = self.excess_kpa * far * far - behind.excess_kpa * near * near;
        (scale * drive, scale * (far * far - near * near))
    }
}

impl<const CELLS: usize> Filled<'_, CELLS> {
    fn seen(&self, index: Option<usize>) -> Option<Seen> {
        let index = index?;
        Some(Seen {
            cell: *self.stepper.cells.get(index)?,
            excess_kpa: *self.excess_kpa.get(index)?,
            half_cell: *self.stepper.half_cell_m_per_s_kpa.get(index)?,
            holds: *self.stepper.storage_m_per_kpa.get(index)? > 0.0,
        })
    }

    /// The node `away` cells above (`down` false) or below cell `from`; beyond the last cell of
    /// the layer its end, beyond that nothing.
    fn node(&self, from: usize, away: usize, down: bool) -> Option<Node> {
        let go = |count: usize| {
            if down { from.checked_add(count) } else { from.checked_sub(count) }
        };
        let layer = self.seen(Some(from))?.cell.layer;
        let in_layer = |seen: &Seen| seen.cell.layer == layer;
        let last = self.seen(go(away.checked_sub(1)?)).filter(in_layer)?;
        let next = self.seen(go(away));
        if let Some(next) = next.filter(in_layer) {
            return Some(next.node());
        }
        let face_m = if down { last.cell.top_m + last.cell.thickness_m } else { last.cell.top_m };
        let boundary = if down { self.stepper.base } else { self.stepper.top };
        let drains = match next {
            Some(next) => !next.holds,
            None => boundary == Boundary::Drained,
        };
        if drains {
            return Some((face_m, 0.0));
        }
        // What flows into both sides of the face is nothing in sum; each layer has two cells at
        // least.
        let last_index = go(away.checked_sub(1)?)?;
        let inner = if down { last_index.checked_sub(1) } else { last_index.checked_add(1) };
        let (mut drive, mut weight) = last.flow_from(&self.seen(inner)?, face_m);
        if let Some(next) = next {
            let (further, further_weight) =
                next.flow_from(&self.seen(go(away.checked_add(1)?))?, face_m);
            drive += further;
            weight += further_weight;
        }
        Some((face_m, drive / weight))
    }

    fn at(&self, depth_m: f64) -> f64 {
        let below = self.stepper.cells.iter().position(|cell| cell.top_m > depth_m);
        let Some(index) = below.unwrap_or(CELLS).checked_sub(1) else { return 0.0 };
        let Some(here) = self.seen(Some(index)).filter(|here| here.holds) else { return 0.0 };
        let node = |away, down| self.node(index, away, down);
        let (Some(above), Some(below)) = (node(1, false), node(1, true)) else { return 0.0 };
        match (node(2, false), node(2, true)) {
            (Some(far_above), Some(far_below)) => {
                through([far_above, above, here.node(), below, far_below], depth_m)
            }
            (None, Some(far)) => through([above, here.node(), below, far], depth_m),
            (Some(far), None) => through([far, above, here.node(), below], depth_m),
            (None, None) => through([above, here.node(), below], depth_m),
        }
    }
}

/// Excess pore pressure at a depth of the column, kPa.
pub(super) fn excess_at<const CELLS: usize>(
    stepper: &Stepper<CELLS>,
    excess_kpa: &[f64; CELLS],
    depth_m: f64,
) -> Result<f64, Error> {
    DEPTH.check(depth_m)?;
    // Depths added up from thicknesses may pass the base by rounding.
    if depth_m > stepper.depth_m * (1.0 + 1e-12) {
        return Err(Error::BelowColumn { depth_m, column_m: stepper.depth_m });
    }
    Ok(Filled { stepper, excess_kpa }.at(depth_m))
}

/// Checks a list of points: values in range, first coordinate rising; twice the same place is a
/// step.
pub(super) fn check_points(
    list: &'static str,
    points: &[(f64, f64)],
    at: &'static Bounded,
    value: &'static Bounded,
) -> Result<(), Error> {
    if points.is_empty() {
        return Err(Error::Empty { list });
    }
    let mut last = f64::NEG_INFINITY;
    for (index, point) in points.iter().enumerate() {
        at.check_at(point.0, index)?;
        value.check_at(point.1, index)?;
        if point.0 < last {
            return Err(Error::Order { list, index });
        }
        last = point.0;
    }
    Ok(())
}

/// Value of a piecewise linear list at `at`, constant beyond its ends; of several points at one
/// place the last counts from there on.
pub(super) fn linear_between(points: &[(f64, f64)], at: f64) -> f64 {
    let next = points.iter().find(|point| point.0 > at);
    let before = points.iter().rev().find(|point| point.0 <= at);
    match (before, next) {
        (Some(from), Some(to)) => from.1 + (to.1 - from.1) * (at - from.0) / (to.0 - from.0),
        (Some(end), None) | (None, Some(end)) => end.1,
        (None, None) => 0.0,
    }
}

/// Integral of the same list over `from` to `to`: whole pieces, clipped.
fn integral(points: &[(f64, f64)], from: f64, to: f64) -> f64 {
    let constant =
        |value: f64, start: f64, end: f64| value * (end.min(to) - start.max(from)).max(0.0);
    let mut sum = 0.0;
    if let (Some(first), Some(last)) = (points.first(), points.last()) {
        sum += constant(first.1, f64::NEG_INFINITY, first.0);
        sum += constant(last.1, last.0, f64::INFINITY);
    }
    for (a, b) in points.iter().zip(points.iter().skip(1)) {
        let (start, end) = (a.0.max(from), b.0.min(to));
        if end > start {
            let middle = 0.5 * (start + end);
            sum += (a.1 + (b.1 - a.1) * (middle - a.0) / (b.0 - a.0)) * (end - start);
        }
    }
    sum
}

/// Mean over each cell of an influence profile, points (depth m, ratio) by rising depth, linear
/// between, constant beyond the ends; without points 1 everywhere. Exact for the profile given,
/// so that the load put into the column is that of the profile.
pub(super) fn cell_means<const CELLS: usize>(
    cells: &[Cell; CELLS],
    profile: &[(f64, f64)],
) -> Result<[f64; CELLS], Error> {
    if profile.is_empty() {
        return Ok([1.0; CELLS]);
    }
    check_points("influence", profile, &DEPTH, &RATIO)?;
    let mut means = [0.0; CELLS];
    for (mean, cell) in means.iter_mut().zip(cells) {
        let base_m = cell.top_m + cell.thickness_m;
        *mean = integral(profile, cell.top_m, base_m) / (base_m - cell.top_m);
    }
    Ok(means)
}
