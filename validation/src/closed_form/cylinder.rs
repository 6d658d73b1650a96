//! Solid cylinder in a uniform axial alternating field (a long bar in a long coil).
//!
//! Convention: SI, peak phasors, `e^{+jwt}`; `k = (1 - j)/delta`, so `H(r) = H0 J0(kr)/J0(ka)`.
//! Source: diffusion equation in cylinder coordinates; W. R. Smythe, Static and Dynamic Electricity, eddy currents
//! (from memory). All ratios use exponentially scaled Bessel functions, so `a/delta` may be hundreds.

use super::bessel::j_scaled;
use super::constants::skin_depth;
use super::error::{ClosedFormError, positive, within};
use num_complex::Complex64;
use std::f64::consts::PI;

const PLACE: &str = "cylinder::AxialCylinder";

/// A solid cylinder in a uniform axial field, with the Bessel values every result shares.
#[derive(Debug, Clone, PartialEq)]
pub struct AxialCylinder {
    radius: f64,
    resistivity: f64,
    delta: f64,
    k: Complex64,
    /// `exp(-|Im ka|) J0(ka)`.
    j0: Complex64,
    /// `J1(ka)/J0(ka)`.
    ratio: Complex64,
}

impl AxialCylinder {
    /// A cylinder of `radius` (m), `resistivity` (ohm m) and relative permeability `mu_r` at `frequency` (Hz).
    ///
    /// # Errors
    /// [`ClosedFormError::Argument`] unless all are positive; [`ClosedFormError::Bessel`] beyond the library's range.
    pub fn new(radius: f64, resistivity: f64, mu_r: f64, frequency: f64) -> Result<Self, ClosedFormError> {
        positive(PLACE, "radius", radius, "m")?;
        let delta = skin_depth(resistivity, mu_r, frequency)?;
        let k = Complex64::new(1.0, -1.0) / delta;
        let j0 = j_scaled(PLACE, 0.0, k * radius)?;
        let j1 = j_scaled(PLACE, 1.0, k * radius)?;
        Ok(Self { radius, resistivity, delta, k, j0, ratio: j1 / j0 })
    }

    /// Skin depth `delta`, m.
    pub fn delta(&self) -> f64 {
        self.delta
    }

    /// Surface impedance `Z_s = -rho k J1(ka)/J0(ka)`, ohm: `-E_phi/H_z` at the surface, real part positive.
    pub fn surface_impedance(&self) -> Complex64 {
        -self.resistivity * self.k * self.ratio
    }

    /// Flux factor `p - jq = 2 J1(ka)/(ka J0(ka))`, no unit: flux over `mu pi a^2 H0`.
    pub fn flux_factor(&self) -> Complex64 {
        2.0 * self.ratio / (self.k * self.radius)
    }

    /// Power per length `P' = 2 pi a Re(Z_s) H0^2/2`, W/m, in a peak field `h0_peak` (A/m).
    pub fn power_per_length(&self, h0_peak: f64) -> f64 {
        PI * self.radius * self.surface_impedance().re * h0_peak * h0_peak
    }

    /// Axial field `H(r)`, A/m peak, at radius `r` (m).
    ///
    /// # Errors
    /// [`ClosedFormError::Argument`] if `r` is not within the cylinder.
    pub fn field_peak(&self, r: f64, h0_peak: f64) -> Result<Complex64, ClosedFormError> {
        Ok(h0_peak * self.scaled_at(0.0, r)?)
    }

    /// Squared magnitude of the peak current density, (A/m^2)^2, at radius `r` (m): `|H0 k J1(kr)/J0(ka)|^2`.
    ///
    /// # Errors
    /// [`ClosedFormError::Argument`] if `r` is not within the cylinder.
    pub fn current_density_squared_peak(&self, r: f64, h0_peak: f64) -> Result<f64, ClosedFormError> {
        Ok((h0_peak * self.k * self.scaled_at(1.0, r)?).norm_sqr())
    }

    /// Joule loss density `rho |J|^2/2`, W/m^3, at radius `r` (m).
    ///
    /// # Errors
    /// [`ClosedFormError::Argument`] if `r` is not within the cylinder.
    pub fn loss_density(&self, r: f64, h0_peak: f64) -> Result<f64, ClosedFormError> {
        Ok(0.5 * self.resistivity * self.current_density_squared_peak(r, h0_peak)?)
    }

    /// `J_n(kr)/J0(ka)` without overflow.
    fn scaled_at(&self, order: f64, r: f64) -> Result<Complex64, ClosedFormError> {
        within(PLACE, "r", r, "m", (0.0..=self.radius).contains(&r), "from 0 to the radius")?;
        let decay = ((r - self.radius) / self.delta).exp();
        Ok(j_scaled(PLACE, order, self.k * r)? * decay / self.j0)
    }
}
