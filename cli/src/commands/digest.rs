//! The numbers of a run as a person reads them, without opening a file. Voltages and currents are rms.

use solver::results::{Electrical, Outcome, PartNumbers, State};
use solver::model::Role;

use crate::export::history::part_name;
use crate::export::states::limit_word;
use crate::export::summary::{energy_per_tonne, goals, Goal};
use crate::export::Finished;
use crate::figures::{columns, count, degc, seconds, si, significant};

/// W/m^2 in a kW/cm^2.
const W_PER_M2_IN_KW_PER_CM2: f64 = 1e7;

/// The digest.
pub(super) fn digest(run: Finished<'_>) -> String {
    let results = run.results;
    let mut text = format!("{}: {}\n", results.title, outcome_words(&results.outcome));
    text += &format!(
        "{} triangles of order {}, {} unknowns; {}, {}\n",
        results.section.mesh.triangles().len(),
        results.section.nodes.order,
        results.counts.field_unknowns,
        count(results.counts.field_solves, "field solve"),
        count(results.counts.heat_steps, "heat step"),
    );
    text += &electrical(&results.states);
    if let Some(last) = results.states.last() {
        text += &water(run, &last.electrical);
        text += &surfaces(run);
    }
    text += &heating(run);
    text += &balances(run);
    text += &warnings(run);
    text
}

fn outcome_words(outcome: &Outcome) -> String {
    match outcome {
        Outcome::Complete => "complete".to_owned(),
        Outcome::StageLimit { stage, time_s } => {
            format!("PARTIAL, stage `{stage}` reached its longest time at {}", seconds(*time_s))
        }
        Outcome::Stopped { time_s } => format!("PARTIAL, stopped on request at {}", seconds(*time_s)),
        Outcome::NotConverged { time_s, reason } => {
            format!("PARTIAL, not converged at {}: {reason}", seconds(*time_s))
        }
    }
}

/// A table with a row a state.
fn electrical(states: &[State]) -> String {
    if states.is_empty() {
        return String::new();
    }
    let supplied = states.iter().any(|state| state.electrical.terminals.is_some());
    let mut head = vec!["state", "time", "frequency", "in the work"];
    if supplied {
        head.extend(["coil loss", "efficiency", "power", "voltage", "current", "reactive", "power factor", "limit"]);
    }
    let mut rows = vec![head.into_iter().map(str::to_owned).collect::<Vec<_>>()];
    rows.extend(states.iter().map(|state| state_row(state, supplied)));
    let title = if supplied { "\nAt the coil terminals, rms, leads excluded\n" } else { "\nIn the applied field\n" };
    title.to_owned() + &columns(&rows, 1)
}

fn state_row(state: &State, supplied: bool) -> Vec<String> {
    let electrical = &state.electrical;
    let mut row = vec![
        state.label.clone(),
        seconds(state.time_s),
        si(state.frequency_hz, "Hz"),
        si(electrical.workpiece_power_w, "W"),
    ];
    if supplied {
        row.push(si(electrical.coils.iter().map(|coil| coil.loss_w).sum(), "W"));
        row.push(electrical.electrical_efficiency.map_or_else(dash, |share| format!("{:.1} %", 100.0 * share)));
        match &electrical.terminals {
            Some(t) => row.extend([
                si(t.power_w, "W"),
                si(t.voltage_v_rms, "V"),
                si(t.current_a_rms, "A"),
                si(t.reactive_power_var, "var"),
                significant(t.power_factor, 3),
            ]),
            None => row.extend(std::iter::repeat_with(dash).take(5)),
        }
        row.push(state.limited_by.map_or_else(dash, |limit| limit_word(limit).to_owned()));
    }
    row
}

fn dash() -> String {
    "-".to_owned()
}

fn water(run: Finished<'_>, electrical: &Electrical) -> String {
    let mut text = String::new();
    for (coil, model) in electrical.coils.iter().zip(&run.model.coils) {
        if let (Some(outlet_k), Some(water)) = (coil.water_outlet_k, model.water) {
            text += &format!(
                "Water of `{}` at the last state: {} at the outlet, {:.1} K rise in {}\n",
                coil.name,
                degc(outlet_k),
                outlet_k - water.inlet_k,
                count(water.paths, "path"),
            );
        }
    }
    if text.is_empty() { text } else { format!("\n{text}") }
}

/// Surface power density of the workpieces: first state, last state and greatest.
fn surfaces(run: Finished<'_>) -> String {
    let states = &run.results.states;
    let density = |part: &PartNumbers| part.mean_surface_power_density_w_per_m2 / W_PER_M2_IN_KW_PER_CM2;
    let mut rows = vec![["surface power density, kW/cm2", "first", "last", "greatest"].map(str::to_owned).to_vec()];
    for (index, part) in run.model.parts.iter().enumerate() {
        if part.role != Role::Workpiece {
            continue;
        }
        let values: Vec<f64> = states.iter().filter_map(|s| s.electrical.parts.get(index)).map(density).collect();
        if let (Some(first), Some(last)) = (values.first(), values.last()) {
            let greatest = values.iter().copied().fold(*first, f64::max);
            let cells = [*first, *last, greatest].map(|value| significant(value, 3));
            rows.push(std::iter::once(part.name.clone()).chain(cells).collect());
        }
    }
    if rows.len() == 1 { String::new() } else { format!("\n{}", columns(&rows, 1)) }
}

fn heating(run: Finished<'_>) -> String {
    let Some(row) = run.results.history.last() else { return String::new() };
    let mut text = format!("\nHeating, {} simulated\n", seconds(row.time_s));
    for goal in goals(run) {
        text += &goal_line(&goal);
    }
    let gauges = run.model.gauges.iter().zip(&row.gauges_k);
    for (gauge, kelvin) in gauges {
        text += &format!("  {} at the end: {}\n", gauge.name, degc(*kelvin));
    }
    let head = ["at the end", "mean", "coldest", "hottest", "surface - core"].map(str::to_owned).to_vec();
    let mut rows = vec![head];
    rows.extend(row.parts.iter().map(|part| {
        let difference = part.surface_minus_core_k;
        let difference = if difference.is_finite() { format!("{difference:.1} K") } else { dash() };
        vec![part_name(run, part.part).to_owned(), degc(part.mean_k), degc(part.min_k), degc(part.max_k), difference]
    }));
    text + &columns(&rows, 1)
}

fn goal_line(goal: &Goal) -> String {
    let target = goal.reaches_degc.map_or_else(dash, |degrees| format!("{} \u{b0}C", significant(degrees, 4)));
    match goal.reached_at_s {
        Some(time_s) => format!("  {} reached {target} at {} (stage `{}`)\n", goal.gauge, seconds(time_s), goal.stage),
        None => format!("  {} did not reach {target} (stage `{}`)\n", goal.gauge, goal.stage),
    }
}

fn balances(run: Finished<'_>) -> String {
    let mut text = String::new();
    if let Some(energy) = &run.results.energy {
        let lost = energy.radiated_j + energy.convected_j + energy.through_held_faces_j;
        text += &format!("\nEnergy for {} kg of work\n", significant(energy.workpiece_mass_kg, 4));
        for (place, value) in energy_per_tonne(energy).0 {
            let place = if place == "workpiece" { "taken up by the work" } else { "drawn at the coil terminals" };
            text += &format!("  {place}: {} kWh/t\n", value.map_or_else(dash, |value| significant(value, 4)));
        }
        text += &format!("  lost by radiation, convection and held faces: {}\n", si(lost, "J"));
        text += &format!("  heat balance closes to {:.1e}\n", energy.relative_defect());
    }
    let worst = run.results.states.iter().map(|state| state.electrical.power_balance_relative).reduce(f64::max);
    if let Some(worst) = worst {
        text += &format!("\nPower balance {worst:.1e} at worst: a bookkeeping check that says nothing about accuracy\n");
    }
    text
}

fn warnings(run: Finished<'_>) -> String {
    let warnings = &run.results.warnings;
    if warnings.is_empty() {
        return String::new();
    }
    let lines: String = warnings.iter().map(|warning| format!("  - {}\n", warning.text)).collect();
    format!("\n{}\n{lines}", count(warnings.len(), "warning"))
}
