//! Repeated integrals of the complementary error function, the building stones of diffusion at
//! early times.

/// `i^n erfc(x)`, with `i^0 erfc = erfc` and `i^n erfc(x) = integral of i^(n-1) erfc from x to
/// infinity`, for `x >= 0`.
///
/// Recurrence `2 n i^n erfc = i^(n-2) erfc - 2 x i^(n-1) erfc` from `i^-1 erfc = 2/sqrt(pi)
/// exp(-x^2)` (Abramowitz & Stegun 7.2.5). Running it upwards loses relative precision for large
/// `x`, where the value itself is below `exp(-x^2)`: the absolute error stays below 3e-16.
#[must_use]
pub fn repeated_erfc(order: u32, x: f64) -> f64 {
    let mut before_last = core::f64::consts::FRAC_2_SQRT_PI * libm::exp(-x * x);
    let mut last = libm::erfc(x);
    for n in 1..=order {
        let next = (before_last - 2.0 * x * last) / (2.0 * f64::from(n));
        before_last = last;
        last = next;
    }
    last
}

#[cfg(test)]
mod tests {
    use super::repeated_erfc;
    use approx::assert_abs_diff_eq;

    #[test]
    fn values_at_zero_are_the_gamma_function_form() {
        // i^n erfc(0) = 1 / (2^n Gamma(n/2 + 1)), Abramowitz & Stegun 7.2.7.
        for n in 0..9 {
            let exact = 1.0 / (libm::exp2(f64::from(n)) * libm::tgamma(f64::from(n) / 2.0 + 1.0));
            assert_abs_diff_eq!(repeated_erfc(n, 0.0), exact, epsilon = 3e-16);
        }
    }

    #[test]
    fn values_agree_with_quadrature_of_fifty_digits() {
        // mpmath 1.3: quad(lambda t: (t-x)**n/factorial(n)*2/sqrt(pi)*exp(-t*t), [x, inf]).
        for (n, x, exact) in [
            (1, 0.5, 0.199_641_228_374_245_67),
            (1, 2.0, 0.000_978_022_714_951_495_25),
            (2, 0.5, 0.069_964_723_453_176_949),
            (3, 1.0, 0.003_643_246_632_480_312_8),
            (7, 0.3, 0.000_200_124_299_437_388_4),
        ] {
            assert_abs_diff_eq!(repeated_erfc(n, x), exact, epsilon = 1e-15);
        }
    }
}
