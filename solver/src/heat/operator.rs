//! The equations: heat taken up, heat flowing in, and the tangent of both, element by element.
//!
//! `storage_i = int rho (h(T) - h_n) phi_i` in joules; `rate_i = int p phi_i + boundary - int k(T) grad T . grad phi_i`
//! in watts. The tangent of `storage - w rate` leaves out the derivative of `k(T)`, which keeps it symmetric and
//! positive definite; the residual itself leaves out nothing.
//! Convention: arrays over points are element-major; sums run in element order, for any number of threads.

use super::boundary::{ActiveSide, Boundary, SideLaw, exchange};
use super::geometry::{Geometry, Map};
use super::parts::HeatedPart;
use crate::fem::assemble::{Block, Scatter, add_blocks, map_elements};
use crate::fem::reference::{MAX_NODES, MAX_POINTS};
use crate::fem::space::Space;

/// Everything the element integrals need.
#[derive(Debug)]
pub(super) struct Operator {
    pub(super) space: Space,
    pub(super) geometry: Geometry,
    pub(super) boundary: Boundary,
    pub(super) parts: Vec<HeatedPart>,
    /// Position in `parts` of each element's part.
    pub(super) part_of: Vec<u32>,
    pub(super) ambient_k: f64,
}

/// Heat flows of the whole section in watts.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub(super) struct Flows {
    pub(super) supplied: f64,
    pub(super) radiated: f64,
    pub(super) convected: f64,
    pub(super) through_flux_faces: f64,
}

impl Flows {
    fn add(&mut self, other: &Self) {
        self.supplied += other.supplied;
        self.radiated += other.radiated;
        self.convected += other.convected;
        self.through_flux_faces += other.through_flux_faces;
    }

    /// Sum of the sizes of the flows, watts.
    pub(super) fn size(&self) -> f64 {
        self.supplied.abs() + self.radiated.abs() + self.convected.abs() + self.through_flux_faces.abs()
    }
}

/// Both sides of the equations at one temperature field.
#[derive(Debug, Clone, Default)]
pub(super) struct Terms {
    /// Heat taken up since `h_n`, joules, one an unknown.
    pub(super) storage: Vec<f64>,
    /// Heat flowing in, watts, one an unknown.
    pub(super) rate: Vec<f64>,
    pub(super) flows: Flows,
}

/// Terms of one element.
#[derive(Default)]
struct Local {
    storage: [f64; MAX_NODES],
    rate: [f64; MAX_NODES],
    flows: Flows,
}

impl Operator {
    /// Storage against `enthalpy` (`rho h_n` in J/m^3 a point) and rate with `source` (W/m^3 a point) at `t`.
    pub(super) fn terms(&self, t: &[f64], enthalpy: &[f64], source: &[f64]) -> Terms {
        let local = match self.space.reference().node_count() {
            3 => Self::local_terms::<3>,
            6 => Self::local_terms::<6>,
            _ => Self::local_terms::<MAX_NODES>,
        };
        let locals = map_elements(self.space.element_count(), |e, _| local(self, e, t, enthalpy, source));
        let n = self.space.len();
        let mut terms = Terms { storage: vec![0.0; n], rate: vec![0.0; n], flows: Flows::default() };
        for (e, local) in locals.iter().enumerate() {
            for (i, &unknown) in self.space.element(e).iter().enumerate() {
                terms.storage[unknown as usize] += local.storage[i];
                terms.rate[unknown as usize] += local.rate[i];
            }
            terms.flows.add(&local.flows);
        }
        terms
    }

    /// Terms of element `e` of `N` nodes; a constant number lets the compiler unroll the inner loops.
    fn local_terms<const N: usize>(&self, e: usize, t: &[f64], enthalpy: &[f64], source: &[f64]) -> Local {
        let part = self.part(e);
        let material = &part.material;
        let (nodal, _) = self.nodal(e, t);
        let mut out = Local::default();
        let own = e * self.geometry.points()..(e + 1) * self.geometry.points();
        let shapes = self.space.reference().shapes();
        let (mut at, mut slopes) = ([0.0; MAX_POINTS], [[0.0; 2]; MAX_POINTS]);
        for ((shape, at), slope) in shapes.iter().zip(&mut at).zip(&mut slopes) {
            for ((t, v), d) in nodal.iter().zip(&shape.value).zip(&shape.derivative).take(N) {
                *at += v * t;
                // Differences first: what is common to the element must not spoil the gradient's last digits.
                slope[0] += d[0] * (t - nodal[0]);
                slope[1] += d[1] * (t - nodal[0]);
            }
        }
        let (mut h, mut k) = (at, at);
        material.enthalpy.values(&mut h[..own.len()]);
        part.conductivity.values(&mut k[..own.len()]);
        let properties = h.iter().zip(&k).zip(&slopes);
        let measures = self.geometry.volume(e).iter().zip(self.geometry.map(e));
        let data = enthalpy[own.clone()].iter().zip(&source[own]);
        for (((shape, ((h, k), &slope)), (&volume, map)), (h_before, source)) in
            shapes.iter().zip(properties).zip(measures).zip(data)
        {
            let stored = volume * (material.density_kg_per_m3 * h - h_before);
            let supplied = volume * source;
            let flux = coupled(map, volume * k, slope);
            let rows = out.storage.iter_mut().zip(&mut out.rate);
            for (((storage, rate), v), d) in rows.zip(&shape.value).zip(&shape.derivative).take(N) {
                *storage += stored * v;
                *rate += supplied * v - (d[0] * flux[0] + d[1] * flux[1]);
            }
            out.flows.supplied += supplied;
        }
        for side in self.boundary.of(e) {
            self.side_terms(side, &nodal, &mut out);
        }
        out
    }

    fn side_terms(&self, side: &ActiveSide, nodal: &[f64; MAX_NODES], out: &mut Local) {
        for (surface, value) in &side.points {
            let inward = match side.law {
                SideLaw::Flux(flux) => {
                    out.flows.through_flux_faces += surface * flux;
                    flux
                }
                SideLaw::Exchange { convection, emissivity } => {
                    let t = side_temperature(side, value, nodal);
                    let loss = exchange(t, self.ambient_k, convection, emissivity);
                    out.flows.radiated += surface * loss.radiated;
                    out.flows.convected += surface * loss.convected;
                    -(loss.radiated + loss.convected)
                }
            };
            for (&i, v) in side.nodes[..side.count].iter().zip(value) {
                out.rate[i] += surface * inward * v;
            }
        }
    }

    /// Adds the tangent of `storage - w rate` at `t` to `values`, in J/K; `w` in seconds.
    /// `buffer` is room for element blocks.
    pub(super) fn add_tangent(&self, scatter: &Scatter, t: &[f64], w: f64, buffer: &mut Vec<f64>, values: &mut [f64]) {
        let local = match self.space.reference().node_count() {
            3 => Self::local_tangent::<3>,
            6 => Self::local_tangent::<6>,
            _ => Self::local_tangent::<MAX_NODES>,
        };
        add_blocks(scatter, buffer, values, |e, _, block: &mut Block<f64>| local(self, e, t, w, block));
    }

    fn local_tangent<const N: usize>(&self, e: usize, t: &[f64], w: f64, block: &mut Block<f64>) {
        let part = self.part(e);
        let material = &part.material;
        let (nodal, _) = self.nodal(e, t);
        let measures = self.geometry.volume(e).iter().zip(self.geometry.map(e));
        for (shape, (&volume, map)) in self.space.reference().shapes().iter().zip(measures) {
            let at: f64 = shape.value.iter().zip(&nodal).take(N).map(|(v, t)| v * t).sum();
            let capacity = volume * material.density_kg_per_m3 * material.enthalpy.slope(at);
            let k = w * volume * part.conductivity.value(at);
            let mut slot = 0;
            for (i, (v, &d)) in shape.value.iter().zip(&shape.derivative).enumerate().take(N) {
                let (mass, flow) = (capacity * v, coupled(map, k, d));
                for (other, d) in shape.value.iter().zip(&shape.derivative).take(i + 1) {
                    block[slot] += mass * other + flow[0] * d[0] + flow[1] * d[1];
                    slot += 1;
                }
            }
        }
        for side in self.boundary.of(e) {
            self.side_tangent(side, &nodal, w, block);
        }
    }

    fn side_tangent(&self, side: &ActiveSide, nodal: &[f64; MAX_NODES], w: f64, block: &mut Block<f64>) {
        let SideLaw::Exchange { convection, emissivity } = side.law else { return };
        let nodes = &side.nodes[..side.count];
        for (surface, value) in &side.points {
            let t = side_temperature(side, value, nodal);
            let weight = w * surface * exchange(t, self.ambient_k, convection, emissivity).slope;
            for (a, &i) in nodes.iter().enumerate() {
                for (b, &j) in nodes.iter().enumerate().filter(|&(_, &j)| j <= i) {
                    block[i * (i + 1) / 2 + j] += weight * value[a] * value[b];
                }
            }
        }
    }

    /// Enthalpy `rho h(T)` at every quadrature point, J/m^3.
    pub(super) fn enthalpy(&self, t: &[f64]) -> Vec<f64> {
        let count = self.geometry.points();
        let rows = map_elements(self.space.element_count(), |e, _| {
            let material = &self.part(e).material;
            let mut row = [0.0; MAX_POINTS];
            self.at_points(e, t, &mut row[..count]);
            material.enthalpy.values(&mut row[..count]);
            for h in &mut row[..count] {
                *h *= material.density_kg_per_m3;
            }
            row
        });
        rows.iter().flat_map(|row| &row[..count]).copied().collect()
    }

    /// Temperature at the quadrature points of element `e`, kelvin.
    pub(super) fn at_points(&self, e: usize, t: &[f64], out: &mut [f64]) {
        let (nodal, nodes) = self.nodal(e, t);
        for (slot, shape) in out.iter_mut().zip(self.space.reference().shapes()) {
            *slot = shape.value[..nodes].iter().zip(&nodal).map(|(v, t)| v * t).sum();
        }
    }

    pub(super) fn part(&self, e: usize) -> &HeatedPart {
        &self.parts[self.part_of[e] as usize]
    }

    fn nodal(&self, e: usize, t: &[f64]) -> ([f64; MAX_NODES], usize) {
        let unknowns = self.space.element(e);
        let mut nodal = [0.0; MAX_NODES];
        for (slot, &u) in nodal.iter_mut().zip(unknowns) {
            *slot = t[u as usize];
        }
        (nodal, unknowns.len())
    }
}

/// Flow `k grad f` from the reference derivatives of `f`, against the gradients of the reference coordinates.
fn coupled(map: &Map, k: f64, slope: [f64; 2]) -> [f64; 2] {
    let r = k * (map[0][0] * slope[0] + map[1][0] * slope[1]);
    let z = k * (map[0][1] * slope[0] + map[1][1] * slope[1]);
    [map[0][0] * r + map[0][1] * z, map[1][0] * r + map[1][1] * z]
}

fn side_temperature(side: &ActiveSide, value: &[f64], nodal: &[f64; MAX_NODES]) -> f64 {
    side.nodes[..side.count].iter().zip(value).map(|(&i, v)| v * nodal[i]).sum()
}
