//! Physical constants, each with its source, and the conversions between user and SI scales.

use std::f64::consts::PI;

/// Magnetic constant in H/m: `4 pi 1e-7`, the value of published tables (the 2019 SI value, CODATA 2018, differs by 5e-10).
pub const MU_0: f64 = 4.0e-7 * PI;

/// Stefan-Boltzmann constant in W/(m^2 K^4). Source: CODATA 2018 (exact in the 2019 SI).
pub const STEFAN_BOLTZMANN: f64 = 5.670_374_419e-8;

/// Zero of the Celsius scale in kelvin. Source: SI Brochure, 9th edition, section 2.3.1.
pub const ZERO_CELSIUS_K: f64 = 273.15;

/// Skin (penetration) depth in metres, `sqrt(2 / (w mu sigma))`; infinite where nothing conducts.
///
/// Source: IEC 60050-841, entry 841-27-21.
pub fn skin_depth(frequency_hz: f64, sigma_s_per_m: f64, relative_permeability: f64) -> f64 {
    let omega = 2.0 * PI * frequency_hz;
    (2.0 / (omega * MU_0 * relative_permeability * sigma_s_per_m)).sqrt()
}
