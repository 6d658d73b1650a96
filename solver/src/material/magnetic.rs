//! Ferromagnetic data, and the permeability that is linear in the field and falls to 1 at the Curie point.
//!
//! Source of the fall: M. D. Kuz'min, "Shape of temperature dependence of spontaneous magnetization of ferromagnets",
//! Phys. Rev. Lett. 94 (2005) 107204; the parameters are those of iron and are used for every ferromagnet here.

use super::curve::REFERENCE_K;
use super::error::{MaterialError, MaterialFault, Property};
use super::source::Source;

/// Magnetic data of a ferromagnet.
#[derive(Debug, Clone, PartialEq)]
pub struct Magnetic {
    /// Relative permeability at 20 °C where one number stands for the field a job works at; it depends on that field.
    pub relative_permeability_20c: Option<f64>,
    /// Saturation polarisation at 20 °C in tesla.
    pub saturation_polarisation_t: f64,
    /// Relative permeability at 20 °C in a weak field.
    pub initial_relative_permeability: f64,
    /// Curie temperature in kelvin.
    pub curie_k: f64,
    /// Where the values come from.
    pub source: Source,
}

impl Magnetic {
    /// Relative permeability at `t_k` in kelvin, linear in the field: `1 + (mu - 1) m(T) / m(20 °C)`, 1 above Curie.
    ///
    /// `mu` is the value at 20 °C, or the weak-field value where none is given. `m` is [`reduced_polarisation`].
    pub fn relative_permeability(&self, t_k: f64) -> f64 {
        let mu = self.relative_permeability_20c.unwrap_or(self.initial_relative_permeability);
        1.0 + (mu - 1.0) * self.relative_polarisation(t_k)
    }

    /// Saturation polarisation at `t_k` as a share of that at 20 °C.
    pub fn relative_polarisation(&self, t_k: f64) -> f64 {
        reduced_polarisation(t_k / self.curie_k) / reduced_polarisation(REFERENCE_K / self.curie_k)
    }

    /// Whether the values can be.
    ///
    /// # Errors
    /// Values that are not finite; a permeability below 1, a saturation that is not positive, a Curie point at or below
    /// 20 °C (the data are given at 20 °C, where there would be no ferromagnetism).
    pub(super) fn check(&self) -> Result<(), MaterialError> {
        let at_least = |value: f64, least: f64, unit, property: Property| {
            if !value.is_finite() {
                return Err(MaterialError::from(MaterialFault::NotFinite { value }).of(property));
            }
            if value < least {
                return Err(MaterialError::from(MaterialFault::TooLow { value, least, unit }).of(property));
            }
            Ok(())
        };
        if let Some(mu) = self.relative_permeability_20c {
            at_least(mu, 1.0, "", Property::Permeability20C)?;
        }
        at_least(self.initial_relative_permeability, 1.0, "", Property::InitialPermeability)?;
        at_least(self.saturation_polarisation_t, f64::MIN_POSITIVE, "T", Property::SaturationPolarisation)?;
        at_least(self.curie_k, REFERENCE_K + 1.0, "K", Property::Curie)
    }
}

/// Saturation polarisation of iron as a share of that at absolute zero, `[1 - 0.35 tau^1.5 - 0.65 tau^4]^(1/3)`.
///
/// `tau` is temperature over Curie temperature, both in kelvin; 0 from 1 upwards. Source: Kuz'min, see the module.
pub fn reduced_polarisation(tau: f64) -> f64 {
    if tau >= 1.0 {
        return 0.0;
    }
    let tau = tau.max(0.0);
    let squared = tau * tau;
    (1.0 - 0.35 * tau * tau.sqrt() - 0.65 * squared * squared).max(0.0).cbrt()
}
