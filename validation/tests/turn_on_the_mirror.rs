//! A turn that the mirror plane cuts: half of it is solved, and every number is that of the whole device.
//!
//! Two different meshes of the same device, so the numbers agree to what the mesh leaves: 0.1 % as for any mirrored half.
#![allow(clippy::unwrap_used, reason = "tests")]

use mesher::Outline;
use solver::model::{ConductorKind, Mirrors, Model};
use solver::observe::Silent;
use solver::results::Results;
use validation::models;

const TURNS: usize = 5;

/// A bar of 50 mm by 100 mm in five solid or stranded turns, round or tubular; turn 3 is centred on z = 0.
fn device(kind: ConductorKind, tubes: bool, mirrors: Mirrors) -> Model {
    let pitch = 0.016;
    let centre = |k: usize| [0.04, pitch * (k as f64 - 2.0)];
    let copper = models::material(1.9e-8, 1.0).unwrap();
    let outlines = (0..TURNS).map(|k| Outline::circle(centre(k), 0.006).unwrap()).collect();
    let mut coil = models::coil(outlines, copper, kind);
    if tubes {
        for (k, turn) in coil.turns.iter_mut().enumerate() {
            turn.bore = Some(Outline::circle(centre(k), 0.004).unwrap());
        }
    }
    let bar = Outline::rectangle([0.0, -0.05], [0.025, 0.05]).unwrap();
    let steel = models::material(1.2e-6, 1.0).unwrap();
    models::with_coil(vec![models::part("bar", bar, steel)], vec![coil], 3000.0, mirrors)
}

fn near(what: &str, whole: f64, half: f64) {
    assert!((half / whole - 1.0).abs() < 1e-3, "{what}: whole {whole:.6e}, mirrored {half:.6e}");
}

fn compare(whole: &Results, half: &Results) {
    let (a, b) = (&whole.states[0].electrical, &half.states[0].electrical);
    let (ta, tb) = (a.terminals.unwrap(), b.terminals.unwrap());
    near("R", ta.resistance_ohm, tb.resistance_ohm);
    near("L", ta.inductance_h, tb.inductance_h);
    near("V", ta.voltage_v_rms, tb.voltage_v_rms);
    near("coil loss", a.coils[0].loss_w, b.coils[0].loss_w);
    near("workpiece power", a.workpiece_power_w, b.workpiece_power_w);
    near("energy", a.stored_energy_j, b.stored_energy_j);
    assert!(b.power_balance_relative < 1e-9, "balance {:.2e}", b.power_balance_relative);
    assert_eq!(whole.turns.len(), TURNS);
    assert_eq!(half.turns.len(), TURNS, "rows of turns of the mirrored half");
    for (x, y) in whole.turns.iter().zip(&half.turns) {
        let turn = x.turn;
        assert_eq!((turn, x.r_m, x.z_m), (y.turn, y.r_m, y.z_m));
        for (what, p, q) in [
            ("current", x.current_a_rms, y.current_a_rms),
            ("voltage", x.voltage_v_rms, y.voltage_v_rms),
            ("loss", x.loss_w, y.loss_w),
            ("length", x.length_m, y.length_m),
            ("mass", x.mass_kg, y.mass_kg),
        ] {
            near(&format!("{what} of turn {turn}"), p, q);
        }
    }
    let sum: f64 = half.turns.iter().map(|t| t.loss_w).sum();
    assert!((sum / b.coils[0].loss_w - 1.0).abs() < 1e-9, "turns {sum:.6e}, coil {:.6e}", b.coils[0].loss_w);
}

fn whole_and_half(kind: ConductorKind, tubes: bool) -> (Results, Results) {
    let solve = |mirrors| solver::run(&device(kind, tubes, mirrors), &Silent).unwrap();
    (solve(Mirrors::None), solve(Mirrors::One { z_m: 0.0 }))
}

#[test]
fn an_odd_number_of_solid_turns_mirrored_is_the_whole_coil() {
    let (whole, half) = whole_and_half(ConductorKind::Solid, false);
    compare(&whole, &half);
}

#[test]
fn an_odd_number_of_tubular_turns_mirrored_is_the_whole_coil() {
    let (whole, half) = whole_and_half(ConductorKind::Solid, true);
    compare(&whole, &half);
}

#[test]
fn an_odd_number_of_stranded_turns_mirrored_is_the_whole_coil() {
    let (whole, half) = whole_and_half(ConductorKind::Stranded { fill: 0.7 }, false);
    compare(&whole, &half);
}

#[test]
fn a_single_turn_cut_by_the_mirror_is_the_whole_turn() {
    for kind in [ConductorKind::Solid, ConductorKind::Stranded { fill: 0.7 }] {
        let solve = |mirrors| {
            let outline = Outline::rounded_rectangle([0.04, -0.008], [0.05, 0.008], 0.001).unwrap();
            let coil = models::coil(vec![outline], models::material(1.9e-8, 1.0).unwrap(), kind);
            let model = models::with_coil(vec![], vec![coil], 3000.0, mirrors);
            solver::run(&model, &Silent).unwrap().states[0].electrical.terminals.unwrap()
        };
        let (whole, half) = (solve(Mirrors::None), solve(Mirrors::One { z_m: 0.0 }));
        near("R", whole.resistance_ohm, half.resistance_ohm);
        near("L", whole.inductance_h, half.inductance_h);
    }
}
