//! Products of panel columns in vector registers, for fronts that fit a processor's own cache.
//!
//! A tile is a few vectors of rows by a few columns; its sums `sum_k L[i, k] (L D)[j, k]` stay in registers over all
//! `k`. Where rows or columns do not fill a last tile, it is moved back over rows already done: their sums come out the
//! same to the last bit, since every sum runs over `k` in the same order.
//! Convention: storage by columns, both factors with the height of the panel as their stride.

use pulp::{Simd, WithSimd};

use super::scalar::Scalar;

/// Columns of a tile of the border.
pub(super) const COLUMNS: usize = 4;
/// Vectors of rows of a tile.
const VECTORS: usize = 3;
/// Most lanes of a vector register.
pub(super) const MOST_LANES: usize = 16;

/// Numbers in a vector register of the unit `S`.
#[inline(always)]
pub(super) fn lanes<T: Scalar, S: Simd>() -> usize {
    size_of::<T::Vector<S>>() / size_of::<T>()
}

/// `sum_k a[i, k] b[j, k]` for `V` vectors of rows and `W` columns, the first of them at the start of `a` and `b`.
#[inline(always)]
fn sums<T: Scalar, S: Simd, const V: usize, const W: usize>(
    simd: S,
    a: &[T],
    b: &[T],
    stride: usize,
    depth: usize,
) -> [[T::Vector<S>; V]; W] {
    let rows = V * lanes::<T, S>();
    let zero = T::splat(simd, T::ZERO);
    let mut sums = [[zero; V]; W];
    for (a, b) in a.chunks(stride).zip(b.chunks(stride)).take(depth) {
        let (vectors, b) = (T::vectors::<S>(&a[..rows]).0, &b[..W]);
        let mut a = [zero; V];
        a.copy_from_slice(&vectors[..V]);
        for column in 0..W {
            let b = T::splat(simd, b[column]);
            for vector in 0..V {
                sums[column][vector] = T::times_plus(simd, b, a[vector], sums[column][vector]);
            }
        }
    }
    sums
}

/// Columns from `first` on of `C = -A B^T`, of which the lower triangle is wanted: entries of the upper one are right,
/// or left alone.
pub(super) struct NegativeProduct<'a, T> {
    /// The columns, `order` rows each.
    pub(super) target: &'a mut [T],
    /// Rows `0..order` of `depth` columns.
    pub(super) a: &'a [T],
    /// As `a`.
    pub(super) b: &'a [T],
    /// Distance of columns in `a` and `b`.
    pub(super) stride: usize,
    pub(super) order: usize,
    pub(super) depth: usize,
    pub(super) first: usize,
}

impl<T: Scalar> WithSimd for NegativeProduct<'_, T> {
    type Output = ();

    #[inline(always)]
    fn with_simd<S: Simd>(mut self, simd: S) {
        let lanes = lanes::<T, S>();
        let columns = self.target.len() / self.order;
        if self.order < lanes || columns < COLUMNS {
            self.one_by_one(columns);
            return;
        }
        let mut column = 0;
        while column < columns {
            column = column.min(columns - COLUMNS);
            let mut row = self.first + column;
            while row < self.order {
                let vectors = (self.order - row).div_ceil(lanes).min(self.order / lanes).min(VECTORS);
                row = row.min(self.order - vectors * lanes);
                match vectors {
                    1 => self.tile::<S, 1>(simd, row, column),
                    2 => self.tile::<S, 2>(simd, row, column),
                    _ => self.tile::<S, VECTORS>(simd, row, column),
                }
                row += vectors * lanes;
            }
            column += COLUMNS;
        }
    }
}

impl<T: Scalar> NegativeProduct<'_, T> {
    #[inline(always)]
    fn tile<S: Simd, const V: usize>(&mut self, simd: S, row: usize, column: usize) {
        let (a, b) = (&self.a[row..], &self.b[self.first + column..]);
        let sums = sums::<T, S, V, COLUMNS>(simd, a, b, self.stride, self.depth);
        let rows = row..row + V * lanes::<T, S>();
        let zero = T::splat(simd, T::ZERO);
        for (w, sums) in sums.iter().enumerate() {
            let target = &mut self.target[(column + w) * self.order..][rows.clone()];
            let target = &mut T::vectors_mut::<S>(target).0[..V];
            for v in 0..V {
                target[v] = T::minus(simd, zero, sums[v]);
            }
        }
    }

    fn one_by_one(&mut self, columns: usize) {
        for column in 0..columns {
            for row in self.first + column..self.order {
                let of = |k: usize| self.a[k * self.stride + row] * self.b[k * self.stride + self.first + column];
                self.target[column * self.order + row] = -(0..self.depth).map(of).sum::<T>();
            }
        }
    }
}

/// `C -= A B^T` for `W` columns and all rows of a panel from some row on.
pub(super) struct LeftUpdate<'a, T, const W: usize> {
    /// `W` columns of the panel from row `row` on.
    pub(super) target: [&'a mut [T]; W],
    /// The rows of `target` of `depth` earlier columns.
    pub(super) a: &'a [T],
    /// Rows of the target columns' own unknowns in the scaled earlier columns.
    pub(super) b: &'a [T],
    /// Distance of columns in `a` and `b`.
    pub(super) stride: usize,
    pub(super) depth: usize,
}

impl<T: Scalar, const W: usize> WithSimd for LeftUpdate<'_, T, W> {
    type Output = ();

    #[inline(always)]
    fn with_simd<S: Simd>(mut self, simd: S) {
        let (rows, lanes) = (self.target[0].len(), lanes::<T, S>());
        let mut row = 0;
        while row + 2 * lanes <= rows {
            self.tile::<S, 2>(simd, row);
            row += 2 * lanes;
        }
        if row + lanes <= rows {
            self.tile::<S, 1>(simd, row);
            row += lanes;
        }
        if row < rows {
            self.rest(simd, row);
        }
    }
}

impl<T: Scalar, const W: usize> LeftUpdate<'_, T, W> {
    #[inline(always)]
    fn tile<S: Simd, const V: usize>(&mut self, simd: S, row: usize) {
        let sums = sums::<T, S, V, W>(simd, &self.a[row..], self.b, self.stride, self.depth);
        let rows = row..row + V * lanes::<T, S>();
        for (target, sums) in self.target.iter_mut().zip(&sums) {
            let target = &mut T::vectors_mut::<S>(&mut target[rows.clone()]).0[..V];
            for v in 0..V {
                target[v] = T::minus(simd, target[v], sums[v]);
            }
        }
    }

    /// Rows from `row` on, fewer than a vector holds: those of a whole vector that ends with them, if there is one.
    #[inline(always)]
    fn rest<S: Simd>(&mut self, simd: S, row: usize) {
        let (rows, lanes) = (self.target[0].len(), lanes::<T, S>());
        if rows < lanes {
            for (column, target) in self.target.iter_mut().enumerate() {
                for (row, target) in target.iter_mut().enumerate() {
                    let terms =
                        (0..self.depth).map(|k| self.a[k * self.stride + row] * self.b[k * self.stride + column]);
                    *target -= terms.sum::<T>();
                }
            }
            return;
        }
        let sums = sums::<T, S, 1, W>(simd, &self.a[rows - lanes..], self.b, self.stride, self.depth);
        for (target, [sum]) in self.target.iter_mut().zip(sums) {
            let mut all = [T::ZERO; MOST_LANES];
            T::vectors_mut::<S>(&mut all[..lanes]).0[0] = sum;
            for (target, &sum) in target[row..].iter_mut().zip(&all[lanes - (rows - row)..]) {
                *target -= sum;
            }
        }
    }
}
