//! Induction heating of bodies of revolution: from a job file to fields, electrical numbers and heating curves.

pub mod export;
