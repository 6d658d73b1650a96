//! The one door to a solution: solve, refine, and refuse what does not satisfy its equations.
//! Source: R. D. Skeel, Math. Comp. 35 (1980) 817-832 (one step of refinement makes elimination componentwise stable).

use super::error::{Datum, LinalgError};
use super::factor::Factor;
use super::matrix::SymmetricMatrix;
use super::scalar::Scalar;

/// Largest componentwise backward error of an accepted solution.
pub const BACKWARD_ERROR_LIMIT: f64 = 1e-10;
/// Refinement stops below this, some twenty units of rounding: a further step would cost a solution and gain nothing.
const GOAL: f64 = 4e-15;
/// Refinement stops after so many steps.
const MOST_REFINEMENTS: usize = 5;

/// A solution with the evidence for it.
#[derive(Debug, Clone)]
pub struct Solved<T> {
    /// Solution, one value per unknown.
    pub x: Vec<T>,
    /// `max |b - A x| / (|A||x| + |b|)` over the rows, sizes as `|Re| + |Im|`.
    pub backward_error: f64,
    /// Refinement steps that were kept.
    pub refinements: usize,
}

/// Solves `A x = b` with a factor of `A` (or of a matrix near it), refines, and checks.
///
/// Refinement goes on while it at least halves the backward error, and keeps the best solution met.
///
/// # Errors
/// [`LinalgError::Size`] for a wrong length, [`LinalgError::NotFactored`] for an empty factor,
/// [`LinalgError::NotFinite`] if right-hand side or solution hold NaN or infinity, [`LinalgError::Inaccurate`] if the
/// backward error stays above [`BACKWARD_ERROR_LIMIT`].
pub fn checked_solve<T: Scalar>(
    matrix: &SymmetricMatrix<T>,
    factor: &Factor<T>,
    rhs: &[T],
) -> Result<Solved<T>, LinalgError> {
    all_finite(Datum::RightHandSide, rhs)?;
    let mut x = rhs.to_vec();
    factor.solve_in_place(&mut x)?;
    all_finite(Datum::Solution, &x)?;
    let mut residual = matrix.residual(&x, rhs)?;
    let mut backward_error = residual.backward_error();
    let mut refinements = 0;
    while backward_error > GOAL && refinements < MOST_REFINEMENTS {
        let mut step = residual.r;
        factor.solve_in_place(&mut step)?;
        for (step, &x) in step.iter_mut().zip(&x) {
            *step += x;
        }
        residual = matrix.residual(&step, rhs)?;
        let refined = residual.backward_error();
        // Written so that NaN ends the loop.
        let better = refined < backward_error;
        let enough = refined > 0.5 * backward_error;
        if better {
            (x, backward_error) = (step, refined);
            refinements += 1;
        }
        if !better || enough {
            break;
        }
    }
    if backward_error <= BACKWARD_ERROR_LIMIT {
        Ok(Solved { x, backward_error, refinements })
    } else {
        Err(LinalgError::Inaccurate { backward_error, limit: BACKWARD_ERROR_LIMIT })
    }
}

fn all_finite<T: Scalar>(what: Datum, values: &[T]) -> Result<(), LinalgError> {
    match values.iter().position(|value| !value.finite()) {
        Some(index) => Err(LinalgError::NotFinite { what, index }),
        None => Ok(()),
    }
}
