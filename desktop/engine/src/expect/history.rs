//! The liquid level over time, as the load that the ground feels.

/// One known instant of the load.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LoadPoint {
    /// Unix time, s.
    pub time_s: i64,
    /// Liquid level above the floor of the tank under test, m.
    pub liquid_level_m: f64,
}

/// A liquid level history, by rising time; the level changes evenly between points and stays
/// after the last.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct LoadHistory {
    points: Vec<LoadPoint>,
}

impl LoadHistory {
    /// From points in any order; of several at one instant the last given stands.
    #[must_use]
    pub fn new(mut points: Vec<LoadPoint>) -> Self {
        points.sort_by_key(|point| point.time_s);
        let mut kept: Vec<LoadPoint> = Vec::with_capacity(points.len());
        for point in points {
            match kept.last_mut() {
                Some(last) if last.time_s == point.time_s => *last = point,
                _ => kept.push(point),
            }
        }
        Self { points: kept }
    }

    /// The points.
    #[must_use]
    pub fn points(&self) -> &[LoadPoint] {
        &self.points
    }

    /// Level at an instant, m: even between points, that of the nearest end outside them; none
    /// without points.
    #[must_use]
    pub fn level_at(&self, time_s: i64) -> Option<f64> {
        let after = self.points.partition_point(|point| point.time_s <= time_s);
        let before = after.checked_sub(1).and_then(|index| self.points.get(index));
        match (before, self.points.get(after)) {
            (Some(a), Some(b)) => {
                let share = (time_s - a.time_s) as f64 / (b.time_s - a.time_s) as f64;
                Some(a.liquid_level_m + share * (b.liquid_level_m - a.liquid_level_m))
            }
            (Some(only), None) | (None, Some(only)) => Some(only.liquid_level_m),
            (None, None) => None,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn history(points: &[(i64, f64)]) -> LoadHistory {
        LoadHistory::new(
            points
                .iter()
                .map(|&(time_s, liquid_level_m)| LoadPoint { time_s, liquid_level_m })
                .collect(),
        )
    }

    #[test]
    fn level_is_even_between_points_and_held_outside() {
        let history = history(&[(100, 3.0), (0, 1.0)]);
        assert_eq!(history.level_at(50), Some(2.0));
        assert_eq!(history.level_at(-5), Some(1.0));
        assert_eq!(history.level_at(500), Some(3.0));
        assert_eq!(LoadHistory::default().level_at(0), None);
    }

    #[test]
    fn the_last_of_two_at_one_instant_stands() {
        assert_eq!(history(&[(0, 1.0), (0, 2.0)]).points().len(), 1);
        assert_eq!(history(&[(0, 1.0), (0, 2.0)]).level_at(0), Some(2.0));
    }
}
