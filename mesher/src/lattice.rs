//! Points laid out in advance where a region is wide and its element size even: a lattice of equilateral triangles, which the
//! refinement then finds good. Convention: as in [`crate::triangulate`]. Source: common practice.

use crate::cavity::Cavity;
use crate::ids::{Point, distance_squared};
use crate::size_field::SizeField;
use crate::triangulate::{Place, Triangulation};

/// Fewer points than this are not worth a lattice.
const FEWEST: f64 = 200.0;
/// The size counts as even where it is at least this share of the largest.
const EVEN: f64 = 0.97;
/// Most lattice points that one look at the size field speaks for.
const AHEAD: f64 = 30.0;
/// A lattice keeps this many sizes away from the vertices that are there already.
const MARGIN: f64 = 1.6;
/// Height of an equilateral triangle over its side.
const HEIGHT: f64 = 0.866_025_403_784_438_6;

/// Adds lattice points to every region in which they fit; `caps` is the largest size by side. The size is `caps` at all of them.
pub(crate) fn lay(mesh: &mut Triangulation, field: &SizeField, caps: &[f64], most: usize) -> Vec<f64> {
    let mut layer =
        Layer { given: mesh.points.len() as u32, near: 0, cavity: Cavity::default(), sizes: Vec::new(), most };
    for (side, (lo, hi)) in boxes(mesh, caps.len()).into_iter().enumerate() {
        let size = caps[side];
        let count = (hi[0] - lo[0]) * (hi[1] - lo[1]) / (HEIGHT * size * size);
        if count >= FEWEST {
            layer.fill(mesh, field, side as u32, size, lo, hi);
        }
    }
    mesh.fresh.clear();
    layer.sizes
}

/// The box around every side's faces; empty where it has none.
fn boxes(mesh: &Triangulation, sides: usize) -> Vec<(Point, Point)> {
    let mut boxes = vec![([f64::INFINITY; 2], [f64::NEG_INFINITY; 2]); sides];
    for (t, face) in mesh.faces.iter().enumerate().filter(|(_, f)| f.is_free()) {
        let Some((lo, hi)) = face.side().and_then(|side| boxes.get_mut(side as usize)) else {
            continue;
        };
        for p in mesh.corners(t as u32) {
            for k in 0..2 {
                lo[k] = lo[k].min(p[k]);
                hi[k] = hi[k].max(p[k]);
            }
        }
    }
    boxes
}

struct Layer {
    /// Number of vertices before.
    given: u32,
    near: u32,
    cavity: Cavity,
    sizes: Vec<f64>,
    most: usize,
}

impl Layer {
    fn fill(&mut self, mesh: &mut Triangulation, field: &SizeField, side: u32, size: f64, lo: Point, hi: Point) {
        let rows = ((hi[1] - lo[1]) / (HEIGHT * size)) as usize;
        let columns = ((hi[0] - lo[0]) / size) as usize;
        for row in 0..=rows {
            let shift = if row % 2 == 0 { 0.25 } else { 0.75 };
            let mut even_until = 0;
            for k in 0..=columns {
                let column = if row % 2 == 0 { k } else { columns - k };
                let p = [lo[0] + (column as f64 + shift) * size, lo[1] + (row as f64 + 0.5) * HEIGHT * size];
                if k >= even_until {
                    // The field grows by the gradation at most: where it is far above the size, so it is for some points to come.
                    let spare = (field.without_cap(p, (1.0 + field.gradation() * AHEAD) * size) / size - EVEN)
                        / field.gradation();
                    if spare < 0.0 {
                        continue;
                    }
                    even_until = k + 1 + spare as usize;
                }
                if self.sizes.len() < self.most {
                    self.place(mesh, side, size, p);
                }
            }
        }
    }

    /// Adds a point if it lies well inside free faces of the side.
    fn place(&mut self, mesh: &mut Triangulation, side: u32, size: f64, p: Point) {
        let holder = match mesh.locate(p, self.near, false) {
            Place::Inside(face) => face,
            Place::OnEdge(link) => link >> 2,
            Place::AtVertex | Place::Behind(_) => return,
        };
        self.near = holder;
        let face = &mesh.faces[holder as usize];
        if !face.is_free() || face.side() != Some(side) || !mesh.find_cavity(4 * holder, p, &mut self.cavity) {
            return;
        }
        let margin = (MARGIN * size).powi(2);
        let close = |v: u32| v < self.given && distance_squared(mesh.point(v), p) < margin;
        if self.cavity.rim.iter().any(|rim| close(rim.ends[0])) {
            return;
        }
        let id = mesh.add_point(p);
        self.sizes.push(size);
        mesh.fill_cavity(id, &self.cavity);
        self.near = mesh.face_at[id as usize];
    }
}
