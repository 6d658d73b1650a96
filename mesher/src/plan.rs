//! What is handed to the triangulation: points, constrained edges with their tags, and the cells of the strips. Convention: nodes of the
//! drawing come first; a tag is 1 + the index of its entry; stretches come first among the tags.

use crate::drawing::Drawing;
use crate::facing::Facing;
use crate::ids::Point;
use crate::layers::Strips;
use crate::noding::Graph;
use crate::size_field::{SizeField, divide, pieces_of_turn};
use crate::span::Kind;

/// What a constrained edge is part of.
#[derive(Debug, Clone, Default)]
pub(crate) struct Tag {
    /// End nodes and sides of a stretch of the drawing; none for strip edges.
    pub(crate) ends: Option<[u32; 2]>,
    pub(crate) sides: Option<[u32; 2]>,
    /// Circle it lies on.
    pub(crate) circle: Option<(Point, f64)>,
    /// Centre about which its inner nodes are placed in polar coordinates, for strip edges that are not arcs.
    pub(crate) pole: Option<Point>,
}

/// A cell of a strip: a triangle or quadrilateral of which the refinement keeps off.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Cell {
    /// Its vertices, counter-clockwise; a triangle repeats the last.
    pub(crate) corners: [u32; 4],
    /// Centre of the arcs it lies between, if it does.
    pub(crate) pole: Option<Point>,
}

#[derive(Debug, Clone, Default)]
pub(crate) struct Plan {
    pub(crate) points: Vec<Point>,
    pub(crate) nodes: usize,
    /// Start, end and tag; for stretches in their direction of travel.
    pub(crate) edges: Vec<(u32, u32, u32)>,
    pub(crate) tags: Vec<Tag>,
    pub(crate) cells: Vec<Cell>,
}

/// What a plan follows.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Wishes<'a> {
    pub(crate) drawing: &'a Drawing,
    pub(crate) graph: &'a Graph,
    pub(crate) field: &'a SizeField,
    /// Largest turn of an edge along an arc, in radians.
    pub(crate) max_turn: f64,
}

impl Plan {
    pub(crate) fn new(wishes: &Wishes, strips: Strips, mut facing: Facing) -> Self {
        let graph = wishes.graph;
        let mut plan = Self { points: graph.points.clone(), nodes: graph.points.len(), ..Self::default() };
        plan.points.extend(&strips.points);
        for (i, stretch) in graph.stretches.iter().enumerate() {
            let circle = match stretch.span.kind {
                Kind::Line => None,
                Kind::Arc { centre, radius, .. } => Some((centre, radius)),
            };
            plan.tags.push(Tag { ends: Some(stretch.ends), sides: Some(stretch.sides), circle, pole: None });
            let chain = match &strips.divisions[i] {
                Some(fixed) => fixed.clone(),
                None => plan.divide(wishes, i, &strips, &mut facing),
            };
            plan.edges.extend(chain.windows(2).map(|e| (e[0], e[1], i as u32 + 1)));
        }
        let first = plan.tags.len() as u32;
        plan.tags.extend(strips.tags);
        plan.edges.extend(strips.edges.iter().map(|&(a, b, tag)| (a, b, first + tag + 1)));
        plan.cells = strips.cells;
        plan
    }

    /// Vertices along a stretch that no strip divides, through those a strip has put on it.
    fn divide(&mut self, wishes: &Wishes, index: usize, strips: &Strips, facing: &mut Facing) -> Vec<u32> {
        let Wishes { drawing, graph, field, max_turn } = *wishes;
        let stretch = &graph.stretches[index];
        let cap = stretch.sides.iter().fold(drawing.domain_size, |least, &side| {
            drawing.region_of(side).map_or(least, |r| least.min(r.interior_size))
        });
        let [head, tail] = &strips.pins[index];
        let mut chain = vec![stretch.ends[0]];
        chain.extend(head.iter().map(|pin| pin.1));
        let from = head.last().map_or(0.0, |pin| pin.0);
        let to = tail.last().map_or(1.0, |pin| pin.0);
        let span = &stretch.span;
        let fewest = (f64::from(pieces_of_turn(span, max_turn)) * (to - from)).ceil() as u32;
        let mut marks = divide(span, from, to, fewest, |t| field.at(span.at(t)).min(cap));
        facing.match_marks(index, &mut marks, |t| field.at(span.at(t)));
        for &t in &marks[1..marks.len() - 1] {
            self.points.push(span.at(t));
            chain.push(self.points.len() as u32 - 1);
        }
        chain.extend(tail.iter().rev().map(|pin| pin.1));
        chain.push(stretch.ends[1]);
        facing.place(index, chain.iter().map(|&v| self.points[v as usize]));
        chain
    }
}
