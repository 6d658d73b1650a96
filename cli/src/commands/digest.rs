//! The numbers of a run as a person reads them, without opening a file. Voltages and currents are rms.

use solver::model::Role;
use solver::results::{Electrical, Outcome, PartNumbers, State};

use crate::export::Finished;
use crate::export::history::part_name;
use crate::export::states::{limit_word, other_parts_w};
use crate::export::summary::{Goal, energy_per_tonne, first_state, goals, last_state};
use crate::figures::{Page, count, degc, row, seconds, si, significant};

/// W/m^2 in a kW/cm^2.
const W_PER_M2_IN_KW_PER_CM2: f64 = 1e7;

/// The digest.
pub(super) fn digest(run: Finished<'_>) -> String {
    let results = run.results;
    let mut page = Page::default();
    page.line(format!("{}: {}", results.title, outcome_words(&results.outcome)));
    page.line(format!(
        "{} triangles of order {}, {} unknowns; {}, {}",
        results.section.mesh.triangles().len(),
        results.section.nodes.order,
        results.counts.field_unknowns,
        count(results.counts.field_solves, "field solve"),
        count(results.counts.heat_steps, "heat step"),
    ));
    electrical(&mut page, run);
    let coil_loss = |state: &State| state.electrical.coils.iter().map(|coil| coil.loss_w).sum::<f64>();
    if let Some(hardest) = results.states.iter().max_by(|a, b| coil_loss(a).total_cmp(&coil_loss(b))) {
        water(&mut page, run, &hardest.electrical);
    }
    surfaces(&mut page, run);
    heating(&mut page, run);
    energy(&mut page, run);
    power_balance(&mut page, &results.states);
    warnings(&mut page, run);
    page.into_text()
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
fn electrical(page: &mut Page, run: Finished<'_>) {
    let states = &run.results.states;
    if states.is_empty() {
        return;
    }
    let supplied = states.iter().any(|state| state.electrical.terminals.is_some());
    let shared = states.iter().any(|state| other_parts_w(run, &state.electrical) > 0.0);
    let mut head = row(["state", "time", "frequency", "in the work"]);
    if shared {
        head.extend(row(["in other parts"]));
    }
    if supplied {
        head.extend(row([
            "coil loss",
            "efficiency",
            "power",
            "voltage",
            "current",
            "reactive",
            "power factor",
            "limit",
        ]));
    }
    let mut rows = vec![head];
    rows.extend(states.iter().map(|state| state_row(run, state, shared, supplied)));
    page.gap();
    page.line(if supplied { "At the coil terminals, rms, leads excluded" } else { "In the applied field" });
    page.table(&rows, 1);
}

fn state_row(run: Finished<'_>, state: &State, shared: bool, supplied: bool) -> Vec<String> {
    let electrical = &state.electrical;
    let mut row = vec![
        state.label.clone(),
        seconds(state.time_s),
        si(state.frequency_hz, "Hz"),
        si(electrical.workpiece_power_w, "W"),
    ];
    if shared {
        row.push(si(other_parts_w(run, electrical), "W"));
    }
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

fn water(page: &mut Page, run: Finished<'_>, electrical: &Electrical) {
    let cooled = electrical.coils.iter().zip(&run.model.coils).filter_map(|(coil, model)| {
        let (outlet_k, water) = coil.water_outlet_k.zip(model.water)?;
        let (outlet, rise_k, paths) = (degc(outlet_k), outlet_k - water.inlet_k, count(water.paths, "path"));
        Some(format!(
            "Water of `{}` at its greatest loss: {outlet} at the outlet, {rise_k:.1} K rise, {paths}",
            coil.name
        ))
    });
    let lines: Vec<String> = cooled.collect();
    if !lines.is_empty() {
        page.gap();
        for line in lines {
            page.line(line);
        }
    }
}

/// Surface power density of the workpieces: first state, last state and greatest.
fn surfaces(page: &mut Page, run: Finished<'_>) {
    let states = &run.results.states;
    let density = |part: &PartNumbers| part.mean_surface_power_density_w_per_m2 / W_PER_M2_IN_KW_PER_CM2;
    let mut rows = vec![row(["surface power density, kW/cm2", "first", "last", "greatest"])];
    for (index, part) in run.model.parts.iter().enumerate() {
        if part.role != Role::Workpiece {
            continue;
        }
        let values: Vec<f64> = states.iter().filter_map(|s| s.electrical.parts.get(index)).map(density).collect();
        let at = |state: Option<&State>| state.and_then(|s| s.electrical.parts.get(index)).map(density);
        if let (Some(first), Some(last)) = (at(first_state(states)), at(last_state(states))) {
            let greatest = values.into_iter().fold(first, f64::max);
            let cells = [first, last, greatest].map(|value| significant(value, 3));
            rows.push(std::iter::once(part.name.clone()).chain(cells).collect());
        }
    }
    if rows.len() > 1 {
        page.gap();
        page.table(&rows, 1);
    }
}

fn heating(page: &mut Page, run: Finished<'_>) {
    let Some(last) = run.results.history.last() else { return };
    page.gap();
    page.line(format!("Heating, {} simulated", seconds(last.time_s)));
    for goal in goals(run) {
        page.line(goal_line(&goal));
    }
    for (gauge, kelvin) in run.model.gauges.iter().zip(&last.gauges_k) {
        page.line(format!("  {} at the end: {}", gauge.name, degc(*kelvin)));
    }
    let mut rows = vec![row(["at the end", "mean", "coldest", "hottest", "surface - core"])];
    rows.extend(last.parts.iter().map(|part| {
        let difference = part.surface_minus_core_k;
        let difference = if difference.is_finite() { format!("{difference:.1} K") } else { dash() };
        vec![part_name(run, part.part).to_owned(), degc(part.mean_k), degc(part.min_k), degc(part.max_k), difference]
    }));
    page.table(&rows, 1);
}

fn goal_line(goal: &Goal) -> String {
    let target = goal.reaches_degc.map_or_else(dash, |degrees| format!("{degrees:.0} \u{b0}C"));
    match goal.reached_at_s {
        Some(time_s) => format!("  {} reached {target} at {} (stage `{}`)", goal.gauge, seconds(time_s), goal.stage),
        None => format!("  {} did not reach {target} (stage `{}`)", goal.gauge, goal.stage),
    }
}

fn energy(page: &mut Page, run: Finished<'_>) {
    let Some(energy) = &run.results.energy else { return };
    let lost = energy.radiated_j + energy.convected_j + energy.through_held_faces_j;
    let [work, terminals] = energy_per_tonne(energy).map(|value| value.map_or_else(dash, |v| significant(v, 4)));
    page.gap();
    page.line(format!("Energy for {} kg of work", significant(energy.workpiece_mass_kg, 4)));
    page.line(format!("  taken up by the work: {work} kWh/t"));
    page.line(format!("  drawn at the coil terminals: {terminals} kWh/t"));
    page.line(format!("  lost by radiation, convection and held faces: {}", si(lost, "J")));
    page.line(format!("  heat balance closes to {:.1e}", energy.relative_defect()));
}

fn power_balance(page: &mut Page, states: &[State]) {
    let worst = states.iter().map(|state| state.electrical.power_balance_relative).reduce(f64::max);
    if let Some(worst) = worst {
        page.gap();
        page.line(format!("Power balance: {worst:.1e} at worst, a bookkeeping check that says nothing about accuracy"));
    }
}

fn warnings(page: &mut Page, run: Finished<'_>) {
    let warnings = &run.results.warnings;
    if !warnings.is_empty() {
        page.gap();
        page.line(count(warnings.len(), "warning"));
        for warning in warnings {
            page.line(format!("  - {}", warning.text));
        }
    }
}
