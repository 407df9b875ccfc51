//! Slip circles under the edge of a strip of load on level ground.
//!
//! x = 0 at the edge, outwards positive; the load lies on x < 0. A circle comes up at x = -w under
//! the load and at x = v outside it; its centre is at ((v - w)/2, height h >= 0 above ground), its
//! radius R, its greatest depth d = R - h. The weight of level ground has no moment about the
//! centre, so that
//!
//! ```text
//! q_ult = R int su ds / (w v / 2)          FS = q_ult / q
//! ```
//! Over a slice between z1 and z2 with `su = a + g (z - z1)`, with f the angle from the vertical:
//! ```text
//! int su ds = 2 R { [a - g (h + z1)] (f1 - f2) + g R (sin f1 - sin f2) },   cos f = (h + z)/R
//! ```
//! R and the arc depend on the half chord `(w + v)/2` and on d only; of all circles with these two
//! the one with `w = v` needs the least pressure, or the one with w at its limit. That leaves two
//! unknowns to search.
//!
//! # References
//! Fellenius 1927; the search by half chord and depth is derived here.

use super::StabilityError;
use super::strength::{StrengthProfile, StrengthSlice};
use crate::math::minimum::minimum;
use crate::working::{Step, Working};

/// Half chords tried in the first pass.
const CHORDS: u32 = 64;
/// Most parts that the depths within a slice are divided into, and the largest part in terms of the
/// greatest depth.
const DEPTH_PARTS: f64 = 6.0;
const LARGEST_PART: f64 = 1.0 / 12.0;
/// A local minimum of the first pass is searched further when it is within this factor of the
/// least found so far. Between two chords (7 % apart) a smooth minimum hides less than 1 %; between
/// the depths tried in a thick slice less than 3 %, in a thin one next to nothing.
const WORTH_IN_THICK: f64 = 1.05;
const WORTH_IN_THIN: f64 = 1.015;
/// Smallest depth over half chord. Where strength is zero at the surface the least pressure is
/// reached in the limit of flat circles; there this leaves 1e-6 of it.
const FLATTEST: f64 = 1e-3;
/// A least value this near to the end of its stretch, relative to the stretch, may be less beyond.
const MOVE_ON: f64 = 0.01;
/// Relative width at which a search ends; the pressure, flat there, is then known to its rounding,
/// and where it lies on a border the border itself is tried.
const NARROW: f64 = 1e-8;

/// A slip circle and the pressure under which it fails.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SlipCircle {
    /// Width of the load on the circle, from the edge inwards, m.
    pub loaded_width_m: f64,
    /// Width from the edge outwards to where the circle comes up, m.
    pub outside_width_m: f64,
    /// Greatest depth below the loaded level, m.
    pub depth_m: f64,
    /// Centre, from the edge outwards, m.
    pub centre_x_m: f64,
    /// Centre above the loaded level, m.
    pub centre_height_m: f64,
    /// Radius, m.
    pub radius_m: f64,
    /// Resisting moment per metre of edge, kNm/m.
    pub resisting_moment_knm_per_m: f64,
    /// Uniform pressure at which the circle fails, kPa.
    pub ultimate_kpa: f64,
}

impl SlipCircle {
    /// Factor of safety under a pressure, kPa.
    pub(super) fn stability(self, pressure_kpa: f64) -> SlipStability {
        SlipStability {
            factor_of_safety: self.ultimate_kpa / pressure_kpa,
            driving_moment_knm_per_m: 0.5
                * pressure_kpa
                * self.loaded_width_m
                * self.outside_width_m,
            circle: self,
        }
    }
}

/// The circle with the least factor of safety, under a given pressure.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SlipStability {
    /// Resisting over driving moment.
    pub factor_of_safety: f64,
    /// Driving moment per metre of edge, kNm/m.
    pub driving_moment_knm_per_m: f64,
    /// The circle.
    pub circle: SlipCircle,
}

impl SlipStability {
    /// Writes the hand check of the circle.
    pub(super) fn write(&self, profile: &StrengthProfile<'_>, working: &mut impl Working) {
        if !working.wanted() {
            return;
        }
        let SlipCircle { radius_m, centre_height_m, depth_m, .. } = self.circle;
        let arc = Arc { radius_m, centre_height_m, depth_m };
        for (top_m, slice) in profile.slices().filter(|(top_m, _)| *top_m < depth_m) {
            let (from, to) = (arc.angle(top_m), arc.angle(top_m + slice.thickness_m));
            working.step(Step {
                name: "strength along the circle in the slice",
                value: arc.strength_kn_per_m(top_m, slice),
                unit: "kN/m",
                formula: "2 R {[a - g (h + z1)] (f1 - f2) + g R (sin f1 - sin f2)}, cos f = (h + z)/R",
                inputs: &[
                    ("R", radius_m),
                    ("a", slice.undrained_strength_kpa),
                    ("g", slice.gradient_kpa_per_m),
                    ("h", centre_height_m),
                    ("z1", top_m),
                    ("f1", from),
                    ("f2", to),
                ],
                source: "",
            });
        }
        working.step(Step {
            name: "resisting moment",
            value: self.circle.resisting_moment_knm_per_m,
            unit: "kNm/m",
            formula: "R times the sum over slices",
            inputs: &[("R", radius_m)],
            source: "",
        });
        working.step(Step {
            name: "factor of safety on the slip circle",
            value: self.factor_of_safety,
            unit: "",
            formula: "M_resisting / (q w v/2)",
            inputs: &[
                ("M_resisting", self.circle.resisting_moment_knm_per_m),
                ("q w v/2", self.driving_moment_knm_per_m),
                ("w", self.circle.loaded_width_m),
                ("v", self.circle.outside_width_m),
            ],
            source: "Fellenius 1927, phi = 0",
        });
    }
}

/// Parts that the depths from `low` to `high` within a slice are divided into.
fn depth_steps(low: f64, high: f64) -> f64 {
    libm::ceil((high - low) / (LARGEST_PART * high)).clamp(1.0, DEPTH_PARTS)
}

fn worth_searching((top_m, thickness_m): (f64, f64)) -> f64 {
    if depth_steps(top_m, top_m + thickness_m) > 1.0 { WORTH_IN_THICK } else { WORTH_IN_THIN }
}

/// The part of a circle below ground.
#[derive(Clone, Copy)]
struct Arc {
    radius_m: f64,
    centre_height_m: f64,
    depth_m: f64,
}

impl Arc {
    /// Through both ends of a chord of half length `half_m`, to a depth of at most `half_m`.
    fn through(half_m: f64, depth_m: f64) -> Self {
        let radius_m = (half_m * half_m + depth_m * depth_m) / (2.0 * depth_m);
        Self { radius_m, centre_height_m: radius_m - depth_m, depth_m }
    }

    /// Angle from the vertical at which the circle passes a depth; 0 below its lowest point.
    fn angle(&self, z_m: f64) -> f64 {
        let (sine, cosine) = self.sine_and_cosine(z_m);
        libm::atan2(sine, cosine)
    }

    /// Both times the radius. The sine from `(R - c)(R + c)`, with `R - c = d - z` known without
    /// a subtraction of large numbers.
    fn sine_and_cosine(&self, z_m: f64) -> (f64, f64) {
        let below = (self.depth_m - z_m).max(0.0);
        (libm::sqrt(below * (2.0 * self.radius_m - below)), self.radius_m - below)
    }

    /// Strength along the circle inside a slice, kN per metre of edge.
    fn strength_kn_per_m(&self, top_m: f64, slice: &StrengthSlice) -> f64 {
        let (sine_1, cosine_1) = self.sine_and_cosine(top_m);
        let (sine_2, cosine_2) = self.sine_and_cosine(top_m + slice.thickness_m);
        let angle = libm::atan2(sine_1, cosine_1) - libm::atan2(sine_2, cosine_2);
        let (a, g) = (slice.undrained_strength_kpa, slice.gradient_kpa_per_m);
        2.0 * self.radius_m
            * ((a - g * (self.centre_height_m + top_m)) * angle + g * (sine_1 - sine_2))
    }

    fn resisting_knm_per_m(&self, profile: &StrengthProfile<'_>) -> f64 {
        let reached = profile.slices().take_while(|(top_m, _)| *top_m < self.depth_m);
        self.radius_m
            * reached.map(|(top_m, slice)| self.strength_kn_per_m(top_m, slice)).sum::<f64>()
    }
}

/// What is searched: circles with a loaded width between two limits, down to the profile's base.
pub(super) struct Search<'a> {
    pub(super) profile: StrengthProfile<'a>,
    pub(super) least_width_m: f64,
    pub(super) most_width_m: f64,
}

impl Search<'_> {
    fn widths(&self, half_m: f64) -> (f64, f64) {
        // Not `clamp`, which panics when its limits are out of order.
        let loaded_m = half_m.max(self.least_width_m).min(self.most_width_m);
        (loaded_m, 2.0 * half_m - loaded_m)
    }

    fn ultimate_kpa(&self, half_m: f64, depth_m: f64) -> f64 {
        let (loaded_m, outside_m) = self.widths(half_m);
        let arc = Arc::through(half_m, depth_m);
        arc.resisting_knm_per_m(&self.profile) / (0.5 * loaded_m * outside_m)
    }

    /// Half chords of the first pass, growing by a constant factor from the one that comes up
    /// almost at the edge to one beyond the whole base and the profile.
    fn half_chord_m(&self, step: u32) -> f64 {
        let first = 0.5 * self.least_width_m * (1.0 + FLATTEST);
        let last = 2.0 * (self.most_width_m + self.profile.depth_m());
        first * libm::pow(last / first, f64::from(step) / f64::from(CHORDS))
    }

    /// Depths that circles with this half chord can have with their lowest point in a slice.
    fn depths_m(half_m: f64, top_m: f64, thickness_m: f64) -> Option<(f64, f64)> {
        let (low, high) = (top_m.max(FLATTEST * half_m), (top_m + thickness_m).min(half_m));
        (low < high).then_some((low, high))
    }

    /// Least pressure over depth within a slice, and its depth; with `fine` to the last digit.
    fn over_depth(&self, half_m: f64, (low, high): (f64, f64), fine: bool) -> (f64, f64) {
        let steps = depth_steps(low, high);
        // Not a rounding beyond the base: a missing arc of 1e-8 radians would count.
        let at = |step: f64| (low + (high - low) * (step / steps).clamp(0.0, 1.0)).min(high);
        let mut best = (f64::INFINITY, 0.0);
        let mut step = 0.0;
        while step <= steps {
            let value = self.ultimate_kpa(half_m, at(step));
            if value < best.0 {
                best = (value, step);
            }
            step += 1.0;
        }
        if fine {
            let (from, to) = (at(best.1 - 1.0), at(best.1 + 1.0));
            let found = minimum(from, to, NARROW, |depth_m| self.ultimate_kpa(half_m, depth_m));
            (found.value, found.x)
        } else {
            (best.0, at(best.1))
        }
    }

    /// Calls `visit` with three neighbouring half chords whose middle needs the least pressure, for
    /// the slice that is meant, and that pressure.
    fn local_minima(&self, (top_m, thickness_m): (f64, f64), mut visit: impl FnMut(f64, f64, f64)) {
        let value = |step: u32| {
            let half_m = self.half_chord_m(step);
            Self::depths_m(half_m, top_m, thickness_m)
                .map_or(f64::INFINITY, |depths| self.over_depth(half_m, depths, false).0)
        };
        let mut before = f64::INFINITY;
        let mut here = value(0);
        for step in 0..=CHORDS {
            let after = if step < CHORDS { value(step.saturating_add(1)) } else { f64::INFINITY };
            if here < f64::INFINITY && here <= before && here <= after {
                let low = self.half_chord_m(step.saturating_sub(1));
                visit(here, low, self.half_chord_m(step.saturating_add(1).min(CHORDS)));
            }
            (before, here) = (here, after);
        }
    }

    /// A bound on the least pressure from circles that end at the faces of slices.
    fn rough_least_kpa(&self) -> f64 {
        let mut least = f64::INFINITY;
        for step in 0..=CHORDS {
            let half_m = self.half_chord_m(step);
            for (top_m, slice) in self.profile.slices() {
                if let Some((_, depth_m)) = Self::depths_m(half_m, top_m, slice.thickness_m) {
                    least = least.min(self.ultimate_kpa(half_m, depth_m));
                }
            }
        }
        least
    }

    /// The circle that fails under the least pressure.
    ///
    /// # Errors
    /// A profile too thin for any circle of the widths asked for.
    pub(super) fn weakest(&self) -> Result<SlipCircle, StabilityError> {
        let mut best = (self.rough_least_kpa(), None);
        for (top_m, slice) in self.profile.slices() {
            let slice = (top_m, slice.thickness_m);
            self.local_minima(slice, |value, low, high| {
                if value <= best.0 * worth_searching(slice) {
                    let (value, half_m, depth_m) = self.refined(slice, low, high);
                    if value <= best.0 {
                        best = (value, Some((half_m, depth_m)));
                    }
                }
            });
        }
        let (half_m, depth_m) =
            best.1.ok_or(StabilityError::TooThin { depth_m: self.profile.depth_m() })?;
        Ok(self.circle(half_m, depth_m))
    }

    /// Least pressure with the lowest point in a slice, near a stretch of half chords: pressure,
    /// half chord, depth. The first pass knows the least over depth only roughly, so that the least
    /// over half chords may lie in the next stretch; then the search moves on.
    fn refined(
        &self,
        (top_m, thickness_m): (f64, f64),
        mut low: f64,
        mut high: f64,
    ) -> (f64, f64, f64) {
        let over_depth = |half_m: f64| {
            let depths = Self::depths_m(half_m, top_m, thickness_m);
            depths.map_or((f64::INFINITY, 0.0), |depths| self.over_depth(half_m, depths, true))
        };
        let (least_m, most_m) = (self.half_chord_m(0), self.half_chord_m(CHORDS));
        let mut found = minimum(low, high, NARROW, |half_m| over_depth(half_m).0);
        for _ in 0..CHORDS {
            let margin = MOVE_ON * (high - low);
            let ratio = high / low;
            if found.x - low < margin && low > least_m {
                (low, high) = ((low / ratio).max(least_m), low * (1.0 + ratio) / 2.0);
            } else if high - found.x < margin && high < most_m {
                (low, high) = (high * (1.0 + 1.0 / ratio) / 2.0, (high * ratio).min(most_m));
            } else {
                break;
            }
            found = minimum(low, high, NARROW, |half_m| over_depth(half_m).0);
        }
        let (value, depth_m) = over_depth(found.x);
        (value, found.x, depth_m)
    }

    fn circle(&self, half_m: f64, depth_m: f64) -> SlipCircle {
        let (loaded_width_m, outside_width_m) = self.widths(half_m);
        let arc = Arc::through(half_m, depth_m);
        let resisting_moment_knm_per_m = arc.resisting_knm_per_m(&self.profile);
        SlipCircle {
            loaded_width_m,
            outside_width_m,
            depth_m,
            centre_x_m: 0.5 * (outside_width_m - loaded_width_m),
            centre_height_m: arc.centre_height_m,
            radius_m: arc.radius_m,
            resisting_moment_knm_per_m,
            ultimate_kpa: resisting_moment_knm_per_m / (0.5 * loaded_width_m * outside_width_m),
        }
    }
}
