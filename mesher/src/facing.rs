//! Vertices that face each other across a narrow gap or a thin wall: what one line has already, the other gets opposite to it, so that
//! the gap is filled by right-angled triangles instead of slivers. Convention: parameters along a span as in [`crate::span`].

use crate::ids::{Point, distance};
use crate::noding::{Graph, Stretch};
use crate::size_field::Gaps;
use crate::span::Span;

/// A gap is narrow if it is less than this share of the element size along it.
pub(crate) const NARROW: f64 = 0.5;
/// Vertices along a line are no closer than this share of the size because of what faces them.
const CLOSEST: f64 = 0.35;
/// A vertex this close to one that faces another, as a share of the size, is replaced by it.
const REPLACED: f64 = 0.75;

/// The vertices placed so far, by stretch; the nodes of the drawing from the start.
pub(crate) struct Facing<'a> {
    graph: &'a Graph,
    gaps: &'a Gaps<'a>,
    boxes: Vec<(Point, Point)>,
    placed: Vec<Vec<Point>>,
}

impl<'a> Facing<'a> {
    pub(crate) fn new(graph: &'a Graph, gaps: &'a Gaps<'a>) -> Self {
        let boxes = graph.stretches.iter().map(|s| s.span.bounds()).collect();
        let placed = graph.stretches.iter().map(|s| vec![s.span.start, s.span.end]).collect();
        Self { graph, gaps, boxes, placed }
    }

    /// Remembers the vertices of a stretch.
    pub(crate) fn place(&mut self, index: usize, points: impl Iterator<Item = Point>) {
        self.placed[index] = points.collect();
    }

    /// Moves the inner `marks` of stretch `index` opposite to what faces them across narrow gaps. `size` is the element size at a
    /// parameter; the first and last mark stay.
    pub(crate) fn match_marks(&self, index: usize, marks: &mut Vec<f64>, size: impl Fn(f64) -> f64) {
        let (first, last) = (marks[0], marks[marks.len() - 1]);
        let opposite = self.opposite(index, marks, &size);
        if opposite.is_empty() {
            return;
        }
        let length = self.graph.stretches[index].span.length();
        let mut matched: Vec<f64> = Vec::new();
        for t in opposite {
            let closest = CLOSEST * size(t) / length;
            let before = matched.last().copied().unwrap_or(first);
            if t - before > closest && last - t > closest {
                matched.push(t);
            }
        }
        let free = |m: f64| {
            let near = REPLACED * size(m) / length;
            let next = matched.partition_point(|&t| t < m);
            let apart = |k: usize| matched.get(k).is_none_or(|t| (t - m).abs() > near);
            apart(next) && (next == 0 || apart(next - 1))
        };
        let kept: Vec<f64> = marks[1..marks.len() - 1].iter().copied().filter(|&m| free(m)).collect();
        marks.splice(1..marks.len() - 1, kept.into_iter().chain(matched.iter().copied()));
        marks.sort_by(f64::total_cmp);
    }

    /// Parameters on a stretch between its first and last mark that face a vertex of another stretch, in order.
    fn opposite(&self, index: usize, marks: &[f64], size: &impl Fn(f64) -> f64) -> Vec<f64> {
        let own = &self.graph.stretches[index];
        let (first, last) = (marks[0], marks[marks.len() - 1]);
        let reach = NARROW * marks.iter().map(|&t| size(t)).fold(0.0, f64::max);
        let (lo, hi) = self.boxes[index];
        let within = |p: &Point| (0..2).all(|k| p[k] >= lo[k] - reach && p[k] <= hi[k] + reach);
        let mut found = Vec::new();
        for (k, other) in self.graph.stretches.iter().enumerate() {
            let (a, b) = self.boxes[k];
            let far = (0..2).any(|i| a[i] > hi[i] + reach || b[i] < lo[i] - reach);
            if far || k == index || own.ends.iter().any(|e| other.ends.contains(e)) {
                continue;
            }
            let near = self.placed[k].iter().filter(|p| within(p));
            found.extend(near.filter_map(|&p| self.facing(own, k, p, size)).filter(|&t| t > first && t < last));
        }
        found.sort_by(f64::total_cmp);
        found
    }

    /// Where on a stretch a vertex of stretch `other` has its nearest point, if nothing is nearer to it and the gap is narrow.
    fn facing(&self, own: &Stretch, other: usize, p: Point, size: &impl Fn(f64) -> f64) -> Option<f64> {
        let span: &Span = &own.span;
        let t = span.project(p);
        let gap = distance(p, span.at(t));
        let narrow = gap < NARROW * size(t);
        (narrow && self.gaps.at(p, other, gap) >= gap * (1.0 - 1e-9)).then_some(t)
    }
}
