//! The commands as a person types them: exit codes, what is printed, what is written and what is left alone.
#![allow(clippy::unwrap_used, reason = "tests")]

use std::fs;
use std::io::{self, Write};
use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

use coilwright::Surroundings;
use serde_json::{Value, json};

const SPHERE: &str = include_str!("../examples/sphere-in-uniform-field.json");

/// What a command left behind.
struct Said {
    code: u8,
    out: String,
    err: String,
}

fn say(words: &[&str]) -> Said {
    let (mut out, mut err) = (Vec::new(), Vec::new());
    let code = coilwright::run(std::iter::once(&"coilwright").chain(words), &mut out, &mut err);
    Said { code, out: String::from_utf8(out).unwrap(), err: String::from_utf8(err).unwrap() }
}

fn path_text(path: &Path) -> &str {
    path.to_str().unwrap()
}

/// A folder with a job of a sphere that solves in a moment, changed as wanted.
fn job_in(folder: &Path, change: impl FnOnce(&mut Value)) -> PathBuf {
    let mut job: Value = serde_json::from_str(SPHERE).unwrap();
    change(&mut job);
    let path = folder.join("job-as-given.json");
    fs::write(&path, job.to_string()).unwrap();
    path
}

fn unchanged(_: &mut Value) {}

/// Heats the sphere for 20 s, in two stages.
fn heated(job: &mut Value) {
    job["heating"] = json!({
        "start": "20 °C", "ambient": "20 °C",
        "stages": [{ "name": "heat", "for": "15 s" }, { "name": "soak", "for": "5 s" }]
    });
    job["thermocouples"] = json!([{ "name": "core", "part": "sphere", "r": "0 mm", "z": "0 mm" }]);
}

fn summary(folder: &Path) -> Value {
    serde_json::from_slice(&fs::read(folder.join("summary.json")).unwrap()).unwrap()
}

#[test]
fn help_and_version_go_to_standard_output_and_are_no_error() {
    let help = say(&["--help"]);
    assert_eq!((help.code, help.err.as_str()), (0, ""));
    assert!(help.out.contains("check") && help.out.contains("Exit codes"), "{}", help.out);
    let version = say(&["--version"]);
    assert_eq!((version.code, version.out), (0, format!("coilwright {}\n", env!("CARGO_PKG_VERSION"))));
}

#[test]
fn a_command_line_that_is_not_understood_is_refused_with_exit_2() {
    for words in [
        &["fly"] as &[&str],
        &[],
        &["run", "job.json"],
        &["run", "job.json", "--out", "x", "--frequency", "3 kHz"],
        &["schema", "--threads", "0"],
        &["schema", "--threads", "many"],
        &["schema", "--progress", "loud"],
        &["materials", "unobtainium"],
    ] {
        let said = say(words);
        assert_eq!(said.code, 2, "{words:?}: {}", said.err);
        assert!(!said.err.is_empty() && said.out.is_empty(), "{words:?}");
    }
}

#[test]
fn a_misspelt_material_is_met_with_a_suggestion() {
    let said = say(&["materials", "C46"]);
    assert_eq!(said.code, 2);
    assert!(said.err.contains("did you mean `C45`"), "{}", said.err);
}

#[test]
fn materials_lists_the_library_and_tabulates_one_with_its_sources() {
    let list = say(&["materials"]);
    assert_eq!(list.code, 0);
    assert!(list.out.contains("C45") && list.out.contains("1.4301") && list.out.contains("insulator"), "{}", list.out);
    let one = say(&["materials", "1045"]);
    assert_eq!(one.code, 0);
    for word in ["C45", "Curie point", "resistivity", "Sources", "EN 1993-1-2"] {
        assert!(one.out.contains(word), "{word} is missing in\n{}", one.out);
    }
}

#[test]
fn the_schema_is_json_and_accepts_the_example() {
    let said = say(&["schema"]);
    assert_eq!(said.code, 0);
    let schema: Value = serde_json::from_str(&said.out).unwrap();
    let job: Value = serde_json::from_str(SPHERE).unwrap();
    assert!(jsonschema::is_valid(&schema, &job));
    assert!(!jsonschema::is_valid(&schema, &json!({ "title": "nothing else", "colour": "blue" })));
}

#[test]
fn check_prints_what_was_understood_and_draws_the_section() {
    let folder = tempfile::tempdir().unwrap();
    let job = job_in(folder.path(), heated);
    let (png, section) = (folder.path().join("mesh.png"), folder.path().join("section.png"));
    let said = say(&["check", path_text(&job), "--draw", path_text(&png), "--draw-section", path_text(&section)]);
    assert_eq!(said.code, 0, "{}", said.err);
    // delta = sqrt(rho / (pi f mu0)) = 2.7 mm for 28 nohm m at 1 kHz: closed form.
    for word in ["sphere", "aluminium", "workpiece", "2.7", "50.00 kA/m", "stage `soak`: for 5", "triangles"] {
        assert!(said.out.contains(word), "{word} is missing in\n{}", said.out);
    }
    assert!(said.out.contains("surface of `sphere`: emissivity"), "{}", said.out);
    let (whole, section) = (fs::read(&png).unwrap(), fs::read(&section).unwrap());
    assert!(whole.starts_with(b"\x89PNG\r\n\x1a\n") && section.starts_with(b"\x89PNG\r\n\x1a\n"));
    assert_ne!(whole, section);
    let close = ["check", path_text(&job), "--draw", path_text(&png), "--close-up", "18 mm, 5mm,0.4 cm", "--quiet"];
    assert_eq!(say(&close).code, 0);
    assert_ne!(fs::read(&png).unwrap(), whole, "a close-up is another picture");
}

#[test]
fn a_close_up_without_units_or_without_a_drawing_is_refused_with_exit_2() {
    for words in ["18 mm, 5 mm", "18, 5, 4", "18 mm, 5 mm, 0 mm", "18 mm, 5 mm, 2 V", ""] {
        let said = say(&["check", "job.json", "--draw", "mesh.png", "--close-up", words]);
        assert!(said.code == 2 && said.err.contains("--close-up"), "{words}: {}", said.err);
    }
    assert_eq!(say(&["check", "job.json", "--close-up", "18 mm, 5 mm, 4 mm"]).code, 2);
}

/// A bar in a lining it touches, in a coil of bare turns that touch each other.
const CROWDED: &str = r#"{
    "title": "crowded",
    "parts": [
        { "name": "bar", "role": "workpiece", "material": "C45", "start": "1500 °C",
          "shape": { "cylinder": { "diameter": "60 mm", "length": "100 mm" } } },
        { "name": "shell", "role": "lining", "material": "mica", "outside": { "held_at": "60 °C" }, "top": "insulated",
          "shape": { "tube": { "inner_diameter": "60 mm", "outer_diameter": "70 mm", "length": "80 mm" } } } ],
    "coils": [ { "name": "coil", "winding": { "helix": { "turns": 5, "inner_diameter": "76 mm", "pitch": "10 mm" } },
        "conductor": { "solid_bar": { "axial": "10 mm", "radial": "4 mm" } }, "material": "copper" } ],
    "supply": { "frequency": "2 kHz", "hold": { "coil_current": "100 A" } },
    "heating": { "start": "20 °C", "ambient": "20 °C", "stages": [ { "name": "heat", "for": "1 s" } ] }
}"#;

#[test]
fn check_tells_gaps_contacts_and_what_they_mean() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("crowded.json");
    fs::write(&path, CROWDED).unwrap();
    let said = say(&["check", path_text(&path)]);
    assert_eq!(said.code, 0, "{}", said.err);
    for words in [
        "`bar` and `shell`: touch along 80.0 mm",
        "`shell` and `coil`: 3.00 mm apart",
        "turns of `coil`: touch along 16.0 mm",
        "outside held at 60 °C; top insulated",
        "turns of coil `coil` touch each other as bare metal",
        "parts `bar` and `shell` touch along 80.0 mm",
        "part `bar` starts at 1500 °C, above its solidus",
    ] {
        assert!(said.out.contains(words), "{words} is missing in\n{}", said.out);
    }
    assert!(!said.out.contains("too close to tell apart"), "{}", said.out);
}

#[test]
fn what_is_too_close_to_tell_apart_is_told_by_check_and_carried_by_the_result() {
    let folder = tempfile::tempdir().unwrap();
    // Two discs 0.1 nm apart: points closer than 2e-9 of the meshed space are one.
    let job = job_in(folder.path(), |job| {
        job["parts"] = json!([
            { "name": "lower", "role": "workpiece", "material": "aluminium",
              "shape": { "disc": { "diameter": "40 mm", "from": "-10 mm", "to": "0 mm" } } },
            { "name": "upper", "role": "workpiece", "material": "aluminium",
              "shape": { "disc": { "diameter": "40 mm", "from": "0.0000001 mm", "to": "10 mm" } } }
        ]);
        job["mirror_planes"] = json!([]);
    });
    let said = say(&["check", path_text(&job)]);
    assert_eq!(said.code, 0, "{}", said.err);
    let words =
        "part `upper` comes too close to part `lower` to tell the two apart: 2 corners moved by at most 1.0e-7 mm";
    assert!(said.out.contains(words) && said.out.contains("2 corners and 0 lines too close"), "{}", said.out);
    let out = folder.path().join("result");
    let run = say(&["run", path_text(&job), "--out", path_text(&out), "--quiet", "--without-fields"]);
    assert_eq!(run.code, 0, "{}", run.err);
    let summary = summary(&out);
    let merges = &summary["mesh"]["merges"];
    assert_eq!(merges["corners_moved"], 2, "{merges}");
    assert!((merges["largest_move_m"].as_f64().unwrap() - 1e-10).abs() < 1e-16, "{merges}");
    let told = |list: &Value| list.as_array().unwrap().iter().any(|w| w.to_string().contains("comes too close"));
    assert!(told(&summary["warnings"]) && told(&merges["moves"]));
}

#[test]
fn a_run_without_fields_leaves_out_only_these() {
    let folder = tempfile::tempdir().unwrap();
    let job = job_in(folder.path(), heated);
    let place = |name: &str| folder.path().join(name);
    let (with, without) = (place("with"), place("without"));
    for (out, more) in [(&with, None), (&without, Some("--without-fields"))] {
        let words: Vec<&str> =
            ["run", path_text(&job), "--out", path_text(out), "-q"].into_iter().chain(more).collect();
        assert_eq!(say(&words).code, 0);
    }
    assert!(with.join("run.pvd").is_file() && with.join("fields/0000.vtu").is_file());
    assert!(!without.join("run.pvd").exists() && !without.join("fields").exists());
    for name in ["summary.json", "states.csv", "history.csv", "job.json", "maps/mesh.png"] {
        assert_eq!(fs::read(with.join(name)).unwrap(), fs::read(without.join(name)).unwrap(), "{name}");
    }
}

#[test]
fn a_drawing_never_replaces_anything_but_a_picture() {
    let folder = tempfile::tempdir().unwrap();
    let job = job_in(folder.path(), heated);
    let before = fs::read(&job).unwrap();
    let notes = folder.path().join("notes.png");
    fs::write(&notes, "not a picture").unwrap();
    for target in [&job, &notes, &folder.path().join("section.jpg")] {
        let said = say(&["check", path_text(&job), "--draw", path_text(target)]);
        assert_eq!(said.code, 6, "{}", said.err);
        assert!(said.err.contains(".png"), "{}", said.err);
    }
    assert_eq!(fs::read(&job).unwrap(), before);
    assert_eq!(fs::read(&notes).unwrap(), b"not a picture");
}

#[test]
fn a_run_writes_the_whole_folder_and_prints_a_digest() {
    let folder = tempfile::tempdir().unwrap();
    let job = job_in(folder.path(), heated);
    let out = folder.path().join("deep/result");
    let said = say(&["run", path_text(&job), "--out", path_text(&out)]);
    assert_eq!(said.code, 0, "{}", said.err);
    for name in ["states.csv", "history.csv", "turns.csv", "job.json", "run.pvd", "timings.json", "fields/0000.vtu"] {
        assert!(out.join(name).is_file(), "{name} is missing");
    }
    assert!(!out.join("unfinished.txt").exists());
    for word in ["complete", "in the work", "kW/cm2", "kWh/t", "core at the end", "bookkeeping check", "Written to"] {
        assert!(said.out.contains(word), "{word} is missing in\n{}", said.out);
    }
    assert!(said.err.contains("stage heat (1 of 2) starts"), "{}", said.err);
    let summary = summary(&out);
    assert_eq!(summary["outcome"], "complete");
    mesh_block_adds_up(&summary["mesh"]);
}

/// The figures of the mesh agree with each other.
fn mesh_block_adds_up(mesh: &Value) {
    let whole = |value: &Value, key: &str| value[key].as_u64().unwrap_or_else(|| unreachable!("{key} in {value}"));
    let regions = &mesh["regions"];
    let parts = regions["parts"].as_object().unwrap().values();
    let coils = regions["coils"].as_object().unwrap().values();
    let all: Vec<&Value> = std::iter::once(&regions["air"]).chain(parts).chain(coils).collect();
    for key in ["triangles", "strip_triangles"] {
        assert_eq!(all.iter().map(|r| whole(r, key)).sum::<u64>(), whole(mesh, key), "{key}");
    }
    let counted: u64 = mesh["min_angle_counts"].as_array().unwrap().iter().filter_map(Value::as_u64).sum();
    assert_eq!(counted, whole(mesh, "triangles") - whole(mesh, "strip_triangles"));
    let number = |value: &Value, key: &str| value[key].as_f64().unwrap();
    let least = all.iter().map(|r| number(r, "shortest_edge_m")).fold(f64::INFINITY, f64::min);
    assert_eq!(least, number(mesh, "shortest_edge_m"));
    assert!(number(mesh, "min_angle_deg") < number(mesh, "mean_min_angle_deg"));
    assert!(mesh["notes"].is_array() && mesh["merges"]["moves"].is_array());
}

#[test]
fn the_job_that_a_run_writes_gives_the_same_bytes_and_so_do_other_numbers_of_threads() {
    let folder = tempfile::tempdir().unwrap();
    let job = job_in(folder.path(), heated);
    let place = |name: &str| folder.path().join(name);
    let (one, two, again) = (place("one"), place("two"), place("again"));
    let written = one.join("job.json");
    for (job, out, threads) in [(&job, &one, "1"), (&job, &two, "2"), (&written, &again, "2")] {
        let said = say(&["run", path_text(job), "--out", path_text(out), "--threads", threads, "--quiet"]);
        assert_eq!((said.code, said.out.as_str(), said.err.as_str()), (0, "", ""));
    }
    for name in ["summary.json", "states.csv", "history.csv", "turns.csv", "job.json", "run.pvd", "fields/0000.vtu"] {
        let first = fs::read(one.join(name)).unwrap();
        assert_eq!(first, fs::read(two.join(name)).unwrap(), "{name} differs with two threads");
        assert_eq!(first, fs::read(again.join(name)).unwrap(), "{name} differs from the written job");
    }
}

#[test]
fn a_finished_result_is_refused_untouched_and_replaced_only_when_told() {
    let folder = tempfile::tempdir().unwrap();
    let job = job_in(folder.path(), unchanged);
    let out = folder.path().join("result");
    let run = ["run", path_text(&job), "--out", path_text(&out)];
    assert_eq!(say(&run).code, 0);
    fs::write(out.join("summary.json"), "kept").unwrap();
    fs::write(out.join("fields/9999.vtu"), "of an earlier run").unwrap();
    fs::write(out.join("notes.txt"), "mine").unwrap();

    let refused = say(&run);
    assert_eq!(refused.code, 6);
    assert!(refused.err.contains("already holds a result") && refused.err.contains("--overwrite"), "{}", refused.err);
    assert_eq!(fs::read_to_string(out.join("summary.json")).unwrap(), "kept");

    let told = say(&[&run[..], &["--overwrite"]].concat());
    assert_eq!(told.code, 0, "{}", told.err);
    assert_eq!(summary(&out)["outcome"], "complete");
    assert!(!out.join("fields/9999.vtu").exists(), "a field of the earlier run is left");
    assert_eq!(fs::read_to_string(out.join("notes.txt")).unwrap(), "mine");
}

#[test]
fn a_failed_run_leaves_the_earlier_result_and_no_new_folders() {
    let folder = tempfile::tempdir().unwrap();
    let job = job_in(folder.path(), unchanged);
    let (out, other) = (folder.path().join("result"), folder.path().join("new/other"));
    assert_eq!(say(&["run", path_text(&job), "--out", path_text(&out)]).code, 0);
    let before = fs::read(out.join("summary.json")).unwrap();
    let stop = Surroundings { live: false, stop: Arc::new(AtomicBool::new(true)) };
    for (place, overwrite) in [(&out, Some("--overwrite")), (&other, None)] {
        let words = ["coilwright", "run", path_text(&job), "--out", path_text(place)].into_iter().chain(overwrite);
        let mut err = Vec::new();
        let code = coilwright::run_in(words, &mut Vec::new(), &mut err, &stop);
        assert_eq!(code, 7, "{}", String::from_utf8_lossy(&err));
    }
    assert_eq!(fs::read(out.join("summary.json")).unwrap(), before);
    assert!(!folder.path().join("new").exists(), "folders of a run without a result are left");
}

#[test]
fn a_folder_that_holds_something_else_is_never_written_to() {
    let folder = tempfile::tempdir().unwrap();
    let job = job_in(folder.path(), unchanged);
    let said = say(&["run", path_text(&job), "--out", path_text(folder.path()), "--overwrite"]);
    assert_eq!(said.code, 6);
    assert!(said.err.contains("holds no result of coilwright"), "{}", said.err);
    assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 1);
}

#[test]
fn a_folder_that_cannot_be_made_is_refused_with_exit_6() {
    let folder = tempfile::tempdir().unwrap();
    let job = job_in(folder.path(), unchanged);
    for out in [job.clone(), job.join("result")] {
        let said = say(&["run", path_text(&job), "--out", path_text(&out)]);
        assert_eq!(said.code, 6, "{}", said.err);
        assert!(said.err.contains("job-as-given.json"), "{}", said.err);
    }
}

#[test]
fn a_job_that_is_refused_ends_with_exit_3_and_makes_no_folder() {
    let folder = tempfile::tempdir().unwrap();
    let job = job_in(folder.path(), |job| job["supply"]["frequency"] = json!(1000));
    let out = folder.path().join("result");
    for path in [&job, &folder.path().join("missing.json")] {
        let said = say(&["run", path_text(path), "--out", path_text(&out)]);
        assert_eq!(said.code, 3, "{}", said.err);
        assert_eq!(say(&["check", path_text(path)]).code, 3);
    }
    assert!(!out.exists());
}

#[test]
fn a_stage_limit_keeps_the_partial_result_marks_it_and_ends_with_exit_7() {
    let folder = tempfile::tempdir().unwrap();
    let job = job_in(folder.path(), |job| {
        heated(job);
        job["heating"]["stages"] =
            json!([{ "name": "heat", "until": { "gauge": "core", "reaches": "500 °C" }, "at_most": "2 s" }]);
    });
    let out = folder.path().join("result");
    let said = say(&["run", path_text(&job), "--out", path_text(&out)]);
    assert_eq!(said.code, 7, "{}", said.err);
    assert!(said.out.contains("PARTIAL") && said.err.contains("partial result is kept"), "{}{}", said.out, said.err);
    let summary = summary(&out);
    assert_eq!(summary["outcome"], "stage_limit");
    assert_eq!(summary["ended_early"]["stage"], "heat");
    assert_eq!(summary["goals"][0]["reached_at_s"], Value::Null);
    let at = summary["ended_early"]["time_s"].as_f64().unwrap();
    assert!((at - 2.0).abs() < 1e-9, "ended at {at} s");
}

/// An error stream that asks for a stop once it has seen some heat steps.
struct Impatient {
    stop: Arc<AtomicBool>,
    steps: usize,
}

impl Write for Impatient {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        self.steps += usize::from(String::from_utf8_lossy(bytes).contains("heat_step"));
        if self.steps >= 3 {
            self.stop.store(true, Ordering::SeqCst);
        }
        Ok(bytes.len())
    }

    fn flush(&mut self) -> io::Result<()> {
        Ok(())
    }
}

#[test]
fn a_stop_on_request_keeps_the_steps_so_far_marks_them_and_ends_with_exit_7() {
    let folder = tempfile::tempdir().unwrap();
    let job = job_in(folder.path(), heated);
    let out = folder.path().join("result");
    let surroundings = Surroundings::default();
    let mut err = Impatient { stop: Arc::clone(&surroundings.stop), steps: 0 };
    let words = ["coilwright", "run", path_text(&job), "--out", path_text(&out), "--progress", "json"];
    let mut said = Vec::new();
    assert_eq!(coilwright::run_in(words, &mut said, &mut err, &surroundings), 7);
    assert!(String::from_utf8(said).unwrap().contains("PARTIAL, stopped on request"));
    let summary = summary(&out);
    assert_eq!(summary["outcome"], "stopped");
    let at = summary["ended_early"]["time_s"].as_f64().unwrap();
    assert!(at > 0.0 && at < 20.0, "stopped at {at} s");
    let history = fs::read_to_string(out.join("history.csv")).unwrap();
    assert!(history.lines().count() >= 4, "{history}");
}

/// A stream that fails in one way.
struct Failing(io::ErrorKind);

impl Write for Failing {
    fn write(&mut self, _: &[u8]) -> io::Result<usize> {
        Err(io::Error::from(self.0))
    }

    fn flush(&mut self) -> io::Result<()> {
        Ok(())
    }
}

#[test]
fn a_closed_pipe_is_quiet_and_a_full_disk_is_told() {
    let mut err = Vec::new();
    for words in [&["coilwright", "materials"] as &[&str], &["coilwright", "schema"], &["coilwright", "--help"]] {
        let code = coilwright::run(words, &mut Failing(io::ErrorKind::BrokenPipe), &mut err);
        assert_eq!((code, err.as_slice()), (0, &b""[..]), "{words:?}");
    }
    let code = coilwright::run(["coilwright", "materials"], &mut Failing(io::ErrorKind::StorageFull), &mut err);
    assert_eq!(code, 6);
    assert!(String::from_utf8_lossy(&err).contains("standard output could not be written"));
}
