//! What lies beyond the meshed space: the exact field outside a sphere, and the source of an applied field.
//!
//! Outside a sphere of radius `R` without sources, `A_phi = sum a_n rho^-(n+1) P_n^1(cos theta)`. Testing with the
//! trace on the sphere gives the symmetric positive semi-definite term
//!
//! ```text
//! K_ext = sum_n 2 pi R nu_0 n / N_n c_n c_n^T,   c_n[i] = int r phi_i P_n^1 sin(theta) dtheta,
//! N_n = int (P_n^1)^2 sin(theta) dtheta = 2 n (n + 1) / (2 n + 1)      (half of it over a half arc)
//! ```
//!
//! Source of `N_n`: NIST Digital Library of Mathematical Functions, 14.17.6. `P_n^1` is taken without the sign
//! `(-1)^m`; only products of two appear. With a mirror plane the azimuthal field is even and only odd `n` remain.

use mesher::{Point, Shape};

use crate::constants::MU_0;
use crate::fem::edge::Side;
use crate::fem::space::Space;

/// Terms of the series; at 1.2 times the enclosing radius the last is below 1e-3 of its value on the conductors.
const TERMS: usize = 40;

/// The field outside a sphere, seen from its surface.
#[derive(Debug, Clone)]
pub struct Exterior {
    /// Unknowns on the sphere, ascending.
    pub unknowns: Vec<u32>,
    /// Radius in metres.
    pub radius_m: f64,
    terms: Vec<Term>,
}

#[derive(Debug, Clone)]
struct Term {
    stiffness: f64,
    c: Vec<f64>,
}

impl Exterior {
    /// Integrates the series over the arcs of the domain's boundary; `half` where a mirror plane cuts the sphere.
    pub fn new(space: &Space, centre_z_m: f64, radius_m: f64, half: bool) -> Self {
        let sides = arc_sides(space);
        let mut unknowns: Vec<u32> = sides.iter().flat_map(|s| side_unknowns(space, *s)).collect();
        unknowns.sort_unstable();
        unknowns.dedup();
        let orders: Vec<usize> = (1..=TERMS).filter(|n| !half || n % 2 == 1).collect();
        let mut terms: Vec<Term> = orders
            .iter()
            .map(|&n| {
                let nf = n as f64;
                let full = 2.0 * nf * (nf + 1.0) / (2.0 * nf + 1.0);
                let norm = if half { 0.5 * full } else { full };
                let stiffness = crate::fem::measure::ring(radius_m) / MU_0 * nf / norm;
                Term { stiffness, c: vec![0.0; unknowns.len()] }
            })
            .collect();
        for side in sides {
            add_side(space, side, centre_z_m, &orders, &unknowns, &mut terms);
        }
        Self { unknowns, radius_m, terms }
    }

    /// Lower triangle by rows of `K_ext` over [`Exterior::unknowns`].
    pub fn block(&self) -> Vec<f64> {
        let n = self.unknowns.len();
        let mut out = Vec::with_capacity(n * (n + 1) / 2);
        for i in 0..n {
            for j in 0..=i {
                out.push(self.terms.iter().map(|t| t.stiffness * t.c[i] * t.c[j]).sum());
            }
        }
        out
    }

    /// Source of a uniform axial field of 1 A/m (peak): `3 pi R^2 c_1`, one value an unknown on the sphere.
    pub fn applied_field_source(&self) -> Vec<f64> {
        let scale = 1.5 * crate::fem::measure::ring(self.radius_m) * self.radius_m;
        self.terms.first().map(|t| t.c.iter().map(|c| scale * c).collect()).unwrap_or_default()
    }
}

fn arc_sides(space: &Space) -> Vec<Side> {
    let mesh = space.mesh();
    let on_arc = |side: &Side| {
        let edge = &mesh.edges()[mesh.triangle_edges()[space.triangle(side.element)][side.edge] as usize];
        edge.curve.is_some_and(|c| {
            let curve = mesh.curve(c);
            curve.on_domain.is_some() && matches!(curve.shape, Shape::Arc { .. })
        })
    };
    space
        .boundary_sides()
        .into_iter()
        .filter(|(_, across)| across.is_none())
        .map(|(side, _)| side)
        .filter(on_arc)
        .collect()
}

/// Unknowns with a basis function that does not vanish on a side.
fn side_unknowns(space: &Space, side: Side) -> Vec<u32> {
    let dofs = space.element(side.element);
    let inner = space.reference().order() - 1;
    let mut out = vec![dofs[side.edge], dofs[(side.edge + 1) % 3]];
    out.extend(&dofs[3 + side.edge * inner..3 + (side.edge + 1) * inner]);
    out
}

fn add_side(space: &Space, side: Side, centre_z: f64, orders: &[usize], unknowns: &[u32], terms: &mut [Term]) {
    let dofs = space.element(side.element);
    let on_side = side_unknowns(space, side);
    for point in space.side_points(side) {
        let (r, z) = (point.at[0], point.at[1] - centre_z);
        let rho2 = r * r + z * z;
        let angle = ((z * point.tangent[0] - r * point.tangent[1]) / rho2).abs() * point.weight;
        let (sin, cos) = (r / rho2.sqrt(), z / rho2.sqrt());
        let legendre = associated_legendre_1(orders.last().copied().unwrap_or(0), cos, sin);
        for (i, dof) in dofs.iter().enumerate().filter(|(_, d)| on_side.contains(d)) {
            let Ok(k) = unknowns.binary_search(dof) else { continue };
            for (term, &n) in terms.iter_mut().zip(orders) {
                term.c[k] += r * point.value[i] * legendre[n] * sin * angle;
            }
        }
    }
}

/// `P_n^1(cos theta)` for `n = 0..=last`, without the sign `(-1)^m`. Source: DLMF 14.10.3.
fn associated_legendre_1(last: usize, cos: f64, sin: f64) -> Vec<f64> {
    let mut p = vec![0.0; last.max(1) + 1];
    p[1] = sin;
    for n in 2..=last {
        let nf = n as f64;
        p[n] = ((2.0 * nf - 1.0) * cos * p[n - 1] - nf * p[n - 2]) / (nf - 1.0);
    }
    p
}

/// Source of an axial field of 1 A/m (peak) on the outer cylinder of a slice: `int 2 pi R^2 phi_i dz`.
///
/// Returns `(unknown, value)` pairs, one unknown possibly several times.
pub fn slice_source(space: &Space) -> Vec<(u32, f64)> {
    let mut out = Vec::new();
    for (side, across) in space.boundary_sides() {
        if across.is_some() {
            continue;
        }
        for point in space.side_points(side) {
            let [r, _]: Point = point.at;
            if point.normal[0] < 0.5 || r <= 0.0 {
                continue;
            }
            for (i, &dof) in space.element(side.element).iter().enumerate() {
                out.push((dof, r * point.surface * point.value[i]));
            }
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn associated_legendre_functions_agree_with_their_closed_forms() {
        // DLMF 14.7.10 with m = 1, sign dropped: P_1^1 = s, P_2^1 = 3 c s, P_3^1 = 3/2 s (5 c^2 - 1).
        let theta: f64 = 0.7;
        let (s, c) = theta.sin_cos();
        let p = associated_legendre_1(3, c, s);
        assert!((p[1] - s).abs() < 1e-15);
        assert!((p[2] - 3.0 * c * s).abs() < 1e-15);
        assert!((p[3] - 1.5 * s * (5.0 * c * c - 1.0)).abs() < 1e-14);
    }
}
