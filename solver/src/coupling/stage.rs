//! Stages of a heating: intervals between field solves, switches of the hold, and how a stage ends.

use super::field::FieldSolver;
use super::interval::{Ended, Interval, Tracker};
use super::loss::{FieldState, LossHistory};
use super::record::{Recorder, StepRow};
use crate::error::SolveError;
use crate::fem::element::ElementPoints;
use crate::heat::{HeatProblem, HeatState, StepControl};
use crate::magnetics::properties::PointTemperatures;
use crate::model::{Heating, Hold, Model, Stage, StageEnd};
use crate::observe::{Event, Observer};
use crate::overview::Meshed;
use crate::results::{Outcome, RegionName};

/// Tolerated extrapolation defect of the loss over an interval.
const DEFECT_TOLERANCE: f64 = 0.02;
/// An interval whose defect exceeds the tolerance by this factor is done again.
const REDO_FACTOR: f64 = 4.0;
/// Times an interval may be done again.
const REDO_LIMIT: usize = 8;
/// Temperature rise aimed at in the first interval, kelvin.
const FIRST_RISE_K: f64 = 5.0;
/// Shortest interval, seconds.
const SHORTEST_INTERVAL_S: f64 = 1e-4;
/// A goal counts as met at the start of a stage when the gauge is this close, kelvin.
const GAUGE_MET_K: f64 = 0.01;

/// Temperatures of the heated parts as the magnetics asks for them.
struct HeatedTemperatures<'a> {
    heat: &'a HeatProblem,
    state: &'a HeatState,
    element_of_triangle: &'a [Option<u32>],
}

impl PointTemperatures for HeatedTemperatures<'_> {
    fn is_heated(&self, triangle: usize) -> bool {
        self.element_of_triangle[triangle].is_some()
    }

    fn at(&self, triangle: usize, out: &mut [f64]) {
        if let Some(element) = self.element_of_triangle[triangle] {
            self.heat.temperature_at_points(self.state, element as usize, out);
        }
    }
}

/// A heating under way.
pub(super) struct HeatRun<'a, 'b> {
    pub(super) model: &'a Model,
    pub(super) heating: &'a Heating,
    pub(super) solver: &'b mut FieldSolver<'a>,
    pub(super) heat: HeatProblem,
    pub(super) observer: &'a dyn Observer,
    element_of_triangle: Vec<Option<u32>>,
    pub(super) volumes_m3: Vec<f64>,
}

/// What moves while a heating runs.
pub(super) struct Progress {
    pub(super) state: HeatState,
    pub(super) losses: LossHistory,
    pub(super) control: StepControl,
    pub(super) factor: f64,
    pub(super) interval_s: f64,
    solves_since_switch: usize,
}

impl<'a, 'b> HeatRun<'a, 'b> {
    pub(super) fn new(
        model: &'a Model,
        heating: &'a Heating,
        meshed: &Meshed,
        solver: &'b mut FieldSolver<'a>,
        observer: &'a dyn Observer,
    ) -> Result<Self, SolveError> {
        let heated: Vec<Option<usize>> = meshed
            .layout
            .regions
            .iter()
            .map(|r| match r {
                RegionName::Part(p, _) if model.parts[*p].role.is_heated() => Some(*p),
                _ => None,
            })
            .collect();
        let heat = HeatProblem::new(&meshed.mesh, &meshed.nodes, &heated, model)?;
        let space = heat.space();
        let mut element_of_triangle = vec![None; meshed.mesh.triangles().len()];
        let mut volumes_m3 = Vec::new();
        let mut points = ElementPoints::default();
        for e in 0..space.element_count() {
            element_of_triangle[space.triangle(e)] = Some(e as u32);
            space.fill(e, &mut points);
            volumes_m3.extend(points.points().iter().map(|p| p.volume * solver.operator().copies()));
        }
        solver.set_heated((0..space.element_count()).map(|e| space.triangle(e)).collect());
        Ok(Self { model, heating, solver, heat, observer, element_of_triangle, volumes_m3 })
    }

    /// Runs all stages.
    pub(super) fn run(mut self, recorder: &mut Recorder<'a>) -> Result<Outcome, SolveError> {
        let state = self.heat.start();
        recorder.heat(self.heat.space().len());
        let hold = self.base_hold(&self.heating.stages[0]);
        let first = self.solve(&state, hold)?;
        recorder.watch(self.solver, &first, 1.0);
        recorder.state("start", 0.0, self.solver, &first, 1.0);
        recorder.start(&self, &state, &first);
        let mut now = Progress {
            control: StepControl::new(self.heating.step_tolerance_k),
            losses: LossHistory { last: first, previous: None },
            factor: 1.0,
            interval_s: 0.0,
            solves_since_switch: 1,
            state,
        };
        for index in 0..self.heating.stages.len() {
            let ended_early = self.stage(index, &mut now, recorder).unwrap_or_else(|error| {
                Some(Outcome::NotConverged { time_s: now.state.time_s, reason: error.to_string() })
            });
            if let Some(outcome) = ended_early {
                recorder.end(&self, &now, &format!("end of {} (not finished)", self.heating.stages[index].name));
                return Ok(outcome);
            }
            recorder.held(&self, &now, &self.heating.stages[index]);
            recorder.end(&self, &now, &format!("end of {}", self.heating.stages[index].name));
        }
        Ok(Outcome::Complete)
    }

    /// The hold of a stage without its controller: a gauge hold works below what the supply itself holds.
    fn base_hold(&self, stage: &Stage) -> Hold {
        match stage.hold {
            Some(Hold::GaugeTemperature { .. }) | None => self.model.supply_hold(),
            Some(hold) => hold,
        }
    }

    fn solve(&mut self, state: &HeatState, hold: Hold) -> Result<FieldState, SolveError> {
        let temperatures =
            HeatedTemperatures { heat: &self.heat, state, element_of_triangle: &self.element_of_triangle };
        let solved = self.solver.solve(state.time_s, &temperatures)?;
        let field = self.solver.scaled(solved, hold, state.time_s)?;
        let workpiece_power_w = field.numbers.per.workpiece_power_w * field.scaled.peak * field.scaled.peak;
        let index = self.solver.solves();
        self.observer.event(&Event::FieldSolved { index, time_s: state.time_s, workpiece_power_w });
        Ok(field)
    }

    fn stage(
        &mut self,
        index: usize,
        now: &mut Progress,
        recorder: &mut Recorder<'a>,
    ) -> Result<Option<Outcome>, SolveError> {
        let stage = &self.heating.stages[index];
        let hold = self.base_hold(stage);
        self.switch(now, hold)?;
        let tracker = Tracker::new(stage, &self.heat.gauge_values(&now.state.temperature_k), now.state.time_s);
        self.observer.event(&Event::StageStarted {
            index,
            of: self.heating.stages.len(),
            name: stage.name.clone(),
            time_s: now.state.time_s,
            at_most_s: tracker.end_s - now.state.time_s,
        });
        if index > 0 {
            recorder.switched(self, now, index);
        }
        if tracker.met_at_start(GAUGE_MET_K) {
            return Ok(None);
        }
        loop {
            let (ended, rows) = self.solved_interval(now, hold, &tracker, recorder);
            recorder.rows(self, now, hold, index, rows)?;
            match ended {
                Ended::Goal => return Ok(None),
                Ended::Planned | Ended::Drifted if now.state.time_s < tracker.end_s => {}
                Ended::Planned | Ended::Drifted => return Ok(time_is_up(stage, now)),
                Ended::Stopped => return Ok(Some(Outcome::Stopped { time_s: now.state.time_s })),
                Ended::Failed(reason) => {
                    return Ok(Some(Outcome::NotConverged { time_s: now.state.time_s, reason }));
                }
            }
        }
    }

    /// Switches the hold: solves again where temperatures moved, and forgets the extrapolation where power jumped.
    fn switch(&mut self, now: &mut Progress, hold: Hold) -> Result<(), SolveError> {
        if now.losses.last.time_s < now.state.time_s {
            now.losses.last = self.solve(&now.state, hold)?;
        }
        let scaled = self.solver.scale(&now.losses.last.numbers.per, hold)?;
        now.losses.last.scaled = scaled;
        now.losses.previous = None;
        now.factor = 1.0;
        now.solves_since_switch = 1;
        now.control.restart();
        now.interval_s = self.first_interval(now);
        Ok(())
    }

    /// Time in which the most heated point warms by a few kelvin.
    fn first_interval(&self, now: &Progress) -> f64 {
        let mut loss = vec![0.0; self.volumes_m3.len()];
        now.losses.at(now.state.time_s, 1.0, &mut loss);
        let rate = self.heat.largest_heating_rate_k_per_s(&now.state, &loss);
        if rate > 0.0 { (FIRST_RISE_K / rate).max(2e-3) } else { f64::INFINITY }
    }

    /// One interval and the field solve at its end, done again with a shorter interval while the defect is too large.
    fn solved_interval(
        &mut self,
        now: &mut Progress,
        hold: Hold,
        tracker: &Tracker,
        recorder: &mut Recorder<'a>,
    ) -> (Ended, Vec<StepRow>) {
        let powered = now.losses.last.scaled.peak > 0.0;
        let mut attempts = 0;
        loop {
            let (state, factor, control) = (now.state.clone(), now.factor, now.control.clone());
            let end_s = if powered { (state.time_s + now.interval_s).min(tracker.end_s) } else { tracker.end_s };
            let (ended, rows) = Interval { run: self, tracker, end_s, hold }.run(now, recorder);
            let elapsed = now.state.time_s - state.time_s;
            if !powered || elapsed <= 0.0 {
                return (ended, rows);
            }
            let new = match self.solve(&now.state, hold) {
                Ok(new) => new,
                Err(error) => return (Ended::Failed(error.to_string()), rows),
            };
            let defect = now.losses.defect(&new, &self.volumes_m3);
            let shorter = next_interval(elapsed, defect);
            let again = defect > REDO_FACTOR * DEFECT_TOLERANCE
                && attempts < REDO_LIMIT
                && elapsed > SHORTEST_INTERVAL_S
                && !matches!(ended, Ended::Stopped | Ended::Failed(_));
            if again {
                (now.state, now.factor, now.control) = (state, factor, control);
                now.interval_s = shorter;
                attempts += 1;
                continue;
            }
            self.accept(now, new, elapsed, shorter, recorder);
            return (ended, rows);
        }
    }

    fn accept(&mut self, now: &mut Progress, new: FieldState, elapsed: f64, next: f64, recorder: &mut Recorder<'a>) {
        now.losses.push(new);
        now.solves_since_switch += 1;
        now.interval_s = if now.solves_since_switch < 3 { next.min(elapsed) } else { next };
        now.interval_s = now.interval_s.max(SHORTEST_INTERVAL_S);
        recorder.watch(self.solver, &now.losses.last, now.factor);
    }

    /// Root mean square change of `ln rho` and `ln mu` since the last solve, weighted by the loss.
    pub(super) fn property_drift(&self, now: &Progress, state: &HeatState) -> f64 {
        let last = &now.losses.last;
        let stride = last.properties.stride;
        let mut kelvin = vec![0.0; stride];
        let (mut sum, mut weight) = (0.0, 0.0);
        for e in 0..self.heat.space().element_count() {
            let losses = &last.unit_loss_w_per_m3[e * stride..(e + 1) * stride];
            if losses.iter().all(|&l| l == 0.0) {
                continue;
            }
            let triangle = self.heat.space().triangle(e);
            let material = &self.model.parts[self.heat.part_of_element(e)].material;
            self.heat.temperature_at_points(state, e, &mut kelvin);
            for k in 0..stride {
                let w = losses[k] * self.volumes_m3[e * stride + k];
                let sigma = material.electrical_conductivity_s_per_m(kelvin[k]);
                let mu = material.relative_permeability(kelvin[k]);
                let rho = (last.properties.sigma(triangle)[k] / sigma).ln();
                let nu = (last.properties.nu(triangle)[k] * mu * crate::constants::MU_0).ln();
                sum += w * (rho * rho + nu * nu);
                weight += w;
            }
        }
        if weight > 0.0 { (sum / weight).sqrt() } else { 0.0 }
    }
}

fn time_is_up(stage: &Stage, now: &Progress) -> Option<Outcome> {
    match stage.end {
        StageEnd::After(_) => None,
        StageEnd::GaugeReaches { .. } => {
            Some(Outcome::StageLimit { stage: stage.name.clone(), time_s: now.state.time_s })
        }
    }
}

fn next_interval(elapsed: f64, defect: f64) -> f64 {
    let factor = if defect > 0.0 { 0.9 * (DEFECT_TOLERANCE / defect).sqrt() } else { f64::INFINITY };
    elapsed * factor.clamp(0.3, 1.6)
}
