//! A stranded coil above a plate: change of resistance and inductance against Dodd and Deeds.
//!
//! The form's plate is endless; here it is a disc of eight times the coil's radius, in an open space. Tolerance 0.5 %:
//! the change is a difference of two solves, and the edge of the disc is in it.

use mesher::Outline;
use solver::model::{ConductorKind, Mirrors, Part};
use std::f64::consts::PI;

use super::terminals;
use crate::check::{CaseError, Check};
use crate::closed_form::coil::{Coil, FlatConductor};
use crate::models;

const FORM: Coil = Coil { inner: 0.008, outer: 0.016, length: 0.008, turns: 1.0 };
const LIFT_M: f64 = 0.002;
const DISC_M: f64 = 0.128;
const FREQUENCY_HZ: f64 = 5000.0;
const COPPER_OHM_M: f64 = 1.7e-8;

/// Resistance in ohms and inductance in henries.
fn seen(parts: Vec<Part>) -> Result<(f64, f64), CaseError> {
    let window = Outline::rectangle([FORM.inner, LIFT_M], [FORM.outer, LIFT_M + FORM.length])?;
    let copper = models::material(COPPER_OHM_M, 1.0)?;
    let coil = models::coil(vec![window], copper, ConductorKind::Stranded { fill: 0.8 });
    let t = terminals(&models::with_coil(parts, vec![coil], FREQUENCY_HZ, Mirrors::None))?;
    Ok((t.resistance_ohm, t.inductance_h))
}

pub(super) fn run() -> Result<Vec<Check>, CaseError> {
    let mut checks = Vec::new();
    let (r0, l0) = seen(vec![])?;
    // Skin depth and thickness in metres, relative permeability.
    for (depth, thickness, mu) in [(0.003, 0.02, 1.0), (0.003, 0.003, 1.0), (0.001, 0.01, 50.0)] {
        let resistivity = models::resistivity_for(depth, FREQUENCY_HZ, mu);
        let outline = Outline::rectangle([0.0, -thickness], [DISC_M, 0.0])?;
        let (r, l) = seen(vec![models::part("plate", outline, models::material(resistivity, mu)?)])?;
        let plate = FlatConductor { resistivity, mu_r: mu, thickness: Some(thickness) };
        let z = FORM.impedance_change(&plate, LIFT_M, FREQUENCY_HZ)?;
        for (name, computed, reference) in
            [("resistance, ohm", r - r0, z.re), ("inductance, H", l - l0, z.im / (2.0 * PI * FREQUENCY_HZ))]
        {
            checks.push(Check {
                case: "coil above a plate",
                quantity: format!("change of {name}; thickness/delta = {:.0}, mu_r = {mu}", thickness / depth),
                computed,
                reference,
                tolerance: 5e-3,
                source: "C. V. Dodd, W. E. Deeds, J. Appl. Phys. 39(6), 1968, 2829-2838, coil above a conductor",
            });
        }
    }
    Ok(checks)
}
