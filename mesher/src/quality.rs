//! How good the triangles are. Convention: angles in degrees, of straight-sided triangles; Jacobians of the quadratic and
//! cubic maps over the straight-sided one.

use crate::ids::{Point, RegionId, cross, distance_squared, sub};
use crate::mesh::Mesh;

/// Width of a class of [`Quality::least_angle_counts`], in degrees.
pub const ANGLE_CLASS_DEG: f64 = 5.0;

/// Shape measures of a mesh or of one of its regions. Angles are over the triangles outside strips, unless there are none.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Quality {
    /// Number of triangles whose angles are measured.
    pub triangles: usize,
    /// Number of triangles in strips of layers, which are thin on purpose.
    pub strip_triangles: usize,
    /// Number of triangles outside strips.
    pub other_triangles: usize,
    /// Smallest angle, in degrees; infinite without triangles.
    pub min_angle_deg: f64,
    /// Mean over triangles of the smallest angle, in degrees.
    pub mean_min_angle_deg: f64,
    /// Share of triangles whose smallest angle is below 20 degrees.
    pub share_below_20: f64,
    /// Share of triangles whose smallest angle is below 30 degrees.
    pub share_below_30: f64,
    /// Share of triangles whose smallest angle is below 40 degrees.
    pub share_below_40: f64,
    /// Share of triangles whose smallest angle is at least 30 and below 40 degrees.
    pub share_30_to_40: f64,
    /// Triangles by their smallest angle, in classes of [`ANGLE_CLASS_DEG`]: 0 to 5, 5 to 10, ... 55 to 60 degrees.
    pub least_angle_counts: [usize; 12],
    /// Shortest edge from end to end, in metres, strips included; infinite without triangles.
    pub shortest_edge_m: f64,
    /// Longest edge from end to end, in metres, strips included.
    pub longest_edge_m: f64,
    /// Smallest Jacobian of the quadratic and cubic maps over that of the straight-sided triangle, strips included.
    pub min_scaled_jacobian: f64,
}

impl Mesh {
    /// Shape measures of the mesh.
    pub fn quality(&self) -> Quality {
        self.quality_of(0..self.triangles.len())
    }

    /// Shape measures of every region, in the order of their identities.
    pub fn quality_by_region(&self) -> Vec<(RegionId, Quality)> {
        let mut order: Vec<usize> = (0..self.triangles.len()).collect();
        order.sort_by_key(|&t| self.regions[t]);
        let of_region = |group: &[usize]| (self.regions[group[0]], self.quality_of(group.iter().copied()));
        order.chunk_by(|&a, &b| self.regions[a] == self.regions[b]).map(of_region).collect()
    }

    /// Shape measures of some triangles.
    pub fn quality_of(&self, triangles: impl IntoIterator<Item = usize>) -> Quality {
        let triangles: Vec<usize> = triangles.into_iter().collect();
        let strip_triangles = triangles.iter().filter(|&&t| self.strip[t]).count();
        let all_strip = strip_triangles == triangles.len();
        let measured = triangles.iter().filter(|&&t| all_strip || !self.strip[t]);
        let angles: Vec<f64> = measured.map(|&t| least_angle_deg(self.corners(t))).collect();
        let n = angles.len().max(1) as f64;
        let below = |limit: f64| angles.iter().filter(|&&a| a < limit).count() as f64;
        let mut least_angle_counts = [0; 12];
        for angle in &angles {
            least_angle_counts[((angle / ANGLE_CLASS_DEG) as usize).min(11)] += 1;
        }
        let [shortest, longest] = self.edge_extremes_squared(&triangles);
        let jacobians = triangles.iter().map(|&t| self.least_jacobian(t));
        Quality {
            triangles: angles.len(),
            strip_triangles,
            other_triangles: triangles.len() - strip_triangles,
            min_angle_deg: angles.iter().copied().fold(f64::INFINITY, f64::min),
            mean_min_angle_deg: angles.iter().sum::<f64>() / n,
            share_below_20: below(20.0) / n,
            share_below_30: below(30.0) / n,
            share_below_40: below(40.0) / n,
            share_30_to_40: (below(40.0) - below(30.0)) / n,
            least_angle_counts,
            shortest_edge_m: shortest.sqrt(),
            longest_edge_m: longest.sqrt(),
            min_scaled_jacobian: jacobians.fold(f64::INFINITY, f64::min),
        }
    }

    fn edge_extremes_squared(&self, triangles: &[usize]) -> [f64; 2] {
        let mut extremes = [f64::INFINITY, 0.0f64];
        for &t in triangles {
            let [a, b, c] = self.corners(t);
            for side in [distance_squared(a, b), distance_squared(b, c), distance_squared(c, a)] {
                extremes = [extremes[0].min(side), extremes[1].max(side)];
            }
        }
        extremes
    }
}

/// Smallest angle of a triangle, in degrees.
pub(crate) fn least_angle_deg([a, b, c]: [Point; 3]) -> f64 {
    let double = cross(sub(b, a), sub(c, a));
    let sides = [distance_squared(b, c), distance_squared(c, a), distance_squared(a, b)];
    let opposite = |i: usize| {
        let cosine = sides[(i + 1) % 3] + sides[(i + 2) % 3] - sides[i];
        (2.0 * double).atan2(cosine).to_degrees()
    };
    opposite(0).min(opposite(1)).min(opposite(2))
}
