//! A path of lines and arcs with fillets and chamfers at its corners, closed to an outline. Convention: metres; corner 0 is the start,
//! piece `i` leads from corner `i` to the next. A fillet is tangent to both pieces: its centre is where the two, moved sideways by
//! the radius into the corner, meet. Source: elementary plane geometry.

use crate::error::OutlineError;
use crate::ids::{Point, along, between, cross, distance, dot, left_of, sub};
use crate::intersect::{circle_circle, line_circle};
use crate::outline::{Outline, Piece};
use crate::span::{Kind, Span};
use std::f64::consts::TAU;

/// How far the ends of an arc may differ in their distance from the centre, over the greater one: rounded dimensions pass.
const ARC_MISMATCH: f64 = 1e-3;
/// Sine of the least turn that makes a corner.
const LEAST_TURN: f64 = 1e-6;
/// Share of a length that is lost in rounding.
const ROUNDING: f64 = 1e-12;
/// Halvings in the search for the largest size that fits.
const HALVINGS: usize = 60;

/// What is done to a corner.
#[derive(Debug, Clone, Copy, PartialEq)]
enum Treatment {
    Sharp,
    Fillet { radius: f64 },
    Chamfer { size: f64 },
}

#[derive(Debug, Clone, Copy)]
struct Node {
    at: Point,
    /// Centre and direction of the arc that leads here; a line otherwise.
    arc: Option<(Point, bool)>,
    treatment: Treatment,
}

/// An outline in the making: points, lines, arcs and treated corners in order. Made by [`Outline::path`].
///
/// A fillet or chamfer stands after the point it belongs to, the one of the start included:
///
/// ```
/// use mesher::Outline;
///
/// // A 20 mm x 10 mm plate whose outer corners are rounded with 2 mm and chamfered with 1 mm.
/// let plate = Outline::path([0.0, 0.0])
///     .line_to([0.020, 0.0])
///     .fillet(0.002)
///     .line_to([0.020, 0.010])
///     .chamfer(0.001)
///     .line_to([0.0, 0.010])
///     .close()?;
/// let removed = (1.0 - std::f64::consts::PI / 4.0) * 0.002f64.powi(2) + 0.5 * 0.001f64.powi(2);
/// assert!((plate.area() - (0.020 * 0.010 - removed)).abs() < 1e-15);
/// # Ok::<(), mesher::OutlineError>(())
/// ```
#[derive(Debug, Clone)]
pub struct Path {
    nodes: Vec<Node>,
}

impl Outline {
    /// Starts a path at a point.
    pub fn path(start: Point) -> Path {
        Path { nodes: vec![Node { at: start, arc: None, treatment: Treatment::Sharp }] }
    }
}

impl Path {
    /// A straight line to a point.
    #[must_use]
    pub fn line_to(self, to: Point) -> Self {
        self.with(Node { at: to, arc: None, treatment: Treatment::Sharp })
    }

    /// A circular arc to a point. The centre may be rounded: it is moved to where both ends are equally far from it.
    #[must_use]
    pub fn arc_to(self, to: Point, centre: Point, counter_clockwise: bool) -> Self {
        self.with(Node { at: to, arc: Some((centre, counter_clockwise)), treatment: Treatment::Sharp })
    }

    /// Rounds the corner at the last point with an arc of this radius, in metres, tangent to both of its pieces.
    #[must_use]
    pub fn fillet(self, radius: f64) -> Self {
        self.treated(Treatment::Fillet { radius })
    }

    /// Cuts the corner at the last point off by a straight line from `size` before it to `size` after it, in metres along the pieces.
    #[must_use]
    pub fn chamfer(self, size: f64) -> Self {
        self.treated(Treatment::Chamfer { size })
    }

    fn with(mut self, node: Node) -> Self {
        self.nodes.push(node);
        self
    }

    fn treated(mut self, treatment: Treatment) -> Self {
        if let Some(last) = self.nodes.last_mut() {
            last.treatment = treatment;
        }
        self
    }

    /// The outline: a straight line leads back to the start unless the last point is the start.
    ///
    /// # Errors
    /// A radius or size that is not positive, an arc whose ends are not on one circle to a thousandth, a treated corner that does not
    /// turn or does not fit between its neighbours, and what [`Outline::new`] refuses.
    pub fn close(mut self) -> Result<Outline, OutlineError> {
        self.join_ends();
        let spans = self.spans()?;
        let cuts = self.cuts(&spans)?;
        let count = spans.len();
        let start = cuts[0].leave;
        let mut pieces = Vec::new();
        let mut from = start;
        for (i, span) in spans.iter().enumerate() {
            let cut = &cuts[(i + 1) % count];
            // Two treated corners may use up the whole of a piece between them. What is short in itself is for the outline to refuse.
            if cut.taken[0] + cuts[i].taken[1] == 0.0 || distance(from, cut.reach) > 4.0 * ROUNDING * span.length() {
                pieces.push(match span.kind {
                    Kind::Line => Piece::Line { to: cut.reach },
                    Kind::Arc { centre, sweep, .. } => {
                        Piece::Arc { to: cut.reach, centre, counter_clockwise: sweep > 0.0 }
                    }
                });
                from = cut.reach;
            }
            match cut.round {
                Some((centre, counter_clockwise)) => {
                    let centre = centred(from, cut.leave, centre);
                    pieces.push(Piece::Arc { to: cut.leave, centre, counter_clockwise });
                }
                None if cut.leave != cut.reach => pieces.push(Piece::Line { to: cut.leave }),
                None => {}
            }
            from = cut.leave;
        }
        Outline::new(start, pieces)
    }

    /// Drops a last point that only repeats the start, keeping the arc that leads there and the treatment of either.
    fn join_ends(&mut self) {
        if let [first, .., last] = self.nodes.as_mut_slice()
            && first.at == last.at
            && (first.treatment == Treatment::Sharp || last.treatment == Treatment::Sharp)
        {
            first.arc = last.arc;
            if first.treatment == Treatment::Sharp {
                first.treatment = last.treatment;
            }
            self.nodes.pop();
        }
    }

    /// The pieces before any corner is treated: number `i` leads from corner `i` to the next.
    fn spans(&self) -> Result<Vec<Span>, OutlineError> {
        let count = self.nodes.len();
        let mut spans = Vec::with_capacity(count);
        for (i, node) in self.nodes.iter().enumerate() {
            let next = &self.nodes[(i + 1) % count];
            spans.push(match next.arc {
                None => Span::line(node.at, next.at),
                Some((centre, counter_clockwise)) => {
                    let (start_radius, end_radius) = (distance(node.at, centre), distance(next.at, centre));
                    let apart = (start_radius - end_radius).abs();
                    if apart > ARC_MISMATCH * start_radius.max(end_radius) {
                        let tolerance = ARC_MISMATCH;
                        return Err(OutlineError::NotOnCircle { piece: i, start_radius, end_radius, tolerance });
                    }
                    Span::arc(node.at, next.at, centred(node.at, next.at, centre), counter_clockwise)
                }
            });
        }
        Ok(spans)
    }

    /// Where each corner's treatment begins and ends.
    fn cuts(&self, spans: &[Span]) -> Result<Vec<Cut>, OutlineError> {
        let count = spans.len();
        let beside = |i: usize| (&spans[(i + count - 1) % count], &spans[i]);
        let mut cuts = Vec::with_capacity(count);
        for (i, node) in self.nodes.iter().enumerate() {
            let (before, after) = beside(i);
            check_corner(i, node, before, after)?;
            let room = [before.length(), after.length()];
            let cut = cut(node.treatment, node.at, before, after).filter(|c| c.fits(room));
            cuts.push(cut.ok_or_else(|| too_large(i, node, before, after, room))?);
        }
        for (i, span) in spans.iter().enumerate() {
            let next = (i + 1) % count;
            let (here, there) = (cuts[i].taken[1], cuts[next].taken[0]);
            if here + there <= span.length() * (1.0 + ROUNDING) {
                continue;
            }
            let larger = if here > there * (1.0 + ROUNDING) { i } else { next };
            let (before, after) = beside(larger);
            let room = [
                before.length() - cuts[(larger + count - 1) % count].taken[1],
                after.length() - cuts[(larger + 1) % count].taken[0],
            ];
            return Err(too_large(larger, &self.nodes[larger], before, after, room));
        }
        Ok(cuts)
    }
}

/// A treated corner: where it leaves the piece before it and joins the one after it.
#[derive(Debug, Clone, Copy)]
struct Cut {
    reach: Point,
    leave: Point,
    /// Centre and direction of a fillet.
    round: Option<(Point, bool)>,
    /// What it takes of the piece before it and of the one after it, in metres.
    taken: [f64; 2],
}

impl Cut {
    fn fits(&self, room: [f64; 2]) -> bool {
        (0..2).all(|k| self.taken[k] <= room[k] * (1.0 + ROUNDING))
    }
}

/// Refuses a size that is none, and a treated corner that does not turn.
fn check_corner(corner: usize, node: &Node, before: &Span, after: &Span) -> Result<(), OutlineError> {
    let (what, value) = match node.treatment {
        Treatment::Sharp => return Ok(()),
        Treatment::Fillet { radius } => ("fillet radius", radius),
        Treatment::Chamfer { size } => ("chamfer", size),
    };
    if !(value > 0.0 && value.is_finite()) {
        return Err(OutlineError::BadSize { what, value, limit: f64::MAX });
    }
    let turn = cross(before.tangent(1.0), after.tangent(0.0)).abs();
    if turn > LEAST_TURN { Ok(()) } else { Err(OutlineError::NoCorner { corner, at: node.at }) }
}

/// The treatment of a corner between two pieces; `None` where there is no circle that touches both.
fn cut(treatment: Treatment, at: Point, before: &Span, after: &Span) -> Option<Cut> {
    match treatment {
        Treatment::Sharp => Some(Cut { reach: at, leave: at, round: None, taken: [0.0; 2] }),
        Treatment::Chamfer { size } => {
            let (reach, leave) = (before.at(1.0 - size / before.length()), after.at(size / after.length()));
            Some(Cut { reach, leave, round: None, taken: [size; 2] })
        }
        Treatment::Fillet { radius } => {
            let counter_clockwise = cross(before.tangent(1.0), after.tangent(0.0)) > 0.0;
            let centres = match (before.kind, after.kind) {
                (Kind::Line, Kind::Line) => vec![centre_between_lines(at, before, after, radius)],
                _ => centres(before, after, if counter_clockwise { radius } else { -radius }),
            };
            let cuts = centres.into_iter().filter_map(|centre| touching(before, after, centre, radius));
            let nearest = cuts.min_by(|a, b| (a.taken[0] + a.taken[1]).total_cmp(&(b.taken[0] + b.taken[1])))?;
            Some(Cut { round: nearest.round.map(|(centre, _)| (centre, counter_clockwise)), ..nearest })
        }
    }
}

/// With the half angle `a` between two lines the centre is `radius / sin a` from the corner on the bisector.
fn centre_between_lines(at: Point, before: &Span, after: &Span, radius: f64) -> Point {
    let (back, ahead) = (before.reversed().tangent(0.0), after.tangent(0.0));
    let half = 0.5 * cross(back, ahead).abs().atan2(dot(back, ahead));
    let middle = [back[0] + ahead[0], back[1] + ahead[1]];
    let length = dot(middle, middle).sqrt();
    along(at, [middle[0] / length, middle[1] / length], radius / half.sin())
}

/// Where two pieces meet once each is moved to its left by `left`.
fn centres(before: &Span, after: &Span, left: f64) -> Vec<Point> {
    let circle = |span: &Span| match span.kind {
        Kind::Line => None,
        Kind::Arc { centre, radius, sweep, .. } => Some((centre, radius - left * sweep.signum())),
    };
    let line = |span: &Span| {
        let normal = left_of(span.tangent(0.0));
        Span::line(along(span.start, normal, left), along(span.end, normal, left))
    };
    let positive = |radius: f64| radius > 0.0;
    let tolerance = |radius: f64| 1e-14 * radius;
    match (circle(before), circle(after)) {
        (Some((c, r)), Some((d, q))) if positive(r) && positive(q) => circle_circle(c, r, d, q, tolerance(r.max(q))),
        (Some((c, r)), None) if positive(r) => line_circle(&line(after), c, r, tolerance(r)),
        (None, Some((d, q))) if positive(q) => line_circle(&line(before), d, q, tolerance(q)),
        _ => Vec::new(),
    }
}

/// The fillet about a centre, if it touches both pieces between their ends.
fn touching(before: &Span, after: &Span, centre: Point, radius: f64) -> Option<Cut> {
    let (t, u) = (foot(before, centre)?, foot(after, centre)?);
    let (reach, leave) = (before.at(t), after.at(u));
    let scale = radius + before.length() + after.length();
    let touches = |p: Point| (distance(p, centre) - radius).abs() <= 1e-9 * scale;
    let taken = [(1.0 - t) * before.length(), u * after.length()];
    (touches(reach) && touches(leave)).then_some(Cut { reach, leave, round: Some((centre, true)), taken })
}

/// Parameter of the point of a piece whose normal passes through `p`; none beyond its ends.
fn foot(span: &Span, p: Point) -> Option<f64> {
    let t = match span.kind {
        Kind::Line => {
            let d = sub(span.end, span.start);
            dot(d, sub(p, span.start)) / dot(d, d)
        }
        Kind::Arc { centre, from, sweep, .. } => {
            let u = sub(p, centre);
            let turned = ((u[1].atan2(u[0]) - from) * sweep.signum()).rem_euclid(TAU);
            // What lies between the end and the start is beyond the nearer of the two.
            let beyond = turned - sweep.abs();
            if beyond > 0.0 && beyond > TAU - turned { (turned - TAU) / sweep.abs() } else { turned / sweep.abs() }
        }
    };
    (-ROUNDING..=1.0 + ROUNDING).contains(&t).then_some(t.clamp(0.0, 1.0))
}

/// The refusal of a corner that does not fit into the room it has on both sides, with the largest size that does.
fn too_large(corner: usize, node: &Node, before: &Span, after: &Span, room: [f64; 2]) -> OutlineError {
    let (what, value) = match node.treatment {
        Treatment::Fillet { radius } => ("fillet radius", radius),
        Treatment::Chamfer { size } => ("chamfer", size),
        Treatment::Sharp => ("corner", 0.0),
    };
    let sized = |size: f64| match node.treatment {
        Treatment::Fillet { .. } => Treatment::Fillet { radius: size },
        _ => Treatment::Chamfer { size },
    };
    let (mut limit, mut beyond) = (0.0, value);
    for _ in 0..HALVINGS {
        let middle = 0.5 * (limit + beyond);
        let fits = cut(sized(middle), node.at, before, after).is_some_and(|c| c.fits(room));
        *if fits { &mut limit } else { &mut beyond } = middle;
    }
    OutlineError::CornerTooLarge { what, corner, at: node.at, value, limit }
}

/// A centre moved onto the perpendicular bisector of a chord, so that both ends are equally far from it.
fn centred(from: Point, to: Point, centre: Point) -> Point {
    let chord = sub(to, from);
    let square = dot(chord, chord);
    if square == 0.0 {
        return centre;
    }
    along(centre, chord, -dot(sub(centre, between(from, to, 0.5)), chord) / square)
}
