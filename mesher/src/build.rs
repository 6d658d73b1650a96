//! The whole way from a drawing to a checked mesh. Convention: arcs are divided finer and finer until the mesh passes its check.

use crate::assemble::{finish, straighten};
use crate::chords::untangle;
use crate::drawing::{Drawing, Limits, OUTSIDE};
use crate::error::MeshError;
use crate::facing::Facing;
use crate::ids::Point;
use crate::layers;
use crate::mesh::{Mesh, straight_area};
use crate::noding::{Graph, node};
use crate::note::{MeshNote, NoteReason};
use crate::plan::{Plan, Wishes};
use crate::refine::{Budget, Sizes, refine};
use crate::size_field::{Gaps, SizeField, sources, wanted};
use crate::smooth::smooth;
use crate::span::Kind;
use crate::triangulate::{NONE, Triangulation};

/// Largest turn of an edge along an arc, in degrees, at each attempt.
const TURNS_DEG: [f64; 3] = [30.0, 15.0, FINEST_TURN_DEG];
const FINEST_TURN_DEG: f64 = 7.5;
const SMOOTHING_PASSES: usize = 5;

/// Meshes a drawing. `stop` is asked now and then; if it returns true, meshing ends.
///
/// # Errors
/// If a size is out of range, the triangle budget runs out, lines are too close to tell apart, `stop` returned true, or the mesh
/// does not pass its check.
pub fn triangulate(drawing: &Drawing, limits: &Limits, stop: &dyn Fn() -> bool) -> Result<Mesh, MeshError> {
    drawing.check()?;
    let graph = node(drawing);
    match attempts(drawing, &graph, *limits, stop) {
        Err(refusal @ (MeshError::TooClose { .. } | MeshError::Defective(_))) => {
            without_strips(drawing, &graph, *limits, stop).ok_or(refusal)
        }
        other => other,
    }
}

/// Tries finer and finer arcs until a mesh passes its check; the first refusal if none does.
fn attempts(drawing: &Drawing, graph: &Graph, limits: Limits, stop: &dyn Fn() -> bool) -> Result<Mesh, MeshError> {
    let straight = graph.stretches.iter().all(|s| s.span.kind == Kind::Line);
    let finer = if straight { &[] } else { &TURNS_DEG[1..] };
    let mut result = attempt(drawing, graph, limits, stop, TURNS_DEG[0].to_radians());
    for turn_deg in finer {
        if !matches!(result, Err(MeshError::TooClose { .. } | MeshError::Defective(_))) {
            break;
        }
        let next = attempt(drawing, graph, limits, stop, turn_deg.to_radians());
        if next.is_ok() || matches!(next, Err(MeshError::Stopped)) {
            result = next;
        }
    }
    result
}

/// The last resort where strips make the mesh impossible: small triangles along the surfaces instead, and a note for each region.
fn without_strips(drawing: &Drawing, graph: &Graph, limits: Limits, stop: &dyn Fn() -> bool) -> Option<Mesh> {
    let mut bare = drawing.clone();
    let mut notes = Vec::new();
    for (index, region) in bare.regions.iter_mut().enumerate() {
        let Some(layers) = region.layers.take() else {
            continue;
        };
        region.surface_size = region.surface_size.min(layers.first);
        let reason = NoteReason::NoStrip { size: layers.first };
        notes.push(MeshNote { region: region.id, index, piece: None, reason });
    }
    if notes.is_empty() {
        return None;
    }
    let mut mesh = attempts(&bare, graph, limits, stop).ok()?;
    mesh.notes.extend(notes);
    Some(mesh)
}

fn attempt(
    drawing: &Drawing,
    graph: &Graph,
    limits: Limits,
    stop: &dyn Fn() -> bool,
    max_turn: f64,
) -> Result<Mesh, MeshError> {
    let smallest = drawing.smallest();
    let within = |triangles: usize| {
        let limit = limits.max_triangles;
        if triangles <= limit { Ok(()) } else { Err(MeshError::TooManyTriangles { limit, smallest_m: smallest }) }
    };
    let sizes: Vec<f64> = graph.stretches.iter().map(|s| wanted(drawing, s, max_turn)).collect();
    // The edges of the outlines alone, before any of them is made.
    within(graph.stretches.iter().zip(&sizes).map(|(s, size)| s.span.length() / size).sum::<f64>() as usize)?;
    let enough = |edges: usize| edges > limits.max_triangles || stop();
    let (plan, field, notes) = plan(drawing, graph, &sizes, max_turn, &enough);
    if stop() {
        return Err(MeshError::Stopped);
    }
    within(plan.edges.len())?;
    let mut faces = constrained(drawing, graph, &plan)?;
    let caps: Vec<f64> = std::iter::once(drawing.domain_size)
        .chain(drawing.regions.iter().map(|r| r.interior_size.min(drawing.domain_size)))
        .collect();
    let sizes = Sizes { field: &field, caps: &caps };
    let budget = Budget { max_triangles: limits.max_triangles, smallest, stop };
    refine(&mut faces, sizes, &plan.tags, plan.nodes, &budget)?;
    smooth(&mut faces, SMOOTHING_PASSES);
    let mut mesh = finish(drawing, graph, &plan, &faces, notes);
    within(mesh.triangles.len())?;
    if max_turn <= f64::to_radians(FINEST_TURN_DEG) {
        straighten(drawing, None, &mut mesh);
    }
    mesh.check()?;
    Ok(mesh)
}

/// The size field, the strips, and what is to be triangulated; `enough` ends it early.
fn plan(
    drawing: &Drawing,
    graph: &Graph,
    sizes: &[f64],
    max_turn: f64,
    enough: &dyn Fn(usize) -> bool,
) -> (Plan, SizeField, Vec<MeshNote>) {
    let gaps = Gaps::new(graph);
    let field = |sources| SizeField::new(sources, drawing.gradation, drawing.domain_size);
    let rough = field(sources(graph, sizes, &gaps));
    let mut facing = Facing::new(graph, &gaps);
    let mut strips = layers::build(drawing, graph, &rough, max_turn, &mut facing, enough);
    if strips.notes.iter().any(|n| matches!(n.reason, NoteReason::NoStrip { .. })) {
        // Where no strip fits, elements are small instead, and the strips beside them are divided for that.
        let rough = field(strips.sources(graph, sizes, &gaps));
        facing = Facing::new(graph, &gaps);
        strips = layers::build(drawing, graph, &rough, max_turn, &mut facing, enough);
    }
    let field = if strips.is_empty() { rough } else { field(strips.sources(graph, sizes, &gaps)) };
    let notes = std::mem::take(&mut strips.notes);
    let mut plan = Plan::new(&Wishes { drawing, graph, field: &field, max_turn }, strips, facing);
    untangle(&mut plan, graph.tolerance, enough);
    (plan, field, notes)
}

/// The constrained triangulation of a plan, with sides and strip cells set on its faces.
fn constrained(drawing: &Drawing, graph: &Graph, plan: &Plan) -> Result<Triangulation, MeshError> {
    let apart_m = 4.0 * graph.tolerance;
    let too_close = |at: Point| MeshError::TooClose { at, apart_m };
    let mut mesh = Triangulation::new(&plan.points).map_err(|i| too_close(plan.points[i as usize]))?;
    for &(a, b, tag) in &plan.edges {
        mesh.constrain(a, b, tag).map_err(|crossed| too_close(crossed.at))?;
    }
    mesh.make_delaunay();
    label_sides(drawing, plan, &mut mesh);
    label_cells(plan, &mut mesh);
    Ok(mesh)
}

/// Gives every face the side that the stretches around its group agree on, or else the side on which its group's largest face lies.
fn label_sides(drawing: &Drawing, plan: &Plan, mesh: &mut Triangulation) {
    let is_stretch = |tag: u32| tag != 0 && plan.tags[tag as usize - 1].ends.is_some();
    let (group, count) = mesh.groups(is_stretch);
    let mut says: Vec<Vec<u32>> = vec![Vec::new(); count as usize];
    for &(a, b, tag) in &plan.edges {
        let Some(sides) = plan.tags[tag as usize - 1].sides else {
            continue;
        };
        for (from, to, side) in [(a, b, sides[0]), (b, a, sides[1])] {
            if let Some(link) = mesh.find(from, to).filter(|&l| mesh.edge(l) == (from, to)) {
                let said = &mut says[group[(link >> 2) as usize] as usize];
                if !said.contains(&side) {
                    said.push(side);
                }
            }
        }
    }
    let mut largest = vec![(-1.0, 0); count as usize];
    for (t, &g) in group.iter().enumerate() {
        let area = straight_area(mesh.corners(t as u32));
        if area > largest[g as usize].0 {
            largest[g as usize] = (area, t as u32);
        }
    }
    let side_of = |said: &[u32], face: u32| {
        if let [one] = said {
            return *one;
        }
        let [a, b, c] = mesh.corners(face);
        drawing.side_at([(a[0] + b[0] + c[0]) / 3.0, (a[1] + b[1] + c[1]) / 3.0])
    };
    let sides: Vec<u32> = says.iter().zip(&largest).map(|(said, &(_, face))| side_of(said, face)).collect();
    for (face, &g) in mesh.faces.iter_mut().zip(&group) {
        let side = sides[g as usize];
        face.set_side((side != OUTSIDE).then_some(side));
    }
}

/// Marks the faces of every strip cell.
fn label_cells(plan: &Plan, mesh: &mut Triangulation) {
    if plan.cells.is_empty() {
        return;
    }
    let (group, count) = mesh.groups(|tag| tag != 0);
    let mut cell_of = vec![NONE; count as usize];
    for (i, cell) in plan.cells.iter().enumerate() {
        let [a, b, c, d] = cell.corners;
        // A side on an arc may have been divided; the others are edges.
        let mut sides = [(a, b), (b, c), (c, d), (d, a)].into_iter().filter(|s| s.0 != s.1);
        let left = |(from, to)| mesh.find(from, to).filter(|&link| mesh.edge(link) == (from, to));
        if let Some(link) = sides.find_map(left) {
            cell_of[group[(link >> 2) as usize] as usize] = i as u32;
        }
    }
    mesh.set_cells(group.into_iter().map(|g| cell_of[g as usize]).collect());
}
