//! Numeric factorisation `P A P^T = L D L^T`, front by front, no pivoting.
//!
//! Subtrees of fronts are independent: they are factorised in parallel, each owning its range of the factor, and hand
//! their border blocks up. What runs in parallel is decided by the plan's operation counts, and sums are always taken
//! in the same order, so the factor is the same to the last bit for any number of threads.

use std::fmt;
use std::ops::Range;
use std::sync::Arc;

use super::dense::Panel;
use super::error::{Datum, LinalgError};
use super::matrix::check_length;
use super::plan::{Front, Plan};
use super::scalar::Scalar;

/// Smallest work of a subtree, in operations, that is worth a task.
const TASK_WORK: f64 = 3e5;

/// Factor of a symmetric matrix: unit lower `L` and diagonal `D`.
#[derive(Clone)]
pub struct Factor<T> {
    pub(super) plan: Arc<Plan>,
    /// Panels of the fronts; reciprocal pivots on their diagonals.
    pub(super) values: Vec<T>,
    /// Whether `values` hold a factor: false after a failure.
    pub(super) complete: bool,
}

impl<T: Scalar> Factor<T> {
    /// Factorises the matrix with these values on the plan's pattern.
    ///
    /// # Errors
    /// As [`Factor::refactor`].
    pub fn new(plan: &Arc<Plan>, values: &[T]) -> Result<Self, LinalgError> {
        let storage = vec![T::ZERO; plan.panel_values()];
        let mut factor = Self { plan: Arc::clone(plan), values: storage, complete: false };
        factor.refactor(values)?;
        Ok(factor)
    }

    /// Factorises new values on the same pattern, in the same memory.
    ///
    /// After an error the factor is empty and refuses to solve until it is given values it can factorise.
    ///
    /// # Errors
    /// [`LinalgError::Size`] for a wrong number of values, [`LinalgError::NotFinite`] for a value that is NaN or
    /// infinite, [`LinalgError::ZeroPivot`] for a singular matrix.
    pub fn refactor(&mut self, values: &[T]) -> Result<(), LinalgError> {
        self.complete = false;
        let plan = Arc::clone(&self.plan);
        check_length(Datum::MatrixValues, plan.pattern().nnz(), values.len())?;
        if let Some(index) = values.iter().position(|value| !value.finite()) {
            return Err(LinalgError::NotFinite { what: Datum::MatrixValues, index });
        }
        let references = pivot_references(&plan, values);
        let task = Task { plan: &plan, matrix: values, references: &references, limit: pivot_limit(plan.n()) };
        task.siblings(&plan.roots, &mut self.values, &mut Workspace::default())?;
        self.complete = true;
        Ok(())
    }

    /// Plan this factor follows.
    pub fn plan(&self) -> &Arc<Plan> {
        &self.plan
    }
}

impl<T> fmt::Debug for Factor<T> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.debug_struct("Factor").field("plan", &self.plan).field("complete", &self.complete).finish_non_exhaustive()
    }
}

/// Smallest `|pivot|` in units of its row in a system of `n` unknowns: below, rounding alone could have made it.
///
/// A floating mesh has an exact last pivot of zero; rounding leaves about `0.03 n` units of it (measured on quadratic
/// grids of 9 to 130 000 unknowns), and the limit is six times that.
fn pivot_limit(n: usize) -> f64 {
    f64::EPSILON * (200.0 + 0.2 * n as f64)
}

/// Size of the row of each pivot: `max(|a_jj|, max_i |a_ij|^2 / |a_ii|)`, which scales with the pivot when rows and
/// columns are scaled together, and is not zero merely because the diagonal is.
fn pivot_references<T: Scalar>(plan: &Plan, values: &[T]) -> Vec<f64> {
    let pattern = plan.pattern();
    let diagonal: Vec<f64> = pattern.starts()[..plan.n()].iter().map(|&slot| values[slot].size()).collect();
    let mut sizes = diagonal.clone();
    for col in 0..plan.n() {
        let first = pattern.starts()[col];
        for (offset, &row) in pattern.column(col).iter().enumerate().skip(1) {
            let (row, entry) = (row as usize, values[first + offset].size());
            if diagonal[row] > 0.0 {
                sizes[col] = sizes[col].max(entry * (entry / diagonal[row]));
            }
            if diagonal[col] > 0.0 {
                sizes[row] = sizes[row].max(entry * (entry / diagonal[col]));
            }
        }
    }
    plan.order.iter().map(|&unknown| sizes[unknown as usize]).collect()
}

/// Memory that fronts eliminated one after the other use in turn.
#[derive(Default)]
struct Workspace<T> {
    /// Room for `L D` of a panel; what an earlier front left in it is never read.
    scaled: Vec<T>,
    /// Border blocks that were added into their parents.
    spare: Vec<Vec<T>>,
}

impl<T: Scalar> Workspace<T> {
    /// A square block of this order, by columns, with zeros on and below the diagonal.
    fn lower_zeros(&mut self, order: usize) -> Vec<T> {
        let mut block = self.spare.pop().unwrap_or_default();
        block.resize(order * order, T::ZERO);
        for column in 0..order {
            block[column * order + column..(column + 1) * order].fill(T::ZERO);
        }
        block
    }
}

/// What all fronts of one factorisation share.
#[derive(Clone, Copy)]
struct Task<'a, T> {
    plan: &'a Plan,
    matrix: &'a [T],
    references: &'a [f64],
    limit: f64,
}

impl<T: Scalar> Task<'_, T> {
    /// Factorises sibling subtrees, whose panels fill `panels`; returns their border blocks in order.
    fn siblings(
        &self,
        fronts: &[u32],
        panels: &mut [T],
        workspace: &mut Workspace<T>,
    ) -> Result<Vec<Vec<T>>, LinalgError> {
        let work = |list: &[u32]| list.iter().map(|&k| self.plan.fronts[k as usize].work).sum::<f64>();
        let [.., last] = fronts else {
            return Ok(Vec::new());
        };
        if fronts.len() == 1 {
            return Ok(vec![self.subtree(*last as usize, panels, workspace)?]);
        }
        let (left, right) = fronts.split_at(fronts.len() / 2);
        let start = |k: u32| {
            let front = &self.plan.fronts[k as usize];
            self.plan.fronts[front.subtree].panel.start
        };
        let (left_panels, right_panels) = panels.split_at_mut(start(right[0]) - start(left[0]));
        let (blocks, more) = if work(left).min(work(right)) < TASK_WORK {
            let blocks = self.siblings(left, left_panels, workspace)?;
            (Ok(blocks), self.siblings(right, right_panels, workspace))
        } else {
            rayon::join(
                || self.siblings(left, left_panels, workspace),
                || self.siblings(right, right_panels, &mut Workspace::default()),
            )
        };
        let mut blocks = blocks?;
        blocks.append(&mut more?);
        Ok(blocks)
    }

    /// Factorises front `k` with all below it; returns its border block.
    fn subtree(&self, k: usize, panels: &mut [T], workspace: &mut Workspace<T>) -> Result<Vec<T>, LinalgError> {
        let fronts = &self.plan.fronts;
        let subtree = fronts[k].subtree..k + 1;
        let mut stack = Vec::new();
        let heavy = |k: u32| fronts[k as usize].work >= TASK_WORK;
        let branch = self.plan.branch(k, heavy);
        if fronts[branch].work < 2.0 * TASK_WORK {
            self.sequence(subtree, panels, &mut stack, workspace)?;
            return Ok(stack.pop().unwrap_or_default());
        }
        let offset = |k: usize| fronts[k].panel.start - fronts[subtree.start].panel.start;
        let (before, rest) = panels.split_at_mut(offset(fronts[branch].subtree));
        let (below, after) = rest.split_at_mut(offset(branch) - before.len());
        self.sequence(subtree.start..fronts[branch].subtree, before, &mut stack, workspace)?;
        stack.append(&mut self.siblings(self.plan.children(&fronts[branch]), below, workspace)?);
        self.sequence(branch..subtree.end, after, &mut stack, workspace)?;
        Ok(stack.pop().unwrap_or_default())
    }

    /// Factorises successive fronts, one after the other; `stack` holds the border blocks not yet added to a parent.
    fn sequence(
        &self,
        fronts: Range<usize>,
        panels: &mut [T],
        stack: &mut Vec<Vec<T>>,
        workspace: &mut Workspace<T>,
    ) -> Result<(), LinalgError> {
        let mut rest = panels;
        for front in &self.plan.fronts[fronts] {
            let (panel, after) = rest.split_at_mut(front.panel.len());
            rest = after;
            let blocks = stack.split_off(stack.len() - front.children.len());
            stack.push(self.front(front, panel, blocks, workspace)?);
        }
        Ok(())
    }

    /// Assembles one front from the matrix and its children's blocks, and eliminates its pivots.
    fn front(
        &self,
        front: &Front,
        panel: &mut [T],
        children: Vec<Vec<T>>,
        workspace: &mut Workspace<T>,
    ) -> Result<Vec<T>, LinalgError> {
        panel.fill(T::ZERO);
        let mut border = workspace.lower_zeros(front.border);
        for &[slot, place] in &self.plan.scatter[front.entries.clone()] {
            panel[place as usize] = self.matrix[slot as usize];
        }
        for (&child, block) in self.plan.children(front).iter().zip(children) {
            let rows = self.plan.fronts[child as usize].rows.clone();
            add_block(front, &self.plan.relative[rows], &block, panel, &mut border);
            workspace.spare.push(block);
        }
        let columns = front.first..front.first + front.pivots;
        workspace.scaled.resize(workspace.scaled.len().max(panel.len()), T::ZERO);
        let mut panel = Panel {
            values: panel,
            scaled: &mut workspace.scaled,
            height: front.height(),
            references: &self.references[columns],
            limit: self.limit,
        };
        panel.eliminate().map_err(|bad| {
            let unknown = self.plan.order[front.first + bad.column] as usize;
            if bad.ratio.is_nan() {
                LinalgError::NotFinite { what: Datum::Pivots, index: unknown }
            } else {
                LinalgError::ZeroPivot { unknown, ratio: bad.ratio, limit: self.limit }
            }
        })?;
        panel.update_border(&mut border);
        Ok(border)
    }
}

/// Adds a child's block (lower triangle) into a front; `relative` are its rows in the front, rising.
fn add_block<T: Scalar>(front: &Front, relative: &[u32], block: &[T], panel: &mut [T], border: &mut [T]) {
    let order = relative.len();
    for (column, &target) in relative.iter().enumerate() {
        let (target, rows) = (target as usize, &relative[column..]);
        let source = &block[column * order + column..(column + 1) * order];
        let (destination, shift) = if target < front.pivots {
            (&mut panel[target * front.height()..][..front.height()], 0)
        } else {
            (&mut border[(target - front.pivots) * front.border..][..front.border], front.pivots)
        };
        let last = rows[rows.len() - 1] as usize;
        if last - target == rows.len() - 1 {
            let run = &mut destination[target - shift..=last - shift];
            for (to, &from) in run.iter_mut().zip(source) {
                *to += from;
            }
        } else {
            for (&row, &from) in rows.iter().zip(source) {
                destination[row as usize - shift] += from;
            }
        }
    }
}
