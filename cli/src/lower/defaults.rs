//! Defaults that depend on other keys; used by lowering and by the filled job alike, so that both mean the same.

use solver::material::{Written, library};

use super::amount;
use crate::job::units::Temperature;
use crate::job::{Coil, Heating, MaterialRef, Part, Place, Quantity, Surface};
use crate::job_error::JobError;

/// Emissivity of a surface whose material has none: oxidised metal or brick (common practice, no source).
const EMISSIVITY: f64 = 0.8;

/// How much warmer than its inlet water a conductor is taken to be, kelvin (common practice, no source).
const ABOVE_WATER_K: f64 = 15.0;

/// Temperature of a conductor without water (common practice, no source).
const DRY_COPPER: &str = "50 °C";

/// Emissivity of a surface: its own, its material's, or 0.8.
pub(crate) fn emissivity_of(surface: &Surface, material: &MaterialRef) -> f64 {
    let of_material = || match material {
        MaterialRef::Name(name) => library().ok()?.find(name)?.emissivity,
        MaterialRef::Data(data) => data.emissivity.as_ref().map(|written| match written {
            Written::Plain(value) => *value,
            Written::Full(full) => full.value,
        }),
    };
    surface.emissivity.or_else(of_material).unwrap_or(EMISSIVITY)
}

/// Temperature of everything at the start.
pub(crate) fn job_start(heating: Option<&Heating>) -> Quantity<Temperature> {
    heating.map_or_else(Heating::room, |heating| heating.start.clone())
}

/// Temperature of a part at the start: its own, or that of the job.
pub(crate) fn part_start(part: &Part, heating: Option<&Heating>) -> Quantity<Temperature> {
    part.start.clone().unwrap_or_else(|| job_start(heating))
}

/// Temperature of the conductor of the coil at `place`.
///
/// # Errors
/// An inlet temperature of the water that cannot be read.
pub(crate) fn copper_temperature(coil: &Coil, place: &Place) -> Result<Quantity<Temperature>, JobError> {
    if let Some(temperature) = &coil.temperature {
        return Ok(temperature.clone());
    }
    let Some(water) = &coil.water else {
        return Ok(Quantity::of(DRY_COPPER));
    };
    let inlet = amount::read(&water.inlet, &place.key("water").key("inlet"), amount::WATER)?;
    let celsius = inlet.si - solver::constants::ZERO_CELSIUS_K + ABOVE_WATER_K;
    Ok(Quantity::of(format!("{} °C", (celsius * 1e6).round() / 1e6)))
}
