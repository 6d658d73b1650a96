//! Coaxial circular loops and rings: mutual inductance, force, self-inductance of a ring of round wire.
//!
//! Convention: SI; filaments unless a wire radius is given.
//! Source: J. C. Maxwell's second formula, as in E. B. Rosa and F. W. Grover, NBS Bulletin 8(1), 1912, Scientific Paper
//! 169; written with Carlson's `R_D` (DLMF 19.25.1) so that nothing cancels when the loops are far apart.

use super::constants::MU0;
use super::error::{ClosedFormError, finite, positive, within};
use ellip::{ellipe, elliprd};

const PLACE: &str = "loops::coaxial";

/// Quantities that the mutual inductance and its slope share.
struct Pair {
    /// Longest and shortest distance between points of the two loops, m.
    far: f64,
    near: f64,
    /// `k1 = (far - near)/(far + near)` and `1 - k1^2`.
    k1: f64,
    complement: f64,
    /// `R_D(0, 1 - k1^2, 1) = 3 (K - E)/k1^2`.
    rd: f64,
}

fn pair(a: f64, b: f64, distance: f64) -> Result<Pair, ClosedFormError> {
    positive(PLACE, "a", a, "m")?;
    positive(PLACE, "b", b, "m")?;
    finite(PLACE, "distance", distance, "m")?;
    let (far, near) = ((a + b).hypot(distance), (a - b).hypot(distance));
    within(PLACE, "distance", distance, "m", near > 0.0, "such that the loops do not coincide")?;
    let sum = far + near;
    let k1 = 4.0 * a * b / (sum * sum);
    let complement = 4.0 * far * near / (sum * sum);
    let rd = elliprd(0.0, complement, 1.0).map_err(|reason| ClosedFormError::Elliptic {
        place: PLACE,
        parameter: complement,
        reason,
    })?;
    Ok(Pair { far, near, k1, complement, rd })
}

/// Mutual inductance `M`, H, of coaxial loops of radii `a` and `b` (m) in planes `distance` (m) apart.
///
/// `M = 2 mu0 sqrt(ab/k1) (K(k1) - E(k1))`.
///
/// # Errors
/// [`ClosedFormError::Argument`] unless the radii are positive and the loops distinct.
pub fn mutual_inductance(a: f64, b: f64, distance: f64) -> Result<f64, ClosedFormError> {
    let p = pair(a, b, distance)?;
    Ok(2.0 / 3.0 * MU0 * (a * b).sqrt() * p.k1.powf(1.5) * p.rd)
}

/// Slope `dM/d(distance)`, H/m, of the mutual inductance; odd in `distance`.
///
/// # Errors
/// As [`mutual_inductance`].
pub fn mutual_inductance_slope(a: f64, b: f64, distance: f64) -> Result<f64, ClosedFormError> {
    let p = pair(a, b, distance)?;
    let parameter = p.k1 * p.k1;
    let e = ellipe(parameter).map_err(|reason| ClosedFormError::Elliptic { place: PLACE, parameter, reason })?;
    let bracket = e / p.complement - p.rd / 6.0;
    Ok(-4.0 * MU0 * (a * b).sqrt() * p.k1.powf(1.5) * distance / (p.far * p.near) * bracket)
}

/// Axial force, N, on loop `b` standing `distance` (m) above loop `a` with steady currents in A: `F = I_a I_b dM/dz`.
///
/// Negative (attraction) for currents of the same sense. For peak currents in phase the time average is half of it.
///
/// # Errors
/// As [`mutual_inductance`].
pub fn axial_force(a: f64, b: f64, distance: f64, current_a: f64, current_b: f64) -> Result<f64, ClosedFormError> {
    Ok(current_a * current_b * mutual_inductance_slope(a, b, distance)?)
}

/// How the current fills the cross-section of a round wire.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum WireCurrent {
    /// Uniform (direct current): constant 7/4.
    Uniform,
    /// On the surface only (high frequency): constant 2.
    SurfaceOnly,
}

/// Inductance of a ring of round wire, H: `mu0 R (ln(8R/a) - c)`, `c` = 7/4 or 2; neglects terms of order `(a/R)^2`.
///
/// # Errors
/// [`ClosedFormError::Argument`] unless `0 < wire_radius < radius` (m).
pub fn ring_inductance(radius: f64, wire_radius: f64, current: WireCurrent) -> Result<f64, ClosedFormError> {
    const RING: &str = "loops::ring_inductance";
    positive(RING, "wire_radius", wire_radius, "m")?;
    within(RING, "radius", radius, "m", radius > wire_radius, "greater than the wire radius")?;
    let constant = match current {
        WireCurrent::Uniform => 1.75,
        WireCurrent::SurfaceOnly => 2.0,
    };
    Ok(MU0 * radius * ((8.0 * radius / wire_radius).ln() - constant))
}
