//! The columns of a strip and how tall each may be. Convention: a chain is a run of columns in the order of travel.

use super::Strips;
use super::junction::{Junction, Style};
use super::loops::{Loop, Use};
use crate::ids::{Point, along, cross, distance, left_of, sub};
use crate::intersect::line_circle;
use crate::noding::Graph;
use crate::size_field::same;
use crate::span::{Kind, Span};

/// Largest strip thickness over the radius of a fillet, over a wall with two strips, and over a wall with one.
const OF_FILLET: f64 = 0.7;
const OF_WALL: f64 = 0.4;
const OF_HALF_WALL: f64 = 0.8;
/// A column stays this far inside the steps of a corner that it is no part of.
const CLEAR: f64 = 0.85;

/// The surface about a corner, in first layers: as far as the first step of the sharpest corner at which steps are matched.
const ABOUT_CORNER: f64 = 4.5;

/// Where the top of a column is shared with another.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Step {
    /// Junction of the chain's loop.
    pub(super) junction: usize,
    pub(super) level: usize,
}

#[derive(Debug, Clone)]
pub(super) struct Column {
    pub(super) base: u32,
    /// Points at every level the column might have.
    pub(super) points: Vec<Point>,
    /// Levels it has.
    pub(super) height: usize,
    /// Steps whose apex is the top of this column if it has just that height.
    pub(super) steps: Vec<Step>,
    /// Stretch of the domain outline the column runs along.
    pub(super) along: Option<usize>,
}

/// Two neighbouring columns, and the use of the loop between them; none inside a fan.
#[derive(Debug, Clone, Copy)]
pub(super) struct Pair {
    pub(super) columns: [usize; 2],
    pub(super) on: Option<usize>,
}

#[derive(Debug, Clone)]
pub(super) struct Chain {
    pub(super) region: usize,
    pub(super) whole: Loop,
    pub(super) columns: Vec<Column>,
    pub(super) pairs: Vec<Pair>,
}

/// How tall a strip is on a stretch.
#[derive(Debug, Clone, Copy)]
pub(super) struct Height {
    pub(super) stretch: usize,
    pub(super) tallest: usize,
    /// Whether some of it has no strip.
    pub(super) bare: bool,
}

impl Chain {
    /// What stands on every stretch of the chain. Surface about a corner, where strips go down in steps, is not counted as bare.
    pub(super) fn heights(&self) -> Vec<Height> {
        let mut out: Vec<Height> = Vec::new();
        for pair in &self.pairs {
            let Some(on) = pair.on else { continue };
            let stretch = self.whole.uses[on].stretch;
            let tallest = pair.columns.iter().map(|&c| self.columns[c].height).max().unwrap_or(0);
            let bare = tallest == 0 && !self.is_at_corner(pair.columns, &self.whole.uses[on].span);
            match out.last_mut() {
                Some(last) if last.stretch == stretch => {
                    last.tallest = last.tallest.max(tallest);
                    last.bare |= bare;
                }
                _ => out.push(Height { stretch, tallest, bare }),
            }
        }
        out
    }

    /// Whether both columns stand within a few first layers of one end of a stretch.
    fn is_at_corner(&self, columns: [usize; 2], span: &Span) -> bool {
        let reach = ABOUT_CORNER * self.whole.depths[1];
        let near = |end: Point| columns.iter().all(|&c| distance(self.columns[c].points[0], end) <= reach);
        near(span.start) || near(span.end)
    }

    /// Lowers columns in the midst of a fan that would stand alone; whether there were any.
    fn lower_lone(&mut self) -> bool {
        let mut changed = false;
        for two in self.pairs.windows(2).filter(|two| two.iter().all(|pair| pair.on.is_none())) {
            let [before, lone, after] = [two[0].columns[0], two[0].columns[1], two[1].columns[1]];
            let most = self.columns[before].height.max(self.columns[after].height);
            if two[1].columns[0] == lone && self.columns[lone].height > most {
                self.columns[lone].height = most;
                changed = true;
            }
        }
        changed
    }

    /// Lowers columns until neighbours differ by one level at most.
    pub(super) fn level_out(&mut self) {
        loop {
            let mut changed = false;
            let n = self.pairs.len();
            for k in (0..n).chain((0..n).rev()) {
                let [a, b] = self.pairs[k].columns;
                let (p, q) = (self.columns[a].height, self.columns[b].height);
                if p > q + 1 {
                    self.columns[a].height = q + 1;
                    changed = true;
                } else if q > p + 1 {
                    self.columns[b].height = p + 1;
                    changed = true;
                }
            }
            changed |= self.lower_lone();
            if !changed {
                return;
            }
        }
    }
}

/// The chains of a loop: the whole of it, or its runs between stretches of the domain outline.
pub(super) fn chains(graph: &Graph, whole: &Loop, strips: &Strips) -> Vec<Chain> {
    let n = whole.uses.len();
    let closed = whole.uses.iter().all(|u| !u.bare);
    let mut chains = Vec::new();
    let mut i = 0;
    while i < n {
        if whole.uses[i].bare {
            i += 1;
            continue;
        }
        let from = i;
        while i < n && !whole.uses[i].bare {
            i += 1;
        }
        let mut chain = Chain { region: whole.region, whole: whole.clone(), columns: Vec::new(), pairs: Vec::new() };
        fill(graph, strips, &mut chain, from..i, closed);
        chain.level_out();
        chains.push(chain);
    }
    chains
}

fn fill(graph: &Graph, strips: &Strips, chain: &mut Chain, uses: std::ops::Range<usize>, closed: bool) {
    let n = chain.whole.uses.len();
    for k in uses.clone() {
        add_junction(chain, k);
        let last = chain.columns.len() - 1;
        let first_new = chain.columns.len();
        add_surface(graph, strips, chain, k);
        let ids = std::iter::once(last).chain(first_new..chain.columns.len());
        let ids: Vec<usize> = ids.collect();
        chain.pairs.extend(ids.windows(2).map(|w| Pair { columns: [w[0], w[1]], on: Some(k) }));
        let tail = chain.columns.len() - 1;
        let next = if closed && k + 1 == n { 0 } else { tail + 1 };
        chain.pairs.push(Pair { columns: [tail, next], on: Some(k) });
    }
    if !closed {
        add_junction(chain, uses.end % n);
    }
}

/// Adds the column or fan of columns at the start of use `k`.
fn add_junction(chain: &mut Chain, k: usize) {
    let n = chain.whole.uses.len();
    let (before, after) = (&chain.whole.uses[(k + n - 1) % n], &chain.whole.uses[k]);
    let j = &chain.whole.junctions[k];
    let vertex = after.span.start;
    let outline = [before, after].into_iter().find(|u| u.bare);
    let depths = &chain.whole.depths;
    let columns = match j.style {
        Style::Bare | Style::Steps => vec![column(after, vec![vertex], depths, 0.0, None)],
        Style::Shared => {
            let points: Vec<Point> = j.apex.iter().map_while(|p| *p).collect();
            let limit = match outline {
                Some(u) => OF_WALL * u.span.length(),
                None => points.get(1).map_or(0.0, |p| room(&chain.whole, vertex, unit(sub(*p, vertex)))),
            };
            let limit = limit.min(fillet_limit(before)).min(fillet_limit(after));
            vec![column(after, points, depths, limit, outline.map(|u| u.stretch))]
        }
        Style::Fan => (0..j.fan.len()).map(|i| fan_column(&chain.whole, before, after, &j.fan, i)).collect(),
    };
    let first = chain.columns.len();
    chain.columns.extend(columns);
    let ids: Vec<usize> = (first..chain.columns.len()).collect();
    chain.pairs.extend(ids.windows(2).map(|w| Pair { columns: [w[0], w[1]], on: None }));
}

/// A column at the start of a use, as tall as `most` allows.
fn column(after: &Use, points: Vec<Point>, depths: &[f64], most: f64, along: Option<usize>) -> Column {
    let height = points.iter().zip(depths).take_while(|(_, d)| **d <= most).count().saturating_sub(1);
    Column { base: after.start, points, height, steps: Vec::new(), along }
}

/// One column of a fan; the outermost may run along the outline of the domain.
fn fan_column(whole: &Loop, before: &Use, after: &Use, fan: &[Point], i: usize) -> Column {
    let vertex = after.span.start;
    let points: Vec<Point> = whole.depths.iter().map(|&d| along(vertex, fan[i], d)).collect();
    let outline = match i {
        0 if before.bare => Some(before),
        i if i + 1 == fan.len() && after.bare => Some(after),
        _ => None,
    };
    match outline {
        Some(u) if matches!(u.span.kind, Kind::Arc { .. }) => column(after, points, &whole.depths, 0.0, None),
        Some(u) => column(after, points, &whole.depths, OF_WALL * u.span.length(), Some(u.stretch)),
        None => column(after, points, &whole.depths, room(whole, vertex, fan[i]), None),
    }
}

/// Adds the columns strictly inside use `k`.
fn add_surface(graph: &Graph, strips: &Strips, chain: &mut Chain, k: usize) {
    let whole = &chain.whole;
    let u = &whole.uses[k];
    let n = whole.uses.len();
    let Some(division) = &strips.divisions[u.stretch] else {
        return;
    };
    let mut inner: Vec<u32> = division[1..division.len() - 1].to_vec();
    if u.reversed {
        inner.reverse();
    }
    let length = u.span.length();
    let ends = [(k, 1usize), ((k + 1) % n, 0usize)];
    let mut columns = Vec::new();
    for base in inner {
        let p = strips.point(graph, base);
        let t = u.span.project(p);
        let normal = left_of(u.span.tangent(t));
        let most = room(whole, p, normal).min(fillet_limit(u));
        let mut points: Vec<Point> = whole.depths.iter().map(|&d| along(p, normal, d)).collect();
        let mut height = whole.depths.iter().take_while(|d| **d <= most).count().saturating_sub(1);
        let mut steps = Vec::new();
        for (junction, side) in ends {
            let j = &whole.junctions[junction];
            let away = if side == 1 { t * length } else { (1.0 - t) * length };
            height = height.min(climb(j, side, away, &whole.depths, graph.tolerance));
            let step =
                (1..j.feet[side].len()).find(|&level| j.matched && at_foot(j, side, level, away, graph.tolerance));
            if let (Some(level), Some(apex)) = (step, step.and_then(|l| j.apex[l]))
                && same(points[level], apex, graph.tolerance)
            {
                points[level] = apex;
                steps.push(Step { junction, level });
            }
        }
        columns.push(Column { base, points, height, steps, along: None });
    }
    chain.columns.extend(columns);
}

fn at_foot(j: &Junction, side: usize, level: usize, away: f64, tolerance: f64) -> bool {
    j.feet[side].get(level).copied().flatten().is_some_and(|foot| (foot - away).abs() <= tolerance)
}

/// Greatest height a column may have at a distance from a convex corner.
fn climb(j: &Junction, side: usize, away: f64, depths: &[f64], tolerance: f64) -> usize {
    let feet = &j.feet[side];
    if feet.is_empty() {
        return depths.len() - 1;
    }
    let allowed = |level: &usize| match feet.get(*level).copied().flatten() {
        Some(foot) => foot <= CLEAR * away || (j.matched && (foot - away).abs() <= tolerance),
        None => 2.0 * depths[*level] <= away,
    };
    (1..depths.len()).take_while(allowed).count()
}

/// Thickness allowed below an arc whose centre is on the region's side.
fn fillet_limit(u: &Use) -> f64 {
    match u.span.kind {
        Kind::Arc { radius, sweep, .. } if sweep > 0.0 && !u.bare => OF_FILLET * radius,
        _ => f64::INFINITY,
    }
}

/// Thickness allowed by the wall below a point of the surface.
fn room(whole: &Loop, p: Point, direction: Point) -> f64 {
    let deepest = whole.depths[whole.depths.len() - 1];
    let mut room = f64::INFINITY;
    for (wall, outline) in &whole.walls {
        let share = if *outline { OF_HALF_WALL } else { OF_WALL };
        if let Some(hit) = ray(p, direction, wall, 1e-6 * deepest) {
            room = room.min(share * hit);
        }
    }
    room
}

/// Distance along a ray at which it meets a span, beyond `least`.
fn ray(p: Point, direction: Point, span: &Span, least: f64) -> Option<f64> {
    let slack = 1e-9;
    match span.kind {
        Kind::Line => {
            let v = sub(span.end, span.start);
            let w = sub(span.start, p);
            let denominator = cross(direction, v);
            if denominator == 0.0 {
                return None;
            }
            let (x, s) = (cross(w, v) / denominator, cross(w, direction) / denominator);
            (x > least && s > -slack && s < 1.0 + slack).then_some(x)
        }
        Kind::Arc { centre, radius, .. } => {
            let line = Span::line(p, along(p, direction, radius));
            line_circle(&line, centre, radius, 0.0)
                .into_iter()
                .filter(|&hit| span.distance(hit) <= slack * radius)
                .map(|hit| (hit[0] - p[0]) * direction[0] + (hit[1] - p[1]) * direction[1])
                .filter(|&x| x > least)
                .min_by(f64::total_cmp)
        }
    }
}

fn unit(v: Point) -> Point {
    let l = distance(v, [0.0; 2]);
    [v[0] / l, v[1] / l]
}
