//! Values to colours. The colour maps are perceptually uniform and chosen once: inferno for temperatures, viridis for
//! loss density, cividis for flux density, plasma for current density (colour tables of
//! the `colorous` crate; cividis: J. R. Nuñez, C. R. Anderton, R. S. Renslow, `PLoS ONE` 13 (2018) e0199239).
//!
//! A quantity that falls off by decades, as losses do below a surface, is shown on a logarithmic scale of three decades;
//! a few extreme values at sharp corners do not stretch a linear scale, but are shown in the last colour and marked so.

use colorous::Gradient;

use super::image::Rgb;
use super::ticks::{labels, round_range, ticks};

/// Decades a logarithmic scale shows.
const DECADES: i32 = 3;
/// A scale is logarithmic where one tenth of the area lies below this fraction of the greatest value.
const WIDE: f64 = 0.02;
/// A linear scale may leave out this fraction of the area at its upper end.
const OUTLYING: f64 = 0.002;

/// How values are spread over the colours.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Spread {
    /// All values, evenly.
    Linear,
    /// Evenly, without outlying values at the upper end.
    LinearWithoutOutliers,
    /// By decades where the values range widely, else as above.
    ByRange,
}

/// A range of values with its colours.
#[derive(Debug, Clone, Copy)]
pub(super) struct Scale {
    gradient: Gradient,
    /// Value of the first and of the last colour.
    pub(super) range: [f64; 2],
    /// True where colours go by the logarithm.
    pub(super) logarithmic: bool,
    /// True where values below, and above, the range exist.
    pub(super) cut: [bool; 2],
}

impl Scale {
    /// The scale for values with their areas; without finite values a scale from 0 to 1.
    pub(super) fn fit(gradient: Gradient, spread: Spread, weighted: &[(f64, f64)]) -> Self {
        let mut sorted: Vec<(f64, f64)> =
            weighted.iter().copied().filter(|(v, w)| v.is_finite() && w.is_finite() && *w > 0.0).collect();
        sorted.sort_by(|a, b| a.0.total_cmp(&b.0));
        let (Some(&(low, _)), Some(&(high, _))) = (sorted.first(), sorted.last()) else {
            return Self { gradient, range: [0.0, 1.0], logarithmic: false, cut: [false; 2] };
        };
        if spread == Spread::ByRange && high > 0.0 && low >= 0.0 && quantile(&sorted, 0.1) < WIDE * high {
            let first = round_up(high * 10f64.powi(-DECADES));
            return Self { gradient, range: [first, high], logarithmic: true, cut: [low < first, false] };
        }
        let usual = quantile(&sorted, 1.0 - OUTLYING);
        if spread != Spread::Linear && usual > low && high - low > 1.25 * (usual - low) {
            let top = round_range(low, usual, 10).1;
            if top < high {
                return Self { gradient, range: [low, top], logarithmic: false, cut: [false, true] };
            }
        }
        Self { gradient, range: extended(low, high), logarithmic: false, cut: [false; 2] }
    }

    /// The scale of some values, for a map that shows all values: ends are moved to ticks where values lie beyond them.
    pub(super) fn within(self, all: &[(f64, f64)]) -> Self {
        let [low, high] = self.range;
        let (below, above) = (all.iter().any(|v| v.0 < low), all.iter().any(|v| v.0 > high));
        let outer = round_range(low, high, 10);
        let range = [if below { outer.0 } else { low }, if above { outer.1 } else { high }];
        let cut = [all.iter().any(|v| v.0 < range[0]), all.iter().any(|v| v.0 > range[1])];
        Self { range, cut, ..self }
    }

    /// Colour of a value; `None` where it is not a number.
    pub(super) fn colour(&self, value: f64) -> Option<Rgb> {
        let t = self.fraction(value);
        if t.is_nan() {
            return None;
        }
        let c = self.gradient.eval_continuous(t.clamp(0.0, 1.0));
        Some([c.r, c.g, c.b])
    }

    /// Place of a value on the scale: 0 at the first, 1 at the last colour.
    pub(super) fn fraction(&self, value: f64) -> f64 {
        let [low, high] = self.range;
        if self.logarithmic {
            if value <= 0.0 { 0.0 } else { (value / low).ln() / (high / low).ln() }
        } else {
            (value - low) / (high - low)
        }
    }

    /// Round ticks with their text, at most about `count`.
    pub(super) fn ticks(&self, count: usize) -> Vec<(f64, String)> {
        let values =
            if self.logarithmic { decades(self.range, count) } else { ticks(self.range[0], self.range[1], count) };
        if self.logarithmic {
            return values.into_iter().map(|v| (v, power_label(v))).collect();
        }
        let text = labels(&values);
        values.into_iter().zip(text).collect()
    }
}

/// The next of 1, 2 and 5 times a power of ten.
fn round_up(value: f64) -> f64 {
    let decade = 10f64.powf(value.log10().floor());
    [1.0, 2.0, 5.0].into_iter().map(|m| m * decade).find(|&s| s >= value * (1.0 - 1e-9)).unwrap_or(10.0 * decade)
}

/// A constant is put into the middle of a range of 2 % about it.
fn extended(low: f64, high: f64) -> [f64; 2] {
    let size = low.abs().max(high.abs());
    if high - low > 1e-9 * size {
        return [low, high];
    }
    let half = if size == 0.0 { 1.0 } else { 0.01 * size };
    [low - half, high + half]
}

/// Value below which a fraction of the area lies; `sorted` is not empty.
fn quantile(sorted: &[(f64, f64)], fraction: f64) -> f64 {
    let goal = fraction * sorted.iter().map(|s| s.1).sum::<f64>();
    let mut area = 0.0;
    for &(value, weight) in sorted {
        area += weight;
        if area >= goal {
            return value;
        }
    }
    sorted.last().map_or(f64::NAN, |s| s.0)
}

/// 1, 2 and 5 times powers of ten within the range, or powers alone where these are too many.
fn decades(range: [f64; 2], count: usize) -> Vec<f64> {
    let (first, last) = (range[0].log10().floor() as i32, range[1].log10().ceil() as i32);
    let within = |v: &f64| *v >= range[0] * (1.0 - 1e-9) && *v <= range[1] * (1.0 + 1e-9);
    let pick = |factors: &[f64]| -> Vec<f64> {
        (first..=last).flat_map(|e| factors.iter().map(move |f| f * 10f64.powi(e))).filter(within).collect()
    };
    let fine = pick(&[1.0, 2.0, 5.0]);
    if fine.len() <= count { fine } else { pick(&[1.0]) }
}

fn power_label(value: f64) -> String {
    if (1e-3..1e6).contains(&value) {
        let decimals = (-value.log10() - 1e-9).ceil().max(0.0) as usize;
        format!("{value:.decimals$}")
    } else {
        format!("{value:.0e}")
    }
}

#[cfg(test)]
mod tests {
    #![allow(clippy::unwrap_used, reason = "tests")]

    use super::{Scale, Spread};

    fn even(values: impl IntoIterator<Item = f64>) -> Vec<(f64, f64)> {
        values.into_iter().map(|v| (v, 1.0)).collect()
    }

    #[test]
    fn ends_of_the_range_have_the_ends_of_the_colour_map() {
        let scale = Scale::fit(colorous::INFERNO, Spread::Linear, &even([20.0, 500.0, 1200.0]));
        let ends = [0.0, 1.0].map(|t| colorous::INFERNO.eval_continuous(t)).map(|c| [c.r, c.g, c.b]);
        assert_eq!(scale.colour(20.0), Some(ends[0]));
        assert_eq!(scale.colour(1200.0), Some(ends[1]));
        assert_eq!(scale.colour(f64::NAN), None);
        assert_eq!(scale.colour(2000.0), Some(ends[1]));
    }

    #[test]
    fn values_over_many_decades_go_by_the_logarithm() {
        let scale = Scale::fit(
            colorous::VIRIDIS,
            Spread::ByRange,
            &even((0..=60).map(|i| 10f64.powf(f64::from(i) / 10.0 - 4.0))),
        );
        assert!(scale.logarithmic && scale.cut[0]);
        assert!((scale.range[0] - 0.1).abs() < 1e-12 && (scale.range[1] - 100.0).abs() < 1e-9);
        assert!((scale.fraction(1.0) - 1.0 / 3.0).abs() < 1e-12);
        let texts: Vec<String> = scale.ticks(20).into_iter().map(|t| t.1).collect();
        assert_eq!(texts, ["0.1", "0.2", "0.5", "1", "2", "5", "10", "20", "50", "100"]);
        assert_eq!(scale.ticks(5).len(), 4);
    }

    #[test]
    fn values_of_one_size_stay_linear() {
        let scale = Scale::fit(colorous::VIRIDIS, Spread::ByRange, &even((10..=60).map(f64::from)));
        assert!(!scale.logarithmic);
        assert_eq!((scale.range, scale.cut), ([10.0, 60.0], [false, false]));
    }

    #[test]
    fn a_spike_at_a_corner_does_not_stretch_a_linear_scale() {
        let mut values = even((0..=1000).map(|i| f64::from(i) / 1000.0));
        values.push((50.0, 1.0));
        let scale = Scale::fit(colorous::CIVIDIS, Spread::LinearWithoutOutliers, &values);
        assert!(scale.cut[1] && scale.range[1] <= 1.2, "{:?}", scale.range);
        let whole = Scale::fit(colorous::CIVIDIS, Spread::Linear, &values);
        assert_eq!(whole.range, [0.0, 50.0]);
    }

    #[test]
    fn constants_and_nothing_give_a_scale_with_ticks() {
        for values in [even([293.15; 4]), even([0.0]), even([-3.0, -3.0]), Vec::new(), even([f64::NAN])] {
            for spread in [Spread::Linear, Spread::LinearWithoutOutliers, Spread::ByRange] {
                let scale = Scale::fit(colorous::INFERNO, spread, &values);
                assert!(scale.range[0] < scale.range[1]);
                assert!(scale.ticks(6).len() >= 2, "{values:?}");
            }
        }
        let constant = Scale::fit(colorous::INFERNO, Spread::Linear, &even([293.15]));
        assert!((constant.fraction(293.15) - 0.5).abs() < 1e-9);
        assert!(constant.colour(293.15).unwrap() != constant.colour(0.0).unwrap());
    }
}
