//! Element blocks of `K + j w M`, with the row of a solid turn's voltage last where an element has one.
//!
//! Stored once a mesh: the block of `K` for a reluctivity of 1 m/H, and in conductors that of `M` for 1 S/m. They make
//! the block of an element whose properties are the same at all its points; where they vary, it is integrated anew.
//! Convention: lower triangle by rows; equation (3) of [`super`].

use num_complex::Complex64;
use rayon::prelude::*;

use super::operator::curl;
use crate::fem::assemble::{Block, CHUNK};
use crate::fem::element::ElementPoints;
use crate::fem::reference::{MAX_NODES, MAX_POINTS};
use crate::fem::space::Space;

/// Most entries of a block, the voltage row included.
const MOST_ENTRIES: usize = (MAX_NODES + 1) * (MAX_NODES + 2) / 2;

/// Blocks of unit properties, element-major.
#[derive(Debug)]
pub(super) struct ElementForms {
    /// Entries of an element's block without a voltage row.
    entries: usize,
    stiffness: Vec<f64>,
    /// Blocks of `M` of the conductors, voltage row included.
    mass: Vec<f64>,
    /// Where each element's block of `M` begins, and where the last ends; empty outside conductors.
    mass_starts: Vec<u32>,
    bordered: Vec<bool>,
}

impl ElementForms {
    /// Integrates the forms of all elements; `conducts` tells which may carry eddy currents.
    pub(super) fn new(space: &Space, borders: &[Option<u32>], conducts: impl Fn(usize) -> bool) -> Self {
        let nodes = space.reference().node_count();
        let entries = nodes * (nodes + 1) / 2;
        let bordered: Vec<bool> = borders.iter().map(Option::is_some).collect();
        let mass_starts = mass_starts(&bordered, nodes, conducts);
        let mut stiffness = vec![0.0; bordered.len() * entries];
        let mut mass = vec![0.0; mass_starts[bordered.len()] as usize];
        let chunks: Vec<_> = stiffness.chunks_mut(CHUNK * entries).zip(by_chunk(&mut mass, &mass_starts)).collect();
        let integral = integral(nodes);
        let starts = &mass_starts;
        chunks.into_par_iter().enumerate().for_each_init(ElementPoints::default, |points, (k, (stiffness, mass))| {
            let first = starts[k * CHUNK];
            for (i, stiffness) in stiffness.chunks_exact_mut(entries).enumerate() {
                let e = k * CHUNK + i;
                space.fill(e, points);
                let mut sums = Sums::default();
                integral(points, &[1.0; MAX_POINTS], &[1.0; MAX_POINTS], bordered[e], &mut sums);
                stiffness.copy_from_slice(&sums.stiffness[..entries]);
                let mass = &mut mass[(starts[e] - first) as usize..(starts[e + 1] - first) as usize];
                mass.copy_from_slice(&sums.mass[..mass.len()]);
            }
        });
        Self { entries, stiffness, mass, mass_starts, bordered }
    }

    /// Block of element `e` with conductivities in S/m and reluctivities in m/H at its points, at `omega` in rad/s.
    ///
    /// `out` arrives as zeros; `points` is room for the element's points.
    pub(super) fn block(
        &self,
        space: &Space,
        e: usize,
        (sigma, nu): (&[f64], &[f64]),
        omega: f64,
        points: &mut ElementPoints,
        out: &mut Block<Complex64>,
    ) {
        let mass = &self.mass[self.mass_starts[e] as usize..self.mass_starts[e + 1] as usize];
        if same(nu) && same(sigma) && (sigma[0] == 0.0 || mass.len() == out.len()) {
            for (out, form) in out.iter_mut().zip(&self.stiffness[e * self.entries..][..self.entries]) {
                out.re = nu[0] * form;
            }
            let weight = omega * sigma[0];
            for (out, form) in out.iter_mut().zip(mass) {
                out.im = weight * form;
            }
            return;
        }
        space.fill(e, points);
        let mut sums = Sums::default();
        integral(points.nodes)(points, sigma, nu, self.bordered[e], &mut sums);
        for (out, (stiffness, mass)) in out.iter_mut().zip(sums.stiffness.iter().zip(&sums.mass)) {
            *out = Complex64::new(*stiffness, omega * mass);
        }
    }
}

/// Where each element's block of `M` begins, and where the last ends.
fn mass_starts(bordered: &[bool], nodes: usize, conducts: impl Fn(usize) -> bool) -> Vec<u32> {
    let entries = nodes * (nodes + 1) / 2;
    let mut out = vec![0];
    for (e, &bordered) in bordered.iter().enumerate() {
        let own = if conducts(e) { entries + if bordered { nodes + 1 } else { 0 } } else { 0 };
        out.push(out[e] + own as u32);
    }
    out
}

/// The blocks of every [`CHUNK`] elements.
fn by_chunk<'a>(blocks: &'a mut [f64], starts: &[u32]) -> Vec<&'a mut [f64]> {
    let (mut out, mut rest, mut start) = (Vec::new(), blocks, 0);
    for ends in starts[1..].chunks(CHUNK) {
        let end = ends[ends.len() - 1];
        let (own, after) = rest.split_at_mut((end - start) as usize);
        out.push(own);
        (rest, start) = (after, end);
    }
    out
}

fn same(values: &[f64]) -> bool {
    values.iter().all(|&value| value == values[0])
}

/// Integrals over one element.
struct Sums {
    /// `int nu (...)` of equation (1).
    stiffness: [f64; MOST_ENTRIES],
    /// `int sigma (r u - W / r)(r v - Y / r)`.
    mass: [f64; MOST_ENTRIES],
}

impl Default for Sums {
    fn default() -> Self {
        Self { stiffness: [0.0; MOST_ENTRIES], mass: [0.0; MOST_ENTRIES] }
    }
}

type Integral = fn(&ElementPoints, &[f64], &[f64], bool, &mut Sums);

/// The integral over an element of so many nodes; a constant number lets the compiler unroll the inner loops.
fn integral(nodes: usize) -> Integral {
    match nodes {
        3 => integrate::<3>,
        6 => integrate::<6>,
        _ => integrate::<MAX_NODES>,
    }
}

fn integrate<const N: usize>(points: &ElementPoints, sigma: &[f64], nu: &[f64], border: bool, out: &mut Sums) {
    for ((p, &sigma), &nu) in points.points().iter().zip(sigma).zip(nu) {
        let (k, m) = (nu * p.volume, sigma * p.volume);
        let (mut b, mut u) = ([(0.0, 0.0); N], [0.0; N]);
        for i in 0..N {
            b[i] = curl(p, i);
            u[i] = p.r * p.value[i];
        }
        let mut slot = 0;
        for i in 0..N {
            for j in 0..=i {
                out.stiffness[slot] += k * (b[i].0 * b[j].0 + b[i].1 * b[j].1);
                out.mass[slot] += m * (u[i] * u[j]);
                slot += 1;
            }
        }
        if border {
            for value in &p.value[..N] {
                out.mass[slot] -= m * value;
                slot += 1;
            }
            out.mass[slot] += m / (p.r * p.r);
        }
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used, reason = "tests")]
mod tests {
    use std::sync::Arc;

    use mesher::{Drawing, Limits, Outline, RegionId, triangulate};

    use super::*;

    fn disc(order: usize) -> Space {
        let drawing = Drawing {
            domain: Outline::rectangle([0.01, 0.0], [0.02, 0.01]).unwrap(),
            domain_region: RegionId(0),
            domain_size: 0.001,
            regions: Vec::new(),
            gradation: 0.4,
            boundary_size: None,
            line_sizes: Vec::new(),
        };
        let mesh = Arc::new(triangulate(&drawing, &Limits::default(), &|| false).unwrap());
        Space::new(&mesh, &mesh.nodes(order), |_| true)
    }

    #[test]
    fn stored_forms_give_the_integral_with_and_without_a_voltage_row() {
        for order in 1..=3 {
            let space = disc(order);
            assert!(space.element_count() > 2 * CHUNK, "several chunks of elements");
            let nodes = space.reference().node_count();
            let borders: Vec<Option<u32>> = (0..space.element_count()).map(|e| (e % 2 == 0).then_some(999)).collect();
            let forms = ElementForms::new(&space, &borders, |e| e % 3 > 0);
            let (sigma, nu, omega) = (3e6, 7e5, 2e4);
            let count = space.reference().point_count();
            let uniform = (vec![sigma; count], vec![nu; count]);
            // A relative change of 1e-14 at one point makes the integral the way.
            let mut varied = uniform.clone();
            (varied.0[0], varied.1[0]) = (sigma * (1.0 + 1e-14), nu * (1.0 + 1e-14));
            let mut points = ElementPoints::default();
            for (e, border) in borders.iter().enumerate() {
                let length = nodes * (nodes + 1) / 2 + if border.is_some() { nodes + 1 } else { 0 };
                let [mut stored, mut integrated] = [0; 2].map(|_| vec![Complex64::ZERO; length]);
                forms.block(&space, e, (&uniform.0, &uniform.1), omega, &mut points, &mut stored);
                forms.block(&space, e, (&varied.0, &varied.1), omega, &mut points, &mut integrated);
                let size = integrated.iter().fold([0.0_f64; 2], |m, v| [m[0].max(v.re.abs()), m[1].max(v.im.abs())]);
                assert!(size[0] > 0.0 && size[1] > 0.0, "element {e} has no stiffness or no mass");
                for (k, (a, b)) in stored.iter().zip(&integrated).enumerate() {
                    let off = [(a.re - b.re).abs() / size[0], (a.im - b.im).abs() / size[1]];
                    assert!(off[0] < 1e-12 && off[1] < 1e-12, "order {order}, element {e}, entry {k}: {a} and {b}");
                }
            }
        }
    }
}
