//! From columns to points, constrained edges and cells. Convention: cells counter-clockwise.

use super::Strips;
use super::columns::{Chain, Column};
use super::junction::Style;
use crate::ids::{Point, distance};
use crate::noding::Graph;
use crate::plan::{Cell, Tag};
use crate::size_field::SizeSource;
use crate::span::Kind;
use std::collections::HashMap;

/// A constrained edge of a strip and the columns it hangs on.
#[derive(Debug, Clone, Copy)]
pub(super) struct StripEdge {
    pub(super) ends: [u32; 2],
    pub(super) chain: usize,
    pub(super) columns: [usize; 2],
}

/// A cell as its corner vertices; triangles repeat the last.
#[derive(Debug, Clone, Copy)]
pub(super) struct StripCell {
    pub(super) corners: [u32; 4],
    pub(super) chain: usize,
    pub(super) columns: [usize; 2],
}

/// The strips, and what the guard needs to know of them.
pub(super) struct Emitted {
    pub(super) result: Strips,
    pub(super) edges: Vec<StripEdge>,
    pub(super) cells: Vec<StripCell>,
    /// Surface edges with a strip on at least one side.
    pub(super) covered: Vec<(u32, u32)>,
}

struct Emitter<'a> {
    graph: &'a Graph,
    out: Emitted,
    rings: HashMap<(usize, usize, bool), u32>,
    poles: HashMap<[u64; 2], u32>,
}

/// Emits all chains on top of the divided surfaces in `bare`.
pub(super) fn emit(graph: &Graph, chains: &[Chain], bare: &Strips) -> Emitted {
    let result = Strips {
        points: bare.points.clone(),
        divisions: bare.divisions.clone(),
        pins: bare.pins.clone(),
        tags: vec![Tag::default()],
        bare: bare.bare.clone(),
        notes: bare.notes.clone(),
        ..Strips::default()
    };
    let out = Emitted { result, edges: Vec::new(), cells: Vec::new(), covered: Vec::new() };
    let mut emitter = Emitter { graph, out, rings: HashMap::new(), poles: HashMap::new() };
    let mut shared = HashMap::new();
    for (c, chain) in chains.iter().enumerate() {
        let ids: Vec<Vec<u32>> = chain.columns.iter().map(|col| emitter.place(chain, col, &mut shared)).collect();
        emitter.pin(chain, &ids);
        for (i, id) in ids.iter().enumerate() {
            for w in id.windows(2) {
                emitter.edge([w[0], w[1]], 0, c, [i, i]);
            }
        }
        for k in 0..chain.pairs.len() {
            emitter.fill(c, chain, k, &ids);
        }
    }
    emitter.out
}

/// (region, junction node, level): where two columns share an apex.
type Apex = (usize, u32, usize);

impl Emitter<'_> {
    fn place(&mut self, chain: &Chain, column: &Column, shared: &mut HashMap<Apex, u32>) -> Vec<u32> {
        let mut ids = vec![column.base];
        for level in 1..=column.height {
            let p = column.points[level];
            let step = column.steps.iter().find(|s| s.level == level && level == column.height);
            let id = match step {
                Some(s) => {
                    let key = (chain.region, chain.whole.uses[s.junction].start, level);
                    *shared.entry(key).or_insert_with(|| self.out.result.add_point(self.graph, p))
                }
                None => self.out.result.add_point(self.graph, p),
            };
            ids.push(id);
        }
        ids
    }

    /// Puts the points of a strip that lie on the domain outline on its stretches.
    fn pin(&mut self, chain: &Chain, ids: &[Vec<u32>]) {
        for (i, column) in chain.columns.iter().enumerate() {
            if let Some(stretch) = column.along {
                self.pin_run(stretch, column.base, &ids[i][1..]);
            }
        }
        let n = chain.whole.uses.len();
        for (k, junction) in chain.whole.junctions.iter().enumerate() {
            let (before, after) = (&chain.whole.uses[(k + n - 1) % n], &chain.whole.uses[k]);
            let outline = [before, after].into_iter().find(|u| u.bare);
            let Some(outline) = outline.filter(|_| junction.style == Style::Steps) else {
                continue;
            };
            let top_at = |level: usize| {
                let step = |c: &Column| c.steps.iter().any(|s| s.junction == k && s.level == level);
                chain.columns.iter().position(|c| c.height == level && step(c)).map(|c| ids[c][level])
            };
            let run: Vec<u32> = (1..junction.apex.len()).map_while(top_at).collect();
            if !run.is_empty() {
                self.pin_run(outline.stretch, after.start, &run);
            }
        }
    }

    fn pin_run(&mut self, stretch: usize, from: u32, run: &[u32]) {
        let s = &self.graph.stretches[stretch];
        let at_end = usize::from(s.ends[0] != from);
        let pins = run.iter().map(|&id| (s.span.project(self.out.result.point(self.graph, id)), id)).collect();
        self.out.result.pins[stretch][at_end] = pins;
    }

    fn edge(&mut self, ends: [u32; 2], tag: u32, chain: usize, columns: [usize; 2]) {
        self.out.result.edges.push((ends[0], ends[1], tag));
        self.out.edges.push(StripEdge { ends, chain, columns });
    }

    /// Rings, steps and cells between two neighbouring columns.
    fn fill(&mut self, c: usize, chain: &Chain, k: usize, ids: &[Vec<u32>]) {
        let pair = chain.pairs[k];
        let (a, b) = (&ids[pair.columns[0]], &ids[pair.columns[1]]);
        let common = a.len().min(b.len()) - 1;
        let pole = pole_of(chain, pair.on);
        if a[0] != b[0] && a.len().max(b.len()) > 1 {
            self.out.covered.push((a[0], b[0]));
        }
        for level in 0..common {
            let upper = [a[level + 1], b[level + 1]];
            let tag = self.ring(chain, pair.on, level + 1, upper);
            self.edge(upper, tag, c, pair.columns);
            if level + 1 == common && a.len() == b.len() {
                self.source(upper);
            }
            let corners = if a[level] == b[level] {
                [a[level], b[level + 1], a[level + 1], a[level + 1]]
            } else {
                [a[level], b[level], b[level + 1], a[level + 1]]
            };
            self.cell(corners, pole, c, pair.columns);
        }
        if a.len() == b.len() || a[common] == b[common] {
            return;
        }
        let (low, high) = if a.len() < b.len() { (a, b) } else { (b, a) };
        let step = [low[common], high[common + 1]];
        let on_bisector = [pair.columns[0], pair.columns[1]].iter().all(|&i| {
            let column = &chain.columns[i];
            column.height == 0 || column.steps.iter().any(|s| s.level == column.height)
        });
        let tag = match pole {
            Some(pole) if !on_bisector => self.polar(pole),
            _ => 0,
        };
        self.edge(step, tag, c, pair.columns);
        self.source(step);
        let top = high[common + 1];
        self.cell([a[common], b[common], top, top], pole, c, pair.columns);
    }

    fn source(&mut self, ends: [u32; 2]) {
        let ends = ends.map(|v| self.out.result.point(self.graph, v));
        let size = distance(ends[0], ends[1]);
        self.out.result.inner.push(SizeSource { ends, size });
    }

    fn cell(&mut self, corners: [u32; 4], pole: Option<Point>, chain: usize, columns: [usize; 2]) {
        self.out.result.cells.push(Cell { corners, pole });
        self.out.cells.push(StripCell { corners, chain, columns });
    }

    /// Tag of a ring edge: its circle, if both ends are on it.
    fn ring(&mut self, chain: &Chain, on: Option<usize>, level: usize, ends: [u32; 2]) -> u32 {
        let Some(u) = on.map(|k| &chain.whole.uses[k]) else {
            return 0;
        };
        let Kind::Arc { centre, radius, sweep, .. } = u.span.kind else {
            return 0;
        };
        let radius = radius - chain.whole.depths[level] * sweep.signum();
        let on_circle = |v: u32| {
            let p = self.out.result.point(self.graph, v);
            (distance(p, centre) - radius).abs() <= 1e-11 * radius + 1e-3 * self.graph.tolerance
        };
        if !ends.iter().all(|&v| on_circle(v)) {
            return self.polar(centre);
        }
        let tags = &mut self.out.result.tags;
        *self.rings.entry((u.stretch, level, u.reversed)).or_insert_with(|| {
            tags.push(Tag { circle: Some((centre, radius)), ..Tag::default() });
            tags.len() as u32 - 1
        })
    }

    /// Tag of an edge between two depths below an arc.
    fn polar(&mut self, pole: Point) -> u32 {
        let tags = &mut self.out.result.tags;
        *self.poles.entry(pole.map(f64::to_bits)).or_insert_with(|| {
            tags.push(Tag { pole: Some(pole), ..Tag::default() });
            tags.len() as u32 - 1
        })
    }
}

/// Centre of the arc between two columns, if they stand on one.
fn pole_of(chain: &Chain, on: Option<usize>) -> Option<Point> {
    match chain.whole.uses[on?].span.kind {
        Kind::Line => None,
        Kind::Arc { centre, .. } => Some(centre),
    }
}
