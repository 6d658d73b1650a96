//! A graphite crucible with round corners and its melt in a coil of 10 flat turns. Convention: metres.

use super::{in_half_disc, region};
use mesher::{Drawing, Outline, OutlineError, Piece, Point, RegionId};

const TURNS: u32 = 10;
/// Outer and inner radius of the wall.
const OUTER: f64 = 0.06;
const INNER: f64 = 0.05;
/// Height of the wall's round rim above the bottom, and of the melt.
const RIM: f64 = 0.14;
const MELT: f64 = 0.11;
/// Thickness of the bottom, and radius of the corner inside; outside it is larger by the thickness.
const BOTTOM: f64 = 0.01;
const CORNER: f64 = 0.012;
/// Height of the coil's middle above the bottom.
const MIDDLE: f64 = 0.065;

pub(super) fn drawing() -> Result<Drawing, OutlineError> {
    let mut regions = vec![
        region(RegionId(1), crucible()?, [0.004, 0.002], 1.5e-3),
        region(RegionId(2), melt()?, [0.006, 0.002], 7e-4),
    ];
    for k in 0..TURNS {
        let z = 0.016 * (f64::from(k) - 0.5 * f64::from(TURNS));
        let turn = Outline::rounded_rectangle([0.075, z + 0.001], [0.079, z + 0.015], 0.001)?;
        regions.push(region(RegionId(3 + k), turn, [0.0015, 0.001], 4e-4));
    }
    in_half_disc(0.18, regions)
}

fn line(r: f64, z: f64) -> Piece {
    Piece::Line { to: [r, z - MIDDLE] }
}

fn arc(to: Point, centre: Point, counter_clockwise: bool) -> Piece {
    Piece::Arc { to: [to[0], to[1] - MIDDLE], centre: [centre[0], centre[1] - MIDDLE], counter_clockwise }
}

fn crucible() -> Result<Outline, OutlineError> {
    let outside = CORNER + BOTTOM;
    let pieces = vec![
        line(OUTER - outside, 0.0),
        arc([OUTER, outside], [OUTER - outside, outside], true),
        line(OUTER, RIM),
        arc([INNER, RIM], [0.5 * (INNER + OUTER), RIM], true),
        line(INNER, BOTTOM + CORNER),
        arc([INNER - CORNER, BOTTOM], [INNER - CORNER, BOTTOM + CORNER], false),
        line(0.0, BOTTOM),
        line(0.0, 0.0),
    ];
    Outline::new([0.0, -MIDDLE], pieces)
}

fn melt() -> Result<Outline, OutlineError> {
    let pieces = vec![
        line(INNER - CORNER, BOTTOM),
        arc([INNER, BOTTOM + CORNER], [INNER - CORNER, BOTTOM + CORNER], true),
        line(INNER, MELT),
        line(0.0, MELT),
        line(0.0, BOTTOM),
    ];
    Outline::new([0.0, BOTTOM - MIDDLE], pieces)
}
