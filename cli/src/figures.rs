//! Numbers as a person reads them: four significant digits, prefixes of the SI, minutes and seconds.

use solver::constants::ZERO_CELSIUS_K;

/// Prefixes from 1e-9 to 1e9, in steps of a thousand.
const PREFIXES: [&str; 7] = ["n", "\u{b5}", "m", "", "k", "M", "G"];
/// Index of the empty prefix.
const NO_PREFIX: i32 = 3;
/// Index of the last prefix.
const LAST_PREFIX: i32 = 6;

/// A value with its unit and a prefix, such as `22.04 kW`; a dash where there is no number.
pub(crate) fn si(value: f64, unit: &str) -> String {
    if !value.is_finite() {
        return "-".to_owned();
    }
    let magnitude = value.abs();
    let thousands = if magnitude == 0.0 { 0 } else { ((magnitude.log10() + 1e-9) / 3.0).floor() as i32 };
    // A milli before var would be read as a mega.
    let least = if unit == "var" { NO_PREFIX } else { 0 };
    let index = (thousands + NO_PREFIX).clamp(least, LAST_PREFIX);
    let scaled = value / 1000f64.powi(index - NO_PREFIX);
    format!("{} {}{unit}", significant(scaled, 4), PREFIXES[index as usize])
}

/// A value with this many significant digits, without an exponent where it has an ordinary size.
pub(crate) fn significant(value: f64, digits: i32) -> String {
    if !value.is_finite() {
        return "-".to_owned();
    }
    if value == 0.0 {
        return "0".to_owned();
    }
    let places = digits - 1 - value.abs().log10().floor() as i32;
    if (0..=8).contains(&places) {
        format!("{value:.*}", places as usize)
    } else if (-4..0).contains(&places) {
        format!("{value:.0}")
    } else {
        format!("{value:.*e}", (digits - 1) as usize)
    }
}

/// A temperature in whole degrees Celsius.
pub(crate) fn degc(kelvin: f64) -> String {
    if kelvin.is_finite() { format!("{:.0} \u{b0}C", kelvin - ZERO_CELSIUS_K) } else { "-".to_owned() }
}

/// A span of simulated time: seconds, with minutes from two minutes on.
pub(crate) fn seconds(span_s: f64) -> String {
    if !span_s.is_finite() {
        return "-".to_owned();
    }
    if span_s < 120.0 {
        return format!("{} s", significant(span_s, 3));
    }
    let whole = span_s.round() as u64;
    let (hours, minutes, rest) = (whole / 3600, whole / 60 % 60, whole % 60);
    if hours == 0 { format!("{minutes} min {rest} s") } else { format!("{hours} h {minutes} min {rest} s") }
}

/// A length in millimetres.
pub(crate) fn millimetres(length_m: f64) -> String {
    if length_m.is_finite() { format!("{} mm", significant(1e3 * length_m, 3)) } else { "-".to_owned() }
}

/// A count with its noun: `1 turn`, `12 turns`.
pub(crate) fn count(number: usize, noun: &str) -> String {
    if number == 1 { format!("{number} {noun}") } else { format!("{number} {noun}s") }
}

/// Text that grows line by line.
#[derive(Debug, Default)]
pub(crate) struct Page(String);

impl Page {
    /// Adds a line.
    pub(crate) fn line(&mut self, line: impl AsRef<str>) {
        self.0.push_str(line.as_ref().trim_end());
        self.0.push('\n');
    }

    /// Adds an empty line.
    pub(crate) fn gap(&mut self) {
        self.0.push('\n');
    }

    /// Adds a table in columns two spaces apart; columns from `right` on are set to the right.
    pub(crate) fn table(&mut self, rows: &[Vec<String>], right: usize) {
        let width_of = |text: &String| text.chars().count();
        let columns = rows.iter().map(Vec::len).max().unwrap_or(0);
        let widths: Vec<usize> =
            (0..columns).map(|c| rows.iter().filter_map(|row| row.get(c)).map(width_of).max().unwrap_or(0)).collect();
        for row in rows {
            let cells = row.iter().zip(&widths).enumerate().map(|(c, (cell, &width))| {
                if c < right { format!("{cell:<width$}") } else { format!("{cell:>width$}") }
            });
            self.line(format!("  {}", cells.collect::<Vec<_>>().join("  ")));
        }
    }

    /// The text.
    pub(crate) fn into_text(self) -> String {
        self.0
    }
}

/// A row of a table from fixed texts.
pub(crate) fn row<const N: usize>(cells: [&str; N]) -> Vec<String> {
    cells.map(str::to_owned).to_vec()
}

#[cfg(test)]
mod tests {
    use super::{Page, count, degc, row, seconds, si, significant};

    #[test]
    fn values_get_the_prefix_that_leaves_one_to_three_digits_before_the_point() {
        assert_eq!(si(22_040.0, "W"), "22.04 kW");
        assert_eq!(si(1000.0, "W"), "1.000 kW");
        assert_eq!(si(0.000_012_3, "H"), "12.30 \u{b5}H");
        assert_eq!(si(0.0, "V"), "0 V");
        assert_eq!(si(-250_000.0, "var"), "-250.0 kvar");
        assert_eq!(si(f64::INFINITY, "m"), "-");
        assert_eq!(si(0.0125, "var"), "0.01250 var");
        assert_eq!(si(2.5e6, "var"), "2.500 Mvar");
    }

    #[test]
    fn significant_digits_are_kept_without_an_exponent_for_ordinary_sizes() {
        assert_eq!(significant(0.0123456, 3), "0.0123");
        assert_eq!(significant(123_456.0, 4), "123456");
        assert_eq!(significant(3.2e-13, 2), "3.2e-13");
    }

    #[test]
    fn times_from_two_minutes_on_are_told_in_minutes() {
        assert_eq!(seconds(12.34), "12.3 s");
        assert_eq!(seconds(184.4), "3 min 4 s");
        assert_eq!(seconds(3_725.0), "1 h 2 min 5 s");
    }

    #[test]
    fn temperatures_are_whole_degrees_and_nouns_follow_their_number() {
        assert_eq!(degc(1473.15), "1200 \u{b0}C");
        assert_eq!(count(1, "turn"), "1 turn");
        assert_eq!(count(12, "turn"), "12 turns");
    }

    #[test]
    fn columns_line_up_by_characters_not_bytes() {
        let mut page = Page::default();
        page.table(&[row(["\u{b5}H", "1"]), row(["name", "22"])], 1);
        assert_eq!(page.into_text(), "  \u{b5}H     1\n  name  22\n");
    }
}
