//! From halved edges to the triangles between them. Convention: a triangle is turned so that its reference edge `ab` is its local edge 0;
//! `m`, `p`, `q` are the middles of `ab`, `bc`, `ca`; every child has its reference edge first. Source: see [`super`].

use crate::ids::{CurveId, NO_TRIANGLE, Point, distance};
use crate::mesh::{Bend, Edge, Mesh, straight_area};
use crate::quality::least_angle_deg;
use std::sync::OnceLock;

/// Ratio of the areas of two children of one shape under which an arc has squeezed one of them.
const SQUEEZED: f64 = 0.9;
/// How far the middle of a side may be from where polar coordinates put it, over the thickness of the triangle.
const NEARLY: f64 = 0.1;

/// Where a triangle of the new mesh comes from.
#[derive(Debug, Clone, Copy)]
pub(super) struct Origin {
    pub(super) parent: u32,
    /// Its part of the area of its parent where all sides are straight.
    pub(super) share: f64,
}

struct Splitter<'a> {
    old: &'a Mesh,
    new: Mesh,
    /// New vertex in the middle of every old edge that is halved.
    middle: Vec<Option<u32>>,
    /// New number of every old edge, or of the half of it at its first vertex; the other half follows.
    first: Vec<u32>,
    origins: Vec<Origin>,
}

/// Splits every triangle along its halved edges, of which the reference edge must be one if there are any; gives the new mesh and the
/// origin of each of its triangles.
pub(super) fn split(old: &Mesh, halved: &[bool]) -> (Mesh, Vec<Origin>) {
    let new = Mesh {
        vertices: old.vertices.clone(),
        triangles: Vec::new(),
        regions: Vec::new(),
        strip: Vec::new(),
        triangle_edges: Vec::new(),
        reference: Vec::new(),
        edges: Vec::new(),
        bends: Vec::new(),
        curves: old.curves.clone(),
        notes: old.notes.clone(),
        merges: old.merges.clone(),
        domain_area: old.domain_area,
        finder: OnceLock::new(),
    };
    let mut splitter = Splitter { old, new, middle: Vec::new(), first: Vec::new(), origins: Vec::new() };
    splitter.halve_edges(halved);
    for t in 0..old.triangles.len() {
        splitter.cut(t);
    }
    splitter.connect();
    (splitter.new, splitter.origins)
}

impl Splitter<'_> {
    /// Adds the middles of the halved edges, and every old edge or its halves.
    fn halve_edges(&mut self, halved: &[bool]) {
        for (e, edge) in self.old.edges.iter().enumerate() {
            self.first.push(self.new.edges.len() as u32);
            let bend = self.old.bends[e];
            if !halved[e] {
                self.middle.push(None);
                self.edge(edge.vertices, bend, edge.curve);
                continue;
            }
            let middle = self.new.vertices.len() as u32;
            self.new.vertices.push(self.old.edge_point(e, 0.5));
            self.middle.push(Some(middle));
            for v in edge.vertices {
                self.edge([v, middle], bend, edge.curve);
            }
        }
    }

    /// Adds an edge whose triangles are filled in later.
    fn edge(&mut self, [a, b]: [u32; 2], bend: Bend, curve: Option<CurveId>) -> u32 {
        self.new.edges.push(Edge { vertices: [a.min(b), a.max(b)], triangles: [NO_TRIANGLE; 2], curve });
        self.new.bends.push(bend);
        self.new.edges.len() as u32 - 1
    }

    /// Half of an old edge at one of its vertices.
    fn half(&self, edge: u32, at: u32) -> u32 {
        self.first[edge as usize] + u32::from(self.old.edges[edge as usize].vertices[1] == at)
    }

    /// Adds a triangle with all that it inherits.
    fn child(&mut self, parent: usize, share: f64, vertices: [u32; 3], edges: [u32; 3], reference: u8) {
        self.new.triangles.push(vertices);
        self.new.triangle_edges.push(edges);
        self.new.reference.push(reference);
        self.new.regions.push(self.old.regions[parent]);
        self.new.strip.push(self.old.strip[parent]);
        self.origins.push(Origin { parent: parent as u32, share });
    }

    /// Adds the children of a triangle, or the triangle itself if none of its edges is halved.
    fn cut(&mut self, t: usize) {
        let reference = self.old.reference[t];
        let turned = |of: [u32; 3]| [0, 1, 2].map(|k| of[(k + reference as usize) % 3]);
        let vertices = turned(self.old.triangles[t]);
        let edges = turned(self.old.triangle_edges[t]);
        match edges.map(|e| self.middle[e as usize]) {
            [Some(m), Some(p), Some(q)] if !self.better_bisected(vertices[2], [m, p, q]) => {
                self.cut_in_four(t, vertices, edges, [m, p, q]);
            }
            [Some(m), p, q] => self.bisect(t, vertices, edges, m, [p, q]),
            _ => {
                let kept = self.old.triangle_edges[t].map(|e| self.first[e as usize]);
                self.child(t, 1.0, self.old.triangles[t], kept, reference);
            }
        }
    }

    /// Whether of four children the two in the middle are better cut along `cm` than along `pq`, because an arc has squeezed them.
    fn better_bisected(&self, c: u32, [m, p, q]: [u32; 3]) -> bool {
        let [red, blue] = [[[q, p, c], [p, q, m]], [[m, c, q], [c, m, p]]]
            .map(|two| two.map(|t| t.map(|v| self.new.vertices[v as usize])));
        let [upper, lower] = red.map(straight_area);
        let least = |two: [[Point; 3]; 2]| least_angle_deg(two[0]).min(least_angle_deg(two[1]));
        upper.min(lower) < SQUEEZED * upper.max(lower) && least(blue) > least(red)
    }

    /// Red: four triangles of the shape of their parent.
    fn cut_in_four(&mut self, t: usize, [a, b, c]: [u32; 3], [ab, bc, ca]: [u32; 3], [m, p, q]: [u32; 3]) {
        let bend = self.bend(t);
        let [mp, pq, qm] = [[m, p], [p, q], [q, m]].map(|ends| self.edge(ends, bend, None));
        self.child(t, 0.25, [a, m, q], [self.half(ab, a), qm, self.half(ca, a)], 0);
        self.child(t, 0.25, [m, b, p], [self.half(ab, b), self.half(bc, b), mp], 0);
        self.child(t, 0.25, [q, p, c], [pq, self.half(bc, c), self.half(ca, c)], 0);
        self.child(t, 0.25, [p, q, m], [pq, qm, mp], 0);
    }

    /// Green or blue: bisected from the reference edge, and either part again where its own outer edge is halved.
    fn bisect(&mut self, t: usize, [a, b, c]: [u32; 3], [ab, bc, ca]: [u32; 3], m: u32, [p, q]: [Option<u32>; 2]) {
        let bend = self.bend(t);
        let cm = self.edge([c, m], bend, None);
        if let Some(q) = q {
            let mq = self.edge([m, q], bend, None);
            self.child(t, 0.25, [m, c, q], [cm, self.half(ca, c), mq], 0);
            self.child(t, 0.25, [a, m, q], [self.half(ab, a), mq, self.half(ca, a)], 0);
        } else {
            self.child(t, 0.5, [c, a, m], [self.first[ca as usize], self.half(ab, a), cm], 0);
        }
        if let Some(p) = p {
            let mp = self.edge([m, p], bend, None);
            self.child(t, 0.25, [m, b, p], [self.half(ab, b), self.half(bc, b), mp], 0);
            self.child(t, 0.25, [c, m, p], [cm, mp, self.half(bc, c)], 0);
        } else {
            self.child(t, 0.5, [b, c, m], [self.first[bc as usize], cm, self.half(ab, b)], 0);
        }
    }

    /// How edges inside a triangle are bent: in polar coordinates about the centre of its arcs, if it is part of a strip and its sides
    /// are straight in these, or nearly.
    fn bend(&self, t: usize) -> Bend {
        let edges = self.old.triangle_edges[t].map(|e| e as usize);
        let centre = edges.iter().find_map(|&e| match self.old.bends[e] {
            Bend::Arc(centre, _) | Bend::Polar(centre) => Some(centre),
            Bend::Straight => None,
        });
        let Some(polar) = centre.filter(|_| self.old.strip[t]).map(Bend::Polar) else {
            return Bend::Straight;
        };
        let corners = self.old.corners(t);
        let longest = (0..3).map(|e| distance(corners[e], corners[(e + 1) % 3])).fold(0.0, f64::max);
        let thickness = 2.0 * straight_area(corners) / longest;
        let fits = |e: usize| {
            let ends = [corners[e], corners[(e + 1) % 3]];
            distance(self.old.edge_point(edges[e], 0.5), polar.point(ends, 0.5)) <= NEARLY * thickness
        };
        if (0..3).all(fits) { polar } else { Bend::Straight }
    }

    /// Fills in the triangles of the edges, the lower index first.
    fn connect(&mut self) {
        for (t, edges) in self.new.triangle_edges.iter().enumerate() {
            for &e in edges {
                let sides = &mut self.new.edges[e as usize].triangles;
                let free = usize::from(sides[0] != NO_TRIANGLE);
                sides[free] = t as u32;
            }
        }
    }
}
