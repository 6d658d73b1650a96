//! Circular coil of rectangular cross-section with uniform turn density: in air, and above a flat conductor.
//!
//! Convention: SI, `e^{+jwt}`; the axis of the coil is normal to the conductor. `K(alpha) = int_{r1}^{r2} r J1(alpha r) dr`.
//! Source: C. V. Dodd, W. E. Deeds, J. Appl. Phys. 39(6) (1968) 2829-2838.

use super::bessel::{j_real, moment_j1};
use super::constants::MU0;
use super::error::{ClosedFormError, positive, within};
use super::quadrature::{Quadrature, equal_panels};
use num_complex::Complex64;
use std::f64::consts::PI;

const PLACE: &str = "coil";
/// Relative tolerance of the integrals.
const RELATIVE: f64 = 1e-12;
/// Integrals with `exp(-2 alpha h)` stop at `alpha h` = 20, where it is 4e-18.
const LIFT_CUT: f64 = 20.0;

/// A circular coil of rectangular cross-section whose turns fill it evenly.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Coil {
    /// Inner radius, m.
    pub inner: f64,
    /// Outer radius, m.
    pub outer: f64,
    /// Axial length, m.
    pub length: f64,
    /// Number of turns.
    pub turns: f64,
}

/// A flat conductor under a coil.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FlatConductor {
    /// Resistivity, ohm m.
    pub resistivity: f64,
    /// Relative permeability.
    pub mu_r: f64,
    /// Thickness, m; a half-space if absent.
    pub thickness: Option<f64>,
}

impl Coil {
    pub(crate) fn check(&self) -> Result<(), ClosedFormError> {
        positive(PLACE, "inner", self.inner, "m")?;
        within(PLACE, "outer", self.outer, "m", self.outer > self.inner, "greater than the inner radius")?;
        positive(PLACE, "length", self.length, "m")?;
        positive(PLACE, "turns", self.turns, "turns")
    }

    /// Turns over the area of the cross-section, 1/m^2.
    pub(crate) fn turn_density(&self) -> f64 {
        self.turns / ((self.outer - self.inner) * self.length)
    }

    /// `K(alpha)`, m^2.
    fn kernel(&self, rule: &Quadrature, alpha: f64) -> Result<f64, ClosedFormError> {
        if alpha * (self.outer - self.inner) <= 1.0 {
            // The difference of moments would cancel for a thin winding.
            let mut f = |r: f64| Ok(Complex64::from(r * j_real(PLACE, 1.0, alpha * r)?));
            return Ok(rule.panel(self.inner, self.outer, &mut f)?.re);
        }
        let (x1, x2) = (alpha * self.inner, alpha * self.outer);
        Ok((moment_j1(PLACE, x2)? - moment_j1(PLACE, x1)?) / (alpha * alpha))
    }

    /// Self-inductance in air, H.
    ///
    /// `L0 = pi mu0 (n/S)^2 int K^2 (2/alpha)[l + (e^{-alpha l} - 1)/alpha] dalpha`. The integrand is integrated adaptively
    /// up to a cut-off; beyond it the mean `(r1 + r2)/(pi alpha^3)` of `K^2` is integrated exactly.
    ///
    /// # Errors
    /// [`ClosedFormError::Argument`] for an impossible coil, [`ClosedFormError::TooManyPanels`] for a winding thinner or
    /// shorter than about 1e-5 of its radius, [`ClosedFormError::Quadrature`] if the integral does not settle.
    pub fn air_inductance(&self) -> Result<f64, ClosedFormError> {
        self.check()?;
        let (width, l) = (self.outer - self.inner, self.length);
        // What the mean leaves out is about 0.2/(A^4 w^3 l) of the whole: 1e-11 for this A.
        let cut = (376.0 / (width.powi(3) * l).powf(0.25)).max(40.0 / l);
        let rule = Quadrature::new("coil::Coil::air_inductance", RELATIVE);
        let edges = equal_panels(PLACE, cut, 2.0 * PI / self.outer)?;
        let integral = rule.integrate(&edges, |alpha| {
            let k = self.kernel(&rule, alpha)?;
            Ok(Complex64::from(k * k * axial_window(alpha, l)))
        })?;
        let mean = 2.0 * (self.inner + self.outer) / PI;
        let tail = mean * (l / (3.0 * cut.powi(3)) - 1.0 / (4.0 * cut.powi(4)));
        Ok(PI * MU0 * self.turn_density().powi(2) * (integral.re + tail))
    }

    /// Change of impedance `Delta Z`, ohm, when a flat conductor is brought to `lift_off` (m) below the coil.
    ///
    /// `Delta Z = j w pi mu0 (n/S)^2 int K^2 alpha^{-2} e^{-2 alpha h} (1 - e^{-alpha l})^2 R(alpha) dalpha`.
    ///
    /// # Errors
    /// [`ClosedFormError::Argument`] for an impossible coil or conductor, [`ClosedFormError::TooManyPanels`] for a lift-off
    /// far below the radius, [`ClosedFormError::Quadrature`] if the integral does not settle.
    pub fn impedance_change(
        &self,
        conductor: &FlatConductor,
        lift_off: f64,
        frequency: f64,
    ) -> Result<Complex64, ClosedFormError> {
        self.check()?;
        conductor.check(lift_off, frequency)?;
        let w = 2.0 * PI * frequency;
        let rule = Quadrature::new("coil::Coil::impedance_change", RELATIVE);
        let edges = equal_panels(PLACE, LIFT_CUT / lift_off, 2.0 * PI / self.outer)?;
        let integral = rule.integrate(&edges, |alpha| {
            let factor = self.kernel(&rule, alpha)? * (-alpha * self.length).exp_m1() / alpha;
            Ok(factor * factor * (-2.0 * alpha * lift_off).exp() * conductor.reflection(alpha, w))
        })?;
        Ok(Complex64::new(0.0, w * PI * MU0) * self.turn_density().powi(2) * integral)
    }
}

/// `(2/alpha)[l + (e^{-alpha l} - 1)/alpha]`, m^2, without cancellation for small `alpha l`.
fn axial_window(alpha: f64, l: f64) -> f64 {
    let x = alpha * l;
    if x > 0.5 {
        return 2.0 / alpha * (l + (-x).exp_m1() / alpha);
    }
    // 2 l^2 (1/2! - x/3! + x^2/4! - ...)
    let (mut term, mut total) = (0.5, 0.0);
    for n in 3..20 {
        total += term;
        term *= -x / f64::from(n);
    }
    2.0 * l * l * total
}

impl FlatConductor {
    fn check(&self, lift_off: f64, frequency: f64) -> Result<(), ClosedFormError> {
        positive(PLACE, "resistivity", self.resistivity, "ohm m")?;
        positive(PLACE, "mu_r", self.mu_r, "(no unit)")?;
        positive(PLACE, "thickness", self.thickness.unwrap_or(1.0), "m")?;
        positive(PLACE, "lift_off", lift_off, "m")?;
        positive(PLACE, "frequency", frequency, "Hz")
    }

    /// Reflection factor `R(alpha)`, no unit, at angular frequency `w`.
    ///
    /// `mu_r alpha - alpha1` is written `((mu_r^2 - 1) alpha^2 - j w mu sigma)/(mu_r alpha + alpha1)`: for large `alpha` the
    /// difference would cancel.
    fn reflection(&self, alpha: f64, w: f64) -> Complex64 {
        let diffusion = Complex64::new(0.0, w * MU0 * self.mu_r / self.resistivity);
        let alpha1 = (alpha * alpha + diffusion).sqrt();
        let sum = self.mu_r * alpha + alpha1;
        let half_space = ((self.mu_r * self.mu_r - 1.0) * alpha * alpha - diffusion) / (sum * sum);
        match self.thickness {
            None => half_space,
            Some(thickness) => {
                let x = -2.0 * alpha1 * thickness;
                half_space * (-expm1(x)) / (1.0 - half_space * half_space * x.exp())
            }
        }
    }
}

/// `e^x - 1` without cancellation near zero.
fn expm1(x: Complex64) -> Complex64 {
    let half_sine = (0.5 * x.im).sin();
    Complex64::new(x.re.exp_m1() * x.im.cos() - 2.0 * half_sine * half_sine, x.re.exp() * x.im.sin())
}

/// Change of impedance, ohm, of one filament loop of `radius` (m) at height `lift_off` (m) above a flat conductor.
///
/// `Delta Z = j w pi mu0 a^2 int J1(alpha a)^2 e^{-2 alpha h} R(alpha) dalpha`.
///
/// # Errors
/// As [`Coil::impedance_change`].
pub fn loop_impedance_change(
    radius: f64,
    conductor: &FlatConductor,
    lift_off: f64,
    frequency: f64,
) -> Result<Complex64, ClosedFormError> {
    positive(PLACE, "radius", radius, "m")?;
    conductor.check(lift_off, frequency)?;
    let w = 2.0 * PI * frequency;
    let rule = Quadrature::new("coil::loop_impedance_change", RELATIVE);
    let edges = equal_panels(PLACE, LIFT_CUT / lift_off, 2.0 * PI / radius)?;
    let integral = rule.integrate(&edges, |alpha| {
        let j1 = j_real(PLACE, 1.0, alpha * radius)?;
        Ok(j1 * j1 * (-2.0 * alpha * lift_off).exp() * conductor.reflection(alpha, w))
    })?;
    Ok(Complex64::new(0.0, w * PI * MU0 * radius * radius) * integral)
}
