//! `coilwright check JOB`: reads, validates and meshes a job, prints what was understood and what to mind.

use std::io::Write;
use std::sync::atomic::Ordering;

use solver::clearance::Neighbours;
use solver::constants::skin_depth;
use solver::mesh_report::Body;
use solver::model::{
    Coil, ConductorKind, Drive, Face, FaceCondition, Gauge, Heating, Hold, Limits, Mirrors, Model, Role, Stage,
    StageEnd, Surface,
};
use solver::overview::{Overview, overview};

use super::{on_threads, print, read_job};
use crate::Surroundings;
use crate::args::{CheckArguments, How};
use crate::exit::{Exit, Failure};
use crate::export::folder::{picture_path, write_file};
use crate::export::pictures;
use crate::figures::{Page, count, degc, millimetres, row, seconds, si, significant};

/// Litres a minute in a cubic metre a second.
const L_PER_MIN_IN_M3_PER_S: f64 = 6.0e4;

/// Checks a job.
pub(super) fn check(
    arguments: &CheckArguments,
    how: &How,
    out: &mut dyn Write,
    surroundings: &Surroundings,
) -> Result<Exit, Failure> {
    for path in arguments.draw.iter().chain(&arguments.draw_section) {
        picture_path(path)?;
    }
    let (_, model) = read_job(&arguments.job)?;
    let stop = || surroundings.stop.load(Ordering::Relaxed);
    let seen = on_threads(how, || overview(&model, &stop))??;
    if let Some(path) = &arguments.draw {
        write_file(path, &pictures::draw_mesh(&seen.section, arguments.close_up, &model.title)?.png)?;
    }
    if let Some(path) = &arguments.draw_section {
        write_file(path, &pictures::draw_section(&seen.section, &model.title)?.png)?;
    }
    if !how.quiet {
        print(out, &account(&model, &seen))?;
    }
    Ok(Exit::Done)
}

/// What was understood.
fn account(model: &Model, seen: &Overview) -> String {
    let mut page = Page::default();
    page.line(&model.title);
    parts(&mut page, model, seen);
    coils(&mut page, model);
    neighbours(&mut page, &seen.neighbours);
    drive(&mut page, model);
    if let Some(heating) = &model.heating {
        stages(&mut page, model, heating);
        surfaces(&mut page, model);
    }
    mesh(&mut page, model, seen);
    if !seen.warnings.is_empty() {
        page.gap();
        page.line(count(seen.warnings.len(), "warning"));
        for warning in &seen.warnings {
            page.line(format!("  - {}", warning.text));
        }
    }
    page.into_text()
}

fn parts(page: &mut Page, model: &Model, seen: &Overview) {
    let head = ["part", "role", "material", "mass", "starts at", "skin depth at start", "least skin depth"];
    let mut rows = vec![row(head)];
    for (part, seen) in model.parts.iter().zip(&seen.parts) {
        rows.push(vec![
            part.name.clone(),
            role_word(part.role).to_owned(),
            part.material.name.clone(),
            format!("{} kg", significant(seen.mass_kg, 4)),
            degc(part.start_k),
            millimetres(seen.skin_depth_start_m),
            millimetres(seen.least_skin_depth_m),
        ]);
    }
    page.gap();
    page.table(&rows, 3);
}

fn role_word(role: Role) -> &'static str {
    match role {
        Role::Workpiece => "workpiece",
        Role::Lining => "lining",
        Role::Susceptor => "susceptor",
        Role::Crucible => "crucible",
        Role::Fixture => "fixture, not heated",
    }
}

fn coils(page: &mut Page, model: &Model) {
    if model.coils.is_empty() {
        return;
    }
    let head =
        ["coil", "conductor", "turns", "inner diameter", "outer diameter", "height", "from z", "at", "skin depth"];
    let mut rows = vec![row(head)];
    rows.extend(model.coils.iter().map(|coil| coil_row(coil, model.drive.frequency_hz())));
    page.gap();
    page.table(&rows, 2);
    for (coil, water) in model.coils.iter().filter_map(|coil| coil.water.map(|water| (coil, water))) {
        let flow = significant(water.flow_per_path_m3_per_s * L_PER_MIN_IN_M3_PER_S, 3);
        let (paths, inlet) = (count(water.paths, "path"), degc(water.inlet_k));
        page.line(format!("  water of `{}`: {paths}, {flow} l/min each, in at {inlet}", coil.name));
    }
}

fn coil_row(coil: &Coil, frequency_hz: f64) -> Vec<String> {
    let [inner, outer, bottom, top] = extent(coil);
    // Half a length minus half a length may leave a rounding error.
    let bottom = if bottom.abs() < 1e-9 * (top - bottom) { 0.0 } else { bottom };
    let sigma = coil.material.electrical_conductivity_s_per_m(coil.temperature_k);
    let conductor = match coil.conductor {
        ConductorKind::Solid if coil.turns.iter().any(|turn| turn.bore.is_some()) => "tube".to_owned(),
        ConductorKind::Solid => "solid".to_owned(),
        ConductorKind::Stranded { fill } => format!("stranded, fill {}", significant(fill, 2)),
    };
    let reversed = if coil.reversed { ", reversed" } else { "" };
    vec![
        coil.name.clone(),
        format!("{conductor}, {}{reversed}", coil.material.name),
        coil.turns.len().to_string(),
        millimetres(2.0 * inner),
        millimetres(2.0 * outer),
        millimetres(top - bottom),
        millimetres(bottom),
        degc(coil.temperature_k),
        millimetres(skin_depth(frequency_hz, sigma, coil.material.relative_permeability(coil.temperature_k))),
    ]
}

/// Least and greatest radius, least and greatest height of the bare conductor.
fn extent(coil: &Coil) -> [f64; 4] {
    let all = [f64::INFINITY, f64::NEG_INFINITY, f64::INFINITY, f64::NEG_INFINITY];
    coil.turns
        .iter()
        .map(|turn| turn.outline.bounds())
        .fold(all, |e, (lo, hi)| [e[0].min(lo[0]), e[1].max(hi[0]), e[2].min(lo[1]), e[3].max(hi[1])])
}

fn drive(page: &mut Page, model: &Model) {
    page.gap();
    match &model.drive {
        Drive::Supply { frequency_hz, hold, limits } => {
            let hold = hold_words(*hold, &model.gauges);
            page.line(format!("Supply: {}, holds {hold}{}", si(*frequency_hz, "Hz"), limit_words(limits)));
            page.line("  voltages and currents are rms at the coil terminals, leads excluded");
        }
        Drive::AppliedField { frequency_hz, field_a_per_m_rms } => {
            let (frequency, field) = (si(*frequency_hz, "Hz"), si(*field_a_per_m_rms, "A/m"));
            page.line(format!("Uniform axial field: {frequency}, {field} rms"));
        }
    }
}

fn hold_words(hold: Hold, gauges: &[Gauge]) -> String {
    match hold {
        Hold::CoilCurrent(amperes) => format!("the coil current at {}", si(amperes, "A")),
        Hold::CoilVoltage(volts) => format!("the coil voltage at {}", si(volts, "V")),
        Hold::WorkpiecePower(watts) => format!("the power in the work at {}", si(watts, "W")),
        Hold::TerminalPower(watts) => format!("the power at the coil terminals at {}", si(watts, "W")),
        Hold::GaugeTemperature { gauge, at_k } => {
            format!("`{}` at {}", gauges.get(gauge).map_or("", |gauge| &gauge.name), degc(at_k))
        }
        Hold::Off => "nothing (off)".to_owned(),
    }
}

fn limit_words(limits: &Limits) -> String {
    let all = [(limits.voltage_v_rms, "V"), (limits.current_a_rms, "A"), (limits.power_w, "W")];
    let given: Vec<String> = all.iter().filter_map(|(limit, unit)| limit.map(|limit| si(limit, unit))).collect();
    if given.is_empty() { ", no limits given".to_owned() } else { format!(", at most {}", given.join(", ")) }
}

fn stages(page: &mut Page, model: &Model, heating: &Heating) {
    page.gap();
    page.line(format!("Heating, ambient {}", degc(heating.ambient_k)));
    for stage in &heating.stages {
        page.line(stage_line(stage, &model.gauges));
    }
    for gauge in &model.gauges {
        let part = model.parts.get(gauge.part).map_or("", |part| &part.name);
        let [r, z] = gauge.at.map(millimetres);
        page.line(format!("  gauge `{}` in `{part}` at r = {r}, z = {z}", gauge.name));
    }
}

fn stage_line(stage: &Stage, gauges: &[Gauge]) -> String {
    let end = match stage.end {
        StageEnd::After(time_s) => format!("for {}", seconds(time_s)),
        StageEnd::GaugeReaches { gauge, at_k, at_most_s } => format!(
            "until `{}` reaches {}, at most {}",
            gauges.get(gauge).map_or("", |gauge| &gauge.name),
            degc(at_k),
            seconds(at_most_s),
        ),
    };
    let hold = stage.hold.map_or_else(String::new, |hold| format!(", holding {}", hold_words(hold, gauges)));
    format!("  stage `{}`: {end}{hold}", stage.name)
}

/// Gaps between bodies, and where they touch.
fn neighbours(page: &mut Page, neighbours: &[Neighbours]) {
    if neighbours.is_empty() {
        return;
    }
    page.gap();
    page.line("Gaps, in the section");
    for pair in neighbours {
        let what = match &pair.bodies {
            [one, other] if one == other => format!("turns of {}", body_name(one)),
            [one, other] => format!("{} and {}", body_name(one), body_name(other)),
        };
        let apart = match (pair.touch(), pair.contact_m > 0.0) {
            (_, true) => format!("touch along {}", millimetres(pair.contact_m)),
            (true, false) => "touch".to_owned(),
            (false, false) => format!("{} apart", millimetres(pair.gap_m)),
        };
        page.line(format!("  {what}: {apart}"));
    }
}

fn body_name(body: &Body) -> String {
    match body {
        Body::Air => "air".to_owned(),
        Body::Part(name) | Body::Coil(name) => format!("`{name}`"),
    }
}

/// What happens at the surfaces of heated parts.
fn surfaces(page: &mut Page, model: &Model) {
    for part in model.parts.iter().filter(|part| part.role.is_heated()) {
        let mut words = vec![exchange_words(part.surface)];
        words.extend(
            part.faces.iter().map(|(face, condition)| format!("{} {}", face_word(*face), condition_words(*condition))),
        );
        page.line(format!("  surface of `{}`: {}", part.name, words.join("; ")));
    }
}

fn exchange_words(surface: Surface) -> String {
    let convection = significant(surface.convection_w_per_m2_k, 3);
    format!("emissivity {}, convection {convection} W/m2/K", significant(surface.emissivity, 2))
}

fn face_word(face: Face) -> &'static str {
    match face {
        Face::Outside => "outside",
        Face::Inside => "inside",
        Face::Top => "top",
        Face::Bottom => "bottom",
    }
}

fn condition_words(condition: FaceCondition) -> String {
    match condition {
        FaceCondition::Exchange(surface) => format!("with {}", exchange_words(surface)),
        FaceCondition::HeldAt(kelvin) => format!("held at {}", degc(kelvin)),
        FaceCondition::Flux(flux) => format!("takes up {}", si(flux, "W/m2")),
        FaceCondition::Insulated => "insulated".to_owned(),
    }
}

fn mesh(page: &mut Page, model: &Model, seen: &Overview) {
    let (report, whole) = (&seen.mesh, &seen.mesh.whole);
    page.gap();
    page.line(format!(
        "Mesh: {} triangles of order {}, {} nodes; {} of the triangles in thin strips along surfaces",
        report.triangles, model.mesh.order, seen.nodes, whole.strip_triangles
    ));
    page.line(format!(
        "  outside strips: smallest angle {:.1} deg, mean of the smallest {:.1} deg, {:.1} % of them from 30 to 40 deg",
        whole.min_angle_deg,
        whole.mean_min_angle_deg,
        100.0 * whole.share_30_to_40
    ));
    let (shortest, longest) = (millimetres(whole.shortest_edge_m), millimetres(whole.longest_edge_m));
    page.line(format!("  edges from {shortest} to {longest}"));
    let merges = report.merges;
    if merges.corners_moved + merges.lines_moved > 0 {
        page.line(format!(
            "  {} and {} too close to tell apart, moved by at most {}",
            count(merges.corners_moved, "corner"),
            count(merges.lines_moved, "line"),
            millimetres(merges.largest_move_m)
        ));
    }
    if let Some((radius_m, _)) = seen.section.open_boundary {
        page.line(format!("  open boundary at a radius of {}", millimetres(radius_m)));
    }
    match model.mirrors {
        Mirrors::None => {}
        Mirrors::One { z_m } => {
            page.line(format!("  half of the device, mirrored at z = {}; numbers are for the whole", millimetres(z_m)));
        }
        Mirrors::Two { lower_m, upper_m } => {
            let (lower, upper) = (millimetres(lower_m), millimetres(upper_m));
            page.line(format!("  a slice between mirrors at z = {lower} and {upper}; numbers are for the slice"));
        }
    }
}
