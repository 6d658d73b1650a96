//! What can be wrong with an outline, a drawing or a mesh. Convention: lengths in metres, points as `(r, z)`.

use crate::ids::{Point, RegionId};
use thiserror::Error;

/// Why a list of pieces is no outline.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum OutlineError {
    /// A coordinate is infinite or not a number.
    #[error("point {index} of the outline is ({r}, {z}) m; every coordinate must be a finite number", r = .point[0], z = .point[1])]
    NotFinite {
        /// 0 is the start, `i + 1` the end of piece `i`.
        index: usize,
        /// The point as given.
        point: Point,
    },
    /// Too few pieces to enclose anything.
    #[error("the outline has {count} pieces; it needs at least 3, or 2 if one of them is an arc")]
    TooFewPieces {
        /// How many there are.
        count: usize,
    },
    /// A piece whose two ends coincide.
    #[error("piece {piece} of the outline starts and ends at ({r}, {z}) m; leave it out, or split a whole circle into two arcs", r = .at[0], z = .at[1])]
    ZeroLength {
        /// Index of the piece.
        piece: usize,
        /// Where it stands.
        at: Point,
    },
    /// An arc whose end points are at different distances from its centre.
    #[error(
        "arc {piece} starts {start_radius} m and ends {end_radius} m from its centre; the two must be equal to {tolerance:e} of themselves"
    )]
    NotOnCircle {
        /// Index of the piece.
        piece: usize,
        /// Distance of its start from the centre, in metres.
        start_radius: f64,
        /// Distance of its end from the centre, in metres.
        end_radius: f64,
        /// Share of the radius by which the two may differ.
        tolerance: f64,
    },
    /// The last piece does not return to the start.
    #[error("the outline ends {gap} m from its start; let the last piece end exactly there")]
    NotClosed {
        /// Distance left open, in metres.
        gap: f64,
    },
    /// Two pieces cross or touch.
    #[error("the outline crosses or touches itself at ({r}, {z}) m, where its pieces {first} and {second} meet; give its points in order, one way round", r = .at[0], z = .at[1])]
    SelfCrossing {
        /// Index of one piece.
        first: usize,
        /// Index of the other.
        second: usize,
        /// Where they meet.
        at: Point,
    },
    /// The pieces enclose nothing.
    #[error("the outline encloses {area} m2; it must enclose more than 1e-12 of the square of its extent")]
    NoArea {
        /// Enclosed area in square metres.
        area: f64,
    },
    /// A radius or side that is not positive, or a fillet that does not fit.
    #[error("{what} is {value} m; it must be more than 0{}", at_most(*limit, " m"))]
    BadSize {
        /// Name of the dimension.
        what: &'static str,
        /// Value as given, in metres.
        value: f64,
        /// Largest value that fits, in metres.
        limit: f64,
    },
    /// A fillet or chamfer that does not fit between its neighbours.
    #[error("the {what} of {value} m at corner {corner}, ({r}, {z}) m, does not fit: at most {limit} m does, next to the corners beside it; reduce it or theirs", r = .at[0], z = .at[1])]
    CornerTooLarge {
        /// Name of the dimension.
        what: &'static str,
        /// Index of the corner; 0 is the start.
        corner: usize,
        /// Where the corner stands.
        at: Point,
        /// Value as given, in metres.
        value: f64,
        /// Largest value that fits with the neighbours as they are, in metres.
        limit: f64,
    },
    /// A fillet or chamfer where the outline runs straight on or back.
    #[error("the outline does not turn at corner {corner}, ({r}, {z}) m; remove its fillet or chamfer", r = .at[0], z = .at[1])]
    NoCorner {
        /// Index of the corner; 0 is the start.
        corner: usize,
        /// Where it stands.
        at: Point,
    },
    /// A hole that leaves its outline, or meets it or another hole.
    #[error("hole {hole} is not inside the outline and clear of the other holes at ({r}, {z}) m; move or shrink it", r = .at[0], z = .at[1])]
    BadHole {
        /// Index of the hole.
        hole: usize,
        /// A point of it where that is so.
        at: Point,
    },
}

/// Why there is no mesh.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum MeshError {
    /// A size or growth in the drawing is out of its range.
    #[error("{what} is {value}; it must be more than {above}{}", at_most(*limit, ""))]
    BadNumber {
        /// What it is the value of.
        what: &'static str,
        /// Value as given.
        value: f64,
        /// Exclusive lower limit.
        above: f64,
        /// Inclusive upper limit.
        limit: f64,
    },
    /// The triangle budget ran out.
    #[error(
        "more than {limit} triangles are needed; allow more, or ask for larger elements (the smallest asked for is {smallest_m} m)"
    )]
    TooManyTriangles {
        /// The budget.
        limit: usize,
        /// Smallest element size asked for, in metres.
        smallest_m: f64,
    },
    /// Two lines of the drawing run closer together than can be told apart.
    #[error("lines of the drawing near ({r}, {z}) m are too close to tell apart (closer than {apart_m} m); close the gap or widen it", r = .at[0], z = .at[1])]
    TooClose {
        /// Where.
        at: Point,
        /// What can be told apart, in metres.
        apart_m: f64,
    },
    /// The caller asked to stop.
    #[error("meshing was stopped on request")]
    Stopped,
    /// The finished mesh did not pass its own check.
    #[error("the mesh is defective: {0}; enlarge the narrowest gap or the smallest angle of the drawing")]
    Defective(#[from] MeshDefect),
    /// The marks are not one a triangle.
    #[error("{marks} marks were given for {triangles} triangles; give one mark for each triangle of this mesh")]
    WrongMarks {
        /// How many marks there are.
        marks: usize,
        /// How many triangles there are.
        triangles: usize,
    },
    /// Refining the marked triangles would pass the triangle budget.
    #[error(
        "refining the marked triangles makes {needed} triangles, more than the {limit} allowed; mark fewer, or allow more"
    )]
    RefinedTooFar {
        /// How many triangles there would be.
        needed: usize,
        /// The budget.
        limit: usize,
    },
    /// The refined mesh did not pass its check.
    #[error("the marked triangles cannot be refined: {0}; leave them unmarked there")]
    Unrefinable(#[source] MeshDefect),
}

/// What is wrong with a mesh.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum MeshDefect {
    /// A triangle without positive area.
    #[error("triangle {triangle} at ({r}, {z}) m has no positive area", r = .at[0], z = .at[1])]
    Flat {
        /// Index of the triangle.
        triangle: usize,
        /// One of its vertices.
        at: Point,
    },
    /// Triangles and edges do not refer to each other.
    #[error("edge {edge} and its triangles do not refer to each other")]
    Adjacency {
        /// Index of the edge.
        edge: usize,
    },
    /// Two regions meet where the drawing has no line.
    #[error("regions {} and {} meet at edge {edge}, where the drawing has no line", .regions[0].0, .regions[1].0)]
    RegionLeak {
        /// Index of the edge.
        edge: usize,
        /// Regions on its two sides.
        regions: [RegionId; 2],
    },
    /// The outer edge of the mesh does not lie on the domain outline.
    #[error("edge {edge} bounds the mesh but does not lie on the outline of the domain")]
    Boundary {
        /// Index of the edge.
        edge: usize,
    },
    /// The quadratic or the cubic map of a triangle is not one to one.
    #[error("the curved map of triangle {triangle} at ({r}, {z}) m has a Jacobian of {ratio} of its mean", r = .at[0], z = .at[1])]
    Inverted {
        /// Index of the triangle.
        triangle: usize,
        /// One of its vertices.
        at: Point,
        /// Smallest Jacobian over the straight-sided one.
        ratio: f64,
    },
    /// Vertices - edges + triangles is not 1.
    #[error(
        "{vertices} vertices - {edges} edges + {triangles} triangles must be 1 for a domain in one piece without holes"
    )]
    Euler {
        /// Number of vertices.
        vertices: usize,
        /// Number of edges.
        edges: usize,
        /// Number of triangles.
        triangles: usize,
    },
    /// The triangles do not fill the domain.
    #[error("the triangles cover {covered} m2 of the {wanted} m2 of the domain")]
    Area {
        /// Covered area in square metres.
        covered: f64,
        /// Area of the domain in square metres.
        wanted: f64,
    },
}

/// The upper limit in words, where there is one.
fn at_most(limit: f64, unit: &str) -> String {
    if limit < f64::MAX { format!(" and at most {limit}{unit}") } else { String::new() }
}
