//! Cutting curves and areas to the window. The drawing library moves an outside point to the edge,
//! which bends the line; so nothing outside may reach it.

use crate::series::Point;

/// The visible part of the plane; `low <= high` in both.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Window {
    pub x: (f64, f64),
    pub y: (f64, f64),
}

impl Window {
    pub fn holds(&self, point: Point) -> bool {
        (self.x.0..=self.x.1).contains(&point.0) && (self.y.0..=self.y.1).contains(&point.1)
    }

    /// The point moved to the nearest place inside.
    pub fn nearest(&self, point: Point) -> Point {
        (point.0.clamp(self.x.0, self.x.1), point.1.clamp(self.y.0, self.y.1))
    }
}

/// The visible pieces of a polyline of finite points.
pub(crate) fn polyline(points: &[Point], window: &Window) -> Vec<Vec<Point>> {
    let mut pieces: Vec<Vec<Point>> = Vec::new();
    let mut joined = false;
    for pair in points.windows(2) {
        let Some((from, to)) = segment(pair[0], pair[1], window) else {
            joined = false;
            continue;
        };
        match pieces.last_mut() {
            Some(piece) if joined => piece.push(to),
            _ => pieces.push(vec![from, to]),
        }
        joined = to == pair[1];
    }
    pieces
}

/// The visible part of a segment (Liang and Barsky, ACM Transactions on Graphics 3(1), 1984).
fn segment(a: Point, b: Point, window: &Window) -> Option<(Point, Point)> {
    let (dx, dy) = (b.0 - a.0, b.1 - a.1);
    let (mut enter, mut leave) = (0.0_f64, 1.0_f64);
    for (toward, room) in [
        (-dx, a.0 - window.x.0),
        (dx, window.x.1 - a.0),
        (-dy, a.1 - window.y.0),
        (dy, window.y.1 - a.1),
    ] {
        if toward == 0.0 {
            if room < 0.0 {
                return None;
            }
        } else if toward < 0.0 {
            enter = enter.max(room / toward);
        } else {
            leave = leave.min(room / toward);
        }
    }
    // Whole ends are kept as they are, so that pieces join bit for bit.
    let at = |t: f64| window.nearest((a.0 + t * dx, a.1 + t * dy));
    let from = if enter == 0.0 { a } else { at(enter) };
    let to = if leave == 1.0 { b } else { at(leave) };
    (enter <= leave).then_some((from, to))
}

/// The visible part of a polygon (Sutherland and Hodgman, Communications of the ACM 17(1), 1974).
/// A hollow polygon can keep seams along the edge of the window, which a filled area does not show.
pub(crate) fn polygon(points: &[Point], window: &Window) -> Vec<Point> {
    type Side = (fn(Point, &Window) -> f64, fn(Point, &Window) -> Point);
    // Signed distance to the side (positive inside) and the point set exactly on it.
    let sides: [Side; 4] = [
        (|p, w| p.0 - w.x.0, |p, w| (w.x.0, p.1)),
        (|p, w| w.x.1 - p.0, |p, w| (w.x.1, p.1)),
        (|p, w| p.1 - w.y.0, |p, w| (p.0, w.y.0)),
        (|p, w| w.y.1 - p.1, |p, w| (p.0, w.y.1)),
    ];
    let mut polygon = points.to_vec();
    for (inside, onto) in sides {
        let mut cut = Vec::with_capacity(polygon.len() + 4);
        for (index, &to) in polygon.iter().enumerate() {
            let from = polygon[(index + polygon.len() - 1) % polygon.len()];
            let (a, b) = (inside(from, window), inside(to, window));
            if (a < 0.0) != (b < 0.0) {
                let t = a / (a - b);
                let crossing = (from.0 + t * (to.0 - from.0), from.1 + t * (to.1 - from.1));
                cut.push(onto(crossing, window));
            }
            if b >= 0.0 {
                cut.push(to);
            }
        }
        polygon = cut;
    }
    polygon
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    const UNIT: Window = Window { x: (0.0, 1.0), y: (0.0, 1.0) };

    #[test]
    fn a_line_through_the_window_is_cut_on_its_own_course() {
        let pieces = polyline(&[(-1.0, -1.0), (2.0, 2.0)], &UNIT);
        assert_eq!(pieces, [vec![(0.0, 0.0), (1.0, 1.0)]]);
    }

    #[test]
    fn leaving_and_coming_back_makes_two_pieces() {
        let points = [(0.1, 0.5), (0.3, 0.5), (0.5, 2.5), (0.7, 0.5), (0.9, 0.5)];
        let pieces = polyline(&points, &UNIT);
        assert_eq!(pieces.len(), 2);
        assert_eq!(pieces[0][1], (0.3, 0.5));
        assert!((pieces[0][2].0 - 0.35).abs() < 1e-12 && pieces[0][2].1 == 1.0);
        assert_eq!(pieces[1].last(), Some(&(0.9, 0.5)));
    }

    #[test]
    fn a_line_outside_leaves_nothing() {
        assert!(polyline(&[(2.0, 0.0), (2.0, 1.0)], &UNIT).is_empty());
        assert!(polyline(&[(-1.0, 0.5), (0.5, 3.0)], &UNIT).is_empty());
    }

    #[test]
    fn a_polygon_over_the_corner_keeps_the_corner() {
        let area = polygon(&[(0.5, 0.5), (2.0, 0.5), (2.0, 2.0), (0.5, 2.0)], &UNIT);
        assert!(area.contains(&(1.0, 1.0)), "{area:?}");
        assert!(area.iter().all(|p| UNIT.holds(*p)));
    }

    proptest! {
        #[test]
        fn pieces_stay_inside_and_on_the_line(
            points in prop::collection::vec((-3.0..4.0f64, -3.0..4.0f64), 2..30)
        ) {
            for piece in polyline(&points, &UNIT) {
                prop_assert!(piece.len() >= 2);
                for point in piece {
                    prop_assert!(UNIT.holds(point), "{point:?}");
                    let off = points.windows(2).map(|pair| distance(point, pair)).fold(9.0, f64::min);
                    prop_assert!(off < 1e-9, "{point:?} is {off} off the line");
                }
            }
            for point in points.iter().filter(|point| UNIT.holds(**point)) {
                let pieces = polyline(&points, &UNIT);
                prop_assert!(pieces.concat().contains(point), "a visible point is lost");
            }
        }
    }

    fn distance(p: Point, pair: &[Point]) -> f64 {
        let (a, b) = (pair[0], pair[1]);
        let (dx, dy) = (b.0 - a.0, b.1 - a.1);
        let t = (((p.0 - a.0) * dx + (p.1 - a.1) * dy) / (dx * dx + dy * dy)).clamp(0.0, 1.0);
        (p.0 - a.0 - t * dx).hypot(p.1 - a.1 - t * dy)
    }
}
