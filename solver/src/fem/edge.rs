//! Edges of a space: quadrature along a curved side, and which sides bound the space.

use mesher::Point;

use super::measure::ring;
use super::reference::{EDGE_POINTS, MAX_NODES, edge_direction, edge_point};
use super::space::Space;

/// A side of an element.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Side {
    /// Element of the space.
    pub element: usize,
    /// Local edge: 0 joins corners 0 and 1, 1 joins 1 and 2, 2 joins 2 and 0.
    pub edge: usize,
}

/// A quadrature point on a side.
#[derive(Debug, Clone, Copy)]
pub struct SidePoint {
    /// Position `[r, z]` in metres.
    pub at: Point,
    /// Length it stands for in the section, metres.
    pub length: f64,
    /// Surface it stands for, m^2: length times the circumference of its ring.
    pub surface: f64,
    /// Unit normal, out of the element.
    pub normal: [f64; 2],
    /// Tangent `d(position)/ds`, metres, counter-clockwise about the element.
    pub tangent: [f64; 2],
    /// Weight of the point on the unit interval.
    pub weight: f64,
    /// Basis values, one a node of the element.
    pub value: [f64; MAX_NODES],
}

impl Space {
    /// Quadrature points of a side.
    pub fn side_points(&self, side: Side) -> [SidePoint; EDGE_POINTS] {
        let mut corners = [[0.0; 2]; MAX_NODES];
        let n = self.corners(side.element, &mut corners);
        let rule = self.reference().edge_rule();
        std::array::from_fn(|q| {
            let (s, weight) = rule[q];
            let shape = self.reference().shape_at(edge_point(side.edge, s));
            let d = edge_direction(side.edge);
            let (mut at, mut tangent) = ([0.0; 2], [0.0; 2]);
            for (i, node) in corners[..n].iter().enumerate() {
                let slope = shape.derivative[i][0] * d[0] + shape.derivative[i][1] * d[1];
                for c in 0..2 {
                    at[c] += shape.value[i] * node[c];
                    tangent[c] += slope * node[c];
                }
            }
            let speed = tangent[0].hypot(tangent[1]);
            let length = weight * speed;
            let normal = [tangent[1] / speed, -tangent[0] / speed];
            SidePoint { at, length, surface: length * ring(at[0]), normal, tangent, weight, value: shape.value }
        })
    }

    /// Sides that bound the space: those without a neighbour in the space, in order of element and edge.
    ///
    /// `across` tells for each the mesh triangle on the other side, `None` on the boundary of the mesh.
    pub fn boundary_sides(&self) -> Vec<(Side, Option<usize>)> {
        let mesh = self.mesh();
        let mut inside = vec![false; mesh.triangles().len()];
        for e in 0..self.element_count() {
            inside[self.triangle(e)] = true;
        }
        let mut sides = Vec::new();
        for e in 0..self.element_count() {
            let t = self.triangle(e);
            for (edge, &id) in mesh.triangle_edges()[t].iter().enumerate() {
                let pair = mesh.edges()[id as usize].triangles;
                let other = if pair[0] as usize == t { pair[1] } else { pair[0] };
                let across = (other != mesher::NO_TRIANGLE).then_some(other as usize);
                if across.is_none_or(|u| !inside[u]) {
                    sides.push((Side { element: e, edge }, across));
                }
            }
        }
        sides
    }

    /// Surface of each of `regions` regions towards other regions, m^2: without the axis and the edge of the mesh.
    pub fn surface_by_region(&self, regions: usize) -> Vec<f64> {
        let mesh = self.mesh();
        let mut out = vec![0.0; regions];
        for e in 0..self.element_count() {
            let t = self.triangle(e);
            for (edge, &id) in mesh.triangle_edges()[t].iter().enumerate() {
                let pair = mesh.edges()[id as usize].triangles;
                let other = if pair[0] as usize == t { pair[1] } else { pair[0] };
                if other != mesher::NO_TRIANGLE && mesh.regions()[other as usize] != self.region(e) {
                    let points = self.side_points(Side { element: e, edge });
                    out[self.region(e).0 as usize] += points.iter().map(|p| p.surface).sum::<f64>();
                }
            }
        }
        out
    }
}
