//! A steel tube heated from outside, 0.1 mm from its liner, in a coil of 8 round copper tubes. Convention: metres.

use super::{AIR, in_half_disc, region};
use mesher::{Drawing, Outline, OutlineError, RegionId};

const TURNS: u32 = 8;
const GAP: f64 = 1e-4;

pub(super) fn drawing() -> Result<Drawing, OutlineError> {
    let tube = Outline::rectangle([0.05, -0.1], [0.06, 0.1])?;
    let liner = Outline::rectangle([0.06 + GAP, -0.11], [0.07, 0.11])?;
    let mut regions =
        vec![region(RegionId(1), tube, [0.005, 0.005], 8e-4), region(RegionId(2), liner, [0.005, 0.005], 0.0)];
    for k in 0..TURNS {
        let z = 0.024 * (f64::from(k) + 0.5 - 0.5 * f64::from(TURNS));
        let centre = [0.086, z];
        regions.push(region(RegionId(3 + k), Outline::circle(centre, 0.009)?, [0.004, 0.004], 1e-3));
        regions.push(region(AIR, Outline::circle(centre, 0.0065)?, [0.004, 0.004], 0.0));
    }
    in_half_disc(0.18, regions)
}
