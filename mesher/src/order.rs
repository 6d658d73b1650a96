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

/// Point indices along a space-filling curve, so that each is inserted near the one before it.
pub(crate) fn along_curve(points: &[Point]) -> Vec<u32> {
    let (lo, hi) = bounds(points);
    let scale = 65535.0 / (hi[0] - lo[0]).max(hi[1] - lo[1]).max(f64::MIN_POSITIVE);
    let key = |p: &Point| hilbert(((p[0] - lo[0]) * scale) as u32, ((p[1] - lo[1]) * scale) as u32);
    let mut order: Vec<(u64, u32)> = points.iter().enumerate().map(|(i, p)| (key(p), i as u32)).collect();
    order.sort_unstable();
    order.into_iter().map(|(_, i)| i).collect()
}

fn hilbert(mut x: u32, mut y: u32) -> u64 {
    let mut key = 0;
    let mut s = 1u32 << 15;
    while s > 0 {
        let (right, up) = (u32::from(x & s > 0), u32::from(y & s > 0));
        key += u64::from(s) * u64::from(s) * u64::from((3 * right) ^ up);
        if up == 0 {
            if right == 1 {
                x = 65535 - x;
                y = 65535 - y;
            }
            std::mem::swap(&mut x, &mut y);
        }
        s /= 2;
    }
    key
}
