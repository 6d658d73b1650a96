//! One element at its quadrature points: positions, measures, values and gradients of its basis.

use super::measure::ring;
use super::reference::{MAX_NODES, MAX_POINTS, Reference, Shape};

/// An element seen at its quadrature points.
#[derive(Debug, Clone)]
pub struct ElementPoints {
    /// Number of nodes.
    pub nodes: usize,
    /// Number of points.
    pub count: usize,
    /// The points.
    pub at: [PointValues; MAX_POINTS],
}

/// A quadrature point.
#[derive(Debug, Clone, Copy)]
pub struct PointValues {
    /// Radius in metres.
    pub r: f64,
    /// Height in metres.
    pub z: f64,
    /// Area it stands for in the section, m^2.
    pub area: f64,
    /// Volume it stands for, m^3: area times the circumference of its ring.
    pub volume: f64,
    /// Basis values, one a node.
    pub value: [f64; MAX_NODES],
    /// Basis gradients `[d/dr, d/dz]` in 1/m, one a node.
    pub gradient: [[f64; 2]; MAX_NODES],
}

impl Default for ElementPoints {
    fn default() -> Self {
        let empty = PointValues {
            r: 0.0,
            z: 0.0,
            area: 0.0,
            volume: 0.0,
            value: [0.0; MAX_NODES],
            gradient: [[0.0; 2]; MAX_NODES],
        };
        Self { nodes: 0, count: 0, at: [empty; MAX_POINTS] }
    }
}

impl ElementPoints {
    /// Fills itself for an element with nodes at `corners` (all nodes, `[r, z]` in metres).
    pub fn fill(&mut self, reference: &Reference, corners: &[[f64; 2]]) {
        self.nodes = reference.node_count();
        self.count = reference.point_count();
        for ((shape, weight), slot) in reference.shapes().iter().zip(reference.weights()).zip(&mut self.at) {
            *slot = point_values(shape, *weight, corners);
        }
    }

    /// The points.
    pub fn points(&self) -> &[PointValues] {
        &self.at[..self.count]
    }
}

/// Position, measure, values and gradients at one reference point of an element with the given nodes.
///
/// `weight` is the quadrature weight of the point (1 where only positions and gradients are wanted).
pub fn point_values(shape: &Shape, weight: f64, corners: &[[f64; 2]]) -> PointValues {
    let (mut p, mut j) = ([0.0; 2], [[0.0; 2]; 2]);
    for (i, node) in corners.iter().enumerate() {
        for c in 0..2 {
            p[c] += shape.value[i] * node[c];
            j[c][0] += shape.derivative[i][0] * node[c];
            j[c][1] += shape.derivative[i][1] * node[c];
        }
    }
    let det = j[0][0] * j[1][1] - j[0][1] * j[1][0];
    let mut gradient = [[0.0; 2]; MAX_NODES];
    for (g, d) in gradient.iter_mut().zip(&shape.derivative).take(corners.len()) {
        g[0] = (d[0] * j[1][1] - d[1] * j[1][0]) / det;
        g[1] = (d[1] * j[0][0] - d[0] * j[0][1]) / det;
    }
    let area = weight * det;
    PointValues { r: p[0], z: p[1], area, volume: area * ring(p[0]), value: shape.value, gradient }
}
