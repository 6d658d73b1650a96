//! Dense element blocks into a sparse symmetric matrix: blocks in parallel, sums in element order.
//!
//! The order of additions does not depend on the number of threads, so results are the same bits for any number.

use rayon::prelude::*;

use super::element::ElementPoints;
use crate::linalg::{LinalgError, Pattern, Scalar};

/// Elements a task computes before the next is handed out.
const CHUNK: usize = 64;

/// Slots of every element's lower triangle in a pattern's value array; made once a pattern.
#[derive(Debug, Clone)]
pub struct Scatter {
    starts: Vec<u32>,
    slots: Vec<u32>,
}

impl Scatter {
    /// Looks up the slots of the unknowns each element couples.
    ///
    /// # Errors
    /// A coupling that the pattern does not hold.
    pub fn new<'a>(pattern: &Pattern, elements: impl Iterator<Item = &'a [u32]>) -> Result<Self, LinalgError> {
        let (mut starts, mut slots, mut own) = (vec![0], Vec::new(), Vec::new());
        for dofs in elements {
            pattern.clique_slots(dofs, &mut own)?;
            slots.extend_from_slice(&own);
            starts.push(slots.len() as u32);
        }
        Ok(Self { starts, slots })
    }

    /// Number of elements.
    pub fn len(&self) -> usize {
        self.starts.len() - 1
    }

    /// True without elements.
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }
}

/// A dense symmetric block: lower triangle by rows, entry `(i, j)`, `i >= j`, at `i (i + 1) / 2 + j`.
pub type Block<T> = [T];

/// Adds the block of every element into `values`.
///
/// `block(e, points, out)` fills a block that arrives as zeros.
pub fn add_blocks<T: Scalar + Default>(
    scatter: &Scatter,
    values: &mut [T],
    block: impl Fn(usize, &mut ElementPoints, &mut Block<T>) + Sync,
) {
    let starts: Vec<usize> = (0..scatter.len()).step_by(CHUNK).collect();
    for group in starts.chunks(64) {
        let blocks: Vec<Vec<T>> = group
            .par_iter()
            .map_init(ElementPoints::default, |points, &start| {
                let end = (start + CHUNK).min(scatter.len());
                let first = scatter.starts[start] as usize;
                let mut out = vec![T::default(); scatter.starts[end] as usize - first];
                for e in start..end {
                    let own = scatter.starts[e] as usize - first..scatter.starts[e + 1] as usize - first;
                    block(e, points, &mut out[own]);
                }
                out
            })
            .collect();
        for (&start, chunk) in group.iter().zip(&blocks) {
            let slots = &scatter.slots[scatter.starts[start] as usize..];
            for (&slot, &v) in slots.iter().zip(chunk) {
                values[slot as usize] += v;
            }
        }
    }
}

/// Computes one value an element in parallel; the result is in element order.
pub fn map_elements<R: Send>(count: usize, f: impl Fn(usize, &mut ElementPoints) -> R + Sync) -> Vec<R> {
    (0..count).into_par_iter().with_min_len(CHUNK).map_init(ElementPoints::default, |points, e| f(e, points)).collect()
}
