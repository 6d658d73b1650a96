//! Models that make no sense: each is refused with a typed error, without a panic and without numbers that look like a
//! result.
#![allow(clippy::unwrap_used, reason = "tests")]

use mesher::Outline;
use solver::SolveError;
use solver::model::{
    Coil, ConductorKind, Drive, Gauge, GaugeKind, Heating, Hold, MeshSettings, Mirrors, Model, Part, Stage, StageEnd,
    Turn, Water,
};
use solver::observe::Silent;
use validation::models;

const NAN: f64 = f64::NAN;
const INF: f64 = f64::INFINITY;
const SOLID: ConductorKind = ConductorKind::Solid;
const STRANDED: ConductorKind = ConductorKind::Stranded { fill: 0.8 };

fn rectangle(lo: [f64; 2], hi: [f64; 2]) -> Outline {
    Outline::rectangle(lo, hi).unwrap()
}

fn bar() -> Part {
    models::part("bar", rectangle([0.0, -0.02], [0.02, 0.02]), models::material(1e-6, 1.0).unwrap())
}

fn coil(conductor: ConductorKind) -> Coil {
    models::coil(vec![rectangle([0.03, -0.01], [0.035, 0.01])], models::material(1.7e-8, 1.0).unwrap(), conductor)
}

/// A bar in one turn, changed.
fn device(conductor: ConductorKind, change: impl Fn(&mut Model)) -> Model {
    let mut model = models::with_coil(vec![bar()], vec![coil(conductor)], 1000.0, Mirrors::None);
    change(&mut model);
    model
}

/// Parts in a uniform field, changed.
fn in_field(parts: Vec<Part>, change: impl Fn(&mut Model)) -> Model {
    let mut model = models::in_field(parts, 1000.0, 1e4, Mirrors::None);
    change(&mut model);
    model
}

fn frequency(model: &mut Model, hertz: f64) {
    match &mut model.drive {
        Drive::Supply { frequency_hz, .. } | Drive::AppliedField { frequency_hz, .. } => *frequency_hz = hertz,
    }
}

fn hold(model: &mut Model, what: Hold) {
    if let Drive::Supply { hold, .. } = &mut model.drive {
        *hold = what;
    }
}

fn refusal(model: &Model) -> Result<SolveError, String> {
    match solver::run(model, &Silent) {
        Err(error) => Ok(error),
        Ok(results) => Err(format!("{:?}, {:?}", results.outcome, results.states[0].electrical.terminals)),
    }
}

/// Every model is refused, with something to read.
fn all_are_refused(table: Vec<(&str, Model)>) {
    let accepted: Vec<String> = table
        .into_iter()
        .filter_map(|(name, model)| match refusal(&model) {
            Ok(error) if error.to_string().is_empty() => Some(format!("{name}: an empty message")),
            Ok(_) => None,
            Err(found) => Some(format!("{name}: {found}")),
        })
        .collect();
    assert!(accepted.is_empty(), "{accepted:#?}");
}

fn mesh(change: impl Fn(&mut MeshSettings)) -> Model {
    device(SOLID, |m| change(&mut m.mesh))
}

#[test]
fn an_empty_model_or_an_impossible_mesh_is_refused() {
    let two = |lower_m, upper_m| Mirrors::Two { lower_m, upper_m };
    all_are_refused(vec![
        ("no part", in_field(vec![], |_| ())),
        ("no part, one mirror", in_field(vec![], |m| m.mirrors = Mirrors::One { z_m: 0.0 })),
        ("no part, two mirrors", in_field(vec![], |m| m.mirrors = two(0.0, 0.01))),
        (
            "neither part nor turn",
            device(SOLID, |m| {
                m.parts.clear();
                m.coils[0].turns.clear();
            }),
        ),
        ("fineness not a number", mesh(|s| s.fineness = NAN)),
        ("fineness 0", mesh(|s| s.fineness = 0.0)),
        ("fineness below 0", mesh(|s| s.fineness = -1.0)),
        ("fineness infinite", mesh(|s| s.fineness = INF)),
        ("layers not a number", mesh(|s| s.per_skin_depth = NAN)),
        ("boundary not a number", mesh(|s| s.boundary_factor = NAN)),
        ("boundary below 0", mesh(|s| s.boundary_factor = -1.0)),
        ("boundary infinite", mesh(|s| s.boundary_factor = INF)),
        ("mirrors that coincide", device(SOLID, |m| m.mirrors = two(0.0, 0.0))),
        ("a mirror that is not a number", device(SOLID, |m| m.mirrors = two(NAN, 1.0))),
        ("a single mirror that is not a number", device(SOLID, |m| m.mirrors = Mirrors::One { z_m: NAN })),
    ]);
}

#[test]
fn a_frequency_that_is_not_a_number_or_infinite_is_refused() {
    for hertz in [NAN, INF] {
        all_are_refused(vec![
            ("solid", device(SOLID, |m| frequency(m, hertz))),
            ("stranded", device(STRANDED, |m| frequency(m, hertz))),
            ("field", in_field(vec![bar()], |m| frequency(m, hertz))),
        ]);
    }
}

#[test]
fn a_turn_on_the_axis_is_refused() {
    for inner in [0.0, -0.01] {
        for kind in [SOLID, STRANDED] {
            let outline = rectangle([inner, -0.01], [0.02, 0.01]);
            let model = device(kind, |m| {
                m.parts.clear();
                let turn = Turn { outline: outline.clone(), bore: None, centre: [0.01, 0.0] };
                m.coils[0].turns = vec![turn];
            });
            assert!(matches!(refusal(&model), Ok(SolveError::TurnOnAxis { turn: 1, .. })));
        }
    }
}

#[test]
fn a_quantity_that_nothing_takes_up_is_refused() {
    let insulator = device(SOLID, |m| {
        m.parts[0].material = models::material(INF, 1.0).unwrap();
        hold(m, Hold::WorkpiecePower(1e3));
    });
    assert!(matches!(refusal(&insulator), Ok(SolveError::CannotHold { .. })));
}

/// A bar in one turn, heated for five seconds, changed.
fn heated(change: impl Fn(&mut Model, &mut Heating)) -> Model {
    device(SOLID, |m| {
        hold(m, Hold::CoilCurrent(2000.0));
        m.gauges = vec![Gauge { name: "core".to_owned(), kind: GaugeKind::Thermocouple, part: 0, at: [0.0, 0.0] }];
        let stage = Stage { name: "heat".to_owned(), end: StageEnd::After(5.0), hold: None };
        let mut heating = Heating { ambient_k: models::START_K, stages: vec![stage], step_tolerance_k: 2.0 };
        change(m, &mut heating);
        m.heating = Some(heating);
    })
}

#[test]
fn a_frequency_of_zero_or_below_is_refused() {
    for hertz in [0.0, -50.0] {
        all_are_refused(vec![
            ("solid", device(SOLID, |m| frequency(m, hertz))),
            ("stranded", device(STRANDED, |m| frequency(m, hertz))),
            ("field", in_field(vec![bar()], |m| frequency(m, hertz))),
        ]);
    }
}

#[test]
fn a_held_value_that_is_not_a_number_or_below_zero_is_refused() {
    for x in [NAN, -1.0, INF] {
        let applied = in_field(vec![bar()], |m| {
            m.drive = Drive::AppliedField { frequency_hz: 1000.0, field_a_per_m_rms: x };
        });
        let limited = device(SOLID, |m| {
            if let Drive::Supply { limits, .. } = &mut m.drive {
                limits.voltage_v_rms = Some(x);
            }
        });
        all_are_refused(vec![
            ("current", device(SOLID, |m| hold(m, Hold::CoilCurrent(x)))),
            ("voltage", device(SOLID, |m| hold(m, Hold::CoilVoltage(x)))),
            ("workpiece power", device(SOLID, |m| hold(m, Hold::WorkpiecePower(x)))),
            ("terminal power", device(SOLID, |m| hold(m, Hold::TerminalPower(x)))),
            ("applied field", applied),
            ("voltage limit", limited),
        ]);
    }
}

#[test]
fn a_coil_that_cannot_be_is_refused() {
    let water = |paths, inlet_k| Some(Water { paths, inlet_k, flow_per_path_m3_per_s: 1e-4 });
    let insulator = || models::material(INF, 1.0).unwrap();
    all_are_refused(vec![
        ("no turns", device(SOLID, |m| m.coils[0].turns.clear())),
        ("no coil", device(SOLID, |m| m.coils.clear())),
        ("a coil in an applied field", in_field(vec![bar()], |m| m.coils = vec![coil(SOLID)])),
        ("fill 0", device(ConductorKind::Stranded { fill: 0.0 }, |_| ())),
        ("fill above 1", device(ConductorKind::Stranded { fill: 1.5 }, |_| ())),
        ("fill not a number", device(ConductorKind::Stranded { fill: NAN }, |_| ())),
        ("solid insulator", device(SOLID, |m| m.coils[0].material = insulator())),
        ("stranded insulator", device(STRANDED, |m| m.coils[0].material = insulator())),
        ("temperature not a number", device(SOLID, |m| m.coils[0].temperature_k = NAN)),
        ("no water path", device(SOLID, |m| m.coils[0].water = water(0, 293.0))),
        ("water inlet not a number", device(SOLID, |m| m.coils[0].water = water(1, NAN))),
    ]);
}

#[test]
fn a_section_that_cannot_be_is_refused() {
    let two = |lower_m, upper_m| Mirrors::Two { lower_m, upper_m };
    all_are_refused(vec![
        ("order 0", mesh(|s| s.order = 0)),
        ("order 4", mesh(|s| s.order = 4)),
        ("no layers", mesh(|s| s.per_skin_depth = 0.0)),
        ("boundary inside the device", mesh(|s| s.boundary_factor = 0.5)),
        ("mirrors in reverse order", device(SOLID, |m| m.mirrors = two(0.005, -0.005))),
        ("mirrors beyond the device", device(SOLID, |m| m.mirrors = two(1.0, 2.0))),
        ("a mirror above the device", device(STRANDED, |m| m.mirrors = Mirrors::One { z_m: 1.0 })),
        ("start temperature not a number", device(SOLID, |m| m.parts[0].start_k = NAN)),
    ]);
}

#[test]
fn a_heating_that_cannot_be_is_refused() {
    let goal = |gauge, at_k, at_most_s| StageEnd::GaugeReaches { gauge, at_k, at_most_s };
    let controller = |gauge| Some(Hold::GaugeTemperature { gauge, at_k: 400.0 });
    all_are_refused(vec![
        ("no stages", heated(|_, h| h.stages.clear())),
        ("stage of no number", heated(|_, h| h.stages[0].end = StageEnd::After(NAN))),
        ("stage without end", heated(|_, h| h.stages[0].end = StageEnd::After(INF))),
        ("stage below 0", heated(|_, h| h.stages[0].end = StageEnd::After(-1.0))),
        ("goal of a gauge that is not there", heated(|_, h| h.stages[0].end = goal(9, 400.0, 2.0))),
        ("goal not a number", heated(|_, h| h.stages[0].end = goal(0, NAN, 2.0))),
        ("controller on a gauge that is not there", heated(|_, h| h.stages[0].hold = controller(9))),
        ("gauge of a part that is not there", heated(|m, _| m.gauges[0].part = 7)),
        ("step tolerance 0", heated(|_, h| h.step_tolerance_k = 0.0)),
        ("step tolerance not a number", heated(|_, h| h.step_tolerance_k = NAN)),
        ("ambient not a number", heated(|_, h| h.ambient_k = NAN)),
        ("start below 0 K", heated(|m, _| m.parts[0].start_k = -1.0)),
        ("emissivity above 1", heated(|m, _| m.parts[0].surface.emissivity = 1.5)),
        ("convection below 0", heated(|m, _| m.parts[0].surface.convection_w_per_m2_k = -1.0)),
        (
            "no part at all",
            heated(|m, _| {
                m.parts.clear();
                m.gauges.clear();
            }),
        ),
    ]);
}
