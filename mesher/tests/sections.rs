//! Sections of induction heaters, from a bare billet to coils of hollow turns: areas, strips, curves and conformity. Areas are checked
//! against closed forms of plane geometry (rectangles, discs, rounded rectangles); dimensions are common practice, no source.
#![allow(clippy::unwrap_used, clippy::expect_used, reason = "tests")]

mod common;

use common::{
    AIR, BILLET, BORE, LINER, assert_area, assert_nodes_on_arcs, assert_outline_present, coil, drawing, mesh,
    rectangle, region, strip,
};
use mesher::{Mesh, NO_TRIANGLE, NoteReason, Outline, RegionId, Shape};
use std::f64::consts::PI;

fn half_disc() -> Outline {
    Outline::half_disc(0.0, 0.5).unwrap()
}

fn strip_triangles_of(mesh: &Mesh, id: RegionId) -> usize {
    (0..mesh.triangles().len()).filter(|&t| mesh.strip_triangles()[t] && mesh.regions()[t] == id).count()
}

#[test]
fn a_coil_of_hollow_turns_keeps_every_area_and_every_line() {
    for delta in [None, Some(0.0005)] {
        let section = coil(half_disc(), 12, delta);
        let mesh = mesh(&section);
        let fillet = 0.0015;
        let tube = 0.012 * 0.014 - (4.0 - PI) * fillet * fillet - 0.008 * 0.010;
        assert_area(&mesh, BILLET, 0.03 * 0.2);
        assert_area(&mesh, BORE, 12.0 * 0.008 * 0.010);
        for turn in 0..12 {
            assert_area(&mesh, RegionId(10 + turn), tube);
        }
        assert_area(&mesh, AIR, 0.5 * PI * 0.25 - 0.006 - 12.0 * (tube + 0.00008));
        for (i, r) in section.regions.iter().enumerate() {
            assert_outline_present(&mesh, &section, i, r.outline.perimeter());
        }
        assert!(assert_nodes_on_arcs(&mesh, 1.0) > 12 * 12);
    }
}

#[test]
fn strips_lie_on_the_billet_and_on_both_surfaces_of_every_turn() {
    let mesh = mesh(&coil(half_disc(), 12, Some(0.0005)));
    assert!(strip_triangles_of(&mesh, BILLET) > 500);
    for turn in 0..12 {
        let id = RegionId(10 + turn);
        // Every surface edge of the wall, outside and in the bore, is the base of a strip triangle.
        let (mut bare, mut covered) = (0, 0);
        for edge in mesh.edges().iter().filter(|e| e.triangles[1] != NO_TRIANGLE) {
            let sides = edge.triangles.map(|t| (mesh.regions()[t as usize], mesh.strip_triangles()[t as usize]));
            let own: Vec<bool> = sides.iter().filter(|s| s.0 == id).map(|s| s.1).collect();
            if own.len() == 1 {
                *if own[0] { &mut covered } else { &mut bare } += 1;
            }
        }
        assert!(covered > 60 && bare == 0, "turn {turn}: {covered} surface edges with a strip, {bare} without");
    }
    assert!(mesh.notes().iter().all(|n| n.region != BILLET), "{:?}", mesh.notes());
    let cut = |n: &mesher::MeshNote| matches!(n.reason, NoteReason::LayersCut { placed: 2..=4, wanted: 5 });
    assert!(!mesh.notes().is_empty() && mesh.notes().iter().all(cut), "{:?}", mesh.notes());
}

#[test]
fn the_layers_of_a_billet_have_the_thicknesses_asked_for() {
    let delta = 0.0005;
    let mesh = mesh(&coil(half_disc(), 0, Some(delta)));
    // Radii of strip vertices at mid height, from the surface inwards.
    let mut depths: Vec<f64> = Vec::new();
    for (t, triangle) in mesh.triangles().iter().enumerate() {
        for &v in triangle {
            let [r, z] = mesh.vertices()[v as usize];
            if mesh.strip_triangles()[t] && z.abs() < 0.02 {
                depths.push(0.03 - r);
            }
        }
    }
    depths.sort_by(f64::total_cmp);
    depths.dedup_by(|a, b| (*a - *b).abs() < 1e-9);
    let (mut wanted, mut thickness) = (0.0, delta / 3.0);
    for (k, depth) in depths[..5].iter().enumerate() {
        assert!((depth - wanted).abs() < 1e-12, "layer {k} at {depth} m, wanted {wanted} m");
        wanted += thickness;
        thickness *= 1.5;
    }
    for k in 5..depths.len() - 1 {
        let growth = (depths[k + 1] - depths[k]) / (depths[k] - depths[k - 1]);
        assert!(growth < 1.6 + 1e-6, "inner layer {k} grows by {growth}");
    }
}

#[test]
fn a_mirror_plane_clips_a_coil_and_its_strips() {
    let section = coil(Outline::quarter_disc(0.0, 0.5).unwrap(), 12, Some(0.0005));
    let mesh = mesh(&section);
    assert_area(&mesh, BILLET, 0.03 * 0.1);
    assert!(mesh.vertices().iter().all(|p| p[0] >= 0.0 && p[1] >= 0.0));
    // The strip ends on the plane: its layers are edges of the plane too.
    let on_plane = |v: u32| mesh.vertices()[v as usize][1] == 0.0;
    let ends = mesh.edges().iter().filter(|e| {
        e.triangles[1] == NO_TRIANGLE
            && e.vertices.iter().all(|&v| on_plane(v))
            && mesh.strip_triangles()[e.triangles[0] as usize]
    });
    assert!(ends.count() >= 5);
    let split = self::mesh(&coil(Outline::quarter_disc(0.005, 0.5).unwrap(), 12, Some(0.0005)));
    assert_area(&split, BILLET, 0.03 * 0.095);
    assert!(assert_nodes_on_arcs(&split, 1.0) > 50);
}

fn mesh_of_sphere(domain: Outline, delta: f64) -> Mesh {
    let sphere = Outline::circle([0.0, 0.0], 0.05).unwrap();
    mesh(&drawing(domain, 0.05, vec![region(BILLET, sphere, 0.01, 0.004, strip(delta))]))
}

#[test]
fn a_sphere_on_the_axis_has_concentric_layers_all_round() {
    for delta in [0.01, 0.001, 0.0001, 0.00001] {
        let mesh = mesh_of_sphere(half_disc(), delta);
        assert_area(&mesh, BILLET, 0.5 * PI * 0.05 * 0.05);
        assert!(assert_nodes_on_arcs(&mesh, 1.0) > 100);
        let radii: std::collections::BTreeSet<u64> = mesh
            .edges()
            .iter()
            .filter_map(|e| match mesh.curve(e.curve?).shape {
                Shape::Arc { radius, .. } if radius <= 0.05 => Some(radius.to_bits()),
                _ => None,
            })
            .collect();
        let least = if delta > 0.005 { 4 } else { 6 };
        assert!(radii.len() >= least, "delta {delta}: {} radii", radii.len());
        let quality = mesh.quality();
        assert!(quality.min_scaled_jacobian > 0.5, "delta {delta}: {quality:?}");
        assert!(mesh.notes().is_empty() || delta > 0.005, "delta {delta}: {:?}", mesh.notes());
    }
    let quarter = mesh_of_sphere(Outline::quarter_disc(0.0, 0.5).unwrap(), 0.001);
    assert_area(&quarter, BILLET, 0.25 * PI * 0.05 * 0.05);
}

#[test]
fn a_pancake_of_forty_turns_over_a_disc_is_meshed() {
    let mut regions = vec![region(BILLET, rectangle([0.0, -0.01], [0.2, -0.002]), 0.004, 0.004, strip(0.0005))];
    for i in 0..40 {
        let r = 0.02 + 0.0045 * f64::from(i);
        let turn = Outline::rounded_rectangle([r, 0.0], [r + 0.004, 0.008], 0.0005).unwrap();
        regions.push(region(RegionId(10 + i as u32), turn, 0.001, 0.001, strip(0.0003)));
    }
    let mesh = mesh(&drawing(half_disc(), 0.05, regions));
    for i in 0..40 {
        assert_area(&mesh, RegionId(10 + i), 0.004 * 0.008 - (4.0 - PI) * 0.0005f64.powi(2));
    }
    assert_area(&mesh, BILLET, 0.2 * 0.008);
    assert!(mesh.triangles().len() < 60_000, "{}", mesh.triangles().len());
}

#[test]
fn regions_that_touch_share_their_edges_and_their_columns() {
    let section = drawing(
        half_disc(),
        0.05,
        vec![
            region(BILLET, rectangle([0.0, -0.02], [0.08, 0.0]), 0.004, 0.004, strip(0.001)),
            region(LINER, rectangle([0.03, 0.0], [0.05, 0.015]), 0.003, 0.003, strip(0.0005)),
            region(BORE, rectangle([0.08, -0.04], [0.09, 0.04]), 0.004, 0.004, None),
        ],
    );
    let mesh = mesh(&section);
    assert_area(&mesh, BILLET, 0.08 * 0.02);
    assert_area(&mesh, LINER, 0.02 * 0.015);
    assert_area(&mesh, BORE, 0.01 * 0.08);
    let shared: f64 = mesh
        .edges()
        .iter()
        .filter(|e| e.curve.is_some_and(|c| mesh.curve(c).on_regions.len() == 2))
        .map(|e| {
            let [a, b] = e.vertices.map(|v| mesh.vertices()[v as usize]);
            (a[0] - b[0]).hypot(a[1] - b[1])
        })
        .sum();
    assert!((shared - 0.04).abs() < 1e-12, "shared length {shared}");
    for id in [BILLET, LINER] {
        assert!(strip_triangles_of(&mesh, id) > 100);
    }
}

#[test]
fn gaps_down_to_a_ten_thousandth_of_a_wall_end_in_a_mesh() {
    for gap in [1e-3, 1e-4, 1e-5, 1e-6] {
        let section = drawing(
            half_disc(),
            0.05,
            vec![
                region(BILLET, rectangle([0.04, -0.1], [0.05, 0.1]), 0.004, 0.004, strip(0.001)),
                region(LINER, rectangle([0.05 + gap, -0.12], [0.06, 0.12]), 0.004, 0.004, None),
            ],
        );
        let mesh = mesh(&section);
        assert_area(&mesh, BILLET, 0.01 * 0.2);
        assert_area(&mesh, LINER, (0.06 - (0.05 + gap)) * 0.24);
        assert!(mesh.triangles().len() < 30_000, "gap {gap}: {} triangles", mesh.triangles().len());
    }
}

#[test]
fn a_cell_between_two_mirror_planes_has_its_layers_at_any_skin_depth() {
    for ratio in [2.0, 10.0, 50.0, 200.0, 1000.0] {
        let (a, h) = (0.03, 0.02);
        let billet = region(BILLET, rectangle([0.0, 0.0], [a, h]), 0.005, 0.005, strip(a / ratio));
        let mesh = mesh(&drawing(rectangle([0.0, 0.0], [0.1, h]), 0.01, vec![billet]));
        assert_area(&mesh, BILLET, a * h);
        assert_area(&mesh, AIR, (0.1 - a) * h);
        assert!(mesh.triangles().len() < 1000);
        assert_eq!(mesh.notes().is_empty(), ratio > 5.0, "R/delta {ratio}: {:?}", mesh.notes());
        // The first layer is there on both planes.
        let first = a - a / ratio / 3.0;
        for z in [0.0, h] {
            let found = mesh.vertices().iter().any(|p| (p[0] - first).abs() < 1e-12 && p[1] == z);
            assert!(found, "R/delta {ratio}: no node at r = {first}, z = {z}");
        }
    }
}

#[test]
fn reflex_corners_cones_and_off_centre_cuts_keep_their_areas() {
    let l_shape =
        Outline::polygon(&[[0.0, -0.1], [0.06, -0.1], [0.06, 0.0], [0.03, 0.0], [0.03, 0.1], [0.0, 0.1]]).unwrap();
    let cone = Outline::polygon(&[[0.0, -0.1], [0.06, -0.1], [0.0, 0.1]]).unwrap();
    let hexagon: Vec<[f64; 2]> =
        (0..6).map(|i| f64::from(i) * PI / 3.0).map(|a| [0.1 + 0.03 * a.cos(), 0.01 + 0.03 * a.sin()]).collect();
    let shapes = [
        (l_shape, 0.06 * 0.1 + 0.03 * 0.1),
        (cone, 0.06 * 0.1),
        (Outline::polygon(&hexagon).unwrap(), 1.5 * 3f64.sqrt() * 0.03 * 0.03),
        (Outline::circle([0.05, 0.02], 0.03).unwrap(), PI * 0.03 * 0.03),
    ];
    for (outline, area) in shapes {
        let mesh = mesh(&drawing(half_disc(), 0.05, vec![region(BILLET, outline, 0.004, 0.004, strip(0.001))]));
        assert_area(&mesh, BILLET, area);
        assert!(strip_triangles_of(&mesh, BILLET) > 100);
    }
    // A circle that touches the axis: two cusps of air.
    let circle = Outline::circle([0.03, 0.0], 0.03).unwrap();
    let touching = mesh(&drawing(half_disc(), 0.05, vec![region(BILLET, circle, 0.004, 0.004, strip(0.001))]));
    assert!(touching.vertices().iter().all(|p| p[0] >= 0.0));
    let error = (touching.region_area(BILLET) - PI * 0.0009).abs() / (PI * 0.0009);
    assert!(error < 1e-6, "area error {error:.1e} where arcs were straightened");
    // A circle cut by the plane z = 0 at half its radius: a segment of 2/3 of a turn.
    let circle = Outline::circle([0.1, 0.015], 0.03).unwrap();
    let domain = Outline::quarter_disc(0.0, 0.5).unwrap();
    let mesh = mesh(&drawing(domain, 0.05, vec![region(BILLET, circle, 0.004, 0.004, strip(0.001))]));
    let turn = 4.0 * PI / 3.0;
    assert_area(&mesh, BILLET, 0.5 * 0.0009 * (turn - turn.sin()));
}

#[test]
fn later_regions_are_painted_over_earlier_ones_and_outside_is_dropped() {
    let section = drawing(
        half_disc(),
        0.05,
        vec![
            region(BILLET, rectangle([-0.1, -0.1], [0.1, 0.1]), 0.02, 0.01, None),
            region(LINER, rectangle([0.05, 0.05], [0.15, 0.15]), 0.02, 0.01, None),
            region(BORE, rectangle([0.9, 0.0], [1.0, 0.1]), 0.02, 0.01, None),
        ],
    );
    let mesh = mesh(&section);
    assert_area(&mesh, BILLET, 0.1 * 0.2 - 0.05 * 0.05);
    assert_area(&mesh, LINER, 0.01);
    assert_eq!(mesh.region_area(BORE), 0.0);
}
