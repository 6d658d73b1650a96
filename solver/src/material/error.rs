//! Why material data are refused: the material, the property by its key in the file, the value, the limit, the remedy.
//!
//! Convention: temperatures in messages are °C, as in the files.

use std::fmt;

use crate::constants::ZERO_CELSIUS_K;

/// A property of a material, named by its key in a file.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Property {
    /// `name` and `aliases`.
    Name,
    /// `density`.
    Density,
    /// `resistivity`, electrical.
    Resistivity,
    /// `thermal_conductivity`.
    ThermalConductivity,
    /// `specific_heat`.
    SpecificHeat,
    /// `emissivity`.
    Emissivity,
    /// `melting` as a whole.
    Melting,
    /// `melting.solidus`.
    Solidus,
    /// `melting.liquidus`.
    Liquidus,
    /// `melting.latent_heat`.
    LatentHeat,
    /// `magnetic` as a whole.
    Magnetic,
    /// `magnetic.saturation_polarisation`.
    SaturationPolarisation,
    /// `magnetic.initial_relative_permeability`.
    InitialPermeability,
    /// `magnetic.relative_permeability_20c`.
    Permeability20C,
    /// `magnetic.curie`.
    Curie,
}

impl Property {
    /// The key in a file.
    pub fn as_str(self) -> &'static str {
        match self {
            Self::Name => "name",
            Self::Density => "density",
            Self::Resistivity => "resistivity",
            Self::ThermalConductivity => "thermal_conductivity",
            Self::SpecificHeat => "specific_heat",
            Self::Emissivity => "emissivity",
            Self::Melting => "melting",
            Self::Solidus => "melting.solidus",
            Self::Liquidus => "melting.liquidus",
            Self::LatentHeat => "melting.latent_heat",
            Self::Magnetic => "magnetic",
            Self::SaturationPolarisation => "magnetic.saturation_polarisation",
            Self::InitialPermeability => "magnetic.initial_relative_permeability",
            Self::Permeability20C => "magnetic.relative_permeability_20c",
            Self::Curie => "magnetic.curie",
        }
    }
}

impl fmt::Display for Property {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.as_str())
    }
}

/// What is wrong with the data, and what to do.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum MaterialFault {
    /// NaN or infinite.
    #[error("{value} is not a finite number; give a finite one")]
    NotFinite {
        /// The value as given.
        value: f64,
    },
    /// Zero or negative where only positive values have a meaning.
    #[error("{value} {unit}{} is not greater than zero; correct the value or its sign", at(*.at_c))]
    NotPositive {
        /// The value in `unit`.
        value: f64,
        /// SI unit of the property.
        unit: &'static str,
        /// Temperature in °C, for a property over temperature.
        at_c: Option<f64>,
    },
    /// The formula comes so close to zero, or varies so steeply, that it could not be shown to stay positive.
    #[error("the formula could not be shown to stay greater than zero near {at_c} °C; use a table there")]
    PositivityUnclear {
        /// Temperature in °C.
        at_c: f64,
    },
    /// Below a least value.
    #[error("{value} {unit} is below the least possible value {least} {unit}; correct it")]
    TooLow {
        /// The value in `unit`.
        value: f64,
        /// Least value in `unit`.
        least: f64,
        /// Unit, empty for a pure number.
        unit: &'static str,
    },
    /// Above a greatest value.
    #[error("{value} {unit} is above the greatest possible value {greatest} {unit}; correct it")]
    TooHigh {
        /// The value in `unit`.
        value: f64,
        /// Greatest value in `unit`.
        greatest: f64,
        /// Unit, empty for a pure number.
        unit: &'static str,
    },
    /// A table without rows.
    #[error("the table has no rows; give at least one row [temperature, value]")]
    EmptyTable,
    /// Segments asked for, none given.
    #[error("there are no segments; give at least one with `from`, `to` and `polynomial`")]
    NoSegments,
    /// A temperature repeated or out of order.
    #[error(
        "row {row} of the table is at {at_c} °C after {previous_c} °C; temperatures must rise from row to row \
         (write a step as two rows a little apart)"
    )]
    RowsNotRising {
        /// Row, counted from 1.
        row: usize,
        /// Its temperature in °C.
        at_c: f64,
        /// Temperature of the row before, in °C.
        previous_c: f64,
    },
    /// A temperature below absolute zero.
    #[error("{at_c} °C is below absolute zero, -273.15 °C; check the temperature and its unit")]
    BelowAbsoluteZero {
        /// The temperature in °C.
        at_c: f64,
    },
    /// A segment that ends before it begins.
    #[error("the segment from {from_c} °C ends at {to_c} °C; `to` must be above `from`")]
    SegmentBackwards {
        /// Begin in °C.
        from_c: f64,
        /// End in °C.
        to_c: f64,
    },
    /// A gap or an overlap between two segments.
    #[error(
        "a segment ends at {end_c} °C and the next begins at {begin_c} °C; each must begin where the last one ended"
    )]
    SegmentsApart {
        /// End of the first in °C.
        end_c: f64,
        /// Begin of the second in °C.
        begin_c: f64,
    },
    /// The pole of a rational segment lies in the segment, where the value would be infinite.
    #[error("the pole at {at_c} °C lies inside its segment, {from_c} to {to_c} °C; end the segment before it")]
    PoleInside {
        /// Pole in °C.
        at_c: f64,
        /// Begin of the segment in °C.
        from_c: f64,
        /// End of the segment in °C.
        to_c: f64,
    },
    /// None or several of the ways to write a curve.
    #[error("{count} of `constant`, `table` and `segments` are given; give exactly one")]
    FormCount {
        /// How many were given.
        count: usize,
    },
    /// Text that is not a number with a unit.
    #[error("`{written}` is not a number with a unit; units accepted here: {accepted}")]
    NotAQuantity {
        /// As written.
        written: String,
        /// Units that would do.
        accepted: &'static str,
    },
    /// A unit of another quantity, or none that is known.
    #[error("the unit `{written}` does not fit here; units accepted: {accepted}")]
    UnknownUnit {
        /// As written.
        written: String,
        /// Units that would do.
        accepted: &'static str,
    },
    /// A table or segments without a unit.
    #[error("the values have no unit; add \"unit\": one of {accepted}")]
    UnitMissing {
        /// Units that would do.
        accepted: &'static str,
    },
    /// A constant that also names a unit beside its text.
    #[error("`unit` stands beside a constant that carries its own unit; remove `unit`")]
    UnitTwice,
    /// Liquid before solid.
    #[error("the liquidus {liquidus_c} °C is below the solidus {solidus_c} °C; exchange or correct them")]
    LiquidusBelowSolidus {
        /// Solidus in °C.
        solidus_c: f64,
        /// Liquidus in °C.
        liquidus_c: f64,
    },
    /// The JSON has another form: an unknown key, a missing one, a bare number.
    #[error("{message}")]
    Form {
        /// What the reader of the JSON says, with the key.
        message: String,
    },
    /// An empty name.
    #[error("the name is empty; give the material a name")]
    NameEmpty,
    /// Two library materials answer to the same name.
    #[error("the name or alias `{name}` already belongs to `{holder}`; choose another")]
    NameTaken {
        /// The name in question.
        name: String,
        /// The material that has it.
        holder: String,
    },
    /// A library value without a source.
    #[error("the value has no source; every value of the library names one")]
    SourceMissing,
}

/// Material data that are refused.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[error("{}{fault}", place(material.as_deref(), *.property))]
pub struct MaterialError {
    /// Name of the material, where it is known.
    pub material: Option<String>,
    /// The property, where it is known.
    pub property: Option<Property>,
    /// What is wrong and what to do.
    pub fault: MaterialFault,
}

impl MaterialError {
    /// The same error with the property named, unless it already names one.
    #[must_use]
    pub fn of(mut self, property: Property) -> Self {
        self.property.get_or_insert(property);
        self
    }

    /// The same error with the material named, unless it already names one.
    #[must_use]
    pub fn in_material(mut self, name: &str) -> Self {
        self.material.get_or_insert_with(|| name.to_owned());
        self
    }
}

impl From<MaterialFault> for MaterialError {
    fn from(fault: MaterialFault) -> Self {
        Self { material: None, property: None, fault }
    }
}

fn place(material: Option<&str>, property: Option<Property>) -> String {
    match (material, property) {
        (Some(name), Some(property)) => format!("material `{name}`, `{property}`: "),
        (Some(name), None) => format!("material `{name}`: "),
        (None, Some(property)) => format!("`{property}`: "),
        (None, None) => String::new(),
    }
}

fn at(at_c: Option<f64>) -> String {
    at_c.map_or_else(String::new, |t| format!(" at {t} °C"))
}

/// Temperature in °C for a message, without the rounding of the conversion.
pub(super) fn celsius(t_k: f64) -> f64 {
    ((t_k - ZERO_CELSIUS_K) * 1e6).round() / 1e6
}
