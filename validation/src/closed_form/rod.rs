//! Circular coil of rectangular cross-section round an infinitely long conducting rod.
//!
//! Convention: SI, `e^{+jwt}`; the rod is coaxial with the coil. In a finite model the bar should be at least six coil
//! lengths long (common practice, no source).
//! Source: C. V. Dodd, W. E. Deeds, J. Appl. Phys. 39(6) (1968) 2829-2838. Exponentials of `I` and `K` are collected in
//! one factor `exp(-2 alpha (r1 - b))`.

use super::bessel::{i_real_scaled, i_scaled, k_real_scaled};
use super::coil::Coil;
use super::constants::MU0;
use super::error::{ClosedFormError, positive, within};
use super::quadrature::{Quadrature, equal_panels};
use num_complex::Complex64;
use std::f64::consts::PI;

const PLACE: &str = "rod::impedance_change";
/// Relative tolerance of the integral.
const RELATIVE: f64 = 1e-12;
/// The integral stops at `alpha (r1 - b)` = 20, where the exponential is 4e-18.
const GAP_CUT: f64 = 20.0;

/// An infinitely long rod inside a coil.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Rod {
    /// Radius, m.
    pub radius: f64,
    /// Resistivity, ohm m.
    pub resistivity: f64,
    /// Relative permeability.
    pub mu_r: f64,
}

/// Change of impedance `Delta Z`, ohm, of a coil when the rod is put inside, at `frequency` (Hz).
///
/// `Delta Z = j w 2 mu0 (n/S)^2 int F(alpha) [int r K1(alpha r) dr]^2 2 (1 - cos alpha l)/alpha^2 dalpha`.
///
/// # Errors
/// [`ClosedFormError::Argument`] for an impossible coil or a rod that touches it, [`ClosedFormError::TooManyPanels`] for a
/// gap far below the length, [`ClosedFormError::Quadrature`] if the integral does not settle.
pub fn impedance_change(coil: &Coil, rod: &Rod, frequency: f64) -> Result<Complex64, ClosedFormError> {
    coil.check()?;
    positive(PLACE, "radius", rod.radius, "m")?;
    positive(PLACE, "resistivity", rod.resistivity, "ohm m")?;
    positive(PLACE, "mu_r", rod.mu_r, "(no unit)")?;
    positive(PLACE, "frequency", frequency, "Hz")?;
    let gap = coil.inner - rod.radius;
    within(PLACE, "radius", rod.radius, "m", gap > 0.0, "less than the inner radius of the coil")?;
    let w = 2.0 * PI * frequency;
    let rule = Quadrature::new(PLACE, RELATIVE);
    let width = 2.0 * PI / coil.length.max(coil.outer);
    let edges = equal_panels(PLACE, GAP_CUT / gap, width)?;
    let integral = rule.integrate(&edges, |alpha| {
        let winding = winding(&rule, coil, alpha)?;
        let sine = (0.5 * alpha * coil.length).sin() / alpha;
        let weight = winding * winding * 4.0 * sine * sine * (-2.0 * alpha * gap).exp();
        Ok(weight * rod.factor(alpha, w)?)
    })?;
    Ok(Complex64::new(0.0, 2.0 * w * MU0 * coil.turn_density().powi(2)) * integral)
}

/// `exp(alpha r1) int_{r1}^{r2} r K1(alpha r) dr`, m^2, on panels short in the decay and in the radius.
fn winding(rule: &Quadrature, coil: &Coil, alpha: f64) -> Result<f64, ClosedFormError> {
    let (r1, r2) = (coil.inner, coil.outer.min(coil.inner + 40.0 / alpha));
    let panels = ((r2 - r1) * alpha / 4.0).max((r2 - r1) / r1).ceil();
    let step = (r2 - r1) / panels;
    let mut f = |r: f64| {
        let k1 = k_real_scaled(PLACE, 1.0, alpha * r)?;
        Ok(Complex64::from(r * k1 * (-alpha * (r - r1)).exp()))
    };
    let mut total = 0.0;
    let mut a = r1;
    while a < r2 - 0.5 * step {
        total += rule.panel(a, a + step, &mut f)?.re;
        a += step;
    }
    Ok(total)
}

impl Rod {
    /// `exp(-2 alpha b) F(alpha)` with
    /// `F = [mu_r alpha I0(ab) I1(a1 b) - a1 I1(ab) I0(a1 b)]/[mu_r alpha K0(ab) I1(a1 b) + a1 K1(ab) I0(a1 b)]`.
    fn factor(&self, alpha: f64, w: f64) -> Result<Complex64, ClosedFormError> {
        let diffusion = Complex64::new(0.0, w * MU0 * self.mu_r / self.resistivity);
        let alpha1 = (alpha * alpha + diffusion).sqrt();
        let (x, x1) = (alpha * self.radius, alpha1 * self.radius);
        let ratio = i_scaled(PLACE, 1.0, x1)? / i_scaled(PLACE, 0.0, x1)?;
        let (i0, i1) = (i_real_scaled(PLACE, 0.0, x)?, i_real_scaled(PLACE, 1.0, x)?);
        let (k0, k1) = (k_real_scaled(PLACE, 0.0, x)?, k_real_scaled(PLACE, 1.0, x)?);
        let m = self.mu_r * alpha * ratio;
        Ok((m * i0 - alpha1 * i1) / (m * k0 + alpha1 * k1))
    }
}
