//! What a run gives: plain data in SI units, ready for any exporter.
//!
//! Powers are time averages for the whole device (both halves with one mirror plane, the slice with two). Fields are
//! peak phasors at `e^{+jwt}`; numbers belong to their state, while [`FieldMaps`] are per unit drive and a
//! [`Snapshot`] carries the factor of its moment.

use std::sync::Arc;

use mesher::{Mesh, NodeSet};
use num_complex::Complex64;

use crate::model::Mirrors;

/// Everything a run gives.
#[derive(Debug, Clone)]
pub struct Results {
    /// Title of the job.
    pub title: String,
    /// How it ended.
    pub outcome: Outcome,
    /// What the reader must know; in order of appearance, without repeats.
    pub warnings: Vec<Warning>,
    /// The section, its mesh and names.
    pub section: Section,
    /// Electrical states: start, Curie crossings and ends of stages in time order, then the greatest values of a heating.
    pub states: Vec<State>,
    /// One row an accepted heat step, and one at the start of each stage; empty without heating.
    pub history: Vec<HistoryRow>,
    /// Turns at the last state.
    pub turns: Vec<TurnRow>,
    /// Maps at the start, at the end of each stage and at times between.
    pub snapshots: Vec<Snapshot>,
    /// Hottest temperature of each heated node over the run, kelvin, `NaN` elsewhere; empty without heating.
    pub peak_temperature_k: Vec<f64>,
    /// Energy that came and went, over the whole run.
    pub energy: Option<EnergyBalance>,
    /// Work done.
    pub counts: Counts,
}

/// How a run ended.
#[derive(Debug, Clone, PartialEq)]
pub enum Outcome {
    /// All stages done.
    Complete,
    /// A stage reached its longest time before its goal.
    StageLimit {
        /// Name of the stage.
        stage: String,
        /// Simulated time in seconds.
        time_s: f64,
    },
    /// Stopped on request.
    Stopped {
        /// Simulated time in seconds.
        time_s: f64,
    },
    /// A step could not be completed; results end before it.
    NotConverged {
        /// Simulated time in seconds.
        time_s: f64,
        /// Why, in words.
        reason: String,
    },
}

/// Something the reader of a result must know; its text is the message.
#[derive(Debug, Clone, PartialEq)]
pub struct Warning {
    /// Stable short name, such as `material_range`.
    pub kind: WarningKind,
    /// What, where, by how much, what to do.
    pub text: String,
}

/// Kinds of warning.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum WarningKind {
    /// A material was used outside the range of its data.
    MaterialRange,
    /// A surface does not resolve its skin depth.
    SkinUnresolved,
    /// The supply reached a limit.
    SupplyLimit,
    /// A part began to melt, or is molten from the start.
    Melting,
    /// A part crossed its Curie point.
    Curie,
    /// A part inside a lining radiates to the ambient.
    EnclosedRadiation,
    /// The permeability does not depend on the field strength.
    LinearPermeability,
    /// A gauge was not brought to the temperature a stage holds.
    HoldMissed,
    /// Turns are rings.
    RingModel,
    /// Stranded conductors leave out strand losses.
    StrandLoss,
    /// Parts that touch are in perfect contact.
    PerfectContact,
    /// Bare metal of a coil touches itself or something else that conducts.
    BareContact,
    /// The mesher had to change or give up something.
    Mesh,
    /// The cooling water is warmer than usual practice allows.
    Water,
    /// The Poynting check disagrees with the power of a part.
    PoyntingCheck,
}

/// The section and the mesh, shared by all snapshots.
#[derive(Debug, Clone)]
pub struct Section {
    /// Triangles and curves.
    pub mesh: Arc<Mesh>,
    /// Nodes of the elements.
    pub nodes: Arc<NodeSet>,
    /// One a region id: index into the vector is `RegionId.0`.
    pub regions: Vec<RegionName>,
    /// Mirror planes.
    pub mirrors: Mirrors,
    /// Radius in metres and centre height of the open boundary, or `None` for a slice.
    pub open_boundary: Option<(f64, f64)>,
}

/// What a region of the mesh is.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum RegionName {
    /// Air, and the bores of tubes.
    Air,
    /// A part, by index and name.
    Part(usize, String),
    /// A turn: coil index, turn index, coil name.
    Turn(usize, usize, String),
}

/// Electrical state at one moment.
#[derive(Debug, Clone)]
pub struct State {
    /// Simulated time in seconds.
    pub time_s: f64,
    /// What makes the moment worth a row, such as `start` or `end of heat`.
    pub label: String,
    /// Frequency in hertz.
    pub frequency_hz: f64,
    /// Limit of the supply that was reached, if one was.
    pub limited_by: Option<SupplyLimit>,
    /// The field's numbers.
    pub electrical: Electrical,
}

/// Limits of a supply.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum SupplyLimit {
    /// Volts.
    Voltage,
    /// Amperes.
    Current,
    /// Watts.
    Power,
}

/// Numbers of one field solve, scaled to its state.
#[derive(Debug, Clone)]
pub struct Electrical {
    /// One a coil, in job order; empty with an applied field.
    pub coils: Vec<CoilNumbers>,
    /// One a part, in job order.
    pub parts: Vec<PartNumbers>,
    /// All coils in series, at the terminals; `None` with an applied field.
    pub terminals: Option<Terminals>,
    /// Power in all workpieces, watts.
    pub workpiece_power_w: f64,
    /// `workpiece power / terminal power`; `None` with an applied field.
    pub electrical_efficiency: Option<f64>,
    /// Stored magnetic energy, joules, averaged over time (inside and outside the meshed space).
    pub stored_energy_j: f64,
    /// `|Re(V I*) - losses| / Re(V I*)`: a bookkeeping check. With an applied field, the source's work stands for `V I*`.
    pub power_balance_relative: f64,
    /// Componentwise backward error of the linear solve.
    pub solve_backward_error: f64,
}

/// What the supply sees.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Terminals {
    /// Amperes rms.
    pub current_a_rms: f64,
    /// Volts rms.
    pub voltage_v_rms: f64,
    /// Active power in watts.
    pub power_w: f64,
    /// Reactive power in var, positive where inductive.
    pub reactive_power_var: f64,
    /// Apparent power in VA.
    pub apparent_power_va: f64,
    /// Active over apparent power.
    pub power_factor: f64,
    /// Reactive over active power.
    pub quality_factor: f64,
    /// Ohms.
    pub resistance_ohm: f64,
    /// Ohms.
    pub reactance_ohm: f64,
    /// Henries.
    pub inductance_h: f64,
}

/// A coil at its own ends.
#[derive(Debug, Clone)]
pub struct CoilNumbers {
    /// Its name.
    pub name: String,
    /// What is seen at its ends.
    pub terminals: Terminals,
    /// Loss in its conductor, watts.
    pub loss_w: f64,
    /// Water temperature at the outlets in kelvin and rise in kelvin, where there is water.
    pub water_outlet_k: Option<f64>,
}

/// A part.
#[derive(Debug, Clone)]
pub struct PartNumbers {
    /// Its name.
    pub name: String,
    /// Joule loss in watts.
    pub joule_loss_w: f64,
    /// Hysteresis loss in watts.
    pub hysteresis_loss_w: f64,
    /// Power through a surface in air round the part (Poynting), watts; `None` where no such surface exists.
    pub poynting_power_w: Option<f64>,
    /// Loss over the surface that faces the field (without the axis and mirror planes), W/m^2.
    pub mean_surface_power_density_w_per_m2: f64,
    /// Largest loss density, W/m^3.
    pub largest_loss_w_per_m3: f64,
    /// Least skin depth in the part, metres (infinite where it does not conduct).
    pub least_skin_depth_m: f64,
    /// Largest field strength at the surface, A/m rms.
    pub largest_field_a_per_m_rms: f64,
}

/// One turn at the last state.
#[derive(Debug, Clone)]
pub struct TurnRow {
    /// Name of the coil.
    pub coil: String,
    /// Number of the turn in its coil, from 1.
    pub turn: usize,
    /// Centre radius in metres.
    pub r_m: f64,
    /// Centre height in metres.
    pub z_m: f64,
    /// Length of copper, metres.
    pub length_m: f64,
    /// Mass of copper, kilograms.
    pub mass_kg: f64,
    /// Amperes rms.
    pub current_a_rms: f64,
    /// Volts rms across the turn.
    pub voltage_v_rms: f64,
    /// Watts.
    pub loss_w: f64,
    /// Water temperature rise over this turn, kelvin.
    pub water_rise_k: Option<f64>,
}

/// One accepted heat step.
#[derive(Debug, Clone)]
pub struct HistoryRow {
    /// Simulated time in seconds.
    pub time_s: f64,
    /// Index of the stage.
    pub stage: usize,
    /// Gauges in job order, kelvin.
    pub gauges_k: Vec<f64>,
    /// Heated parts in job order.
    pub parts: Vec<PartTemperatures>,
    /// Power in all workpieces, watts; electrical numbers are interpolated between field solves, while the heat balance in
    /// `energy` uses the loss as it was extrapolated.
    pub workpiece_power_w: f64,
    /// What the supply sees; `None` with an applied field.
    pub terminals: Option<Terminals>,
    /// Loss in all coils, watts.
    pub coil_loss_w: f64,
    /// Energy so far.
    pub energy: EnergyBalance,
}

/// Temperatures of a heated part.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PartTemperatures {
    /// Index of the part.
    pub part: usize,
    /// Mean by volume, kelvin.
    pub mean_k: f64,
    /// Lowest, kelvin.
    pub min_k: f64,
    /// Highest, kelvin.
    pub max_k: f64,
    /// Surface at mid-length minus core at mid-length, kelvin.
    pub surface_minus_core_k: f64,
}

/// Energy since the start, joules.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct EnergyBalance {
    /// Turned into heat by the field in heated parts.
    pub supplied_j: f64,
    /// Given off by radiation.
    pub radiated_j: f64,
    /// Given off by convection.
    pub convected_j: f64,
    /// Given off through faces held at a temperature.
    pub through_held_faces_j: f64,
    /// Taken up through faces with a given flux.
    pub through_flux_faces_j: f64,
    /// Stored, from the temperatures alone.
    pub stored_j: f64,
    /// Drawn at the coil terminals.
    pub terminal_j: f64,
    /// Enthalpy taken up by workpieces, from the temperatures alone.
    pub workpiece_stored_j: f64,
    /// Mass of all workpieces, kilograms.
    pub workpiece_mass_kg: f64,
}

impl EnergyBalance {
    /// `|stored + lost - supplied| / supplied`; zero where nothing moved.
    pub fn relative_defect(&self) -> f64 {
        let lost = self.radiated_j + self.convected_j + self.through_held_faces_j;
        let supplied = self.supplied_j + self.through_flux_faces_j;
        let scale = supplied.abs().max(lost.abs()).max(self.stored_j.abs());
        if scale == 0.0 { 0.0 } else { (self.stored_j + lost - supplied).abs() / scale }
    }
}

/// Maps at one moment.
#[derive(Debug, Clone)]
pub struct Snapshot {
    /// Simulated time in seconds.
    pub time_s: f64,
    /// What the moment is.
    pub label: String,
    /// The field at this moment, shared while the field is not solved again.
    pub field: Arc<FieldMaps>,
    /// Factor on the phasors of `field` for this moment (its square scales the losses).
    pub field_factor: f64,
    /// Temperature of each node of [`Section::nodes`] in kelvin, `NaN` outside heated parts; empty without heating.
    pub temperature_k: Vec<f64>,
}

/// Maps of one field solve per unit drive: phasors scale with [`Snapshot::field_factor`], losses and forces with its
/// square. Per-element values are discontinuous: one row an element, one value a local node, in the
/// order of [`NodeSet::elements`].
#[derive(Debug, Clone)]
pub struct FieldMaps {
    /// Azimuthal vector potential of each node, Wb/m, peak phasor.
    pub vector_potential_wb_per_m: Vec<Complex64>,
    /// Joule loss density, W/m^3, per element and local node.
    pub joule_loss_w_per_m3: Vec<f64>,
    /// Azimuthal current density, A/m^2, peak phasor, per element and local node.
    pub current_density_a_per_m2: Vec<Complex64>,
    /// Flux density `[B_r, B_z]`, tesla, peak phasor, per element and local node.
    pub flux_density_t: Vec<[Complex64; 2]>,
    /// Field strength `[H_r, H_z]`, A/m, peak phasor, per element and local node.
    pub field_strength_a_per_m: Vec<[Complex64; 2]>,
    /// Time-averaged Lorentz force density `[f_r, f_z]`, N/m^3, per element and local node.
    pub force_density_n_per_m3: Vec<[f64; 2]>,
}

/// Work done by a run.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Counts {
    /// Triangles of the mesh.
    pub triangles: usize,
    /// Unknowns of a field solve.
    pub field_unknowns: usize,
    /// Unknowns of a heat step.
    pub heat_unknowns: usize,
    /// Field solves.
    pub field_solves: usize,
    /// Accepted heat steps.
    pub heat_steps: usize,
    /// Rejected heat steps.
    pub heat_steps_rejected: usize,
    /// Newton iterations of all heat steps.
    pub newton_iterations: usize,
}
