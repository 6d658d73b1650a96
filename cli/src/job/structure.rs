//! Checks the form of a job against its schema: keys, types, words, ranges of plain numbers.
//!
//! The schema is the single description of the form; this reader turns a mismatch into a message that names the place, the
//! value, what would do and the nearest known word. Units and everything geometric are checked by [`crate::lower`].

use serde_json::{Map, Value};

use super::place::Place;
use crate::job_error::{JobError, shown};

/// A remark that the types of the job do not know: JSON pointer of its object, and its text.
pub(super) type Remark = (String, Value);

/// Keys and words that a later version will know.
const RESERVED: [&str; 18] = [
    "mesh_accuracy",
    "tank",
    "leads",
    "inverter_to_terminals",
    "travel",
    "feed",
    "quench_ring",
    "measured",
    "fixed_to",
    "conical",
    "parallel",
    "parallel_paths",
    "parallel paths",
    "closed_ring",
    "closed ring",
    "open_ring",
    "enclosure",
    "contact",
];

/// Checks `job` and gives its remarks in the order they stand.
///
/// # Errors
/// The first mismatch.
pub(super) fn check(schema: &Value, job: &Value, file: &str) -> Result<Vec<Remark>, JobError> {
    let mut walk = Walk { root: schema, remarks: Vec::new() };
    walk.check(schema, job, &Here { place: Place::file(file), pointer: String::new() })?;
    Ok(walk.remarks)
}

/// Where the walk is, for messages and as a JSON pointer.
struct Here {
    place: Place,
    pointer: String,
}

impl Here {
    fn key(&self, key: &str) -> Self {
        let escaped = key.replace('~', "~0").replace('/', "~1");
        Self { place: self.place.key(key), pointer: format!("{}/{escaped}", self.pointer) }
    }

    fn item(&self, index: usize, item: &Value) -> Self {
        let place = match item.get("name").and_then(Value::as_str) {
            Some(name) => self.place.key(name),
            None => self.place.index(index),
        };
        Self { place, pointer: format!("{}/{index}", self.pointer) }
    }
}

struct Walk<'a> {
    root: &'a Value,
    remarks: Vec<Remark>,
}

impl<'a> Walk<'a> {
    fn check(&mut self, schema: &'a Value, value: &Value, here: &Here) -> Result<(), JobError> {
        let mut choices = Vec::new();
        self.choices(schema, &mut choices);
        match value {
            Value::Object(object) => self.check_object(&choices, object, here),
            Value::Array(list) => self.check_list(&choices, list, here),
            Value::String(text) => check_text(&choices, text, here),
            Value::Number(_) => check_number(&choices, value, here),
            Value::Bool(_) | Value::Null => Err(wrong_type(&choices, value, here)),
        }
    }

    /// The schema behind references and alternatives, as a flat list of simple schemas.
    fn choices(&self, schema: &'a Value, into: &mut Vec<&'a Value>) {
        let reference = schema.get("$ref").and_then(Value::as_str);
        if let Some(target) = reference.and_then(|path| self.root.pointer(path.trim_start_matches('#'))) {
            self.choices(target, into);
        } else if let Some(list) = ["anyOf", "oneOf"].iter().find_map(|key| schema.get(*key)?.as_array()) {
            for choice in list {
                self.choices(choice, into);
            }
        } else {
            into.push(schema);
        }
    }

    fn check_object(
        &mut self,
        choices: &[&'a Value],
        object: &Map<String, Value>,
        here: &Here,
    ) -> Result<(), JobError> {
        let forms: Vec<Form<'a>> = choices.iter().filter_map(|choice| Form::of(choice)).collect();
        let Some(best) = best_form(&forms, object) else {
            return Err(wrong_type(choices, &Value::Object(object.clone()), here));
        };
        if let Some(key) = object.keys().find(|key| !best.keys.contains_key(*key)) {
            return Err(stray_key(&forms, best, object, key, here));
        }
        if let Some(key) = best.required.iter().find(|key| !object.contains_key(**key)) {
            return Err(self.missing(&forms, best, key, here));
        }
        for (key, value) in object {
            let Some(property) = best.keys.get(key) else { continue };
            self.check(property, value, &here.key(key))?;
            if property.get("x-remark").is_some() {
                self.remarks.push((here.pointer.clone(), value.clone()));
            }
        }
        Ok(())
    }

    fn missing(&self, forms: &[Form<'a>], best: &Form<'a>, key: &str, here: &Here) -> JobError {
        let place = here.place.clone();
        if forms.len() > 1 && best.required.len() == 1 {
            return JobError::NothingChosen { place, known: known_keys(forms) };
        }
        let mut choices = Vec::new();
        if let Some(property) = best.keys.get(key) {
            self.choices(property, &mut choices);
        }
        JobError::MissingKey { place, key: key.to_owned(), expected: expected(&choices) }
    }

    fn check_list(&mut self, choices: &[&'a Value], list: &[Value], here: &Here) -> Result<(), JobError> {
        let Some(schema) = choices.iter().find(|choice| is_type(choice, "array")) else {
            return Err(wrong_type(choices, &Value::Array(list.to_vec()), here));
        };
        let bound = |key: &str| schema.get(key).and_then(Value::as_u64);
        let (least, most) = (bound("minItems").unwrap_or(0), bound("maxItems").unwrap_or(u64::MAX));
        let count = list.len() as u64;
        if count < least || count > most {
            return Err(JobError::ListLength { place: here.place.clone(), count, least, most });
        }
        let fixed = schema.get("prefixItems").and_then(Value::as_array);
        for (index, item) in list.iter().enumerate() {
            let item_schema = fixed.and_then(|items| items.get(index)).or_else(|| schema.get("items"));
            if let Some(item_schema) = item_schema {
                self.check(item_schema, item, &here.item(index, item))?;
            }
        }
        Ok(())
    }
}

/// A form an object may have.
struct Form<'a> {
    /// Schema of each key.
    keys: &'a Map<String, Value>,
    /// Keys that must be there.
    required: Vec<&'a str>,
}

impl<'a> Form<'a> {
    fn of(schema: &'a Value) -> Option<Self> {
        let keys = schema.get("properties")?.as_object()?;
        let required = schema.get("required").and_then(Value::as_array).into_iter().flatten();
        Some(Self { keys, required: required.filter_map(Value::as_str).collect() })
    }
}

/// The form that shares most keys with the object, one with nothing missing first; the first of equals.
fn best_form<'f, 'a>(forms: &'f [Form<'a>], object: &Map<String, Value>) -> Option<&'f Form<'a>> {
    let rank = |form: &Form| {
        let shared = object.keys().filter(|key| *key != "note" && form.keys.contains_key(*key)).count();
        (shared, form.required.iter().all(|key| object.contains_key(*key)))
    };
    let most = forms.iter().map(rank).max()?;
    forms.iter().find(|form| rank(form) == most)
}

/// Why a key may not stand where it does.
fn stray_key(forms: &[Form], best: &Form, object: &Map<String, Value>, key: &str, here: &Here) -> JobError {
    let place = here.place.key(key);
    if RESERVED.contains(&key) {
        return JobError::NotInThisVersion { place, what: key.to_owned() };
    }
    let beside = object.keys().find(|other| *other != "note" && best.keys.contains_key(*other));
    if let Some(beside) = beside.filter(|_| forms.iter().any(|form| form.keys.contains_key(key))) {
        return JobError::OneOf { place, first: beside.clone(), second: key.to_owned() };
    }
    let known = if beside.is_some() { known_keys(std::slice::from_ref(best)) } else { known_keys(forms) };
    JobError::UnknownKey { place, key: key.to_owned(), suggestion: nearest(key, &known), known: known.join(", ") }
}

fn known_keys(forms: &[Form]) -> Vec<String> {
    let mut known: Vec<String> = Vec::new();
    for key in forms.iter().flat_map(|form| form.keys.keys()).filter(|key| *key != "note") {
        if !known.contains(key) {
            known.push(key.clone());
        }
    }
    known
}

/// The known word most like one that was not found, where one is at all like it.
pub(crate) fn nearest(word: &str, known: &[String]) -> Option<String> {
    if word.len() > 64 {
        return None;
    }
    let (distance, best) = known.iter().map(|k| (strsim::damerau_levenshtein(word, k), k)).min_by_key(|(d, _)| *d)?;
    let contained = known.iter().find(|k| word.len() >= 4 && (k.contains(word) || word.contains(k.as_str())));
    if distance <= (word.chars().count() / 3).max(1) { Some(best.clone()) } else { contained.cloned() }
}

fn check_text(choices: &[&Value], text: &str, here: &Here) -> Result<(), JobError> {
    let words: Vec<String> = choices.iter().flat_map(|choice| words(choice)).collect();
    let free = choices.iter().any(|choice| is_type(choice, "string") && words_of(choice).is_none());
    if free || words.iter().any(|word| word == text) {
        return Ok(());
    }
    let place = here.place.clone();
    if words.is_empty() {
        return Err(wrong_type(choices, &Value::String(text.to_owned()), here));
    }
    if RESERVED.contains(&text) {
        return Err(JobError::NotInThisVersion { place, what: text.to_owned() });
    }
    let suggestion = nearest(text, &words);
    Err(JobError::UnknownWord { place, value: shown(text), suggestion, known: words.join(", ") })
}

/// Words a schema allows, if it allows only words.
fn words_of(schema: &Value) -> Option<Vec<&Value>> {
    match (schema.get("const"), schema.get("enum")) {
        (Some(word), _) => Some(vec![word]),
        (None, Some(Value::Array(list))) => Some(list.iter().collect()),
        _ => None,
    }
}

fn words(schema: &Value) -> Vec<String> {
    words_of(schema).into_iter().flatten().filter_map(Value::as_str).map(str::to_owned).collect()
}

fn check_number(choices: &[&Value], value: &Value, here: &Here) -> Result<(), JobError> {
    let Some(schema) = choices.iter().find(|choice| is_type(choice, "number") || is_type(choice, "integer")) else {
        return Err(bare_number(choices, value, here).unwrap_or_else(|| wrong_type(choices, value, here)));
    };
    let number = value.as_f64().unwrap_or(f64::NAN);
    if is_type(schema, "integer") && !(value.is_u64() || value.is_i64()) {
        return Err(wrong_type(choices, value, here));
    }
    let bound = |key: &str| schema.get(key).and_then(Value::as_f64);
    let (least, most) = (bound("minimum").unwrap_or(f64::MIN), bound("maximum").unwrap_or(f64::MAX));
    if !(number >= least && number <= most) {
        return Err(JobError::NumberRange { place: here.place.clone(), value: number, least, most });
    }
    Ok(())
}

/// A number where a quantity is wanted: which units would do.
fn bare_number(choices: &[&Value], value: &Value, here: &Here) -> Option<JobError> {
    let schema = choices.iter().find(|choice| choice.get("x-units").is_some())?;
    let units: Vec<&str> = schema.get("x-units")?.as_array()?.iter().filter_map(Value::as_str).collect();
    Some(JobError::BareNumber {
        place: here.place.clone(),
        value: value.to_string(),
        what: schema.get("x-what")?.as_str()?.to_owned(),
        first: (*units.first()?).to_owned(),
        units: units.join(", "),
    })
}

fn is_type(schema: &Value, name: &str) -> bool {
    schema.get("type").is_some_and(|found| found == name)
}

fn wrong_type(choices: &[&Value], value: &Value, here: &Here) -> JobError {
    JobError::WrongType { place: here.place.clone(), value: shown(&value.to_string()), expected: expected(choices) }
}

/// What would do, in words.
fn expected(choices: &[&Value]) -> String {
    let mut said: Vec<String> = Vec::new();
    for choice in choices {
        let text = describe(choice);
        if !said.contains(&text) {
            said.push(text);
        }
    }
    said.join(", or ")
}

fn describe(schema: &Value) -> String {
    let text = |key: &str| schema.get(key).and_then(Value::as_str).unwrap_or_default();
    if schema.get("x-units").is_some() {
        let example = schema.pointer("/examples/0").and_then(Value::as_str).unwrap_or_default();
        return format!("{} as text with its unit, such as \"{example}\"", text("x-what"));
    }
    let words = words(schema);
    if !words.is_empty() {
        return words.iter().map(|word| format!("\"{word}\"")).collect::<Vec<_>>().join(", or ");
    }
    match text("type") {
        "object" => {
            let keys = Form::of(schema).map(|form| known_keys(std::slice::from_ref(&form)));
            format!("an object with {}", keys.unwrap_or_default().join(", "))
        }
        "array" => "a list in [ ]".to_owned(),
        "integer" => "a whole number without quotes".to_owned(),
        "number" => "a number without quotes".to_owned(),
        "string" => "text in quotes".to_owned(),
        "boolean" => "true or false".to_owned(),
        other => other.to_owned(),
    }
}
