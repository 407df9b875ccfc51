//! Where texts go so that none lies on another.

use super::sheet::Place;

/// Moves wanted places apart to at least `gap`, as little as possible, and keeps them between
/// `low` and `high` while they fit. The order is kept.
///
/// Neighbours that would overlap form a block that sits at the mean of what its members want
/// (pooling of adjacent violators; least squares under order).
pub(crate) fn spread(wanted: &[f64], gap: f64, low: f64, high: f64) -> Vec<f64> {
    let mut order: Vec<usize> = (0..wanted.len()).collect();
    order.sort_by(|a, b| wanted[*a].total_cmp(&wanted[*b]));
    // Without the gaps the places only have to be in order. A block: sum and count of its members.
    let mut blocks: Vec<(f64, usize)> = Vec::new();
    for (rank, index) in order.iter().enumerate() {
        blocks.push((wanted[*index] - rank as f64 * gap, 1));
        while let [.., before, after] = blocks.as_mut_slice() {
            if before.0 / before.1 as f64 <= after.0 / after.1 as f64 {
                break;
            }
            *before = (before.0 + after.0, before.1 + after.1);
            blocks.pop();
        }
    }
    let room = high - gap * wanted.len().saturating_sub(1) as f64;
    let mut places = vec![0.0; wanted.len()];
    let mut rank = 0;
    for (sum, count) in blocks {
        for _ in 0..count {
            let place = (sum / count as f64).min(room).max(low);
            places[order[rank]] = place + rank as f64 * gap;
            rank += 1;
        }
    }
    places
}

/// A box in pixels.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Box2 {
    pub from: Place,
    pub to: Place,
}

impl Box2 {
    pub fn overlaps(&self, other: &Self) -> bool {
        self.from.0 < other.to.0
            && other.from.0 < self.to.0
            && self.from.1 < other.to.1
            && other.from.1 < self.to.1
    }

    fn holds(&self, place: Place) -> bool {
        (self.from.0..=self.to.0).contains(&place.0) && (self.from.1..=self.to.1).contains(&place.1)
    }

    fn inside(&self, frame: &Self) -> bool {
        frame.from.0 <= self.from.0
            && self.to.0 <= frame.to.0
            && frame.from.1 <= self.from.1
            && self.to.1 <= frame.to.1
    }
}

/// What is already on the plot: boxes of text, and places where something is drawn.
#[derive(Debug, Default)]
pub(crate) struct Occupied {
    pub boxes: Vec<Box2>,
    pub places: Vec<Place>,
}

impl Occupied {
    /// Notes a curve, closely enough that no label can slip between its points.
    pub fn add_curve(&mut self, points: &[Place]) {
        const APART_PX: f64 = 4.0;
        for pair in points.windows(2) {
            let (dx, dy) = (pair[1].0 - pair[0].0, pair[1].1 - pair[0].1);
            let count = (dx.hypot(dy) / APART_PX).ceil().max(1.0);
            let mut part = 0.0;
            while part < count {
                let t = part / count;
                self.places.push((pair[0].0 + t * dx, pair[0].1 + t * dy));
                part += 1.0;
            }
        }
        self.places.extend(points.last());
    }

    /// The box beside `anchor`, inside `frame`, that covers least; its text and what is drawn
    /// there must not be another text.
    pub fn room_beside(&mut self, anchor: Place, size: Place, frame: &Box2) -> Option<Box2> {
        let (width, height) = size;
        const OFF_PX: f64 = 8.0;
        let (left, right) = (anchor.0 - OFF_PX - width, anchor.0 + OFF_PX);
        let (above, below) = (anchor.1 - OFF_PX - height, anchor.1 + OFF_PX);
        let middle = (anchor.0 - width / 2.0, anchor.1 - height / 2.0);
        let corners = [
            (right, middle.1),
            (left, above),
            (right, above),
            (middle.0, above),
            (right, below),
            (middle.0, below),
            (left, below),
            (left, middle.1),
            (middle.0, above - 2.0 * OFF_PX),
            (left, below + 2.0 * OFF_PX),
        ];
        let boxes = corners.map(|from| Box2 { from, to: (from.0 + width, from.1 + height) });
        let free = boxes
            .into_iter()
            .filter(|found| found.inside(frame))
            .filter(|found| !self.boxes.iter().any(|other| other.overlaps(found)));
        let best = free
            .min_by_key(|found| self.places.iter().filter(|place| found.holds(**place)).count())?;
        self.boxes.push(best);
        Some(best)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn labels_that_fit_do_not_move() {
        assert_eq!(spread(&[10.0, 40.0, 25.0], 14.0, 0.0, 100.0), [10.0, 40.0, 25.0]);
    }

    #[test]
    fn labels_at_one_place_open_around_it() {
        assert_eq!(spread(&[50.0, 50.0, 50.0], 14.0, 0.0, 100.0), [36.0, 50.0, 64.0]);
    }

    #[test]
    fn labels_at_the_edge_stay_inside() {
        assert_eq!(spread(&[98.0, 99.0], 14.0, 0.0, 100.0), [86.0, 100.0]);
        assert_eq!(spread(&[1.0, 2.0], 14.0, 0.0, 100.0), [0.0, 14.0]);
    }

    #[test]
    fn a_label_avoids_the_curve() {
        let mut taken = Occupied::default();
        taken.add_curve(&[(0.0, 50.0), (100.0, 50.0)]);
        let frame = Box2 { from: (0.0, 0.0), to: (100.0, 100.0) };
        let found = taken.room_beside((50.0, 50.0), (30.0, 12.0), &frame).unwrap();
        assert!(found.to.1 < 50.0 || found.from.1 > 50.0, "{found:?}");
        let second = taken.room_beside((50.0, 50.0), (30.0, 12.0), &frame).unwrap();
        assert!(!second.overlaps(&found));
    }

    proptest! {
        #[test]
        fn no_two_labels_overlap(wanted in prop::collection::vec(0.0..200.0f64, 0..12)) {
            let mut places = spread(&wanted, 14.0, 0.0, 200.0);
            places.sort_by(f64::total_cmp);
            for pair in places.windows(2) {
                prop_assert!(pair[1] - pair[0] >= 14.0 - 1e-9);
            }
            for place in places {
                prop_assert!((-1e-9..=200.0 + 1e-9).contains(&place));
            }
        }
    }
}
