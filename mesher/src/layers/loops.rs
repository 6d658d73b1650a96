//! The loops of stretches around a region. Convention: travelled with the region on the left.

use super::junction::{Junction, junction};
use crate::ids::{Point, cross, dot};
use crate::noding::Graph;
use crate::span::Span;
use std::f64::consts::TAU;

/// A stretch as part of a loop.
#[derive(Debug, Clone)]
pub(super) struct Use {
    pub(super) stretch: usize,
    pub(super) reversed: bool,
    /// The stretch in the direction of travel.
    pub(super) span: Span,
    pub(super) start: u32,
    pub(super) end: u32,
    /// Whether it bounds the domain and so carries no strip.
    pub(super) bare: bool,
}

/// One closed loop around a region.
#[derive(Debug, Clone)]
pub(super) struct Loop {
    pub(super) region: usize,
    pub(super) depths: Vec<f64>,
    pub(super) uses: Vec<Use>,
    /// Junction `i` is where use `i` starts.
    pub(super) junctions: Vec<Junction>,
    /// Spans of all stretches of the region, with whether they bound the domain: what a wall is measured to.
    pub(super) walls: Vec<(Span, bool)>,
}

/// All loops around region `region` that carry a strip somewhere.
pub(super) fn loops_of(graph: &Graph, region: usize, depths: &[f64]) -> Vec<Loop> {
    let side = region as u32 + 1;
    let mut uses = Vec::new();
    for (i, s) in graph.stretches.iter().enumerate() {
        let bare = s.on_domain.is_some();
        if s.sides[0] == side {
            uses.push(Use { stretch: i, reversed: false, span: s.span, start: s.ends[0], end: s.ends[1], bare });
        }
        if s.sides[1] == side {
            let span = s.span.reversed();
            uses.push(Use { stretch: i, reversed: true, span, start: s.ends[1], end: s.ends[0], bare });
        }
    }
    let walls: Vec<(Span, bool)> = uses.iter().map(|u| (u.span, u.bare)).collect();
    let mut taken = vec![false; uses.len()];
    let mut loops = Vec::new();
    for seed in 0..uses.len() {
        let Some(order) = follow(&uses, seed, &mut taken) else {
            continue;
        };
        if order.iter().all(|&u| uses[u].bare) {
            continue;
        }
        let ring = rotated(order.into_iter().map(|u| uses[u].clone()).collect());
        let n = ring.len();
        let junctions = (0..n).map(|i| junction(&ring[(i + n - 1) % n], &ring[i], depths)).collect();
        loops.push(Loop { region, depths: depths.to_vec(), uses: ring, junctions, walls: walls.clone() });
    }
    loops
}

/// The loop through a use, if it is not taken yet and closes.
fn follow(uses: &[Use], seed: usize, taken: &mut [bool]) -> Option<Vec<usize>> {
    if taken[seed] {
        return None;
    }
    let mut order = vec![seed];
    taken[seed] = true;
    loop {
        let here = &uses[order[order.len() - 1]];
        let next = (0..uses.len())
            .filter(|&u| uses[u].start == here.end && (!taken[u] || u == seed))
            .min_by(|&a, &b| inner_angle(here, &uses[a]).total_cmp(&inner_angle(here, &uses[b])))?;
        if next == seed {
            return Some(order);
        }
        taken[next] = true;
        order.push(next);
    }
}

/// Angle inside the region where one use ends and the next starts, in radians, in (0, 2 pi].
pub(super) fn inner_angle(before: &Use, after: &Use) -> f64 {
    let back = before.span.tangent(1.0);
    let back: Point = [-back[0], -back[1]];
    let out = after.span.tangent(0.0);
    let angle = cross(out, back).atan2(dot(out, back)).rem_euclid(TAU);
    if angle == 0.0 { TAU } else { angle }
}

/// Starts the loop right after a stretch of the domain outline, if it has one.
fn rotated(mut ring: Vec<Use>) -> Vec<Use> {
    let n = ring.len();
    if let Some(first) = (0..n).find(|&i| !ring[i].bare && ring[(i + n - 1) % n].bare) {
        ring.rotate_left(first);
    }
    ring
}
