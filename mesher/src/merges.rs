//! What noding made one: points too close to tell apart, lines divided where they meet, stretches common to two outlines. Found by
//! comparing the noded graph with the outlines as they were drawn. Convention: metres; an outline is the domain's or that of a region,
//! by its index in the drawing.

use crate::drawing::Drawing;
use crate::ids::{Point, RegionId, distance};
use crate::noding::{Graph, Stretch};
use crate::span::Span;

/// Share of the domain's extent under which two points differ by rounding alone.
const ROUNDING: f64 = 1e-13;

/// An outline of a drawing.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum OutlineOf {
    /// That of the domain.
    Domain,
    /// That of a region, by its index in the drawing.
    Region(usize),
}

/// One thing that two outlines have in common, or were made to have.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Merge {
    /// Where; the middle of a common stretch.
    pub at: Point,
    /// The outline that gave way and the one it was brought to; of equals, the earlier one second.
    pub outlines: [OutlineOf; 2],
    /// Identities of the regions of the two; for the outline of the domain that of the domain.
    pub regions: [RegionId; 2],
    /// What was done.
    pub kind: MergeKind,
}

/// What was done where two outlines meet.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum MergeKind {
    /// A corner was moved onto a point too close to tell apart.
    CornerMoved {
        /// How far, in metres.
        moved_m: f64,
    },
    /// A line or arc that passed too close by a point was bent to pass through it.
    LineMoved {
        /// How far, in metres.
        moved_m: f64,
    },
    /// Lines that cross or touch were divided there; nothing moved.
    Divided,
    /// A stretch that both outlines have is in the mesh once.
    Shared {
        /// Its length, in metres.
        length_m: f64,
    },
}

impl MergeKind {
    /// How far something was moved, in metres; zero where nothing was.
    pub fn moved_m(self) -> f64 {
        match self {
            Self::CornerMoved { moved_m } | Self::LineMoved { moved_m } => moved_m,
            Self::Divided | Self::Shared { .. } => 0.0,
        }
    }
}

/// An outline at a node.
#[derive(Debug, Clone, Copy)]
struct Touch {
    outline: OutlineOf,
    /// Whether the node is a corner of the outline or lies between the ends of one of its pieces.
    corner: bool,
    /// How far the outline was moved to the node, in metres.
    moved_m: f64,
}

/// What the outlines of a drawing have in common in its noded graph, or were made to have; node by node, then stretch by stretch.
pub(crate) fn merges(drawing: &Drawing, graph: &Graph) -> Vec<Merge> {
    let rounding = ROUNDING * drawing.extent();
    let mut at_node: Vec<Vec<Touch>> = vec![Vec::new(); graph.points.len()];
    for stretch in &graph.stretches {
        for node in stretch.ends {
            let p = graph.points[node as usize];
            for (outline, span) in outlines(drawing, stretch) {
                add(&mut at_node[node as usize], touch(outline, span, p, 4.0 * graph.tolerance));
            }
        }
    }
    let mut found = Vec::new();
    for (touches, &at) in at_node.iter_mut().zip(&graph.points) {
        touches.sort_by_key(|t| t.outline);
        moves(touches, at, rounding, &mut found);
        divisions(touches, at, &mut found);
    }
    for stretch in &graph.stretches {
        let mut both: Vec<OutlineOf> = outlines(drawing, stretch).map(|o| o.0).collect();
        both.sort_unstable();
        both.dedup();
        let kind = MergeKind::Shared { length_m: stretch.span.length() };
        found.extend(both.iter().skip(1).map(|&other| (stretch.span.at(0.5), [other, both[0]], kind)));
    }
    let id = |of: OutlineOf| match of {
        OutlineOf::Domain => drawing.domain_region,
        OutlineOf::Region(index) => drawing.regions[index].id,
    };
    found.into_iter().map(|(at, outlines, kind)| Merge { at, outlines, regions: outlines.map(id), kind }).collect()
}

type Found = (Point, [OutlineOf; 2], MergeKind);

/// The outlines that run along a stretch, with the piece of each as it was drawn.
fn outlines<'a>(drawing: &'a Drawing, stretch: &'a Stretch) -> impl Iterator<Item = (OutlineOf, &'a Span)> {
    let domain = stretch.on_domain.map(|piece| (OutlineOf::Domain, &drawing.domain.spans()[piece]));
    let of_region =
        |&(index, piece): &(usize, usize)| (OutlineOf::Region(index), &drawing.regions[index].outline.spans()[piece]);
    domain.into_iter().chain(stretch.on_regions.iter().map(of_region))
}

fn touch(outline: OutlineOf, span: &Span, p: Point, near: f64) -> Touch {
    let to_end = distance(span.start, p).min(distance(span.end, p));
    let corner = to_end <= near;
    Touch { outline, corner, moved_m: if corner { to_end } else { span.distance(p) } }
}

/// Adds a touch unless that outline is there; a corner counts more than a line.
fn add(touches: &mut Vec<Touch>, new: Touch) {
    match touches.iter_mut().find(|t| t.outline == new.outline) {
        Some(known) if new.corner && !known.corner => *known = new,
        Some(_) => {}
        None => touches.push(new),
    }
}

/// Outlines that were moved to a node, each with one that was there: a region says more than the edge of the domain.
fn moves(touches: &[Touch], at: Point, rounding: f64, found: &mut Vec<Found>) {
    let stays = |t: &&Touch| t.moved_m <= rounding;
    let region = touches.iter().find(|t| stays(t) && t.outline != OutlineOf::Domain);
    let owner = region.or_else(|| touches.iter().find(stays));
    for moved in touches.iter().filter(|t| t.moved_m > rounding) {
        let other = owner.or_else(|| touches.iter().find(|t| t.outline != moved.outline));
        let moved_m = moved.moved_m;
        let kind = if moved.corner { MergeKind::CornerMoved { moved_m } } else { MergeKind::LineMoved { moved_m } };
        found.push((at, [moved.outline, other.unwrap_or(moved).outline], kind));
    }
}

/// Pairs of outlines that meet at a node which is not a corner of both.
fn divisions(touches: &[Touch], at: Point, found: &mut Vec<Found>) {
    for (i, later) in touches.iter().enumerate() {
        let divided = touches[..i].iter().filter(|earlier| !(earlier.corner && later.corner));
        found.extend(divided.map(|earlier| (at, [later.outline, earlier.outline], MergeKind::Divided)));
    }
}
