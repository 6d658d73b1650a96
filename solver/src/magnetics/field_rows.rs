//! Field of a unit drive at several points of an element at once, and the loop over elements that works chunk by chunk.
//!
//! The same bits as [`super::unit_field::electric_field`] and [`super::unit_field::flux_density`] point by point.
//! Convention: rows of `P` points as in [`crate::fem::rows`]; `N` nodes an element.

use mesher::Point;
use num_complex::Complex64;

use super::operator::Operator;
use crate::fem::rows::{BasisRows, ElementRows};

/// Real and imaginary parts of a phasor at `P` points.
#[derive(Debug, Clone, Copy)]
pub(super) struct Phasors<const P: usize> {
    re: [f64; P],
    im: [f64; P],
}

impl<const P: usize> Phasors<P> {
    const ZERO: Self = Self { re: [0.0; P], im: [0.0; P] };

    /// The phasor at point `q`.
    #[inline(always)]
    pub(super) fn at(&self, q: usize) -> Complex64 {
        Complex64::new(self.re[q], self.im[q])
    }

    #[inline(always)]
    fn add(&mut self, factor: Complex64, row: &[f64; P]) {
        for (q, value) in row.iter().enumerate() {
            self.re[q] += factor.re * value;
            self.im[q] += factor.im * value;
        }
    }

    #[inline(always)]
    fn subtract(&mut self, factor: Complex64, row: &[f64; P]) {
        for (q, value) in row.iter().enumerate() {
            self.re[q] -= factor.re * value;
            self.im[q] -= factor.im * value;
        }
    }
}

/// Unknowns and geometry of one element.
#[derive(Debug, Clone, Copy)]
pub(super) struct LocalField<'a, const N: usize, const P: usize> {
    basis: &'a BasisRows<N, P>,
    pub(super) geometry: ElementRows<P>,
    u: [Complex64; N],
    w: Complex64,
    omega: f64,
}

impl<'a, const N: usize, const P: usize> LocalField<'a, N, P> {
    /// Element `e` of the solution `x`.
    #[inline(always)]
    pub(super) fn new(operator: &Operator, basis: &'a BasisRows<N, P>, x: &[Complex64], e: usize) -> Self {
        let space = operator.space();
        let (mut nodes, mut u): ([Point; N], _) = ([[0.0; 2]; N], [Complex64::ZERO; N]);
        for ((node, u), &dof) in nodes.iter_mut().zip(&mut u).zip(space.element(e)) {
            *node = space.points()[dof as usize];
            *u = x[dof as usize];
        }
        let w = operator.border_of_element(e).map_or(Complex64::ZERO, |b| x[b as usize]);
        Self { basis, geometry: ElementRows::new(basis, &nodes), u, w, omega: operator.omega() }
    }

    /// `E_phi = -j w (r u - W / r)`, V/m.
    #[inline(always)]
    pub(super) fn electric(&self) -> Phasors<P> {
        let mut out = Phasors::ZERO;
        for (&u, value) in self.u.iter().zip(&self.basis.value) {
            out.add(u, value);
        }
        let mut drive = Phasors::<P>::ZERO;
        if self.w != Complex64::ZERO {
            for (q, r) in self.geometry.r.iter().enumerate() {
                (drive.re[q], drive.im[q]) = (self.w.re / r, self.w.im / r);
            }
        }
        let factor = Complex64::new(0.0, -self.omega);
        for (q, &r) in self.geometry.r.iter().enumerate() {
            let electric = factor * (out.at(q) * r - drive.at(q));
            (out.re[q], out.im[q]) = (electric.re, electric.im);
        }
        out
    }

    /// `[B_r, B_z]`, tesla.
    #[inline(always)]
    pub(super) fn flux(&self) -> [Phasors<P>; 2] {
        let mut b = [Phasors::ZERO; 2];
        for (i, &u) in self.u.iter().enumerate() {
            let [mut along_r, mut along_z] = self.geometry.gradient(self.basis, i);
            for (q, r) in self.geometry.r.iter().enumerate() {
                along_z[q] *= r;
                along_r[q] = 2.0 * self.basis.value[i][q] + r * along_r[q];
            }
            b[0].subtract(u, &along_z);
            b[1].add(u, &along_r);
        }
        b
    }
}
