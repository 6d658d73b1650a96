//! What every mesh keeps: sizes, angles, shared nodes, location, repeatability; and how requests are refused.
#![allow(clippy::unwrap_used, clippy::expect_used, reason = "tests")]

mod common;

use common::{coil, mesh, region};
use mesher::{Drawing, Layers, Limits, LineSize, MeshError, NO_TRIANGLE, Outline, triangulate};

fn half_disc() -> Outline {
    Outline::half_disc(0.0, 0.5).unwrap()
}

#[test]
fn the_angles_away_from_strips_are_good() {
    let mesh = mesh(&coil(half_disc(), 12, None));
    let q = mesh.quality();
    assert!(q.min_angle_deg > 30.0, "{q:?}");
    assert!(q.mean_min_angle_deg > 48.0, "{q:?}");
    assert!(q.share_below_40 < 0.03, "{q:?}");
}

#[test]
fn sizes_are_kept() {
    let section = coil(half_disc(), 12, None);
    let mesh = mesh(&section);
    for (t, id) in mesh.regions().iter().enumerate() {
        let corners = mesh.corners(t);
        let longest = (0..3)
            .map(|e| (corners[e], corners[(e + 1) % 3]))
            .map(|(a, b)| (a[0] - b[0]).hypot(a[1] - b[1]))
            .fold(0.0, f64::max);
        let cap = section.regions.iter().find(|r| r.id == *id).map_or(section.domain_size, |r| r.interior_size);
        assert!(longest < 1.7 * cap, "triangle {t} of region {}: {longest} m, cap {cap} m", id.0);
    }
}

#[test]
fn the_same_drawing_gives_the_same_mesh() {
    let section = coil(half_disc(), 4, Some(0.0005));
    let (a, b) = (mesh(&section), mesh(&section));
    assert_eq!(a.vertices(), b.vertices());
    assert_eq!(a.triangles(), b.triangles());
    assert_eq!(a.edges(), b.edges());
}

#[test]
fn every_centroid_is_located_in_its_own_triangle() {
    let mesh = mesh(&coil(half_disc(), 4, Some(0.0005)));
    for t in 0..mesh.triangles().len() {
        let corners = mesh.corners(t);
        let centroid = [0, 1].map(|k| corners.iter().map(|c| c[k]).sum::<f64>() / 3.0);
        let (found, shares) = mesh.locate(centroid).expect("inside");
        assert_eq!(found, t);
        assert!(shares.iter().all(|s| (s - 1.0 / 3.0).abs() < 1e-6), "{shares:?}");
    }
    for (v, &p) in mesh.vertices().iter().enumerate() {
        let (found, _) = mesh.locate(p).unwrap_or_else(|| panic!("vertex {v} at {p:?}"));
        assert!(mesh.triangles()[found].contains(&(v as u32)));
    }
    assert!(mesh.locate([-0.1, 0.0]).is_none());
}

#[test]
fn neighbours_share_the_nodes_of_their_edge_in_opposite_order() {
    let mesh = mesh(&coil(half_disc(), 2, Some(0.0005)));
    for order in [2, 3] {
        let nodes = mesh.nodes(order);
        let per = (order + 1) * (order + 2) / 2;
        assert_eq!(nodes.elements.len(), per * mesh.triangles().len());
        let along = |t: u32, edge: u32| {
            let local = mesh.triangle_edges()[t as usize].iter().position(|&e| e == edge).unwrap();
            let from = per * t as usize;
            nodes.elements[from + 3 + local * (order - 1)..from + 3 + (local + 1) * (order - 1)].to_vec()
        };
        for (e, edge) in mesh.edges().iter().enumerate().filter(|(_, e)| e.triangles[1] != NO_TRIANGLE) {
            let [one, mut two] = edge.triangles.map(|t| along(t, e as u32));
            two.reverse();
            assert_eq!(one, two);
        }
    }
}

#[test]
fn requests_to_stop_and_tight_budgets_are_answered() {
    let section = coil(half_disc(), 12, Some(0.0005));
    assert_eq!(triangulate(&section, &Limits::default(), &|| true).unwrap_err(), MeshError::Stopped);
    let tight = Limits { max_triangles: 2000 };
    let refusal = triangulate(&section, &tight, &|| false).unwrap_err();
    assert!(matches!(refusal, MeshError::TooManyTriangles { limit: 2000, .. }), "{refusal}");
}

#[test]
fn sizes_out_of_range_are_refused_by_name() {
    let with = |change: &dyn Fn(&mut Drawing)| {
        let mut section = coil(half_disc(), 1, Some(0.0005));
        change(&mut section);
        triangulate(&section, &Limits::default(), &|| false).unwrap_err().to_string()
    };
    assert!(with(&|d| d.domain_size = f64::NAN).contains("domain's element size"));
    assert!(with(&|d| d.gradation = 0.0).contains("gradation"));
    assert!(with(&|d| d.regions[0].surface_size = -1.0).contains("surface element size"));
    assert!(with(&|d| d.regions[0].interior_size = 0.0).contains("interior element size"));
    assert!(
        with(&|d| d.regions[0].layers = Some(Layers { first: 0.0, growth: 1.5, count: 5 })).contains("first layer")
    );
    assert!(with(&|d| d.regions[0].layers = Some(Layers { first: 1e-4, growth: 9.0, count: 5 })).contains("growth"));
    assert!(
        with(&|d| d.regions[0].layers = Some(Layers { first: 1e-4, growth: 1.5, count: 0 }))
            .contains("number of layers")
    );
}

#[test]
fn vertices_face_each_other_across_a_narrow_gap() {
    for (gap, layers) in [(1e-4, None), (1e-5, None), (1e-6, None), (1e-5, common::strip(0.0005))] {
        let inner = region(common::BILLET, common::rectangle([0.0, -0.05], [0.02, 0.05]), 0.006, 0.004, layers);
        let outer = common::rectangle([0.02 + gap, -0.06], [0.03, 0.06]);
        let section =
            common::drawing(half_disc(), 0.05, vec![inner, region(common::LINER, outer, 0.006, 0.004, layers)]);
        let mesh = mesh(&section);
        let across = |p: [f64; 2]| p[0] > 0.02 - 1e-9 && p[0] < 0.02 + gap + 1e-9 && p[1].abs() < 0.0499;
        let cells: Vec<usize> =
            (0..mesh.triangles().len()).filter(|&t| mesh.corners(t).into_iter().all(across)).collect();
        let largest = cells.iter().map(|&t| largest_angle_deg(mesh.corners(t))).fold(0.0, f64::max);
        assert!(largest < 95.0, "gap {gap} m: {largest} degrees");
        assert!((40..2500).contains(&cells.len()), "gap {gap} m: {} triangles in it", cells.len());
    }
}

fn largest_angle_deg(corners: [[f64; 2]; 3]) -> f64 {
    let at = |i: usize| {
        let [p, q, r] = [0, 1, 2].map(|k| corners[(i + k) % 3]);
        let (u, v) = ([q[0] - p[0], q[1] - p[1]], [r[0] - p[0], r[1] - p[1]]);
        (u[0] * v[1] - u[1] * v[0]).atan2(u[0] * v[0] + u[1] * v[1]).to_degrees()
    };
    at(0).max(at(1)).max(at(2))
}

#[test]
fn a_piece_of_an_outline_can_have_a_size_of_its_own() {
    let mut section = coil(half_disc(), 0, None);
    section.line_sizes = vec![LineSize { region: 0, piece: 2, size: 0.0005 }];
    let mesh = mesh(&section);
    let lengths = |piece: usize| -> Vec<f64> {
        let own = |e: &&mesher::Edge| e.curve.is_some_and(|c| mesh.curve(c).on_regions.contains(&(0, piece)));
        let length = |e: &mesher::Edge| {
            let [a, b] = e.vertices.map(|v| mesh.vertices()[v as usize]);
            (a[0] - b[0]).hypot(a[1] - b[1])
        };
        mesh.edges().iter().filter(own).map(length).collect()
    };
    let (fine, coarse) = (lengths(2), lengths(0));
    assert!(fine.len() >= 55 && fine.iter().all(|&l| l < 0.00075), "{fine:?}");
    assert!(coarse.iter().all(|&l| l > 0.002), "{coarse:?}");
    section.line_sizes[0].piece = 4;
    let refusal = triangulate(&section, &Limits::default(), &|| false).unwrap_err().to_string();
    assert!(refusal.contains("piece"), "{refusal}");
}

#[test]
fn a_round_part_with_hundreds_of_edges_on_its_circle_is_refined_inside() {
    // Before the first point inside, all its triangles have the same circle.
    let disc = Outline::circle([0.1, 0.0], 0.05).unwrap();
    let section = common::drawing(half_disc(), 0.05, vec![region(common::BILLET, disc, 0.004, 0.0005, None)]);
    let mesh = mesh(&section);
    let q = mesh.quality();
    let inside = mesh.regions().iter().filter(|id| **id == common::BILLET).count();
    assert!(inside > 2000 && q.min_angle_deg > 30.0, "{inside} triangles, {q:?}");
}
