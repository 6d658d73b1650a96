//! What cannot be solved is refused by kind, with place and value, and leaves the state as it was.
#![allow(clippy::unwrap_used, clippy::missing_panics_doc, reason = "tests")]

mod heat_support;

use heat_support::{Body, no_source, plain};
use solver::error::SolveError;
use solver::heat::{StepFailure, interpolate};
use solver::model::{Face, FaceCondition};

fn body() -> Body {
    Body::cylinder(0.02, plain(30.0), 0.004)
}

#[test]
fn source_that_is_not_a_number_is_refused_with_its_place() {
    let mut problem = body().problem();
    let start = problem.start();
    let source = |_: f64, out: &mut [f64]| {
        out.fill(1e6);
        out[20] = f64::NAN;
    };
    let failure = problem.step(&start, 1.0, &source).unwrap_err();
    let StepFailure::SourceNotFinite { time_s, r_m, z_m, value } = failure.clone() else { panic!("{failure:?}") };
    assert!(value.is_nan() && time_s > 0.0 && r_m > 0.0 && r_m < 0.02 && z_m > 0.0 && z_m < 0.008);
    assert!(!failure.may_be_cured_by_a_shorter_step());
    assert!(failure.to_string().contains("W/m^3"), "{failure}");
    let error = failure.into_solve_error(0.0, 1.0);
    assert!(matches!(error, SolveError::HeatStep { .. }), "{error}");
}

#[test]
fn step_that_asks_for_too_much_does_not_converge_and_says_where() {
    let mut problem = body().problem();
    let start = problem.start();
    // 1e12 W/m^3 for 10 s would be 2e6 K: beyond what the iterations may reach at 40 K each.
    let failure = problem.step(&start, 10.0, &|_, out| out.fill(1e12)).unwrap_err();
    let StepFailure::NotConverged { iterations, relative_residual, limit, .. } = failure else { panic!("{failure:?}") };
    assert!(iterations > 0 && relative_residual > limit);
    assert!(failure.may_be_cured_by_a_shorter_step());
    // The same problem goes on from the same state.
    assert!(problem.step(&start, 1e-6, &no_source).is_ok());
}

#[test]
fn steps_that_are_not_positive_and_states_of_another_problem_are_refused() {
    let mut problem = body().problem();
    let start = problem.start();
    for dt in [0.0, -1.0, f64::NAN, f64::INFINITY] {
        assert!(matches!(problem.step(&start, dt, &no_source), Err(StepFailure::BadStep { .. })), "{dt}");
    }
    let mut foreign = start;
    foreign.temperature_k.pop();
    assert!(matches!(problem.step(&foreign, 1.0, &no_source), Err(StepFailure::ForeignState { .. })));
}

#[test]
fn temperature_that_is_not_a_number_is_refused() {
    let mut problem = body().problem();
    let mut state = problem.start();
    state.temperature_k[3] = f64::NAN;
    let failure = problem.step(&state, 1.0, &no_source).unwrap_err();
    assert!(matches!(failure, StepFailure::NotFinite { .. }), "{failure:?}");
}

#[test]
fn gauge_outside_its_part_is_refused_and_one_on_the_surface_is_taken() {
    let mut inside = body();
    inside.faces = vec![(Face::Outside, FaceCondition::HeldAt(500.0))];
    inside.gauges = vec![[0.02, 0.004], [0.0, 0.004]];
    let problem = inside.problem();
    let gauges = problem.gauge_values(&problem.start().temperature_k);
    assert!((gauges[0] - 500.0).abs() < 1e-9 && (gauges[1] - 293.15).abs() < 1e-9, "{gauges:?}");

    let mut outside = body();
    outside.gauges = vec![[0.03, 0.004]];
    let error = std::panic::catch_unwind(|| outside.problem()).unwrap_err();
    let text = error.downcast_ref::<String>().unwrap();
    assert!(text.contains("GaugeOutside"), "{text}");
}

#[test]
fn a_step_depends_on_its_arguments_alone_and_events_inside_are_found_by_interpolation() {
    let mut problem = body().problem();
    let start = problem.start();
    let source = |_: f64, out: &mut [f64]| out.fill(1e7);
    let first = problem.step(&start, 5.0, &source).unwrap();
    problem.step(&first.state, 0.5, &no_source).unwrap();
    let again = problem.step(&start, 5.0, &source).unwrap();
    assert_eq!(first, again);
    // Uniform heating is linear in time: 1e7 / (7800 x 600) K/s.
    let half = interpolate(&start, &first.state, 2.5);
    let rise = 2.5 * 1e7 / heat_support::PLAIN_CAPACITY;
    assert!(half.iter().all(|t| (t - 293.15 - rise).abs() < 1e-6));
    assert_eq!(interpolate(&start, &first.state, 99.0), first.state.temperature_k);
}
