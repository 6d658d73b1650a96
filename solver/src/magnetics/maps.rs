//! Fields at the nodes of every element, for maps and files.

use num_complex::Complex64;
use rayon::prelude::*;

use super::field_rows::LocalField;
use super::operator::Operator;
use super::properties::PointProperties;
use super::unit_field::{UnitField, stranded};
use crate::fem::assemble::CHUNK;
use crate::fem::rows::BasisRows;
use crate::model::Model;
use crate::results::{FieldMaps, RegionName};

/// Fields of a unit drive at the nodes of every element.
///
/// Conductivity and reluctivity at a node are those of the nearest quadrature point of the element.
pub fn maps(
    field: &UnitField,
    operator: &Operator,
    properties: &PointProperties,
    regions: &[RegionName],
    model: &Model,
) -> FieldMaps {
    match operator.space().reference().order() {
        1 => node_maps::<3>(field, operator, properties, regions, model),
        2 => node_maps::<6>(field, operator, properties, regions, model),
        _ => node_maps::<10>(field, operator, properties, regions, model),
    }
}

fn node_maps<const N: usize>(
    field: &UnitField,
    operator: &Operator,
    properties: &PointProperties,
    regions: &[RegionName],
    model: &Model,
) -> FieldMaps {
    let space = operator.space();
    let windings: Vec<Option<(f64, f64)>> = regions.iter().map(|r| stranded(operator, model, r)).collect();
    let nearest = nearest_points(operator);
    let basis = BasisRows::<N, N>::new(space.reference().node_shapes(), &[1.0; N]);
    let count = space.element_count() * N;
    let mut out = FieldMaps {
        vector_potential_wb_per_m: space.points().iter().zip(&field.x).map(|(p, u)| u * p[0]).collect(),
        joule_loss_w_per_m3: vec![0.0; count],
        current_density_a_per_m2: vec![Complex64::ZERO; count],
        flux_density_t: vec![[Complex64::ZERO; 2]; count],
        field_strength_a_per_m: vec![[Complex64::ZERO; 2]; count],
        force_density_n_per_m3: vec![[0.0; 2]; count],
    };
    let electric = out.joule_loss_w_per_m3.par_chunks_mut(N).zip(out.current_density_a_per_m2.par_chunks_mut(N));
    let magnetic = out.flux_density_t.par_chunks_mut(N).zip(out.field_strength_a_per_m.par_chunks_mut(N));
    let rows = electric.zip(magnetic).zip(out.force_density_n_per_m3.par_chunks_mut(N)).with_min_len(CHUNK);
    rows.enumerate().for_each(|(e, (((loss, current), (flux, strength)), force))| {
        let at = ElementNodes { loss, current, flux, strength, force };
        let local = LocalField::new(operator, &basis, &field.x, e);
        let winding = windings[space.region(e).0 as usize];
        at.fill(&local, (properties.sigma(e), properties.nu(e)), &nearest, winding);
    });
    out
}

/// What the maps hold of one element, one entry a node.
struct ElementNodes<'a> {
    loss: &'a mut [f64],
    current: &'a mut [Complex64],
    flux: &'a mut [[Complex64; 2]],
    strength: &'a mut [[Complex64; 2]],
    force: &'a mut [[f64; 2]],
}

impl ElementNodes<'_> {
    fn fill<const N: usize>(
        self,
        field: &LocalField<'_, N, N>,
        (sigma, nu): (&[f64], &[f64]),
        nearest: &[usize],
        winding: Option<(f64, f64)>,
    ) {
        let (electric, [b_r, b_z]) = (field.electric(), field.flux());
        for (i, &q) in nearest.iter().enumerate() {
            let (electric, flux) = (electric.at(i), [b_r.at(i), b_z.at(i)]);
            let (current, loss) = match winding {
                Some((sigma, j)) => (Complex64::from(j), 0.5 * j * j / sigma),
                None => (electric * sigma[q], 0.5 * sigma[q] * electric.norm_sqr()),
            };
            self.loss[i] = loss;
            self.current[i] = current;
            self.flux[i] = flux;
            self.strength[i] = [flux[0] * nu[q], flux[1] * nu[q]];
            self.force[i] = [0.5 * (current * flux[1].conj()).re, -0.5 * (current * flux[0].conj()).re];
        }
    }
}

/// Quadrature point nearest to each node of the reference element.
fn nearest_points(operator: &Operator) -> Vec<usize> {
    let reference = operator.space().reference();
    let distance = |a: [f64; 2], b: [f64; 2]| (a[0] - b[0]).hypot(a[1] - b[1]);
    crate::fem::reference::node_positions(reference.order())
        .into_iter()
        .map(|node| {
            let by = |a: &usize, b: &usize| {
                distance(reference.points()[*a], node).total_cmp(&distance(reference.points()[*b], node))
            };
            (0..reference.point_count()).min_by(by).unwrap_or(0)
        })
        .collect()
}
