//! The mesh block of the summary.

use mesher::Quality;
use solver::mesh_report::{Body, MergeCounts, MeshReport};

use super::shape::{MergeEntry, MeshNumbers, Named, RegionEntries, RegionEntry};
use crate::export::{Finished, finite};

/// Figures of the mesh of a run.
pub(super) fn numbers(run: Finished<'_>) -> MeshNumbers {
    let (section, counts) = (&run.results.section, &run.results.counts);
    let report = MeshReport::of(section);
    let whole = &report.whole;
    MeshNumbers {
        triangles: report.triangles,
        strip_triangles: whole.strip_triangles,
        vertices: report.vertices,
        nodes: section.nodes.points.len(),
        field_unknowns: counts.field_unknowns,
        heat_unknowns: counts.heat_unknowns,
        order: section.nodes.order,
        min_angle_deg: finite(whole.min_angle_deg),
        mean_min_angle_deg: finite(whole.mean_min_angle_deg),
        share_of_min_angles_30_to_40_deg: finite(whole.share_30_to_40),
        min_angle_counts: whole.least_angle_counts,
        shortest_edge_m: finite(whole.shortest_edge_m),
        longest_edge_m: finite(whole.longest_edge_m),
        regions: regions(&report),
        notes: report.notes,
        merges: merges(report.merges, report.moves),
    }
}

fn regions(report: &MeshReport) -> RegionEntries {
    let (mut parts, mut coils) = (Vec::new(), Vec::new());
    let mut air = None;
    for (body, quality) in &report.bodies {
        let entry = region(quality);
        match body {
            Body::Air => air = Some(entry),
            Body::Part(name) => parts.push((name.clone(), entry)),
            Body::Coil(name) => coils.push((name.clone(), entry)),
        }
    }
    let none = RegionEntry {
        triangles: 0,
        strip_triangles: 0,
        min_angle_deg: None,
        mean_min_angle_deg: None,
        shortest_edge_m: None,
        longest_edge_m: None,
    };
    RegionEntries { air: air.unwrap_or(none), parts: Named(parts), coils: Named(coils) }
}

fn region(quality: &Quality) -> RegionEntry {
    let some = quality.triangles > 0;
    RegionEntry {
        triangles: quality.strip_triangles + quality.other_triangles,
        strip_triangles: quality.strip_triangles,
        min_angle_deg: finite(quality.min_angle_deg),
        mean_min_angle_deg: finite(quality.mean_min_angle_deg).filter(|_| some),
        shortest_edge_m: finite(quality.shortest_edge_m),
        longest_edge_m: finite(quality.longest_edge_m).filter(|_| some),
    }
}

fn merges(counts: MergeCounts, moves: Vec<String>) -> MergeEntry {
    MergeEntry {
        corners_moved: counts.corners_moved,
        lines_moved: counts.lines_moved,
        lines_divided: counts.lines_divided,
        stretches_shared: counts.stretches_shared,
        largest_move_m: finite(counts.largest_move_m),
        moves,
    }
}
