//! A span: one straight or circular stretch between two points, with exact measures. Convention: parameter `t` in 0..1 in
//! proportion to length; sweep positive counter-clockwise. Source: elementary plane geometry.

use crate::ids::{Point, between, cross, distance, dot, left_of, sub};
use std::f64::consts::{FRAC_PI_2, TAU};

#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) enum Kind {
    Line,
    /// Angles in radians; `from` is the angle of the start point seen from the centre, `sweep` is signed.
    Arc {
        centre: Point,
        radius: f64,
        from: f64,
        sweep: f64,
    },
}

#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Span {
    pub(crate) start: Point,
    pub(crate) end: Point,
    pub(crate) kind: Kind,
}

impl Span {
    pub(crate) fn line(start: Point, end: Point) -> Self {
        Self { start, end, kind: Kind::Line }
    }

    /// The arc from `start` to `end` about `centre`; coincident end points make a whole turn.
    pub(crate) fn arc(start: Point, end: Point, centre: Point, counter_clockwise: bool) -> Self {
        let (u, v) = (sub(start, centre), sub(end, centre));
        let from = u[1].atan2(u[0]);
        let mut sweep = v[1].atan2(v[0]) - from;
        if counter_clockwise && sweep <= 0.0 {
            sweep += TAU;
        } else if !counter_clockwise && sweep >= 0.0 {
            sweep -= TAU;
        }
        let radius = 0.5 * (distance(start, centre) + distance(end, centre));
        Self { start, end, kind: Kind::Arc { centre, radius, from, sweep } }
    }

    /// The arc with this radius, which its end points may miss by a rounding error.
    pub(crate) fn on_circle(mut self, exact: f64) -> Self {
        if let Kind::Arc { radius, .. } = &mut self.kind {
            *radius = exact;
        }
        self
    }

    pub(crate) fn reversed(&self) -> Self {
        let kind = match self.kind {
            Kind::Line => Kind::Line,
            Kind::Arc { centre, radius, from, sweep } => {
                Kind::Arc { centre, radius, from: from + sweep, sweep: -sweep }
            }
        };
        Self { start: self.end, end: self.start, kind }
    }

    /// The part between parameters `a < b`, whose end points are given (they may be snapped ones).
    pub(crate) fn part(&self, a: f64, b: f64, start: Point, end: Point) -> Self {
        let kind = match self.kind {
            Kind::Line => Kind::Line,
            Kind::Arc { centre, radius, from, sweep } => {
                Kind::Arc { centre, radius, from: from + a * sweep, sweep: sweep * (b - a) }
            }
        };
        Self { start, end, kind }
    }

    pub(crate) fn length(&self) -> f64 {
        match self.kind {
            Kind::Line => distance(self.start, self.end),
            Kind::Arc { radius, sweep, .. } => radius * sweep.abs(),
        }
    }

    /// Absolute sweep in radians; zero for a line.
    pub(crate) fn turn(&self) -> f64 {
        match self.kind {
            Kind::Line => 0.0,
            Kind::Arc { sweep, .. } => sweep.abs(),
        }
    }

    pub(crate) fn at(&self, t: f64) -> Point {
        if t <= 0.0 {
            return self.start;
        }
        if t >= 1.0 {
            return self.end;
        }
        match self.kind {
            Kind::Line => between(self.start, self.end, t),
            Kind::Arc { centre, radius, from, sweep } => {
                let angle = from + t * sweep;
                [centre[0] + radius * angle.cos(), centre[1] + radius * angle.sin()]
            }
        }
    }

    /// Unit tangent in the direction of travel.
    pub(crate) fn tangent(&self, t: f64) -> Point {
        match self.kind {
            Kind::Line => {
                let d = sub(self.end, self.start);
                let l = dot(d, d).sqrt();
                [d[0] / l, d[1] / l]
            }
            Kind::Arc { from, sweep, .. } => {
                let angle = from + t.clamp(0.0, 1.0) * sweep;
                let n = left_of([angle.cos(), angle.sin()]);
                if sweep > 0.0 { n } else { [-n[0], -n[1]] }
            }
        }
    }

    /// Parameter of the nearest point of the span.
    pub(crate) fn project(&self, p: Point) -> f64 {
        match self.kind {
            Kind::Line => {
                let d = sub(self.end, self.start);
                (dot(d, sub(p, self.start)) / dot(d, d)).clamp(0.0, 1.0)
            }
            Kind::Arc { centre, from, sweep, .. } => {
                let u = sub(p, centre);
                let turned = ((u[1].atan2(u[0]) - from) * sweep.signum()).rem_euclid(TAU);
                let whole = sweep.abs();
                if turned <= whole {
                    turned / whole
                } else if turned - whole < TAU - turned {
                    1.0
                } else {
                    0.0
                }
            }
        }
    }

    pub(crate) fn distance(&self, p: Point) -> f64 {
        distance(p, self.at(self.project(p)))
    }

    /// Lower and upper corner of the smallest upright box around the span.
    pub(crate) fn bounds(&self) -> (Point, Point) {
        let mut lo = [self.start[0].min(self.end[0]), self.start[1].min(self.end[1])];
        let mut hi = [self.start[0].max(self.end[0]), self.start[1].max(self.end[1])];
        if let Kind::Arc { centre, radius, .. } = self.kind {
            for quarter in 0..4 {
                if self.covers(f64::from(quarter) * FRAC_PI_2) {
                    let axis = usize::from(quarter % 2 == 1);
                    if quarter < 2 {
                        hi[axis] = hi[axis].max(centre[axis] + radius);
                    } else {
                        lo[axis] = lo[axis].min(centre[axis] - radius);
                    }
                }
            }
        }
        (lo, hi)
    }

    /// Whether the arc passes the given angle.
    fn covers(&self, angle: f64) -> bool {
        match self.kind {
            Kind::Line => false,
            Kind::Arc { from, sweep, .. } => ((angle - from) * sweep.signum()).rem_euclid(TAU) <= sweep.abs(),
        }
    }

    /// Contribution to the signed area of a closed loop, `1/2 (x dy - y dx)` about `origin`.
    pub(crate) fn area_about(&self, origin: Point) -> f64 {
        let (a, b) = (sub(self.start, origin), sub(self.end, origin));
        match self.kind {
            Kind::Line => 0.5 * cross(a, b),
            Kind::Arc { centre, radius, sweep, .. } => {
                0.5 * (radius * radius * sweep + cross(sub(centre, origin), sub(b, a)))
            }
        }
    }

    /// Toggles of a ray from `p` towards growing r: how often the span crosses it (half-open in z).
    pub(crate) fn crossings(&self, p: Point) -> u32 {
        let Kind::Arc { centre, radius, from, sweep } = self.kind else {
            return self.line_crossing(p);
        };
        let mut count = 0;
        let mut here = (0.0, self.start[1]);
        let mut stops: Vec<(f64, f64)> = [FRAC_PI_2, -FRAC_PI_2]
            .iter()
            .filter_map(|&pole| {
                let turned = ((pole - from) * sweep.signum()).rem_euclid(TAU);
                (turned < sweep.abs()).then(|| (turned / sweep.abs(), centre[1] + radius * pole.signum()))
            })
            .collect();
        stops.sort_by(|a, b| a.0.total_cmp(&b.0));
        stops.push((1.0, self.end[1]));
        for stop in stops {
            if (here.1 <= p[1]) != (stop.1 <= p[1]) {
                let right = (from + 0.5 * (here.0 + stop.0) * sweep).cos() > 0.0;
                let half = (radius * radius - (p[1] - centre[1]).powi(2)).max(0.0).sqrt();
                let x = if right { centre[0] + half } else { centre[0] - half };
                count += u32::from(x > p[0]);
            }
            here = stop;
        }
        count
    }

    fn line_crossing(&self, p: Point) -> u32 {
        let (a, b) = (self.start, self.end);
        if (a[1] <= p[1]) == (b[1] <= p[1]) {
            return 0;
        }
        let x = a[0] + (p[1] - a[1]) / (b[1] - a[1]) * (b[0] - a[0]);
        u32::from(x > p[0])
    }
}
