//! Numbers a system may be made of: `f64` (heat) and `Complex64` (phasors).
//! Convention: products are never conjugated; a complex matrix here is symmetric, not Hermitian.

use std::iter::Sum;
use std::ops::{Add, AddAssign, Div, Mul, MulAssign, Neg, Sub, SubAssign};

use num_complex::Complex64;

/// A field element with the arithmetic of a direct solver.
pub trait Scalar:
    faer::traits::ComplexField
    + Copy
    + Send
    + Sync
    + PartialEq
    + std::fmt::Debug
    + Default
    + Sum
    + Neg<Output = Self>
    + Add<Output = Self>
    + Sub<Output = Self>
    + Mul<Output = Self>
    + Div<Output = Self>
    + AddAssign
    + SubAssign
    + MulAssign
    + 'static
{
    /// Zero.
    const ZERO: Self;
    /// One.
    const ONE: Self;

    /// `1 / self`.
    #[must_use]
    fn reciprocal(self) -> Self;

    /// `|Re| + |Im|`: between the modulus and its `sqrt(2)`-fold, free of overflow and of square roots.
    fn size(self) -> f64;

    /// Whether every part is finite.
    fn finite(self) -> bool;

    /// `self + a b` with fused operations where the processor has them.
    #[must_use]
    fn plus_product(self, a: Self, b: Self) -> Self;
}

impl Scalar for f64 {
    const ZERO: Self = 0.0;
    const ONE: Self = 1.0;

    #[inline(always)]
    fn reciprocal(self) -> Self {
        1.0 / self
    }

    #[inline(always)]
    fn size(self) -> f64 {
        self.abs()
    }

    #[inline(always)]
    fn finite(self) -> bool {
        self.is_finite()
    }

    #[inline(always)]
    fn plus_product(self, a: Self, b: Self) -> Self {
        self + a * b
    }
}

impl Scalar for Complex64 {
    const ZERO: Self = Self::new(0.0, 0.0);
    const ONE: Self = Self::new(1.0, 0.0);

    /// Scaled by the larger part (Smith), so that no square overflows.
    #[inline(always)]
    fn reciprocal(self) -> Self {
        if self.re.abs() >= self.im.abs() {
            let t = self.im / self.re;
            let d = 1.0 / (self.re + self.im * t);
            Self::new(d, -t * d)
        } else {
            let t = self.re / self.im;
            let d = 1.0 / (self.re * t + self.im);
            Self::new(t * d, -d)
        }
    }

    #[inline(always)]
    fn size(self) -> f64 {
        self.re.abs() + self.im.abs()
    }

    #[inline(always)]
    fn finite(self) -> bool {
        self.re.is_finite() && self.im.is_finite()
    }

    #[inline(always)]
    fn plus_product(self, a: Self, b: Self) -> Self {
        Self::new(
            self.re + (a.re * b.re - a.im * b.im),
            self.im + (a.re * b.im + a.im * b.re),
        )
    }
}
