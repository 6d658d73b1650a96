//! Heated parts as the mesh has them: elements, volume, mass, and where their surface and core at mid-length are.

use std::sync::Arc;

use mesher::{NO_TRIANGLE, RegionId};

use super::conductivity::Conductivity;
use super::geometry::Geometry;
use crate::fem::edge::Side;
use crate::fem::reference::edge_point;
use crate::fem::space::Space;
use crate::material::Material;
use crate::model::{Mirrors, Model, Role};

/// A heated part.
#[derive(Debug, Clone)]
pub(super) struct HeatedPart {
    /// Index into the model's parts.
    pub(super) index: usize,
    pub(super) material: Arc<Material>,
    pub(super) conductivity: Conductivity,
    pub(super) is_workpiece: bool,
    /// Temperature at the start, kelvin.
    pub(super) start_k: f64,
    /// Volume of the whole device's part, m^3.
    pub(super) volume_m3: f64,
    /// Unknowns of its nodes, rising.
    pub(super) nodes: Vec<u32>,
    /// Outermost and innermost point at mid-length: element and reference coordinates.
    pub(super) across: [(usize, [f64; 2]); 2],
}

/// Place on a side found while looking along a line of constant height.
struct Found {
    r: f64,
    place: (usize, [f64; 2]),
}

/// The heated parts that have elements, in the model's order; `owner_of` gives the model's part of a region.
pub(super) fn heated_parts(
    space: &Space,
    geometry: &Geometry,
    model: &Model,
    owner_of: &impl Fn(RegionId) -> Option<usize>,
) -> Vec<HeatedPart> {
    let factor = device_factor(model.mirrors);
    let mut parts = Vec::new();
    for (index, part) in model.parts.iter().enumerate() {
        let is_own = |&e: &usize| owner_of(space.region(e)) == Some(index);
        let elements: Vec<usize> = (0..space.element_count()).filter(is_own).collect();
        let Some(&first) = elements.first() else { continue };
        let mut nodes: Vec<u32> = elements.iter().flat_map(|&e| space.element(e)).copied().collect();
        nodes.sort_unstable();
        nodes.dedup();
        let z = mid_length(space, &nodes, model.mirrors);
        let volume: f64 = elements.iter().flat_map(|&e| geometry.volume(e)).sum();
        parts.push(HeatedPart {
            index,
            material: Arc::clone(&part.material),
            conductivity: Conductivity::new(&part.material.conductivity),
            is_workpiece: part.role == Role::Workpiece,
            start_k: part.start_k,
            volume_m3: factor * volume,
            across: points_at_mid_length(space, &elements, z, first, owner_of),
            nodes,
        });
    }
    parts
}

/// What energies of the solved section are multiplied with to be those of the whole device.
pub(super) fn device_factor(mirrors: Mirrors) -> f64 {
    match mirrors {
        Mirrors::One { .. } => 2.0,
        Mirrors::None | Mirrors::Two { .. } => 1.0,
    }
}

/// Mid-height of a part in metres: the mirror plane where one plane cuts it, else the middle of what is meshed.
fn mid_length(space: &Space, nodes: &[u32], mirrors: Mirrors) -> f64 {
    let heights = || nodes.iter().map(|&n| space.points()[n as usize][1]);
    let (low, high) = (heights().fold(f64::INFINITY, f64::min), heights().fold(f64::NEG_INFINITY, f64::max));
    match mirrors {
        Mirrors::One { z_m } if (low - z_m).abs() <= 1e-6 * (high - low) => low,
        _ => 0.5 * (low + high),
    }
}

/// Outermost and innermost point of the part's outline at height `z`; a part without one there gives its first node.
fn points_at_mid_length(
    space: &Space,
    elements: &[usize],
    z: f64,
    first: usize,
    owner_of: &impl Fn(RegionId) -> Option<usize>,
) -> [(usize, [f64; 2]); 2] {
    let mut found: Vec<Found> = Vec::new();
    for &element in elements {
        for edge in 0..3 {
            let side = Side { element, edge };
            if is_outline(space, side, owner_of) {
                cross(space, side, z, &mut found);
            }
        }
    }
    let none = (first, edge_point(0, 0.0));
    let outer = found.iter().max_by(|a, b| a.r.total_cmp(&b.r)).map_or(none, |f| f.place);
    let inner = found.iter().min_by(|a, b| a.r.total_cmp(&b.r)).map_or(none, |f| f.place);
    [outer, inner]
}

/// True where the mesh ends or another part or region begins across the side.
fn is_outline(space: &Space, side: Side, owner_of: &impl Fn(RegionId) -> Option<usize>) -> bool {
    let mesh = space.mesh();
    let t = space.triangle(side.element);
    let pair = mesh.edges()[mesh.triangle_edges()[t][side.edge] as usize].triangles;
    let other = if pair[0] as usize == t { pair[1] } else { pair[0] };
    other == NO_TRIANGLE || owner_of(mesh.regions()[other as usize]) != owner_of(space.region(side.element))
}

/// Adds the points of a side at height `z`.
fn cross(space: &Space, side: Side, z: f64, found: &mut Vec<Found>) {
    let at = |s: f64| {
        let x = edge_point(side.edge, s);
        let shape = space.reference().shape_at(x);
        let mut p = [0.0; 2];
        for (&n, v) in space.element(side.element).iter().zip(&shape.value) {
            let node = space.points()[n as usize];
            p[0] += v * node[0];
            p[1] += v * node[1];
        }
        (p, x)
    };
    let (a, b) = (at(0.0).0, at(1.0).0);
    let slack = 1e-9 * (a[0] - b[0]).hypot(a[1] - b[1]);
    for (end, s) in [(a, 0.0), (b, 1.0)] {
        if (end[1] - z).abs() <= slack {
            found.push(Found { r: end[0], place: (side.element, at(s).1) });
        }
    }
    if (a[1] - z) * (b[1] - z) >= 0.0 {
        return;
    }
    let (mut low, mut high) = (0.0, 1.0);
    for _ in 0..50 {
        let middle = 0.5 * (low + high);
        if (at(middle).0[1] - z) * (a[1] - z) > 0.0 {
            low = middle;
        } else {
            high = middle;
        }
    }
    let (p, x) = at(low);
    found.push(Found { r: p[0], place: (side.element, x) });
}
