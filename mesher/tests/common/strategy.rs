//! Random sections. Convention: metres; outlines may touch, cross, coincide and leave the domain.

use super::{drawing, region};
use mesher::{Drawing, Layers, Outline, RegionId};
use proptest::prelude::*;

/// A length in metres; every other one on a coarse grid, so that outlines touch and coincide.
fn coordinate(largest: f64) -> impl Strategy<Value = f64> {
    prop_oneof![(0.0..largest), (0..=20i32).prop_map(move |i| largest * f64::from(i) / 20.0)]
}

fn outline() -> impl Strategy<Value = Outline> {
    let place = || (coordinate(0.1), coordinate(0.2).prop_map(|z| z - 0.1));
    let side = || prop_oneof![0.002..0.05f64, (1..=10i32).prop_map(|i| 0.005 * f64::from(i))];
    let rectangle = (place(), side(), side(), 0.0..0.5f64).prop_map(|((r, z), w, h, fillet)| {
        let fillet = if fillet < 0.2 { 0.0 } else { fillet * w.min(h) };
        Outline::rounded_rectangle([r, z], [r + w, z + h], fillet).unwrap()
    });
    let circle = (place(), side(), any::<bool>())
        .prop_map(|((r, z), radius, on_axis)| Outline::circle([if on_axis { 0.0 } else { r }, z], radius).unwrap());
    let wedge = (place(), side(), 0.05..1.5f64).prop_map(|((r, z), w, angle)| {
        Outline::polygon(&[[r, z], [r + w, z], [r + w, z + w * angle.tan().min(3.0)]]).unwrap()
    });
    prop_oneof![3 => rectangle, 1 => circle, 1 => wedge]
}

fn domain() -> impl Strategy<Value = Outline> {
    prop_oneof![
        Just(Outline::half_disc(0.0, 0.4).unwrap()),
        Just(Outline::quarter_disc(0.0, 0.4).unwrap()),
        Just(Outline::rectangle([0.0, -0.05], [0.15, 0.1]).unwrap()),
    ]
}

/// A domain with one to five parts, some with strips.
pub(crate) fn section() -> impl Strategy<Value = Drawing> {
    let part = (outline(), 0.003..0.02f64, proptest::option::of(0.0003..0.003f64));
    (domain(), prop::collection::vec(part, 1..6)).prop_map(|(domain, parts)| {
        let regions = parts.into_iter().enumerate().map(|(i, (outline, size, first))| {
            let layers = first.map(|first| Layers { first, growth: 1.5, count: 5 });
            region(RegionId(i as u32 + 1), outline, 2.0 * size, size, layers)
        });
        drawing(domain, 0.05, regions.collect())
    })
}
