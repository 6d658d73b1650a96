//! Where something stands in a job file: `FILE` and a key path such as `parts.billet.shape.cylinder.diameter`.
//!
//! Items of a list are addressed by their `name`; an item without one by its index, `[0]`.

use std::fmt;
use std::sync::Arc;

/// A file and a key path in it.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Place {
    file: Arc<str>,
    key: String,
}

impl Place {
    /// The whole file.
    pub fn file(file: &str) -> Self {
        Self { file: file.into(), key: String::new() }
    }

    /// A key of the object that stands here, or a named item of the list that stands here.
    #[must_use]
    pub fn key(&self, key: &str) -> Self {
        let key = if self.key.is_empty() { key.to_owned() } else { format!("{}.{key}", self.key) };
        Self { file: Arc::clone(&self.file), key }
    }

    /// An item of the list that stands here, by index from zero.
    #[must_use]
    pub fn index(&self, index: usize) -> Self {
        Self { file: Arc::clone(&self.file), key: format!("{}[{index}]", self.key) }
    }

    /// The key path alone; empty for the whole file.
    pub fn path(&self) -> &str {
        &self.key
    }
}

impl fmt::Display for Place {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        if self.key.is_empty() {
            write!(f, "{}: at the top", self.file)
        } else {
            write!(f, "{}: at {}", self.file, self.key)
        }
    }
}
