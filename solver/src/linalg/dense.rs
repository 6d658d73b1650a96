//! Dense kernels of a front: elimination of its pivot columns and the update they leave on its border.
//!
//! A panel of `height` rows holds the pivot columns. After elimination it holds, below the diagonal, the unit lower
//! factor `L`, and on the diagonal the reciprocals of the pivots `D`. A second panel receives `L D`, so that every
//! update is one matrix product `C -= L (L D)^T`, done by faer. Products are split by their size alone.
//! Convention: storage by columns; entries above the diagonal are never read.
//! Source: G. H. Golub and C. F. Van Loan, Matrix Computations (4th ed.), section 4.1 (`L D L^T`).

use faer::linalg::matmul::matmul;
use faer::{Accum, MatMut, MatRef, Par};

use super::narrow::{NARROW, eliminate_narrow};
use super::scalar::Scalar;

/// Order below which a symmetric update is one full product.
const SMALL_UPDATE: usize = 48;
/// Multiplications from which a product is split in two tasks.
const PARALLEL: usize = 1 << 19;
/// A pivot that cannot be divided by.
pub(super) struct BadPivot {
    /// Column of the panel.
    pub(super) column: usize,
    /// `|pivot|` over the size of its row; not a number if the pivot is not.
    pub(super) ratio: f64,
}

/// A panel and its scaled copy.
pub(super) struct Panel<'a, T> {
    /// `height` rows by as many columns as there are pivots.
    pub(super) values: &'a mut [T],
    /// Same shape; receives `L D` on and below the diagonal.
    pub(super) scaled: &'a mut [T],
    /// Rows.
    pub(super) height: usize,
    /// Size of the matrix row of each pivot, the unit its pivot is judged in.
    pub(super) references: &'a [f64],
    /// Smallest `|pivot|` accepted, in that unit.
    pub(super) limit: f64,
}

impl<T: Scalar> Panel<'_, T> {
    /// Eliminates all pivot columns.
    pub(super) fn eliminate(&mut self) -> Result<(), BadPivot> {
        self.eliminate_columns(0, self.references.len())
    }

    fn eliminate_columns(&mut self, start: usize, end: usize) -> Result<(), BadPivot> {
        let width = end - start;
        if width <= NARROW {
            return eliminate_narrow(self, start, end);
        }
        let middle = start + (width / 2).next_multiple_of(NARROW);
        self.eliminate_columns(start, middle)?;
        self.update_columns(start, middle, end);
        self.eliminate_columns(middle, end)
    }

    /// Subtracts from columns `middle..end` what columns `start..middle` contribute.
    fn update_columns(&mut self, start: usize, middle: usize, end: usize) {
        let (height, rows) = (self.height, self.height - middle);
        let (done, open) = self.values.split_at_mut(middle * height);
        let corner = start * height + middle;
        let lower = MatRef::from_column_major_slice_with_stride(&done[corner..], rows, middle - start, height);
        let scaled =
            MatRef::from_column_major_slice_with_stride(&self.scaled[corner..], end - middle, middle - start, height);
        let target = MatMut::from_column_major_slice_with_stride_mut(&mut open[middle..], rows, end - middle, height);
        subtract_product(target, lower, scaled);
    }

    /// Subtracts from the symmetric `border` block (lower triangle) what the pivots contribute to it.
    pub(super) fn update_border(&self, border: &mut [T]) {
        let (height, pivots) = (self.height, self.references.len());
        let order = height - pivots;
        if order == 0 || pivots == 0 {
            return;
        }
        let lower = MatRef::from_column_major_slice_with_stride(&self.values[pivots..], order, pivots, height);
        let scaled = MatRef::from_column_major_slice_with_stride(&self.scaled[pivots..], order, pivots, height);
        let target = MatMut::from_column_major_slice_mut(border, order, order);
        subtract_symmetric(target, lower, scaled);
    }
}

/// `C -= A B^T`, all entries.
fn subtract_product<T: Scalar>(target: MatMut<'_, T>, a: MatRef<'_, T>, b: MatRef<'_, T>) {
    let (rows, cols, depth) = (a.nrows(), b.nrows(), a.ncols());
    if rows * cols * depth < PARALLEL {
        matmul(target, Accum::Add, a, b.transpose(), -T::ONE, Par::Seq);
    } else if rows >= cols {
        let half = (rows / 2).next_multiple_of(8);
        let (top, bottom) = target.split_at_row_mut(half);
        let (a_top, a_bottom) = a.split_at_row(half);
        rayon::join(|| subtract_product(top, a_top, b), || subtract_product(bottom, a_bottom, b));
    } else {
        let half = (cols / 2).next_multiple_of(8);
        let (left, right) = target.split_at_col_mut(half);
        let (b_left, b_right) = b.split_at_row(half);
        rayon::join(|| subtract_product(left, a, b_left), || subtract_product(right, a, b_right));
    }
}

/// `C -= A B^T` where the result is symmetric and only its lower triangle is wanted.
fn subtract_symmetric<T: Scalar>(target: MatMut<'_, T>, a: MatRef<'_, T>, b: MatRef<'_, T>) {
    let (order, depth) = (a.nrows(), a.ncols());
    if order <= SMALL_UPDATE {
        matmul(target, Accum::Add, a, b.transpose(), -T::ONE, Par::Seq);
        return;
    }
    let half = (order / 2).next_multiple_of(8);
    let (top, _, bottom, last) = target.split_at_mut(half, half);
    let (a_top, a_last) = a.split_at_row(half);
    let (b_top, b_last) = b.split_at_row(half);
    let corners = || {
        subtract_symmetric(top, a_top, b_top);
        subtract_symmetric(last, a_last, b_last);
    };
    let rectangle = || subtract_product(bottom, a_last, b_top);
    if order * order * depth < 2 * PARALLEL {
        corners();
        rectangle();
    } else {
        rayon::join(corners, rectangle);
    }
}
