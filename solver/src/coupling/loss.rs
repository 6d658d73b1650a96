//! The loss density that heat steps see: known at field solves, extrapolated between them.
//!
//! Between solves the loss follows the line through the last two solves, at most as far ahead as they lie apart, and
//! never below zero. Held for the whole interval where only one solve is known (start, or after power was switched).

use std::sync::Arc;

use crate::magnetics::drive::Scaled;
use crate::magnetics::properties::PointProperties;
use crate::magnetics::report::Numbers;
use crate::magnetics::unit_field::UnitField;

/// A field solve seen by the heat problem.
#[derive(Debug, Clone)]
pub struct FieldState {
    /// Simulated time in seconds.
    pub time_s: f64,
    /// Loss of a unit drive at the heat problem's quadrature points, W/m^3, element-major.
    pub unit_loss_w_per_m3: Vec<f64>,
    /// Numbers of a unit drive.
    pub numbers: Arc<Numbers>,
    /// Field of a unit drive.
    pub field: Arc<UnitField>,
    /// Properties it was solved with.
    pub properties: Arc<PointProperties>,
    /// Drive (peak) and limit at this state.
    pub scaled: Scaled,
}

impl FieldState {
    /// Loss at quadrature point `k` at this state's drive, W/m^3.
    fn loss(&self, k: usize) -> f64 {
        self.unit_loss_w_per_m3[k] * self.scaled.peak * self.scaled.peak
    }
}

/// The last one or two field solves.
#[derive(Debug, Clone)]
pub struct LossHistory {
    /// The last solve.
    pub last: FieldState,
    /// The solve before it, where it may be used.
    pub previous: Option<FieldState>,
}

impl LossHistory {
    /// Loss density at `time_s` into `out`, times `factor`.
    pub fn at(&self, time_s: f64, factor: f64, out: &mut [f64]) {
        let ratio = self.previous.as_ref().map_or(0.0, |p| {
            let apart = self.last.time_s - p.time_s;
            if apart > 0.0 { ((time_s - self.last.time_s) / apart).clamp(0.0, 1.0) } else { 0.0 }
        });
        for (k, slot) in out.iter_mut().enumerate() {
            let now = self.last.loss(k);
            let before = self.previous.as_ref().map_or(now, |p| p.loss(k));
            *slot = factor * (now + ratio * (now - before)).max(0.0);
        }
    }

    /// Extrapolation defect `sum |new - extrapolated| V / sum new V` against a new solve.
    pub fn defect(&self, new: &FieldState, volumes_m3: &[f64]) -> f64 {
        let mut extrapolated = vec![0.0; volumes_m3.len()];
        self.at(new.time_s, 1.0, &mut extrapolated);
        let (mut difference, mut total) = (0.0, 0.0);
        for (k, v) in volumes_m3.iter().enumerate() {
            difference += (new.loss(k) - extrapolated[k]).abs() * v;
            total += new.loss(k) * v;
        }
        if total > 0.0 { difference / total } else { 0.0 }
    }

    /// Takes over a new solve.
    pub fn push(&mut self, new: FieldState) {
        self.previous = Some(std::mem::replace(&mut self.last, new));
    }
}
