//! Dense element blocks into a sparse symmetric matrix: blocks in parallel, then sums in parallel.
//!
//! Blocks of a group of elements are computed into one buffer. Every task then owns a range of the matrix and adds to
//! it what the group holds for it, in element order: results are the same bits for any number of threads.

use std::ops::Range;

use rayon::prelude::*;

use super::element::ElementPoints;
use crate::linalg::{LinalgError, Pattern, Scalar};

/// Elements a task computes before the next is handed out.
pub(crate) const CHUNK: usize = 64;
/// Chunks whose blocks are in memory at a time.
const GROUP: usize = 256;
/// Ranges of the matrix that are added to in parallel.
const RANGES: usize = 8;

/// Slots of every element's lower triangle in a pattern's value array; made once a pattern.
#[derive(Debug, Clone)]
pub struct Scatter {
    starts: Vec<u32>,
    slots: Vec<u32>,
    /// Smallest and largest slot of each chunk of elements.
    reach: Vec<[u32; 2]>,
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
        let chunks = starts[1..].chunks(CHUNK).scan(0, |first, ends| {
            let own = &slots[*first as usize..ends[ends.len() - 1] as usize];
            *first = ends[ends.len() - 1];
            Some(own)
        });
        let reach = chunks.map(|own| own.iter().fold([u32::MAX, 0], |[a, b], &s| [a.min(s), b.max(s)])).collect();
        Ok(Self { starts, slots, reach })
    }

    /// Number of elements.
    pub fn len(&self) -> usize {
        self.starts.len() - 1
    }

    /// True without elements.
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }

    /// Where the entries of elements `elements` lie among those of all elements.
    fn entries(&self, elements: Range<usize>) -> Range<usize> {
        self.starts[elements.start] as usize..self.starts[elements.end] as usize
    }
}

/// A dense symmetric block: lower triangle by rows, entry `(i, j)`, `i >= j`, at `i (i + 1) / 2 + j`.
pub type Block<T> = [T];

/// Adds the block of every element into `values`.
///
/// `block(e, points, out)` fills a block that arrives as zeros. `buffer` is room for blocks, kept by the caller between
/// calls so that only the first allocates.
pub fn add_blocks<T: Scalar>(
    scatter: &Scatter,
    buffer: &mut Vec<T>,
    values: &mut [T],
    block: impl Fn(usize, &mut ElementPoints, &mut Block<T>) + Sync,
) {
    for first in (0..scatter.len()).step_by(GROUP * CHUNK) {
        let group = first..(first + GROUP * CHUNK).min(scatter.len());
        let entries = scatter.entries(group.clone());
        buffer.resize(buffer.len().max(entries.len()), T::ZERO);
        let blocks = &mut buffer[..entries.len()];
        compute(scatter, group.clone(), blocks, &block);
        let range = values.len().div_ceil(RANGES).max(1);
        values.par_chunks_mut(range).enumerate().for_each(|(k, own)| {
            add_to_range(scatter, group.clone(), blocks, k * range, own);
        });
    }
}

/// Computes the blocks of some elements, halves in parallel.
fn compute<T: Scalar>(
    scatter: &Scatter,
    elements: Range<usize>,
    blocks: &mut [T],
    block: &(impl Fn(usize, &mut ElementPoints, &mut Block<T>) + Sync),
) {
    if elements.len() > CHUNK {
        let middle = elements.start + (elements.len() / 2).next_multiple_of(CHUNK);
        let (left, right) = (elements.start..middle, middle..elements.end);
        let (left_blocks, right_blocks) = blocks.split_at_mut(scatter.entries(left.clone()).len());
        rayon::join(|| compute(scatter, left, left_blocks, block), || compute(scatter, right, right_blocks, block));
        return;
    }
    let mut points = ElementPoints::default();
    blocks.fill(T::ZERO);
    let mut rest = blocks;
    for e in elements {
        let (own, after) = rest.split_at_mut(scatter.entries(e..e + 1).len());
        block(e, &mut points, own);
        rest = after;
    }
}

/// Adds what `blocks` hold for the slots from `first` on that `own` covers.
fn add_to_range<T: Scalar>(scatter: &Scatter, elements: Range<usize>, blocks: &[T], first: usize, own: &mut [T]) {
    let origin = scatter.entries(elements.clone()).start;
    let end = first + own.len();
    for start in elements.clone().step_by(CHUNK) {
        let [low, high] = scatter.reach[start / CHUNK];
        if (high as usize) < first || low as usize >= end {
            continue;
        }
        let entries = scatter.entries(start..(start + CHUNK).min(elements.end));
        let blocks = &blocks[entries.start - origin..entries.end - origin];
        for (&slot, &value) in scatter.slots[entries].iter().zip(blocks) {
            if let Some(sum) = own.get_mut((slot as usize).wrapping_sub(first)) {
                *sum += value;
            }
        }
    }
}

/// Computes one value an element in parallel; the result is in element order.
pub fn map_elements<R: Send>(count: usize, f: impl Fn(usize, &mut ElementPoints) -> R + Sync) -> Vec<R> {
    (0..count).into_par_iter().with_min_len(CHUNK).map_init(ElementPoints::default, |points, e| f(e, points)).collect()
}
