//! Chords of arcs that get in each other's way, or in the way of other lines. Two arcs may run closer together than the height of an edge's
//! arc over its chord; then their chords cross although they do not. Such edges are divided at matching points, each opposite an end
//! of the other, until the chords lie as the arcs do. Two curves between the same two nodes need a point on one of them at least.
//! Convention: as in [`crate::plan`]. Source: elementary plane geometry.

use crate::ids::{Point, distance};
use crate::intersect::segments_meet;
use crate::plan::Plan;
use crate::predicates::orient;
use crate::span::{Kind, Span};
use crate::tree::{Item, Tree};

/// Most rounds of dividing; each at least halves the angle of the chords concerned.
const ROUNDS: usize = 24;
/// An edge is not divided nearer to its ends than this share of it.
const LEAST_SHARE: f64 = 0.02;

/// Divides the arc edges of a plan until their chords cross nothing and nothing lies between chord and arc. What remains after
/// the last round is found by the triangulation. `enough` is told the number of edges and ends it early.
pub(crate) fn untangle(plan: &mut Plan, tolerance: f64, enough: &dyn Fn(usize) -> bool) {
    if plan.tags.iter().all(|tag| tag.circle.is_none()) {
        return;
    }
    // Only what changed in the last round, and what is near it, is looked at again.
    let mut stirred = vec![true; plan.edges.len()];
    for _ in 0..ROUNDS {
        let cuts = if enough(plan.edges.len()) { Vec::new() } else { cuts(plan, &stirred, tolerance) };
        if cuts.is_empty() {
            return;
        }
        stirred = divide(plan, cuts);
    }
}

/// The short arc over an edge, if it is one.
fn arc(plan: &Plan, edge: usize) -> Option<Span> {
    let (a, b, tag) = plan.edges[edge];
    let (centre, radius) = plan.tags[tag as usize - 1].circle?;
    let [a, b] = [a, b].map(|v| plan.points[v as usize]);
    Some(Span::arc(a, b, centre, orient(centre, a, b) > 0.0).on_circle(radius))
}

/// Edges to be divided, and where, sorted by edge and parameter.
fn cuts(plan: &Plan, stirred: &[bool], tolerance: f64) -> Vec<(usize, Point)> {
    let point = |v: u32| plan.points[v as usize];
    let arcs: Vec<Option<Span>> = (0..plan.edges.len()).map(|e| arc(plan, e)).collect();
    let ends: Vec<[Point; 2]> = plan.edges.iter().map(|e| [point(e.0), point(e.1)]).collect();
    let boxes: Vec<Item> = arcs.iter().zip(&ends).map(|(arc, ends)| item(arc.as_ref(), *ends)).collect();
    let tree = Tree::new(&boxes);
    let mut cuts = Vec::new();
    for (e, span) in arcs.iter().enumerate().filter_map(|(e, arc)| Some((e, arc.as_ref()?))) {
        tree.any(boxes[e].lo, boxes[e].hi, |f| {
            let f = f as usize;
            if f == e || !(stirred[e] || stirred[f]) || !in_the_way(plan, span, [e, f], tolerance) {
                return false;
            }
            let before = cuts.len();
            cuts.extend(ends[f].iter().filter_map(|&p| inner(span, p)).map(|t| (e, t)));
            if let Some(other) = &arcs[f] {
                cuts.extend(ends[e].iter().filter_map(|&p| inner(other, p)).map(|t| (f, t)));
            }
            if cuts.len() == before {
                cuts.push((e, 0.5));
            }
            false
        });
    }
    cuts.sort_by(|x, y| x.0.cmp(&y.0).then(x.1.total_cmp(&y.1)));
    cuts.dedup_by(|next, kept| next.0 == kept.0 && next.1 - kept.1 < LEAST_SHARE);
    cuts.into_iter().filter_map(|(e, t)| Some((e, arcs[e]?.at(t)))).collect()
}

/// Whether edge `f` crosses the chord of edge `e`, has an end between that chord and its arc `span`, or is a twin: another curve between the
/// same nodes.
fn in_the_way(plan: &Plan, span: &Span, [e, f]: [usize; 2], tolerance: f64) -> bool {
    let ((a, b, tag), (c, d, other)) = (plan.edges[e], plan.edges[f]);
    let drawn = |tag: u32| plan.tags[tag as usize - 1].ends.is_some();
    if [a, b] == [c, d] || [a, b] == [d, c] {
        return drawn(tag) && drawn(other);
    }
    let point = |v: u32| plan.points[v as usize];
    let between = |v: u32| v != a && v != b && under(span, point(v), tolerance);
    let apart = [a, b].iter().all(|v| *v != c && *v != d);
    between(c) || between(d) || apart && segments_meet([point(a), point(b)], [point(c), point(d)])
}

/// Parameter of the point of an arc opposite `p`, unless it is about an end.
fn inner(span: &Span, p: Point) -> Option<f64> {
    let t = span.project(p);
    (t > LEAST_SHARE && t < 1.0 - LEAST_SHARE).then_some(t)
}

/// Whether a point lies between an arc and its chord.
fn under(span: &Span, p: Point, tolerance: f64) -> bool {
    let Kind::Arc { centre, radius, .. } = span.kind else {
        return false;
    };
    let t = span.project(p);
    let beyond = orient(span.start, span.end, p) * orient(span.start, span.end, centre) <= 0.0;
    t > 0.0 && t < 1.0 && beyond && distance(p, centre) < radius - 1e-3 * tolerance
}

fn item(arc: Option<&Span>, [a, b]: [Point; 2]) -> Item {
    let chord = ([a[0].min(b[0]), a[1].min(b[1])], [a[0].max(b[0]), a[1].max(b[1])]);
    let (lo, hi) = arc.map_or(chord, Span::bounds);
    Item { lo, hi, weight: 0.0 }
}

/// Divides edges at the given points; which of the edges are new.
fn divide(plan: &mut Plan, cuts: Vec<(usize, Point)>) -> Vec<bool> {
    let old = std::mem::take(&mut plan.edges);
    let mut stirred = Vec::with_capacity(old.len() + cuts.len());
    let mut cuts = cuts.into_iter().peekable();
    for (e, (a, b, tag)) in old.into_iter().enumerate() {
        let mut from = a;
        while let Some((_, p)) = cuts.next_if(|cut| cut.0 == e) {
            plan.points.push(p);
            let to = plan.points.len() as u32 - 1;
            plan.edges.push((from, to, tag));
            from = to;
        }
        plan.edges.push((from, b, tag));
        stirred.resize(plan.edges.len(), from != a);
    }
    stirred
}
