//! Notes for a material that was used outside the temperatures its data cover: never a silent extrapolation.

use std::fmt;

use super::curve::Curve;
use super::error::Property;
use super::substance::Material;
use crate::constants::ZERO_CELSIUS_K;

/// Differences in kelvin that are rounding of a unit conversion.
const ROUNDING_K: f64 = 1e-6;

/// On which side of its data a property was used.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum RangeUse {
    /// Below the first temperature of the data.
    Below {
        /// By how many kelvin.
        by_k: f64,
    },
    /// Above the last temperature of the data.
    Above {
        /// By how many kelvin.
        by_k: f64,
    },
}

/// A property of a material used outside the range of its data; its text is the warning.
#[derive(Debug, Clone, PartialEq)]
pub struct RangeNote {
    /// Name of the material.
    pub material: String,
    /// The property.
    pub property: Property,
    /// The temperature it was used at, in kelvin.
    pub used_k: f64,
    /// First and last temperature of its data, in kelvin.
    pub range_k: (f64, f64),
}

impl RangeNote {
    /// On which side, and by how much.
    pub fn side(&self) -> RangeUse {
        if self.used_k < self.range_k.0 {
            RangeUse::Below { by_k: self.range_k.0 - self.used_k }
        } else {
            RangeUse::Above { by_k: self.used_k - self.range_k.1 }
        }
    }
}

impl fmt::Display for RangeNote {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let end = match self.side() {
            RangeUse::Below { .. } => "first",
            RangeUse::Above { .. } => "last",
        };
        write!(
            f,
            "material `{}`: `{}` was used at {:.0} °C, its data cover {:.0} to {:.0} °C; the {end} value was held",
            self.material,
            self.property,
            self.used_k - ZERO_CELSIUS_K,
            self.range_k.0 - ZERO_CELSIUS_K,
            self.range_k.1 - ZERO_CELSIUS_K,
        )
    }
}

impl Material {
    /// What was used outside its data between two temperatures in kelvin: at most two notes a property, in fixed order.
    ///
    /// A constant has no range and gives no note.
    pub fn out_of_range(&self, t_min_k: f64, t_max_k: f64) -> Vec<RangeNote> {
        let curves = [
            (Property::Resistivity, self.resistivity.as_ref()),
            (Property::ThermalConductivity, Some(&self.conductivity)),
            (Property::SpecificHeat, Some(&self.specific_heat)),
        ];
        let mut notes = Vec::new();
        for (property, curve) in curves {
            let Some(range_k) = curve.and_then(Curve::range_k) else {
                continue;
            };
            let note = |used_k| RangeNote { material: self.name.clone(), property, used_k, range_k };
            if t_min_k < range_k.0 - ROUNDING_K {
                notes.push(note(t_min_k));
            }
            if t_max_k > range_k.1 + ROUNDING_K {
                notes.push(note(t_max_k));
            }
        }
        notes
    }
}
