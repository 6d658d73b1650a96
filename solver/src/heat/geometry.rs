//! Volumes in m^3 and the map of gradients of every element at its quadrature points, computed once a problem.
//! Convention: element-major, then quadrature point.

use crate::fem::assemble::map_elements;
use crate::fem::reference::node_positions;
use crate::fem::space::Space;

/// Gradients in 1/m of the two reference coordinates, each `[d/dr, d/dz]`: `grad f = xi' df/dxi + eta' df/deta`.
pub(super) type Map = [[f64; 2]; 2];

/// The measures of a space.
#[derive(Debug, Clone)]
pub(super) struct Geometry {
    points: usize,
    volume: Vec<f64>,
    map: Vec<Map>,
}

impl Geometry {
    pub(super) fn new(space: &Space) -> Self {
        let nodes = node_positions(space.reference().order());
        let rows = map_elements(space.element_count(), |e, points| {
            space.fill(e, points);
            let volume: Vec<f64> = points.points().iter().map(|p| p.volume).collect();
            let map: Vec<Map> = points.points().iter().map(|p| coordinate_gradients(&nodes, &p.gradient)).collect();
            (volume, map)
        });
        let (mut volume, mut map) = (Vec::new(), Vec::new());
        for (v, m) in rows {
            volume.extend(v);
            map.extend(m);
        }
        Self { points: space.reference().point_count(), volume, map }
    }

    /// Quadrature points of an element.
    pub(super) fn points(&self) -> usize {
        self.points
    }

    /// Quadrature points of all elements.
    pub(super) fn len(&self) -> usize {
        self.volume.len()
    }

    /// Volumes of the points of element `e`.
    pub(super) fn volume(&self, e: usize) -> &[f64] {
        &self.volume[e * self.points..(e + 1) * self.points]
    }

    /// Maps of gradients at the points of element `e`.
    pub(super) fn map(&self, e: usize) -> &[Map] {
        &self.map[e * self.points..(e + 1) * self.points]
    }
}

/// The basis reproduces the reference coordinates, so their gradients are sums over the nodes.
fn coordinate_gradients(nodes: &[[f64; 2]], gradients: &[[f64; 2]]) -> Map {
    let mut map = [[0.0; 2]; 2];
    for (x, g) in nodes.iter().zip(gradients) {
        for (row, x) in map.iter_mut().zip(x) {
            row[0] += x * g[0];
            row[1] += x * g[1];
        }
    }
    map
}
