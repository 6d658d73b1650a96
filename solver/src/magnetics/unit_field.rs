//! The field of a unit drive (1 A peak in the coils, or an applied field of 1 A/m peak) and what follows from it.
//!
//! Everything quadratic scales with the square of the drive's peak value, everything linear with the value itself.
//! Region sums are for the meshed section; [`super::report`] multiplies by the number of sections.

use num_complex::Complex64;
use pulp::{Arch, Simd, WithSimd};
use rayon::prelude::*;

use super::field_rows::LocalField;
use super::operator::{Operator, curl};
use super::properties::PointProperties;
use crate::fem::assemble::CHUNK;
use crate::fem::element::PointValues;
use crate::fem::rows::BasisRows;
use crate::model::{ConductorKind, Model};
use crate::results::RegionName;

/// Solution and losses of a unit drive.
#[derive(Debug, Clone)]
pub struct UnitField {
    /// Unknowns: `u` at the nodes, then `W` of the solid turns.
    pub x: Vec<Complex64>,
    /// Quadrature points an element.
    pub stride: usize,
    /// Loss density carried by eddy currents at every quadrature point, W/m^3, element-major.
    pub loss_w_per_m3: Vec<f64>,
    /// Sums and extremes of every element.
    pub by_element: Vec<ElementSums>,
    /// Stored energy of the meshed section and its share of the outside, joules.
    pub energy_j: f64,
    /// Componentwise backward error of the solve.
    pub backward_error: f64,
    /// Power that the source puts into the meshed section, watts: `1/2 Re(V I*)` without stranded resistances.
    pub source_power_w: f64,
}

/// Sums and extremes of one element per unit drive squared, or per unit drive for the field strength.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct ElementSums {
    /// Eddy-current loss in watts.
    pub loss_w: f64,
    /// Stored energy in joules.
    pub energy_j: f64,
    /// Largest loss density at a quadrature point, W/m^3.
    pub largest_loss_w_per_m3: f64,
    /// Largest field strength at a quadrature point, A/m (peak).
    pub largest_field_a_per_m: f64,
}

impl UnitField {
    /// Derives losses and energy from a solution.
    pub fn new(operator: &Operator, properties: &PointProperties, x: Vec<Complex64>, backward_error: f64) -> Self {
        let (loss_w_per_m3, by_element) = match operator.space().reference().order() {
            1 => losses::<3, 9>(operator, properties, &x),
            2 => losses::<6, 16>(operator, properties, &x),
            _ => losses::<10, 25>(operator, properties, &x),
        };
        let energy: f64 = by_element.iter().map(|sums| sums.energy_j).sum();
        let exterior = if operator.turns().meshed.is_empty() { 0.0 } else { 0.25 * operator.exterior_form(&x) };
        let work: f64 = x.iter().zip(operator.source()).map(|(x, b)| (x.conj() * b).im).sum();
        Self {
            stride: properties.stride,
            loss_w_per_m3,
            by_element,
            energy_j: energy + exterior,
            backward_error,
            source_power_w: 0.5 * operator.omega() * work,
            x,
        }
    }

    /// Loss densities of an element, one a quadrature point, W/m^3.
    pub fn loss(&self, e: usize) -> &[f64] {
        &self.loss_w_per_m3[e * self.stride..(e + 1) * self.stride]
    }

    /// Eddy-current loss of every region of the meshed section, watts.
    pub fn loss_by_region(&self, operator: &Operator, regions: usize) -> Vec<f64> {
        let mut out = vec![0.0; regions];
        for (e, sums) in self.by_element.iter().enumerate() {
            out[operator.space().region(e).0 as usize] += sums.loss_w;
        }
        out
    }

    /// Voltage of meshed turn `k`, volts (peak phasor), its stranded resistance included.
    pub fn turn_voltage(&self, operator: &Operator, k: usize) -> Complex64 {
        let turn = &operator.turns().meshed[k];
        let linked: Complex64 = operator.turn_source(k).iter().map(|&(i, v)| self.x[i as usize] * v).sum();
        let induced = Complex64::I * operator.omega() * linked / turn.share;
        induced + turn.sign * turn.stranded_resistance_ohm / turn.share
    }
}

/// Loss densities and sums of all elements, of `N` nodes and `P` points each.
fn losses<const N: usize, const P: usize>(
    operator: &Operator,
    properties: &PointProperties,
    x: &[Complex64],
) -> (Vec<f64>, Vec<ElementSums>) {
    let reference = operator.space().reference();
    let basis = BasisRows::<N, P>::new(reference.shapes(), reference.weights());
    let count = operator.space().element_count();
    let (mut losses, mut sums) = (vec![0.0; count * P], vec![ElementSums::default(); count]);
    let chunks = losses.par_chunks_mut(CHUNK * P).zip(sums.par_chunks_mut(CHUNK));
    chunks.enumerate().for_each(|(k, (losses, sums))| {
        Arch::new().dispatch(LossChunk { operator, properties, x, basis: &basis, first: k * CHUNK, losses, sums });
    });
    (losses, sums)
}

/// Losses of some neighbouring elements; those that do not conduct are left at zero.
struct LossChunk<'a, const N: usize, const P: usize> {
    operator: &'a Operator,
    properties: &'a PointProperties,
    x: &'a [Complex64],
    basis: &'a BasisRows<N, P>,
    first: usize,
    losses: &'a mut [f64],
    sums: &'a mut [ElementSums],
}

impl<const N: usize, const P: usize> WithSimd for LossChunk<'_, N, P> {
    type Output = ();

    #[inline(always)]
    fn with_simd<S: Simd>(self, _: S) {
        let losses = self.losses.as_chunks_mut::<P>().0;
        for (i, (losses, sums)) in losses.iter_mut().zip(self.sums).enumerate() {
            let e = self.first + i;
            let field = LocalField::new(self.operator, self.basis, self.x, e);
            let sigma = self.properties.sigma(e);
            if sigma.iter().any(|&s| s > 0.0) {
                add_losses(&field, sigma, losses, sums);
            }
            add_energy(&field, self.properties.nu(e), sums);
        }
    }
}

#[inline(always)]
fn add_losses<const N: usize, const P: usize>(
    field: &LocalField<'_, N, P>,
    sigma: &[f64],
    losses: &mut [f64; P],
    sums: &mut ElementSums,
) {
    let electric = field.electric();
    for (q, (loss, &sigma)) in losses.iter_mut().zip(sigma).enumerate() {
        *loss = if sigma > 0.0 { 0.5 * sigma * electric.at(q).norm_sqr() } else { 0.0 };
    }
    for (loss, volume) in losses.iter().zip(&field.geometry.volume) {
        sums.loss_w += loss * volume;
        sums.largest_loss_w_per_m3 = sums.largest_loss_w_per_m3.max(*loss);
    }
}

#[inline(always)]
fn add_energy<const N: usize, const P: usize>(field: &LocalField<'_, N, P>, nu: &[f64], sums: &mut ElementSums) {
    let [b_r, b_z] = field.flux();
    let (mut energy, mut strength) = ([0.0; P], [0.0; P]);
    for (q, &nu) in nu.iter().enumerate().take(P) {
        let square = b_r.at(q).norm_sqr() + b_z.at(q).norm_sqr();
        energy[q] = 0.25 * nu * square * field.geometry.volume[q];
        strength[q] = nu * square.sqrt();
    }
    for (energy, strength) in energy.iter().zip(&strength) {
        sums.energy_j += energy;
        sums.largest_field_a_per_m = sums.largest_field_a_per_m.max(*strength);
    }
}

/// Nodal values of `u` and the `W` of the element's turn.
pub fn local(operator: &Operator, x: &[Complex64], e: usize) -> (Vec<Complex64>, Complex64) {
    let u = operator.space().element(e).iter().map(|&n| x[n as usize]).collect();
    let w = operator.border_of_element(e).map_or(Complex64::ZERO, |b| x[b as usize]);
    (u, w)
}

/// `E_phi = -j w (r u - W / r)`, V/m.
pub fn electric_field(p: &PointValues, u: &[Complex64], w: Complex64, omega: f64) -> Complex64 {
    let value: Complex64 = u.iter().zip(&p.value).map(|(u, v)| u * v).sum();
    let drive = if w == Complex64::ZERO { w } else { w / p.r };
    Complex64::new(0.0, -omega) * (value * p.r - drive)
}

/// `[B_r, B_z]`, tesla.
pub fn flux_density(p: &PointValues, u: &[Complex64]) -> [Complex64; 2] {
    let mut b = [Complex64::ZERO; 2];
    for (i, u) in u.iter().enumerate() {
        let (minus_br, bz) = curl(p, i);
        b[0] -= u * minus_br;
        b[1] += u * bz;
    }
    b
}

/// Effective conductivity and uniform current density of a stranded turn carrying 1 A peak: `(sigma fill, A/m^2)`.
pub fn stranded(operator: &Operator, model: &Model, region: &RegionName) -> Option<(f64, f64)> {
    let RegionName::Turn(c, t, _) = region else { return None };
    let coil = &model.coils[*c];
    let ConductorKind::Stranded { fill } = coil.conductor else { return None };
    let turn = operator.turns().meshed.iter().find(|m| m.coil == *c && m.turn == *t)?;
    let sigma = coil.material.electrical_conductivity_s_per_m(coil.temperature_k);
    Some((sigma * fill, turn.sign * turn.share / turn.area_m2))
}
