//! Physical constants and the skin depth.
//!
//! Convention: SI.
//! Source: `mu0` as defined in the SI until 2019, the value published tables of inductance and skin effect use (the
//! CODATA 2018 value differs by 5.5e-10 relative); the Stefan-Boltzmann constant from CODATA 2018.

use super::error::{ClosedFormError, positive};
use std::f64::consts::PI;

/// Permeability of vacuum `mu0`, H/m: exactly `4 pi 1e-7`, the value behind the published tables.
pub const MU0: f64 = 4e-7 * PI;

/// Stefan-Boltzmann constant, W/(m^2 K^4). Source: CODATA 2018.
pub const STEFAN_BOLTZMANN: f64 = 5.670374419e-8;

/// Skin depth `delta = sqrt(rho / (pi f mu0 mu_r))`, m, for a resistivity in ohm m and a frequency in Hz.
///
/// # Errors
/// [`ClosedFormError::Argument`] unless all three are positive and finite.
pub fn skin_depth(resistivity: f64, mu_r: f64, frequency: f64) -> Result<f64, ClosedFormError> {
    const PLACE: &str = "skin_depth";
    positive(PLACE, "resistivity", resistivity, "ohm m")?;
    positive(PLACE, "mu_r", mu_r, "(no unit)")?;
    positive(PLACE, "frequency", frequency, "Hz")?;
    Ok((resistivity / (PI * frequency * MU0 * mu_r)).sqrt())
}
