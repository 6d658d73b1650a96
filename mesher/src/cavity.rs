//! Insertion by cavity: the faces whose circle holds the new point are replaced by a fan around it. Convention: as in
//! [`crate::triangulate`]; the rim runs counter-clockwise. Source: A. Bowyer, "Computing Dirichlet tessellations", 1981; D. F.
//! Watson, "Computing the n-dimensional Delaunay tessellation", 1981; constrained edges bound the cavity.

use crate::ids::{Point, cross, sub};
use crate::triangulate::{Circle, Face, LAST, NEXT, NONE, Triangulation};

/// One edge of a cavity's rim.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Rim {
    /// Start and end.
    pub(crate) ends: [u32; 2],
    /// Link of the same edge in the face outside, or `NONE`.
    outside: u32,
    pub(crate) tag: u32,
}

/// What a new point replaces.
#[derive(Debug, Default)]
pub(crate) struct Cavity {
    faces: Vec<u32>,
    pub(crate) rim: Vec<Rim>,
    open: Vec<u32>,
}

impl Triangulation {
    /// Gathers the faces whose circle holds `p`, from one of them on; the rim begins at its edge `start`. True if the point sees the whole rim, so that a fan fits.
    pub(crate) fn find_cavity(&self, start: u32, p: Point, cavity: &mut Cavity) -> bool {
        // Faces with corners on one circle are all part of the cavity, but none twice.
        let most = self.faces.len();
        cavity.faces.clear();
        cavity.rim.clear();
        cavity.open.clear();
        let (seed, i) = (start >> 2, (start & 3) as usize);
        cavity.faces.push(seed);
        cavity.open.extend([4 * seed + LAST[i] as u32, 4 * seed + NEXT[i] as u32, start]);
        let mut sees_all = true;
        while let Some(link) = cavity.open.pop() {
            let face = &self.faces[(link >> 2) as usize];
            let i = (link & 3) as usize;
            let (n, tag) = (face.n[i], face.tag[i]);
            let open = tag == 0 && n != NONE && cavity.faces.len() < most;
            if open && self.is_in_circle(n >> 2, p) {
                let j = (n & 3) as usize;
                cavity.faces.push(n >> 2);
                cavity.open.extend([(n & !3) | LAST[j] as u32, (n & !3) | NEXT[j] as u32]);
                continue;
            }
            let ends = [face.v[NEXT[i]], face.v[LAST[i]]];
            let [a, b] = ends.map(|v| self.point(v));
            sees_all &= is_left(a, b, p);
            cavity.rim.push(Rim { ends, outside: n, tag });
        }
        sees_all && cavity.faces.len() < most
    }

    /// Replaces a cavity by a fan around vertex `p`, which must see its whole rim.
    pub(crate) fn fill_cavity(&mut self, p: u32, cavity: &Cavity) {
        let old = self.faces[cavity.faces[0] as usize];
        let count = cavity.rim.len();
        let first = self.faces.len() as u32;
        let reused = cavity.faces.len();
        let number = |k: usize| if k < reused { cavity.faces[k] } else { first + (k - reused) as u32 };
        self.faces.resize(self.faces.len() + count - reused, old);
        let mut before = number(count - 1);
        let mut here = number(0);
        for (k, rim) in cavity.rim.iter().enumerate() {
            let after = if k + 1 == count { number(0) } else { number(k + 1) };
            let [a, b] = rim.ends;
            self.faces[here as usize] = Face {
                v: [p, a, b],
                n: [rim.outside, 4 * after + 2, 4 * before + 1],
                tag: [rim.tag, 0, 0],
                circle: Circle::through(self.point(p), self.point(a), self.point(b)),
                ..old
            };
            if rim.outside != NONE {
                self.faces[(rim.outside >> 2) as usize].n[(rim.outside & 3) as usize] = 4 * here;
            }
            self.face_at[a as usize] = here;
            self.fresh.push(here);
            (before, here) = (here, after);
        }
        self.face_at[p as usize] = before;
    }
}

/// Whether a point is clearly left of a line; rounding may only make the answer no.
fn is_left(a: Point, b: Point, p: Point) -> bool {
    let (u, v) = (sub(b, a), sub(p, a));
    let (left, right) = (u[0] * v[1], u[1] * v[0]);
    cross(u, v) > 1e-14 * (left.abs() + right.abs())
}
