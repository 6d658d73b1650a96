//! From labelled faces to a mesh: numbering, edges, curves and how edges are bent. Convention: as in [`crate::Mesh`]; numbers in the
//! order of the faces.

use crate::check::LEAST_RATIO;
use crate::drawing::Drawing;
use crate::ids::{CurveId, NO_TRIANGLE};
use crate::merges::merges;
use crate::mesh::{Bend, Curve, Edge, Mesh, Shape};
use crate::noding::{CUSP, Graph};
use crate::note::{MeshNote, NoteReason};
use crate::plan::Plan;
use crate::triangulate::{LAST, NEXT, NONE, Triangulation};
use std::sync::OnceLock;

/// Copies the faces inside the domain into a mesh.
pub(crate) fn finish(
    drawing: &Drawing,
    graph: &Graph,
    plan: &Plan,
    faces: &Triangulation,
    notes: Vec<MeshNote>,
) -> Mesh {
    let mut triangle_of = vec![NONE; faces.faces.len()];
    let mut vertex_of = vec![NONE; faces.points.len()];
    let count = faces.faces.iter().filter(|f| f.side().is_some()).count();
    let mut mesh = Mesh {
        vertices: Vec::with_capacity(faces.points.len()),
        triangles: Vec::with_capacity(count),
        regions: Vec::with_capacity(count),
        strip: Vec::with_capacity(count),
        triangle_edges: Vec::with_capacity(count),
        reference: Vec::with_capacity(count),
        edges: Vec::with_capacity(faces.points.len() + count),
        bends: Vec::with_capacity(faces.points.len() + count),
        curves: Vec::new(),
        notes,
        merges: merges(drawing, graph),
        domain_area: drawing.domain.area(),
        finder: OnceLock::new(),
    };
    for (t, (face, side)) in faces.faces.iter().enumerate().filter_map(|(t, f)| Some((t, (f, f.side()?)))) {
        triangle_of[t] = mesh.triangles.len() as u32;
        mesh.triangles.push(face.v.map(|v| {
            let number = &mut vertex_of[v as usize];
            if *number == NONE {
                *number = mesh.vertices.len() as u32;
                mesh.vertices.push(faces.points[v as usize]);
            }
            *number
        }));
        mesh.regions.push(drawing.id_of(side));
        mesh.strip.push(!face.is_free());
    }
    let curve_of = curves(graph, plan, &mut mesh);
    add_edges(plan, faces, &triangle_of, &curve_of, &mut mesh);
    mesh.reference = mesh.longest_edges();
    let tips: Vec<u32> = graph.cusps(CUSP).into_iter().map(|v| vertex_of[v as usize]).collect();
    straighten(drawing, Some(&tips), &mut mesh);
    mesh
}

/// Where an arc leaves a node along another curve (a fillet that touches a plane, say) no curved element fits: the arc edges at
/// such `tips` are left straight, and noted. Without `tips`, so is every edge of a triangle that would fold.
pub(crate) fn straighten(drawing: &Drawing, tips: Option<&[u32]>, mesh: &mut Mesh) {
    let mut bad = mesh.bent_triangles();
    bad.retain(|&t| mesh.least_jacobian(t) <= LEAST_RATIO);
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
                let note = MeshNote { region, index, piece: Some(piece), reason: NoteReason::ArcStraightened };
                if !mesh.notes.contains(&note) {
                    mesh.notes.push(note);
                }
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
            mesh.bends.push(bend(plan, faces.cell(t as u32), tag));
        }
        mesh.triangle_edges.push(own);
    }
}

/// How an edge is bent: by its constraint, or if it is the diagonal of a strip cell by the pole of that cell.
fn bend(plan: &Plan, cell: Option<u32>, tag: u32) -> Bend {
    if tag == 0 {
        let pole = cell.and_then(|cell| plan.cells[cell as usize].pole);
        return pole.map_or(Bend::Straight, Bend::Polar);
    }
    let tag = &plan.tags[tag as usize - 1];
    match (tag.circle, tag.pole) {
        (Some((centre, radius)), _) => Bend::Arc(centre, radius),
        (None, Some(pole)) => Bend::Polar(pole),
        (None, None) => Bend::Straight,
    }
}
