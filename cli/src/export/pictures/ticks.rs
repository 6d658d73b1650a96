//! Round ticks and the text of numbers. Steps are 1, 2 or 5 times a power of ten.

/// Smallest round step that divides `span` into at most `count` pieces; zero where there is no such span.
pub(super) fn round_step(span: f64, count: usize) -> f64 {
    if !(span.is_finite() && span > 0.0) || count == 0 {
        return 0.0;
    }
    let least = span / count as f64;
    let decade = 10f64.powf(least.log10().floor());
    let step = [1.0, 2.0, 5.0, 10.0].into_iter().map(|m| m * decade).find(|&s| s >= least * (1.0 - 1e-9));
    step.filter(|s| s.is_normal()).unwrap_or(0.0)
}

/// Multiples of a round step within `[low, high]`, at most `count + 1` of them; empty where the range is.
pub(super) fn ticks(low: f64, high: f64, count: usize) -> Vec<f64> {
    let step = round_step(high - low, count);
    if step == 0.0 {
        return Vec::new();
    }
    let first = (low / step - 1e-9).ceil();
    let last = (high / step + 1e-9).floor();
    let number = (last - first + 1.0).clamp(0.0, count as f64 + 2.0) as usize;
    (0..number).map(|i| (first + i as f64) * step).collect()
}

/// The range widened to multiples of its round step, so that an axis starts and ends at a tick.
///
/// A range without extent is widened by 1 % of its value, or to one unit about zero.
pub(super) fn round_range(low: f64, high: f64, count: usize) -> (f64, f64) {
    if !(low.is_finite() && high.is_finite()) {
        return (0.0, 1.0);
    }
    let floor = 1e-6 * low.abs().max(high.abs());
    if high - low <= floor {
        let half = if floor == 0.0 { 1.0 } else { 1e4 * floor };
        return round_range(low - half, high + half, count);
    }
    let step = round_step(high - low, count);
    if step == 0.0 {
        return (low, high);
    }
    ((low / step + 1e-9).floor() * step, (high / step - 1e-9).ceil() * step)
}

/// Text of ticks, all with the decimals their step needs.
pub(super) fn labels(ticks: &[f64]) -> Vec<String> {
    let step = match ticks {
        [first, second, ..] => (second - first).abs(),
        [only] => only.abs(),
        [] => 0.0,
    };
    let greatest = ticks.iter().fold(0.0f64, |m, t| m.max(t.abs()));
    ticks.iter().map(|&t| label(t, step, greatest)).collect()
}

fn label(value: f64, step: f64, greatest: f64) -> String {
    if greatest != 0.0 && !(1e-3..1e7).contains(&greatest) {
        let digits = ((greatest.log10() + 1e-9).floor() - (step.log10() + 1e-9).floor()).clamp(0.0, 4.0) as usize;
        return if value == 0.0 { "0".into() } else { format!("{value:.digits$e}") };
    }
    let decimals = if step > 0.0 { (-(step.log10() + 1e-9).floor()).clamp(0.0, 6.0) as usize } else { 0 };
    plain(value, decimals)
}

/// Fixed decimals with a true minus sign, and no minus on zero.
fn plain(value: f64, decimals: usize) -> String {
    let text = format!("{:.decimals$}", value.abs());
    let zero = text.chars().all(|c| c == '0' || c == '.');
    if value < 0.0 && !zero { format!("\u{2212}{text}") } else { text }
}

/// A number with three significant digits.
pub(super) fn three_digits(value: f64) -> String {
    if !value.is_finite() {
        return "none".into();
    }
    if value == 0.0 {
        return "0".into();
    }
    let exponent = value.abs().log10().floor();
    if !(-4.0..7.0).contains(&exponent) {
        return format!("{value:.2e}");
    }
    plain(value, (2.0 - exponent).clamp(0.0, 6.0) as usize)
}

/// Millimetres with at most three decimals and no trailing zeros, as on a drawing.
pub(super) fn millimetres(metres: f64) -> String {
    let text = plain(metres * 1e3, 3);
    text.trim_end_matches('0').trim_end_matches('.').to_owned()
}

#[cfg(test)]
mod tests {
    use super::{labels, millimetres, round_range, round_step, three_digits, ticks};

    #[test]
    fn steps_are_one_two_or_five_times_a_power_of_ten() {
        for (span, count, step) in [(10.0, 10, 1.0), (1.0, 4, 0.5), (230.0, 6, 50.0), (0.07, 7, 0.01), (3.0, 2, 2.0)] {
            let found = round_step(span, count);
            assert!((found - step).abs() < 1e-12 * step, "span {span} in {count}: {found}, expected {step}");
        }
    }

    #[test]
    fn ticks_are_round_and_stay_in_the_range() {
        assert_eq!(labels(&ticks(-52.0, 52.0, 6)), ["\u{2212}40", "\u{2212}20", "0", "20", "40"]);
        assert_eq!(labels(&ticks(0.0, 1.0, 5)), ["0.0", "0.2", "0.4", "0.6", "0.8", "1.0"]);
        assert_eq!(labels(&ticks(0.0, 3e-5, 3)), ["0", "1e-5", "2e-5", "3e-5"]);
    }

    #[test]
    fn a_range_without_extent_or_number_gives_no_ticks_and_no_panic() {
        for (low, high) in [(1.0, 1.0), (2.0, 1.0), (f64::NAN, 1.0), (0.0, f64::INFINITY), (0.0, 0.0)] {
            assert!(ticks(low, high, 5).is_empty(), "{low} to {high}");
        }
        assert_eq!(round_range(f64::NAN, 1.0, 5), (0.0, 1.0));
        for constant in [0.0, 293.15, -1e9, 1e-12] {
            let (low, high) = round_range(constant, constant, 5);
            assert!(low < constant && constant < high, "{constant}: {low} to {high}");
        }
    }

    #[test]
    fn ranges_widen_to_ticks() {
        assert_eq!(round_range(3.0, 97.0, 5), (0.0, 100.0));
        assert_eq!(round_range(0.0, 100.0, 5), (0.0, 100.0));
    }

    #[test]
    fn numbers_have_three_digits_and_lengths_no_trailing_zeros() {
        assert_eq!(three_digits(1234.5), "1234");
        assert_eq!(three_digits(0.012345), "0.0123");
        assert_eq!(three_digits(-12.345), "\u{2212}12.3");
        assert_eq!(three_digits(f64::NAN), "none");
        assert_eq!(millimetres(0.06), "60");
        assert_eq!(millimetres(0.0127), "12.7");
        assert_eq!(millimetres(0.1), "100");
    }
}
