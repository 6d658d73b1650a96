//! Tube in a uniform axial alternating field, with its bore full of air.
//!
//! Convention: SI, peak phasors, `e^{+jwt}`; `kappa = (1 + j)/delta`, `H = A I0(kappa r) + B K0(kappa r)`.
//! Source: diffusion equation with `H(r_o) = H0` and, at the bore, `E_phi = -jw mu0 (r_i/2) H(r_i)` (the flux of the
//! bore). `I` and `K` are written relative to their values at the two walls, so thick walls do not overflow.

use super::bessel::{i_scaled, k_scaled};
use super::constants::{MU0, skin_depth};
use super::error::{ClosedFormError, positive, within};
use num_complex::Complex64;
use std::f64::consts::PI;

const PLACE: &str = "tube::AxialTube";

/// A tube in a uniform axial field.
#[derive(Debug, Clone, PartialEq)]
pub struct AxialTube {
    outer: f64,
    impedance: Complex64,
    bore: Complex64,
}

impl AxialTube {
    /// A tube of `inner` and `outer` radius (m), `resistivity` (ohm m) and `mu_r` at `frequency` (Hz).
    ///
    /// # Errors
    /// [`ClosedFormError::Argument`] unless all are positive and `inner < outer`.
    pub fn new(inner: f64, outer: f64, resistivity: f64, mu_r: f64, frequency: f64) -> Result<Self, ClosedFormError> {
        positive(PLACE, "inner", inner, "m")?;
        within(PLACE, "outer", outer, "m", outer > inner, "greater than the inner radius")?;
        let delta = skin_depth(resistivity, mu_r, frequency)?;
        let kappa = Complex64::new(1.0, 1.0) / delta;
        let (xi, xo) = (kappa * inner, kappa * outer);
        let z = resistivity * kappa;
        let bore = Complex64::new(0.0, PI * frequency * MU0 * inner);
        // u = I0(kappa r) e^{-Re xi}, v = K0(kappa r) e^{xi}; the field is c (u b + v a).
        let a = z * i_scaled(PLACE, 1.0, xi)? - bore * i_scaled(PLACE, 0.0, xi)?;
        let b = z * k_scaled(PLACE, 1.0, xi)? + bore * k_scaled(PLACE, 0.0, xi)?;
        let decay_v = (-(xo - xi)).exp();
        let decay_u = (-(xo.re - xi.re)).exp();
        // Everything at the outer wall is divided by e^{Re(xo - xi)}.
        let at_outer = |n: f64| -> Result<(Complex64, Complex64), ClosedFormError> {
            Ok((i_scaled(PLACE, n, xo)? * b, k_scaled(PLACE, n, xo)? * a * decay_v * decay_u))
        };
        let (u0, v0) = at_outer(0.0)?;
        let (u1, v1) = at_outer(1.0)?;
        let field_outer = u0 + v0;
        let field_inner = i_scaled(PLACE, 0.0, xi)? * b + k_scaled(PLACE, 0.0, xi)? * a;
        Ok(Self { outer, impedance: z * (u1 - v1) / field_outer, bore: field_inner * decay_u / field_outer })
    }

    /// Surface impedance at the outer wall `-E_phi/H_z`, ohm.
    pub fn surface_impedance(&self) -> Complex64 {
        self.impedance
    }

    /// Field in the bore over the applied field, no unit.
    pub fn bore_field_ratio(&self) -> Complex64 {
        self.bore
    }

    /// Power per length, W/m, in a peak field `h0_peak` (A/m).
    pub fn power_per_length(&self, h0_peak: f64) -> f64 {
        PI * self.outer * self.impedance.re * h0_peak * h0_peak
    }
}
