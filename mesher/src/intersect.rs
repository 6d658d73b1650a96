//! Where two spans meet. Convention: a meeting is a point within `tolerance` of both spans; overlaps of coincident spans are
//! found through their end points. Source: elementary plane geometry.

use crate::ids::{Point, along, cross, distance, dot, left_of, sub};
use crate::predicates::orient;
use crate::span::{Kind, Span};

/// All points where `a` and `b` cross or touch, end points of one on the other included.
pub(crate) fn meetings(a: &Span, b: &Span, tolerance: f64) -> Vec<Point> {
    let mut found = Vec::new();
    for (on, point) in [(a, b.start), (a, b.end), (b, a.start), (b, a.end)] {
        if on.distance(point) <= tolerance {
            found.push(point);
        }
    }
    let crossings = match (a.kind, b.kind) {
        (Kind::Line, Kind::Line) => line_line(a, b),
        (Kind::Line, Kind::Arc { centre, radius, .. }) => line_circle(a, centre, radius, tolerance),
        (Kind::Arc { centre, radius, .. }, Kind::Line) => line_circle(b, centre, radius, tolerance),
        (Kind::Arc { centre: c, radius: r, .. }, Kind::Arc { centre: d, radius: q, .. }) => {
            circle_circle(c, r, d, q, tolerance)
        }
    };
    for point in crossings {
        let known = found.iter().any(|&other| distance(other, point) <= tolerance);
        if !known && a.distance(point) <= tolerance && b.distance(point) <= tolerance {
            found.push(point);
        }
    }
    found
}

fn line_line(a: &Span, b: &Span) -> Vec<Point> {
    let (u, v) = (sub(a.end, a.start), sub(b.end, b.start));
    let denominator = cross(u, v);
    if denominator.abs() <= 1e-14 * (dot(u, u) * dot(v, v)).sqrt() {
        return Vec::new();
    }
    let s = cross(sub(b.start, a.start), v) / denominator;
    vec![along(a.start, u, s)]
}

/// Where the endless line through a straight span meets a circle.
pub(crate) fn line_circle(line: &Span, centre: Point, radius: f64, tolerance: f64) -> Vec<Point> {
    let direction = line.tangent(0.0);
    let foot = along(line.start, direction, dot(sub(centre, line.start), direction));
    let depth = distance(foot, centre);
    if depth > radius + tolerance {
        return Vec::new();
    }
    if (radius - depth).abs() <= tolerance {
        return vec![foot];
    }
    let half = ((radius - depth).max(0.0) * (radius + depth)).sqrt();
    vec![along(foot, direction, half), along(foot, direction, -half)]
}

/// Where two circles meet; none if they share their centre.
pub(crate) fn circle_circle(c: Point, r: f64, d: Point, q: f64, tolerance: f64) -> Vec<Point> {
    let apart = distance(c, d);
    if apart <= tolerance || apart > r + q + tolerance || apart < (r - q).abs() - tolerance {
        return Vec::new();
    }
    let u = sub(d, c);
    let direction = [u[0] / apart, u[1] / apart];
    let reach = (apart * apart + (r - q) * (r + q)) / (2.0 * apart);
    let middle = along(c, direction, reach);
    if (apart - r - q).abs() <= tolerance || (apart - (r - q).abs()).abs() <= tolerance {
        return vec![middle];
    }
    let half = ((r - reach) * (r + reach)).max(0.0).sqrt();
    let across = left_of(direction);
    vec![along(middle, across, half), along(middle, across, -half)]
}

/// Whether two segments have a point in common.
pub(crate) fn segments_meet([a, b]: [Point; 2], [c, d]: [Point; 2]) -> bool {
    let apart = |k: usize| a[k].max(b[k]) < c[k].min(d[k]) || c[k].max(d[k]) < a[k].min(b[k]);
    if apart(0) || apart(1) {
        return false;
    }
    let (p, q) = (orient(a, b, c), orient(a, b, d));
    let (r, s) = (orient(c, d, a), orient(c, d, b));
    p * q <= 0.0 && r * s <= 0.0
}
