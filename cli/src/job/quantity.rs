//! A value with its unit, kept as it was written: `"60 mm"`.

use std::borrow::Cow;
use std::marker::PhantomData;

use schemars::{JsonSchema, Schema, SchemaGenerator, json_schema};
use serde::{Deserialize, Deserializer, Serialize, Serializer};

use super::units::Dimension;

/// A number and its unit as written; the dimension says which units will do.
#[derive(Debug, Clone, PartialEq)]
pub struct Quantity<D> {
    text: String,
    dimension: PhantomData<D>,
}

impl<D: Dimension> Quantity<D> {
    /// A quantity that will be read from `text`.
    pub fn of(text: impl Into<String>) -> Self {
        Self { text: text.into(), dimension: PhantomData }
    }

    /// The text as written.
    pub fn text(&self) -> &str {
        &self.text
    }
}

impl<D: Dimension> Serialize for Quantity<D> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.serialize_str(&self.text)
    }
}

impl<'de, D: Dimension> Deserialize<'de> for Quantity<D> {
    fn deserialize<R: Deserializer<'de>>(deserializer: R) -> Result<Self, R::Error> {
        String::deserialize(deserializer).map(Self::of)
    }
}

impl<D: Dimension> JsonSchema for Quantity<D> {
    fn inline_schema() -> bool {
        true
    }

    fn schema_name() -> Cow<'static, str> {
        D::WHAT.into()
    }

    fn json_schema(_: &mut SchemaGenerator) -> Schema {
        let units: Vec<&str> = D::UNITS.iter().map(|unit| unit.symbol).collect();
        json_schema!({
            "type": "string",
            "pattern": r"^\s*[+-]?([0-9]+\.?[0-9]*|\.[0-9]+)([eE][+-]?[0-9]+)?\s*\D",
            "examples": [D::EXAMPLE],
            "x-what": D::WHAT,
            "x-units": units,
        })
    }
}
