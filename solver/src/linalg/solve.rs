//! Substitution with a factor: forward with `L`, division by `D`, backward with `L^T`.
//! Convention: several right-hand sides lie one after the other; each is solved alone, so none depends on the others.

use faer::traits::pulp::{Arch, Simd, WithSimd};

use super::error::{Datum, LinalgError};
use super::factor::Factor;
use super::scalar::Scalar;
use super::vector::{add_multiple, dot};

impl<T: Scalar> Factor<T> {
    /// Replaces right-hand sides, `n` values each and one after the other, by the solutions.
    ///
    /// No residual is formed: see [`super::checked_solve`].
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
            return Err(LinalgError::Size {
                what: Datum::RightHandSide,
                expected,
                found: rhs.len(),
            });
        }
        self.solve_columns(rhs, n);
        Ok(())
    }

    /// Solves the columns, halves in parallel.
    fn solve_columns(&self, rhs: &mut [T], n: usize) {
        if rhs.len() == n {
            Arch::new().dispatch(One { factor: self, rhs });
        } else {
            let (left, right) = rhs.split_at_mut(rhs.len() / n / 2 * n);
            rayon::join(
                || self.solve_columns(left, n),
                || self.solve_columns(right, n),
            );
        }
    }

    #[inline(always)]
    fn solve_one<S: Simd>(&self, simd: S, rhs: &mut [T]) {
        let plan = &self.plan;
        let mut x: Vec<T> = plan
            .order
            .iter()
            .map(|&unknown| rhs[unknown as usize])
            .collect();
        let mut local: Vec<T> = Vec::new();
        for front in &plan.fronts {
            let (pivots, rows) = (
                front.first..front.first + front.pivots,
                &plan.rows[front.rows.clone()],
            );
            local.clear();
            local.extend_from_slice(&x[pivots.clone()]);
            local.resize(front.height(), T::ZERO);
            for (k, column) in self.values[front.panel.clone()]
                .chunks_exact(front.height())
                .enumerate()
            {
                let (done, open) = local.split_at_mut(k + 1);
                add_multiple(simd, open, -done[k], &column[k + 1..]);
            }
            x[pivots].copy_from_slice(&local[..front.pivots]);
            for (&row, &value) in rows.iter().zip(&local[front.pivots..]) {
                x[row as usize] += value;
            }
        }
        for front in plan.fronts.iter().rev() {
            let (pivots, rows) = (
                front.first..front.first + front.pivots,
                &plan.rows[front.rows.clone()],
            );
            local.clear();
            local.extend_from_slice(&x[pivots.clone()]);
            local.extend(rows.iter().map(|&row| x[row as usize]));
            for (k, column) in self.values[front.panel.clone()]
                .chunks_exact(front.height())
                .enumerate()
                .rev()
            {
                let (done, open) = local.split_at_mut(k + 1);
                done[k] = done[k] * column[k] - dot(simd, &column[k + 1..], open);
            }
            x[pivots].copy_from_slice(&local[..front.pivots]);
        }
        for (&unknown, &value) in plan.order.iter().zip(&x) {
            rhs[unknown as usize] = value;
        }
    }
}

/// Substitution for one right-hand side, compiled for the vector unit found at run time.
struct One<'a, T> {
    factor: &'a Factor<T>,
    rhs: &'a mut [T],
}

impl<T: Scalar> WithSimd for One<'_, T> {
    type Output = ();

    #[inline(always)]
    fn with_simd<S: Simd>(self, simd: S) {
        self.factor.solve_one(simd, self.rhs);
    }
}
