//! What happens to a strip where one stretch of a surface meets the next. Convention: angles inside the region, in radians; depth to the
//! left of travel.

use super::loops::{Use, inner_angle};
use crate::ids::{Point, along, cross, distance, dot, left_of, sub};
use crate::intersect::{circle_circle, line_circle};
use crate::span::{Kind, Span};
use std::f64::consts::PI;

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Style {
    /// Convex corner: both sides go down in steps that meet on the bisector, or on the domain outline.
    Steps,
    /// One column that both sides share.
    Shared,
    /// Reflex corner: several columns on one point.
    Fan,
    /// Both sides bound the domain: no strip.
    Bare,
}

/// Where two uses of a loop meet.
#[derive(Debug, Clone)]
pub(super) struct Junction {
    pub(super) style: Style,
    /// Point at each level that lies at that depth below both sides (on the outline, below the other, if one bounds the domain).
    pub(super) apex: Vec<Option<Point>>,
    /// Directions of the columns of a fan, in the order of travel.
    pub(super) fan: Vec<Point>,
    /// Length along the surface before and after, from the junction, of the feet of the apexes.
    pub(super) feet: [Vec<Option<f64>>; 2],
    /// Whether the apexes may be shared and the surface divided at their feet.
    pub(super) matched: bool,
}

const SMOOTH: f64 = 1e-5;
/// Steps are used up to this angle between two surfaces, and up to `STEPS_AT_OUTLINE` at the outline of the domain.
const STEPS: f64 = 2.36;
const STEPS_AT_OUTLINE: f64 = 1.31;
/// A fan is used from this angle between two surfaces, and from `FAN_AT_OUTLINE` at the outline of the domain.
const FAN: f64 = 3.49;
const FAN_AT_OUTLINE: f64 = 1.83;
/// Below this angle the steps of the two sides are not matched.
const SHARPEST: f64 = 0.45;
const FAN_SECTOR: f64 = 0.62;

pub(super) fn junction(before: &Use, after: &Use, depths: &[f64]) -> Junction {
    let angle = inner_angle(before, after);
    let at_outline = before.bare || after.bare;
    let (steps, fan) = if at_outline { (STEPS_AT_OUTLINE, FAN_AT_OUTLINE) } else { (STEPS, FAN) };
    let style = if before.bare && after.bare {
        Style::Bare
    } else if angle < steps {
        Style::Steps
    } else if angle < fan {
        Style::Shared
    } else {
        Style::Fan
    };
    let vertex = after.span.start;
    let smooth = !at_outline && (angle - PI).abs() < SMOOTH;
    let normal = left_of(after.span.tangent(0.0));
    let apex: Vec<Option<Point>> = match style {
        Style::Bare | Style::Fan => Vec::new(),
        Style::Shared if smooth => depths.iter().map(|&d| Some(along(vertex, normal, d))).collect(),
        Style::Shared | Style::Steps => depths.iter().map(|&d| meeting(before, after, d)).collect(),
    };
    let mut feet = [Vec::new(), Vec::new()];
    if angle < PI - SMOOTH {
        for (side, u) in [before, after].into_iter().enumerate().filter(|(_, u)| !u.bare) {
            feet[side] = feet_of(&apex, u, side == 0);
        }
    }
    let fan = if style == Style::Fan { fan_directions(before, after, angle) } else { Vec::new() };
    let matched = style == Style::Steps && angle > SHARPEST;
    Junction { style, apex, fan, feet, matched }
}

/// Length along a use from its start, or back from its end, of the nearest point to every apex.
fn feet_of(apex: &[Option<Point>], u: &Use, from_end: bool) -> Vec<Option<f64>> {
    let away = |p: Point| {
        let t = u.span.project(p);
        u.span.length() * if from_end { 1.0 - t } else { t }
    };
    apex.iter().map(|a| a.map(away)).collect()
}

/// Direction from the junction along the stretch that bounds the domain.
fn outline_direction(before: &Use, after: &Use) -> Point {
    if before.bare {
        let t = before.span.tangent(1.0);
        [-t[0], -t[1]]
    } else {
        after.span.tangent(0.0)
    }
}

/// Directions from the normal of the side before to the normal of the side after, or to the outline.
fn fan_directions(before: &Use, after: &Use, angle: f64) -> Vec<Point> {
    let first = if before.bare { outline_direction(before, after) } else { left_of(before.span.tangent(1.0)) };
    let mut turn = angle;
    for surface in [!before.bare, !after.bare] {
        turn -= if surface { 0.5 * PI } else { 0.0 };
    }
    let n = (turn / FAN_SECTOR).ceil().max(1.0) as usize;
    let mut directions: Vec<Point> = (0..=n)
        .map(|i| {
            let (s, c) = (turn * i as f64 / n as f64).sin_cos();
            // Clockwise: the region is on the left and the surface turns right.
            [first[0] * c + first[1] * s, first[1] * c - first[0] * s]
        })
        .collect();
    if after.bare {
        directions[n] = outline_direction(before, after);
    }
    directions
}

/// The point at a depth below both sides that is nearest to the junction; a side that bounds the domain counts at depth 0.
fn meeting(before: &Use, after: &Use, depth: f64) -> Option<Point> {
    let vertex = after.span.start;
    if depth == 0.0 {
        return Some(vertex);
    }
    let offset = |u: &Use| offset(&u.span, if u.bare { 0.0 } else { depth });
    let (a, b) = (offset(before)?, offset(after)?);
    let found = match (a, b) {
        (Track::Line(p, u), Track::Line(q, v)) => {
            let s = cross(sub(q, p), v) / cross(u, v);
            vec![along(p, u, s)]
        }
        (Track::Line(p, u), Track::Circle(c, r)) | (Track::Circle(c, r), Track::Line(p, u)) => {
            line_circle(&Span::line(p, along(p, u, r)), c, r, 0.0)
        }
        (Track::Circle(c, r), Track::Circle(d, q)) => circle_circle(c, r, d, q, 0.0),
    };
    // The bisector points into the region; of two meetings the one ahead on it counts.
    let near = |p: &Point| p[0].is_finite() && p[1].is_finite() && distance(*p, vertex) < 12.0 * depth;
    let inward = |p: &Point| {
        let w = sub(*p, vertex);
        let below_before = before.bare || dot(w, left_of(before.span.tangent(1.0))) > 0.0;
        let below_after = after.bare || dot(w, left_of(after.span.tangent(0.0))) > 0.0;
        below_before && below_after
    };
    found
        .into_iter()
        .filter(|p| near(p) && inward(p))
        .min_by(|p, q| distance(*p, vertex).total_cmp(&distance(*q, vertex)))
        .map(|p| match [before, after].into_iter().find(|u| u.bare) {
            // Exactly on the outline, not a rounding error beside it.
            Some(outline) => outline.span.at(outline.span.project(p)),
            None => p,
        })
}

enum Track {
    Line(Point, Point),
    Circle(Point, f64),
}

/// The endless line or whole circle at a depth to the left of a span.
fn offset(span: &Span, depth: f64) -> Option<Track> {
    match span.kind {
        Kind::Line => {
            let u = span.tangent(0.0);
            Some(Track::Line(along(span.start, left_of(u), depth), u))
        }
        Kind::Arc { centre, radius, sweep, .. } => {
            let r = radius - depth * sweep.signum();
            (r > 0.0).then_some(Track::Circle(centre, r))
        }
    }
}
