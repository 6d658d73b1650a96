//! How good the triangles are. Convention: angles in degrees, of straight-sided triangles; Jacobians of the quadratic and
//! cubic maps over the straight-sided one.

use crate::ids::{Point, cross, distance_squared, sub};
use crate::mesh::Mesh;

/// Shape measures of a mesh. Angles are over the triangles outside strips, unless there are none.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Quality {
    /// Number of triangles measured.
    pub triangles: usize,
    /// Smallest angle, in degrees.
    pub min_angle_deg: f64,
    /// Mean over triangles of the smallest angle, in degrees.
    pub mean_min_angle_deg: f64,
    /// Share of triangles whose smallest angle is below 20 degrees.
    pub share_below_20: f64,
    /// Share of triangles whose smallest angle is below 30 degrees.
    pub share_below_30: f64,
    /// Share of triangles whose smallest angle is below 40 degrees.
    pub share_below_40: f64,
    /// Smallest Jacobian of the quadratic and cubic maps over that of the straight-sided triangle, strips included.
    pub min_scaled_jacobian: f64,
}

impl Mesh {
    /// Shape measures of the mesh.
    pub fn quality(&self) -> Quality {
        let all_strip = self.strip.iter().all(|&s| s);
        let angles: Vec<f64> = (0..self.triangles.len())
            .filter(|&t| all_strip || !self.strip[t])
            .map(|t| least_angle_deg(self.corners(t)))
            .collect();
        let n = angles.len().max(1) as f64;
        let below = |limit: f64| angles.iter().filter(|&&a| a < limit).count() as f64 / n;
        let jacobians = (0..self.triangles.len()).map(|t| self.least_jacobian(t));
        Quality {
            triangles: angles.len(),
            min_angle_deg: angles.iter().copied().fold(f64::INFINITY, f64::min),
            mean_min_angle_deg: angles.iter().sum::<f64>() / n,
            share_below_20: below(20.0),
            share_below_30: below(30.0),
            share_below_40: below(40.0),
            min_scaled_jacobian: jacobians.fold(f64::INFINITY, f64::min),
        }
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
