//! Checks against published and analytical results.
