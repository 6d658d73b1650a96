//! Exact orientation and in-circle tests with a cheap filter in front. Convention: positive for counter-clockwise, and for a point
//! inside the circle through a counter-clockwise triangle. Source: J. R. Shewchuk, "Adaptive precision floating-point arithmetic
//! and fast robust geometric predicates", 1997 (error constants of its section 4), through the crate `robust`.

use crate::ids::{Point, cross, dot, sub};
use robust::Coord;

fn coord(p: Point) -> Coord<f64> {
    Coord { x: p[0], y: p[1] }
}

/// Twice the signed area of the triangle `abc`; its sign is exact.
#[inline]
pub(crate) fn orient(a: Point, b: Point, c: Point) -> f64 {
    let left = (a[0] - c[0]) * (b[1] - c[1]);
    let right = (a[1] - c[1]) * (b[0] - c[0]);
    let det = left - right;
    if det.abs() >= 3.330_669_073_875_472e-16 * (left.abs() + right.abs()) {
        return det;
    }
    orient_exactly(a, b, c)
}

#[cold]
fn orient_exactly(a: Point, b: Point, c: Point) -> f64 {
    robust::orient2d(coord(a), coord(b), coord(c))
}

/// Positive if `d` is inside the circle through the counter-clockwise `abc`; its sign is exact.
#[inline]
pub(crate) fn in_circle(a: Point, b: Point, c: Point, d: Point) -> f64 {
    let (u, v, w) = (sub(a, d), sub(b, d), sub(c, d));
    let (bc, cb) = (v[0] * w[1], w[0] * v[1]);
    let (ca, ac) = (w[0] * u[1], u[0] * w[1]);
    let (ab, ba) = (u[0] * v[1], v[0] * u[1]);
    let (lift_a, lift_b, lift_c) = (dot(u, u), dot(v, v), dot(w, w));
    let det = lift_a * (bc - cb) + lift_b * (ca - ac) + lift_c * (ab - ba);
    let permanent = (bc.abs() + cb.abs()) * lift_a + (ca.abs() + ac.abs()) * lift_b + (ab.abs() + ba.abs()) * lift_c;
    if det.abs() > 1.110_223_024_625_157_7e-15 * permanent {
        return det;
    }
    in_circle_exactly(a, b, c, d)
}

#[cold]
fn in_circle_exactly(a: Point, b: Point, c: Point, d: Point) -> f64 {
    robust::incircle(coord(a), coord(b), coord(c), coord(d))
}

/// Centre of the circle through three points, and the square of its radius.
pub(crate) fn circumcircle(a: Point, b: Point, c: Point) -> (Point, f64) {
    let (u, v) = (sub(b, a), sub(c, a));
    let k = 0.5 / cross(u, v);
    let (uu, vv) = (dot(u, u), dot(v, v));
    let offset = [(v[1] * uu - u[1] * vv) * k, (u[0] * vv - v[0] * uu) * k];
    ([a[0] + offset[0], a[1] + offset[1]], dot(offset, offset))
}
