//! The keys of `summary.json`, in the order in which they are written.

use serde::ser::SerializeMap;
use serde::{Serialize, Serializer};

/// Values under their names, in order.
#[derive(Debug, Clone)]
pub struct Named<T>(pub Vec<(String, T)>);

impl<T: Serialize> Serialize for Named<T> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut map = serializer.serialize_map(Some(self.0.len()))?;
        for (name, value) in &self.0 {
            map.serialize_entry(name, value)?;
        }
        map.end()
    }
}

/// The whole file.
#[derive(Debug, Clone, Serialize)]
pub struct Summary {
    /// Title of the job.
    pub title: String,
    /// `complete`, `stage_limit`, `stopped` or `not_converged`.
    pub outcome: &'static str,
    /// Where an incomplete run ended.
    pub ended_early: Option<EndedEarly>,
    /// What the reader must know.
    pub warnings: Vec<WarningEntry>,
    /// Version of the program.
    pub version: &'static str,
    /// The mesh.
    pub mesh: MeshNumbers,
    /// Work done.
    pub counts: CountNumbers,
    /// Headline numbers of the last state.
    pub totals: Option<Totals>,
    /// First and last state.
    pub states: Named<StateNumbers>,
    /// Goals of the stages, in order.
    pub goals: Vec<Goal>,
    /// Temperatures at the end.
    pub end: Option<EndTemperatures>,
    /// Energy over the run.
    pub energy: Option<EnergyNumbers>,
}

/// Where an incomplete run ended.
#[derive(Debug, Clone, Serialize)]
pub struct EndedEarly {
    /// Simulated time.
    pub time_s: Option<f64>,
    /// Stage that reached its limit.
    pub stage: Option<String>,
    /// Why, in words.
    pub reason: String,
}

/// A warning.
#[derive(Debug, Clone, Serialize)]
pub struct WarningEntry {
    /// Stable short name.
    pub kind: &'static str,
    /// The message.
    pub text: String,
}

/// The mesh. Angles are those of triangles away from the thin strips along surfaces, as straight-sided ones.
#[derive(Debug, Clone, Serialize)]
pub struct MeshNumbers {
    /// Triangles.
    pub triangles: usize,
    /// Of these, in thin strips along surfaces.
    pub strip_triangles: usize,
    /// Vertices of the triangles.
    pub vertices: usize,
    /// Nodes of the elements.
    pub nodes: usize,
    /// Unknowns of a field solve.
    pub field_unknowns: usize,
    /// Unknowns of a heat step.
    pub heat_unknowns: usize,
    /// Order of the elements.
    pub order: usize,
    /// Smallest angle.
    pub min_angle_deg: Option<f64>,
    /// Mean over triangles of the smallest angle.
    pub mean_min_angle_deg: Option<f64>,
    /// Share of triangles whose smallest angle is from 30 to 40 degrees.
    pub share_of_min_angles_30_to_40_deg: Option<f64>,
    /// Triangles by their smallest angle, 5 degrees a class: 0 to 5, 5 to 10, ... 55 to 60.
    pub min_angle_counts: [usize; 12],
    /// Shortest edge, strips included.
    pub shortest_edge_m: Option<f64>,
    /// Longest edge, strips included.
    pub longest_edge_m: Option<f64>,
    /// By body.
    pub regions: RegionEntries,
    /// Where the mesh differs from what was asked for, in words.
    pub notes: Vec<String>,
    /// What outlines have in common, or were made to have.
    pub merges: MergeEntry,
}

/// Figures of the mesh by body.
#[derive(Debug, Clone, Serialize)]
pub struct RegionEntries {
    /// Air, bores of tubes included.
    pub air: RegionEntry,
    /// One a part.
    pub parts: Named<RegionEntry>,
    /// One a coil, all of its turns together.
    pub coils: Named<RegionEntry>,
}

/// The mesh of a body. Angles away from its strips, unless it has nothing else.
#[derive(Debug, Clone, Serialize)]
pub struct RegionEntry {
    /// Triangles.
    pub triangles: usize,
    /// Of these, in thin strips.
    pub strip_triangles: usize,
    /// Smallest angle.
    pub min_angle_deg: Option<f64>,
    /// Mean over triangles of the smallest angle.
    pub mean_min_angle_deg: Option<f64>,
    /// Shortest edge.
    pub shortest_edge_m: Option<f64>,
    /// Longest edge.
    pub longest_edge_m: Option<f64>,
}

/// How often outlines were made to meet.
#[derive(Debug, Clone, Serialize)]
pub struct MergeEntry {
    /// Corners moved onto a point too close to tell apart.
    pub corners_moved: usize,
    /// Lines bent to pass through such a point.
    pub lines_moved: usize,
    /// Places where lines that cross or touch were divided.
    pub lines_divided: usize,
    /// Stretches that two outlines have in common.
    pub stretches_shared: usize,
    /// Largest distance by which anything was moved.
    pub largest_move_m: Option<f64>,
    /// What was moved, in words.
    pub moves: Vec<String>,
}

/// Work done.
#[derive(Debug, Clone, Serialize)]
pub struct CountNumbers {
    /// Field solves.
    pub field_solves: usize,
    /// Accepted heat steps.
    pub heat_steps: usize,
    /// Rejected heat steps.
    pub heat_steps_rejected: usize,
    /// Newton iterations of all heat steps.
    pub newton_iterations: usize,
}

/// Headline numbers of the last state, with the times that matter.
#[derive(Debug, Clone, Serialize)]
pub struct Totals {
    /// Simulated time at the end.
    pub time_s: Option<f64>,
    /// Power in all workpieces.
    pub workpiece_power_w: Option<f64>,
    /// Loss in all coils.
    pub coil_loss_w: Option<f64>,
    /// Active power at the coil terminals.
    pub terminal_power_w: Option<f64>,
    /// Workpiece power over terminal power.
    pub electrical_efficiency: Option<f64>,
    /// Energy a tonne, by where it is measured.
    pub energy_kwh_per_t: Option<EnergyPerTonne>,
    /// Bookkeeping check of the field solve; holds by construction and says nothing about accuracy.
    pub power_balance_relative: Option<f64>,
}

/// Energy a tonne of workpiece, by where it is measured.
#[derive(Debug, Clone, Serialize)]
pub struct EnergyPerTonne {
    /// Taken up by the workpieces, from the temperatures alone.
    pub workpiece: Option<f64>,
    /// Drawn at the coil terminals.
    pub terminals: Option<f64>,
}

/// Electrical numbers of one state.
#[derive(Debug, Clone, Serialize)]
pub struct StateNumbers {
    /// What the moment is.
    pub label: String,
    /// Simulated time.
    pub time_s: Option<f64>,
    /// Frequency.
    pub frequency_hz: Option<f64>,
    /// Limit of the supply that was reached.
    pub limit_reached: Option<&'static str>,
    /// All coils in series, at the terminals.
    pub terminals: Option<TerminalNumbers>,
    /// One a coil.
    pub coils: Named<CoilEntry>,
    /// One a part.
    pub parts: Named<PartEntry>,
    /// Power in all workpieces.
    pub workpiece_power_w: Option<f64>,
    /// Workpiece power over terminal power.
    pub electrical_efficiency: Option<f64>,
    /// Stored magnetic energy, time average.
    pub stored_energy_j: Option<f64>,
    /// Bookkeeping check.
    pub power_balance_relative: Option<f64>,
    /// Componentwise backward error of the linear solve.
    pub solve_backward_error: Option<f64>,
}

/// What is seen at the ends of a coil or of all in series.
#[derive(Debug, Clone, Serialize)]
pub struct TerminalNumbers {
    /// Current.
    pub current_a_rms: Option<f64>,
    /// Voltage.
    pub voltage_v_rms: Option<f64>,
    /// Active power.
    pub power_w: Option<f64>,
    /// Reactive power, positive where inductive.
    pub reactive_power_var: Option<f64>,
    /// Apparent power.
    pub apparent_power_va: Option<f64>,
    /// Active over apparent power.
    pub power_factor: Option<f64>,
    /// Reactive over active power.
    pub quality_factor: Option<f64>,
    /// Resistance.
    pub resistance_ohm: Option<f64>,
    /// Reactance.
    pub reactance_ohm: Option<f64>,
    /// Inductance.
    pub inductance_h: Option<f64>,
}

/// A coil.
#[derive(Debug, Clone, Serialize)]
pub struct CoilEntry {
    /// At its own ends.
    #[serde(flatten)]
    pub terminals: TerminalNumbers,
    /// Loss in its conductor.
    pub loss_w: Option<f64>,
    /// Water at the outlets.
    pub water_outlet_degc: Option<f64>,
    /// Rise of the water from inlet to outlet, a path.
    pub water_rise_k: Option<f64>,
}

/// A part.
#[derive(Debug, Clone, Serialize)]
pub struct PartEntry {
    /// All of its loss.
    pub power_w: Option<f64>,
    /// Joule loss.
    pub joule_loss_w: Option<f64>,
    /// Hysteresis loss.
    pub hysteresis_loss_w: Option<f64>,
    /// Power through a surface in air round the part, an independent check.
    pub poynting_power_w: Option<f64>,
    /// Loss over the surface that faces the field.
    pub mean_surface_power_density_w_per_m2: Option<f64>,
    /// Largest loss density.
    pub largest_loss_w_per_m3: Option<f64>,
    /// Least skin depth; `null` where it does not conduct.
    pub least_skin_depth_m: Option<f64>,
    /// Largest field strength at the surface.
    pub largest_field_a_per_m_rms: Option<f64>,
}

/// A stage that waits for a gauge.
#[derive(Debug, Clone, Serialize)]
pub struct Goal {
    /// Name of the stage.
    pub stage: String,
    /// Name of the gauge.
    pub gauge: String,
    /// What it is to reach.
    pub reaches_degc: Option<f64>,
    /// When it did, `null` if it did not.
    pub reached_at_s: Option<f64>,
}

/// Temperatures at the end.
#[derive(Debug, Clone, Serialize)]
pub struct EndTemperatures {
    /// Simulated time.
    pub time_s: Option<f64>,
    /// Stage that was on.
    pub stage: String,
    /// One a gauge.
    pub gauges_degc: Named<Option<f64>>,
    /// One a heated part.
    pub parts: Named<PartTemperatureEntry>,
}

/// Temperatures of a part.
#[derive(Debug, Clone, Serialize)]
pub struct PartTemperatureEntry {
    /// Mean by volume.
    pub mean_degc: Option<f64>,
    /// Lowest.
    pub min_degc: Option<f64>,
    /// Highest.
    pub max_degc: Option<f64>,
    /// Surface minus core at mid-length.
    pub surface_minus_core_k: Option<f64>,
}

/// Energy over the run.
#[derive(Debug, Clone, Serialize)]
pub struct EnergyNumbers {
    /// Turned into heat by the field in heated parts.
    pub supplied_j: Option<f64>,
    /// Given off by radiation.
    pub radiated_j: Option<f64>,
    /// Given off by convection.
    pub convected_j: Option<f64>,
    /// Given off through faces held at a temperature.
    pub through_held_faces_j: Option<f64>,
    /// Taken up through faces with a given flux.
    pub through_flux_faces_j: Option<f64>,
    /// Stored, from the temperatures alone.
    pub stored_j: Option<f64>,
    /// Stored in workpieces, from the temperatures alone.
    pub workpiece_stored_j: Option<f64>,
    /// Drawn at the coil terminals.
    pub terminal_j: Option<f64>,
    /// Mass of all workpieces.
    pub workpiece_mass_kg: Option<f64>,
    /// Heat that does not balance, over the heat that came.
    pub heat_balance_relative: Option<f64>,
}
