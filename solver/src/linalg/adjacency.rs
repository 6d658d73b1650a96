//! Graph of a symmetric pattern: the neighbours of every unknown, with the slots of the entries that join them.
//! Convention: no loops; neighbours rise within a list.

use super::pattern::Pattern;

/// Neighbours of every unknown.
pub(super) struct Adjacency {
    starts: Vec<usize>,
    neighbours: Vec<u32>,
    slots: Vec<u32>,
}

impl Adjacency {
    pub(super) fn new(pattern: &Pattern) -> Self {
        let n = pattern.n();
        let mut starts = vec![0_usize; n + 1];
        for col in 0..n {
            let below = &pattern.column(col)[1..];
            starts[col + 1] += below.len();
            for &row in below {
                starts[row as usize + 1] += 1;
            }
        }
        for v in 0..n {
            starts[v + 1] += starts[v];
        }
        let mut next = starts.clone();
        let mut neighbours = vec![0_u32; starts[n]];
        let mut slots = vec![0_u32; starts[n]];
        for col in 0..n {
            let first = pattern.starts()[col];
            for (offset, &row) in pattern.column(col).iter().enumerate().skip(1) {
                for (from, to) in [(col, row as usize), (row as usize, col)] {
                    neighbours[next[from]] = to as u32;
                    slots[next[from]] = (first + offset) as u32;
                    next[from] += 1;
                }
            }
        }
        Self { starts, neighbours, slots }
    }

    /// Number of unknowns.
    pub(super) fn n(&self) -> usize {
        self.starts.len() - 1
    }

    /// Number of neighbours of `v`.
    pub(super) fn degree(&self, v: usize) -> usize {
        self.starts[v + 1] - self.starts[v]
    }

    /// Neighbours of `v`.
    pub(super) fn of(&self, v: usize) -> &[u32] {
        &self.neighbours[self.starts[v]..self.starts[v + 1]]
    }

    /// Neighbours of `v`, each with the slot of the entry that joins them.
    pub(super) fn with_slots(&self, v: usize) -> impl Iterator<Item = (u32, u32)> + '_ {
        let range = self.starts[v]..self.starts[v + 1];
        self.neighbours[range.clone()].iter().copied().zip(self.slots[range].iter().copied())
    }
}
