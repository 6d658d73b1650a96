//! Titles and names: present, unambiguous in key paths, unique.

use crate::job::{Job, Place};
use crate::job_error::{JobError, shown};

/// Characters that would make a key path or a file name ambiguous.
const STRANGE: [char; 8] = ['.', '/', '\\', '[', ']', '"', ',', ';'];

/// Checks the title and every name of a job.
///
/// # Errors
/// A title that is not one line, a name that is empty or has strange characters, a name used twice.
pub(super) fn check(job: &Job) -> Result<(), JobError> {
    let place = job.place();
    let title = job.title.trim();
    if title.is_empty() || title.chars().count() > 200 || title.chars().any(char::is_control) {
        return Err(JobError::BadTitle { place: place.key("title"), value: quoted(title) });
    }
    let list = |key: &str| place.key(key);
    unique("parts", job.parts.iter().map(|p| (list("parts"), p.name.as_str())))?;
    unique("coils", job.coils.iter().map(|c| (list("coils"), c.name.as_str())))?;
    let thermocouples = job.thermocouples.iter().map(|t| (list("thermocouples"), t.name.as_str()));
    let pyrometers = job.pyrometers.iter().map(|p| (list("pyrometers"), p.name.as_str()));
    unique("gauges", thermocouples.chain(pyrometers))?;
    let stages = job.heating.iter().flat_map(|heating| &heating.stages);
    unique("stages", stages.map(|stage| (list("heating").key("stages"), stage.name.as_str())))
}

fn unique<'a>(what: &'static str, names: impl Iterator<Item = (Place, &'a str)>) -> Result<(), JobError> {
    let mut seen = std::collections::BTreeSet::new();
    for (index, (list, name)) in names.enumerate() {
        let strange = |c: char| c.is_control() || STRANGE.contains(&c);
        if name.is_empty() || name.trim() != name || name.chars().count() > 64 || name.chars().any(strange) {
            return Err(JobError::BadName { place: list.index(index).key("name"), value: quoted(name) });
        }
        if !seen.insert(name) {
            return Err(JobError::RepeatedName { place: list.key(name).key("name"), name: name.to_owned(), what });
        }
    }
    Ok(())
}

fn quoted(text: &str) -> String {
    format!("\"{}\"", shown(text))
}
