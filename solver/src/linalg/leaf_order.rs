//! Exact minimum degree on a small part, its halo counted in the degrees.
//! Convention: sets of vertices are bit sets of 256; own vertices come first, then up to `256 - n` of the halo.
//! Source: W. F. Tinney and J. W. Walker, Proc. IEEE 55 (1967) 1801-1809 (scheme 2).

use super::dissect::Part;

/// Largest number of own vertices.
pub(super) const LEAF_LIMIT: usize = 128;

const WORDS: usize = 4;
const VERTICES: usize = 64 * WORDS;

type Set = [u64; WORDS];

fn insert(set: &mut Set, v: usize) {
    set[v / 64] |= 1 << (v % 64);
}

fn count(set: &Set) -> u32 {
    set.iter().map(|word| word.count_ones()).sum()
}

/// Writes the unknowns of `part` (at most [`LEAF_LIMIT`]) to `out` in order of elimination.
pub(super) fn minimum_degree(part: &Part, out: &mut [u32]) {
    let n = part.n();
    let mut reach = [[0_u64; WORDS]; LEAF_LIMIT];
    for (v, set) in reach[..n].iter_mut().enumerate() {
        insert(set, v);
        for &w in part.neighbours(v) {
            // Halo vertices beyond the bit set are not counted: the order is a little worse, never wrong.
            if (w as usize) < VERTICES {
                insert(set, w as usize);
            }
        }
    }
    let mut degree: Vec<u32> = reach[..n].iter().map(count).collect();
    for place in out.iter_mut() {
        let Some(pivot) = (0..n).filter(|&v| degree[v] < u32::MAX).min_by_key(|&v| (degree[v], v)) else {
            return;
        };
        *place = part.unknowns[pivot];
        degree[pivot] = u32::MAX;
        eliminate(pivot, n, &mut reach, &mut degree);
    }
}

/// Joins the neighbours of `pivot` with each other and takes the pivot away.
fn eliminate(pivot: usize, n: usize, reach: &mut [Set; LEAF_LIMIT], degree: &mut [u32]) {
    let mut clique = reach[pivot];
    clique[pivot / 64] &= !(1 << (pivot % 64));
    for word in 0..n.div_ceil(64) {
        let mut bits = clique[word];
        while bits != 0 {
            let v = word * 64 + bits.trailing_zeros() as usize;
            bits &= bits - 1;
            if v >= n {
                return;
            }
            if degree[v] == u32::MAX {
                continue;
            }
            let set = &mut reach[v];
            for (to, from) in set.iter_mut().zip(&clique) {
                *to |= from;
            }
            set[pivot / 64] &= !(1 << (pivot % 64));
            degree[v] = count(set);
        }
    }
}
