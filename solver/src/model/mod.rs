//! The device as it is solved: validated, in SI units, free of any file format.
//!
//! `parts` and `coils` are drawn in the meridian half plane `[r, z]`, `r >= 0`. Parts do not overlap each other or a
//! turn; touching is allowed. Currents, voltages and the applied field are rms, as people quote them.

mod check;
mod heating;
mod section;

pub use heating::{Face, FaceCondition, Gauge, GaugeKind, Heating, Stage, StageEnd, Surface};
pub use section::{Coil, ConductorKind, Part, Role, Turn, Water};

/// What is solved.
#[derive(Debug, Clone)]
pub struct Model {
    /// One line that names the job.
    pub title: String,
    /// Bodies: workpieces, linings, shields and so on.
    pub parts: Vec<Part>,
    /// Coils, all in series on the one supply. Empty with an applied field.
    pub coils: Vec<Coil>,
    /// Where the field comes from.
    pub drive: Drive,
    /// Mirror planes across z.
    pub mirrors: Mirrors,
    /// Stages of the heating; none for a field solve alone.
    pub heating: Option<Heating>,
    /// Thermocouples and pyrometers.
    pub gauges: Vec<Gauge>,
    /// Temperature in kelvin of everything before heating starts, and of parts that are not heated.
    pub start_k: f64,
    /// How fine the mesh is.
    pub mesh: MeshSettings,
}

/// Planes across which the device is its own mirror image; the azimuthal field is even across each.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Mirrors {
    /// The whole half plane is solved, with an open boundary.
    None,
    /// Only `z >= z_m` is solved, with an open boundary; results are for the whole device.
    One {
        /// Height of the plane in metres.
        z_m: f64,
    },
    /// A slice between two planes: a piece of an endless device. Results are for the slice.
    Two {
        /// Height of the lower plane in metres.
        lower_m: f64,
        /// Height of the upper plane in metres.
        upper_m: f64,
    },
}

/// The source of the field.
#[derive(Debug, Clone, PartialEq)]
pub enum Drive {
    /// A supply feeds the coils in series.
    Supply {
        /// Frequency in hertz.
        frequency_hz: f64,
        /// What the supply holds.
        hold: Hold,
        /// What it can give at the coil terminals.
        limits: Limits,
    },
    /// A uniform axial field fills space far from the parts.
    AppliedField {
        /// Frequency in hertz.
        frequency_hz: f64,
        /// Field strength in A/m, rms.
        field_a_per_m_rms: f64,
    },
}

impl Drive {
    /// Frequency in hertz.
    pub fn frequency_hz(&self) -> f64 {
        match self {
            Self::Supply { frequency_hz, .. } | Self::AppliedField { frequency_hz, .. } => *frequency_hz,
        }
    }
}

/// The quantity a supply or a stage keeps constant; rms at the coil terminals.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Hold {
    /// Coil current in amperes rms.
    CoilCurrent(f64),
    /// Coil voltage in volts rms.
    CoilVoltage(f64),
    /// Power in all workpieces, in watts.
    WorkpiecePower(f64),
    /// Active power at the coil terminals, in watts.
    TerminalPower(f64),
    /// A gauge at a temperature; the supply's own hold and limits bound the power.
    GaugeTemperature {
        /// Index into [`Model::gauges`].
        gauge: usize,
        /// Temperature in kelvin.
        at_k: f64,
    },
    /// Supply off.
    Off,
}

/// What the supply can give at the coil terminals; `None` where it is not bounded.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Limits {
    /// Volts rms.
    pub voltage_v_rms: Option<f64>,
    /// Amperes rms.
    pub current_a_rms: Option<f64>,
    /// Active power in watts.
    pub power_w: Option<f64>,
}

/// How fine the mesh is.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct MeshSettings {
    /// Elements through the first skin depth of a conducting surface (3 by default).
    pub per_skin_depth: f64,
    /// All sizes are divided by this (1 by default).
    pub fineness: f64,
    /// Largest element anywhere, in metres; none by default.
    pub largest_m: Option<f64>,
    /// Order of the elements: 1, 2 (default) or 3.
    pub order: usize,
    /// Radius of the open boundary over the smallest sphere that encloses everything (1.2 by default).
    pub boundary_factor: f64,
}

impl Default for MeshSettings {
    fn default() -> Self {
        Self { per_skin_depth: 3.0, fineness: 1.0, largest_m: None, order: 2, boundary_factor: 1.2 }
    }
}
