//! Assembly of element blocks against the plain double loop, and for any number of threads.
#![allow(clippy::unwrap_used, reason = "tests")]

mod linalg_support;

use linalg_support::{pattern_of, quadratic_grid, with_threads};
use solver::fem::assemble::{Scatter, add_blocks};

/// A block entry without structure.
fn entry(element: usize, k: usize) -> f64 {
    (1.7 * element as f64 + 0.3 * k as f64).sin()
}

#[test]
fn blocks_are_added_as_by_a_plain_loop_to_the_last_bit_for_any_number_of_threads() {
    // More elements than one group of blocks holds, and an unknown that all of them share.
    let (quadratic, points) = quadratic_grid(95);
    let shared = points.len() as u32;
    let elements: Vec<Vec<u32>> = quadratic
        .iter()
        .enumerate()
        .map(|(e, own)| own.iter().copied().chain(e.is_multiple_of(7).then_some(shared)).collect())
        .collect();
    let pattern = pattern_of(points.len() + 1, &elements);
    let mut expected = vec![0.5; pattern.nnz()];
    for (e, unknowns) in elements.iter().enumerate() {
        let mut k = 0;
        for (i, &row) in unknowns.iter().enumerate() {
            for &col in &unknowns[..=i] {
                expected[pattern.slot(row, col).unwrap()] += entry(e, k);
                k += 1;
            }
        }
    }
    let scatter = Scatter::new(&pattern, elements.iter().map(Vec::as_slice)).unwrap();
    for threads in [1, 2, 5] {
        let mut values = vec![0.5; pattern.nnz()];
        let mut buffer = vec![f64::NAN; 3];
        with_threads(threads, || {
            add_blocks(&scatter, &mut buffer, &mut values, |e, _, out| {
                for (k, out) in out.iter_mut().enumerate() {
                    *out += entry(e, k);
                }
            });
        });
        assert!(values == expected, "{threads} threads");
    }
}

#[test]
fn no_elements_add_nothing() {
    let pattern = pattern_of(2, &[[0_u32, 1]]);
    let scatter = Scatter::new(&pattern, std::iter::empty()).unwrap();
    let mut values = vec![1.0; 3];
    add_blocks(&scatter, &mut Vec::new(), &mut values, |_, _, _| {});
    assert_eq!(values, [1.0; 3]);
}
