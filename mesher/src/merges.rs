//! What noding made one: points too close to tell apart, lines divided where they meet, stretches common to two outlines. Convention:
//! metres; an outline is the domain's or that of a region, by its index in the drawing.

use crate::drawing::Drawing;
use crate::ids::{Point, RegionId, distance};
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

/// Merges as they happen.
#[derive(Debug)]
pub(crate) struct Record {
    /// The outline that placed each node.
    owners: Vec<OutlineOf>,
    merges: Vec<Merge>,
    domain_region: RegionId,
    regions: Vec<RegionId>,
    tolerance: f64,
    rounding: f64,
}

impl Record {
    pub(crate) fn new(drawing: &Drawing, tolerance: f64) -> Self {
        Self {
            owners: Vec::new(),
            merges: Vec::new(),
            domain_region: drawing.domain_region,
            regions: drawing.regions.iter().map(|r| r.id).collect(),
            tolerance,
            rounding: ROUNDING * drawing.extent(),
        }
    }

    /// Distance under which two points are one, in metres.
    pub(crate) fn tolerance(&self) -> f64 {
        self.tolerance
    }

    /// An outline placed a node, or was given one that is there.
    pub(crate) fn placed(&mut self, outline: OutlineOf, node: u32) {
        if node as usize == self.owners.len() {
            self.owners.push(outline);
        }
    }

    /// A corner of an outline became a node.
    pub(crate) fn corner(&mut self, outline: OutlineOf, wanted: Point, node: u32, at: Point) {
        let moved_m = distance(wanted, at);
        if moved_m > self.rounding {
            self.moved(outline, node, at, MergeKind::CornerMoved { moved_m });
        } else if let Some(owner) = self.owners.get_mut(node as usize).filter(|o| **o == OutlineOf::Domain) {
            // A corner that stands on the edge of the domain says more than the edge.
            *owner = outline;
        }
    }

    /// A piece of an outline was made to pass through a node between its ends.
    pub(crate) fn passes(&mut self, outline: OutlineOf, span: &Span, node: u32, at: Point) {
        let moved_m = span.distance(at);
        if moved_m > self.rounding {
            self.moved(outline, node, at, MergeKind::LineMoved { moved_m });
        }
    }

    fn moved(&mut self, outline: OutlineOf, node: u32, at: Point, kind: MergeKind) {
        let other = self.owners.get(node as usize).copied().unwrap_or(outline);
        self.add(at, [outline, other], kind);
    }

    fn add(&mut self, at: Point, outlines: [OutlineOf; 2], kind: MergeKind) {
        let regions = outlines.map(|of| match of {
            OutlineOf::Domain => self.domain_region,
            OutlineOf::Region(index) => self.regions[index],
        });
        self.merges.push(Merge { at, outlines, regions, kind });
    }

    /// Two spans meet at a point that is not an end of both.
    pub(crate) fn meeting(&mut self, (a, b): (OutlineOf, OutlineOf), (s, t): (&Span, &Span), at: Point) {
        let end = |span: &Span| distance(span.start, at).min(distance(span.end, at)) <= 2.0 * self.tolerance;
        if a != b && !(end(s) && end(t)) {
            self.add(at, [b, a], MergeKind::Divided);
        }
    }

    /// A stretch of an outline is one that another outline has brought.
    pub(crate) fn shared(&mut self, outline: OutlineOf, other: OutlineOf, span: &Span) {
        if outline != other {
            self.add(span.at(0.5), [outline, other], MergeKind::Shared { length_m: span.length() });
        }
    }

    /// The merges inside the domain or on its outline, each once.
    pub(crate) fn finish(self, drawing: &Drawing) -> Vec<Merge> {
        let near = 2.0 * self.tolerance;
        let inside = |m: &Merge| drawing.domain.contains(m.at) || drawing.domain.distance(m.at) <= near;
        let mut kept: Vec<Merge> = Vec::new();
        for merge in self.merges.into_iter().filter(inside) {
            let same = |k: &Merge| k.outlines == merge.outlines && k.kind == merge.kind;
            if !kept.iter().any(|k| same(k) && distance(k.at, merge.at) <= near) {
                kept.push(merge);
            }
        }
        kept
    }
}
