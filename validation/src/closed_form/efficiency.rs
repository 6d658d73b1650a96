//! Upper bound of the electrical efficiency of a long coil round a long workpiece, both strongly skinned.
//!
//! Convention: no units but ohm m.
//! Source: plane-skin limit, after J. Davies and V. Rudnev (from memory). A real coil with gaps and ends comes out lower.

use super::error::{ClosedFormError, positive};

const PLACE: &str = "efficiency::long_coil_bound";

/// Efficiency `1/(1 + (Dc/Dw) sqrt(rho_c/(mu_r rho_w)))`, no unit.
///
/// `coil_over_work` is the ratio of the diameters, resistivities in ohm m, `mu_r` that of the workpiece.
///
/// # Errors
/// [`ClosedFormError::Argument`] unless all are positive.
pub fn long_coil_bound(
    coil_over_work: f64,
    coil_resistivity: f64,
    work_resistivity: f64,
    mu_r: f64,
) -> Result<f64, ClosedFormError> {
    positive(PLACE, "coil_over_work", coil_over_work, "(no unit)")?;
    positive(PLACE, "coil_resistivity", coil_resistivity, "ohm m")?;
    positive(PLACE, "work_resistivity", work_resistivity, "ohm m")?;
    positive(PLACE, "mu_r", mu_r, "(no unit)")?;
    Ok(1.0 / (1.0 + coil_over_work * (coil_resistivity / (mu_r * work_resistivity)).sqrt()))
}
