//! The job as meant: from keys and texts to a [`Model`] in SI units. The only unit conversion of the program.
//!
//! Convention: below this module lengths are metres, temperatures kelvin; currents, voltages and field strengths stay rms,
//! as the model wants them. Sizes are accepted from 1 um to 100 m, frequencies from 1 Hz to 10 MHz, temperatures from 0 K
//! to 4000 K. Parts and turns are drawn whole; what lies beyond a mirror plane is dropped by the mesher.

mod amount;
mod clearance;
mod coils;
mod conductor;
pub(crate) mod defaults;
mod gauges;
mod heating;
mod material;
mod mirrors;
mod names;
mod parts;
mod profile;
mod shapes;
mod supply;

use solver::model::{MeshSettings, Model};

use crate::job::units::Length;
use crate::job::{Job, Place, Quantity};
use crate::job_error::JobError;

/// A length as it is written in a job, in metres, for options of the command line.
///
/// # Errors
/// Text without a number or a unit of length, a value beyond 100 m.
pub fn length_m(text: &str) -> Result<f64, JobError> {
    amount::read(&Quantity::<Length>::of(text), &Place::file("command line"), amount::POSITION).map(|amount| amount.si)
}

/// What a job means, in SI units.
///
/// # Errors
/// Whatever cannot be built or solved: units of another dimension, sizes out of range, overlapping bodies, references to
/// nothing, a device that is not symmetric about its mirror plane, and so on; see [`JobError`].
pub fn lower(job: &Job) -> Result<Model, JobError> {
    let place = job.place();
    names::check(job)?;
    let mirrors = mirrors::planes(&job.mirror_planes, &place.key("mirror_planes"))?;
    let start = defaults::job_start(job.heating.as_ref());
    let start_k = amount::read(&start, &place.key("heating").key("start"), amount::TEMPERATURE)?.si;
    let parts = parts::parts(job)?;
    let coils = coils::coils(&job.coils, &place.key("coils"))?;
    let drive = supply::drive(job, &parts)?;
    clearance::check(&parts, &coils, &place)?;
    mirrors::check(mirrors, &parts, &coils, &place)?;
    let gauges = gauges::gauges(job, &parts, mirrors)?;
    let heating = heating::heating(job, &parts, &gauges)?;
    let largest = place.key("mesh").key("largest");
    let mesh = MeshSettings {
        largest_m: amount::read_optional(job.mesh.largest.as_ref(), &largest, amount::SIZE)?.map(|a| a.si),
        per_skin_depth: job.mesh.per_skin_depth,
        fineness: job.mesh.fineness,
        order: usize::from(job.mesh.order),
        boundary_factor: job.mesh.boundary_factor,
    };
    Ok(Model { title: job.title.trim().to_owned(), parts, coils, drive, mirrors, heating, gauges, start_k, mesh })
}
