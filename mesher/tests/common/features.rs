//! The narrowest gap and the smallest angle of a section, by brute force over all pairs of pieces. Convention: gaps over the diagonal of
//! the domain's box, angles in degrees; what lies outside the domain does not count. Source: elementary plane geometry.

use super::laws::{distance, extent, project};
use mesher::{Drawing, Piece, Point};
use std::f64::consts::TAU;

/// Two points closer than this share of the extent are one, two directions closer than this angle are one.
const SAME: f64 = 1e-12;

#[derive(Clone, Copy)]
struct Side {
    from: Point,
    piece: Piece,
}

impl Side {
    fn at(&self, t: f64) -> Point {
        let from = self.from;
        match self.piece {
            Piece::Line { to } => [0, 1].map(|k| from[k] + t * (to[k] - from[k])),
            Piece::Arc { to, centre, counter_clockwise } => {
                let angle = |p: Point| (p[1] - centre[1]).atan2(p[0] - centre[0]);
                let turn = angle(to) - angle(from);
                let turn = if counter_clockwise { turn.rem_euclid(TAU) } else { -(-turn).rem_euclid(TAU) };
                let (s, c) = (angle(from) + t * turn).sin_cos();
                let radius = distance(from, centre);
                [centre[0] + radius * c, centre[1] + radius * s]
            }
        }
    }

    fn distance(&self, p: Point) -> f64 {
        distance(p, self.at(project(self.from, &self.piece, p)))
    }

    /// Directions, in radians, in which the side leaves a point on it, with the curvature to the left.
    fn leaving(&self, p: Point, tolerance: f64) -> Vec<(f64, f64)> {
        let to = self.piece.to();
        let (forward, bend) = match self.piece {
            Piece::Line { to } => ((to[1] - self.from[1]).atan2(to[0] - self.from[0]), 0.0),
            Piece::Arc { centre, counter_clockwise, .. } => {
                let out = (p[1] - centre[1]).atan2(p[0] - centre[0]);
                let sign = if counter_clockwise { 1.0 } else { -1.0 };
                (out + sign * 0.25 * TAU, sign / distance(p, centre))
            }
        };
        let mut leaving = Vec::new();
        if distance(p, to) > tolerance {
            leaving.push((forward, bend));
        }
        if distance(p, self.from) > tolerance {
            leaving.push((forward + 0.5 * TAU, -bend));
        }
        leaving
    }
}

/// Narrowest gap over the extent, and smallest angle in degrees.
pub(crate) fn narrowest(drawing: &Drawing) -> (f64, f64) {
    let extent = extent(drawing);
    let tolerance = SAME * extent;
    let sides = sides(drawing);
    let mut points: Vec<Point> = sides.iter().map(|s| s.from).collect();
    for (i, a) in sides.iter().enumerate() {
        for b in &sides[..i] {
            points.extend(candidates(a, b).into_iter().filter(|&p| a.distance(p) <= tolerance));
        }
    }
    points.retain(|&p| drawing.domain.contains(p) || drawing.domain.distance(p) <= tolerance);
    let (mut gap, mut angle) = (1.0f64, 180.0f64);
    for &p in &points {
        let mut leaving: Vec<(f64, f64)> = Vec::new();
        for side in &sides {
            let d = side.distance(p);
            if d > tolerance {
                gap = gap.min(d / extent);
            } else {
                leaving.extend(side.leaving(p, tolerance));
            }
        }
        for (i, a) in leaving.iter().enumerate() {
            for b in &leaving[..i] {
                let turn = (a.0 - b.0).rem_euclid(TAU);
                let turn = turn.min(TAU - turn);
                // The same line twice is no wedge; an arc beside its tangent is one of no angle.
                if turn > SAME || (a.1 - b.1).abs() * extent > 1e-9 {
                    angle = angle.min(turn.to_degrees());
                }
            }
        }
    }
    (gap, angle)
}

fn sides(drawing: &Drawing) -> Vec<Side> {
    let outlines = std::iter::once(&drawing.domain).chain(drawing.regions.iter().map(|r| &r.outline));
    let of = |o: &mesher::Outline| {
        let mut from = o.start();
        let step = |piece: Piece| Side { from: std::mem::replace(&mut from, piece.to()), piece };
        o.pieces().into_iter().map(step).collect::<Vec<_>>()
    };
    outlines.flat_map(of).collect()
}

/// Where the endless lines and whole circles of two sides meet or are closest.
fn candidates(a: &Side, b: &Side) -> Vec<Point> {
    match (a.piece, b.piece) {
        (Piece::Line { to }, Piece::Line { to: end }) => {
            let (u, v) = (minus(to, a.from), minus(end, b.from));
            let s = cross(minus(b.from, a.from), v) / cross(u, v);
            [plus(a.from, u, s)].into_iter().filter(|p| p[0].is_finite() && p[1].is_finite()).collect()
        }
        (Piece::Line { to }, Piece::Arc { centre, .. }) => on_line(a.from, to, centre, distance(b.from, centre)),
        (Piece::Arc { centre, .. }, Piece::Line { to }) => {
            let mut found = on_line(b.from, to, centre, distance(a.from, centre));
            // The point of the circle nearest to the line.
            let radius = distance(a.from, centre);
            if let Some(&foot) = found.first() {
                let d = distance(foot, centre);
                found.extend([1.0, -1.0].map(|s| plus(centre, minus(foot, centre), s * radius / d)));
            }
            found
        }
        (Piece::Arc { centre: c, .. }, Piece::Arc { centre: d, .. }) => {
            let (r, q, apart) = (distance(a.from, c), distance(b.from, d), distance(c, d));
            let u = minus(d, c);
            let reach = 0.5 * (apart * apart + (r - q) * (r + q)) / apart;
            let half = ((r - reach) * (r + reach)).max(0.0).sqrt();
            let across = [-u[1], u[0]];
            let at = |x: f64, y: f64| plus(plus(c, u, x / apart), across, y / apart);
            let all = [at(reach, half), at(reach, -half), at(r, 0.0), at(-r, 0.0)];
            all.into_iter().filter(|p| p[0].is_finite() && p[1].is_finite()).collect()
        }
    }
}

/// The foot of the centre on a line, and where the line meets the circle.
fn on_line(from: Point, to: Point, centre: Point, radius: f64) -> Vec<Point> {
    let u = minus(to, from);
    let w = minus(centre, from);
    let length = u[0].hypot(u[1]);
    let along = (u[0] * w[0] + u[1] * w[1]) / length;
    let depth = cross(u, w) / length;
    let half = ((radius - depth) * (radius + depth)).max(0.0).sqrt();
    [along, along + half, along - half].map(|x| plus(from, u, x / length)).to_vec()
}

fn minus(a: Point, b: Point) -> Point {
    [a[0] - b[0], a[1] - b[1]]
}

fn plus(a: Point, u: Point, t: f64) -> Point {
    [a[0] + t * u[0], a[1] + t * u[1]]
}

fn cross(a: Point, b: Point) -> f64 {
    a[0] * b[1] - a[1] * b[0]
}
