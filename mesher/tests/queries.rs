//! Questions to a mesh: loops round regions, edges and vertices of curves, lengths, and the figures of the quality report, against
//! closed forms and against counts made from the triangles alone.
#![allow(clippy::unwrap_used, clippy::expect_used, reason = "tests")]

mod common;

use common::{AIR, BILLET, BORE, coil, drawing, mesh, rectangle, region};
use mesher::{Mesh, NO_TRIANGLE, Outline, RegionId, Shape, Side};
use std::f64::consts::PI;

fn heater() -> Mesh {
    mesh(&coil(Outline::half_disc(0.0, 0.5).unwrap(), 2, Some(0.0005)))
}

fn mesh_of_billet() -> Mesh {
    mesh(&coil(Outline::half_disc(0.0, 0.5).unwrap(), 0, Some(0.0005)))
}

fn length(mesh: &Mesh, sides: &[Side]) -> f64 {
    sides.iter().map(|s| mesh.edge_length(mesh.triangle_edges()[s.triangle][s.edge] as usize)).sum()
}

/// Area inside the polygon of a loop, positive if it turns counter-clockwise.
fn turning(mesh: &Mesh, sides: &[Side]) -> f64 {
    let cross = |s: &Side| {
        let [a, b] = mesh.ends(*s).map(|v| mesh.vertices()[v as usize]);
        0.5 * (a[0] * b[1] - a[1] * b[0])
    };
    sides.iter().map(cross).sum()
}

#[test]
fn loops_are_closed_have_the_region_on_their_left_and_the_length_of_the_outlines() {
    let mesh = heater();
    let turn = RegionId(10);
    let loops = mesh.boundary_loops(turn);
    assert_eq!(loops.len(), 2, "a turn and its bore");
    for sides in &loops {
        for (k, side) in sides.iter().enumerate() {
            assert_eq!(mesh.ends(*side)[1], mesh.ends(sides[(k + 1) % sides.len()])[0]);
            assert_eq!(mesh.regions()[side.triangle], turn);
            let across = mesh.neighbour(side.triangle, side.edge).map(|t| mesh.regions()[t]);
            assert_ne!(across, Some(turn));
        }
    }
    let mut lengths: Vec<(f64, bool)> = loops.iter().map(|l| (length(&mesh, l), turning(&mesh, l) > 0.0)).collect();
    lengths.sort_by(|a, b| a.0.total_cmp(&b.0));
    let outer = 2.0 * (0.012 + 0.014) - (8.0 - 2.0 * PI) * 0.0015;
    assert!((lengths[0].0 - 0.036).abs() < 1e-12 && !lengths[0].1, "the bore, clockwise: {lengths:?}");
    assert!((lengths[1].0 - outer).abs() < 1e-12 && lengths[1].1, "the outside, counter-clockwise: {lengths:?}");
}

#[test]
fn a_region_in_two_parts_that_meet_in_a_point_has_two_loops() {
    let one = region(RegionId(1), rectangle([0.1, 0.1], [0.2, 0.2]), 0.03, 0.03, None);
    let other = region(RegionId(1), rectangle([0.2, 0.2], [0.3, 0.3]), 0.03, 0.03, None);
    let mesh = mesh(&drawing(rectangle([0.0, 0.0], [0.4, 0.4]), 0.1, vec![one, other]));
    let loops = mesh.boundary_loops(RegionId(1));
    assert_eq!(loops.len(), 2);
    assert!(loops.iter().all(|l| (length(&mesh, l) - 0.4).abs() < 1e-12));
    assert!(mesh.boundary_loops(RegionId(9)).is_empty());
}

#[test]
fn edges_between_regions_are_those_whose_triangles_say_so() {
    let mesh = heater();
    for (a, b) in [(BILLET, AIR), (AIR, BILLET), (RegionId(10), BORE), (BILLET, BORE)] {
        let wanted: Vec<usize> = (0..mesh.edges().len())
            .filter(|&e| {
                let [s, t] = mesh.edges()[e].triangles;
                t != NO_TRIANGLE && {
                    let pair = [mesh.regions()[s as usize], mesh.regions()[t as usize]];
                    pair.contains(&a) && pair.contains(&b)
                }
            })
            .collect();
        assert_eq!(mesh.edges_between(a, b).collect::<Vec<_>>(), wanted);
        assert_eq!(wanted.is_empty(), (a, b) == (BILLET, BORE));
    }
    assert_eq!(mesh.edges_between(AIR, AIR).count(), 0);
    assert!(mesh.triangles_of(BILLET).all(|t| mesh.regions()[t] == BILLET));
    assert_eq!(mesh.triangles_of(BILLET).count(), mesh.regions().iter().filter(|&&r| r == BILLET).count());
}

#[test]
fn vertices_on_a_curve_follow_it_from_end_to_end() {
    let mesh = heater();
    for (id, curve) in (0..).map(mesher::CurveId).zip(mesh.curves()) {
        let chain = mesh.vertices_on(id);
        let edges = mesh.edges_of(id).count();
        if edges == 0 {
            assert!(chain.is_empty());
            continue;
        }
        assert_eq!(chain.len(), edges + 1, "an open curve has one vertex more than edges");
        let joined =
            |pair: &[u32]| mesh.edges_of(id).any(|e| mesh.edges()[e].vertices.iter().all(|v| pair.contains(v)));
        assert!(chain.windows(2).all(joined));
        if let Shape::Arc { centre, radius } = curve.shape {
            let off = |&v: &u32| {
                let p = mesh.vertices()[v as usize];
                ((p[0] - centre[0]).hypot(p[1] - centre[1]) - radius).abs()
            };
            assert!(chain.iter().all(|v| off(v) < 1e-12));
        }
    }
}

#[test]
fn the_quality_report_counts_every_triangle_once() {
    let mesh = heater();
    let whole = mesh.quality();
    let strips = mesh.strip_triangles().iter().filter(|&&s| s).count();
    assert_eq!(whole.strip_triangles, strips);
    assert_eq!(whole.other_triangles + strips, mesh.triangles().len());
    assert_eq!(whole.least_angle_counts.iter().sum::<usize>(), whole.other_triangles);
    assert!((whole.share_below_30 + whole.share_30_to_40 - whole.share_below_40).abs() < 1e-12);
    let below_40: usize = whole.least_angle_counts[..8].iter().sum();
    assert!((below_40 as f64 / whole.other_triangles as f64 - whole.share_below_40).abs() < 1e-12);

    let regions = mesh.quality_by_region();
    let ids: Vec<RegionId> = regions.iter().map(|r| r.0).collect();
    assert_eq!(ids, [AIR, BILLET, BORE, RegionId(10), RegionId(11)]);
    assert_eq!(regions.iter().map(|r| r.1.other_triangles).sum::<usize>(), whole.other_triangles);
    assert_eq!(regions.iter().map(|r| r.1.strip_triangles).sum::<usize>(), strips);
    let least = |f: fn(&mesher::Quality) -> f64| regions.iter().map(|r| f(&r.1)).fold(f64::INFINITY, f64::min);
    assert_eq!(least(|q| q.shortest_edge_m), whole.shortest_edge_m);
    assert_eq!(regions.iter().map(|r| r.1.longest_edge_m).fold(0.0, f64::max), whole.longest_edge_m);
}

#[test]
fn the_edges_of_the_quality_report_are_those_of_the_mesh() {
    let mesh = heater();
    let lengths: Vec<f64> = mesh
        .edges()
        .iter()
        .map(|e| {
            let [a, b] = e.vertices.map(|v| mesh.vertices()[v as usize]);
            (a[0] - b[0]).hypot(a[1] - b[1])
        })
        .collect();
    let quality = mesh.quality();
    let (low, high) =
        (lengths.iter().copied().fold(f64::INFINITY, f64::min), lengths.iter().copied().fold(0.0, f64::max));
    assert!((quality.shortest_edge_m / low - 1.0).abs() < 1e-12 && (quality.longest_edge_m / high - 1.0).abs() < 1e-12);
    // A bare billet: the corner cells of its strip are as wide as the first layer is thick, a third of the skin depth of 0.5 mm;
    // free triangles outside that corner may have edges a little shorter.
    let shortest = mesh_of_billet().quality().shortest_edge_m * 3.0 / 0.0005;
    assert!((0.9..1.0 + 1e-9).contains(&shortest), "{shortest}");
}

#[test]
fn a_region_pierced_by_a_hole_shows_what_is_painted_under_it() {
    let under = region(RegionId(1), rectangle([0.1, 0.1], [0.3, 0.3]), 0.03, 0.03, None);
    let hole = Outline::circle([0.2, 0.2], 0.03).unwrap();
    let pierced = rectangle([0.15, 0.15], [0.25, 0.25]).with_holes(&[hole]).unwrap();
    let over = region(RegionId(2), pierced, 0.03, 0.03, None);
    let mesh = mesh(&drawing(rectangle([0.0, 0.0], [0.4, 0.4]), 0.1, vec![under, over]));
    let disc = PI * 0.03 * 0.03;
    common::assert_area(&mesh, RegionId(2), 0.01 - disc);
    common::assert_area(&mesh, RegionId(1), 0.04 - 0.01 + disc);
    assert_eq!(mesh.boundary_loops(RegionId(2)).len(), 2);
    // The hole's pieces follow the four of the rectangle.
    let round: f64 = [4, 5].iter().flat_map(|&p| mesh.edges_of_piece(1, p)).map(|e| mesh.edge_length(e)).sum();
    assert!((round - 2.0 * PI * 0.03).abs() < 1e-12, "{round}");
}
