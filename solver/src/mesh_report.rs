//! What a report says of a mesh: its triangles by body, where it departs from what was asked, and what had to be moved.
//! Lengths in metres, angles in degrees.

use mesher::{Merge, MergeKind, Mesh, MeshNote, NoteReason, OutlineOf, Quality, RegionId};

use crate::results::{RegionName, Section};

/// Something in the section with a name.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Body {
    /// Air, and the bores of tubes.
    Air,
    /// A part, by name.
    Part(String),
    /// All turns of a coil, by name.
    Coil(String),
}

impl From<&RegionName> for Body {
    fn from(region: &RegionName) -> Self {
        match region {
            RegionName::Air => Self::Air,
            RegionName::Part(_, name) => Self::Part(name.clone()),
            RegionName::Turn(_, _, coil) => Self::Coil(coil.clone()),
        }
    }
}

/// The mesh in figures and words.
#[derive(Debug, Clone, PartialEq)]
pub struct MeshReport {
    /// Vertices.
    pub vertices: usize,
    /// Triangles.
    pub triangles: usize,
    /// Shape of all triangles.
    pub whole: Quality,
    /// Shape by body: air first, then parts and coils in job order.
    pub bodies: Vec<(Body, Quality)>,
    /// Where the mesh differs from what was asked for; without repeats.
    pub notes: Vec<String>,
    /// What was made one.
    pub merges: MergeCounts,
    /// What was moved to make it one, a sentence for every pair of bodies.
    pub moves: Vec<String>,
}

/// How often outlines were made to meet.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct MergeCounts {
    /// Corners moved onto a point too close to tell apart.
    pub corners_moved: usize,
    /// Lines bent to pass through such a point.
    pub lines_moved: usize,
    /// Places where lines that cross or touch were divided.
    pub lines_divided: usize,
    /// Stretches that two outlines have in common.
    pub stretches_shared: usize,
    /// Largest distance by which anything was moved, metres.
    pub largest_move_m: f64,
}

impl MeshReport {
    /// The report of a meshed section.
    pub fn of(section: &Section) -> Self {
        let (mesh, regions) = (&section.mesh, section.regions.as_slice());
        Self {
            vertices: mesh.vertices().len(),
            triangles: mesh.triangles().len(),
            whole: mesh.quality(),
            bodies: bodies(mesh, regions),
            notes: notes(mesh, regions),
            merges: counts(mesh.merges()),
            moves: moves(mesh, regions),
        }
    }
}

fn bodies(mesh: &Mesh, regions: &[RegionName]) -> Vec<(Body, Quality)> {
    let mut named: Vec<(Body, Vec<RegionId>)> = Vec::new();
    for (id, region) in (0..).map(RegionId).zip(regions) {
        let body = Body::from(region);
        match named.iter_mut().find(|n| n.0 == body) {
            Some(same) => same.1.push(id),
            None => named.push((body, vec![id])),
        }
    }
    let mut triangles = vec![Vec::new(); regions.len()];
    for (t, id) in mesh.regions().iter().enumerate() {
        if let Some(list) = triangles.get_mut(id.0 as usize) {
            list.push(t);
        }
    }
    let of = |ids: &[RegionId]| mesh.quality_of(ids.iter().flat_map(|id| triangles[id.0 as usize].iter().copied()));
    named.into_iter().map(|(body, ids)| (body, of(&ids))).collect()
}

/// Where the mesh differs from what was asked for, in words, each once.
pub(crate) fn notes(mesh: &Mesh, regions: &[RegionName]) -> Vec<String> {
    let mut texts = Vec::new();
    for note in mesh.notes() {
        let text = note_text(regions, note);
        if !texts.contains(&text) {
            texts.push(text);
        }
    }
    texts
}

fn note_text(regions: &[RegionName], note: &MeshNote) -> String {
    let place = match regions.get(note.region.0 as usize) {
        Some(RegionName::Part(_, name)) => format!("part `{name}`"),
        Some(RegionName::Turn(_, _, coil)) => format!("turns of coil `{coil}`"),
        Some(RegionName::Air) | None => "air".to_owned(),
    };
    match note.reason {
        NoteReason::LayersCut { placed, wanted } => format!(
            "{place}: {placed} of {wanted} skin layers fit into the wall or fillet; the skin is resolved less deep there"
        ),
        NoteReason::NoStrip { size } => {
            format!("{place}: no skin layers fit; triangles of {:.3} mm stand in for them", 1e3 * size)
        }
        NoteReason::ArcStraightened => {
            format!(
                "{place}: where an arc touches another curve its edges are meshed straight, which moves the surface a little"
            )
        }
    }
}

fn counts(merges: &[Merge]) -> MergeCounts {
    let mut counts = MergeCounts::default();
    for merge in merges {
        *match merge.kind {
            MergeKind::CornerMoved { .. } => &mut counts.corners_moved,
            MergeKind::LineMoved { .. } => &mut counts.lines_moved,
            MergeKind::Divided => &mut counts.lines_divided,
            MergeKind::Shared { .. } => &mut counts.stretches_shared,
        } += 1;
        counts.largest_move_m = counts.largest_move_m.max(merge.kind.moved_m());
    }
    counts
}

/// What was moved, in words: one sentence for every pair of outlines.
pub(crate) fn moves(mesh: &Mesh, regions: &[RegionName]) -> Vec<String> {
    let mut pairs: Vec<([String; 2], Vec<Merge>)> = Vec::new();
    for merge in mesh.merges().iter().filter(|m| m.kind.moved_m() > 0.0) {
        let names = [0, 1].map(|k| outline_name(regions, merge.outlines[k], merge.regions[k]));
        match pairs.iter_mut().find(|p| p.0 == names) {
            Some(same) => same.1.push(*merge),
            None => pairs.push((names, vec![*merge])),
        }
    }
    pairs.iter().map(|(names, merges)| move_text(names, merges)).collect()
}

fn outline_name(regions: &[RegionName], outline: OutlineOf, region: RegionId) -> String {
    match (outline, regions.get(region.0 as usize)) {
        (OutlineOf::Domain, _) => "the edge of the meshed space (axis, mirror plane or open boundary)".to_owned(),
        (OutlineOf::Region(_), Some(RegionName::Part(_, name))) => format!("part `{name}`"),
        (OutlineOf::Region(_), Some(RegionName::Turn(_, turn, coil))) => format!("turn {} of coil `{coil}`", turn + 1),
        (OutlineOf::Region(_), Some(RegionName::Air) | None) => "the bore of a turn".to_owned(),
    }
}

fn move_text([moved, onto]: &[String; 2], merges: &[Merge]) -> String {
    let counts = counts(merges);
    let some = |n: usize, noun: &str| match n {
        0 => None,
        1 => Some(format!("1 {noun}")),
        n => Some(format!("{n} {noun}s")),
    };
    let what: Vec<String> =
        [some(counts.corners_moved, "corner"), some(counts.lines_moved, "line")].into_iter().flatten().collect();
    let [r, z] = merges[0].at.map(|metres| 1e3 * metres);
    format!(
        "{moved} comes too close to {onto} to tell the two apart: {} moved by at most {:.1e} mm, first at r = {r:.4} mm, \
         z = {z:.4} mm; draw them touching, or leave a wider gap",
        what.join(" and "),
        1e3 * counts.largest_move_m
    )
}
