//! Bytes read as outlines and drawings: whatever they say, nothing panics, nothing hangs, and every refusal has words. Convention: a number is
//! taken from a handful of awkward values or from eight raw bytes. The bytes come from `proptest`, with a fixed seed.
#![allow(clippy::unwrap_used, reason = "tests")]

mod common;

use common::region;
use mesher::{Drawing, Layers, Limits, Outline, OutlineError, Piece, Point, RegionId, triangulate};
use proptest::prelude::*;
use proptest::test_runner::RngSeed;
use std::cell::Cell;

const AWKWARD: [f64; 16] = [
    0.0,
    -0.0,
    1.0,
    -1.0,
    0.5,
    0.1,
    0.3,
    1.0 + f64::EPSILON,
    1e-9,
    1e-300,
    f64::MIN_POSITIVE / 8.0,
    1e149,
    -1e149,
    f64::NAN,
    f64::INFINITY,
    f64::MIN,
];

/// Takes numbers and choices off the front of some bytes; zeros when they have run out.
struct Reader<'a>(&'a [u8]);

impl Reader<'_> {
    fn byte(&mut self) -> u8 {
        let (first, rest) = self.0.split_first().unwrap_or((&0, &[]));
        self.0 = rest;
        *first
    }

    fn number(&mut self) -> f64 {
        match self.byte() {
            kind @ 0..=15 => AWKWARD[kind as usize],
            // A coarse grid, on which outlines close and touch.
            kind @ 16..=223 => f64::from(kind % 16) / 8.0 - 0.5,
            224..=247 => f64::from(self.byte()) / 256.0,
            _ => f64::from_bits(u64::from_le_bytes([(); 8].map(|()| self.byte()))),
        }
    }

    fn point(&mut self) -> Point {
        [self.number(), self.number()]
    }

    fn outline(&mut self) -> Result<Outline, OutlineError> {
        let start = self.point();
        let count = self.byte() % 8;
        let mut pieces: Vec<Piece> = (0..count)
            .map(|_| {
                let (kind, to) = (self.byte(), self.point());
                let arc = |centre| Piece::Arc { to, centre, counter_clockwise: kind % 2 == 0 };
                if kind < 90 { arc(self.point()) } else { Piece::Line { to } }
            })
            .collect();
        match self.byte() {
            0..=49 => return Outline::circle(start, self.number()),
            50..=99 => return Outline::rounded_rectangle(start, self.point(), self.number()),
            100..=199 => pieces.push(Piece::Line { to: start }),
            _ => {}
        }
        Outline::new(start, pieces)
    }
}

fn bytes(most: usize) -> impl Strategy<Value = Vec<u8>> {
    prop::collection::vec(any::<u8>(), 0..most)
}

proptest! {
    #![proptest_config(ProptestConfig {
        cases: 20_000,
        failure_persistence: None,
        rng_seed: RngSeed::Fixed(4), ..ProptestConfig::default() })]

    #[test]
    fn an_outline_of_any_bytes_is_sound_or_refused_in_words(bytes in bytes(90)) {
        let mut reader = Reader(&bytes);
        match reader.outline() {
            Ok(outline) => {
                let (p, lo, hi) = (reader.point(), outline.bounds().0, outline.bounds().1);
                prop_assert!(outline.area() > 0.0 && outline.perimeter() > 0.0);
                let extent = (hi[0] - lo[0]).min(hi[1] - lo[1]);
                let centres = outline.pieces().into_iter().filter_map(|piece| match piece {
                    Piece::Arc { centre, .. } => Some(centre),
                    Piece::Line { .. } => None,
                });
                let far = centres.chain([lo, hi]).flatten().fold(0.0f64, |most, x| most.max(x.abs()));
                prop_assert!(!p.iter().all(|x| x.abs() < 1e100) || outline.distance(p) >= 0.0);
                let (again, whole) = (Outline::new(outline.start(), outline.pieces()), outline.overlaps(&outline));
                // Where rounding of the coordinates is no part of the shape, more can be said.
                if extent > 1e-6 * far {
                    prop_assert!(again.is_ok() && whole, "{outline:?}: {again:?}, overlaps itself: {whole}");
                    prop_assert!(!outline.contains([hi[0] + 0.01 * extent, lo[1]]));
                }
                if let Err(refusal) = outline.translated(p) {
                    prop_assert!(refusal.to_string().len() > 20);
                }
            }
            Err(refusal) => prop_assert!(refusal.to_string().len() > 20),
        }
    }
}

proptest! {
    #![proptest_config(ProptestConfig {
        cases: 3_000,
        failure_persistence: None,
        rng_seed: RngSeed::Fixed(5), ..ProptestConfig::default() })]

    #[test]
    fn a_drawing_of_any_bytes_is_meshed_or_refused_in_words(bytes in bytes(160)) {
        let mut reader = Reader(&bytes);
        let (domain_size, gradation) = (reader.number().abs(), 0.4 + 0.1 * reader.number());
        let plain = || Outline::rectangle([0.0, -1.0], [2.0, 2.0]);
        let domain = if reader.byte() < 100 { reader.outline() } else { plain() };
        let Ok(domain) = domain else {
            return Ok(());
        };
        let mut regions = Vec::new();
        for k in 0..=u32::from(reader.byte() % 3) {
            let strip = reader.byte() < 128;
            let layers = Layers { first: reader.number(), growth: 1.0 + reader.number(), count: reader.byte() as usize % 9 };
            let (interior, surface) = (reader.number().abs(), reader.number().abs());
            if let Ok(outline) = reader.outline() {
                regions.push(region(RegionId(k), outline, interior, surface, strip.then_some(layers)));
            }
        }
        let drawing =
            Drawing { domain, domain_region: RegionId(9), domain_size, regions, gradation, boundary_size: None, line_sizes: Vec::new() };
        // A hang shows as questions without end: each stands for hundreds of steps.
        let asked = Cell::new(0);
        let stop = || {
            asked.set(asked.get() + 1);
            asked.get() > 4000
        };
        match triangulate(&drawing, &Limits { max_triangles: 20_000 }, &stop) {
            Ok(mesh) => prop_assert!(mesh.check().is_ok()),
            Err(refusal) => prop_assert!(refusal.to_string().len() > 20),
        }
        prop_assert!(asked.get() <= 4000, "no end");
    }
}
