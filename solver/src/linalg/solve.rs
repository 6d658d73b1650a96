//! Substitution with a factor: forward with `L`, division by `D`, backward with `L^T`.
//!
//! Both sweeps follow the tree of fronts: forward, a front hands what it leaves on its border to its parent; backward,
//! a front hands the solution on its children's borders down to them. Subtrees own their range of the unknowns and run
//! in parallel when the plan says they are large, so the result is the same to the last bit for any number of threads.
//! Convention: inside, right-hand sides are taken in groups, and the values of one unknown for a group lie together.

use pulp::Arch;

use super::error::{Datum, LinalgError};
use super::factor::Factor;
use super::plan::Front;
use super::scalar::Scalar;
use super::sweep::{Backward, Forward, Sweep};

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
        let sweep = Sweep { plan, values: &self.values, width };
        sweep.forward_siblings(&plan.roots, &mut x);
        sweep.backward_siblings(&plan.roots, Vec::new(), &mut x);
        for (&unknown, values) in plan.order.iter().zip(x.chunks_exact(width)) {
            for (place, &value) in rhs.iter_mut().skip(unknown as usize).step_by(n).zip(values) {
                *place = value;
            }
        }
    }
}

impl<'a, T: Scalar> Sweep<'a, T> {
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
            return fronts.first().map_or_else(Vec::new, |&k| self.forward(k, x));
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

    /// Where the work of a subtree forks, and the values of `x` before that fork's subtree and within it.
    fn fork(&self, k: u32) -> Fork<'a> {
        let fronts = &self.plan.fronts;
        let heavy = |k: u32| self.size(&[k]) >= TASK_VALUES;
        let branch = self.plan.branch(k as usize, heavy);
        let (start, below) = (self.front(k).subtree, fronts[branch].subtree);
        Fork {
            before: &fronts[start..below],
            children: self.plan.children(&fronts[branch]),
            after: &fronts[branch..=k as usize],
            x_before: (fronts[below].first - fronts[start].first) * self.width,
            x_below: (fronts[branch].first - fronts[below].first) * self.width,
            parallel: self.size(&[branch as u32]) >= 2 * TASK_VALUES,
        }
    }

    /// Forward sweep over the subtree of front `k`; returns what it leaves on its border.
    fn forward(&self, k: u32, x: &mut [T]) -> Vec<T> {
        let fork = self.fork(k);
        if !fork.parallel {
            let fronts = &self.plan.fronts[self.front(k).subtree..=k as usize];
            return Arch::new().dispatch(Forward { sweep: *self, fronts, x, stack: Vec::new() });
        }
        let (before, rest) = x.split_at_mut(fork.x_before);
        let (below, after) = rest.split_at_mut(fork.x_below);
        let first = Forward { sweep: *self, fronts: fork.before, x: before, stack: Vec::new() };
        let mut stack = Arch::new().dispatch(first);
        stack.append(&mut self.forward_siblings(fork.children, below));
        Arch::new().dispatch(Forward { sweep: *self, fronts: fork.after, x: after, stack })
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
        let fork = self.fork(k);
        if !fork.parallel {
            let fronts = &self.plan.fronts[self.front(k).subtree..=k as usize];
            Arch::new().dispatch(Backward { sweep: *self, fronts, x, stack: border });
            return;
        }
        let (before, rest) = x.split_at_mut(fork.x_before);
        let (below, after) = rest.split_at_mut(fork.x_below);
        let last = Backward { sweep: *self, fronts: fork.after, x: after, stack: border };
        let mut stack = Arch::new().dispatch(last);
        let rows: usize = fork.children.iter().map(|&child| self.front(child).border).sum();
        let borders = stack.split_off(stack.len() - rows * self.width);
        self.backward_siblings(fork.children, borders, below);
        Arch::new().dispatch(Backward { sweep: *self, fronts: fork.before, x: before, stack });
    }
}

/// A subtree cut where it forks: the fronts up to there one after the other, the fork's children in parallel.
struct Fork<'a> {
    /// Fronts that come before the fork's subtree.
    before: &'a [Front],
    /// Children of the fork.
    children: &'a [u32],
    /// The fork and all fronts after it.
    after: &'a [Front],
    /// Values of `x` that belong to `before`.
    x_before: usize,
    /// Values of `x` that belong to the children's subtrees.
    x_below: usize,
    /// Whether the fork is worth it.
    parallel: bool,
}
