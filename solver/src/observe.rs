//! What long work tells its caller while it runs, and how the caller stops it.

/// Something that happened; times are simulated seconds.
#[derive(Debug, Clone, PartialEq)]
pub enum Event {
    /// The mesh is ready.
    Meshed {
        /// Number of triangles.
        triangles: usize,
        /// Number of unknowns of the field solve.
        unknowns: usize,
    },
    /// A field solve is done.
    FieldSolved {
        /// Which one, from 1.
        index: usize,
        /// Simulated time in seconds.
        time_s: f64,
        /// Power in the workpieces in watts.
        workpiece_power_w: f64,
    },
    /// A stage begins.
    StageStarted {
        /// Index of the stage.
        index: usize,
        /// Number of stages.
        of: usize,
        /// Name of the stage.
        name: String,
        /// Simulated time in seconds at its start.
        time_s: f64,
        /// Longest it may last, in seconds.
        at_most_s: f64,
    },
    /// A heat step was accepted.
    HeatStep {
        /// Simulated time in seconds at its end.
        time_s: f64,
        /// Length in seconds.
        step_s: f64,
        /// Hottest temperature in kelvin.
        hottest_k: f64,
        /// Largest change of temperature in the step, kelvin.
        largest_change_k: f64,
        /// Field solves so far.
        field_solves: usize,
        /// Part of the stage that is done, 0 to 1, where it can be told.
        stage_done: f64,
    },
}

/// Receives events and may ask for a stop; shared between threads.
pub trait Observer: Sync {
    /// Called for every event, in order.
    fn event(&self, event: &Event);
    /// True once the work should stop at its next safe point.
    fn stop_requested(&self) -> bool {
        false
    }
}

/// An observer that listens to nothing and never stops the work.
#[derive(Debug, Clone, Copy, Default)]
pub struct Silent;

impl Observer for Silent {
    fn event(&self, _event: &Event) {}
}
