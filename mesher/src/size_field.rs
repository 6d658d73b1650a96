//! Element size as a function of place: `h(x) = min(h_max, min_i h_i + g d_i(x))` over sources with size `h_i` at distance `d_i`.
//! Convention: metres; `g` is the gradation. Gaps between lines that do not touch cap the size along them, down to a floor.

use crate::drawing::{DOMAIN, Drawing, OUTSIDE};
use crate::ids::{Point, distance, dot, sub};
use crate::noding::{CUSP, Graph, Stretch};
use crate::span::{Kind, Span};
use crate::tree::{Item, Tree};

/// Smallest share of the wanted size that a narrow gap may force.
pub(crate) const GAP_FLOOR: f64 = 0.15;

/// A straight stretch along which the size is prescribed.
#[derive(Debug, Clone, Copy)]
pub(crate) struct SizeSource {
    pub(crate) ends: [Point; 2],
    pub(crate) size: f64,
}

#[derive(Debug, Clone)]
pub(crate) struct SizeField {
    tree: Tree,
    sources: Vec<SizeSource>,
    gradation: f64,
    largest: f64,
}

impl SizeField {
    pub(crate) fn new(sources: Vec<SizeSource>, gradation: f64, largest: f64) -> Self {
        let items: Vec<Item> = sources.iter().map(|s| item_of(s.ends, s.size)).collect();
        Self { tree: Tree::new(&items), sources, gradation, largest }
    }

    /// Size at a point, in metres.
    pub(crate) fn at(&self, p: Point) -> f64 {
        self.at_most(p, self.largest)
    }

    /// Size at a point that is known to be at most `bound`; a close bound makes it faster.
    pub(crate) fn at_most(&self, p: Point, bound: f64) -> f64 {
        self.without_cap(p, bound.min(self.largest))
    }

    /// What the sources ask for at a point, if under `limit`.
    pub(crate) fn without_cap(&self, p: Point, limit: f64) -> f64 {
        self.tree.least(p, self.gradation, limit, |i| {
            let source = &self.sources[i as usize];
            source.size + self.gradation * distance_to_segment(p, source.ends)
        })
    }

    pub(crate) fn gradation(&self) -> f64 {
        self.gradation
    }
}

fn item_of(ends: [Point; 2], weight: f64) -> Item {
    let [a, b] = ends;
    Item { lo: [a[0].min(b[0]), a[1].min(b[1])], hi: [a[0].max(b[0]), a[1].max(b[1])], weight }
}

fn distance_to_segment(p: Point, [a, b]: [Point; 2]) -> f64 {
    let (d, w) = (sub(b, a), sub(p, a));
    let whole = dot(d, d);
    let t = if whole > 0.0 { (dot(d, w) / whole).clamp(0.0, 1.0) } else { 0.0 };
    let e = [w[0] - t * d[0], w[1] - t * d[1]];
    dot(e, e).sqrt()
}

/// Size wanted along a stretch by what lies on its two sides and by its own shape.
pub(crate) fn wanted(drawing: &Drawing, stretch: &Stretch, max_turn: f64) -> f64 {
    let side = |side: u32| match drawing.region_of(side) {
        Some(region) if stretch.on_domain.is_some() => region.interior_size,
        Some(region) => region.surface_size.min(region.interior_size),
        None if side == DOMAIN => drawing.domain_size,
        None => f64::INFINITY,
    };
    let mut size = side(stretch.sides[0]).min(side(stretch.sides[1])).min(drawing.domain_size);
    let arc = matches!(stretch.span.kind, Kind::Arc { .. });
    if let (true, true, Some(boundary)) = (arc, stretch.sides.contains(&OUTSIDE), drawing.boundary_size) {
        size = size.min(boundary);
    }
    let own = drawing.line_sizes.iter().filter(|line| stretch.on_regions.contains(&(line.region, line.piece)));
    size = own.fold(size, |least, line| least.min(line.size));
    size.min(stretch.span.length() / f64::from(pieces_of_turn(&stretch.span, max_turn)))
}

/// Fewest edges on a span so that none turns by more than `max_turn` radians.
pub(crate) fn pieces_of_turn(span: &Span, max_turn: f64) -> u32 {
    ((span.turn() / max_turn - 1e-9).ceil() as u32).max(1)
}

/// Distance from one stretch to those that do not share a node with it.
pub(crate) struct Gaps<'a> {
    graph: &'a Graph,
    tree: Tree,
    owners: Vec<u32>,
}

impl<'a> Gaps<'a> {
    pub(crate) fn new(graph: &'a Graph) -> Self {
        let (mut items, mut owners) = (Vec::new(), Vec::new());
        for (i, stretch) in graph.stretches.iter().enumerate() {
            let n = (stretch.span.turn() / 0.4).ceil().max(1.0);
            for k in 0..n as usize {
                let (a, b) = (k as f64 / n, (k as f64 + 1.0) / n);
                let span = stretch.span.part(a, b, stretch.span.at(a), stretch.span.at(b));
                let (lo, hi) = span.bounds();
                items.push(Item { lo, hi, weight: 0.0 });
                owners.push(i as u32);
            }
        }
        Self { graph, tree: Tree::new(&items), owners }
    }

    /// Distance of `p`, a point of stretch `own`, from the nearest stretch apart from it, if under `limit`.
    pub(crate) fn at(&self, p: Point, own: usize, limit: f64) -> f64 {
        let ends = self.graph.stretches[own].ends;
        self.tree.least(p, 1.0, limit, |i| {
            let owner = self.owners[i as usize] as usize;
            let other = &self.graph.stretches[owner];
            if owner == own || other.ends.iter().any(|e| ends.contains(e)) {
                return f64::INFINITY;
            }
            other.span.distance(p)
        })
    }
}

/// Sources for one stretch: its wanted size, smaller wherever another line runs close by.
pub(crate) fn sources_of(index: usize, stretch: &Stretch, size: f64, gaps: &Gaps, out: &mut Vec<SizeSource>) {
    let length = stretch.span.length();
    let n = ((length / size).ceil() as usize).clamp(1, 2000).max((stretch.span.turn() / 0.2).ceil() as usize);
    let mut run: Option<SizeSource> = None;
    for k in 0..n {
        let at = |x: f64| stretch.span.at(x / n as f64);
        let ends = [at(k as f64), at(k as f64 + 1.0)];
        let sample = |x: f64| gaps.at(at(k as f64 + x), index, size);
        let gap = sample(0.0).min(sample(0.5)).min(sample(1.0));
        let here = gap.max(GAP_FLOOR * size).min(size);
        let straight = matches!(stretch.span.kind, Kind::Line);
        match &mut run {
            Some(last) if straight && last.size == here => last.ends[1] = ends[1],
            _ => {
                out.extend(run.take());
                run = Some(SizeSource { ends, size: here });
            }
        }
    }
    out.extend(run);
}

/// Small sizes at the tips of cusps, so that edges there stay short against the distance between the curves.
pub(crate) fn cusp_sources(graph: &Graph, sizes: &[f64]) -> Vec<SizeSource> {
    let source = |node: u32| {
        let incident = graph.stretches.iter().zip(sizes).filter(|(s, _)| s.ends.contains(&node));
        let size = incident.map(|(_, &size)| size).fold(f64::INFINITY, f64::min);
        SizeSource { ends: [graph.points[node as usize]; 2], size: GAP_FLOOR * size }
    };
    graph.cusps(CUSP).into_iter().map(source).collect()
}

/// Sources for every stretch of the drawing.
pub(crate) fn sources(graph: &Graph, sizes: &[f64], gaps: &Gaps) -> Vec<SizeSource> {
    let mut out = cusp_sources(graph, sizes);
    for (i, stretch) in graph.stretches.iter().enumerate() {
        sources_of(i, stretch, sizes[i], gaps, &mut out);
    }
    out
}

/// Parameters that divide a span between `from` and `to` into edges as long as `size` asks, the two ends included; at least
/// `fewest` edges.
pub(crate) fn divide(span: &Span, from: f64, to: f64, fewest: u32, size: impl Fn(f64) -> f64) -> Vec<f64> {
    let length = span.length();
    let whole = to - from;
    let mut marks = vec![(0.0, from)];
    let (mut count, mut t) = (0.0, from);
    let mut here = size(t);
    while to - t > 1e-12 * whole {
        let mut step = (0.3 * here / length).max(1e-4 * whole);
        if to - t < 1.5 * step {
            step = to - t;
        }
        let next = size(t + step);
        count += step * length * 2.0 / (here + next);
        t += step;
        here = next;
        marks.push((count, t));
    }
    let n = (count - 0.05).ceil().max(f64::from(fewest)).max(1.0) as usize;
    let mut out = vec![from];
    let mut j = 0;
    for k in 1..n {
        let share = count * k as f64 / n as f64;
        while marks[j + 1].0 < share {
            j += 1;
        }
        let ((c0, t0), (c1, t1)) = (marks[j], marks[j + 1]);
        out.push(t0 + (t1 - t0) * (share - c0) / (c1 - c0));
    }
    out.push(to);
    out
}

/// Whether two points coincide within a tolerance.
pub(crate) fn same(a: Point, b: Point, tolerance: f64) -> bool {
    distance(a, b) <= tolerance
}
