//! A whole field solve on a given mesh, timed and written out for others to repeat. Convention: SI units; the drive is one ampere (peak)
//! in every turn; losses in watts.

use std::fs;
use std::path::Path;

use serde_json::{Value, json};
use solver::model::Model;
use solver::overview::Meshed;
use solver::results::RegionName;

use crate::dump::put;
use crate::solving::timed;
use crate::systems::{FieldCase, SystemError, field_model, field_operator};

/// Fineness at which second-order elements have about 100 000 unknowns.
const FINENESS: f64 = 1.72;
const ORDER: usize = 2;

/// A field and what it was solved for.
#[derive(Debug)]
pub struct Whole {
    /// Number of unknowns.
    pub unknowns: usize,
    /// Componentwise backward error of the solve.
    pub backward_error: f64,
    /// Losses of every region of the mesh, in watts.
    pub losses_w: Vec<f64>,
}

/// From a mesh to the losses: space, pattern, plan, assembly, factor, checked solve, losses of every region.
///
/// # Errors
/// A system that is refused.
pub fn solve(model: &Model, meshed: &Meshed) -> Result<Whole, SystemError> {
    let (mut operator, properties) = field_operator(model, meshed)?;
    let field = operator.solve(&properties)?;
    let losses_w = field.loss_by_region(&operator, meshed.layout.regions.len());
    Ok(Whole { unknowns: operator.unknowns(), backward_error: field.backward_error, losses_w })
}

/// Meshes, solves, and tells how long each took and what the losses are.
///
/// # Errors
/// A device or system that is refused.
pub fn run() -> Result<Value, SystemError> {
    let model = field_model(ORDER, FINENESS)?;
    let (meshed, mesh_s) = timed(|| Meshed::new(&model, &|| false));
    let meshed = meshed?;
    let (whole, seconds) = timed(|| solve(&model, &meshed));
    let whole = whole?;
    let of = |wanted: fn(&RegionName) -> bool| -> f64 {
        let own = whole.losses_w.iter().zip(&meshed.layout.regions).filter(|(_, name)| wanted(name));
        own.map(|(loss, _)| loss).sum()
    };
    Ok(json!({
        "unknowns": whole.unknowns,
        "mesh_s": mesh_s,
        "seconds": seconds,
        "bar_w": of(|name| matches!(name, RegionName::Part(..))),
        "coil_w": of(|name| matches!(name, RegionName::Turn(..))),
        "backward_error": whole.backward_error,
    }))
}

/// Writes mesh, regions and materials into a folder: `points`, `elements` (six nodes a triangle), `regions` (one a triangle), and
/// `device.json`.
///
/// # Errors
/// A device that is refused, or a file that cannot be written.
pub fn write(folder: &Path) -> Result<(), SystemError> {
    let case = FieldCase::new(field_model(ORDER, FINENESS)?)?;
    fs::create_dir_all(folder)?;
    let Meshed { mesh, nodes, layout } = &case.meshed;
    put(nodes.points.iter().flatten().copied(), &folder.join("points"))?;
    put(nodes.elements.iter().copied(), &folder.join("elements"))?;
    put(mesh.regions().iter().map(|r| r.0), &folder.join("regions"))?;
    let kinds: Vec<&str> = (layout.regions.iter())
        .map(|name| match name {
            RegionName::Air => "air",
            RegionName::Part(..) => "bar",
            RegionName::Turn(..) => "turn",
        })
        .collect();
    let conductivity = |kind: &str| {
        let first = kinds.iter().position(|k| *k == kind);
        let element = (0..mesh.triangles().len()).find(|&t| Some(mesh.regions()[t].0 as usize) == first);
        element.map_or(0.0, |e| case.properties.sigma(e)[0])
    };
    let device = json!({
        "kinds": kinds,
        "bar_s_per_m": conductivity("bar"),
        "turn_s_per_m": conductivity("turn"),
        "omega_rad_per_s": case.operator.omega(),
        "open_boundary_m": layout.open_boundary.map(|(radius, z)| [radius, z]),
    });
    Ok(fs::write(folder.join("device.json"), device.to_string())?)
}
