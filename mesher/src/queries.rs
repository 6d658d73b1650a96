//! Questions to a mesh: what lies on a curve, in a region, between two regions, and in which order. Convention: as in [`crate::Mesh`];
//! triangles, edges and vertices are named by their indices; answers come in the order of the indices unless another is stated.

use crate::ids::{CurveId, NO_TRIANGLE, RegionId, distance};
use crate::mesh::{Bend, Mesh};

/// A side of a triangle, taken in the direction that has the triangle on its left.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Side {
    /// Index of the triangle.
    pub triangle: usize,
    /// Local edge, 0 to 2: from local vertex `edge` to local vertex `(edge + 1) % 3`.
    pub edge: usize,
}

impl Mesh {
    /// Triangles of a region.
    pub fn triangles_of(&self, region: RegionId) -> impl Iterator<Item = usize> + '_ {
        self.regions.iter().enumerate().filter(move |&(_, &r)| r == region).map(|(t, _)| t)
    }

    /// Edges on a curve.
    pub fn edges_of(&self, curve: CurveId) -> impl Iterator<Item = usize> + '_ {
        self.edges.iter().enumerate().filter(move |(_, e)| e.curve == Some(curve)).map(|(e, _)| e)
    }

    /// Edges on one piece of the outline of the drawing's region number `index`.
    pub fn edges_of_piece(&self, index: usize, piece: usize) -> impl Iterator<Item = usize> + '_ {
        let on_it: Vec<bool> = self.curves.iter().map(|c| c.on_regions.contains(&(index, piece))).collect();
        let lies = move |curve: Option<CurveId>| curve.is_some_and(|c| on_it[c.0 as usize]);
        self.edges.iter().enumerate().filter(move |(_, e)| lies(e.curve)).map(|(e, _)| e)
    }

    /// Edges with one region on one side and the other on the other, whichever way round.
    pub fn edges_between(&self, one: RegionId, other: RegionId) -> impl Iterator<Item = usize> + '_ {
        let between = move |triangles: [u32; 2]| {
            triangles[1] != NO_TRIANGLE && {
                let sides = triangles.map(|t| self.regions[t as usize]);
                one != other && (sides == [one, other] || sides == [other, one])
            }
        };
        self.edges.iter().enumerate().filter(move |(_, e)| between(e.triangles)).map(|(e, _)| e)
    }

    /// Vertices on a curve from one of its ends to the other; a closed curve begins at its lowest vertex, which is not repeated.
    pub fn vertices_on(&self, curve: CurveId) -> Vec<u32> {
        let mut left: Vec<[u32; 2]> = self.edges_of(curve).map(|e| self.edges[e].vertices).collect();
        let mut chain = Vec::with_capacity(left.len() + 1);
        while !left.is_empty() {
            let ends = |v: u32| left.iter().filter(|e| e.contains(&v)).count();
            let all = || left.iter().flatten().copied();
            let start = all().filter(|&v| ends(v) == 1).min().or_else(|| all().min());
            let mut next = start;
            while let Some(here) = next {
                chain.push(here);
                next = left.iter().position(|e| e.contains(&here)).map(|i| {
                    let [a, b] = left.swap_remove(i);
                    if a == here { b } else { a }
                });
                next = next.filter(|&v| Some(v) != start);
            }
        }
        chain
    }

    /// The triangle on the other side of a triangle's local edge.
    pub fn neighbour(&self, triangle: usize, edge: usize) -> Option<usize> {
        let [one, other] = self.edges[self.triangle_edges[triangle][edge] as usize].triangles;
        let across = if one as usize == triangle { other } else { one };
        (across != NO_TRIANGLE).then_some(across as usize)
    }

    /// First and second vertex of a side.
    pub fn ends(&self, side: Side) -> [u32; 2] {
        let corners = self.triangles[side.triangle];
        [corners[side.edge], corners[(side.edge + 1) % 3]]
    }

    /// The closed loops of sides round a region, each with the region on its left: an outer one for every part of the region that hangs
    /// together by edges, turning counter-clockwise, and one for every hole, turning clockwise.
    pub fn boundary_loops(&self, region: RegionId) -> Vec<Vec<Side>> {
        let inside = |t: usize| self.regions[t] == region;
        let bounds = |s: &Side| !self.neighbour(s.triangle, s.edge).is_some_and(inside);
        let mut walked = vec![[false; 3]; self.triangles.len()];
        let mut loops = Vec::new();
        for triangle in self.triangles_of(region) {
            for edge in 0..3 {
                let start = Side { triangle, edge };
                if walked[triangle][edge] || !bounds(&start) {
                    continue;
                }
                let mut sides = Vec::new();
                let mut here = start;
                while !walked[here.triangle][here.edge] {
                    walked[here.triangle][here.edge] = true;
                    sides.push(here);
                    here = self.turned(here, &bounds);
                }
                loops.push(sides);
            }
        }
        loops
    }

    /// The next side of a boundary: turns about the end of a side, through triangles of its region, until `bounds` is true.
    fn turned(&self, side: Side, bounds: &impl Fn(&Side) -> bool) -> Side {
        let mut next = Side { triangle: side.triangle, edge: (side.edge + 1) % 3 };
        while !bounds(&next) {
            let shared = self.triangle_edges[next.triangle][next.edge];
            let Some(triangle) = self.neighbour(next.triangle, next.edge) else { break };
            let back = (0..3).find(|&e| self.triangle_edges[triangle][e] == shared).unwrap_or(0);
            next = Side { triangle, edge: (back + 1) % 3 };
        }
        next
    }

    /// Length of an edge in metres: along its arc where it lies on one, from end to end elsewhere.
    pub fn edge_length(&self, edge: usize) -> f64 {
        let [a, b] = self.edges[edge].vertices.map(|v| self.vertices[v as usize]);
        let chord = distance(a, b);
        match self.bends[edge] {
            Bend::Arc(_, radius) => 2.0 * radius * (0.5 * chord / radius).min(1.0).asin(),
            Bend::Straight | Bend::Polar(_) => chord,
        }
    }
}
