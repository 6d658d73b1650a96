//! Every shape, winding and conductor becomes the outlines it should: areas and positions by elementary geometry.
#![allow(clippy::unwrap_used, clippy::panic, reason = "tests")]

use std::f64::consts::PI;

use coilwright::job::Job;
use coilwright::lower::lower;
use serde_json::{Value, json};
use solver::model::{Coil, ConductorKind, Model, Part};

fn model(job: &Value) -> Model {
    lower(&Job::parse(&job.to_string(), "job.json").unwrap()).unwrap_or_else(|error| panic!("{error}"))
}

fn job(parts: &Value, coils: &Value) -> Value {
    json!({
        "title": "shapes", "parts": parts, "coils": coils,
        "supply": { "frequency": "1 kHz", "hold": { "coil_current": "1 A" } }
    })
}

fn part(shape: &Value) -> Part {
    let coil = json!([{ "name": "far", "winding": { "placed_turns": [["1 m", "0 mm"]] }, "conductor": { "round_wire": { "diameter": "1 mm" } } }]);
    let parts = json!([{ "name": "it", "role": "workpiece", "material": "copper", "shape": shape }]);
    model(&job(&parts, &coil)).parts.remove(0)
}

fn coil(winding: &Value, conductor: &Value) -> Coil {
    let parts = json!([{ "name": "far", "role": "workpiece", "material": "copper",
        "shape": { "sphere": { "diameter": "1 mm", "centre": "-2 m" } } }]);
    model(&job(&parts, &json!([{ "name": "it", "winding": winding, "conductor": conductor }]))).coils.remove(0)
}

fn check(part: &Part, area_mm2: f64, low_mm: [f64; 2], high_mm: [f64; 2]) {
    let (low, high) = part.outline.bounds();
    let area = 1e6 * part.outline.area();
    assert!((area - area_mm2).abs() < 1e-6 * area_mm2, "area {area} mm2, expected {area_mm2}");
    for (found, wanted) in low.into_iter().chain(high).zip(low_mm.into_iter().chain(high_mm)) {
        assert!((1e3 * found - wanted).abs() < 1e-9, "bounds {low:?} {high:?}, expected {low_mm:?} {high_mm:?} mm");
    }
}

#[test]
fn cylinders_and_discs_are_rectangles_on_the_axis() {
    check(
        &part(&json!({ "cylinder": { "diameter": "60 mm", "length": "200 mm" } })),
        6000.0,
        [0.0, -100.0],
        [30.0, 100.0],
    );
    let centred = json!({ "cylinder": { "diameter": "6 cm", "length": "0.2 m", "centre": "50 mm" } });
    check(&part(&centred), 6000.0, [0.0, -50.0], [30.0, 150.0]);
    let between = json!({ "cylinder": { "diameter": "60 mm", "from": "10 mm", "to": "2 in" } });
    check(&part(&between), 30.0 * 40.8, [0.0, 10.0], [30.0, 50.8]);
    let upwards = json!({ "disc": { "diameter": "60 mm", "thickness": "5 mm", "from": "1 mm" } });
    check(&part(&upwards), 150.0, [0.0, 1.0], [30.0, 6.0]);
    let downwards = json!({ "disc": { "diameter": "60 mm", "thickness": "5 mm", "to": "1 mm" } });
    check(&part(&downwards), 150.0, [0.0, -4.0], [30.0, 1.0]);
}

#[test]
fn tubes_and_rings_are_rectangles_off_the_axis() {
    let tube = json!({ "tube": { "inner_diameter": "66 mm", "outer_diameter": "76 mm", "length": "240 mm" } });
    check(&part(&tube), 5.0 * 240.0, [33.0, -120.0], [38.0, 120.0]);
    let ring = json!({ "ring": { "inner_diameter": "66 mm", "outer_diameter": "76 mm", "thickness": "4 mm", "centre": "-7 mm" } });
    check(&part(&ring), 20.0, [33.0, -9.0], [38.0, -5.0]);
}

#[test]
fn spheres_are_half_discs_and_cones_trapezia() {
    let sphere = json!({ "sphere": { "diameter": "40 mm", "centre": "3 mm" } });
    check(&part(&sphere), 0.5 * PI * 400.0, [0.0, -17.0], [20.0, 23.0]);
    let frustum = json!({ "cone": { "bottom_diameter": "40 mm", "top_diameter": "20 mm", "length": "30 mm" } });
    check(&part(&frustum), 15.0 * 30.0, [0.0, -15.0], [20.0, 15.0]);
    let pointed = json!({ "cone": { "bottom_diameter": "40 mm", "top_diameter": "0 mm", "length": "30 mm" } });
    check(&part(&pointed), 10.0 * 30.0, [0.0, -15.0], [20.0, 15.0]);
    let inverted = json!({ "cone": { "bottom_diameter": "0 mm", "top_diameter": "40 mm", "length": "30 mm" } });
    check(&part(&inverted), 10.0 * 30.0, [0.0, -15.0], [20.0, 15.0]);
}

#[test]
fn profiles_follow_their_points_arcs_and_corners_either_way_round() {
    let square = [["10 mm", "0 mm"], ["30 mm", "0 mm"], ["30 mm", "20 mm"], ["10 mm", "20 mm"]];
    check(&part(&json!({ "profile": square })), 400.0, [10.0, 0.0], [30.0, 20.0]);
    let mut back = square;
    back.reverse();
    check(&part(&json!({ "profile": back })), 400.0, [10.0, 0.0], [30.0, 20.0]);

    let arc =
        json!({ "arc": { "to": ["0 mm", "20 mm"], "centre": ["0 mm", "0 mm"], "direction": "counter-clockwise" } });
    check(&part(&json!({ "profile": [["0 mm", "-20 mm"], arc] })), 0.5 * PI * 400.0, [0.0, -20.0], [20.0, 20.0]);

    let fillet = |r: &str, z: &str| json!({ "fillet": { "at": [r, z], "radius": "5 mm" } });
    let filleted = json!({ "profile": [["10 mm", "0 mm"], fillet("30 mm", "0 mm"), fillet("30 mm", "20 mm"), ["10 mm", "20 mm"]] });
    check(&part(&filleted), 400.0 - 2.0 * (25.0 - 0.25 * PI * 25.0), [10.0, 0.0], [30.0, 20.0]);
    let backwards = json!({ "profile": [["10 mm", "20 mm"], fillet("30 mm", "20 mm"), fillet("30 mm", "0 mm"), ["10 mm", "0 mm"]] });
    check(&part(&backwards), 400.0 - 2.0 * (25.0 - 0.25 * PI * 25.0), [10.0, 0.0], [30.0, 20.0]);

    let chamfer = json!({ "chamfer": { "at": ["30 mm", "20 mm"], "size": "4 mm" } });
    let chamfered = json!({ "profile": [["10 mm", "0 mm"], ["30 mm", "0 mm"], chamfer, ["10 mm", "20 mm"]] });
    check(&part(&chamfered), 400.0 - 8.0, [10.0, 0.0], [30.0, 20.0]);
    let first = json!({ "profile": [chamfer, ["10 mm", "20 mm"], ["10 mm", "0 mm"], ["30 mm", "0 mm"]] });
    check(&part(&first), 400.0 - 8.0, [10.0, 0.0], [30.0, 20.0]);
}

#[test]
fn a_fillet_at_an_acute_corner_removes_the_area_of_geometry() {
    // Corner of 60 degrees: a fillet of radius R removes R^2 (cot 30 - (180 - 60)/2 in radians).
    let corner = json!({ "fillet": { "at": ["40 mm", "0 mm"], "radius": "3 mm" } });
    let triangle = json!({ "profile": [["10 mm", "0 mm"], corner, ["25 mm", "25.980762113533160 mm"]] });
    let whole = 0.5 * 30.0 * 25.980_762_113_533_16;
    let removed = 9.0 * (3.0_f64.sqrt() - PI / 3.0);
    let area = 1e6 * part(&triangle).outline.area();
    assert!((area - (whole - removed)).abs() < 1e-9, "area {area} mm2");
}

#[test]
fn corners_beside_arcs_are_rounded_and_cut() {
    // Quarter disc of radius 20: a fillet of 4 at the flat side touches it at sqrt((20 - 4)^2 - 4^2) mm.
    let arc = |key: &str, size: &str| {
        let mut arc = json!({ "to": ["0 mm", "20 mm"], "centre": ["0 mm", "0 mm"], "direction": "counter-clockwise" });
        if !key.is_empty() {
            arc[key] = json!(size);
        }
        json!({ "arc": arc })
    };
    let fillet = json!({ "fillet": { "at": ["20 mm", "0 mm"], "radius": "4 mm" } });
    let rounded = part(&json!({ "profile": [["0 mm", "0 mm"], fillet, arc("", "")] })).outline;
    let touch = 240f64.sqrt() * 1e-3;
    assert!((rounded.point(0, 1.0).unwrap()[0] - touch).abs() < 1e-12);
    // The same corner on the other side, at the end of the arc: the disc is its own mirror image.
    let top = part(&json!({ "profile": [["0 mm", "0 mm"], ["20 mm", "0 mm"], arc("fillet", "4 mm")] })).outline;
    assert!((top.area() - rounded.area()).abs() < 1e-15);
    let cut = part(&json!({ "profile": [["0 mm", "0 mm"], ["20 mm", "0 mm"], arc("chamfer", "4 mm")] })).outline;
    // The chamfer runs from 4 mm along the arc, an angle of 1/5, to 4 mm down the axis.
    let (angle, whole) = (0.2f64, 0.25 * PI * 400.0);
    let removed = 0.5 * 400.0 * angle - 0.5 * 16.0 * 20.0 * angle.sin();
    assert!((1e6 * cut.area() - (whole - removed)).abs() < 1e-9, "{} mm2", 1e6 * cut.area());
}

#[test]
fn an_arc_with_a_rounded_centre_ends_where_it_was_told() {
    let arc = json!({ "arc": { "to": ["7.0711 mm", "7.0711 mm"], "centre": ["0 mm", "0 mm"], "direction": "counter-clockwise" } });
    let area = 1e6 * part(&json!({ "profile": [["0 mm", "0 mm"], ["10 mm", "0 mm"], arc] })).outline.area();
    assert!((area - PI * 100.0 / 8.0).abs() < 2e-3, "area {area} mm2");
}

fn centres_mm(coil: &Coil) -> Vec<[f64; 2]> {
    coil.turns.iter().map(|turn| turn.centre.map(|x| (1e9 * x).round() / 1e6)).collect()
}

#[test]
fn a_helix_is_placed_from_copper_face_to_copper_face() {
    let tube = json!({ "rectangular_tube": { "axial": "14 mm", "radial": "10 mm", "wall": "1.5 mm" } });
    let it = coil(&json!({ "helix": { "turns": 12, "inner_diameter": "80 mm", "length": "240 mm" } }), &tube);
    assert_eq!(it.turns.len(), 12);
    let (low, high) = (it.turns[0].outline.bounds(), it.turns[11].outline.bounds());
    assert!((low.0[1] + 0.12).abs() < 1e-12 && (high.1[1] - 0.12).abs() < 1e-12);
    assert!((low.0[0] - 0.04).abs() < 1e-12 && (low.1[0] - 0.05).abs() < 1e-12);
    for pair in centres_mm(&it).windows(2) {
        assert!((pair[1][1] - pair[0][1] - 226.0 / 11.0).abs() < 2e-6);
    }
}

#[test]
fn a_helix_of_two_layers_is_wound_there_and_back() {
    let wire = json!({ "round_wire": { "diameter": "2 mm" } });
    let helix = json!({ "turns": 3, "inner_diameter": "20 mm", "pitch": "4 mm", "layers": 2, "layer_gap": "0.5 mm", "centre": "10 mm" });
    let wanted = [[11.0, 6.0], [11.0, 10.0], [11.0, 14.0], [13.5, 14.0], [13.5, 10.0], [13.5, 6.0]];
    assert_eq!(centres_mm(&coil(&json!({ "helix": helix }), &wire)), wanted);
}

#[test]
fn one_turn_needs_no_length_and_may_have_its_own() {
    let bar = json!({ "solid_bar": { "axial": "14 mm", "radial": "10 mm" } });
    for helix in [
        json!({ "turns": 1, "inner_diameter": "80 mm", "centre": "5 mm" }),
        json!({ "turns": 1, "inner_diameter": "80 mm", "centre": "5 mm", "length": "14 mm" }),
        json!({ "turns": 1, "inner_diameter": "80 mm", "centre": "5 mm", "pitch": "20 mm" }),
    ] {
        assert_eq!(centres_mm(&coil(&json!({ "helix": helix }), &bar)), [[45.0, 5.0]]);
    }
}

#[test]
fn a_pancake_is_placed_between_its_diameters() {
    let window = json!({ "stranded": { "axial": "4 mm", "radial": "4 mm", "fill": 0.6 } });
    let flat = coil(
        &json!({ "pancake": { "turns": 3, "inner_diameter": "40 mm", "outer_diameter": "80 mm", "centre": "1 mm" } }),
        &window,
    );
    assert_eq!(centres_mm(&flat), [[22.0, 1.0], [30.0, 1.0], [38.0, 1.0]]);
    assert_eq!(flat.conductor, ConductorKind::Stranded { fill: 0.6 });
    let double = json!({ "turns": 2, "inner_diameter": "40 mm", "pitch": "5 mm", "layers": 2, "layer_gap": "2 mm" });
    let wanted = [[22.0, -3.0], [27.0, -3.0], [27.0, 3.0], [22.0, 3.0]];
    assert_eq!(centres_mm(&coil(&json!({ "pancake": double }), &window)), wanted);
}

#[test]
fn placed_turns_stand_where_they_are_put() {
    let winding = json!({ "placed_turns": [["40 mm", "-10 mm"], ["45 mm", "12.5 mm"]] });
    let it = coil(&winding, &json!({ "round_tube": { "diameter": "8 mm", "wall": "1 mm" } }));
    assert_eq!(centres_mm(&it), [[40.0, -10.0], [45.0, 12.5]]);
}

#[test]
fn conductors_have_the_copper_area_of_their_section() {
    let winding = json!({ "placed_turns": [["40 mm", "0 mm"]] });
    let area = |conductor: Value| {
        let turn = coil(&winding, &conductor).turns.remove(0);
        1e6 * (turn.outline.area() - turn.bore.map_or(0.0, |bore| bore.area()))
    };
    let close =
        |found: f64, wanted: f64| assert!((found - wanted).abs() < 1e-9 * wanted, "{found} mm2, expected {wanted}");
    close(area(json!({ "rectangular_tube": { "axial": "14 mm", "radial": "10 mm", "wall": "1.5 mm" } })), 140.0 - 77.0);
    let rounded = json!({ "rectangular_tube": { "axial": "14 mm", "radial": "10 mm", "wall": "1.5 mm", "corner_radius": "2 mm" } });
    close(area(rounded), 140.0 - (4.0 - PI) * 4.0 - (77.0 - (4.0 - PI) * 0.25));
    close(area(json!({ "round_tube": { "diameter": "8 mm", "wall": "1 mm" } })), PI * (16.0 - 9.0));
    close(area(json!({ "solid_bar": { "axial": "5 mm", "radial": "3 mm" } })), 15.0);
    close(area(json!({ "solid_bar": { "axial": "4 mm", "radial": "4 mm", "corner_radius": "2 mm" } })), PI * 4.0);
    close(area(json!({ "round_wire": { "diameter": "2 mm" } })), PI);
    close(area(json!({ "stranded": { "axial": "5 mm", "radial": "3 mm", "fill": 0.5 } })), 15.0);
}

#[test]
fn touching_bodies_are_accepted() {
    let parts = json!([
        { "name": "core", "role": "workpiece", "material": "C45", "shape": { "cylinder": { "diameter": "60 mm", "length": "0.1 m" } } },
        { "name": "shell", "role": "lining", "material": "mica",
          "shape": { "tube": { "inner_diameter": "6 cm", "outer_diameter": "70 mm", "from": "-50 mm", "to": "50 mm" } } }
    ]);
    let coils = json!([{ "name": "it", "winding": { "helix": { "turns": 5, "inner_diameter": "7 cm", "pitch": "9.3 mm" } },
        "conductor": { "solid_bar": { "axial": "9.3 mm", "radial": "3 mm" } } }]);
    let model = model(&job(&parts, &coils));
    assert_eq!((model.parts.len(), model.coils[0].turns.len()), (2, 5));
}
