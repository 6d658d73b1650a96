//! Inductances of coils in air with the current spread evenly: a thin ring, a rectangular winding, a long solenoid.
//!
//! Tolerance 0.1 %. The ring's formula neglects terms of order `(a/R)^2 ln(R/a)`, here 5e-5; the solenoid is a stack of
//! touching thin turns, so that the current sheet's value holds but for its thickness, here 1 % of the radius; its
//! reference is the winding of finite thickness, and the current sheet is held to 1 %.

use mesher::Outline;
use solver::model::{ConductorKind, Mirrors, Model};
use solver::observe::Silent;

use crate::check::{CaseError, Check};
use crate::closed_form::coil::Coil;
use crate::closed_form::loops::{WireCurrent, mutual_inductance, ring_inductance};
use crate::models;

const FREQUENCY_HZ: f64 = 50.0;
const COPPER_OHM_M: f64 = 1.7e-8;
const STRANDED: ConductorKind = ConductorKind::Stranded { fill: 0.8 };

/// Inductance at the terminals, henries.
///
/// # Errors
/// Whatever the solver refuses.
pub fn inductance_h(model: &Model) -> Result<f64, CaseError> {
    let results = solver::run(model, &Silent)?;
    let state = results.states.first().ok_or(CaseError::Missing("state"))?;
    Ok(state.electrical.terminals.ok_or(CaseError::Missing("terminals"))?.inductance_h)
}

fn winding(outlines: Vec<Outline>, conductor: ConductorKind) -> Result<Model, CaseError> {
    let coil = models::coil(outlines, models::material(COPPER_OHM_M, 1.0)?, conductor);
    Ok(models::with_coil(vec![], vec![coil], FREQUENCY_HZ, Mirrors::None))
}

fn ring() -> Result<Check, CaseError> {
    let (radius, wire) = (0.1, 0.001);
    let model = winding(vec![Outline::circle([radius, 0.0], wire)?], STRANDED)?;
    Ok(Check {
        case: "coil in air",
        quantity: "inductance of a ring of round wire, uniform current, H".to_owned(),
        computed: inductance_h(&model)?,
        reference: ring_inductance(radius, wire, WireCurrent::Uniform)?,
        tolerance: 1e-3,
        source: "E. B. Rosa, F. W. Grover, NBS Bulletin 8(1), 1912 (from memory)",
    })
}

fn rectangular() -> Result<Check, CaseError> {
    let outline = Outline::rectangle([0.03, -0.01], [0.05, 0.01])?;
    let form = Coil { inner: 0.03, outer: 0.05, length: 0.02, turns: 1.0 };
    Ok(Check {
        case: "coil in air",
        quantity: "inductance of a winding of rectangular section, H".to_owned(),
        computed: inductance_h(&winding(vec![outline], STRANDED)?)?,
        reference: form.air_inductance()?,
        tolerance: 1e-3,
        source: "C. V. Dodd, W. E. Deeds, J. Appl. Phys. 39(6), 1968, 2829-2838, air term",
    })
}

fn solenoid() -> Result<Check, CaseError> {
    let (turns, length, inner, outer) = (20_usize, 0.2, 0.02, 0.0204);
    let pitch = length / turns as f64;
    let outlines: Result<Vec<_>, _> = (0..turns)
        .map(|k| {
            let z = -0.5 * length + pitch * k as f64;
            Outline::rectangle([inner, z], [outer, z + pitch])
        })
        .collect();
    let form = Coil { inner, outer, length, turns: turns as f64 };
    Ok(Check {
        case: "coil in air",
        quantity: "inductance of 20 turns in series, H".to_owned(),
        computed: inductance_h(&winding(outlines?, STRANDED)?)?,
        reference: form.air_inductance()?,
        tolerance: 1e-3,
        source: "C. V. Dodd, W. E. Deeds, J. Appl. Phys. 39(6), 1968, 2829-2838, air term",
    })
}

/// Two rings in series: the inductance beyond their own is twice the mutual inductance of the loops.
fn pair() -> Result<Check, CaseError> {
    let (a, b, distance, wire) = (0.1, 0.08, 0.03, 0.001);
    let rings = vec![Outline::circle([a, 0.0], wire)?, Outline::circle([b, distance], wire)?];
    let both = inductance_h(&winding(rings.clone(), STRANDED)?)?;
    let mut alone = 0.0;
    for ring in rings {
        alone += inductance_h(&winding(vec![ring], STRANDED)?)?;
    }
    Ok(Check {
        case: "coil in air",
        quantity: "mutual inductance of two coaxial rings, H".to_owned(),
        computed: 0.5 * (both - alone),
        reference: mutual_inductance(a, b, distance)?,
        tolerance: 1e-3,
        source: "J. C. Maxwell's formula in elliptic integrals; E. B. Rosa, F. W. Grover, NBS Bulletin 8(1), 1912",
    })
}

pub(super) fn run() -> Result<Vec<Check>, CaseError> {
    Ok(vec![ring()?, rectangular()?, solenoid()?, pair()?])
}
