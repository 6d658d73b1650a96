//! Notes on where a mesh differs from what was asked for. Convention: region and piece indices as in the drawing.

use crate::ids::RegionId;

/// A difference between the mesh and the drawing's wishes.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct MeshNote {
    /// Region it concerns.
    pub region: RegionId,
    /// Index of the region in the drawing.
    pub index: usize,
    /// Piece of that region's outline, if the surface is part of its own outline (a bore's surface is not).
    pub piece: Option<usize>,
    /// What was done instead.
    pub reason: NoteReason,
}

/// What was done instead of what was asked for.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum NoteReason {
    /// The strip has fewer layers than wanted, because the wall or a fillet is too narrow for all.
    LayersCut {
        /// Layers placed.
        placed: usize,
        /// Layers wanted.
        wanted: usize,
    },
    /// No strip could be placed on all or part of it; the surface has small isotropic triangles there instead.
    NoStrip {
        /// Element size along the surface instead, in metres.
        size: f64,
    },
    /// An arc meets or nearly meets another line at no angle; an edge there is straight instead of curved.
    ArcStraightened,
}
