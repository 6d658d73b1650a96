//! Energy in, out and stored: for any step, over the peak of steel's specific heat and over melting.
#![allow(clippy::unwrap_used, clippy::missing_panics_doc, reason = "tests")]

mod heat_support;

use std::sync::Arc;

use heat_support::{Body, INSULATED, advance, material, no_source, plain};
use serde_json::json;
use solver::heat::HeatProblem;
use solver::material::{Material, library};
use solver::model::{Face, FaceCondition, Mirrors, Surface};
use solver::results::EnergyBalance;

fn steel() -> Arc<Material> {
    Arc::clone(library().unwrap().find("C22").unwrap())
}

/// Enthalpy of carbon steel from 20 °C to `to` °C, J/kg: the integral of the formulas of EN 1993-1-2:2005, 3.4.1.2.
fn eurocode_enthalpy(to: f64) -> f64 {
    let cubic = |t: f64| 425.0 * t + 0.773 * t * t / 2.0 - 1.69e-3 * t.powi(3) / 3.0 + 2.22e-6 * t.powi(4) / 4.0;
    let below = |t: f64| 666.0 * t - 13002.0 * (738.0 - t).ln();
    let above = |t: f64| 545.0 * t + 17820.0 * (t - 731.0).ln();
    let part = |f: &dyn Fn(f64) -> f64, from: f64, end: f64| if to > from { f(to.min(end)) - f(from) } else { 0.0 };
    part(&cubic, 20.0, 600.0)
        + part(&below, 600.0, 735.0)
        + part(&above, 735.0, 900.0)
        + part(&|t| 650.0 * t, 900.0, 1200.0)
}

/// Heats an insulated slice by a source near its surface with `enthalpy` J/kg in `seconds`, then lets it even out.
/// Returns coldest and hottest temperature, the energy and the steps.
fn heat_and_soak(
    body: &Body,
    enthalpy: f64,
    seconds: f64,
    soak: f64,
    tolerance: f64,
) -> (f64, f64, EnergyBalance, usize) {
    let mut problem = body.problem();
    let shape = points(&problem).into_iter().map(|[r, _]| (r / body.hi[0]).powi(4)).collect::<Vec<_>>();
    let total = problem.part_integrals(&shape)[0];
    let power = enthalpy * problem.part_mass_kg(0).unwrap() / seconds;
    let source = |_: f64, out: &mut [f64]| out.iter_mut().zip(&shape).for_each(|(o, s)| *o = power * s / total);
    let start = problem.start();
    let (mut state, mut work) = advance(&mut problem, start, seconds, tolerance, &source);
    // In pieces, each of which damps what is uneven, however loose the tolerance.
    for piece in 1..=16 {
        let end = seconds + soak * f64::from(piece) / 16.0;
        let (next, more) = advance(&mut problem, state, end, tolerance, &no_source);
        (state, work.steps) = (next, work.steps + more.steps);
    }
    let part = problem.part_temperatures(&state)[0];
    (part.min_k, part.max_k, state.energy, work.steps)
}

/// Positions of all quadrature points.
fn points(problem: &HeatProblem) -> Vec<[f64; 2]> {
    let mut element = solver::fem::element::ElementPoints::default();
    let mut all = Vec::new();
    for e in 0..problem.space().element_count() {
        problem.space().fill(e, &mut element);
        all.extend(element.points().iter().map(|p| [p.r, p.z]));
    }
    all
}

#[test]
fn steel_takes_up_the_integral_of_its_specific_heat_for_very_different_tolerances() {
    let enthalpy = eurocode_enthalpy(1200.0);
    // Its derivative, at spot values of the standard's formulas.
    for (celsius, heat) in [(400.0, 605.88), (700.0, 1008.16), (750.0, 1482.89), (800.0, 803.26), (1000.0, 650.0)] {
        let slope = (eurocode_enthalpy(celsius + 0.01) - eurocode_enthalpy(celsius - 0.01)) / 0.02;
        assert!((slope - heat).abs() < 0.01, "{slope} J/(kg K) at {celsius} °C");
    }
    let body = Body::cylinder(0.015, steel(), 0.0015);
    for tolerance in [0.1, 20.0] {
        let (min, max, energy, steps) = heat_and_soak(&body, enthalpy, 40.0, 400.0, tolerance);
        let supplied = enthalpy * energy.workpiece_mass_kg;
        assert!((energy.supplied_j / supplied - 1.0).abs() < 1e-12);
        assert!((energy.stored_j / supplied - 1.0).abs() < 1e-9, "tolerance {tolerance} K, {steps} steps");
        assert_eq!(energy.stored_j, energy.workpiece_stored_j);
        // From the temperatures alone: each kilogram at T holds the closed-form integral up to T.
        for t in [min, max] {
            let taken = eurocode_enthalpy((t - 273.15).min(1200.0)) + 650.0 * (t - 1473.15).max(0.0);
            assert!(
                (taken / enthalpy - 1.0).abs() < 1e-6,
                "tolerance {tolerance} K: {t} K holds {taken} of {enthalpy} J/kg"
            );
        }
    }
}

#[test]
fn melting_takes_up_the_latent_heat_whatever_the_step() {
    // Heat to warm, melt (aluminium, 397 kJ/kg at 933.47 K: CRC Handbook, from memory) and warm the melt, by hand.
    let metal = material(&json!({
        "name": "metal", "density": "2700 kg/m3", "thermal_conductivity": "200 W/m/K", "specific_heat": "1000 J/kg/K",
        "melting": { "solidus": "660.32 °C", "liquidus": "660.32 °C", "latent_heat": "397 kJ/kg" },
    }));
    for (final_c, melted) in [(700.0, 1.0), (650.0, 0.0)] {
        let enthalpy = 1000.0 * (final_c - 20.0) + melted * 397e3;
        let body = Body::cylinder(0.03, Arc::clone(&metal), 0.003);
        for tolerance in [0.5, 10.0] {
            let (min, max, energy, steps) = heat_and_soak(&body, enthalpy, 60.0, 400.0, tolerance);
            assert!(energy.relative_defect() < 1e-9, "{energy:?}");
            for t in [min, max] {
                let off = 1000.0 * (t - 273.15 - final_c) / enthalpy;
                assert!(off.abs() < 1e-6, "{t} K, tolerance {tolerance} K, {steps} steps: off by {off:.1e}");
            }
        }
    }
}

#[test]
fn a_part_that_is_half_molten_stays_within_the_melting_range() {
    let metal = material(&json!({
        "name": "metal", "density": "2700 kg/m3", "thermal_conductivity": "200 W/m/K", "specific_heat": "1000 J/kg/K",
        "melting": { "solidus": "660 °C", "liquidus": "660 °C", "latent_heat": "397 kJ/kg" },
    }));
    let body = Body::cylinder(0.03, metal, 0.003);
    let (min, max, ..) = heat_and_soak(&body, 640e3 + 198.5e3, 60.0, 400.0, 2.0);
    // The range is widened to 1 K; half the latent heat lies at its middle, 660 °C.
    assert!((min - 933.15).abs() < 0.5 && (max - 933.15).abs() < 0.5, "{min} to {max} K");
}

/// A steel bar in air that convects and radiates outside, is held on top and takes a flux from below.
fn busy_bar(order: usize) -> Body {
    let mut body = Body::cylinder(0.02, steel(), 0.004);
    (body.lo, body.hi, body.mirrors, body.order) = ([0.0, 0.0], [0.02, 0.06], Mirrors::None, order);
    body.surface = Surface { emissivity: 0.8, convection_w_per_m2_k: 15.0 };
    body.faces = vec![(Face::Top, FaceCondition::HeldAt(700.0)), (Face::Bottom, FaceCondition::Flux(4e4))];
    body.gauges = vec![[0.0, 0.03], [0.02, 0.03]];
    body
}

fn ramp(time: f64, out: &mut [f64]) {
    let count = out.len() as f64;
    for (i, o) in out.iter_mut().enumerate() {
        *o = 6e7 * (1.0 + 0.5 * (0.3 * time).sin()) * (0.5 + i as f64 / count);
    }
}

#[test]
fn every_step_closes_its_energy_with_radiation_convection_a_flux_and_a_held_face() {
    for order in [1, 2, 3] {
        let mut problem = busy_bar(order).problem();
        let mut state = problem.start();
        let mut worst = 0.0_f64;
        for dt in [0.05, 0.3, 1.0, 3.0, 8.0, 8.0, 8.0, 8.0, 8.0, 20.0, 40.0] {
            let next = problem.step(&state, dt, &ramp).unwrap().state;
            let (a, b) = (state.energy, next.energy);
            let supplied = b.supplied_j - a.supplied_j + b.through_flux_faces_j - a.through_flux_faces_j;
            let lost = b.radiated_j - a.radiated_j + b.convected_j - a.convected_j;
            let held = b.through_held_faces_j - a.through_held_faces_j;
            let stored = b.stored_j - a.stored_j;
            let moved = supplied.abs() + lost.abs() + held.abs() + stored.abs();
            worst = worst.max((stored + lost + held - supplied).abs() / moved);
            assert!(supplied > 0.0 && b.radiated_j > 0.0 && b.convected_j > 0.0);
            state = next;
        }
        assert!(worst < 1e-9, "order {order}: {worst:.1e} of the energy moved in a step");
        assert!(state.energy.relative_defect() < 1e-9);
        let part = problem.part_temperatures(&state)[0];
        assert!(part.max_k > 1050.0 && part.min_k <= 700.0 + 1e-9, "the peak at 735 °C was crossed: {part:?}");
    }
}

#[test]
fn energy_lost_by_a_bar_at_one_temperature_is_what_the_laws_of_its_surface_say() {
    // Stefan-Boltzmann and Newton's law of cooling over the surface of a cylinder, by hand; a very short step.
    let mut body = Body::cylinder(0.02, plain(30.0), 0.004);
    (body.lo, body.hi, body.mirrors) = ([0.0, 0.0], [0.02, 0.06], Mirrors::None);
    body.surface = Surface { emissivity: 0.8, convection_w_per_m2_k: 15.0 };
    body.faces = vec![(Face::Bottom, FaceCondition::Insulated), (Face::Top, FaceCondition::Exchange(INSULATED))];
    body.gauges.clear();
    body.start_k = 1273.15;
    let mut problem = body.problem();
    let energy = problem.step(&problem.start(), 1e-6, &no_source).unwrap().state.energy;
    let surface = std::f64::consts::TAU * 0.02 * 0.06;
    let radiated = 0.8 * 5.670374419e-8 * (1273.15_f64.powi(4) - 293.15_f64.powi(4)) * surface * 1e-6;
    let convected = 15.0 * 980.0 * surface * 1e-6;
    assert!((energy.radiated_j / radiated - 1.0).abs() < 1e-5, "{} J against {radiated} J", energy.radiated_j);
    assert!((energy.convected_j / convected - 1.0).abs() < 1e-5, "{} J against {convected} J", energy.convected_j);
}

#[test]
fn one_thread_and_two_give_the_same_bits() {
    let run = |threads: usize| {
        let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build().unwrap();
        pool.install(|| {
            let mut body = busy_bar(2);
            body.size = 0.001;
            let mut problem = body.problem();
            let start = problem.start();
            advance(&mut problem, start, 10.0, 4.0, &ramp).0
        })
    };
    let (one, two) = (run(1), run(2));
    assert!(one.temperature_k.len() > 2000, "{} unknowns", one.temperature_k.len());
    let bits = |values: &[f64]| values.iter().map(|v| v.to_bits()).collect::<Vec<_>>();
    assert_eq!(bits(&one.temperature_k), bits(&two.temperature_k));
    assert_eq!(bits(&one.enthalpy_j_per_m3), bits(&two.enthalpy_j_per_m3));
    assert_eq!(one.energy, two.energy);
}
