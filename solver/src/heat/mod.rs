//! Transient heat conduction in the heated parts: `rho dh(T)/dt = div(k(T) grad T) + p`, axisymmetric.
//!
//! The unknown is the temperature at the nodes of a Lagrange space; the carried state is the enthalpy at its
//! quadrature points, the exact integral of the specific heat, so that peaks of `c(T)` and latent heat conserve energy
//! for any step. [`HeatProblem`] is built once for a mesh; [`HeatProblem::step`] is a pure function of a
//! [`HeatState`], a step and a source; [`StepControl`] chooses the step.
//!
//! Surfaces exchange heat with the ambient, are held, take a flux or are insulated; the axis and mirror planes are
//! insulated, parts that touch are in perfect contact. Energies are for the whole device.
//! Source of the time integration: the two-stage singly diagonally implicit Runge-Kutta method of R. Alexander,
//! SIAM J. Numer. Anal. 14 (1977) 1006-1021.

mod boundary;
mod conductivity;
mod control;
mod geometry;
mod newton;
mod operator;
mod parts;
mod problem;
mod state;
mod step;

pub use control::StepControl;
pub use problem::HeatProblem;
pub use state::{HeatState, interpolate};
pub use step::{StepFailure, StepOutcome};
