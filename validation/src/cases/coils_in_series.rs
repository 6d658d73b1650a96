//! Two coaxial rings as two coils in series, with and against each other, in air: `L = L1 + L2 +- 2M`.
//!
//! Tolerance 0.1 %: the ring's formula neglects terms of order `(a/R)^2 ln(R/a)`, here 1e-4 at most.

use mesher::Outline;
use solver::model::{Coil, ConductorKind, Mirrors};

use super::terminals;
use crate::check::{CaseError, Check};
use crate::closed_form::loops::{WireCurrent, mutual_inductance, ring_inductance};
use crate::models;

const RADII_M: [f64; 2] = [0.1, 0.08];
const DISTANCE_M: f64 = 0.01;
const WIRE_M: f64 = 0.001;
const FREQUENCY_HZ: f64 = 50.0;
const COPPER_OHM_M: f64 = 1.7e-8;

fn ring(name: &str, radius: f64, z: f64, reversed: bool) -> Result<Coil, CaseError> {
    let outline = Outline::circle([radius, z], WIRE_M)?;
    let copper = models::material(COPPER_OHM_M, 1.0)?;
    let coil = models::coil(vec![outline], copper, ConductorKind::Stranded { fill: 1.0 });
    Ok(Coil { name: name.to_owned(), reversed, ..coil })
}

pub(super) fn run() -> Result<Vec<Check>, CaseError> {
    let [a, b] = RADII_M;
    let own = ring_inductance(a, WIRE_M, WireCurrent::Uniform)? + ring_inductance(b, WIRE_M, WireCurrent::Uniform)?;
    let mutual = mutual_inductance(a, b, DISTANCE_M)?;
    let mut checks = Vec::new();
    for (reversed, sign, how) in [(false, 1.0, "with"), (true, -1.0, "against")] {
        let coils = vec![ring("lower", a, 0.0, false)?, ring("upper", b, DISTANCE_M, reversed)?];
        let seen = terminals(&models::with_coil(vec![], coils, FREQUENCY_HZ, Mirrors::None))?;
        checks.push(Check {
            case: "two coils in series",
            quantity: format!("inductance, one {how} the other, H"),
            computed: seen.inductance_h,
            reference: own + 2.0 * sign * mutual,
            tolerance: 1e-3,
            source: "J. C. Maxwell's formula in elliptic integrals; E. B. Rosa, F. W. Grover, NBS Bulletin 8(1), 1912",
        });
        checks.push(Check {
            case: "two coils in series",
            quantity: format!("resistance, one {how} the other, ohm"),
            computed: seen.resistance_ohm,
            reference: 2.0 * COPPER_OHM_M * (a + b) / (WIRE_M * WIRE_M),
            tolerance: 1e-3,
            source: "Ohm's law, length over section",
        });
    }
    Ok(checks)
}
