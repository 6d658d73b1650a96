//! Files of a small result made by hand, read back with general-purpose readers and compared with what was put in.
#![allow(clippy::unwrap_used, reason = "tests")]

use std::collections::BTreeMap;
use std::sync::Arc;

use base64::Engine;
use base64::engine::general_purpose::STANDARD;
use coilwright::export::{Finished, history, pvd, states, summary, turns, vtu};
use mesher::{Drawing, Layers, Limits, Outline, Region, RegionId};
use num_complex::Complex64;
use quick_xml::Reader;
use quick_xml::events::Event;
use serde_json::Value;
use solver::material::library;
use solver::model::{
    Drive, Gauge, GaugeKind, Heating, Hold, Limits as SupplyLimits, MeshSettings, Mirrors, Model, Part, Role, Stage,
    StageEnd, Surface,
};
use solver::results::{
    CoilNumbers, Counts, Electrical, EnergyBalance, FieldMaps, HistoryRow, Outcome, PartNumbers, PartTemperatures,
    RegionName, Results, Section, Snapshot, State, SupplyLimit, Terminals, TurnRow, Warning, WarningKind,
};

const BAR: RegionId = RegionId(1);

/// A bar of 20 mm radius and 60 mm length in air up to 50 mm, with elements of this order.
fn section(order: usize) -> Section {
    let rectangle = |lo, hi| Outline::rectangle(lo, hi).unwrap();
    let bar = Region {
        id: BAR,
        outline: rectangle([0.0, -0.03], [0.02, 0.03]),
        interior_size: 0.01,
        surface_size: 0.01,
        layers: None::<Layers>,
    };
    let drawing = Drawing {
        domain: rectangle([0.0, -0.05], [0.05, 0.05]),
        domain_region: RegionId(0),
        domain_size: 0.02,
        regions: vec![bar],
        gradation: 0.5,
        boundary_size: None,
        line_sizes: Vec::new(),
    };
    let mesh = mesher::triangulate(&drawing, &Limits::default(), &|| false).unwrap();
    let nodes = mesh.nodes(order);
    Section {
        mesh: Arc::new(mesh),
        nodes: Arc::new(nodes),
        regions: vec![RegionName::Air, RegionName::Part(0, "bar".into())],
        mirrors: Mirrors::None,
        open_boundary: None,
    }
}

/// Loss density of the made-up field: linear, so that its mean over an element is its value at the centroid.
fn loss([r, z]: [f64; 2]) -> f64 {
    1e6 * (1.0 + 30.0 * r - 7.0 * z)
}

fn maps(section: &Section) -> FieldMaps {
    let nodes = &section.nodes;
    let at = |node: &u32| nodes.points[*node as usize];
    let local: Vec<[f64; 2]> = nodes.elements.iter().map(at).collect();
    FieldMaps {
        vector_potential_wb_per_m: nodes.points.iter().map(|p| Complex64::new(p[0], -2.0 * p[0])).collect(),
        joule_loss_w_per_m3: local.iter().map(|&p| loss(p)).collect(),
        current_density_a_per_m2: local.iter().map(|p| Complex64::new(p[1], 3.0)).collect(),
        field_strength_a_per_m: local.iter().map(|_| [Complex64::new(5.0, 6.0), Complex64::new(7.0, 8.0)]).collect(),
        flux_density_t: local.iter().map(|_| [Complex64::new(0.1, 0.2), Complex64::new(0.3, 0.4)]).collect(),
        force_density_n_per_m3: local.iter().map(|_| [5.0, 6.0]).collect(),
    }
}

fn terminals() -> Terminals {
    Terminals {
        current_a_rms: 1000.0,
        voltage_v_rms: 50.0,
        power_w: 20e3,
        reactive_power_var: 45e3,
        apparent_power_va: 50e3,
        power_factor: 0.4,
        quality_factor: 2.25,
        resistance_ohm: 0.02,
        reactance_ohm: 0.045,
        inductance_h: 2.5e-6,
    }
}

fn state(time_s: f64, label: &str) -> State {
    let part = PartNumbers {
        name: "bar".into(),
        joule_loss_w: 15e3,
        hysteresis_loss_w: 1e3,
        poynting_power_w: None,
        mean_surface_power_density_w_per_m2: 4e5,
        largest_loss_w_per_m3: 1e8,
        least_skin_depth_m: f64::INFINITY,
        largest_field_a_per_m_rms: 1e5,
    };
    let coil = |name: &str| CoilNumbers {
        name: name.into(),
        terminals: terminals(),
        loss_w: 2e3,
        water_outlet_k: Some(313.15),
    };
    let electrical = Electrical {
        coils: vec![coil("lower, \"main\""), coil("upper")],
        parts: vec![part],
        terminals: Some(terminals()),
        workpiece_power_w: 16e3,
        electrical_efficiency: Some(0.8),
        stored_energy_j: 1.5,
        power_balance_relative: 1e-14,
        solve_backward_error: f64::NAN,
    };
    State { time_s, label: label.into(), frequency_hz: 3e3, limited_by: Some(SupplyLimit::Voltage), electrical }
}

fn history_row(time_s: f64, stage: usize, gauge_k: f64) -> HistoryRow {
    let part = PartTemperatures {
        part: 0,
        mean_k: gauge_k - 50.0,
        min_k: gauge_k - 100.0,
        max_k: gauge_k,
        surface_minus_core_k: 80.0,
    };
    HistoryRow {
        time_s,
        stage,
        gauges_k: vec![gauge_k],
        parts: vec![part],
        workpiece_power_w: 16e3,
        terminals: Some(terminals()),
        coil_loss_w: 4e3,
        energy: energy(),
    }
}

/// 3.6 MJ in 5 kg of work: 200 kWh/t; 5.4 MJ drawn: 300 kWh/t.
fn energy() -> EnergyBalance {
    EnergyBalance {
        supplied_j: 4e6,
        radiated_j: 3e5,
        convected_j: 1e5,
        stored_j: 3.6e6,
        terminal_j: 5.4e6,
        workpiece_stored_j: 3.6e6,
        workpiece_mass_kg: 5.0,
        ..EnergyBalance::default()
    }
}

fn results(order: usize) -> Results {
    let section = section(order);
    let field = Arc::new(maps(&section));
    let in_bar = |p: &[f64; 2]| p[0] <= 0.02 + 1e-12 && p[1].abs() <= 0.03 + 1e-12;
    let temperature_k: Vec<f64> =
        section.nodes.points.iter().map(|p| if in_bar(p) { 1000.0 + 1e3 * p[0] } else { f64::NAN }).collect();
    let snapshot = |time_s: f64, field_factor: f64| Snapshot {
        time_s,
        label: "a moment".into(),
        field: Arc::clone(&field),
        field_factor,
        temperature_k: temperature_k.clone(),
    };
    Results {
        title: "made by hand".into(),
        outcome: Outcome::StageLimit { stage: "soak".into(), time_s: 90.0 },
        warnings: vec![Warning { kind: WarningKind::Melting, text: "the bar began to melt".into() }],
        states: vec![state(0.0, "start"), state(90.0, "end of soak"), state(40.0, "greatest current")],
        history: vec![history_row(0.0, 0, 293.15), history_row(60.0, 0, 1273.15), history_row(90.0, 1, 1283.15)],
        turns: vec![TurnRow {
            coil: "upper".into(),
            turn: 1,
            r_m: 0.04,
            z_m: 0.01,
            length_m: 0.251,
            mass_kg: 0.1,
            current_a_rms: 1000.0,
            voltage_v_rms: 4.0,
            loss_w: 180.0,
            water_rise_k: None,
        }],
        snapshots: vec![snapshot(0.0, 1.0), snapshot(90.0, 2.0)],
        peak_temperature_k: temperature_k.clone(),
        energy: Some(energy()),
        counts: Counts { triangles: section.mesh.triangles().len(), field_solves: 7, ..Counts::default() },
        section,
    }
}

fn model() -> Model {
    let stage = |name: &str, at_k: f64| Stage {
        name: name.into(),
        end: StageEnd::GaugeReaches { gauge: 0, at_k, at_most_s: 100.0 },
        hold: None,
    };
    let part = Part {
        name: "bar".into(),
        role: Role::Workpiece,
        outline: Outline::rectangle([0.0, -0.03], [0.02, 0.03]).unwrap(),
        material: Arc::clone(library().unwrap().find("C45").unwrap()),
        surface: Surface { emissivity: 0.8, convection_w_per_m2_k: 10.0 },
        faces: Vec::new(),
        start_k: 293.15,
    };
    Model {
        title: "made by hand".into(),
        parts: vec![part],
        coils: Vec::new(),
        drive: Drive::Supply { frequency_hz: 3e3, hold: Hold::CoilCurrent(1e3), limits: SupplyLimits::default() },
        mirrors: Mirrors::None,
        heating: Some(Heating {
            ambient_k: 293.15,
            stages: vec![stage("heat", 1273.15), stage("soak", 1373.15)],
            step_tolerance_k: 2.0,
        }),
        gauges: vec![Gauge { name: "surface".into(), kind: GaugeKind::Pyrometer, part: 0, at: [0.02, 0.0] }],
        start_k: 293.15,
        mesh: MeshSettings::default(),
    }
}

/// An array of a VTU file: its type, its number of components and its bytes without the length.
struct Array {
    kind: String,
    components: usize,
    bytes: Vec<u8>,
}

impl Array {
    fn floats(&self) -> Vec<f64> {
        assert_eq!(self.kind, "Float64");
        self.bytes.chunks_exact(8).map(|b| f64::from_le_bytes(b.try_into().unwrap())).collect()
    }

    fn integers(&self) -> Vec<i64> {
        assert!(self.kind == "UInt64" || self.kind == "Int64", "{}", self.kind);
        self.bytes.chunks_exact(8).map(|b| i64::from_le_bytes(b.try_into().unwrap())).collect()
    }
}

/// Attributes of an element by name.
type Attributes = BTreeMap<String, String>;

/// Attributes of every element by name, and the binary arrays by their own names.
fn read_xml(bytes: &[u8]) -> (Vec<(String, Attributes)>, BTreeMap<String, Array>) {
    let mut reader = Reader::from_reader(bytes);
    let (mut elements, mut arrays, mut open) = (Vec::new(), BTreeMap::new(), BTreeMap::new());
    let mut buffer = Vec::new();
    loop {
        match reader.read_event_into(&mut buffer).unwrap() {
            Event::Eof => break,
            Event::Start(tag) | Event::Empty(tag) => {
                let attributes = tag.attributes().map(|a| a.unwrap());
                open = attributes.map(|a| (a.key.as_ref().to_owned(), a.value.to_string())).collect::<BTreeMap<_, _>>();
                elements.push((tag.name().as_ref().to_owned(), open.clone()));
            }
            Event::Text(text) if open.get("format").is_some_and(|format| format == "binary") => {
                let text: &str = &text;
                if !text.trim().is_empty() {
                    let block = STANDARD.decode(text.trim()).unwrap();
                    let (length, bytes) = block.split_at(8);
                    assert_eq!(u64::from_le_bytes(length.try_into().unwrap()) as usize, bytes.len());
                    let components = open["NumberOfComponents"].parse().unwrap();
                    let array = Array { kind: open["type"].clone(), components, bytes: bytes.to_vec() };
                    arrays.insert(open["Name"].clone(), array);
                }
            }
            _ => {}
        }
        buffer.clear();
    }
    (elements, arrays)
}

#[test]
fn a_field_file_holds_the_mesh_and_the_fields_that_were_put_in_for_every_order() {
    for (order, cell_type) in [(1, 5u8), (2, 22), (3, 69)] {
        let results = results(order);
        let (section, snapshot) = (&results.section, &results.snapshots[1]);
        let (elements, arrays) = read_xml(&vtu::snapshot(&results, snapshot).unwrap());
        let piece = &elements.iter().find(|(name, _)| name == "Piece").unwrap().1;
        let (points, cells) = (section.nodes.points.len(), section.mesh.triangles().len());
        assert_eq!(piece["NumberOfPoints"], points.to_string());
        assert_eq!(piece["NumberOfCells"], cells.to_string());
        assert_eq!(arrays["types"].bytes, vec![cell_type; cells]);
        let stride = (order + 1) * (order + 2) / 2;
        assert_eq!(arrays["offsets"].integers(), (1..=cells).map(|c| (c * stride) as i64).collect::<Vec<_>>());
        let written = arrays["Points"].floats();
        for (point, written) in section.nodes.points.iter().zip(written.chunks_exact(3)) {
            assert_eq!([point[0], point[1], 0.0], written);
        }
        let means = arrays["joule_loss_w_per_m3"].floats();
        assert_eq!(means.len(), cells);
        for (cell, mean) in means.iter().enumerate() {
            let corners = section.mesh.corners(cell);
            let centroid = [0, 1].map(|k| corners.iter().map(|c| c[k]).sum::<f64>() / 3.0);
            let wanted = 4.0 * loss(centroid);
            assert!((mean / wanted - 1.0).abs() < 1e-12, "order {order}, cell {cell}: {mean} {wanted}");
        }
    }
}

#[test]
fn phasors_follow_the_factor_of_their_moment_and_losses_its_square() {
    let results = results(2);
    let (_, arrays) = read_xml(&vtu::snapshot(&results, &results.snapshots[1]).unwrap());
    for h in arrays["H_re_peak_a_per_m"].floats().chunks_exact(3) {
        assert!((h[0] - 10.0).abs() < 1e-12 && (h[1] - 14.0).abs() < 1e-12 && h[2] == 0.0, "{h:?}");
    }
    let b = &arrays["B_im_peak_t"];
    assert_eq!(b.components, 3);
    for b in b.floats().chunks_exact(3) {
        assert!((b[0] - 0.4).abs() < 1e-12 && (b[1] - 0.8).abs() < 1e-12 && b[2] == 0.0, "{b:?}");
    }
    for f in arrays["force_density_n_per_m3"].floats().chunks_exact(3) {
        assert!((f[0] - 20.0).abs() < 1e-12 && (f[1] - 24.0).abs() < 1e-12, "{f:?}");
    }
    let flux = arrays["r_A_re_peak_wb"].floats();
    for (flux, point) in flux.iter().zip(&results.section.nodes.points) {
        assert!((flux - 2.0 * point[0] * point[0]).abs() < 1e-15, "{flux} at {point:?}");
    }
}

#[test]
fn temperatures_are_celsius_in_the_bar_and_no_number_outside() {
    let results = results(2);
    let (_, arrays) = read_xml(&vtu::snapshot(&results, &results.snapshots[0]).unwrap());
    let degc = arrays["temperature_degC"].floats();
    let (inside, outside): (Vec<f64>, Vec<f64>) = degc.iter().partition(|t| t.is_finite());
    assert!(!inside.is_empty() && !outside.is_empty());
    let (low, high) = inside.iter().fold((f64::MAX, f64::MIN), |(l, h), &t| (l.min(t), h.max(t)));
    assert!((low - 726.85).abs() < 1e-9 && (high - 746.85).abs() < 1e-9, "{low} to {high}");
    let parts = arrays["part"].integers();
    for (region, part) in results.section.mesh.regions().iter().zip(parts) {
        assert_eq!(part, if *region == BAR { 0 } else { -1 });
    }
}

#[test]
fn the_collection_lists_every_snapshot_with_its_time() {
    let results = results(1);
    let (elements, _) = read_xml(&pvd::collection(&results.snapshots).unwrap());
    let sets: Vec<_> = elements.iter().filter(|(name, _)| name == "DataSet").map(|(_, a)| a).collect();
    assert_eq!(sets.len(), 2);
    assert_eq!((sets[1]["file"].as_str(), sets[1]["timestep"].as_str()), ("fields/0001.vtu", "90.0"));
}

fn rows(bytes: &[u8]) -> Vec<BTreeMap<String, String>> {
    csv::Reader::from_reader(bytes).deserialize().map(Result::unwrap).collect()
}

#[test]
fn states_have_a_row_a_coil_and_one_for_all_in_series() {
    let (results, model) = (results(1), model());
    let rows = rows(&states::table(Finished { model: &model, results: &results }).unwrap());
    let coils: Vec<&str> = rows.iter().take(3).map(|row| row["coil"].as_str()).collect();
    assert_eq!(coils, ["lower, \"main\"", "upper", "(all in series)"]);
    assert_eq!(rows.len(), 9);
    let row = &rows[0];
    for (name, wanted) in [("power_kw", "20.0"), ("reactive_power_kvar", "45.0"), ("inductance_h", "2.5e-6")] {
        assert_eq!(row[name], wanted);
    }
    assert_eq!((row["water_outlet_degc"].as_str(), row["limit_reached"].as_str()), ("40.0", "voltage"));
    assert_eq!(rows[2]["water_outlet_degc"], "");
}

#[test]
fn history_and_turns_come_back_as_they_were_put_in() {
    let (results, model) = (results(1), model());
    let run = Finished { model: &model, results: &results };
    let history = rows(&history::table(run).unwrap());
    assert_eq!(history.len(), 3);
    assert_eq!((history[1]["stage"].as_str(), history[2]["stage"].as_str()), ("heat", "soak"));
    let number = |row: usize, name: &str| history[row][name].parse::<f64>().unwrap();
    assert!((number(1, "surface_degc") - 1000.0).abs() < 1e-9);
    assert!((number(1, "bar_min_degc") - 900.0).abs() < 1e-9);
    assert_eq!(number(1, "bar_surface_minus_core_k"), 80.0);
    assert_eq!(number(1, "time_s"), 60.0);
    let turns = rows(&turns::table(run).unwrap());
    assert_eq!((turns[0]["copper_length_m"].as_str(), turns[0]["water_rise_k"].as_str()), ("0.251", ""));
}

#[test]
fn the_summary_nests_by_name_and_has_null_where_there_is_no_number() {
    let (results, model) = (results(2), model());
    let text = summary::bytes(Finished { model: &model, results: &results }).unwrap();
    let summary: Value = serde_json::from_slice(&text).unwrap();
    assert_eq!(summary["outcome"], "stage_limit");
    assert_eq!(summary["ended_early"]["stage"], "soak");
    assert_eq!(summary["warnings"][0]["kind"], "melting");
    assert_eq!(summary["mesh"]["triangles"], results.section.mesh.triangles().len());
    assert_eq!(summary["mesh"]["order"], 2);
    let last = &summary["states"]["last"];
    assert_eq!(last["label"], "end of soak", "a maximum listed later is not the last state");
    assert_eq!(last["coils"]["upper"]["current_a_rms"], 1000.0);
    assert_eq!(last["parts"]["bar"]["power_w"], 16e3);
    assert_eq!(last["parts"]["bar"]["least_skin_depth_m"], Value::Null);
    assert_eq!(last["solve_backward_error"], Value::Null);
    let per_tonne = &summary["totals"]["energy_kwh_per_t"];
    assert!((per_tonne["workpiece"].as_f64().unwrap() - 200.0).abs() < 1e-9, "{per_tonne}");
    assert!((per_tonne["terminals"].as_f64().unwrap() - 300.0).abs() < 1e-9, "{per_tonne}");
    assert_eq!(summary["goals"][0]["reached_at_s"], 60.0);
    assert_eq!(summary["goals"][1]["reached_at_s"], Value::Null);
    assert_eq!(summary["energy"]["heat_balance_relative"], 0.0);
    let text = String::from_utf8(text).unwrap();
    let place = |key: &str| text.find(key).unwrap();
    assert!(place("\"outcome\"") < place("\"mesh\"") && place("\"first\"") < place("\"last\""), "order of the keys");
}
