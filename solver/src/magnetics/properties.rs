//! Conductivity and reluctivity at quadrature points, from material data and temperatures.

use crate::constants::MU_0;
use crate::fem::space::Space;
use crate::model::{ConductorKind, Model};
use crate::results::RegionName;

/// Material properties at every quadrature point, element-major.
#[derive(Debug, Clone, PartialEq)]
pub struct PointProperties {
    /// Points an element.
    pub stride: usize,
    /// Conductivity that carries eddy currents, S/m; zero in air and in stranded windings.
    pub sigma_s_per_m: Vec<f64>,
    /// Reluctivity, m/H.
    pub nu_m_per_h: Vec<f64>,
}

/// Temperatures of heated parts at quadrature points: `Some` replaces a part's start temperature.
pub trait PointTemperatures {
    /// Fills `out` with the temperatures in kelvin of the quadrature points of triangle `triangle` of the mesh.
    ///
    /// Returns false where the triangle is not heated.
    fn at(&self, triangle: usize, out: &mut [f64]) -> bool;
}

/// Every part at its start temperature.
#[derive(Debug, Clone, Copy, Default)]
pub struct StartTemperatures;

impl PointTemperatures for StartTemperatures {
    fn at(&self, _triangle: usize, _out: &mut [f64]) -> bool {
        false
    }
}

impl PointProperties {
    /// Evaluates the materials of `model` on a space over all regions.
    pub fn new(space: &Space, regions: &[RegionName], model: &Model, temperatures: &dyn PointTemperatures) -> Self {
        let stride = space.reference().point_count();
        let count = space.element_count() * stride;
        let mut out = Self { stride, sigma_s_per_m: vec![0.0; count], nu_m_per_h: vec![1.0 / MU_0; count] };
        let mut kelvin = vec![0.0; stride];
        for e in 0..space.element_count() {
            let range = e * stride..(e + 1) * stride;
            match &regions[space.region(e).0 as usize] {
                RegionName::Air => {}
                RegionName::Turn(coil, ..) => {
                    let coil = &model.coils[*coil];
                    if coil.conductor == ConductorKind::Solid {
                        let sigma = coil.material.electrical_conductivity_s_per_m(coil.temperature_k);
                        out.sigma_s_per_m[range].fill(sigma);
                    }
                }
                RegionName::Part(part, _) => {
                    let part = &model.parts[*part];
                    if !temperatures.at(space.triangle(e), &mut kelvin) {
                        kelvin.fill(part.start_k);
                    }
                    for (k, &t) in range.zip(&kelvin) {
                        out.sigma_s_per_m[k] = part.material.electrical_conductivity_s_per_m(t);
                        out.nu_m_per_h[k] = 1.0 / (MU_0 * part.material.relative_permeability(t));
                    }
                }
            }
        }
        out
    }

    /// Conductivities of an element, one a quadrature point.
    pub fn sigma(&self, e: usize) -> &[f64] {
        &self.sigma_s_per_m[e * self.stride..(e + 1) * self.stride]
    }

    /// Reluctivities of an element, one a quadrature point.
    pub fn nu(&self, e: usize) -> &[f64] {
        &self.nu_m_per_h[e * self.stride..(e + 1) * self.stride]
    }
}
