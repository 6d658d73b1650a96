//! Sections shared by the tests: an induction coil around a billet and the like. Convention: metres; dimensions are common practice.
#![allow(
    dead_code,
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::unnecessary_wraps,
    reason = "tests; each file uses some of it, and a region takes an optional strip"
)]

pub(crate) mod features;
pub(crate) mod generator;
pub(crate) mod laws;
pub(crate) mod random;
pub(crate) mod shrink;
pub(crate) mod strategy;

use mesher::{Drawing, Layers, Limits, Mesh, Outline, Point, Region, RegionId, Shape};

pub(crate) const AIR: RegionId = RegionId(0);
pub(crate) const BILLET: RegionId = RegionId(1);
pub(crate) const LINER: RegionId = RegionId(2);
pub(crate) const BORE: RegionId = RegionId(3);

pub(crate) fn strip(delta: f64) -> Option<Layers> {
    Some(Layers { first: delta / 3.0, growth: 1.5, count: 5 })
}

pub(crate) fn region(
    id: RegionId,
    outline: Outline,
    interior_size: f64,
    surface_size: f64,
    layers: Option<Layers>,
) -> Region {
    Region { id, outline, interior_size, surface_size, layers }
}

pub(crate) fn drawing(domain: Outline, domain_size: f64, regions: Vec<Region>) -> Drawing {
    Drawing {
        domain,
        domain_region: AIR,
        domain_size,
        regions,
        gradation: 0.4,
        boundary_size: None,
        line_sizes: Vec::new(),
    }
}

pub(crate) fn rectangle(lo: Point, hi: Point) -> Outline {
    Outline::rectangle(lo, hi).unwrap()
}

pub(crate) fn mesh(drawing: &Drawing) -> Mesh {
    mesher::triangulate(drawing, &Limits::default(), &|| false).expect("mesh")
}

/// Billet 60 mm x 200 mm in a coil of hollow turns, each 12 mm high, 12 mm wide, 2 mm wall.
pub(crate) fn coil(domain: Outline, turns: usize, delta: Option<f64>) -> Drawing {
    let layers = delta.and_then(strip);
    let mut regions = vec![region(BILLET, rectangle([0.0, -0.1], [0.03, 0.1]), 0.01, 0.004, layers)];
    for i in 0..turns {
        let z = -0.096 + 0.016 * i as f64;
        let id = RegionId(10 + i as u32);
        let tube = Outline::rounded_rectangle([0.040, z], [0.052, z + 0.014], 0.0015).unwrap();
        regions.push(region(id, tube, 0.002, 0.0015, layers));
        regions.push(region(BORE, rectangle([0.042, z + 0.002], [0.050, z + 0.012]), 0.003, 0.002, None));
    }
    drawing(domain, 0.05, regions)
}

/// The area of a region is the one wanted, to 1e-12 of it.
pub(crate) fn assert_area(mesh: &Mesh, id: RegionId, wanted: f64) {
    let found = mesh.region_area(id);
    let error = (found - wanted).abs() / wanted;
    assert!(error < 1e-12, "region {}: area {found:e}, wanted {wanted:e}, error {error:.2e}", id.0);
}

/// Every node of every edge that lies on an arc is on its circle to 1e-12 of the domain's size.
pub(crate) fn assert_nodes_on_arcs(mesh: &Mesh, extent: f64) -> usize {
    let mut arcs = 0;
    for order in [1, 2, 3] {
        let nodes = mesh.nodes(order);
        let per_edge = order - 1;
        for (e, edge) in mesh.edges().iter().enumerate() {
            let Some(Shape::Arc { centre, radius }) = edge.curve.map(|c| mesh.curve(c).shape) else {
                continue;
            };
            arcs += 1;
            let inner = (0..per_edge).map(|k| nodes.vertex_count + e * per_edge + k);
            for i in edge.vertices.iter().map(|&v| v as usize).chain(inner) {
                let p = nodes.points[i];
                let off = ((p[0] - centre[0]).hypot(p[1] - centre[1]) - radius).abs();
                assert!(off < 1e-12 * extent, "node {i} is {off:e} m off its circle of radius {radius} m");
            }
        }
    }
    arcs
}

/// The edges along a region's outline add up to its length.
pub(crate) fn assert_outline_present(mesh: &Mesh, drawing: &Drawing, index: usize, wanted: f64) {
    let mut length = 0.0;
    for edge in mesh.edges() {
        let Some(curve) = edge.curve.map(|c| mesh.curve(c)) else {
            continue;
        };
        if curve.on_regions.iter().any(|on| on.0 == index) {
            let [a, b] = edge.vertices.map(|v| mesh.vertices()[v as usize]);
            let chord = (a[0] - b[0]).hypot(a[1] - b[1]);
            length += match curve.shape {
                Shape::Line => chord,
                Shape::Arc { radius, .. } => 2.0 * radius * (0.5 * chord / radius).asin(),
            };
        }
    }
    let error = (length - wanted).abs() / wanted;
    assert!(
        error < 1e-12,
        "edges of region {index} of {} are {length} m long, wanted {wanted} m",
        drawing.regions.len()
    );
}
