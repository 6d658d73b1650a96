//! Thermal conductivity without jumps, in W/(m K) over kelvin.
//!
//! Formulas of standards need not meet where one ends and the next begins (EN 1993-1-2 has 27.36 and 27.3 W/(m K) at
//! 800 °C). At a jump the heat equation in a node's temperature has no solution for some temperatures; a jump is
//! therefore bridged by a straight line 1 K wide, as a melting point is.

use crate::material::Curve;

/// Half the width of a bridge, kelvin.
const HALF_WIDTH_K: f64 = 0.5;
/// Least jump that is bridged, relative to the value.
const LEAST_JUMP: f64 = 1e-9;
/// Halvings that find a jump.
const HALVINGS: usize = 45;

/// A straight line across a jump.
#[derive(Debug, Clone, Copy, PartialEq)]
struct Bridge {
    from_k: f64,
    value: f64,
    slope: f64,
}

/// A conductivity curve with its jumps bridged.
#[derive(Debug, Clone)]
pub(super) struct Conductivity {
    curve: Curve,
    bridges: Vec<Bridge>,
}

impl Conductivity {
    /// Finds the jumps of a curve, at most one a kelvin of its range, and bridges them.
    pub(super) fn new(curve: &Curve) -> Self {
        let (low, high) = curve.range_k().unwrap_or((0.0, 0.0));
        let count = (high - low).ceil().max(1.0) as usize;
        let at = |i: usize| low + (high - low) * i as f64 / count as f64;
        let jumps = (0..count).filter_map(|i| find_jump(curve, at(i), at(i + 1)));
        let bridge = |t: f64| {
            let (from_k, to_k) = (t - HALF_WIDTH_K, t + HALF_WIDTH_K);
            let value = curve.value(from_k);
            Bridge { from_k, value, slope: (curve.value(to_k) - value) / (to_k - from_k) }
        };
        Self { bridges: jumps.map(bridge).collect(), curve: curve.clone() }
    }

    /// Conductivity at `t` in kelvin.
    pub(super) fn value(&self, t: f64) -> f64 {
        match self.bridges.iter().find(|bridge| bridge.spans(t)) {
            Some(bridge) => bridge.value + bridge.slope * (t - bridge.from_k),
            None => self.curve.value(t),
        }
    }

    /// [`Conductivity::value`] at every temperature of `t_k`, written over it; quickest for temperatures near each other.
    pub(super) fn values(&self, t_k: &mut [f64]) {
        if self.bridges.iter().any(|bridge| t_k.iter().any(|&t| bridge.spans(t))) {
            for t in t_k {
                *t = self.value(*t);
            }
        } else {
            self.curve.values(t_k);
        }
    }
}

impl Bridge {
    fn spans(&self, t: f64) -> bool {
        (0.0..2.0 * HALF_WIDTH_K).contains(&(t - self.from_k))
    }
}

/// Temperature of a jump between `a` and `b`: where the difference of two values outlives the distance between them.
fn find_jump(curve: &Curve, mut a: f64, mut b: f64) -> Option<f64> {
    let (mut va, mut vb) = (curve.value(a), curve.value(b));
    for _ in 0..HALVINGS {
        if (vb - va).abs() <= LEAST_JUMP * va.abs() {
            return None;
        }
        let m = 0.5 * (a + b);
        let vm = curve.value(m);
        if (vm - va).abs() > (vb - vm).abs() {
            (b, vb) = (m, vm);
        } else {
            (a, va) = (m, vm);
        }
    }
    Some(b)
}

#[cfg(test)]
mod tests {
    #![allow(clippy::unwrap_used, reason = "tests")]
    use super::*;
    use crate::material::library;

    #[test]
    fn the_jump_of_carbon_steel_at_800_celsius_is_bridged_and_nothing_else_is_changed() {
        // EN 1993-1-2:2005, 3.4.1.3: 54 - 0.0333 t up to 800 °C, 27.3 above.
        let curve = library().unwrap().find("C22").unwrap().conductivity.clone();
        let bridged = Conductivity::new(&curve);
        assert_eq!(bridged.bridges.len(), 1, "{:?}", bridged.bridges);
        assert!((bridged.value(1073.15) - 27.33).abs() < 0.01);
        let mut before = bridged.value(293.15);
        for i in 0..200_000 {
            let t = 293.15 + i as f64 * 0.006;
            let here = bridged.value(t);
            assert!((here - before).abs() < 1e-3, "jump at {t} K");
            if (t - 1073.15).abs() > 0.51 {
                assert_eq!(here, curve.value(t));
            }
            before = here;
        }
    }

    #[test]
    fn tables_and_constants_have_no_bridges() {
        let table = Curve::table(&[(300.0, 10.0), (300.4, 90.0), (500.0, 20.0), (2000.0, 20.0)]).unwrap();
        assert!(Conductivity::new(&table).bridges.is_empty());
        assert!(Conductivity::new(&Curve::constant(3.0).unwrap()).bridges.is_empty());
    }
}
