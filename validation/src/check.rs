//! A checked quantity: what was computed, what it should be, how far it may be off and why, and who says so.

use serde::Serialize;

/// One checked quantity.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Check {
    /// Name of the case.
    pub case: &'static str,
    /// Quantity with its unit.
    pub quantity: String,
    /// Value of this program.
    pub computed: f64,
    /// Value it is held against.
    pub reference: f64,
    /// Largest relative difference allowed.
    pub tolerance: f64,
    /// Where the reference value comes from.
    pub source: &'static str,
}

impl Check {
    /// `|computed - reference| / |reference|`.
    pub fn difference(&self) -> f64 {
        (self.computed - self.reference).abs() / self.reference.abs()
    }

    /// True where the difference is within the tolerance.
    pub fn passes(&self) -> bool {
        self.difference() <= self.tolerance
    }
}

/// Why a case could not be computed.
#[derive(Debug, thiserror::Error)]
pub enum CaseError {
    /// The solver refused it.
    #[error(transparent)]
    Solve(#[from] solver::SolveError),
    /// Material data were refused.
    #[error(transparent)]
    Material(#[from] solver::material::MaterialError),
    /// An outline was refused.
    #[error(transparent)]
    Outline(#[from] mesher::OutlineError),
    /// A closed form was refused.
    #[error(transparent)]
    ClosedForm(#[from] crate::closed_form::ClosedFormError),
    /// The results lack what the case looks at.
    #[error("the results hold no {0}")]
    Missing(&'static str),
}
