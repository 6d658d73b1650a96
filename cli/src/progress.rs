//! Progress of long work on the error stream: a live line on a terminal, plain lines in a pipe, or JSON events.
//! The only clock here times how long a stage has taken, to tell when it may end.

use std::io::Write;
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::{Mutex, MutexGuard, PoisonError};
use std::time::{Duration, Instant};

use indicatif::{ProgressBar, ProgressDrawTarget, ProgressStyle};
use serde_json::{Value, json};
use solver::observe::{Event, Observer};

use crate::args::{How, ProgressChoice};
use crate::figures::{degc, seconds, si};

/// Least time between two plain lines.
const PLAIN_INTERVAL: Duration = Duration::from_secs(2);
/// Steps of the bar of a stage.
const BAR_STEPS: u64 = 1000;
/// Part of a stage that must be done before its end is guessed.
const LEAST_DONE_TO_GUESS: f64 = 0.02;

/// How progress is shown, once `auto` is settled.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Manner {
    Live,
    Plain,
    Json,
    Off,
}

impl Manner {
    fn of(how: &How, terminal: bool) -> Self {
        match (how.quiet, how.progress) {
            (_, ProgressChoice::Json) => Self::Json,
            (true, _) | (_, ProgressChoice::Off) => Self::Off,
            (false, ProgressChoice::Auto) if terminal => Self::Live,
            (false, ProgressChoice::Auto | ProgressChoice::Plain) => Self::Plain,
        }
    }
}

/// Shows progress and passes on the wish to stop.
pub struct Progress<'a> {
    manner: Manner,
    stop: &'a AtomicBool,
    inner: Mutex<Inner<'a>>,
}

struct Inner<'a> {
    err: &'a mut (dyn Write + Send),
    bar: Option<ProgressBar>,
    stage: String,
    stage_since: Instant,
    field_solves: usize,
    last_plain: Option<Instant>,
    stop_told: bool,
}

impl<'a> Progress<'a> {
    /// Progress in the manner asked for; `terminal` tells whether `err` is one.
    pub fn new(how: &How, terminal: bool, err: &'a mut (dyn Write + Send), stop: &'a AtomicBool) -> Self {
        let manner = Manner::of(how, terminal);
        let bar = (manner == Manner::Live).then(live_bar);
        let inner = Inner {
            err,
            bar,
            stage: String::new(),
            stage_since: Instant::now(),
            field_solves: 0,
            last_plain: None,
            stop_told: false,
        };
        Self { manner, stop, inner: Mutex::new(inner) }
    }

    /// Takes the live line away.
    pub fn finish(&self) {
        if let Some(bar) = self.lock().bar.take() {
            bar.finish_and_clear();
        }
    }

    fn lock(&self) -> MutexGuard<'_, Inner<'a>> {
        self.inner.lock().unwrap_or_else(PoisonError::into_inner)
    }
}

impl Observer for Progress<'_> {
    fn event(&self, event: &Event) {
        let mut inner = self.lock();
        inner.note(event);
        match self.manner {
            Manner::Off => {}
            Manner::Json => inner.line(&as_json(event).to_string()),
            Manner::Plain => inner.plain(event),
            Manner::Live => inner.live(event),
        }
        if self.stop.load(Ordering::Relaxed) && !inner.stop_told {
            inner.stop_told = true;
            inner.tell_stop(self.manner);
        }
    }

    fn stop_requested(&self) -> bool {
        self.stop.load(Ordering::Relaxed)
    }
}

impl Inner<'_> {
    fn note(&mut self, event: &Event) {
        match event {
            Event::StageStarted { index, of, name, .. } => {
                self.stage = if *of > 1 { format!("{name} ({} of {of})", index + 1) } else { name.clone() };
                self.stage_since = Instant::now();
            }
            Event::FieldSolved { index, .. } => self.field_solves = *index,
            Event::Meshed { .. } | Event::HeatStep { .. } => {}
        }
    }

    /// A line on the error stream; what cannot be shown is no reason to stop the work.
    fn line(&mut self, text: &str) {
        let _ = writeln!(self.err, "{text}").and_then(|()| self.err.flush());
    }

    fn plain(&mut self, event: &Event) {
        let due = self.last_plain.is_none_or(|last| last.elapsed() >= PLAIN_INTERVAL);
        let always = matches!(event, Event::Meshed { .. } | Event::StageStarted { .. });
        if due || always {
            let text = self.sentence(event);
            self.line(&text);
            self.last_plain = Some(Instant::now());
        }
    }

    fn live(&mut self, event: &Event) {
        let text = self.sentence(event);
        let Some(bar) = &self.bar else { return };
        match event {
            Event::HeatStep { stage_done, .. } => {
                bar.set_position((stage_done.clamp(0.0, 1.0) * BAR_STEPS as f64) as u64);
            }
            Event::StageStarted { .. } => bar.set_position(0),
            Event::Meshed { .. } | Event::FieldSolved { .. } => {}
        }
        bar.set_message(text);
    }

    fn sentence(&self, event: &Event) -> String {
        match event {
            Event::Meshed { triangles, unknowns } => format!("mesh: {triangles} triangles, {unknowns} unknowns"),
            Event::FieldSolved { index, time_s, workpiece_power_w } => {
                let power = si(*workpiece_power_w, "W");
                format!("{}t = {}, field solve {index}, {power} in the work", self.stage_prefix(), seconds(*time_s))
            }
            Event::StageStarted { name, time_s, at_most_s, .. } => {
                let longest =
                    if at_most_s.is_finite() { format!(", at most {}", seconds(*at_most_s)) } else { String::new() };
                let stage = if self.stage.is_empty() { name } else { &self.stage };
                format!("stage {stage} starts at t = {}{longest}", seconds(*time_s))
            }
            Event::HeatStep { time_s, step_s, hottest_k, largest_change_k, field_solves, stage_done } => format!(
                "{}t = {}, hottest {}, dT {largest_change_k:.1} K in {}, {field_solves} field solves{}",
                self.stage_prefix(),
                seconds(*time_s),
                degc(*hottest_k),
                seconds(*step_s),
                self.guess(*stage_done),
            ),
        }
    }

    fn stage_prefix(&self) -> String {
        if self.stage.is_empty() { String::new() } else { format!("{}: ", self.stage) }
    }

    /// How far the stage is and when it may end, by the wall time it has taken so far.
    fn guess(&self, done: f64) -> String {
        if !(LEAST_DONE_TO_GUESS..=1.0).contains(&done) {
            return String::new();
        }
        let left_s = self.stage_since.elapsed().as_secs_f64() * (1.0 - done) / done;
        format!(", {:.0} % of the stage, ETA {left_s:.0} s", 100.0 * done)
    }

    fn tell_stop(&mut self, manner: Manner) {
        let text = "stopping at the end of this step; what is there will be kept (Ctrl-C again kills)";
        match (manner, &self.bar) {
            (Manner::Live, Some(bar)) => bar.println(text),
            (Manner::Json, _) => self.line(&json!({ "event": "stopping" }).to_string()),
            _ => self.line(text),
        }
    }
}

fn live_bar() -> ProgressBar {
    let bar = ProgressBar::with_draw_target(Some(BAR_STEPS), ProgressDrawTarget::stderr());
    if let Ok(style) = ProgressStyle::with_template("{bar:24} {wide_msg}") {
        bar.set_style(style);
    }
    bar
}

/// An event as a JSON object, keys with units; times are simulated.
fn as_json(event: &Event) -> Value {
    match event {
        Event::Meshed { triangles, unknowns } => {
            json!({ "event": "meshed", "triangles": triangles, "unknowns": unknowns })
        }
        Event::FieldSolved { index, time_s, workpiece_power_w } => json!({
            "event": "field_solved", "index": index, "time_s": time_s, "workpiece_power_w": workpiece_power_w,
        }),
        Event::StageStarted { index, of, name, time_s, at_most_s } => json!({
            "event": "stage_started", "index": index, "of": of, "name": name, "time_s": time_s, "at_most_s": at_most_s,
        }),
        Event::HeatStep { time_s, step_s, hottest_k, largest_change_k, field_solves, stage_done } => json!({
            "event": "heat_step", "time_s": time_s, "step_s": step_s,
            "hottest_degc": hottest_k - solver::constants::ZERO_CELSIUS_K, "largest_change_k": largest_change_k,
            "field_solves": field_solves, "stage_done": stage_done,
        }),
    }
}

#[cfg(test)]
mod tests {
    #![allow(clippy::unwrap_used, reason = "tests")]

    use std::sync::atomic::{AtomicBool, Ordering};

    use solver::observe::{Event, Observer};

    use super::Progress;
    use crate::args::{How, ProgressChoice};

    const STEP: Event = Event::HeatStep {
        time_s: 12.5,
        step_s: 0.5,
        hottest_k: 1073.15,
        largest_change_k: 20.0,
        field_solves: 7,
        stage_done: 0.5,
    };

    fn shown(progress: ProgressChoice, quiet: bool, events: &[Event], stop: &AtomicBool) -> String {
        let mut err = Vec::new();
        let how = How { threads: None, progress, quiet };
        let shown = Progress::new(&how, false, &mut err, stop);
        for event in events {
            shown.event(event);
        }
        shown.finish();
        drop(shown);
        String::from_utf8(err).unwrap()
    }

    #[test]
    fn json_progress_is_one_object_a_line_with_units_in_its_keys() {
        let meshed = Event::Meshed { triangles: 10, unknowns: 21 };
        let text = shown(ProgressChoice::Json, false, &[meshed, STEP], &AtomicBool::new(false));
        let lines: Vec<serde_json::Value> = text.lines().map(|line| serde_json::from_str(line).unwrap()).collect();
        assert_eq!(lines.len(), 2);
        assert_eq!(lines[0]["event"], "meshed");
        assert_eq!(lines[0]["triangles"], 10);
        assert!((lines[1]["hottest_degc"].as_f64().unwrap() - 800.0).abs() < 1e-9, "{text}");
        assert_eq!(lines[1]["time_s"], 12.5);
    }

    #[test]
    fn plain_progress_is_limited_in_rate_but_tells_every_stage() {
        let stage = |index: usize, name: &str| Event::StageStarted {
            index,
            of: 2,
            name: name.to_owned(),
            time_s: 0.0,
            at_most_s: 600.0,
        };
        let mut events = vec![stage(0, "heat")];
        events.extend(std::iter::repeat_n(STEP, 50));
        events.push(stage(1, "soak"));
        let text = shown(ProgressChoice::Auto, false, &events, &AtomicBool::new(false));
        assert!(text.contains("stage heat (1 of 2) starts"), "{text}");
        assert!(text.contains("stage soak (2 of 2) starts"), "{text}");
        assert!(text.lines().count() <= 5, "{text}");
    }

    #[test]
    fn quiet_and_off_show_nothing() {
        let never = AtomicBool::new(false);
        assert_eq!(shown(ProgressChoice::Auto, true, &[STEP], &never), "");
        assert_eq!(shown(ProgressChoice::Off, false, &[STEP], &never), "");
    }

    #[test]
    fn a_wish_to_stop_is_passed_on_and_told_once() {
        let stop = AtomicBool::new(false);
        let how = How { threads: None, progress: ProgressChoice::Plain, quiet: false };
        let mut err = Vec::new();
        let progress = Progress::new(&how, false, &mut err, &stop);
        assert!(!progress.stop_requested());
        stop.store(true, Ordering::Relaxed);
        assert!(progress.stop_requested());
        progress.event(&STEP);
        progress.event(&STEP);
        drop(progress);
        let text = String::from_utf8(err).unwrap();
        assert_eq!(text.matches("stopping at the end of this step").count(), 1, "{text}");
    }
}
