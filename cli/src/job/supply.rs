//! The supply as written. Currents, voltages and field strengths are rms, at the coil terminals.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::quantity::Quantity;
use super::units::{Current, FieldStrength, Frequency, Power, Temperature, Voltage};

/// What feeds the coils, or the field they stand in.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Supply {
    /// Frequency, 1 Hz to 10 MHz.
    pub frequency: Quantity<Frequency>,
    /// What the supply keeps constant.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub hold: Option<Hold>,
    /// What the supply can give at the coil terminals, leads excluded.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub limits: Option<Limits>,
    /// Uniform axial field far from the parts (rms), instead of coils and `hold`.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub applied_field: Option<Quantity<FieldStrength>>,
}

/// The quantity that is kept constant; rms, at the coil terminals, leads excluded.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Hold {
    /// Coil current (rms).
    CoilCurrent(Quantity<Current>),
    /// Coil voltage (rms).
    CoilVoltage(Quantity<Voltage>),
    /// Power in all workpieces.
    WorkpiecePower(Quantity<Power>),
    /// Active power at the coil terminals.
    TerminalPower(Quantity<Power>),
}

/// What the supply can give at the coil terminals; what is left out is not bounded.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Limits {
    /// Voltage (rms).
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub voltage: Option<Quantity<Voltage>>,
    /// Current (rms).
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub current: Option<Quantity<Current>>,
    /// Active power.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub power: Option<Quantity<Power>>,
}

/// What is held during a stage instead of the supply's own.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(untagged)]
pub enum StageHold {
    /// Nothing: the supply is off.
    Word(HoldWord),
    /// A gauge at a temperature; the supply's own hold and limits bound the power.
    Gauge(GaugeHold),
    /// Another quantity of the supply.
    Supply(Hold),
}

/// A hold that is a word.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum HoldWord {
    /// Supply off.
    Off,
}

/// A gauge that is held at a temperature.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct GaugeHold {
    /// Name of a thermocouple or pyrometer.
    pub gauge: String,
    /// Temperature it is held at.
    pub at: Quantity<Temperature>,
}
