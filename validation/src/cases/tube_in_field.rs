//! A long tube in a uniform axial field, its bore full of air: absorbed power per length against the Bessel solution.
//!
//! A slice between two mirror planes stands for the endless tube. Tolerance 0.1 %, from walls of a third of the skin
//! depth, through which the field passes, to walls of ten, which screen the bore.

use mesher::Outline;
use solver::model::{Mirrors, Model};

use super::cylinder_in_field::power_w;
use crate::check::{CaseError, Check};
use crate::closed_form::tube::AxialTube;
use crate::models;

const OUTER_M: f64 = 0.03;
const LENGTH_M: f64 = 0.02;
const FREQUENCY_HZ: f64 = 1000.0;
const FIELD_A_PER_M_RMS: f64 = 1e4;

/// Wall in metres, wall over skin depth, relative permeability.
const TUBES: [(f64, f64, f64); 6] =
    [(0.01, 0.3, 1.0), (0.01, 1.0, 1.0), (0.01, 3.0, 1.0), (0.01, 10.0, 1.0), (0.002, 0.5, 1.0), (0.008, 3.0, 20.0)];

fn model(wall: f64, resistivity: f64, relative_permeability: f64) -> Result<Model, CaseError> {
    let outline = Outline::rectangle([OUTER_M - wall, 0.0], [OUTER_M, LENGTH_M])?;
    let tube = models::part("tube", outline, models::material(resistivity, relative_permeability)?);
    let mirrors = Mirrors::Two { lower_m: 0.0, upper_m: LENGTH_M };
    Ok(models::in_field(vec![tube], FREQUENCY_HZ, FIELD_A_PER_M_RMS, mirrors))
}

pub(super) fn run() -> Result<Vec<Check>, CaseError> {
    let mut checks = Vec::new();
    for (wall, ratio, mu) in TUBES {
        let resistivity = models::resistivity_for(wall / ratio, FREQUENCY_HZ, mu);
        let peak = FIELD_A_PER_M_RMS * std::f64::consts::SQRT_2;
        let form = AxialTube::new(OUTER_M - wall, OUTER_M, resistivity, mu, FREQUENCY_HZ)?;
        checks.push(Check {
            case: "tube in axial field",
            quantity: format!("power, wall {:.0} mm, wall/delta = {ratio}, mu_r = {mu}, W", 1e3 * wall),
            computed: power_w(&model(wall, resistivity, mu)?)?,
            reference: LENGTH_M * form.power_per_length(peak),
            tolerance: 1e-3,
            source: "Bessel solution of the endless tube (W. R. Smythe, Static and Dynamic Electricity, chapter X; from memory)",
        });
    }
    Ok(checks)
}
