//! A pancake coil of 40 flat turns under a steel disc, on three rings of ferrite bars that are drawn as discs. Convention: metres.

use super::{in_half_disc, region};
use mesher::{Drawing, Outline, OutlineError, RegionId};

const TURNS: u32 = 40;

pub(super) fn drawing() -> Result<Drawing, OutlineError> {
    let disc = Outline::rounded_rectangle([-0.24, 0.015], [0.24, 0.023], 0.001)?;
    let mut regions = vec![region(RegionId(1), disc, [0.006, 0.004], 4e-4)];
    for (k, [inner, outer]) in [[0.02, 0.075], [0.085, 0.14], [0.15, 0.23]].into_iter().enumerate() {
        let bars = Outline::rectangle([inner, -0.016], [outer, -0.004])?;
        regions.push(region(RegionId(2 + k as u32), bars, [0.004, 0.003], 0.0));
    }
    for k in 0..TURNS {
        let r = 0.03 + 0.005 * f64::from(k);
        let turn = Outline::rectangle([r, 0.0], [r + 0.003, 0.008])?;
        regions.push(region(RegionId(5 + k), turn, [0.003, 0.003], 2e-3));
    }
    in_half_disc(0.34, regions)
}
