//! From a model to a drawing for the mesher: which regions, how large the elements, how thin the skin layers.
//!
//! Region 0 is air. Parts follow in job order, then turns; bores are painted over their turns as air.

use mesher::{Drawing, Layers, Outline, Region, RegionId};

use crate::constants::skin_depth;
use crate::error::SolveError;
use crate::model::{ConductorKind, MeshSettings, Mirrors, Model, Part};
use crate::results::RegionName;

/// Temperature steps at which the skin depth of a heated part is looked for.
const SAMPLES: usize = 60;
/// Hottest temperature looked at where a stage names no higher one, kelvin.
const HOTTEST_K: f64 = 1600.0;
/// Share of the wall that skin layers may take from each side.
const WALL_SHARE: f64 = 0.4;
/// Growth of element size per unit of distance; a finer mesh divides it too, or the air would stay as coarse as it was.
const GRADATION: f64 = 0.4;

/// A drawing and what its regions are.
#[derive(Debug, Clone)]
pub struct Layout {
    /// For the mesher.
    pub drawing: Drawing,
    /// One a region id.
    pub regions: Vec<RegionName>,
    /// Radius in metres and centre height of the open boundary; `None` for a slice.
    pub open_boundary: Option<(f64, f64)>,
    /// One a part: least skin depth over the heating, metres; infinite where it does not conduct.
    pub skin_depths_m: Vec<f64>,
}

/// Lays out a model.
///
/// # Errors
/// An outline the mesher refuses.
pub fn layout(model: &Model) -> Result<Layout, SolveError> {
    let (domain, open_boundary, extent) = domain(model)?;
    let mut regions = vec![RegionName::Air];
    let mut drawn = Vec::new();
    let mut skin_depths_m = Vec::new();
    for (p, part) in model.parts.iter().enumerate() {
        let depth = least_skin_depth(model, part);
        skin_depths_m.push(depth);
        drawn.push(region(&part.outline, wall(&part.outline), depth, regions.len(), &model.mesh));
        regions.push(RegionName::Part(p, part.name.clone()));
    }
    for (c, coil) in model.coils.iter().enumerate() {
        let sigma = coil.material.electrical_conductivity_s_per_m(coil.temperature_k);
        let depth = match coil.conductor {
            ConductorKind::Solid => skin_depth(model.drive.frequency_hz(), sigma, 1.0),
            ConductorKind::Stranded { .. } => f64::INFINITY,
        };
        for (t, turn) in coil.turns.iter().enumerate() {
            let thickness = turn.bore.as_ref().map_or(wall(&turn.outline), |b| tube_wall(&turn.outline, b));
            drawn.push(region(&turn.outline, thickness, depth, regions.len(), &model.mesh));
            regions.push(RegionName::Turn(c, t, coil.name.clone()));
            if let Some(bore) = &turn.bore {
                drawn.push(plain(bore, 0, thickness.max(0.25 * wall(bore)) / model.mesh.fineness));
            }
        }
    }
    let largest = model.mesh.largest_m.unwrap_or(f64::INFINITY);
    for region in &mut drawn {
        region.interior_size = region.interior_size.min(largest);
        region.surface_size = region.surface_size.min(largest);
    }
    let drawing = Drawing {
        domain,
        domain_region: RegionId(0),
        domain_size: (extent / 6.0 / model.mesh.fineness).min(largest),
        regions: drawn,
        gradation: GRADATION / model.mesh.fineness.max(1.0),
        boundary_size: Some(extent / 14.0 / model.mesh.fineness),
        line_sizes: Vec::new(),
    };
    Ok(Layout { drawing, regions, open_boundary, skin_depths_m })
}

/// The outline of what is meshed, the open boundary, and its size in metres.
#[allow(clippy::type_complexity, reason = "three results of one look at the bounds")]
fn domain(model: &Model) -> Result<(Outline, Option<(f64, f64)>, f64), SolveError> {
    let outlines = || {
        let parts = model.parts.iter().map(|p| &p.outline);
        parts.chain(model.coils.iter().flat_map(|c| c.turns.iter().map(|t| &t.outline)))
    };
    let boxes: Vec<_> = outlines().map(Outline::bounds).collect();
    let max_r = boxes.iter().map(|b| b.1[0]).fold(0.0, f64::max);
    let low = boxes.iter().map(|b| b.0[1]).fold(f64::INFINITY, f64::min);
    let high = boxes.iter().map(|b| b.1[1]).fold(f64::NEG_INFINITY, f64::max);
    let reach = |centre: f64| {
        boxes
            .iter()
            .flat_map(|(lo, hi)| [(hi[0], lo[1]), (hi[0], hi[1])])
            .map(|(r, z)| r.hypot(z - centre))
            .fold(0.0, f64::max)
    };
    let factor = model.mesh.boundary_factor;
    Ok(match model.mirrors {
        Mirrors::None => {
            let centre = 0.5 * (low + high);
            let radius = factor * reach(centre);
            (Outline::half_disc(centre, radius)?, Some((radius, centre)), radius)
        }
        Mirrors::One { z_m } => {
            let radius = factor * reach(z_m);
            (Outline::quarter_disc(z_m, radius)?, Some((radius, z_m)), radius)
        }
        Mirrors::Two { lower_m, upper_m } => {
            let radius = factor * max_r;
            (Outline::rectangle([0.0, lower_m], [radius, upper_m])?, None, radius)
        }
    })
}

/// Least skin depth of a part over the temperatures it may pass, metres.
pub fn least_skin_depth(model: &Model, part: &Part) -> f64 {
    let hottest = hottest_k(model).max(part.start_k);
    let heated = model.heating.is_some() && part.role.is_heated();
    let samples = if heated { SAMPLES } else { 0 };
    (0..=samples)
        .map(|k| part.start_k + (hottest - part.start_k) * k as f64 / SAMPLES as f64)
        .map(|t| skin_depth_at(model, part, t))
        .fold(f64::INFINITY, f64::min)
}

/// Skin depth of a part at a temperature, metres; infinite where it does not conduct.
pub fn skin_depth_at(model: &Model, part: &Part, t_k: f64) -> f64 {
    let sigma = part.material.electrical_conductivity_s_per_m(t_k);
    if sigma <= 0.0 {
        return f64::INFINITY;
    }
    skin_depth(model.drive.frequency_hz(), sigma, part.material.relative_permeability(t_k))
}

fn hottest_k(model: &Model) -> f64 {
    let Some(heating) = &model.heating else { return 0.0 };
    let goals = heating.stages.iter().filter_map(|s| match s.end {
        crate::model::StageEnd::GaugeReaches { at_k, .. } => Some(at_k),
        crate::model::StageEnd::After(_) => None,
    });
    goals.fold(HOTTEST_K, f64::max)
}

/// Thickness from the surface inwards, metres: the least of the extents and of twice the area over the perimeter.
fn wall(outline: &Outline) -> f64 {
    let (lo, hi) = outline.bounds();
    (hi[0] - lo[0]).min(hi[1] - lo[1]).min(2.0 * outline.area() / outline.perimeter() * 2.0)
}

/// Wall of a tube: the difference of areas over the mean perimeter.
fn tube_wall(outside: &Outline, bore: &Outline) -> f64 {
    2.0 * (outside.area() - bore.area()) / (outside.perimeter() + bore.perimeter())
}

fn plain(outline: &Outline, id: usize, size: f64) -> Region {
    Region { id: RegionId(id as u32), outline: outline.clone(), interior_size: size, surface_size: size, layers: None }
}

fn region(outline: &Outline, wall: f64, depth: f64, id: usize, mesh: &MeshSettings) -> Region {
    let (lo, hi) = outline.bounds();
    let longest = (hi[0] - lo[0]).max(hi[1] - lo[1]);
    let coarse = (wall / 2.5).min(longest / 12.0).max(longest / 400.0);
    let layers = skin_layers(depth, wall, mesh);
    let size = match layers {
        Some(_) => coarse,
        None => coarse.min(0.7 * depth).max(wall / 40.0),
    };
    let size = size / mesh.fineness;
    Region { surface_size: size.min(longest / 24.0 / mesh.fineness), layers, ..plain(outline, id, size) }
}

/// Layers that cover the skin; `None` where the wall is too thin for them or nothing flows.
///
/// First layer `depth / per_skin_depth`, growth and number by order (measured on long cylinders: power within 0.01 %
/// with second-order elements). A finer mesh divides each layer in geometric steps.
fn skin_layers(depth: f64, wall: f64, mesh: &MeshSettings) -> Option<Layers> {
    let (growth, count): (f64, usize) = match mesh.order {
        1 => (1.3, 9),
        2 => (1.5, 5),
        _ => (2.0, 4),
    };
    let coarse_first = depth / mesh.per_skin_depth * if mesh.order == 1 { 0.4 } else { 1.0 };
    if !depth.is_finite() || coarse_first > 0.12 * wall {
        return None;
    }
    let fine_growth = growth.powf(1.0 / mesh.fineness);
    let first = coarse_first * (fine_growth - 1.0) / (growth - 1.0);
    let mut count = (count as f64 * mesh.fineness).round().max(1.0) as usize;
    let thickness = |n: usize| first * (fine_growth.powi(n as i32) - 1.0) / (fine_growth - 1.0);
    while count > 1 && thickness(count) > WALL_SHARE * wall {
        count -= 1;
    }
    Some(Layers { first, growth: fine_growth, count })
}
