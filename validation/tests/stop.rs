//! A stop on request: a typed refusal before there is a field, a partial result that says so afterwards.
#![allow(clippy::unwrap_used, clippy::panic, reason = "tests")]

use std::sync::atomic::{AtomicUsize, Ordering};

use solver::SolveError;
use solver::model::{Gauge, GaugeKind, Heating, Hold, Mirrors, Model, Stage, StageEnd};
use solver::observe::{Event, Observer};
use solver::results::Outcome;
use validation::models;

/// Asks for a stop once so many heat steps are done, or so many meshes are made.
#[derive(Default)]
struct StopAfter {
    heat_steps: Option<usize>,
    meshes: Option<usize>,
    seen_steps: AtomicUsize,
    seen_meshes: AtomicUsize,
}

impl Observer for StopAfter {
    fn event(&self, event: &Event) {
        match event {
            Event::HeatStep { .. } => _ = self.seen_steps.fetch_add(1, Ordering::SeqCst),
            Event::Meshed { .. } => _ = self.seen_meshes.fetch_add(1, Ordering::SeqCst),
            Event::FieldSolved { .. } | Event::StageStarted { .. } => {}
        }
    }

    fn stop_requested(&self) -> bool {
        self.heat_steps.is_some_and(|n| self.seen_steps.load(Ordering::SeqCst) >= n)
            || self.meshes.is_some_and(|n| self.seen_meshes.load(Ordering::SeqCst) >= n)
    }
}

/// A bar heated for ten minutes in two stages.
fn heating() -> Model {
    let bar = models::material(1.2e-6, 1.0).unwrap();
    let mut model = models::bar_in_coil(bar, Mirrors::One { z_m: 0.0 }).unwrap();
    let stage = |name: &str, hold| Stage { name: name.to_owned(), end: StageEnd::After(300.0), hold: Some(hold) };
    model.mesh.fineness = 0.7;
    model.gauges = vec![Gauge { name: "core".to_owned(), kind: GaugeKind::Thermocouple, part: 0, at: [0.0, 0.0] }];
    model.heating = Some(Heating {
        ambient_k: models::START_K,
        stages: vec![stage("heat", Hold::CoilCurrent(1500.0)), stage("soak", Hold::Off)],
        step_tolerance_k: 2.0,
    });
    model
}

#[test]
fn a_stop_in_the_heating_keeps_what_is_done_and_says_so() {
    let wanted = 7;
    let observer = StopAfter { heat_steps: Some(wanted), ..StopAfter::default() };
    let results = solver::run(&heating(), &observer).unwrap();
    let Outcome::Stopped { time_s } = results.outcome else { panic!("outcome {:?}", results.outcome) };
    assert!(time_s > 0.0 && time_s < 300.0, "stopped at {time_s} s");
    // The start and every accepted step; steps of an interval that was done again are told but not kept.
    assert_eq!(results.history.len(), results.counts.heat_steps + 1);
    assert!((1..=wanted).contains(&results.counts.heat_steps), "{} steps", results.counts.heat_steps);
    let last = results.history.last().unwrap();
    assert!((last.time_s - time_s).abs() <= 1e-9 * time_s, "last row at {} s, stopped at {time_s} s", last.time_s);
    assert!(last.gauges_k[0] >= models::START_K && last.parts[0].max_k > models::START_K);
    assert!(last.energy.relative_defect() < 1e-6, "energy defect {:.2e}", last.energy.relative_defect());
    assert_eq!(results.energy, Some(last.energy));
    let state = results.states.iter().find(|s| s.label == "end of heat (not finished)").unwrap();
    let snapshot = results.snapshots.last().unwrap();
    assert!((state.time_s - time_s).abs() <= 1e-9 * time_s, "state at {} s", state.time_s);
    assert!((snapshot.time_s - time_s).abs() <= 1e-9 * time_s, "last snapshot at {} s", snapshot.time_s);
}

#[test]
fn a_partial_result_is_the_beginning_of_the_whole_one() {
    let observer = StopAfter { heat_steps: Some(5), ..StopAfter::default() };
    let part = solver::run(&heating(), &observer).unwrap();
    let whole = solver::run(&heating(), &StopAfter::default()).unwrap();
    assert_eq!(whole.outcome, Outcome::Complete);
    for (x, y) in part.history.iter().zip(&whole.history).take(4) {
        assert_eq!(x.time_s.to_bits(), y.time_s.to_bits());
        assert_eq!(x.gauges_k, y.gauges_k);
    }
}

#[test]
fn a_stop_before_the_first_field_is_a_refusal() {
    let after_mesh = StopAfter { meshes: Some(1), ..StopAfter::default() };
    let at_once = StopAfter { meshes: Some(0), ..StopAfter::default() };
    let cold = Model { heating: None, ..heating() };
    for model in [heating(), cold] {
        let refused = solver::run(&model, &after_mesh).unwrap_err();
        assert!(matches!(refused, SolveError::StoppedEarly), "{refused}");
        let refused = solver::run(&model, &at_once).unwrap_err();
        assert!(
            matches!(refused, SolveError::StoppedEarly | SolveError::Mesh(mesher::MeshError::Stopped)),
            "{refused}"
        );
        after_mesh.seen_meshes.store(0, Ordering::SeqCst);
    }
}
