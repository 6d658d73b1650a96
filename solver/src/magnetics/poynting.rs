//! Power that flows into a part, taken from the field in the air round it: a check that does not use its currents.
//!
//! With a function `chi` that is 1 on the part and falls to 0 in the air, `P = int grad(chi) . S dV` over the air,
//! `S = 1/2 Re(E x H*)`: the mean of the Poynting flux over a family of surfaces (`div Re S = 0` where nothing
//! conducts). `chi` falls over the second layer of elements, so that the corner of a conductor lies behind it.
//!
//! What it shows: that losses, field and measures belong together. A discrete field satisfies this balance but for the
//! interpolation of `chi u` in the layer where `chi` falls, so it agrees far closer than the field is accurate; like
//! the power balance it says little about the mesh inside the part.

use num_complex::Complex64;
use rayon::prelude::*;

use super::operator::Operator;
use super::properties::PointProperties;
use super::unit_field::{UnitField, electric_field, flux_density, local};
use crate::fem::assemble::{CHUNK, map_elements};
use crate::fem::space::Space;

/// Layers of air elements on which `chi` stays 1, tried from the largest.
const LAYERS: [usize; 3] = [2, 1, 0];

/// Power into the part with region id `region` per unit drive squared, watts, for the meshed section.
///
/// `None` where no surface in loss-free space fits between the part and the next conductor.
pub fn power_into(field: &UnitField, operator: &Operator, properties: &PointProperties, region: u32) -> Option<f64> {
    let space = operator.space();
    let free = properties.map_rows(|sigma, _| sigma.iter().all(|&s| s == 0.0));
    let clear: Vec<bool> = (0..space.element_count())
        .map(|e| free[properties.row(e)] && operator.border_of_element(e).is_none())
        .collect();
    let current: Vec<bool> = stranded_elements(operator);
    let own: Vec<bool> = (0..space.element_count()).map(|e| space.region(e).0 == region).collect();
    LAYERS.iter().find_map(|&layers| {
        let chi = weights(space, &own, layers);
        let usable = (0..space.element_count())
            .into_par_iter()
            .with_min_len(CHUNK)
            .all(|e| own[e] || (clear[e] && !current[e]) || flat_zero(space, &chi, e));
        usable.then(|| flux(field, operator, properties, &chi, &own))
    })
}

fn stranded_elements(operator: &Operator) -> Vec<bool> {
    let mut out = vec![false; operator.space().element_count()];
    for turn in operator.turns().meshed.iter().filter(|t| t.border.is_none()) {
        for &e in &turn.elements {
            out[e as usize] = true;
        }
    }
    out
}

/// `chi` at the corners of the elements: 1 on the part and `layers` layers of elements round it.
fn weights(space: &Space, own: &[bool], layers: usize) -> Vec<f64> {
    let mut chi = vec![0.0; space.len()];
    let mark = |chi: &mut Vec<f64>, e: usize| space.element(e)[..3].iter().for_each(|&n| chi[n as usize] = 1.0);
    (0..space.element_count()).filter(|&e| own[e]).for_each(|e| mark(&mut chi, e));
    for _ in 0..layers {
        let touched: Vec<usize> = (0..space.element_count())
            .into_par_iter()
            .with_min_len(CHUNK)
            .filter(|&e| space.element(e)[..3].iter().any(|&n| chi[n as usize] == 1.0))
            .collect();
        for e in touched {
            mark(&mut chi, e);
        }
    }
    chi
}

fn flat_zero(space: &Space, chi: &[f64], e: usize) -> bool {
    space.element(e)[..3].iter().all(|&n| chi[n as usize] == 0.0)
}

fn flux(field: &UnitField, operator: &Operator, properties: &PointProperties, chi: &[f64], own: &[bool]) -> f64 {
    let space = operator.space();
    let omega = operator.omega();
    map_elements(space.element_count(), |e, points| {
        let c = [0, 1, 2].map(|k| chi[space.element(e)[k] as usize]);
        if own[e] || c.iter().all(|&v| v == c[0]) {
            return 0.0;
        }
        space.fill(e, points);
        let (u, w) = local(operator, &field.x, e);
        let straight = corner_gradient(space, e, &c);
        let mut sum = 0.0;
        for (p, &nu) in points.points().iter().zip(properties.nu(e)) {
            let electric = electric_field(p, &u, w, omega);
            let b = flux_density(p, &u);
            let [hr, hz]: [Complex64; 2] = [b[0] * nu, b[1] * nu];
            let s = [0.5 * (electric * hz.conj()).re, -0.5 * (electric * hr.conj()).re];
            sum += p.volume * (straight[0] * s[0] + straight[1] * s[1]);
        }
        sum
    })
    .into_iter()
    .sum()
}

/// Gradient of the linear function with values `c` at the corners of element `e`, 1/m.
fn corner_gradient(space: &Space, e: usize, c: &[f64; 3]) -> [f64; 2] {
    let [a, b, d] = [0, 1, 2].map(|k| space.points()[space.element(e)[k] as usize]);
    let (x1, y1, x2, y2) = (b[0] - a[0], b[1] - a[1], d[0] - a[0], d[1] - a[1]);
    let det = x1 * y2 - x2 * y1;
    let (c1, c2) = (c[1] - c[0], c[2] - c[0]);
    [(c1 * y2 - c2 * y1) / det, (c2 * x1 - c1 * x2) / det]
}
