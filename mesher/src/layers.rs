//! Strips of thin layers along surfaces: columns of points stand on the surface, rings join them at equal depth. Convention: a loop is
//! travelled with its region on the left, so depth grows to the left; level 0 is the surface. Where a column may not be as tall as its
//! neighbour the strip goes down in steps of one level, with a triangle at each step; at a convex corner the steps of the two
//! sides meet on the bisector. Source: common practice for boundary layers.

mod columns;
mod emit;
mod guard;
mod junction;
mod loops;
mod positions;

use crate::drawing::{Drawing, Layers, Region};
use crate::facing::Facing;
use crate::ids::{Point, distance};
use crate::noding::Graph;
use crate::note::{MeshNote, NoteReason};
use crate::plan::{Cell, Tag};
use crate::size_field::{Gaps, SizeField, SizeSource, cusp_sources, sources_of};
use columns::{Chain, Height, chains};
use loops::{Loop, loops_of};
use positions::divide_surfaces;

/// Largest growth of the layers added inside the ones asked for.
const INNER_GROWTH: f64 = 1.6;
/// The added layers end when they are as thick as this share of the surface size.
const THICK_ENOUGH: f64 = 0.6;
const MOST_LEVELS: usize = 80;
/// Rounds of lowering columns that collide before the strips concerned are given up.
const GUARD_ROUNDS: usize = 60;

/// What the strips add to the plan. Vertex numbers count on from the nodes of the drawing; tags from the stretches.
#[derive(Debug, Default)]
pub(crate) struct Strips {
    pub(crate) points: Vec<Point>,
    /// Vertices along every stretch that carries a strip, its ends included.
    pub(crate) divisions: Vec<Option<Vec<u32>>>,
    /// Vertices a strip puts on a stretch of the domain outline, with their parameters, from its start and from its end.
    pub(crate) pins: Vec<[Vec<(f64, u32)>; 2]>,
    /// Start, end and index into `tags`.
    pub(crate) edges: Vec<(u32, u32, u32)>,
    pub(crate) tags: Vec<Tag>,
    pub(crate) cells: Vec<Cell>,
    pub(crate) notes: Vec<MeshNote>,
    /// Element sizes along the strips.
    pub(crate) inner: Vec<SizeSource>,
    /// Largest element along stretches that should have a strip and cannot.
    pub(crate) bare: Vec<(usize, f64)>,
}

impl Strips {
    fn none(graph: &Graph) -> Self {
        let n = graph.stretches.len();
        Self { divisions: vec![None; n], pins: vec![[Vec::new(), Vec::new()]; n], ..Self::default() }
    }

    pub(crate) fn is_empty(&self) -> bool {
        self.divisions.iter().all(Option::is_none) && self.bare.is_empty()
    }

    /// Sources of the size field: the strips' own edges, and the stretches they leave alone.
    pub(crate) fn sources(&self, graph: &Graph, sizes: &[f64], gaps: &Gaps) -> Vec<SizeSource> {
        let mut out = cusp_sources(graph, sizes);
        out.extend(&self.inner);
        for (i, stretch) in graph.stretches.iter().enumerate() {
            if self.divisions[i].is_none() {
                let bare = self.bare.iter().filter(|b| b.0 == i).map(|b| b.1);
                sources_of(i, stretch, bare.fold(sizes[i], f64::min), gaps, &mut out);
            }
        }
        out
    }

    fn add_point(&mut self, graph: &Graph, p: Point) -> u32 {
        self.points.push(p);
        (graph.points.len() + self.points.len()) as u32 - 1
    }

    pub(crate) fn point(&self, graph: &Graph, id: u32) -> Point {
        let id = id as usize;
        if id < graph.points.len() { graph.points[id] } else { self.points[id - graph.points.len()] }
    }
}

/// Depths of the levels below the surface, 0 first.
fn depths(region: &Region, layers: &Layers, extent: f64) -> Vec<f64> {
    let mut depths = vec![0.0];
    let (mut depth, mut thickness) = (0.0, layers.first);
    while depths.len() < MOST_LEVELS && depth < extent {
        depth += thickness;
        depths.push(depth);
        let done = depths.len() > layers.count;
        if done && thickness >= THICK_ENOUGH * region.surface_size.min(region.interior_size) {
            break;
        }
        thickness *= if done { INNER_GROWTH } else { layers.growth };
    }
    depths
}

/// Lays strips along every surface that asks for one. `field` is the element size without strips; `enough` is told the number of edges now
/// and then, and ends it early.
pub(crate) fn build(
    drawing: &Drawing,
    graph: &Graph,
    field: &SizeField,
    max_turn: f64,
    facing: &mut Facing,
    enough: &dyn Fn(usize) -> bool,
) -> Strips {
    let mut strips = Strips::none(graph);
    let mut loops = Vec::new();
    for (k, region) in drawing.regions.iter().enumerate() {
        if let Some(layers) = &region.layers {
            let depths = depths(region, layers, drawing.extent());
            loops.extend(loops_of(graph, k, &depths));
        }
    }
    name_loose(drawing, graph, &loops, &mut strips);
    if loops.is_empty() {
        return strips;
    }
    divide_surfaces(graph, &loops, field, max_turn, facing, &mut strips);
    let mut chains: Vec<Chain> = loops.iter().flat_map(|l| chains(graph, l, &strips)).collect();
    let bare = strips;
    let mut strips = emit::emit(graph, &chains, &bare);
    for round in 0..GUARD_ROUNDS {
        let last = round + 1 == GUARD_ROUNDS;
        if enough(strips.edges.len()) || !guard::lower_colliding(graph, &strips, &mut chains, last) {
            break;
        }
        strips = emit::emit(graph, &chains, &bare);
    }
    describe(drawing, graph, &chains, &mut strips);
    strips.result
}

/// Notes the surfaces that should have a strip but are part of no closed loop, and asks for small elements there instead.
fn name_loose(drawing: &Drawing, graph: &Graph, loops: &[Loop], strips: &mut Strips) {
    for (i, stretch) in graph.stretches.iter().enumerate().filter(|(_, s)| s.on_domain.is_none()) {
        for &side in &stretch.sides {
            let Some((region, layers)) = drawing.region_of(side).and_then(|r| Some((r, r.layers?))) else {
                continue;
            };
            let index = side as usize - 1;
            if loops.iter().any(|l| l.region == index && l.uses.iter().any(|u| u.stretch == i)) {
                continue;
            }
            strips.bare.push((i, layers.first));
            let piece = stretch.on_regions.iter().find(|p| p.0 == index).map(|p| p.1);
            let reason = NoteReason::NoStrip { size: layers.first };
            strips.notes.push(MeshNote { region: region.id, index, piece, reason });
        }
    }
}

/// Sizes along the surfaces, and notes where less was placed than wanted.
fn describe(drawing: &Drawing, graph: &Graph, chains: &[Chain], emitted: &mut emit::Emitted) {
    let covered: std::collections::HashSet<(u32, u32)> =
        emitted.covered.iter().map(|&(a, b)| (a.min(b), a.max(b))).collect();
    let strips = &mut emitted.result;
    for (i, stretch) in graph.stretches.iter().enumerate() {
        let Some(chain) = &strips.divisions[i] else {
            continue;
        };
        let first = stretch
            .sides
            .iter()
            .filter_map(|&s| drawing.region_of(s)?.layers)
            .fold(f64::INFINITY, |a, l| a.min(l.first));
        for pair in chain.windows(2) {
            let ends = [pair[0], pair[1]].map(|v| strips.point(graph, v));
            let length = distance(ends[0], ends[1]);
            let bare = !covered.contains(&(pair[0].min(pair[1]), pair[0].max(pair[1])));
            let size = if bare { length.min(first) } else { length };
            strips.inner.push(SizeSource { ends, size });
        }
    }
    for chain in chains {
        let region = &drawing.regions[chain.region];
        let Some(layers) = region.layers else {
            continue;
        };
        for Height { stretch, tallest, bare } in chain.heights() {
            let on = &graph.stretches[stretch].on_regions;
            let reason = if bare {
                NoteReason::NoStrip { size: layers.first }
            } else if tallest < layers.count {
                NoteReason::LayersCut { placed: tallest, wanted: layers.count }
            } else {
                continue;
            };
            let piece = on.iter().find(|p| p.0 == chain.region).map(|p| p.1);
            let note = MeshNote { region: region.id, index: chain.region, piece, reason };
            if !strips.notes.contains(&note) {
                strips.notes.push(note);
            }
        }
    }
}
