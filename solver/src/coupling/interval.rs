//! Heat steps between two field solves: step control, the gauge controller, and events located in time.

use super::record::{Recorder, StepRow};
use super::stage::{HeatRun, Progress};
use crate::heat::{HeatState, StepFailure, StepOutcome};
use crate::model::{Hold, Stage, StageEnd};
use crate::observe::Event;

/// A node that moved this far since the last solve ends the interval, kelvin.
const NODE_CHANGE_K: f64 = 25.0;
/// A loss-weighted change of `ln rho` and `ln mu` by this much ends the interval.
const DRIFT: f64 = 0.1;
/// A goal is met when the gauge is this close, kelvin.
const EVENT_TOLERANCE_K: f64 = 0.01;
/// Tries to land on an event.
const EVENT_TRIES: usize = 20;
/// Shortest heat step, seconds.
const SHORTEST_STEP_S: f64 = 1e-7;

/// Why an interval ended.
pub(super) enum Ended {
    /// Its planned end, or the end of the stage, was reached.
    Planned,
    /// Temperatures or properties moved far enough to solve the field again.
    Drifted,
    /// The stage's gauge reached its goal.
    Goal,
    /// A stop was asked for.
    Stopped,
    /// A step could not be completed.
    Failed(String),
}

/// When a stage ends.
pub(super) struct Tracker {
    pub(super) end_s: f64,
    start_s: f64,
    goal: Option<(usize, f64)>,
    control: Option<(usize, f64)>,
    start_gauge_k: f64,
}

impl Tracker {
    pub(super) fn new(stage: &Stage, gauges_k: &[f64], time_s: f64) -> Self {
        let (length, goal) = match stage.end {
            StageEnd::After(s) => (s, None),
            StageEnd::GaugeReaches { gauge, at_k, at_most_s } => (at_most_s, Some((gauge, at_k))),
        };
        let control = match stage.hold {
            Some(Hold::GaugeTemperature { gauge, at_k }) => Some((gauge, at_k)),
            _ => None,
        };
        let start_gauge_k = goal.map_or(0.0, |(g, _)| gauges_k[g]);
        Self { end_s: time_s + length, start_s: time_s, goal, control, start_gauge_k }
    }

    /// True where the goal is met already.
    pub(super) fn met_at_start(&self, within_k: f64) -> bool {
        self.goal.is_some_and(|(_, at)| (self.start_gauge_k - at).abs() <= within_k)
    }

    /// Part of the stage that is done, 0 to 1.
    fn done(&self, time_s: f64, gauges_k: &[f64]) -> f64 {
        let by_time = (time_s - self.start_s) / (self.end_s - self.start_s);
        let by_goal = self.goal.map_or(0.0, |(g, at)| (gauges_k[g] - self.start_gauge_k) / (at - self.start_gauge_k));
        by_time.max(by_goal).clamp(0.0, 1.0)
    }
}

/// Heat steps up to `end_s`.
pub(super) struct Interval<'r, 'a, 'b> {
    pub(super) run: &'r mut HeatRun<'a, 'b>,
    pub(super) tracker: &'r Tracker,
    pub(super) end_s: f64,
    pub(super) hold: Hold,
}

impl Interval<'_, '_, '_> {
    /// Steps until the interval ends; accepted steps are in the rows.
    pub(super) fn run(mut self, now: &mut Progress, recorder: &mut Recorder<'_>) -> (Ended, Vec<StepRow>) {
        let begin = now.state.temperature_k.clone();
        let mut rows = Vec::new();
        while now.state.time_s < self.end_s * (1.0 - 1e-12) {
            if self.run.observer.stop_requested() {
                return (Ended::Stopped, rows);
            }
            let remaining = self.end_s - now.state.time_s;
            let dt = remaining / (remaining / now.control.step_s()).ceil().max(1.0);
            let outcome = match self.step(now, dt) {
                Ok(outcome) => outcome,
                Err(failure) => {
                    recorder.rejected();
                    now.control.failed(dt);
                    if dt < SHORTEST_STEP_S {
                        return (Ended::Failed(failure.to_string()), rows);
                    }
                    continue;
                }
            };
            recorder.newton(outcome.newton_iterations);
            if !now.control.accepts(dt, outcome.error_k) && dt > SHORTEST_STEP_S {
                recorder.rejected();
                continue;
            }
            let (outcome, goal) = self.at_goal(now, dt, outcome);
            now.state = outcome.state;
            rows.push(self.row(now, outcome.largest_change_k));
            if goal {
                return (Ended::Goal, rows);
            }
            if self.drifted(now, &begin) {
                return (Ended::Drifted, rows);
            }
        }
        (Ended::Planned, rows)
    }

    fn row(&self, now: &Progress, largest_change_k: f64) -> StepRow {
        let row = StepRow::new(self.run, now);
        self.run.observer.event(&Event::HeatStep {
            time_s: now.state.time_s,
            step_s: now.control.step_s(),
            hottest_k: row.hottest_k,
            largest_change_k,
            field_solves: self.run.solver.solves(),
            stage_done: self.tracker.done(now.state.time_s, &row.gauges_k),
        });
        row
    }

    fn drifted(&self, now: &Progress, begin: &[f64]) -> bool {
        if self.hold == Hold::Off {
            return false;
        }
        let moved = now.state.temperature_k.iter().zip(begin).any(|(a, b)| (a - b).abs() > NODE_CHANGE_K);
        moved || self.run.property_drift(now, &now.state) > DRIFT
    }

    /// A step with the controller's factor where a gauge is held.
    fn step(&mut self, now: &mut Progress, dt: f64) -> Result<StepOutcome, StepFailure> {
        let Some((gauge, at_k)) = self.tracker.control else { return self.plain(now, dt, now.factor) };
        let off = self.plain(now, dt, 0.0)?;
        let reading = |s: &HeatState, run: &HeatRun| run.heat.gauge_values(&s.temperature_k)[gauge];
        let cold = reading(&off.state, self.run);
        let guess = if now.factor > 0.0 { now.factor } else { 1.0 };
        let on = self.plain(now, dt, guess)?;
        let hot = reading(&on.state, self.run);
        let factor = if hot > cold { (guess * (at_k - cold) / (hot - cold)).clamp(0.0, 1.0) } else { 0.0 };
        now.factor = factor;
        self.plain(now, dt, factor)
    }

    fn plain(&mut self, now: &Progress, dt: f64, factor: f64) -> Result<StepOutcome, StepFailure> {
        let losses = &now.losses;
        self.run.heat.step(&now.state, dt, &|time, out| losses.at(time, factor, out))
    }

    /// Shortens a step that passes the stage's goal so that it ends there.
    fn at_goal(&mut self, now: &Progress, dt: f64, outcome: StepOutcome) -> (StepOutcome, bool) {
        let Some((gauge, at_k)) = self.tracker.goal else { return (outcome, false) };
        let rising = self.tracker.start_gauge_k < at_k;
        let miss = |run: &HeatRun, state: &HeatState| {
            let d = run.heat.gauge_values(&state.temperature_k)[gauge] - at_k;
            if rising { d } else { -d }
        };
        let mut high = (dt, miss(self.run, &outcome.state));
        if high.1 < 0.0 {
            return (outcome, false);
        }
        let mut low = (0.0, miss(self.run, &now.state));
        let mut best = outcome;
        for _ in 0..EVENT_TRIES {
            if high.1 <= EVENT_TOLERANCE_K {
                break;
            }
            let secant = low.0 + (high.0 - low.0) * (0.5 * EVENT_TOLERANCE_K - low.1) / (high.1 - low.1);
            let span = high.0 - low.0;
            let try_s = secant.clamp(low.0 + 0.02 * span, high.0 - 0.02 * span);
            let Ok(shorter) = self.plain(now, try_s, now.factor) else { break };
            let value = miss(self.run, &shorter.state);
            if value < 0.0 {
                low = (try_s, value);
            } else {
                high = (try_s, value);
                best = shorter;
            }
        }
        (best, true)
    }
}
