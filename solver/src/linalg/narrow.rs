//! Elimination of a few neighbouring columns of a panel, in vector registers.
//!
//! The square block on the diagonal is eliminated first, number by number. Then a few rows at a time pass through
//! registers: all their entries in these columns are loaded once, made final in turn, and stored once.
//! Convention and storage as in `dense`.

use pulp::{Arch, Simd, WithSimd};

use super::dense::{BadPivot, Panel};
use super::scalar::Scalar;
use super::tile::{LeftUpdate, MOST_LANES, lanes};

/// Most columns taken together.
pub(super) const NARROW: usize = 8;

/// Columns taken together where `left` are to be eliminated: a power of two.
pub(super) fn narrow_width(left: usize) -> usize {
    (1 << left.ilog2()).min(NARROW)
}

/// Eliminates columns `start..end`, at most [`NARROW`] of them, of which all earlier updates are done.
pub(super) fn eliminate_narrow<T: Scalar>(panel: &mut Panel<'_, T>, start: usize, end: usize) -> Result<(), BadPivot> {
    match end - start {
        1 => eliminate::<T, 1>(panel, start),
        2 => eliminate::<T, 2>(panel, start),
        4 => eliminate::<T, 4>(panel, start),
        _ => eliminate::<T, NARROW>(panel, start),
    }
}

/// Subtracts from columns `start..end`, at most [`NARROW`] of them, what columns `from..start` contribute.
pub(super) fn update_narrow<T: Scalar>(panel: &mut Panel<'_, T>, from: usize, start: usize, end: usize) {
    if from == start {
        return;
    }
    match end - start {
        1 => update::<T, 1>(panel, from, start),
        2 => update::<T, 2>(panel, from, start),
        4 => update::<T, 4>(panel, from, start),
        _ => update::<T, NARROW>(panel, from, start),
    }
}

fn update<T: Scalar, const W: usize>(panel: &mut Panel<'_, T>, from: usize, start: usize) {
    let height = panel.height;
    let (done, open) = panel.values.split_at_mut(start * height);
    let corner = from * height + start;
    Arch::new().dispatch(LeftUpdate::<T, W> {
        target: rows_below(&mut open[..W * height], height, start),
        a: &done[corner..],
        b: &panel.scaled[corner..],
        stride: height,
        depth: start - from,
    });
}

fn eliminate<T: Scalar, const W: usize>(panel: &mut Panel<'_, T>, start: usize) -> Result<(), BadPivot> {
    let block = eliminate_diagonal::<T, W>(panel, start)?;
    let (height, end) = (panel.height, start + W);
    if height > end {
        let below = Below {
            values: rows_below(&mut panel.values[start * height..end * height], height, end),
            scaled: rows_below(&mut panel.scaled[start * height..end * height], height, end),
            block,
        };
        Arch::new().dispatch(below);
    }
    Ok(())
}

/// The rows from `row` on of `W` columns.
fn rows_below<T, const W: usize>(columns: &mut [T], height: usize, row: usize) -> [&mut [T]; W] {
    let mut rest = columns;
    std::array::from_fn(|_| {
        let (column, after) = std::mem::take(&mut rest).split_at_mut(height);
        rest = after;
        &mut column[row..]
    })
}

/// The eliminated block on the diagonal, as the rows below need it.
struct Block<T, const W: usize> {
    /// `-L`, indexed by column, then row.
    negative_lower: [[T; W]; W],
    /// Reciprocal pivots.
    reciprocals: [T; W],
}

/// Eliminates the square block on the diagonal and writes it back.
fn eliminate_diagonal<T: Scalar, const W: usize>(
    panel: &mut Panel<'_, T>,
    start: usize,
) -> Result<Block<T, W>, BadPivot> {
    let at = |row: usize, column: usize| (start + column) * panel.height + start + row;
    let mut a: [[T; W]; W] = std::array::from_fn(|column| {
        std::array::from_fn(|row| if row < column { T::ZERO } else { panel.values[at(row, column)] })
    });
    let mut block = Block { negative_lower: [[T::ZERO; W]; W], reciprocals: [T::ZERO; W] };
    for column in 0..W {
        let pivot = a[column][column];
        check_pivot(pivot, panel.references[start + column], panel.limit)
            .map_err(|ratio| BadPivot { column: start + column, ratio })?;
        let reciprocal = pivot.reciprocal();
        block.reciprocals[column] = reciprocal;
        panel.values[at(column, column)] = reciprocal;
        let (done, open) = a.split_at_mut(column + 1);
        for (row, &entry) in done[column].iter().enumerate().skip(column + 1) {
            let lower = entry * reciprocal;
            panel.values[at(row, column)] = lower;
            panel.scaled[at(row, column)] = entry;
            block.negative_lower[column][row] = -lower;
            for (target, &entry) in open[row - column - 1][row..].iter_mut().zip(&done[column][row..]) {
                *target += block.negative_lower[column][row] * entry;
            }
        }
    }
    Ok(block)
}

/// Refuses a pivot with its ratio to its row: NaN if it is not a number, else a ratio below the limit.
fn check_pivot<T: Scalar>(pivot: T, reference: f64, limit: f64) -> Result<(), f64> {
    let ratio = pivot.size() / reference;
    if !pivot.finite() {
        Err(f64::NAN)
    } else if ratio.is_nan() || ratio < limit {
        // 0/0 is refused as well, and reported as zero.
        Err(ratio.max(0.0))
    } else {
        Ok(())
    }
}

/// Makes `W` vectors of entries final: `x` becomes a row of `L D`.
#[inline(always)]
fn finish<T: Scalar, S: Simd, const W: usize>(simd: S, lower: &[[T::Vector<S>; W]; W], x: &mut [T::Vector<S>; W]) {
    for column in 0..W {
        for target in column + 1..W {
            x[target] = T::times_plus(simd, lower[column][target], x[column], x[target]);
        }
    }
}

/// The rows below the block, compiled for the vector unit found at run time.
struct Below<'a, T, const W: usize> {
    values: [&'a mut [T]; W],
    scaled: [&'a mut [T]; W],
    block: Block<T, W>,
}

impl<T: Scalar, const W: usize> WithSimd for Below<'_, T, W> {
    type Output = ();

    #[inline(always)]
    fn with_simd<S: Simd>(self, simd: S) {
        let Block { negative_lower, reciprocals } = self.block;
        let rows = self.values[0].len();
        let values = self.values.map(|column| T::vectors_mut::<S>(column));
        let scaled = self.scaled.map(|column| T::vectors_mut::<S>(column));
        let zero = T::splat(simd, T::ZERO);
        let (mut lower, mut inverse) = ([[zero; W]; W], [zero; W]);
        for column in 0..W {
            inverse[column] = T::splat(simd, reciprocals[column]);
            for target in column + 1..W {
                lower[column][target] = T::splat(simd, negative_lower[column][target]);
            }
        }
        for group in 0..values[0].0.len() {
            let mut x = [zero; W];
            for column in 0..W {
                x[column] = values[column].0[group];
            }
            finish::<T, S, W>(simd, &lower, &mut x);
            for column in 0..W {
                scaled[column].0[group] = x[column];
                values[column].0[group] = T::times(simd, inverse[column], x[column]);
            }
        }
        let rest = rows % lanes::<T, S>();
        if rest == 0 {
            return;
        }
        // The last rows pass in vectors of which only the first lanes count.
        let mut x = [zero; W];
        let mut all = [T::ZERO; MOST_LANES];
        for column in 0..W {
            all[..rest].copy_from_slice(values[column].1);
            x[column] = T::vectors::<S>(&all[..lanes::<T, S>()]).0[0];
        }
        finish::<T, S, W>(simd, &lower, &mut x);
        for column in 0..W {
            T::vectors_mut::<S>(&mut all[..lanes::<T, S>()]).0[0] = x[column];
            scaled[column].1.copy_from_slice(&all[..rest]);
            T::vectors_mut::<S>(&mut all[..lanes::<T, S>()]).0[0] = T::times(simd, inverse[column], x[column]);
            values[column].1.copy_from_slice(&all[..rest]);
        }
    }
}
