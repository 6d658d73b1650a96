//! Checks against published and analytical results.
//!
//! A case solves a problem with the solver and holds numbers against a reference from outside the project; every
//! reference names its source. [`closed_form`] does not depend on the solver.

pub mod cases;
pub mod check;
pub mod closed_form;
pub mod models;
