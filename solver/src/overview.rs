//! What a model is, before it is solved: its mesh and its skin depths.

use std::sync::Arc;

use mesher::{Limits, Mesh, NodeSet};

use crate::clearance::{Neighbours, neighbours};
use crate::error::SolveError;
use crate::fem::space::Space;
use crate::layout::{Layout, layout, skin_depth_at};
use crate::mesh_report::MeshReport;
use crate::model::{Mirrors, Model};
use crate::results::{RegionName, Section, Warning};
use crate::warnings;

/// More triangles than this are refused.
const MAX_TRIANGLES: usize = 2_000_000;

/// A meshed model.
#[derive(Debug, Clone)]
pub struct Meshed {
    /// Triangles.
    pub mesh: Arc<Mesh>,
    /// Nodes of the elements.
    pub nodes: Arc<NodeSet>,
    /// How it was laid out.
    pub layout: Layout,
}

impl Meshed {
    /// Lays out and meshes a model.
    ///
    /// # Errors
    /// A model that makes no sense, a section the mesher refuses, or a stop on request.
    pub fn new(model: &Model, stop: &dyn Fn() -> bool) -> Result<Self, SolveError> {
        model.check()?;
        let layout = layout(model)?;
        let mesh = mesher::triangulate(&layout.drawing, &Limits { max_triangles: MAX_TRIANGLES }, stop)?;
        let nodes = Arc::new(mesh.nodes(model.mesh.order));
        Ok(Self { mesh: Arc::new(mesh), nodes, layout })
    }

    /// Volume of each part in the whole device (in the slice with two mirror planes), m^3.
    pub fn part_volumes_m3(&self, model: &Model) -> Vec<f64> {
        let space = Space::new(&self.mesh, &self.nodes, |_| true);
        let by_region = space.volume_by_region(self.layout.regions.len());
        let copies = if matches!(model.mirrors, Mirrors::One { .. }) { 2.0 } else { 1.0 };
        let mut out = vec![0.0; model.parts.len()];
        for (region, volume) in self.layout.regions.iter().zip(by_region) {
            if let RegionName::Part(p, _) = region {
                out[*p] += copies * volume;
            }
        }
        out
    }

    /// The section as results carry it.
    pub fn section(&self, model: &Model) -> Section {
        Section {
            mesh: Arc::clone(&self.mesh),
            nodes: Arc::clone(&self.nodes),
            regions: self.layout.regions.clone(),
            mirrors: model.mirrors,
            open_boundary: self.layout.open_boundary,
        }
    }
}

/// What `check` tells about a model.
#[derive(Debug, Clone)]
pub struct Overview {
    /// The meshed section.
    pub section: Section,
    /// Size and quality of the mesh.
    pub mesh: MeshReport,
    /// Nodes of the elements.
    pub nodes: usize,
    /// How far bodies stand apart, and where they touch.
    pub neighbours: Vec<Neighbours>,
    /// One a part.
    pub parts: Vec<PartOverview>,
    /// What can be said before the solve.
    pub warnings: Vec<Warning>,
}

/// What is known of a part before the solve.
#[derive(Debug, Clone, PartialEq)]
pub struct PartOverview {
    /// Its name.
    pub name: String,
    /// Skin depth at its start temperature, metres; infinite where it does not conduct.
    pub skin_depth_start_m: f64,
    /// Least skin depth over the heating, metres.
    pub least_skin_depth_m: f64,
    /// Mass in kilograms.
    pub mass_kg: f64,
}

/// Meshes a model and tells what it is.
///
/// # Errors
/// A section the mesher refuses, or a stop on request.
pub fn overview(model: &Model, stop: &dyn Fn() -> bool) -> Result<Overview, SolveError> {
    let meshed = Meshed::new(model, stop)?;
    let volumes = meshed.part_volumes_m3(model);
    let parts = model
        .parts
        .iter()
        .zip(meshed.layout.skin_depths_m.iter().zip(&volumes))
        .map(|(part, (&least, volume))| PartOverview {
            name: part.name.clone(),
            skin_depth_start_m: skin_depth_at(model, part, part.start_k),
            least_skin_depth_m: least,
            mass_kg: volume * part.material.density_kg_per_m3,
        })
        .collect();
    let section = meshed.section(model);
    Ok(Overview {
        mesh: MeshReport::of(&section),
        nodes: meshed.nodes.points.len(),
        neighbours: neighbours(model, &meshed),
        parts,
        warnings: warnings::before_solve(model, &meshed),
        section,
    })
}
