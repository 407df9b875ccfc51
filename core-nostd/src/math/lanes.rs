//! A handful of points computed side by side. Every operation is written for all lanes at once,
//! so the compiler turns it into vector instructions without `unsafe`; with one lane it is plain
//! scalar code. One formula therefore serves single points and batches.

use core::ops::{Add, Div, Mul, Neg, Sub};

/// Lanes of a batch: 8 gave the best speed among 1, 2, 4, 8, 16 and 32 on 128-bit vectors.
pub(crate) const BATCH: usize = 8;

/// `N` numbers computed side by side.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Lanes<const N: usize>(pub(crate) [f64; N]);

impl<const N: usize> Lanes<N> {
    #[inline(always)]
    pub(crate) fn splat(value: f64) -> Self {
        Self([value; N])
    }

    #[inline(always)]
    pub(crate) fn map(self, f: impl Fn(f64) -> f64) -> Self {
        let mut out = self.0;
        for x in &mut out {
            *x = f(*x);
        }
        Self(out)
    }

    #[inline(always)]
    pub(crate) fn zip(self, other: Self, f: impl Fn(f64, f64) -> f64) -> Self {
        let mut out = self.0;
        for (x, y) in out.iter_mut().zip(other.0) {
            *x = f(*x, y);
        }
        Self(out)
    }

    #[inline(always)]
    pub(crate) fn sqrt(self) -> Self {
        self.map(libm::sqrt)
    }

    #[inline(always)]
    pub(crate) fn recip(self) -> Self {
        self.map(|x| 1.0 / x)
    }

    #[inline(always)]
    pub(crate) fn squared(self) -> Self {
        self * self
    }

    /// `self` where `mask` holds 1, `other` where it holds 0. A NaN in the lane not taken is
    /// dropped.
    #[inline(always)]
    pub(crate) fn or(self, other: Self, mask: Self) -> Self {
        let mut out = self.0;
        for ((x, y), m) in out.iter_mut().zip(other.0).zip(mask.0) {
            *x = if m == 1.0 { *x } else { y };
        }
        Self(out)
    }

    /// The same number in every lane where `mask` holds 1.
    #[inline(always)]
    pub(crate) fn set_where(self, mask: Self, value: f64) -> Self {
        self.zip(mask, |x, m| if m == 1.0 { value } else { x })
    }

    #[inline(always)]
    pub(crate) fn sum(self) -> f64 {
        self.0.iter().sum()
    }
}

impl Lanes<1> {
    #[inline(always)]
    pub(crate) fn value(self) -> f64 {
        let [value] = self.0;
        value
    }
}

macro_rules! elementwise {
    ($($trait:ident $method:ident $operator:tt),*) => {$(
        impl<const N: usize> $trait for Lanes<N> {
            type Output = Self;
            #[inline(always)]
            fn $method(self, other: Self) -> Self {
                self.zip(other, |x, y| x $operator y)
            }
        }
        impl<const N: usize> $trait<f64> for Lanes<N> {
            type Output = Self;
            #[inline(always)]
            fn $method(self, other: f64) -> Self {
                self.map(|x| x $operator other)
            }
        }
        impl<const N: usize> $trait<Lanes<N>> for f64 {
            type Output = Lanes<N>;
            #[inline(always)]
            fn $method(self, other: Lanes<N>) -> Lanes<N> {
                other.map(|y| self $operator y)
            }
        }
    )*};
}
elementwise!(Add add +, Sub sub -, Mul mul *, Div div /);

impl<const N: usize> Neg for Lanes<N> {
    type Output = Self;
    #[inline(always)]
    fn neg(self) -> Self {
        self.map(|x| -x)
    }
}
