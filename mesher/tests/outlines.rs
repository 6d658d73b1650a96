//! Outlines: measures against closed forms of plane geometry, and every refusal.
#![allow(clippy::unwrap_used, reason = "tests")]

use mesher::{Outline, OutlineError, Piece};
use std::f64::consts::PI;

fn close(a: f64, b: f64) -> bool {
    (a - b).abs() <= 1e-14 * b.abs().max(1.0)
}

#[test]
fn areas_and_perimeters_are_those_of_closed_forms() {
    let circle = Outline::circle([3.0, -2.0], 0.5).unwrap();
    assert!(close(circle.area(), PI * 0.25) && close(circle.perimeter(), PI));
    let half = Outline::half_disc(1.0, 2.0).unwrap();
    assert!(close(half.area(), 2.0 * PI) && close(half.perimeter(), 2.0 * PI + 4.0));
    let quarter = Outline::quarter_disc(1.0, 2.0).unwrap();
    assert!(close(quarter.area(), PI) && close(quarter.perimeter(), PI + 4.0));
    let rounded = Outline::rounded_rectangle([0.0, 0.0], [3.0, 2.0], 0.5).unwrap();
    assert!(close(rounded.area(), 6.0 - (4.0 - PI) * 0.25));
    assert!(close(rounded.perimeter(), 10.0 - 4.0 + PI));
    let slot = Outline::rounded_rectangle([0.0, 0.0], [3.0, 2.0], 1.0).unwrap();
    assert_eq!(slot.len(), 6);
    assert!(close(slot.area(), 6.0 - (4.0 - PI)));
}

#[test]
fn clockwise_pieces_are_turned_round() {
    let line = |to| Piece::Line { to };
    let arc = Piece::Arc { to: [0.0, 1.0], centre: [0.0, 0.0], counter_clockwise: true };
    let there = Outline::new([1.0, 0.0], vec![arc, line([0.0, 0.0]), line([1.0, 0.0])]).unwrap();
    let back = Piece::Arc { to: [1.0, 0.0], centre: [0.0, 0.0], counter_clockwise: false };
    let turned = Outline::new([0.0, 1.0], vec![back, line([0.0, 0.0]), line([0.0, 1.0])]).unwrap();
    assert!(close(there.area(), PI / 4.0) && close(turned.area(), PI / 4.0));
    assert!(there.contains([0.7, 0.7]) && turned.contains([0.7, 0.7]) && !turned.contains([0.72, 0.72]));
}

#[test]
fn containment_counts_arcs_exactly() {
    let half = Outline::half_disc(0.0, 1.0).unwrap();
    for i in 0..100 {
        let angle = (f64::from(i) / 100.0 - 0.495) * PI;
        let at = |radius: f64| [radius * angle.cos(), radius * angle.sin()];
        assert!(half.contains(at(1.0 - 1e-9)) && !half.contains(at(1.0 + 1e-9)), "angle {angle}");
    }
    assert!(!half.contains([-1e-9, 0.0]) && half.contains([1e-9, 0.0]));
    assert!(close(half.distance([2.0, 0.0]), 1.0) && close(half.distance([0.25, 0.0]), 0.25));
    assert_eq!(half.bounds(), ([0.0, -1.0], [1.0, 1.0]));
}

#[test]
fn a_touch_is_no_overlap() {
    let a = Outline::rectangle([0.0, 0.0], [1.0, 1.0]).unwrap();
    let beside = a.translated([1.0, 0.5]).unwrap();
    let across = a.translated([0.999, 0.5]).unwrap();
    let disc = Outline::circle([1.5, 0.5], 0.5).unwrap();
    assert!(!a.overlaps(&beside) && !beside.overlaps(&a));
    assert!(a.overlaps(&across) && across.overlaps(&a));
    assert!(!a.overlaps(&disc) && !disc.overlaps(&a));
    assert!(a.overlaps(&a.clone()));
    let inner = Outline::circle([0.5, 0.5], 0.1).unwrap();
    assert!(a.overlaps(&inner) && inner.overlaps(&a));
    let inscribed = Outline::circle([0.5, 0.5], 0.5).unwrap();
    assert!(a.overlaps(&inscribed) && inscribed.overlaps(&a));
}

#[test]
fn every_fault_has_its_own_refusal() {
    let polygon = |points: &[[f64; 2]]| Outline::polygon(points).unwrap_err();
    assert!(matches!(polygon(&[]), OutlineError::TooFewPieces { count: 0 }));
    assert!(matches!(polygon(&[[0.0, 0.0], [1.0, 0.0]]), OutlineError::TooFewPieces { count: 2 }));
    assert!(matches!(polygon(&[[0.0, 0.0], [f64::NAN, 0.0], [1.0, 1.0]]), OutlineError::NotFinite { index: 1, .. }));
    assert!(matches!(polygon(&[[0.0, 0.0], [0.0, 0.0], [1.0, 1.0]]), OutlineError::ZeroLength { piece: 0, .. }));
    assert!(matches!(polygon(&[[0.0, 0.0], [1.0, 0.0], [2.0, 0.0]]), OutlineError::NoArea { .. }));
    let bow = [[0.0, 0.0], [1.0, 1.0], [1.0, 0.0], [0.0, 0.8]];
    assert!(matches!(polygon(&bow), OutlineError::SelfCrossing { .. }));
    let touching = [[0.0, 0.0], [2.0, 0.0], [2.0, 1.0], [1.0, 0.0], [0.0, 1.0]];
    assert!(matches!(polygon(&touching), OutlineError::SelfCrossing { .. }));
    let line = |to| Piece::Line { to };
    let open = Outline::new([0.0, 0.0], vec![line([1.0, 0.0]), line([1.0, 1.0]), line([0.1, 0.0])]).unwrap_err();
    assert!(matches!(open, OutlineError::NotClosed { .. }));
    let arc = Piece::Arc { to: [1.0, 0.0], centre: [0.4, 0.0], counter_clockwise: true };
    let off = Outline::new([0.0, 0.0], vec![arc, line([0.0, 0.0])]).unwrap_err();
    assert!(matches!(off, OutlineError::NotOnCircle { piece: 0, .. }));
    assert!(matches!(Outline::circle([0.0, 0.0], -1.0), Err(OutlineError::BadSize { .. })));
    assert!(matches!(Outline::rounded_rectangle([0.0, 0.0], [1.0, 1.0], 0.6), Err(OutlineError::BadSize { .. })));
    for fault in [polygon(&bow), open, off] {
        assert!(fault.to_string().len() > 20);
    }
}
