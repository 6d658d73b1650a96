//! Properties of the direct solver on random and awkward systems, against faer's sparse LU with partial pivoting (a
//! general-purpose library, independent of it) and against the system's own equations.
#![allow(clippy::unwrap_used, reason = "tests")]

mod linalg_support;

use std::sync::Arc;

use linalg_support::{faer_lu, laplacian, pattern_of, quadratic_grid, relative_difference, wavy};
use num_complex::Complex64;
use proptest::prelude::*;
use proptest::test_runner::RngSeed;
use solver::linalg::{Factor, LinalgError, Plan, SymmetricMatrix, checked_solve};

/// Random cases, the same in every run.
fn fixed(cases: u32) -> ProptestConfig {
    ProptestConfig {
        cases,
        failure_persistence: None,
        rng_seed: RngSeed::Fixed(20_240_601),
        ..ProptestConfig::default()
    }
}

fn factor(matrix: &SymmetricMatrix<Complex64>, points: Option<&[[f64; 2]]>) -> Result<Factor<Complex64>, LinalgError> {
    let plan = Plan::new(Arc::clone(&matrix.pattern), points, &[]).unwrap();
    Factor::new(&Arc::new(plan), &matrix.values)
}

/// Solves with the checked solve and compares with LU.
fn assert_agrees_with_lu(matrix: &SymmetricMatrix<Complex64>, points: Option<&[[f64; 2]]>, what: &str) {
    let rhs = wavy(matrix.pattern.n());
    let solved = checked_solve(matrix, &factor(matrix, points).unwrap(), &rhs).unwrap();
    assert!(solved.backward_error <= 1e-14, "{what}: backward error {:.2e}", solved.backward_error);
    let difference = relative_difference(&solved.x, &faer_lu(matrix, &rhs));
    assert!(difference < 1e-10, "{what}: differs from LU by {difference:.2e}");
}

/// Entries without structure, and a diagonal that makes real and imaginary part diagonally dominant.
fn dominant(n: usize, cliques: &[Vec<u32>]) -> SymmetricMatrix<Complex64> {
    let pattern = pattern_of(n, cliques);
    let mut matrix = SymmetricMatrix::zeros(Arc::clone(&pattern));
    for col in 0..n {
        let first = pattern.starts()[col];
        matrix.values[first] += Complex64::new(0.1, 0.1);
        for (offset, &row) in pattern.column(col).iter().enumerate().skip(1) {
            let k = (first + offset) as f64;
            let value = Complex64::new((1.1 * k).sin(), (0.9 * k).cos());
            matrix.values[first + offset] = value;
            let size = Complex64::new(value.re.abs(), value.im.abs());
            matrix.values[first] += size;
            matrix.values[pattern.starts()[row as usize]] += size;
        }
    }
    matrix
}

#[test]
fn one_dense_front_of_any_order_agrees_with_lu() {
    // Every count of columns and rows that does not fill a vector register or a tile, and panels beyond all blocks.
    for n in (1..=70).chain([127, 128, 129, 137, 200, 263, 301]) {
        let clique: Vec<u32> = (0..n).collect();
        assert_agrees_with_lu(&dominant(n as usize, &[clique]), None, &format!("{n} unknowns"));
    }
}

#[test]
fn a_front_with_a_border_of_any_order_agrees_with_lu() {
    // Two cliques that share `border` unknowns: two leaves hand their borders to one root.
    for pivots in [1_u32, 2, 3, 5, 8, 13, 31, 64, 100, 150] {
        for border in [1_u32, 2, 3, 4, 5, 7, 9, 11, 12, 13, 23, 50, 131] {
            let shared = 2 * pivots..2 * pivots + border;
            let cliques = [0..pivots, pivots..2 * pivots].map(|own| own.chain(shared.clone()).collect::<Vec<u32>>());
            let matrix = dominant((2 * pivots + border) as usize, &cliques);
            let points: Vec<[f64; 2]> = (0..matrix.pattern.n()).map(|v| [f64::from(v as u32 % pivots), 0.0]).collect();
            assert_agrees_with_lu(&matrix, Some(&points), &format!("{pivots} pivots, {border} below"));
        }
    }
}

proptest! {
    #![proptest_config(fixed(24))]

    #[test]
    fn overlapping_random_cliques_agree_with_lu(
        n in 2_u32..400,
        raw in prop::collection::vec(prop::collection::vec(0_u32..400, 1..40), 1..30),
        spread in prop::collection::vec((0.0..1.0_f64, 0.0..1.0_f64), 400),
    ) {
        let cliques: Vec<Vec<u32>> = raw.iter().map(|c| c.iter().map(|v| v % n).collect()).collect();
        let matrix = dominant(n as usize, &cliques);
        let points: Vec<[f64; 2]> = spread[..n as usize].iter().map(|&(x, y)| [x, y]).collect();
        for points in [None, Some(&points[..])] {
            assert_agrees_with_lu(&matrix, points, "random cliques");
        }
    }

    #[test]
    fn nearly_singular_systems_are_solved_to_rounding_or_refused_and_never_give_what_is_no_number(
        cells in 1_usize..9,
        power in 4.0..24.0_f64,
    ) {
        let (elements, points) = quadratic_grid(cells);
        let pattern = pattern_of(points.len(), &elements);
        let matrix = laplacian(&pattern, Complex64::new(0.0, 10_f64.powf(-power)));
        let solved = factor(&matrix, Some(&points)).and_then(|f| checked_solve(&matrix, &f, &wavy(points.len())));
        match solved {
            Ok(solved) => {
                prop_assert!(solved.backward_error <= 1e-14, "backward error {:.2e}", solved.backward_error);
                prop_assert!(solved.x.iter().all(|v| v.is_finite()));
            }
            Err(error) => {
                prop_assert!(matches!(error, LinalgError::ZeroPivot { .. } | LinalgError::Inaccurate { .. }), "{error}");
                prop_assert!(power > 12.0, "refused at a shift of 1e-{power:.1}: {error}");
            }
        }
    }
}

#[test]
fn meshes_that_do_not_touch_are_solved_together_and_a_singular_one_among_them_is_found() {
    let (elements, points) = quadratic_grid(5);
    let n = points.len() as u32;
    let copies: Vec<Vec<u32>> =
        (0..3).flat_map(|copy| elements.iter().map(move |e| e.iter().map(|v| v + copy * n).collect())).collect();
    // The last unknown belongs to no element.
    let pattern = pattern_of(3 * n as usize + 1, &copies);
    let all: Vec<[f64; 2]> = points.iter().chain(&points).chain(&points).chain(&[[0.0, 9.0]]).copied().collect();
    let mut matrix = laplacian(&pattern, Complex64::new(0.2, 0.1));
    for points in [None, Some(&all[..])] {
        assert_agrees_with_lu(&matrix, points, "three meshes and a lone unknown");
    }
    // The second mesh loses what holds it.
    for v in n..2 * n {
        matrix.values[pattern.starts()[v as usize]] -= Complex64::new(0.2, 0.1);
    }
    for points in [None, Some(&all[..])] {
        let error = factor(&matrix, points).unwrap_err();
        let LinalgError::ZeroPivot { unknown, .. } = error else { panic!("{error}") };
        assert!((n as usize..2 * n as usize).contains(&unknown), "unknown {unknown} is not of the second mesh");
    }
}
