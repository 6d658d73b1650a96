//! Closed-form solutions that finite-element results are checked against, one subject a file.
//!
//! Convention: SI throughout, **peak** phasors with `e^{+jwt}`, powers are time averages. Resistivity (ohm m) describes a
//! metal, never conductivity, and frequencies are in hertz. Nothing here depends on the solver: not even `mu0`.
//! Source: named in each file and beside each function. The functions are compared with 50-digit values made by
//! `validation/reference/closed_form.py`.

mod bessel;
pub mod coil;
pub mod constants;
pub mod cylinder;
pub mod cylinder_heat;
pub mod efficiency;
pub mod error;
pub mod heat;
pub mod loops;
pub mod plane;
mod quadrature;
pub mod rod;
pub mod solenoid;
pub mod sphere;
pub mod tube;
pub mod wire;

pub use constants::{MU0, STEFAN_BOLTZMANN, skin_depth};
pub use error::ClosedFormError;
