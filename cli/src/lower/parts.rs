//! From parts as written to parts of the model.

use solver::model;

use super::amount::{HEAT_FLUX, HEAT_TRANSFER, TEMPERATURE, read};
use super::{defaults, material, shapes};
use crate::job::{FaceCondition, FaceWord, Job, MaterialRef, Part, Place, Role, Surface};
use crate::job_error::JobError;

/// The parts in the order of the job.
///
/// # Errors
/// No workpiece, and whatever is wrong with a part alone.
pub(super) fn parts(job: &Job) -> Result<Vec<model::Part>, JobError> {
    let list = job.place().key("parts");
    if !job.parts.iter().any(|part| part.role == Role::Workpiece) {
        return Err(JobError::NoWorkpiece { place: list });
    }
    job.parts.iter().map(|written| part(job, written, &list.key(&written.name))).collect()
}

fn part(job: &Job, written: &Part, place: &Place) -> Result<model::Part, JobError> {
    let mut material = material::material(&written.material, &place.key("material"))?;
    if let Some(permeability) = written.relative_permeability {
        material = material::with_permeability(&material, permeability);
    }
    let start = defaults::part_start(written, job.heating.as_ref());
    Ok(model::Part {
        name: written.name.clone(),
        role: role(written.role),
        outline: shapes::outline(&written.shape, &place.key("shape"))?,
        material,
        surface: surface(&written.surface, &written.material, &place.key("surface"))?,
        faces: faces(written, place)?,
        start_k: read(&start, &place.key("start"), TEMPERATURE)?.si,
    })
}

fn role(role: Role) -> model::Role {
    match role {
        Role::Workpiece => model::Role::Workpiece,
        Role::Lining => model::Role::Lining,
        Role::Susceptor => model::Role::Susceptor,
        Role::Crucible => model::Role::Crucible,
        Role::Fixture => model::Role::Fixture,
    }
}

fn surface(written: &Surface, material: &MaterialRef, place: &Place) -> Result<model::Surface, JobError> {
    Ok(model::Surface {
        emissivity: defaults::emissivity_of(written, material),
        convection_w_per_m2_k: read(&written.convection, &place.key("convection"), HEAT_TRANSFER)?.si,
    })
}

fn faces(part: &Part, place: &Place) -> Result<Vec<(model::Face, model::FaceCondition)>, JobError> {
    let written = [
        (model::Face::Outside, "outside", &part.outside),
        (model::Face::Inside, "inside", &part.inside),
        (model::Face::Top, "top", &part.top),
        (model::Face::Bottom, "bottom", &part.bottom),
    ];
    let mut faces = Vec::new();
    for (face, key, condition) in written {
        if let Some(condition) = condition {
            faces.push((face, face_condition(condition, &part.material, &place.key(key))?));
        }
    }
    Ok(faces)
}

fn face_condition(
    written: &FaceCondition,
    material: &MaterialRef,
    place: &Place,
) -> Result<model::FaceCondition, JobError> {
    Ok(match written {
        FaceCondition::Word(FaceWord::Insulated) => model::FaceCondition::Insulated,
        FaceCondition::HeldAt(held) => {
            model::FaceCondition::HeldAt(read(&held.held_at, &place.key("held_at"), TEMPERATURE)?.si)
        }
        FaceCondition::Flux(flux) => model::FaceCondition::Flux(read(&flux.flux, &place.key("flux"), HEAT_FLUX)?.si),
        FaceCondition::Exchange(exchange) => model::FaceCondition::Exchange(surface(exchange, material, place)?),
    })
}
