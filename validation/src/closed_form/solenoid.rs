//! Solenoid as a current sheet: Nagaoka's factor, inductance and field on the axis.
//!
//! Convention: SI; `u` = diameter over length.
//! Source: H. Nagaoka, J. Coll. Sci. Tokyo 27 (1909), in Lorenz' closed form
//! `K = 4/(3 pi k') [(k'^2/k^2)(K - E) + E - k]`, `k^2 = u^2/(1 + u^2)`.

use super::constants::MU0;
use super::error::{ClosedFormError, finite, positive, within};
use ellip::{elliprd, elliprf};
use std::f64::consts::PI;

const PLACE: &str = "solenoid::nagaoka_factor";

/// Nagaoka's factor, no unit, for `diameter_over_length` up to 1000 (beyond, the closed form loses digits).
///
/// # Errors
/// [`ClosedFormError::Argument`] outside that range.
pub fn nagaoka_factor(diameter_over_length: f64) -> Result<f64, ClosedFormError> {
    let u = diameter_over_length;
    within(PLACE, "diameter_over_length", u, "(no unit)", u > 0.0 && u <= 1000.0, "above 0 and at most 1000")?;
    let complement = 1.0 / (1.0 + u * u);
    let k = u * complement.sqrt();
    let wrap = |reason| ClosedFormError::Elliptic { place: PLACE, parameter: complement, reason };
    let first = elliprf(0.0, complement, 1.0).map_err(wrap)?;
    // (K - E)/k^2 = R_D(0, k'^2, 1)/3
    let difference = elliprd(0.0, complement, 1.0).map_err(wrap)? / 3.0;
    let second = first - k * k * difference;
    Ok(4.0 / (3.0 * PI * complement.sqrt()) * (complement * difference + second - k))
}

/// Inductance of a current-sheet solenoid, H: `mu0 N^2 pi a^2 K/l`, with `radius` and `length` in m.
///
/// # Errors
/// [`ClosedFormError::Argument`] unless the sizes are positive and `2 radius/length <= 1000`.
pub fn solenoid_inductance(turns: f64, radius: f64, length: f64) -> Result<f64, ClosedFormError> {
    const SOLENOID: &str = "solenoid::solenoid_inductance";
    positive(SOLENOID, "turns", turns, "turns")?;
    positive(SOLENOID, "radius", radius, "m")?;
    positive(SOLENOID, "length", length, "m")?;
    let factor = nagaoka_factor(2.0 * radius / length)?;
    Ok(MU0 * turns * turns * PI * radius * radius / length * factor)
}

/// Flux density on the axis of a current sheet, T, `z` (m) from its centre; `current_per_length` in A/m.
///
/// `B = (mu0 K/2)[(z + l/2)/sqrt(a^2 + (z + l/2)^2) - (z - l/2)/sqrt(a^2 + (z - l/2)^2)]`, from Biot and Savart.
/// A peak current gives a peak field.
///
/// # Errors
/// [`ClosedFormError::Argument`] unless `radius` and `length` (m) are positive.
pub fn sheet_axis_field(current_per_length: f64, radius: f64, length: f64, z: f64) -> Result<f64, ClosedFormError> {
    const SHEET: &str = "solenoid::sheet_axis_field";
    finite(SHEET, "current_per_length", current_per_length, "A/m")?;
    positive(SHEET, "radius", radius, "m")?;
    positive(SHEET, "length", length, "m")?;
    finite(SHEET, "z", z, "m")?;
    let end = |s: f64| s / radius.hypot(s);
    Ok(0.5 * MU0 * current_per_length * (end(z + 0.5 * length) - end(z - 0.5 * length)))
}
