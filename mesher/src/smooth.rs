//! Smoothing: free vertices move to where the worst angle around them is larger, and edges flip to stay Delaunay. Convention: vertices on
//! lines and in strips stay; a vertex is looked at again only if something around it has changed. Sources: L. Chen, J. Xu, "Optimal
//! Delaunay triangulations", 2004 (area-weighted circumcentres); L. A. Freitag, C. Ollivier-Gooch, "Tetrahedral mesh improvement using
//! swapping and smoothing", 1997 (a search for the best worst angle where that fails).

use crate::ids::{Point, along, between, cross, distance_squared, dot, sub};
use crate::predicates::in_circle;
use crate::triangulate::{LAST, NEXT, NONE, Triangulation};

/// Sine squared of the angle above which a vertex is left alone: 42 degrees.
const GOOD_ENOUGH: f64 = 0.447_736;
/// Sine squared of the angle under which a vertex is worth a search: 40 degrees.
const POOR: f64 = 0.413_176;
/// Steps of the search, as shares of the distance of the neighbours, and the directions it takes.
const STEPS: [f64; 4] = [0.2, 0.1, 0.05, 0.02];
const DIRECTIONS: [Point; 8] = {
    const D: f64 = std::f64::consts::FRAC_1_SQRT_2;
    [[1.0, 0.0], [D, D], [0.0, 1.0], [-D, D], [-1.0, 0.0], [-D, -D], [0.0, -1.0], [D, -D]]
};

pub(crate) fn smooth(mesh: &mut Triangulation, passes: usize) {
    let movable = movable(mesh);
    let mut smoother = Smoother { due: vec![false; movable.len()], movable, ring: Ring::default(), faces: Vec::new() };
    smoother.find_due(mesh);
    for _ in 0..passes {
        let mut moved = false;
        for v in 0..mesh.points.len() as u32 {
            if std::mem::take(&mut smoother.due[v as usize]) {
                moved |= smoother.visit(mesh, v);
            }
        }
        if !moved {
            return;
        }
    }
}

fn movable(mesh: &Triangulation) -> Vec<bool> {
    let mut movable: Vec<bool> = mesh.face_at.iter().map(|&f| f != NONE).collect();
    for face in &mesh.faces {
        for i in 0..3 {
            if face.tag[i] != 0 || !face.is_free() {
                movable[face.v[NEXT[i]] as usize] = false;
                movable[face.v[LAST[i]] as usize] = false;
            }
        }
    }
    movable
}

/// What lies around a free vertex: faces, and the places of their other corners counter-clockwise.
#[derive(Default)]
struct Ring {
    faces: Vec<u32>,
    places: Vec<Point>,
}

struct Smoother {
    movable: Vec<bool>,
    /// Free vertices around which something has changed.
    due: Vec<bool>,
    ring: Ring,
    /// Faces whose edges may no longer be Delaunay.
    faces: Vec<u32>,
}

impl Smoother {
    /// Marks the free vertices of every face that is not good enough.
    fn find_due(&mut self, mesh: &Triangulation) {
        for (t, face) in mesh.faces.iter().enumerate() {
            if face.is_free() {
                self.judge(mesh, t as u32);
            }
        }
    }

    /// Marks the free vertices of a face that is not good enough.
    fn judge(&mut self, mesh: &Triangulation, face: u32) {
        let [a, b, c] = mesh.corners(face);
        if sine_squared(a, b, c) < GOOD_ENOUGH {
            for v in mesh.faces[face as usize].v {
                self.due[v as usize] = self.movable[v as usize];
            }
        }
    }

    /// Moves a vertex if that is better for the worst angle around it; whether it was.
    fn visit(&mut self, mesh: &mut Triangulation, v: u32) -> bool {
        self.ring.fill(mesh, v);
        let here = mesh.point(v);
        let before = self.ring.worst(here);
        if before > GOOD_ENOUGH {
            return false;
        }
        let Some(better) = self.ring.better(here, before) else {
            return false;
        };
        mesh.points[v as usize] = better;
        self.faces.extend(&self.ring.faces);
        self.flip(mesh);
        true
    }

    /// Flips the edges of the faces that have changed, and of those that change by it, until all are Delaunay; then judges them.
    fn flip(&mut self, mesh: &mut Triangulation) {
        let mut next = 0;
        while let Some(&t) = self.faces.get(next) {
            next += 1;
            for i in 0..3 {
                let face = &mesh.faces[t as usize];
                let n = face.n[i];
                if !face.is_free() || face.tag[i] != 0 || n == NONE {
                    continue;
                }
                let w = mesh.faces[(n >> 2) as usize].v[(n & 3) as usize];
                let [a, b, c] = mesh.corners(t);
                if in_circle(a, b, c, mesh.point(w)) > 0.0 {
                    mesh.flip(4 * t + i as u32);
                    self.faces.extend([t, n >> 2]);
                    break;
                }
            }
        }
        for k in 0..self.faces.len() {
            self.judge(mesh, self.faces[k]);
        }
        self.faces.clear();
    }
}

impl Ring {
    /// Gathers the faces around a vertex that lies inside the triangulation.
    fn fill(&mut self, mesh: &Triangulation, v: u32) {
        self.faces.clear();
        self.places.clear();
        let start = mesh.face_at[v as usize];
        let mut t = start;
        loop {
            let face = &mesh.faces[t as usize];
            let k = mesh.position(t, v);
            self.faces.push(t);
            self.places.push(mesh.point(face.v[NEXT[k]]));
            t = face.n[NEXT[k]] >> 2;
            if t == start {
                return;
            }
        }
    }

    /// Sides opposite the vertex, counter-clockwise.
    fn sides(&self) -> impl Iterator<Item = (Point, Point)> + '_ {
        let n = self.places.len();
        (0..n).map(move |i| (self.places[i], self.places[if i + 1 == n { 0 } else { i + 1 }]))
    }

    /// Square of the sine of the least angle around a vertex at `x`; -1 if a triangle would turn over.
    fn worst(&self, x: Point) -> f64 {
        self.sides().fold(f64::INFINITY, |least, (a, b)| least.min(sine_squared(x, a, b)))
    }

    /// Whether every angle around a vertex at `x` is larger than `limit`.
    fn is_above(&self, x: Point, limit: f64) -> bool {
        self.sides().all(|(a, b)| sine_squared(x, a, b) > limit)
    }

    /// A place with a larger least angle than `before`.
    fn better(&self, here: Point, before: f64) -> Option<Point> {
        let optimal = self.optimal(here);
        let better = |x: &Point| self.is_above(*x, before);
        let near = [optimal, between(here, optimal, 0.5)];
        near.into_iter()
            .find(better)
            .or_else(|| {
                let mean = self.mean();
                [mean, between(here, mean, 0.5)].into_iter().find(better)
            })
            .or_else(|| if before < POOR { self.search(here, before) } else { None })
    }

    fn mean(&self) -> Point {
        let n = self.places.len() as f64;
        [0, 1].map(|k| self.places.iter().map(|p| p[k]).sum::<f64>() / n)
    }

    /// The best of eight places around a poor vertex, at the longest step at which one is better than `before`.
    fn search(&self, here: Point, before: f64) -> Option<Point> {
        let n = self.places.len() as f64;
        let reach = (self.places.iter().map(|&p| distance_squared(p, here)).sum::<f64>() / n).sqrt();
        STEPS.into_iter().find_map(|step| {
            let tries = DIRECTIONS.map(|d| along(here, d, step * reach));
            let rated = tries.map(|x| (self.worst(x), x));
            let best = rated.into_iter().fold((before, here), |best, next| if next.0 > best.0 { next } else { best });
            (best.0 > before).then_some(best.1)
        })
    }

    /// Mean of the circumcentres around a vertex, weighted with the areas.
    fn optimal(&self, here: Point) -> Point {
        let (mut sum, mut whole) = ([0.0; 2], 0.0);
        for (a, b) in self.sides() {
            // Circumcentre from `here` times twice the area; the division by the area cancels.
            let (u, v) = (sub(a, here), sub(b, here));
            let (uu, vv) = (dot(u, u), dot(v, v));
            sum[0] += 0.5 * (v[1] * uu - u[1] * vv);
            sum[1] += 0.5 * (u[0] * vv - v[0] * uu);
            whole += cross(u, v);
        }
        [here[0] + sum[0] / whole, here[1] + sum[1] / whole]
    }
}

/// Square of the sine of the least angle; -1 if the triangle is not counter-clockwise.
fn sine_squared(a: Point, b: Point, c: Point) -> f64 {
    let area = cross(sub(b, a), sub(c, a));
    if area <= 0.0 || area.is_nan() {
        return -1.0;
    }
    let (x, y, z) = (distance_squared(a, b), distance_squared(b, c), distance_squared(c, a));
    area * area * x.min(y).min(z) / (x * y * z)
}
