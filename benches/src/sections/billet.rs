//! A billet heater: a steel billet of 80 mm by 240 mm in a refractory tube and a coil of 12 hollow turns. Convention: metres.

use super::{AIR, in_half_disc, region};
use mesher::{Drawing, Outline, OutlineError, RegionId};

const TURNS: u32 = 12;
const PITCH: f64 = 0.02;

pub(super) fn drawing() -> Result<Drawing, OutlineError> {
    let billet = Outline::rectangle([0.0, -0.12], [0.04, 0.12])?;
    let refractory = Outline::rectangle([0.045, -0.13], [0.055, 0.13])?;
    let mut regions =
        vec![region(RegionId(1), billet, [0.01, 0.004], 6e-4), region(RegionId(2), refractory, [0.004, 0.004], 0.0)];
    for k in 0..TURNS {
        let z = PITCH * (f64::from(k) - 0.5 * f64::from(TURNS));
        let wall = Outline::rounded_rectangle([0.06, z + 0.002], [0.072, z + 0.018], 0.0015)?;
        let bore = Outline::rounded_rectangle([0.062, z + 0.004], [0.07, z + 0.016], 0.001)?;
        regions.push(region(RegionId(3 + k), wall, [0.003, 0.003], 6e-4));
        regions.push(region(AIR, bore, [0.004, 0.003], 0.0));
    }
    in_half_disc(0.18, regions)
}
