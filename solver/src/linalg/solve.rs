//! Substitution with a factor: forward with `L`, division by `D`, backward with `L^T`.
//!
//! Both sweeps follow the tree of fronts: forward, a front hands what it leaves on its border to its parent; backward,
//! a front hands the solution on its children's borders down to them. Subtrees own their range of the unknowns and run
//! in parallel when the plan says they are large, so the result is the same to the last bit for any number of threads.
//! Convention: inside, right-hand sides are taken in groups, and the values of one unknown for a group lie together.

use std::ops::Range;

use faer::traits::pulp::{Arch, Simd, WithSimd};

use super::error::{Datum, LinalgError};
use super::factor::Factor;
use super::plan::{Front, Plan};
use super::scalar::Scalar;
use super::vector::{add_multiple, dot};

/// Right-hand sides that share one pass over the factor.
const GROUP: usize = 8;
/// Smallest part of the factor, in values, that is worth a task.
const TASK_VALUES: usize = 40_000;

impl<T: Scalar> Factor<T> {
    /// Replaces right-hand sides, `n` values each and one after the other, by the solutions.
    ///
    /// Each is solved as if it were alone, to the last bit. No residual is formed: see [`super::checked_solve`].
    ///
    /// # Errors
    /// [`LinalgError::Size`] if the length is not a multiple of the number of unknowns,
    /// [`LinalgError::NotFactored`] after a failed refactorisation.
    pub fn solve_in_place(&self, rhs: &mut [T]) -> Result<(), LinalgError> {
        let n = self.plan.n();
        if !self.complete {
            return Err(LinalgError::NotFactored);
        }
        if rhs.is_empty() {
            return Ok(());
        }
        if n == 0 || !rhs.len().is_multiple_of(n) {
            let expected = rhs.len().next_multiple_of(n.max(1));
            return Err(LinalgError::Size { what: Datum::RightHandSide, expected, found: rhs.len() });
        }
        for group in rhs.chunks_mut(n * GROUP) {
            self.solve_group(group, n);
        }
        Ok(())
    }

    fn solve_group(&self, rhs: &mut [T], n: usize) {
        let plan = &*self.plan;
        let width = rhs.len() / n;
        let mut x = Vec::with_capacity(rhs.len());
        for &unknown in &plan.order {
            x.extend(rhs.iter().skip(unknown as usize).step_by(n).copied());
        }
        let sweep = Sweep {
            plan,
            values: &self.values,
            width,
        };
        sweep.forward_siblings(&plan.roots, &mut x);
        sweep.backward_siblings(&plan.roots, Vec::new(), &mut x);
        for (&unknown, values) in plan.order.iter().zip(x.chunks_exact(width)) {
            for (place, &value) in rhs.iter_mut().skip(unknown as usize).step_by(n).zip(values) {
                *place = value;
            }
        }
    }
}

/// What all fronts of one solution share.
#[derive(Clone, Copy)]
struct Sweep<'a, T> {
    plan: &'a Plan,
    values: &'a [T],
    width: usize,
}

impl<'a, T: Scalar> Sweep<'a, T> {
    fn front(&self, k: u32) -> &'a Front {
        &self.plan.fronts[k as usize]
    }

    /// Values of the factor in the subtrees of these siblings.
    fn size(&self, fronts: &[u32]) -> usize {
        let [first, .., last] = fronts else {
            return fronts.first().map_or(0, |&k| self.size(&[k, k]));
        };
        self.front(*last).panel.end - self.plan.fronts[self.front(*first).subtree].panel.start
    }

    /// First step of the subtree of front `k`.
    fn first_step(&self, k: u32) -> usize {
        self.plan.fronts[self.front(k).subtree].first
    }

    /// Halves of a list of siblings, and how many values of `x` belong to the first.
    fn split<'b>(&self, fronts: &'b [u32]) -> (&'b [u32], &'b [u32], usize) {
        let (left, right) = fronts.split_at(fronts.len() / 2);
        let steps = self.first_step(right[0]) - self.first_step(left[0]);
        (left, right, steps * self.width)
    }

    /// Forward sweep over sibling subtrees, whose steps are `x`; returns what they leave on their borders, in order.
    fn forward_siblings(&self, fronts: &[u32], x: &mut [T]) -> Vec<T> {
        if fronts.len() < 2 {
            return fronts
                .first()
                .map_or_else(Vec::new, |&k| self.forward(k, x));
        }
        let (left, right, middle) = self.split(fronts);
        let (x_left, x_right) = x.split_at_mut(middle);
        let mut forward_left = || self.forward_siblings(left, x_left);
        let mut forward_right = || self.forward_siblings(right, x_right);
        let (mut borders, more) = if self.size(left).min(self.size(right)) < TASK_VALUES {
            (forward_left(), forward_right())
        } else {
            rayon::join(forward_left, forward_right)
        };
        borders.extend(more);
        borders
    }

    /// Forward sweep over the subtree of front `k`; returns what it leaves on its border.
    fn forward(&self, k: u32, x: &mut [T]) -> Vec<T> {
        let front = self.front(k);
        if self.size(&[k]) < 2 * TASK_VALUES {
            let fronts = &self.plan.fronts[front.subtree..=k as usize];
            return Arch::new().dispatch(Forward {
                sweep: *self,
                fronts,
                x,
                stack: Vec::new(),
            });
        }
        let (below, pivots) = x.split_at_mut(x.len() - front.pivots * self.width);
        let stack = self.forward_siblings(self.plan.children(front), below);
        Arch::new().dispatch(Forward {
            sweep: *self,
            fronts: std::slice::from_ref(front),
            x: pivots,
            stack,
        })
    }

    /// Backward sweep over sibling subtrees; `borders` are the solutions on their borders, in order.
    fn backward_siblings(&self, fronts: &[u32], mut borders: Vec<T>, x: &mut [T]) {
        if fronts.len() < 2 {
            if let Some(&k) = fronts.first() {
                self.backward(k, borders, x);
            }
            return;
        }
        let (left, right, middle) = self.split(fronts);
        let (x_left, x_right) = x.split_at_mut(middle);
        let rows: usize = left.iter().map(|&k| self.front(k).border).sum();
        let more = borders.split_off(rows * self.width);
        let backward_left = || self.backward_siblings(left, borders, x_left);
        let backward_right = || self.backward_siblings(right, more, x_right);
        if self.size(left).min(self.size(right)) < TASK_VALUES {
            backward_left();
            backward_right();
        } else {
            rayon::join(backward_left, backward_right);
        }
    }

    /// Backward sweep over the subtree of front `k`; `border` is the solution on its border.
    fn backward(&self, k: u32, border: Vec<T>, x: &mut [T]) {
        let front = self.front(k);
        if self.size(&[k]) < 2 * TASK_VALUES {
            let fronts = &self.plan.fronts[front.subtree..=k as usize];
            Arch::new().dispatch(Backward {
                sweep: *self,
                fronts,
                x,
                stack: border,
            });
            return;
        }
        let (below, pivots) = x.split_at_mut(x.len() - front.pivots * self.width);
        let single = std::slice::from_ref(front);
        let stack = Arch::new().dispatch(Backward {
            sweep: *self,
            fronts: single,
            x: pivots,
            stack: border,
        });
        self.backward_siblings(self.plan.children(front), stack, below);
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
struct Forward<'a, 'x, T> {
    sweep: Sweep<'a, T>,
    fronts: &'a [Front],
    x: &'x mut [T],
    stack: Vec<T>,
}

impl<T: Scalar> WithSimd for Forward<'_, '_, T> {
    type Output = Vec<T>;

    #[inline(always)]
    fn with_simd<S: Simd>(self, simd: S) -> Vec<T> {
        let Self {
            sweep,
            fronts,
            x,
            mut stack,
        } = self;
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
            let rows: usize = children
                .iter()
                .map(|&child| sweep.front(child).border)
                .sum();
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
            scatter(
                &local,
                height,
                width,
                front.pivots..height,
                &mut stack[base..],
            );
        }
        stack
    }
}

/// Backward sweep over fronts in reverse postorder, compiled for the vector unit found at run time.
///
/// The top of `stack` is the solution on the border of the last front; what is returned is that on the borders of
/// children not among `fronts`.
struct Backward<'a, 'x, T> {
    sweep: Sweep<'a, T>,
    fronts: &'a [Front],
    x: &'x mut [T],
    stack: Vec<T>,
}

impl<T: Scalar> WithSimd for Backward<'_, '_, T> {
    type Output = Vec<T>;

    #[inline(always)]
    fn with_simd<S: Simd>(self, simd: S) -> Vec<T> {
        let Self {
            sweep,
            fronts,
            x,
            mut stack,
        } = self;
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
            gather(
                &mut local,
                height,
                width,
                front.pivots..height,
                &stack[base..],
            );
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
                    let rows = places
                        .iter()
                        .flat_map(|&row| (0..width).map(move |r| r * height + row as usize));
                    stack.extend(rows.map(|place| local[place]));
                }
            }
        }
        stack
    }
}

/// Copies values that lie together by row into rows `rows` of a block of `width` columns.
#[inline(always)]
fn gather<T: Scalar>(
    block: &mut [T],
    height: usize,
    width: usize,
    rows: Range<usize>,
    values: &[T],
) {
    if width == 1 {
        block[rows].copy_from_slice(values);
        return;
    }
    for (r, column) in block.chunks_exact_mut(height).enumerate() {
        for (place, values) in column[rows.clone()]
            .iter_mut()
            .zip(values.chunks_exact(width))
        {
            *place = values[r];
        }
    }
}

/// The inverse of `gather`.
#[inline(always)]
fn scatter<T: Scalar>(
    block: &[T],
    height: usize,
    width: usize,
    rows: Range<usize>,
    values: &mut [T],
) {
    if width == 1 {
        values.copy_from_slice(&block[rows]);
        return;
    }
    for (r, column) in block.chunks_exact(height).enumerate() {
        for (&value, places) in column[rows.clone()]
            .iter()
            .zip(values.chunks_exact_mut(width))
        {
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
