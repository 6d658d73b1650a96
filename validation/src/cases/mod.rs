//! The cases, one file each.

pub mod bar_heat;
pub mod coil_inductance;
pub mod coil_over_plate;
pub mod coil_round_rod;
pub mod coils_in_series;
pub mod cylinder_in_field;
pub mod cylinder_surface;
pub mod direct_current;
pub mod element_order;
pub mod endless_solenoid;
pub mod force_between_rings;
pub mod permeable_sphere;
pub mod round_wire;
pub mod sphere_in_field;
pub mod tube_in_field;

use solver::model::Model;
use solver::observe::Silent;
use solver::results::{Electrical, Terminals};

use crate::check::{CaseError, Check};

/// A case: a problem that is solved and checked.
pub type Case = fn() -> Result<Vec<Check>, CaseError>;

/// All cases in order.
pub const ALL: &[Case] = &[
    cylinder_in_field::run,
    cylinder_surface::run,
    tube_in_field::run,
    sphere_in_field::run,
    permeable_sphere::run,
    element_order::run,
    direct_current::run,
    round_wire::run,
    endless_solenoid::run,
    coil_inductance::run,
    coils_in_series::run,
    force_between_rings::run,
    coil_round_rod::run,
    coil_over_plate::run,
    bar_heat::run,
];

/// Solves a model and returns the numbers of its first state.
///
/// # Errors
/// Whatever the solver refuses.
pub fn first_state(model: &Model) -> Result<Electrical, CaseError> {
    let results = solver::run(model, &Silent)?;
    Ok(results.states.into_iter().next().ok_or(CaseError::Missing("state"))?.electrical)
}

/// Solves a model and returns what its supply sees.
///
/// # Errors
/// Whatever the solver refuses.
pub fn terminals(model: &Model) -> Result<Terminals, CaseError> {
    first_state(model)?.terminals.ok_or(CaseError::Missing("terminals"))
}
