//! The state of the heat problem at one moment: temperatures in kelvin, enthalpy in J/m^3, energies in joules.

use crate::results::EnergyBalance;

/// Temperatures and energies at one moment; made by [`super::HeatProblem::start`] and [`super::HeatProblem::step`].
#[derive(Debug, Clone, PartialEq)]
pub struct HeatState {
    /// Simulated time in seconds.
    pub time_s: f64,
    /// Temperature of each unknown of the space, kelvin.
    pub temperature_k: Vec<f64>,
    /// Enthalpy `rho h(T)` in J/m^3, element-major, one a quadrature point.
    pub enthalpy_j_per_m3: Vec<f64>,
    /// How fast each unknown changed towards the end of the last step, K/s: a guess for the next.
    pub rate_k_per_s: Vec<f64>,
    /// Energy since the start, whole device.
    pub energy: EnergyBalance,
}

/// Temperatures in kelvin at `time_s` between two states, linear in time; outside, the nearer state.
///
/// Good for finding about when something happens inside a step; the step is then done again to end there.
pub fn interpolate(previous: &HeatState, next: &HeatState, time_s: f64) -> Vec<f64> {
    let length = next.time_s - previous.time_s;
    let share = if length > 0.0 { ((time_s - previous.time_s) / length).clamp(0.0, 1.0) } else { 1.0 };
    let pairs = previous.temperature_k.iter().zip(&next.temperature_k);
    pairs.map(|(a, b)| a + share * (b - a)).collect()
}
