//! A coupled heating as a whole: energies close, stages end where they should, switches and stops keep their word.
#![allow(clippy::unwrap_used, clippy::print_stdout, reason = "tests")]

use std::sync::atomic::{AtomicUsize, Ordering};

use solver::material::library;
use solver::model::{Drive, Gauge, GaugeKind, Heating, Hold, Mirrors, Model, Stage, StageEnd, Surface};
use solver::observe::{Event, Observer, Silent};
use solver::results::{Outcome, Results};
use validation::models;

const AMBIENT_K: f64 = 298.15;

fn stage(name: &str, end: StageEnd, hold: Option<Hold>) -> Stage {
    Stage { name: name.to_owned(), end, hold }
}

/// The mirrored bar heater with a C45 bar and a coarse mesh, 60 kW in the work.
fn bar(stages: Vec<Stage>) -> Model {
    let steel = library().unwrap().find("C45").unwrap().clone();
    let mut model = models::bar_in_coil(steel, Mirrors::One { z_m: 0.0 }).unwrap();
    model.mesh.fineness = 0.6;
    model.parts[0].surface = Surface { emissivity: 0.8, convection_w_per_m2_k: 10.0 };
    if let Drive::Supply { hold, .. } = &mut model.drive {
        *hold = Hold::WorkpiecePower(60e3);
    }
    let gauge = |name: &str, r| Gauge { name: name.to_owned(), kind: GaugeKind::Thermocouple, part: 0, at: [r, 0.0] };
    model.gauges = vec![gauge("core", 0.0), gauge("surface", 0.03)];
    model.heating = Some(Heating { ambient_k: AMBIENT_K, stages, step_tolerance_k: 4.0 });
    model
}

fn reach(at_c: f64, at_most_s: f64) -> StageEnd {
    StageEnd::GaugeReaches { gauge: 1, at_k: at_c + 273.15, at_most_s }
}

fn run(model: &Model) -> Results {
    solver::run(model, &Silent).unwrap()
}

#[test]
fn a_steel_bar_heated_past_curie_keeps_its_energy_its_power_and_its_goal() {
    let results = run(&bar(vec![
        stage("heat", reach(1000.0, 600.0), None),
        stage("soak", StageEnd::After(10.0), Some(Hold::GaugeTemperature { gauge: 1, at_k: 1273.15 })),
        stage("in air", StageEnd::After(5.0), Some(Hold::Off)),
    ]));
    assert_eq!(results.outcome, Outcome::Complete);
    let energy = results.energy.unwrap();
    println!("defect {:.1e}, {:?}", energy.relative_defect(), results.counts);
    assert!(energy.relative_defect() <= 1e-6, "heat balance {:.2e}", energy.relative_defect());
    let rows: Vec<_> = results.history.iter().filter(|h| h.stage == 0).collect();
    for row in &rows {
        assert!((row.workpiece_power_w / 60e3 - 1.0).abs() < 1e-9, "{} W at {} s", row.workpiece_power_w, row.time_s);
    }
    assert!((rows.last().unwrap().gauges_k[1] - 1273.15).abs() <= 0.02, "{}", rows.last().unwrap().gauges_k[1]);
    // Taken up: supplied less lost, and lost is small beside it in the first stage.
    let heated = rows.last().unwrap();
    assert!((heated.energy.supplied_j / (60e3 * heated.time_s) - 1.0).abs() < 2e-3);
    for row in results.history.iter().filter(|h| h.stage == 1).skip(1) {
        assert!((row.gauges_k[1] - 1273.15).abs() < 0.5, "{} K at {} s", row.gauges_k[1], row.time_s);
        assert!(row.workpiece_power_w <= 60e3 * 1.001);
    }
    for row in results.history.iter().filter(|h| h.stage == 2) {
        assert_eq!(row.workpiece_power_w, 0.0);
        assert_eq!(row.terminals.unwrap().current_a_rms, 0.0);
    }
    let last = results.history.last().unwrap();
    assert!(last.gauges_k[1] < 1273.15 - 1.0, "the surface cools in air");
}

#[test]
fn energy_at_the_terminals_is_power_times_time_across_switches() {
    let on = |name| stage(name, StageEnd::After(2.0), Some(Hold::TerminalPower(20e3)));
    let results = run(&bar(vec![on("first"), stage("pause", StageEnd::After(30.0), Some(Hold::Off)), on("second")]));
    let drawn = results.energy.unwrap().terminal_j;
    assert!((drawn / 80e3 - 1.0).abs() < 1e-9, "{drawn} J drawn by 20 kW in 2 s and 2 s");
    let at_pause = results.history.iter().position(|h| h.stage == 1).unwrap();
    let (before, after) = (&results.history[at_pause - 1], &results.history[at_pause]);
    assert_eq!(before.time_s, after.time_s);
    assert!((before.terminals.unwrap().power_w / 20e3 - 1.0).abs() < 1e-9);
    assert_eq!(after.terminals.unwrap().power_w, 0.0);
    for row in &results.history {
        let gone = row.workpiece_power_w + row.coil_loss_w;
        assert!((row.terminals.unwrap().power_w - gone).abs() <= 1e-9 * 20e3, "{} s", row.time_s);
    }
}

#[test]
fn a_gauge_that_a_stage_does_not_bring_to_its_temperature_is_named() {
    let results =
        run(&bar(vec![stage("soak", StageEnd::After(1.0), Some(Hold::GaugeTemperature { gauge: 1, at_k: 1400.0 }))]));
    let missed = |w: &&solver::results::Warning| w.kind == solver::results::WarningKind::HoldMissed;
    let warning = results.warnings.iter().find(missed).unwrap();
    assert!(warning.text.contains("`soak`") && warning.text.contains("below"), "{}", warning.text);
}

#[test]
fn a_bar_that_starts_above_curie_does_not_cross_it() {
    let mut model = bar(vec![stage("heat", StageEnd::After(0.5), None)]);
    model.parts[0].start_k = 1200.0;
    let results = run(&model);
    assert!(results.warnings.iter().all(|w| w.kind != solver::results::WarningKind::Curie), "{:?}", results.warnings);
}

#[test]
fn a_finer_step_tolerance_changes_the_time_to_temperature_little() {
    let time = |tolerance_k: f64| {
        let mut model = bar(vec![stage("heat", reach(700.0, 600.0), None)]);
        if let Some(heating) = &mut model.heating {
            heating.step_tolerance_k = tolerance_k;
        }
        run(&model).history.last().unwrap().time_s
    };
    let (coarse, fine) = (time(4.0), time(0.5));
    println!("{coarse:.4} s and {fine:.4} s");
    assert!((coarse / fine - 1.0).abs() < 5e-3, "{coarse:.4} s and {fine:.4} s");
}

#[test]
fn a_stage_that_reaches_its_longest_time_says_so_and_keeps_its_results() {
    let results = run(&bar(vec![stage("heat", reach(1000.0, 3.0), None), stage("never", StageEnd::After(1.0), None)]));
    assert_eq!(results.outcome, Outcome::StageLimit { stage: "heat".to_owned(), time_s: 3.0 });
    assert!((results.history.last().unwrap().time_s - 3.0).abs() < 1e-9);
    assert!(results.snapshots.len() >= 2);
}

/// Asks for a stop after a number of heat steps.
struct StopsAfter {
    steps: usize,
    seen: AtomicUsize,
}

impl Observer for StopsAfter {
    fn event(&self, event: &Event) {
        if matches!(event, Event::HeatStep { .. }) {
            self.seen.fetch_add(1, Ordering::Relaxed);
        }
    }

    fn stop_requested(&self) -> bool {
        self.seen.load(Ordering::Relaxed) >= self.steps
    }
}

#[test]
fn a_stop_on_request_keeps_and_marks_the_partial_result() {
    let observer = StopsAfter { steps: 5, seen: AtomicUsize::new(0) };
    let results = solver::run(&bar(vec![stage("heat", reach(1000.0, 600.0), None)]), &observer).unwrap();
    assert!(matches!(results.outcome, Outcome::Stopped { time_s } if time_s > 0.0), "{:?}", results.outcome);
    assert!(results.history.len() >= 6);
    assert!(results.energy.unwrap().relative_defect() <= 1e-6);
}

#[test]
fn a_supply_at_its_limit_gives_less_and_warns() {
    let mut model = bar(vec![stage("heat", StageEnd::After(2.0), None)]);
    if let Drive::Supply { limits, .. } = &mut model.drive {
        limits.current_a_rms = Some(500.0);
    }
    let results = run(&model);
    let start = &results.states[0];
    assert_eq!(start.limited_by, Some(solver::results::SupplyLimit::Current));
    assert!((start.electrical.terminals.unwrap().current_a_rms / 500.0 - 1.0).abs() < 1e-12);
    assert!(start.electrical.workpiece_power_w < 60e3);
    assert!(results.warnings.iter().any(|w| w.kind == solver::results::WarningKind::SupplyLimit));
}
