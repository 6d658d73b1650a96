//! What keys mean: units, defaults, materials, supply, stages, gauges and mirror planes, down to the model.
#![allow(clippy::unwrap_used, clippy::panic, reason = "tests")]

use coilwright::job::Job;
use coilwright::lower::lower;
use serde_json::{Value, json};
use solver::model::{Drive, Face, FaceCondition, GaugeKind, Hold, Limits, Mirrors, Model, Role, StageEnd, Surface};

const BAR: &str = include_str!("../examples/bar-heater.json");
const SLICE: &str = include_str!("../examples/tube-in-slice.json");
const DISC: &str = include_str!("../examples/disc-over-pancake.json");
const SPHERE: &str = include_str!("../examples/sphere-in-uniform-field.json");

fn model(text: &str) -> Model {
    lower(&Job::parse(text, "job.json").unwrap()).unwrap_or_else(|error| panic!("{error}"))
}

fn bar_with(pointer: &str, new: Value) -> Model {
    let mut value: Value = serde_json::from_str(BAR).unwrap();
    let (parent, key) = pointer.rsplit_once('/').unwrap();
    match value.pointer_mut(parent).unwrap() {
        Value::Object(object) => drop(object.insert(key.to_owned(), new)),
        other => panic!("{pointer} is in {other}"),
    }
    model(&value.to_string())
}

fn close(found: f64, wanted: f64) {
    assert!((found - wanted).abs() <= 1e-12 * wanted.abs(), "{found}, expected {wanted}");
}

#[test]
fn the_bar_heater_means_what_it_says() {
    let bar = model(BAR);
    let Drive::Supply { frequency_hz, hold, limits } = &bar.drive else { panic!("{:?}", bar.drive) };
    close(*frequency_hz, 3000.0);
    assert_eq!(*hold, Hold::WorkpiecePower(22e3));
    assert_eq!(*limits, Limits { voltage_v_rms: Some(800.0), current_a_rms: Some(3000.0), power_w: None });
    assert_eq!(bar.parts[0].material.name, "C45");
    assert_eq!((bar.parts[0].role, bar.parts[1].role), (Role::Workpiece, Role::Lining));
    assert_eq!(bar.parts[0].surface, Surface { emissivity: 0.8, convection_w_per_m2_k: 10.0 });
    let [(Face::Outside, FaceCondition::HeldAt(held))] = bar.parts[1].faces[..] else {
        panic!("{:?}", bar.parts[1].faces)
    };
    close(held, 333.15);
    let water = bar.coils[0].water.unwrap();
    assert_eq!(water.paths, 2);
    close(water.flow_per_path_m3_per_s, 1e-4);
    close(bar.coils[0].temperature_k, 323.15);
    let heating = bar.heating.unwrap();
    close(heating.ambient_k, 298.15);
    close(bar.start_k, 293.15);
    let StageEnd::GaugeReaches { gauge, at_k, at_most_s } = heating.stages[0].end else { panic!() };
    assert_eq!(bar.gauges[gauge].name, "surface");
    close(at_k, 1473.15);
    close(at_most_s, 600.0);
    assert_eq!(heating.stages[1].end, StageEnd::After(20.0));
    assert!(
        matches!(heating.stages[1].hold, Some(Hold::GaugeTemperature { gauge: 1, at_k }) if (at_k - 1473.15).abs() < 1e-9)
    );
    assert_eq!(bar.gauges[1].kind, GaugeKind::Pyrometer);
    close(bar.gauges[1].at[0], 0.03);
    assert_eq!(bar.gauges[0].at, [0.0, 0.0]);
}

#[test]
fn copper_is_fifteen_kelvin_over_its_water_and_fifty_degrees_without() {
    let mut value: Value = serde_json::from_str(BAR).unwrap();
    value["coils"][0].as_object_mut().unwrap().shift_remove("temperature");
    close(model(&value.to_string()).coils[0].temperature_k, 273.15 + 40.0);
    value["coils"][0].as_object_mut().unwrap().shift_remove("water");
    close(model(&value.to_string()).coils[0].temperature_k, 273.15 + 50.0);
}

#[test]
fn emissivity_is_that_of_the_surface_then_of_the_material() {
    let of_material = solver::material::library().unwrap().find("C45").unwrap().emissivity.unwrap_or(0.8);
    let plain = bar_with("/parts/0/surface", json!({ "convection": "25 W/(m² K)" })).parts.remove(0).surface;
    assert_eq!(plain, Surface { emissivity: of_material, convection_w_per_m2_k: 25.0 });
    let data = json!({ "name": "brick", "density": "2000 kg/m3", "thermal_conductivity": "1 W/m/K", "specific_heat": "1000 J/kg/K" });
    let bare = bar_with("/parts/1/material", data.clone());
    close(bare.parts[1].surface.emissivity, 0.8);
    assert!(bare.parts[1].material.resistivity.is_none());
    let mut painted = data;
    painted["emissivity"] = json!(0.3);
    close(bar_with("/parts/1/material", painted).parts[1].surface.emissivity, 0.3);
}

#[test]
fn a_permeability_of_the_part_replaces_that_of_the_material() {
    let steel = bar_with("/parts/0/relative_permeability", json!(25)).parts.remove(0).material;
    close(steel.relative_permeability(293.15), 25.0);
    close(steel.relative_permeability(1500.0), 1.0);
    let mut value: Value = serde_json::from_str(SPHERE).unwrap();
    value["parts"][0]["relative_permeability"] = json!(50);
    let aluminium = model(&value.to_string()).parts.remove(0).material;
    close(aluminium.relative_permeability(293.15), 50.0);
    close(aluminium.relative_permeability(1500.0), 50.0);
}

#[test]
fn holds_limits_and_faces_of_every_kind_are_read() {
    for (written, wanted) in [
        (json!({ "coil_current": "1.2 kA" }), Hold::CoilCurrent(1200.0)),
        (json!({ "coil_voltage": "400 V", "note": "why" }), Hold::CoilVoltage(400.0)),
        (json!({ "terminal_power": "0.03 MW" }), Hold::TerminalPower(30e3)),
    ] {
        let Drive::Supply { hold, .. } = bar_with("/supply/hold", written).drive else { panic!() };
        assert_eq!(hold, wanted);
    }
    let off = bar_with("/heating/stages", json!([{ "name": "cool", "for": "2 min", "hold": "off" }])).heating.unwrap();
    assert_eq!(off.stages[0].hold, Some(Hold::Off));
    let faces = [
        (json!("insulated"), FaceCondition::Insulated),
        (json!({ "flux": "2 kW/cm2" }), FaceCondition::Flux(2e7)),
        (
            json!({ "emissivity": 0.5 }),
            FaceCondition::Exchange(Surface { emissivity: 0.5, convection_w_per_m2_k: 10.0 }),
        ),
    ];
    for (written, wanted) in faces {
        assert_eq!(bar_with("/parts/0/top", written).parts[0].faces, [(Face::Top, wanted)]);
    }
}

#[test]
fn applied_field_and_planes_reach_the_model() {
    let sphere = model(SPHERE);
    assert_eq!(sphere.drive, Drive::AppliedField { frequency_hz: 1000.0, field_a_per_m_rms: 50e3 });
    assert_eq!(sphere.mirrors, Mirrors::One { z_m: 0.0 });
    assert!(sphere.coils.is_empty() && sphere.heating.is_none());
    let slice = model(SLICE);
    assert_eq!(slice.mirrors, Mirrors::Two { lower_m: -0.05, upper_m: 0.05 });
    assert_eq!(slice.coils[0].turns.len(), 5);
    let points: Vec<_> = slice.gauges.iter().map(|gauge| gauge.at[0]).collect();
    for (found, wanted) in points.into_iter().zip([0.0235, 0.025, 0.022]) {
        close(found, wanted);
    }
    assert_eq!(model(DISC).coils[0].turns.len(), 16);
}

#[test]
fn gauges_below_the_one_plane_are_mirrored_up() {
    let mut value: Value = serde_json::from_str(BAR).unwrap();
    value["mirror_planes"] = json!(["0 mm"]);
    value["thermocouples"][0]["z"] = json!("-80 mm");
    value["pyrometers"][0] = json!({ "name": "surface", "part": "billet", "face": "bottom", "r": "10 mm" });
    let gauges = model(&value.to_string()).gauges;
    close(gauges[0].at[1], 0.08);
    close(gauges[1].at[0], 0.01);
    close(gauges[1].at[1], 0.1);
}

#[test]
fn pyrometers_find_the_surface_of_curved_parts() {
    let sphere = |face: &str, key: &str, value: &str| {
        let gauge = json!({ "name": "eye", "part": "ball", "face": face, key: value });
        let job = json!({
            "title": "ball", "supply": { "frequency": "1 kHz", "applied_field": "1 A/cm" }, "pyrometers": [gauge],
            "parts": [{ "name": "ball", "role": "workpiece", "material": "copper", "shape": { "sphere": { "diameter": "20 mm" } } }]
        });
        model(&job.to_string()).gauges.remove(0).at
    };
    let near = |found: [f64; 2], wanted: [f64; 2]| {
        assert!(
            (found[0] - wanted[0]).abs() < 1e-12 && (found[1] - wanted[1]).abs() < 1e-12,
            "{found:?}, expected {wanted:?}"
        );
    };
    near(sphere("outer", "z", "6 mm"), [8e-3, 6e-3]);
    near(sphere("outside", "z", "-6 mm"), [8e-3, -6e-3]);
    near(sphere("top", "r", "6 mm"), [6e-3, 8e-3]);
    near(sphere("bottom", "r", "0 mm"), [0.0, -10e-3]);
}
