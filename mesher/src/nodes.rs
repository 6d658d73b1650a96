//! Nodes of elements of order 1 to 3 on the true curves. Convention: per element 3 vertices, then the nodes of local edges 0, 1, 2 from
//! local vertex `e` to `(e + 1) % 3`, then interior nodes; equal angles on arcs. Source: the interior node of order 3 is that of the
//! serendipity element (sum of edge nodes / 4 - sum of vertices / 6), which keeps the map quadratic-exact: O. C. Zienkiewicz,
//! R. L. Taylor, "The finite element method".

use crate::ids::{Point, along, between, dot, sub};
use crate::mesh::{Bend, Mesh};
use std::f64::consts::{PI, TAU};

/// Nodes of all elements of one order.
#[derive(Debug, Clone, PartialEq)]
pub struct NodeSet {
    /// Polynomial order, 1 to 3.
    pub order: usize,
    /// Node positions in metres: vertices, then edge nodes edge by edge from the lower vertex, then interior nodes.
    pub points: Vec<Point>,
    /// Node indices, `(order + 1)(order + 2) / 2` a triangle, triangle by triangle.
    pub elements: Vec<u32>,
    /// How many of the nodes are vertices.
    pub vertex_count: usize,
}

impl Mesh {
    /// Nodes for elements of the given order; orders below 1 count as 1, above 3 as 3.
    pub fn nodes(&self, order: usize) -> NodeSet {
        let order = order.clamp(1, 3);
        let mut points = self.vertices.clone();
        for e in 0..self.edges.len() {
            points.extend((1..order).map(|k| self.edge_point(e, k as f64 / order as f64)));
        }
        let first_interior = points.len();
        let mut elements = Vec::with_capacity(self.triangles.len() * (order + 1) * (order + 2) / 2);
        for (t, vertices) in self.triangles.iter().enumerate() {
            let from = elements.len();
            elements.extend(vertices);
            for (e, &edge) in self.triangle_edges[t].iter().enumerate() {
                let first = (self.vertices.len() + edge as usize * (order - 1)) as u32;
                let inner = first..first + order as u32 - 1;
                if self.edges[edge as usize].vertices[0] == vertices[e] {
                    elements.extend(inner);
                } else {
                    elements.extend(inner.rev());
                }
            }
            if order == 3 {
                elements.push((first_interior + t) as u32);
                let nodes: &[u32] = &elements[from..from + 9];
                points.push(interior(nodes, &points));
            }
        }
        NodeSet { order, points, elements, vertex_count: self.vertices.len() }
    }

    /// Point of an edge at parameter `t` from its first vertex, on its true curve.
    pub(crate) fn edge_point(&self, edge: usize, t: f64) -> Point {
        self.bends[edge].point(self.edges[edge].vertices.map(|v| self.vertices[v as usize]), t)
    }
}

impl Bend {
    /// Point at parameter `t` from the first of two ends.
    pub(crate) fn point(self, [a, b]: [Point; 2], t: f64) -> Point {
        let (centre, radius) = match self {
            Bend::Straight => return between(a, b, t),
            Bend::Arc(centre, radius) => (centre, Some(radius)),
            Bend::Polar(centre) => (centre, None),
        };
        let (u, v) = (sub(a, centre), sub(b, centre));
        let length = |w: Point| dot(w, w).sqrt();
        let radius = radius.unwrap_or_else(|| length(u) + t * (length(v) - length(u)));
        let from = u[1].atan2(u[0]);
        let turn = (v[1].atan2(v[0]) - from + PI).rem_euclid(TAU) - PI;
        let angle = from + t * turn;
        along(centre, [angle.cos(), angle.sin()], radius)
    }
}

fn interior(nodes: &[u32], points: &[Point]) -> Point {
    let sum = |ids: &[u32], k: usize| ids.iter().map(|&i| points[i as usize][k]).sum::<f64>();
    [0, 1].map(|k| 0.25 * sum(&nodes[3..9], k) - sum(&nodes[..3], k) / 6.0)
}
