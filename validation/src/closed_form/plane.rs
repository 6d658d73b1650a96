//! Slab with the same tangential alternating field on both faces.
//!
//! Convention: SI, peak phasors; `u = t/delta` with `t` the full thickness.
//! Source: one-dimensional diffusion equation; `F = 2 (sinh u - sin u)/(cosh u + cos u)`.

use super::constants::skin_depth;
use super::error::{ClosedFormError, positive};

/// Up to this `u` the difference `sinh u - sin u` is summed as a series.
const SERIES_UP_TO: f64 = 0.5;

/// Loss factor `F(t/delta)` of a slab, no unit; 2 for two independent faces.
///
/// # Errors
/// [`ClosedFormError::Argument`] unless the argument is positive.
pub fn slab_factor(t_over_delta: f64) -> Result<f64, ClosedFormError> {
    positive("plane::slab_factor", "t_over_delta", t_over_delta, "(no unit)")?;
    let u = t_over_delta;
    if u <= SERIES_UP_TO {
        // sinh u - sin u = 2 (u^3/3! + u^7/7! + ...)
        let u4 = u.powi(4);
        let difference = u.powi(3) / 3.0 * (1.0 + u4 / 840.0 * (1.0 + u4 / 7920.0));
        return Ok(2.0 * difference / (u.cosh() + u.cos()));
    }
    // Numerator and denominator times 2 e^{-u}, so that thick slabs do not overflow.
    let e = (-u).exp();
    Ok(2.0 * (1.0 - e * e - 2.0 * e * u.sin()) / (1.0 + e * e + 2.0 * e * u.cos()))
}

/// Power of a slab per area, W/m^2, both faces together: `(rho/delta) (h0_peak^2/2) F`.
///
/// `thickness` in m, `resistivity` in ohm m, `frequency` in Hz, `h0_peak` in A/m.
///
/// # Errors
/// [`ClosedFormError::Argument`] unless thickness and material are positive.
pub fn slab_power_per_area(
    thickness: f64,
    resistivity: f64,
    mu_r: f64,
    frequency: f64,
    h0_peak: f64,
) -> Result<f64, ClosedFormError> {
    let delta = skin_depth(resistivity, mu_r, frequency)?;
    Ok(resistivity / delta * 0.5 * h0_peak * h0_peak * slab_factor(thickness / delta)?)
}
