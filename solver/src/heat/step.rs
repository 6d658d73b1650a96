//! One time step: two implicit stages, the energy that went where, and the error of the step in kelvin.
//!
//! Stages at `t + gamma dt` and `t + dt`, gamma = 1 - 1/sqrt 2; the second is the new state, so what the stages let
//! through with the weights `1 - gamma` and `gamma` is what was stored, to the accuracy of the solve.
//! Source: R. Alexander, SIAM J. Numer. Anal. 14 (1977) 1006-1021.
//!
//! The error is the difference from the first-order solution with the first stage's rate alone,
//! `gamma dt (rate_2 - rate_1)`, through the inverse of the stage's tangent: stiff components, which both solutions
//! damp, then do not count. The step itself is of second order, so it is usually far better than this estimate.
//! Source of the filter: E. Hairer, G. Wanner, Solving Ordinary Differential Equations II, 2nd ed., Springer 1996,
//! section IV.8.

use std::f64::consts::FRAC_1_SQRT_2;

use super::newton::{LARGEST_UPDATE_K, Stage, StageSolution};
use super::operator::Flows;
use super::problem::HeatProblem;
use super::state::HeatState;
use crate::error::SolveError;
use crate::linalg::LinalgError;
use crate::results::EnergyBalance;

const GAMMA: f64 = 1.0 - FRAC_1_SQRT_2;

/// A step that was solved.
#[derive(Debug, Clone, PartialEq)]
pub struct StepOutcome {
    /// State at its end.
    pub state: HeatState,
    /// Estimated error of a node's temperature in this step, kelvin, the largest.
    pub error_k: f64,
    /// Newton iterations of both stages.
    pub newton_iterations: usize,
    /// Largest change of a node's temperature, kelvin.
    pub largest_change_k: f64,
}

/// Why a step could not be solved; the state it started from is untouched.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum StepFailure {
    /// The step is not a positive number.
    #[error("the step is {step_s} s; it must be a positive number")]
    BadStep {
        /// Step in seconds.
        step_s: f64,
    },
    /// The state belongs to another problem.
    #[error("the state has {found} temperatures; this problem has {expected} unknowns")]
    ForeignState {
        /// Unknowns of the problem.
        expected: usize,
        /// Temperatures of the state.
        found: usize,
    },
    /// The source is NaN or infinite somewhere.
    #[error("the heat source at r = {:.3} mm, z = {:.3} mm is {value} W/m^3 at t = {time_s:.4} s; it must be a finite \
             number", 1e3 * .r_m, 1e3 * .z_m)]
    SourceNotFinite {
        /// Simulated time in seconds.
        time_s: f64,
        /// Radius in metres.
        r_m: f64,
        /// Height in metres.
        z_m: f64,
        /// The value.
        value: f64,
    },
    /// The equations gave NaN or infinity.
    #[error("the heat equations at r = {:.3} mm, z = {:.3} mm are not finite at t = {time_s:.4} s, where the \
             temperature is {temperature_k:.1} K; check the material's curves there", 1e3 * .r_m, 1e3 * .z_m)]
    NotFinite {
        /// Simulated time in seconds.
        time_s: f64,
        /// Radius in metres.
        r_m: f64,
        /// Height in metres.
        z_m: f64,
        /// Temperature in kelvin.
        temperature_k: f64,
    },
    /// Newton's method ran out of iterations.
    #[error("the heat equations at t = {time_s:.4} s are met to {relative_residual:.1e} of the heat moved after \
             {iterations} iterations, {limit:.0e} is needed; worst at r = {:.3} mm, z = {:.3} mm, {temperature_k:.1} K; \
             a shorter step helps", 1e3 * .r_m, 1e3 * .z_m)]
    NotConverged {
        /// Simulated time in seconds.
        time_s: f64,
        /// Iterations done.
        iterations: usize,
        /// Residual over the heat moved in the step.
        relative_residual: f64,
        /// Largest accepted.
        limit: f64,
        /// Radius of the worst node, metres.
        r_m: f64,
        /// Height of the worst node, metres.
        z_m: f64,
        /// Its temperature, kelvin.
        temperature_k: f64,
    },
    /// A linear system could not be solved.
    #[error("the linear system at t = {time_s:.4} s could not be solved: {source}")]
    Linear {
        /// Simulated time in seconds.
        time_s: f64,
        /// What went wrong.
        source: LinalgError,
    },
}

impl StepFailure {
    /// The failure of a run that this is once no shorter step helps: a step of `step_s` from `time_s`, in seconds.
    pub fn into_solve_error(self, time_s: f64, step_s: f64) -> SolveError {
        match self {
            Self::Linear { time_s, source } => SolveError::Linear { system: "heat", time_s, source },
            other => SolveError::HeatStep { time_s, step_s, reason: other.to_string() },
        }
    }

    /// True where a shorter step may succeed.
    pub fn may_be_cured_by_a_shorter_step(&self) -> bool {
        matches!(self, Self::NotConverged { .. } | Self::NotFinite { .. } | Self::Linear { .. })
    }
}

impl HeatProblem {
    /// Goes `dt` seconds on from `state`. `source` writes the heat source in W/m^3 at a time in seconds, element-major,
    /// one value a quadrature point of the space's reference.
    ///
    /// The outcome depends on the arguments alone, not on steps done before.
    ///
    /// # Errors
    /// [`StepFailure`]; a caller halves the step where [`StepFailure::may_be_cured_by_a_shorter_step`].
    pub fn step(
        &mut self,
        state: &HeatState,
        dt: f64,
        source: &dyn Fn(f64, &mut [f64]),
    ) -> Result<StepOutcome, StepFailure> {
        self.check(state, dt)?;
        let times = [state.time_s + GAMMA * dt, state.time_s + dt];
        let sources = [self.source_at(times[0], source)?, self.source_at(times[1], source)?];
        let weight = GAMMA * dt;
        let guess = self.guess(state, weight);
        let mut solver = self.solver();

        let enthalpy = &state.enthalpy_j_per_m3;
        let stage = Stage { time_s: times[0], weight, enthalpy, source: &sources[0], known: &[] };
        let first = solver.solve(&stage, guess, true)?;

        let known: Vec<f64> = first.terms.rate.iter().map(|r| (1.0 - GAMMA) * dt * r).collect();
        let stage = Stage { time_s: times[1], weight, enthalpy, source: &sources[1], known: &known };
        let ahead = state.temperature_k.iter().zip(&first.temperature).map(|(a, b)| a + (b - a) / GAMMA);
        let second = solver.solve(&stage, ahead.collect(), false)?;

        let rates = second.terms.rate.iter().zip(&first.terms.rate);
        let error = solver.filtered(times[1], rates.map(|(b, a)| weight * (b - a)).collect())?;
        let error_k = largest(error.iter().copied());
        let changes = second.temperature.iter().zip(&state.temperature_k).map(|(b, a)| b - a);
        let largest_change_k = largest(changes);
        let newton_iterations = first.iterations + second.iterations;
        let state = self.next_state(state, dt, &first, second);
        Ok(StepOutcome { state, error_k, newton_iterations, largest_change_k })
    }

    fn check(&self, state: &HeatState, dt: f64) -> Result<(), StepFailure> {
        if !(dt > 0.0 && dt.is_finite()) {
            return Err(StepFailure::BadStep { step_s: dt });
        }
        let (expected, found) = (self.space().len(), state.temperature_k.len());
        if expected != found
            || state.rate_k_per_s.len() != expected
            || state.enthalpy_j_per_m3.len() != self.operator().geometry.len()
        {
            return Err(StepFailure::ForeignState { expected, found });
        }
        Ok(())
    }

    /// Temperatures at the first stage, `ahead_s` seconds on, if they went on changing as they did.
    fn guess(&self, state: &HeatState, ahead_s: f64) -> Vec<f64> {
        let pairs = state.temperature_k.iter().zip(&state.rate_k_per_s);
        let step = |rate: &f64| (ahead_s * rate).clamp(-LARGEST_UPDATE_K, LARGEST_UPDATE_K);
        let mut guess: Vec<f64> = pairs.map(|(t, rate)| t + step(rate)).collect();
        for &(unknown, t) in &self.operator().boundary.held {
            guess[unknown as usize] = t;
        }
        guess
    }

    fn source_at(&self, time_s: f64, source: &dyn Fn(f64, &mut [f64])) -> Result<Vec<f64>, StepFailure> {
        let mut values = vec![0.0; self.operator().geometry.len()];
        source(time_s, &mut values);
        match values.iter().position(|v| !v.is_finite()) {
            None => Ok(values),
            Some(at) => {
                let count = self.operator().geometry.points();
                let [r_m, z_m] = self.position(at / count, at % count);
                Err(StepFailure::SourceNotFinite { time_s, r_m, z_m, value: values[at] })
            }
        }
    }

    fn next_state(&self, from: &HeatState, dt: f64, first: &StageSolution, second: StageSolution) -> HeatState {
        let held = &self.operator().boundary.held;
        let temperature_k = second.temperature;
        let enthalpy_j_per_m3 = self.operator().enthalpy(&temperature_k);
        let rates = temperature_k.iter().zip(&first.temperature);
        let rate_k_per_s = rates.map(|(b, a)| (b - a) / ((1.0 - GAMMA) * dt)).collect();
        let inward: f64 = held.iter().map(|&(unknown, _)| second.residual[unknown as usize]).sum();
        let mut energy = from.energy;
        self.account(&mut energy, dt, [first.terms.flows, second.terms.flows], inward);
        self.store(&mut energy, &enthalpy_j_per_m3);
        HeatState { time_s: from.time_s + dt, temperature_k, enthalpy_j_per_m3, rate_k_per_s, energy }
    }

    /// Adds what the stages let through; `inward` is the heat in joules that came in through held faces.
    fn account(&self, energy: &mut EnergyBalance, dt: f64, flows: [Flows; 2], inward: f64) {
        let device = self.device_factor();
        let through = |f: fn(&Flows) -> f64| device * dt * ((1.0 - GAMMA) * f(&flows[0]) + GAMMA * f(&flows[1]));
        energy.supplied_j += through(|f| f.supplied);
        energy.radiated_j += through(|f| f.radiated);
        energy.convected_j += through(|f| f.convected);
        energy.through_flux_faces_j += through(|f| f.through_flux_faces);
        energy.through_held_faces_j -= device * inward;
    }
}

/// Largest size among values; NaN if any is.
fn largest(values: impl Iterator<Item = f64>) -> f64 {
    values.fold(0.0, |m: f64, v| if m.is_nan() || v.is_nan() { f64::NAN } else { m.max(v.abs()) })
}
