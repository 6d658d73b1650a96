//! A ring of solid round wire, thin against its radius: skin effect at its terminals against Kelvin's solution.
//!
//! Tolerance 0.1 %. The ring is 1000 wire radii wide: its own curvature puts a transverse field of
//! `(a/2R) ln(8R/a)` = 4.5e-3 of the wire's own on it, which adds about twice the square of that to the loss, 4e-5.
//! The inductance is the sum of the outer part of a ring and the internal one of its wire.

use mesher::Outline;
use solver::model::{ConductorKind, Mirrors};
use std::f64::consts::SQRT_2;

use super::terminals;
use crate::check::{CaseError, Check};
use crate::closed_form::MU0;
use crate::closed_form::loops::{WireCurrent, ring_inductance};
use crate::closed_form::wire::internal_impedance_ratios;
use crate::models;

const WIRE_M: f64 = 0.001;
const RING_M: f64 = 1.0;
const FREQUENCY_HZ: f64 = 1000.0;

pub(super) fn run() -> Result<Vec<Check>, CaseError> {
    let mut checks = Vec::new();
    for x in [1.0, 2.0, 5.0, 10.0, 20.0] {
        let resistivity = models::resistivity_for(SQRT_2 * WIRE_M / x, FREQUENCY_HZ, 1.0);
        let outline = Outline::circle([RING_M, 0.0], WIRE_M)?;
        let coil = models::coil(vec![outline], models::material(resistivity, 1.0)?, ConductorKind::Solid);
        let seen = terminals(&models::with_coil(vec![], vec![coil], FREQUENCY_HZ, Mirrors::None))?;
        let direct = 2.0 * RING_M * resistivity / (WIRE_M * WIRE_M);
        let ratios = internal_impedance_ratios(x / SQRT_2)?;
        checks.push(Check {
            case: "ring of solid round wire",
            quantity: format!("R/R0 at x = {x}"),
            computed: seen.resistance_ohm / direct,
            reference: ratios.resistance,
            tolerance: 1e-3,
            source: "E. B. Rosa, F. W. Grover, NBS Bulletin 8(1), 1912, Kelvin functions",
        });
        let external = ring_inductance(RING_M, WIRE_M, WireCurrent::SurfaceOnly)?;
        checks.push(Check {
            case: "ring of solid round wire",
            quantity: format!("inductance at x = {x}, H"),
            computed: seen.inductance_h,
            reference: external + 0.25 * MU0 * RING_M * ratios.inductance,
            tolerance: 1e-3,
            source: "E. B. Rosa, F. W. Grover, NBS Bulletin 8(1), 1912, outer part and Kelvin functions (from memory)",
        });
    }
    Ok(checks)
}
