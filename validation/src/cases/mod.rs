//! The cases, one file each.

pub mod bar_heat;
pub mod coil_inductance;
pub mod cylinder_in_field;
pub mod sphere_in_field;

use crate::check::{CaseError, Check};

/// A case: a problem that is solved and checked.
pub type Case = fn() -> Result<Vec<Check>, CaseError>;

/// All cases in order.
pub const ALL: &[Case] = &[cylinder_in_field::run, sphere_in_field::run, coil_inductance::run, bar_heat::run];
