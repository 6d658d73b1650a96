//! Where a value comes from: every property of the library carries one, and a report can print it.

use std::fmt;

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

/// How far a source can be followed.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum SourceKind {
    /// Read in the publication named.
    Published,
    /// The publication is named, but its figures are quoted from memory (also where only some of them are).
    FromMemory,
    /// Follows from other sourced values by the rule named.
    Computed,
    /// What the trade uses; no publication stands behind it.
    CommonPractice,
    /// Given by whoever wrote the job.
    #[default]
    User,
}

impl SourceKind {
    /// The kind in words.
    pub fn as_str(self) -> &'static str {
        match self {
            Self::Published => "published",
            Self::FromMemory => "from memory",
            Self::Computed => "computed",
            Self::CommonPractice => "common practice, no source",
            Self::User => "given by the user",
        }
    }
}

/// Source of a property: what is cited and how far it can be followed.
#[derive(Debug, Clone, PartialEq, Eq, Default, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Source {
    /// How far the source can be followed; `user` if left out.
    #[serde(default)]
    pub kind: SourceKind,
    /// The citation, with what was done to its figures.
    pub text: String,
}

impl Source {
    /// Source of a value that came without one.
    pub fn unstated() -> Self {
        Self { kind: SourceKind::User, text: "no source stated".to_owned() }
    }
}

impl fmt::Display for Source {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{} ({})", self.text, self.kind.as_str())
    }
}
