//! Closed outlines of lines and circular arcs, with holes. Convention: points `[r, z]` in metres; an outline is turned counter-clockwise
//! when it is made and its holes clockwise, so that its inside is on the left; piece indices refer to that order, the pieces of holes
//! follow those of the outline itself. Source: elementary plane geometry.

use crate::error::OutlineError;
use crate::ids::{Point, along, cross, distance, left_of, sub};
use crate::intersect::meetings;
use crate::span::{Kind, Span};

/// How far the ends of an arc may differ in their distance from the centre, over the greater one.
const ON_CIRCLE: f64 = 1e-9;

/// One stretch of an outline, from the end of the piece before it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Piece {
    /// A straight line.
    Line {
        /// End point.
        to: Point,
    },
    /// A circular arc.
    Arc {
        /// End point.
        to: Point,
        /// Centre of the circle.
        centre: Point,
        /// Direction of travel.
        counter_clockwise: bool,
    },
}

impl Piece {
    /// End point, in metres.
    pub fn to(&self) -> Point {
        match *self {
            Self::Line { to } | Self::Arc { to, .. } => to,
        }
    }

    fn span(&self, from: Point) -> Span {
        match *self {
            Self::Line { to } => Span::line(from, to),
            Self::Arc { to, centre, counter_clockwise } => Span::arc(from, to, centre, counter_clockwise),
        }
    }
}

/// A closed loop of pieces that does not cross itself, counter-clockwise, and the holes in it.
#[derive(Debug, Clone, PartialEq)]
pub struct Outline {
    spans: Vec<Span>,
    /// Where each loop begins in `spans`: the outline itself, then its holes.
    loops: Vec<usize>,
    lo: Point,
    hi: Point,
}

impl Outline {
    /// Makes an outline of a start point and the pieces that lead back to it.
    ///
    /// # Errors
    /// If a number is not finite, a piece has no length, an arc's ends are not on one circle, the loop is open, crosses or
    /// touches itself, or encloses nothing.
    pub fn new(start: Point, pieces: Vec<Piece>) -> Result<Self, OutlineError> {
        check_pieces(start, &pieces)?;
        let mut spans = Vec::with_capacity(pieces.len());
        let mut from = start;
        let last = pieces.len() - 1;
        for (i, piece) in pieces.into_iter().enumerate() {
            let mut span = piece.span(from);
            from = piece.to();
            if i == last {
                span.end = start;
            }
            spans.push(span);
        }
        let (lo, hi) = bounds_of(&spans);
        let extent = distance(lo, hi);
        let gap = distance(from, start);
        if gap > 1e-12 * extent {
            return Err(OutlineError::NotClosed { gap });
        }
        let area: f64 = spans.iter().map(|s| s.area_about(start)).sum();
        let nothing = area.abs() <= 1e-12 * extent * extent || area.is_nan();
        // The lobes of a figure of eight may add up to nothing: its crossing is what is wrong with it.
        if nothing && is_straight(&spans, extent) {
            return Err(OutlineError::NoArea { area: area.abs() });
        }
        check_crossings(&spans, 1e-11 * extent)?;
        if nothing {
            return Err(OutlineError::NoArea { area: area.abs() });
        }
        if area < 0.0 {
            spans = spans.iter().rev().map(Span::reversed).collect();
        }
        Ok(Self { spans, loops: vec![0], lo, hi })
    }

    /// The outline with holes in it, besides those it has. What was drawn under a region shows through its holes.
    ///
    /// # Errors
    /// If a hole leaves the outline, or touches it or another hole, or has holes itself.
    pub fn with_holes(&self, holes: &[Self]) -> Result<Self, OutlineError> {
        let mut whole = self.clone();
        let tolerance = 1e-11 * distance(self.lo, self.hi);
        for (hole, inner) in holes.iter().enumerate() {
            let meeting = |span: &Span| whole.spans.iter().find_map(|s| meetings(s, span, tolerance).first().copied());
            let around_another = whole.spans.iter().any(|s| inner.contains(s.start));
            let at = inner.start();
            if let Some(at) = inner.spans.iter().find_map(meeting) {
                return Err(OutlineError::BadHole { hole, at });
            }
            if around_another || inner.loops.len() > 1 || !whole.contains(at) {
                return Err(OutlineError::BadHole { hole, at });
            }
            whole.loops.push(whole.spans.len());
            whole.spans.extend(inner.spans.iter().rev().map(Span::reversed));
        }
        Ok(whole)
    }

    /// The holes, each as an outline of its own.
    pub fn holes(&self) -> Vec<Self> {
        (1..self.loops.len())
            .map(|k| {
                let spans: Vec<Span> = self.loop_spans(k).iter().rev().map(Span::reversed).collect();
                let (lo, hi) = bounds_of(&spans);
                Self { spans, loops: vec![0], lo, hi }
            })
            .collect()
    }

    /// The spans of loop `k`: 0 is the outline itself.
    fn loop_spans(&self, k: usize) -> &[Span] {
        let end = self.loops.get(k + 1).copied().unwrap_or(self.spans.len());
        &self.spans[self.loops[k]..end]
    }

    /// Number of pieces, those of holes included.
    pub fn len(&self) -> usize {
        self.spans.len()
    }

    /// Always false: an outline has pieces.
    pub fn is_empty(&self) -> bool {
        self.spans.is_empty()
    }

    /// Where piece 0 starts, in metres.
    pub fn start(&self) -> Point {
        self.spans[0].start
    }

    /// The pieces of the outline itself, counter-clockwise; those of its holes are in [`Outline::holes`].
    pub fn pieces(&self) -> Vec<Piece> {
        let piece = |s: &Span| match s.kind {
            Kind::Line => Piece::Line { to: s.end },
            Kind::Arc { centre, sweep, .. } => Piece::Arc { to: s.end, centre, counter_clockwise: sweep > 0.0 },
        };
        self.loop_spans(0).iter().map(piece).collect()
    }

    /// The point of piece `piece`, holes counted on, at parameter `t` in 0..1 (in proportion to length); `None` if there is no such piece.
    pub fn point(&self, piece: usize, t: f64) -> Option<Point> {
        self.spans.get(piece).map(|s| s.at(t))
    }

    /// Whether piece `piece`, holes counted on, is an arc; false if there is no such piece.
    pub fn is_arc(&self, piece: usize) -> bool {
        self.spans.get(piece).is_some_and(|s| matches!(s.kind, Kind::Arc { .. }))
    }

    /// Enclosed area in square metres, arcs included exactly, holes left out.
    pub fn area(&self) -> f64 {
        self.spans.iter().map(|s| s.area_about(self.start())).sum()
    }

    /// Length of the outline and its holes in metres.
    pub fn perimeter(&self) -> f64 {
        self.spans.iter().map(Span::length).sum()
    }

    /// Lower and upper corner of the upright box around the outline, in metres.
    pub fn bounds(&self) -> (Point, Point) {
        (self.lo, self.hi)
    }

    /// Whether a point is inside and in no hole; arcs count exactly, points on the outline go either way.
    pub fn contains(&self, p: Point) -> bool {
        if p[0] < self.lo[0] || p[1] < self.lo[1] || p[0] > self.hi[0] || p[1] > self.hi[1] {
            return false;
        }
        self.spans.iter().map(|s| s.crossings(p)).sum::<u32>() % 2 == 1
    }

    /// Distance of a point from the outline itself, in metres.
    pub fn distance(&self, p: Point) -> f64 {
        self.spans.iter().map(|s| s.distance(p)).fold(f64::INFINITY, f64::min)
    }

    /// Whether the areas of two outlines have more in common than points or edges where they touch.
    pub fn overlaps(&self, other: &Self) -> bool {
        let apart = |i: usize| self.hi[i] <= other.lo[i] || other.hi[i] <= self.lo[i];
        if apart(0) || apart(1) {
            return false;
        }
        let extent = distance(self.lo, self.hi).min(distance(other.lo, other.hi));
        let tolerance = 1e-9 * extent;
        self.reaches_into(other, tolerance) || other.reaches_into(self, tolerance)
    }

    /// Whether a point just inside this outline, next to some stretch of it, is inside the other.
    fn reaches_into(&self, other: &Self, tolerance: f64) -> bool {
        self.spans.iter().any(|span| {
            let mut cuts = vec![0.0, 1.0];
            for across in &other.spans {
                cuts.extend(meetings(span, across, tolerance).into_iter().map(|p| span.project(p)));
            }
            cuts.sort_by(f64::total_cmp);
            cuts.windows(2).any(|pair| {
                if (pair[1] - pair[0]) * span.length() <= 40.0 * tolerance {
                    return false;
                }
                let t = 0.5 * (pair[0] + pair[1]);
                other.contains(along(span.at(t), left_of(span.tangent(t)), 10.0 * tolerance))
            })
        })
    }

    /// The outline moved by `shift`, in metres.
    ///
    /// # Errors
    /// If the shift is not finite, or so large that the outline is lost in rounding.
    pub fn translated(&self, shift: Point) -> Result<Self, OutlineError> {
        let moved = |p: Point| along(p, shift, 1.0);
        let pieces = self.pieces().into_iter().map(|piece| match piece {
            Piece::Line { to } => Piece::Line { to: moved(to) },
            Piece::Arc { to, centre, counter_clockwise } => {
                Piece::Arc { to: moved(to), centre: moved(centre), counter_clockwise }
            }
        });
        let holes = self.holes().iter().map(|hole| hole.translated(shift)).collect::<Result<Vec<_>, _>>()?;
        Self::new(moved(self.start()), pieces.collect())?.with_holes(&holes)
    }

    pub(crate) fn spans(&self) -> &[Span] {
        &self.spans
    }
}

/// Whether all pieces lie on one line.
fn is_straight(spans: &[Span], extent: f64) -> bool {
    let start = spans[0].start;
    let reach = |s: &Span| distance(start, s.end);
    let Some(far) = spans.iter().max_by(|a, b| reach(a).total_cmp(&reach(b))) else { return true };
    let direction = sub(far.end, start);
    let off = |s: &Span| cross(direction, sub(s.end, start)).abs();
    spans.iter().all(|s| s.kind == Kind::Line && off(s) <= 1e-12 * extent * extent)
}

fn bounds_of(spans: &[Span]) -> (Point, Point) {
    let (mut lo, mut hi) = ([f64::INFINITY; 2], [f64::NEG_INFINITY; 2]);
    for span in spans {
        let (a, b) = span.bounds();
        for i in 0..2 {
            lo[i] = lo[i].min(a[i]);
            hi[i] = hi[i].max(b[i]);
        }
    }
    (lo, hi)
}

fn check_pieces(start: Point, pieces: &[Piece]) -> Result<(), OutlineError> {
    // Squares of coordinates must stay finite.
    let finite = |p: Point| p[0].abs() < 1e150 && p[1].abs() < 1e150;
    let mut from = start;
    if !finite(start) {
        return Err(OutlineError::NotFinite { index: 0, point: start });
    }
    let arcs = pieces.iter().any(|p| matches!(p, Piece::Arc { .. }));
    if pieces.len() < if arcs { 2 } else { 3 } {
        return Err(OutlineError::TooFewPieces { count: pieces.len() });
    }
    for (i, piece) in pieces.iter().enumerate() {
        let to = piece.to();
        if !finite(to) {
            return Err(OutlineError::NotFinite { index: i + 1, point: to });
        }
        if let Piece::Arc { centre, .. } = *piece {
            if !finite(centre) {
                return Err(OutlineError::NotFinite { index: i + 1, point: centre });
            }
            let (start_radius, end_radius) = (distance(from, centre), distance(to, centre));
            let apart = (start_radius - end_radius).abs();
            if apart > ON_CIRCLE * start_radius.max(end_radius) || start_radius == 0.0 {
                return Err(OutlineError::NotOnCircle { piece: i, start_radius, end_radius, tolerance: ON_CIRCLE });
            }
        }
        let d = sub(from, to);
        if d[0] == 0.0 && d[1] == 0.0 {
            return Err(OutlineError::ZeroLength { piece: i, at: to });
        }
        from = to;
    }
    Ok(())
}

fn check_crossings(spans: &[Span], tolerance: f64) -> Result<(), OutlineError> {
    let boxes: Vec<_> = spans.iter().map(Span::bounds).collect();
    let n = spans.len();
    for i in 0..n {
        for j in i + 1..n {
            let ((a, b), (c, d)) = (boxes[i], boxes[j]);
            if (0..2).any(|k| a[k] > d[k] + tolerance || c[k] > b[k] + tolerance) {
                continue;
            }
            let mut shared = Vec::new();
            if j == i + 1 {
                shared.push(spans[j].start);
            }
            if i == 0 && j == n - 1 {
                shared.push(spans[0].start);
            }
            let strange = |p: &Point| shared.iter().all(|&s| distance(s, *p) > 100.0 * tolerance);
            if let Some(at) = meetings(&spans[i], &spans[j], tolerance).into_iter().find(strange) {
                return Err(OutlineError::SelfCrossing { first: i, second: j, at });
            }
        }
    }
    Ok(())
}
