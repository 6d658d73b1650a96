//! `history.csv`: a row an accepted heat step. Powers are watts, temperatures degrees Celsius, differences kelvin,
//! energies joules since the start; voltage and current are rms at the coil terminals, all coils in series.

use solver::results::{HistoryRow, Terminals};

use super::csv_table::Table;
use super::{EncodeError, Finished};

const ELECTRICAL: [&str; 10] = [
    "workpiece_power_w",
    "coil_loss_w",
    "other_parts_power_w",
    "terminal_power_w",
    "reactive_power_var",
    "voltage_v_rms",
    "current_a_rms",
    "power_factor",
    "resistance_ohm",
    "reactance_ohm",
];
const ENERGY: [&str; 9] = [
    "supplied_j",
    "radiated_j",
    "convected_j",
    "through_held_faces_j",
    "through_flux_faces_j",
    "stored_j",
    "workpiece_stored_j",
    "terminal_j",
    "heat_balance_relative",
];

/// The table as bytes; a header alone without heating.
///
/// # Errors
/// The table could not be written.
pub fn table(run: Finished<'_>) -> Result<Vec<u8>, EncodeError> {
    let mut table = Table::new(header(run))?;
    for row in &run.results.history {
        table.number(row.time_s);
        table.text(stage_name(run, row.stage));
        for &kelvin in &row.gauges_k {
            table.degc(kelvin);
        }
        for part in &row.parts {
            table.degc(part.mean_k);
            table.degc(part.min_k);
            table.degc(part.max_k);
            table.number(part.surface_minus_core_k);
        }
        electrical(&mut table, row);
        energy(&mut table, row);
        table.end_row()?;
    }
    table.into_bytes()
}

fn header(run: Finished<'_>) -> Vec<String> {
    let mut header = vec!["time_s".to_owned(), "stage".to_owned()];
    if let Some(first) = run.results.history.first() {
        header.extend(run.model.gauges.iter().map(|gauge| format!("{}_degc", gauge.name)));
        for part in &first.parts {
            let name = part_name(run, part.part);
            header.extend(["mean_degc", "min_degc", "max_degc", "surface_minus_core_k"].map(|q| format!("{name}_{q}")));
        }
    }
    header.extend(ELECTRICAL.iter().chain(&ENERGY).map(|&name| name.to_owned()));
    header
}

/// Name of a stage; empty for an index that is not there.
pub(crate) fn stage_name(run: Finished<'_>, index: usize) -> &str {
    run.model.heating.as_ref().and_then(|heating| heating.stages.get(index)).map_or("", |stage| &stage.name)
}

/// Name of a part; empty for an index that is not there.
pub(crate) fn part_name(run: Finished<'_>, index: usize) -> &str {
    run.model.parts.get(index).map_or("", |part| &part.name)
}

fn electrical(table: &mut Table, row: &HistoryRow) {
    let seen = |value: fn(&Terminals) -> f64| row.terminals.as_ref().map(value);
    table.number(row.workpiece_power_w);
    table.number(row.coil_loss_w);
    // What the terminals give and neither work nor coil takes, without the rounding of the difference.
    table.optional(seen(|t| t.power_w).map(|power| {
        let other = power - row.workpiece_power_w - row.coil_loss_w;
        if other > 1e-9 * power { other } else { 0.0 }
    }));
    table.optional(seen(|t| t.power_w));
    table.optional(seen(|t| t.reactive_power_var));
    table.optional(seen(|t| t.voltage_v_rms));
    table.optional(seen(|t| t.current_a_rms));
    table.optional(seen(|t| t.power_factor));
    table.optional(seen(|t| t.resistance_ohm));
    table.optional(seen(|t| t.reactance_ohm));
}

fn energy(table: &mut Table, row: &HistoryRow) {
    let energy = &row.energy;
    table.number(energy.supplied_j);
    table.number(energy.radiated_j);
    table.number(energy.convected_j);
    table.number(energy.through_held_faces_j);
    table.number(energy.through_flux_faces_j);
    table.number(energy.stored_j);
    table.number(energy.workpiece_stored_j);
    table.number(energy.terminal_j);
    table.number(energy.relative_defect());
}
