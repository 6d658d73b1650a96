//! A symmetric sparse matrix: a shared pattern and its values.
//! Convention: one value per stored entry of the lower triangle; the upper triangle is its mirror, never conjugated.

use std::sync::Arc;

use sprs::{CsMat, SpIndex, TriMatI};

use super::error::{Datum, LinalgError};
use super::pattern::Pattern;
use super::scalar::Scalar;

/// Largest relative difference of two mirrored entries that still counts as rounding.
const SYMMETRY_LIMIT: f64 = 1e-12;

/// Symmetric matrix of order `pattern.n()`, in the unit of the equations it holds.
#[derive(Debug, Clone)]
pub struct SymmetricMatrix<T> {
    /// Where entries are stored.
    pub pattern: Arc<Pattern>,
    /// Values in the order of the pattern's slots, `pattern.nnz()` of them.
    pub values: Vec<T>,
}

/// Residual of a candidate solution, row by row.
#[derive(Debug, Clone)]
pub struct Residual<T> {
    /// `r = b - A x`.
    pub r: Vec<T>,
    /// `|A||x| + |b|`, sizes taken as `|Re| + |Im|`.
    pub scale: Vec<f64>,
}

impl<T: Scalar> Residual<T> {
    /// Componentwise backward error `max |r| / (|A||x| + |b|)`: 0 if exact, NaN if any part is not a number.
    ///
    /// Source: W. Oettli and W. Prager, Numer. Math. 6 (1964) 405-409; sizes as in LAPACK's `xGERFS`.
    pub fn backward_error(&self) -> f64 {
        let mut worst = 0.0_f64;
        for (r, &scale) in self.r.iter().zip(&self.scale) {
            let size = r.size();
            if size == 0.0 {
                continue;
            }
            let error = size / scale;
            if error.is_nan() {
                return f64::NAN;
            }
            worst = worst.max(error);
        }
        worst
    }
}

impl<T: Scalar> SymmetricMatrix<T> {
    /// Matrix of zeros on a pattern.
    pub fn zeros(pattern: Arc<Pattern>) -> Self {
        let values = vec![T::ZERO; pattern.nnz()];
        Self { pattern, values }
    }

    /// Matrix from triplets that hold both triangles; repeated entries are summed.
    ///
    /// # Errors
    /// [`LinalgError::Size`] if it is not square, [`LinalgError::NotSymmetric`] if it differs from its transpose.
    pub fn from_triplets<I: SpIndex>(triplets: &TriMatI<T, I>) -> Result<Self, LinalgError> {
        let n = triplets.rows();
        if triplets.cols() != n {
            return Err(LinalgError::Size { what: Datum::MatrixValues, expected: n, found: triplets.cols() });
        }
        let pairs: Vec<[u32; 2]> =
            (triplets.triplet_iter()).map(|(_, (row, col))| [row.index() as u32, col.index() as u32]).collect();
        let pattern = Pattern::from_cliques(n, pairs.iter().map(|pair| &pair[..]));
        let mut lower = vec![T::ZERO; pattern.nnz()];
        let mut upper = vec![T::ZERO; pattern.nnz()];
        for ((value, _), &[row, col]) in triplets.triplet_iter().zip(&pairs) {
            let missing = LinalgError::NotInPattern { row: row as usize, col: col as usize };
            let slot = pattern.slot(row, col).ok_or(missing)?;
            if row >= col {
                lower[slot] += *value;
            }
            if row <= col {
                upper[slot] += *value;
            }
        }
        check_symmetry(&pattern, &lower, &upper)?;
        Ok(Self { pattern: Arc::new(pattern), values: lower })
    }

    /// Both triangles in compressed columns, for the seams to other libraries.
    pub fn to_sprs(&self) -> CsMat<T> {
        let n = self.pattern.n();
        let mut starts = vec![0_usize; n + 1];
        for (col, row, _) in self.entries() {
            starts[col + 1] += 1;
            if row != col {
                starts[row + 1] += 1;
            }
        }
        for col in 0..n {
            starts[col + 1] += starts[col];
        }
        let mut next = starts.clone();
        let mut rows = vec![0_usize; starts[n]];
        let mut values = vec![T::ZERO; starts[n]];
        let mut put = |col: usize, row: usize, value: T| {
            rows[next[col]] = row;
            values[next[col]] = value;
            next[col] += 1;
        };
        // Columns are visited in rising order, so the mirrored rows of every column arrive sorted and come first.
        for (col, row, value) in self.entries() {
            put(col, row, value);
            if row != col {
                put(row, col, value);
            }
        }
        CsMat::new_csc((n, n), starts, rows, values)
    }

    /// Adds `A x` to `y`.
    ///
    /// # Errors
    /// [`LinalgError::Size`] if a length differs from the number of unknowns.
    pub fn mul_add(&self, x: &[T], y: &mut [T]) -> Result<(), LinalgError> {
        check_length(Datum::MatrixValues, self.pattern.nnz(), self.values.len())?;
        check_length(Datum::Solution, self.pattern.n(), x.len())?;
        check_length(Datum::RightHandSide, self.pattern.n(), y.len())?;
        let mut start = 0;
        for col in 0..self.pattern.n() {
            let rows = self.pattern.column(col);
            let values = &self.values[start..start + rows.len()];
            start += rows.len();
            let mut sum = values[0] * x[col];
            for (&row, &value) in rows[1..].iter().zip(&values[1..]) {
                sum += value * x[row as usize];
                y[row as usize] += value * x[col];
            }
            y[col] += sum;
        }
        Ok(())
    }

    /// Residual `b - A x` with the row sizes `|A||x| + |b|` it is judged against.
    ///
    /// # Errors
    /// [`LinalgError::Size`] if a length differs from the number of unknowns.
    pub fn residual(&self, x: &[T], b: &[T]) -> Result<Residual<T>, LinalgError> {
        check_length(Datum::MatrixValues, self.pattern.nnz(), self.values.len())?;
        check_length(Datum::Solution, self.pattern.n(), x.len())?;
        check_length(Datum::RightHandSide, self.pattern.n(), b.len())?;
        let mut r = b.to_vec();
        let mut scale: Vec<f64> = b.iter().map(|v| v.size()).collect();
        let mut start = 0;
        for col in 0..self.pattern.n() {
            let rows = self.pattern.column(col);
            let values = &self.values[start..start + rows.len()];
            start += rows.len();
            let (xc, xc_size) = (x[col], x[col].size());
            let (mut sum, mut sum_size) = (values[0] * xc, values[0].size() * xc_size);
            for (&row, &value) in rows[1..].iter().zip(&values[1..]) {
                let (row, size) = (row as usize, value.size());
                sum += value * x[row];
                sum_size += size * x[row].size();
                r[row] -= value * xc;
                scale[row] += size * xc_size;
            }
            r[col] -= sum;
            scale[col] += sum_size;
        }
        Ok(Residual { r, scale })
    }

    /// Stored entries as (column, row, value), columns and rows rising.
    fn entries(&self) -> impl Iterator<Item = (usize, usize, T)> + '_ {
        (0..self.pattern.n()).flat_map(move |col| {
            let slots = self.pattern.starts()[col]..self.pattern.starts()[col + 1];
            slots.map(move |slot| (col, self.pattern.rows()[slot] as usize, self.values[slot]))
        })
    }
}

/// Refuses an array of the wrong length.
pub(super) fn check_length(what: Datum, expected: usize, found: usize) -> Result<(), LinalgError> {
    if expected == found { Ok(()) } else { Err(LinalgError::Size { what, expected, found }) }
}

fn check_symmetry<T: Scalar>(pattern: &Pattern, lower: &[T], upper: &[T]) -> Result<(), LinalgError> {
    for col in 0..pattern.n() {
        for slot in pattern.starts()[col]..pattern.starts()[col + 1] {
            let larger = lower[slot].size().max(upper[slot].size());
            let difference = (lower[slot] - upper[slot]).size();
            if difference > SYMMETRY_LIMIT * larger {
                let row = pattern.rows()[slot] as usize;
                return Err(LinalgError::NotSymmetric { row, col, difference: difference / larger });
            }
        }
    }
    Ok(())
}
