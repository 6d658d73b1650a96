//! Axisymmetric eddy currents and transient heat by finite elements.
//!
//! A validated [`model::Model`] in SI units goes in, [`results::Results`] come out; nothing here prints, reads the
//! clock or touches a file. Lengths are metres, temperatures kelvin, phasors peak values with `e^{+jwt}`; names that
//! end in `_rms` hold rms values.

pub mod clearance;
pub mod constants;
pub mod coupling;
pub mod error;
pub mod fem;
pub mod heat;
pub mod layout;
pub mod linalg;
pub mod magnetics;
pub mod material;
pub mod mesh_report;
pub mod model;
pub mod observe;
pub mod overview;
pub mod results;
pub mod warnings;

pub use coupling::run;
pub use error::SolveError;
pub use overview::overview;
