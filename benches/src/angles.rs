//! Least angles of the triangles of a mesh away from its strips. Convention: degrees; straight-sided triangles. A triangle is away from
//! strips if none of its vertices is a strip's.

use mesher::{Mesh, Point};

/// Shape of the triangles that the refiner was free to choose.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Angles {
    /// Number of triangles measured.
    pub triangles: usize,
    /// Smallest angle of all.
    pub min_deg: f64,
    /// Mean over the triangles of their smallest angle.
    pub mean_deg: f64,
    /// Share of triangles whose smallest angle is below 30 degrees.
    pub share_below_30: f64,
    /// Share of triangles whose smallest angle is at least 30 and below 40 degrees.
    pub share_30_to_40: f64,
}

impl Angles {
    /// Measures a mesh; all zeros if no triangle is away from strips.
    pub fn of(mesh: &Mesh) -> Self {
        let mut near = vec![false; mesh.vertices().len()];
        for (triangle, _) in mesh.triangles().iter().zip(mesh.strip_triangles()).filter(|(_, strip)| **strip) {
            for v in triangle {
                near[*v as usize] = true;
            }
        }
        let free = |t: &usize| mesh.triangles()[*t].iter().all(|&v| !near[v as usize]);
        let angles: Vec<f64> =
            (0..mesh.triangles().len()).filter(free).map(|t| least_angle_deg(mesh.corners(t))).collect();
        if angles.is_empty() {
            return Self { triangles: 0, min_deg: 0.0, mean_deg: 0.0, share_below_30: 0.0, share_30_to_40: 0.0 };
        }
        let n = angles.len() as f64;
        let below = |limit: f64| angles.iter().filter(|&&a| a < limit).count() as f64 / n;
        Self {
            triangles: angles.len(),
            min_deg: angles.iter().copied().fold(f64::INFINITY, f64::min),
            mean_deg: angles.iter().sum::<f64>() / n,
            share_below_30: below(30.0),
            share_30_to_40: below(40.0) - below(30.0),
        }
    }
}

/// Smallest angle of a triangle.
fn least_angle_deg(corners: [Point; 3]) -> f64 {
    let angle = |i: usize| {
        let [a, b, c] = [corners[i], corners[(i + 1) % 3], corners[(i + 2) % 3]];
        let (u, v) = ([b[0] - a[0], b[1] - a[1]], [c[0] - a[0], c[1] - a[1]]);
        (u[0] * v[1] - u[1] * v[0]).atan2(u[0] * v[0] + u[1] * v[1]).to_degrees()
    };
    angle(0).min(angle(1)).min(angle(2))
}

#[cfg(test)]
mod tests {
    use super::least_angle_deg;

    #[test]
    fn the_least_angle_of_set_squares_is_45_and_30_degrees() {
        assert!((least_angle_deg([[0.0, 0.0], [1.0, 0.0], [0.0, 1.0]]) - 45.0).abs() < 1e-12);
        assert!((least_angle_deg([[0.0, 0.0], [3f64.sqrt(), 0.0], [0.0, 1.0]]) - 30.0).abs() < 1e-12);
    }
}
