//! Why a job is refused: `FILE: at KEY.PATH: value VALUE: what was expected; remedy`.
//!
//! Lengths in messages are millimetres, temperatures °C, as in job files.

use std::io;

use mesher::OutlineError;
use solver::material::MaterialError;

use crate::job::Place;

/// Why a job is refused. Every variant says where, which value, what was expected and what to do.
#[derive(Debug, thiserror::Error)]
#[allow(missing_docs, reason = "the fields are the words of the message that stands above them")]
pub enum JobError {
    /// The file cannot be opened or read.
    #[error("{file}: cannot be read: {source}; check the path and the permissions")]
    Unreadable { file: String, source: io::Error },
    /// A directory or a device.
    #[error("{file}: is not a file; give the path of a job file, such as bar-heater.json")]
    NotAFile { file: String },
    /// A file beyond any job.
    #[error("{file}: is larger than {limit_mb} MB, more than any job needs; check that it is a job file")]
    TooLarge { file: String, limit_mb: u64 },
    /// Bytes that are not UTF-8.
    #[error("{file}: byte {byte} is not UTF-8 text; save the file as UTF-8")]
    NotText { file: String, byte: usize },
    /// Text that is not JSON.
    #[error("{file}: line {line}, column {column}{}: not JSON ({problem}); {remedy}", near_text(.near))]
    Syntax { file: String, line: usize, column: usize, near: String, problem: String, remedy: &'static str },
    /// Objects in objects without end.
    #[error("{place}: is nested deeper than {limit} levels; a job needs fewer, remove the brackets that are too many")]
    TooDeep { place: Place, limit: usize },
    /// A key that stands twice in one object.
    #[error("{place}: this key stands twice in its object, and one of the two values would be lost; remove one")]
    RepeatedKey { place: Place },
    /// The form agrees with the schema and yet not with the types of the job.
    #[error("{file}: is not the form of a job ({source}); compare it with the schema of `coilwright schema`")]
    Form { file: String, source: serde_json::Error },

    /// A key nobody knows.
    #[error("{place}: unknown key `{key}`; {}", meant(.suggestion.as_deref(), .known))]
    UnknownKey { place: Place, key: String, suggestion: Option<String>, known: String },
    /// A word nobody knows.
    #[error("{place}: value \"{value}\": not one of the words that may stand here; {}", meant(.suggestion.as_deref(), .known))]
    UnknownWord { place: Place, value: String, suggestion: Option<String>, known: String },
    /// Something a later version will know.
    #[error("{place}: `{what}` is not in this version; remove it")]
    NotInThisVersion { place: Place, what: String },
    /// Two keys of which one may stand.
    #[error("{place}: only one of `{first}` and `{second}` may stand here; remove one of them")]
    OneOf { place: Place, first: String, second: String },
    /// None of the keys of which one must stand.
    #[error("{place}: nothing is chosen here; write one of {}", .known.join(", "))]
    NothingChosen { place: Place, known: Vec<String> },
    /// A key that has to be there.
    #[error("{place}: key `{key}` is missing; add it: {expected}")]
    MissingKey { place: Place, key: String, expected: String },
    /// A list that is too short or too long.
    #[error("{place}: value with {count} items: {}", list_length(*.count, *.least, *.most))]
    ListLength { place: Place, count: u64, least: u64, most: u64 },
    /// Another kind of value.
    #[error("{place}: value {value}: expected {expected}; write that instead, or leave the key out if it is optional")]
    WrongType { place: Place, value: String, expected: String },
    /// A plain number out of its range.
    #[error("{place}: value {value}: expected {}; correct the number", range(*.least, *.most))]
    NumberRange { place: Place, value: f64, least: f64, most: f64 },

    /// A number without a unit.
    #[error("{place}: value {value}: {what} needs its unit ({units}); write it as text, such as \"{value} {first}\"")]
    BareNumber { place: Place, value: String, what: String, first: String, units: String },
    /// Text that does not begin with a number.
    #[error("{place}: value {value}: expected {what}, a number and its unit; write it like \"{example}\"{hint}")]
    NotAQuantity { place: Place, value: String, what: &'static str, example: &'static str, hint: &'static str },
    /// A unit of something else, or of nothing.
    #[error("{place}: value {value}: {found} of {what}; write one of {units}")]
    Unit { place: Place, value: String, found: String, what: &'static str, units: String },
    /// A difference of temperatures in a unit that has another zero.
    #[error(
        "{place}: value {value}: a temperature difference is written in K; a step of 1 °C is 1 K, write \"{number} K\""
    )]
    DifferenceUnit { place: Place, value: String, number: f64 },
    /// A quantity out of its range.
    #[error("{place}: value {value}: {what} must be {range}; correct the number or its unit")]
    OutOfRange { place: Place, value: String, what: &'static str, range: &'static str },

    /// A name that is empty or would make paths ambiguous.
    #[error(
        "{place}: value {value}: a name has 1 to 64 characters without . / \\ [ ] \" , ; control characters or outer spaces; choose another"
    )]
    BadName { place: Place, value: String },
    /// A title that is no line.
    #[error(
        "{place}: value {value}: a title is one line of 1 to 200 characters; shorten it and put the rest into a \"note\""
    )]
    BadTitle { place: Place, value: String },
    /// Two items with one name.
    #[error("{place}: value \"{name}\": two {what} have this name; rename one")]
    RepeatedName { place: Place, name: String, what: &'static str },
    /// A reference to nothing.
    #[error("{place}: value \"{name}\": there is no {what} of this name; {}", meant(.suggestion.as_deref(), .known))]
    UnknownName { place: Place, name: String, what: &'static str, suggestion: Option<String>, known: String },
    /// A material the library does not have.
    #[error("{place}: value \"{name}\": no material of this name; {}`coilwright materials` lists those there are, or write an object with its data", did_you_mean(.suggestion.as_deref()))]
    UnknownMaterial { place: Place, name: String, suggestion: Option<String> },
    /// Material data that do not hold together.
    #[error("{place}: {source}")]
    Material { place: Place, source: MaterialError },

    /// A shape that is placed twice or not long enough known.
    #[error("{place}: {found}; write `{length}` with `centre`, `from` or `to`, or `from` with `to`")]
    Placement { place: Place, found: &'static str, length: &'static str },
    /// Two sizes in the wrong order.
    #[error("{place}: value {value}: must be more than `{other}` ({limit}); enlarge it or reduce `{other}`")]
    NotMore { place: Place, value: String, other: &'static str, limit: String },
    /// A size that does not fit.
    #[error("{place}: value {value}: must be less than {limit_mm:.4} mm, {why}; reduce it")]
    TooBig { place: Place, value: String, limit_mm: f64, why: &'static str },
    /// A winding whose extent is said twice or not at all.
    #[error("{place}: {found}; write either `{extent}` or `pitch`")]
    WindingExtent { place: Place, found: &'static str, extent: &'static str },
    /// One turn with an extent other than its conductor's.
    #[error(
        "{place}: value {value}: one turn extends as far as its conductor, {conductor_mm:.4} mm; leave `{extent}` out or correct it"
    )]
    OneTurnExtent { place: Place, value: String, conductor_mm: f64, extent: &'static str },
    /// Turns that would overlap their neighbours.
    #[error("{place}: value {value}: the turns would be {pitch_mm:.4} mm apart, centre to centre, but the conductor is {conductor_mm:.4} mm; {}", pitch_remedy(extent, *.least_mm))]
    TightPitch { place: Place, value: String, pitch_mm: f64, conductor_mm: f64, extent: &'static str, least_mm: f64 },
    /// More turns than can be solved.
    #[error(
        "{place}: value {count} turns: at most {limit} turns can stand in one job; combine them into fewer, or use `stranded` windows"
    )]
    TooManyTurns { place: Place, count: usize, limit: usize },
    /// A profile that does not begin with a point.
    #[error("{place}: a profile begins with a point; write [r, z] first and the arc after it")]
    ProfileStart { place: Place },
    /// A corner that does not fit between its neighbours.
    #[error("{place}: value {value}: does not fit here: at most {} mm do, next to the corners beside it; reduce it or theirs", rounded_down(*.limit_mm))]
    CornerTooLarge { place: Place, value: String, limit_mm: f64 },
    /// A corner that does not turn.
    #[error("{place}: the outline runs straight on or back at this corner; remove the fillet or chamfer")]
    NoCorner { place: Place },
    /// An arc whose ends are not on one circle.
    #[error(
        "{place}: the arc starts {start_mm:.4} mm and ends {end_mm:.4} mm from its centre; correct the centre or an end"
    )]
    ArcRadii { place: Place, start_mm: f64, end_mm: f64 },
    /// An outline that crosses itself.
    #[error(
        "{place}: the outline crosses or touches itself at r = {r_mm:.4} mm, z = {z_mm:.4} mm; list its points in their order round the section"
    )]
    CrossesItself { place: Place, r_mm: f64, z_mm: f64 },
    /// The same point twice in a row.
    #[error("{place}: value r = {r_mm:.4} mm, z = {z_mm:.4} mm: this point stands twice in a row; remove one")]
    RepeatedPoint { place: Place, r_mm: f64, z_mm: f64 },
    /// An outline that is none.
    #[error("{place}: {source}")]
    Outline { place: Place, source: OutlineError },

    /// A part on the other side of the axis.
    #[error("{place}: value r = {r_mm:.4} mm: the part crosses the axis r = 0; keep every r at 0 mm or more")]
    CrossesAxis { place: Place, r_mm: f64 },
    /// A turn that is no ring.
    #[error(
        "{place}: value r = {r_mm:.4} mm: turn {turn} touches or crosses the axis; a turn is a ring and needs a hole, enlarge its diameter"
    )]
    TurnOnAxis { place: Place, turn: usize, r_mm: f64 },
    /// Two parts in one place.
    #[error(
        "{place}: overlaps part `{other}`: {here} and {there} have an area in common; move or shrink one of them (touching is allowed)"
    )]
    PartsOverlap { place: Place, other: String, here: String, there: String },
    /// A turn in a part.
    #[error("{place}: turn {turn} ({here}) overlaps part `{part}` ({there}); enlarge the coil or shrink the part")]
    TurnInPart { place: Place, turn: usize, part: String, here: String, there: String },
    /// Two turns in one place.
    #[error(
        "{place}: turn {turn} ({here}) overlaps turn {other_turn} of coil `{other}` ({there}); move one of them apart"
    )]
    TurnsOverlap { place: Place, turn: usize, other: String, other_turn: usize, here: String, there: String },

    /// Planes in the wrong order.
    #[error("{place}: value {value}: the second plane must lie above the first ({lower_mm:.4} mm); swap or move them")]
    PlaneOrder { place: Place, value: String, lower_mm: f64 },
    /// Something without a mirror image.
    #[error(
        "{place}: {what} has no mirror image across the plane at z = {plane_mm:.4} mm; make the device symmetric, move the plane, or remove `mirror_planes`"
    )]
    NotSymmetric { place: Place, what: String, plane_mm: f64 },
    /// Something beyond a slice.
    #[error(
        "{place}: {what} lies outside the slice from z = {lower_mm:.4} mm to {upper_mm:.4} mm; move or remove it, or move `mirror_planes`"
    )]
    OutsideSlice { place: Place, what: String, lower_mm: f64, upper_mm: f64 },

    /// Nothing to heat.
    #[error("{place}: no part has the role \"workpiece\"; give one part that role")]
    NoWorkpiece { place: Place },
    /// No source of the field.
    #[error(
        "{place}: there are no coils and no `applied_field`; add a coil, or write \"applied_field\": \"50 kA/m\" into `supply`"
    )]
    NoSource { place: Place },
    /// Coils in an applied field.
    #[error(
        "{place}: an applied field stands instead of coils, `hold` and `limits`, but `{beside}` is given; remove one of the two"
    )]
    BesideAppliedField { place: Place, beside: &'static str },
    /// A supply that holds nothing.
    #[error(
        "{place}: key `hold` is missing; add what the supply keeps constant, such as {{ \"workpiece_power\": \"22 kW\" }}"
    )]
    NoHold { place: Place },
    /// A power that nothing can take up.
    #[error(
        "{place}: value {value}: no workpiece conducts electricity, so none can take up power; hold `coil_current` or give a conducting material"
    )]
    NothingConducts { place: Place, value: String },
    /// A stage that changes what an applied field holds.
    #[error("{place}: an applied field has no supply whose `hold` a stage could change; remove it from the stage")]
    StageHoldInField { place: Place },
    /// A stage whose end is not said, or twice.
    #[error("{place}: {found}; write either `for`, or `until` with `at_most`")]
    StageEnd { place: Place, found: &'static str },
    /// A thing that heating needs.
    #[error(
        "{place}: `{what}` looks at part `{part}`, whose role \"fixture\" is not heated; choose a heated part or another role"
    )]
    GaugeNotHeated { place: Place, what: String, part: String },
    /// A gauge in the air.
    #[error(
        "{place}: value r = {r_mm:.4} mm, z = {z_mm:.4} mm: not in part `{part}` ({extent}); move the gauge into it"
    )]
    GaugeOutside { place: Place, r_mm: f64, z_mm: f64, part: String, extent: String },
    /// A face that is not there.
    #[error(
        "{place}: value {value}: part `{part}` ({extent}) has no {face} face there; choose a value within it, or another face"
    )]
    NoSuchFace { place: Place, value: String, part: String, face: &'static str, extent: String },
    /// A pyrometer with the coordinate of another face.
    #[error(
        "{place}: {found}; a point on an outer or inner face has `z`, one on a top or bottom face has `r`, write just that"
    )]
    PyrometerPoint { place: Place, found: &'static str },
}

/// A value as a message shows it: at most 60 characters, in quotes if it is text.
pub(crate) fn shown(text: &str) -> String {
    let mut short: String = text.chars().map(|c| if c.is_control() { ' ' } else { c }).take(60).collect();
    if short.len() < text.len() {
        short.push('…');
    }
    short
}

/// Millimetres with four decimals that are never more than the value, so that what a message allows is allowed.
fn rounded_down(mm: f64) -> String {
    format!("{:.4}", (1e4 * mm + 1e-6).floor() / 1e4)
}

fn near_text(near: &str) -> String {
    if near.trim().is_empty() { String::new() } else { format!(", near `{}`", near.trim()) }
}

fn did_you_mean(suggestion: Option<&str>) -> String {
    suggestion.map_or_else(String::new, |word| format!("did you mean \"{word}\"? "))
}

/// The nearest known word, and all of them unless they are many.
fn meant(suggestion: Option<&str>, known: &str) -> String {
    let known = if known.is_empty() { "none".to_owned() } else { shown_list(known) };
    match suggestion {
        Some(word) => format!("did you mean `{word}`? (known here: {known})"),
        None => format!("remove or correct it (known here: {known})"),
    }
}

fn shown_list(known: &str) -> String {
    if known.chars().count() <= 400 { known.to_owned() } else { known.chars().take(400).chain(['…']).collect() }
}

fn list_length(count: u64, least: u64, most: u64) -> String {
    if least == most {
        format!("expected exactly {least}; correct the list")
    } else if count < least {
        format!("expected at least {least}; add to the list, or leave the key out if it is optional")
    } else {
        format!("expected at most {most}; shorten the list")
    }
}

fn range(least: f64, most: f64) -> String {
    match (least > f64::MIN, most < f64::MAX) {
        (true, true) => format!("a number from {least} to {most}"),
        (true, false) => format!("a number of at least {least}"),
        _ => format!("a number of at most {most}"),
    }
}

fn pitch_remedy(extent: &str, least_mm: f64) -> String {
    format!("make `{extent}` at least {least_mm:.4} mm, reduce `turns`, or take a smaller conductor")
}
