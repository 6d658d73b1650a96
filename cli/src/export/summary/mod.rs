//! `summary.json`: the numbers of a run, nested by name, keys ending in their unit. No wall times, no `NaN`: a number that
//! does not exist is `null`. Voltages and currents are rms; temperatures degrees Celsius, differences kelvin.

mod mesh;
mod shape;

pub use shape::{
    CoilEntry, CountNumbers, EndTemperatures, EndedEarly, EnergyNumbers, EnergyPerTonne, Goal, MergeEntry, MeshNumbers,
    Named, PartEntry, PartTemperatureEntry, RegionEntries, RegionEntry, StateNumbers, Summary, TerminalNumbers, Totals,
    WarningEntry,
};
use solver::model::{Gauge, StageEnd};
use solver::results::{
    Counts, Electrical, EnergyBalance, Outcome, PartTemperatures, State, Terminals, Warning, WarningKind,
};

use super::history::{part_name, stage_name};
use super::states::limit_word;
use super::{EncodeError, Finished, degc, finite, json_bytes};

/// Joules in a kilowatt-hour.
pub const J_PER_KWH: f64 = 3.6e6;
/// Kilograms in a tonne.
pub const KG_PER_T: f64 = 1e3;

/// The file as bytes.
///
/// # Errors
/// The JSON could not be written.
pub fn bytes(run: Finished<'_>) -> Result<Vec<u8>, EncodeError> {
    json_bytes(&summary(run))
}

/// The numbers.
pub fn summary(run: Finished<'_>) -> Summary {
    let results = run.results;
    let (outcome, ended_early) = outcome(&results.outcome);
    let warnings = results.warnings.iter().map(warning).collect();
    Summary {
        title: results.title.clone(),
        outcome,
        ended_early,
        warnings,
        version: env!("CARGO_PKG_VERSION"),
        mesh: mesh::numbers(run),
        counts: count_numbers(results.counts),
        totals: totals(run),
        states: first_and_last(run),
        goals: goals(run),
        end: end_temperatures(run),
        energy: results.energy.as_ref().map(energy_numbers),
    }
}

fn outcome(outcome: &Outcome) -> (&'static str, Option<EndedEarly>) {
    match outcome {
        Outcome::Complete => ("complete", None),
        Outcome::StageLimit { stage, time_s } => {
            let reason = format!("stage `{stage}` reached its longest time before its goal");
            ("stage_limit", Some(EndedEarly { time_s: finite(*time_s), stage: Some(stage.clone()), reason }))
        }
        Outcome::Stopped { time_s } => {
            let reason = "stopped on request".to_owned();
            ("stopped", Some(EndedEarly { time_s: finite(*time_s), stage: None, reason }))
        }
        Outcome::NotConverged { time_s, reason } => {
            ("not_converged", Some(EndedEarly { time_s: finite(*time_s), stage: None, reason: reason.clone() }))
        }
    }
}

fn warning(warning: &Warning) -> WarningEntry {
    WarningEntry { kind: warning_word(warning.kind), text: warning.text.clone() }
}

/// Stable short name of a kind of warning.
pub fn warning_word(kind: WarningKind) -> &'static str {
    match kind {
        WarningKind::MaterialRange => "material_range",
        WarningKind::SkinUnresolved => "skin_unresolved",
        WarningKind::SupplyLimit => "supply_limit",
        WarningKind::Melting => "melting",
        WarningKind::Curie => "curie",
        WarningKind::EnclosedRadiation => "enclosed_radiation",
        WarningKind::LinearPermeability => "linear_permeability",
        WarningKind::RingModel => "ring_model",
        WarningKind::StrandLoss => "strand_loss",
        WarningKind::PerfectContact => "perfect_contact",
        WarningKind::BareContact => "bare_contact",
        WarningKind::Mesh => "mesh",
        WarningKind::Water => "water",
        WarningKind::PoyntingCheck => "poynting_check",
        WarningKind::HoldMissed => "hold_missed",
    }
}

fn count_numbers(counts: Counts) -> CountNumbers {
    CountNumbers {
        field_solves: counts.field_solves,
        heat_steps: counts.heat_steps,
        heat_steps_rejected: counts.heat_steps_rejected,
        newton_iterations: counts.newton_iterations,
    }
}

fn totals(run: Finished<'_>) -> Option<Totals> {
    let state = last_state(&run.results.states)?;
    let electrical = &state.electrical;
    let energy = run.results.energy.as_ref();
    let coil_loss: f64 = electrical.coils.iter().map(|coil| coil.loss_w).sum();
    Some(Totals {
        time_s: finite(run.results.history.last().map_or(state.time_s, |row| row.time_s)),
        workpiece_power_w: finite(electrical.workpiece_power_w),
        coil_loss_w: if electrical.coils.is_empty() { None } else { finite(coil_loss) },
        terminal_power_w: electrical.terminals.and_then(|t| finite(t.power_w)),
        electrical_efficiency: electrical.electrical_efficiency.and_then(finite),
        energy_kwh_per_t: energy.map(|energy| {
            let [workpiece, terminals] = energy_per_tonne(energy);
            EnergyPerTonne { workpiece, terminals }
        }),
        power_balance_relative: finite(electrical.power_balance_relative),
    })
}

fn first_and_last(run: Finished<'_>) -> Named<StateNumbers> {
    let states = &run.results.states;
    let mut named = Vec::new();
    if let Some(first) = first_state(states) {
        named.push(("first".to_owned(), state_numbers(run, first)));
    }
    if let Some(last) = last_state(states) {
        named.push(("last".to_owned(), state_numbers(run, last)));
    }
    Named(named)
}

/// The state at the least time, the first of several.
pub fn first_state(states: &[State]) -> Option<&State> {
    states.iter().min_by(|a, b| a.time_s.total_cmp(&b.time_s))
}

/// The state at the greatest time, the first of several: rows for maxima may stand after it.
pub fn last_state(states: &[State]) -> Option<&State> {
    states.iter().rev().max_by(|a, b| a.time_s.total_cmp(&b.time_s))
}

fn state_numbers(run: Finished<'_>, state: &State) -> StateNumbers {
    let electrical = &state.electrical;
    StateNumbers {
        label: state.label.clone(),
        time_s: finite(state.time_s),
        frequency_hz: finite(state.frequency_hz),
        limit_reached: state.limited_by.map(limit_word),
        terminals: electrical.terminals.as_ref().map(terminal_numbers),
        coils: coil_entries(run, electrical),
        parts: part_entries(electrical),
        workpiece_power_w: finite(electrical.workpiece_power_w),
        electrical_efficiency: electrical.electrical_efficiency.and_then(finite),
        stored_energy_j: finite(electrical.stored_energy_j),
        power_balance_relative: finite(electrical.power_balance_relative),
        solve_backward_error: finite(electrical.solve_backward_error),
    }
}

fn terminal_numbers(terminals: &Terminals) -> TerminalNumbers {
    TerminalNumbers {
        current_a_rms: finite(terminals.current_a_rms),
        voltage_v_rms: finite(terminals.voltage_v_rms),
        power_w: finite(terminals.power_w),
        reactive_power_var: finite(terminals.reactive_power_var),
        apparent_power_va: finite(terminals.apparent_power_va),
        power_factor: finite(terminals.power_factor),
        quality_factor: finite(terminals.quality_factor),
        resistance_ohm: finite(terminals.resistance_ohm),
        reactance_ohm: finite(terminals.reactance_ohm),
        inductance_h: finite(terminals.inductance_h),
    }
}

fn coil_entries(run: Finished<'_>, electrical: &Electrical) -> Named<CoilEntry> {
    let entry = |(index, coil): (usize, &solver::results::CoilNumbers)| {
        let inlet_k = run.model.coils.get(index).and_then(|coil| coil.water).map(|water| water.inlet_k);
        let rise_k = coil.water_outlet_k.zip(inlet_k).map(|(outlet, inlet)| outlet - inlet);
        let entry = CoilEntry {
            terminals: terminal_numbers(&coil.terminals),
            loss_w: finite(coil.loss_w),
            water_outlet_degc: coil.water_outlet_k.and_then(degc),
            water_rise_k: rise_k.and_then(finite),
        };
        (coil.name.clone(), entry)
    };
    Named(electrical.coils.iter().enumerate().map(entry).collect())
}

fn part_entries(electrical: &Electrical) -> Named<PartEntry> {
    let entry = |part: &solver::results::PartNumbers| {
        let entry = PartEntry {
            power_w: finite(part.joule_loss_w + part.hysteresis_loss_w),
            joule_loss_w: finite(part.joule_loss_w),
            hysteresis_loss_w: finite(part.hysteresis_loss_w),
            poynting_power_w: part.poynting_power_w.and_then(finite),
            mean_surface_power_density_w_per_m2: finite(part.mean_surface_power_density_w_per_m2),
            largest_loss_w_per_m3: finite(part.largest_loss_w_per_m3),
            least_skin_depth_m: finite(part.least_skin_depth_m),
            largest_field_a_per_m_rms: finite(part.largest_field_a_per_m_rms),
        };
        (part.name.clone(), entry)
    };
    Named(electrical.parts.iter().map(entry).collect())
}

/// Goals of the stages. A stage met its goal if a later one was entered or the run is complete; its last row is then the
/// moment.
pub fn goals(run: Finished<'_>) -> Vec<Goal> {
    let Some(heating) = &run.model.heating else { return Vec::new() };
    let goal = |(index, stage): (usize, &solver::model::Stage)| {
        let StageEnd::GaugeReaches { gauge, at_k, .. } = stage.end else { return None };
        Some(Goal {
            stage: stage.name.clone(),
            gauge: gauge_name(&run.model.gauges, gauge),
            reaches_degc: degc(at_k),
            reached_at_s: end_of_stage(run, index).and_then(finite),
        })
    };
    heating.stages.iter().enumerate().filter_map(goal).collect()
}

fn gauge_name(gauges: &[Gauge], index: usize) -> String {
    gauges.get(index).map_or_else(String::new, |gauge| gauge.name.clone())
}

/// Time at which a stage was left in the regular way.
fn end_of_stage(run: Finished<'_>, index: usize) -> Option<f64> {
    let history = &run.results.history;
    let left = run.results.outcome == Outcome::Complete || history.iter().any(|row| row.stage > index);
    if !left {
        return None;
    }
    history.iter().rev().find(|row| row.stage <= index).map(|row| row.time_s)
}

fn end_temperatures(run: Finished<'_>) -> Option<EndTemperatures> {
    let row = run.results.history.last()?;
    let gauges = run.model.gauges.iter().zip(&row.gauges_k);
    let parts = row.parts.iter().map(|part| (part_name(run, part.part).to_owned(), part_temperatures(part)));
    Some(EndTemperatures {
        time_s: finite(row.time_s),
        stage: stage_name(run, row.stage).to_owned(),
        gauges_degc: Named(gauges.map(|(gauge, &kelvin)| (gauge.name.clone(), degc(kelvin))).collect()),
        parts: Named(parts.collect()),
    })
}

fn part_temperatures(part: &PartTemperatures) -> PartTemperatureEntry {
    PartTemperatureEntry {
        mean_degc: degc(part.mean_k),
        min_degc: degc(part.min_k),
        max_degc: degc(part.max_k),
        surface_minus_core_k: finite(part.surface_minus_core_k),
    }
}

fn energy_numbers(energy: &EnergyBalance) -> EnergyNumbers {
    EnergyNumbers {
        supplied_j: finite(energy.supplied_j),
        radiated_j: finite(energy.radiated_j),
        convected_j: finite(energy.convected_j),
        through_held_faces_j: finite(energy.through_held_faces_j),
        through_flux_faces_j: finite(energy.through_flux_faces_j),
        stored_j: finite(energy.stored_j),
        workpiece_stored_j: finite(energy.workpiece_stored_j),
        terminal_j: finite(energy.terminal_j),
        workpiece_mass_kg: finite(energy.workpiece_mass_kg),
        heat_balance_relative: finite(energy.relative_defect()),
    }
}

/// Kilowatt-hours a tonne of workpiece: taken up by it, and drawn at the coil terminals.
pub fn energy_per_tonne(energy: &EnergyBalance) -> [Option<f64>; 2] {
    let per_tonne = |joules: f64| finite((joules / J_PER_KWH) / (energy.workpiece_mass_kg / KG_PER_T));
    [per_tonne(energy.workpiece_stored_j), per_tonne(energy.terminal_j)]
}
