//! Transient conduction in a long cylinder: constant flux, convection, and an eddy-current source.
//!
//! Convention: dimensionless; `Fo = alpha t/R^2`, `Bi = h R/k`, radius over `R`.
//! Source: H. S. Carslaw, J. C. Jaeger, Conduction of Heat in Solids, section 7.8 (from memory); H. Groeber's series for
//! convection; the eddy-current factor from the steady heat balance, worked out at the function.

use super::bessel::{j_real, j_scaled};
use super::error::{ClosedFormError, positive, within};
use super::quadrature::Quadrature;
use num_complex::Complex64;
use std::f64::consts::PI;

/// Terms with `beta^2 Fo` above this are below round-off.
const EXPONENT_CUT: f64 = 40.0;
/// Smallest Fourier number: about 2000 terms of the series.
const SMALLEST_FO: f64 = 1e-6;

/// Checks the arguments the series share.
fn check(place: &'static str, fo: f64, x: f64) -> Result<(), ClosedFormError> {
    within(place, "fo", fo, "(no unit)", fo >= SMALLEST_FO, "at least 1e-6")?;
    within(place, "r_over_radius", x, "(no unit)", (0.0..=1.0).contains(&x), "from 0 to 1")
}

/// Rise `(T - T0) k/(q R)`, no unit, of a cylinder under a constant surface flux `q`.
///
/// `2 Fo + x^2/2 - 1/4 - 2 sum e^{-beta^2 Fo} J0(beta x)/(beta^2 J0(beta))`, `J1(beta) = 0`.
///
/// # Errors
/// [`ClosedFormError::Argument`] unless `fo >= 1e-6` and `0 <= r_over_radius <= 1`.
pub fn constant_flux_rise(fo: f64, r_over_radius: f64) -> Result<f64, ClosedFormError> {
    const PLACE: &str = "cylinder_heat::constant_flux_rise";
    check(PLACE, fo, r_over_radius)?;
    let mut sum = 0.0;
    for n in 1_u32.. {
        let beta = bessel_zero(PLACE, 1, n)?;
        if beta * beta * fo > EXPONENT_CUT {
            break;
        }
        let shape = j_real(PLACE, 0.0, beta * r_over_radius)? / j_real(PLACE, 0.0, beta)?;
        sum += (-beta * beta * fo).exp() * shape / (beta * beta);
    }
    Ok(2.0 * fo + 0.5 * r_over_radius * r_over_radius - 0.25 - 2.0 * sum)
}

/// One term of the convection series.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ConvectionTerm {
    /// Root `zeta_n` of `zeta J1(zeta) = Bi J0(zeta)`.
    pub zeta: f64,
    /// Coefficient `C_n = (2/zeta) J1/(J0^2 + J1^2)`.
    pub coefficient: f64,
}

/// Term `n` (from 1) of the convection series, no unit, for a Biot number `bi`.
///
/// The root lies between the zero `n - 1` of `J1` and the zero `n` of `J0` and is found by bisection.
///
/// # Errors
/// [`ClosedFormError::Argument`] unless `bi > 0` and `1 <= n <= 100000`.
pub fn convection_term(bi: f64, n: u32) -> Result<ConvectionTerm, ClosedFormError> {
    const PLACE: &str = "cylinder_heat::convection_term";
    positive(PLACE, "bi", bi, "(no unit)")?;
    within(PLACE, "n", f64::from(n), "(no unit)", (1..=100_000).contains(&n), "from 1 to 100000")?;
    let low = if n == 1 { 0.0 } else { bessel_zero(PLACE, 1, n - 1)? };
    let high = bessel_zero(PLACE, 0, n)?;
    // Counted from the lower end the function has one sign before the root and the other after it.
    let sign = if n % 2 == 1 { 1.0 } else { -1.0 };
    let zeta = bisect(low, high, |z| Ok(sign * (z * j_real(PLACE, 1.0, z)? - bi * j_real(PLACE, 0.0, z)?)))?;
    let (j0, j1) = (j_real(PLACE, 0.0, zeta)?, j_real(PLACE, 1.0, zeta)?);
    Ok(ConvectionTerm { zeta, coefficient: 2.0 / zeta * j1 / (j0 * j0 + j1 * j1) })
}

/// `(T - Ta)/(T0 - Ta)`, no unit, of a cylinder that exchanges heat with surroundings at `Ta`.
///
/// `sum C_n e^{-zeta_n^2 Fo} J0(zeta_n x)`, all terms above round-off.
///
/// # Errors
/// [`ClosedFormError::Argument`] unless `bi > 0`, `fo >= 1e-6` and `0 <= r_over_radius <= 1`.
pub fn convection_ratio(bi: f64, fo: f64, r_over_radius: f64) -> Result<f64, ClosedFormError> {
    const PLACE: &str = "cylinder_heat::convection_ratio";
    check(PLACE, fo, r_over_radius)?;
    let mut sum = 0.0;
    for n in 1_u32.. {
        let term = convection_term(bi, n)?;
        let exponent = term.zeta * term.zeta * fo;
        sum += term.coefficient * (-exponent).exp() * j_real(PLACE, 0.0, term.zeta * r_over_radius)?;
        if exponent > EXPONENT_CUT {
            break;
        }
    }
    Ok(sum)
}

/// Factor `Phi(R/delta)`, no unit, of the surface-to-core difference under eddy-current heating.
///
/// In the regular regime (`Fo > 0.5`, constant properties, insulated) `Ts - Tc = Phi q R/(2k)`, with `q` the power over the
/// surface. A cylinder that warms evenly satisfies `k r T' = q r^2/R - G(r)`, `G = int_0^r g r dr`, `G(R) = q R`; hence
/// `Phi = 1 - 2 int g r ln(R/r) dr / int g r dr` with the source `g ~ |J1(kr)|^2`, integrated here adaptively.
///
/// # Errors
/// [`ClosedFormError::Argument`] unless the argument is positive.
pub fn core_surface_factor(radius_over_delta: f64) -> Result<f64, ClosedFormError> {
    const PLACE: &str = "cylinder_heat::core_surface_factor";
    let x = radius_over_delta;
    positive(PLACE, "radius_over_delta", x, "(no unit)")?;
    let k = Complex64::new(1.0, -1.0) * x;
    let source = |s: f64| -> Result<f64, ClosedFormError> {
        Ok(s * j_scaled(PLACE, 1.0, k * s)?.norm_sqr() * (2.0 * x * (s - 1.0)).exp())
    };
    let rule = Quadrature::new(PLACE, 1e-13);
    // Distances from the surface in skin depths; 20 of them hold all the power.
    let deepest = 1.0 - (20.0 / x).min(1.0);
    let edges: Vec<f64> = (0..=16).map(|i| deepest + (1.0 - deepest) * f64::from(i) / 16.0).collect();
    let power = rule.integrate(&edges, |s| Ok(Complex64::from(source(s)?)))?;
    let moment = rule.integrate(&edges, |s| Ok(Complex64::from(-source(s)? * s.ln())))?;
    Ok(1.0 - 2.0 * moment.re / power.re)
}

/// Zero `n` (from 1) of `J0` or `J1`, no unit.
///
/// Bracketed by `(n + order/2 - 1/4) pi` give or take 0.3, which holds for every zero of both (`McMahon`, DLMF 10.21.19).
fn bessel_zero(place: &'static str, order: u32, n: u32) -> Result<f64, ClosedFormError> {
    let guess = (f64::from(n) + 0.5 * f64::from(order) - 0.25) * PI;
    let nu = f64::from(order);
    let sign = if n % 2 == 1 { -1.0 } else { 1.0 };
    bisect(guess - 0.3, guess + 0.3, |z| Ok(sign * j_real(place, nu, z)?))
}

/// Root of `f` between `low`, where it is negative, and `high`, where it is positive, to the last bit.
fn bisect<F>(mut low: f64, mut high: f64, f: F) -> Result<f64, ClosedFormError>
where
    F: Fn(f64) -> Result<f64, ClosedFormError>,
{
    for _ in 0..200 {
        let middle = 0.5 * (low + high);
        if middle <= low || middle >= high {
            break;
        }
        if f(middle)? < 0.0 {
            low = middle;
        } else {
            high = middle;
        }
    }
    Ok(0.5 * (low + high))
}
