//! The check every mesh passes before it is handed out. Convention: as in [`crate::Mesh`].

use crate::error::MeshDefect;
use crate::ids::{NO_TRIANGLE, Point, between, cross, sub};
use crate::mesh::{Bend, Mesh, straight_area};
use crate::predicates::orient;

/// Barycentric points at which the Jacobian of the quadratic map must be positive: vertices, edge middles, the six points of a
/// quadrature of degree 4 (D. A. Dunavant, 1985) and the centroid.
const SAMPLES: [[f64; 3]; 13] = {
    const A: f64 = 0.445_948_490_915_965;
    const B: f64 = 0.091_576_213_509_771;
    const T: f64 = 1.0 / 3.0;
    [
        [1.0, 0.0, 0.0],
        [0.0, 1.0, 0.0],
        [0.0, 0.0, 1.0],
        [0.5, 0.5, 0.0],
        [0.0, 0.5, 0.5],
        [0.5, 0.0, 0.5],
        [A, A, 1.0 - 2.0 * A],
        [A, 1.0 - 2.0 * A, A],
        [1.0 - 2.0 * A, A, A],
        [B, B, 1.0 - 2.0 * B],
        [B, 1.0 - 2.0 * B, B],
        [1.0 - 2.0 * B, B, B],
        [T, T, T],
    ]
};

/// Least Jacobian of a quadratic map over that of the straight-sided triangle.
pub(crate) const LEAST_RATIO: f64 = 0.02;

impl Mesh {
    /// Checks orientation, adjacency, regions, boundary, Jacobians, Euler's formula and the covered area.
    ///
    /// # Errors
    /// The first defect found.
    pub fn check(&self) -> Result<(), MeshDefect> {
        for t in 0..self.triangles.len() {
            let [a, b, c] = self.corners(t);
            if orient(a, b, c) <= 0.0 {
                return Err(MeshDefect::Flat { triangle: t, at: a });
            }
        }
        self.check_adjacency()?;
        self.check_regions()?;
        for t in self.bent_triangles() {
            let ratio = self.least_jacobian(t);
            if ratio <= LEAST_RATIO || ratio.is_nan() {
                return Err(MeshDefect::Inverted { triangle: t, at: self.corners(t)[0], ratio });
            }
        }
        let (vertices, edges, triangles) = (self.vertices.len(), self.edges.len(), self.triangles.len());
        if vertices + triangles != edges + 1 {
            return Err(MeshDefect::Euler { vertices, edges, triangles });
        }
        self.check_area()
    }

    fn check_adjacency(&self) -> Result<(), MeshDefect> {
        let mut uses = vec![0u32; self.edges.len()];
        let mut used = vec![false; self.vertices.len()];
        for (t, edges) in self.triangle_edges.iter().enumerate() {
            for (e, &edge) in edges.iter().enumerate() {
                let (a, b) = (self.triangles[t][e], self.triangles[t][(e + 1) % 3]);
                used[a as usize] = true;
                let known = &self.edges[edge as usize];
                uses[edge as usize] += 1;
                if known.vertices != [a.min(b), a.max(b)] || !known.triangles.contains(&(t as u32)) {
                    return Err(MeshDefect::Adjacency { edge: edge as usize });
                }
            }
        }
        if let Some(v) = used.iter().position(|&u| !u) {
            return Err(MeshDefect::Adjacency { edge: v });
        }
        let wrong = |(edge, &n): (usize, &u32)| {
            let two = self.edges[edge].triangles[1] != NO_TRIANGLE;
            n != if two { 2 } else { 1 }
        };
        match uses.iter().enumerate().position(wrong) {
            Some(edge) => Err(MeshDefect::Adjacency { edge }),
            None => Ok(()),
        }
    }

    fn check_regions(&self) -> Result<(), MeshDefect> {
        for (i, edge) in self.edges.iter().enumerate() {
            let curve = edge.curve.map(|id| self.curve(id));
            if edge.triangles[1] == NO_TRIANGLE {
                if curve.is_none_or(|c| c.on_domain.is_none()) {
                    return Err(MeshDefect::Boundary { edge: i });
                }
                continue;
            }
            let regions = edge.triangles.map(|t| self.regions[t as usize]);
            if regions[0] != regions[1] && curve.is_none_or(|c| c.on_regions.is_empty()) {
                return Err(MeshDefect::RegionLeak { edge: i, regions });
            }
        }
        Ok(())
    }

    fn check_area(&self) -> Result<(), MeshDefect> {
        let straight: f64 = (0..self.triangles.len()).map(|t| straight_area(self.corners(t))).sum();
        let outer = self.edges.iter().zip(&self.bends).filter(|(e, _)| e.triangles[1] == NO_TRIANGLE);
        let covered = straight + outer.map(|(e, b)| self.segment_area(e, *b, e.triangles[0])).sum::<f64>();
        if (covered - self.domain_area).abs() <= 1e-8 * self.domain_area {
            Ok(())
        } else {
            Err(MeshDefect::Area { covered, wanted: self.domain_area })
        }
    }

    /// Triangles with a bent edge, in order.
    pub(crate) fn bent_triangles(&self) -> Vec<usize> {
        let bent = self.edges.iter().zip(&self.bends).filter(|(_, bend)| !matches!(bend, Bend::Straight));
        let mut triangles: Vec<usize> =
            bent.flat_map(|(e, _)| e.triangles).filter(|&t| t != NO_TRIANGLE).map(|t| t as usize).collect();
        triangles.sort_unstable();
        triangles.dedup();
        triangles
    }

    /// Least Jacobian of the quadratic map of a triangle over that of the straight-sided one; 1 for straight sides.
    pub(crate) fn least_jacobian(&self, triangle: usize) -> f64 {
        let edges = self.triangle_edges[triangle];
        if edges.iter().all(|&e| matches!(self.bends[e as usize], Bend::Straight)) {
            return 1.0;
        }
        let corners = self.corners(triangle);
        let [a, b, c] = corners;
        let whole = cross(sub(b, a), sub(c, a));
        let bulge = [0, 1, 2].map(|e| {
            let middle = self.edge_point(edges[e] as usize, 0.5);
            sub(middle, between(corners[e], corners[(e + 1) % 3], 0.5))
        });
        let ratio = |s: &[f64; 3]| jacobian(corners, bulge, *s) / whole;
        SAMPLES.iter().map(ratio).fold(f64::INFINITY, f64::min)
    }
}

/// Jacobian determinant of `x = sum L_i x_i + 4 sum L_e L_(e+1) bulge_e` with respect to `(L_1, L_2)`.
fn jacobian([a, b, c]: [Point; 3], bulge: [Point; 3], l: [f64; 3]) -> f64 {
    // Derivatives of the three edge bubbles L0 L1, L1 L2, L2 L0 with L0 = 1 - L1 - L2.
    let by_one = [l[0] - l[1], l[2], -l[2]];
    let by_two = [-l[1], l[1], l[0] - l[2]];
    let column =
        |side: Point, by: [f64; 3]| [0, 1].map(|k| side[k] + 4.0 * (0..3).map(|e| by[e] * bulge[e][k]).sum::<f64>());
    cross(column(sub(b, a), by_one), column(sub(c, a), by_two))
}
