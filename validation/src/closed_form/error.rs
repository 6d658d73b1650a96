//! What a closed form can refuse, and the checks of arguments its functions share.
//!
//! Convention: every message names the function, the argument, its value with its unit, and the limit.
//! Source: none needed.

use thiserror::Error;

/// Why a closed form has no value for what it was asked.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum ClosedFormError {
    /// An argument lies outside the range in which the formula holds.
    #[error("{place}: `{name}` is {value} {unit}, but must be {limit}; pass a value in that range")]
    Argument {
        /// Function that refused.
        place: &'static str,
        /// Name of the argument.
        name: &'static str,
        /// Its value, in `unit`.
        value: f64,
        /// Unit of the value.
        unit: &'static str,
        /// The range allowed.
        limit: &'static str,
    },
    /// A Bessel function could not be evaluated.
    #[error(
        "{place}: Bessel function of order {order} at {re} + {im}j: {reason}; the geometry is too large or too small in skin depths"
    )]
    Bessel {
        /// Function that needed the value.
        place: &'static str,
        /// Order of the Bessel function.
        order: f64,
        /// Real part of its argument.
        re: f64,
        /// Imaginary part of its argument.
        im: f64,
        /// What the library said.
        reason: complex_bessel::Error,
    },
    /// A complete elliptic integral could not be evaluated.
    #[error("{place}: elliptic integral at parameter {parameter}: {reason}; the loops or filaments coincide")]
    Elliptic {
        /// Function that needed the value.
        place: &'static str,
        /// Argument of the integral.
        parameter: f64,
        /// What the library said.
        reason: &'static str,
    },
    /// An integral did not reach its tolerance.
    #[error(
        "{place}: the integral near {at} still changes by {change:e} after {halvings} halvings, allowed {allowed:e}; the integrand is not smooth there"
    )]
    Quadrature {
        /// Function that needed the integral.
        place: &'static str,
        /// Midpoint of the panel that failed, in the variable of integration.
        at: f64,
        /// Last change of the panel's integral.
        change: f64,
        /// Change allowed.
        allowed: f64,
        /// Halvings tried.
        halvings: u32,
    },
    /// An integral would need more panels than is sensible.
    #[error(
        "{place}: {panels:.0} panels are needed, at most {limit:.0} are allowed; the gap or the winding is too thin for its radius"
    )]
    TooManyPanels {
        /// Function that needed the integral.
        place: &'static str,
        /// Panels needed.
        panels: f64,
        /// Panels allowed.
        limit: f64,
    },
}

/// Accepts a finite number greater than zero.
pub(crate) fn positive(
    place: &'static str,
    name: &'static str,
    value: f64,
    unit: &'static str,
) -> Result<(), ClosedFormError> {
    within(place, name, value, unit, value > 0.0, "positive and finite")
}

/// Accepts a finite number not below zero.
pub(crate) fn not_negative(
    place: &'static str,
    name: &'static str,
    value: f64,
    unit: &'static str,
) -> Result<(), ClosedFormError> {
    within(place, name, value, unit, value >= 0.0, "zero or positive, and finite")
}

/// Accepts any finite number.
pub(crate) fn finite(
    place: &'static str,
    name: &'static str,
    value: f64,
    unit: &'static str,
) -> Result<(), ClosedFormError> {
    within(place, name, value, unit, true, "finite")
}

/// Accepts a finite number for which `holds` is true; `limit` says in words what holds.
pub(crate) fn within(
    place: &'static str,
    name: &'static str,
    value: f64,
    unit: &'static str,
    holds: bool,
    limit: &'static str,
) -> Result<(), ClosedFormError> {
    if value.is_finite() && holds { Ok(()) } else { Err(ClosedFormError::Argument { place, name, value, unit, limit }) }
}
