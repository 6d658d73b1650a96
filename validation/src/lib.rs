//! Checks against published and analytical results.

pub mod closed_form;
