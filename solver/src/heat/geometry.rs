//! Volumes in m^3 and basis gradients in 1/m of every element at its quadrature points, computed once a problem.
//! Convention: element-major, then quadrature point, then node.

use crate::fem::assemble::map_elements;
use crate::fem::space::Space;

/// The measures of a space.
#[derive(Debug, Clone)]
pub(super) struct Geometry {
    points: usize,
    nodes: usize,
    volume: Vec<f64>,
    gradient: Vec<[f64; 2]>,
}

impl Geometry {
    pub(super) fn new(space: &Space) -> Self {
        let nodes = space.reference().node_count();
        let rows = map_elements(space.element_count(), |e, points| {
            space.fill(e, points);
            let volume: Vec<f64> = points.points().iter().map(|p| p.volume).collect();
            let gradient: Vec<[f64; 2]> = points.points().iter().flat_map(|p| p.gradient[..nodes].to_vec()).collect();
            (volume, gradient)
        });
        let (mut volume, mut gradient) = (Vec::new(), Vec::new());
        for (v, g) in rows {
            volume.extend(v);
            gradient.extend(g);
        }
        Self { points: space.reference().point_count(), nodes, volume, gradient }
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

    /// Gradients of the nodes of element `e` at its point `q`.
    pub(super) fn gradient(&self, e: usize, q: usize) -> &[[f64; 2]] {
        let start = (e * self.points + q) * self.nodes;
        &self.gradient[start..start + self.nodes]
    }
}
