//! The two sweeps of a solution over successive fronts, in vector registers.
//!
//! Values wait on a stack between a front and its children: forward, what children leave on their borders; backward,
//! the solution on the borders of children.
//! Convention: the values of one unknown for a group of right-hand sides lie together, in `x` and on the stack; within
//! a front each right-hand side is a column.

use std::ops::Range;

use pulp::{Simd, WithSimd};

use super::plan::{Front, Plan};
use super::scalar::Scalar;
use super::vector::{add_multiple, dot};

/// What all fronts of one solution share.
#[derive(Clone, Copy)]
pub(super) struct Sweep<'a, T> {
    pub(super) plan: &'a Plan,
    pub(super) values: &'a [T],
    pub(super) width: usize,
}

impl<'a, T: Scalar> Sweep<'a, T> {
    /// A front by its number.
    #[inline(always)]
    pub(super) fn front(&self, k: u32) -> &'a Front {
        &self.plan.fronts[k as usize]
    }

    /// Columns of a front's panel.
    #[inline(always)]
    fn columns(&self, front: &Front) -> std::slice::ChunksExact<'a, T> {
        self.values[front.panel.clone()].chunks_exact(front.height())
    }

    /// Rows of a child's border in its parent's front.
    #[inline(always)]
    fn relative(&self, child: u32) -> &'a [u32] {
        &self.plan.relative[self.front(child).rows.clone()]
    }
}

/// Forward sweep over fronts in postorder, compiled for the vector unit found at run time.
///
/// `x` are the pivot values of these fronts; the top of `stack` is what their children left on their borders.
pub(super) struct Forward<'a, 'x, T> {
    pub(super) sweep: Sweep<'a, T>,
    pub(super) fronts: &'a [Front],
    pub(super) x: &'x mut [T],
    pub(super) stack: Vec<T>,
}

impl<T: Scalar> WithSimd for Forward<'_, '_, T> {
    type Output = Vec<T>;

    #[inline(always)]
    fn with_simd<S: Simd>(self, simd: S) -> Vec<T> {
        let Self { sweep, fronts, x, mut stack } = self;
        let width = sweep.width;
        let mut local: Vec<T> = Vec::new();
        let mut rest = x;
        for front in fronts {
            let height = front.height();
            let (pivots, after) = rest.split_at_mut(front.pivots * width);
            rest = after;
            local.clear();
            local.resize(height * width, T::ZERO);
            gather(&mut local, height, width, 0..front.pivots, pivots);
            let children = sweep.plan.children(front);
            let rows: usize = children.iter().map(|&child| sweep.front(child).border).sum();
            let base = stack.len() - rows * width;
            let mut start = base;
            for &child in children {
                let places = sweep.relative(child);
                let end = start + places.len() * width;
                gather_sum(&mut local, height, width, places, &stack[start..end]);
                start = end;
            }
            stack.truncate(base);
            for (k, column) in sweep.columns(front).enumerate() {
                for side in local.chunks_exact_mut(height) {
                    let (done, open) = side.split_at_mut(k + 1);
                    add_multiple(simd, open, -done[k], &column[k + 1..]);
                }
            }
            scatter(&local, height, width, 0..front.pivots, pivots);
            stack.resize(base + front.border * width, T::ZERO);
            scatter(&local, height, width, front.pivots..height, &mut stack[base..]);
        }
        stack
    }
}

/// Backward sweep over fronts in reverse postorder, compiled for the vector unit found at run time.
///
/// The top of `stack` is the solution on the border of the last front; what is returned is that on the borders of
/// children not among `fronts`.
pub(super) struct Backward<'a, 'x, T> {
    pub(super) sweep: Sweep<'a, T>,
    pub(super) fronts: &'a [Front],
    pub(super) x: &'x mut [T],
    pub(super) stack: Vec<T>,
}

impl<T: Scalar> WithSimd for Backward<'_, '_, T> {
    type Output = Vec<T>;

    #[inline(always)]
    fn with_simd<S: Simd>(self, simd: S) -> Vec<T> {
        let Self { sweep, fronts, x, mut stack } = self;
        let width = sweep.width;
        let mut local: Vec<T> = Vec::new();
        let mut rest = x;
        for front in fronts.iter().rev() {
            let height = front.height();
            let (before, pivots) = rest.split_at_mut(rest.len() - front.pivots * width);
            rest = before;
            local.clear();
            local.resize(height * width, T::ZERO);
            gather(&mut local, height, width, 0..front.pivots, pivots);
            let base = stack.len() - front.border * width;
            gather(&mut local, height, width, front.pivots..height, &stack[base..]);
            stack.truncate(base);
            for (k, column) in sweep.columns(front).enumerate().rev() {
                for side in local.chunks_exact_mut(height) {
                    let (done, open) = side.split_at_mut(k + 1);
                    done[k] = done[k] * column[k] - dot(simd, &column[k + 1..], open);
                }
            }
            scatter(&local, height, width, 0..front.pivots, pivots);
            for &child in sweep.plan.children(front) {
                let places = sweep.relative(child);
                if width == 1 {
                    stack.extend(places.iter().map(|&row| local[row as usize]));
                } else {
                    let rows = places.iter().flat_map(|&row| (0..width).map(move |r| r * height + row as usize));
                    stack.extend(rows.map(|place| local[place]));
                }
            }
        }
        stack
    }
}

/// Copies values that lie together by row into rows `rows` of a block of `width` columns.
#[inline(always)]
fn gather<T: Scalar>(block: &mut [T], height: usize, width: usize, rows: Range<usize>, values: &[T]) {
    if width == 1 {
        block[rows].copy_from_slice(values);
        return;
    }
    for (r, column) in block.chunks_exact_mut(height).enumerate() {
        for (place, values) in column[rows.clone()].iter_mut().zip(values.chunks_exact(width)) {
            *place = values[r];
        }
    }
}

/// The inverse of `gather`.
#[inline(always)]
fn scatter<T: Scalar>(block: &[T], height: usize, width: usize, rows: Range<usize>, values: &mut [T]) {
    if width == 1 {
        values.copy_from_slice(&block[rows]);
        return;
    }
    for (r, column) in block.chunks_exact(height).enumerate() {
        for (&value, places) in column[rows.clone()].iter().zip(values.chunks_exact_mut(width)) {
            places[r] = value;
        }
    }
}

/// Adds values that lie together by row into rows `rows` of a block of `width` columns.
#[inline(always)]
fn gather_sum<T: Scalar>(block: &mut [T], height: usize, width: usize, rows: &[u32], values: &[T]) {
    for (r, column) in block.chunks_exact_mut(height).enumerate() {
        if width == 1 {
            for (&row, &value) in rows.iter().zip(values) {
                column[row as usize] += value;
            }
        } else {
            for (&row, values) in rows.iter().zip(values.chunks_exact(width)) {
                column[row as usize] += values[r];
            }
        }
    }
}
