//! Gauss-Legendre quadrature.

use core::f64::consts::PI;

/// Nodes and weights of an `N`-point rule on -1..1, exact for polynomials of degree `2N - 1`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct GaussLegendre<const N: usize> {
    nodes: [f64; N],
    weights: [f64; N],
}

impl<const N: usize> GaussLegendre<N> {
    /// Finds the nodes as the roots of the Legendre polynomial by Newton's method from
    /// Tricomi's starting values (DLMF 3.5(v), 18.16(ii)); error of a few 1e-16 for N up to 64.
    #[must_use]
    pub fn new() -> Self {
        let mut rule = Self { nodes: [0.0; N], weights: [0.0; N] };
        let count = N as f64;
        for (index, (node, weight)) in rule.nodes.iter_mut().zip(&mut rule.weights).enumerate() {
            // Quadratic convergence from an error below 1e-3: six steps are more than enough.
            let mut x = -libm::cos(PI * (index as f64 + 0.75) / (count + 0.5));
            for _ in 0..6 {
                let (value, slope) = legendre(N, x);
                x -= value / slope;
            }
            let (_, slope) = legendre(N, x);
            *node = x;
            *weight = 2.0 / ((1.0 - x) * (1.0 + x) * slope * slope);
        }
        rule
    }

    /// Nodes on -1..1, rising.
    #[must_use]
    pub fn nodes(&self) -> &[f64; N] {
        &self.nodes
    }

    /// Weights; their sum is 2.
    #[must_use]
    pub fn weights(&self) -> &[f64; N] {
        &self.weights
    }

    /// Nodes and weights mapped to the interval from `a` to `b`.
    pub fn on(&self, a: f64, b: f64) -> impl Iterator<Item = (f64, f64)> + '_ {
        let (half, middle) = (0.5 * (b - a), 0.5 * (a + b));
        self.nodes.iter().zip(&self.weights).map(move |(x, w)| (middle + half * x, half * w))
    }

    /// Integral of `f` from `a` to `b`.
    pub fn integrate(&self, a: f64, b: f64, mut f: impl FnMut(f64) -> f64) -> f64 {
        self.on(a, b).map(|(x, w)| w * f(x)).sum()
    }
}

impl<const N: usize> Default for GaussLegendre<N> {
    fn default() -> Self {
        Self::new()
    }
}

/// Legendre polynomial of a degree and its derivative inside -1..1.
fn legendre(degree: usize, x: f64) -> (f64, f64) {
    let (mut before, mut value) = (0.0, 1.0);
    for n in 0..degree {
        let n = n as f64;
        let next = ((2.0 * n + 1.0) * x * value - n * before) / (n + 1.0);
        before = value;
        value = next;
    }
    (value, degree as f64 * (x * value - before) / ((x - 1.0) * (x + 1.0)))
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    // Abramowitz & Stegun 1964, table 25.4.
    #[test]
    fn five_points_agree_with_the_handbook() {
        let rule = GaussLegendre::<5>::new();
        assert_relative_eq!(rule.nodes[4], 0.906_179_845_938_664, max_relative = 1e-15);
        assert_relative_eq!(rule.nodes[3], 0.538_469_310_105_683, max_relative = 1e-15);
        assert!(rule.nodes[2].abs() < 1e-16);
        assert_relative_eq!(rule.weights[4], 0.236_926_885_056_189, max_relative = 1e-14);
        assert_relative_eq!(rule.weights[2], 0.568_888_888_888_889, max_relative = 1e-14);
    }

    #[test]
    fn exact_up_to_its_degree_and_no_further() {
        let rule = GaussLegendre::<4>::new();
        assert_relative_eq!(
            rule.integrate(0.0, 2.0, |x| libm::pow(x, 7.0)),
            32.0,
            max_relative = 1e-14
        );
        let beyond = rule.integrate(0.0, 2.0, |x| libm::pow(x, 8.0));
        assert!((beyond - 512.0 / 9.0).abs() > 1e-3, "degree 8 is beyond four points");
    }
}
