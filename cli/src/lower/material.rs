//! From the name or the data of a material to the material.

use std::sync::Arc;

use solver::material::{Magnetic, Material, Source, SourceKind, library};

use crate::job::{MaterialRef, Place};
use crate::job_error::{JobError, shown};

/// The material that stands at `place`.
///
/// # Errors
/// A name the library does not have, data that do not hold together.
pub(super) fn material(written: &MaterialRef, place: &Place) -> Result<Arc<Material>, JobError> {
    let refused = |source| JobError::Material { place: place.clone(), source };
    match written {
        MaterialRef::Data(data) => Material::try_from(data.as_ref().clone()).map(Arc::new).map_err(refused),
        MaterialRef::Name(name) => {
            let library = library().map_err(refused)?;
            library.find(name).cloned().ok_or_else(|| JobError::UnknownMaterial {
                place: place.clone(),
                name: shown(name),
                suggestion: library.suggest(&shown(name)).map(str::to_owned),
            })
        }
    }
}

/// The material with another relative permeability at 20 °C. A ferromagnet still loses it at its Curie point; any other
/// material has it at every temperature.
pub(super) fn with_permeability(material: &Arc<Material>, relative_permeability: f64) -> Arc<Material> {
    let mut changed = Material::clone(material);
    let source = Source { kind: SourceKind::User, text: "relative permeability given in the job".to_owned() };
    changed.magnetic = Some(match changed.magnetic {
        Some(magnetic) => Magnetic { relative_permeability_20c: Some(relative_permeability), source, ..magnetic },
        None => Magnetic {
            relative_permeability_20c: Some(relative_permeability),
            saturation_polarisation_t: f64::INFINITY,
            initial_relative_permeability: relative_permeability,
            curie_k: f64::INFINITY,
            source,
        },
    });
    Arc::new(changed)
}
