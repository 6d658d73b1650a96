//! Direct solution of symmetric sparse systems: `L D L^T` without pivoting, real or complex.
//!
//! The order of things: a [`Pattern`] from the cliques of the elements, a [`Plan`] (elimination order and all symbolic
//! work) once a pattern, a [`Factor`] once a set of values, and [`checked_solve`], which refines the solution and
//! refuses one that does not satisfy its equations.
//!
//! Convention: complex matrices are symmetric, not Hermitian. No pivoting is needed when the matrix is positive
//! definite, or complex with `Re` and `Im` positive semidefinite and their sum positive definite, as `K + jwM` is:
//! every Schur complement inherits the property.
//! Sources: N. J. Higham, Math. Comp. 67 (1998) 1591-1599 (complex symmetric matrices with positive definite real and
//! imaginary parts); I. S. Duff and J. K. Reid, ACM TOMS 9 (1983) 302-325 (multifrontal elimination).

#![allow(
    clippy::inline_always,
    reason = "code inside a run-time dispatch is compiled for its vector unit only if inlined there"
)]

mod adjacency;
mod checked_solve;
mod dense;
mod dissect;
mod error;
mod etree;
mod factor;
mod leaf_order;
mod matrix;
mod narrow;
mod order;
mod pattern;
mod plan;
mod pool;
mod scalar;
mod separator;
mod solve;
mod supernodes;
mod sweep;
mod tile;
mod vector;

pub use checked_solve::{BACKWARD_ERROR_LIMIT, Solved, checked_solve};
pub use error::{Datum, LinalgError};
pub use factor::Factor;
pub use matrix::{Residual, SymmetricMatrix};
pub use pattern::Pattern;
pub use plan::Plan;
pub use scalar::Scalar;
