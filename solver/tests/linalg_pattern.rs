//! Patterns and symmetric matrices against dense arithmetic written out.
#![allow(clippy::unwrap_used, reason = "tests")]

mod linalg_support;

use std::sync::Arc;

use linalg_support::pattern_of;
use num_complex::Complex64;
use proptest::prelude::*;
use solver::linalg::{Datum, LinalgError, Pattern, SymmetricMatrix};

#[test]
fn a_pattern_holds_exactly_the_pairs_of_its_cliques_and_the_diagonal() {
    let pattern = pattern_of(5, &[vec![3, 0, 1], vec![1, 3], vec![3, 3]]);
    assert_eq!(pattern.n(), 5);
    assert_eq!(pattern.column(0), [0, 1, 3]);
    assert_eq!(pattern.column(1), [1, 3]);
    assert_eq!(pattern.column(2), [2]);
    assert_eq!(pattern.nnz(), 8);
    assert_eq!(pattern.slot(1, 3), Some(4));
    assert_eq!(pattern.slot(3, 1), Some(4));
    assert_eq!(pattern.slot(2, 4), None);
    assert_eq!(pattern.slot(9, 0), None);
}

#[test]
fn the_slots_of_a_clique_come_packed_by_rows() {
    let pattern = pattern_of(4, &[[3_u32, 0, 1]]);
    let mut slots = vec![77];
    pattern.clique_slots(&[3, 0, 1], &mut slots).unwrap();
    let pairs = [(3, 3), (0, 3), (0, 0), (1, 3), (1, 0), (1, 1)];
    let expected: Vec<u32> = pairs.iter().map(|&(i, j)| pattern.slot(i, j).unwrap() as u32).collect();
    assert_eq!(slots, expected);
    assert_eq!(pattern.clique_slots(&[2, 3], &mut slots), Err(LinalgError::NotInPattern { row: 3, col: 2 }));
    assert_eq!(pattern.clique_slots(&[0, 9], &mut slots), Err(LinalgError::NotInPattern { row: 9, col: 0 }));
}

#[test]
fn an_empty_pattern_is_no_special_case() {
    let pattern = Pattern::from_cliques(0, std::iter::empty());
    assert_eq!((pattern.n(), pattern.nnz()), (0, 0));
}

#[test]
fn triplets_that_are_not_symmetric_are_refused_with_the_place() {
    let mut triplets = sprs::TriMat::<f64>::new((2, 2));
    triplets.add_triplet(0, 1, 2.0);
    triplets.add_triplet(1, 0, 1.0);
    let error = SymmetricMatrix::from_triplets(&triplets).unwrap_err();
    assert_eq!(error, LinalgError::NotSymmetric { row: 1, col: 0, difference: 0.5 });
}

#[test]
fn a_wrong_length_is_refused() {
    let matrix = SymmetricMatrix::<f64>::zeros(pattern_of(3, &[[0_u32, 1]]));
    let expected = LinalgError::Size { what: Datum::Solution, expected: 3, found: 2 };
    assert_eq!(matrix.mul_add(&[1.0; 2], &mut [0.0; 3]), Err(expected));
    assert!(matrix.residual(&[1.0; 3], &[0.0; 4]).is_err());
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 40, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn products_and_residuals_agree_with_dense_arithmetic(
        entries in prop::collection::vec((0_usize..12, 0_usize..12, -1.0..1.0_f64, -1.0..1.0_f64), 1..60),
        x in prop::collection::vec((-1.0..1.0_f64, -1.0..1.0_f64), 12),
    ) {
        let n = 12;
        let mut dense = vec![vec![Complex64::default(); n]; n];
        let mut triplets = sprs::TriMat::new((n, n));
        for &(i, j, re, im) in &entries {
            let value = Complex64::new(re, im);
            triplets.add_triplet(i, j, value);
            dense[i][j] += value;
            if i != j {
                triplets.add_triplet(j, i, value);
                dense[j][i] += value;
            }
        }
        let x: Vec<Complex64> = x.iter().map(|&(re, im)| Complex64::new(re, im)).collect();
        let matrix = SymmetricMatrix::from_triplets(&triplets).unwrap();
        let mut y = vec![Complex64::default(); n];
        matrix.mul_add(&x, &mut y).unwrap();
        let b = vec![Complex64::new(1.0, -2.0); n];
        let residual = matrix.residual(&x, &b).unwrap();
        let full = matrix.to_sprs();
        for i in 0..n {
            let product: Complex64 = (0..n).map(|j| dense[i][j] * x[j]).sum();
            let size = |v: Complex64| v.re.abs() + v.im.abs();
            let scale: f64 = 3.0 + (0..n).map(|j| size(dense[i][j]) * size(x[j])).sum::<f64>();
            prop_assert!((y[i] - product).norm() < 1e-13);
            prop_assert!((residual.r[i] - (b[i] - product)).norm() < 1e-13);
            prop_assert!((residual.scale[i] - scale).abs() < 1e-13 * scale);
            for (j, &entry) in dense[i].iter().enumerate() {
                let stored = full.get(i, j).copied().unwrap_or_default();
                prop_assert!((stored - entry).norm() < 1e-13);
            }
        }
        let again = SymmetricMatrix::from_triplets(&full.to_triplets()).unwrap();
        prop_assert_eq!(again.values, matrix.values);
    }
}

trait ToTriplets {
    fn to_triplets(&self) -> sprs::TriMat<Complex64>;
}

impl ToTriplets for sprs::CsMat<Complex64> {
    fn to_triplets(&self) -> sprs::TriMat<Complex64> {
        let mut triplets = sprs::TriMat::new(self.shape());
        for (value, (i, j)) in self {
            triplets.add_triplet(i, j, *value);
        }
        triplets
    }
}

#[test]
fn patterns_are_shared_not_copied() {
    let pattern = pattern_of(2, &[[0_u32, 1]]);
    let matrix = SymmetricMatrix::<f64>::zeros(Arc::clone(&pattern));
    assert!(Arc::ptr_eq(&matrix.pattern, &pattern));
}
