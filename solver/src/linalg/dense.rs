//! Dense kernels of a front: elimination of its pivot columns and the update they leave on its border.
//!
//! A panel of `height` rows holds the pivot columns. After elimination it holds, below the diagonal, the unit lower
//! factor `L`, and on the diagonal the reciprocals of the pivots `D`. A second panel receives `L D`, so that every
//! update is a matrix product `C -= L (L D)^T`: in vector registers within a panel of up to [`WIDE`] columns and for the
//! border (modules `narrow` and `tile`), by faer between the halves of wider panels. Products are split by their size
//! alone.
//! Convention: storage by columns; entries above the diagonal are never read.
//! Source: G. H. Golub and C. F. Van Loan, Matrix Computations (4th ed.), section 4.1 (`L D L^T`).

use faer::linalg::matmul::matmul;
use faer::{Accum, MatMut, MatRef, Par};
use pulp::Arch;

use super::narrow::{NARROW, eliminate_narrow, narrow_width, update_narrow};
use super::scalar::Scalar;
use super::tile::{COLUMNS, NegativeProduct};

/// Multiplications from which a product is split in two tasks.
const PARALLEL: usize = 1 << 19;
/// Most columns eliminated one narrow block after the other.
const WIDE: usize = 128;

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
        if width <= WIDE {
            let mut block = start;
            while block < end {
                let block_end = block + narrow_width(end - block);
                update_narrow(self, start, block, block_end);
                eliminate_narrow(self, block, block_end)?;
                block = block_end;
            }
            return Ok(());
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

    /// Sets the symmetric `border` block (lower triangle) to what the pivots contribute to it.
    pub(super) fn set_border(&self, border: &mut [T]) {
        let (height, pivots) = (self.height, self.references.len());
        let order = height - pivots;
        if order == 0 {
            return;
        }
        let (a, b) = (&self.values[pivots..], &self.scaled[pivots..]);
        set_columns(NegativeProduct { target: border, a, b, stride: height, order, depth: pivots, first: 0 });
    }
}

/// Sets the columns of a border, in two tasks of like size if they are many.
fn set_columns<T: Scalar>(product: NegativeProduct<'_, T>) {
    let NegativeProduct { target, a, b, stride, order, depth, first } = product;
    let columns = target.len() / order;
    // Columns grow shorter to the right, so half of the work is in less than half of them.
    let (height, last_height) = (order - first, order - first - columns);
    let half = height - ((height * height + last_height * last_height) as f64 / 2.0).sqrt() as usize;
    let work = columns * (height + last_height) / 2 * depth;
    let half = half.next_multiple_of(COLUMNS);
    if work < 2 * PARALLEL || half >= columns {
        Arch::new().dispatch(NegativeProduct { target, a, b, stride, order, depth, first });
        return;
    }
    let (left, right) = target.split_at_mut(half * order);
    let left = NegativeProduct { target: left, a, b, stride, order, depth, first };
    let right = NegativeProduct { target: right, a, b, stride, order, depth, first: first + half };
    rayon::join(|| set_columns(left), || set_columns(right));
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
        let first = || subtract_product(top, a_top, b);
        rayon::join(first, || subtract_product(bottom, a_bottom, b));
    } else {
        let half = (cols / 2).next_multiple_of(8);
        let (left, right) = target.split_at_col_mut(half);
        let (b_left, b_right) = b.split_at_row(half);
        let first = || subtract_product(left, a, b_left);
        rayon::join(first, || subtract_product(right, a, b_right));
    }
}
