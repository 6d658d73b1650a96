//! A sphere of high permeability that does not conduct, in a uniform field: the flux density inside is uniform,
//! `B = 3 mu_r/(mu_r + 2) B0`.
//!
//! Read from the flux-density map at every node inside. Tolerance 0.1 % for the mean, and 0.5 % at the worst node: a
//! derivative at a point is of one order less than the potential, and the field outside changes within the radius.

use mesher::Outline;
use solver::model::Mirrors;
use solver::observe::Silent;
use solver::results::{RegionName, Results};

use crate::check::{CaseError, Check};
use crate::closed_form::MU0;
use crate::models;

const RADIUS_M: f64 = 0.025;
const FREQUENCY_HZ: f64 = 50.0;
const FIELD_A_PER_M_RMS: f64 = 5e3;

/// Mean, smallest and largest `Re B_z`, and largest `|B|`, over the nodes of the first part, tesla peak.
fn nodal(results: &Results) -> Result<[f64; 4], CaseError> {
    let snapshot = results.snapshots.first().ok_or(CaseError::Missing("snapshot"))?;
    let (field, factor) = (&snapshot.field, snapshot.field_factor);
    let section = &results.section;
    let locals = field.flux_density_t.len() / section.mesh.triangles().len();
    let mut out = [0.0, f64::INFINITY, f64::NEG_INFINITY, 0.0_f64];
    let mut count = 0.0;
    for (values, region) in field.flux_density_t.chunks(locals).zip(section.mesh.regions()) {
        if !matches!(section.regions.get(region.0 as usize), Some(RegionName::Part(0, _))) {
            continue;
        }
        for [br, bz] in values {
            count += 1.0;
            out[0] += factor * bz.re;
            out[1] = out[1].min(factor * bz.re);
            out[2] = out[2].max(factor * bz.re);
            out[3] = out[3].max(factor * br.norm().hypot(bz.norm()));
        }
    }
    out[0] /= count;
    Ok(out)
}

pub(super) fn run() -> Result<Vec<Check>, CaseError> {
    let mut checks = Vec::new();
    let nearly = models::resistivity_for(100.0 * RADIUS_M, FREQUENCY_HZ, 1000.0);
    for (mu, resistivity, mirrors) in [
        (1000.0, nearly, Mirrors::None),
        (1000.0, f64::INFINITY, Mirrors::One { z_m: 0.0 }),
        (5.0, f64::INFINITY, Mirrors::None),
    ] {
        let ball = models::part("ball", Outline::circle([0.0, 0.0], RADIUS_M)?, models::material(resistivity, mu)?);
        let model = models::in_field(vec![ball], FREQUENCY_HZ, FIELD_A_PER_M_RMS, mirrors);
        let found = nodal(&solver::run(&model, &Silent)?)?;
        let how = if mirrors == Mirrors::None { "whole" } else { "mirrored" };
        let names = [("mean B_z", 1e-3), ("smallest B_z", 5e-3), ("largest B_z", 5e-3), ("largest |B|", 5e-3)];
        for ((name, tolerance), computed) in names.into_iter().zip(found) {
            checks.push(Check {
                case: "permeable sphere",
                quantity: format!("{name} inside, mu_r = {mu}, {how}, T"),
                computed,
                reference: 3.0 * mu / (mu + 2.0) * MU0 * FIELD_A_PER_M_RMS * std::f64::consts::SQRT_2,
                tolerance,
                source: "J. D. Jackson, Classical Electrodynamics, section 5.11 (from memory)",
            });
        }
    }
    Ok(checks)
}
