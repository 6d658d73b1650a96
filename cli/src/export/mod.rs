//! Results as files: one module a format, each from values to bytes; only `folder` touches the disk.

pub mod csv_table;
pub mod folder;
pub mod history;
pub mod pictures;
pub mod pvd;
pub mod states;
pub mod summary;
pub mod timings;
pub mod turns;
pub mod vtu;

use solver::model::Model;
use solver::results::Results;

/// A run as the exporters see it.
#[derive(Debug, Clone, Copy)]
pub struct Finished<'a> {
    /// What was solved; gives names of stages and gauges.
    pub model: &'a Model,
    /// What came out.
    pub results: &'a Results,
}

/// Why a result could not be put into its format.
#[derive(Debug, thiserror::Error)]
pub enum EncodeError {
    /// A table.
    #[error("the table could not be written: {0}")]
    Table(#[from] csv::Error),
    /// An XML file.
    #[error("the XML could not be written: {0}")]
    Xml(#[from] std::io::Error),
    /// A JSON file.
    #[error("the JSON could not be written: {0}")]
    Json(#[from] serde_json::Error),
}

/// A value as JSON text, indented, with a line end.
///
/// # Errors
/// The value has no JSON form.
pub fn json_bytes<T: serde::Serialize>(value: &T) -> Result<Vec<u8>, EncodeError> {
    let mut bytes = serde_json::to_vec_pretty(value)?;
    bytes.push(b'\n');
    Ok(bytes)
}

/// The value where it is finite: JSON has no `NaN` and no infinity, so these become `null`.
pub(crate) fn finite(value: f64) -> Option<f64> {
    value.is_finite().then_some(value)
}

/// Degrees Celsius from kelvin, where finite.
pub(crate) fn degc(kelvin: f64) -> Option<f64> {
    finite(kelvin - solver::constants::ZERO_CELSIUS_K)
}
