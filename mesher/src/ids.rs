//! Names of things in a mesh, and the point type. Convention: a point is `[r, z]` in metres; the mesher knows no physics and
//! treats both coordinates alike.

/// A point `[r, z]`, in metres.
pub type Point = [f64; 2];

/// Identity of a region, chosen by the caller; several regions of a drawing may share one.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct RegionId(pub u32);

/// Identity of a curve of a mesh: an index into its curves.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct CurveId(pub u32);

/// What stands in [`crate::Edge::triangles`] where there is no second triangle.
pub const NO_TRIANGLE: u32 = u32::MAX;

pub(crate) fn sub(a: Point, b: Point) -> Point {
    [a[0] - b[0], a[1] - b[1]]
}

pub(crate) fn along(a: Point, direction: Point, length: f64) -> Point {
    [a[0] + direction[0] * length, a[1] + direction[1] * length]
}

pub(crate) fn between(a: Point, b: Point, t: f64) -> Point {
    [a[0] + t * (b[0] - a[0]), a[1] + t * (b[1] - a[1])]
}

pub(crate) fn dot(a: Point, b: Point) -> f64 {
    a[0] * b[0] + a[1] * b[1]
}

pub(crate) fn cross(a: Point, b: Point) -> f64 {
    a[0] * b[1] - a[1] * b[0]
}

pub(crate) fn distance(a: Point, b: Point) -> f64 {
    distance_squared(a, b).sqrt()
}

pub(crate) fn distance_squared(a: Point, b: Point) -> f64 {
    let d = sub(a, b);
    dot(d, d)
}

/// Left normal of a direction: a quarter turn counter-clockwise.
pub(crate) fn left_of(direction: Point) -> Point {
    [-direction[1], direction[0]]
}
