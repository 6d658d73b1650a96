//! From a unit drive to the state a supply holds: the scale factor, and the limit it meets.

use num_complex::Complex64;

use crate::error::SolveError;
use crate::model::{Hold, Limits};
use crate::results::SupplyLimit;

/// What one ampere (peak) through the coils gives, for the whole device.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PerAmpere {
    /// Voltage at the terminals, volts (peak phasor): the impedance in ohms.
    pub impedance_ohm: Complex64,
    /// Power in all workpieces, watts.
    pub workpiece_power_w: f64,
    /// Power at the terminals, watts.
    pub terminal_power_w: f64,
}

/// A scaled state.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Scaled {
    /// Coil current in amperes (peak), or applied field in A/m (peak).
    pub peak: f64,
    /// Limit that was reached, if one was.
    pub limited_by: Option<SupplyLimit>,
}

/// Current that gives what is held, within the limits.
///
/// A gauge hold is not known here: it counts as the largest current the limits allow, zero without limits.
///
/// # Errors
/// [`SolveError::CannotHold`] where no current can give what is held.
pub fn scale(hold: Hold, limits: Limits, per: &PerAmpere) -> Result<Scaled, SolveError> {
    let rms = std::f64::consts::SQRT_2;
    let wanted = match hold {
        Hold::Off => 0.0,
        Hold::CoilCurrent(a) => a * rms,
        Hold::CoilVoltage(v) => {
            positive("a coil voltage", per.impedance_ohm.norm(), "check that the coil has turns")?;
            v * rms / per.impedance_ohm.norm()
        }
        Hold::WorkpiecePower(w) => {
            let remedy = "give the workpiece a material that conducts, or hold the coil current";
            positive("a power in the workpiece", per.workpiece_power_w, remedy)?;
            (w / per.workpiece_power_w).sqrt()
        }
        Hold::TerminalPower(w) => {
            let remedy = "give the coil a material with resistance, or hold the coil current";
            positive("a power at the terminals", per.terminal_power_w, remedy)?;
            (w / per.terminal_power_w).sqrt()
        }
        Hold::GaugeTemperature { .. } => f64::INFINITY,
    };
    Ok(limited(wanted, limits, per))
}

fn positive(held: &'static str, per_unit: f64, remedy: &'static str) -> Result<(), SolveError> {
    if per_unit > 0.0 && per_unit.is_finite() { Ok(()) } else { Err(SolveError::CannotHold { held, per_unit, remedy }) }
}

fn limited(wanted: f64, limits: Limits, per: &PerAmpere) -> Scaled {
    let rms = std::f64::consts::SQRT_2;
    let bounds = [
        (SupplyLimit::Voltage, limits.voltage_v_rms.map(|v| v * rms / per.impedance_ohm.norm())),
        (SupplyLimit::Current, limits.current_a_rms.map(|a| a * rms)),
        (SupplyLimit::Power, limits.power_w.map(|w| (w / per.terminal_power_w).sqrt())),
    ];
    let mut out = Scaled { peak: wanted, limited_by: None };
    for (limit, bound) in bounds {
        if let Some(bound) = bound.filter(|b| *b < out.peak) {
            out = Scaled { peak: bound, limited_by: Some(limit) };
        }
    }
    if out.peak.is_infinite() {
        out.peak = 0.0;
    }
    out
}

#[cfg(test)]
mod tests {
    #![allow(clippy::unwrap_used, reason = "tests")]
    use super::*;

    const PER: PerAmpere =
        PerAmpere { impedance_ohm: Complex64::new(0.03, 0.04), workpiece_power_w: 0.01, terminal_power_w: 0.015 };

    #[test]
    fn each_hold_gives_what_it_holds() {
        let free = Limits::default();
        let peak = |hold| scale(hold, free, &PER).unwrap().peak;
        assert!((peak(Hold::CoilCurrent(100.0)) - 141.421_356_237).abs() < 1e-6);
        assert!((peak(Hold::CoilVoltage(10.0)) * 0.05 / 2f64.sqrt() - 10.0).abs() < 1e-12);
        assert!((peak(Hold::WorkpiecePower(4.0)).powi(2) * 0.01 - 4.0).abs() < 1e-12);
        assert!((peak(Hold::TerminalPower(6.0)).powi(2) * 0.015 - 6.0).abs() < 1e-12);
        assert_eq!(peak(Hold::Off), 0.0);
    }

    #[test]
    fn the_tightest_limit_wins_and_is_named() {
        let limits = Limits { voltage_v_rms: Some(5.0), current_a_rms: Some(120.0), power_w: Some(1e6) };
        let s = scale(Hold::CoilCurrent(200.0), limits, &PER).unwrap();
        assert_eq!(s.limited_by, Some(SupplyLimit::Voltage));
        assert!((s.peak * 0.05 / 2f64.sqrt() - 5.0).abs() < 1e-12);
    }

    #[test]
    fn a_power_nothing_takes_up_is_refused() {
        let none = PerAmpere { workpiece_power_w: 0.0, ..PER };
        let e = scale(Hold::WorkpiecePower(1.0), Limits::default(), &none).unwrap_err();
        assert!(e.to_string().contains("hold the coil current"), "{e}");
    }
}
