//! Numbers a system may be made of: `f64` (heat) and `Complex64` (phasors).
//! Convention: products are never conjugated; a complex matrix here is symmetric, not Hermitian.

use std::iter::Sum;
use std::ops::{Add, AddAssign, Div, Mul, MulAssign, Neg, Sub, SubAssign};

use num_complex::Complex64;
use pulp::Simd;

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

    /// Vector register of the unit `S` with such numbers in its lanes.
    type Vector<S: Simd>: Copy;

    /// Cuts a slice into whole vectors and a rest.
    fn vectors<S: Simd>(slice: &[Self]) -> (&[Self::Vector<S>], &[Self]);

    /// As [`Scalar::vectors`], to write to.
    fn vectors_mut<S: Simd>(slice: &mut [Self]) -> (&mut [Self::Vector<S>], &mut [Self]);

    /// The same number in all lanes.
    fn splat<S: Simd>(simd: S, value: Self) -> Self::Vector<S>;

    /// `a b`, lane by lane.
    fn times<S: Simd>(simd: S, a: Self::Vector<S>, b: Self::Vector<S>) -> Self::Vector<S>;

    /// `a b + c`, lane by lane, fused if the unit can.
    fn times_plus<S: Simd>(simd: S, a: Self::Vector<S>, b: Self::Vector<S>, c: Self::Vector<S>) -> Self::Vector<S>;

    /// `a + b`, lane by lane.
    fn plus<S: Simd>(simd: S, a: Self::Vector<S>, b: Self::Vector<S>) -> Self::Vector<S>;

    /// `a - b`, lane by lane.
    fn minus<S: Simd>(simd: S, a: Self::Vector<S>, b: Self::Vector<S>) -> Self::Vector<S>;

    /// Sum over the lanes.
    fn sum_of_lanes<S: Simd>(simd: S, a: Self::Vector<S>) -> Self;
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

    type Vector<S: Simd> = S::f64s;

    #[inline(always)]
    fn vectors<S: Simd>(slice: &[Self]) -> (&[S::f64s], &[Self]) {
        S::as_simd_f64s(slice)
    }

    #[inline(always)]
    fn vectors_mut<S: Simd>(slice: &mut [Self]) -> (&mut [S::f64s], &mut [Self]) {
        S::as_mut_simd_f64s(slice)
    }

    #[inline(always)]
    fn splat<S: Simd>(simd: S, value: Self) -> S::f64s {
        simd.splat_f64s(value)
    }

    #[inline(always)]
    fn times<S: Simd>(simd: S, a: S::f64s, b: S::f64s) -> S::f64s {
        simd.mul_f64s(a, b)
    }

    #[inline(always)]
    fn times_plus<S: Simd>(simd: S, a: S::f64s, b: S::f64s, c: S::f64s) -> S::f64s {
        simd.mul_add_e_f64s(a, b, c)
    }

    #[inline(always)]
    fn plus<S: Simd>(simd: S, a: S::f64s, b: S::f64s) -> S::f64s {
        simd.add_f64s(a, b)
    }

    #[inline(always)]
    fn minus<S: Simd>(simd: S, a: S::f64s, b: S::f64s) -> S::f64s {
        simd.sub_f64s(a, b)
    }

    #[inline(always)]
    fn sum_of_lanes<S: Simd>(simd: S, a: S::f64s) -> Self {
        simd.reduce_sum_f64s(a)
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

    type Vector<S: Simd> = S::c64s;

    #[inline(always)]
    fn vectors<S: Simd>(slice: &[Self]) -> (&[S::c64s], &[Self]) {
        S::as_simd_c64s(slice)
    }

    #[inline(always)]
    fn vectors_mut<S: Simd>(slice: &mut [Self]) -> (&mut [S::c64s], &mut [Self]) {
        S::as_mut_simd_c64s(slice)
    }

    #[inline(always)]
    fn splat<S: Simd>(simd: S, value: Self) -> S::c64s {
        simd.splat_c64s(value)
    }

    #[inline(always)]
    fn times<S: Simd>(simd: S, a: S::c64s, b: S::c64s) -> S::c64s {
        simd.mul_c64s(a, b)
    }

    #[inline(always)]
    fn times_plus<S: Simd>(simd: S, a: S::c64s, b: S::c64s, c: S::c64s) -> S::c64s {
        simd.mul_add_e_c64s(a, b, c)
    }

    #[inline(always)]
    fn plus<S: Simd>(simd: S, a: S::c64s, b: S::c64s) -> S::c64s {
        simd.add_c64s(a, b)
    }

    #[inline(always)]
    fn minus<S: Simd>(simd: S, a: S::c64s, b: S::c64s) -> S::c64s {
        simd.sub_c64s(a, b)
    }

    #[inline(always)]
    fn sum_of_lanes<S: Simd>(simd: S, a: S::c64s) -> Self {
        simd.reduce_sum_c64s(a)
    }
}
