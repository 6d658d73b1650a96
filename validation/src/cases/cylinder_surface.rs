//! What is told of a long cylinder's surface in a uniform axial field: field, power density, loss density, skin depth.
//!
//! The field at the surface is the applied one. Tolerance 0.1 % for the power per surface, and 1 % for field and loss
//! density, which are derivatives at points or squares of them: the elements at the surface are a third of the skin depth.

use std::f64::consts::{PI, SQRT_2};

use super::cylinder_in_field::{model, reference_w};
use super::first_state;
use crate::check::{CaseError, Check};
use crate::closed_form::cylinder::AxialCylinder;
use crate::models;

const RADIUS_M: f64 = 0.03;
const LENGTH_M: f64 = 0.02;
const FREQUENCY_HZ: f64 = 1000.0;
const FIELD_A_PER_M_RMS: f64 = 1e4;

pub(super) fn run() -> Result<Vec<Check>, CaseError> {
    let mut checks = Vec::new();
    for (ratio, mu) in [(2.0, 1.0), (10.0, 1.0), (10.0, 50.0)] {
        let electrical = first_state(&model(ratio, mu)?)?;
        let part = electrical.parts.first().ok_or(CaseError::Missing("part"))?;
        let depth = RADIUS_M / ratio;
        let bar = AxialCylinder::new(RADIUS_M, models::resistivity_for(depth, FREQUENCY_HZ, mu), mu, FREQUENCY_HZ)?;
        let surface = 2.0 * PI * RADIUS_M * LENGTH_M;
        let loss = bar.loss_density(RADIUS_M, FIELD_A_PER_M_RMS * SQRT_2)?;
        for (name, computed, reference, tolerance) in [
            ("field at the surface, A/m rms", part.largest_field_a_per_m_rms, FIELD_A_PER_M_RMS, 1e-2),
            (
                "mean power per surface, W/m^2",
                part.mean_surface_power_density_w_per_m2,
                reference_w(ratio, mu)? / surface,
                1e-3,
            ),
            ("largest loss density, W/m^3", part.largest_loss_w_per_m3, loss, 1e-2),
            ("skin depth, m", part.least_skin_depth_m, depth, 1e-9),
        ] {
            checks.push(Check {
                case: "surface of a cylinder in axial field",
                quantity: format!("{name}; R/delta = {ratio}, mu_r = {mu}"),
                computed,
                reference,
                tolerance,
                source: "Bessel solution of the endless cylinder (W. R. Smythe, Static and Dynamic Electricity, chapter X; from memory)",
            });
        }
    }
    Ok(checks)
}
