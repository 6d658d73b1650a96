//! Newton's method for one stage: `storage(T) - known - w rate(T) = 0` in joules, for the temperatures in kelvin.
//!
//! With `k` frozen the equations are the gradient of a convex function of the temperatures (enthalpy rises with
//! temperature, so do surface losses), and the tangent is positive definite: every step goes downhill. A step that
//! overshoots (over the peak of `c(T)` of steel, over a melting plateau) is cut back to where the slope along it has
//! nearly vanished, which bracketing finds for certain. A factor is kept while it contracts the residual fast.
//! Source: J. Nocedal, S. J. Wright, Numerical Optimization, 2nd ed., Springer 2006, chapter 3.

use std::sync::Arc;

use super::operator::{Operator, Terms};
use super::step::StepFailure;
use crate::fem::assemble::Scatter;
use crate::linalg::{Factor, Plan, SymmetricMatrix, checked_solve};

/// Largest change of a node's temperature in one iteration, kelvin.
pub(super) const LARGEST_UPDATE_K: f64 = 40.0;
/// Iterations before giving up.
const MOST_ITERATIONS: usize = 60;
/// Residual over the heat moved at which a stage is solved.
const TOLERANCE: f64 = 1e-10;
/// Rounding of the equations: this many times `f64::EPSILON` times the size of `tangent x temperature`.
const ROUNDING: f64 = 4.0;
/// A factor that contracts the residual less than this is made anew.
const SLOW: f64 = 0.1;
/// Iterations with a new tangent that may fail to make the residual smaller.
const MOST_STALLS: usize = 4;
/// Evaluations along one direction.
const MOST_CUTS: usize = 30;

/// The tangent and its factor, kept between solves.
#[derive(Debug)]
pub(super) struct Tangent {
    pub(super) matrix: SymmetricMatrix<f64>,
    pub(super) factor: Option<Factor<f64>>,
    /// Room for element blocks.
    blocks: Vec<f64>,
}

/// One stage to be solved.
pub(super) struct Stage<'a> {
    /// Time it belongs to, seconds.
    pub(super) time_s: f64,
    /// Weight of the stage's own rate, seconds.
    pub(super) weight: f64,
    /// Enthalpy at the start of the step, J/m^3 a point.
    pub(super) enthalpy: &'a [f64],
    /// Source at the stage's time, W/m^3 a point.
    pub(super) source: &'a [f64],
    /// Heat of the stages before, joules, one an unknown; empty for none.
    pub(super) known: &'a [f64],
}

/// A solved stage.
pub(super) struct StageSolution {
    pub(super) temperature: Vec<f64>,
    pub(super) terms: Terms,
    /// What is left of each equation, joules; at held unknowns the heat that came in through the held face.
    pub(super) residual: Vec<f64>,
    pub(super) iterations: usize,
}

/// What a stage is solved with.
pub(super) struct Solver<'a> {
    pub(super) operator: &'a Operator,
    pub(super) scatter: &'a Scatter,
    pub(super) plan: &'a Arc<Plan>,
    /// Entries off the diagonal that couple a held unknown.
    pub(super) held_slots: &'a [u32],
    pub(super) is_held: &'a [bool],
    pub(super) tangent: &'a mut Tangent,
}

/// A temperature field with its terms and residual.
struct Trial {
    temperature: Vec<f64>,
    terms: Terms,
    residual: Vec<f64>,
    /// Sum of `|residual|` over unknowns that are not held, joules.
    norm: f64,
}

impl Solver<'_> {
    /// Solves a stage from the guess `temperature`; `fresh` makes the tangent anew before the first iteration.
    pub(super) fn solve(
        &mut self,
        stage: &Stage,
        temperature: Vec<f64>,
        fresh: bool,
    ) -> Result<StageSolution, StepFailure> {
        let mut now = self.trial(stage, temperature)?;
        let mut stale = fresh;
        let mut stalls = 0;
        for iterations in 0..=MOST_ITERATIONS {
            if !(stale && iterations == 0) && now.norm <= self.limit(stage, &now) {
                let Trial { temperature, terms, residual, .. } = now;
                return Ok(StageSolution { temperature, terms, residual, iterations });
            }
            if stale {
                self.renew(stage, &now.temperature)?;
            }
            let direction = self.direction(stage, &now)?;
            let next = self.walk(stage, &now, &direction)?;
            stalls = if stale && next.norm > 0.999 * now.norm { stalls + 1 } else { 0 };
            if stalls > MOST_STALLS {
                return Err(self.not_converged(stage, &next, iterations + 1));
            }
            stale = next.norm > SLOW * now.norm;
            now = next;
        }
        Err(self.not_converged(stage, &now, MOST_ITERATIONS))
    }

    /// Solves with the present tangent, zero at held unknowns; for the error estimate.
    pub(super) fn filtered(&self, stage_time_s: f64, mut load: Vec<f64>) -> Result<Vec<f64>, StepFailure> {
        let linear = |source| StepFailure::Linear { time_s: stage_time_s, source };
        for (v, _) in load.iter_mut().zip(self.is_held).filter(|(_, held)| **held) {
            *v = 0.0;
        }
        match &self.tangent.factor {
            Some(factor) => Ok(checked_solve(&self.tangent.matrix, factor, &load).map_err(linear)?.x),
            None => Ok(load),
        }
    }

    fn trial(&self, stage: &Stage, temperature: Vec<f64>) -> Result<Trial, StepFailure> {
        let terms = self.operator.terms(&temperature, stage.enthalpy, stage.source);
        let mut residual: Vec<f64> = terms.storage.iter().zip(&terms.rate).map(|(s, r)| s - stage.weight * r).collect();
        for (r, known) in residual.iter_mut().zip(stage.known) {
            *r -= known;
        }
        let free = residual.iter().zip(self.is_held).filter(|(_, held)| !**held);
        let norm: f64 = free.map(|(r, _)| r.abs()).sum();
        if !norm.is_finite() {
            let node = residual.iter().position(|r| !r.is_finite()).unwrap_or(0);
            let [r_m, z_m] = self.operator.space.points()[node];
            let temperature_k = temperature[node];
            return Err(StepFailure::NotFinite { time_s: stage.time_s, r_m, z_m, temperature_k });
        }
        Ok(Trial { temperature, terms, residual, norm })
    }

    /// Residual at which the stage counts as solved: a share of the heat moved, and what rounding leaves.
    fn limit(&self, stage: &Stage, now: &Trial) -> f64 {
        let stored: f64 = now.terms.storage.iter().map(|s| s.abs()).sum();
        let moved = stored + stage.weight * now.terms.flows.size();
        let matrix = &self.tangent.matrix;
        let sizes = now.temperature.iter().zip(matrix.pattern.starts());
        let rounding: f64 = sizes.map(|(t, &slot)| matrix.values[slot] * t.abs()).sum();
        TOLERANCE * moved + ROUNDING * f64::EPSILON * rounding
    }

    fn renew(&mut self, stage: &Stage, temperature: &[f64]) -> Result<(), StepFailure> {
        let matrix = &mut self.tangent.matrix;
        matrix.values.fill(0.0);
        let blocks = &mut self.tangent.blocks;
        self.operator.add_tangent(self.scatter, temperature, stage.weight, blocks, &mut matrix.values);
        for &slot in self.held_slots {
            matrix.values[slot as usize] = 0.0;
        }
        let made = match &mut self.tangent.factor {
            Some(factor) => factor.refactor(&matrix.values),
            none => Factor::new(self.plan, &matrix.values).map(|factor| *none = Some(factor)),
        };
        made.map_err(|source| StepFailure::Linear { time_s: stage.time_s, source })
    }

    /// Change of temperature that the tangent asks for, no node by more than the largest update.
    fn direction(&self, stage: &Stage, now: &Trial) -> Result<Vec<f64>, StepFailure> {
        let load = now.residual.iter().map(|r| -r).collect();
        let mut direction = self.filtered(stage.time_s, load)?;
        let largest = direction.iter().fold(0.0_f64, |m, d| m.max(d.abs()));
        if largest > LARGEST_UPDATE_K {
            for d in &mut direction {
                *d *= LARGEST_UPDATE_K / largest;
            }
        }
        Ok(direction)
    }

    /// Goes along `direction`, all the way if that does not overshoot much, else to where the slope nearly vanishes.
    fn walk(&self, stage: &Stage, now: &Trial, direction: &[f64]) -> Result<Trial, StepFailure> {
        let slope = |trial: &Trial| -> f64 {
            let free = direction.iter().zip(&trial.residual).zip(self.is_held).filter(|(_, held)| !**held);
            free.map(|((d, r), _)| d * r).sum()
        };
        let along = |share: f64| {
            let moved = now.temperature.iter().zip(direction).map(|(t, d)| t + share * d).collect();
            self.trial(stage, moved)
        };
        let start = slope(now);
        let mut best = along(1.0)?;
        if best.norm <= 0.5 * now.norm {
            return Ok(best);
        }
        let (mut low, mut high) = ((0.0, start), (1.0, slope(&best)));
        if high.1 <= 0.5 * start.abs() {
            return Ok(best);
        }
        for cut in 0..MOST_CUTS {
            // Regula falsi and halving in turn: the one is fast, the other certain.
            let falsi = low.0 - low.1 * (high.0 - low.0) / (high.1 - low.1);
            let share = if cut % 2 == 0 && falsi.is_finite() { falsi } else { 0.5 * (low.0 + high.0) };
            best = along(share)?;
            let here = slope(&best);
            if here.abs() <= 0.3 * start.abs() {
                break;
            }
            if here > 0.0 {
                high = (share, here);
            } else {
                low = (share, here);
            }
        }
        Ok(best)
    }

    fn not_converged(&self, stage: &Stage, now: &Trial, iterations: usize) -> StepFailure {
        let free = now.residual.iter().zip(self.is_held).enumerate().filter(|(_, (_, held))| !**held);
        let worst = free.max_by(|a, b| a.1.0.abs().total_cmp(&b.1.0.abs())).map_or(0, |(i, _)| i);
        let [r_m, z_m] = self.operator.space.points()[worst];
        let stored: f64 = now.terms.storage.iter().map(|s| s.abs()).sum();
        StepFailure::NotConverged {
            time_s: stage.time_s,
            iterations,
            relative_residual: now.norm / (stored + stage.weight * now.terms.flows.size()),
            limit: TOLERANCE,
            r_m,
            z_m,
            temperature_k: now.temperature[worst],
        }
    }
}

impl Tangent {
    /// An empty tangent on the plan's pattern.
    pub(super) fn new(plan: &Plan) -> Self {
        Self { matrix: SymmetricMatrix::zeros(Arc::clone(plan.pattern())), factor: None, blocks: Vec::new() }
    }
}

/// Entries off the diagonal that couple a held unknown.
pub(super) fn held_slots(plan: &Plan, is_held: &[bool]) -> Vec<u32> {
    let pattern = plan.pattern();
    let mut slots = Vec::new();
    for col in 0..pattern.n() {
        for (k, &row) in pattern.column(col).iter().enumerate().skip(1) {
            if is_held[col] || is_held[row as usize] {
                slots.push((pattern.starts()[col] + k) as u32);
            }
        }
    }
    slots
}
