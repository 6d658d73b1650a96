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
    /// The pole; its numerator is zero where the formula has none.
    pole: Pole,
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
        let pole = pole.unwrap_or(Pole { numerator: 0.0, at: 0.0 });
        Ok(Self { from_k, to_k, zero_k, polynomial, integrated, polynomial_at_begin, pole })
    }

    /// Begin and end in kelvin.
    pub fn range_k(&self) -> (f64, f64) {
        (self.from_k, self.to_k)
    }

    /// Value at `t_k`, in the unit of the property; the formula continues outside the segment.
    pub fn value(&self, t_k: f64) -> f64 {
        let x = t_k - self.zero_k;
        horner(&self.polynomial, x) + self.fraction(x)
    }

    /// Derivative at `t_k`, per kelvin.
    pub fn slope(&self, t_k: f64) -> f64 {
        let x = t_k - self.zero_k;
        let powers = self.polynomial.iter().enumerate().skip(1).rev();
        let polynomial = powers.fold(0.0, |sum, (k, a)| sum * x + k as f64 * a);
        if self.has_pole() { polynomial - self.fraction(x) / (x - self.pole.at) } else { polynomial }
    }

    /// Exact integral from the begin of the segment to `t_k` (inside it), in the unit of the property times kelvin.
    pub fn integral(&self, t_k: f64) -> f64 {
        let x = t_k - self.zero_k;
        horner(&self.integrated, x) * x - self.polynomial_at_begin + self.logarithm(x)
    }

    /// [`Segment::value`] at every temperature of `t_k`, written over it.
    pub(super) fn values(&self, t_k: &mut [f64]) {
        let polynomial = |x| horner_lanes(&self.polynomial, x);
        if self.has_pole() {
            in_lanes(t_k, self.zero_k, |x| add(polynomial(x), x.map(|x| self.fraction(x))));
        } else {
            in_lanes(t_k, self.zero_k, polynomial);
        }
    }

    /// [`Segment::integral`] to every temperature of `t_k`, written over it.
    pub(super) fn integrals(&self, t_k: &mut [f64]) {
        let polynomial = |x: [f64; LANES]| -> [f64; LANES] {
            let sums = horner_lanes(&self.integrated, x);
            std::array::from_fn(|i| sums[i] * x[i] - self.polynomial_at_begin)
        };
        if self.has_pole() {
            in_lanes(t_k, self.zero_k, |x| add(polynomial(x), x.map(|x| self.logarithm(x))));
        } else {
            in_lanes(t_k, self.zero_k, polynomial);
        }
    }

    fn has_pole(&self) -> bool {
        self.pole.numerator != 0.0
    }

    /// Value of the pole.
    fn fraction(&self, x: f64) -> f64 {
        if self.has_pole() { self.pole.numerator / (x - self.pole.at) } else { 0.0 }
    }

    /// Integral of the pole from the begin of the segment: `n ln((x - p)/(x0 - p))`, whose ratio is positive because the
    /// pole is outside the segment.
    fn logarithm(&self, x: f64) -> f64 {
        let Pole { numerator, at } = self.pole;
        if self.has_pole() { numerator * ((x - at) / (self.from_k - self.zero_k - at)).ln() } else { 0.0 }
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
        if !self.has_pole() {
            return polynomial;
        }
        let distance = (a - self.pole.at).abs().min((b - self.pole.at).abs());
        polynomial + 2.0 * self.pole.numerator.abs() / distance.powi(3)
    }
}

/// Numbers worked on side by side.
const LANES: usize = 4;

/// Replaces every temperature by what `f` makes of its distance from `zero_k`, several at a time.
fn in_lanes(t_k: &mut [f64], zero_k: f64, f: impl Fn([f64; LANES]) -> [f64; LANES]) {
    let (groups, rest) = t_k.as_chunks_mut::<LANES>();
    for group in groups {
        *group = f(group.map(|t| t - zero_k));
    }
    if let Some(&first) = rest.first() {
        let mut group = [first; LANES];
        group[..rest.len()].copy_from_slice(rest);
        rest.copy_from_slice(&f(group.map(|t| t - zero_k))[..rest.len()]);
    }
}

fn add(a: [f64; LANES], b: [f64; LANES]) -> [f64; LANES] {
    std::array::from_fn(|i| a[i] + b[i])
}

/// [`horner`] at several points.
fn horner_lanes(coefficients: &[f64], x: [f64; LANES]) -> [f64; LANES] {
    coefficients.iter().rev().fold([0.0; LANES], |sum, a| std::array::from_fn(|i| sum[i] * x[i] + a))
}

/// Polynomial with coefficients from the constant upwards.
fn horner(coefficients: &[f64], x: f64) -> f64 {
    coefficients.iter().rev().fold(0.0, |sum, a| sum * x + a)
}
