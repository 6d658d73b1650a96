//! The boundary of a mesh as a plane straight-line graph, for other mesh generators to start from. Convention: metres; every edge of
//! the mesh that lies on a line of the drawing is a segment, so arcs are divided as they were meshed; a face is a set of triangles
//! that hang together without crossing a segment.

use mesher::{Drawing, Mesh, NO_TRIANGLE, Point};
use serde_json::{Value, json};

/// Face on a side where there is none.
const NO_FACE: u32 = u32::MAX;

/// Points, segments and faces of a mesh of one size everywhere.
#[derive(Debug, Clone)]
pub struct Boundary {
    /// End points of the segments.
    pub points: Vec<Point>,
    /// Start and end of every segment, with the faces to its left and to its right.
    segments: Vec<([u32; 2], [u32; 2])>,
    /// A point inside every face, and its region.
    faces: Vec<(Point, u32)>,
}

impl Boundary {
    /// Reads it off a mesh.
    pub fn of(mesh: &Mesh) -> Self {
        let (face_of, faces) = faces(mesh);
        let mut number = vec![u32::MAX; mesh.vertices().len()];
        let mut points = Vec::new();
        let mut segments = Vec::new();
        for (e, edge) in mesh.edges().iter().enumerate().filter(|(_, edge)| edge.curve.is_some()) {
            let first = edge.triangles[0] as usize;
            let k = (0..3).find(|&k| mesh.triangle_edges()[first][k] as usize == e).unwrap_or(0);
            let corners = mesh.triangles()[first];
            // Counter-clockwise around the first triangle, which is therefore to the left.
            let ends = [corners[k], corners[(k + 1) % 3]].map(|v| {
                let own = &mut number[v as usize];
                if *own == u32::MAX {
                    *own = points.len() as u32;
                    points.push(mesh.vertices()[v as usize]);
                }
                *own
            });
            let face = |t: u32| if t == NO_TRIANGLE { NO_FACE } else { face_of[t as usize] };
            segments.push((ends, edge.triangles.map(face)));
        }
        Self { points, segments, faces }
    }

    /// As JSON: `points`, `segments` (start, end, face to the left, face to the right or -1), `faces` (point inside, region), the size
    /// of the drawing, and the area of the equilateral triangle with sides of that size.
    pub fn to_json(&self, drawing: &Drawing) -> Value {
        let signed = |face: u32| if face == NO_FACE { -1 } else { i64::from(face) };
        let segments: Vec<_> =
            (self.segments.iter()).map(|&([a, b], [left, right])| json!([a, b, signed(left), signed(right)])).collect();
        let faces: Vec<_> =
            self.faces.iter().map(|&(inside, region)| json!({ "inside": inside, "region": region })).collect();
        let size = drawing.domain_size;
        json!({
            "points": self.points,
            "segments": segments,
            "faces": faces,
            "size_m": size,
            "max_area_m2": 0.25 * 3f64.sqrt() * size * size,
        })
    }
}

/// Face of every triangle, and of every face the centre of its largest triangle and its region.
fn faces(mesh: &Mesh) -> (Vec<u32>, Vec<(Point, u32)>) {
    let count = mesh.triangles().len();
    let mut face_of = vec![NO_FACE; count];
    let mut faces = Vec::new();
    let mut open = Vec::new();
    for seed in 0..count {
        if face_of[seed] != NO_FACE {
            continue;
        }
        let own = faces.len() as u32;
        let mut largest = (0.0, seed);
        face_of[seed] = own;
        open.push(seed);
        while let Some(t) = open.pop() {
            largest = if area(mesh, t) > largest.0 { (area(mesh, t), t) } else { largest };
            for edge in mesh.triangle_edges()[t].map(|e| mesh.edges()[e as usize]) {
                let [a, b] = edge.triangles.map(|t| t as usize);
                let across = if a == t { b } else { a };
                if edge.curve.is_none() && across < count && face_of[across] == NO_FACE {
                    face_of[across] = own;
                    open.push(across);
                }
            }
        }
        let [a, b, c] = mesh.corners(largest.1);
        let centre = [(a[0] + b[0] + c[0]) / 3.0, (a[1] + b[1] + c[1]) / 3.0];
        faces.push((centre, mesh.regions()[largest.1].0));
    }
    (face_of, faces)
}

fn area(mesh: &Mesh, t: usize) -> f64 {
    let [a, b, c] = mesh.corners(t);
    0.5 * ((b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0]))
}

#[cfg(test)]
mod tests {
    #![allow(clippy::unwrap_used, reason = "tests")]

    use super::Boundary;
    use crate::sections::{Detail, Section};
    use mesher::Limits;

    /// The area of the polygon of a face is the sum of its triangles; Euler's formula is that of plane graphs.
    #[test]
    fn the_faces_of_every_section_tile_its_domain() {
        for section in Section::ALL {
            let drawing = section.drawing(Detail::Uniform(10_000)).unwrap();
            let mesh = mesher::triangulate(&drawing, &Limits::default(), &|| false).unwrap();
            let boundary = Boundary::of(&mesh);
            let mut areas = vec![0.0; boundary.faces.len()];
            for &([a, b], sides) in &boundary.segments {
                let [p, q] = [a, b].map(|v| boundary.points[v as usize]);
                let share = 0.5 * (p[0] * q[1] - q[0] * p[1]);
                for (side, sign) in sides.into_iter().zip([1.0, -1.0]) {
                    if let Some(area) = areas.get_mut(side as usize) {
                        *area += sign * share;
                    }
                }
            }
            let whole: f64 = areas.iter().sum();
            assert!(areas.iter().all(|&a| a > 0.0), "{}: {areas:?}", section.name);
            let error = (whole - drawing.domain.area()).abs() / drawing.domain.area();
            assert!(error < 1e-2, "{}: faces cover {whole:e} m^2, off by {error:.1e}", section.name);
        }
    }
}
