//! One element at several reference points at once: rows with a number a point, for loops in vector registers.
//!
//! The numbers are those of [`super::element::point_values`] to the bit: the same operations in the same order, none of
//! them fused. Convention: `N` nodes and `P` points; to be called inside a run-time dispatch, which compiles it for the
//! vector unit at hand.

use mesher::Point;

use super::measure::ring;
use super::reference::Shape;

/// Basis at `P` reference points, a row of points a node.
#[derive(Debug, Clone, Copy)]
pub struct BasisRows<const N: usize, const P: usize> {
    weight: [f64; P],
    /// Basis values.
    pub value: [[f64; P]; N],
    derivative: [[[f64; P]; 2]; N],
}

impl<const N: usize, const P: usize> BasisRows<N, P> {
    /// Rows of `shapes`, whose points have quadrature weights `weights`.
    pub fn new(shapes: &[Shape], weights: &[f64]) -> Self {
        let mut out = Self { weight: [0.0; P], value: [[0.0; P]; N], derivative: [[[0.0; P]; 2]; N] };
        for (q, (shape, &weight)) in shapes.iter().zip(weights).take(P).enumerate() {
            out.weight[q] = weight;
            for i in 0..N {
                out.value[i][q] = shape.value[i];
                for c in 0..2 {
                    out.derivative[i][c][q] = shape.derivative[i][c];
                }
            }
        }
        out
    }
}

/// Geometry of an element at `P` points.
#[derive(Debug, Clone, Copy)]
pub struct ElementRows<const P: usize> {
    /// Radii in metres.
    pub r: [f64; P],
    /// Volumes the points stand for, m^3.
    pub volume: [f64; P],
    /// Derivatives of the position, `[of r or z][along]`, and their determinant.
    slope: [[[f64; P]; 2]; 2],
    determinant: [f64; P],
}

impl<const P: usize> ElementRows<P> {
    /// The element with nodes at `nodes`, `[r, z]` in metres.
    #[inline(always)]
    pub fn new<const N: usize>(basis: &BasisRows<N, P>, nodes: &[Point; N]) -> Self {
        let mut out = Self { r: [0.0; P], volume: [0.0; P], slope: [[[0.0; P]; 2]; 2], determinant: [0.0; P] };
        for ((node, value), derivative) in nodes.iter().zip(&basis.value).zip(&basis.derivative) {
            add_multiple(&mut out.r, node[0], value);
            for (slope, &position) in out.slope.iter_mut().zip(node) {
                for (slope, derivative) in slope.iter_mut().zip(derivative) {
                    add_multiple(slope, position, derivative);
                }
            }
        }
        let [[r0, r1], [z0, z1]] = &out.slope;
        for q in 0..P {
            let det = r0[q] * z1[q] - r1[q] * z0[q];
            out.determinant[q] = det;
            out.volume[q] = basis.weight[q] * det * ring(out.r[q]);
        }
        out
    }

    /// Gradient `[d/dr, d/dz]` of basis function `i` in 1/m.
    #[inline(always)]
    pub fn gradient<const N: usize>(&self, basis: &BasisRows<N, P>, i: usize) -> [[f64; P]; 2] {
        let [[r0, r1], [z0, z1]] = &self.slope;
        let [d0, d1] = &basis.derivative[i];
        let mut out = [[0.0; P]; 2];
        for q in 0..P {
            out[0][q] = (d0[q] * z1[q] - d1[q] * z0[q]) / self.determinant[q];
            out[1][q] = (d1[q] * r0[q] - d0[q] * r1[q]) / self.determinant[q];
        }
        out
    }
}

/// `sums += factor row`.
#[inline(always)]
fn add_multiple<const P: usize>(sums: &mut [f64; P], factor: f64, row: &[f64; P]) {
    for (sum, value) in sums.iter_mut().zip(row) {
        *sum += value * factor;
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::fem::element::point_values;
    use crate::fem::reference::Reference;

    /// Nodes of a triangle with bent sides.
    fn bent<const N: usize>(order: usize) -> [Point; N] {
        let mut nodes = [[0.0; 2]; N];
        for (node, [x, y]) in nodes.iter_mut().zip(crate::fem::reference::node_positions(order)) {
            *node = [0.031 + 0.007 * x + 0.001 * y + 0.0007 * x * y, -0.02 + 0.003 * y - 0.0004 * x * y];
        }
        nodes
    }

    fn compare<const N: usize, const P: usize>(order: usize) {
        let reference = Reference::new(order);
        assert_eq!([reference.node_count(), reference.point_count()], [N, P]);
        let basis = BasisRows::<N, P>::new(reference.shapes(), reference.weights());
        let nodes = bent::<N>(order);
        let rows = ElementRows::new(&basis, &nodes);
        for (q, (shape, &weight)) in reference.shapes().iter().zip(reference.weights()).enumerate() {
            let point = point_values(shape, weight, &nodes);
            assert_eq!([rows.r[q], rows.volume[q]], [point.r, point.volume], "order {order}, point {q}");
            for i in 0..N {
                let [along_r, along_z] = rows.gradient(&basis, i);
                assert_eq!(basis.value[i][q], point.value[i]);
                assert_eq!([along_r[q], along_z[q]], point.gradient[i], "order {order}, point {q}, node {i}");
            }
        }
    }

    #[test]
    fn rows_hold_the_same_bits_as_the_points_one_by_one() {
        compare::<3, 9>(1);
        compare::<6, 16>(2);
        compare::<10, 25>(3);
    }
}
