//! Paths with treated corners and outlines with holes, against closed forms of plane geometry: a fillet is tangent to both of its
//! pieces, and the area it removes follows from its angles.
#![allow(clippy::unwrap_used, reason = "tests")]

use mesher::{Outline, OutlineError, Piece, Point};
use std::f64::consts::PI;

fn close(a: f64, b: f64) -> bool {
    (a - b).abs() <= 1e-13 * b.abs().max(1.0)
}

fn from(outline: &Outline, piece: usize) -> Point {
    outline.point(piece, 0.0).unwrap()
}

/// Direction of travel at an end of a piece, by a difference.
fn direction(outline: &Outline, piece: usize, at_end: bool) -> Point {
    let at = |t| outline.point(piece, t).unwrap();
    match outline.pieces()[piece] {
        Piece::Line { .. } => {
            let (a, b) = (at(0.0), at(1.0));
            let length = (b[0] - a[0]).hypot(b[1] - a[1]);
            [(b[0] - a[0]) / length, (b[1] - a[1]) / length]
        }
        Piece::Arc { centre, counter_clockwise, .. } => {
            let p = at(if at_end { 1.0 } else { 0.0 });
            let radius = (p[0] - centre[0]).hypot(p[1] - centre[1]);
            let sign = if counter_clockwise { 1.0 } else { -1.0 };
            [-sign * (p[1] - centre[1]) / radius, sign * (p[0] - centre[0]) / radius]
        }
    }
}

/// The radius of every arc whose both ends are smooth.
fn fillets(outline: &Outline) -> Vec<f64> {
    let count = outline.len();
    let mut found = Vec::new();
    for (i, piece) in outline.pieces().into_iter().enumerate() {
        let Piece::Arc { centre, .. } = piece else { continue };
        let smooth = |a: Point, b: Point| (a[0] - b[0]).abs() < 1e-9 && (a[1] - b[1]).abs() < 1e-9;
        let before = smooth(direction(outline, (i + count - 1) % count, true), direction(outline, i, false));
        let after = smooth(direction(outline, i, true), direction(outline, (i + 1) % count, false));
        if before && after {
            let p = from(outline, i);
            found.push((p[0] - centre[0]).hypot(p[1] - centre[1]));
        }
    }
    found
}

#[test]
fn fillets_and_chamfers_between_lines_remove_the_area_of_geometry() {
    let square = || Outline::path([0.0, 0.0]).line_to([2.0, 0.0]);
    let rounded = square().fillet(0.5).line_to([2.0, 2.0]).chamfer(0.25).line_to([0.0, 2.0]).close().unwrap();
    assert!(close(rounded.area(), 4.0 - (1.0 - PI / 4.0) * 0.25 - 0.5 * 0.0625));
    assert_eq!(rounded.len(), 6);
    assert_eq!(fillets(&rounded).len(), 1);
    // A corner of 60 degrees: a fillet removes R^2 (cot 30 - (180 - 60) / 2 in radians), here at the start.
    let height = 3f64.sqrt();
    let sharp = Outline::path([0.0, 0.0]).fillet(0.3).line_to([2.0, 0.0]).line_to([1.0, height]).close().unwrap();
    assert!(close(sharp.area(), height - 0.09 * (3f64.sqrt() - PI / 3.0)));
    // An inside corner gains what an outside corner loses.
    let l = Outline::path([0.0, 0.0])
        .line_to([2.0, 0.0])
        .line_to([2.0, 1.0])
        .line_to([1.0, 1.0])
        .fillet(0.4)
        .line_to([1.0, 2.0])
        .line_to([0.0, 2.0])
        .close()
        .unwrap();
    assert!(close(l.area(), 3.0 + (1.0 - PI / 4.0) * 0.16));
}

#[test]
fn a_fillet_between_a_line_and_an_arc_is_tangent_to_both() {
    // Half a disc of radius 1 on the axis; with the fillet's centre at distance 1 - R from the middle and R above the flat side, it
    // touches the flat side at sqrt((1 - R)^2 - R^2).
    let radius = 0.2f64;
    let outline = Outline::path([0.0, 0.0])
        .line_to([1.0, 0.0])
        .fillet(radius)
        .arc_to([0.0, 1.0], [0.0, 0.0], true)
        .close()
        .unwrap();
    assert_eq!(outline.len(), 4);
    assert!(close(outline.point(0, 1.0).unwrap()[0], ((1.0 - radius).powi(2) - radius * radius).sqrt()));
    let found = fillets(&outline);
    assert!(found.len() == 1 && close(found[0], radius), "{found:?}");
    // The other way round it is the same outline.
    let back = Outline::path([0.0, 0.0])
        .line_to([0.0, 1.0])
        .arc_to([1.0, 0.0], [0.0, 0.0], false)
        .fillet(radius)
        .close()
        .unwrap();
    assert!(close(back.area(), outline.area()) && close(back.perimeter(), outline.perimeter()));
}

#[test]
fn a_fillet_in_a_hollow_arc_lies_outside_its_circle() {
    // A plate with a bite of radius 1 out of its corner: the fillet's centre is 1 + R from the bite's centre.
    let radius = 0.1f64;
    let bitten = Outline::path([1.0, 0.0])
        .fillet(radius)
        .line_to([3.0, 0.0])
        .line_to([3.0, 3.0])
        .line_to([0.0, 3.0])
        .line_to([0.0, 1.0])
        .arc_to([1.0, 0.0], [0.0, 0.0], false)
        .close()
        .unwrap();
    let found = fillets(&bitten);
    assert!(found.len() == 1 && close(found[0], radius), "{found:?}");
    let touch = ((1.0 + radius).powi(2) - radius * radius).sqrt();
    assert!(bitten.pieces().iter().any(|p| (p.to()[0] - touch).abs() < 1e-12 && p.to()[1].abs() < 1e-12));
}

#[test]
fn a_fillet_between_two_arcs_is_tangent_to_both() {
    // A lens of two circles of radius 1 about (0, -0.5) and (0, 0.5); both tips rounded with centres on the middle line at
    // sqrt((1 - R)^2 - 0.25).
    let (tip, radius) = (0.75f64.sqrt(), 0.05f64);
    let lens = Outline::path([tip, 0.0])
        .fillet(radius)
        .arc_to([-tip, 0.0], [0.0, -0.5], true)
        .fillet(radius)
        .arc_to([tip, 0.0], [0.0, 0.5], true)
        .close()
        .unwrap();
    let found = fillets(&lens);
    assert!(found.len() == 4, "two fillets, and two arcs between them that are now smooth at both ends: {found:?}");
    assert_eq!(found.iter().filter(|r| close(**r, radius)).count(), 2);
    let (_, hi) = lens.bounds();
    assert!(close(hi[0], ((1.0 - radius).powi(2) - 0.25).sqrt() + radius));
}

#[test]
fn fillets_may_use_up_a_piece_but_no_more() {
    let slot = |radius: f64| {
        let path = Outline::path([0.0, 0.0]).fillet(radius).line_to([3.0, 0.0]).fillet(radius);
        path.line_to([3.0, 1.0]).fillet(radius).line_to([0.0, 1.0]).fillet(radius).close()
    };
    let round = slot(0.5).unwrap();
    assert_eq!(round.len(), 6);
    assert!(close(round.area(), 3.0 - (4.0 - PI) * 0.25));
    let Err(OutlineError::CornerTooLarge { corner, value, limit, at, .. }) = slot(0.6) else {
        unreachable!("two fillets of 0.6 do not fit on a side of 1")
    };
    assert!(
        (corner, at) == (2, [3.0, 1.0]) && close(value, 0.6) && (limit - 0.4).abs() < 1e-9,
        "{corner} {value} {limit}"
    );
}

#[test]
fn the_limit_in_a_refusal_is_the_largest_that_fits() {
    let wedge = |radius: f64| {
        Outline::path([0.0, 0.0]).line_to([1.0, 0.0]).fillet(radius).arc_to([0.0, 1.0], [0.0, 0.0], true).close()
    };
    // The circle that touches the flat side at the axis has its centre above it: 1 - R = R.
    let Err(OutlineError::CornerTooLarge { limit, .. }) = wedge(0.7) else {
        unreachable!("a fillet of 0.7 does not fit into a quarter disc of radius 1")
    };
    assert!((limit - 0.5).abs() < 1e-9, "{limit}");
    assert!(wedge(limit * (1.0 - 1e-9)).is_ok() && wedge(limit * (1.0 + 1e-6)).is_err());
    // Between lines a fillet takes its radius off each at a right angle; the shorter line is 1 long.
    let squared =
        |radius: f64| Outline::path([0.0, 0.0]).line_to([1.0, 0.0]).fillet(radius).line_to([1.0, 3.0]).close();
    let Err(OutlineError::CornerTooLarge { limit, .. }) = squared(1.2) else {
        unreachable!("a fillet of 1.2 does not fit on a side of 1")
    };
    assert!((limit - 1.0).abs() < 1e-9, "{limit}");
    let chamfered = |size: f64| Outline::path([0.0, 0.0]).line_to([1.0, 0.0]).chamfer(size).line_to([0.0, 3.0]).close();
    let Err(OutlineError::CornerTooLarge { limit, what, .. }) = chamfered(2.0) else {
        unreachable!("a chamfer of 2 does not fit on a side of 1")
    };
    assert!((limit - 1.0).abs() < 1e-9 && what == "chamfer", "{limit}");
}

#[test]
fn every_fault_of_a_path_has_its_own_refusal() {
    let straight = Outline::path([0.0, 0.0]).line_to([1.0, 0.0]).fillet(0.1).line_to([2.0, 0.0]).line_to([0.0, 1.0]);
    assert!(matches!(straight.close(), Err(OutlineError::NoCorner { corner: 1, .. })));
    for size in [0.0, -1.0, f64::NAN, f64::INFINITY] {
        let path = Outline::path([0.0, 0.0]).line_to([1.0, 0.0]).fillet(size).line_to([0.0, 1.0]);
        assert!(matches!(path.close(), Err(OutlineError::BadSize { what: "fillet radius", .. })), "{size}");
    }
    let off = Outline::path([0.0, 0.0]).arc_to([1.0, 0.0], [0.4, 0.0], true);
    assert!(matches!(off.close(), Err(OutlineError::NotOnCircle { piece: 0, .. })));
    assert!(matches!(Outline::path([0.0, 0.0]).close(), Err(OutlineError::TooFewPieces { .. })));
    let twice = Outline::path([0.0, 0.0]).line_to([0.0, 0.0]).line_to([1.0, 0.0]).line_to([0.0, 1.0]);
    assert!(matches!(twice.close(), Err(OutlineError::ZeroLength { piece: 0, .. })));
    let bow = Outline::path([0.0, 0.0]).line_to([1.0, 1.0]).line_to([1.0, 0.0]).line_to([0.0, 0.8]);
    let even = Outline::path([0.0, 0.0]).line_to([1.0, 1.0]).line_to([1.0, 0.0]).line_to([0.0, 1.0]);
    assert!(
        matches!(even.close(), Err(OutlineError::SelfCrossing { at: [0.5, 0.5], .. })),
        "its lobes add up to nothing"
    );
    let refusal = bow.close().unwrap_err();
    assert!(matches!(refusal, OutlineError::SelfCrossing { .. }) && refusal.to_string().contains("crosses or touches"));
}

#[test]
fn a_rounded_centre_is_moved_to_the_middle() {
    let p = [7.0711, 7.0711];
    let sector = Outline::path([0.0, 0.0]).line_to([10.0, 0.0]).arc_to(p, [0.0, 0.0], true).close().unwrap();
    assert!((sector.area() - PI * 100.0 / 8.0).abs() < 2e-3, "{}", sector.area());
    assert!(sector.point(1, 1.0).unwrap() == p);
}

#[test]
fn holes_take_away_their_area_and_nothing_else() {
    let plate = Outline::rectangle([0.0, 0.0], [4.0, 2.0]).unwrap();
    let round = Outline::circle([1.0, 1.0], 0.5).unwrap();
    let square = Outline::rectangle([2.5, 0.5], [3.5, 1.5]).unwrap();
    let pierced = plate.with_holes(&[round.clone(), square.clone()]).unwrap();
    assert!(close(pierced.area(), 8.0 - PI * 0.25 - 1.0) && close(pierced.perimeter(), 12.0 + PI + 4.0));
    assert!(!pierced.contains([1.0, 1.0]) && !pierced.contains([3.0, 1.0]) && pierced.contains([2.0, 1.0]));
    assert_eq!((pierced.len(), pierced.pieces().len(), pierced.bounds()), (10, 4, plate.bounds()));
    assert_eq!(pierced.holes().len(), 2);
    assert!(close(pierced.holes()[0].area(), round.area()));
    let moved = pierced.translated([10.0, 0.0]).unwrap();
    assert!(moved.contains([12.0, 1.0]) && !moved.contains([11.0, 1.0]));
    let plug = Outline::circle([1.0, 1.0], 0.4).unwrap();
    assert!(!pierced.overlaps(&plug) && plate.overlaps(&plug) && !pierced.overlaps(&round));
}

#[test]
fn holes_that_leave_touch_or_overlap_are_refused() {
    let plate = Outline::rectangle([0.0, 0.0], [4.0, 2.0]).unwrap();
    let disc = |r: f64, radius: f64| Outline::circle([r, 1.0], radius).unwrap();
    let refused = |holes: &[Outline], which: usize| matches!(plate.with_holes(holes), Err(OutlineError::BadHole { hole, .. }) if hole == which);
    assert!(refused(&[disc(3.8, 0.5)], 0), "leaves the plate");
    assert!(refused(&[disc(9.0, 0.5)], 0), "outside");
    assert!(refused(&[disc(1.0, 1.0)], 0), "touches the rim");
    assert!(refused(&[disc(1.0, 0.5), disc(1.8, 0.5)], 1), "overlaps another hole");
    assert!(refused(&[disc(1.0, 0.5), disc(1.0, 0.2)], 1), "lies in another hole");
    assert!(refused(&[disc(1.0, 0.2), disc(1.0, 0.5)], 1), "lies round another hole");
    assert!(refused(std::slice::from_ref(&plate), 0), "is the plate");
}
