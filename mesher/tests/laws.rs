//! Laws on sections drawn for them: areas, outlines walked end to end, curved maps, and strips measured along the normal on every kind of
//! surface. Convention: metres. Reference values are closed forms of plane geometry; dimensions are a choice of our own.
#![allow(clippy::unwrap_used, clippy::expect_used, reason = "tests")]

mod common;

use common::laws::{distance, extent, layers_below, least_angle_away, obeys, walked};
use common::{AIR, BILLET, BORE, LINER, assert_area, coil, drawing, mesh, rectangle, region};
use mesher::{Drawing, Layers, Mesh, NoteReason, Outline, Piece, Point, RegionId};
use std::f64::consts::PI;

fn half_disc() -> Outline {
    Outline::half_disc(0.0, 0.5).unwrap()
}

fn layers(first: f64, growth: f64, count: usize) -> Layers {
    Layers { first, growth, count }
}

/// One region with a strip in the half disc.
fn alone(outline: Outline, layers: Layers) -> Drawing {
    drawing(half_disc(), 0.05, vec![region(BILLET, outline, 0.008, 0.004, Some(layers))])
}

/// A quarter of a ring between 20 and 50 mm about (0.1, 0), with strips of its own.
fn quarter_ring() -> Outline {
    let at = |radius: f64, angle: f64| [0.1 + radius * angle.cos(), radius * angle.sin()];
    let arc = |to, counter_clockwise| Piece::Arc { to, centre: [0.1, 0.0], counter_clockwise };
    let start = at(0.02, 0.0);
    let line = |to| Piece::Line { to };
    Outline::new(
        start,
        vec![line(at(0.05, 0.0)), arc(at(0.05, PI / 2.0), true), line(at(0.02, PI / 2.0)), arc(start, false)],
    )
    .unwrap()
}

fn l_shape() -> Outline {
    Outline::polygon(&[[0.02, -0.1], [0.1, -0.1], [0.1, -0.02], [0.06, -0.02], [0.06, 0.06], [0.02, 0.06]]).unwrap()
}

/// Depths of the strip vertices of a region below a point of its surface, along a direction.
fn depths_below(mesh: &Mesh, id: RegionId, surface: Point, inward: Point) -> Vec<f64> {
    let mut depths: Vec<f64> = Vec::new();
    for (t, triangle) in mesh.triangles().iter().enumerate() {
        if mesh.strip_triangles()[t] && mesh.regions()[t] == id {
            for p in triangle.map(|v| mesh.vertices()[v as usize]) {
                let w = [p[0] - surface[0], p[1] - surface[1]];
                let depth = w[0] * inward[0] + w[1] * inward[1];
                if (w[0] * inward[1] - w[1] * inward[0]).abs() < 1e-12 && depth > -1e-12 {
                    depths.push(depth);
                }
            }
        }
    }
    depths.sort_by(f64::total_cmp);
    depths.dedup_by(|a, b| (*a - *b).abs() < 1e-11);
    depths
}

/// Vertices of a mesh on a piece of the outline of region 0 of its drawing.
fn on_piece(mesh: &Mesh, piece: usize) -> Vec<Point> {
    let of = |e: &&mesher::Edge| e.curve.is_some_and(|c| mesh.curve(c).on_regions.contains(&(0, piece)));
    let mut vertices: Vec<u32> = mesh.edges().iter().filter(of).flat_map(|e| e.vertices).collect();
    vertices.sort_unstable();
    vertices.dedup();
    vertices.into_iter().map(|v| mesh.vertices()[v as usize]).collect()
}

/// The columns over a piece, each with the depths of its levels; `inward` gives the normal at a point.
fn columns(mesh: &Mesh, piece: usize, inward: impl Fn(Point) -> Point) -> Vec<Vec<f64>> {
    on_piece(mesh, piece).into_iter().map(|p| depths_below(mesh, BILLET, p, inward(p))).collect()
}

fn assert_levels(column: &[f64], layers: &Layers) {
    let (mut wanted, mut thickness) = (0.0, layers.first);
    for (k, depth) in column.iter().take(layers.count + 1).enumerate() {
        assert!((depth - wanted).abs() < 1e-12, "level {k} is {depth:e} m deep, wanted {wanted:e} m");
        wanted += thickness;
        thickness *= layers.growth;
    }
}

#[test]
fn the_areas_of_straight_and_curved_regions_are_those_of_their_outlines() {
    for strip in [None, Some(layers(0.0004, 1.5, 5))] {
        let shapes = [
            (l_shape(), 0.08 * 0.08 + 0.04 * 0.08),
            (quarter_ring(), 0.25 * PI * (0.05 * 0.05 - 0.02 * 0.02)),
            (Outline::circle([0.1, 0.02], 0.03).unwrap(), PI * 0.0009),
            (Outline::rounded_rectangle([0.05, 0.0], [0.1, 0.03], 0.01).unwrap(), 0.0015 - (4.0 - PI) * 0.0001),
        ];
        for (outline, area) in shapes {
            let section = drawing(half_disc(), 0.05, vec![region(BILLET, outline, 0.008, 0.004, strip)]);
            let mesh = mesh(&section);
            assert_area(&mesh, BILLET, area);
            assert_area(&mesh, AIR, 0.125 * PI - area);
            obeys(&section, &mesh).unwrap();
        }
    }
}

/// Area of a region by quadrature of `1/2 (x dy - y dx)` along the edges that bound it, each the polynomial through its nodes. Three Gauss
/// points are exact up to degree 5 (C. F. Gauss, 1814).
fn area_of_maps(mesh: &Mesh, id: RegionId, order: usize) -> f64 {
    let nodes = mesh.nodes(order);
    let rule = [(0.5 - 0.15f64.sqrt(), 5.0 / 18.0), (0.5, 4.0 / 9.0), (0.5 + 0.15f64.sqrt(), 5.0 / 18.0)];
    let mut area = 0.0;
    for (e, edge) in mesh.edges().iter().enumerate() {
        let own = |t: u32| t != mesher::NO_TRIANGLE && mesh.regions()[t as usize] == id;
        let [s, t] = edge.triangles;
        if own(s) == own(t) {
            continue;
        }
        let inner = (0..order - 1).map(|k| nodes.points[nodes.vertex_count + e * (order - 1) + k]);
        let [a, b] = edge.vertices.map(|v| mesh.vertices()[v as usize]);
        let points: Vec<Point> = [a].into_iter().chain(inner).chain([b]).collect();
        let inside = mesh.corners(if own(s) { s } else { t } as usize);
        let centre = [0, 1].map(|k| inside.iter().map(|p| p[k]).sum::<f64>() / 3.0);
        let left = (b[0] - a[0]) * (centre[1] - a[1]) - (b[1] - a[1]) * (centre[0] - a[0]) > 0.0;
        let along: f64 = rule
            .iter()
            .map(|&(x, weight)| {
                let (p, d) = interpolated(&points, x);
                weight * 0.5 * (p[0] * d[1] - p[1] * d[0])
            })
            .sum();
        area += if left { along } else { -along };
    }
    area
}

/// Lagrange interpolation through evenly spaced points, and its derivative.
fn interpolated(points: &[Point], x: f64) -> (Point, Point) {
    let n = points.len() - 1;
    let at = |i: usize| i as f64 / n as f64;
    let (mut value, mut slope) = ([0.0; 2], [0.0; 2]);
    for (i, p) in points.iter().enumerate() {
        let others: Vec<usize> = (0..=n).filter(|&j| j != i).collect();
        let basis: f64 = others.iter().map(|&j| (x - at(j)) / (at(i) - at(j))).product();
        let by: f64 = others
            .iter()
            .map(|&k| {
                let rest = others.iter().filter(|&&j| j != k).map(|&j| (x - at(j)) / (at(i) - at(j)));
                rest.product::<f64>() / (at(i) - at(k))
            })
            .sum();
        for k in 0..2 {
            value[k] += basis * p[k];
            slope[k] += by * p[k];
        }
    }
    (value, slope)
}

#[test]
fn the_maps_of_higher_order_approach_the_area_of_a_disc_at_their_rates() {
    let exact = PI * 0.0009;
    let errors = |size: f64| {
        let disc = Outline::circle([0.1, 0.02], 0.03).unwrap();
        let mesh = mesh(&drawing(half_disc(), 0.05, vec![region(BILLET, disc, size, size, None)]));
        [1, 2, 3].map(|order| (area_of_maps(&mesh, BILLET, order) - exact).abs() / exact)
    };
    let (coarse, fine) = (errors(0.008), errors(0.002));
    assert!(coarse[1] < 1e-3 * coarse[0] * 10.0 && coarse[2] < coarse[1] * 1.01, "{coarse:?}");
    for (k, least) in [(0, 1.8), (1, 3.7), (2, 3.7)] {
        let rate = (coarse[k] / fine[k]).log(4.0);
        assert!(rate > least, "order {}: rate {rate:.2}, errors {:.1e} and {:.1e}", k + 1, coarse[k], fine[k]);
    }
}

#[test]
fn every_piece_of_an_outline_is_a_chain_of_edges() {
    let turns = coil(half_disc(), 6, Some(0.0005));
    let meshed = mesh(&turns);
    for k in 0..turns.regions.len() {
        walked(&turns, &meshed, k).unwrap();
    }
    for outline in [l_shape(), quarter_ring(), Outline::circle([0.1, 0.0], 0.04).unwrap()] {
        let section = alone(outline, layers(0.0005, 1.5, 4));
        walked(&section, &mesh(&section), 0).unwrap();
    }
}

#[test]
fn layers_below_straight_surfaces_have_the_thicknesses_asked_for() {
    let asked = layers(0.0002, 1.4, 6);
    let section = alone(rectangle([0.05, -0.05], [0.12, 0.05]), asked);
    let mesh = mesh(&section);
    let inward: [Point; 4] = [[0.0, 1.0], [-1.0, 0.0], [0.0, -1.0], [1.0, 0.0]];
    for (piece, n) in inward.into_iter().enumerate() {
        let columns = columns(&mesh, piece, |_| n);
        assert!(columns.iter().filter(|c| c.len() > asked.count).count() >= 8, "side {piece}: {}", columns.len());
        for column in &columns {
            assert_levels(column, &asked);
        }
    }
    assert!(mesh.notes().is_empty(), "{:?}", mesh.notes());
}

#[test]
fn layers_below_curved_surfaces_are_measured_along_the_radius() {
    let asked = layers(0.0003, 1.6, 5);
    let centre = [0.1, 0.02];
    let towards = |p: Point, sign: f64| {
        let d = distance(p, centre);
        [0, 1].map(|k| sign * (centre[k] - p[k]) / d)
    };
    let disc = mesh(&alone(Outline::circle(centre, 0.04).unwrap(), asked));
    for column in (0..2).flat_map(|piece| columns(&disc, piece, |p| towards(p, 1.0))) {
        assert!(column.len() > asked.count);
        assert_levels(&column, &asked);
    }
    // A bore: the surface of the region is on the far side of the circle.
    let bore = region(BORE, Outline::circle(centre, 0.015).unwrap(), 0.004, 0.004, None);
    let block = region(BILLET, rectangle([0.05, -0.04], [0.15, 0.08]), 0.008, 0.004, Some(asked));
    let section = drawing(half_disc(), 0.05, vec![block.clone(), bore.clone()]);
    let mesh = mesh(&section);
    let on_bore = |p: &&Point| (distance(**p, centre) - 0.015).abs() < 1e-12;
    let mut count = 0;
    for &p in mesh.vertices().iter().filter(on_bore) {
        let column = depths_below(&mesh, BILLET, p, towards(p, -1.0));
        assert!(column.len() > asked.count, "{column:?}");
        assert_levels(&column, &asked);
        count += 1;
    }
    assert!(count >= 12, "{count} columns");
    layers_below(&mesh, BILLET, &[&block.outline, &bore.outline], &asked, extent(&section)).unwrap();
}

#[test]
fn a_strip_below_a_fillet_keeps_to_seven_tenths_of_its_radius() {
    for radius in [0.002, 0.005, 0.012] {
        let asked = layers(0.0004, 1.5, 6);
        let outline = Outline::rounded_rectangle([0.05, -0.03], [0.11, 0.03], radius).unwrap();
        let mesh = mesh(&alone(outline, asked));
        let (mut deepest, mut count) = (0.0f64, 0);
        // Piece 1 is the fillet at the largest r and the lowest z.
        let centre = [0.11 - radius, -0.03 + radius];
        for p in on_piece(&mesh, 1) {
            let inward = [0, 1].map(|k| (centre[k] - p[k]) / radius);
            let mut column = depths_below(&mesh, BILLET, p, inward);
            // The ray meets the strips of other sides further in.
            column.retain(|&d| d < radius);
            assert_levels(&column, &asked);
            deepest = deepest.max(column[column.len() - 1]);
            count += 1;
        }
        assert!(count >= 4 && deepest <= 0.7 * radius, "radius {radius}: {count} columns, {deepest} m deep");
        assert!(deepest >= 0.2 * radius, "radius {radius}: {deepest} m deep");
    }
}

#[test]
fn inside_and_outside_corners_keep_the_depths_of_the_levels() {
    for asked in [layers(0.0002, 1.5, 5), layers(0.0008, 1.3, 4)] {
        let section = alone(l_shape(), asked);
        let mesh = mesh(&section);
        // Distance to the outline is depth: below a corner that points in, from the corner itself; on a bisector, from both sides.
        layers_below(&mesh, BILLET, &[&section.regions[0].outline], &asked, extent(&section)).unwrap();
        // The corner that points in has a fan of columns, each with all layers.
        let corner = [0.06, -0.02];
        let around = depths_around(&mesh, corner, asked.first);
        assert!(around >= 3, "{around} columns on the corner");
        // On the bisector of a corner that points out the first level is below both sides.
        let apex = [0.1 - asked.first, -0.1 + asked.first];
        assert!(mesh.vertices().iter().any(|p| distance(*p, apex) < 1e-12), "no vertex at {apex:?}");
        obeys(&section, &mesh).unwrap();
    }
}

/// How many strip vertices are at a distance from a corner inside the region.
fn depths_around(mesh: &Mesh, corner: Point, depth: f64) -> usize {
    let mut found: Vec<u32> = mesh
        .triangles()
        .iter()
        .zip(mesh.strip_triangles())
        .filter(|(_, strip)| **strip)
        .flat_map(|(triangle, _)| *triangle)
        .filter(|&v| (distance(mesh.vertices()[v as usize], corner) - depth).abs() < 1e-12)
        .collect();
    found.sort_unstable();
    found.dedup();
    found.len()
}

#[test]
fn the_strips_of_a_thin_wall_leave_its_middle_free() {
    for (wall, least) in [(0.01, 5), (0.004, 3), (0.002, 2), (0.001, 1)] {
        let asked = layers(0.0002, 1.5, 6);
        let mesh = mesh(&alone(rectangle([0.05, -0.1], [0.05 + wall, 0.1]), asked));
        let faces = [(3, [1.0, 0.0]), (1, [-1.0, 0.0])].map(|(piece, n)| {
            let middle = |c: &Vec<f64>| c.len() > 1;
            let away = on_piece(&mesh, piece).into_iter().filter(|p| p[1].abs() < 0.05);
            away.map(|p| depths_below(&mesh, BILLET, p, n)).filter(middle).collect::<Vec<_>>()
        });
        for columns in &faces {
            let tallest = columns.iter().map(Vec::len).max().unwrap_or(0);
            assert!(tallest > least, "wall {wall}: {tallest} levels");
            for column in columns {
                // A line through the wall meets the strip of the other face too: its own half counts.
                let own: Vec<f64> = column.iter().copied().filter(|&d| d < 0.5 * wall).collect();
                assert_levels(&own, &asked);
                assert!(own[own.len() - 1] <= 0.4 * wall + 1e-12, "wall {wall}: {own:?}");
            }
        }
        let deepest =
            |columns: &[Vec<f64>]| columns.iter().map(|c| c.iter().filter(|&&d| d < 0.5 * wall).count()).max();
        assert_eq!(deepest(&faces[0]), deepest(&faces[1]), "wall {wall}: both faces are alike");
    }
}

#[test]
fn where_no_strip_fits_small_triangles_take_over_and_a_note_says_so() {
    let (wall, first) = (0.001, 0.0005);
    let section = alone(rectangle([0.05, -0.02], [0.05 + wall, 0.02]), layers(first, 1.5, 4));
    let mesh = mesh(&section);
    obeys(&section, &mesh).unwrap();
    let bare = |n: &mesher::MeshNote| n.index == 0 && matches!(n.reason, NoteReason::NoStrip { size } if size == first);
    assert!(mesh.notes().iter().any(bare), "{:?}", mesh.notes());
    for (t, strip) in mesh.strip_triangles().iter().enumerate() {
        assert!(!strip || mesh.corners(t).iter().all(|p| p[1].abs() > 0.01), "only the ends have room for a strip");
    }
    for edge in mesh.edges().iter().filter(|e| e.curve.is_some_and(|c| !mesh.curve(c).on_regions.is_empty())) {
        let [a, b] = edge.vertices.map(|v| mesh.vertices()[v as usize]);
        // Columns of the strips at the ends grow by half from the first one.
        assert!(distance(a, b) <= 1.5 * first * (1.0 + 1e-9), "an edge of {} m, first layer {first} m", distance(a, b));
    }
}

#[test]
fn neighbours_with_different_skin_depths_have_both_their_strips_along_the_common_side() {
    for (one, other) in [(0.001, 0.0002), (0.0004, 0.00004), (0.0003, 0.0003)] {
        let (below, above) = (layers(one, 1.5, 5), layers(other, 1.5, 5));
        let section = drawing(
            half_disc(),
            0.05,
            vec![
                region(BILLET, rectangle([0.03, -0.06], [0.13, 0.0]), 0.008, 0.005, Some(below)),
                region(LINER, rectangle([0.03, 0.0], [0.13, 0.05]), 0.008, 0.005, Some(above)),
            ],
        );
        let mesh = mesh(&section);
        obeys(&section, &mesh).unwrap();
        for (id, first, up) in [(BILLET, one, -1.0), (LINER, other, 1.0)] {
            let column = depths_below(&mesh, id, [0.08, 0.0], [0.0, up]);
            let near =
                mesh.vertices().iter().filter(|p| (p[1] - up * first).abs() < 1e-12 && p[0] > 0.04 && p[0] < 0.12);
            assert!(near.count() >= 10, "region {}: {column:?}", id.0);
        }
        assert!(mesh.notes().is_empty(), "{:?}", mesh.notes());
        assert!(least_angle_away(&section, &mesh).0 > 25.0);
    }
}
