//! Incremental Delaunay triangulation with constrained edges. Convention: faces counter-clockwise; edge `i` of a face is opposite its
//! vertex `i`; a link is `4 * face + edge`. Source: C. L. Lawson, "Software for C1 surface interpolation", 1977 (insertion with
//! flips); S. W. Sloan, "A fast algorithm for generating constrained Delaunay triangulations", 1993 (constraints by flips).

use crate::ids::{Point, distance_squared};
use crate::order::{along_curve, bounds};
use crate::predicates::{circumcircle, in_circle, orient};

pub(crate) const NONE: u32 = u32::MAX;
/// Relative difference of squared distances below which a known circle does not settle whether a point is inside.
const CLOSE_CALL: f64 = 1e-7;
pub(crate) const NEXT: [usize; 3] = [1, 2, 0];
pub(crate) const LAST: [usize; 3] = [2, 0, 1];

/// Set in the side of a face that is part of a strip.
const STRIP: u32 = 1 << 31;

/// The circle through the corners of a face.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Circle {
    pub(crate) centre: Point,
    /// Square of the radius; not a number where the circle is not known.
    pub(crate) radius_squared: f64,
}

impl Circle {
    const UNKNOWN: Self = Self { centre: [0.0; 2], radius_squared: f64::NAN };

    pub(crate) fn through(a: Point, b: Point, c: Point) -> Self {
        let (centre, radius_squared) = circumcircle(a, b, c);
        Self { centre, radius_squared }
    }

    pub(crate) fn is_known(&self) -> bool {
        !self.radius_squared.is_nan()
    }
}

/// One cache line.
#[derive(Debug, Clone, Copy)]
#[repr(align(64))]
pub(crate) struct Face {
    pub(crate) v: [u32; 3],
    /// Links to the neighbours.
    pub(crate) n: [u32; 3],
    /// Constraint along each edge: 0 for none, else 1 + its index.
    pub(crate) tag: [u32; 3],
    /// What it belongs to (see [`crate::drawing`]), with a mark on faces of strips; `NONE` outside the domain.
    pub(crate) side: u32,
    /// Kept up to date by the refinement alone.
    pub(crate) circle: Circle,
}

impl Face {
    /// The same face with other corners, neighbours still to be linked.
    fn with(self, v: [u32; 3], tag: [u32; 3]) -> Self {
        Self { v, n: [NONE; 3], tag, circle: Circle::UNKNOWN, ..self }
    }

    /// Inside the domain and not part of a strip.
    pub(crate) fn is_free(&self) -> bool {
        self.side & STRIP == 0
    }

    /// What it belongs to; none outside the domain.
    pub(crate) fn side(&self) -> Option<u32> {
        (self.side != NONE).then_some(self.side & !STRIP)
    }

    pub(crate) fn set_side(&mut self, side: Option<u32>) {
        self.side = side.unwrap_or(NONE);
    }
}

/// Where a point lies.
#[derive(Debug, Clone, Copy)]
pub(crate) enum Place {
    Inside(u32),
    OnEdge(u32),
    AtVertex,
    /// Behind this edge, which a walk may not cross.
    Behind(u32),
}

#[derive(Debug, Clone)]
pub(crate) struct Triangulation {
    pub(crate) points: Vec<Point>,
    pub(crate) faces: Vec<Face>,
    /// Strip cell of every face; faces made later are part of none.
    cells: Vec<u32>,
    /// One face of every vertex.
    pub(crate) face_at: Vec<u32>,
    /// Faces made or changed since this list was last emptied.
    pub(crate) fresh: Vec<u32>,
    last: u32,
    stack: Vec<u32>,
}

impl Triangulation {
    /// Delaunay triangulation of the points inside a box six times as large.
    ///
    /// # Errors
    /// The index of a point that coincides with another.
    pub(crate) fn new(points: &[Point]) -> Result<Self, u32> {
        let mut mesh = Self::empty_box(points);
        for id in along_curve(points) {
            match mesh.locate(points[id as usize], mesh.last, false) {
                Place::Inside(face) => mesh.insert_inside(face, id),
                Place::OnEdge(edge) => mesh.insert_on_edge(edge, id),
                Place::AtVertex | Place::Behind(_) => return Err(id),
            }
            mesh.fresh.clear();
        }
        Ok(mesh)
    }

    fn empty_box(points: &[Point]) -> Self {
        let (lo, hi) = bounds(points);
        let reach = 3.0 * (hi[0] - lo[0]).max(hi[1] - lo[1]);
        let m = [0.5 * (lo[0] + hi[0]), 0.5 * (lo[1] + hi[1])];
        let b = points.len() as u32;
        let mut points = points.to_vec();
        points.extend([
            [m[0] - reach, m[1] - reach],
            [m[0] + reach, m[1] - reach],
            [m[0] + reach, m[1] + reach],
            [m[0] - reach, m[1] + reach],
        ]);
        let face = |v, n| Face { v, n, tag: [0; 3], side: NONE, circle: Circle::UNKNOWN };
        let faces = vec![face([b, b + 1, b + 2], [NONE, 6, NONE]), face([b, b + 2, b + 3], [NONE, NONE, 1])];
        let mut face_at = vec![NONE; points.len()];
        face_at[b as usize..].copy_from_slice(&[0, 0, 0, 1]);
        Self { points, faces, cells: Vec::new(), face_at, fresh: Vec::new(), last: 0, stack: Vec::new() }
    }

    /// Names the strip cell of every face.
    pub(crate) fn set_cells(&mut self, cells: Vec<u32>) {
        for (face, _) in self.faces.iter_mut().zip(&cells).filter(|(_, cell)| **cell != NONE) {
            face.side |= STRIP;
        }
        self.cells = cells;
    }

    /// Strip cell a face is part of.
    pub(crate) fn cell(&self, face: u32) -> Option<u32> {
        self.cells.get(face as usize).copied().filter(|&cell| cell != NONE)
    }

    /// Finds the circles of the fresh faces that may be refined and whose circle is not known.
    pub(crate) fn find_circles(&mut self) {
        for k in 0..self.fresh.len() {
            let t = self.fresh[k];
            let face = &self.faces[t as usize];
            if face.is_free() && !face.circle.is_known() {
                let [a, b, c] = self.corners(t);
                self.faces[t as usize].circle = Circle::through(a, b, c);
            }
        }
    }

    /// Whether a point lies in the circle of a face; the circle that is known settles all but close calls.
    pub(crate) fn is_in_circle(&self, face: u32, p: Point) -> bool {
        let circle = &self.faces[face as usize].circle;
        let square = distance_squared(p, circle.centre);
        if square < circle.radius_squared * (1.0 - CLOSE_CALL) {
            return true;
        }
        if square > circle.radius_squared * (1.0 + CLOSE_CALL) {
            return false;
        }
        let [a, b, c] = self.corners(face);
        in_circle(a, b, c, p) > 0.0
    }

    pub(crate) fn point(&self, v: u32) -> Point {
        self.points[v as usize]
    }

    pub(crate) fn corners(&self, face: u32) -> [Point; 3] {
        let [a, b, c] = self.faces[face as usize].v;
        [self.point(a), self.point(b), self.point(c)]
    }

    /// Tag of the constraint along an edge given by its link.
    pub(crate) fn tag(&self, link: u32) -> u32 {
        self.faces[(link >> 2) as usize].tag[(link & 3) as usize]
    }

    /// The two vertices of an edge, in the order of its face.
    pub(crate) fn edge(&self, link: u32) -> (u32, u32) {
        let (v, i) = (&self.faces[(link >> 2) as usize].v, (link & 3) as usize);
        (v[NEXT[i]], v[LAST[i]])
    }

    pub(crate) fn add_point(&mut self, p: Point) -> u32 {
        self.points.push(p);
        self.face_at.push(NONE);
        self.points.len() as u32 - 1
    }

    /// Walks from a face to the one that holds a point; if `halt`, constrained edges are not crossed.
    pub(crate) fn locate(&self, p: Point, start: u32, halt: bool) -> Place {
        let (mut face, mut entered) = (start, 3usize);
        let mut random = (p[0].to_bits() >> 20) as u32 ^ p[1].to_bits() as u32;
        'walk: for _ in 0..=4 * self.faces.len() {
            let here = &self.faces[face as usize];
            random = random.wrapping_mul(1_664_525).wrapping_add(1_013_904_223);
            let turn = (random >> 16) as usize % 3;
            let mut on = 3;
            for k in 0..3 {
                let i = (turn + k) % 3;
                if i == entered {
                    continue;
                }
                let side = orient(self.point(here.v[NEXT[i]]), self.point(here.v[LAST[i]]), p);
                if side < 0.0 {
                    if here.n[i] == NONE || (halt && here.tag[i] != 0) {
                        return Place::Behind(4 * face + i as u32);
                    }
                    (face, entered) = (here.n[i] >> 2, (here.n[i] & 3) as usize);
                    continue 'walk;
                }
                if side == 0.0 {
                    on = i;
                }
            }
            if here.v.iter().any(|&v| self.point(v) == p) {
                return Place::AtVertex;
            }
            return if on == 3 { Place::Inside(face) } else { Place::OnEdge(4 * face + on as u32) };
        }
        Place::Behind(4 * face)
    }

    fn link(&mut self, face: u32, i: usize, to: u32) {
        self.faces[face as usize].n[i] = to;
        if to != NONE {
            self.faces[(to >> 2) as usize].n[(to & 3) as usize] = 4 * face + i as u32;
        }
    }

    pub(crate) fn insert_inside(&mut self, face: u32, p: u32) {
        let old = self.faces[face as usize];
        let a = self.faces.len() as u32;
        let b = a + 1;
        let make = |v: [u32; 3], tag: u32| old.with(v, [tag, 0, 0]);
        self.faces[face as usize] = make([p, old.v[1], old.v[2]], old.tag[0]);
        self.faces.push(make([p, old.v[2], old.v[0]], old.tag[1]));
        self.faces.push(make([p, old.v[0], old.v[1]], old.tag[2]));
        self.link(face, 0, old.n[0]);
        self.link(a, 0, old.n[1]);
        self.link(b, 0, old.n[2]);
        self.link(face, 1, 4 * a + 2);
        self.link(a, 1, 4 * b + 2);
        self.link(b, 1, 4 * face + 2);
        for (v, f) in [(p, face), (old.v[1], face), (old.v[2], face), (old.v[0], a)] {
            self.face_at[v as usize] = f;
        }
        self.stack.extend([face, a, b]);
        self.legalise();
        self.last = face;
    }

    /// Splits the edge given by its link at vertex `p`.
    pub(crate) fn insert_on_edge(&mut self, link: u32, p: u32) {
        let (t, i) = (link >> 2, (link & 3) as usize);
        let old = self.faces[t as usize];
        let tag = old.tag[i];
        let (v, a, b) = (old.v[i], old.v[NEXT[i]], old.v[LAST[i]]);
        let t2 = self.faces.len() as u32;
        self.faces[t as usize] = old.with([p, b, v], [old.tag[NEXT[i]], 0, tag]);
        self.faces.push(old.with([p, v, a], [old.tag[LAST[i]], tag, 0]));
        self.link(t, 0, old.n[NEXT[i]]);
        self.link(t2, 0, old.n[LAST[i]]);
        self.link(t, 1, 4 * t2 + 2);
        for (x, f) in [(p, t), (b, t), (v, t), (a, t2)] {
            self.face_at[x as usize] = f;
        }
        self.stack.extend([t, t2]);
        if old.n[i] != NONE {
            let (u, j) = (old.n[i] >> 2, (old.n[i] & 3) as usize);
            let old = self.faces[u as usize];
            let w = old.v[j];
            let u2 = self.faces.len() as u32;
            self.faces[u as usize] = old.with([p, a, w], [old.tag[NEXT[j]], 0, tag]);
            self.faces.push(old.with([p, w, b], [old.tag[LAST[j]], tag, 0]));
            self.link(u, 0, old.n[NEXT[j]]);
            self.link(u2, 0, old.n[LAST[j]]);
            self.link(u, 1, 4 * u2 + 2);
            self.link(t, 2, 4 * u2 + 1);
            self.link(t2, 1, 4 * u + 2);
            self.face_at[w as usize] = u;
            self.stack.extend([u, u2]);
        }
        self.legalise();
        self.last = t;
    }

    /// Restores the Delaunay property around the vertex that stands first in every stacked face.
    fn legalise(&mut self) {
        while let Some(t) = self.stack.pop() {
            self.fresh.push(t);
            let face = &self.faces[t as usize];
            let n = face.n[0];
            if face.tag[0] != 0 || n == NONE {
                continue;
            }
            let w = self.faces[(n >> 2) as usize].v[(n & 3) as usize];
            let [p, a, b] = self.corners(t);
            if in_circle(p, a, b, self.point(w)) > 0.0 {
                self.flip(4 * t);
                self.stack.extend([t, n >> 2]);
            }
        }
    }

    /// Replaces an edge by the other diagonal of its two faces. The faces become `(p, a, w)` and `(p, w, b)`.
    pub(crate) fn flip(&mut self, link: u32) {
        let (t, i) = (link >> 2, (link & 3) as usize);
        let one = self.faces[t as usize];
        let (u, j) = (one.n[i] >> 2, (one.n[i] & 3) as usize);
        let two = self.faces[u as usize];
        let (p, a, b, w) = (one.v[i], one.v[NEXT[i]], one.v[LAST[i]], two.v[j]);
        let (bp, pa) = (NEXT[i], LAST[i]);
        let (aw, wb) = (NEXT[j], LAST[j]);
        self.faces[t as usize] = one.with([p, a, w], [two.tag[aw], 0, one.tag[pa]]);
        self.faces[u as usize] = two.with([p, w, b], [two.tag[wb], one.tag[bp], 0]);
        self.link(t, 0, two.n[aw]);
        self.link(t, 2, one.n[pa]);
        self.link(u, 0, two.n[wb]);
        self.link(u, 1, one.n[bp]);
        self.link(t, 1, 4 * u + 2);
        for (v, f) in [(p, t), (a, t), (w, u), (b, u)] {
            self.face_at[v as usize] = f;
        }
    }

    /// Position of vertex `v` in a face.
    pub(crate) fn position(&self, face: u32, v: u32) -> usize {
        let corners = &self.faces[face as usize].v;
        if corners[0] == v {
            0
        } else if corners[1] == v {
            1
        } else {
            2
        }
    }

    /// Link of the edge from `a` to `b` in the face to its left, or of the one to its right if there is no left face.
    pub(crate) fn find(&self, a: u32, b: u32) -> Option<u32> {
        let mut other = None;
        self.around(a, |face, k| {
            let v = &self.faces[face as usize].v;
            if v[NEXT[k]] == b {
                return Some(4 * face + LAST[k] as u32);
            }
            if v[LAST[k]] == b {
                other = Some(4 * face + NEXT[k] as u32);
            }
            None
        })
        .or(other)
    }

    /// Visits the faces around a vertex with its position in each, until one gives an answer.
    pub(crate) fn around<T>(&self, v: u32, mut visit: impl FnMut(u32, usize) -> Option<T>) -> Option<T> {
        let start = self.face_at[v as usize];
        if start == NONE {
            return None;
        }
        for step in [&NEXT, &LAST] {
            let mut face = start;
            loop {
                let k = self.position(face, v);
                if let Some(found) = visit(face, k) {
                    return Some(found);
                }
                let n = self.faces[face as usize].n[step[k]];
                if n == NONE {
                    break;
                }
                face = n >> 2;
                if face == start {
                    return None;
                }
            }
        }
        None
    }
}

#[cfg(test)]
mod tests {
    #![allow(clippy::unwrap_used, reason = "tests")]

    use super::{LAST, NEXT, Triangulation};
    use spade::{ConstrainedDelaunayTriangulation, Point2, Triangulation as _};
    use std::collections::BTreeSet;

    /// Pseudo-random numbers in 0..1 (constants of D. E. Knuth's MMIX generator).
    fn numbers(mut state: u64) -> impl FnMut() -> f64 {
        move || {
            state = state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
            (state >> 11) as f64 / (1u64 << 53) as f64
        }
    }

    /// Edges between the first `count` vertices.
    fn edges(mesh: &Triangulation, count: u32) -> BTreeSet<(u32, u32)> {
        let all = mesh.faces.iter().flat_map(|f| (0..3).map(|i| (f.v[NEXT[i]], f.v[LAST[i]])));
        all.filter(|&(a, b)| a < count && b < count).map(|(a, b)| (a.min(b), a.max(b))).collect()
    }

    /// Oracle: the general-purpose crate `spade`. Our triangulation lies in a box, so only edges that are both inside its hull and
    /// away from it must agree; the fan of box edges is ours alone.
    #[test]
    fn a_constrained_triangulation_has_the_edges_spade_finds() {
        for seed in 1..6 {
            let mut next = numbers(seed);
            let mut points: Vec<[f64; 2]> = (0..400).map(|_| [next(), next()]).collect();
            // A frame, so that the hull is the same for both.
            points.extend((0..20).flat_map(|i| {
                let t = 1.2 * f64::from(i) / 20.0 - 0.1;
                [[t, -0.1], [1.1, t], [1.0 - t, 1.1], [-0.1, 1.0 - t]]
            }));
            let count = points.len() as u32;
            let mut ours = Triangulation::new(&points).unwrap();
            let mut theirs = ConstrainedDelaunayTriangulation::<Point2<f64>>::new();
            let handles: Vec<_> = points.iter().map(|p| theirs.insert(Point2::new(p[0], p[1])).unwrap()).collect();
            for k in (0..400u32).step_by(25) {
                let (a, b) = (k, k + 13);
                if theirs.can_add_constraint(handles[a as usize], handles[b as usize]) {
                    theirs.add_constraint(handles[a as usize], handles[b as usize]);
                    assert!(ours.constrain(a, b, 1).is_ok());
                }
            }
            ours.make_delaunay();
            let found = edges(&ours, count);
            let wanted: BTreeSet<(u32, u32)> = theirs
                .undirected_edges()
                .map(|e| e.vertices().map(|v| v.fix().index() as u32))
                .map(|[a, b]| (a.min(b), a.max(b)))
                .collect();
            let differ: Vec<_> = found.symmetric_difference(&wanted).collect();
            assert!(differ.is_empty(), "seed {seed}: {} of {} edges differ", differ.len(), wanted.len());
        }
    }

    #[test]
    fn a_coincident_point_is_named() {
        let points = [[0.0, 0.0], [1.0, 0.0], [0.0, 1.0], [1.0, 0.0]];
        assert!(matches!(Triangulation::new(&points), Err(1 | 3)));
    }
}
