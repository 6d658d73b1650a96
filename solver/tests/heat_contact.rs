//! Parts that touch share their temperatures; parts without a role in the field are heated by conduction alone.
#![allow(clippy::unwrap_used, clippy::missing_panics_doc, reason = "tests")]

mod heat_support;

use std::sync::Arc;

use heat_support::{Body, INSULATED, advance, no_source, plain};
use mesher::{Drawing, Limits, Outline, Region, RegionId, triangulate};
use solver::heat::HeatProblem;
use solver::model::{Face, FaceCondition, Model, Role};

const INNER: f64 = 0.01;
const OUTER: f64 = 0.02;
const HEIGHT: f64 = 0.004;

/// A hot core in a cold sleeve, a slice between two mirrors.
fn core_in_sleeve(
    core_k: f64,
    sleeve_k: f64,
    sleeve_conductivity: f64,
    outside: FaceCondition,
) -> (HeatProblem, Model) {
    let mut model = Body::cylinder(INNER, plain(30.0), 0.002).model();
    model.parts[0].start_k = core_k;
    let mut sleeve = model.parts[0].clone();
    sleeve.name = "sleeve".into();
    sleeve.role = Role::Lining;
    sleeve.outline = Outline::rectangle([INNER, 0.0], [OUTER, HEIGHT]).unwrap();
    sleeve.material = plain(sleeve_conductivity);
    sleeve.start_k = sleeve_k;
    // The face that touches the core is not exposed: what is written for it does not count.
    sleeve.faces = vec![(Face::Outside, outside), (Face::Inside, FaceCondition::HeldAt(3000.0))];
    model.parts.push(sleeve);
    let region = |i: usize| Region {
        id: RegionId(i as u32 + 1),
        outline: model.parts[i].outline.clone(),
        interior_size: 0.001,
        surface_size: 0.001,
        layers: None,
    };
    let drawing = Drawing {
        domain: Outline::rectangle([0.0, 0.0], [0.03, HEIGHT]).unwrap(),
        domain_region: RegionId(0),
        domain_size: 0.004,
        regions: vec![region(0), region(1)],
        gradation: 0.4,
        boundary_size: None,
        line_sizes: Vec::new(),
    };
    let mesh = Arc::new(triangulate(&drawing, &Limits::default(), &|| false).unwrap());
    let problem = HeatProblem::new(&mesh, &mesh.nodes(2), &[None, Some(0), Some(1)], &model).unwrap();
    (problem, model)
}

#[test]
fn hot_core_and_cold_sleeve_end_at_the_temperature_of_mixing() {
    // Equal materials: volumes 1 : 3, so (1200 + 3 x 400) / 4 = 600 K, up to the node layer that both share.
    let (mut problem, _) = core_in_sleeve(1200.0, 400.0, 30.0, FaceCondition::Exchange(INSULATED));
    let start = problem.start();
    let means: Vec<f64> = problem.part_temperatures(&start).iter().map(|p| p.mean_k).collect();
    let mixed = (means[0] + 3.0 * means[1]) / 4.0;
    assert!((mixed - 600.0).abs() < 15.0, "{means:?}");
    let (mut state, _) = advance(&mut problem, start, 60.0, 0.5, &no_source);
    for piece in 1..10 {
        state = advance(&mut problem, state, 60.0 + 30.0 * f64::from(piece), 0.5, &no_source).0;
    }
    for part in problem.part_temperatures(&state) {
        assert!((part.min_k - mixed).abs() < 1e-6 && (part.max_k - mixed).abs() < 1e-6, "{part:?} against {mixed}");
        assert!(part.surface_minus_core_k.abs() < 1e-6);
    }
    assert!(state.energy.stored_j.abs() < 1e-6 * problem.part_mass_kg(0).unwrap() * 600.0 * 600.0);
    assert!(state.energy.workpiece_stored_j < 0.0, "the core gave heat to the sleeve");
    assert_eq!(state.energy.convected_j, 0.0);
}

#[test]
fn steady_flow_through_core_and_sleeve_falls_by_each_ones_resistance() {
    // g R^2 / (4 k1) in the core, g R^2 ln(ro / R) / (2 k2) in the sleeve: Carslaw and Jaeger, chapter 7 (from memory).
    let (generation, sleeve_conductivity) = (1e7, 5.0);
    let (mut problem, _) = core_in_sleeve(400.0, 400.0, sleeve_conductivity, FaceCondition::HeldAt(400.0));
    let count = problem.space().reference().point_count();
    let in_core: Vec<bool> = (0..problem.space().element_count()).map(|e| problem.part_of_element(e) == 0).collect();
    let source = |_: f64, out: &mut [f64]| {
        for (row, core) in out.chunks_exact_mut(count).zip(&in_core) {
            row.fill(if *core { generation } else { 0.0 });
        }
    };
    let mut state = problem.start();
    for _ in 0..30 {
        state = problem.step(&state, 100.0, &source).unwrap().state;
    }
    let rows = problem.part_temperatures(&state);
    let core = generation * INNER * INNER / (4.0 * 30.0);
    let sleeve = generation * INNER * INNER * (OUTER / INNER).ln() / (2.0 * sleeve_conductivity);
    assert!((rows[0].surface_minus_core_k / -core - 1.0).abs() < 1e-5, "{rows:?} against {core} K");
    assert!((rows[1].surface_minus_core_k / -sleeve - 1.0).abs() < 1e-5, "{rows:?} against {sleeve} K");
    assert_eq!((rows[0].part, rows[1].part), (0, 1));
    let [coolest, hottest] = problem.extreme_nodes(0, &state.temperature_k).unwrap();
    assert!((problem.space().points()[hottest][0]).abs() < 1e-12, "hottest on the axis");
    assert!((problem.space().points()[coolest][0] - INNER).abs() < 1e-12, "coolest at the sleeve");
    assert!(problem.extreme_nodes(7, &state.temperature_k).is_none());
    let volume = std::f64::consts::PI * INNER * INNER * HEIGHT;
    assert!((problem.part_volume_m3(0).unwrap() / volume - 1.0).abs() < 1e-12);
    let mut loss = vec![0.0; in_core.len() * count];
    source(0.0, &mut loss);
    assert!((problem.part_integrals(&loss)[0] / (generation * volume) - 1.0).abs() < 1e-12);
    let fastest = generation / heat_support::PLAIN_CAPACITY;
    assert!((problem.largest_heating_rate_k_per_s(&state, &loss) / fastest - 1.0).abs() < 1e-12);
}
