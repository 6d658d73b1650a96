//! Random sections: whatever is drawn either becomes a mesh that passes its check and fills the domain, or is refused in words.
#![allow(clippy::unwrap_used, clippy::expect_used, reason = "tests")]

mod common;

use common::strategy::section;
use common::{AIR, drawing, region};
use mesher::{Layers, Limits, MeshError, Outline, Piece, Point, RegionId, triangulate};
use proptest::prelude::*;
use proptest::test_runner::RngSeed;

const LIMITS: Limits = Limits { max_triangles: 150_000 };

fn unit(a: f64, b: f64, c: f64) -> Point {
    [a + 0.1 * c, b - 0.1 * c]
}

proptest! {
    #![proptest_config(ProptestConfig {
        cases: 300,
        failure_persistence: None,
        rng_seed: RngSeed::Fixed(1), ..ProptestConfig::default() })]

    #[test]
    fn a_random_section_becomes_a_mesh_that_fills_the_domain(drawing in section()) {
        let mesh = triangulate(&drawing, &LIMITS, &|| false);
        prop_assert!(mesh.is_ok(), "{}", mesh.unwrap_err());
        let mesh = mesh.unwrap();
        let mut ids: Vec<RegionId> = mesh.regions().to_vec();
        ids.sort();
        ids.dedup();
        let covered: f64 = ids.iter().map(|&id| mesh.region_area(id)).sum();
        let wanted = drawing.domain.area();
        prop_assert!((covered - wanted).abs() < 1e-9 * wanted, "covered {covered}, wanted {wanted}");
        prop_assert!(ids.len() <= drawing.regions.len() + 1);
    }

    #[test]
    fn junk_outlines_are_refused_in_words_or_meshed_but_never_panic(
        start in prop::array::uniform2(-1.0..1.0f64),
        pieces in prop::collection::vec((-1.0..1.0f64, -1.0..1.0f64, 0..4u8, -1.0..1.0f64), 0..7),
        close in any::<bool>(),
    ) {
        let mut list = Vec::new();
        let mut from = start;
        for (r, z, kind, c) in pieces {
            let to = if kind == 3 { from } else { [r, z] };
            let middle = [0.5 * (from[0] + to[0]), 0.5 * (from[1] + to[1])];
            let normal = [from[1] - to[1], to[0] - from[0]];
            list.push(match kind {
                0 => Piece::Arc { to, centre: unit(r, z, c), counter_clockwise: c > 0.0 },
                1 => Piece::Arc { to, centre: [middle[0] + c * normal[0], middle[1] + c * normal[1]], counter_clockwise: c > 0.3 },
                _ => Piece::Line { to },
            });
            from = to;
        }
        if close && from != start {
            list.push(Piece::Line { to: start });
        }
        if let Ok(outline) = Outline::new(start, list) {
            prop_assert!(outline.area() > 0.0);
            let domain = Outline::half_disc(0.0, 3.0).unwrap();
            let drawing = drawing(domain, 0.5, vec![region(RegionId(1), outline, 0.2, 0.2, Some(Layers { first: 0.02, growth: 1.5, count: 4 }))]);
            match triangulate(&drawing, &LIMITS, &|| false) {
                Ok(mesh) => prop_assert!(mesh.regions().contains(&AIR)),
                Err(MeshError::BadNumber { .. } | MeshError::Stopped) => prop_assert!(false, "wrong refusal"),
                Err(refusal) => prop_assert!(!refusal.to_string().is_empty()),
            }
        }
    }
}
