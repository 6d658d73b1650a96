//! Lagrange basis and quadrature on the unit triangle with corners (0,0), (1,0), (0,1).
//!
//! Nodes are in the order of [`mesher::NodeSet`]: three corners, then the inner nodes of the edges (0,1), (1,2), (2,0)
//! in that direction, then the inside. The quadrature is the collapsed product of Gauss-Legendre and Gauss-Jacobi
//! rules (G. E. Karniadakis, S. J. Sherwin, Spectral/hp Element Methods for CFD, 2nd ed., Oxford 2005, section 4.1.1),
//! exact for polynomials of degree `2 n - 1` with `n^2` points.

use std::num::NonZeroUsize;

use gauss_quad::GaussLegendre;

/// Largest number of nodes of an element (order 3).
pub const MAX_NODES: usize = 10;
/// Largest number of quadrature points of an element (order 3).
pub const MAX_POINTS: usize = 25;
/// Points of the quadrature on an edge.
pub const EDGE_POINTS: usize = 8;

/// Basis functions and their derivatives at one point of the unit triangle.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Shape {
    /// Values, one a node.
    pub value: [f64; MAX_NODES],
    /// Derivatives with respect to the two reference coordinates, one a node.
    pub derivative: [[f64; 2]; MAX_NODES],
}

/// Tabulated basis and quadrature of one order.
#[derive(Debug, Clone)]
pub struct Reference {
    order: usize,
    node_count: usize,
    points: Vec<[f64; 2]>,
    weights: Vec<f64>,
    shapes: Vec<Shape>,
    node_shapes: Vec<Shape>,
    edge_rule: Vec<(f64, f64)>,
}

impl Reference {
    /// Tables for `order` 1, 2 or 3 (other orders are brought into this range).
    pub fn new(order: usize) -> Self {
        let order = order.clamp(1, 3);
        let (points, weights) = triangle_rule(order + 2);
        let shapes = points.iter().map(|&p| shape(order, p)).collect();
        let node_shapes = node_positions(order).into_iter().map(|p| shape(order, p)).collect();
        let node_count = (order + 1) * (order + 2) / 2;
        Self { order, node_count, points, weights, shapes, node_shapes, edge_rule: unit_rule(EDGE_POINTS) }
    }

    /// Order of the basis.
    pub fn order(&self) -> usize {
        self.order
    }

    /// Nodes of an element.
    pub fn node_count(&self) -> usize {
        self.node_count
    }

    /// Quadrature points of an element.
    pub fn point_count(&self) -> usize {
        self.weights.len()
    }

    /// Quadrature points, reference coordinates.
    pub fn points(&self) -> &[[f64; 2]] {
        &self.points
    }

    /// Quadrature weights; they sum to the triangle's area, 1/2.
    pub fn weights(&self) -> &[f64] {
        &self.weights
    }

    /// Basis at each quadrature point.
    pub fn shapes(&self) -> &[Shape] {
        &self.shapes
    }

    /// Basis at each node of the element.
    pub fn node_shapes(&self) -> &[Shape] {
        &self.node_shapes
    }

    /// Basis at any point of the unit triangle.
    pub fn shape_at(&self, point: [f64; 2]) -> Shape {
        shape(self.order, point)
    }

    /// Positions in [0, 1] and weights of the quadrature along an edge.
    pub fn edge_rule(&self) -> &[(f64, f64)] {
        &self.edge_rule
    }
}

/// Point of the unit triangle on local edge `edge` at `s` in [0, 1] from its first to its second corner.
pub fn edge_point(edge: usize, s: f64) -> [f64; 2] {
    match edge {
        0 => [s, 0.0],
        1 => [1.0 - s, s],
        _ => [0.0, 1.0 - s],
    }
}

/// Derivative of [`edge_point`] with respect to `s`.
pub fn edge_direction(edge: usize) -> [f64; 2] {
    match edge {
        0 => [1.0, 0.0],
        1 => [-1.0, 1.0],
        _ => [0.0, -1.0],
    }
}

/// Reference coordinates of the nodes of an order.
pub fn node_positions(order: usize) -> Vec<[f64; 2]> {
    let mut nodes = vec![[0.0, 0.0], [1.0, 0.0], [0.0, 1.0]];
    for edge in 0..3 {
        nodes.extend((1..order).map(|k| edge_point(edge, k as f64 / order as f64)));
    }
    if order == 3 {
        nodes.push([1.0 / 3.0, 1.0 / 3.0]);
    }
    nodes
}

/// Gauss-Legendre rule of `n` points on [0, 1].
fn unit_rule(n: usize) -> Vec<(f64, f64)> {
    let rule = GaussLegendre::new(NonZeroUsize::new(n).unwrap_or(NonZeroUsize::MIN));
    let mut pairs: Vec<_> = rule.as_node_weight_pairs().iter().map(|&(x, w)| (0.5 * (1.0 + x), 0.5 * w)).collect();
    pairs.sort_by(|a, b| a.0.total_cmp(&b.0));
    pairs
}

fn triangle_rule(n: usize) -> (Vec<[f64; 2]>, Vec<f64>) {
    let along = unit_rule(n);
    let (mut points, mut weights) = (Vec::new(), Vec::new());
    for (y, wy) in jacobi_rule(n) {
        let eta = 0.5 * (1.0 + y);
        for &(s, ws) in &along {
            points.push([s * (1.0 - eta), eta]);
            weights.push(0.25 * wy * ws);
        }
    }
    (points, weights)
}

/// Gauss-Jacobi rule of `n` points on [-1, 1] for the weight `1 - x`.
///
/// Its points are the inner ones of the Gauss-Radau rule with `n + 1` points that includes 1, the roots of
/// `(P_n - P_{n+1}) / (1 - x)`, and its weights `(1 - x^2) / ((n + 1) P_n)^2`. Source: M. Abramowitz, I. A. Stegun,
/// Handbook of Mathematical Functions, 25.4.31 (mirrored), with the roots found by bisection. (`gauss_quad` 0.3.1 puts
/// the middle point of an odd rule at 0, which holds for symmetric weights only.)
fn jacobi_rule(n: usize) -> Vec<(f64, f64)> {
    let value = |x: f64| {
        let [p, next] = legendre_pair(n, x);
        (p - next) / (1.0 - x)
    };
    // One root in each of many equal intervals of the angle, where they are nearly evenly spread.
    let cells = 64 * n;
    let at = |k: usize| -(std::f64::consts::PI * k as f64 / cells as f64).cos();
    let mut rule = Vec::new();
    for k in 0..cells - 1 {
        let (mut low, mut high) = (at(k), at(k + 1));
        let sign = value(low);
        if sign * value(high) > 0.0 {
            continue;
        }
        for _ in 0..60 {
            let middle = 0.5 * (low + high);
            if sign * value(middle) > 0.0 { low = middle } else { high = middle }
        }
        let x = 0.5 * (low + high);
        let scale = (n + 1) as f64 * legendre_pair(n, x)[0];
        rule.push((x, (1.0 - x * x) / (scale * scale)));
    }
    rule
}

/// Legendre polynomials of degree `n` and `n + 1`.
fn legendre_pair(n: usize, x: f64) -> [f64; 2] {
    let (mut p, mut next) = (1.0, x);
    for k in 1..=n {
        let k = k as f64;
        (p, next) = (next, ((2.0 * k + 1.0) * x * next - k * p) / (k + 1.0));
    }
    [p, next]
}

fn shape(order: usize, [x, y]: [f64; 2]) -> Shape {
    let l = [1.0 - x - y, x, y];
    let gradient = [[-1.0, -1.0], [1.0, 0.0], [0.0, 1.0]];
    let mut out = Shape { value: [0.0; MAX_NODES], derivative: [[0.0; 2]; MAX_NODES] };
    let mut put = |i: usize, value: f64, d: [f64; 3]| {
        out.value[i] = value;
        for (c, slot) in out.derivative[i].iter_mut().enumerate() {
            *slot = (0..3).map(|k| d[k] * gradient[k][c]).sum();
        }
    };
    match order {
        1 => (0..3).for_each(|i| put(i, l[i], unit(i, 1.0))),
        2 => quadratic(l, &mut put),
        _ => cubic(l, &mut put),
    }
    out
}

fn unit(i: usize, value: f64) -> [f64; 3] {
    let mut d = [0.0; 3];
    d[i] = value;
    d
}

fn quadratic(l: [f64; 3], put: &mut impl FnMut(usize, f64, [f64; 3])) {
    for i in 0..3 {
        put(i, l[i] * (2.0 * l[i] - 1.0), unit(i, 4.0 * l[i] - 1.0));
        let j = (i + 1) % 3;
        let mut d = unit(i, 4.0 * l[j]);
        d[j] = 4.0 * l[i];
        put(3 + i, 4.0 * l[i] * l[j], d);
    }
}

fn cubic(l: [f64; 3], put: &mut impl FnMut(usize, f64, [f64; 3])) {
    for i in 0..3 {
        let v = 0.5 * l[i] * (3.0 * l[i] - 1.0) * (3.0 * l[i] - 2.0);
        put(i, v, unit(i, 13.5 * l[i] * l[i] - 9.0 * l[i] + 1.0));
        let j = (i + 1) % 3;
        for (k, (a, b)) in [(i, j), (j, i)].into_iter().enumerate() {
            let mut d = unit(a, 4.5 * l[b] * (6.0 * l[a] - 1.0));
            d[b] = 4.5 * l[a] * (3.0 * l[a] - 1.0);
            put(3 + 2 * i + k, 4.5 * l[a] * l[b] * (3.0 * l[a] - 1.0), d);
        }
    }
    put(9, 27.0 * l[0] * l[1] * l[2], [27.0 * l[1] * l[2], 27.0 * l[0] * l[2], 27.0 * l[0] * l[1]]);
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn basis_is_one_at_its_own_node_and_zero_at_the_others() {
        for order in 1..=3 {
            let reference = Reference::new(order);
            for (i, s) in reference.node_shapes().iter().enumerate() {
                for j in 0..reference.node_count() {
                    let expected = if i == j { 1.0 } else { 0.0 };
                    assert!((s.value[j] - expected).abs() < 1e-14, "order {order} node {i} basis {j}");
                }
            }
        }
    }

    #[test]
    fn derivatives_agree_with_central_differences() {
        let h = 1e-6;
        for order in 1..=3 {
            let p = [0.23, 0.31];
            let s = shape(order, p);
            for c in 0..2 {
                let (mut a, mut b) = (p, p);
                a[c] += h;
                b[c] -= h;
                let (sa, sb) = (shape(order, a), shape(order, b));
                for i in 0..(order + 1) * (order + 2) / 2 {
                    let numeric = (sa.value[i] - sb.value[i]) / (2.0 * h);
                    assert!((s.derivative[i][c] - numeric).abs() < 1e-8, "order {order} basis {i}");
                }
            }
        }
    }

    #[test]
    fn quadrature_is_exact_to_its_stated_degree() {
        // int x^a y^b over the unit triangle = a! b! / (a + b + 2)! (beta integral).
        let factorial = |n: usize| (1..=n).map(|k| k as f64).product::<f64>();
        for order in 1..=3 {
            let reference = Reference::new(order);
            let degree = 2 * (order + 2) - 1;
            for a in 0..=degree {
                for b in 0..=degree - a {
                    let sum: f64 = reference
                        .points()
                        .iter()
                        .zip(reference.weights())
                        .map(|(p, w)| w * p[0].powi(a as i32) * p[1].powi(b as i32))
                        .sum();
                    let exact = factorial(a) * factorial(b) / factorial(a + b + 2);
                    assert!((sum - exact).abs() < 1e-15, "x^{a} y^{b}: {sum} against {exact}");
                }
            }
        }
    }
}
