//! Pictures of made-up results on real meshes: size, symmetry, colours at known places, and data that are not numbers.
//! The fields are closed forms (filament loops of Biot and Savart, a plane wave decaying into metal, a parabola of
//! temperature), so what a pixel must show is known without the solver.
#![allow(clippy::unwrap_used, clippy::panic, reason = "tests")]

use std::f64::consts::PI;
use std::sync::Arc;

use coilwright::export::pictures::{CloseUp, Picture, PictureError, draw_all, draw_all_named, draw_mesh, draw_section};
use mesher::{Drawing, Limits, Outline, Point, Region, RegionId};
use num_complex::Complex64;
use solver::model::Mirrors;
use solver::results::{
    CoilNumbers, Counts, Electrical, EnergyBalance, FieldMaps, HistoryRow, Outcome, PartNumbers, PartTemperatures,
    RegionName, Results, Section, Snapshot, State, Terminals,
};

const RADIUS: f64 = 0.03;
const HALF_LENGTH: f64 = 0.1;
const DELTA: f64 = 0.003;
const TURNS: usize = 12;
const PITCH: f64 = (0.24 - 0.014) / 11.0;
const CURRENT: f64 = 1500.0;
const END_S: f64 = 180.0;

fn region(id: u32, outline: Outline, size: f64) -> Region {
    Region { id: RegionId(id), outline, interior_size: size, surface_size: size, layers: None }
}

fn rectangle(r: [f64; 2], z: [f64; 2]) -> Outline {
    Outline::rectangle([r[0], z[0]], [r[1], z[1]]).unwrap()
}

fn turn_heights(mirrored: bool) -> Vec<f64> {
    let all = (0..TURNS).map(|i| (i as f64 - 5.5) * PITCH);
    all.filter(|z| !mirrored || *z > 0.0).collect()
}

/// A bar in a lining in a coil of hollow turns: the whole of it, or its upper half on a mirror plane.
fn section(mirrored: bool, order: usize) -> Section {
    let low = |z: f64| if mirrored { 0.0 } else { -z };
    let mut regions = vec![
        region(1, rectangle([0.0, RADIUS], [low(HALF_LENGTH), HALF_LENGTH]), 0.0035),
        region(2, rectangle([0.033, 0.038], [low(0.12), 0.12]), 0.004),
    ];
    let mut names = vec![RegionName::Air, RegionName::Part(0, "billet".into()), RegionName::Part(1, "liner".into())];
    for (i, z) in turn_heights(mirrored).into_iter().enumerate() {
        let outside = Outline::rounded_rectangle([0.04, z - 0.007], [0.05, z + 0.007], 0.001).unwrap();
        regions.push(region(3 + i as u32, outside, 0.0025));
        regions.push(region(0, rectangle([0.0415, 0.0485], [z - 0.0055, z + 0.0055]), 0.003));
        names.push(RegionName::Turn(0, i, "coil".into()));
    }
    let domain =
        if mirrored { Outline::quarter_disc(0.0, 0.3).unwrap() } else { Outline::half_disc(0.0, 0.3).unwrap() };
    let drawing = Drawing {
        domain,
        domain_region: RegionId(0),
        domain_size: 0.04,
        regions,
        gradation: 0.3,
        boundary_size: Some(0.05),
        line_sizes: Vec::new(),
    };
    let mesh = mesher::triangulate(&drawing, &Limits::default(), &|| false).unwrap();
    let nodes = Arc::new(mesh.nodes(order));
    let mirrors = if mirrored { Mirrors::One { z_m: 0.0 } } else { Mirrors::None };
    Section { mesh: Arc::new(mesh), nodes, regions: names, mirrors, open_boundary: Some((0.3, 0.0)) }
}

/// Vector potential of the turns as filaments, Wb/m (J. D. Jackson, Classical Electrodynamics, 3rd ed., eq. 5.36), by
/// the trapezoidal rule over the angle.
fn potential(p: Point) -> f64 {
    const STEPS: usize = 48;
    let a = 0.045;
    let of_loop = |z: f64| {
        let sum: f64 = (0..STEPS)
            .map(|k| {
                let angle = 2.0 * PI * (k as f64 + 0.5) / STEPS as f64;
                let square = p[0] * p[0] + a * a - 2.0 * p[0] * a * angle.cos() + (p[1] - z).powi(2);
                angle.cos() / square.max(1e-5).sqrt()
            })
            .sum();
        1e-7 * CURRENT * a * 2.0 * PI * sum / STEPS as f64
    };
    turn_heights(false).into_iter().map(of_loop).sum()
}

fn flux_density(p: Point) -> [Complex64; 2] {
    let h = 1e-5;
    let r = p[0].max(2.0 * h);
    let radial = -(potential([r, p[1] + h]) - potential([r, p[1] - h])) / (2.0 * h);
    let axial = ((r + h) * potential([r + h, p[1]]) - (r - h) * potential([r - h, p[1]])) / (2.0 * h * r);
    [Complex64::new(radial, 0.0), Complex64::new(axial, 0.0)]
}

/// Current density in A/m^2: a plane wave into the bar, uniform in the turns.
fn current_density(kind: &RegionName, p: Point) -> Complex64 {
    match kind {
        RegionName::Part(0, _) => {
            let along = 1.0 - 0.3 * (p[1] / HALF_LENGTH).powi(2);
            -6e7 * along * (Complex64::new(-1.0, -1.0) * (RADIUS - p[0]) / DELTA).exp()
        }
        RegionName::Turn(..) => Complex64::new(2e7, 0.0),
        _ => Complex64::ZERO,
    }
}

fn fields(section: &Section) -> FieldMaps {
    let nodes = &section.nodes;
    let stride = nodes.elements.len() / section.mesh.triangles().len();
    let at_nodes: Vec<[Complex64; 2]> = nodes.points.iter().map(|&p| flux_density(p)).collect();
    let mut maps = FieldMaps {
        vector_potential_wb_per_m: nodes.points.iter().map(|&p| potential(p).into()).collect(),
        joule_loss_w_per_m3: Vec::new(),
        current_density_a_per_m2: Vec::new(),
        flux_density_t: Vec::new(),
        field_strength_a_per_m: Vec::new(),
        force_density_n_per_m3: vec![[0.0; 2]; nodes.elements.len()],
    };
    for (element, local) in nodes.elements.chunks(stride).enumerate() {
        let kind = &section.regions[section.mesh.regions()[element].0 as usize];
        let conductivity = if matches!(kind, RegionName::Part(..)) { 1e6 } else { 4e7 };
        for &n in local {
            let j = current_density(kind, nodes.points[n as usize]);
            maps.current_density_a_per_m2.push(j);
            maps.joule_loss_w_per_m3.push(0.5 * j.norm_sqr() / conductivity);
            maps.flux_density_t.push(at_nodes[n as usize]);
        }
    }
    maps
}

/// Temperature of the bar in kelvin at a time: hotter outside, cooler towards the ends.
fn bar_temperature(p: Point, time_s: f64) -> f64 {
    let shape = 0.9 + 0.08 * (p[0] / RADIUS).powi(2) + 0.02 * (1.0 - (p[1] / HALF_LENGTH).powi(4));
    293.15 + 1180.0 * shape * (time_s / END_S).sqrt()
}

fn temperatures(section: &Section, time_s: f64) -> Vec<f64> {
    let mut kelvin = vec![f64::NAN; section.nodes.points.len()];
    let stride = section.nodes.elements.len() / section.mesh.triangles().len();
    for (element, local) in section.nodes.elements.chunks(stride).enumerate() {
        let id = section.mesh.regions()[element].0;
        for &n in local {
            let p = section.nodes.points[n as usize];
            match id {
                1 => kelvin[n as usize] = bar_temperature(p, time_s),
                2 => kelvin[n as usize] = 293.15 + 250.0 * (time_s / END_S) * (0.038 - p[0]) / 0.005,
                _ => {}
            }
        }
    }
    kelvin
}

fn terminals(time_s: f64) -> Terminals {
    let (current, resistance) = (1500.0 + 200.0 * (time_s / 40.0).tanh(), 0.011 - 0.003 * (time_s / 60.0).tanh());
    let inductance = 6.1e-6 + 1.1e-6 * (time_s / 90.0).tanh();
    let reactance = 2.0 * PI * 3000.0 * inductance;
    let (active, reactive) = (current * current * resistance, current * current * reactance);
    let apparent = active.hypot(reactive);
    Terminals {
        current_a_rms: current,
        voltage_v_rms: current * resistance.hypot(reactance),
        power_w: active,
        reactive_power_var: reactive,
        apparent_power_va: apparent,
        power_factor: active / apparent,
        quality_factor: reactive / active,
        resistance_ohm: resistance,
        reactance_ohm: reactance,
        inductance_h: inductance,
    }
}

fn electrical(time_s: f64) -> Electrical {
    let part = |name: &str, loss: f64| PartNumbers {
        name: name.into(),
        joule_loss_w: loss,
        hysteresis_loss_w: 0.0,
        poynting_power_w: Some(loss),
        mean_surface_power_density_w_per_m2: loss / 0.0377,
        largest_loss_w_per_m3: 1.8e9,
        least_skin_depth_m: DELTA,
        largest_field_a_per_m_rms: 6e4,
    };
    let coil = CoilNumbers { name: "coil".into(), terminals: terminals(time_s), loss_w: 4500.0, water_outlet_k: None };
    Electrical {
        coils: vec![coil],
        parts: vec![part("billet", 22e3), part("liner", 0.0)],
        terminals: Some(terminals(time_s)),
        workpiece_power_w: 22e3,
        electrical_efficiency: Some(0.83),
        stored_energy_j: 5.0,
        power_balance_relative: 1e-12,
        solve_backward_error: 1e-16,
    }
}

fn history_row(time_s: f64) -> HistoryRow {
    let bar = |p: Point| bar_temperature(p, time_s);
    let (core, surface) = (bar([0.0, 0.0]), bar([RADIUS, 0.0]));
    let bar_part = PartTemperatures {
        part: 0,
        mean_k: bar([0.021, 0.05]),
        min_k: bar([0.0, HALF_LENGTH]),
        max_k: surface,
        surface_minus_core_k: surface - core,
    };
    let liner = PartTemperatures {
        part: 1,
        mean_k: 293.15 + 125.0 * time_s / END_S,
        min_k: 293.15,
        max_k: 293.15 + 250.0 * time_s / END_S,
        surface_minus_core_k: -100.0 * time_s / END_S,
    };
    HistoryRow {
        time_s,
        stage: usize::from(time_s > 150.0),
        gauges_k: vec![core, surface],
        parts: vec![bar_part, liner],
        workpiece_power_w: 22e3,
        terminals: Some(terminals(time_s)),
        coil_loss_w: 4500.0,
        energy: EnergyBalance::default(),
    }
}

fn state(label: &str, time_s: f64) -> State {
    State { time_s, label: label.into(), frequency_hz: 3000.0, limited_by: None, electrical: electrical(time_s) }
}

fn results(mirrored: bool, order: usize) -> Results {
    let section = section(mirrored, order);
    let field = Arc::new(fields(&section));
    let later = Arc::new((*field).clone());
    let snapshot = |label: &str, time_s: f64, field: &Arc<FieldMaps>, factor: f64| Snapshot {
        time_s,
        label: label.into(),
        field: Arc::clone(field),
        field_factor: factor,
        temperature_k: temperatures(&section, time_s),
    };
    let snapshots = vec![
        snapshot("start", 0.0, &field, 1.0),
        snapshot("during heat", 75.0, &field, 1.0),
        snapshot("end of heat", 150.0, &later, 0.9),
        snapshot("end of soak", END_S, &later, 0.8),
    ];
    let states = [("start", 0.0), ("surface at Curie", 62.0), ("core at Curie", 71.0), ("end of heat", 150.0)];
    let mut states: Vec<State> = states.into_iter().map(|(label, time_s)| state(label, time_s)).collect();
    states.push(state("greatest voltage", 160.0));
    states.push(state("end of soak", END_S));
    Results {
        title: "60 mm bar, 12-turn coil, 3 kHz".into(),
        outcome: Outcome::Complete,
        warnings: Vec::new(),
        states,
        history: (0..=90).map(|i| history_row(2.0 * f64::from(i))).collect(),
        turns: Vec::new(),
        snapshots,
        peak_temperature_k: temperatures(&section, END_S),
        energy: None,
        counts: Counts::default(),
        section,
    }
}

struct Pixels {
    width: usize,
    height: usize,
    bytes: Vec<u8>,
}

impl Pixels {
    fn at(&self, x: usize, y: usize) -> [u8; 3] {
        let i = 3 * (y * self.width + x);
        [self.bytes[i], self.bytes[i + 1], self.bytes[i + 2]]
    }
}

fn decoded(picture: &Picture) -> Pixels {
    let mut reader = png::Decoder::new(std::io::Cursor::new(&picture.png)).read_info().unwrap();
    let mut bytes = vec![0; reader.output_buffer_size().unwrap()];
    let info = reader.next_frame(&mut bytes).unwrap();
    Pixels { width: info.width as usize, height: info.height as usize, bytes }
}

fn named<'a>(pictures: &'a [Picture], name: &str) -> &'a Picture {
    let names: Vec<&str> = pictures.iter().map(|p| p.name.as_str()).collect();
    pictures.iter().find(|p| p.name == name).unwrap_or_else(|| panic!("no {name} in {names:?}"))
}

/// Rim of the map, `[left, right, top, bottom]`: from the frame's upper left corner, the first long dark line each way.
fn rim(image: &Pixels) -> [usize; 4] {
    let dark = |x: usize, y: usize| image.at(x, y).iter().all(|&v| v < 140);
    let run_right = |x: usize, y: usize| (x..image.width).take_while(|&x| dark(x, y)).count();
    let run_down = |x: usize, y: usize| (y..image.height).take_while(|&y| dark(x, y)).count();
    let corners = (100..image.height).flat_map(|y| (0..image.width / 2).map(move |x| (x, y)));
    let (left, top) = corners.into_iter().find(|&(x, y)| run_right(x, y) > 600 && run_down(x, y) > 200).unwrap();
    [left, left + run_right(left, top) - 1, top, top + run_down(left, top) - 1]
}

#[test]
fn every_picture_decodes_with_a_size_fit_for_a_report_and_has_a_title() {
    let pictures = draw_all_named(&results(false, 2), &["core".into(), "surface".into()]).unwrap();
    for name in [
        "maps/section.png",
        "maps/mesh.png",
        "maps/loss-density.png",
        "maps/loss-density-end-of-soak.png",
        "maps/flux-lines.png",
        "maps/flux-density.png",
        "maps/current-density.png",
        "maps/temperature-end-of-heat.png",
        "maps/temperature-end-of-soak.png",
        "maps/peak-temperature.png",
        "charts/heating-curve.png",
        "charts/power.png",
        "charts/radial-profile-billet.png",
        "charts/axial-profile-billet.png",
    ] {
        named(&pictures, name);
    }
    assert!(!pictures.iter().any(|p| p.name.contains("profile-liner")), "the liner takes up no power");
    for picture in &pictures {
        let image = decoded(picture);
        assert!((1200..=1600).contains(&image.width), "{}: {} wide", picture.name, image.width);
        assert!((600..=1200).contains(&image.height), "{}: {} high", picture.name, image.height);
        let ink = (20..65).flat_map(|y| (30..700).map(move |x| (x, y))).filter(|&(x, y)| image.at(x, y)[0] < 100);
        assert!(ink.count() > 300, "{}: no title", picture.name);
    }
}

#[test]
fn mirrored_halves_are_exact_images() {
    let pictures = draw_all(&results(true, 2)).unwrap();
    for name in ["maps/loss-density.png", "maps/temperature-end-of-heat.png", "maps/flux-lines.png"] {
        let image = decoded(named(&pictures, name));
        let [left, right, top, bottom] = rim(&image);
        let (width, height) = (right - left, bottom - top);
        assert!(width > 700 && height > 250, "{name}: map of {width} x {height}");
        let mut compared = 0;
        for y in top + 3..bottom - 2 {
            for x in left + 3..right - 2 {
                // The centre lines are broken and run one way, so they are not mirrored.
                let near_lines = (2 * x).abs_diff(left + right) < 8 || (2 * y).abs_diff(top + bottom) < 8;
                if !near_lines {
                    let here = image.at(x, y);
                    assert_eq!(here, image.at(left + right - x, y), "{name}: across the mirror plane at ({x}, {y})");
                    assert_eq!(here, image.at(x, top + bottom - y), "{name}: across the axis at ({x}, {y})");
                    compared += 1;
                }
            }
        }
        assert!(compared > 150_000, "{name}: {compared}");
    }
}

#[test]
fn colours_at_known_places_are_those_of_the_colour_map() {
    let mut results = results(false, 2);
    results.snapshots.drain(..3);
    let pictures = draw_all(&results).unwrap();
    let image = decoded(named(&pictures, "maps/temperature-end-of-soak.png"));
    let [left, right, top, bottom] = rim(&image);
    // The map spans the bodies, 0.24 m long and 0.05 m in radius, with a margin of 6 % of the length, on its side.
    let per_metre = (right - left) as f64 / (0.24 * 1.12);
    let height = (bottom - top) as f64 / per_metre;
    assert!((height - 0.1 - 0.24 * 0.12).abs() < 1e-3, "scales differ: {height} m across");
    let x_of = |z: f64| (0.5 * (left + right) as f64 + z * per_metre).round() as usize;
    let y_of = |r: f64| (0.5 * (top + bottom) as f64 - r * per_metre).round() as usize;
    // Colours span the bar, not the far colder liner: from 1082 °C, brought down to a tick, to its greatest temperature.
    let (low, high) = (1080.0 + 273.15, bar_temperature([RADIUS, 0.0], END_S));
    assert!((bar_temperature([0.0, HALF_LENGTH], END_S) - 273.15 - 1082.0).abs() < 1e-9);
    for (r, z) in [(0.02, 0.03), (0.01, -0.08), (-0.025, 0.06), (-0.005, -0.02)] {
        let t = (bar_temperature([f64::abs(r), z], END_S) - low) / (high - low);
        let expected = colorous::INFERNO.eval_continuous(t);
        let found = image.at(x_of(z), y_of(r));
        for (a, b) in found.iter().zip([expected.r, expected.g, expected.b]) {
            assert!(a.abs_diff(b) <= 3, "at r = {r}, z = {z}: {found:?}, expected {expected:?}");
        }
    }
    assert_eq!(image.at(x_of(0.0), y_of(0.0315)), [255; 3], "air between bar and liner is white");
    let copper = image.at(x_of(0.5 * PITCH + 0.0062), y_of(0.045));
    assert!(copper[0] == copper[1] && (200..230).contains(&copper[0]), "copper is not heated: {copper:?}");
}

#[test]
fn orders_one_and_three_are_drawn_like_order_two() {
    let image = |order: usize| {
        let mut results = results(true, order);
        results.snapshots.clear();
        decoded(named(&draw_all(&results).unwrap(), "maps/peak-temperature.png"))
    };
    let (one, two, three) = (image(1), image(2), image(3));
    assert_eq!((one.width, one.height), (two.width, two.height));
    let differing = |a: &Pixels, b: &Pixels| {
        let pairs = a.bytes.chunks(3).zip(b.bytes.chunks(3));
        pairs.filter(|(p, q)| p.iter().zip(*q).any(|(u, v)| u.abs_diff(*v) > 12)).count()
    };
    // Only rims of rounded corners may move, by a fraction of a pixel.
    assert!(differing(&one, &two) < 6000, "{}", differing(&one, &two));
    assert!(differing(&three, &two) < 2000, "{}", differing(&three, &two));
}

#[test]
fn the_same_results_give_the_same_bytes_for_any_number_of_threads() {
    let mut results = results(true, 2);
    results.snapshots.truncate(1);
    let with = |threads: usize| {
        let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build().unwrap();
        pool.install(|| draw_all(&results)).unwrap()
    };
    assert!(with(1) == with(3), "pictures differ between one and three threads");
}

#[test]
fn constant_fields_and_fields_without_numbers_are_drawn() {
    let mut whole = results(true, 2);
    whole.snapshots.drain(1..3);
    for value in [5.0, f64::NAN, f64::INFINITY] {
        let mut results = whole.clone();
        let mut maps = (*results.snapshots[0].field).clone();
        maps.joule_loss_w_per_m3.fill(value);
        maps.vector_potential_wb_per_m.fill(Complex64::new(value, value));
        maps.current_density_a_per_m2.fill(Complex64::new(value, 0.0));
        maps.flux_density_t.fill([Complex64::new(value, 0.0); 2]);
        let maps = Arc::new(maps);
        for snapshot in &mut results.snapshots {
            snapshot.field = Arc::clone(&maps);
            snapshot.temperature_k.fill(value);
        }
        results.peak_temperature_k.fill(value);
        for row in &mut results.history {
            row.workpiece_power_w = value;
            row.gauges_k.fill(value);
            row.parts.iter_mut().for_each(|p| (p.mean_k, p.min_k, p.max_k) = (value, value, value));
        }
        let pictures = draw_all(&results).unwrap();
        assert!(pictures.iter().all(|p| decoded(p).width >= 1200));
        assert!(pictures.len() >= 12, "{value}: {} pictures", pictures.len());
    }
}

#[test]
fn a_field_solve_without_heating_gives_maps_and_loss_profiles() {
    let mut results = results(false, 2);
    results.history.clear();
    results.snapshots.truncate(1);
    results.snapshots[0].temperature_k.clear();
    results.peak_temperature_k.clear();
    results.states.truncate(1);
    let pictures = draw_all(&results).unwrap();
    let names: Vec<&str> = pictures.iter().map(|p| p.name.as_str()).collect();
    assert!(names.contains(&"charts/radial-profile-billet.png"), "{names:?}");
    assert!(!names.iter().any(|n| n.contains("temperature") || n.contains("heating")), "{names:?}");
    results.snapshots.clear();
    results.states.clear();
    assert_eq!(draw_all(&results).unwrap().len(), 2, "section and mesh");
}

#[test]
fn results_that_do_not_fit_their_mesh_are_refused() {
    let mut results = results(true, 2);
    results.peak_temperature_k.pop();
    let refused = draw_all(&results).map(|p| p.len());
    assert!(matches!(refused, Err(PictureError::Length { what: "temperatures", .. })), "{refused:?}");
    results.section.regions.truncate(2);
    let refused = draw_section(&results.section, "title").map(|p| p.name);
    assert!(matches!(refused, Err(PictureError::Length { what: "names of regions", .. })), "{refused:?}");
}

#[test]
fn the_section_is_filled_by_part_and_the_mesh_shows_its_lines() {
    let section = section(true, 2);
    let drawn = decoded(&draw_section(&section, "a section").unwrap());
    let count = |image: &Pixels, colour: [u8; 3]| image.bytes.chunks(3).filter(|c| *c == colour).count();
    let (bar, copper) = (count(&drawn, [198, 214, 232]), count(&drawn, [224, 158, 110]));
    assert!(bar > 50_000 && copper > 4000, "{bar} pixels of the bar, {copper} of copper");
    let mesh = decoded(&draw_mesh(&section, None, "a section").unwrap());
    let [left, right, top, bottom] = rim(&mesh);
    let blue = |x: usize, y: usize| mesh.at(x, y) == [198, 214, 232];
    assert!(count(&mesh, [198, 214, 232]) > 10_000, "the bar's own colour, there are no strips");
    let middle = (left..right).filter(|&x| blue(x, (3 * top + bottom) / 4 + 20)).count();
    assert!(bottom > top && middle < (right - left) * 9 / 10, "mesh lines cover part of the bar: {middle}");
}

/// Half of the light blue of the first part, half of the colour that marks strips.
const STRIP_IN_BAR: [u8; 3] = [187, 125, 171];

#[test]
fn strips_are_marked_in_the_mesh_and_a_close_up_shows_them_large() {
    let layers = Some(mesher::Layers { first: 0.001, growth: 1.5, count: 4 });
    let bar = Region { layers, ..region(1, rectangle([0.0, RADIUS], [-HALF_LENGTH, HALF_LENGTH]), 0.006) };
    let drawing = Drawing {
        domain: Outline::half_disc(0.0, 0.3).unwrap(),
        domain_region: RegionId(0),
        domain_size: 0.04,
        regions: vec![bar],
        gradation: 0.4,
        boundary_size: None,
        line_sizes: Vec::new(),
    };
    let mesh = mesher::triangulate(&drawing, &Limits::default(), &|| false).unwrap();
    assert!(mesh.strip_triangles().iter().any(|&s| s));
    let nodes = Arc::new(mesh.nodes(2));
    let regions = vec![RegionName::Air, RegionName::Part(0, "billet".into())];
    let section =
        Section { mesh: Arc::new(mesh), nodes, regions, mirrors: Mirrors::None, open_boundary: Some((0.3, 0.0)) };
    let share = |close_up| {
        let image = decoded(&draw_mesh(&section, close_up, "strips").unwrap());
        let marked = image.bytes.chunks(3).filter(|c| *c == STRIP_IN_BAR).count();
        marked as f64 / (image.width * image.height) as f64
    };
    let whole = share(None);
    assert!(whole > 0.02, "{whole}");
    // A square of 4 mm at the surface, the inner three quarters of it in the strip.
    let close = share(Some(CloseUp { r_m: RADIUS - 0.001, z_m: 0.0, width_m: 0.004 }));
    assert!(close > 0.15, "{close}");
    let core = share(Some(CloseUp { r_m: 0.005, z_m: 0.0, width_m: 0.004 }));
    assert!(core < 0.001, "the core is in no strip, the legend shows its colour: {core}");
}
