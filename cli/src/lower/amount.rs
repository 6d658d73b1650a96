//! From `"60 mm"` to 0.06: a number, a unit of the right dimension, a range.

use crate::job::units::{Dimension, symbols};
use crate::job::{Place, Quantity};
use crate::job_error::{JobError, shown};

/// A range in SI, and how a message says it.
#[derive(Debug, Clone, Copy)]
pub(super) struct Range {
    low: f64,
    high: f64,
    words: &'static str,
}

/// Sizes of bodies.
pub(super) const SIZE: Range = Range { low: 1e-6, high: 100.0, words: "from 1 um to 100 m" };
/// Gaps and radii that may be nothing.
pub(super) const GAP: Range = Range { low: 0.0, high: 100.0, words: "from 0 mm to 100 m" };
/// Heights and other coordinates.
pub(super) const POSITION: Range = Range { low: -100.0, high: 100.0, words: "from -100 m to 100 m" };
/// Frequencies.
pub(super) const FREQUENCY: Range = Range { low: 1.0, high: 1e7, words: "from 1 Hz to 10 MHz" };
/// Temperatures.
pub(super) const TEMPERATURE: Range =
    Range { low: 0.0, high: 4000.0, words: "from 0 K to 4000 K (-273.15 °C to 3726.85 °C)" };
/// Temperatures of water at the inlet.
pub(super) const WATER: Range = Range { low: 273.15, high: 373.15, words: "from 0 °C to 100 °C" };
/// Errors allowed in a heat step.
pub(super) const STEP_ERROR: Range = Range { low: 1e-3, high: 100.0, words: "from 0.001 K to 100 K" };
/// Currents.
pub(super) const CURRENT: Range = Range { low: 1e-6, high: 1e7, words: "from 0.001 mA to 10000 kA" };
/// Voltages.
pub(super) const VOLTAGE: Range = Range { low: 1e-6, high: 1e6, words: "from 0.001 mV to 1000 kV" };
/// Powers.
pub(super) const POWER: Range = Range { low: 1e-6, high: 1e9, words: "from 0.000001 W to 1000 MW" };
/// Field strengths.
pub(super) const FIELD: Range = Range { low: 1e-3, high: 1e8, words: "from 0.001 A/m to 100000 kA/m" };
/// Water flows.
pub(super) const FLOW: Range = Range { low: 1e-9, high: 1.0, words: "from 0.00006 l/min to 1 m3/s" };
/// Heat transfer coefficients.
pub(super) const HEAT_TRANSFER: Range = Range { low: 0.0, high: 1e6, words: "from 0 W/m2/K to 1000 kW/m2/K" };
/// Heat fluxes.
pub(super) const HEAT_FLUX: Range = Range { low: -1e9, high: 1e9, words: "from -1000 MW/m2 to 1000 MW/m2" };
/// Durations.
pub(super) const TIME: Range = Range { low: 1e-6, high: 3.6e6, words: "from 0.001 ms to 1000 h" };

/// A quantity that has been read: its SI value, and what messages need to speak of it.
#[derive(Debug, Clone)]
pub(super) struct Amount {
    /// Value in SI.
    pub(super) si: f64,
    /// Where it stands.
    pub(super) place: Place,
    /// As written.
    pub(super) text: String,
}

/// Reads a quantity and checks its range.
///
/// # Errors
/// Text without a number or a unit, a unit of another dimension, a value out of range.
pub(super) fn read<D: Dimension>(quantity: &Quantity<D>, place: &Place, range: Range) -> Result<Amount, JobError> {
    let si = si(quantity, place)?;
    let text = shown(quantity.text());
    if !(si >= range.low && si <= range.high) {
        let what = D::WHAT;
        return Err(JobError::OutOfRange { place: place.clone(), value: text, what, range: range.words });
    }
    Ok(Amount { si, place: place.clone(), text })
}

/// Reads a quantity that may be left out.
///
/// # Errors
/// As [`read`].
pub(super) fn read_optional<D: Dimension>(
    quantity: Option<&Quantity<D>>,
    place: &Place,
    range: Range,
) -> Result<Option<Amount>, JobError> {
    quantity.map(|quantity| read(quantity, place, range)).transpose()
}

fn si<D: Dimension>(quantity: &Quantity<D>, place: &Place) -> Result<f64, JobError> {
    let text = quantity.text().trim();
    let value = shown(text);
    let (number, unit) = split(text);
    let Ok(number) = number.parse::<f64>() else {
        let hint = if text.starts_with('−') { " with the sign - of the keyboard" } else { "" };
        return Err(JobError::NotAQuantity { place: place.clone(), value, what: D::WHAT, example: D::EXAMPLE, hint });
    };
    if unit.starts_with(',') || unit.starts_with('\'') {
        let hint = ", with a point before the decimals and nothing between the thousands";
        return Err(JobError::NotAQuantity { place: place.clone(), value, what: D::WHAT, example: D::EXAMPLE, hint });
    }
    if let Some(known) = D::UNITS.iter().find(|known| known.is_written(unit)) {
        return Ok(known.si(number));
    }
    if D::UNITS.len() == 1 && ["°C", "degC", "℃", "C", "°F", "degF", "℉"].contains(&unit) {
        return Err(JobError::DifferenceUnit { place: place.clone(), value, number });
    }
    let found = if unit.is_empty() { "there is no unit".to_owned() } else { format!("`{}` is no unit", shown(unit)) };
    Err(JobError::Unit { place: place.clone(), value, found, what: D::WHAT, units: symbols::<D>() })
}

/// The longest beginning that can be a decimal number, and the rest without outer spaces.
fn split(text: &str) -> (&str, &str) {
    let bytes = text.as_bytes();
    let digits = |mut at: usize| {
        while bytes.get(at).is_some_and(u8::is_ascii_digit) {
            at += 1;
        }
        at
    };
    let sign = |at: usize| at + usize::from(matches!(bytes.get(at), Some(b'+' | b'-')));
    let mut end = digits(sign(0));
    if bytes.get(end) == Some(&b'.') {
        end = digits(end + 1);
    }
    if matches!(bytes.get(end), Some(b'e' | b'E')) {
        let exponent = sign(end + 1);
        if digits(exponent) > exponent {
            end = digits(exponent);
        }
    }
    (&text[..end], text[end..].trim())
}

#[cfg(test)]
mod tests {
    #![allow(clippy::unwrap_used, reason = "tests")]

    use super::{POSITION, TEMPERATURE, read, si, split};
    use crate::job::units::{Length, Temperature, TemperatureDifference};
    use crate::job::{Place, Quantity};

    fn place() -> Place {
        Place::file("job.json").key("here")
    }

    #[test]
    fn a_number_and_its_unit_are_told_apart() {
        assert_eq!(split("60 mm"), ("60", "mm"));
        assert_eq!(split("-1.5e-3m"), ("-1.5e-3", "m"));
        assert_eq!(split("3e"), ("3", "e"));
        assert_eq!(split("mm"), ("", "mm"));
        assert_eq!(split(".5 in"), (".5", "in"));
        assert_eq!(split("20 °C"), ("20", "°C"));
    }

    #[test]
    fn lengths_and_temperatures_become_metres_and_kelvin() {
        let length = |text: &str| read(&Quantity::<Length>::of(text), &place(), POSITION).unwrap().si;
        assert!((length("60 mm") - 0.06).abs() < 1e-15);
        assert!((length("-2.5in") + 0.0635).abs() < 1e-15);
        let kelvin = read(&Quantity::<Temperature>::of("1200 °C"), &place(), TEMPERATURE).unwrap().si;
        assert!((kelvin - 1473.15).abs() < 1e-9);
    }

    #[test]
    fn what_is_no_length_is_refused_with_its_place_and_the_units() {
        for text in ["", "mm", "sixty mm", "60", "60 V", "6,5 mm", "NaN mm", "inf mm", "1e999 mm", "− 3 mm"] {
            let error = read(&Quantity::<Length>::of(text), &place(), POSITION).unwrap_err().to_string();
            assert!(error.starts_with("job.json: at here: value"), "{text}: {error}");
            assert!(error.contains("mm"), "{text}: {error}");
        }
    }

    #[test]
    fn a_difference_in_degrees_is_refused() {
        let error = si(&Quantity::<TemperatureDifference>::of("2 °C"), &place()).unwrap_err().to_string();
        assert!(error.contains("write \"2 K\""), "{error}");
    }
}
