//! The filled job, the schema, and texts damaged at random.
#![allow(clippy::unwrap_used, clippy::panic, reason = "tests")]

use coilwright::job::{Job, schema};
use coilwright::lower::lower;
use serde_json::{Value, json};

const EXAMPLES: [&str; 4] = [
    include_str!("../examples/bar-heater.json"),
    include_str!("../examples/tube-in-slice.json"),
    include_str!("../examples/disc-over-pancake.json"),
    include_str!("../examples/sphere-in-uniform-field.json"),
];

/// A job that leaves out whatever has a default, with remarks and a material of its own.
fn sparse() -> String {
    let brick = json!({
        "name": "brick", "density": "2000 kg/m3", "note": "kept",
        "thermal_conductivity": { "unit": "W/m/K", "table": [[20, 1.0], [1000, 1.2]], "source": { "text": "own", "note": "also kept" } },
        "specific_heat": "1000 J/kg/K"
    });
    json!({
        "title": "sparse", "note": "at the top",
        "parts": [
            { "name": "bar", "role": "workpiece", "material": "1045",
              "shape": { "note": "in the shape", "cylinder": { "diameter": "60 mm", "length": "200 mm", "note": "in the cylinder" } } },
            { "name": "brick", "role": "lining", "material": brick, "inside": {},
              "shape": { "tube": { "inner_diameter": "62 mm", "outer_diameter": "72 mm", "from": "-80 mm", "length": "160 mm" } } }
        ],
        "coils": [
            { "name": "wet", "winding": { "helix": { "turns": 4, "inner_diameter": "80 mm", "pitch": "20 mm" } },
              "conductor": { "round_tube": { "diameter": "8 mm", "wall": "1 mm" } },
              "water": { "inlet": "77 °F", "flow_per_path": "1 gal/min" } },
            { "name": "dry", "winding": { "pancake": { "turns": 2, "inner_diameter": "80 mm", "pitch": "20 mm", "centre": "150 mm" } },
              "conductor": { "solid_bar": { "axial": "8 mm", "radial": "6 mm" } } }
        ],
        "supply": { "frequency": "3 kHz", "hold": { "coil_current": "1 kA", "note": "in the hold" } },
        "heating": { "stages": [{ "name": "heat", "for": "1 min", "note": "in the stage" }] }
    })
    .to_string()
}

#[test]
fn a_filled_job_means_the_same_and_stays_as_it_is() {
    for text in EXAMPLES.iter().map(|text| (*text).to_owned()).chain([sparse()]) {
        let job = Job::parse(&text, "job.json").unwrap_or_else(|error| panic!("{error}"));
        let filled = job.filled();
        let again = Job::parse(&filled.to_string(), "job.json").unwrap_or_else(|error| panic!("{error}\n{filled:#}"));
        let (first, second) = (lower(&job).unwrap_or_else(|error| panic!("{error}")), lower(&again).unwrap());
        assert_eq!(format!("{first:?}"), format!("{second:?}"));
        assert_eq!(filled, again.filled());
    }
}

#[test]
fn a_filled_job_writes_out_defaults_and_keeps_names_and_remarks() {
    let filled = Job::parse(&sparse(), "job.json").unwrap().filled();
    let at = |pointer: &str| filled.pointer(pointer).cloned().unwrap_or(Value::Null);
    assert_eq!(at("/parts/0/material"), json!("1045"));
    assert_eq!(at("/parts/0/surface/convection"), json!("10 W/m2/K"));
    assert!(at("/parts/0/surface/emissivity").is_number());
    assert_eq!(at("/parts/0/start"), json!("20 °C"));
    assert_eq!(at("/parts/0/shape/cylinder/centre"), json!("0 mm"));
    assert_eq!(at("/parts/1/shape/tube/centre"), Value::Null);
    assert_eq!(at("/parts/1/inside"), json!({ "emissivity": 0.8, "convection": "10 W/m2/K" }));
    assert_eq!(at("/coils/0/temperature"), json!("40 °C"));
    assert_eq!(at("/coils/0/water/paths"), json!(1));
    assert_eq!(at("/coils/1/temperature"), json!("50 °C"));
    assert_eq!(at("/coils/1/connection"), json!("series"));
    assert_eq!(at("/heating/step_tolerance"), json!("2 K"));
    assert_eq!(at("/mesh"), json!({ "per_skin_depth": 3.0, "fineness": 1.0, "order": 2, "boundary_factor": 1.2 }));
    for (pointer, text) in [
        ("/note", "at the top"),
        ("/parts/0/shape/note", "in the shape"),
        ("/parts/0/shape/cylinder/note", "in the cylinder"),
        ("/parts/1/material/note", "kept"),
        ("/parts/1/material/thermal_conductivity/source/note", "also kept"),
        ("/supply/hold/note", "in the hold"),
        ("/heating/stages/0/note", "in the stage"),
    ] {
        assert_eq!(at(pointer), json!(text), "{pointer}");
    }
}

#[test]
fn the_schema_accepts_the_examples_and_refuses_what_the_reader_refuses() {
    let schema = schema();
    assert_eq!(schema["$schema"], json!("https://json-schema.org/draft/2020-12/schema"));
    let validator = jsonschema::draft202012::new(&schema).unwrap();
    for text in EXAMPLES.iter().map(|text| (*text).to_owned()).chain([sparse()]) {
        let value: Value = serde_json::from_str(&text).unwrap();
        let errors: Vec<_> = validator.iter_errors(&value).map(|error| error.to_string()).collect();
        assert!(errors.is_empty(), "{errors:?}");
        assert!(validator.is_valid(&Job::parse(&text, "job.json").unwrap().filled()));
    }
    let good: Value = serde_json::from_str(EXAMPLES[0]).unwrap();
    for (pointer, bad) in [
        ("/parts/0/shape/cylinder/diameter", json!(60)),
        ("/parts/0/shape/cylinder/diameter", json!("60")),
        ("/parts/0/role", json!("workpice")),
        ("/coils/0/winding/helix/turns", json!(12.5)),
        ("/coils/0/connection", json!("parallel")),
        ("/heating/stages", json!([])),
        ("/supply", json!({ "suply": 1 })),
        ("/parts/0/shape", json!({})),
    ] {
        let mut value = good.clone();
        *value.pointer_mut(pointer).unwrap() = bad;
        assert!(!validator.is_valid(&value), "{pointer} was accepted by the schema");
        assert!(!accepted(&value.to_string()), "{pointer} was accepted by the reader");
    }
}

#[test]
fn every_key_of_the_schema_is_described_and_every_quantity_names_its_units() {
    fn walk(value: &Value, path: &str, keys: &mut usize) {
        if let Some(properties) = value.get("properties").and_then(Value::as_object) {
            for (key, property) in properties {
                *keys += 1;
                let said = property.get("description").and_then(Value::as_str);
                assert!(said.is_some_and(|said| said.len() > 3), "{path}: {key} is not described");
            }
        }
        if let Some(units) = value.get("x-units").and_then(Value::as_array) {
            let said = value["description"].as_str().unwrap();
            assert!(units.iter().all(|unit| said.contains(unit.as_str().unwrap())), "{path}: {said}");
        }
        match value {
            Value::Object(object) => object.iter().for_each(|(key, inner)| walk(inner, &format!("{path}/{key}"), keys)),
            Value::Array(list) => {
                list.iter().enumerate().for_each(|(i, inner)| walk(inner, &format!("{path}/{i}"), keys));
            }
            _ => {}
        }
    }
    let mut keys = 0;
    walk(&schema(), "", &mut keys);
    assert!(keys > 150, "only {keys} keys");
}

/// A small generator of pseudo-random numbers (xorshift, G. Marsaglia, J. Stat. Software 8 (14), 2003).
struct Dice(u64);

impl Dice {
    fn below(&mut self, bound: usize) -> usize {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 % bound as u64) as usize
    }
}

/// Reads a text and, if it is a job, lowers it; gives whether it was accepted. A panic fails the test.
fn accepted(text: &str) -> bool {
    Job::parse(text, "job.json").is_ok_and(|job| lower(&job).map(|_| job.filled()).is_ok())
}

#[test]
fn cut_and_damaged_texts_never_panic() {
    let mut dice = Dice(0x9E37_79B9_7F4A_7C15);
    let pieces = [
        "\"",
        "{",
        "}",
        "[",
        "]",
        ",",
        ":",
        "-",
        "e",
        "0",
        "1e9",
        "mm",
        "null",
        "°C",
        "NaN",
        "\\u0000",
        " ",
        "99999999999",
    ];
    let (mut kept, mut refused) = (0, 0);
    for round in 0..4000 {
        let text = EXAMPLES[round % EXAMPLES.len()];
        let mut letters: Vec<char> = text.chars().collect();
        if round % 3 == 0 {
            letters.truncate(dice.below(letters.len()));
        }
        for _ in 0..=dice.below(3) {
            let at = dice.below(letters.len() + 1);
            match dice.below(3) {
                0 => letters.splice(at..at, pieces[dice.below(pieces.len())].chars()).for_each(drop),
                1 => drop(letters.drain(at..(at + dice.below(8)).min(letters.len()))),
                _ if at < letters.len() => letters[at] = char::from(32 + dice.below(90) as u8),
                _ => {}
            }
        }
        if accepted(&letters.into_iter().collect::<String>()) { kept += 1 } else { refused += 1 }
    }
    assert!(kept > 100 && refused > 1000, "{kept} accepted, {refused} refused");
}

#[test]
fn jobs_with_values_exchanged_at_random_never_panic() {
    fn leaves(value: &Value, path: String, found: &mut Vec<String>) {
        match value {
            Value::Object(object) => {
                object.iter().for_each(|(key, inner)| leaves(inner, format!("{path}/{key}"), found));
            }
            Value::Array(list) => {
                list.iter().enumerate().for_each(|(i, inner)| leaves(inner, format!("{path}/{i}"), found));
            }
            _ => found.push(path),
        }
    }
    let mut dice = Dice(42);
    let values = [
        json!("0 mm"),
        json!("-1 mm"),
        json!("1e-300 m"),
        json!("100 m"),
        json!("1 um"),
        json!("70 mm"),
        json!("1 Hz"),
        json!("10 MHz"),
        json!("0 K"),
        json!("4000 K"),
        json!("1 MW"),
        json!(""),
        json!("€"),
        json!(0),
        json!(-1),
        json!(1e308),
        json!(2000),
        json!(null),
        json!([]),
        json!({}),
        json!(true),
        json!("coil"),
        json!([["1 mm", "1 mm"]]),
    ];
    let (mut kept, mut refused) = (0, 0);
    for round in 0..4000 {
        let mut job: Value = serde_json::from_str(EXAMPLES[round % EXAMPLES.len()]).unwrap();
        let mut paths = Vec::new();
        leaves(&job, String::new(), &mut paths);
        for _ in 0..=dice.below(2) {
            let path = &paths[dice.below(paths.len())];
            if let Some(leaf) = job.pointer_mut(path) {
                *leaf = values[dice.below(values.len())].clone();
            }
        }
        if accepted(&job.to_string()) { kept += 1 } else { refused += 1 }
    }
    assert!(kept > 20 && refused > 1000, "{kept} accepted, {refused} refused");
}
