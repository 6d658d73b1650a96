//! Conductivity and reluctivity at quadrature points, from material data and temperatures.
//!
//! Elements without temperatures of their own share one row of values a region; heated ones have a row each.

use rayon::prelude::*;

use crate::constants::MU_0;
use crate::fem::assemble::CHUNK;
use crate::fem::space::Space;
use crate::material::Material;
use crate::model::{ConductorKind, Model};
use crate::results::RegionName;

/// Material properties at every quadrature point of a space.
#[derive(Debug, Clone, PartialEq)]
pub struct PointProperties {
    /// Points an element.
    pub stride: usize,
    /// Row of each element.
    row_of: Vec<u32>,
    /// Conductivities that carry eddy currents, S/m, by rows; zero in air and in stranded windings.
    sigma: Vec<f64>,
    /// Reluctivities, m/H, by rows.
    nu: Vec<f64>,
}

/// Temperatures of heated parts at quadrature points, instead of a part's start temperature.
pub trait PointTemperatures: Sync {
    /// Whether triangle `triangle` of the mesh has temperatures of its own.
    fn is_heated(&self, triangle: usize) -> bool;

    /// Fills `out` with the temperatures in kelvin of the quadrature points of a heated triangle.
    fn at(&self, triangle: usize, out: &mut [f64]);
}

/// Every part at its start temperature.
#[derive(Debug, Clone, Copy, Default)]
pub struct StartTemperatures;

impl PointTemperatures for StartTemperatures {
    fn is_heated(&self, _triangle: usize) -> bool {
        false
    }

    fn at(&self, _triangle: usize, _out: &mut [f64]) {}
}

impl PointProperties {
    /// Evaluates the materials of `model` on a space over all regions.
    pub fn new(space: &Space, regions: &[RegionName], model: &Model, temperatures: &dyn PointTemperatures) -> Self {
        let stride = space.reference().point_count();
        let mut heated = Vec::new();
        let row_of = (0..space.element_count()).map(|e| {
            let region = space.region(e).0;
            let RegionName::Part(part, _) = &regions[region as usize] else { return region };
            if !temperatures.is_heated(space.triangle(e)) {
                return region;
            }
            heated.push((space.triangle(e), &*model.parts[*part].material));
            (regions.len() + heated.len() - 1) as u32
        });
        let row_of = row_of.collect();
        let count = (regions.len() + heated.len()) * stride;
        let (mut sigma, mut nu) = (vec![0.0; count], vec![0.0; count]);
        let (shared_sigma, own_sigma) = sigma.split_at_mut(regions.len() * stride);
        let (shared_nu, own_nu) = nu.split_at_mut(regions.len() * stride);
        let rows = shared_sigma.chunks_exact_mut(stride).zip(shared_nu.chunks_exact_mut(stride));
        for (region, (sigma, nu)) in regions.iter().zip(rows) {
            let at_start = start_properties(region, model);
            sigma.fill(at_start.0);
            nu.fill(at_start.1);
        }
        let chunks = own_sigma.par_chunks_mut(CHUNK * stride).zip(own_nu.par_chunks_mut(CHUNK * stride));
        chunks.zip(heated.par_chunks(CHUNK)).for_each(|((sigma, nu), heated)| {
            let rows = sigma.chunks_exact_mut(stride).zip(nu.chunks_exact_mut(stride));
            for ((sigma, nu), &(triangle, material)) in rows.zip(heated) {
                // The row of conductivities is room for the temperatures first.
                temperatures.at(triangle, sigma);
                for (sigma, nu) in sigma.iter_mut().zip(nu) {
                    (*sigma, *nu) = of_material(material, *sigma);
                }
            }
        });
        Self { stride, row_of, sigma, nu }
    }

    /// Conductivities of an element, one a quadrature point.
    pub fn sigma(&self, e: usize) -> &[f64] {
        &self.sigma[self.row_of[e] as usize * self.stride..][..self.stride]
    }

    /// Reluctivities of an element, one a quadrature point.
    pub fn nu(&self, e: usize) -> &[f64] {
        &self.nu[self.row_of[e] as usize * self.stride..][..self.stride]
    }

    /// Computes one value a row from its conductivities and reluctivities, in parallel.
    pub(super) fn map_rows<R: Send>(&self, f: impl Fn(&[f64], &[f64]) -> R + Sync) -> Vec<R> {
        let rows = self.sigma.par_chunks_exact(self.stride).zip(self.nu.par_chunks_exact(self.stride));
        rows.with_min_len(CHUNK).map(|(sigma, nu)| f(sigma, nu)).collect()
    }

    /// Row of an element in what [`PointProperties::map_rows`] gives.
    pub(super) fn row(&self, e: usize) -> usize {
        self.row_of[e] as usize
    }
}

/// Conductivity and reluctivity of a region at its start temperature.
fn start_properties(region: &RegionName, model: &Model) -> (f64, f64) {
    match region {
        RegionName::Air => (0.0, 1.0 / MU_0),
        RegionName::Turn(coil, ..) => {
            let coil = &model.coils[*coil];
            let sigma = match coil.conductor {
                ConductorKind::Solid => coil.material.electrical_conductivity_s_per_m(coil.temperature_k),
                ConductorKind::Stranded { .. } => 0.0,
            };
            (sigma, 1.0 / MU_0)
        }
        RegionName::Part(part, _) => of_material(&model.parts[*part].material, model.parts[*part].start_k),
    }
}

fn of_material(material: &Material, kelvin: f64) -> (f64, f64) {
    let sigma = material.electrical_conductivity_s_per_m(kelvin);
    (sigma, 1.0 / (MU_0 * material.relative_permeability(kelvin)))
}
