//! Jobs that must be refused: each error names the file, the key path, the value and a remedy, and nothing panics.
#![allow(clippy::unwrap_used, clippy::panic, reason = "tests")]

#[path = "bad_jobs/forms.rs"]
mod forms;
#[path = "bad_jobs/meanings.rs"]
mod meanings;
#[path = "bad_jobs/values.rs"]
mod values;

use std::io::Write as _;

use coilwright::job::Job;
use coilwright::job_error::JobError;
use coilwright::lower::lower;
use serde_json::{Value, json};

const GOOD: &str = include_str!("../examples/bar-heater.json");
const SLICE: &str = include_str!("../examples/tube-in-slice.json");
const SPHERE: &str = include_str!("../examples/sphere-in-uniform-field.json");

/// How a good job is spoiled.
enum Spoil {
    /// The value at a JSON pointer is replaced; a key that is not there is added.
    Set(&'static str, Value),
    /// The key at a JSON pointer is removed.
    Remove(&'static str),
    /// A piece of the text is replaced.
    Text(&'static str, &'static str),
}

use Spoil::{Remove, Set, Text};

struct Bad {
    name: &'static str,
    base: &'static str,
    spoil: Spoil,
    /// What the message must contain besides the name of the file.
    wanted: &'static [&'static str],
}

fn bad(name: &'static str, spoil: Spoil, wanted: &'static [&'static str]) -> Bad {
    Bad { name, base: GOOD, spoil, wanted }
}

fn on(base: &'static str, name: &'static str, spoil: Spoil, wanted: &'static [&'static str]) -> Bad {
    Bad { name, base, spoil, wanted }
}

fn set(value: &mut Value, pointer: &str, new: Value) {
    let (parent, key) = pointer.rsplit_once('/').unwrap();
    match value.pointer_mut(parent).unwrap() {
        Value::Object(object) => drop(object.insert(key.to_owned(), new)),
        Value::Array(list) if key == "-" => list.push(new),
        Value::Array(list) => list[key.parse::<usize>().unwrap()] = new,
        other => panic!("{pointer} is in {other}"),
    }
}

fn spoiled(bad: &Bad) -> String {
    let mut value: Value = serde_json::from_str(bad.base).unwrap();
    match &bad.spoil {
        Set(pointer, new) => set(&mut value, pointer, new.clone()),
        Remove(pointer) => {
            let (parent, key) = pointer.rsplit_once('/').unwrap();
            let removed = value.pointer_mut(parent).unwrap().as_object_mut().unwrap().shift_remove(key);
            assert!(removed.is_some(), "{}: there is no {pointer}", bad.name);
        }
        Text(old, new) => {
            assert!(bad.base.contains(old), "{}: the job does not contain {old}", bad.name);
            return bad.base.replacen(old, new, 1);
        }
    }
    serde_json::to_string_pretty(&value).unwrap()
}

fn refusal(text: &str) -> Option<JobError> {
    Job::parse(text, "job.json").and_then(|job| lower(&job)).err()
}

fn texts() -> Vec<Bad> {
    vec![
        bad("empty file", Text(GOOD, ""), &["line", "empty", "begin with"]),
        bad(
            "cut off",
            Text(
                "\"pyrometers\": [{ \"name\": \"surface\", \"part\": \"billet\", \"face\": \"outer\", \"z\": \"0 mm\" }]\n}",
                "",
            ),
            &["line", "not JSON", "close every"],
        ),
        bad("missing comma", Text("\"role\": \"workpiece\",", "\"role\": \"workpiece\""), &["line 8", "comma"]),
        bad("comment", Text("\"parts\": [", "\"parts\": [ // here"), &["no comments", "note"]),
        bad("NaN", Text("\"emissivity\": 0.8", "\"emissivity\": NaN"), &["line", "NaN", "finite"]),
        bad("Infinity", Text("\"emissivity\": 0.8", "\"emissivity\": -Infinity"), &["line", "Infinity", "finite"]),
        bad("number beyond doubles", Text("\"emissivity\": 0.8", "\"emissivity\": 1e999"), &["line", "out of range"]),
        bad("two jobs", Text("{\n  \"title\"", "{}\n{\n  \"title\""), &["line 2", "trailing"]),
        bad(
            "key twice",
            Text("\"start\": \"20 °C\",", "\"start\": \"20 °C\", \"start\": \"30 °C\","),
            &["heating.start", "twice", "remove one"],
        ),
        bad("a list instead of a job", Text(GOOD, "[]"), &["[]", "an object"]),
        bad("a number instead of a job", Text(GOOD, "12"), &["value 12", "an object"]),
    ]
}

#[test]
fn every_bad_job_is_refused_with_place_value_and_remedy() {
    let all: Vec<Bad> =
        texts().into_iter().chain(forms::forms()).chain(values::values()).chain(meanings::meanings()).collect();
    let mut failures = Vec::new();
    let mut refused = 0;
    for bad in &all {
        match refusal(&spoiled(bad)) {
            None => failures.push(format!("{}: was accepted", bad.name)),
            Some(error) => {
                refused += 1;
                let message = error.to_string();
                let missing: Vec<_> = bad.wanted.iter().filter(|wanted| !message.contains(**wanted)).collect();
                if !missing.is_empty() || !message.starts_with("job.json: ") {
                    failures.push(format!("{}: {missing:?} not in: {message}", bad.name));
                }
            }
        }
    }
    assert!(failures.is_empty(), "{} failures:\n{}", failures.len(), failures.join("\n"));
    assert!(refused >= 110, "only {refused} bad jobs were tried");
}

#[test]
fn the_jobs_that_are_spoiled_are_good() {
    for good in [GOOD, SLICE, SPHERE] {
        assert!(refusal(good).is_none(), "{}", refusal(good).unwrap());
    }
}

#[test]
fn a_gauge_on_a_fixture_and_faces_that_differ_across_a_plane_are_refused() {
    let mut value: Value = serde_json::from_str(GOOD).unwrap();
    set(&mut value, "/parts/1/role", json!("fixture"));
    set(&mut value, "/thermocouples/0", json!({ "name": "core", "part": "liner", "r": "35 mm", "z": "0 mm" }));
    let message = refusal(&value.to_string()).unwrap().to_string();
    assert!(message.contains("thermocouples.core.part") && message.contains("not heated"), "{message}");

    let mut value: Value = serde_json::from_str(GOOD).unwrap();
    set(&mut value, "/mirror_planes", json!(["0 mm"]));
    assert!(refusal(&value.to_string()).is_none());
    set(&mut value, "/parts/0/top", json!("insulated"));
    let message = refusal(&value.to_string()).unwrap().to_string();
    assert!(message.contains("parts.billet") && message.contains("`top` or `bottom`"), "{message}");
}

#[test]
fn nesting_without_end_is_refused() {
    for text in ["[".repeat(100_000), "{\"a\":".repeat(100_000), format!("{{\"parts\": {}", "[".repeat(60))] {
        let message = refusal(&text).unwrap().to_string();
        assert!(message.contains("nested deeper than 24") && message.contains("remove"), "{message}");
    }
}

#[test]
fn files_that_are_no_jobs_are_refused() {
    let folder = tempfile::tempdir().unwrap();
    let refused = |path: &std::path::Path| Job::read(path).unwrap_err().to_string();
    let message = refused(&folder.path().join("absent.json"));
    assert!(message.contains("absent.json") && message.contains("check the path"), "{message}");
    let message = refused(folder.path());
    assert!(message.contains("is not a file"), "{message}");
    let binary = folder.path().join("binary.json");
    std::fs::write(&binary, [b'{', 0xff, 0xfe, b'}']).unwrap();
    let message = refused(&binary);
    assert!(message.contains("byte 1") && message.contains("UTF-8"), "{message}");
    let huge = folder.path().join("huge.json");
    let mut file = std::fs::File::create(&huge).unwrap();
    for _ in 0..17 {
        file.write_all(&vec![b' '; 1024 * 1024]).unwrap();
    }
    let message = refused(&huge);
    assert!(message.contains("16 MB"), "{message}");
}
