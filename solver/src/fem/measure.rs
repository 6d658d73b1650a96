//! The measure of a body of revolution: `2 pi r` lives here and nowhere else.

use std::f64::consts::PI;

/// Circumference in metres of the ring that a point at radius `r` sweeps.
pub fn ring(r: f64) -> f64 {
    2.0 * PI * r
}
