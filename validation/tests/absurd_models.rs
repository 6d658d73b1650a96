//! Models that make no sense: each is refused with a typed error, without a panic and without numbers that look like a
//! result.
#![allow(clippy::unwrap_used, reason = "tests")]

use mesher::Outline;
use solver::SolveError;
use solver::model::{Coil, ConductorKind, Drive, Hold, MeshSettings, Mirrors, Model, Part, Turn};
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
