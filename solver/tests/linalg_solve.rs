//! The direct solver against faer's sparse LU with partial pivoting (a general-purpose library, independent of it),
//! against closed solutions, and against its own equations.
#![allow(clippy::unwrap_used, reason = "tests")]

mod linalg_support;

use std::sync::Arc;

use linalg_support::{faer_lu, laplacian, pattern_of, quadratic_grid, relative_difference, wavy, with_threads};
use num_complex::Complex64;
use proptest::prelude::*;
use proptest::test_runner::RngSeed;
use solver::linalg::{Datum, Factor, LinalgError, Pattern, Plan, SymmetricMatrix, checked_solve};

fn plan(pattern: &Arc<Pattern>, points: Option<&[[f64; 2]]>, last: &[u32]) -> Arc<Plan> {
    Arc::new(Plan::new(Arc::clone(pattern), points, last).unwrap())
}

/// One term `w (e_i - e_j)(e_i - e_j)^T`, with `w` in the first quadrant.
type Edge = (u32, u32, f64, f64);

/// Accretive by construction: edge terms and a diagonal, all with real and imaginary parts not negative.
fn accretive(n: usize, edges: &[Edge], diagonal: f64) -> SymmetricMatrix<Complex64> {
    let pairs: Vec<[u32; 2]> = edges.iter().map(|&(i, j, _, _)| [i, j]).collect();
    let pattern = pattern_of(n, &pairs);
    let mut matrix = SymmetricMatrix::zeros(Arc::clone(&pattern));
    for v in 0..n as u32 {
        matrix.values[pattern.slot(v, v).unwrap()] += Complex64::new(diagonal, 0.3 * diagonal);
    }
    for &(i, j, re, im) in edges.iter().filter(|(i, j, _, _)| i != j) {
        let w = Complex64::new(re, im);
        matrix.values[pattern.slot(i, i).unwrap()] += w;
        matrix.values[pattern.slot(j, j).unwrap()] += w;
        matrix.values[pattern.slot(i, j).unwrap()] -= w;
    }
    matrix
}

fn edges(n: u32, most: usize) -> impl Strategy<Value = Vec<Edge>> {
    prop::collection::vec((0..n, 0..n, 0.0..1.0_f64, 0.0..1.0_f64), 0..most)
}

proptest! {
    #![proptest_config(ProptestConfig {
        cases: 48,
        failure_persistence: None,
        rng_seed: RngSeed::Fixed(20_240_601),
        ..ProptestConfig::default()
    })]

    #[test]
    fn random_accretive_systems_agree_with_lu_for_every_order(
        n in 1_usize..260,
        raw in edges(260, 900),
        points in prop::collection::vec((-1.0..1.0_f64, -1.0..1.0_f64), 260),
        held in prop::collection::vec(0_u32..260, 0..5),
    ) {
        let edges: Vec<Edge> = raw.iter().map(|&(i, j, a, b)| (i % n as u32, j % n as u32, a, b)).collect();
        let matrix = accretive(n, &edges, 0.05);
        let points: Vec<[f64; 2]> = points[..n].iter().map(|&(x, y)| [x, y]).collect();
        let held: Vec<u32> = held.iter().map(|v| v % n as u32).collect();
        let rhs = wavy(n);
        let reference = faer_lu(&matrix, &rhs);
        for points in [None, Some(&points[..])] {
            let factor = Factor::new(&plan(&matrix.pattern, points, &held), &matrix.values).unwrap();
            let solved = checked_solve(&matrix, &factor, &rhs).unwrap();
            prop_assert!(solved.backward_error <= 1e-14, "backward error {:.2e}", solved.backward_error);
            let difference = relative_difference(&solved.x, &reference);
            prop_assert!(difference < 1e-10, "differs from LU by {difference:.2e}");
        }
    }

    #[test]
    fn real_positive_definite_systems_agree_with_lu(n in 1_usize..120, raw in edges(120, 400)) {
        let edges: Vec<Edge> = raw.iter().map(|&(i, j, a, _)| (i % n as u32, j % n as u32, a, 0.0)).collect();
        let matrix = accretive(n, &edges, 0.05);
        let real = SymmetricMatrix {
            pattern: Arc::clone(&matrix.pattern),
            values: matrix.values.iter().map(|v| v.re).collect::<Vec<f64>>(),
        };
        let as_complex = SymmetricMatrix {
            pattern: Arc::clone(&matrix.pattern),
            values: real.values.iter().map(|&v| Complex64::from(v)).collect(),
        };
        let rhs: Vec<f64> = wavy(n).iter().map(|v| v.re).collect();
        let complex_rhs: Vec<Complex64> = rhs.iter().map(|&v| v.into()).collect();
        let factor = Factor::new(&plan(&real.pattern, None, &[]), &real.values).unwrap();
        let solved = checked_solve(&real, &factor, &rhs).unwrap();
        let x: Vec<Complex64> = solved.x.iter().map(|&v| v.into()).collect();
        prop_assert!(solved.backward_error <= 1e-14);
        prop_assert!(relative_difference(&x, &faer_lu(&as_complex, &complex_rhs)) < 1e-10);
    }
}

#[test]
fn one_unknown_is_a_division() {
    let mut matrix = SymmetricMatrix::<Complex64>::zeros(pattern_of(1, &[[0_u32]]));
    matrix.values[0] = Complex64::new(3.0, 4.0);
    let factor = Factor::new(&plan(&matrix.pattern, Some(&[[0.0, 0.0]]), &[]), &matrix.values).unwrap();
    let solved = checked_solve(&matrix, &factor, &[Complex64::new(25.0, 0.0)]).unwrap();
    assert!((solved.x[0] - Complex64::new(3.0, -4.0)).norm() < 1e-15 * 5.0, "{}", solved.x[0]);
}

#[test]
fn a_long_chain_is_solved_without_recursion_along_it() {
    // -x[k-1] + 2 x[k] - x[k+1] = b with x[k] = sin k, whose differences are known in closed form.
    let n = 300_000;
    let links: Vec<[u32; 2]> = (1..n).map(|k| [k - 1, k]).collect();
    let mut matrix = SymmetricMatrix::<f64>::zeros(pattern_of(n as usize, &links));
    let starts = matrix.pattern.starts().to_vec();
    for col in 0..n as usize {
        matrix.values[starts[col]] = 2.0;
        if starts[col + 1] > starts[col] + 1 {
            matrix.values[starts[col] + 1] = -1.0;
        }
    }
    let x = |k: i64| (k as f64).sin();
    let mut rhs: Vec<f64> = (0..i64::from(n)).map(|k| (2.0 - 2.0 * 1_f64.cos()) * x(k)).collect();
    rhs[0] += x(-1);
    rhs[n as usize - 1] += x(i64::from(n));
    let line: Vec<[f64; 2]> = (0..n).map(|k| [f64::from(k), 0.0]).collect();
    for points in [None, Some(&line[..])] {
        let factor = Factor::new(&plan(&matrix.pattern, points, &[]), &matrix.values).unwrap();
        let solved = checked_solve(&matrix, &factor, &rhs).unwrap();
        assert!(solved.backward_error <= 1e-14);
        // The condition number is about 4 n^2 / pi^2 = 4e10.
        let error = solved.x.iter().zip(0..).map(|(&found, k)| (found - x(k)).abs()).fold(0.0, f64::max);
        assert!(error < 1e-5, "error {error:.1e}");
    }
}

#[test]
fn no_unknowns_are_solved_by_nothing() {
    let matrix = SymmetricMatrix::<f64>::zeros(Arc::new(Pattern::from_cliques(0, std::iter::empty())));
    for points in [None, Some(&[][..])] {
        let factor = Factor::new(&plan(&matrix.pattern, points, &[]), &matrix.values).unwrap();
        assert!(checked_solve(&matrix, &factor, &[]).unwrap().x.is_empty());
    }
}

#[test]
fn a_quadratic_mesh_of_twenty_thousand_unknowns_is_solved_to_rounding() {
    let (elements, points) = quadratic_grid(70);
    let pattern = pattern_of(points.len(), &elements);
    let matrix = laplacian(&pattern, Complex64::new(0.0, 1e-3));
    let rhs = wavy(points.len());
    let plan = plan(&pattern, Some(&points), &[]);
    let factor = Factor::new(&plan, &matrix.values).unwrap();
    let solved = checked_solve(&matrix, &factor, &rhs).unwrap();
    assert!(solved.backward_error <= 1e-14, "backward error {:.2e}", solved.backward_error);
    let difference = relative_difference(&solved.x, &faer_lu(&matrix, &rhs));
    assert!(difference < 1e-10, "differs from LU by {difference:.2e}");
    // 19881 unknowns: a good order keeps about 44 entries a column; minimum degree alone keeps more.
    assert!(plan.fill() < 55 * points.len(), "fill {}", plan.fill());
}

/// A mesh with a clique of boundary unknowns and rows that touch a third of the mesh.
fn bordered(cells: usize, dense_rows: u32) -> (SymmetricMatrix<Complex64>, Vec<[f64; 2]>, Vec<u32>) {
    let (elements, mut points) = quadratic_grid(cells);
    let (side, nodes) = (2 * cells + 1, points.len() as u32);
    let boundary: Vec<u32> = (0..side).map(|k| (k * side) as u32).collect();
    let mut cliques: Vec<Vec<u32>> = elements.iter().map(|e| e.to_vec()).collect();
    cliques.push(boundary.clone());
    let mut last = boundary;
    for k in 0..dense_rows {
        let row = nodes + k;
        points.push([f64::NAN, f64::NAN]);
        cliques.extend((k..nodes).step_by(3).map(|node| vec![node, row]));
        last.push(row);
    }
    let pattern = pattern_of(points.len(), &cliques);
    (laplacian(&pattern, Complex64::new(0.0, 0.1)), points, last)
}

#[test]
fn dense_rows_and_a_boundary_clique_agree_with_lu_named_or_not() {
    let (matrix, points, last) = bordered(16, 3);
    let rhs = wavy(points.len());
    let reference = faer_lu(&matrix, &rhs);
    for (points, last) in [(Some(&points[..]), &last[..]), (Some(&points[..]), &[]), (None, &last[..]), (None, &[])] {
        let factor = Factor::new(&plan(&matrix.pattern, points, last), &matrix.values).unwrap();
        let solved = checked_solve(&matrix, &factor, &rhs).unwrap();
        assert!(solved.backward_error <= 1e-14, "backward error {:.2e}", solved.backward_error);
        assert!(relative_difference(&solved.x, &reference) < 1e-10);
    }
}

#[test]
fn dense_rows_cost_their_length_in_fill_not_the_square_of_it() {
    let (matrix, points, last) = bordered(40, 3);
    let (bare, bare_points, bare_last) = bordered(40, 0);
    let with_rows = plan(&matrix.pattern, Some(&points), &last).fill();
    let without = plan(&bare.pattern, Some(&bare_points), &bare_last).fill();
    let room = 3 * points.len() + points.len();
    assert!(with_rows < without + room, "fill {with_rows} with three dense rows, {without} without");
    let unnamed = plan(&matrix.pattern, Some(&points), &[]).fill();
    assert!(unnamed < 2 * with_rows, "fill {unnamed} when the dense rows are not named");
}

#[test]
fn coinciding_and_missing_points_still_give_an_order() {
    let (elements, points) = quadratic_grid(12);
    let pattern = pattern_of(points.len(), &elements);
    let matrix = laplacian(&pattern, Complex64::new(0.1, 0.1));
    let rhs = wavy(points.len());
    let reference = faer_lu(&matrix, &rhs);
    for value in [0.0, f64::NAN, f64::INFINITY, 1e308] {
        let points = vec![[value, 0.0]; points.len()];
        let factor = Factor::new(&plan(&pattern, Some(&points), &[]), &matrix.values).unwrap();
        let solved = checked_solve(&matrix, &factor, &rhs).unwrap();
        assert!(relative_difference(&solved.x, &reference) < 1e-10);
    }
}

#[test]
fn a_floating_mesh_is_refused_as_singular_at_every_size() {
    for cells in [1, 2, 5, 13, 40, 70, 110, 180] {
        let (elements, points) = quadratic_grid(cells);
        let pattern = pattern_of(points.len(), &elements);
        let matrix = laplacian(&pattern, Complex64::default());
        let error = Factor::new(&plan(&pattern, Some(&points), &[]), &matrix.values).unwrap_err();
        assert!(matches!(error, LinalgError::ZeroPivot { .. }), "{cells} cells: {error}");
    }
}

#[test]
fn an_unknown_without_an_equation_is_named() {
    let (elements, points) = quadratic_grid(4);
    let pattern = pattern_of(points.len(), &elements);
    let mut matrix = laplacian(&pattern, Complex64::new(1.0, 0.0));
    for other in 0..points.len() as u32 {
        if let Some(slot) = pattern.slot(17, other) {
            matrix.values[slot] = Complex64::default();
        }
    }
    let error = Factor::new(&plan(&pattern, Some(&points), &[]), &matrix.values).unwrap_err();
    assert!(matches!(error, LinalgError::ZeroPivot { unknown: 17, ratio: 0.0, .. }), "{error}");
}

#[test]
fn a_zero_diagonal_that_needs_pivoting_is_refused() {
    let mut matrix = SymmetricMatrix::<f64>::zeros(pattern_of(2, &[[0_u32, 1]]));
    matrix.values[1] = 1.0;
    let error = Factor::new(&plan(&matrix.pattern, None, &[]), &matrix.values).unwrap_err();
    assert!(matches!(error, LinalgError::ZeroPivot { ratio: 0.0, .. }), "{error}");
}

#[test]
fn a_border_with_zero_diagonal_is_solved_when_it_comes_last() {
    // [2 1; 1 0] x = [3; 1] has x = (1, 1).
    let mut matrix = SymmetricMatrix::<f64>::zeros(pattern_of(2, &[[0_u32, 1]]));
    (matrix.values[0], matrix.values[1]) = (2.0, 1.0);
    let factor = Factor::new(&plan(&matrix.pattern, None, &[1]), &matrix.values).unwrap();
    let solved = checked_solve(&matrix, &factor, &[3.0, 1.0]).unwrap();
    assert!((solved.x[0] - 1.0).abs() + (solved.x[1] - 1.0).abs() < 1e-15);
}

#[test]
fn a_nearly_singular_mesh_is_still_solved_to_rounding() {
    let (elements, points) = quadratic_grid(30);
    let pattern = pattern_of(points.len(), &elements);
    let matrix = laplacian(&pattern, Complex64::new(0.0, 1e-11));
    let factor = Factor::new(&plan(&pattern, Some(&points), &[]), &matrix.values).unwrap();
    let solved = checked_solve(&matrix, &factor, &wavy(points.len())).unwrap();
    assert!(solved.backward_error <= 1e-14, "backward error {:.2e}", solved.backward_error);
}

#[test]
fn a_row_scaled_by_ten_orders_is_not_mistaken_for_a_singular_one() {
    let (elements, points) = quadratic_grid(10);
    let pattern = pattern_of(points.len(), &elements);
    let mut matrix = laplacian(&pattern, Complex64::new(0.0, 0.5));
    let scale = |v: u32| if v.is_multiple_of(3) { 1e-10 } else { 1.0 };
    for col in 0..points.len() {
        for (offset, &row) in pattern.column(col).iter().enumerate() {
            matrix.values[pattern.starts()[col] + offset] *= scale(row) * scale(col as u32);
        }
    }
    let factor = Factor::new(&plan(&pattern, Some(&points), &[]), &matrix.values).unwrap();
    let solved = checked_solve(&matrix, &factor, &wavy(points.len())).unwrap();
    assert!(solved.backward_error <= 1e-14, "backward error {:.2e}", solved.backward_error);
}

#[test]
fn refactoring_gives_the_same_bits_as_a_first_factorisation() {
    let (elements, points) = quadratic_grid(40);
    let pattern = pattern_of(points.len(), &elements);
    let (first, second) =
        (laplacian(&pattern, Complex64::new(0.0, 0.1)), laplacian(&pattern, Complex64::new(0.3, 7.0)));
    let plan = plan(&pattern, Some(&points), &[]);
    let fresh = Factor::new(&plan, &second.values).unwrap();
    let mut reused = Factor::new(&plan, &first.values).unwrap();
    reused.refactor(&second.values).unwrap();
    let (mut a, mut b) = (wavy(points.len()), wavy(points.len()));
    fresh.solve_in_place(&mut a).unwrap();
    reused.solve_in_place(&mut b).unwrap();
    assert_eq!(a, b);
}

#[test]
fn one_two_and_five_threads_give_the_same_bits() {
    // Large enough for fronts whose borders are shared out among threads.
    let (matrix, points, last) = bordered(130, 2);
    let rhs = wavy(points.len());
    let run = || {
        let factor = Factor::new(&plan(&matrix.pattern, Some(&points), &last), &matrix.values).unwrap();
        let mut many = [&rhs[..], &rhs[..], &matrix.residual(&rhs, &rhs).unwrap().r].concat();
        factor.solve_in_place(&mut many).unwrap();
        many
    };
    let one = with_threads(1, run);
    assert!(one.iter().all(|v| v.is_finite()));
    for threads in [2, 5] {
        assert!(with_threads(threads, run) == one, "{threads} threads differ from one");
    }
}

#[test]
fn right_hand_sides_do_not_depend_on_their_neighbours() {
    let (matrix, points, last) = bordered(12, 1);
    let n = points.len();
    let factor = Factor::new(&plan(&matrix.pattern, Some(&points), &last), &matrix.values).unwrap();
    let single: Vec<Complex64> = wavy(5 * n);
    let mut together = single.clone();
    factor.solve_in_place(&mut together).unwrap();
    for k in 0..5 {
        let mut alone = single[k * n..(k + 1) * n].to_vec();
        factor.solve_in_place(&mut alone).unwrap();
        assert_eq!(alone, together[k * n..(k + 1) * n]);
    }
}

#[test]
fn values_that_are_no_numbers_are_refused_with_their_place() {
    let (elements, points) = quadratic_grid(3);
    let pattern = pattern_of(points.len(), &elements);
    let mut matrix = laplacian(&pattern, Complex64::new(1.0, 0.0));
    let plan = plan(&pattern, Some(&points), &[]);
    let mut factor = Factor::new(&plan, &matrix.values).unwrap();
    let mut rhs = wavy(points.len());
    rhs[5].im = f64::INFINITY;
    let error = checked_solve(&matrix, &factor, &rhs).unwrap_err();
    assert_eq!(error, LinalgError::NotFinite { what: Datum::RightHandSide, index: 5 });
    matrix.values[7].re = f64::NAN;
    let error = factor.refactor(&matrix.values).unwrap_err();
    assert_eq!(error, LinalgError::NotFinite { what: Datum::MatrixValues, index: 7 });
    assert_eq!(factor.solve_in_place(&mut rhs), Err(LinalgError::NotFactored));
}

#[test]
fn a_factor_of_another_matrix_is_refused_unless_refinement_can_mend_it() {
    let (elements, points) = quadratic_grid(8);
    let pattern = pattern_of(points.len(), &elements);
    let matrix = laplacian(&pattern, Complex64::new(0.0, 0.5));
    let far = laplacian(&pattern, Complex64::new(9.0, 0.0));
    let near = laplacian(&pattern, Complex64::new(0.0, 0.500_01));
    let plan = plan(&pattern, Some(&points), &[]);
    let rhs = wavy(points.len());
    let error = checked_solve(&matrix, &Factor::new(&plan, &far.values).unwrap(), &rhs).unwrap_err();
    assert!(matches!(error, LinalgError::Inaccurate { backward_error, .. } if backward_error > 1e-10), "{error}");
    let solved = checked_solve(&matrix, &Factor::new(&plan, &near.values).unwrap(), &rhs).unwrap();
    assert!(solved.backward_error <= 1e-14 && solved.refinements > 0);
}

#[test]
fn wrong_sizes_are_refused() {
    let (elements, points) = quadratic_grid(2);
    let pattern = pattern_of(points.len(), &elements);
    let n = points.len();
    let size = |what, expected, found| LinalgError::Size { what, expected, found };
    let refused = Plan::new(Arc::clone(&pattern), Some(&points[1..]), &[]).unwrap_err();
    assert_eq!(refused, size(Datum::Coordinates, n, n - 1));
    let refused = Plan::new(Arc::clone(&pattern), Some(&points), &[n as u32]).unwrap_err();
    assert_eq!(refused, LinalgError::NoSuchUnknown { unknown: n, unknowns: n });
    let plan = plan(&pattern, Some(&points), &[]);
    let matrix = laplacian(&pattern, Complex64::new(1.0, 0.0));
    let refused = Factor::new(&plan, &matrix.values[1..]).unwrap_err();
    assert_eq!(refused, size(Datum::MatrixValues, pattern.nnz(), pattern.nnz() - 1));
    let factor = Factor::new(&plan, &matrix.values).unwrap();
    assert!(factor.solve_in_place(&mut wavy(n + 1)).is_err());
    assert!(checked_solve(&matrix, &factor, &wavy(2 * n)).is_err());
}
