//! The finished mesh: vertices, triangles, edges, regions and the curves its edges lie on. Convention: triangles counter-clockwise; local
//! edge `e` of a triangle joins its vertices `e` and `(e + 1) % 3`; metres.

use crate::ids::{CurveId, NO_TRIANGLE, Point, RegionId, cross, distance, sub};
use crate::merges::Merge;
use crate::note::MeshNote;
use crate::tree::{Item, Tree};
use std::sync::OnceLock;

/// An edge of the mesh.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Edge {
    /// Its vertices, the lower index first.
    pub vertices: [u32; 2],
    /// Its triangles; the second is [`NO_TRIANGLE`] on the boundary of the domain.
    pub triangles: [u32; 2],
    /// The curve it lies on, if any.
    pub curve: Option<CurveId>,
}

/// The shape of a curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Shape {
    /// A straight line.
    Line,
    /// Part of a circle.
    Arc {
        /// Its centre, in metres.
        centre: Point,
        /// Its radius, in metres.
        radius: f64,
    },
}

/// A stretch of the drawing between two of its nodes, or a circular ring inside a strip.
#[derive(Debug, Clone, PartialEq)]
pub struct Curve {
    /// Line or arc.
    pub shape: Shape,
    /// The piece of the domain outline it is part of, if any.
    pub on_domain: Option<usize>,
    /// (index into the drawing's regions, piece index) of every region outline it is part of; empty for rings of strips.
    pub on_regions: Vec<(usize, usize)>,
}

/// How the inner nodes of an edge are placed.
#[derive(Debug, Clone, Copy)]
pub(crate) enum Bend {
    Straight,
    /// On a circle.
    Arc(Point, f64),
    /// In polar coordinates about a centre, radius and angle in proportion.
    Polar(Point),
}

/// A conforming mesh of triangles, made by [`crate::triangulate`].
///
/// ```
/// use mesher::{Drawing, Limits, Outline, Region, RegionId, triangulate};
///
/// // A disc of 20 mm radius in a box, with a bore of 8 mm radius that the box shows through.
/// let (air, steel) = (RegionId(0), RegionId(7));
/// let bore = Outline::circle([0.05, 0.0], 0.008)?;
/// let disc = Outline::circle([0.05, 0.0], 0.020)?.with_holes(&[bore])?;
/// let drawing = Drawing {
///     domain: Outline::rectangle([0.0, -0.05], [0.1, 0.05])?,
///     domain_region: air,
///     domain_size: 0.01,
///     regions: vec![Region { id: steel, outline: disc, interior_size: 0.004, surface_size: 0.003, layers: None }],
///     gradation: 0.4,
///     boundary_size: None,
///     line_sizes: Vec::new(),
/// };
/// let mesh = triangulate(&drawing, &Limits::default(), &|| false)?;
///
/// // The area is exact, arcs included.
/// let area = std::f64::consts::PI * (0.020f64.powi(2) - 0.008f64.powi(2));
/// assert!((mesh.region_area(steel) / area - 1.0).abs() < 1e-12);
///
/// // Two loops bound the ring, and their edges are those between it and the air.
/// let loops = mesh.boundary_loops(steel);
/// assert_eq!(loops.len(), 2);
/// assert_eq!(loops.iter().map(Vec::len).sum::<usize>(), mesh.edges_between(steel, air).count());
///
/// // The edges on the first half of the outer circle add up to its length.
/// let length: f64 = mesh.edges_of_piece(0, 0).map(|e| mesh.edge_length(e)).sum();
/// assert!((length / (std::f64::consts::PI * 0.020) - 1.0).abs() < 1e-12);
///
/// // Where is a point, and how good are the triangles?
/// let (triangle, _) = mesh.locate([0.065, 0.0]).ok_or("outside")?;
/// assert_eq!(mesh.regions()[triangle], steel);
/// let quality = mesh.quality();
/// assert!(quality.min_angle_deg > 20.0 && quality.strip_triangles == 0);
/// # Ok::<(), Box<dyn std::error::Error>>(())
/// ```
#[derive(Debug, Clone)]
pub struct Mesh {
    pub(crate) vertices: Vec<Point>,
    pub(crate) triangles: Vec<[u32; 3]>,
    pub(crate) regions: Vec<RegionId>,
    pub(crate) strip: Vec<bool>,
    pub(crate) triangle_edges: Vec<[u32; 3]>,
    /// Local edge of every triangle that is halved first when it is refined.
    pub(crate) reference: Vec<u8>,
    pub(crate) edges: Vec<Edge>,
    pub(crate) bends: Vec<Bend>,
    pub(crate) curves: Vec<Curve>,
    pub(crate) notes: Vec<MeshNote>,
    pub(crate) merges: Vec<Merge>,
    /// Area of the domain outline, in square metres.
    pub(crate) domain_area: f64,
    pub(crate) finder: OnceLock<Tree>,
}

impl Mesh {
    /// Vertices, in metres.
    pub fn vertices(&self) -> &[Point] {
        &self.vertices
    }

    /// Vertex indices of every triangle, counter-clockwise.
    pub fn triangles(&self) -> &[[u32; 3]] {
        &self.triangles
    }

    /// Region of every triangle.
    pub fn regions(&self) -> &[RegionId] {
        &self.regions
    }

    /// Whether each triangle is part of a strip of layers.
    pub fn strip_triangles(&self) -> &[bool] {
        &self.strip
    }

    /// Edge indices of every triangle; local edge `e` joins local vertices `e` and `(e + 1) % 3`.
    pub fn triangle_edges(&self) -> &[[u32; 3]] {
        &self.triangle_edges
    }

    /// All edges.
    pub fn edges(&self) -> &[Edge] {
        &self.edges
    }

    /// All curves, indexed by [`CurveId`].
    pub fn curves(&self) -> &[Curve] {
        &self.curves
    }

    /// The curve of that identity, which must come from an edge of this mesh.
    pub fn curve(&self, id: CurveId) -> &Curve {
        &self.curves[id.0 as usize]
    }

    /// Where the mesh differs from what the drawing asked for.
    pub fn notes(&self) -> &[MeshNote] {
        &self.notes
    }

    /// What the outlines of the drawing have in common, or were made to have where they come too close to tell apart.
    pub fn merges(&self) -> &[Merge] {
        &self.merges
    }

    /// Corners of a triangle, in metres.
    pub fn corners(&self, triangle: usize) -> [Point; 3] {
        let [a, b, c] = self.triangles[triangle].map(|v| v as usize);
        [self.vertices[a], self.vertices[b], self.vertices[c]]
    }

    /// The straight-sided triangle that holds a point, and the barycentric coordinates of the point in it.
    pub fn locate(&self, p: Point) -> Option<(usize, [f64; 3])> {
        let finder = self.finder.get_or_init(|| {
            let items: Vec<Item> = (0..self.triangles.len())
                .map(|t| {
                    let [a, b, c] = self.corners(t);
                    let lo = [a[0].min(b[0]).min(c[0]), a[1].min(b[1]).min(c[1])];
                    let hi = [a[0].max(b[0]).max(c[0]), a[1].max(b[1]).max(c[1])];
                    Item { lo, hi, weight: 0.0 }
                })
                .collect();
            Tree::new(&items)
        });
        let mut best: Option<(usize, [f64; 3])> = None;
        finder.any(p, p, |t| {
            let shares = barycentric(self.corners(t as usize), p);
            let least = |s: &[f64; 3]| s[0].min(s[1]).min(s[2]);
            // Rounding may leave a point on an edge a hair outside both of its triangles.
            if least(&shares) >= -1e-12 && best.as_ref().is_none_or(|b| least(&shares) > least(&b.1)) {
                best = Some((t as usize, shares));
            }
            best.as_ref().is_some_and(|b| least(&b.1) >= 0.0)
        });
        best
    }

    /// Area of a region in square metres, arcs included exactly.
    pub fn region_area(&self, id: RegionId) -> f64 {
        let own = |t: u32| t != NO_TRIANGLE && self.regions[t as usize] == id;
        let straight = (0..self.triangles.len()).filter(|&t| own(t as u32)).map(|t| straight_area(self.corners(t)));
        let curved = self.edges.iter().zip(&self.bends).flat_map(|(edge, &bend)| {
            let sides = edge.triangles.into_iter().filter(|&t| own(t));
            sides.map(move |t| self.segment_area(edge, bend, t))
        });
        sum(straight.chain(curved))
    }

    /// Area between an edge's arc and its chord, positive where it adds to the triangle.
    pub(crate) fn segment_area(&self, edge: &Edge, bend: Bend, triangle: u32) -> f64 {
        let Bend::Arc(centre, radius) = bend else {
            return 0.0;
        };
        let [a, b] = edge.vertices.map(|v| self.vertices[v as usize]);
        let half = (0.5 * distance(a, b) / radius).min(1.0).asin();
        let area = 0.5 * radius * radius * (2.0 * half - (2.0 * half).sin());
        // The triangle lies to the left of its edge; where the centre does too, the arc bulges away from it.
        let corners = self.triangles[triangle as usize];
        let forward = (0..3).any(|k| [corners[k], corners[(k + 1) % 3]] == edge.vertices);
        let same = (cross(sub(b, a), sub(centre, a)) > 0.0) == forward;
        if same { area } else { -area }
    }
}

/// Sum with the rounding errors carried along: many small areas add up to one that is right in its last digits.
/// Source: A. Neumaier, "Rundungsfehleranalyse einiger Verfahren zur Summation endlicher Summen", 1974.
pub(crate) fn sum(values: impl Iterator<Item = f64>) -> f64 {
    let (mut total, mut lost) = (0.0f64, 0.0);
    for value in values {
        let next = total + value;
        lost += if total.abs() >= value.abs() { (total - next) + value } else { (value - next) + total };
        total = next;
    }
    total + lost
}

pub(crate) fn straight_area([a, b, c]: [Point; 3]) -> f64 {
    0.5 * cross(sub(b, a), sub(c, a))
}

fn barycentric([a, b, c]: [Point; 3], p: Point) -> [f64; 3] {
    let whole = cross(sub(b, a), sub(c, a));
    let (u, v) = (cross(sub(c, b), sub(p, b)) / whole, cross(sub(a, c), sub(p, c)) / whole);
    [u, v, 1.0 - u - v]
}
