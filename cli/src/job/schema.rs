//! The JSON Schema of a job file (draft 2020-12): what editors complete from, and what the reader checks against.
//!
//! It is derived from the types of the job as written and then adapted: a key is left out rather than null, every object
//! may carry a `note`, and a quantity names its units. Extra keywords: `x-what` and `x-units` of a quantity, `x-remark`
//! of a note that the types do not know.

use std::sync::OnceLock;

use schemars::generate::SchemaSettings;
use schemars::transform::{Transform, transform_subschemas};
use schemars::{Schema, json_schema};
use serde_json::Value;

use super::Job;

/// The schema as one value; made once.
pub(super) fn shared() -> &'static Value {
    static SCHEMA: OnceLock<Value> = OnceLock::new();
    SCHEMA.get_or_init(|| {
        let generator = SchemaSettings::draft2020_12().into_generator();
        let mut schema = generator.into_root_schema_for::<Job>();
        Adapt.transform(&mut schema);
        schema.insert("title".to_owned(), "Job of coilwright".into());
        schema.to_value()
    })
}

/// Adapts a derived schema, see the notes of this module.
struct Adapt;

impl Transform for Adapt {
    fn transform(&mut self, schema: &mut Schema) {
        drop_null(schema);
        describe_choice(schema);
        allow_note(schema);
        name_units(schema);
        transform_subschemas(self, schema);
    }
}

/// `null` stands nowhere: a key is left out instead.
fn drop_null(schema: &mut Schema) {
    let Some(object) = schema.as_object_mut() else { return };
    if let Some(Value::Array(types)) = object.get_mut("type") {
        types.retain(|name| name != "null");
        if let [only] = types.as_slice() {
            let only = only.clone();
            object.insert("type".to_owned(), only);
        }
    }
    if let Some(Value::Array(choices)) = object.get_mut("anyOf") {
        choices.retain(|choice| choice.get("type").is_none_or(|name| name != "null"));
    }
    if object.get("default") == Some(&Value::Null) {
        object.remove("default");
    }
}

/// A choice that is written as an object of one key: what it is stands at the key too, where editors look.
fn describe_choice(schema: &mut Schema) {
    let Some(said) = schema.get("description").cloned() else { return };
    let Some(Value::Object(properties)) = schema.get_mut("properties") else { return };
    if properties.len() == 1
        && let Some(Value::Object(only)) = properties.values_mut().next()
    {
        only.entry("description").or_insert(said);
    }
}

fn allow_note(schema: &mut Schema) {
    let Some(Value::Object(properties)) = schema.get_mut("properties") else { return };
    if !properties.contains_key("note") {
        let note = json_schema!({ "type": "string", "description": "A remark; it changes nothing.", "x-remark": true });
        properties.insert("note".to_owned(), note.to_value());
    }
}

/// Ends the description of a quantity with the units that will do.
fn name_units(schema: &mut Schema) {
    let Some(units) = schema.get("x-units").and_then(Value::as_array) else { return };
    let units: Vec<&str> = units.iter().filter_map(Value::as_str).collect();
    let what = schema.get("x-what").and_then(Value::as_str).unwrap_or_default();
    let ending = format!("Text: {what} with its unit ({}).", units.join(", "));
    let description = match schema.get("description").and_then(Value::as_str) {
        Some(said) => format!("{said} {ending}"),
        None => ending,
    };
    schema.insert("description".to_owned(), description.into());
}
