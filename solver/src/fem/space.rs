//! A Lagrange space over all or some regions of a mesh.

use std::sync::Arc;

use mesher::{Mesh, NodeSet, Point, RegionId};

use super::assemble::map_elements;
use super::element::ElementPoints;
use super::reference::{MAX_NODES, Reference};

/// Marks a node of the mesh that is not in a space.
pub const NOT_HERE: u32 = u32::MAX;

/// Elements, nodes and numbering of unknowns.
///
/// A space over some regions keeps the mesh's triangles it uses (`triangle`) and numbers their nodes afresh, in the
/// order of the mesh's nodes.
#[derive(Debug, Clone)]
pub struct Space {
    reference: Arc<Reference>,
    mesh: Arc<Mesh>,
    points: Vec<Point>,
    connectivity: Vec<u32>,
    triangles: Vec<u32>,
    regions: Vec<RegionId>,
    mesh_node: Vec<u32>,
    from_mesh_node: Vec<u32>,
}

impl Space {
    /// The space over the elements whose region satisfies `keep`, on `nodes` of `mesh`.
    pub fn new(mesh: &Arc<Mesh>, nodes: &NodeSet, keep: impl Fn(RegionId) -> bool) -> Self {
        let reference = Arc::new(Reference::new(nodes.order));
        let stride = reference.node_count();
        let triangles: Vec<u32> =
            (0..mesh.triangles().len() as u32).filter(|&t| keep(mesh.regions()[t as usize])).collect();
        let mut from_mesh_node = vec![NOT_HERE; nodes.points.len()];
        for &t in &triangles {
            for &n in &nodes.elements[t as usize * stride..(t as usize + 1) * stride] {
                from_mesh_node[n as usize] = 0;
            }
        }
        let mut mesh_node = Vec::new();
        for (n, slot) in from_mesh_node.iter_mut().enumerate().filter(|(_, slot)| **slot == 0) {
            *slot = mesh_node.len() as u32;
            mesh_node.push(n as u32);
        }
        let connectivity = triangles
            .iter()
            .flat_map(|&t| &nodes.elements[t as usize * stride..(t as usize + 1) * stride])
            .map(|&n| from_mesh_node[n as usize])
            .collect();
        let points = mesh_node.iter().map(|&n| nodes.points[n as usize]).collect();
        let regions = triangles.iter().map(|&t| mesh.regions()[t as usize]).collect();
        Self { reference, mesh: Arc::clone(mesh), points, connectivity, triangles, regions, mesh_node, from_mesh_node }
    }

    /// Basis and quadrature.
    pub fn reference(&self) -> &Reference {
        &self.reference
    }

    /// The mesh below.
    pub fn mesh(&self) -> &Arc<Mesh> {
        &self.mesh
    }

    /// Number of unknowns of a scalar field.
    pub fn len(&self) -> usize {
        self.points.len()
    }

    /// True where the space has no element.
    pub fn is_empty(&self) -> bool {
        self.triangles.is_empty()
    }

    /// Number of elements.
    pub fn element_count(&self) -> usize {
        self.triangles.len()
    }

    /// Positions of the nodes, `[r, z]` in metres, one an unknown.
    pub fn points(&self) -> &[Point] {
        &self.points
    }

    /// Unknowns of an element, in the order of the basis.
    pub fn element(&self, e: usize) -> &[u32] {
        let stride = self.reference.node_count();
        &self.connectivity[e * stride..(e + 1) * stride]
    }

    /// Region of an element.
    pub fn region(&self, e: usize) -> RegionId {
        self.regions[e]
    }

    /// Triangle of the mesh that an element is.
    pub fn triangle(&self, e: usize) -> usize {
        self.triangles[e] as usize
    }

    /// Node of the mesh's node set that an unknown belongs to, one an unknown.
    pub fn mesh_nodes(&self) -> &[u32] {
        &self.mesh_node
    }

    /// Unknown of a node of the mesh's node set, or `None` where the space does not reach.
    pub fn unknown_of_mesh_node(&self, node: usize) -> Option<usize> {
        self.from_mesh_node.get(node).filter(|&&u| u != NOT_HERE).map(|&u| u as usize)
    }

    /// Nodes of an element, `[r, z]` in metres.
    pub fn corners(&self, e: usize, out: &mut [Point; MAX_NODES]) -> usize {
        let dofs = self.element(e);
        for (slot, &n) in out.iter_mut().zip(dofs) {
            *slot = self.points[n as usize];
        }
        dofs.len()
    }

    /// Fills `out` with the quadrature points of element `e`.
    pub fn fill(&self, e: usize, out: &mut ElementPoints) {
        let mut corners = [[0.0; 2]; MAX_NODES];
        let n = self.corners(e, &mut corners);
        out.fill(&self.reference, &corners[..n]);
    }

    /// Volume of each of `regions` regions, m^3.
    pub fn volume_by_region(&self, regions: usize) -> Vec<f64> {
        let volumes = map_elements(self.element_count(), |e, points| {
            self.fill(e, points);
            points.points().iter().map(|p| p.volume).sum::<f64>()
        });
        let mut out = vec![0.0; regions];
        for (e, v) in volumes.into_iter().enumerate() {
            out[self.region(e).0 as usize] += v;
        }
        out
    }

    /// Element and reference coordinates of a point, or `None` outside the space.
    ///
    /// Starts from the straight-sided triangle and corrects for curved sides by Newton's method. A point on or just
    /// outside the space's edge (by at most `slack` in reference coordinates) is taken into the nearest element.
    pub fn locate(&self, point: Point, slack: f64) -> Option<(usize, [f64; 2])> {
        let mut best: Option<(f64, usize, [f64; 2])> = None;
        for e in 0..self.element_count() {
            if !self.near(e, point) {
                continue;
            }
            if let Some(x) = self.invert(e, point) {
                let outside = (-x[0]).max(-x[1]).max(x[0] + x[1] - 1.0).max(0.0);
                if outside <= slack && best.is_none_or(|(o, ..)| outside < o) {
                    best = Some((outside, e, x));
                }
            }
        }
        best.map(|(_, e, x)| (e, x))
    }

    fn near(&self, e: usize, p: Point) -> bool {
        let mut corners = [[0.0; 2]; MAX_NODES];
        let n = self.corners(e, &mut corners);
        (0..2).all(|c| {
            let lo = corners[..n].iter().map(|q| q[c]).fold(f64::INFINITY, f64::min);
            let hi = corners[..n].iter().map(|q| q[c]).fold(f64::NEG_INFINITY, f64::max);
            let margin = 0.2 * (hi - lo);
            p[c] >= lo - margin && p[c] <= hi + margin
        })
    }

    fn invert(&self, e: usize, p: Point) -> Option<[f64; 2]> {
        let mut corners = [[0.0; 2]; MAX_NODES];
        let n = self.corners(e, &mut corners);
        let mut x = [1.0 / 3.0; 2];
        for _ in 0..20 {
            let shape = self.reference.shape_at(x);
            let (mut q, mut j) = ([0.0; 2], [[0.0; 2]; 2]);
            for (i, node) in corners[..n].iter().enumerate() {
                for c in 0..2 {
                    q[c] += shape.value[i] * node[c];
                    j[c][0] += shape.derivative[i][0] * node[c];
                    j[c][1] += shape.derivative[i][1] * node[c];
                }
            }
            let det = j[0][0] * j[1][1] - j[0][1] * j[1][0];
            let d = [p[0] - q[0], p[1] - q[1]];
            let step = [(d[0] * j[1][1] - d[1] * j[0][1]) / det, (d[1] * j[0][0] - d[0] * j[1][0]) / det];
            x = [x[0] + step[0], x[1] + step[1]];
            if !(x[0].is_finite() && x[1].is_finite()) {
                return None;
            }
            if step[0].abs().max(step[1].abs()) < 1e-13 {
                return Some(x);
            }
        }
        None
    }

    /// Value of a nodal field at reference point `x` of element `e`.
    pub fn value_at(&self, e: usize, x: [f64; 2], field: &[f64]) -> f64 {
        let shape = self.reference.shape_at(x);
        self.element(e).iter().zip(&shape.value).map(|(&n, v)| v * field[n as usize]).sum()
    }
}
