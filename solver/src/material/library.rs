//! The built-in materials, read once from the data files beside this module.
//!
//! Convention: every value names its source. A source that mixes figures read and figures from memory counts as from
//! memory, and its text says which are which.

use std::collections::BTreeMap;
use std::sync::{Arc, OnceLock};

use super::data::MaterialData;
use super::error::{MaterialError, MaterialFault, Property};
use super::source::{Source, SourceKind};
use super::substance::Material;

/// The data files; each holds a list of materials in the form of [`MaterialData`].
const FILES: [&str; 7] = [
    include_str!("library/copper_alloys.json"),
    include_str!("library/carbon_steels.json"),
    include_str!("library/stainless_steels.json"),
    include_str!("library/light_metals.json"),
    include_str!("library/nickel_alloys.json"),
    include_str!("library/pure_elements.json"),
    include_str!("library/linings.json"),
];

/// Materials by name and alias.
#[derive(Debug)]
pub struct Library {
    materials: Vec<Arc<Material>>,
    /// Name or alias, spelled by [`key`], to the place in `materials`.
    places: BTreeMap<String, usize>,
}

/// The built-in library.
///
/// # Errors
/// A data file that does not hold together; it is read once, and the error is the same each time.
pub fn library() -> Result<&'static Library, MaterialError> {
    static LIBRARY: OnceLock<Result<Library, MaterialError>> = OnceLock::new();
    LIBRARY.get_or_init(|| Library::read(&FILES)).as_ref().map_err(Clone::clone)
}

impl Library {
    /// A library from texts that each hold a list of materials.
    ///
    /// # Errors
    /// Text that is not such a list, data that do not hold together, a value without a source, a name used twice.
    pub fn read(texts: &[&str]) -> Result<Self, MaterialError> {
        let mut library = Self { materials: Vec::new(), places: BTreeMap::new() };
        for text in texts {
            let form = |error: serde_json::Error| MaterialFault::Form { message: error.to_string() };
            let list: Vec<serde_json::Value> = serde_json::from_str(text).map_err(form)?;
            for value in &list {
                let material = Material::try_from(MaterialData::from_json(value)?)?;
                require_sources(&material).map_err(|error| error.in_material(&material.name))?;
                library.add(material)?;
            }
        }
        Ok(library)
    }

    fn add(&mut self, material: Material) -> Result<(), MaterialError> {
        let place = self.materials.len();
        for name in std::iter::once(&material.name).chain(&material.aliases) {
            if let Some(holder) = self.places.insert(key(name), place) {
                let holder = self.materials.get(holder).map_or_else(|| material.name.clone(), |m| m.name.clone());
                let fault = MaterialFault::NameTaken { name: name.clone(), holder };
                return Err(MaterialError::from(fault).of(Property::Name).in_material(&material.name));
            }
        }
        self.materials.push(Arc::new(material));
        Ok(())
    }

    /// The material of that name or alias; case, spaces, hyphens, underscores and commas do not matter.
    pub fn find(&self, name: &str) -> Option<&Arc<Material>> {
        self.materials.get(*self.places.get(&key(name))?)
    }

    /// Names in the order of the data files, without aliases.
    pub fn names(&self) -> Vec<&str> {
        self.materials.iter().map(|material| material.name.as_str()).collect()
    }

    /// All materials, in the order of the data files.
    pub fn materials(&self) -> &[Arc<Material>] {
        &self.materials
    }

    /// The name or alias most like a name that was not found, if any is at all like it; on a tie the first.
    pub fn suggest(&self, name: &str) -> Option<&str> {
        let wanted = key(name);
        let most = (wanted.chars().count() / 3).max(1);
        let spellings = self.materials.iter().flat_map(|m| std::iter::once(&m.name).chain(&m.aliases));
        let distances = spellings.map(|s| (strsim::damerau_levenshtein(&wanted, &key(s)), s.as_str()));
        let (distance, spelling) = distances.min_by_key(|(distance, _)| *distance)?;
        (distance <= most && distance < wanted.chars().count()).then_some(spelling)
    }
}

/// The spelling by which names are compared.
fn key(name: &str) -> String {
    let kept = name.chars().filter(|c| !c.is_whitespace() && !['-', '_', ','].contains(c));
    kept.flat_map(char::to_lowercase).collect()
}

fn require_sources(material: &Material) -> Result<(), MaterialError> {
    let sources: [(Property, Option<&Source>); 7] = [
        (Property::Density, Some(&material.density_source)),
        (Property::Resistivity, material.resistivity.as_ref().map(super::curve::Curve::source)),
        (Property::ThermalConductivity, Some(material.conductivity.source())),
        (Property::SpecificHeat, Some(material.specific_heat.source())),
        (Property::Emissivity, material.emissivity_source.as_ref()),
        (Property::Melting, material.melting.as_ref().map(|m| &m.source)),
        (Property::Magnetic, material.magnetic.as_ref().map(|m| &m.source)),
    ];
    for (property, source) in sources {
        if source.is_some_and(|s| s.kind == SourceKind::User || s.text.trim().is_empty()) {
            return Err(MaterialError::from(MaterialFault::SourceMissing).of(property));
        }
    }
    Ok(())
}
