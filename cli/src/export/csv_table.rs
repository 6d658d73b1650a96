//! Tables as CSV (RFC 4180): a header whose names end in the unit, numbers in their shortest exact form, `.` as the
//! decimal point, an empty cell where there is no finite number.

use solver::constants::ZERO_CELSIUS_K;

use super::EncodeError;

/// A table that grows cell by cell.
#[derive(Debug)]
pub struct Table {
    writer: csv::Writer<Vec<u8>>,
    row: Vec<String>,
}

impl Table {
    /// A table with this header.
    ///
    /// # Errors
    /// The header could not be written.
    pub fn new<S: AsRef<[u8]>>(header: impl IntoIterator<Item = S>) -> Result<Self, EncodeError> {
        let mut writer = csv::Writer::from_writer(Vec::new());
        writer.write_record(header)?;
        Ok(Self { writer, row: Vec::new() })
    }

    /// Adds a cell with text.
    pub fn text(&mut self, text: &str) {
        self.row.push(text.to_owned());
    }

    /// Adds a cell with a whole number.
    pub fn count(&mut self, count: usize) {
        self.row.push(count.to_string());
    }

    /// Adds a cell with a number, empty if it is not finite.
    pub fn number(&mut self, value: f64) {
        self.row.push(if value.is_finite() { format!("{value:?}") } else { String::new() });
    }

    /// Adds a cell with a number that may not exist.
    pub fn optional(&mut self, value: Option<f64>) {
        self.number(value.unwrap_or(f64::NAN));
    }

    /// Adds a temperature in degrees Celsius.
    pub fn degc(&mut self, kelvin: f64) {
        self.number(kelvin - ZERO_CELSIUS_K);
    }

    /// Ends the row.
    ///
    /// # Errors
    /// The row has another number of cells than the header.
    pub fn end_row(&mut self) -> Result<(), EncodeError> {
        self.writer.write_record(&self.row)?;
        self.row.clear();
        Ok(())
    }

    /// The table as bytes.
    ///
    /// # Errors
    /// The last bytes could not be written.
    pub fn into_bytes(self) -> Result<Vec<u8>, EncodeError> {
        self.writer.into_inner().map_err(|error| EncodeError::Xml(error.into_error()))
    }
}
