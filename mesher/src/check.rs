//! The check every mesh passes before it is handed out. Convention: as in [`crate::Mesh`].

use crate::error::MeshDefect;
use crate::ids::{NO_TRIANGLE, Point, between, cross, sub};
use crate::mesh::{Bend, Mesh, straight_area};
use crate::predicates::orient;

/// Barycentric points at which the Jacobians of the quadratic and of the cubic map must be positive: vertices, middles and quarters of the
/// edges, the six points of a quadrature of degree 4 (D. A. Dunavant, 1985) and the centroid.
const SAMPLES: [[f64; 3]; 19] = {
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
        [0.75, 0.25, 0.0],
        [0.25, 0.75, 0.0],
        [0.0, 0.75, 0.25],
        [0.0, 0.25, 0.75],
        [0.25, 0.0, 0.75],
        [0.75, 0.0, 0.25],
        [A, A, 1.0 - 2.0 * A],
        [A, 1.0 - 2.0 * A, A],
        [1.0 - 2.0 * A, A, A],
        [B, B, 1.0 - 2.0 * B],
        [B, 1.0 - 2.0 * B, B],
        [1.0 - 2.0 * B, B, B],
        [T, T, T],
    ]
};

/// Least Jacobian of a curved map over that of the straight-sided triangle.
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

    /// Least Jacobian of the quadratic and of the cubic map of a triangle over that of the straight-sided one; 1 for straight sides.
    pub(crate) fn least_jacobian(&self, triangle: usize) -> f64 {
        let edges = self.triangle_edges[triangle].map(|e| e as usize);
        if edges.iter().all(|&e| matches!(self.bends[e], Bend::Straight)) {
            return 1.0;
        }
        let corners = self.corners(triangle);
        let [a, b, c] = corners;
        let whole = cross(sub(b, a), sub(c, a));
        // How far the point of local edge `e` at `t` from its first corner lies off the chord.
        let bulge = |e: usize, t: f64| {
            let straight = between(corners[e], corners[NEXT[e]], t);
            let ahead = self.edges[edges[e]].vertices[0] == self.triangles[triangle][e];
            sub(self.edge_point(edges[e], if ahead { t } else { 1.0 - t }), straight)
        };
        let middle = [0, 1, 2].map(|e| bulge(e, 0.5));
        let thirds = [0, 1, 2].map(|e| [bulge(e, THIRD), bulge(e, 2.0 * THIRD)]);
        let ratio = |l: &[f64; 3]| {
            let quadratic = jacobian(corners, &quadratic(middle, *l));
            let cubic = jacobian(corners, &cubic(thirds, *l));
            quadratic.min(cubic) / whole
        };
        SAMPLES.iter().map(ratio).fold(f64::INFINITY, f64::min)
    }
}

const THIRD: f64 = 1.0 / 3.0;
const NEXT: [usize; 3] = [1, 2, 0];

/// Derivatives of the displacement of a map from the straight-sided one with respect to the three barycentric coordinates.
type Slopes = [Point; 3];

/// Displacement `sum 4 L_a L_b bulge` over the edges.
fn quadratic(bulge: [Point; 3], l: [f64; 3]) -> Slopes {
    let mut slopes = [[0.0; 2]; 3];
    for (a, b) in [(0, 1), (1, 2), (2, 0)] {
        for k in 0..2 {
            slopes[a][k] += 4.0 * l[b] * bulge[a][k];
            slopes[b][k] += 4.0 * l[a] * bulge[a][k];
        }
    }
    slopes
}

/// Displacement `sum 9/2 L_a L_b ((3 L_a - 1) bulge_1 + (3 L_b - 1) bulge_2)` over the edges, and `27/4 L_0 L_1 L_2` times all bulges.
fn cubic(bulges: [[Point; 2]; 3], l: [f64; 3]) -> Slopes {
    let all = [0, 1].map(|k| bulges.iter().flatten().map(|b| b[k]).sum::<f64>());
    let mut slopes = [0, 1, 2].map(|i| {
        let others = 6.75 * l[NEXT[i]] * l[NEXT[NEXT[i]]];
        [others * all[0], others * all[1]]
    });
    for (a, b) in [(0, 1), (1, 2), (2, 0)] {
        let [one, two] = bulges[a];
        for k in 0..2 {
            slopes[a][k] += 4.5 * l[b] * ((6.0 * l[a] - 1.0) * one[k] + (3.0 * l[b] - 1.0) * two[k]);
            slopes[b][k] += 4.5 * l[a] * ((3.0 * l[a] - 1.0) * one[k] + (6.0 * l[b] - 1.0) * two[k]);
        }
    }
    slopes
}

/// Jacobian determinant with respect to `(L_1, L_2)`, `L_0 = 1 - L_1 - L_2`.
fn jacobian([a, b, c]: [Point; 3], slopes: &Slopes) -> f64 {
    let column = |side: Point, i: usize| [0, 1].map(|k| side[k] + slopes[i][k] - slopes[0][k]);
    cross(column(sub(b, a), 1), column(sub(c, a), 2))
}
