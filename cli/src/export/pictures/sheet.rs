//! The section as it is drawn: elements with their kinds, the edges between kinds, boxes round bodies, and points found
//! in curved elements. Convention: `[r, z]` in metres in the meridian half plane, `r >= 0`.

use std::collections::BTreeMap;

use solver::model::Mirrors;
use solver::results::{RegionName, Section};

use super::PictureError;
use super::shape::{self, edge_nodes, node_count};

/// Straight pieces a curved edge is traced by.
const TRACE_PIECES: usize = 12;

/// Elements and what they belong to.
#[derive(Debug, Clone, Copy)]
pub(super) struct Sheet<'a> {
    pub(super) order: usize,
    pub(super) points: &'a [[f64; 2]],
    elements: &'a [u32],
    kinds: &'a [&'a RegionName],
    pub(super) mirrors: Mirrors,
}

/// Smallest upright box round some nodes.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Extent {
    pub(super) r: [f64; 2],
    pub(super) z: [f64; 2],
}

impl Extent {
    const EMPTY: Self = Self { r: [f64::INFINITY, f64::NEG_INFINITY], z: [f64::INFINITY, f64::NEG_INFINITY] };

    pub(super) fn of(points: impl IntoIterator<Item = [f64; 2]>) -> Option<Self> {
        let grown = points.into_iter().filter(|p| p.iter().all(|v| v.is_finite())).fold(Self::EMPTY, |e, p| Self {
            r: [e.r[0].min(p[0]), e.r[1].max(p[0])],
            z: [e.z[0].min(p[1]), e.z[1].max(p[1])],
        });
        (grown.r[0] <= grown.r[1]).then_some(grown)
    }

    fn holds(&self, p: [f64; 2], slack: f64) -> bool {
        let within = |v: f64, range: [f64; 2]| v >= range[0] - slack && v <= range[1] + slack;
        within(p[0], self.r) && within(p[1], self.z)
    }
}

/// What each element of a section is: one reference an element, for [`Sheet::new`].
///
/// # Errors
/// A triangle carries a region without a name.
pub(super) fn kinds(section: &Section) -> Result<Vec<&RegionName>, PictureError> {
    let named = section.regions.len();
    let kind = |id: usize| {
        section.regions.get(id).ok_or(PictureError::Length { what: "names of regions", expected: id + 1, found: named })
    };
    section.mesh.regions().iter().map(|id| kind(id.0 as usize)).collect()
}

impl<'a> Sheet<'a> {
    /// A view of a section whose elements are of `kinds`.
    ///
    /// # Errors
    /// The order is not 1, 2 or 3, or arrays do not fit each other.
    pub(super) fn new(section: &'a Section, kinds: &'a [&'a RegionName]) -> Result<Self, PictureError> {
        let nodes = &section.nodes;
        Self::from_parts(nodes.order, &nodes.points, &nodes.elements, kinds, section.mirrors)
    }

    fn from_parts(
        order: usize,
        points: &'a [[f64; 2]],
        elements: &'a [u32],
        kinds: &'a [&'a RegionName],
        mirrors: Mirrors,
    ) -> Result<Self, PictureError> {
        if !(1..=3).contains(&order) {
            return Err(PictureError::Order { order });
        }
        let expected = kinds.len() * node_count(order);
        if elements.len() != expected {
            return Err(PictureError::Length { what: "nodes of elements", expected, found: elements.len() });
        }
        if let Some(&node) = elements.iter().find(|&&n| n as usize >= points.len()) {
            return Err(PictureError::Length { what: "points", expected: node as usize + 1, found: points.len() });
        }
        Ok(Self { order, points, elements, kinds, mirrors })
    }

    pub(super) fn element_count(&self) -> usize {
        self.kinds.len()
    }

    /// Nodes of an element.
    pub(super) fn nodes(&self, element: usize) -> &'a [u32] {
        let stride = node_count(self.order);
        &self.elements[element * stride..(element + 1) * stride]
    }

    /// Places of the nodes of an element.
    pub(super) fn places(&self, element: usize) -> Vec<[f64; 2]> {
        self.nodes(element).iter().map(|&n| self.points[n as usize]).collect()
    }

    pub(super) fn kind(&self, element: usize) -> &'a RegionName {
        self.kinds[element]
    }

    /// Elements of one kind.
    pub(super) fn elements_of(&self, keep: impl Fn(&RegionName) -> bool) -> Vec<usize> {
        (0..self.element_count()).filter(|&e| keep(self.kinds[e])).collect()
    }

    /// Box round the elements that `keep` accepts.
    pub(super) fn extent(&self, keep: impl Fn(&RegionName) -> bool) -> Option<Extent> {
        let elements = self.elements_of(keep);
        Extent::of(elements.into_iter().flat_map(|e| self.places(e)))
    }

    /// Parts in job order: index and name, each once.
    pub(super) fn parts(&self) -> Vec<(usize, &'a str)> {
        let named = self.kinds.iter().filter_map(|kind| match kind {
            RegionName::Part(index, name) => Some((*index, name.as_str())),
            _ => None,
        });
        named.collect::<BTreeMap<_, _>>().into_iter().collect()
    }

    /// Coils in job order: index and name, each once.
    pub(super) fn coils(&self) -> Vec<(usize, &'a str)> {
        let named = self.kinds.iter().filter_map(|kind| match kind {
            RegionName::Turn(coil, _, name) => Some((*coil, name.as_str())),
            _ => None,
        });
        named.collect::<BTreeMap<_, _>>().into_iter().collect()
    }

    /// All edges once: their nodes from end to end and the elements beside them.
    pub(super) fn edges(&self) -> Vec<SheetEdge> {
        let mut edges: BTreeMap<[u32; 2], SheetEdge> = BTreeMap::new();
        for element in 0..self.element_count() {
            let nodes = self.nodes(element);
            for edge in 0..3 {
                let along: Vec<u32> = edge_nodes(self.order, edge).into_iter().map(|i| nodes[i]).collect();
                let (a, b) = (along[0], along[along.len() - 1]);
                edges.entry([a.min(b), a.max(b)]).and_modify(|e| e.second = Some(element)).or_insert(SheetEdge {
                    nodes: along,
                    first: element,
                    second: None,
                });
            }
        }
        edges.into_values().collect()
    }

    /// Edges where one kind ends and another, or nothing, begins; without the axis and the mirror planes.
    pub(super) fn outlines(&self, of: impl Fn(&RegionName) -> bool) -> Vec<SheetEdge> {
        let mut edges = self.edges();
        edges.retain(|edge| {
            let first = self.kinds[edge.first];
            let second = edge.second.map(|e| self.kinds[e]);
            let shown = of(first) || second.is_some_and(&of);
            shown && second != Some(first) && !(second.is_none() && self.on_symmetry(edge))
        });
        edges
    }

    fn on_symmetry(&self, edge: &SheetEdge) -> bool {
        let slack = 1e-9 * self.points.iter().fold(0.0f64, |m, p| m.max(p[0].abs()));
        let all = |test: &dyn Fn([f64; 2]) -> bool| edge.nodes.iter().all(|&n| test(self.points[n as usize]));
        let on_plane = |z_m: f64| all(&|p| (p[1] - z_m).abs() <= slack);
        let planes = match self.mirrors {
            Mirrors::None => false,
            Mirrors::One { z_m } => on_plane(z_m),
            Mirrors::Two { lower_m, upper_m } => on_plane(lower_m) || on_plane(upper_m),
        };
        planes || all(&|p| p[0].abs() <= slack)
    }

    /// Points along a curved edge, end points included.
    pub(super) fn trace(&self, edge: &SheetEdge) -> Vec<[f64; 2]> {
        let places: Vec<[f64; 2]> = edge.nodes.iter().map(|&n| self.points[n as usize]).collect();
        let (a, b) = (places[0], places[places.len() - 1]);
        let chord = (b[0] - a[0]).hypot(b[1] - a[1]);
        let bulge = places.iter().map(|p| ((p[0] - a[0]) * (b[1] - a[1]) - (p[1] - a[1]) * (b[0] - a[0])).abs());
        if bulge.fold(0.0, f64::max) <= 1e-4 * chord * chord {
            return vec![a, b];
        }
        (0..=TRACE_PIECES).map(|i| along_edge(&places, i as f64 / TRACE_PIECES as f64)).collect()
    }

    /// The first element of `among` that holds a point, and where in it; `slack` is how far barycentric coordinates may
    /// be below zero.
    pub(super) fn find(&self, among: &[usize], point: [f64; 2], slack: f64) -> Option<(usize, [f64; 3])> {
        among.iter().find_map(|&element| {
            let places = self.places(element);
            let extent = Extent::of(places.iter().copied())?;
            let size = (extent.r[1] - extent.r[0]).max(extent.z[1] - extent.z[0]);
            // A curved edge may leave the box of its nodes a little.
            if !extent.holds(point, 0.1 * size) {
                return None;
            }
            invert(self.order, &places, point, slack).map(|l| (element, l))
        })
    }
}

/// An edge between elements.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(super) struct SheetEdge {
    /// From one end to the other.
    pub(super) nodes: Vec<u32>,
    pub(super) first: usize,
    pub(super) second: Option<usize>,
}

/// Lagrange interpolation through equidistant nodes, `t` from 0 to 1.
fn along_edge(nodes: &[[f64; 2]], t: f64) -> [f64; 2] {
    let n = nodes.len() - 1;
    let mut p = [0.0; 2];
    for (i, node) in nodes.iter().enumerate() {
        let factor = |j: usize| (t * n as f64 - j as f64) / (i as f64 - j as f64);
        let weight: f64 = (0..=n).filter(|&j| j != i).map(factor).product();
        p[0] += weight * node[0];
        p[1] += weight * node[1];
    }
    p
}

/// Barycentric coordinates of a point of the plane in a curved element, by Newton's method; `None` outside it.
fn invert(order: usize, places: &[[f64; 2]], point: [f64; 2], slack: f64) -> Option<[f64; 3]> {
    const STEP: f64 = 1e-6;
    let at = |u: f64, v: f64| shape::place(order, [1.0 - u - v, u, v], places);
    let (mut u, mut v) = (1.0 / 3.0, 1.0 / 3.0);
    for _ in 0..20 {
        let p = at(u, v);
        let (pu, pv) = (at(u + STEP, v), at(u, v + STEP));
        let column = |q: [f64; 2]| [(q[0] - p[0]) / STEP, (q[1] - p[1]) / STEP];
        let (a, b) = (column(pu), column(pv));
        let determinant = a[0] * b[1] - a[1] * b[0];
        let miss = [point[0] - p[0], point[1] - p[1]];
        let du = (miss[0] * b[1] - miss[1] * b[0]) / determinant;
        let dv = (a[0] * miss[1] - a[1] * miss[0]) / determinant;
        if !(du.is_finite() && dv.is_finite()) || du.abs().max(dv.abs()) > 1e3 {
            return None;
        }
        (u, v) = (u + du, v + dv);
        if du.abs().max(dv.abs()) < 1e-10 {
            let l = [1.0 - u - v, u, v];
            return l.iter().all(|&x| x >= -slack).then_some(l);
        }
    }
    None
}

#[cfg(test)]
pub(super) mod tests {
    #![allow(clippy::unwrap_used, reason = "tests")]

    use std::f64::consts::FRAC_1_SQRT_2;

    use solver::model::Mirrors;
    use solver::results::RegionName;

    use super::{Sheet, invert};
    use crate::export::pictures::PictureError;

    /// One quarter of a disc of radius 1 m as a single curved element of order 2.
    pub(in crate::export::pictures) const QUARTER: [[f64; 2]; 6] =
        [[0.0, 0.0], [1.0, 0.0], [0.0, 1.0], [0.5, 0.0], [FRAC_1_SQRT_2, FRAC_1_SQRT_2], [0.0, 0.5]];
    pub(in crate::export::pictures) const QUARTER_NODES: [u32; 6] = [0, 1, 2, 3, 4, 5];

    /// A sheet of hand-made elements.
    pub(in crate::export::pictures) fn sheet<'a>(
        order: usize,
        points: &'a [[f64; 2]],
        elements: &'a [u32],
        kinds: &'a [&'a RegionName],
        mirrors: Mirrors,
    ) -> Result<Sheet<'a>, PictureError> {
        Sheet::from_parts(order, points, elements, kinds, mirrors)
    }

    #[test]
    fn points_are_found_in_a_curved_element_and_not_beyond_its_arc() {
        let inside = |p: [f64; 2]| invert(2, &QUARTER, p, 1e-7);
        assert!(inside([0.69, 0.69]).is_some(), "between chord and arc");
        assert!(inside([0.73, 0.73]).is_none(), "beyond the arc");
        assert!(inside([-0.01, 0.5]).is_none(), "across the axis");
        let l = inside([0.25, 0.25]).unwrap();
        let back = crate::export::pictures::shape::place(2, l, &QUARTER);
        assert!((back[0] - 0.25).abs() < 1e-12 && (back[1] - 0.25).abs() < 1e-12);
    }

    #[test]
    fn outlines_leave_out_the_axis_and_the_mirror_plane() {
        let part = RegionName::Part(0, "quarter".into());
        let kinds = [&part];
        let one = sheet(2, &QUARTER, &QUARTER_NODES, &kinds, Mirrors::One { z_m: 0.0 }).unwrap();
        let outlines = one.outlines(|_| true);
        assert_eq!(outlines.len(), 1, "only the arc");
        let arc = one.trace(&outlines[0]);
        assert!(arc.len() > 2, "an arc is drawn with more than its chord");
        for p in arc {
            assert!((p[0].hypot(p[1]) - 1.0).abs() < 0.03);
        }
        let whole = sheet(2, &QUARTER, &QUARTER_NODES, &kinds, Mirrors::None).unwrap();
        assert_eq!(whole.outlines(|_| true).len(), 2, "the arc and the flat face");
    }

    #[test]
    fn arrays_that_do_not_fit_are_refused() {
        let part = RegionName::Part(0, "quarter".into());
        let kinds = [&part];
        let order = sheet(4, &QUARTER, &QUARTER_NODES, &kinds, Mirrors::None);
        assert!(matches!(order, Err(PictureError::Order { order: 4 })));
        let short = sheet(2, &QUARTER, &QUARTER_NODES[..5], &kinds, Mirrors::None);
        assert!(matches!(short, Err(PictureError::Length { expected: 6, found: 5, .. })));
        let outside = sheet(2, &QUARTER[..4], &QUARTER_NODES, &kinds, Mirrors::None);
        assert!(matches!(outside, Err(PictureError::Length { expected: 5, found: 4, .. })));
    }
}
