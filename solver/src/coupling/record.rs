//! Keeps what a run is asked for afterwards: rows, states, maxima, maps, warnings.

use std::sync::Arc;

use super::field::FieldSolver;
use super::loss::FieldState;
use super::stage::{HeatRun, Progress};
use crate::constants::ZERO_CELSIUS_K;
use crate::error::SolveError;
use crate::heat::HeatState;
use crate::magnetics::drive::PerAmpere;
use crate::model::{Hold, Model, Stage};
use crate::results::{
    Counts, EnergyBalance, FieldMaps, HistoryRow, Outcome, PartTemperatures, Results, Section, Snapshot, State,
    SupplyLimit, Terminals, TurnRow, Warning, WarningKind,
};
use crate::warnings::{self, Warnings};

/// A map is kept when some node has moved this far since the last one, kelvin.
const MAP_EVERY_K: f64 = 100.0;
/// A gauge this close to what a stage holds counts as held, kelvin.
const HELD_WITHIN_K: f64 = 5.0;

/// A heat step before its electrical numbers are known.
pub(super) struct StepRow {
    time_s: f64,
    pub(super) gauges_k: Vec<f64>,
    parts: Vec<PartTemperatures>,
    pub(super) hottest_k: f64,
    factor: f64,
    energy: EnergyBalance,
    temperature_k: Arc<Vec<f64>>,
}

impl StepRow {
    pub(super) fn new(run: &HeatRun<'_, '_>, now: &Progress) -> Self {
        let state = &now.state;
        Self {
            time_s: state.time_s,
            gauges_k: run.heat.gauge_values(&state.temperature_k),
            parts: run.heat.part_temperatures(state),
            hottest_k: state.temperature_k.iter().copied().fold(0.0, f64::max),
            factor: now.factor,
            energy: state.energy,
            temperature_k: Arc::new(state.temperature_k.clone()),
        }
    }
}

/// The largest value of one electrical quantity so far, and its state.
struct Maximum {
    label: &'static str,
    value: fn(&Terminals) -> f64,
    at: Option<(f64, State)>,
}

/// Collects results.
pub(super) struct Recorder<'a> {
    model: &'a Model,
    warnings: Warnings,
    states: Vec<State>,
    maxima: Vec<Maximum>,
    history: Vec<HistoryRow>,
    snapshots: Vec<Snapshot>,
    turns: Vec<TurnRow>,
    peak_temperature_k: Vec<f64>,
    counts: Counts,
    mapped_k: Vec<f64>,
    last_maps: Option<(f64, Arc<FieldMaps>)>,
    last_per: Option<(f64, PerAmpere, f64)>,
    curie_crossed: Vec<[bool; 2]>,
}

impl<'a> Recorder<'a> {
    pub(super) fn new(model: &'a Model, warnings: Vec<Warning>) -> Self {
        let maximum = |label, value| Maximum { label, value, at: None };
        Self {
            model,
            warnings: Warnings::new(warnings),
            states: Vec::new(),
            maxima: vec![
                maximum("greatest voltage", |t| t.voltage_v_rms),
                maximum("greatest current", |t| t.current_a_rms),
                maximum("greatest active power", |t| t.power_w),
                maximum("greatest reactive power", |t| t.reactive_power_var),
            ],
            history: Vec::new(),
            snapshots: Vec::new(),
            turns: Vec::new(),
            peak_temperature_k: Vec::new(),
            counts: Counts::default(),
            mapped_k: Vec::new(),
            last_maps: None,
            last_per: None,
            curie_crossed: vec![[false; 2]; model.parts.len()],
        }
    }

    pub(super) fn mesh(&mut self, triangles: usize, unknowns: usize) {
        self.counts.triangles = triangles;
        self.counts.field_unknowns = unknowns;
    }

    pub(super) fn heat(&mut self, unknowns: usize) {
        self.counts.heat_unknowns = unknowns;
    }

    pub(super) fn rejected(&mut self) {
        self.counts.heat_steps_rejected += 1;
    }

    pub(super) fn newton(&mut self, iterations: usize) {
        self.counts.newton_iterations += iterations;
    }

    /// Adds an electrical state to the table.
    pub(super) fn state(
        &mut self,
        label: &str,
        time_s: f64,
        solver: &FieldSolver<'_>,
        field: &FieldState,
        factor: f64,
    ) {
        let state = State { time_s, ..self.make_state(label, solver, field, factor) };
        let peak = field.scaled.peak * factor.sqrt();
        self.turns = field.numbers.turns(solver.operator(), self.model, peak);
        self.states.push(state);
    }

    fn make_state(&self, label: &str, solver: &FieldSolver<'_>, field: &FieldState, factor: f64) -> State {
        State {
            time_s: field.time_s,
            label: label.to_owned(),
            frequency_hz: self.model.drive.frequency_hz(),
            limited_by: field.scaled.limited_by.filter(|_| factor >= 1.0),
            electrical: field.numbers.electrical(solver.operator(), self.model, field.scaled.peak * factor.sqrt()),
        }
    }

    /// Looks at a new field solve: greatest values, limits, checks.
    pub(super) fn watch(&mut self, solver: &FieldSolver<'_>, field: &FieldState, factor: f64) {
        let state = self.make_state("", solver, field, factor);
        warnings::of_state(&state.electrical, &mut self.warnings);
        if let Some(limit) = state.limited_by {
            self.supply_limit(limit, field.time_s);
        }
        let Some(terminals) = state.electrical.terminals else { return };
        for maximum in &mut self.maxima {
            let value = (maximum.value)(&terminals);
            if maximum.at.as_ref().is_none_or(|(best, _)| value > *best) {
                maximum.at = Some((value, State { label: maximum.label.to_owned(), ..state.clone() }));
            }
        }
    }

    fn supply_limit(&mut self, limit: SupplyLimit, time_s: f64) {
        let what = match limit {
            SupplyLimit::Voltage => "voltage",
            SupplyLimit::Current => "current",
            SupplyLimit::Power => "power",
        };
        let known = |w: &Warning| w.kind == WarningKind::SupplyLimit && w.text.contains(what);
        if !self.warnings.any(known) {
            let text = format!("the supply is at its {what} limit from t = {time_s:.2} s: it gives less than is held");
            self.warnings.add(WarningKind::SupplyLimit, text);
        }
    }

    /// First row of the history and first map.
    pub(super) fn start(&mut self, run: &HeatRun<'_, '_>, state: &HeatState, field: &FieldState) {
        let space = run.heat.space();
        self.peak_temperature_k = vec![f64::NAN; run.solver.operator().space().len()];
        for (&node, &t) in space.mesh_nodes().iter().zip(&state.temperature_k) {
            self.peak_temperature_k[node as usize] = t;
        }
        self.mapped_k.clone_from(&state.temperature_k);
        for t in run.heat.part_temperatures(state) {
            if let Some(magnetic) = &self.model.parts[t.part].material.magnetic {
                self.curie_crossed[t.part] = [t.max_k >= magnetic.curie_k, t.min_k >= magnetic.curie_k];
            }
        }
        let per = field.numbers.per;
        self.last_per = Some((field.time_s, per, field.numbers.coil_loss_w(run.solver.operator())));
        let power = per.workpiece_power_w * field.scaled.peak * field.scaled.peak;
        let coil = field.numbers.coil_loss_w(run.solver.operator()) * field.scaled.peak * field.scaled.peak;
        self.history.push(HistoryRow {
            time_s: 0.0,
            stage: 0,
            gauges_k: run.heat.gauge_values(&state.temperature_k),
            parts: run.heat.part_temperatures(state),
            workpiece_power_w: power,
            terminals: run_terminals(run, &per, field.scaled.peak),
            coil_loss_w: coil,
            energy: state.energy,
        });
        self.map(run, "start", field, 1.0, state);
    }

    /// Rows of an accepted interval; the impedance between its two solves is interpolated.
    pub(super) fn rows(
        &mut self,
        run: &HeatRun<'_, '_>,
        now: &Progress,
        hold: Hold,
        stage: usize,
        rows: Vec<StepRow>,
    ) -> Result<(), SolveError> {
        let operator = run.solver.operator();
        let new = (now.losses.last.time_s, now.losses.last.numbers.per, now.losses.last.numbers.coil_loss_w(operator));
        let old = self.last_per.unwrap_or(new);
        let at = |time_s: f64, factor: f64| -> Result<Moment, SolveError> {
            let share = if new.0 > old.0 { ((time_s - old.0) / (new.0 - old.0)).clamp(0.0, 1.0) } else { 1.0 };
            let per = between(&old.1, &new.1, share);
            let peak = run.solver.scale(&per, hold)?.peak * factor.sqrt();
            Ok(Moment { per, peak, coil_loss_w: (old.2 + share * (new.2 - old.2)) * peak * peak })
        };
        let mut begin_s = self.history.last().map_or(0.0, |h| h.time_s);
        for row in rows {
            let (begin, end) = (at(begin_s, row.factor)?, at(row.time_s, row.factor)?);
            let drawn_j = 0.5 * (begin.terminal_power_w() + end.terminal_power_w()) * (row.time_s - begin_s);
            begin_s = row.time_s;
            self.counts.heat_steps += 1;
            self.row(run, stage, row, &end, drawn_j);
        }
        self.last_per = Some(new);
        self.counts.field_solves = run.solver.solves();
        self.curie(run, now);
        let moved = now.state.temperature_k.iter().zip(&self.mapped_k).any(|(a, b)| (a - b).abs() > MAP_EVERY_K);
        if moved && now.losses.last.time_s >= now.state.time_s {
            self.map(run, "", &now.losses.last, now.factor, &now.state);
        }
        Ok(())
    }

    /// The row at the switch to a later stage: the temperatures of its start under its own hold.
    pub(super) fn switched(&mut self, run: &HeatRun<'_, '_>, now: &Progress, stage: usize) {
        let field = &now.losses.last;
        let coil_loss_w = field.numbers.coil_loss_w(run.solver.operator()) * field.scaled.peak * field.scaled.peak;
        let moment = Moment { per: field.numbers.per, peak: field.scaled.peak, coil_loss_w };
        self.row(run, stage, StepRow::new(run, now), &moment, 0.0);
    }

    fn row(&mut self, run: &HeatRun<'_, '_>, stage: usize, row: StepRow, moment: &Moment, drawn_j: f64) {
        let mut energy = row.energy;
        energy.terminal_j = self.history.last().map_or(0.0, |h| h.energy.terminal_j) + drawn_j;
        for (&node, &t) in run.heat.space().mesh_nodes().iter().zip(row.temperature_k.iter()) {
            let slot = &mut self.peak_temperature_k[node as usize];
            *slot = slot.max(t);
        }
        self.history.push(HistoryRow {
            time_s: row.time_s,
            stage,
            gauges_k: row.gauges_k,
            parts: row.parts,
            workpiece_power_w: moment.per.workpiece_power_w * moment.peak * moment.peak,
            terminals: run_terminals(run, &moment.per, moment.peak),
            coil_loss_w: moment.coil_loss_w,
            energy,
        });
    }

    /// Records when the hottest and the coldest place of a magnetic part pass its Curie point.
    fn curie(&mut self, run: &HeatRun<'_, '_>, now: &Progress) {
        for t in run.heat.part_temperatures(&now.state) {
            let part = &self.model.parts[t.part];
            let Some(magnetic) = part.material.magnetic.as_ref() else { continue };
            for (k, (value, place)) in [(t.max_k, "surface"), (t.min_k, "core")].into_iter().enumerate() {
                if value < magnetic.curie_k || self.curie_crossed[t.part][k] {
                    continue;
                }
                self.curie_crossed[t.part][k] = true;
                let word = if k == 0 { "hottest" } else { "coldest" };
                let text = format!(
                    "part `{}`: its {word} place passed the Curie point ({:.0} °C) before t = {:.2} s",
                    part.name,
                    magnetic.curie_k - ZERO_CELSIUS_K,
                    now.state.time_s
                );
                self.warnings.add(WarningKind::Curie, text);
                self.state(
                    &format!("{place} of {} at Curie", part.name),
                    now.state.time_s,
                    run.solver,
                    &now.losses.last,
                    now.factor,
                );
            }
        }
    }

    /// Warns where a stage that holds a gauge did not bring it there.
    pub(super) fn held(&mut self, run: &HeatRun<'_, '_>, now: &Progress, stage: &Stage) {
        let Some(Hold::GaugeTemperature { gauge, at_k }) = stage.hold else { return };
        let miss = run.heat.gauge_values(&now.state.temperature_k)[gauge] - at_k;
        if miss.abs() <= HELD_WITHIN_K {
            return;
        }
        let side = if miss < 0.0 { "below; the supply gives no more" } else { "above; it cools no faster" };
        let text = format!(
            "stage `{}`: gauge `{}` was to be held at {:.0} °C but ended {:.0} K {side}",
            stage.name,
            self.model.gauges[gauge].name,
            at_k - ZERO_CELSIUS_K,
            miss.abs()
        );
        self.warnings.add(WarningKind::HoldMissed, text);
    }

    /// End of a stage: a state and a map.
    pub(super) fn end(&mut self, run: &HeatRun<'_, '_>, now: &Progress, label: &str) {
        self.counts.field_solves = run.solver.solves();
        self.state(label, now.state.time_s, run.solver, &now.losses.last, now.factor);
        self.map(run, label, &now.losses.last, now.factor, &now.state);
    }

    fn map(&mut self, run: &HeatRun<'_, '_>, label: &str, field: &FieldState, factor: f64, state: &HeatState) {
        self.mapped_k.clone_from(&state.temperature_k);
        let mut temperature_k = vec![f64::NAN; run.solver.operator().space().len()];
        for (&node, &t) in run.heat.space().mesh_nodes().iter().zip(&state.temperature_k) {
            temperature_k[node as usize] = t;
        }
        self.snapshot(label, state.time_s, run.solver, field, factor, temperature_k);
    }

    /// Keeps the maps of a moment.
    pub(super) fn snapshot(
        &mut self,
        label: &str,
        time_s: f64,
        solver: &FieldSolver<'_>,
        field: &FieldState,
        factor: f64,
        temperature_k: Vec<f64>,
    ) {
        let maps = match &self.last_maps {
            Some((time, maps)) if *time == field.time_s => Arc::clone(maps),
            _ => Arc::new(solver.maps(field)),
        };
        self.last_maps = Some((field.time_s, Arc::clone(&maps)));
        let label = if label.is_empty() { format!("t = {time_s:.1} s") } else { label.to_owned() };
        let field_factor = field.scaled.peak * factor.sqrt();
        self.snapshots.push(Snapshot { time_s, label, field: maps, field_factor, temperature_k });
    }

    /// Puts the results together.
    pub(super) fn finish(mut self, outcome: Outcome, section: Section, solver: &FieldSolver<'_>) -> Results {
        self.counts.field_solves = solver.solves();
        for (p, part) in self.model.parts.iter().enumerate() {
            let own = || self.history.iter().flat_map(|h| &h.parts).filter(|t| t.part == p);
            let lowest_k = own().map(|t| t.min_k).fold(part.start_k, f64::min);
            let highest_k = own().map(|t| t.max_k).fold(part.start_k, f64::max);
            warnings::of_temperatures(part, lowest_k, highest_k, &mut self.warnings);
        }
        for maximum in self.maxima.into_iter().filter(|_| self.model.heating.is_some()) {
            self.states.extend(maximum.at.map(|(_, state)| state));
        }
        Results {
            title: self.model.title.clone(),
            outcome,
            warnings: self.warnings.into_vec(),
            section,
            states: self.states,
            energy: self.history.last().map(|h| h.energy),
            history: self.history,
            turns: self.turns,
            snapshots: self.snapshots,
            peak_temperature_k: self.peak_temperature_k,
            counts: self.counts,
        }
    }
}

/// Electrical numbers at one moment between two field solves.
struct Moment {
    per: PerAmpere,
    peak: f64,
    coil_loss_w: f64,
}

impl Moment {
    fn terminal_power_w(&self) -> f64 {
        self.per.terminal_power_w * self.peak * self.peak
    }
}

fn between(a: &PerAmpere, b: &PerAmpere, share: f64) -> PerAmpere {
    let mix = |x: f64, y: f64| x + share * (y - x);
    PerAmpere {
        impedance_ohm: a.impedance_ohm + (b.impedance_ohm - a.impedance_ohm) * share,
        workpiece_power_w: mix(a.workpiece_power_w, b.workpiece_power_w),
        terminal_power_w: mix(a.terminal_power_w, b.terminal_power_w),
    }
}

fn run_terminals(run: &HeatRun<'_, '_>, per: &PerAmpere, peak: f64) -> Option<Terminals> {
    (!run.model.coils.is_empty())
        .then(|| crate::magnetics::report::terminals(per.impedance_ohm, run.solver.operator().omega(), peak))
}
