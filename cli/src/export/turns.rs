//! `turns.csv`: each turn at the last state. This is what the coil maker gets. Radii and heights are those of the
//! turn's centre; voltage and current are rms.

use super::csv_table::Table;
use super::{EncodeError, Finished};

const HEADER: [&str; 10] = [
    "coil",
    "turn",
    "r_m",
    "z_m",
    "copper_length_m",
    "copper_mass_kg",
    "current_a_rms",
    "voltage_v_rms",
    "loss_w",
    "water_rise_k",
];

/// The table as bytes.
///
/// # Errors
/// The table could not be written.
pub fn table(run: Finished<'_>) -> Result<Vec<u8>, EncodeError> {
    let mut table = Table::new(HEADER)?;
    for turn in &run.results.turns {
        table.text(&turn.coil);
        table.count(turn.turn);
        for value in [turn.r_m, turn.z_m, turn.length_m, turn.mass_kg, turn.current_a_rms, turn.voltage_v_rms] {
            table.number(value);
        }
        table.number(turn.loss_w);
        table.optional(turn.water_rise_k);
        table.end_row()?;
    }
    table.into_bytes()
}
