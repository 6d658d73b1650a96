//! A sphere in a uniform field: absorbed power against the closed form, with the open boundary close round it.
//!
//! Tolerance 0.2 %: curved second-order elements follow the sphere, so the mesh is all that is in the error.

use mesher::Outline;
use solver::model::{Mirrors, Model};

use super::cylinder_in_field::power_w;
use crate::check::{CaseError, Check};
use crate::closed_form::MU0;
use crate::closed_form::sphere::UniformFieldSphere;
use crate::models;

const RADIUS_M: f64 = 0.025;
const FREQUENCY_HZ: f64 = 2000.0;
const FIELD_A_PER_M_RMS: f64 = 5e3;

/// A sphere with `R/delta = ratio`.
///
/// # Errors
/// Values the library refuses.
pub fn model(ratio: f64, relative_permeability: f64, mirrors: Mirrors) -> Result<Model, CaseError> {
    let resistivity = models::resistivity_for(RADIUS_M / ratio, FREQUENCY_HZ, relative_permeability);
    let outline = Outline::circle([0.0, 0.0], RADIUS_M)?;
    let ball = models::part("ball", outline, models::material(resistivity, relative_permeability)?);
    Ok(models::in_field(vec![ball], FREQUENCY_HZ, FIELD_A_PER_M_RMS, mirrors))
}

pub(super) fn run() -> Result<Vec<Check>, CaseError> {
    let mut checks = Vec::new();
    let whole = Mirrors::None;
    let half = Mirrors::One { z_m: 0.0 };
    for (ratio, mu, mirrors, how) in [
        (1.0, 1.0, whole, "whole"),
        (8.0, 1.0, whole, "whole"),
        (8.0, 1.0, half, "mirrored"),
        (8.0, 50.0, whole, "whole"),
    ] {
        let resistivity = models::resistivity_for(RADIUS_M / ratio, FREQUENCY_HZ, mu);
        let peak_t = MU0 * FIELD_A_PER_M_RMS * std::f64::consts::SQRT_2;
        checks.push(Check {
            case: "sphere in uniform field",
            quantity: format!("power at R/delta = {ratio}, mu_r = {mu}, {how}, W"),
            computed: power_w(&model(ratio, mu, mirrors)?)?,
            reference: UniformFieldSphere::new(RADIUS_M, resistivity, mu, FREQUENCY_HZ)?.power(peak_t),
            tolerance: 2e-3,
            source: "W. R. Smythe, Static and Dynamic Electricity, chapter X (from memory)",
        });
    }
    Ok(checks)
}
