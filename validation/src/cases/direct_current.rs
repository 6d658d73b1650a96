//! Limits of low frequency: resistance of a solid turn, and the energy a coil in air stores.
//!
//! At 0.1 Hz the current of a ring spreads as `1/r`, so `R = 2 pi rho/(h ln(r2/r1))`; what skin effect adds is of order
//! `(section/delta)^4`, here 1e-8. The mean energy of a current is `L I^2/2` with its rms value. Tolerance 0.01 % for the
//! resistance, where nothing but the quadrature is in the error, and 0.1 % for the energy, as for inductances.

use mesher::Outline;
use solver::model::{ConductorKind, Mirrors, Model};
use std::f64::consts::PI;

use super::first_state;
use crate::check::{CaseError, Check};
use crate::closed_form::coil::Coil;
use crate::models;

const FORM: Coil = Coil { inner: 0.03, outer: 0.06, length: 0.02, turns: 1.0 };
const FREQUENCY_HZ: f64 = 0.1;
const COPPER_OHM_M: f64 = 1.7e-8;

fn model(kind: ConductorKind) -> Result<Model, CaseError> {
    let half = 0.5 * FORM.length;
    let outline = Outline::rectangle([FORM.inner, -half], [FORM.outer, half])?;
    let coil = models::coil(vec![outline], models::material(COPPER_OHM_M, 1.0)?, kind);
    Ok(models::with_coil(vec![], vec![coil], FREQUENCY_HZ, Mirrors::None))
}

pub(super) fn run() -> Result<Vec<Check>, CaseError> {
    let solid = first_state(&model(ConductorKind::Solid)?)?.terminals.ok_or(CaseError::Missing("terminals"))?;
    let stranded = first_state(&model(ConductorKind::Stranded { fill: 0.8 })?)?;
    let seen = stranded.terminals.ok_or(CaseError::Missing("terminals"))?;
    let mean_length = PI * (FORM.inner + FORM.outer);
    let section = (FORM.outer - FORM.inner) * FORM.length;
    let ohm = "Ohm's law in a ring";
    Ok(vec![
        Check {
            case: "limits of low frequency",
            quantity: "resistance of a solid turn of rectangular section, ohm".to_owned(),
            computed: solid.resistance_ohm,
            reference: 2.0 * PI * COPPER_OHM_M / (FORM.length * (FORM.outer / FORM.inner).ln()),
            tolerance: 1e-4,
            source: ohm,
        },
        Check {
            case: "limits of low frequency",
            quantity: "resistance of a stranded turn of fill 0.8, ohm".to_owned(),
            computed: seen.resistance_ohm,
            reference: COPPER_OHM_M * mean_length / (0.8 * section),
            tolerance: 1e-4,
            source: ohm,
        },
        Check {
            case: "limits of low frequency",
            quantity: "mean energy stored by 1 A rms in a stranded winding, J".to_owned(),
            computed: stranded.stored_energy_j,
            reference: 0.5 * FORM.air_inductance()?,
            tolerance: 1e-3,
            source: "C. V. Dodd, W. E. Deeds, J. Appl. Phys. 39(6), 1968, 2829-2838, air term",
        },
    ])
}
