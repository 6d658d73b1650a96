//! What the mesh says of outlines that meet: common stretches with their lengths, divided lines, and how far something was moved.
#![allow(clippy::unwrap_used, clippy::expect_used, reason = "tests")]

mod common;

use common::{drawing, mesh, rectangle, region};
use mesher::{Merge, MergeKind, Mesh, Outline, OutlineOf, RegionId};

const LEFT: OutlineOf = OutlineOf::Region(0);
const RIGHT: OutlineOf = OutlineOf::Region(1);

/// Two boxes beside each other in a box of 1 m diagonal, the second shifted by `off` to the right and up by `up`.
fn two(off: f64, up: f64) -> Mesh {
    let left = region(RegionId(1), rectangle([0.1, 0.1], [0.2, 0.2]), 0.02, 0.02, None);
    let right = region(RegionId(2), rectangle([0.2 + off, 0.1 + up], [0.3, 0.2 + up]), 0.02, 0.02, None);
    mesh(&drawing(rectangle([0.0, 0.0], [0.8, 0.6]), 0.1, vec![left, right]))
}

fn between(mesh: &Mesh) -> Vec<Merge> {
    mesh.merges().iter().filter(|m| m.outlines == [RIGHT, LEFT]).copied().collect()
}

#[test]
fn boxes_apart_have_nothing_to_merge() {
    assert!(two(0.01, 0.0).merges().is_empty());
}

#[test]
fn a_common_side_is_told_with_its_length_and_moves_nothing() {
    let mesh = two(0.0, 0.0);
    let [merge] = between(&mesh)[..] else { unreachable!("{:?}", mesh.merges()) };
    assert!(
        matches!(merge.kind, MergeKind::Shared { length_m } if (length_m - 0.1).abs() < 1e-12)
            && (merge.at[0] - 0.2).abs() < 1e-12
            && (merge.at[1] - 0.15).abs() < 1e-12,
        "{merge:?}"
    );
}

#[test]
fn sides_that_overlap_in_part_are_divided_at_each_others_corners() {
    let mesh = two(0.0, 0.03);
    let merges = between(&mesh);
    let divided = merges.iter().filter(|m| m.kind == MergeKind::Divided).count();
    let shared: f64 =
        merges.iter().map(|m| if let MergeKind::Shared { length_m } = m.kind { length_m } else { 0.0 }).sum();
    assert!(divided == 2 && (shared - 0.07).abs() < 1e-12, "{merges:?}");
    assert!(merges.iter().all(|m| m.kind.moved_m() == 0.0));
}

#[test]
fn a_gap_too_small_to_tell_apart_is_closed_and_told() {
    // Points closer than 2e-9 of the 1 m diagonal are one.
    let off = 1e-9;
    let mesh = two(off, 0.0);
    let merges = between(&mesh);
    let moved: Vec<f64> = merges.iter().map(|m| m.kind.moved_m()).filter(|&m| m > 0.0).collect();
    assert_eq!(moved.len(), 2, "both corners of the right box: {merges:?}");
    assert!(moved.iter().all(|m| (m - off).abs() < 1e-15), "{moved:?}");
    assert!(merges.iter().any(|m| matches!(m.kind, MergeKind::Shared { .. })));
    assert_eq!(mesh.edges_between(RegionId(1), RegionId(2)).count(), mesh.edges_of_piece(0, 1).count());
}

#[test]
fn a_line_that_passes_too_close_by_a_corner_is_bent_to_it() {
    // The right box is higher and lower than the left one: its side passes the corners of the left box at 1 nm.
    let left = region(RegionId(1), rectangle([0.1, 0.1], [0.2, 0.2]), 0.02, 0.02, None);
    let right = region(RegionId(2), rectangle([0.2 + 1e-9, 0.05], [0.3, 0.25]), 0.02, 0.02, None);
    let mesh = mesh(&drawing(rectangle([0.0, 0.0], [0.8, 0.6]), 0.1, vec![left, right]));
    let bent: Vec<Merge> =
        between(&mesh).into_iter().filter(|m| matches!(m.kind, MergeKind::LineMoved { .. })).collect();
    assert_eq!(bent.len(), 2, "{:?}", mesh.merges());
    assert!(bent.iter().all(|m| (m.kind.moved_m() - 1e-9).abs() < 1e-15));
}

#[test]
fn crossing_outlines_are_divided_at_their_crossings() {
    let one = region(RegionId(1), Outline::circle([0.3, 0.3], 0.1).unwrap(), 0.02, 0.02, None);
    let other = region(RegionId(2), Outline::circle([0.4, 0.3], 0.1).unwrap(), 0.02, 0.02, None);
    let mesh = mesh(&drawing(rectangle([0.0, 0.0], [0.8, 0.6]), 0.1, vec![one, other]));
    let merges = between(&mesh);
    assert_eq!(merges.len(), 2, "{merges:?}");
    // Two equal circles whose centres are one radius apart cross at the tips of equilateral triangles.
    let height = 0.1 * 0.75f64.sqrt();
    for (merge, up) in merges.iter().zip([height, -height]) {
        let off = (merge.at[0] - 0.35).hypot(merge.at[1] - 0.3 - up);
        let mirrored = (merge.at[0] - 0.35).hypot(merge.at[1] - 0.3 + up);
        assert!(merge.kind == MergeKind::Divided && off.min(mirrored) < 1e-12, "{merge:?}");
    }
}

#[test]
fn what_lies_outside_the_domain_is_not_told() {
    let inside = region(RegionId(1), rectangle([0.1, 0.1], [0.2, 0.2]), 0.02, 0.02, None);
    let one = region(RegionId(2), rectangle([2.0, 0.1], [2.1, 0.2]), 0.02, 0.02, None);
    let other = region(RegionId(3), rectangle([2.1, 0.1], [2.2, 0.2]), 0.02, 0.02, None);
    let mesh = mesh(&drawing(rectangle([0.0, 0.0], [0.8, 0.6]), 0.1, vec![inside, one, other]));
    assert!(mesh.merges().is_empty(), "{:?}", mesh.merges());
}

#[test]
fn a_corner_moved_onto_the_corner_of_another_region_on_the_edge_of_the_domain_names_the_region() {
    let lower = region(RegionId(1), rectangle([0.0, 0.1], [0.2, 0.2]), 0.02, 0.02, None);
    let upper = region(RegionId(2), rectangle([0.0, 0.2 + 1e-9], [0.2, 0.3]), 0.02, 0.02, None);
    let mesh = mesh(&drawing(rectangle([0.0, 0.0], [0.8, 0.6]), 0.1, vec![lower, upper]));
    let moved: Vec<&Merge> = mesh.merges().iter().filter(|m| m.kind.moved_m() > 0.0).collect();
    assert_eq!(moved.len(), 2, "{moved:?}");
    assert!(moved.iter().all(|m| m.outlines == [RIGHT, LEFT] && m.regions == [RegionId(2), RegionId(1)]), "{moved:?}");
}
