//! An endless solenoid of solid turns that touch, round an endless bar: one turn fills a slice between two mirror planes.
//!
//! The field is `I/h` from the bar to the turn, nothing beyond it, and in between it follows `H'' + H'/r = (j w mu0/rho) H`.
//! So the bar is in a uniform field, the turn is a tube with the field on its inside only, and resistance and inductance
//! follow from the flux of bar, gap and turn. Tolerance 0.1 %, on the default mesh.

use mesher::Outline;
use num_complex::Complex64;
use solver::model::{ConductorKind, Mirrors, Model};
use std::f64::consts::{PI, SQRT_2};

use super::first_state;
use crate::check::{CaseError, Check};
use crate::closed_form::MU0;
use crate::closed_form::cylinder::AxialCylinder;
use crate::models;

const BAR_M: f64 = 0.03;
const BORE_M: f64 = 0.045;
const HEIGHT_M: f64 = 0.01;
const FREQUENCY_HZ: f64 = 1000.0;
const TURN_DEPTH_M: f64 = 0.002;
/// Steps of the integration through the turn; doubling them changes the result by less than 1e-10.
const STEPS: usize = 4000;

/// The slice, with 1 A rms in the turn, for a bar with `R/delta = ratio`.
///
/// # Errors
/// Values the library refuses.
pub fn model(ratio: f64, mu: f64, wall: f64) -> Result<Model, CaseError> {
    let bar = Outline::rectangle([0.0, 0.0], [BAR_M, HEIGHT_M])?;
    let material = models::material(models::resistivity_for(BAR_M / ratio, FREQUENCY_HZ, mu), mu)?;
    let copper = models::material(models::resistivity_for(TURN_DEPTH_M, FREQUENCY_HZ, 1.0), 1.0)?;
    let turn = Outline::rectangle([BORE_M, 0.0], [BORE_M + wall, HEIGHT_M])?;
    let coil = models::coil(vec![turn], copper, ConductorKind::Solid);
    let mirrors = Mirrors::Two { lower_m: 0.0, upper_m: HEIGHT_M };
    Ok(models::with_coil(vec![models::part("bar", bar, material)], vec![coil], FREQUENCY_HZ, mirrors))
}

/// Surface impedance `E/H` of the turn at its bore, ohm, by fourth-order steps from its outside, where `H` is zero.
fn turn_impedance(wall: f64) -> Complex64 {
    let resistivity = models::resistivity_for(TURN_DEPTH_M, FREQUENCY_HZ, 1.0);
    let diffusion = Complex64::new(0.0, 2.0 * PI * FREQUENCY_HZ * MU0 / resistivity);
    let rate = |r: f64, y: [Complex64; 2]| [y[1], diffusion * y[0] - y[1] / r];
    let add = |y: [Complex64; 2], k: [Complex64; 2], s: f64| [y[0] + k[0] * s, y[1] + k[1] * s];
    let step = -wall / STEPS as f64;
    let mut y = [Complex64::ZERO, Complex64::ONE];
    for i in 0..STEPS {
        let r = BORE_M + wall + step * i as f64;
        let k1 = rate(r, y);
        let k2 = rate(r + 0.5 * step, add(y, k1, 0.5 * step));
        let k3 = rate(r + 0.5 * step, add(y, k2, 0.5 * step));
        let k4 = rate(r + step, add(y, k3, step));
        for (y, k) in y.iter_mut().zip([0, 1].map(|n| k1[n] + 2.0 * k2[n] + 2.0 * k3[n] + k4[n])) {
            *y += k * (step / 6.0);
        }
    }
    -resistivity * y[1] / y[0]
}

/// Impedance of the slice seen by its turn, ohm.
fn impedance(bar: &AxialCylinder, mu: f64, wall: f64) -> Complex64 {
    let flux_area = mu * PI * BAR_M * BAR_M * bar.flux_factor() + PI * (BORE_M * BORE_M - BAR_M * BAR_M);
    let flux_term = Complex64::new(0.0, 2.0 * PI * FREQUENCY_HZ * MU0) * flux_area;
    (2.0 * PI * BORE_M * turn_impedance(wall) + flux_term) / HEIGHT_M
}

fn compare(ratio: f64, mu: f64, wall: f64, checks: &mut Vec<Check>) -> Result<(), CaseError> {
    let solved = first_state(&model(ratio, mu, wall)?)?;
    let seen = solved.terminals.ok_or(CaseError::Missing("terminals"))?;
    let bar = AxialCylinder::new(BAR_M, models::resistivity_for(BAR_M / ratio, FREQUENCY_HZ, mu), mu, FREQUENCY_HZ)?;
    let field_peak = SQRT_2 / HEIGHT_M;
    let z = impedance(&bar, mu, wall);
    let coil_w = PI * BORE_M * HEIGHT_M * turn_impedance(wall).re * field_peak * field_peak;
    let bessel = "Bessel solution of the endless cylinder (W. R. Smythe, Static and Dynamic Electricity, chapter X; from memory)";
    let ode = "diffusion equation of the turn integrated in radius; flux of bar and gap by the Bessel solution";
    for (name, computed, reference, source) in [
        ("power of the bar, W", solved.workpiece_power_w, HEIGHT_M * bar.power_per_length(field_peak), bessel),
        ("loss of the turn, W", solved.coils.first().ok_or(CaseError::Missing("coil"))?.loss_w, coil_w, ode),
        ("resistance, ohm", seen.resistance_ohm, z.re, ode),
        ("inductance, H", seen.inductance_h, z.im / (2.0 * PI * FREQUENCY_HZ), ode),
        ("power factor", seen.power_factor, z.re / z.norm(), ode),
    ] {
        checks.push(Check {
            case: "endless solenoid round a bar",
            quantity: format!("{name}; bar R/delta = {ratio}, mu_r = {mu}; turn wall/delta = {}", wall / TURN_DEPTH_M),
            computed,
            reference,
            tolerance: 1e-3,
            source,
        });
    }
    Ok(())
}

pub(super) fn run() -> Result<Vec<Check>, CaseError> {
    let mut checks = Vec::new();
    for (ratio, mu, wall) in [(2.0, 1.0, 0.01), (12.0, 1.0, 0.002), (8.0, 30.0, 0.004)] {
        compare(ratio, mu, wall, &mut checks)?;
    }
    Ok(checks)
}
