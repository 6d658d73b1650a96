//! Systems and oracles shared by the tests of the direct solver.
#![allow(dead_code, reason = "each test binary uses its own part")]
#![allow(clippy::unwrap_used, reason = "tests")]

use std::sync::Arc;

use faer::prelude::Solve;
use faer::sparse::{SparseColMat, Triplet};
use num_complex::Complex64;
use solver::linalg::{Pattern, SymmetricMatrix};

/// Quadratic triangles on a square of `cells` by `cells` cells: the element lists and the points.
pub(crate) fn quadratic_grid(cells: usize) -> (Vec<[u32; 6]>, Vec<[f64; 2]>) {
    let m = 2 * cells + 1;
    let mut elements = Vec::new();
    for i in (0..2 * cells).step_by(2) {
        for j in (0..2 * cells).step_by(2) {
            let id = |a: usize, b: usize| ((i + a) * m + j + b) as u32;
            elements.push([id(0, 0), id(2, 0), id(0, 2), id(1, 0), id(0, 1), id(1, 1)]);
            elements.push([id(2, 2), id(2, 0), id(0, 2), id(1, 2), id(2, 1), id(1, 1)]);
        }
    }
    let points = (0..m * m).map(|k| [(k / m) as f64, (k % m) as f64]).collect();
    (elements, points)
}

pub(crate) fn pattern_of<C: AsRef<[u32]>>(n: usize, cliques: &[C]) -> Arc<Pattern> {
    Arc::new(Pattern::from_cliques(n, cliques.iter().map(AsRef::as_ref)))
}

/// Graph Laplacian with unit weights on every entry of the pattern, plus `mass` on the diagonal.
pub(crate) fn laplacian(pattern: &Arc<Pattern>, mass: Complex64) -> SymmetricMatrix<Complex64> {
    let mut matrix = SymmetricMatrix::zeros(Arc::clone(pattern));
    for col in 0..pattern.n() {
        let first = pattern.starts()[col];
        matrix.values[first] += mass;
        for (offset, &row) in pattern.column(col).iter().enumerate().skip(1) {
            matrix.values[first + offset] -= 1.0;
            matrix.values[first] += 1.0;
            matrix.values[pattern.starts()[row as usize]] += 1.0;
        }
    }
    matrix
}

/// A right-hand side without structure and without zeros.
pub(crate) fn wavy(n: usize) -> Vec<Complex64> {
    (0..n).map(|k| Complex64::new((1.3 * k as f64 + 0.5).sin(), (0.7 * k as f64).cos())).collect()
}

/// Solution by faer's sparse LU with partial pivoting: the independent answer.
pub(crate) fn faer_lu(matrix: &SymmetricMatrix<Complex64>, rhs: &[Complex64]) -> Vec<Complex64> {
    let pattern = &matrix.pattern;
    let n = pattern.n();
    let mut triplets = Vec::new();
    for col in 0..n {
        for (offset, &row) in pattern.column(col).iter().enumerate() {
            let value = matrix.values[pattern.starts()[col] + offset];
            triplets.push(Triplet::new(row as usize, col, value));
            if offset > 0 {
                triplets.push(Triplet::new(col, row as usize, value));
            }
        }
    }
    let full = SparseColMat::<usize, Complex64>::try_new_from_triplets(n, n, &triplets).unwrap();
    let b = faer::Mat::from_fn(n, 1, |i, _| rhs[i]);
    let x = full.sp_lu().unwrap().solve(&b);
    (0..n).map(|i| x[(i, 0)]).collect()
}

/// Largest difference over the largest value.
pub(crate) fn relative_difference(a: &[Complex64], b: &[Complex64]) -> f64 {
    let size = b.iter().map(|v| v.norm()).fold(0.0, f64::max);
    a.iter().zip(b).map(|(a, b)| (a - b).norm()).fold(0.0, f64::max) / size
}

/// Runs `task` in a pool of `threads` threads.
pub(crate) fn with_threads<R: Send>(threads: usize, task: impl FnOnce() -> R + Send) -> R {
    rayon::ThreadPoolBuilder::new().num_threads(threads).build().unwrap().install(task)
}
