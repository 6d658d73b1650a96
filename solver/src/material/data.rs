//! A material as written, in a library file or inside a job: engineers' units, °C, unknown keys refused.
//!
//! Convention: a value with a dimension is text with its unit (`"7850 kg/m3"`); tables and formulas are numbers with their
//! unit beside them. Where only the value matters, the value alone may stand for the object that also carries its source.

use schemars::JsonSchema;
use serde::de::DeserializeOwned;
use serde::{Deserialize, Deserializer, Serialize};

use super::source::Source;
use crate::constants::ZERO_CELSIUS_K;

/// Either the plain value or the object with all there is to say.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
#[serde(untagged)]
pub enum Written<P, F> {
    /// The value alone.
    Plain(P),
    /// The object.
    Full(F),
}

impl<'de, P: DeserializeOwned, F: DeserializeOwned> Deserialize<'de> for Written<P, F> {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        let value = serde_json::Value::deserialize(deserializer)?;
        let number = value.is_number().then(|| value.to_string());
        let read = if value.is_object() {
            serde_json::from_value(value).map(Self::Full)
        } else {
            serde_json::from_value(value).map(Self::Plain)
        };
        read.map_err(|error| match number {
            Some(number) => serde::de::Error::custom(format!(
                "the bare number {number} does not stand here; write text with a unit, or an object"
            )),
            None => serde::de::Error::custom(error),
        })
    }
}

/// A material: what is needed to heat it, and what is known of its melting and its magnetism.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct MaterialData {
    /// Name, as jobs and reports write it.
    pub name: String,
    /// Other names it answers to (standards' numbers, grades).
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub aliases: Vec<String>,
    /// One line on what it is.
    #[serde(default, skip_serializing_if = "String::is_empty")]
    pub description: String,
    /// Density, such as "7850 kg/m3"; constant.
    pub density: Written<String, QuantityData>,
    /// Electrical resistivity, such as "1.724 µΩ cm"; left out for an insulator.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub resistivity: Option<Written<String, CurveData>>,
    /// Thermal conductivity, such as "27 W/m/K".
    pub thermal_conductivity: Written<String, CurveData>,
    /// Specific heat, such as "650 J/kg/K", without the latent heat of melting.
    pub specific_heat: Written<String, CurveData>,
    /// Total hemispherical emissivity of a usual surface, 0 to 1.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub emissivity: Option<Written<f64, EmissivityData>>,
    /// Melting range and latent heat.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub melting: Option<MeltingData>,
    /// Ferromagnetic data; left out where the relative permeability is 1.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub magnetic: Option<MagneticData>,
    /// What a user of the data should know.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}

/// A constant with its source.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct QuantityData {
    /// Number and unit.
    pub value: String,
    /// Where it comes from.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub source: Option<Written<String, Source>>,
    /// A remark.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}

/// Emissivity with its source.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct EmissivityData {
    /// 0 to 1.
    #[schemars(range(min = 0.0, max = 1.0))]
    pub value: f64,
    /// Where it comes from, and what surface is meant.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub source: Option<Written<String, Source>>,
    /// A remark.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}

/// Scale of the temperatures of a table or a formula.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Serialize, Deserialize, JsonSchema)]
pub enum TemperatureUnit {
    /// Degrees Celsius.
    #[default]
    #[serde(rename = "°C")]
    Celsius,
    /// Kelvin.
    #[serde(rename = "K")]
    Kelvin,
}

impl TemperatureUnit {
    /// Zero of the scale in kelvin.
    pub(super) fn zero_k(self) -> f64 {
        match self {
            Self::Celsius => ZERO_CELSIUS_K,
            Self::Kelvin => 0.0,
        }
    }

    /// Whether this is the scale taken where none is named.
    #[allow(clippy::trivially_copy_pass_by_ref, reason = "the serialiser passes a reference")]
    fn is_default(&self) -> bool {
        *self == Self::default()
    }
}

/// A property over temperature: exactly one of `constant`, `table` and `segments`.
#[derive(Debug, Clone, PartialEq, Default, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct CurveData {
    /// Number and unit.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub constant: Option<String>,
    /// Unit of the values of `table` or `segments`.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub unit: Option<String>,
    /// Scale of the temperatures of `table` or `segments`, °C if left out.
    #[serde(default, skip_serializing_if = "TemperatureUnit::is_default")]
    pub temperature_unit: TemperatureUnit,
    /// Rows [temperature, value], temperatures rising; linear between rows, the end values held outside.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub table: Option<Vec<[f64; 2]>>,
    /// Formulas, each beginning where the one before it ends.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub segments: Option<Vec<SegmentData>>,
    /// Where the values come from.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub source: Option<Written<String, Source>>,
    /// A remark.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}

/// One formula a0 + a1 x + a2 x^2 + ... + numerator / (x - at), x the temperature on the scale of `temperature_unit`.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct SegmentData {
    /// First temperature.
    pub from: f64,
    /// Last temperature.
    pub to: f64,
    /// Coefficients from the constant upwards.
    pub polynomial: Vec<f64>,
    /// The rational term, where there is one.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub pole: Option<PoleData>,
}

/// The term numerator / (x - at).
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct PoleData {
    /// Numerator, in `unit` times kelvin.
    pub numerator: f64,
    /// Temperature of the pole, outside the segment.
    pub at: f64,
}

/// Melting range and latent heat; for a melting point solidus and liquidus are equal.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct MeltingData {
    /// Where melting begins, such as "1430 °C".
    pub solidus: String,
    /// Where it is complete.
    pub liquidus: String,
    /// Latent heat of fusion, such as "247 kJ/kg".
    pub latent_heat: String,
    /// Where the values come from.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub source: Option<Written<String, Source>>,
    /// A remark.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}

/// Ferromagnetic data at 20 °C.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct MagneticData {
    /// Relative permeability at the field the job works at; the weak-field value is taken if left out.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub relative_permeability_20c: Option<f64>,
    /// Saturation polarisation, such as "2.1 T".
    pub saturation_polarisation: String,
    /// Relative permeability in a weak field.
    pub initial_relative_permeability: f64,
    /// Curie temperature, such as "768 °C".
    pub curie: String,
    /// Where the values come from, and at what field strength.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub source: Option<Written<String, Source>>,
    /// A remark.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}
