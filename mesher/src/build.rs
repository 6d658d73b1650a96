//! The whole way from a drawing to a checked mesh. Convention: arcs are divided finer and finer until the mesh passes its check.

use crate::check::LEAST_RATIO;
use crate::drawing::{Drawing, Limits, OUTSIDE};
use crate::error::MeshError;
use crate::ids::{CurveId, NO_TRIANGLE, Point};
use crate::layers;
use crate::mesh::{Bend, Curve, Edge, Mesh, Shape};
use crate::noding::{CUSP, Graph, node};
use crate::note::{MeshNote, NoteReason};
use crate::plan::Plan;
use crate::refine::{Budget, Sizes, refine};
use crate::size_field::{Gaps, SizeField, sources, wanted};
use crate::smooth::smooth;
use crate::span::Kind;
use crate::triangulate::{LAST, NEXT, NONE, Triangulation};
use std::sync::OnceLock;

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
    let mut first_refusal = None;
    for turn_deg in TURNS_DEG {
        match attempt(drawing, &graph, limits, stop, f64::to_radians(turn_deg)) {
            Ok(mesh) => return Ok(mesh),
            Err(error @ (MeshError::TooClose { .. } | MeshError::Defective(_))) => {
                first_refusal.get_or_insert(error);
                if graph.stretches.iter().all(|s| s.span.kind == Kind::Line) {
                    break;
                }
            }
            Err(error) => return Err(error),
        }
    }
    Err(first_refusal.unwrap_or(MeshError::Stopped))
}

fn attempt(
    drawing: &Drawing,
    graph: &Graph,
    limits: &Limits,
    stop: &dyn Fn() -> bool,
    max_turn: f64,
) -> Result<Mesh, MeshError> {
    let sizes: Vec<f64> = graph.stretches.iter().map(|s| wanted(drawing, s, max_turn)).collect();
    let gaps = Gaps::new(graph);
    let rough = SizeField::new(sources(graph, &sizes, &gaps), drawing.gradation, drawing.domain_size);
    let mut strips = layers::build(drawing, graph, &rough, max_turn);
    let field = if strips.is_empty() {
        rough
    } else {
        let all = strips.sources(graph, &sizes, &gaps);
        SizeField::new(all, drawing.gradation, drawing.domain_size)
    };
    let notes = std::mem::take(&mut strips.notes);
    let plan = Plan::new(drawing, graph, strips, &field, max_turn);
    if stop() {
        return Err(MeshError::Stopped);
    }
    let smallest = drawing.smallest();
    if plan.edges.len() > limits.max_triangles {
        return Err(MeshError::TooManyTriangles { limit: limits.max_triangles, smallest_m: smallest });
    }
    let mut mesh = constrained(drawing, graph, &plan)?;
    let caps: Vec<f64> = std::iter::once(drawing.domain_size)
        .chain(drawing.regions.iter().map(|r| r.interior_size.min(drawing.domain_size)))
        .collect();
    let budget = Budget { max_triangles: limits.max_triangles, smallest, stop };
    refine(&mut mesh, Sizes { field: &field, caps: &caps }, &plan.tags, plan.nodes, &budget)?;
    smooth(&mut mesh, SMOOTHING_PASSES);
    let mut mesh = finish(drawing, graph, &plan, &mesh, notes);
    if max_turn <= f64::to_radians(FINEST_TURN_DEG) {
        straighten(drawing, None, &mut mesh);
    }
    if mesh.triangles.len() > limits.max_triangles {
        return Err(MeshError::TooManyTriangles { limit: limits.max_triangles, smallest_m: smallest });
    }
    mesh.check()?;
    Ok(mesh)
}

/// The constrained triangulation of a plan, with sides and strip cells set on its faces.
fn constrained(drawing: &Drawing, graph: &Graph, plan: &Plan) -> Result<Triangulation, MeshError> {
    let apart_m = graph.tolerance;
    let too_close = |at: Point| MeshError::TooClose { at, apart_m };
    let mut mesh = Triangulation::new(&plan.points).map_err(|i| too_close(plan.points[i as usize]))?;
    for &(a, b, tag) in &plan.edges {
        mesh.constrain(a, b, tag).map_err(|crossed| too_close(crossed.at))?;
    }
    label_sides(drawing, plan, &mut mesh).map_err(too_close)?;
    label_cells(plan, &mut mesh);
    Ok(mesh)
}

/// Gives every face the side that the stretches around its group agree on.
fn label_sides(drawing: &Drawing, plan: &Plan, mesh: &mut Triangulation) -> Result<(), Point> {
    let is_stretch = |tag: u32| tag != 0 && plan.tags[tag as usize - 1].ends.is_some();
    let (group, count) = mesh.groups(is_stretch);
    let mut side: Vec<Option<u32>> = vec![None; count as usize];
    for &(a, b, tag) in &plan.edges {
        let Some(sides) = plan.tags[tag as usize - 1].sides else { continue };
        for (from, to, says) in [(a, b, sides[0]), (b, a, sides[1])] {
            let Some(link) = mesh.find(from, to).filter(|&l| mesh.edge(l) == (from, to)) else { continue };
            let known = &mut side[group[(link >> 2) as usize] as usize];
            if known.is_some_and(|k| k != says) {
                return Err(mesh.point(a));
            }
            *known = Some(says);
        }
    }
    for (t, face) in mesh.faces.iter_mut().enumerate() {
        let known = side[group[t] as usize].unwrap_or_else(|| {
            let corner = |k: usize| mesh.points[face.v[k] as usize];
            let [a, b, c] = [corner(0), corner(1), corner(2)];
            drawing.side_at([(a[0] + b[0] + c[0]) / 3.0, (a[1] + b[1] + c[1]) / 3.0])
        });
        face.side = if known == OUTSIDE { NONE } else { known };
    }
    Ok(())
}

/// Marks the faces of every strip cell.
fn label_cells(plan: &Plan, mesh: &mut Triangulation) {
    if plan.cells.is_empty() {
        return;
    }
    let (group, count) = mesh.groups(|tag| tag != 0);
    let mut cell_of = vec![NONE; count as usize];
    let mut near = 0;
    for (i, cell) in plan.cells.iter().enumerate() {
        use crate::triangulate::Place::{AtVertex, Behind, Inside, OnEdge};
        near = match mesh.locate(cell.inside, near, false) {
            Inside(face) => face,
            OnEdge(link) => link >> 2,
            AtVertex(_) | Behind(_) => continue,
        };
        cell_of[group[near as usize] as usize] = i as u32;
    }
    for (t, face) in mesh.faces.iter_mut().enumerate() {
        face.cell = cell_of[group[t] as usize];
    }
}

/// Copies the faces inside the domain into a mesh.
fn finish(drawing: &Drawing, graph: &Graph, plan: &Plan, faces: &Triangulation, notes: Vec<MeshNote>) -> Mesh {
    let mut triangle_of = vec![NONE; faces.faces.len()];
    let mut vertex_of = vec![NONE; faces.points.len()];
    let mut mesh = Mesh {
        vertices: Vec::new(),
        triangles: Vec::new(),
        regions: Vec::new(),
        strip: Vec::new(),
        triangle_edges: Vec::new(),
        edges: Vec::new(),
        bends: Vec::new(),
        curves: Vec::new(),
        notes,
        domain_area: drawing.domain.area(),
        finder: OnceLock::new(),
    };
    for (t, face) in faces.faces.iter().enumerate().filter(|(_, f)| f.side != NONE) {
        triangle_of[t] = mesh.triangles.len() as u32;
        mesh.triangles.push(face.v.map(|v| {
            let number = &mut vertex_of[v as usize];
            if *number == NONE {
                *number = mesh.vertices.len() as u32;
                mesh.vertices.push(faces.points[v as usize]);
            }
            *number
        }));
        mesh.regions.push(drawing.id_of(face.side));
        mesh.strip.push(face.cell != NONE);
    }
    let curve_of = curves(graph, plan, &mut mesh);
    add_edges(plan, faces, &triangle_of, &curve_of, &mut mesh);
    let tips: Vec<u32> = graph.cusps(CUSP).into_iter().map(|v| vertex_of[v as usize]).collect();
    straighten(drawing, Some(&tips), &mut mesh);
    mesh
}

/// Where an arc leaves a node along another curve (a fillet that touches a plane, say) no curved element fits: the arc edges at
/// such `tips` are left straight, and noted. Without `tips`, so is every edge of a triangle that would fold.
fn straighten(drawing: &Drawing, tips: Option<&[u32]>, mesh: &mut Mesh) {
    let mut bad: Vec<usize> = (0..mesh.triangles.len()).filter(|&t| mesh.least_jacobian(t) <= LEAST_RATIO).collect();
    while let Some(t) = bad.pop() {
        if mesh.least_jacobian(t) > LEAST_RATIO {
            continue;
        }
        for edge in mesh.triangle_edges[t].map(|e| e as usize) {
            let Edge { vertices, curve, triangles } = mesh.edges[edge];
            let bent = !matches!(mesh.bends[edge], Bend::Straight);
            if !bent || tips.is_some_and(|tips| !vertices.iter().any(|v| tips.contains(v))) {
                continue;
            }
            mesh.bends[edge] = Bend::Straight;
            bad.extend(triangles.iter().filter(|&&t| t != NO_TRIANGLE).map(|&t| t as usize));
            if let Some(&(index, piece)) = curve.and_then(|c| mesh.curve(c).on_regions.first()) {
                let region = drawing.regions[index].id;
                mesh.notes.push(MeshNote { region, index, piece: Some(piece), reason: NoteReason::ArcStraightened });
            }
        }
    }
}

/// Fills in the curves; gives the curve of every tag that has one.
fn curves(graph: &Graph, plan: &Plan, mesh: &mut Mesh) -> Vec<Option<CurveId>> {
    plan.tags
        .iter()
        .enumerate()
        .map(|(i, tag)| {
            let shape = tag.circle.map_or(Shape::Line, |(centre, radius)| Shape::Arc { centre, radius });
            let curve = match graph.stretches.get(i) {
                Some(s) => Curve { shape, on_domain: s.on_domain, on_regions: s.on_regions.clone() },
                None if tag.circle.is_some() => Curve { shape, on_domain: None, on_regions: Vec::new() },
                None => return None,
            };
            mesh.curves.push(curve);
            Some(CurveId(mesh.curves.len() as u32 - 1))
        })
        .collect()
}

fn add_edges(plan: &Plan, faces: &Triangulation, triangle_of: &[u32], curve_of: &[Option<CurveId>], mesh: &mut Mesh) {
    for (t, face) in faces.faces.iter().enumerate() {
        let triangle = triangle_of[t];
        if triangle == NONE {
            continue;
        }
        let mut own = [0; 3];
        for (e, slot) in own.iter_mut().enumerate() {
            let i = LAST[e];
            let n = face.n[i];
            let other = if n == NONE { NONE } else { triangle_of[(n >> 2) as usize] };
            if other != NONE && other < triangle {
                let back = NEXT[(n & 3) as usize];
                *slot = mesh.triangle_edges[other as usize][back];
                continue;
            }
            *slot = mesh.edges.len() as u32;
            let (a, b) = (mesh.triangles[triangle as usize][e], mesh.triangles[triangle as usize][NEXT[e]]);
            let tag = face.tag[i];
            let second = if other == NONE { NO_TRIANGLE } else { other };
            let curve = if tag == 0 { None } else { curve_of[tag as usize - 1] };
            mesh.edges.push(Edge { vertices: [a.min(b), a.max(b)], triangles: [triangle, second], curve });
            mesh.bends.push(bend(plan, face.cell, tag));
        }
        mesh.triangle_edges.push(own);
    }
}

/// How an edge is bent: by its constraint, or if it is the diagonal of a strip cell by the pole of that cell.
fn bend(plan: &Plan, cell: u32, tag: u32) -> Bend {
    if tag == 0 {
        let pole = if cell == NONE { None } else { plan.cells[cell as usize].pole };
        return pole.map_or(Bend::Straight, Bend::Polar);
    }
    let tag = &plan.tags[tag as usize - 1];
    match (tag.circle, tag.pole) {
        (Some((centre, radius)), _) => Bend::Arc(centre, radius),
        (None, Some(pole)) => Bend::Polar(pole),
        (None, None) => Bend::Straight,
    }
}
