//! The heat problem of a device on a mesh: built once, stepped often. SI units; energies for the whole device.

use std::sync::Arc;

use mesher::{Mesh, NodeSet, Point, RegionId};

use super::boundary::Boundary;
use super::geometry::Geometry;
use super::newton::{Solver, Tangent, held_slots};
use super::operator::Operator;
use super::parts::{HeatedPart, device_factor, heated_parts};
use super::state::HeatState;
use crate::error::SolveError;
use crate::fem::assemble::Scatter;
use crate::fem::element::point_values;
use crate::fem::reference::MAX_NODES;
use crate::fem::space::Space;
use crate::linalg::{Pattern, Plan, SymmetricMatrix};
use crate::model::{Gauge, Mirrors, Model};
use crate::results::{EnergyBalance, PartTemperatures};

/// How far outside its element, in reference coordinates, a gauge on a curved surface may lie.
const GAUGE_SLACK: f64 = 0.3;

/// Conduction in the heated parts of a model.
#[derive(Debug)]
pub struct HeatProblem {
    operator: Operator,
    gauges: Vec<(usize, [f64; 2])>,
    device_factor: f64,
    scatter: Scatter,
    plan: Arc<Plan>,
    is_held: Vec<bool>,
    held_slots: Vec<u32>,
    tangent: Tangent,
    start: Vec<f64>,
    start_enthalpy: Vec<f64>,
}

impl HeatProblem {
    /// Builds the problem on the elements of `nodes` whose region belongs to a heated part.
    ///
    /// `regions[id.0]` is the index in `model.parts` of the heated part a region belongs to, `None` for air, turns and
    /// parts that are not heated. Without a heating in the model, the ambient is at `model.start_k`.
    ///
    /// # Errors
    /// [`SolveError::GaugeOutside`] for a gauge outside its part, [`SolveError::Linear`] if no elimination order could
    /// be found.
    pub fn new(
        mesh: &Arc<Mesh>,
        nodes: &NodeSet,
        regions: &[Option<usize>],
        model: &Model,
    ) -> Result<Self, SolveError> {
        let owner_of = |id: RegionId| regions.get(id.0 as usize).copied().flatten();
        let space = Space::new(mesh, nodes, |id| owner_of(id).is_some_and(|p| p < model.parts.len()));
        let geometry = Geometry::new(&space);
        let parts = heated_parts(&space, &geometry, model, &owner_of);
        let position = |e| parts.iter().position(|p| owner_of(space.region(e)) == Some(p.index));
        let part_of: Vec<u32> = (0..space.element_count()).map(|e| position(e).unwrap_or(0) as u32).collect();
        let boundary = Boundary::new(&space, |e| &model.parts[parts[part_of[e] as usize].index]);
        let gauges = place_gauges(&space, &parts, &part_of, model)?;
        let ambient_k = model.heating.as_ref().map_or(model.start_k, |h| h.ambient_k);

        let linear = |source| SolveError::Linear { system: "heat", time_s: 0.0, source };
        let pattern = Pattern::from_cliques(space.len(), elements(&space));
        let scatter = Scatter::new(&pattern, elements(&space)).map_err(linear)?;
        let plan = Plan::new(Arc::new(pattern), Some(space.points()), &[]).map_err(linear)?;
        let mut is_held = vec![false; space.len()];
        boundary.held.iter().for_each(|&(unknown, _)| is_held[unknown as usize] = true);
        let operator = Operator { space, geometry, boundary, parts, part_of, ambient_k };
        let start = start_temperatures(&operator);
        Ok(Self {
            gauges,
            device_factor: device_factor(model.mirrors),
            scatter,
            held_slots: held_slots(&plan, &is_held),
            tangent: Tangent::new(&plan),
            plan: Arc::new(plan),
            is_held,
            start_enthalpy: operator.enthalpy(&start),
            start,
            operator,
        })
    }

    /// The space of the temperatures.
    pub fn space(&self) -> &Space {
        &self.operator.space
    }

    /// State before anything happened: each part at its own temperature, held faces at theirs.
    ///
    /// Where parts of different temperature touch, the shared nodes are at the mean by volume.
    pub fn start(&self) -> HeatState {
        let density = |p: &HeatedPart| p.material.density_kg_per_m3;
        let workpieces = self.operator.parts.iter().filter(|p| p.is_workpiece);
        let workpiece_mass_kg = workpieces.map(|p| density(p) * p.volume_m3).sum();
        HeatState {
            time_s: 0.0,
            temperature_k: self.start.clone(),
            enthalpy_j_per_m3: self.start_enthalpy.clone(),
            rate_k_per_s: vec![0.0; self.operator.space.len()],
            energy: EnergyBalance { workpiece_mass_kg, ..EnergyBalance::default() },
        }
    }

    /// Matrix of a stage's equations at a state: heat capacities in J/K plus conductances times `weight_s`, in seconds. Held faces
    /// are free in it.
    pub fn matrix(&self, state: &HeatState, weight_s: f64) -> SymmetricMatrix<f64> {
        let mut matrix = SymmetricMatrix::zeros(Arc::clone(self.plan.pattern()));
        self.operator.add_tangent(&self.scatter, &state.temperature_k, weight_s, &mut Vec::new(), &mut matrix.values);
        matrix
    }

    /// Temperature of each gauge in the order of the model, kelvin.
    pub fn gauge_values(&self, t: &[f64]) -> Vec<f64> {
        self.gauges.iter().map(|&(e, x)| self.operator.space.value_at(e, x, t)).collect()
    }

    /// Index in the model of the part element `e` belongs to.
    pub fn part_of_element(&self, e: usize) -> usize {
        self.operator.parts[self.operator.part_of[e] as usize].index
    }

    /// Indices in the model of the heated parts that have elements, rising.
    pub fn part_indices(&self) -> Vec<usize> {
        self.operator.parts.iter().map(|p| p.index).collect()
    }

    /// Volume in m^3 of a heated part of the whole device; `None` if the part is not heated.
    pub fn part_volume_m3(&self, part: usize) -> Option<f64> {
        self.part(part).map(|p| p.volume_m3)
    }

    /// Mass in kilograms of a heated part of the whole device; `None` if the part is not heated.
    pub fn part_mass_kg(&self, part: usize) -> Option<f64> {
        self.part(part).map(|p| p.volume_m3 * p.material.density_kg_per_m3)
    }

    /// Temperatures of each heated part, in the order of the model.
    pub fn part_temperatures(&self, state: &HeatState) -> Vec<PartTemperatures> {
        let t = &state.temperature_k;
        let means = self.means(t);
        let row = |(part, mean_k): (&HeatedPart, f64)| {
            let over = || part.nodes.iter().map(|&n| t[n as usize]);
            let [outer, inner] = part.across.map(|(e, x)| self.operator.space.value_at(e, x, t));
            PartTemperatures {
                part: part.index,
                mean_k,
                min_k: over().fold(f64::INFINITY, f64::min),
                max_k: over().fold(f64::NEG_INFINITY, f64::max),
                surface_minus_core_k: outer - inner,
            }
        };
        self.operator.parts.iter().zip(means).map(row).collect()
    }

    /// Coolest and hottest node of a heated part, as unknowns of the space; `None` if the part is not heated.
    pub fn extreme_nodes(&self, part: usize, t: &[f64]) -> Option<[usize; 2]> {
        let nodes = &self.part(part)?.nodes;
        let by = |a: &&u32, b: &&u32| t[**a as usize].total_cmp(&t[**b as usize]);
        Some([*nodes.iter().min_by(by)? as usize, *nodes.iter().max_by(by)? as usize])
    }

    /// Writes the temperature in kelvin at each quadrature point of element `e`.
    pub fn temperature_at_points(&self, state: &HeatState, e: usize, out: &mut [f64]) {
        self.operator.at_points(e, &state.temperature_k, out);
    }

    /// Fastest heating in K/s that a source in W/m^3 at the quadrature points would cause without conduction.
    pub fn largest_heating_rate_k_per_s(&self, state: &HeatState, source: &[f64]) -> f64 {
        let count = self.operator.geometry.points();
        let mut t = vec![0.0; count];
        let mut largest = 0.0_f64;
        for (e, values) in source.chunks_exact(count).enumerate().take(self.operator.part_of.len()) {
            let material = &self.operator.part(e).material;
            self.operator.at_points(e, &state.temperature_k, &mut t);
            for (p, &t) in values.iter().zip(&t) {
                largest = largest.max(p / (material.density_kg_per_m3 * material.enthalpy.slope(t)));
            }
        }
        largest
    }

    /// Integral over the whole device of a density given at the quadrature points, one value a heated part in the order
    /// of the model: watts for a source in W/m^3.
    pub fn part_integrals(&self, density: &[f64]) -> Vec<f64> {
        let count = self.operator.geometry.points();
        let mut sums = vec![0.0; self.operator.parts.len()];
        for (e, values) in density.chunks_exact(count).enumerate().take(self.operator.part_of.len()) {
            let products = values.iter().zip(self.operator.geometry.volume(e)).map(|(v, w)| v * w);
            sums[self.operator.part_of[e] as usize] += self.device_factor * products.sum::<f64>();
        }
        sums
    }

    fn part(&self, index: usize) -> Option<&HeatedPart> {
        self.operator.parts.iter().find(|p| p.index == index)
    }

    fn means(&self, t: &[f64]) -> Vec<f64> {
        let count = self.operator.geometry.points();
        let mut values = vec![0.0; self.operator.geometry.len()];
        for (e, row) in values.chunks_exact_mut(count).enumerate() {
            self.operator.at_points(e, t, row);
        }
        let sums = self.part_integrals(&values);
        sums.iter().zip(&self.operator.parts).map(|(sum, p)| sum / p.volume_m3).collect()
    }

    /// Recomputes the stored energies from the enthalpy of the temperatures.
    pub(super) fn store(&self, energy: &mut EnergyBalance, enthalpy: &[f64]) {
        let taken: Vec<f64> = enthalpy.iter().zip(&self.start_enthalpy).map(|(a, b)| a - b).collect();
        let sums = self.part_integrals(&taken);
        energy.stored_j = sums.iter().sum();
        energy.workpiece_stored_j =
            sums.iter().zip(&self.operator.parts).filter(|(_, p)| p.is_workpiece).map(|(sum, _)| sum).sum();
    }

    pub(super) fn operator(&self) -> &Operator {
        &self.operator
    }

    pub(super) fn device_factor(&self) -> f64 {
        self.device_factor
    }

    /// Position of quadrature point `q` of element `e`, metres.
    pub(super) fn position(&self, e: usize, q: usize) -> Point {
        let mut corners = [[0.0; 2]; MAX_NODES];
        let space = self.space();
        let n = space.corners(e, &mut corners);
        let p = point_values(&space.reference().shapes()[q], 1.0, &corners[..n]);
        [p.r, p.z]
    }

    pub(super) fn solver(&mut self) -> Solver<'_> {
        Solver {
            operator: &self.operator,
            scatter: &self.scatter,
            plan: &self.plan,
            held_slots: &self.held_slots,
            is_held: &self.is_held,
            tangent: &mut self.tangent,
        }
    }
}

fn elements(space: &Space) -> impl Iterator<Item = &[u32]> {
    (0..space.element_count()).map(|e| space.element(e))
}

/// Start temperature of each node: the mean by volume over its elements, and held faces at theirs.
fn start_temperatures(operator: &Operator) -> Vec<f64> {
    let Operator { space, geometry, boundary, parts, part_of, .. } = operator;
    // Offsets from the first part, so that nodes of parts at one temperature are at exactly that.
    let base = parts.first().map_or(0.0, |p| p.start_k);
    let (mut sum, mut volume) = (vec![0.0; space.len()], vec![0.0; space.len()]);
    for (e, &part) in part_of.iter().enumerate() {
        let v: f64 = geometry.volume(e).iter().sum();
        for &n in space.element(e) {
            sum[n as usize] += v * (parts[part as usize].start_k - base);
            volume[n as usize] += v;
        }
    }
    let mut t: Vec<f64> = sum.iter().zip(&volume).map(|(s, v)| base + s / v).collect();
    boundary.held.iter().for_each(|&(unknown, held)| t[unknown as usize] = held);
    t
}

fn place_gauges(
    space: &Space,
    parts: &[HeatedPart],
    part_of: &[u32],
    model: &Model,
) -> Result<Vec<(usize, [f64; 2])>, SolveError> {
    let place = |gauge: &Gauge| {
        let [r, z] = gauge.at;
        // Below the one mirror plane lies the image of what is above it.
        let z = match model.mirrors {
            Mirrors::One { z_m } if z < z_m => 2.0 * z_m - z,
            _ => z,
        };
        let part = model.parts.get(gauge.part);
        let found = space.locate([r, z], GAUGE_SLACK).filter(|&(e, _)| {
            let in_part = parts[part_of[e] as usize].index == gauge.part;
            let on_outline = |p: &crate::model::Part| {
                let (low, high) = p.outline.bounds();
                p.outline.distance(gauge.at) <= 1e-6 * (high[0] - low[0]).max(high[1] - low[1])
            };
            in_part || part.is_some_and(on_outline)
        });
        found.ok_or_else(|| SolveError::GaugeOutside {
            gauge: gauge.name.clone(),
            part: part.map_or_else(String::new, |p| p.name.clone()),
            r_mm: 1e3 * r,
            z_mm: 1e3 * z,
        })
    };
    model.gauges.iter().map(place).collect()
}
