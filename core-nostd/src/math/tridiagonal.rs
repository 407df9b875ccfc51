//! Symmetric tridiagonal systems of a chain of cells: each cell has an own conductance to a
//! fixed potential and one link to each neighbour.
//!
//! ```text
//!   own[i] u[i] + link[i-1] (u[i] - u[i-1]) + link[i] (u[i] - u[i+1]) = b[i]
//! ```
//!
//! with `own > 0` and `link >= 0`. The diagonal is never formed: elimination carries the
//! conductance `e` of everything already eliminated, as a series circuit, so every operation adds,
//! multiplies or divides positive numbers. Nothing cancels, each unknown keeps its relative
//! precision however far the links outweigh the own conductances, and what leaves the chain
//! balances what is put in to rounding. (The elimination without subtraction is that of Grassmann,
//! Taksar & Heyman 1985 for Markov chains.)
//!
//! It runs from both ends to the middle cell, so that two independent chains of operations keep
//! the processor busy.

/// The eliminated chain, for any number of right-hand sides.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Elimination<const N: usize> {
    /// Share of a cell's right-hand side that goes on to its neighbour nearer the middle; zero at
    /// the middle cell.
    carry: [f64; N],
    /// Reciprocal of the eliminated diagonal.
    inverse: [f64; N],
}

/// One end of the chain up to the middle: returns the conductance and the share that arrive there.
fn eliminate<'a>(
    cells: impl Iterator<Item = ((&'a f64, &'a f64), (&'a mut f64, &'a mut f64))>,
) -> f64 {
    let mut arriving = 0.0;
    for ((own, link), (carry, inverse)) in cells {
        let conductance = own + arriving;
        *inverse = 1.0 / (conductance + link);
        *carry = link * *inverse;
        // Series circuit of `conductance` and `link`.
        arriving = *carry * conductance;
    }
    arriving
}

impl<const N: usize> Elimination<N> {
    /// Index of the cell where both eliminations meet.
    const MIDDLE: usize = N >> 1;

    /// Eliminates the chain. `own[i] > 0`, `link[i] >= 0` joins cells `i` and `i + 1`; the last
    /// link is not used.
    #[must_use]
    pub fn new(own: &[f64; N], link: &[f64; N]) -> Self {
        let mut carry = [0.0; N];
        let mut inverse = [0.0; N];
        let (own_above, own_rest) = own.split_at(Self::MIDDLE);
        let (link_above, link_rest) = link.split_at(Self::MIDDLE);
        let (carry_above, carry_rest) = carry.split_at_mut(Self::MIDDLE);
        let (inverse_above, inverse_rest) = inverse.split_at_mut(Self::MIDDLE);
        let from_above = eliminate(
            own_above.iter().zip(link_above).zip(carry_above.iter_mut().zip(inverse_above)),
        );
        if let (
            Some((own_middle, own_below)),
            Some((_, carry_below)),
            Some((middle, inverse_below)),
        ) =
            (own_rest.split_first(), carry_rest.split_first_mut(), inverse_rest.split_first_mut())
        {
            // Below the middle the link towards it is the one before the cell.
            let from_below = eliminate(
                own_below
                    .iter()
                    .zip(link_rest)
                    .rev()
                    .zip(carry_below.iter_mut().zip(inverse_below).rev()),
            );
            *middle = 1.0 / (own_middle + from_above + from_below);
        }
        Self { carry, inverse }
    }

    /// Solves in place: the right-hand side goes in, the unknowns come out.
    pub fn solve(&self, values: &mut [f64; N]) {
        let (above, rest) = values.split_at_mut(Self::MIDDLE);
        let (carry_above, carry_rest) = self.carry.split_at(Self::MIDDLE);
        let (inverse_above, inverse_rest) = self.inverse.split_at(Self::MIDDLE);
        let (Some((middle, below)), Some((_, carry_below)), Some((inverse_middle, inverse_below))) =
            (rest.split_first_mut(), carry_rest.split_first(), inverse_rest.split_first())
        else {
            return;
        };
        // Below the middle there is one cell fewer than above when N is even: the pairs leave out
        // the cell just above the middle, which is then done alone.
        let paired = below.len();
        let (above_paired, above_alone) = above.split_at_mut(paired);
        let (carry_paired, carry_alone) = carry_above.split_at(paired);
        let (inverse_paired, inverse_alone) = inverse_above.split_at(paired);

        let mut down = 0.0;
        let mut up = 0.0;
        let both = above_paired.iter_mut().zip(carry_paired);
        for ((a, wa), (b, wb)) in both.zip(below.iter_mut().rev().zip(carry_below.iter().rev())) {
            *a += down;
            down = *a * wa;
            *b += up;
            up = *b * wb;
        }
        for (a, wa) in above_alone.iter_mut().zip(carry_alone) {
            *a += down;
            down = *a * wa;
        }
        *middle = (*middle + down + up) * inverse_middle;

        let mut next_above = *middle;
        let mut next_below = *middle;
        for ((a, wa), ga) in above_alone.iter_mut().zip(carry_alone).zip(inverse_alone).rev() {
            next_above = *a * ga + next_above * wa;
            *a = next_above;
        }
        let both = above_paired.iter_mut().zip(carry_paired).zip(inverse_paired).rev();
        let lower = below.iter_mut().zip(carry_below).zip(inverse_below);
        for (((a, wa), ga), ((b, wb), gb)) in both.zip(lower) {
            next_above = *a * ga + next_above * wa;
            *a = next_above;
            next_below = *b * gb + next_below * wb;
            *b = next_below;
        }
    }
}

#[cfg(test)]
mod tests {
    use super::Elimination;
    use proptest::prelude::*;

    /// Row by row: what the solution leaves over, relative to the terms of the row.
    fn worst_residual<const N: usize>(
        own: &[f64; N],
        link: &[f64; N],
        b: &[f64; N],
        u: &[f64; N],
    ) -> f64 {
        let mut worst = 0.0f64;
        for i in 0..N {
            let above = if i > 0 { link[i - 1] * (u[i] - u[i - 1]) } else { 0.0 };
            let below = if i + 1 < N { link[i] * (u[i] - u[i + 1]) } else { 0.0 };
            let scale = (own[i] + if i > 0 { link[i - 1] } else { 0.0 } + link[i]) * u[i].abs()
                + b[i].abs();
            worst = worst.max((own[i] * u[i] + above + below - b[i]).abs() / scale);
        }
        worst
    }

    fn check<const N: usize>(own: &[f64], link: &[f64], b: &[f64]) {
        let own: [f64; N] = core::array::from_fn(|i| own[i]);
        let link: [f64; N] = core::array::from_fn(|i| link[i]);
        let b: [f64; N] = core::array::from_fn(|i| b[i]);
        let mut u = b;
        Elimination::new(&own, &link).solve(&mut u);
        let worst = worst_residual(&own, &link, &b, &u);
        assert!(worst < 1e-13, "residual {worst} with {N} cells");
        // What leaves through the own conductances is what was put in, link by link however large.
        let leaving: f64 = own.iter().zip(&u).map(|(o, u)| o * u).sum();
        let put_in: f64 = b.iter().sum();
        assert!((leaving - put_in).abs() < 1e-13 * put_in, "{leaving} leaves, {put_in} put in");
    }

    proptest! {
        #[test]
        fn every_row_and_the_sum_balance_for_odd_and_even_chains(
            own in prop::collection::vec(-9.0..3.0f64, 61),
            link in prop::collection::vec(-9.0..9.0f64, 61),
            b in prop::collection::vec(0.0..1.0f64, 61),
        ) {
            let own: std::vec::Vec<f64> = own.iter().map(|x| 10f64.powf(*x)).collect();
            let link: std::vec::Vec<f64> = link.iter().map(|x| 10f64.powf(*x)).collect();
            check::<1>(&own, &link, &b);
            check::<2>(&own, &link, &b);
            check::<3>(&own, &link, &b);
            check::<60>(&own, &link, &b);
            check::<61>(&own, &link, &b);
        }
    }
}
