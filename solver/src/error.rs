//! Why a solve could not be done.

use crate::linalg::LinalgError;
use crate::material::MaterialError;

/// Failures of a run; each says where, what value, which limit and what to do.
#[derive(Debug, thiserror::Error)]
pub enum SolveError {
    /// A number of the model is out of range.
    #[error("{place} is {value:e} {unit}: it must be {expected}")]
    Value {
        /// What it is, and of which part or coil.
        place: String,
        /// The number as given.
        value: f64,
        /// Its unit.
        unit: &'static str,
        /// What it must be.
        expected: &'static str,
    },
    /// Something the model needs is not there.
    #[error("the model lacks {place}: {remedy}")]
    Absent {
        /// What is not there.
        place: String,
        /// What to do.
        remedy: &'static str,
    },
    /// The section could not be meshed.
    #[error("the section could not be meshed: {0}")]
    Mesh(#[from] mesher::MeshError),
    /// An outline of the device is not valid.
    #[error("an outline is not valid: {0}")]
    Outline(#[from] mesher::OutlineError),
    /// A linear system could not be solved.
    #[error("at t = {time_s:.4} s the {system} system could not be solved: {source}")]
    Linear {
        /// Which system: `field` or `heat`.
        system: &'static str,
        /// Simulated time in seconds.
        time_s: f64,
        /// What went wrong.
        source: LinalgError,
    },
    /// Material data do not hold together.
    #[error(transparent)]
    Material(#[from] MaterialError),
    /// Nothing takes up the quantity that is held.
    #[error("the supply is to hold {held}, but a unit coil current gives {per_unit:.3e}: {remedy}")]
    CannotHold {
        /// What is held, in words.
        held: &'static str,
        /// What one ampere (peak) gives.
        per_unit: f64,
        /// What to do.
        remedy: &'static str,
    },
    /// A turn touches the axis.
    #[error("turn {turn} of coil `{coil}` touches the axis r = 0: a turn is a ring and needs a hole; move it outwards")]
    TurnOnAxis {
        /// Name of the coil.
        coil: String,
        /// Number of the turn, from 1.
        turn: usize,
    },
    /// A gauge is not in the mesh of its part.
    #[error("gauge `{gauge}` at r = {r_mm:.3} mm, z = {z_mm:.3} mm is not in part `{part}`: move it into the part")]
    GaugeOutside {
        /// Name of the gauge.
        gauge: String,
        /// Its part.
        part: String,
        /// Radius in millimetres.
        r_mm: f64,
        /// Height in millimetres.
        z_mm: f64,
    },
    /// A heat step could not be completed, however short.
    #[error("at t = {time_s:.4} s the heat step failed at {step_s:.3e} s: {reason}")]
    HeatStep {
        /// Simulated time in seconds.
        time_s: f64,
        /// Step in seconds.
        step_s: f64,
        /// Why, in words.
        reason: String,
    },
    /// A stop was asked for before there was anything to keep.
    #[error("stopped on request before the first field was solved: there is no result")]
    StoppedEarly,
}
