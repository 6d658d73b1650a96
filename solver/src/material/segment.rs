//! One piece of a formula over temperature: a polynomial plus, where a standard writes one, a simple pole,
//! `f(x) = a_0 + a_1 x + a_2 x^2 + ... + n / (x - p)`, with `x` in °C or K as the source has it.
//!
//! Source of the form: EN 1993-1-2:2005, 3.4.1.2, whose specific heat of steel near 735 °C is written with such poles.

use super::error::{MaterialError, MaterialFault, celsius};

/// How many pieces a segment is cut into at most to show that it stays positive.
const PIECES: usize = 4096;

/// The term `numerator / (x - at)` of a segment.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Pole {
    /// Numerator: the unit of the property times a kelvin.
    pub numerator: f64,
    /// Position on the scale of `x`.
    pub at: f64,
}

/// A formula on `from_k <= T <= to_k`, in SI; `x = T - zero_k`.
#[derive(Debug, Clone, PartialEq)]
pub struct Segment {
    from_k: f64,
    to_k: f64,
    zero_k: f64,
    polynomial: Vec<f64>,
    /// Coefficients of the polynomial's integral divided by `x`: `a_k / (k + 1)`.
    integrated: Vec<f64>,
    /// Integral of the polynomial from `x = 0` to the begin of the segment.
    polynomial_at_begin: f64,
    pole: Option<Pole>,
}

impl Segment {
    /// A segment between two temperatures in kelvin.
    ///
    /// `zero_k` is the zero of the scale of `x`: 273.15 for a formula in °C, 0 for one in kelvin. `polynomial` holds the
    /// coefficients from the constant upwards.
    ///
    /// # Errors
    /// A number that is not finite, ends below absolute zero or in the wrong order, a pole inside the segment.
    pub fn new(
        from_k: f64,
        to_k: f64,
        zero_k: f64,
        polynomial: Vec<f64>,
        pole: Option<Pole>,
    ) -> Result<Self, MaterialError> {
        let pole_numbers = pole.iter().flat_map(|p| [p.numerator, p.at]);
        let numbers = [from_k, to_k, zero_k].into_iter().chain(polynomial.iter().copied()).chain(pole_numbers);
        for value in numbers {
            if !value.is_finite() {
                return Err(MaterialFault::NotFinite { value }.into());
            }
        }
        let (from_c, to_c) = (celsius(from_k), celsius(to_k));
        if from_k < 0.0 {
            return Err(MaterialFault::BelowAbsoluteZero { at_c: from_c }.into());
        }
        if to_k <= from_k {
            return Err(MaterialFault::SegmentBackwards { from_c, to_c }.into());
        }
        if let Some(p) = pole
            && p.at >= from_k - zero_k
            && p.at <= to_k - zero_k
        {
            let at_c = celsius(p.at + zero_k);
            return Err(MaterialFault::PoleInside { at_c, from_c, to_c }.into());
        }
        let integrated: Vec<f64> = polynomial.iter().enumerate().map(|(k, a)| a / (k as f64 + 1.0)).collect();
        let begin = from_k - zero_k;
        let polynomial_at_begin = horner(&integrated, begin) * begin;
        Ok(Self { from_k, to_k, zero_k, polynomial, integrated, polynomial_at_begin, pole })
    }

    /// Begin and end in kelvin.
    pub fn range_k(&self) -> (f64, f64) {
        (self.from_k, self.to_k)
    }

    /// Value at `t_k`, in the unit of the property; the formula continues outside the segment.
    pub fn value(&self, t_k: f64) -> f64 {
        let x = t_k - self.zero_k;
        horner(&self.polynomial, x) + self.pole.map_or(0.0, |p| p.numerator / (x - p.at))
    }

    /// Derivative at `t_k`, per kelvin.
    pub fn slope(&self, t_k: f64) -> f64 {
        let x = t_k - self.zero_k;
        let powers = self.polynomial.iter().enumerate().skip(1).rev();
        let polynomial = powers.fold(0.0, |sum, (k, a)| sum * x + k as f64 * a);
        polynomial - self.pole.map_or(0.0, |p| p.numerator / ((x - p.at) * (x - p.at)))
    }

    /// Exact integral from the begin of the segment to `t_k` (inside it), in the unit of the property times kelvin.
    pub fn integral(&self, t_k: f64) -> f64 {
        let x = t_k - self.zero_k;
        let polynomial = horner(&self.integrated, x) * x - self.polynomial_at_begin;
        // ln((x - p)/(x0 - p)): the ratio is positive because the pole is outside the segment.
        let logarithm = |p: Pole| p.numerator * ((x - p.at) / (self.from_k - self.zero_k - p.at)).ln();
        polynomial + self.pole.map_or(0.0, logarithm)
    }

    /// Whether the formula is greater than zero on the whole segment, shown by bounds and not by samples.
    ///
    /// # Errors
    /// A temperature where it is not, with its value in `unit`; or one near which it could not be shown.
    pub(super) fn check_positive(&self, unit: &'static str) -> Result<(), MaterialError> {
        let mut pending = vec![(self.from_k, self.to_k)];
        for _ in 0..PIECES {
            let Some((a, b)) = pending.pop() else {
                return Ok(());
            };
            let middle = 0.5 * (a + b);
            for t in [a, middle, b] {
                let value = self.value(t);
                if value.is_nan() || value <= 0.0 {
                    return Err(MaterialFault::NotPositive { value, unit, at_c: Some(celsius(t)) }.into());
                }
            }
            // Taylor: f(middle + x) >= f - |f'| x - max|f''| x^2 / 2.
            let half = 0.5 * (b - a);
            let fall = half * (self.slope(middle).abs() + 0.5 * half * self.most_curved(a, b));
            if self.value(middle) <= fall {
                pending.extend([(middle, b), (a, middle)]);
            }
        }
        match pending.pop() {
            None => Ok(()),
            Some((a, _)) => Err(MaterialFault::PositivityUnclear { at_c: celsius(a) }.into()),
        }
    }

    /// An upper bound of the magnitude of the second derivative between two temperatures of the segment, per kelvin squared.
    fn most_curved(&self, a_k: f64, b_k: f64) -> f64 {
        let (a, b) = (a_k - self.zero_k, b_k - self.zero_k);
        let largest = a.abs().max(b.abs());
        let powers = self.polynomial.iter().enumerate().skip(2).rev();
        let polynomial = powers.fold(0.0, |sum, (k, c)| sum * largest + (k * (k - 1)) as f64 * c.abs());
        let pole = self.pole.map_or(0.0, |p| {
            let distance = (a - p.at).abs().min((b - p.at).abs());
            2.0 * p.numerator.abs() / distance.powi(3)
        });
        polynomial + pole
    }
}

/// Polynomial with coefficients from the constant upwards.
fn horner(coefficients: &[f64], x: f64) -> f64 {
    coefficients.iter().rev().fold(0.0, |sum, a| sum * x + a)
}
