//! Outlines of common shapes. Convention: metres; counter-clockwise; piece numbers as each shape says.

use crate::error::OutlineError;
use crate::ids::{Point, distance};
use crate::outline::{Outline, Piece};

impl Outline {
    /// A polygon through the given points, closed by a line from the last to the first.
    ///
    /// # Errors
    /// As [`Outline::new`].
    pub fn polygon(points: &[Point]) -> Result<Self, OutlineError> {
        let Some(&start) = points.first() else {
            return Err(OutlineError::TooFewPieces { count: 0 });
        };
        let pieces = points[1..].iter().chain([&start]).map(|&to| Piece::Line { to }).collect();
        Self::new(start, pieces)
    }

    /// An upright rectangle between two opposite corners.
    ///
    /// # Errors
    /// If it has no width or no height.
    pub fn rectangle(lo: Point, hi: Point) -> Result<Self, OutlineError> {
        Self::polygon(&[lo, [hi[0], lo[1]], hi, [lo[0], hi[1]]])
    }

    /// An upright rectangle with four quarter-circle fillets of radius `fillet_m`, in metres (0 for sharp corners).
    ///
    /// # Errors
    /// If the fillets do not fit or the rectangle is empty. A fillet may be at most half the shorter side.
    pub fn rounded_rectangle(lo: Point, hi: Point, fillet_m: f64) -> Result<Self, OutlineError> {
        if fillet_m == 0.0 {
            return Self::rectangle(lo, hi);
        }
        let half = 0.5 * (hi[0] - lo[0]).min(hi[1] - lo[1]);
        if !(fillet_m > 0.0 && fillet_m <= half * (1.0 + 1e-12)) {
            return Err(OutlineError::BadSize { what: "fillet radius", value: fillet_m, limit: half });
        }
        let f = fillet_m.min(half);
        let (a, b, c, d) = (lo[0] + f, hi[0] - f, lo[1] + f, hi[1] - f);
        let start = [a, lo[1]];
        let mut pieces = Vec::new();
        let mut from = start;
        let corners = [
            ([b, lo[1]], [hi[0], c], [b, c]),
            ([hi[0], d], [b, hi[1]], [b, d]),
            ([a, hi[1]], [lo[0], d], [a, d]),
            ([lo[0], c], start, [a, c]),
        ];
        let least = 1e-9 * half;
        for (line_end, arc_end, centre) in corners {
            if distance(from, line_end) > least {
                pieces.push(Piece::Line { to: line_end });
            }
            pieces.push(Piece::Arc { to: arc_end, centre, counter_clockwise: true });
            from = arc_end;
        }
        Self::new(start, pieces)
    }

    /// A whole circle, as two half circles; it starts at its largest r.
    ///
    /// # Errors
    /// If the radius is not positive and finite.
    pub fn circle(centre: Point, radius: f64) -> Result<Self, OutlineError> {
        positive_radius(radius)?;
        let (right, left) = ([centre[0] + radius, centre[1]], [centre[0] - radius, centre[1]]);
        let arc = |to| Piece::Arc { to, centre, counter_clockwise: true };
        Self::new(right, vec![arc(left), arc(right)])
    }

    /// The half disc `r >= 0` about `(0, centre_z)`: piece 0 is the arc, piece 1 the axis.
    ///
    /// # Errors
    /// If the radius is not positive and finite.
    pub fn half_disc(centre_z: f64, radius: f64) -> Result<Self, OutlineError> {
        positive_radius(radius)?;
        let (low, high) = ([0.0, centre_z - radius], [0.0, centre_z + radius]);
        let arc = Piece::Arc { to: high, centre: [0.0, centre_z], counter_clockwise: true };
        Self::new(low, vec![arc, Piece::Line { to: low }])
    }

    /// The quarter disc `r >= 0, z >= centre_z` about `(0, centre_z)`: piece 0 is the plane, 1 the arc, 2 the axis.
    ///
    /// # Errors
    /// If the radius is not positive and finite.
    pub fn quarter_disc(centre_z: f64, radius: f64) -> Result<Self, OutlineError> {
        positive_radius(radius)?;
        let (origin, right, high) = ([0.0, centre_z], [radius, centre_z], [0.0, centre_z + radius]);
        let arc = Piece::Arc { to: high, centre: origin, counter_clockwise: true };
        Self::new(origin, vec![Piece::Line { to: right }, arc, Piece::Line { to: origin }])
    }
}

fn positive_radius(radius: f64) -> Result<(), OutlineError> {
    if radius > 0.0 && radius.is_finite() {
        Ok(())
    } else {
        Err(OutlineError::BadSize { what: "radius", value: radius, limit: f64::MAX })
    }
}
