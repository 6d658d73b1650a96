//! Transient heat against closed forms; each test names its source.
#![allow(clippy::unwrap_used, clippy::missing_panics_doc, reason = "tests")]

mod heat_support;

use heat_support::{Body, PLAIN_CAPACITY, advance, bessel_j, no_source, plain, roots};
use solver::constants::STEFAN_BOLTZMANN;
use solver::model::{Face, FaceCondition, Mirrors, Surface};

const RADIUS: f64 = 0.03;
const CONDUCTIVITY: f64 = 30.0;
const DIFFUSIVITY: f64 = CONDUCTIVITY / PLAIN_CAPACITY;

fn seconds(fourier: f64) -> f64 {
    fourier * RADIUS * RADIUS / DIFFUSIVITY
}

#[test]
fn cylinder_under_constant_flux_follows_carslaw_and_jaeger_for_every_order() {
    // H. S. Carslaw, J. C. Jaeger, Conduction of Heat in Solids, 2nd ed., section 7.8 (from memory; the table of its
    // values in the literature, 0.281043 at the surface for Fo = 0.05, agrees with the series below).
    let flux = 1e5;
    let unit = flux * RADIUS / CONDUCTIVITY;
    let beta = roots(|x| bessel_j(1, x), 60, 0.3);
    let exact = |fo: f64, r: f64| {
        let terms = beta.iter().map(|b| (-b * b * fo).exp() * bessel_j(0, b * r) / (b * b * bessel_j(0, *b)));
        2.0 * fo + 0.5 * r * r - 0.25 - 2.0 * terms.sum::<f64>()
    };
    assert!((exact(0.05, 1.0) - 0.281043).abs() < 1e-6);
    for (order, size) in [(1, RADIUS / 32.0), (2, RADIUS / 10.0), (3, RADIUS / 8.0)] {
        let mut body = Body::cylinder(RADIUS, plain(CONDUCTIVITY), size);
        body.order = order;
        body.faces = vec![(Face::Outside, FaceCondition::Flux(flux))];
        let mut problem = body.problem();
        let mut state = problem.start();
        for fo in [0.05, 0.1, 0.2, 0.5, 1.0] {
            state = advance(&mut problem, state, seconds(fo), 0.02, &no_source).0;
            let gauges = problem.gauge_values(&state.temperature_k);
            for (value, r) in [(gauges[0], 0.0), (gauges[1], 1.0)] {
                let rise = (value - 293.15) / unit;
                let off = (rise - exact(fo, r)).abs() / exact(fo, 1.0);
                assert!(off < 1e-3, "order {order}, Fo = {fo}, r = {r}: {rise} against {}, {off:.1e}", exact(fo, r));
            }
        }
        let parts = problem.part_temperatures(&state);
        assert!((parts[0].surface_minus_core_k / unit - 0.5).abs() < 1e-3, "qR/2k in the regular regime");
        assert!((parts[0].mean_k - 293.15 - 2.0 * unit).abs() < 1e-3 * unit, "2 Fo qR/k by the energy");
    }
}

#[test]
fn cylinder_cooled_by_convection_follows_the_series() {
    // H. Groeber, S. Erk, U. Grigull, Die Grundgesetze der Waermeuebertragung (from memory); the first root and
    // constant for Bi = 1 are 1.2558 and 1.2071 in the usual tables.
    for biot in [0.1, 1.0, 10.0] {
        let zeta = roots(|x| x * bessel_j(1, x) - biot * bessel_j(0, x), 40, 0.1);
        let constant = |z: f64| 2.0 / z * bessel_j(1, z) / (bessel_j(0, z).powi(2) + bessel_j(1, z).powi(2));
        if biot == 1.0 {
            assert!((zeta[0] - 1.2558).abs() < 1e-4 && (constant(zeta[0]) - 1.2071).abs() < 1e-4);
        }
        let exact = |fo: f64, r: f64| -> f64 {
            zeta.iter().map(|&z| constant(z) * (-z * z * fo).exp() * bessel_j(0, z * r)).sum()
        };
        let mut body = Body::cylinder(RADIUS, plain(CONDUCTIVITY), RADIUS / 12.0);
        body.surface = Surface { emissivity: 0.0, convection_w_per_m2_k: biot * CONDUCTIVITY / RADIUS };
        body.start_k = 1273.15;
        let mut problem = body.problem();
        let mut state = problem.start();
        for fo in [0.1, 0.2, 0.5, 1.0] {
            state = advance(&mut problem, state, seconds(fo), 0.1, &no_source).0;
            for (value, r) in problem.gauge_values(&state.temperature_k).into_iter().zip([0.0, 1.0]) {
                let off = (value - 293.15) / 980.0 - exact(fo, r);
                assert!(off.abs() < 1e-3, "Bi = {biot}, Fo = {fo}, r = {r}: off by {off:.1e} of the first difference");
            }
        }
    }
}

/// Time for a lumped body to cool by radiation alone from `from` to `to`, per `rho c V / (eps sigma A)`, surroundings at
/// `ambient`. Source: the integral of `dT / (T^4 - Ta^4)` in partial fractions.
fn radiation_time(from: f64, to: f64, ambient: f64) -> f64 {
    let part = |t: f64| ((ambient + t) / (ambient - t)).abs().ln() + 2.0 * (t / ambient).atan();
    (part(to) - part(from)) / (4.0 * ambient.powi(3))
}

#[test]
fn small_body_of_high_conductivity_cools_by_radiation_as_the_lumped_formula_says() {
    let (radius, emissivity, ambient) = (0.002, 0.8, 293.15);
    let mut body = Body::cylinder(radius, plain(1e5), radius / 2.0);
    body.surface = Surface { emissivity, convection_w_per_m2_k: 0.0 };
    body.start_k = 1473.15;
    let mut problem = body.problem();
    let mut state = problem.start();
    let unit = PLAIN_CAPACITY * radius / 2.0 / (emissivity * STEFAN_BOLTZMANN);
    for to in [1200.0, 900.0, 600.0, 400.0] {
        let end = unit * radiation_time(1473.15, to, ambient);
        state = advance(&mut problem, state, end, 2.0, &no_source).0;
        let t = problem.gauge_values(&state.temperature_k)[1];
        assert!((t / to - 1.0).abs() < 2e-3, "{t} K against {to} K at {end} s");
    }
}

#[test]
fn time_stepping_is_of_second_order_on_a_nonlinear_problem_with_a_closed_form() {
    // Lumped radiation as above, fixed steps.
    let (radius, emissivity, ambient, to) = (0.002, 0.8, 293.15, 800.0);
    let mut body = Body::cylinder(radius, plain(1e6), radius / 2.0);
    body.surface = Surface { emissivity, convection_w_per_m2_k: 0.0 };
    body.start_k = 1473.15;
    let mut problem = body.problem();
    let unit = PLAIN_CAPACITY * radius / 2.0 / (emissivity * STEFAN_BOLTZMANN);
    let end = unit * radiation_time(1473.15, to, ambient);
    let errors: Vec<f64> = [10, 20, 40, 80]
        .into_iter()
        .map(|steps| {
            let mut state = problem.start();
            for _ in 0..steps {
                state = problem.step(&state, end / f64::from(steps), &no_source).unwrap().state;
            }
            (problem.gauge_values(&state.temperature_k)[1] - to).abs()
        })
        .collect();
    for pair in errors.windows(2) {
        let order = (pair[0] / pair[1]).log2();
        assert!((order - 2.0).abs() < 0.15, "order {order:.3}; errors {errors:?} K");
    }
    assert!(errors[3] < 0.05, "{errors:?} K");
}

#[test]
fn the_error_estimate_falls_with_the_square_of_the_step_and_covers_the_error_of_the_step() {
    let (radius, emissivity, ambient) = (0.002, 0.8, 293.15);
    let mut body = Body::cylinder(radius, plain(1e6), radius / 2.0);
    body.surface = Surface { emissivity, convection_w_per_m2_k: 0.0 };
    body.start_k = 1473.15;
    let mut problem = body.problem();
    let start = problem.start();
    let unit = PLAIN_CAPACITY * radius / 2.0 / (emissivity * STEFAN_BOLTZMANN);
    let mut estimates = Vec::new();
    for to in [1373.15_f64, 1423.15] {
        let outcome = problem.step(&start, unit * radiation_time(1473.15, to, ambient), &no_source).unwrap();
        let error = (problem.gauge_values(&outcome.state.temperature_k)[1] - to).abs();
        assert!(error < outcome.error_k, "error {error} K, estimate {} K", outcome.error_k);
        assert!(outcome.error_k < 0.2 * outcome.largest_change_k);
        estimates.push(outcome.error_k / (1473.15 - to).powi(2));
    }
    assert!((estimates[0] / estimates[1] - 1.0).abs() < 0.3, "{estimates:?} 1/K");
}

#[test]
fn cylinder_with_uniform_generation_has_the_parabolic_profile_in_the_steady_state() {
    // Tc - Ts = g R^2 / (4 k): Carslaw and Jaeger, section 7.4 (from memory).
    let generation = 4e6;
    let mut body = Body::cylinder(RADIUS, plain(CONDUCTIVITY), RADIUS / 6.0);
    body.faces = vec![(Face::Outside, FaceCondition::HeldAt(350.0))];
    let mut problem = body.problem();
    let source = |_: f64, out: &mut [f64]| out.fill(generation);
    let start = problem.start();
    let state = advance(&mut problem, start, seconds(8.0), 0.5, &source).0;
    let expected = generation * RADIUS * RADIUS / (4.0 * CONDUCTIVITY);
    let gauges = problem.gauge_values(&state.temperature_k);
    assert!((gauges[1] - 350.0).abs() < 1e-12);
    assert!(((gauges[0] - gauges[1]) / expected - 1.0).abs() < 1e-6, "{} K", gauges[0] - gauges[1]);
}

#[test]
fn tube_passes_its_flux_from_bore_to_outside_as_the_logarithm_says() {
    // T(ri) - T(ro) = q ri ln(ro / ri) / k: Carslaw and Jaeger, section 7.2 (from memory).
    let (inner, outer, flux) = (0.01, RADIUS, 5e4);
    let mut body = Body::cylinder(outer, plain(CONDUCTIVITY), 0.002);
    body.lo = [inner, 0.0];
    body.faces = vec![(Face::Inside, FaceCondition::Flux(flux)), (Face::Outside, FaceCondition::HeldAt(400.0))];
    body.gauges = vec![[inner, 0.002], [outer, 0.002]];
    let mut problem = body.problem();
    let start = problem.start();
    let before = advance(&mut problem, start, seconds(40.0), 0.5, &no_source).0;
    let after = problem.step(&before, 10.0, &no_source).unwrap().state;
    let gauges = problem.gauge_values(&after.temperature_k);
    let expected = flux * inner * (outer / inner).ln() / CONDUCTIVITY;
    assert!(
        ((gauges[0] - gauges[1]) / expected - 1.0).abs() < 1e-4,
        "{} K against {expected} K",
        gauges[0] - gauges[1]
    );
    let through = after.energy.through_held_faces_j - before.energy.through_held_faces_j;
    let power = flux * std::f64::consts::TAU * inner * 0.004;
    assert!((through / (10.0 * power) - 1.0).abs() < 1e-8, "{through} J through the held face");
}

#[test]
fn one_mirror_plane_counts_both_halves_and_gives_the_temperatures_of_the_whole() {
    let mut whole = Body::cylinder(RADIUS, plain(CONDUCTIVITY), 0.005);
    (whole.lo, whole.hi, whole.mirrors) = ([0.0, -0.04], [RADIUS, 0.04], Mirrors::None);
    whole.surface = Surface { emissivity: 0.8, convection_w_per_m2_k: 20.0 };
    whole.start_k = 1273.15;
    whole.gauges = vec![[0.0, 0.0], [RADIUS, 0.02]];
    let mut half = whole.clone();
    half.mirrors = Mirrors::One { z_m: 0.0 };
    half.gauges = vec![[0.0, 0.0], [RADIUS, -0.02]];
    let run = |body: &Body| {
        let mut problem = body.problem();
        let start = problem.start();
        let state = advance(&mut problem, start, 60.0, 0.5, &no_source).0;
        (problem.gauge_values(&state.temperature_k), state.energy, problem.part_mass_kg(0).unwrap())
    };
    let ((t_whole, e_whole, mass), (t_half, e_half, mass_half)) = (run(&whole), run(&half));
    let exact_mass = 7800.0 * std::f64::consts::PI * RADIUS * RADIUS * 0.08;
    assert!((mass / exact_mass - 1.0).abs() < 1e-12 && (mass_half / exact_mass - 1.0).abs() < 1e-12);
    assert!((e_half.stored_j / e_whole.stored_j - 1.0).abs() < 1e-3, "{e_half:?} {e_whole:?}");
    assert!((e_half.radiated_j / e_whole.radiated_j - 1.0).abs() < 1e-3);
    for (a, b) in t_whole.iter().zip(&t_half) {
        assert!((a - b).abs() < 0.5, "{t_whole:?} {t_half:?}");
    }
}
