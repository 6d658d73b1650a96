//! Internal impedance of a round wire carrying an alternating current (skin effect).
//!
//! Convention: `e^{+jwt}`; ratios to the direct-current resistance `rho/(pi a^2)` and internal inductance `mu/(8 pi)`
//! per length.
//! Source: Kelvin's solution as tabulated by E. B. Rosa and F. W. Grover, NBS Bulletin 8(1), 1912, and NBS Circular 74.

use super::bessel::j_scaled;
use super::error::{ClosedFormError, positive};
use num_complex::Complex64;

const PLACE: &str = "wire::internal_impedance_ratios";

/// Skin-effect ratios of a round wire, no unit.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct WireRatios {
    /// `R/R0`.
    pub resistance: f64,
    /// `L/L0`, internal inductance only.
    pub inductance: f64,
}

/// Ratios `R/R0 + j (w L0/R0) L/L0 = (ka/2) J0(ka)/J1(ka)`, no unit, for `a/delta = radius_over_delta`.
///
/// The tables' argument is `x = sqrt(2) a/delta`.
///
/// # Errors
/// [`ClosedFormError::Argument`] unless the argument is positive.
pub fn internal_impedance_ratios(radius_over_delta: f64) -> Result<WireRatios, ClosedFormError> {
    positive(PLACE, "radius_over_delta", radius_over_delta, "(no unit)")?;
    let z = Complex64::new(1.0, -1.0) * radius_over_delta;
    let ratio = 0.5 * z * j_scaled(PLACE, 0.0, z)? / j_scaled(PLACE, 1.0, z)?;
    let uniform_reactance = 0.25 * radius_over_delta * radius_over_delta;
    Ok(WireRatios { resistance: ratio.re, inductance: ratio.im / uniform_reactance })
}
