//! The order in which points are inserted: along a space-filling curve. Convention: as it is called for; ties keep the order given.
//! Source: D. Hilbert, "Ueber die stetige Abbildung einer Linie auf ein Flaechenstueck", 1891.

use crate::ids::Point;

/// Lower and upper corner of the box around some points.
pub(crate) fn bounds(points: &[Point]) -> (Point, Point) {
    let (mut lo, mut hi) = ([f64::INFINITY; 2], [f64::NEG_INFINITY; 2]);
    for p in points {
        for k in 0..2 {
            lo[k] = lo[k].min(p[k]);
            hi[k] = hi[k].max(p[k]);
        }
    }
    (lo, hi)
}

/// Levels of the space-filling curve.
const LEVELS: u32 = 16;

/// Point indices along a space-filling curve, so that each is inserted near the one before it.
pub(crate) fn along_curve(points: &[Point]) -> Vec<u32> {
    let (lo, hi) = bounds(points);
    let scale = f64::from((1u32 << LEVELS) - 1) / (hi[0] - lo[0]).max(hi[1] - lo[1]).max(f64::MIN_POSITIVE);
    let key = |p: &Point| hilbert(((p[0] - lo[0]) * scale) as u32, ((p[1] - lo[1]) * scale) as u32);
    let mut order: Vec<u64> = points.iter().enumerate().map(|(i, p)| (u64::from(key(p)) << 32) | i as u64).collect();
    order.sort_unstable();
    order.into_iter().map(|k| k as u32).collect()
}

/// Place of a cell along the curve: in each quadrant the curve is the same, with its axes swapped, turned over, or both.
fn hilbert(x: u32, y: u32) -> u32 {
    let (mut key, mut swap, mut invert) = (0, 0, 0);
    for level in (0..LEVELS).rev() {
        let (p, q) = ((x >> level) & 1, (y >> level) & 1);
        let exchange = (p ^ q) & swap;
        let (right, up) = (p ^ exchange ^ invert, q ^ exchange ^ invert);
        key = (key << 2) | ((3 * right) ^ up);
        let low = up ^ 1;
        invert ^= low & right;
        swap ^= low;
    }
    key
}

#[cfg(test)]
mod tests {
    use super::hilbert;

    #[test]
    fn cells_next_to_each_other_on_the_curve_touch() {
        const SIDE: u32 = 32;
        let top = super::LEVELS - SIDE.trailing_zeros();
        let mut cells: Vec<(u32, u32, u32)> =
            (0..SIDE * SIDE).map(|i| (i % SIDE, i / SIDE)).map(|(x, y)| (hilbert(x << top, y << top), x, y)).collect();
        cells.sort_unstable();
        for pair in cells.windows(2) {
            let ((_, a, b), (_, c, d)) = (pair[0], pair[1]);
            assert_eq!(a.abs_diff(c) + b.abs_diff(d), 1, "{pair:?}");
        }
    }
}
