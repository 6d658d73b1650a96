//! Heat: lumped radiation, one-phase melting, half-space with constant flux, steady generation.
//!
//! Convention: SI, temperatures in kelvin, times from the start of heating.
//! Source: H. S. Carslaw, J. C. Jaeger, Conduction of Heat in Solids (from memory), except where said.

use super::constants::STEFAN_BOLTZMANN;
use super::error::{ClosedFormError, finite, not_negative, positive, within};
use std::f64::consts::PI;

/// Up to this ratio of surroundings to body temperature the radiation integral is summed as a series.
const RADIATION_SERIES: f64 = 0.5;

/// A body of one temperature that exchanges heat by radiation alone.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LumpedRadiator {
    /// Heat capacity of the whole body `rho c V`, J/K.
    pub heat_capacity: f64,
    /// Emissivity.
    pub emissivity: f64,
    /// Radiating area, m^2.
    pub area: f64,
    /// Temperature of the surroundings, K; zero for a black void.
    pub surroundings: f64,
}

impl LumpedRadiator {
    /// Time, s, to go from the temperature `start` to `end` (K), cooling or warming.
    ///
    /// `t = C/(4 eps sigma A Ts^3) {ln|(Ts+T)/(Ts-T)| - ln|(Ts+Ti)/(Ts-Ti)| + 2[atan(T/Ts) - atan(Ti/Ts)]}`; where `Ts` is
    /// below half of both temperatures the equal series `sum Ts^{4k} (T^{-4k-3} - Ti^{-4k-3})/(4k+3)` is used, which also
    /// holds at `Ts = 0`.
    ///
    /// # Errors
    /// [`ClosedFormError::Argument`] for a body without capacity or area, or an `end` not between `start` and surroundings.
    pub fn time(&self, start: f64, end: f64) -> Result<f64, ClosedFormError> {
        const PLACE: &str = "heat::LumpedRadiator::time";
        positive(PLACE, "heat_capacity", self.heat_capacity, "J/K")?;
        positive(PLACE, "emissivity", self.emissivity, "(no unit)")?;
        positive(PLACE, "area", self.area, "m^2")?;
        not_negative(PLACE, "surroundings", self.surroundings, "K")?;
        positive(PLACE, "start", start, "K")?;
        let ts = self.surroundings;
        let between = (end > ts && end <= start) || (end < ts && end >= start);
        within(PLACE, "end", end, "K", end > 0.0 && between, "between the start and the surroundings")?;
        let rate = self.emissivity * STEFAN_BOLTZMANN * self.area / self.heat_capacity;
        if ts <= RADIATION_SERIES * end.min(start) {
            return Ok((radiation_series(end, ts) - radiation_series(start, ts)) / rate);
        }
        let part = |t: f64| ((ts + t) / (ts - t)).abs().ln() + 2.0 * (t / ts).atan();
        Ok((part(end) - part(start)) / (4.0 * ts.powi(3) * rate))
    }
}

/// `sum_k Ts^{4k} T^{-4k-3}/(4k+3)`, 1/K^3.
fn radiation_series(t: f64, ts: f64) -> f64 {
    let ratio = (ts / t).powi(4);
    let (mut term, mut total) = (t.powi(-3), 0.0);
    for k in 0..16 {
        total += term / (4.0 * f64::from(k) + 3.0);
        term *= ratio;
    }
    total
}

/// Stefan number `sqrt(pi) lambda e^{lambda^2} erf(lambda)`, no unit, of the one-phase front constant `lambda`.
///
/// Summed as `2 lambda^2 sum (2 lambda^2)^n/(2n+1)!!` (DLMF 7.6.2), all terms positive.
///
/// # Errors
/// [`ClosedFormError::Argument`] unless `0 <= lambda <= 20`.
pub fn stefan_number(lambda: f64) -> Result<f64, ClosedFormError> {
    let holds = (0.0..=20.0).contains(&lambda);
    within("heat::stefan_number", "lambda", lambda, "(no unit)", holds, "from 0 to 20")?;
    let x = 2.0 * lambda * lambda;
    let (mut term, mut total, mut n) = (x, 0.0_f64, 1.0);
    while term > 1e-18 * total {
        total += term;
        term *= x / (2.0 * n + 1.0);
        n += 1.0;
    }
    Ok(total)
}

/// Front constant `lambda`, no unit, of the one-phase Stefan problem: root of `sqrt(pi) lambda e^{lambda^2} erf lambda = St`.
///
/// `St = c (Tw - Tm)/L` with the wall held at `Tw` and the other phase at the melting point.
///
/// # Errors
/// [`ClosedFormError::Argument`] unless `0 < stefan <= 1e6`.
pub fn stefan_lambda(stefan: f64) -> Result<f64, ClosedFormError> {
    let holds = stefan > 0.0 && stefan <= 1e6;
    within("heat::stefan_lambda", "stefan", stefan, "(no unit)", holds, "above 0 and at most 1e6")?;
    // The function is at least 2 lambda^2, so the root lies below sqrt(St/2); 4.1 is above the root for St = 1e6.
    let (mut low, mut high) = (0.0_f64, (0.5 * stefan).sqrt().min(4.1));
    for _ in 0..200 {
        let middle = 0.5 * (low + high);
        if middle <= low || middle >= high {
            break;
        }
        if stefan_number(middle)? < stefan {
            low = middle;
        } else {
            high = middle;
        }
    }
    Ok(0.5 * (low + high))
}

/// Position of the melting or freezing front, m: `s = 2 lambda sqrt(alpha t)`, with `diffusivity` in m^2/s, `time` in s.
///
/// # Errors
/// As [`stefan_lambda`], and unless diffusivity and time are sound.
pub fn stefan_front(stefan: f64, diffusivity: f64, time: f64) -> Result<f64, ClosedFormError> {
    const PLACE: &str = "heat::stefan_front";
    positive(PLACE, "diffusivity", diffusivity, "m^2/s")?;
    not_negative(PLACE, "time", time, "s")?;
    Ok(2.0 * stefan_lambda(stefan)? * (diffusivity * time).sqrt())
}

/// Temperature rise of a half-space under a constant flux, K: `(2q/k) sqrt(alpha t) ierfc(x/(2 sqrt(alpha t)))`.
///
/// At the surface `2 q sqrt(alpha t/pi)/k`. `flux` W/m^2, `conductivity` W/(m K), `diffusivity` m^2/s, `depth` m, `time` s.
/// Accurate to 1e-14 of the rise at the surface, whatever the depth.
///
/// # Errors
/// [`ClosedFormError::Argument`] for a material, depth or time out of range.
pub fn half_space_flux_rise(
    flux: f64,
    conductivity: f64,
    diffusivity: f64,
    depth: f64,
    time: f64,
) -> Result<f64, ClosedFormError> {
    const PLACE: &str = "heat::half_space_flux_rise";
    finite(PLACE, "flux", flux, "W/m^2")?;
    positive(PLACE, "conductivity", conductivity, "W/(m K)")?;
    positive(PLACE, "diffusivity", diffusivity, "m^2/s")?;
    not_negative(PLACE, "depth", depth, "m")?;
    positive(PLACE, "time", time, "s")?;
    let spread = (diffusivity * time).sqrt();
    let x = depth / (2.0 * spread);
    if x > 6.0 {
        // ierfc(6) is 1e-17 of its value at the surface.
        return Ok(0.0);
    }
    // ierfc x = [e^{-x^2} (1 + St(x))]/sqrt(pi) - x, for sqrt(pi) x e^{x^2} erf x = St(x)
    let ierfc = (-x * x).exp() * (1.0 + stefan_number(x)?) / PI.sqrt() - x;
    Ok(2.0 * flux / conductivity * spread * ierfc)
}

/// Steady difference centre less surface, K, of a cylinder heated evenly: `g R^2/(4k)`, with `generation` in W/m^3.
///
/// # Errors
/// [`ClosedFormError::Argument`] unless radius (m) and conductivity (W/(m K)) are positive.
pub fn steady_generation_difference(generation: f64, radius: f64, conductivity: f64) -> Result<f64, ClosedFormError> {
    const PLACE: &str = "heat::steady_generation_difference";
    finite(PLACE, "generation", generation, "W/m^3")?;
    positive(PLACE, "radius", radius, "m")?;
    positive(PLACE, "conductivity", conductivity, "W/(m K)")?;
    Ok(generation * radius * radius / (4.0 * conductivity))
}
