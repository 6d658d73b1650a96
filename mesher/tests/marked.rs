//! Refinement of marked triangles, over many rounds: the mesh stays conforming, nested, as good as promised and true to the drawing. Areas
//! and lengths are checked against closed forms of plane geometry; the bounds on angles against the theorem of Rosenberg and Stenger
//! (1975); dimensions are common practice, no source.
#![allow(clippy::unwrap_used, clippy::expect_used, reason = "tests")]

mod common;

use common::strategy::section;
use common::{
    BILLET, BORE, assert_area, assert_nodes_on_arcs, assert_outline_present, coil, drawing, mesh, rectangle, region,
    strip,
};
use mesher::{Drawing, Layers, Limits, Mesh, MeshDefect, MeshError, Outline, Point, RegionId, triangulate};
use proptest::prelude::*;
use proptest::test_runner::RngSeed;
use std::f64::consts::PI;

fn half_disc() -> Outline {
    Outline::half_disc(0.0, 0.5).unwrap()
}

fn refined(mesh: &Mesh, marked: &[bool]) -> Mesh {
    mesh.refined(marked, &Limits::default()).expect("refined")
}

/// Marks at random, the same in every run. Source: G. Marsaglia, "Xorshift RNGs", 2003.
struct Dice(u64);

impl Dice {
    fn throw(&mut self) -> f64 {
        for shift in [13, -7, 17] {
            self.0 ^= if shift > 0 { self.0 << shift } else { self.0 >> -shift };
        }
        (self.0 >> 11) as f64 / (1u64 << 53) as f64
    }

    fn marks(&mut self, mesh: &Mesh, share: f64) -> Vec<bool> {
        mesh.triangles().iter().map(|_| self.throw() < share).collect()
    }
}

/// The triangles with a corner at a point.
fn at_corner(mesh: &Mesh, corner: Point) -> Vec<bool> {
    mesh.triangles().iter().map(|t| t.iter().any(|&v| mesh.vertices()[v as usize] == corner)).collect()
}

fn centroid(mesh: &Mesh, triangle: usize) -> Point {
    let corners = mesh.corners(triangle);
    [0, 1].map(|k| corners.iter().map(|c| c[k]).sum::<f64>() / 3.0)
}

fn straight_area([a, b, c]: [Point; 3]) -> f64 {
    0.5 * ((b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0]))
}

/// Longest side over thickness.
fn slenderness(corners: [Point; 3]) -> f64 {
    let square = |e: usize| {
        let (a, b) = (corners[e], corners[(e + 1) % 3]);
        (a[0] - b[0]).powi(2) + (a[1] - b[1]).powi(2)
    };
    square(0).max(square(1)).max(square(2)) / (2.0 * straight_area(corners))
}

fn most_slender(mesh: &Mesh) -> f64 {
    (0..mesh.triangles().len()).map(|t| slenderness(mesh.corners(t))).fold(0.0, f64::max)
}

/// Rectangles only, with strips if `delta` is given.
fn straight_section(delta: Option<f64>) -> Drawing {
    let layers = delta.and_then(strip);
    let regions = vec![
        region(BILLET, rectangle([0.0, -0.1], [0.03, 0.1]), 0.01, 0.004, layers),
        region(BORE, rectangle([0.04, -0.05], [0.05, 0.05]), 0.004, 0.003, None),
    ];
    drawing(rectangle([0.0, -0.3], [0.3, 0.3]), 0.05, regions)
}

fn sphere(delta: f64) -> Mesh {
    let outline = Outline::circle([0.0, 0.0], 0.05).unwrap();
    mesh(&drawing(half_disc(), 0.05, vec![region(BILLET, outline, 0.01, 0.004, strip(delta))]))
}

#[test]
fn with_nothing_marked_the_mesh_is_the_same() {
    let before = mesh(&coil(half_disc(), 4, Some(0.0005)));
    let once = refined(&before, &Dice(1).marks(&before, 0.1));
    for mesh in [before, once] {
        let after = refined(&mesh, &vec![false; mesh.triangles().len()]);
        assert_eq!(mesh.vertices(), after.vertices());
        assert_eq!(mesh.triangles(), after.triangles());
        assert_eq!(mesh.triangle_edges(), after.triangle_edges());
        assert_eq!(mesh.edges(), after.edges());
        assert_eq!(mesh.regions(), after.regions());
        assert_eq!(mesh.strip_triangles(), after.strip_triangles());
        assert_eq!(mesh.curves(), after.curves());
        assert_eq!(mesh.notes(), after.notes());
        assert_eq!(mesh.nodes(3), after.nodes(3));
    }
}

#[test]
fn with_everything_marked_there_are_four_times_as_many_triangles() {
    for mut mesh in [mesh(&coil(half_disc(), 4, Some(0.0005))), mesh(&straight_section(None)), sphere(0.0001)] {
        for _ in 0..2 {
            let next = refined(&mesh, &vec![true; mesh.triangles().len()]);
            assert_eq!(next.triangles().len(), 4 * mesh.triangles().len());
            assert_eq!(next.vertices().len(), mesh.vertices().len() + mesh.edges().len());
            assert_eq!(next.vertices()[..mesh.vertices().len()], *mesh.vertices());
            for (t, four) in next.strip_triangles().chunks(4).enumerate() {
                assert_eq!(four, [mesh.strip_triangles()[t]; 4]);
                assert_eq!(next.regions()[4 * t..4 * t + 4], [mesh.regions()[t]; 4]);
            }
            mesh = next;
        }
    }
}

#[test]
fn everything_marked_leaves_straight_triangles_their_shapes() {
    let before = mesh(&straight_section(Some(0.0005)));
    let after = refined(&before, &vec![true; before.triangles().len()]);
    let (old, new) = (before.quality(), after.quality());
    assert!((old.min_angle_deg - new.min_angle_deg).abs() < 1e-6, "{old:?}, {new:?}");
    assert!((old.mean_min_angle_deg - new.mean_min_angle_deg).abs() < 1e-6, "{old:?}, {new:?}");
    let ratio = most_slender(&after) / most_slender(&before);
    assert!((ratio - 1.0).abs() < 1e-6, "slenderness changed by {ratio}");
}

#[test]
fn every_marked_triangle_is_cut_into_four_and_few_others_with_it() {
    for before in [mesh(&coil(half_disc(), 2, Some(0.0005))), mesh(&straight_section(None)), sphere(0.0001)] {
        let n = before.triangles().len();
        let mut most = 0;
        let mut sum = 0;
        for t in (0..n).step_by(11) {
            let mut marked = vec![false; n];
            marked[t] = true;
            let after = refined(&before, &marked);
            let more = after.triangles().len() - n;
            let halved = before.triangle_edges()[t].iter().all(|&e| {
                let [a, b] = before.edges()[e as usize].vertices;
                !after.edges().iter().any(|e| e.vertices == [a, b])
            });
            assert!(halved, "an edge of triangle {t} is still whole");
            most = most.max(more);
            sum += more;
        }
        let mean = sum as f64 / n.div_ceil(11) as f64;
        assert!(most <= 130 && mean < 30.0, "one triangle adds {most} at most, {mean:.1} on average, of {n}");
    }
}

#[test]
fn children_tile_their_parents() {
    let mut mesh = mesh(&straight_section(Some(0.001)));
    let mut dice = Dice(7);
    for _ in 0..4 {
        let next = refined(&mesh, &dice.marks(&mesh, 0.1));
        let mut covered = vec![0.0; mesh.triangles().len()];
        let mut last = 0;
        for t in 0..next.triangles().len() {
            let (parent, _) = mesh.locate(centroid(&next, t)).expect("inside");
            assert!(parent >= last, "child {t} stands out of order");
            last = parent;
            let corners = mesh.corners(parent);
            let whole = straight_area(corners);
            for p in next.corners(t) {
                let inside =
                    (0..3).all(|e| straight_area([corners[e], corners[(e + 1) % 3], p]) >= -1e-12 * whole.max(1e-9));
                assert!(inside, "child {t} leaves its parent {parent} at {p:?}");
            }
            assert_eq!(next.regions()[t], mesh.regions()[parent]);
            assert_eq!(next.strip_triangles()[t], mesh.strip_triangles()[parent]);
            covered[parent] += straight_area(next.corners(t));
        }
        for (t, area) in covered.iter().enumerate() {
            let whole = straight_area(mesh.corners(t));
            assert!((area - whole).abs() < 1e-12 * whole.max(1e-6), "parent {t}: {area:e} of {whole:e} m2 covered");
        }
        mesh = next;
    }
}

#[test]
fn angles_stay_above_half_the_least_after_many_rounds() {
    let first = mesh(&straight_section(None));
    let least = first.quality().min_angle_deg;
    let (mut spread, mut corner) = (first.clone(), first.clone());
    let mut dice = Dice(3);
    let mut growth = Vec::new();
    for round in 0..25 {
        if round < 10 {
            spread = refined(&spread, &dice.marks(&spread, 0.03));
        }
        let marked = at_corner(&corner, [0.03, 0.1]);
        let next = refined(&corner, &marked);
        growth.push((next.triangles().len() - corner.triangles().len()) as f64);
        corner = next;
    }
    for mesh in [spread, corner] {
        mesh.check().expect("checked");
        let quality = mesh.quality();
        assert!(quality.min_angle_deg > 0.5 * least - 1e-6, "first {least}, then {quality:?}");
    }
    let latest = growth[15..].iter().sum::<f64>() / 10.0;
    assert!(latest < 40.0, "{latest} triangles a round at a corner: {growth:?}");
}

#[test]
fn areas_and_lines_of_a_coil_are_kept_over_many_rounds() {
    for delta in [None, Some(0.0005)] {
        let section = coil(half_disc(), 3, delta);
        let mut mesh = mesh(&section);
        let (mut dice, least) = (Dice(11), mesh.quality().min_angle_deg);
        for _ in 0..6 {
            mesh = refined(&mesh, &dice.marks(&mesh, 0.05));
            mesh.check().expect("checked");
        }
        let tube = 0.012 * 0.014 - (4.0 - PI) * 0.0015 * 0.0015 - 0.008 * 0.010;
        assert_area(&mesh, BILLET, 0.03 * 0.2);
        assert_area(&mesh, BORE, 3.0 * 0.008 * 0.010);
        for turn in 0..3 {
            assert_area(&mesh, RegionId(10 + turn), tube);
        }
        for (i, r) in section.regions.iter().enumerate() {
            assert_outline_present(&mesh, &section, i, r.outline.perimeter());
        }
        assert!(assert_nodes_on_arcs(&mesh, 1.0) > 300);
        let quality = mesh.quality();
        assert!(quality.min_angle_deg > 0.45 * least, "first {least}, then {quality:?}");
        assert!(quality.min_scaled_jacobian > 0.5, "{quality:?}");
    }
}

#[test]
fn the_layers_of_a_strip_stay_layers() {
    let mut mesh = mesh(&straight_section(Some(0.0005)));
    let first = most_slender(&mesh);
    let depths = |mesh: &Mesh| {
        let middle = |t: &[u32; 3]| t.iter().all(|&v| mesh.vertices()[v as usize][1].abs() < 0.03);
        let in_strip = |t: &usize| mesh.strip_triangles()[*t] && middle(&mesh.triangles()[*t]);
        let of = |t: usize| mesh.triangles()[t].map(|v| 0.03 - mesh.vertices()[v as usize][0]);
        (0..mesh.triangles().len()).filter(in_strip).map(of).collect::<Vec<[f64; 3]>>()
    };
    let mut rings: Vec<f64> = depths(&mesh).concat();
    rings.sort_by(f64::total_cmp);
    rings.dedup_by(|a, b| (*a - *b).abs() < 1e-12);
    let strip_area = |mesh: &Mesh| -> f64 {
        (0..mesh.triangles().len())
            .filter(|&t| mesh.strip_triangles()[t])
            .map(|t| straight_area(mesh.corners(t)))
            .sum::<f64>()
    };
    let area = strip_area(&mesh);
    for round in 0..4 {
        // A patch of the strip whose ends cut through it.
        let marked: Vec<bool> = (0..mesh.triangles().len())
            .map(|t| mesh.strip_triangles()[t] && (centroid(&mesh, t)[1] - 0.004).abs() < 0.01)
            .collect();
        mesh = refined(&mesh, &marked);
        for own in depths(&mesh) {
            let inside = rings.windows(2).any(|w| own.iter().all(|d| *d > w[0] - 1e-12 && *d < w[1] + 1e-12));
            assert!(inside, "round {round}: a triangle with depths {own:?} m is in no layer of {rings:?}");
            for d in own {
                let layer = rings.partition_point(|r| *r < d - 1e-12).max(1) - 1;
                let part = (d - rings[layer]) / (rings[layer + 1] - rings[layer]) * 16.0;
                assert!(
                    (part - part.round()).abs() < 1e-6,
                    "round {round}: depth {d} m is {part} sixteenths of a layer"
                );
            }
        }
        let error = (strip_area(&mesh) - area).abs() / area;
        assert!(error < 1e-12, "round {round}: strip area off by {error:e}");
        let now = most_slender(&mesh);
        assert!(now <= 2.0 * first * (1.0 + 1e-6), "round {round}: slenderness {now}, at first {first}");
    }
}

#[test]
fn thin_layers_on_a_sphere_neither_fold_nor_leave_their_rings() {
    for delta in [0.001, 0.0001, 0.00001] {
        let mut mesh = sphere(delta);
        let first = most_slender(&mesh);
        let radii = |mesh: &Mesh| {
            let strip = (0..mesh.triangles().len()).filter(|&t| mesh.strip_triangles()[t]);
            let mut radii: Vec<f64> = strip
                .flat_map(|t| mesh.triangles()[t])
                .map(|v| mesh.vertices()[v as usize])
                .map(|p| p[0].hypot(p[1]))
                .collect();
            radii.sort_by(f64::total_cmp);
            radii.dedup_by(|a, b| (*a - *b).abs() < 1e-12);
            radii
        };
        let rings = radii(&mesh);
        for round in 0..3 {
            let marked: Vec<bool> = (0..mesh.triangles().len())
                .map(|t| mesh.strip_triangles()[t] && centroid(&mesh, t)[1] > 0.02)
                .collect();
            mesh = refined(&mesh, &marked);
            assert_area(&mesh, BILLET, 0.5 * PI * 0.05 * 0.05);
            assert_nodes_on_arcs(&mesh, 1.0);
            let quality = mesh.quality();
            assert!(quality.min_scaled_jacobian > 0.5, "delta {delta}, round {round}: {quality:?}");
            let now = most_slender(&mesh);
            // Bisection doubles it, and an arc takes at most a tenth of the area of a child.
            assert!(now < 2.0 / 0.9 * first, "delta {delta}, round {round}: slenderness {now}, at first {first}");
        }
        for radius in radii(&mesh) {
            let layer = (rings.partition_point(|r| *r < radius - 1e-12)).max(1) - 1;
            let part = (radius - rings[layer]) / (rings[layer + 1] - rings[layer]) * 8.0;
            assert!(
                (part - part.round()).abs() < 1e-4,
                "delta {delta}: radius {radius} m is {part} eighths of a layer"
            );
        }
    }
}

#[test]
fn steps_at_the_end_of_a_strip_on_an_arc_do_not_fold() {
    // A disc cut by the axis off its centre; its strip goes down in steps there, flatter than the arc below them stands off its chord.
    let disc = Outline::circle([0.01, 0.07], 0.02).unwrap();
    let layers = Layers { first: 0.0005, growth: 1.5, count: 5 };
    let first = mesh(&drawing(half_disc(), 0.05, vec![region(BILLET, disc, 0.023, 0.0115, Some(layers))]));
    let area = 0.02 * 0.02 * (2.0 * PI / 3.0 + 0.25 * 3f64.sqrt());
    for seed in 1..12 {
        let (mut mesh, mut dice) = (first.clone(), Dice(seed));
        for _ in 0..3 {
            mesh = refined(&mesh, &dice.marks(&mesh, 0.08));
        }
        assert_area(&mesh, BILLET, area);
    }
}

#[test]
fn the_same_marks_give_the_same_mesh() {
    let first = mesh(&coil(half_disc(), 2, Some(0.0005)));
    let run = || {
        let (mut mesh, mut dice) = (first.clone(), Dice(5));
        for _ in 0..4 {
            mesh = refined(&mesh, &dice.marks(&mesh, 0.1));
        }
        mesh
    };
    let (a, b) = (run(), run());
    assert_eq!(a.vertices(), b.vertices());
    assert_eq!(a.triangles(), b.triangles());
    assert_eq!(a.edges(), b.edges());
    assert_eq!(a.nodes(3), b.nodes(3));
}

#[test]
fn points_are_located_in_the_refined_mesh_not_in_the_old_one() {
    let before = mesh(&coil(half_disc(), 2, Some(0.0005)));
    assert!(before.locate([0.01, 0.0]).is_some());
    let after = refined(&before, &Dice(9).marks(&before, 0.2));
    assert!(after.triangles().len() > before.triangles().len());
    for t in 0..after.triangles().len() {
        let (found, shares) = after.locate(centroid(&after, t)).expect("inside");
        assert_eq!(found, t);
        assert!(shares.iter().all(|s| (s - 1.0 / 3.0).abs() < 1e-6), "{shares:?}");
    }
    let straight = after.strip_triangles().iter().filter(|s| !**s).count();
    assert_eq!(after.quality().triangles, straight);
}

#[test]
fn marks_of_the_wrong_number_and_tight_budgets_are_refused() {
    let mesh = mesh(&straight_section(None));
    let n = mesh.triangles().len();
    let refusal = mesh.refined(&[true], &Limits::default()).unwrap_err();
    assert_eq!(refusal, MeshError::WrongMarks { marks: 1, triangles: n });
    let limits = |max_triangles| Limits { max_triangles };
    let refusal = mesh.refined(&vec![true; n], &limits(4 * n - 1)).unwrap_err();
    assert_eq!(refusal, MeshError::RefinedTooFar { needed: 4 * n, limit: 4 * n - 1 });
    assert_eq!(mesh.refined(&vec![true; n], &limits(4 * n)).unwrap().triangles().len(), 4 * n);
}

#[test]
fn a_corner_refined_down_to_rounding_is_refused_in_words() {
    let mut mesh = mesh(&straight_section(None));
    for round in 0..80 {
        match mesh.refined(&at_corner(&mesh, [0.03, 0.1]), &Limits::default()) {
            Ok(next) => mesh = next,
            Err(refusal) => {
                assert!(round > 35, "refused in round {round} already: {refusal}");
                assert!(matches!(refusal, MeshError::Unrefinable(MeshDefect::Flat { .. })), "{refusal}");
                return;
            }
        }
    }
    panic!("eighty halvings of 4 mm are less than rounding can hold");
}

proptest! {
    #![proptest_config(ProptestConfig {
        cases: 80,
        failure_persistence: None,
        rng_seed: RngSeed::Fixed(1), ..ProptestConfig::default() })]

    #[test]
    fn any_marks_on_a_random_section_leave_a_mesh_that_fills_the_domain(
        drawing in section(), seed in 1u64.., share in prop_oneof![Just(0.02), Just(0.2), Just(1.0)],
    ) {
        let limits = Limits { max_triangles: 40_000 };
        let first = triangulate(&drawing, &limits, &|| false);
        prop_assume!(first.is_ok());
        let (mut mesh, mut dice) = (first.unwrap(), Dice(seed));
        let mut ids = mesh.regions().to_vec();
        ids.sort();
        ids.dedup();
        let areas: Vec<f64> = ids.iter().map(|&id| mesh.region_area(id)).collect();
        for _ in 0..5 {
            match mesh.refined(&dice.marks(&mesh, share), &limits) {
                Ok(next) => mesh = next,
                Err(MeshError::RefinedTooFar { .. }) => break,
                Err(refusal) => prop_assert!(false, "{refusal}"),
            }
            prop_assert_eq!(mesh.check(), Ok(()));
        }
        let whole: f64 = areas.iter().sum();
        for (id, area) in ids.iter().zip(areas) {
            let error = (mesh.region_area(*id) - area).abs();
            prop_assert!(error < 1e-12 * whole, "area of region {} changed by {error:e} m2", id.0);
        }
        prop_assert!(mesh.regions().iter().all(|id| ids.contains(id)));
    }
}
