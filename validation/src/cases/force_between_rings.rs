//! Axial force between two coaxial rings in series, from the map of force density, against Maxwell's formula.
//!
//! The time average is the product of the rms currents times `dM/dz`. Tolerance 1 %: the force is the small remainder of
//! the ring's own field, which is far larger at the wire than the other ring's.

use mesher::Outline;
use solver::model::{Coil, ConductorKind, Mirrors};
use solver::observe::Silent;
use solver::results::{RegionName, Results};
use std::f64::consts::PI;

use crate::check::{CaseError, Check};
use crate::closed_form::loops::axial_force;
use crate::models;

const RADII_M: [f64; 2] = [0.1, 0.08];
const DISTANCE_M: f64 = 0.02;
const WIRE_M: f64 = 0.002;

/// Axial force on the turns of a coil, newtons: second-order elements, midside nodes, exact for quadratic integrands.
fn force_n(results: &Results, coil: usize) -> Result<f64, CaseError> {
    let snapshot = results.snapshots.first().ok_or(CaseError::Missing("snapshot"))?;
    let section = &results.section;
    let elements = section.nodes.elements.chunks(6).zip(snapshot.field.force_density_n_per_m3.chunks(6));
    let mut total = 0.0;
    for ((triangle, region), (nodes, forces)) in (0..).zip(section.mesh.regions()).zip(elements) {
        if !matches!(section.regions.get(region.0 as usize), Some(RegionName::Turn(c, _, _)) if *c == coil) {
            continue;
        }
        let [a, b, c] = section.mesh.corners(triangle);
        let area = 0.5 * ((b[0] - a[0]) * (c[1] - a[1]) - (c[0] - a[0]) * (b[1] - a[1])).abs();
        for k in 3..6 {
            total += area / 3.0 * forces[k][1] * 2.0 * PI * section.nodes.points[nodes[k] as usize][0];
        }
    }
    Ok(total * snapshot.field_factor * snapshot.field_factor)
}

fn ring(radius: f64, z: f64, reversed: bool) -> Result<Coil, CaseError> {
    let outline = Outline::circle([radius, z], WIRE_M)?;
    let coil = models::coil(vec![outline], models::material(1.7e-8, 1.0)?, ConductorKind::Stranded { fill: 1.0 });
    Ok(Coil { reversed, ..coil })
}

pub(super) fn run() -> Result<Vec<Check>, CaseError> {
    let [a, b] = RADII_M;
    let mut checks = Vec::new();
    for (reversed, sign, how) in [(false, 1.0, "with"), (true, -1.0, "against")] {
        let coils = vec![ring(a, 0.0, false)?, ring(b, DISTANCE_M, reversed)?];
        let results = solver::run(&models::with_coil(vec![], coils, 50.0, Mirrors::None), &Silent)?;
        let reference = axial_force(a, b, DISTANCE_M, 1.0, sign)?;
        for (name, coil, side) in [("upper", 1, 1.0), ("lower", 0, -1.0)] {
            checks.push(Check {
                case: "force between rings",
                quantity: format!("axial force on the {name} ring, one {how} the other, N"),
                computed: force_n(&results, coil)?,
                reference: side * reference,
                tolerance: 1e-2,
                source: "J. C. Maxwell's formula in elliptic integrals; E. B. Rosa, F. W. Grover, NBS Bulletin 8(1), 1912",
            });
        }
    }
    Ok(checks)
}
