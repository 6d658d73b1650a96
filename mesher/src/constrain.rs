//! Constrained edges and the labels they bound. Convention: as in [`crate::triangulate`]. Source: S. W. Sloan, "A fast algorithm for
//! generating constrained Delaunay triangulations", 1993.

use crate::ids::{Point, dot, sub};
use crate::predicates::{in_circle, orient};
use crate::triangulate::{LAST, NEXT, NONE, Triangulation};
use std::collections::VecDeque;

/// Where a constrained edge meets another.
pub(crate) struct Crossed {
    pub(crate) at: Point,
}

/// The first obstacle of a segment on leaving its start.
enum Ahead {
    Vertex(u32),
    Edge(u32),
    Nothing,
}

impl Triangulation {
    /// Makes the segment from `a` to `b` an edge (or several, through vertices that lie on it) and tags it. What it crossed is left as it
    /// comes: see [`Self::make_delaunay`].
    ///
    /// # Errors
    /// If it crosses another constrained edge.
    pub(crate) fn constrain(&mut self, a: u32, b: u32, tag: u32) -> Result<(), Crossed> {
        let mut from = a;
        while from != b {
            from = self.constrain_next(from, b, tag)?;
        }
        Ok(())
    }

    /// Constrains the part of the segment up to the next vertex on it, and returns that vertex.
    fn constrain_next(&mut self, a: u32, b: u32, tag: u32) -> Result<u32, Crossed> {
        if let Some(link) = self.find(a, b) {
            self.mark(link, tag);
            return Ok(b);
        }
        let first = match self.ahead(a, b) {
            Ahead::Vertex(v) => {
                if let Some(link) = self.find(a, v) {
                    self.mark(link, tag);
                }
                return Ok(v);
            }
            Ahead::Edge(link) => link,
            Ahead::Nothing => return Err(Crossed { at: self.point(a) }),
        };
        let (crossed, end) = self.crossed(a, b, first)?;
        self.clear(a, end, crossed)?;
        let link = self.find(a, end).ok_or(Crossed { at: self.point(a) })?;
        self.mark(link, tag);
        Ok(end)
    }

    fn mark(&mut self, link: u32, tag: u32) {
        let (t, i) = ((link >> 2) as usize, (link & 3) as usize);
        // A curve of the drawing is not overwritten by the plain edges of a strip.
        let tag = if self.faces[t].tag[i] == 0 { tag } else { self.faces[t].tag[i].min(tag) };
        self.faces[t].tag[i] = tag;
        let n = self.faces[t].n[i];
        if n != NONE {
            self.faces[(n >> 2) as usize].tag[(n & 3) as usize] = tag;
        }
    }

    fn ahead(&self, a: u32, b: u32) -> Ahead {
        let (from, to) = (self.point(a), self.point(b));
        let direction = sub(to, from);
        let forward = |v: u32| dot(sub(self.point(v), from), direction) > 0.0;
        self.around(a, |face, k| {
            let v = &self.faces[face as usize].v;
            let (x, y) = (v[NEXT[k]], v[LAST[k]]);
            let (right, left) = (orient(from, to, self.point(x)), orient(from, to, self.point(y)));
            if right == 0.0 && forward(x) {
                return Some(Ahead::Vertex(x));
            }
            if left == 0.0 && forward(y) {
                return Some(Ahead::Vertex(y));
            }
            (right < 0.0 && left > 0.0).then_some(Ahead::Edge(4 * face + k as u32))
        })
        .unwrap_or(Ahead::Nothing)
    }

    /// Edges the segment crosses on its way to `b` or to the first vertex on it, and that vertex.
    fn crossed(&self, a: u32, b: u32, first: u32) -> Result<(VecDeque<(u32, u32)>, u32), Crossed> {
        let (from, to) = (self.point(a), self.point(b));
        let mut edges = VecDeque::new();
        let mut link = first;
        for _ in 0..=self.faces.len() {
            let (x, y) = self.edge(link);
            let n = self.faces[(link >> 2) as usize].n[(link & 3) as usize];
            if self.tag(link) != 0 || n == NONE {
                return Err(Crossed { at: self.point(x) });
            }
            edges.push_back((x, y));
            let j = (n & 3) as usize;
            let w = self.faces[(n >> 2) as usize].v[j];
            if w == b {
                return Ok((edges, b));
            }
            let side = orient(from, to, self.point(w));
            if side == 0.0 {
                return Ok((edges, w));
            }
            let exit = if side > 0.0 { NEXT[j] } else { LAST[j] };
            link = (n & !3) | exit as u32;
        }
        Err(Crossed { at: from })
    }

    /// Flips the crossed edges away.
    fn clear(&mut self, a: u32, b: u32, mut edges: VecDeque<(u32, u32)>) -> Result<(), Crossed> {
        let (from, to) = (self.point(a), self.point(b));
        let mut patience = 64 * edges.len() * edges.len() + 1000;
        while let Some((x, y)) = edges.pop_front() {
            patience -= 1;
            let Some(link) = self.find(x, y).filter(|_| patience > 0) else {
                return Err(Crossed { at: from });
            };
            let (t, i) = ((link >> 2) as usize, (link & 3) as usize);
            let face = self.faces[t];
            let n = face.n[i];
            let w = self.faces[(n >> 2) as usize].v[(n & 3) as usize];
            let (p, x, y) = (face.v[i], face.v[NEXT[i]], face.v[LAST[i]]);
            let [pp, px, py, pw] = [p, x, y, w].map(|v| self.point(v));
            if !(orient(pp, px, pw) > 0.0 && orient(pp, pw, py) > 0.0) {
                edges.push_back((x, y));
                continue;
            }
            self.flip(link);
            let apart = [p, w].iter().all(|&v| v != a && v != b);
            if apart && orient(from, to, pp) * orient(from, to, pw) < 0.0 {
                edges.push_back((p, w));
            }
        }
        Ok(())
    }

    /// Flips free edges until all are Delaunay.
    pub(crate) fn make_delaunay(&mut self) {
        let mut open: Vec<u32> = (0..self.faces.len() as u32).collect();
        while let Some(t) = open.pop() {
            for i in 0..3 {
                let face = &self.faces[t as usize];
                let n = face.n[i];
                if face.tag[i] != 0 || n == NONE {
                    continue;
                }
                let w = self.faces[(n >> 2) as usize].v[(n & 3) as usize];
                let [a, b, c] = self.corners(t);
                if in_circle(a, b, c, self.point(w)) > 0.0 {
                    self.flip(4 * t + i as u32);
                    open.extend([t, n >> 2]);
                    break;
                }
            }
        }
    }

    /// Groups of faces that hang together without crossing an edge whose tag `wall` names; one group number a face.
    pub(crate) fn groups(&self, wall: impl Fn(u32) -> bool) -> (Vec<u32>, u32) {
        let mut group = vec![NONE; self.faces.len()];
        let mut count = 0;
        let mut open = Vec::new();
        for seed in 0..self.faces.len() {
            if group[seed] != NONE {
                continue;
            }
            group[seed] = count;
            open.push(seed);
            while let Some(t) = open.pop() {
                for i in 0..3 {
                    let face = &self.faces[t];
                    let n = face.n[i];
                    if n != NONE && !wall(face.tag[i]) && group[(n >> 2) as usize] == NONE {
                        group[(n >> 2) as usize] = count;
                        open.push((n >> 2) as usize);
                    }
                }
            }
            count += 1;
        }
        (group, count)
    }
}
