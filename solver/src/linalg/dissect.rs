//! Nested dissection of a graph whose vertices are points in the plane.
//!
//! A part is cut in two by a small separator, the halves are ordered first (each in turn cut in two), the separator
//! last; small parts go to exact minimum degree. Every part owns its graph, so halves are ordered in parallel, and what
//! is cut depends on the part alone, never on the number of threads.
//! Source: A. George, SIAM J. Numer. Anal. 10 (1973) 345-363.

use super::leaf_order::{self, LEAF_LIMIT};
use super::separator::{self, Bisection, SEPARATOR};

/// Parts of at most this many vertices are not cut (a usual size; not tuned).
const LEAF: usize = 96;
const _: () = assert!(LEAF <= LEAF_LIMIT, "a leaf must fit the bit sets of the minimum-degree order");

/// Parts of at least this many vertices order their halves in parallel.
const PARALLEL: usize = 2000;

/// A piece of the graph: its own vertices `0..n` and, as bare numbers `n..n + halo`, the later ones they touch.
pub(super) struct Part {
    /// Unknown of each own vertex.
    pub(super) unknowns: Vec<u32>,
    /// Point of each own vertex.
    pub(super) points: Vec<[f64; 2]>,
    /// First neighbour of each own vertex, and the end of the last: `n + 1` positions.
    pub(super) starts: Vec<u32>,
    /// Neighbours, own (below `n`) and of the halo.
    pub(super) neighbours: Vec<u32>,
    /// Number of halo vertices.
    pub(super) halo: usize,
}

impl Part {
    /// Number of own vertices.
    pub(super) fn n(&self) -> usize {
        self.unknowns.len()
    }

    /// Neighbours of `v`, own and halo.
    pub(super) fn neighbours(&self, v: usize) -> &[u32] {
        &self.neighbours[self.starts[v] as usize..self.starts[v + 1] as usize]
    }

    /// Own neighbours of `v`.
    pub(super) fn own(&self, v: usize) -> impl Iterator<Item = usize> + '_ {
        let n = self.n();
        self.neighbours(v).iter().map(|&w| w as usize).filter(move |&w| w < n)
    }

    /// The own vertices of one side as a part; what else they touch becomes its halo.
    fn side(&self, sides: &[u8], side: u8, local: &mut [u32]) -> Self {
        let members: Vec<usize> = (0..self.n()).filter(|&v| sides[v] == side).collect();
        local.fill(u32::MAX);
        for (k, &v) in members.iter().enumerate() {
            local[v] = k as u32;
        }
        let mut next = members.len() as u32;
        let mut starts = Vec::with_capacity(members.len() + 1);
        starts.push(0);
        let mut neighbours = Vec::with_capacity(self.neighbours.len() * 5 / 9);
        for &v in &members {
            for &w in self.neighbours(v) {
                let place = &mut local[w as usize];
                if *place == u32::MAX {
                    *place = next;
                    next += 1;
                }
                neighbours.push(*place);
            }
            starts.push(neighbours.len() as u32);
        }
        Self {
            unknowns: members.iter().map(|&v| self.unknowns[v]).collect(),
            points: members.iter().map(|&v| self.points[v]).collect(),
            starts,
            neighbours,
            halo: next as usize - members.len(),
        }
    }
}

/// Writes the unknowns of `part` to `out` in order of elimination.
pub(super) fn dissect(part: &Part, out: &mut [u32]) {
    if part.n() <= LEAF {
        leaf_order::minimum_degree(part, out);
        return;
    }
    let cut = separator::bisect(part);
    let sizes = cut.sizes;
    order_separator(part, &cut, &mut out[sizes[0] + sizes[1]..]);
    let mut local = vec![0_u32; part.n() + part.halo];
    let halves = [0, 1].map(|side| part.side(&cut.sides, side, &mut local));
    drop(local);
    let (first, rest) = out.split_at_mut(sizes[0]);
    let second = &mut rest[..sizes[1]];
    if part.n() >= PARALLEL {
        rayon::join(|| dissect(&halves[0], first), || dissect(&halves[1], second));
    } else {
        dissect(&halves[0], first);
        dissect(&halves[1], second);
    }
}

/// Writes the separator from one end to the other, which keeps the rows of later fronts in long runs.
fn order_separator(part: &Part, cut: &Bisection, out: &mut [u32]) {
    let members = (0..part.n()).filter(|&v| cut.sides[v] == SEPARATOR);
    let mut keyed: Vec<(f64, u32)> = members.map(|v| (cut.along(part.points[v]), part.unknowns[v])).collect();
    keyed.sort_unstable_by(|a, b| a.0.total_cmp(&b.0).then(a.1.cmp(&b.1)));
    for (place, (_, unknown)) in out.iter_mut().zip(keyed) {
        *place = unknown;
    }
}
