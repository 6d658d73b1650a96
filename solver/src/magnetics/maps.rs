//! Fields at the nodes of every element, for maps and files.

use num_complex::Complex64;

use super::operator::Operator;
use super::properties::PointProperties;
use super::unit_field::{UnitField, electric_field, flux_density, local, stranded};
use crate::fem::assemble::map_elements;
use crate::fem::element::point_values;
use crate::fem::reference::MAX_NODES;
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
    let space = operator.space();
    let windings: Vec<Option<(f64, f64)>> = regions.iter().map(|r| stranded(operator, model, r)).collect();
    let nearest = nearest_points(operator);
    let rows = map_elements(space.element_count(), |e, _| {
        let winding = windings[space.region(e).0 as usize];
        element_rows(field, operator, (properties.sigma(e), properties.nu(e)), &nearest, winding, e)
    });
    let potential = space.points().iter().zip(&field.x).map(|(p, u)| u * p[0]).collect();
    let mut out = FieldMaps {
        vector_potential_wb_per_m: potential,
        joule_loss_w_per_m3: Vec::new(),
        current_density_a_per_m2: Vec::new(),
        flux_density_t: Vec::new(),
        field_strength_a_per_m: Vec::new(),
        force_density_n_per_m3: Vec::new(),
    };
    for row in rows.into_iter().flatten() {
        out.joule_loss_w_per_m3.push(row.loss);
        out.current_density_a_per_m2.push(row.current);
        out.flux_density_t.push(row.flux);
        out.field_strength_a_per_m.push(row.field);
        out.force_density_n_per_m3.push(row.force);
    }
    out
}

struct NodeRow {
    loss: f64,
    current: Complex64,
    flux: [Complex64; 2],
    field: [Complex64; 2],
    force: [f64; 2],
}

fn element_rows(
    field: &UnitField,
    operator: &Operator,
    (sigma, nu): (&[f64], &[f64]),
    nearest: &[usize],
    winding: Option<(f64, f64)>,
    e: usize,
) -> Vec<NodeRow> {
    let space = operator.space();
    let mut corners = [[0.0; 2]; MAX_NODES];
    let n = space.corners(e, &mut corners);
    let (u, w) = local(operator, &field.x, e);
    let at_node = |(shape, &q): (_, &usize)| {
        let p = point_values(shape, 1.0, &corners[..n]);
        let electric = electric_field(&p, &u, w, operator.omega());
        let (current, loss) = match winding {
            Some((sigma, j)) => (Complex64::from(j), 0.5 * j * j / sigma),
            None => (electric * sigma[q], 0.5 * sigma[q] * electric.norm_sqr()),
        };
        let flux = flux_density(&p, &u);
        let force = [0.5 * (current * flux[1].conj()).re, -0.5 * (current * flux[0].conj()).re];
        NodeRow { loss, current, flux, field: [flux[0] * nu[q], flux[1] * nu[q]], force }
    };
    space.reference().node_shapes().iter().zip(nearest).map(at_node).collect()
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
