//! A material as the solver uses it: validated, SI, kelvin.

use super::curve::Curve;
use super::data::{CurveData, EmissivityData, MagneticData, MaterialData, MeltingData, QuantityData, Written};
use super::enthalpy::{Enthalpy, Melting};
use super::error::{MaterialError, MaterialFault, Property};
use super::magnetic::Magnetic;
use super::source::Source;

/// A material: SI values over kelvin, each with its source.
#[derive(Debug, Clone, PartialEq)]
pub struct Material {
    /// Name, as jobs and reports write it.
    pub name: String,
    /// Other names it answers to (standards' numbers, grades).
    pub aliases: Vec<String>,
    /// One line on what it is.
    pub description: String,
    /// Density in kg/m^3, constant.
    pub density_kg_per_m3: f64,
    /// Source of the density.
    pub density_source: Source,
    /// Electrical resistivity in ohm m; `None` for an insulator.
    pub resistivity: Option<Curve>,
    /// Thermal conductivity in W/(m K).
    pub conductivity: Curve,
    /// Specific heat in J/(kg K), without the latent heat of melting.
    pub specific_heat: Curve,
    /// Enthalpy in J/kg: the integral of the specific heat and the latent heat.
    pub enthalpy: Enthalpy,
    /// Total hemispherical emissivity of a usual surface, 0 to 1.
    pub emissivity: Option<f64>,
    /// Source of the emissivity, which says what surface is meant.
    pub emissivity_source: Option<Source>,
    /// Melting range and latent heat, where the material melts.
    pub melting: Option<Melting>,
    /// Ferromagnetic data; `None` where the relative permeability is 1.
    pub magnetic: Option<Magnetic>,
    /// What a user of the data should know.
    pub notes: Option<String>,
}

impl Material {
    /// Electrical conductivity in S/m at `t_k` in kelvin; 0 for an insulator.
    pub fn electrical_conductivity_s_per_m(&self, t_k: f64) -> f64 {
        self.resistivity.as_ref().map_or(0.0, |resistivity| 1.0 / resistivity.value(t_k))
    }

    /// Relative permeability at `t_k` in kelvin, linear in the field; 1 without magnetic data.
    pub fn relative_permeability(&self, t_k: f64) -> f64 {
        self.magnetic.as_ref().map_or(1.0, |magnetic| magnetic.relative_permeability(t_k))
    }

    /// A material from the JSON object [`MaterialData`] describes.
    ///
    /// # Errors
    /// JSON of another form (an unknown or missing key, a bare number) and data that do not hold together; the error names
    /// the material and the property.
    pub fn from_json(value: &serde_json::Value) -> Result<Self, MaterialError> {
        MaterialData::from_json(value)?.try_into()
    }
}

impl MaterialData {
    /// The object as written, its form checked and nothing else.
    ///
    /// # Errors
    /// An unknown or missing key, a value of the wrong type; the error names the property it stands in.
    pub fn from_json(value: &serde_json::Value) -> Result<Self, MaterialError> {
        serde_json::from_value(value.clone()).map_err(|error| {
            let at_fault = PARTS.iter().find_map(|(property, reads)| {
                let part = value.get(property.as_str())?;
                reads(part).err().map(|message| (*property, message))
            });
            let (property, message) = match at_fault {
                Some((property, message)) => (Some(property), message),
                None => (None, error.to_string()),
            };
            let material = value.get("name").and_then(serde_json::Value::as_str).map(str::to_owned);
            MaterialError { material, property, fault: MaterialFault::Form { message } }
        })
    }
}

/// Reads one part of a material alone, to say which one is at fault.
type Reader = fn(&serde_json::Value) -> Result<(), String>;

const PARTS: [(Property, Reader); 7] = [
    (Property::Density, reads::<Written<String, QuantityData>>),
    (Property::Resistivity, reads::<Written<String, CurveData>>),
    (Property::ThermalConductivity, reads::<Written<String, CurveData>>),
    (Property::SpecificHeat, reads::<Written<String, CurveData>>),
    (Property::Emissivity, reads::<Written<f64, EmissivityData>>),
    (Property::Melting, reads::<MeltingData>),
    (Property::Magnetic, reads::<MagneticData>),
];

fn reads<T: serde::de::DeserializeOwned>(value: &serde_json::Value) -> Result<(), String> {
    serde_json::from_value::<T>(value.clone()).map(|_| ()).map_err(|error| error.to_string())
}
