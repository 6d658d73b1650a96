//! Numeric factorisation `P A P^T = L D L^T`, front by front, no pivoting.
//!
//! Subtrees of fronts are independent: they are factorised in parallel, each owning its range of the factor, and hand
//! their border blocks up. What runs in parallel is decided by the plan's operation counts, and sums are always taken
//! in the same order, so the factor is the same to the last bit for any number of threads.

use std::fmt;
use std::ops::Range;
use std::sync::Arc;

use super::dense::{BadPivot, Panel};
use super::error::{Datum, LinalgError};
use super::matrix::check_length;
use super::plan::{Front, Plan};
use super::pool::Pool;
use super::scalar::Scalar;

/// Smallest work of a subtree, in operations, that is worth a task.
const TASK_WORK: f64 = 3e5;

/// Factor of a symmetric matrix: unit lower `L` and diagonal `D`.
pub struct Factor<T> {
    pub(super) plan: Arc<Plan>,
    /// Panels of the fronts; reciprocal pivots on their diagonals.
    pub(super) values: Vec<T>,
    /// Blocks between fronts, kept for the next factorisation.
    pool: Pool<T>,
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
        let pool = Pool::new(plan.largest_block());
        let mut factor = Self { plan: Arc::clone(plan), values: storage, pool, complete: false };
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
        let (pool, limit) = (&self.pool, pivot_limit(plan.n()));
        let task = Task { plan: &plan, matrix: values, references: &references, pool, limit };
        for block in task.siblings(&plan.roots, &mut self.values)? {
            pool.give(block);
        }
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

/// What all fronts of one factorisation share.
#[derive(Clone, Copy)]
struct Task<'a, T> {
    plan: &'a Plan,
    matrix: &'a [T],
    references: &'a [f64],
    pool: &'a Pool<T>,
    limit: f64,
}

impl<T: Scalar> Task<'_, T> {
    /// Factorises sibling subtrees, whose panels fill `panels`; returns their border blocks in order.
    fn siblings(&self, fronts: &[u32], panels: &mut [T]) -> Result<Vec<Vec<T>>, LinalgError> {
        let work = |list: &[u32]| list.iter().map(|&k| self.plan.fronts[k as usize].work).sum::<f64>();
        let [.., last] = fronts else {
            return Ok(Vec::new());
        };
        if fronts.len() == 1 {
            return Ok(vec![self.subtree(*last as usize, panels)?]);
        }
        let (left, right) = fronts.split_at(fronts.len() / 2);
        let start = |k: u32| {
            let front = &self.plan.fronts[k as usize];
            self.plan.fronts[front.subtree].panel.start
        };
        let (left_panels, right_panels) = panels.split_at_mut(start(right[0]) - start(left[0]));
        let (blocks, more) = if work(left).min(work(right)) < TASK_WORK {
            let blocks = self.siblings(left, left_panels)?;
            (Ok(blocks), self.siblings(right, right_panels))
        } else {
            rayon::join(|| self.siblings(left, left_panels), || self.siblings(right, right_panels))
        };
        let mut blocks = blocks?;
        blocks.append(&mut more?);
        Ok(blocks)
    }

    /// Factorises front `k` with all below it; returns its border block.
    fn subtree(&self, k: usize, panels: &mut [T]) -> Result<Vec<T>, LinalgError> {
        let fronts = &self.plan.fronts;
        let subtree = fronts[k].subtree..k + 1;
        let mut stack = Vec::new();
        let heavy = |k: u32| fronts[k as usize].work >= TASK_WORK;
        let branch = self.plan.branch(k, heavy);
        if fronts[branch].work < 2.0 * TASK_WORK {
            self.sequence(subtree, panels, &mut stack)?;
            return Ok(stack.pop().unwrap_or_default());
        }
        let offset = |k: usize| fronts[k].panel.start - fronts[subtree.start].panel.start;
        let (before, rest) = panels.split_at_mut(offset(fronts[branch].subtree));
        let (below, after) = rest.split_at_mut(offset(branch) - before.len());
        self.sequence(subtree.start..fronts[branch].subtree, before, &mut stack)?;
        stack.append(&mut self.siblings(self.plan.children(&fronts[branch]), below)?);
        self.sequence(branch..subtree.end, after, &mut stack)?;
        Ok(stack.pop().unwrap_or_default())
    }

    /// Factorises successive fronts, one after the other; `stack` holds the border blocks not yet added to a parent.
    fn sequence(&self, fronts: Range<usize>, panels: &mut [T], stack: &mut Vec<Vec<T>>) -> Result<(), LinalgError> {
        let mut rest = panels;
        for front in &self.plan.fronts[fronts] {
            let (panel, after) = rest.split_at_mut(front.panel.len());
            rest = after;
            let blocks = stack.split_off(stack.len() - front.children.len());
            stack.push(self.front(front, panel, &blocks)?);
            for block in blocks {
                self.pool.give(block);
            }
        }
        Ok(())
    }

    /// Assembles one front from the matrix and its children's blocks, and eliminates its pivots; returns its border block.
    fn front(&self, front: &Front, panel: &mut [T], children: &[Vec<T>]) -> Result<Vec<T>, LinalgError> {
        panel.fill(T::ZERO);
        for &[slot, place] in &self.plan.scatter[front.entries.clone()] {
            panel[place as usize] = self.matrix[slot as usize];
        }
        let places = |child: u32| &self.plan.relative[self.plan.fronts[child as usize].rows.clone()];
        let children = || self.plan.children(front).iter().zip(children);
        for (&child, block) in children() {
            add_to_panel(front, places(child), block, panel);
        }
        let mut scaled = self.pool.take(panel.len());
        let columns = front.first..front.first + front.pivots;
        let mut panel = Panel {
            values: panel,
            scaled: &mut scaled,
            height: front.height(),
            references: &self.references[columns],
            limit: self.limit,
        };
        panel.eliminate().map_err(|bad| self.refusal(front, &bad))?;
        let mut border = self.pool.take(front.border * front.border);
        panel.set_border(&mut border[..front.border * front.border]);
        for (&child, block) in children() {
            add_to_border(front, places(child), block, &mut border);
        }
        self.pool.give(scaled);
        Ok(border)
    }

    fn refusal(&self, front: &Front, bad: &BadPivot) -> LinalgError {
        let unknown = self.plan.order[front.first + bad.column] as usize;
        if bad.ratio.is_nan() {
            LinalgError::NotFinite { what: Datum::Pivots, index: unknown }
        } else {
            LinalgError::ZeroPivot { unknown, ratio: bad.ratio, limit: self.limit }
        }
    }
}

/// Adds to a panel what a child leaves on its columns; `places` are the rows of the child's block in the front, rising.
fn add_to_panel<T: Scalar>(front: &Front, places: &[u32], block: &[T], panel: &mut [T]) {
    let order = places.len();
    for (column, &target) in places.iter().enumerate() {
        if target as usize >= front.pivots {
            break;
        }
        let target = &mut panel[target as usize * front.height()..][..front.height()];
        add_column(target, 0, &places[column..], &block[column * order + column..(column + 1) * order]);
    }
}

/// Adds to a border block what a child leaves on it.
fn add_to_border<T: Scalar>(front: &Front, places: &[u32], block: &[T], border: &mut [T]) {
    let order = places.len();
    let first = places.partition_point(|&place| (place as usize) < front.pivots);
    for (column, &target) in places.iter().enumerate().skip(first) {
        let target = &mut border[(target as usize - front.pivots) * front.border..][..front.border];
        add_column(target, front.pivots, &places[column..], &block[column * order + column..(column + 1) * order]);
    }
}

/// Adds entries to the rows `places`, less `shift`, of a column; in one run where these rows follow each other.
fn add_column<T: Scalar>(target: &mut [T], shift: usize, places: &[u32], entries: &[T]) {
    let (first, last) = (places[0] as usize, places[places.len() - 1] as usize);
    if last - first == places.len() - 1 {
        for (to, &from) in target[first - shift..=last - shift].iter_mut().zip(entries) {
            *to += from;
        }
    } else {
        for (&row, &from) in places.iter().zip(entries) {
            target[row as usize - shift] += from;
        }
    }
}
