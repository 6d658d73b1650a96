//! Outlines to triangles: sized, layered, curved meshes of meridian sections. Convention: points `[r, z]` in metres; the crate knows no
//! physics: regions are identities, sizes are lengths. The way from a drawing to a mesh: outlines are noded into a plane graph, strips
//! of thin layers are laid along the surfaces that ask for them, everything is triangulated under constraints, refined to a size field,
//! smoothed and checked. A finished mesh can be refined where it is marked ([`Mesh::refined`]).

mod assemble;
mod build;
mod cavity;
mod check;
mod chords;
mod constrain;
mod drawing;
mod error;
mod facing;
mod ids;
mod intersect;
mod lattice;
mod layers;
mod marked;
mod merges;
mod mesh;
mod nodes;
mod noding;
mod note;
mod order;
mod outline;
mod path;
mod plan;
mod predicates;
mod quality;
mod queries;
mod refine;
mod shapes;
mod sides;
mod size_field;
mod smooth;
mod span;
mod tree;
mod triangulate;

pub use build::triangulate;
pub use drawing::{Drawing, Layers, Limits, LineSize, Region};
pub use error::{MeshDefect, MeshError, OutlineError};
pub use ids::{CurveId, NO_TRIANGLE, Point, RegionId};
pub use merges::{Merge, MergeKind, OutlineOf};
pub use mesh::{Curve, Edge, Mesh, Shape};
pub use nodes::NodeSet;
pub use note::{MeshNote, NoteReason};
pub use outline::{Outline, Piece};
pub use path::Path;
pub use quality::{ANGLE_CLASS_DEG, Quality};
pub use queries::Side;
