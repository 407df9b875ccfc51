//! How long the substeps of a column may be.
//!
//! # Rule
//! After a jump of load a substep is at most `first_s`, or the share `growth` of the time since
//! the jump, whichever is longer. After a change in the rate of loading the same holds with
//! `kink_s` in place of `first_s`, and the time since that change. The rest of the asked time is
//! cut in two when it is longer than one substep and shorter than two. Nothing depends on how
//! large the load is, so that twice the load gives exactly twice the answer, and the number of
//! substeps of one call is bounded by [`MOST_SUBSTEPS`].

/// Limits of a column's substeps.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Pace {
    /// Longest first substep after a jump, s.
    pub first_s: f64,
    /// Longest first substep after a change in the rate of loading, s.
    pub kink_s: f64,
    /// Longest substep as a share of the time since the disturbance.
    pub growth: f64,
    /// Equal pieces in which each substep is taken.
    pub pieces: u32,
}

/// Shortest first substep, s: bounds the work.
pub(super) const SHORTEST_S: f64 = 1e-3;

/// From 1e-3 s to 1e10 s growing by 5 % takes 60 + 552 substeps at most, cuts included.
pub(super) const MOST_SUBSTEPS: u32 = 700;

impl Pace {
    /// Next substep towards `left_s`.
    pub fn next_s(&self, left_s: f64, since_jump_s: f64, since_kink_s: f64) -> f64 {
        let after_jump = self.first_s.max(self.growth * since_jump_s);
        let after_kink = self.kink_s.max(self.growth * since_kink_s);
        let allowed = after_jump.min(after_kink).max(SHORTEST_S);
        if left_s <= allowed {
            left_s
        } else if left_s < 2.0 * allowed {
            0.5 * left_s
        } else {
            allowed
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn three_centuries_after_a_jump_stay_within_the_bound() {
        let pace = Pace { first_s: SHORTEST_S, kink_s: SHORTEST_S, growth: 0.05, pieces: 1 };
        let (mut left, mut age, mut count) = (1e10, 0.0, 0);
        while left > 0.0 {
            let step = pace.next_s(left, age, age);
            assert!(step > 0.0);
            left -= step;
            age += step;
            count += 1;
        }
        assert!(count < MOST_SUBSTEPS, "{count} substeps");
        assert!(count > 400, "the bound is not idle: {count}");
    }

    #[test]
    fn a_settled_column_takes_the_asked_step_whole() {
        let pace = Pace { first_s: 10.0, kink_s: 7200.0, growth: 0.15, pieces: 1 };
        assert_eq!(pace.next_s(3600.0, 1e6, 0.0), 3600.0);
        assert_eq!(pace.next_s(3600.0, 0.0, 0.0), 10.0);
        assert_eq!(pace.next_s(15.0, 0.0, 0.0), 7.5);
    }
}
