//! Keeps strips from colliding: columns whose edges cross a line or another strip, or whose cells fold, are lowered. Convention: as in
//! [`super::emit`].

use super::columns::Chain;
use super::emit::Emitted;
use crate::ids::Point;
use crate::intersect::segments_meet;
use crate::noding::Graph;
use crate::predicates::orient;
use crate::tree::{Item, Tree};

/// Lowers the columns concerned by one level, or to the ground if it is the `last` time; whether there were any.
pub(super) fn lower_colliding(graph: &Graph, emitted: &Emitted, chains: &mut [Chain], last: bool) -> bool {
    let mut hit: Vec<(usize, usize)> = Vec::new();
    let point = |v: u32| emitted.result.point(graph, v);
    for cell in &emitted.cells {
        let p = cell.corners.map(point);
        let n = if cell.corners[2] == cell.corners[3] { 3 } else { 4 };
        if (0..n).any(|i| orient(p[i], p[(i + 1) % n], p[(i + 2) % n]) <= 0.0) {
            hit.extend(cell.columns.map(|c| (cell.chain, c)));
        }
    }
    let (segments, first_strip) = segments(graph, emitted);
    let items: Vec<Item> = segments.iter().map(|s| item(s.1)).collect();
    let tree = Tree::new(&items);
    for (k, edge) in emitted.edges.iter().enumerate() {
        let own = first_strip + k;
        let (ids, ends) = segments[own];
        tree.any(items[own].lo, items[own].hi, |other| {
            let other = other as usize;
            let (other_ids, other_ends) = segments[other];
            let share = ids.iter().any(|&i| i != u32::MAX && other_ids.contains(&i));
            if other != own && !share && segments_meet(ends, other_ends) {
                hit.extend(edge.columns.map(|c| (edge.chain, c)));
            }
            false
        });
    }
    if hit.is_empty() {
        return false;
    }
    hit.sort_unstable();
    hit.dedup();
    for &(chain, column) in &hit {
        let height = &mut chains[chain].columns[column].height;
        *height = if last { 0 } else { height.saturating_sub(1) };
    }
    for chain in chains {
        chain.level_out();
    }
    true
}

type Segment = ([u32; 2], [Point; 2]);

/// All stretches as chords, then all strip edges; and where the latter begin.
fn segments(graph: &Graph, emitted: &Emitted) -> (Vec<Segment>, usize) {
    let strips = &emitted.result;
    let mut segments: Vec<Segment> = Vec::new();
    for (i, stretch) in graph.stretches.iter().enumerate() {
        if let Some(chain) = &strips.divisions[i] {
            let chord = |w: &[u32]| ([w[0], w[1]], [w[0], w[1]].map(|v| strips.point(graph, v)));
            segments.extend(chain.windows(2).map(chord));
            continue;
        }
        // Strips that end on this stretch touch it: it is cut where they do.
        let [head, tail] = &strips.pins[i];
        let n = (stretch.span.turn() / 0.1).ceil().max(1.0) as usize;
        let mut stops: Vec<(f64, u32)> = vec![(0.0, stretch.ends[0]), (1.0, stretch.ends[1])];
        stops.extend(head.iter().chain(tail));
        stops.extend((1..n).map(|k| (k as f64 / n as f64, u32::MAX)));
        stops.sort_by(|a, b| a.0.total_cmp(&b.0).then(a.1.cmp(&b.1)));
        let place = |s: &(f64, u32)| {
            if s.1 == u32::MAX { stretch.span.at(s.0) } else { strips.point(graph, s.1) }
        };
        segments.extend(stops.windows(2).map(|w| ([w[0].1, w[1].1], [place(&w[0]), place(&w[1])])));
    }
    let first = segments.len();
    segments.extend(emitted.edges.iter().map(|e| (e.ends, e.ends.map(|v| strips.point(graph, v)))));
    (segments, first)
}

fn item([a, b]: [Point; 2]) -> Item {
    Item { lo: [a[0].min(b[0]), a[1].min(b[1])], hi: [a[0].max(b[0]), a[1].max(b[1])], weight: 0.0 }
}
