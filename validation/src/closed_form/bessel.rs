//! Bessel functions of complex argument with typed errors, and the moment of `J1` that coil integrals need.
//!
//! Convention: "scaled" functions have the exponential growth or decay taken out as each doc line says.
//! Source: `complex-bessel` (Amos, ACM TOMS 644) for the functions; DLMF 10.22.2, 10.35 and 11.6.1 for the moment.

use super::error::ClosedFormError;
use complex_bessel::{Scaling, besseli_scaled, besselj, besselj_scaled, besselj_seq, besselk_scaled};
use num_complex::Complex64;
use std::f64::consts::PI;

/// From this argument the asymptotic series of the moment is exact to round-off (its smallest term is about `e^-x`).
const ASYMPTOTIC_FROM: f64 = 40.0;
/// Up to this argument the power series loses no more than one digit.
const SERIES_UP_TO: f64 = 4.0;

fn wrap(
    place: &'static str,
    order: f64,
    z: Complex64,
    value: Result<Complex64, complex_bessel::Error>,
) -> Result<Complex64, ClosedFormError> {
    value.map_err(|reason| ClosedFormError::Bessel { place, order, re: z.re, im: z.im, reason })
}

/// `exp(-|Im z|) J_n(z)`.
pub(crate) fn j_scaled(place: &'static str, n: f64, z: Complex64) -> Result<Complex64, ClosedFormError> {
    wrap(place, n, z, besselj_scaled(n, z))
}

/// `exp(-Re z) I_n(z)`, for `Re z >= 0`.
pub(crate) fn i_scaled(place: &'static str, n: f64, z: Complex64) -> Result<Complex64, ClosedFormError> {
    wrap(place, n, z, besseli_scaled(n, z))
}

/// `exp(z) K_n(z)`.
pub(crate) fn k_scaled(place: &'static str, n: f64, z: Complex64) -> Result<Complex64, ClosedFormError> {
    wrap(place, n, z, besselk_scaled(n, z))
}

/// `J_n(x)` of a real argument.
pub(crate) fn j_real(place: &'static str, n: f64, x: f64) -> Result<f64, ClosedFormError> {
    let z = Complex64::from(x);
    Ok(wrap(place, n, z, besselj(n, z))?.re)
}

/// `exp(-x) I_n(x)` of a real argument `x >= 0`.
pub(crate) fn i_real_scaled(place: &'static str, n: f64, x: f64) -> Result<f64, ClosedFormError> {
    Ok(i_scaled(place, n, Complex64::from(x))?.re)
}

/// `exp(x) K_n(x)` of a real argument `x > 0`.
pub(crate) fn k_real_scaled(place: &'static str, n: f64, x: f64) -> Result<f64, ClosedFormError> {
    Ok(k_scaled(place, n, Complex64::from(x))?.re)
}

/// Moment `int_0^x t J1(t) dt` for `x >= 0`.
///
/// Equal to `-x J0(x) + int_0^x J0`. A power series for small `x`, `int_0^x J0 = 2 sum J_{2k+1}(x)` (DLMF 10.22.2 with
/// 10.6.1) in the middle, and `1 + (pi x/2)(J1 S0 - J0 S1)` with the Struve remainders `S = H - Y` (DLMF 11.6.1) beyond.
pub(crate) fn moment_j1(place: &'static str, x: f64) -> Result<f64, ClosedFormError> {
    if x <= SERIES_UP_TO {
        return Ok(moment_series(x));
    }
    if x >= ASYMPTOTIC_FROM {
        let (s0, s1) = struve_remainders(x);
        let (j0, j1) = (j_real(place, 0.0, x)?, j_real(place, 1.0, x)?);
        return Ok(1.0 + 0.5 * PI * x * (j1 * s0 - j0 * s1));
    }
    let z = Complex64::from(x);
    let orders = (1.3 * x) as usize + 30;
    let values = besselj_seq(0.0, z, orders, Scaling::Unscaled)
        .map_err(|reason| ClosedFormError::Bessel { place, order: 0.0, re: x, im: 0.0, reason })?
        .values;
    let odd: f64 = values.iter().skip(1).step_by(2).rev().map(|v| v.re).sum();
    let first = values.first().map_or(0.0, |v| v.re);
    Ok(2.0 * odd - x * first)
}

/// `sum_k (-1)^k (x/2)^{2k+1} x^2 / (k! (k+1)! (2k+3))`.
fn moment_series(x: f64) -> f64 {
    let quarter = -0.25 * x * x;
    let mut term = 0.5 * x * x * x;
    let mut total = 0.0;
    for k in 0..40 {
        let k = f64::from(k);
        total += term / (2.0 * k + 3.0);
        term *= quarter / ((k + 1.0) * (k + 2.0));
    }
    total
}

/// `H_0(x) - Y_0(x)` and `H_1(x) - Y_1(x)`, Struve less Neumann, by their asymptotic series (DLMF 11.6.1).
fn struve_remainders(x: f64) -> (f64, f64) {
    let (mut t0, mut t1) = (2.0 / (PI * x), 2.0 / PI);
    let (mut s0, mut s1) = (0.0, 0.0);
    for k in 0..15 {
        s0 += t0;
        s1 += t1;
        let odd = 2.0 * f64::from(k) + 1.0;
        t0 *= -(odd / x) * (odd / x);
        t1 *= -odd * (odd - 2.0) / (x * x);
    }
    (s0, s1)
}
