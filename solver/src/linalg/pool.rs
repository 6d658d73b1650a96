//! Memory of blocks that come and go within a factorisation, kept for the next.
//! Convention: a block is at least as long as was asked for, and holds what its last user left in it.

use std::sync::{Mutex, PoisonError};

use super::scalar::Scalar;

/// Values of the smallest block.
const SMALLEST: usize = 64;

/// Blocks no one uses, by length.
pub(super) struct Pool<T> {
    classes: Vec<Mutex<Vec<Vec<T>>>>,
}

impl<T: Scalar> Pool<T> {
    /// An empty pool for blocks of at most `longest` values.
    pub(super) fn new(longest: usize) -> Self {
        Self { classes: (0..=class(longest).0).map(|_| Mutex::default()).collect() }
    }

    /// A block of at least `length` values.
    pub(super) fn take(&self, length: usize) -> Vec<T> {
        let (class, size) = class(length);
        let kept = self.classes[class].lock().unwrap_or_else(PoisonError::into_inner).pop();
        kept.unwrap_or_else(|| vec![T::ZERO; size])
    }

    /// Takes a block back.
    pub(super) fn give(&self, block: Vec<T>) {
        let (class, _) = class(block.len());
        self.classes[class].lock().unwrap_or_else(PoisonError::into_inner).push(block);
    }
}

/// Class of blocks that hold `length` values, and their length: at most a quarter more, or the smallest.
fn class(length: usize) -> (usize, usize) {
    let length = length.max(SMALLEST);
    let size = length.next_multiple_of(1 << (length.ilog2() - 2));
    let octave = size.ilog2();
    let quarter = (size >> (octave - 2)) - 4;
    (4 * (octave - SMALLEST.ilog2()) as usize + quarter, size)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_block_given_back_is_taken_again_for_any_length_of_its_class() {
        let pool = Pool::<f64>::new(1 << 20);
        for length in (0..2000).chain([65_535, 65_536, 65_537, 1 << 20]) {
            let mut block = pool.take(length);
            assert!(block.len() >= length && block.len() <= (length * 5).div_ceil(4).max(SMALLEST), "{length}");
            let long = block.len();
            block[0] = 7.0 + length as f64;
            pool.give(block);
            let again = pool.take(length);
            assert_eq!((again.len(), again[0]), (long, 7.0 + length as f64));
        }
    }
}
