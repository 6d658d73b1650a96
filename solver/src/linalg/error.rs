//! What can go wrong in a direct solve, and where.
//! Convention: unknowns carry the caller's numbers (before any reordering); ratios and errors are pure numbers.

use std::fmt;

/// Which array a message speaks of.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Datum {
    /// Values of the matrix, one per stored entry of its pattern.
    MatrixValues,
    /// Right-hand side, one value per unknown and column.
    RightHandSide,
    /// Solution, one value per unknown and column.
    Solution,
    /// Pivots of the factorisation, one per unknown.
    Pivots,
    /// Coordinates of the unknowns, one point per unknown.
    Coordinates,
}

impl fmt::Display for Datum {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::MatrixValues => "matrix values",
            Self::RightHandSide => "right-hand side",
            Self::Solution => "solution",
            Self::Pivots => "pivots",
            Self::Coordinates => "coordinates",
        })
    }
}

/// A refusal of the linear algebra; nothing is returned beside it.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum LinalgError {
    /// A pivot lost all its digits: the matrix is singular, or so close to it that no digit of a solution would hold.
    #[error(
        "unknown {unknown}: its pivot is {ratio:.2e} of its diagonal, below the limit {limit:.0e}: the matrix is \
         singular there; fix a value (Dirichlet) or add a term that acts on this unknown"
    )]
    ZeroPivot {
        /// Unknown whose pivot vanished.
        unknown: usize,
        /// `|pivot|` over the size of the row it came from.
        ratio: f64,
        /// Smallest ratio accepted.
        limit: f64,
    },
    /// A value is NaN or infinite.
    #[error("{what}: entry {index} is not a finite number; look for an overflow or an empty measure upstream")]
    NotFinite {
        /// Array it was found in.
        what: Datum,
        /// Position in that array (for pivots: the unknown).
        index: usize,
    },
    /// The solution does not satisfy its equations.
    #[error(
        "componentwise backward error {backward_error:.2e} exceeds the limit {limit:.0e}: the matrix is too \
         ill-conditioned, or indefinite, for a factorisation without pivoting; check the scale of its parts"
    )]
    Inaccurate {
        /// `max |r| / (|A||x| + |b|)` after refinement.
        backward_error: f64,
        /// Largest value accepted.
        limit: f64,
    },
    /// An array has the wrong length.
    #[error("{what}: {found} entries given, {expected} needed")]
    Size {
        /// Array with the wrong length.
        what: Datum,
        /// Entries needed.
        expected: usize,
        /// Entries given.
        found: usize,
    },
    /// An unknown outside the system.
    #[error("unknown {unknown} does not exist: the system has {unknowns}, numbered from 0")]
    NoSuchUnknown {
        /// Number given.
        unknown: usize,
        /// Number of unknowns.
        unknowns: usize,
    },
    /// An entry the pattern does not hold.
    #[error("entry ({row}, {col}) is not in the pattern: give the pattern every clique that is assembled")]
    NotInPattern {
        /// Row.
        row: usize,
        /// Column.
        col: usize,
    },
    /// A matrix given in full is not equal to its transpose.
    #[error(
        "entries ({row}, {col}) and ({col}, {row}) differ by {difference:.2e} of their size; the matrix must be symmetric"
    )]
    NotSymmetric {
        /// Row.
        row: usize,
        /// Column.
        col: usize,
        /// `|a_ij - a_ji|` over the larger of the two.
        difference: f64,
    },
    /// A factor without values: its last factorisation failed.
    #[error("the factor is empty because its last factorisation failed; give it a matrix that is not singular first")]
    NotFactored,
    /// The minimum-degree ordering ran out of memory or index range.
    #[error("no ordering could be computed for {unknowns} unknowns with {entries} entries; use a coarser mesh")]
    TooLarge {
        /// Unknowns of the system.
        unknowns: usize,
        /// Stored entries of the lower triangle.
        entries: usize,
    },
}
