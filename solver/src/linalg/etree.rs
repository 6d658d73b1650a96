//! Elimination tree, its postorder, and the number of entries in every column of the factor.
//! Convention: `order[k]` is the unknown eliminated at step `k`, `place` its inverse; a root's parent is [`NONE`].
//! Sources: J. W. H. Liu, SIAM J. Matrix Anal. Appl. 11 (1990) 134-172 (tree, path compression); J. R. Gilbert, E. G. Ng
//! and B. W. Peyton, SIAM J. Matrix Anal. Appl. 15 (1994) 1075-1091 (column counts).

use super::adjacency::Adjacency;

/// No parent.
pub(super) const NONE: u32 = u32::MAX;

/// Inverse of a permutation.
pub(super) fn inverse(order: &[u32]) -> Vec<u32> {
    let mut place = vec![0_u32; order.len()];
    for (k, &v) in order.iter().enumerate() {
        place[v as usize] = k as u32;
    }
    place
}

/// Parent of each step in the elimination tree.
pub(super) fn elimination_tree(graph: &Adjacency, order: &[u32], place: &[u32]) -> Vec<u32> {
    let n = order.len();
    let mut parent = vec![NONE; n];
    let mut ancestor = vec![NONE; n];
    for (step, &unknown) in order.iter().enumerate() {
        for &neighbour in graph.of(unknown as usize) {
            let mut k = place[neighbour as usize];
            while (k as usize) < step {
                let next = std::mem::replace(&mut ancestor[k as usize], step as u32);
                if next == NONE {
                    parent[k as usize] = step as u32;
                    break;
                }
                k = next;
            }
        }
    }
    parent
}

/// Steps in an order where every subtree is contiguous and ends with its root; siblings keep their order.
pub(super) fn postorder(parent: &[u32]) -> Vec<u32> {
    let n = parent.len();
    let (mut first_child, mut next_sibling) = (vec![NONE; n], vec![NONE; n]);
    for step in (0..n).rev().filter(|&step| parent[step] != NONE) {
        let above = parent[step] as usize;
        next_sibling[step] = first_child[above];
        first_child[above] = step as u32;
    }
    let mut post = Vec::with_capacity(n);
    let mut path = Vec::new();
    for root in (0..n).filter(|&step| parent[step] == NONE) {
        path.push(root as u32);
        while let Some(&step) = path.last() {
            let child = first_child[step as usize];
            if child == NONE {
                post.push(step);
                path.pop();
            } else {
                first_child[step as usize] = next_sibling[child as usize];
                path.push(child);
            }
        }
    }
    post
}

/// Parents renumbered after a postorder.
pub(super) fn renumber(parent: &[u32], post: &[u32]) -> Vec<u32> {
    let place = inverse(post);
    let of = |&step: &u32| match parent[step as usize] {
        NONE => NONE,
        above => place[above as usize],
    };
    post.iter().map(of).collect()
}

/// Entries of each factor column, diagonal included, for a postordered elimination.
pub(super) fn column_counts(graph: &Adjacency, order: &[u32], place: &[u32], parent: &[u32]) -> Vec<u32> {
    let n = order.len();
    let (first, mut change) = first_descendants(parent);
    let mut latest = vec![NONE; n];
    let mut previous_leaf = vec![NONE; n];
    let mut ancestor: Vec<u32> = (0..n as u32).collect();
    for step in 0..n {
        if parent[step] != NONE {
            change[parent[step] as usize] -= 1;
        }
        for &neighbour in graph.of(order[step] as usize) {
            let row = place[neighbour as usize] as usize;
            // `step` is a leaf of the row's subtree if no earlier one lies below it.
            if row <= step || (latest[row] != NONE && first[step] <= latest[row]) {
                continue;
            }
            latest[row] = first[step];
            change[step] += 1;
            let previous = std::mem::replace(&mut previous_leaf[row], step as u32);
            if previous != NONE {
                change[find(&mut ancestor, previous) as usize] -= 1;
            }
        }
        if parent[step] != NONE {
            ancestor[step] = parent[step];
        }
    }
    for step in 0..n {
        if parent[step] != NONE {
            change[parent[step] as usize] += change[step];
        }
    }
    change.iter().map(|&count| count as u32).collect()
}

/// First descendant of each step, and 1 for every leaf of the tree.
fn first_descendants(parent: &[u32]) -> (Vec<u32>, Vec<i64>) {
    let n = parent.len();
    let mut first = vec![NONE; n];
    let mut leaf = vec![0_i64; n];
    for step in 0..n {
        leaf[step] = i64::from(first[step] == NONE);
        let mut above = step;
        while first[above] == NONE {
            first[above] = step as u32;
            if parent[above] == NONE {
                break;
            }
            above = parent[above] as usize;
        }
    }
    (first, leaf)
}

/// Root of a set, with path compression.
fn find(ancestor: &mut [u32], start: u32) -> u32 {
    let mut root = start;
    while root != ancestor[root as usize] {
        root = ancestor[root as usize];
    }
    let mut step = start;
    while step != root {
        step = std::mem::replace(&mut ancestor[step as usize], root);
    }
    root
}
