//! `coilwright check JOB`: reads, validates and meshes a job, prints what was understood and what to mind.

use std::io::Write;
use std::sync::atomic::Ordering;

use solver::constants::skin_depth;
use solver::model::{
    Coil, ConductorKind, Drive, Gauge, Heating, Hold, Limits, Mirrors, Model, Role, Stage, StageEnd,
};
use solver::overview::{Overview, overview};

use super::{on_threads, print, read_job};
use crate::Surroundings;
use crate::args::{CheckArguments, How};
use crate::exit::{Exit, Failure};
use crate::export::folder::write_file;
use crate::export::pictures;
use crate::figures::{columns, count, degc, millimetres, seconds, si, significant};

/// Litres a minute in a cubic metre a second.
const L_PER_MIN_IN_M3_PER_S: f64 = 6.0e4;

/// Checks a job.
pub(super) fn check(
    arguments: &CheckArguments,
    how: &How,
    out: &mut dyn Write,
    surroundings: &Surroundings,
) -> Result<Exit, Failure> {
    let (_, model) = read_job(&arguments.job)?;
    let stop = || surroundings.stop.load(Ordering::Relaxed);
    let seen = on_threads(how, || overview(&model, &stop))??;
    if let Some(path) = &arguments.draw {
        write_file(path, &pictures::draw_section(&seen.section)?.png)?;
    }
    if !how.quiet {
        print(out, &account(&model, &seen))?;
    }
    Ok(Exit::Done)
}

/// What was understood.
fn account(model: &Model, seen: &Overview) -> String {
    let mut text = format!("{}\n\n", model.title);
    text += &parts(model, seen);
    text += &coils(model);
    text += &drive(model);
    if let Some(heating) = &model.heating {
        text += &stages(model, heating);
    }
    text += &mesh(model, seen);
    if !seen.warnings.is_empty() {
        text += &format!("\n{}\n", count(seen.warnings.len(), "warning"));
        text.extend(seen.warnings.iter().map(|warning| format!("  - {}\n", warning.text)));
    }
    text
}

fn parts(model: &Model, seen: &Overview) -> String {
    let head = ["part", "role", "material", "mass", "starts at", "skin depth at start", "least skin depth"];
    let mut rows = vec![head.map(str::to_owned).to_vec()];
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
    columns(&rows, 3)
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

fn coils(model: &Model) -> String {
    if model.coils.is_empty() {
        return String::new();
    }
    let head =
        ["coil", "turns", "conductor", "inner diameter", "outer diameter", "height", "from z", "at", "skin depth"];
    let mut rows = vec![head.map(str::to_owned).to_vec()];
    rows.extend(model.coils.iter().map(|coil| coil_row(coil, model.drive.frequency_hz())));
    let waters: String = model.coils.iter().map(water_line).collect();
    format!("\n{}{waters}", columns(&rows, 1))
}

fn coil_row(coil: &Coil, frequency_hz: f64) -> Vec<String> {
    let [inner, outer, bottom, top] = extent(coil);
    let sigma = coil.material.electrical_conductivity_s_per_m(coil.temperature_k);
    let conductor = match coil.conductor {
        ConductorKind::Solid if coil.turns.iter().any(|turn| turn.bore.is_some()) => "tube".to_owned(),
        ConductorKind::Solid => "solid".to_owned(),
        ConductorKind::Stranded { fill } => format!("stranded, fill {}", significant(fill, 2)),
    };
    let reversed = if coil.reversed { ", reversed" } else { "" };
    vec![
        coil.name.clone(),
        coil.turns.len().to_string(),
        format!("{conductor}, {}{reversed}", coil.material.name),
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
    coil.turns.iter().map(|turn| turn.outline.bounds()).fold(all, |e, (lo, hi)| {
        [e[0].min(lo[0]), e[1].max(hi[0]), e[2].min(lo[1]), e[3].max(hi[1])]
    })
}

fn water_line(coil: &Coil) -> String {
    coil.water.map_or_else(String::new, |water| {
        format!(
            "  water of `{}`: {}, {} l/min each, in at {}\n",
            coil.name,
            count(water.paths, "path"),
            significant(water.flow_per_path_m3_per_s * L_PER_MIN_IN_M3_PER_S, 3),
            degc(water.inlet_k),
        )
    })
}

fn drive(model: &Model) -> String {
    match &model.drive {
        Drive::Supply { frequency_hz, hold, limits } => format!(
            "\nSupply: {}, holds {}{}\n  voltages and currents are rms at the coil terminals, leads excluded\n",
            si(*frequency_hz, "Hz"),
            hold_words(*hold, &model.gauges),
            limit_words(limits),
        ),
        Drive::AppliedField { frequency_hz, field_a_per_m_rms } => format!(
            "\nUniform axial field: {}, {} rms\n",
            si(*frequency_hz, "Hz"),
            si(*field_a_per_m_rms, "A/m"),
        ),
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

fn stages(model: &Model, heating: &Heating) -> String {
    let mut text = format!("\nHeating, ambient {}\n", degc(heating.ambient_k));
    text.extend(heating.stages.iter().map(|stage| stage_line(stage, &model.gauges)));
    for gauge in &model.gauges {
        let part = model.parts.get(gauge.part).map_or("", |part| &part.name);
        let [r, z] = gauge.at.map(millimetres);
        text += &format!("  gauge `{}` in `{part}` at r = {r}, z = {z}\n", gauge.name);
    }
    text
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
    format!("  stage `{}`: {end}{hold}\n", stage.name)
}

fn mesh(model: &Model, seen: &Overview) -> String {
    let mirrors = match model.mirrors {
        Mirrors::None => String::new(),
        Mirrors::One { z_m } => format!(", half of the device, mirrored at z = {}", millimetres(z_m)),
        Mirrors::Two { lower_m, upper_m } => {
            format!(", a slice between mirrors at z = {} and {}", millimetres(lower_m), millimetres(upper_m))
        }
    };
    let boundary = seen.section.open_boundary.map_or_else(String::new, |(radius_m, _)| {
        format!(", open boundary at {}", millimetres(radius_m))
    });
    format!(
        "\nMesh: {} triangles of order {}, {} nodes, smallest angle {:.1} deg{boundary}{mirrors}\n",
        seen.mesh.triangles, model.mesh.order, seen.mesh.nodes, seen.mesh.min_angle_deg,
    )
}
