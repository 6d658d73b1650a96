//! Times of the steps of a sparse solve. Convention: seconds; one right-hand side and [`COLUMNS`] of them; memory in bytes.

use std::sync::Arc;
use std::time::Instant;

use serde_json::{Value, json};
use solver::linalg::{Factor, LinalgError, Plan, Scalar, checked_solve};

use crate::memory;
use crate::systems::{COLUMNS, System};

/// Times a call.
pub fn timed<R>(call: impl FnOnce() -> R) -> (R, f64) {
    let start = Instant::now();
    let result = call();
    (result, start.elapsed().as_secs_f64())
}

/// Plans, factorises, factorises again and solves a system, and tells how long each step took.
///
/// `backward_error` is that of a plain solve, `checked_error` that after refinement.
///
/// # Errors
/// A system the solver refuses.
pub fn run<T: Scalar>(system: &System<T>) -> Result<Value, LinalgError> {
    let n = system.matrix.pattern.n();
    let before = memory::start();
    let (plan, plan_s) = timed(|| plan(system));
    let plan = plan?;
    let (factor, factor_s) = timed(|| Factor::new(&plan, &system.matrix.values));
    let mut factor = factor?;
    let mut many = system.rhs.clone();
    let mut one = many[..n].to_vec();
    let (solved, solve_s) = timed(|| factor.solve_in_place(&mut one));
    solved?;
    let memory_bytes = memory::peak_bytes().zip(before).map(|(peak, before)| peak.saturating_sub(before));
    let (refactored, refactor_s) = timed(|| factor.refactor(&system.matrix.values));
    refactored?;
    let (solved, solve_many_s) = timed(|| factor.solve_in_place(&mut many));
    solved?;
    let (checked, checked_solve_s) = timed(|| checked_solve(&system.matrix, &factor, &system.rhs[..n]));
    let mut worst = 0.0_f64;
    for (x, b) in many.chunks_exact(n).zip(system.rhs.chunks_exact(n)) {
        worst = worst.max(system.matrix.residual(x, b)?.backward_error());
    }
    Ok(json!({
        "unknowns": n,
        "entries": system.matrix.pattern.nnz(),
        "columns": COLUMNS,
        "analysis_s": plan_s,
        "factor_s": factor_s,
        "refactor_s": refactor_s,
        "solve_s": solve_s,
        "solve_many_s": solve_many_s,
        "checked_solve_s": checked_solve_s,
        "fill": plan.fill(),
        "memory_bytes": memory_bytes,
        "backward_error": system.matrix.residual(&one, &system.rhs[..n])?.backward_error(),
        "backward_error_many": worst,
        "checked_error": checked?.backward_error,
    }))
}

/// Elimination order and symbolic factorisation.
///
/// # Errors
/// A pattern that cannot be planned.
pub fn plan<T: Scalar>(system: &System<T>) -> Result<Arc<Plan>, LinalgError> {
    Plan::new(Arc::clone(&system.matrix.pattern), Some(&system.coordinates), &system.last).map(Arc::new)
}
