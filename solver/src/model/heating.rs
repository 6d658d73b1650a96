//! Stages, gauges and what happens at surfaces.

use mesher::Point;

use super::Hold;

/// The heating: ambient and stages.
#[derive(Debug, Clone)]
pub struct Heating {
    /// Temperature of the surroundings in kelvin.
    pub ambient_k: f64,
    /// Stages in order; at least one.
    pub stages: Vec<Stage>,
    /// Error allowed in one heat step, in kelvin (2 by default).
    pub step_tolerance_k: f64,
}

/// One stage.
#[derive(Debug, Clone)]
pub struct Stage {
    /// Its name.
    pub name: String,
    /// When it ends.
    pub end: StageEnd,
    /// What is held instead of the supply's own hold.
    pub hold: Option<Hold>,
}

/// When a stage ends.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum StageEnd {
    /// After a time in seconds.
    After(f64),
    /// When a gauge reaches a temperature from either side.
    GaugeReaches {
        /// Index into [`super::Model::gauges`].
        gauge: usize,
        /// Temperature in kelvin.
        at_k: f64,
        /// Longest time in seconds; reaching it stops the run with the outcome "stage limit".
        at_most_s: f64,
    },
}

/// A point whose temperature is recorded.
#[derive(Debug, Clone)]
pub struct Gauge {
    /// Its name, unique in the job.
    pub name: String,
    /// What it is.
    pub kind: GaugeKind,
    /// Index into [`super::Model::parts`]; the part is heated.
    pub part: usize,
    /// Where it is, `[r, z]` in metres, in the part or on its surface.
    pub at: Point,
}

/// What a gauge is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum GaugeKind {
    /// In the material.
    Thermocouple,
    /// Looks at a surface.
    Pyrometer,
}

/// Exchange of a surface with the surroundings.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Surface {
    /// Total hemispherical emissivity, 0 to 1.
    pub emissivity: f64,
    /// Heat transfer coefficient to the ambient in W/(m^2 K).
    pub convection_w_per_m2_k: f64,
}

/// Sides of a part, told apart by the outward normal: mostly radial or mostly axial.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Face {
    /// Looks away from the axis.
    Outside,
    /// Looks towards the axis.
    Inside,
    /// Looks up, towards larger z.
    Top,
    /// Looks down.
    Bottom,
}

/// What happens at a face.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum FaceCondition {
    /// Convection and radiation to the ambient.
    Exchange(Surface),
    /// A temperature in kelvin.
    HeldAt(f64),
    /// A heat flux into the part in W/m^2.
    Flux(f64),
    /// No exchange.
    Insulated,
}
