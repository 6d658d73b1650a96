//! Pictures of a run: maps over the full section and charts, as PNG files in memory. Nothing here touches a file, and
//! the same results give the same bytes for any number of threads.
//!
//! Data go one way: `Section` and `Snapshot` -> `sheet` (elements and kinds) -> `fields` (values in the units of the
//! maps) -> `layer` (the half plane in pixels, by `raster`) -> `frame` (mirrored, turned, with axes) -> `canvas` -> PNG.
//! Charts: `curves` and `profile_charts` fill `chart` panels. Maps have equal scales on both axes and show the section
//! mirrored across the axis and, with one mirror plane, across that plane. Colour maps are named in `scale`.

mod canvas;
mod chart;
mod curves;
mod drawing;
mod fields;
mod flux_lines;
mod frame;
mod heading;
mod image;
mod labels;
mod layer;
mod map;
mod mesh_legend;
mod mesh_picture;
mod profile_charts;
mod profiles;
mod raster;
mod scale;
mod shape;
mod sheet;
mod ticks;
mod window;

use std::sync::Arc;

use rayon::prelude::*;
use solver::results::{Outcome, RegionName, Results, Section, Snapshot};

pub use mesh_picture::CloseUp;

use canvas::Canvas;
use map::MapOf;
use profiles::Paths;
use sheet::Sheet;

/// Most parts whose profiles are drawn.
const MOST_PROFILES: usize = 6;

/// A picture.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Picture {
    /// Where it belongs in the result folder, such as `maps/loss-density.png`.
    pub name: String,
    /// The file.
    pub png: Vec<u8>,
}

/// Why a picture could not be drawn.
#[derive(Debug, thiserror::Error)]
pub enum PictureError {
    /// The embedded font is damaged.
    #[error("the font inside the program cannot be read: the program file is damaged, install it again")]
    Font,
    /// Something could not be put on the canvas.
    #[error("{what} could not be drawn: {reason}")]
    Draw {
        /// What was to be drawn.
        what: &'static str,
        /// Why not.
        reason: String,
    },
    /// The picture could not be encoded.
    #[error("`{picture}` could not be encoded: {source}")]
    Encode {
        /// Name of the picture.
        picture: String,
        /// What went wrong.
        source: png::EncodingError,
    },
    /// Elements of an order that cannot be drawn.
    #[error("elements of order {order} cannot be drawn: orders 1, 2 and 3 can")]
    Order {
        /// The order.
        order: usize,
    },
    /// Arrays of a result do not fit each other.
    #[error("the result has {found} {what} where its mesh needs {expected}: it is not whole")]
    Length {
        /// What the array holds.
        what: &'static str,
        /// Length it must have.
        expected: usize,
        /// Length it has.
        found: usize,
    },
}

/// All maps and charts of a run, gauges called by their numbers; see [`draw_all_named`].
///
/// # Errors
/// The results do not fit their mesh, or a picture could not be made.
pub fn draw_all(results: &Results) -> Result<Vec<Picture>, PictureError> {
    draw_all_named(results, &[])
}

/// All maps and charts of a run, with the names of its gauges in job order.
///
/// Maps of the field (`maps/loss-density.png`, `flux-lines`, `flux-density`, `current-density`) are of the start; where
/// the last field differs, there is a second set with the moment in its name (`maps/loss-density-end-of-heat.png`).
/// Temperature maps (`maps/temperature-end-of-heat.png`) are of the end of each stage and of the end of the run,
/// `maps/peak-temperature.png` of the whole run. `maps/section.png` and `maps/mesh.png` are of every run. Charts:
/// `charts/heating-curve.png`, `charts/power.png`, and `charts/radial-profile-NAME.png` and `axial-profile-NAME.png` of
/// each part in which power is turned into heat.
///
/// # Errors
/// The results do not fit their mesh, or a picture could not be made.
pub fn draw_all_named(results: &Results, gauges: &[String]) -> Result<Vec<Picture>, PictureError> {
    let kinds = sheet::kinds(&results.section)?;
    let sheet = Sheet::new(&results.section, &kinds)?;
    let sheet = &sheet;
    let job = job_line(results);
    let job = job.as_str();
    let mut tasks: Vec<Task<'_>> = vec![
        Task::new("maps/section.png", move || drawing::section(sheet, job)),
        Task::new("maps/mesh.png", move || mesh_picture::draw(&results.section, sheet, None, job)),
    ];
    add_field_maps(&mut tasks, results, sheet, job);
    add_temperature_maps(&mut tasks, results, sheet, job);
    if !results.history.is_empty() {
        tasks.push(Task::new("charts/heating-curve.png", move || curves::heating(results, sheet, gauges, job)));
        tasks.push(Task::new("charts/power.png", move || curves::power(results, job)));
    }
    add_profiles(&mut tasks, results, sheet, job);
    tasks.into_par_iter().map(Task::run).collect()
}

/// The dimensioned section, `maps/section.png`.
///
/// # Errors
/// The section does not fit its mesh, or the picture could not be made.
pub fn draw_section(section: &Section, title: &str) -> Result<Picture, PictureError> {
    let kinds = sheet::kinds(section)?;
    drawing::section(&Sheet::new(section, &kinds)?, title)?.finish("maps/section.png".into())
}

/// The mesh over the section, `maps/mesh.png`: all bodies, or the square that is asked for.
///
/// # Errors
/// The section does not fit its mesh, or the picture could not be made.
pub fn draw_mesh(section: &Section, close_up: Option<CloseUp>, title: &str) -> Result<Picture, PictureError> {
    let kinds = sheet::kinds(section)?;
    mesh_picture::draw(section, &Sheet::new(section, &kinds)?, close_up, title)?.finish("maps/mesh.png".into())
}

/// A picture to be drawn.
struct Task<'a> {
    name: String,
    draw: Box<dyn FnOnce() -> Result<Canvas, PictureError> + Send + 'a>,
}

impl<'a> Task<'a> {
    fn new(name: &str, draw: impl FnOnce() -> Result<Canvas, PictureError> + Send + 'a) -> Self {
        Self { name: name.to_owned(), draw: Box::new(draw) }
    }

    fn run(self) -> Result<Picture, PictureError> {
        (self.draw)()?.finish(self.name)
    }
}

/// Title of the job, and how the run ended where it did not end as planned.
fn job_line(results: &Results) -> String {
    let title = &results.title;
    match &results.outcome {
        Outcome::Complete => title.clone(),
        Outcome::StageLimit { stage, time_s } => {
            format!("{title} \u{b7} stage {stage} ended at its longest time, {time_s:.1} s")
        }
        Outcome::Stopped { time_s } => {
            format!("{title} \u{b7} partial result, stopped on request at {time_s:.1} s")
        }
        Outcome::NotConverged { time_s, .. } => {
            format!("{title} \u{b7} partial result, no solution after {time_s:.1} s")
        }
    }
}

/// The words for a moment: `start`, or `end of heat, 182.4 s`.
fn moment(snapshot: &Snapshot) -> String {
    if snapshot.time_s == 0.0 {
        snapshot.label.clone()
    } else {
        format!("{}, {:.1} s", snapshot.label, snapshot.time_s)
    }
}

type MapMaker = fn(&Sheet<'_>, &Snapshot) -> Result<MapOf, PictureError>;

fn add_field_maps<'a>(tasks: &mut Vec<Task<'a>>, results: &'a Results, sheet: &'a Sheet<'a>, job: &'a str) {
    let mut snapshots: Vec<(&Snapshot, String)> = Vec::new();
    if let Some(first) = results.snapshots.first() {
        snapshots.push((first, String::new()));
    }
    // A field that is switched off shows nothing: the last one that is on stands for the end.
    let on: Vec<&Snapshot> = results.snapshots.iter().filter(|s| s.field_factor != 0.0).collect();
    if let [first, .., last] = on.as_slice()
        && !(Arc::ptr_eq(&first.field, &last.field) && first.field_factor == last.field_factor)
    {
        snapshots.push((last, format!("-{}", slug(&last.label))));
    }
    for (snapshot, suffix) in snapshots {
        let makers: [(&str, &str, MapMaker); 3] = [
            ("loss-density", "Loss density", fields::loss_density),
            ("flux-density", "Flux density, peak", fields::flux_density),
            ("current-density", "Current density, rms", fields::current_density),
        ];
        for (stem, title, make) in makers {
            tasks.push(Task::new(&format!("maps/{stem}{suffix}.png"), move || {
                map::draw(sheet, &make(sheet, snapshot)?, format!("{title}: {}", moment(snapshot)), job)
            }));
        }
        tasks.push(Task::new(&format!("maps/flux-lines{suffix}.png"), move || {
            flux_lines::draw(sheet, snapshot, format!("Flux lines: {}", moment(snapshot)), job)
        }));
    }
}

/// Snapshots at the ends of stages, and the last one.
fn stage_ends(results: &Results) -> Vec<&Snapshot> {
    let last = results.snapshots.len().saturating_sub(1);
    let is_end = |(i, s): &(usize, &Snapshot)| (*i == last && *i > 0) || s.label.starts_with("end of");
    results.snapshots.iter().enumerate().filter(is_end).map(|(_, s)| s).collect()
}

fn add_temperature_maps<'a>(tasks: &mut Vec<Task<'a>>, results: &'a Results, sheet: &'a Sheet<'a>, job: &'a str) {
    let leading: Vec<usize> = heated_by_field(results).into_iter().map(|p| p.0).collect();
    let mut names: Vec<String> = Vec::new();
    for snapshot in stage_ends(results).into_iter().filter(|s| !s.temperature_k.is_empty()) {
        let stem = format!("maps/temperature-{}", slug(&snapshot.label));
        let same = names.iter().filter(|n| **n == stem).count();
        let name = if same == 0 { format!("{stem}.png") } else { format!("{stem}-{}.png", same + 1) };
        names.push(stem);
        let leading = leading.clone();
        tasks.push(Task::new(&name, move || {
            let map = fields::temperature(sheet, &snapshot.temperature_k, "Temperature", &leading)?;
            map::draw(sheet, &map, format!("Temperature: {}", moment(snapshot)), job)
        }));
    }
    if !results.peak_temperature_k.is_empty() {
        tasks.push(Task::new("maps/peak-temperature.png", move || {
            let map = fields::temperature(sheet, &results.peak_temperature_k, "Peak temperature", &leading)?;
            map::draw(sheet, &map, "Peak temperature over the whole run".into(), job)
        }));
    }
}

fn add_profiles<'a>(tasks: &mut Vec<Task<'a>>, results: &'a Results, sheet: &'a Sheet<'a>, job: &'a str) {
    let mut moments: Vec<&Snapshot> = results.snapshots.first().into_iter().collect();
    moments.extend(stage_ends(results));
    if moments.is_empty() {
        return;
    }
    let mut names: Vec<String> = Vec::new();
    for (index, name) in heated_by_field(results).into_iter().take(MOST_PROFILES) {
        let stem = slug(name);
        let same = names.iter().filter(|n| **n == stem).count();
        let file = if same == 0 { stem.clone() } else { format!("{stem}-{}", same + 1) };
        names.push(stem);
        let (first, second) = (moments.clone(), moments.clone());
        tasks.push(Task::new(&format!("charts/radial-profile-{file}.png"), move || {
            let paths = paths(sheet, index)?;
            profile_charts::radial(sheet, &paths, &first, name, job)
        }));
        tasks.push(Task::new(&format!("charts/axial-profile-{file}.png"), move || {
            let paths = paths(sheet, index)?;
            profile_charts::axial(sheet, &paths, &second, name, job)
        }));
    }
}

fn paths(sheet: &Sheet<'_>, part: usize) -> Result<Paths, PictureError> {
    Paths::of(sheet, part).ok_or(PictureError::Length { what: "elements in a part", expected: 1, found: 0 })
}

/// Parts with a Joule loss, in job order; with heating only those whose temperature is solved for.
fn heated_by_field(results: &Results) -> Vec<(usize, &str)> {
    let heated = results.history.first().map(|row| row.parts.iter().map(|p| p.part).collect::<Vec<_>>());
    let warmed = |index: usize| {
        let loss = |s: &solver::results::State| s.electrical.parts.get(index).is_some_and(|p| p.joule_loss_w > 0.0);
        results.states.iter().any(loss)
    };
    let mut parts: Vec<(usize, &str)> = Vec::new();
    for region in &results.section.regions {
        if let RegionName::Part(index, name) = region
            && heated.as_ref().is_none_or(|h| h.contains(index))
            && warmed(*index)
            && !parts.iter().any(|p| p.0 == *index)
        {
            parts.push((*index, name));
        }
    }
    parts.sort_by_key(|p| p.0);
    parts
}

/// A count with thin spaces between thousands: `13 824`.
fn grouped(count: usize) -> String {
    let digits = count.to_string();
    let mut text = String::new();
    for (i, digit) in digits.chars().enumerate() {
        if i > 0 && (digits.len() - i).is_multiple_of(3) {
            text.push('\u{2009}');
        }
        text.push(digit);
    }
    text
}

/// A name as part of a file name: lower case letters, digits and hyphens.
fn slug(name: &str) -> String {
    let mut text = String::new();
    for c in name.chars() {
        if c.is_ascii_alphanumeric() {
            text.push(c.to_ascii_lowercase());
        } else if !text.is_empty() && !text.ends_with('-') {
            text.push('-');
        }
    }
    let trimmed = text.trim_end_matches('-');
    if trimmed.is_empty() { "unnamed".into() } else { trimmed.chars().take(60).collect() }
}

#[cfg(test)]
mod tests {
    use super::{grouped, slug};

    #[test]
    fn thousands_are_set_apart() {
        assert_eq!(grouped(7), "7");
        assert_eq!(grouped(824), "824");
        assert_eq!(grouped(1_013_824), "1\u{2009}013\u{2009}824");
    }

    #[test]
    fn names_become_plain_file_names() {
        assert_eq!(slug("end of heat"), "end-of-heat");
        assert_eq!(slug("  Rohr \u{d8}60 / ../x "), "rohr-60-x");
        assert_eq!(slug("\u{2300}"), "unnamed");
    }
}
