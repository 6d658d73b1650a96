//! Materials: properties over temperature, each with its source, and the built-in library.
//!
//! Three layers, one direction: [`MaterialData`] is a material as written in a library or job file (engineers' units, °C);
//! [`Material`] is what it means (SI, kelvin); [`Library`] holds the built-in ones by name and alias.
//!
//! Convention: outside the range of its data a property keeps its end value, and [`Material::out_of_range`] says so.
//! Densities are constant, because mass is conserved on the undeformed mesh.

mod convert;
mod curve;
mod data;
mod enthalpy;
mod error;
mod library;
mod magnetic;
mod range;
mod segment;
mod source;
mod substance;
mod units;

pub use curve::Curve;
pub use data::{
    CurveData, EmissivityData, MagneticData, MaterialData, MeltingData, PoleData, QuantityData, SegmentData,
    TemperatureUnit, Written,
};
pub use enthalpy::{Enthalpy, Melting};
pub use error::{MaterialError, MaterialFault, Property};
pub use library::{Library, library};
pub use magnetic::{Magnetic, reduced_polarisation};
pub use range::{RangeNote, RangeUse};
pub use segment::{Pole, Segment};
pub use source::{Source, SourceKind};
pub use substance::Material;
