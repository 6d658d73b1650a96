//! Profiles: points, arcs, fillets and chamfers in order, closed by a straight line.
//!
//! A treated corner stands between two straight lines. With the half angle `a` between them a fillet of radius `R` takes
//! `R / tan a` off each line, and its centre is `R / sin a` from the corner on the bisector (elementary plane geometry).

use mesher::{Outline, Piece, Point};

use super::amount::{POSITION, SIZE, read};
use super::shapes::made;
use crate::job::{Direction, Place, ProfileArc, ProfileCurve, ProfileStep, SectionPoint};
use crate::job_error::JobError;

/// How far the ends of an arc may differ in their distance from the centre before it is refused: rounded dimensions pass.
const ARC_MISMATCH: f64 = 1e-3;

/// The outline of a profile whose list of steps stands at `place`.
///
/// # Errors
/// No point to begin with, an arc whose ends are not on one circle, a corner that does not fit, an outline that crosses
/// itself.
pub(super) fn outline(steps: &[ProfileStep], place: &Place) -> Result<Outline, JobError> {
    let mut nodes = Vec::with_capacity(steps.len());
    for (index, step) in steps.iter().enumerate() {
        nodes.push(node(step, &place.index(index))?);
    }
    if nodes.first().is_none_or(|first| first.arc.is_some()) {
        return Err(JobError::ProfileStart { place: place.index(0) });
    }
    join_ends(&mut nodes);
    let corners = corners(&nodes, place)?;
    let start = corners[0].leave;
    let mut pieces = Vec::new();
    let mut from = start;
    for index in (1..nodes.len()).chain([0]) {
        let (node, corner) = (&nodes[index], &corners[index]);
        match node.arc {
            Some((centre, counter_clockwise)) => {
                let centre = circle_centre(from, node.at, centre, &place.index(index))?;
                pieces.push(Piece::Arc { to: corner.reach, centre, counter_clockwise });
            }
            None if corner.reach != from => pieces.push(Piece::Line { to: corner.reach }),
            None => {}
        }
        if let Some((centre, counter_clockwise)) = corner.round {
            pieces.push(Piece::Arc { to: corner.leave, centre, counter_clockwise });
        } else if corner.leave != corner.reach {
            pieces.push(Piece::Line { to: corner.leave });
        }
        from = corner.leave;
    }
    made(Outline::new(start, pieces), place)
}

/// A vertex and how it is reached and treated.
struct Node {
    at: Point,
    /// Centre and direction of the arc that leads here; a line otherwise.
    arc: Option<(Point, bool)>,
    cut: Cut,
}

/// What is done to a corner.
enum Cut {
    None,
    Fillet { radius: f64, text: String },
    Chamfer { size: f64, text: String },
}

fn node(step: &ProfileStep, place: &Place) -> Result<Node, JobError> {
    match step {
        ProfileStep::To(to) => Ok(Node { at: point(to, place)?, arc: None, cut: Cut::None }),
        ProfileStep::Curve(ProfileCurve::Arc(arc)) => arc_node(arc, &place.key("arc")),
        ProfileStep::Curve(ProfileCurve::Fillet(fillet)) => {
            let place = place.key("fillet");
            let radius = read(&fillet.radius, &place.key("radius"), SIZE)?;
            let cut = Cut::Fillet { radius: radius.si, text: radius.text };
            Ok(Node { at: point(&fillet.at, &place.key("at"))?, arc: None, cut })
        }
        ProfileStep::Curve(ProfileCurve::Chamfer(chamfer)) => {
            let place = place.key("chamfer");
            let size = read(&chamfer.size, &place.key("size"), SIZE)?;
            let cut = Cut::Chamfer { size: size.si, text: size.text };
            Ok(Node { at: point(&chamfer.at, &place.key("at"))?, arc: None, cut })
        }
    }
}

fn arc_node(arc: &ProfileArc, place: &Place) -> Result<Node, JobError> {
    let (to, centre) = (point(&arc.to, &place.key("to"))?, point(&arc.centre, &place.key("centre"))?);
    Ok(Node { at: to, arc: Some((centre, arc.direction == Direction::CounterClockwise)), cut: Cut::None })
}

/// A point `[r, z]` in metres.
pub(super) fn point(written: &SectionPoint, place: &Place) -> Result<Point, JobError> {
    let r = read(&written.0, &place.index(0), POSITION)?;
    let z = read(&written.1, &place.index(1), POSITION)?;
    Ok([r.si, z.si])
}

/// Drops a first point that only repeats the last one, keeping the arc that leads there.
fn join_ends(nodes: &mut Vec<Node>) {
    if let [first, .., last] = nodes.as_mut_slice()
        && first.at == last.at
        && matches!(last.cut, Cut::None)
    {
        first.arc = last.arc;
        nodes.pop();
    }
}

/// Where a treated corner begins and ends, and the centre and direction of its fillet.
struct Corner {
    reach: Point,
    leave: Point,
    round: Option<(Point, bool)>,
    taken: f64,
}

fn corners(nodes: &[Node], place: &Place) -> Result<Vec<Corner>, JobError> {
    let count = nodes.len();
    let mut corners = Vec::with_capacity(count);
    for index in 0..count {
        let (before, after) = (&nodes[(index + count - 1) % count], &nodes[(index + 1) % count]);
        corners.push(corner(before, &nodes[index], after, &place.index(index))?);
    }
    for index in 0..count {
        let next = (index + 1) % count;
        let needs = corners[index].taken + corners[next].taken;
        let has = distance(nodes[index].at, nodes[next].at);
        let text = [&nodes[next].cut, &nodes[index].cut].into_iter().find_map(|cut| match cut {
            Cut::Fillet { text, .. } | Cut::Chamfer { text, .. } => Some(text.clone()),
            Cut::None => None,
        });
        if let Some(value) = text.filter(|_| needs > has * (1.0 + 1e-12)) {
            let place = place.index(if corners[next].taken > 0.0 { next } else { index });
            return Err(JobError::CornerTooLarge { place, value, needs_mm: 1e3 * needs, has_mm: 1e3 * has });
        }
    }
    Ok(corners)
}

fn corner(before: &Node, node: &Node, after: &Node, place: &Place) -> Result<Corner, JobError> {
    if matches!(node.cut, Cut::None) {
        return Ok(Corner { reach: node.at, leave: node.at, round: None, taken: 0.0 });
    }
    if node.arc.is_some() || after.arc.is_some() {
        return Err(JobError::CornerAtArc { place: place.clone() });
    }
    let (back, ahead) = (direction(node.at, before.at), direction(node.at, after.at));
    let turn = back[1] * ahead[0] - back[0] * ahead[1];
    let half = 0.5 * turn.abs().atan2(back[0] * ahead[0] + back[1] * ahead[1]);
    if turn.abs() <= 1e-6 {
        return Err(JobError::NoCorner { place: place.clone() });
    }
    let along = |way: Point, length: f64| [node.at[0] + length * way[0], node.at[1] + length * way[1]];
    match node.cut {
        Cut::Fillet { radius, .. } => {
            let taken = radius / half.tan();
            let middle = direction([0.0, 0.0], [back[0] + ahead[0], back[1] + ahead[1]]);
            let round = Some((along(middle, radius / half.sin()), turn > 0.0));
            Ok(Corner { reach: along(back, taken), leave: along(ahead, taken), round, taken })
        }
        Cut::Chamfer { size, .. } => {
            Ok(Corner { reach: along(back, size), leave: along(ahead, size), round: None, taken: size })
        }
        Cut::None => Ok(Corner { reach: node.at, leave: node.at, round: None, taken: 0.0 }),
    }
}

/// Unit vector from one point to another; zero where they coincide.
fn direction(from: Point, to: Point) -> Point {
    let length = distance(from, to);
    if length == 0.0 { [0.0, 0.0] } else { [(to[0] - from[0]) / length, (to[1] - from[1]) / length] }
}

fn distance(a: Point, b: Point) -> f64 {
    (a[0] - b[0]).hypot(a[1] - b[1])
}

/// The centre moved onto the perpendicular bisector of the chord, so that both ends are equally far from it.
fn circle_centre(from: Point, to: Point, centre: Point, place: &Place) -> Result<Point, JobError> {
    let (start, end) = (distance(from, centre), distance(to, centre));
    if (start - end).abs() > ARC_MISMATCH * start.max(end) {
        let place = place.key("arc").key("centre");
        return Err(JobError::ArcRadii { place, start_mm: 1e3 * start, end_mm: 1e3 * end });
    }
    let chord = direction(from, to);
    let middle = [0.5 * (from[0] + to[0]), 0.5 * (from[1] + to[1])];
    let off = (centre[0] - middle[0]) * chord[0] + (centre[1] - middle[1]) * chord[1];
    Ok([centre[0] - off * chord[0], centre[1] - off * chord[1]])
}
