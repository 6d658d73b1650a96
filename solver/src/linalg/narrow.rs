//! Elimination of a few neighbouring columns of a panel, in vector registers.
//!
//! The square block on the diagonal is eliminated first, number by number. Then a few rows at a time pass through
//! registers: all their entries in these columns are loaded once, made final in turn, and stored once.
//! Convention and storage as in `dense`.

use faer::traits::pulp::{Arch, Simd, WithSimd};

use super::dense::{BadPivot, Panel};
use super::scalar::Scalar;

/// Most columns taken together.
pub(super) const NARROW: usize = 8;

/// Eliminates columns `start..end`, at most [`NARROW`] of them, of which all earlier updates are done.
pub(super) fn eliminate_narrow<T: Scalar>(panel: &mut Panel<'_, T>, start: usize, end: usize) -> Result<(), BadPivot> {
    match end - start {
        0 => Ok(()),
        1 => eliminate::<T, 1>(panel, start),
        2 => eliminate::<T, 2>(panel, start),
        3 => eliminate::<T, 3>(panel, start),
        4 => eliminate::<T, 4>(panel, start),
        5 => eliminate::<T, 5>(panel, start),
        6 => eliminate::<T, 6>(panel, start),
        7 => eliminate::<T, 7>(panel, start),
        _ => eliminate::<T, NARROW>(panel, start),
    }
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
            for column in 0..W {
                let done = x[column];
                scaled[column].0[group] = done;
                values[column].0[group] = T::times(simd, inverse[column], done);
                for target in column + 1..W {
                    x[target] = T::times_plus(simd, lower[column][target], done, x[target]);
                }
            }
        }
        for row in 0..values[0].1.len() {
            for column in 0..W {
                let done = values[column].1[row];
                scaled[column].1[row] = done;
                values[column].1[row] = done * reciprocals[column];
                for target in column + 1..W {
                    values[target].1[row] += negative_lower[column][target] * done;
                }
            }
        }
    }
}
