//! Refinement of a constrained triangulation to a size field and a least angle of 28 degrees, by off-centres. Convention: strip cells
//! are never touched; edges shorter than a share of the wanted size are left alone, so that narrow gaps and small input angles end.
//! Source: A. Üngör, "Off-centers", 2004; J. R. Shewchuk, "Delaunay refinement algorithms", 2002 (lenses, concentric shells).

use crate::cavity::Cavity;
use crate::error::MeshError;
use crate::facing::NARROW;
use crate::ids::{Point, along, between, distance, distance_squared, dot, sub};
use crate::lattice::lay;
use crate::mesh::straight_area;
use crate::plan::Tag;
use crate::predicates::orient;
use crate::size_field::SizeField;
use crate::triangulate::{Circle, Face, LAST, NEXT, NONE, Place, Triangulation};

/// Circumradius over shortest edge at 28 degrees: `1 / (2 sin 28)`.
const RADIUS_EDGE: f64 = 1.065_027_2;
/// Largest circumradius over the wanted size; an equilateral triangle has 0.577.
const RADIUS_SIZE: f64 = 0.70;
/// Legs of a new triangle over the wanted size, so that the sizes of what is made lie on both sides of it.
const LEG: f64 = 1.04;
/// Edges between lines are not shortened under this share of the wanted size.
const FLOOR: f64 = 0.12;
/// Cosine of the lens angle: a point that sees a constrained edge under more than 120 degrees encroaches on it.
const LENS: f64 = 0.5;
/// Usual area of a face over the square of the wanted size.
const FACE_AREA: f64 = 0.36;
/// Mark of a vertex that is a node of the drawing.
const NODE: u32 = u32::MAX;

pub(crate) struct Sizes<'a> {
    pub(crate) field: &'a SizeField,
    /// Largest element by side: 0 the domain, `1 + i` region `i`.
    pub(crate) caps: &'a [f64],
}

pub(crate) struct Budget<'a> {
    pub(crate) max_triangles: usize,
    pub(crate) smallest: f64,
    pub(crate) stop: &'a dyn Fn() -> bool,
}

struct Refiner<'a> {
    mesh: &'a mut Triangulation,
    sizes: Sizes<'a>,
    tags: &'a [Tag],
    /// Wanted size at every vertex.
    wanted: Vec<f64>,
    /// Tag of the constraint a vertex lies on, `NODE` for nodes of the drawing, 0 for free ones.
    on: Vec<u32>,
    /// Faces to look at, the last first: so the front of good faces grows from its newest edge.
    queue: Vec<(u32, [u32; 3])>,
    cavity: Cavity,
    encroached: Vec<[u32; 2]>,
}

/// Refines in place. `nodes` is the number of leading points that are nodes of the drawing.
pub(crate) fn refine(
    mesh: &mut Triangulation,
    sizes: Sizes,
    tags: &[Tag],
    nodes: usize,
    budget: &Budget,
) -> Result<(), MeshError> {
    let (wanted, on) = (wanted(mesh, sizes.field), marks(mesh, nodes));
    let mut refiner =
        Refiner { mesh, sizes, tags, wanted, on, queue: Vec::new(), cavity: Cavity::default(), encroached: Vec::new() };
    refiner.reserve(budget.max_triangles);
    refiner.lay_lattice(budget.max_triangles);
    refiner.mesh.fresh = (0..refiner.mesh.faces.len() as u32).collect();
    refiner.queue_fresh();
    let mut steps = 0u32;
    while let Some((face, vertices)) = refiner.queue.pop() {
        if refiner.mesh.faces[face as usize].v != vertices {
            continue;
        }
        steps += 1;
        if steps.is_multiple_of(512) && (budget.stop)() {
            return Err(MeshError::Stopped);
        }
        // A quarter more for what lies outside the domain; the finished mesh is counted exactly.
        if refiner.mesh.faces.len() > budget.max_triangles + budget.max_triangles / 4 + 1000 {
            return Err(MeshError::TooManyTriangles { limit: budget.max_triangles, smallest_m: budget.smallest });
        }
        if let Some((target, base)) = refiner.target(face) {
            refiner.insert(4 * face + base, vertices, target);
            refiner.queue_fresh();
        }
    }
    Ok(())
}

/// Wanted size at every vertex of a face that may be refined; the others are not asked for.
fn wanted(mesh: &Triangulation, field: &SizeField) -> Vec<f64> {
    let mut wanted = vec![f64::NAN; mesh.points.len()];
    for face in mesh.faces.iter().filter(|f| f.is_free()) {
        for v in face.v.map(|v| v as usize) {
            if wanted[v].is_nan() {
                wanted[v] = field.at(mesh.points[v]);
            }
        }
    }
    wanted
}

fn marks(mesh: &Triangulation, nodes: usize) -> Vec<u32> {
    let mut on = vec![0; mesh.points.len()];
    for face in &mesh.faces {
        for i in 0..3 {
            if face.tag[i] != 0 {
                for v in [face.v[NEXT[i]], face.v[LAST[i]]] {
                    // Stretches of the drawing have lower tags than edges of strips.
                    let known = &mut on[v as usize];
                    *known = if *known == 0 { face.tag[i] } else { face.tag[i].min(*known) };
                }
            }
        }
    }
    on[..nodes].fill(NODE);
    on
}

impl Refiner<'_> {
    /// Makes room for about as many faces as the sizes at the corners of the present ones ask for, but not for more than `most`.
    fn reserve(&mut self, most: usize) {
        let free = (0..self.mesh.faces.len() as u32).filter(|&t| self.mesh.faces[t as usize].is_free());
        let count: f64 =
            free.map(|t| straight_area(self.mesh.corners(t)) / (FACE_AREA * self.size_of(t).powi(2))).sum();
        let count = (count as usize).min(most);
        self.mesh.faces.reserve(count);
        self.mesh.points.reserve(count / 2);
        self.mesh.face_at.reserve(count / 2);
        self.wanted.reserve(count / 2);
        self.on.reserve(count / 2);
    }

    /// Lays a lattice where the size is even.
    fn lay_lattice(&mut self, most: usize) {
        self.mesh.fresh = (0..self.mesh.faces.len() as u32).collect();
        self.mesh.find_circles();
        self.wanted.extend(lay(self.mesh, self.sizes.field, self.sizes.caps, most / 2 + 1));
        self.on.resize(self.wanted.len(), 0);
    }

    fn queue_fresh(&mut self) {
        self.mesh.find_circles();
        for t in self.mesh.fresh.drain(..) {
            let face = &self.mesh.faces[t as usize];
            if face.is_free() {
                self.queue.push((t, face.v));
            }
        }
    }

    /// Largest element in what a face belongs to.
    fn cap(&self, face: &Face) -> f64 {
        face.side().map_or(f64::INFINITY, |side| self.sizes.caps[side as usize])
    }

    /// Wanted size in a face.
    fn size_of(&self, face: u32) -> f64 {
        let face = &self.mesh.faces[face as usize];
        let mean = face.v.iter().map(|&v| self.wanted[v as usize]).sum::<f64>() / 3.0;
        mean.min(self.cap(face))
    }

    /// Where a point is to be added for a face that is too large or too sharp.
    fn target(&self, face: u32) -> Option<(Point, u32)> {
        let [a, b, c] = self.mesh.corners(face);
        let squares = [distance_squared(b, c), distance_squared(c, a), distance_squared(a, b)];
        let mut i = 0;
        for k in 1..3 {
            if squares[k] < squares[i] {
                i = k;
            }
        }
        let Circle { centre, radius_squared } = self.mesh.faces[face as usize].circle;
        let size = self.size_of(face);
        let large = radius_squared > (RADIUS_SIZE * size).powi(2);
        let sharp = radius_squared > RADIUS_EDGE * RADIUS_EDGE * squares[i];
        if !large && (!sharp || self.is_exempt(face, i, squares[i].sqrt(), size)) {
            return None;
        }
        if !centre[0].is_finite() || !centre[1].is_finite() {
            return None;
        }
        Some((self.off_centre(face, i, squares[i].sqrt(), centre), i as u32))
    }

    /// Whether the shortest edge of a sharp face is one the drawing forces.
    fn is_exempt(&self, face: u32, i: usize, shortest: f64, size: f64) -> bool {
        let f = &self.mesh.faces[face as usize];
        let (x, y) = (f.v[NEXT[i]], f.v[LAST[i]]);
        if shortest < 1e-3 * size {
            return true;
        }
        let (on_x, on_y) = (self.on[x as usize], self.on[y as usize]);
        if on_x == 0 || on_y == 0 {
            return false;
        }
        if shortest < FLOOR * size || (shortest < NARROW * size && self.bridges(f.tag[i], x, y)) {
            return true;
        }
        f.tag[i] == 0 && on_x != on_y && on_x != NODE && on_y != NODE && {
            let ends = |tag: u32| self.tags[tag as usize - 1].ends;
            matches!((ends(on_x), ends(on_y)), (Some(p), Some(q)) if p.iter().any(|e| q.contains(e)))
        }
    }

    /// Whether an edge joins two stretches that have no node in common.
    fn bridges(&self, tag: u32, x: u32, y: u32) -> bool {
        let ends = |v: u32| match self.on[v as usize] {
            NODE => Some([v; 2]),
            on => self.tags[on as usize - 1].ends,
        };
        tag == 0 && matches!((ends(x), ends(y)), (Some(p), Some(q)) if p.iter().all(|end| !q.contains(end)))
    }

    /// The circumcentre, or a point nearer to the shortest edge that makes a good triangle with it.
    fn off_centre(&self, face: u32, i: usize, shortest: f64, centre: Point) -> Point {
        let f = &self.mesh.faces[face as usize];
        let (x, y) = (f.v[NEXT[i]], f.v[LAST[i]]);
        let middle = between(self.mesh.point(x), self.mesh.point(y), 0.5);
        let out = sub(centre, middle);
        let depth = dot(out, out).sqrt();
        let half_angle = (0.5 / RADIUS_EDGE).asin() * 0.5;
        let mut reach = depth.min(0.95 * 0.5 * shortest / half_angle.tan());
        let size = 0.5 * (self.wanted[x as usize] + self.wanted[y as usize]);
        let size = size.min(self.cap(f));
        if shortest < 1.5 * size {
            let leg = (LEG * size).max(0.75 * shortest);
            let square = (leg * leg - 0.25 * shortest * shortest).max(0.25 * shortest * shortest);
            reach = reach.min(square.sqrt());
        }
        if reach < depth { along(middle, out, reach / depth) } else { centre }
    }

    /// Adds a point for a face; or splits the constrained edges that hide it or that it encroaches on, and asks for the face again.
    fn insert(&mut self, base: u32, vertices: [u32; 3], target: Point) {
        // The target lies in the circle of the face that asks for it, so that face is part of the cavity.
        let face = base >> 2;
        if !self.mesh.find_cavity(base, target, &mut self.cavity) {
            self.insert_hidden(face, vertices, target);
            return;
        }
        self.collect_encroached(target);
        if self.encroached.is_empty() {
            self.add(vertices, target);
        } else if self.split_encroached() {
            self.queue.push((face, vertices));
        }
    }

    /// The same for a point that its face may not see, or that lies on an edge.
    fn insert_hidden(&mut self, face: u32, vertices: [u32; 3], target: Point) {
        let blocking = match self.mesh.locate(target, face, true) {
            Place::Behind(link) => link,
            Place::OnEdge(link) if self.mesh.tag(link) != 0 => link,
            Place::AtVertex => return,
            Place::Inside(holder) => return self.insert_at(holder, vertices, target),
            Place::OnEdge(link) => return self.insert_at(link >> 2, vertices, target),
        };
        if self.split(blocking) {
            self.queue.push((face, vertices));
        }
    }

    fn insert_at(&mut self, holder: u32, vertices: [u32; 3], target: Point) {
        if !self.mesh.find_cavity(4 * holder, target, &mut self.cavity) {
            return;
        }
        self.collect_encroached(target);
        if self.encroached.is_empty() {
            self.add(vertices, target);
        } else {
            self.split_encroached();
        }
    }

    /// Fills the cavity around a new free vertex.
    fn add(&mut self, near: [u32; 3], p: Point) {
        let gradation = self.sizes.field.gradation();
        let bound = near.iter().fold(f64::INFINITY, |least, &v| {
            least.min(self.wanted[v as usize] + gradation * distance(p, self.mesh.point(v)))
        });
        let id = self.mesh.add_point(p);
        self.wanted.push(self.sizes.field.at_most(p, bound * (1.0 + 1e-12)));
        self.on.push(0);
        self.mesh.fill_cavity(id, &self.cavity);
    }

    /// Constrained edges on the rim of the cavity that the new point sees under too wide an angle.
    fn collect_encroached(&mut self, x: Point) {
        self.encroached.clear();
        for rim in self.cavity.rim.iter().filter(|r| r.tag != 0) {
            let [u, v] = rim.ends.map(|end| sub(self.mesh.point(end), x));
            let d = dot(u, v);
            if d < 0.0 && d * d >= LENS * LENS * dot(u, u) * dot(v, v) {
                self.encroached.push(rim.ends);
            }
        }
    }

    /// Splits the encroached edges; whether any could be.
    fn split_encroached(&mut self) -> bool {
        let mut changed = false;
        for [a, b] in std::mem::take(&mut self.encroached) {
            if let Some(link) = self.mesh.find(a, b) {
                changed |= self.split(link);
            }
        }
        changed
    }

    /// Splits a constrained edge, unless a strip or the floor forbids it.
    fn split(&mut self, link: u32) -> bool {
        let face = self.mesh.faces[(link >> 2) as usize];
        let i = (link & 3) as usize;
        let (tag, n) = (face.tag[i], face.n[i]);
        if tag == 0 || n == NONE || self.mesh.cell(link >> 2).is_some() || self.mesh.cell(n >> 2).is_some() {
            return false;
        }
        let (a, b) = self.mesh.edge(link);
        let (pa, pb) = (self.mesh.point(a), self.mesh.point(b));
        let length = distance(pa, pb);
        let mean = 0.5 * (self.wanted[a as usize] + self.wanted[b as usize]);
        if length < 2.0 * FLOOR * mean {
            return false;
        }
        let w = self.mesh.faces[(n >> 2) as usize].v[(n & 3) as usize];
        let (pv, pw) = (self.mesh.point(face.v[i]), self.mesh.point(w));
        let fits = |x: Point| {
            orient(pv, pa, x) > 0.0 && orient(pv, x, pb) > 0.0 && orient(pw, pb, x) > 0.0 && orient(pw, x, pa) > 0.0
        };
        let x = self.split_point(tag, a, b, length);
        if !fits(x) {
            return false;
        }
        let id = self.mesh.add_point(x);
        self.wanted.push(self.sizes.field.at(x));
        self.on.push(tag);
        self.mesh.insert_on_edge(link, id);
        true
    }

    /// Middle of an arc; on a line from a node, a power of two from it, so that lines at a small angle split alike.
    fn split_point(&self, tag: u32, a: u32, b: u32, length: f64) -> Point {
        let (pa, pb) = (self.mesh.point(a), self.mesh.point(b));
        let middle = between(pa, pb, 0.5);
        if let Some((centre, radius)) = self.tags[tag as usize - 1].circle {
            let out = sub(middle, centre);
            return along(centre, out, radius / dot(out, out).sqrt());
        }
        let at_node = |v: u32| self.on[v as usize] == NODE;
        if at_node(a) == at_node(b) {
            return middle;
        }
        let share = (0.5 * length).log2().round().exp2() / length;
        if at_node(a) { between(pa, pb, share) } else { between(pb, pa, share) }
    }
}
