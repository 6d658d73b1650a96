//! Elimination order: which unknown is eliminated when.
//!
//! With coordinates, nested dissection of the free unknowns (module `dissect`); without, approximate minimum degree.
//! Unknowns coupled to a large part of the system, and those the caller names, come last.
//! Sources: A. George, SIAM J. Numer. Anal. 10 (1973) 345-363 (nested dissection); P. R. Amestoy, T. A. Davis and
//! I. S. Duff, SIAM J. Matrix Anal. Appl. 17 (1996) 886-905 (approximate minimum degree, as implemented in faer).

use faer::dyn_stack::{MemBuffer, MemStack};
use faer::sparse::SymbolicSparseColMatRef;
use faer::sparse::linalg::amd;

use super::adjacency::Adjacency;
use super::dissect::{Part, dissect};
use super::error::{Datum, LinalgError};

/// A row is dense, and ordered last, beyond `DENSE_BASE + DENSE_ROOT sqrt(n)` neighbours (common practice in
/// minimum-degree codes, no source for the figures).
const DENSE_BASE: f64 = 40.0;
/// See [`DENSE_BASE`].
const DENSE_ROOT: f64 = 10.0;

/// Unknowns in order of elimination.
pub(super) fn order(
    graph: &Adjacency,
    coordinates: Option<&[[f64; 2]]>,
    last: &[u32],
) -> Result<Vec<u32>, LinalgError> {
    let n = graph.n();
    let held = held_back(graph, last)?;
    let mut tail: Vec<u32> = (0..n as u32).filter(|&v| held[v as usize]).collect();
    tail.sort_by_key(|&v| (graph.degree(v as usize), v));
    let mut free: Vec<u32> = (0..n as u32).filter(|&v| !held[v as usize]).collect();
    let mut ordered = match coordinates {
        Some(points) if points.len() != n => {
            return Err(LinalgError::Size { what: Datum::Coordinates, expected: n, found: points.len() });
        }
        Some(points) => {
            let points = complete(graph, points);
            sort_along_curve(&mut free, &points);
            let mut out = vec![0; free.len()];
            dissect(&root_part(graph, &free, &points), &mut out);
            out
        }
        None => minimum_degree(graph, &free)?,
    };
    ordered.append(&mut tail);
    Ok(ordered)
}

/// Which unknowns are kept for the end: those named and those of dense rows.
fn held_back(graph: &Adjacency, last: &[u32]) -> Result<Vec<bool>, LinalgError> {
    let n = graph.n();
    let dense = (DENSE_BASE + DENSE_ROOT * (n as f64).sqrt()) as usize;
    let mut held: Vec<bool> = (0..n).map(|v| graph.degree(v) > dense).collect();
    for &v in last {
        let place = held.get_mut(v as usize).ok_or(LinalgError::NoSuchUnknown { unknown: v as usize, unknowns: n })?;
        *place = true;
    }
    Ok(held)
}

/// Coordinates with every missing (non-finite) point set to the mean of its neighbours' points, else to the origin.
fn complete(graph: &Adjacency, points: &[[f64; 2]]) -> Vec<[f64; 2]> {
    let known = |p: &[f64; 2]| p[0].is_finite() && p[1].is_finite();
    (0..points.len())
        .map(|v| {
            if known(&points[v]) {
                return points[v];
            }
            let (mut sum, mut count) = ([0.0; 2], 0.0_f64);
            for &w in graph.of(v) {
                let p = &points[w as usize];
                if known(p) {
                    sum = [sum[0] + p[0], sum[1] + p[1]];
                    count += 1.0;
                }
            }
            [sum[0] / count.max(1.0), sum[1] / count.max(1.0)]
        })
        .collect()
}

/// Sorts unknowns along a Z-shaped space-filling curve, so that neighbours lie close in memory.
fn sort_along_curve(unknowns: &mut [u32], points: &[[f64; 2]]) {
    let (mut low, mut high) = ([f64::MAX; 2], [f64::MIN; 2]);
    for &v in unknowns.iter() {
        for d in 0..2 {
            low[d] = low[d].min(points[v as usize][d]);
            high[d] = high[d].max(points[v as usize][d]);
        }
    }
    let extent = (high[0] - low[0]).max(high[1] - low[1]);
    let step = if extent > 0.0 { 65535.0 / extent } else { 0.0 };
    unknowns.sort_by_cached_key(|&v| {
        let p = points[v as usize];
        let cell = |d: usize| spread_bits(((p[d] - low[d]) * step) as u32);
        (cell(0) | (cell(1) << 1), v)
    });
}

/// Moves bit `k` of a 16-bit number to bit `2k`.
fn spread_bits(x: u32) -> u32 {
    let x = (x | (x << 8)) & 0x00ff_00ff;
    let x = (x | (x << 4)) & 0x0f0f_0f0f;
    let x = (x | (x << 2)) & 0x3333_3333;
    (x | (x << 1)) & 0x5555_5555
}

/// The free unknowns as one part, the held ones as its halo.
fn root_part(graph: &Adjacency, free: &[u32], points: &[[f64; 2]]) -> Part {
    let mut local = vec![u32::MAX; graph.n()];
    for (k, &v) in free.iter().enumerate() {
        local[v as usize] = k as u32;
    }
    let mut next = free.len() as u32;
    for place in local.iter_mut().filter(|place| **place == u32::MAX) {
        *place = next;
        next += 1;
    }
    let mut starts = vec![0_u32];
    let mut neighbours = Vec::new();
    for &v in free {
        neighbours.extend(graph.of(v as usize).iter().map(|&w| local[w as usize]));
        starts.push(neighbours.len() as u32);
    }
    Part {
        unknowns: free.to_vec(),
        points: free.iter().map(|&v| points[v as usize]).collect(),
        starts,
        neighbours,
        halo: next as usize - free.len(),
    }
}

/// Approximate minimum degree on the graph of the free unknowns alone.
fn minimum_degree(graph: &Adjacency, free: &[u32]) -> Result<Vec<u32>, LinalgError> {
    let n = free.len();
    let mut local = vec![usize::MAX; graph.n()];
    for (k, &v) in free.iter().enumerate() {
        local[v as usize] = k;
    }
    let mut starts = vec![0_usize];
    let mut rows = Vec::new();
    for &v in free {
        let column = graph.of(v as usize).iter().map(|&w| local[w as usize]);
        rows.extend(column.filter(|&w| w != usize::MAX));
        starts.push(rows.len());
    }
    let entries = rows.len();
    let too_large = || LinalgError::TooLarge { unknowns: n, entries };
    let matrix = SymbolicSparseColMatRef::new_checked(n, n, &starts, None, &rows);
    let mut memory = MemBuffer::try_new(amd::order_scratch::<usize>(n, entries)).map_err(|_| too_large())?;
    let (mut forward, mut inverse) = (vec![0_usize; n], vec![0_usize; n]);
    let stack = MemStack::new(&mut memory);
    amd::order(&mut forward, &mut inverse, matrix, amd::Control::default(), stack).map_err(|_| too_large())?;
    Ok(forward.iter().map(|&k| free[k]).collect())
}
