//! From overlapping outlines to a plane graph: every crossing and touching becomes a node, coincident stretches become one, what is
//! outside the domain or painted over is dropped. Convention: two points closer than 1e-9 of the domain's extent are one. Merging moves
//! lines a little, so what they meet then is noded again until nothing new is met.

use crate::drawing::{Drawing, OUTSIDE};
use crate::ids::{Point, cross, distance, dot};
use crate::intersect::meetings;
use crate::sides::{Run, sides};
use crate::span::{Kind, Span};
use std::collections::HashMap;

/// Two curves that leave a node under a smaller angle, in radians, make a cusp.
pub(crate) const CUSP: f64 = 0.05;
/// Most rounds of noding again what merging has moved.
const ROUNDS: usize = 12;

/// One stretch of the drawing between two nodes.
#[derive(Debug, Clone)]
pub(crate) struct Stretch {
    pub(crate) span: Span,
    /// Node indices of start and end.
    pub(crate) ends: [u32; 2],
    /// What is to the left and to the right: see [`crate::drawing`].
    pub(crate) sides: [u32; 2],
    pub(crate) on_domain: Option<usize>,
    /// (region index, piece index) of every outline that runs here.
    pub(crate) on_regions: Vec<(usize, usize)>,
    /// Every outline that runs here, and which way.
    pub(crate) runs: Vec<Run>,
}

/// The noded drawing.
#[derive(Debug, Clone)]
pub(crate) struct Graph {
    pub(crate) points: Vec<Point>,
    pub(crate) stretches: Vec<Stretch>,
    /// Distance under which two points are one, in metres.
    pub(crate) tolerance: f64,
}

struct Source {
    span: Span,
    domain_piece: Option<usize>,
    region_piece: Option<(usize, usize)>,
}

/// Points merged within a tolerance; first come, first kept.
struct Nodes {
    points: Vec<Point>,
    cells: HashMap<(i64, i64), Vec<u32>>,
    origin: Point,
    tolerance: f64,
}

impl Nodes {
    fn place(&mut self, p: Point) -> u32 {
        let cell = |x: f64, o: f64| ((x - o) / (4.0 * self.tolerance)).floor() as i64;
        let (i, j) = (cell(p[0], self.origin[0]), cell(p[1], self.origin[1]));
        for (a, b) in (-1..=1).flat_map(|a| (-1..=1).map(move |b| (i + a, j + b))) {
            let near = self.cells.get(&(a, b)).into_iter().flatten();
            for &id in near {
                if distance(self.points[id as usize], p) <= 2.0 * self.tolerance {
                    return id;
                }
            }
        }
        let id = self.points.len() as u32;
        self.points.push(p);
        self.cells.entry((i, j)).or_default().push(id);
        id
    }
}

/// Nodes a drawing.
pub(crate) fn node(drawing: &Drawing) -> Graph {
    let tolerance = 1e-9 * drawing.extent();
    let sources = sources(drawing);
    let mut nodes = Nodes { points: Vec::new(), cells: HashMap::new(), origin: drawing.domain.bounds().0, tolerance };
    let mut cuts = cut(&sources, tolerance);
    place_on_domain(&sources, &cuts, &mut nodes);
    for source in &sources {
        nodes.place(source.span.start);
    }
    settle(&sources, &mut cuts, &mut nodes);
    let mut stretches = Vec::new();
    let mut known: HashMap<[u32; 2], Vec<usize>> = HashMap::new();
    for (source, cuts) in sources.iter().zip(&cuts) {
        for part in parts(source, cuts, &mut nodes) {
            add(drawing, part, source, tolerance, &mut stretches, &mut known);
        }
    }
    for stretch in &mut stretches {
        stretch.sides = sides(drawing, &stretch.span, &stretch.runs, tolerance);
    }
    stretches.retain(|s| s.sides[0] != s.sides[1]);
    let points = keep_used(&nodes.points, &mut stretches);
    Graph { points, stretches, tolerance }
}

impl Graph {
    /// Nodes at which two stretches, one of them an arc, leave under a smaller angle than `limit` radians.
    pub(crate) fn cusps(&self, limit: f64) -> Vec<u32> {
        let mut leaving: Vec<(u32, Point, bool)> = Vec::new();
        for s in &self.stretches {
            let arc = matches!(s.span.kind, Kind::Arc { .. });
            let back = s.span.tangent(1.0);
            leaving.push((s.ends[0], s.span.tangent(0.0), arc));
            leaving.push((s.ends[1], [-back[0], -back[1]], arc));
        }
        leaving.sort_by_key(|l| l.0);
        let mut cusps = Vec::new();
        for group in leaving.chunk_by(|a, b| a.0 == b.0) {
            let sharp = |a: &(u32, Point, bool), b: &(u32, Point, bool)| {
                (a.2 || b.2) && dot(a.1, b.1) > 0.0 && cross(a.1, b.1).abs() < limit
            };
            if (1..group.len()).any(|i| group[..i].iter().any(|a| sharp(a, &group[i]))) {
                cusps.push(group[0].0);
            }
        }
        cusps
    }
}

/// Drops nodes at which no stretch ends, and renumbers the rest in the order they are used.
fn keep_used(points: &[Point], stretches: &mut [Stretch]) -> Vec<Point> {
    let mut number = vec![u32::MAX; points.len()];
    let mut kept = Vec::new();
    for end in stretches.iter_mut().flat_map(|s| s.ends.iter_mut()) {
        let old = *end as usize;
        if number[old] == u32::MAX {
            number[old] = kept.len() as u32;
            kept.push(points[old]);
        }
        *end = number[old];
    }
    kept
}

/// Places the corners of the domain, then what meets its outline exactly on it: nothing may lie a rounding error outside.
fn place_on_domain(sources: &[Source], cuts: &[Vec<Point>], nodes: &mut Nodes) {
    let domain = || sources.iter().zip(cuts).filter(|(s, _)| s.domain_piece.is_some());
    for (source, _) in domain() {
        nodes.place(source.span.start);
    }
    for (source, cuts) in domain() {
        for &p in cuts {
            nodes.place(source.span.at(source.span.project(p)));
        }
    }
}

fn sources(drawing: &Drawing) -> Vec<Source> {
    let domain = drawing.domain.spans().iter().enumerate();
    let mut all: Vec<Source> =
        domain.map(|(i, &span)| Source { span, domain_piece: Some(i), region_piece: None }).collect();
    for (k, region) in drawing.regions.iter().enumerate() {
        let pieces = region.outline.spans().iter().enumerate();
        all.extend(pieces.map(|(i, &span)| Source { span, domain_piece: None, region_piece: Some((k, i)) }));
    }
    all
}

/// Points at which each source is to be cut, its own ends included.
fn cut(sources: &[Source], tolerance: f64) -> Vec<Vec<Point>> {
    let mut cuts: Vec<Vec<Point>> = sources.iter().map(|s| vec![s.span.start, s.span.end]).collect();
    let boxes: Vec<_> = sources.iter().map(|s| s.span.bounds()).collect();
    for i in 0..sources.len() {
        for j in i + 1..sources.len() {
            let ((a, b), (c, d)) = (boxes[i], boxes[j]);
            if (0..2).any(|k| a[k] > d[k] + 2.0 * tolerance || c[k] > b[k] + 2.0 * tolerance) {
                continue;
            }
            for point in meetings(&sources[i].span, &sources[j].span, 2.0 * tolerance) {
                cuts[i].push(point);
                cuts[j].push(point);
            }
        }
    }
    cuts
}

/// Adds the cuts that merging has made necessary: where a part of a source, its ends on their nodes, meets another or a node.
fn settle(sources: &[Source], cuts: &mut [Vec<Point>], nodes: &mut Nodes) {
    let reach = 2.0 * nodes.tolerance;
    let mut stirred = vec![true; sources.len()];
    for _ in 0..ROUNDS {
        let all: Vec<(usize, Span, [u32; 2])> = sources
            .iter()
            .zip(cuts.iter())
            .enumerate()
            .flat_map(|(i, (source, cuts))| parts(source, cuts, nodes).into_iter().map(move |p| (i, p.0, p.1)))
            .collect();
        let boxes: Vec<_> = all.iter().map(|part| part.1.bounds()).collect();
        let mut next = vec![false; sources.len()];
        for (i, j) in (0..all.len()).flat_map(|i| (i + 1..all.len()).map(move |j| (i, j))) {
            let ((a, b), (c, d)) = (boxes[i], boxes[j]);
            let apart = (0..2).any(|k| a[k] > d[k] + reach || c[k] > b[k] + reach);
            let (one, two) = (&all[i], &all[j]);
            if apart || !(stirred[one.0] || stirred[two.0]) {
                continue;
            }
            for point in meetings(&one.1, &two.1, reach) {
                let node = nodes.place(point);
                if let Some(domain) =
                    [one, two].iter().find(|p| sources[p.0].domain_piece.is_some() && !p.2.contains(&node))
                {
                    // The outline of the domain stays where it is.
                    let span = &sources[domain.0].span;
                    nodes.points[node as usize] = span.at(span.project(nodes.points[node as usize]));
                }
                for (source, _, ends) in [one, two] {
                    if !ends.contains(&node) {
                        cuts[*source].push(nodes.points[node as usize]);
                        next[*source] = true;
                    }
                }
            }
        }
        stirred = next;
        if !stirred.contains(&true) {
            return;
        }
    }
}

/// The stretches of a source between successive nodes.
fn parts(source: &Source, cuts: &[Point], nodes: &mut Nodes) -> Vec<(Span, [u32; 2])> {
    let span = &source.span;
    let mut stops: Vec<(f64, u32)> = cuts
        .iter()
        .enumerate()
        .map(|(i, &p)| (if i < 2 { i as f64 } else { span.project(p) }, nodes.place(p)))
        .collect();
    stops.sort_by(|a, b| a.0.total_cmp(&b.0).then(a.1.cmp(&b.1)));
    // A long way back to the same node is a loop of its own: it gets a node half way.
    let short = |a: f64, b: f64| (b - a) * span.length() <= 16.0 * nodes.tolerance;
    stops.dedup_by(|b, a| a.1 == b.1 && short(a.0, b.0));
    for k in (1..stops.len()).rev() {
        if stops[k - 1].1 == stops[k].1 {
            let half = 0.5 * (stops[k - 1].0 + stops[k].0);
            stops.insert(k, (half, nodes.place(span.at(half))));
        }
    }
    stops
        .windows(2)
        .map(|pair| {
            let [(a, i), (b, j)] = [pair[0], pair[1]];
            let (start, end) = (nodes.points[i as usize], nodes.points[j as usize]);
            (span.part(a, b, start, end), [i, j])
        })
        .collect()
}

/// Adds a stretch, or the name of its source to a coincident one; drops it outside the domain.
fn add(
    drawing: &Drawing,
    (span, ends): (Span, [u32; 2]),
    source: &Source,
    tolerance: f64,
    stretches: &mut Vec<Stretch>,
    known: &mut HashMap<[u32; 2], Vec<usize>>,
) {
    let key = [ends[0].min(ends[1]), ends[0].max(ends[1])];
    let middle = span.at(0.5);
    let region = source.region_piece.map(|piece| piece.0);
    let same = known.entry(key).or_default();
    for &i in same.iter() {
        let other: &mut Stretch = &mut stretches[i];
        if distance(other.span.at(0.5), middle) <= 3.0 * tolerance {
            if let Some(piece) = source.region_piece
                && !other.on_regions.contains(&piece)
            {
                other.on_regions.push(piece);
            }
            other.runs.push(Run { region, forward: other.ends == ends });
            return;
        }
    }
    if source.domain_piece.is_none() && !drawing.domain.contains(middle) {
        return;
    }
    same.push(stretches.len());
    stretches.push(Stretch {
        span,
        ends,
        sides: [OUTSIDE; 2],
        on_domain: source.domain_piece,
        on_regions: source.region_piece.into_iter().collect(),
        runs: vec![Run { region, forward: true }],
    });
}
