//! Text to JSON values, strictly: a key that stands twice and nesting without end are refused.
//!
//! Source of the grammar: RFC 8259. It leaves repeated names open; here they are an error, since one of the two
//! values would silently be lost. NaN and Infinity are not JSON and are refused by the grammar.

use std::cell::RefCell;
use std::fmt;

use serde::de::{DeserializeSeed, MapAccess, SeqAccess, Visitor};
use serde_json::{Map, Value};

use super::place::Place;
use crate::job_error::JobError;

/// Deepest nesting of objects and lists.
const DEEPEST: usize = 24;

/// Reads `text` as one JSON value.
///
/// # Errors
/// Not JSON, a repeated key, or nesting over 24 levels.
pub(super) fn read(text: &str, file: &str) -> Result<Value, JobError> {
    let refusal = RefCell::new(None);
    let mut reader = serde_json::Deserializer::from_str(text);
    let seed = Seed { at: Place::file(file), depth: 0, refusal: &refusal };
    let read = seed.deserialize(&mut reader).and_then(|value| reader.end().map(|()| value));
    read.map_err(|source| refusal.take().unwrap_or_else(|| syntax(file, text, &source)))
}

/// A syntax error with a remedy for the usual causes.
fn syntax(file: &str, text: &str, source: &serde_json::Error) -> JobError {
    let (line, column) = (source.line(), source.column());
    let written = text.lines().nth(line.saturating_sub(1)).unwrap_or_default();
    let near = written.chars().skip(column.saturating_sub(12)).take(24).collect();
    let whole = source.to_string();
    let problem = whole.split(" at line ").next().unwrap_or_default().to_owned();
    let remedy = if text.trim().is_empty() {
        "the file is empty: begin with one of the example jobs"
    } else if written.contains("NaN") || written.contains("Infinity") {
        "NaN and Infinity are not numbers of JSON: write a finite value"
    } else if source.is_eof() {
        "the text ends too early: close every {, [ and \""
    } else if written.contains("//") || written.contains("/*") {
        "JSON has no comments: put the text into a \"note\""
    } else {
        "look for a missing or trailing comma, a missing quote or bracket before this place"
    };
    JobError::Syntax { file: file.to_owned(), line, column, near, problem, remedy }
}

/// Reads one value, knowing where it stands.
struct Seed<'a> {
    at: Place,
    depth: usize,
    refusal: &'a RefCell<Option<JobError>>,
}

impl Seed<'_> {
    fn inside(&self, at: Place) -> Self {
        Self { at, depth: self.depth + 1, refusal: self.refusal }
    }

    fn refuse<E: serde::de::Error>(&self, error: JobError) -> E {
        *self.refusal.borrow_mut() = Some(error);
        E::custom("refused")
    }

    fn check_depth<E: serde::de::Error>(&self) -> Result<(), E> {
        if self.depth < DEEPEST {
            return Ok(());
        }
        Err(self.refuse(JobError::TooDeep { place: self.at.clone(), limit: DEEPEST }))
    }
}

impl<'de> DeserializeSeed<'de> for Seed<'_> {
    type Value = Value;

    fn deserialize<D: serde::Deserializer<'de>>(self, deserializer: D) -> Result<Value, D::Error> {
        deserializer.deserialize_any(self)
    }
}

impl<'de> Visitor<'de> for Seed<'_> {
    type Value = Value;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("a JSON value")
    }

    fn visit_bool<E>(self, value: bool) -> Result<Value, E> {
        Ok(Value::Bool(value))
    }

    fn visit_i64<E>(self, value: i64) -> Result<Value, E> {
        Ok(value.into())
    }

    fn visit_u64<E>(self, value: u64) -> Result<Value, E> {
        Ok(value.into())
    }

    fn visit_f64<E: serde::de::Error>(self, value: f64) -> Result<Value, E> {
        serde_json::Number::from_f64(value).map(Value::Number).ok_or_else(|| E::custom("number is not finite"))
    }

    fn visit_str<E>(self, value: &str) -> Result<Value, E> {
        Ok(value.into())
    }

    fn visit_unit<E>(self) -> Result<Value, E> {
        Ok(Value::Null)
    }

    fn visit_seq<A: SeqAccess<'de>>(self, mut list: A) -> Result<Value, A::Error> {
        self.check_depth()?;
        let mut items = Vec::new();
        while let Some(item) = list.next_element_seed(self.inside(self.at.index(items.len())))? {
            items.push(item);
        }
        Ok(Value::Array(items))
    }

    fn visit_map<A: MapAccess<'de>>(self, mut object: A) -> Result<Value, A::Error> {
        self.check_depth()?;
        let mut map = Map::new();
        while let Some(key) = object.next_key::<String>()? {
            let at = self.at.key(&key);
            if map.contains_key(&key) {
                return Err(self.refuse(JobError::RepeatedKey { place: at }));
            }
            let value = object.next_value_seed(self.inside(at))?;
            map.insert(key, value);
        }
        Ok(Value::Object(map))
    }
}
