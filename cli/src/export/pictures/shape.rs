//! Lagrange functions of orders 1 to 3 on a triangle, in barycentric coordinates `l = [l0, l1, l2]`.
//! Nodes are in the order of `mesher::NodeSet`: three corners, then the inner nodes of the edges (0,1), (1,2), (2,0) in
//! that direction, then the inside. Source: O. C. Zienkiewicz, R. L. Taylor, The Finite Element Method, vol. 1, 5th ed.,
//! section 8.8 (triangular element family).

/// Most nodes of an element.
pub(super) const MOST_NODES: usize = 10;
/// Edges by their end corners.
pub(super) const EDGES: [[usize; 2]; 3] = [[0, 1], [1, 2], [2, 0]];

/// Nodes of an element of this order.
pub(super) fn node_count(order: usize) -> usize {
    (order + 1) * (order + 2) / 2
}

/// Local nodes along an edge, from its first corner to its second; `order + 1` of them.
pub(super) fn edge_nodes(order: usize, edge: usize) -> Vec<usize> {
    let inner = order - 1;
    let mut nodes = vec![EDGES[edge][0]];
    nodes.extend((0..inner).map(|i| 3 + edge * inner + i));
    nodes.push(EDGES[edge][1]);
    nodes
}

/// Values of all functions at a point; entries past the last node are zero.
pub(super) fn values(order: usize, l: [f64; 3]) -> [f64; MOST_NODES] {
    let mut n = [0.0; MOST_NODES];
    match order {
        1 => n[..3].copy_from_slice(&l),
        2 => {
            for i in 0..3 {
                n[i] = l[i] * (2.0 * l[i] - 1.0);
                let [a, b] = EDGES[i];
                n[3 + i] = 4.0 * l[a] * l[b];
            }
        }
        _ => {
            for i in 0..3 {
                n[i] = 0.5 * l[i] * (3.0 * l[i] - 1.0) * (3.0 * l[i] - 2.0);
                let [a, b] = EDGES[i];
                n[3 + 2 * i] = 4.5 * l[a] * l[b] * (3.0 * l[a] - 1.0);
                n[4 + 2 * i] = 4.5 * l[a] * l[b] * (3.0 * l[b] - 1.0);
            }
            n[9] = 27.0 * l[0] * l[1] * l[2];
        }
    }
    n
}

/// Sum of nodal values times functions at a point.
pub(super) fn interpolate(order: usize, l: [f64; 3], nodal: &[f64]) -> f64 {
    values(order, l).iter().zip(nodal).map(|(n, v)| n * v).sum()
}

/// Place in the plane of a point of an element.
pub(super) fn place(order: usize, l: [f64; 3], nodes: &[[f64; 2]]) -> [f64; 2] {
    let mut p = [0.0; 2];
    for (n, node) in values(order, l).iter().zip(nodes) {
        p[0] += n * node[0];
        p[1] += n * node[1];
    }
    p
}

/// Weights of the nodes in the mean over a straight triangle; exact for the polynomials of the order.
pub(super) fn mean_weights(order: usize) -> [f64; MOST_NODES] {
    let mut w = [0.0; MOST_NODES];
    match order {
        1 => w[..3].fill(1.0 / 3.0),
        2 => w[3..6].fill(1.0 / 3.0),
        _ => {
            w[..3].fill(1.0 / 30.0);
            w[3..9].fill(3.0 / 40.0);
            w[9] = 9.0 / 20.0;
        }
    }
    w
}

/// Barycentric corners of the `pieces^2` equal triangles a triangle is cut into.
pub(super) fn subdivision(pieces: usize) -> Vec<[[f64; 3]; 3]> {
    let n = pieces as f64;
    let at = |i: usize, j: usize| {
        let (u, v) = (i as f64 / n, j as f64 / n);
        [1.0 - u - v, u, v]
    };
    let mut cut = Vec::with_capacity(pieces * pieces);
    for j in 0..pieces {
        for i in 0..pieces - j {
            cut.push([at(i, j), at(i + 1, j), at(i, j + 1)]);
            if i + j + 1 < pieces {
                cut.push([at(i + 1, j), at(i + 1, j + 1), at(i, j + 1)]);
            }
        }
    }
    cut
}

#[cfg(test)]
mod tests {
    use super::{edge_nodes, interpolate, mean_weights, node_count, subdivision, values};

    /// Barycentric places of the nodes, written out by hand.
    fn node_places(order: usize) -> Vec<[f64; 3]> {
        let third = |a: f64, b: f64, c: f64| [a / 3.0, b / 3.0, c / 3.0];
        let mut places = vec![[1.0, 0.0, 0.0], [0.0, 1.0, 0.0], [0.0, 0.0, 1.0]];
        if order == 2 {
            places.extend([[0.5, 0.5, 0.0], [0.0, 0.5, 0.5], [0.5, 0.0, 0.5]]);
        }
        if order == 3 {
            places.extend([third(2.0, 1.0, 0.0), third(1.0, 2.0, 0.0), third(0.0, 2.0, 1.0), third(0.0, 1.0, 2.0)]);
            places.extend([third(1.0, 0.0, 2.0), third(2.0, 0.0, 1.0), third(1.0, 1.0, 1.0)]);
        }
        places
    }

    #[test]
    fn functions_are_one_at_their_node_and_zero_at_the_others() {
        for order in 1..=3 {
            let places = node_places(order);
            assert_eq!(places.len(), node_count(order));
            for (i, &l) in places.iter().enumerate() {
                for (j, n) in values(order, l).iter().enumerate() {
                    let expected = if i == j { 1.0 } else { 0.0 };
                    assert!((n - expected).abs() < 1e-14, "order {order}, function {j} at node {i}: {n}");
                }
            }
        }
    }

    #[test]
    fn polynomials_of_the_order_are_kept_and_their_means_exact() {
        let point = [0.2, 0.5, 0.3];
        for order in 1..=3i32 {
            let f = |l: [f64; 3]| (1.0 + 2.0 * l[1] - 3.0 * l[2]).powi(order);
            let nodal: Vec<f64> = node_places(order as usize).into_iter().map(f).collect();
            let found = interpolate(order as usize, point, &nodal);
            assert!((found - f(point)).abs() < 1e-13, "order {order}: {found}, expected {}", f(point));
            let mean: f64 = mean_weights(order as usize).iter().zip(&nodal).map(|(w, v)| w * v).sum();
            // Mean of (a l0 + b l1 + c l2)^n with (a, b, c) = (1, 3, -2) is 2 n!/(n+2)! times the complete homogeneous
            // symmetric polynomial h_n(a, b, c): h = 2, 9, 22.
            let expected = [2.0 / 3.0, 1.5, 2.2][order as usize - 1];
            assert!((mean - expected).abs() < 1e-13, "order {order}: mean {mean}, expected {expected}");
        }
    }

    #[test]
    fn edges_run_from_corner_to_corner() {
        assert_eq!(edge_nodes(1, 2), [2, 0]);
        assert_eq!(edge_nodes(2, 1), [1, 4, 2]);
        assert_eq!(edge_nodes(3, 0), [0, 3, 4, 1]);
    }

    #[test]
    fn a_triangle_is_cut_into_equal_pieces_that_fill_it() {
        for pieces in [1, 2, 5] {
            let cut = subdivision(pieces);
            assert_eq!(cut.len(), pieces * pieces);
            let area = |t: &[[f64; 3]; 3]| {
                let d = |i: usize, k: usize| t[i][k] - t[0][k];
                d(1, 1) * d(2, 2) - d(1, 2) * d(2, 1)
            };
            for t in &cut {
                assert!((area(t) * (pieces * pieces) as f64 - 1.0).abs() < 1e-12);
            }
        }
    }
}
