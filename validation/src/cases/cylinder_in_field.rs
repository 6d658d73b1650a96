//! A long solid cylinder in a uniform axial field: absorbed power per length against the Bessel solution.
//!
//! A slice between two mirror planes stands for the endless cylinder, so nothing but the mesh is in the error. Power
//! within 0.1 % on the default mesh from `R/delta = 0.5`, where it grows as its fourth power, to 50, where it sits in
//! one fiftieth of the radius.

use mesher::Outline;
use solver::model::{Mirrors, Model};
use solver::observe::Silent;

use crate::check::{CaseError, Check};
use crate::closed_form::cylinder::AxialCylinder;
use crate::models;

const RADIUS_M: f64 = 0.03;
const LENGTH_M: f64 = 0.02;
const FREQUENCY_HZ: f64 = 1000.0;
const FIELD_A_PER_M_RMS: f64 = 1e4;

/// The slice of a cylinder with `R/delta = ratio`.
///
/// # Errors
/// Values the library refuses.
pub fn model(ratio: f64, relative_permeability: f64) -> Result<Model, CaseError> {
    let resistivity = models::resistivity_for(RADIUS_M / ratio, FREQUENCY_HZ, relative_permeability);
    let outline = Outline::rectangle([0.0, 0.0], [RADIUS_M, LENGTH_M])?;
    let material = models::material(resistivity, relative_permeability)?;
    let mirrors = Mirrors::Two { lower_m: 0.0, upper_m: LENGTH_M };
    Ok(models::in_field(vec![models::part("bar", outline, material)], FREQUENCY_HZ, FIELD_A_PER_M_RMS, mirrors))
}

/// Power of the slice in watts by the closed form.
///
/// # Errors
/// Arguments the closed form refuses.
pub fn reference_w(ratio: f64, relative_permeability: f64) -> Result<f64, CaseError> {
    let resistivity = models::resistivity_for(RADIUS_M / ratio, FREQUENCY_HZ, relative_permeability);
    let peak = FIELD_A_PER_M_RMS * std::f64::consts::SQRT_2;
    let bar = AxialCylinder::new(RADIUS_M, resistivity, relative_permeability, FREQUENCY_HZ)?;
    Ok(LENGTH_M * bar.power_per_length(peak))
}

/// Solves the model and returns the power of its first part, watts.
///
/// # Errors
/// Whatever the solver refuses.
pub fn power_w(model: &Model) -> Result<f64, CaseError> {
    let results = solver::run(model, &Silent)?;
    let state = results.states.first().ok_or(CaseError::Missing("state"))?;
    Ok(state.electrical.parts.first().ok_or(CaseError::Missing("part"))?.joule_loss_w)
}

pub(super) fn run() -> Result<Vec<Check>, CaseError> {
    let mut checks = Vec::new();
    for (ratio, mu) in [(0.5, 1.0), (2.0, 1.0), (10.0, 1.0), (50.0, 1.0), (10.0, 50.0)] {
        checks.push(Check {
            case: "cylinder in axial field",
            quantity: format!("power at R/delta = {ratio}, mu_r = {mu}, W"),
            computed: power_w(&model(ratio, mu)?)?,
            reference: reference_w(ratio, mu)?,
            tolerance: 1e-3,
            source: "Bessel solution of the endless cylinder (W. R. Smythe, Static and Dynamic Electricity, chapter X; from memory)",
        });
    }
    Ok(checks)
}
