//! One property over temperature: a constant, a table (piecewise linear) or segments of formulas as standards write them.
//!
//! Convention: SI values over kelvin. Outside the range of the data the end value is held. At a temperature where two
//! segments meet the upper one counts, as EN 1993-1-2 has it.

use super::error::{MaterialError, MaterialFault, celsius};
use super::segment::Segment;
use super::source::Source;
use crate::constants::ZERO_CELSIUS_K;

/// Temperature in kelvin from which integrals are taken: 20 °C.
pub(super) const REFERENCE_K: f64 = ZERO_CELSIUS_K + 20.0;

/// A property over temperature, in SI over kelvin, with its source.
#[derive(Debug, Clone, PartialEq)]
pub struct Curve {
    form: Form,
    /// First and last temperature of the data in kelvin; without bounds for a constant.
    range_k: (f64, f64),
    /// Integral from the reference temperature to the begin of the data.
    offset: f64,
    source: Source,
}

#[derive(Debug, Clone, PartialEq)]
enum Form {
    Constant(f64),
    /// Temperatures in kelvin, values, and the integral from the first row to each row.
    Table {
        t_k: Vec<f64>,
        value: Vec<f64>,
        integral: Vec<f64>,
    },
    /// Segments in ascending order, their begins in kelvin, and the integral from the first begin to each begin.
    Segments {
        segments: Vec<Segment>,
        begin_k: Vec<f64>,
        integral: Vec<f64>,
    },
}

impl Curve {
    /// A property that does not depend on temperature.
    ///
    /// # Errors
    /// A value that is not finite.
    pub fn constant(value: f64) -> Result<Self, MaterialError> {
        finite(value)?;
        Ok(Self::from_form(Form::Constant(value)))
    }

    /// A piecewise linear property through `points`, rows of temperature in kelvin and value.
    ///
    /// # Errors
    /// No rows, numbers that are not finite, temperatures below absolute zero or not rising strictly.
    pub fn table(points: &[(f64, f64)]) -> Result<Self, MaterialError> {
        if points.is_empty() {
            return Err(MaterialFault::EmptyTable.into());
        }
        for (row, &(t, value)) in points.iter().enumerate() {
            finite(t)?;
            finite(value)?;
            let at_c = celsius(t);
            if t < 0.0 {
                return Err(MaterialFault::BelowAbsoluteZero { at_c }.into());
            }
            if row > 0 && t <= points[row - 1].0 {
                let previous_c = celsius(points[row - 1].0);
                return Err(MaterialFault::RowsNotRising { row: row + 1, at_c, previous_c }.into());
            }
        }
        let (t_k, value): (Vec<f64>, Vec<f64>) = points.iter().copied().unzip();
        let mut integral = vec![0.0; t_k.len()];
        for i in 1..t_k.len() {
            integral[i] = integral[i - 1] + 0.5 * (value[i - 1] + value[i]) * (t_k[i] - t_k[i - 1]);
        }
        Ok(Self::from_form(Form::Table { t_k, value, integral }))
    }

    /// A property given by formulas, each segment beginning where the one before it ended.
    ///
    /// # Errors
    /// No segments, or a gap or overlap between two of them.
    pub fn segments(segments: Vec<Segment>) -> Result<Self, MaterialError> {
        if segments.is_empty() {
            return Err(MaterialFault::NoSegments.into());
        }
        let mut integral = vec![0.0; segments.len()];
        for i in 1..segments.len() {
            let (end, begin) = (segments[i - 1].range_k().1, segments[i].range_k().0);
            if end != begin {
                let (end_c, begin_c) = (celsius(end), celsius(begin));
                return Err(MaterialFault::SegmentsApart { end_c, begin_c }.into());
            }
            integral[i] = integral[i - 1] + segments[i - 1].integral(end);
        }
        let begin_k = segments.iter().map(|s| s.range_k().0).collect();
        Ok(Self::from_form(Form::Segments { segments, begin_k, integral }))
    }

    fn from_form(form: Form) -> Self {
        let range_k = match &form {
            Form::Constant(_) => (f64::NEG_INFINITY, f64::INFINITY),
            Form::Table { t_k, .. } => (t_k[0], t_k[t_k.len() - 1]),
            Form::Segments { segments, begin_k, .. } => (begin_k[0], segments[segments.len() - 1].range_k().1),
        };
        let mut curve = Self { form, range_k, offset: 0.0, source: Source::unstated() };
        curve.offset = -curve.integral(REFERENCE_K);
        curve
    }

    /// The same curve with its source.
    #[must_use]
    pub fn with_source(mut self, source: Source) -> Self {
        self.source = source;
        self
    }

    /// Where the data come from.
    pub fn source(&self) -> &Source {
        &self.source
    }

    /// First and last temperature of the data in kelvin; `None` for a constant.
    pub fn range_k(&self) -> Option<(f64, f64)> {
        match self.form {
            Form::Constant(_) => None,
            Form::Table { .. } | Form::Segments { .. } => Some(self.range_k),
        }
    }

    /// Value at `t_k` in kelvin; outside the range the end value. NaN in, NaN out.
    pub fn value(&self, t_k: f64) -> f64 {
        let t = self.held(t_k);
        match &self.form {
            Form::Constant(value) => *value,
            Form::Table { t_k, value, .. } => between_rows(t_k, value, row(t_k, t), t),
            Form::Segments { segments, begin_k, .. } => segments[row(begin_k, t)].value(t),
        }
    }

    /// Derivative at `t_k` per kelvin, from the right at a corner; zero outside the range and for a constant.
    pub fn slope(&self, t_k: f64) -> f64 {
        if !(self.range_k.0..self.range_k.1).contains(&t_k) {
            return 0.0;
        }
        match &self.form {
            Form::Constant(_) => 0.0,
            Form::Table { t_k: knots, value, .. } => {
                let i = row(knots, t_k).min(knots.len() - 2);
                (value[i + 1] - value[i]) / (knots[i + 1] - knots[i])
            }
            Form::Segments { segments, begin_k, .. } => segments[row(begin_k, t_k)].slope(t_k),
        }
    }

    /// Exact integral of the value from 20 °C to `t_k`, in the unit of the property times kelvin.
    ///
    /// It continues linearly outside the range, where the end value is held.
    pub fn integral(&self, t_k: f64) -> f64 {
        let t = self.held(t_k);
        let inside = match &self.form {
            Form::Constant(value) => return value * (t_k - REFERENCE_K),
            Form::Table { t_k, value, integral } => {
                let i = row(t_k, t);
                integral[i] + 0.5 * (value[i] + between_rows(t_k, value, i, t)) * (t - t_k[i])
            }
            Form::Segments { segments, begin_k, integral } => {
                let i = row(begin_k, t);
                integral[i] + segments[i].integral(t)
            }
        };
        let outside = if t_k == t { 0.0 } else { self.value(t) * (t_k - t) };
        self.offset + inside + outside
    }

    /// [`Curve::value`] at every temperature of `t_k`, written over it; quickest for temperatures near each other.
    pub fn values(&self, t_k: &mut [f64]) {
        match self.common_segment(t_k) {
            Some((segment, _)) => segment.values(t_k),
            None => {
                for t in t_k {
                    *t = self.value(*t);
                }
            }
        }
    }

    /// [`Curve::integral`] to every temperature of `t_k`, written over it; quickest for temperatures near each other.
    pub fn integrals(&self, t_k: &mut [f64]) {
        let Some((segment, before)) = self.common_segment(t_k) else {
            for t in t_k {
                *t = self.integral(*t);
            }
            return;
        };
        segment.integrals(t_k);
        for inside in t_k {
            *inside = self.offset + (before + *inside);
        }
    }

    /// The segment all these temperatures lie in, and the integral from the first begin to its begin.
    fn common_segment(&self, t_k: &[f64]) -> Option<(&Segment, f64)> {
        let Form::Segments { segments, begin_k, integral } = &self.form else { return None };
        let i = row(begin_k, *t_k.first()?);
        let (begin, end) = segments[i].range_k();
        t_k.iter().all(|&t| begin <= t && t < end).then(|| (&segments[i], integral[i]))
    }

    /// Temperatures in kelvin between which the curve is smooth, ascending; empty for a constant.
    pub(super) fn knots_k(&self) -> Vec<f64> {
        match &self.form {
            Form::Constant(_) => Vec::new(),
            Form::Table { t_k, .. } => t_k.clone(),
            Form::Segments { segments, .. } => {
                let first = segments[0].range_k().0;
                std::iter::once(first).chain(segments.iter().map(|s| s.range_k().1)).collect()
            }
        }
    }

    /// Whether the value is greater than zero everywhere.
    ///
    /// # Errors
    /// A temperature where it is not, with its value in `unit`.
    pub fn check_positive(&self, unit: &'static str) -> Result<(), MaterialError> {
        match &self.form {
            Form::Constant(value) if *value > 0.0 => Ok(()),
            Form::Constant(value) => Err(MaterialFault::NotPositive { value: *value, unit, at_c: None }.into()),
            Form::Table { t_k, value, .. } => match value.iter().position(|&v| v <= 0.0) {
                None => Ok(()),
                Some(i) => {
                    let at_c = Some(celsius(t_k[i]));
                    Err(MaterialFault::NotPositive { value: value[i], unit, at_c }.into())
                }
            },
            Form::Segments { segments, .. } => segments.iter().try_for_each(|s| s.check_positive(unit)),
        }
    }

    /// The temperature brought into the range of the data.
    fn held(&self, t_k: f64) -> f64 {
        t_k.clamp(self.range_k.0, self.range_k.1)
    }
}

/// Last index `i` with `begins[i] <= t`, at least 0.
fn row(begins: &[f64], t: f64) -> usize {
    begins.partition_point(|&begin| begin <= t).saturating_sub(1)
}

/// Value at `t` of the straight line from row `i` to the next; of row `i` itself if it is the last.
fn between_rows(t_k: &[f64], value: &[f64], i: usize, t: f64) -> f64 {
    let Some(&next) = t_k.get(i + 1) else {
        return value[i];
    };
    let s = (t - t_k[i]) / (next - t_k[i]);
    value[i] * (1.0 - s) + value[i + 1] * s
}

fn finite(value: f64) -> Result<(), MaterialError> {
    if value.is_finite() { Ok(()) } else { Err(MaterialFault::NotFinite { value }.into()) }
}
