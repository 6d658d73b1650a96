//! The job as written: keys, words and texts of a job file, before any unit is converted.
//!
//! Reading goes text -> JSON (`strict`) -> checked form (`structure`, against the schema) -> [`Job`]. What the job
//! means is the business of [`crate::lower`]. Conventions: a dimensional value is text with its unit; currents and voltages
//! are rms at the coil terminals; items of a list are addressed by their `name`; every object may carry a `note`.

mod coil;
mod filled;
mod heating;
mod part;
mod place;
mod quantity;
mod schema;
mod strict;
mod structure;
mod supply;
pub mod units;

use std::fs::File;
use std::io::Read;
use std::path::Path;

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};
use serde_json::Value;

pub use coil::{
    Coil, Conductor, Connection, Helix, Pancake, RectangularTube, RoundTube, RoundWire, Sense, SolidBar, Stranded,
    Water, Winding,
};
pub use heating::{Heating, Pyrometer, PyrometerFace, Stage, Thermocouple, Until};
pub use part::{
    Cone, Cylinder, Direction, Disc, FaceCondition, FaceWord, Flux, HeldAt, MaterialRef, Part, ProfileArc,
    ProfileChamfer, ProfileCurve, ProfileFillet, ProfileStep, Ring, Role, SectionPoint, Shape, Sphere, Surface, Tube,
};
pub use place::Place;
pub use quantity::Quantity;
pub(crate) use structure::nearest;
pub use supply::{GaugeHold, Hold, HoldWord, Limits, StageHold, Supply};

use crate::job_error::JobError;
use structure::Remark;
use units::Length;

/// Largest job file in bytes.
const LARGEST: u64 = 16 * 1024 * 1024;

/// A job: the device, its supply and its heating. The device is a body of revolution, drawn in the half plane of radius r
/// and height z; dimensional values are text with a unit.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Job {
    /// Where an editor finds the schema.
    #[serde(rename = "$schema", default, skip_serializing_if = "Option::is_none")]
    pub schema: Option<String>,
    /// One line that names the job.
    pub title: String,
    /// What stands in the section: workpieces, linings and so on.
    #[schemars(length(max = 500))]
    pub parts: Vec<Part>,
    /// Coils, all in series on the one supply; none with an applied field.
    #[serde(default)]
    #[schemars(length(max = 100))]
    pub coils: Vec<Coil>,
    /// What feeds the coils.
    pub supply: Supply,
    /// Heating in stages; without it the job is a field solve alone.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub heating: Option<Heating>,
    /// Points in heated parts whose temperature is recorded.
    #[serde(default)]
    #[schemars(length(max = 1000))]
    pub thermocouples: Vec<Thermocouple>,
    /// Points on surfaces of heated parts whose temperature is recorded.
    #[serde(default)]
    #[schemars(length(max = 1000))]
    pub pyrometers: Vec<Pyrometer>,
    /// Heights z of mirror planes. One: the device is its own mirror image there, and the half above is solved for the
    /// whole. Two: a slice of an endless device; what reaches beyond is cut off, and results are for the slice.
    #[serde(default)]
    #[schemars(length(max = 2))]
    pub mirror_planes: Vec<Quantity<Length>>,
    /// How fine the mesh is.
    #[serde(default)]
    pub mesh: Mesh,
    /// Name of the file, for messages.
    #[serde(skip)]
    #[schemars(skip)]
    file: String,
    /// Remarks that go back where they stood.
    #[serde(skip)]
    #[schemars(skip)]
    remarks: Vec<Remark>,
}

/// How fine the mesh is.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields, default)]
pub struct Mesh {
    /// Elements through the first skin depth of a conducting surface.
    #[schemars(range(min = 0.5, max = 20.0))]
    pub per_skin_depth: f64,
    /// All sizes are divided by this.
    #[schemars(range(min = 0.1, max = 10.0))]
    pub fineness: f64,
    /// Largest element anywhere; without it sizes follow the parts alone.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub largest: Option<Quantity<Length>>,
    /// Order of the elements: 1, 2 or 3.
    #[schemars(range(min = 1, max = 3))]
    pub order: u8,
    /// Radius of the open boundary over that of the smallest sphere that encloses everything.
    #[schemars(range(min = 1.05, max = 10.0))]
    pub boundary_factor: f64,
}

impl Default for Mesh {
    fn default() -> Self {
        let settings = solver::model::MeshSettings::default();
        Self {
            per_skin_depth: settings.per_skin_depth,
            fineness: settings.fineness,
            largest: None,
            order: settings.order as u8,
            boundary_factor: settings.boundary_factor,
        }
    }
}

impl Job {
    /// Reads a job file.
    ///
    /// # Errors
    /// A file that cannot be read, is over 16 MB or not UTF-8, and whatever [`Job::parse`] refuses.
    pub fn read(path: &Path) -> Result<Self, JobError> {
        let file = path.display().to_string();
        let unreadable = |source| JobError::Unreadable { file: file.clone(), source };
        if !std::fs::metadata(path).map_err(unreadable)?.is_file() {
            return Err(JobError::NotAFile { file });
        }
        let mut bytes = Vec::new();
        File::open(path).and_then(|opened| opened.take(LARGEST + 1).read_to_end(&mut bytes)).map_err(unreadable)?;
        if bytes.len() as u64 > LARGEST {
            return Err(JobError::TooLarge { file, limit_mb: LARGEST / 1024 / 1024 });
        }
        match std::str::from_utf8(&bytes) {
            Ok(text) => Self::parse(text, &file),
            Err(error) => Err(JobError::NotText { file, byte: error.valid_up_to() }),
        }
    }

    /// Reads the text of a job; `file` is the name used in messages.
    ///
    /// # Errors
    /// Text that is not JSON, a repeated key, a form that does not agree with the schema.
    pub fn parse(text: &str, file: &str) -> Result<Self, JobError> {
        let text = text.strip_prefix('\u{feff}').unwrap_or(text);
        let mut value = strict::read(text, file)?;
        let remarks = structure::check(schema::shared(), &value, file)?;
        for (pointer, _) in &remarks {
            if let Some(Value::Object(object)) = value.pointer_mut(pointer) {
                object.shift_remove("note");
            }
        }
        let mut job: Self =
            serde_json::from_value(value).map_err(|source| JobError::Form { file: file.to_owned(), source })?;
        file.clone_into(&mut job.file);
        job.remarks = remarks;
        Ok(job)
    }

    /// The place of the whole job, from which key paths start.
    pub fn place(&self) -> Place {
        Place::file(&self.file)
    }
}

/// The JSON Schema of a job file, draft 2020-12.
pub fn schema() -> Value {
    schema::shared().clone()
}
