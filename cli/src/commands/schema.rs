//! `coilwright schema`: the JSON Schema of the job file, for editors.

use std::io::Write;

use super::print;
use crate::exit::{Exit, Failure};
use crate::export::json_bytes;
use crate::job;

/// Prints the schema.
pub(super) fn schema(out: &mut dyn Write) -> Result<Exit, Failure> {
    let text = json_bytes(&job::schema())?;
    print(out, &String::from_utf8_lossy(&text))?;
    Ok(Exit::Done)
}
