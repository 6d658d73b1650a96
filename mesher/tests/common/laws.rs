//! Laws that every mesh of every drawing obeys, each told in words where it is broken. Convention: metres; `extent` is the diagonal of the
//! domain's box; two points closer than 2e-9 of it may have been merged.

use super::AIR;
use mesher::{Drawing, Mesh, MeshNote, NO_TRIANGLE, NoteReason, Outline, Piece, Point, Shape};
use std::f64::consts::TAU;

/// What two points may be moved by to be one, over the extent.
const MERGED: f64 = 2e-9;
/// Edges from a gap, a small angle or a short stretch beyond which angles are bounded.
const AWAY: usize = 3;
/// The same for strips, whose edges are never divided.
const AWAY_FROM_STRIPS: usize = 1;
/// Drawing angles under this one, in degrees, are small.
const SMALL_DEG: f64 = 60.0;
/// A gap under this share of the size asked for is narrow.
const NARROW: f64 = 0.3;
/// Least angle away from strips, gaps, small angles and short stretches, in degrees: of any mesh, and of nearly all.
const LEAST_DEG: f64 = 12.0;
pub(crate) const GOOD_DEG: f64 = 25.0;

type Broken = Result<(), String>;

/// All laws.
pub(crate) fn obeys(drawing: &Drawing, mesh: &Mesh) -> Broken {
    mesh.check().map_err(|defect| defect.to_string())?;
    euler(mesh)?;
    areas(drawing, mesh)?;
    outlines(drawing, mesh)?;
    nodes_on_arcs(mesh, extent(drawing))?;
    delaunay(mesh)?;
    curved_maps(mesh)?;
    layers(drawing, mesh)?;
    strips_or_notes(drawing, mesh)?;
    let (least, at) = least_angle_away(drawing, mesh);
    if least >= LEAST_DEG {
        Ok(())
    } else {
        Err(format!("an angle of {least:.2} degrees at {at:?}, away from everything"))
    }
}

pub(crate) fn extent(drawing: &Drawing) -> f64 {
    let (lo, hi) = drawing.domain.bounds();
    distance(lo, hi)
}

pub(crate) fn distance(a: Point, b: Point) -> f64 {
    (a[0] - b[0]).hypot(a[1] - b[1])
}

fn euler(mesh: &Mesh) -> Broken {
    let (v, e, t) = (mesh.vertices().len(), mesh.edges().len(), mesh.triangles().len());
    if v + t == e + 1 { Ok(()) } else { Err(format!("Euler: {v} vertices, {e} edges, {t} triangles")) }
}

fn straightened(mesh: &Mesh) -> bool {
    mesh.notes().iter().any(|n| n.reason == NoteReason::ArcStraightened)
}

/// The areas add up to the domain's, and a region that nothing overlaps or clips has the area of its outline.
fn areas(drawing: &Drawing, mesh: &Mesh) -> Broken {
    if straightened(mesh) {
        return Ok(());
    }
    let mut ids: Vec<_> = mesh.regions().to_vec();
    ids.sort();
    ids.dedup();
    let covered: f64 = ids.iter().map(|&id| mesh.region_area(id)).sum();
    let whole = drawing.domain.area();
    if (covered - whole).abs() > 1e-12 * whole {
        return Err(format!("the regions cover {covered:e} m2 of {whole:e} m2"));
    }
    for k in (0..drawing.regions.len()).filter(|&k| untouched(drawing, k)) {
        let region = &drawing.regions[k];
        let (found, wanted) = (mesh.region_area(region.id), region.outline.area());
        let moved = if merged(drawing) { MERGED * extent(drawing) * region.outline.perimeter() } else { 0.0 };
        if (found - wanted).abs() > 1e-12 * wanted.max(1e-3 * whole) + moved {
            return Err(format!("region {k} covers {found:e} m2, its outline {wanted:e} m2"));
        }
    }
    Ok(())
}

/// Whether some outlines run so close to one another that points of them may have been merged.
fn merged(drawing: &Drawing) -> bool {
    let near = 4.0 * MERGED * extent(drawing);
    let all: Vec<&Outline> =
        std::iter::once(&drawing.domain).chain(drawing.regions.iter().map(|r| &r.outline)).collect();
    all.iter().enumerate().any(|(i, a)| all.iter().enumerate().any(|(j, b)| i != j && touches(a, b, near)))
}

fn touches(a: &Outline, b: &Outline, near: f64) -> bool {
    let corner = |i: usize| a.point(i, 0.0).unwrap_or_default();
    (0..a.len()).any(|i| b.distance(corner(i)) < near) || a.overlaps(b)
}

/// Whether a region is inside the domain and no other region with an area in common with it is painted over it or shares its identity.
fn untouched(drawing: &Drawing, k: usize) -> bool {
    let region = &drawing.regions[k];
    // Well inside, so that no arc reaches out between two points looked at.
    let far = 1e-3 * extent(drawing);
    let well = |p: Point| drawing.domain.contains(p) && drawing.domain.distance(p) > far;
    let inside = |t: f64| (0..region.outline.len()).all(|i| region.outline.point(i, t).is_some_and(well));
    let alone = |(j, other): (usize, &mesher::Region)| {
        j == k || other.id != region.id && (j < k || !region.outline.overlaps(&other.outline))
    };
    region.id != AIR && drawing.regions.iter().enumerate().all(alone) && (0..100).all(|i| inside(f64::from(i) / 100.0))
}

/// Parameter of the point of a piece nearest to `p`, in 0..1 in proportion to length.
pub(crate) fn project(from: Point, piece: &Piece, p: Point) -> f64 {
    match *piece {
        Piece::Line { to } => {
            let d = [to[0] - from[0], to[1] - from[1]];
            ((d[0] * (p[0] - from[0]) + d[1] * (p[1] - from[1])) / (d[0] * d[0] + d[1] * d[1])).clamp(0.0, 1.0)
        }
        Piece::Arc { to, centre, counter_clockwise } => {
            let angle = |q: Point| (q[1] - centre[1]).atan2(q[0] - centre[0]);
            let turn = |q: Point| {
                let turn = angle(q) - angle(from);
                (if counter_clockwise { turn } else { -turn }).rem_euclid(TAU)
            };
            let whole = turn(to);
            let t = turn(p);
            if t <= whole { t / whole } else { f64::from(t - whole < TAU - t) }
        }
    }
}

/// Every visible point of every outline is on an edge that names its piece.
fn outlines(drawing: &Drawing, mesh: &Mesh) -> Broken {
    let mut covers: Vec<Vec<Vec<[f64; 2]>>> =
        drawing.regions.iter().map(|r| vec![Vec::new(); r.outline.len()]).collect();
    let pieces: Vec<(Point, Vec<Piece>)> =
        drawing.regions.iter().map(|r| (r.outline.start(), r.outline.pieces())).collect();
    for edge in mesh.edges() {
        for &(k, i) in edge.curve.iter().flat_map(|&c| &mesh.curve(c).on_regions) {
            let (start, list) = &pieces[k];
            let from = if i == 0 { *start } else { list[i - 1].to() };
            let mut ends = edge.vertices.map(|v| project(from, &list[i], mesh.vertices()[v as usize]));
            ends.sort_by(f64::total_cmp);
            covers[k][i].push(ends);
        }
    }
    for (k, region) in drawing.regions.iter().enumerate() {
        for (i, cover) in covers[k].iter().enumerate() {
            for t in (0..16).map(|s| (f64::from(s) + 0.437) / 16.0) {
                let held = cover.iter().any(|c| c[0] - 1e-7 <= t && t <= c[1] + 1e-7);
                if !held && visible(drawing, k, region.outline.point(i, t).unwrap_or_default()) {
                    return Err(format!("piece {i} of region {k} is not in the mesh at parameter {t}"));
                }
            }
        }
    }
    Ok(())
}

/// Whether a point of the outline of region `k` surely separates two sides of the section.
fn visible(drawing: &Drawing, k: usize, p: Point) -> bool {
    let reach = 1e-7 * extent(drawing);
    let top = |p: Point| drawing.regions.iter().rposition(|r| r.outline.contains(p));
    let others = std::iter::once(&drawing.domain)
        .chain(drawing.regions.iter().enumerate().filter(|(j, _)| *j != k).map(|(_, r)| &r.outline));
    let lonely = others.map(|o| o.distance(p)).fold(f64::INFINITY, f64::min) > 2.0 * reach;
    lonely && drawing.domain.contains(p) && top(p).is_none_or(|j| j <= k)
}

/// The walk along the outline of a region on which nothing lies: each piece is a chain of edges from its start to its end.
pub(crate) fn walked(drawing: &Drawing, mesh: &Mesh, k: usize) -> Broken {
    let outline = &drawing.regions[k].outline;
    for i in 0..outline.len() {
        let mut open: Vec<[u32; 2]> = mesh
            .edges()
            .iter()
            .filter(|e| e.curve.is_some_and(|c| mesh.curve(c).on_regions.contains(&(k, i))))
            .map(|e| e.vertices)
            .collect();
        let ends = [0.0, 1.0].map(|t| outline.point(i, t).unwrap_or_default());
        let at = |p: Point| mesh.vertices().iter().position(|v| distance(*v, p) <= 1e-12 * extent(drawing));
        let (Some(mut here), Some(end)) = (at(ends[0]), at(ends[1])) else {
            return Err(format!("piece {i} of region {k} lacks an end"));
        };
        while let Some(next) = open.iter().position(|e| e.contains(&(here as u32))) {
            let [a, b] = open.swap_remove(next);
            here = if a as usize == here { b } else { a } as usize;
        }
        if here != end || !open.is_empty() {
            return Err(format!("piece {i} of region {k} is no chain of edges: {} left over", open.len()));
        }
    }
    Ok(())
}

/// Every node of every edge on an arc lies on its circle, up to merging at the nodes of the drawing.
fn nodes_on_arcs(mesh: &Mesh, extent: f64) -> Broken {
    let notes = straightened(mesh);
    for order in [1, 2, 3] {
        let nodes = mesh.nodes(order);
        for (e, edge) in mesh.edges().iter().enumerate() {
            // Rings inside strips are not of the drawing; where one is left straight nothing of the drawing is lost.
            let drawn = edge.curve.map(|c| mesh.curve(c)).filter(|c| c.on_domain.is_some() || !c.on_regions.is_empty());
            let Some(Shape::Arc { centre, radius }) = drawn.map(|c| c.shape) else {
                continue;
            };
            let first = nodes.vertex_count + e * (order - 1);
            for p in &nodes.points[first..first + order - 1] {
                let off = (distance(*p, centre) - radius).abs();
                if off > 1e-12 * extent && !notes {
                    return Err(format!("a node of order {order} is {off:e} m off its circle of radius {radius} m"));
                }
            }
            for v in edge.vertices {
                let off = (distance(mesh.vertices()[v as usize], centre) - radius).abs();
                if off > 4.0 * MERGED * extent {
                    return Err(format!("a vertex is {off:e} m off its circle of radius {radius} m"));
                }
            }
        }
    }
    Ok(())
}

/// Lagrange polynomial that is 1 at `n / order` and 0 at the places before it, and its derivative.
fn lagrange(order: usize, n: usize, l: f64) -> (f64, f64) {
    (0..n).fold((1.0, 0.0), |(value, slope), s| {
        let (factor, by) = ((order as f64 * l - s as f64) / (s as f64 + 1.0), order as f64 / (s as f64 + 1.0));
        (value * factor, slope * factor + value * by)
    })
}

/// Barycentric multi-indices of the nodes of an element, in the order of the mesh's node sets.
fn indices(order: usize) -> Vec<[usize; 3]> {
    let mut all = vec![[order, 0, 0], [0, order, 0], [0, 0, order]];
    for e in 0..3 {
        for m in 1..order {
            let mut index = [0; 3];
            (index[e], index[(e + 1) % 3]) = (order - m, m);
            all.push(index);
        }
    }
    if order == 3 {
        all.push([1, 1, 1]);
    }
    all
}

/// Derivatives of the basis at a place with respect to the second and third barycentric coordinate, the first falling as either grows.
fn slopes(order: usize, l: [f64; 3]) -> Vec<[f64; 2]> {
    let slope = |index: [usize; 3]| {
        let of = [0, 1, 2].map(|c| lagrange(order, index[c], l[c]));
        let by = |c: usize| of[c].1 * of[(c + 1) % 3].0 * of[(c + 2) % 3].0;
        [by(1) - by(0), by(2) - by(0)]
    };
    indices(order).into_iter().map(slope).collect()
}

/// Jacobian determinant of the map through an element's nodes.
fn jacobian(nodes: &[Point], slopes: &[[f64; 2]]) -> f64 {
    let entry = |k: usize, c: usize| nodes.iter().zip(slopes).map(|(p, s)| p[k] * s[c]).sum::<f64>();
    entry(0, 0) * entry(1, 1) - entry(1, 0) * entry(0, 1)
}

/// The quadratic and cubic maps of all elements keep their orientation. Source of the basis: P. G. Ciarlet, "The finite element method for
/// elliptic problems", section 2.2.
fn curved_maps(mesh: &Mesh) -> Broken {
    for order in [2, 3] {
        let places: Vec<Vec<[f64; 2]>> = (0..=6)
            .flat_map(|i| (0..=6 - i).map(move |j| [i, j, 6 - i - j].map(|n| f64::from(n) / 6.0)))
            .map(|l| slopes(order, l))
            .collect();
        let set = mesh.nodes(order);
        let per = (order + 1) * (order + 2) / 2;
        for (t, element) in set.elements.chunks(per).enumerate() {
            let nodes: Vec<Point> = element.iter().map(|&n| set.points[n as usize]).collect();
            let [a, b, c] = [nodes[0], nodes[1], nodes[2]];
            let whole = (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0]);
            // In a triangle far longer than it is high, or about as high as coordinates are rounded, rounding decides.
            let (long, far) = (distance(a, b) + distance(b, c), distance(a, [0.0; 2]));
            if whole < 1e-10 * long * long || whole < 1e-13 * far * long {
                continue;
            }
            let least = places.iter().map(|s| jacobian(&nodes, s)).fold(f64::INFINITY, f64::min);
            if least <= 0.0 {
                return Err(format!(
                    "the map of order {order} of triangle {t} at {a:?} turns over: {:.2e}",
                    least / whole
                ));
            }
        }
    }
    Ok(())
}

/// Depths of the levels of a strip as asked for, 0 first.
fn depths(layers: &mesher::Layers) -> Vec<f64> {
    let thickness = (0..layers.count).map(|k| layers.first * layers.growth.powi(k as i32));
    let mut depth = 0.0;
    std::iter::once(0.0)
        .chain(thickness.map(|t| {
            depth += t;
            depth
        }))
        .collect()
}

/// Every strip vertex of a region on which nothing lies stands at the depth of a level below its outline; no strip below a fillet is
/// deeper than 0.7 of its radius; layers beyond those asked for grow by 1.6 at most.
fn layers(drawing: &Drawing, mesh: &Mesh) -> Broken {
    for k in (0..drawing.regions.len()).filter(|&k| untouched(drawing, k) && !merged(drawing)) {
        let region = &drawing.regions[k];
        if let Some(layers) = &region.layers {
            layers_below(mesh, region.id, &[&region.outline], layers, extent(drawing))?;
        }
    }
    Ok(())
}

/// As [`layers`] for one region bounded by the given outlines.
pub(crate) fn layers_below(
    mesh: &Mesh,
    id: mesher::RegionId,
    outlines: &[&Outline],
    layers: &mesher::Layers,
    extent: f64,
) -> Broken {
    let rounding = 1e-12 * extent + 1e-9 * layers.first;
    let mut found: Vec<(f64, Point)> = Vec::new();
    for (t, triangle) in mesh.triangles().iter().enumerate() {
        if mesh.strip_triangles()[t] && mesh.regions()[t] == id {
            for p in triangle.map(|v| mesh.vertices()[v as usize]) {
                let depth = outlines.iter().map(|o| o.distance(p)).fold(f64::INFINITY, f64::min);
                found.push((depth, p));
            }
        }
    }
    found.sort_by(|a, b| a.0.total_cmp(&b.0));
    found.dedup_by(|next, kept| next.0 - kept.0 < 2.0 * rounding);
    for (k, (depth, p)) in found.iter().enumerate() {
        let wanted = depths(layers);
        if let Some(wanted) = wanted.get(k) {
            if (depth - wanted).abs() > 4.0 * rounding {
                return Err(format!("level {k} at {p:?} is {depth:e} m deep, wanted {wanted:e} m"));
            }
        } else if k >= 2 {
            let growth = (depth - found[k - 1].0) / (found[k - 1].0 - found[k - 2].0);
            if growth > layers.growth.max(1.6) + 1e-6 {
                return Err(format!("level {k} at {p:?} grows by {growth}"));
            }
        }
    }
    Ok(())
}

/// No free edge has a vertex opposite to it inside the circle of the other side.
fn delaunay(mesh: &Mesh) -> Broken {
    let coord = |v: u32| robust::Coord { x: mesh.vertices()[v as usize][0], y: mesh.vertices()[v as usize][1] };
    let mut bad = 0;
    let mut worst = (0.0, 0);
    for (e, edge) in mesh.edges().iter().enumerate().filter(|(_, e)| e.curve.is_none()) {
        let [s, t] = edge.triangles.map(|t| t as usize);
        if mesh.strip_triangles()[s] || mesh.strip_triangles()[t] {
            continue;
        }
        let apex = |t: usize| mesh.triangles()[t].into_iter().find(|v| !edge.vertices.contains(v));
        let (Some(p), Some(q)) = (apex(s), apex(t)) else {
            return Err(format!("edge {e} is not part of its triangles"));
        };
        let [a, b, c] = mesh.triangles()[s].map(coord);
        if robust::incircle(a, b, c, coord(q)) > 0.0 {
            bad += 1;
            let angle = |p: u32| {
                let [p, a, b] = [p, edge.vertices[0], edge.vertices[1]].map(|v| mesh.vertices()[v as usize]);
                let (u, w) = ([a[0] - p[0], a[1] - p[1]], [b[0] - p[0], b[1] - p[1]]);
                (u[0] * w[1] - u[1] * w[0]).abs().atan2(u[0] * w[0] + u[1] * w[1])
            };
            let excess = (angle(p) + angle(q)).to_degrees() - 180.0;
            if excess > worst.0 {
                worst = (excess, e);
            }
        }
    }
    if worst.0 > 1e-6 {
        Err(format!(
            "{bad} edges are not Delaunay, edge {} at {:?} by {:.1e} degrees",
            worst.1,
            mesh.vertices()[mesh.edges()[worst.1].vertices[0] as usize],
            worst.0
        ))
    } else {
        Ok(())
    }
}

/// A surface that asks for a strip and has none on some edge is named in a note, unless the edge is within a few first layers of a corner.
fn strips_or_notes(drawing: &Drawing, mesh: &Mesh) -> Broken {
    let corners = corners(mesh);
    for edge in mesh.edges().iter().filter(|e| e.triangles[1] != NO_TRIANGLE) {
        let regions = edge.triangles.map(|t| mesh.regions()[t as usize]);
        if edge.curve.is_none() || regions[0] == regions[1] {
            continue;
        }
        for (side, &id) in regions.iter().enumerate() {
            let asked = drawing.regions.iter().filter(|r| r.id == id).find_map(|r| r.layers);
            let bare = !mesh.strip_triangles()[edge.triangles[side] as usize];
            let says = |n: &MeshNote| n.region == id && matches!(n.reason, NoteReason::NoStrip { .. });
            let (Some(layers), true, false) = (asked, bare, mesh.notes().iter().any(says)) else {
                continue;
            };
            let ends = edge.vertices.map(|v| mesh.vertices()[v as usize]);
            let about = |corner: &Point| ends.iter().all(|p| distance(*p, *corner) < 4.6 * layers.first);
            if !corners.iter().any(about) {
                return Err(format!("region {} has no strip at {:?} and no note says so", id.0, ends[0]));
            }
        }
    }
    Ok(())
}

/// Vertices at which different curves of the drawing end.
fn corners(mesh: &Mesh) -> Vec<Point> {
    let mut of: Vec<Option<mesher::CurveId>> = vec![None; mesh.vertices().len()];
    let mut corner = vec![false; of.len()];
    for edge in mesh.edges() {
        let drawn = edge.curve.filter(|&c| mesh.curve(c).on_domain.is_some() || !mesh.curve(c).on_regions.is_empty());
        for v in edge.vertices.map(|v| v as usize).into_iter().filter(|_| drawn.is_some()) {
            corner[v] |= of[v].is_some_and(|known| Some(known) != drawn);
            of[v] = drawn;
        }
    }
    corner.iter().zip(mesh.vertices()).filter(|(c, _)| **c).map(|(_, p)| *p).collect()
}

/// Smallest angle of the triangles none of whose vertices is within [`AWAY`] edges of a gap, a small angle or a short stretch, or within
/// [`AWAY_FROM_STRIPS`] edges of a strip, in degrees; and where it is. Constraints are the curves and the inner ends of strips. A gap is where a free edge joins two
/// of them and is shorter than a constraint it starts from, or than [`NARROW`] times the size asked for; a short stretch is a constraint
/// under half its neighbour.
pub(crate) fn least_angle_away(drawing: &Drawing, mesh: &Mesh) -> (f64, Point) {
    let near = spread(mesh, troubled(drawing, mesh), AWAY);
    let mut strip = vec![false; near.len()];
    for (triangle, _) in mesh.triangles().iter().zip(mesh.strip_triangles()).filter(|(_, s)| **s) {
        for &v in triangle {
            strip[v as usize] = true;
        }
    }
    let strip = spread(mesh, strip, AWAY_FROM_STRIPS);
    let mut least = (180.0, [0.0; 2]);
    for (t, triangle) in mesh.triangles().iter().enumerate() {
        if mesh.strip_triangles()[t] || triangle.iter().any(|&v| near[v as usize] || strip[v as usize]) {
            continue;
        }
        let p = mesh.corners(t);
        for k in 0..3 {
            let (u, w) = (direction(p[k], p[(k + 1) % 3]), direction(p[k], p[(k + 2) % 3]));
            let angle = turn(u, w).to_degrees();
            if angle < least.0 {
                least = (angle, p[k]);
            }
        }
    }
    least
}

/// Marks what is within `steps` edges of what is marked.
fn spread(mesh: &Mesh, mut marked: Vec<bool>, steps: usize) -> Vec<bool> {
    for _ in 0..steps {
        let before = marked.clone();
        for edge in mesh.edges() {
            let [a, b] = edge.vertices.map(|v| v as usize);
            marked[a] |= before[b];
            marked[b] |= before[a];
        }
    }
    marked
}

fn direction(a: Point, b: Point) -> f64 {
    (b[1] - a[1]).atan2(b[0] - a[0])
}

/// Angle between two directions, in 0..pi.
fn turn(a: f64, b: f64) -> f64 {
    let turn = (a - b).rem_euclid(TAU);
    turn.min(TAU - turn)
}

/// Smallest element asked for by the regions around every vertex, in metres.
fn wanted(drawing: &Drawing, mesh: &Mesh) -> Vec<f64> {
    let mut wanted = vec![f64::INFINITY; mesh.vertices().len()];
    for (triangle, id) in mesh.triangles().iter().zip(mesh.regions()) {
        let of_region = drawing.regions.iter().filter(|r| r.id == *id).map(|r| r.surface_size);
        let size = of_region.fold(drawing.domain_size, f64::min);
        for &v in triangle {
            wanted[v as usize] = wanted[v as usize].min(size);
        }
    }
    wanted
}

/// Vertices at gaps, small angles and short stretches.
fn troubled(drawing: &Drawing, mesh: &Mesh) -> Vec<bool> {
    let point = |v: u32| mesh.vertices()[v as usize];
    let free = |t: u32| t == NO_TRIANGLE || !mesh.strip_triangles()[t as usize];
    let held = |e: &mesher::Edge| {
        let [s, t] = e.triangles.map(free);
        e.curve.is_some() && (s || t) || s != t
    };
    let wanted = wanted(drawing, mesh);
    let mut troubled = vec![false; mesh.vertices().len()];
    let mut leaving: Vec<Vec<(f64, f64)>> = vec![Vec::new(); mesh.vertices().len()];
    for edge in mesh.edges().iter().filter(|e| held(e)) {
        let [a, b] = edge.vertices;
        let length = distance(point(a), point(b));
        leaving[a as usize].push((direction(point(a), point(b)), length));
        leaving[b as usize].push((direction(point(b), point(a)), length));
    }
    for (v, out) in leaving.iter().enumerate() {
        for (i, x) in out.iter().enumerate() {
            let sharp = |y: &(f64, f64)| turn(x.0, y.0) < SMALL_DEG.to_radians() || x.1.min(y.1) < 0.5 * x.1.max(y.1);
            troubled[v] |= out[..i].iter().any(sharp);
        }
    }
    for edge in mesh.edges().iter().filter(|e| !held(e) && e.triangles.iter().all(|&t| free(t))) {
        let length = distance(point(edge.vertices[0]), point(edge.vertices[1]));
        let longest = |v: u32| leaving[v as usize].iter().map(|l| l.1).fold(0.0, f64::max);
        let [a, b] = edge.vertices.map(longest);
        let asked = edge.vertices.map(|v| wanted[v as usize]);
        if a > 0.0 && b > 0.0 && (length < a.max(b) || length < NARROW * asked[0].min(asked[1])) {
            for v in edge.vertices {
                troubled[v as usize] = true;
            }
        }
    }
    troubled
}
