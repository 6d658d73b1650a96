//! `states.csv`: electrical numbers at the moments that matter, a row a coil. This is what the supply maker gets.
//! Voltages and currents are rms at the coil's own ends; with several coils a further row has them all in series.

use solver::model::Role;
use solver::results::{Electrical, State, SupplyLimit, Terminals};

use super::csv_table::Table;
use super::{EncodeError, Finished};

/// Name of the row that has all coils in series.
pub const ALL_COILS: &str = "(all in series)";

const HEADER: [&str; 21] = [
    "time_s",
    "state",
    "coil",
    "frequency_hz",
    "voltage_v_rms",
    "current_a_rms",
    "power_kw",
    "reactive_power_kvar",
    "apparent_power_kva",
    "power_factor",
    "quality_factor",
    "resistance_ohm",
    "reactance_ohm",
    "inductance_h",
    "coil_loss_kw",
    "water_outlet_degc",
    "limit_reached",
    "workpiece_power_kw",
    "other_parts_power_kw",
    "electrical_efficiency",
    "power_balance_relative",
];

/// Power in parts that are not workpieces, watts.
pub(crate) fn other_parts_w(run: Finished<'_>, electrical: &Electrical) -> f64 {
    let others = run.model.parts.iter().zip(&electrical.parts).filter(|(part, _)| part.role != Role::Workpiece);
    others.map(|(_, numbers)| numbers.joule_loss_w + numbers.hysteresis_loss_w).sum()
}

/// The table as bytes.
///
/// # Errors
/// The table could not be written.
pub fn table(run: Finished<'_>) -> Result<Vec<u8>, EncodeError> {
    let mut table = Table::new(HEADER)?;
    for state in &run.results.states {
        let coils = &state.electrical.coils;
        for coil in coils {
            let water = coil.water_outlet_k.unwrap_or(f64::NAN);
            row(&mut table, run, state, &coil.name, Some(&coil.terminals), coil.loss_w, water)?;
        }
        if coils.len() != 1 {
            let name = if coils.is_empty() { "" } else { ALL_COILS };
            let loss = if coils.is_empty() { f64::NAN } else { coils.iter().map(|coil| coil.loss_w).sum() };
            row(&mut table, run, state, name, state.electrical.terminals.as_ref(), loss, f64::NAN)?;
        }
    }
    table.into_bytes()
}

fn row(
    table: &mut Table,
    run: Finished<'_>,
    state: &State,
    coil: &str,
    terminals: Option<&Terminals>,
    loss_w: f64,
    water_k: f64,
) -> Result<(), EncodeError> {
    let seen = |value: fn(&Terminals) -> f64| terminals.map(value);
    table.number(state.time_s);
    table.text(&state.label);
    table.text(coil);
    table.number(state.frequency_hz);
    table.optional(seen(|t| t.voltage_v_rms));
    table.optional(seen(|t| t.current_a_rms));
    table.optional(seen(|t| t.power_w / 1e3));
    table.optional(seen(|t| t.reactive_power_var / 1e3));
    table.optional(seen(|t| t.apparent_power_va / 1e3));
    table.optional(seen(|t| t.power_factor));
    table.optional(seen(|t| t.quality_factor));
    table.optional(seen(|t| t.resistance_ohm));
    table.optional(seen(|t| t.reactance_ohm));
    table.optional(seen(|t| t.inductance_h));
    table.number(loss_w / 1e3);
    table.degc(water_k);
    table.text(state.limited_by.map_or("", limit_word));
    table.number(state.electrical.workpiece_power_w / 1e3);
    table.number(other_parts_w(run, &state.electrical) / 1e3);
    table.optional(state.electrical.electrical_efficiency);
    table.number(state.electrical.power_balance_relative);
    table.end_row()
}

/// The limit in one word.
pub fn limit_word(limit: SupplyLimit) -> &'static str {
    match limit {
        SupplyLimit::Voltage => "voltage",
        SupplyLimit::Current => "current",
        SupplyLimit::Power => "power",
    }
}
