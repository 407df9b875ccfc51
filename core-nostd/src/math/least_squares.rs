//! Linear least squares, one observation at a time.
//!
//! Each observation is rotated into a triangle (Givens' rotations), so that nothing has to be kept
//! but `P` by `P` numbers and the normal equations, which square the condition, are never formed.
//!
//! Source: Golub & Van Loan 2013, Matrix Computations, 4th ed., sections 5.1.8 and 5.3.

use core::fmt;

/// Why no fit was found.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum FitError {
    /// Fewer observations than unknowns.
    TooFew {
        /// Observations given.
        observations: usize,
        /// Unknowns to be found.
        unknowns: usize,
    },
    /// The observations leave a combination of the unknowns open (all at one place, say).
    Undetermined {
        /// Unknown that is not determined by those before it, counted from 0.
        unknown: usize,
    },
    /// An observation was not a finite number.
    NotFinite {
        /// Its position, counted from 0.
        observation: usize,
    },
}

impl fmt::Display for FitError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match *self {
            Self::TooFew { observations, unknowns } => write!(
                f,
                "{observations} observations cannot give {unknowns} unknowns; add observations"
            ),
            Self::Undetermined { unknown } => write!(
                f,
                "the observations do not determine unknown {}; spread them out",
                unknown.saturating_add(1)
            ),
            Self::NotFinite { observation } => {
                write!(f, "observation {} is not a number", observation.saturating_add(1))
            }
        }
    }
}

impl core::error::Error for FitError {}

/// A column whose part across the columns before it is smaller than this share of it is taken to
/// depend on them.
const DEPENDENT: f64 = 1e-12;

/// Collects observations `value = sum of row[k] * coefficient[k] + error`, with up to `P` unknowns.
#[derive(Debug, Clone, PartialEq)]
pub struct LeastSquares<const P: usize> {
    triangle: [[f64; P]; P],
    right: [f64; P],
    residual_sum: f64,
    unknowns: usize,
    observations: usize,
    not_finite: Option<usize>,
}

impl<const P: usize> LeastSquares<P> {
    /// No observations yet; `P` unknowns.
    #[must_use]
    pub fn new() -> Self {
        Self::with_unknowns(P)
    }

    /// No observations yet; the first `unknowns` of at most `P` columns are used.
    #[must_use]
    pub fn with_unknowns(unknowns: usize) -> Self {
        Self {
            triangle: [[0.0; P]; P],
            right: [0.0; P],
            residual_sum: 0.0,
            unknowns: unknowns.min(P),
            observations: 0,
            not_finite: None,
        }
    }

    /// Takes one observation of weight 1.
    pub fn add(&mut self, row: [f64; P], value: f64) {
        let (mut row, mut value) = (row, value);
        row.iter_mut().skip(self.unknowns).for_each(|x| *x = 0.0);
        if !(value.is_finite() && row.iter().all(|x| x.is_finite())) {
            self.not_finite = self.not_finite.or(Some(self.observations));
        }
        self.observations = self.observations.saturating_add(1);
        let lines = self.triangle.iter_mut().zip(&mut self.right).take(self.unknowns);
        for (k, (line, right)) in lines.enumerate() {
            let (pivot, x) = (at(line, k), at(&row, k));
            if x == 0.0 {
                continue;
            }
            let length = libm::hypot(pivot, x);
            let (cosine, sine) = (pivot / length, x / length);
            for (t, x) in line.iter_mut().zip(&mut row).skip(k) {
                (*t, *x) = (cosine * *t + sine * *x, cosine * *x - sine * *t);
            }
            (*right, value) = (cosine * *right + sine * value, cosine * value - sine * *right);
        }
        self.residual_sum += value * value;
    }

    /// The coefficients with the least sum of squared residuals.
    ///
    /// # Errors
    /// Too few observations, an unknown they do not determine, or one that was not a number.
    pub fn solve(&self) -> Result<Fit<P>, FitError> {
        if let Some(observation) = self.not_finite {
            return Err(FitError::NotFinite { observation });
        }
        let (observations, unknowns) = (self.observations, self.unknowns);
        if observations < unknowns {
            return Err(FitError::TooFew { observations, unknowns });
        }
        for unknown in 0..unknowns {
            let size =
                self.triangle.iter().fold(0.0, |sum, line| libm::hypot(sum, at(line, unknown)));
            let own = self.triangle.get(unknown).map_or(0.0, |line| at(line, unknown));
            if own.abs() <= DEPENDENT * size {
                return Err(FitError::Undetermined { unknown });
            }
        }
        let mut coefficients = [0.0; P];
        for k in (0..unknowns).rev() {
            let (Some(line), Some(&right)) = (self.triangle.get(k), self.right.get(k)) else {
                continue;
            };
            let known: f64 =
                line.iter().zip(&coefficients).skip(k.saturating_add(1)).map(|(t, c)| t * c).sum();
            if let Some(coefficient) = coefficients.get_mut(k) {
                *coefficient = (right - known) / at(line, k);
            }
        }
        Ok(Fit {
            coefficients,
            residual_sum: self.residual_sum,
            triangle: self.triangle,
            unknowns,
            observations,
        })
    }
}

impl<const P: usize> Default for LeastSquares<P> {
    fn default() -> Self {
        Self::new()
    }
}

/// The entry of a row; every index used lies inside.
fn at<const P: usize>(row: &[f64; P], k: usize) -> f64 {
    row.get(k).copied().unwrap_or(0.0)
}

/// A least-squares fit.
#[derive(Debug, Clone, PartialEq)]
pub struct Fit<const P: usize> {
    /// The coefficients; 0 beyond the unknowns in use.
    pub coefficients: [f64; P],
    /// Sum of the squared residuals.
    pub residual_sum: f64,
    triangle: [[f64; P]; P],
    unknowns: usize,
    observations: usize,
}

impl<const P: usize> Fit<P> {
    /// Observations less unknowns.
    #[must_use]
    pub fn degrees_of_freedom(&self) -> usize {
        self.observations.saturating_sub(self.unknowns)
    }

    /// Standard deviation of an observation, estimated from the residuals; `None` where there are
    /// no more observations than unknowns.
    #[must_use]
    pub fn residual_deviation(&self) -> Option<f64> {
        let degrees = self.degrees_of_freedom();
        (degrees > 0).then(|| libm::sqrt(self.residual_sum / degrees as f64))
    }

    /// Covariance of the linear combinations `sum of g[k] * coefficient[k]` and that of `h`, for
    /// observations of variance 1: `g' (X'X)^-1 h`.
    #[must_use]
    pub fn covariance_factor(&self, g: &[f64; P], h: &[f64; P]) -> f64 {
        self.half_solved(g).iter().zip(&self.half_solved(h)).map(|(a, b)| a * b).sum()
    }

    /// Variance of the linear combination `sum of g[k] * coefficient[k]`, for observations of
    /// variance 1.
    #[must_use]
    pub fn variance_factor(&self, g: &[f64; P]) -> f64 {
        self.covariance_factor(g, g)
    }

    /// `y` with `R' y = g`, R being the triangle.
    fn half_solved(&self, g: &[f64; P]) -> [f64; P] {
        let mut y = [0.0; P];
        for k in 0..self.unknowns {
            let known: f64 =
                self.triangle.iter().zip(&y).take(k).map(|(line, y)| at(line, k) * y).sum();
            let own = self.triangle.get(k).map_or(1.0, |line| at(line, k));
            if let Some(y) = y.get_mut(k) {
                *y = (at(g, k) - known) / own;
            }
        }
        y
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::string::ToString;

    /// NIST Statistical Reference Datasets, Norris (linear): certified slope and intercept (from
    /// memory), 36 observations.
    #[test]
    fn certified_values_of_a_straight_line_are_met() {
        let x = [
            0.2, 337.4, 118.2, 884.6, 10.1, 226.5, 666.3, 996.3, 448.6, 777.0, 558.2, 0.4, 0.6,
            775.5, 666.9, 338.0, 447.5, 11.6, 556.0, 228.1, 995.8, 887.6, 120.2, 0.3, 0.3, 556.8,
            339.1, 887.2, 999.0, 779.0, 11.1, 118.3, 229.2, 669.1, 448.9, 0.5,
        ];
        let y = [
            0.1, 338.8, 118.1, 888.0, 9.2, 228.1, 668.5, 998.5, 449.1, 778.9, 559.2, 0.3, 0.1,
            778.1, 668.8, 339.3, 448.9, 10.8, 557.7, 228.3, 998.0, 888.8, 119.6, 0.3, 0.6, 557.6,
            339.3, 888.0, 998.5, 778.9, 10.2, 117.6, 228.9, 668.4, 449.2, 0.2,
        ];
        let mut sums = LeastSquares::<2>::new();
        for (x, y) in x.into_iter().zip(y) {
            sums.add([1.0, x], y);
        }
        let fit = sums.solve().unwrap();
        assert!((fit.coefficients[0] + 0.262_323_073_774_029).abs() < 1e-12);
        assert!((fit.coefficients[1] - 1.002_116_818_020_45).abs() < 1e-14);
        let sd = fit.residual_deviation().unwrap();
        assert!((sd - 0.884_796_396_144_373).abs() < 1e-12, "{sd}");
        let slope = sd * libm::sqrt(fit.variance_factor(&[0.0, 1.0]));
        assert!((slope - 0.429_796_848_199_937e-3).abs() < 1e-15, "{slope}");
    }

    #[test]
    fn a_plane_through_its_own_points_is_found_and_extra_columns_are_left_alone() {
        let mut sums = LeastSquares::<5>::with_unknowns(3);
        for (x, y) in [(0.0, 0.0), (1.0, 0.0), (0.0, 1.0), (3.0, -2.0)] {
            sums.add([1.0, x, y, f64::NAN, 7.0], 4.0 - 2.0 * x + 0.5 * y);
        }
        let fit = sums.solve().unwrap();
        for (got, want) in fit.coefficients.iter().zip([4.0, -2.0, 0.5, 0.0, 0.0]) {
            assert!((got - want).abs() < 1e-14, "{:?}", fit.coefficients);
        }
        assert_eq!(fit.degrees_of_freedom(), 1);
        assert!(fit.residual_sum < 1e-28);
    }

    #[test]
    fn what_cannot_be_determined_is_said() {
        let mut sums = LeastSquares::<2>::new();
        sums.add([1.0, 3.0], 1.0);
        assert_eq!(sums.solve().unwrap_err(), FitError::TooFew { observations: 1, unknowns: 2 });
        sums.add([1.0, 3.0], 2.0);
        assert_eq!(sums.solve().unwrap_err(), FitError::Undetermined { unknown: 1 });
        sums.add([1.0, 4.0], f64::INFINITY);
        let refused = sums.solve().unwrap_err();
        assert_eq!(refused, FitError::NotFinite { observation: 2 });
        assert!(refused.to_string().contains("observation 3"));
    }
}
