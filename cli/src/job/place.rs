//! Where something stands in a job file: `FILE` and a key path such as `parts.billet.shape.cylinder.diameter`.
//!
//! Items of a list are addressed by their `name`; an item without one by its index, `[0]`.

use std::fmt;
use std::sync::Arc;

/// A file and a key path in it; cheap to copy.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Place(Arc<Path>);

#[derive(Debug, PartialEq, Eq)]
struct Path {
    file: Arc<str>,
    key: String,
}

impl Place {
    /// The whole file.
    pub fn file(file: &str) -> Self {
        Self(Arc::new(Path { file: file.into(), key: String::new() }))
    }

    /// A key of the object that stands here, or a named item of the list that stands here.
    #[must_use]
    pub fn key(&self, key: &str) -> Self {
        self.with(if self.0.key.is_empty() { key.to_owned() } else { format!("{}.{key}", self.0.key) })
    }

    /// An item of the list that stands here, by index from zero.
    #[must_use]
    pub fn index(&self, index: usize) -> Self {
        self.with(format!("{}[{index}]", self.0.key))
    }

    fn with(&self, key: String) -> Self {
        Self(Arc::new(Path { file: Arc::clone(&self.0.file), key }))
    }
}

impl fmt::Display for Place {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let key = if self.0.key.is_empty() { "the top" } else { &self.0.key };
        write!(f, "{}: at {key}", self.0.file)
    }
}
