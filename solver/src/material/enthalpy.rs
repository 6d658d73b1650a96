//! Specific enthalpy `h(T)` in J/kg, the exact integral of `c(T)` plus the latent heat of melting, and its inverse.
//!
//! The sensible part is zero at 20 °C. The latent heat is taken up evenly between solidus and liquidus; a melting range
//! narrower than 1 K (a melting point has none) is widened to 0.5 K on either side of its middle, so that `h` stays a
//! strictly rising function of temperature. Outside the range of the specific heat `h` continues linearly.

use super::curve::{Curve, REFERENCE_K};
use super::error::{MaterialError, MaterialFault, Property, celsius};
use super::source::Source;

/// Narrowest melting range in kelvin.
const LEAST_RANGE_K: f64 = 1.0;

/// A relative Newton step that is round-off of `h(T)`.
const ROUND_OFF: f64 = 4.0 * f64::EPSILON;

/// Newton or bisection steps at most; bisection alone needs about 60.
const MOST_STEPS: usize = 120;

/// Melting range in kelvin and latent heat in J/kg; solidus and liquidus are equal for a melting point.
#[derive(Debug, Clone, PartialEq)]
pub struct Melting {
    /// Where melting begins, in kelvin.
    pub solidus_k: f64,
    /// Where it is complete, in kelvin.
    pub liquidus_k: f64,
    /// Latent heat of fusion in J/kg.
    pub latent_heat_j_per_kg: f64,
    /// Where the values come from.
    pub source: Source,
}

impl Melting {
    /// The range used for the enthalpy in kelvin: solidus to liquidus, at least 1 K wide.
    pub fn widened_k(&self) -> (f64, f64) {
        if self.liquidus_k - self.solidus_k >= LEAST_RANGE_K {
            return (self.solidus_k, self.liquidus_k);
        }
        let middle = self.solidus_k.midpoint(self.liquidus_k);
        (middle - 0.5 * LEAST_RANGE_K, middle + 0.5 * LEAST_RANGE_K)
    }

    fn check(&self) -> Result<(), MaterialError> {
        let positive = |value: f64, unit, property| {
            if !value.is_finite() {
                return Err(MaterialError::from(MaterialFault::NotFinite { value }).of(property));
            }
            if value <= 0.0 {
                return Err(MaterialError::from(MaterialFault::NotPositive { value, unit, at_c: None }).of(property));
            }
            Ok(())
        };
        positive(self.solidus_k, "K", Property::Solidus)?;
        positive(self.liquidus_k, "K", Property::Liquidus)?;
        positive(self.latent_heat_j_per_kg, "J/kg", Property::LatentHeat)?;
        if self.liquidus_k < self.solidus_k {
            let (solidus_c, liquidus_c) = (celsius(self.solidus_k), celsius(self.liquidus_k));
            let fault = MaterialFault::LiquidusBelowSolidus { solidus_c, liquidus_c };
            return Err(MaterialError::from(fault).of(Property::Liquidus));
        }
        Ok(())
    }
}

/// Enthalpy over temperature and its inverse; both rise strictly.
#[derive(Debug, Clone, PartialEq)]
pub struct Enthalpy {
    specific_heat: Curve,
    /// Begin and end of melting in kelvin and the latent heat in J/kg.
    fusion: Option<(f64, f64, f64)>,
    /// Temperatures between which `h` is smooth, in kelvin, ascending, and `h` there; at least one.
    knots_k: Vec<f64>,
    knots_h: Vec<f64>,
}

impl Enthalpy {
    /// The enthalpy of a specific heat in J/(kg K) and, for a material that melts, its latent heat.
    ///
    /// # Errors
    /// A specific heat that is not greater than zero everywhere; melting data that contradict themselves.
    pub fn new(specific_heat: &Curve, melting: Option<&Melting>) -> Result<Self, MaterialError> {
        specific_heat.check_positive("J/kg/K").map_err(|e| e.of(Property::SpecificHeat))?;
        let mut knots_k = specific_heat.knots_k();
        let mut fusion = None;
        if let Some(melting) = melting {
            melting.check()?;
            let (begin, end) = melting.widened_k();
            knots_k.extend([begin, end]);
            fusion = Some((begin, end, melting.latent_heat_j_per_kg));
        }
        if knots_k.is_empty() {
            knots_k.push(REFERENCE_K);
        }
        knots_k.sort_by(f64::total_cmp);
        knots_k.dedup();
        let mut enthalpy = Self { specific_heat: specific_heat.clone(), fusion, knots_k, knots_h: Vec::new() };
        enthalpy.knots_h = enthalpy.knots_k.iter().map(|&t| enthalpy.value(t)).collect();
        if let Some(&value) = enthalpy.knots_h.iter().find(|h| !h.is_finite()) {
            return Err(MaterialError::from(MaterialFault::NotFinite { value }).of(Property::SpecificHeat));
        }
        Ok(enthalpy)
    }

    /// Enthalpy in J/kg at `t_k` in kelvin.
    pub fn value(&self, t_k: f64) -> f64 {
        let latent = self.fusion.map_or(0.0, |(_, _, heat)| heat * self.liquid_fraction(t_k));
        self.specific_heat.integral(t_k) + latent
    }

    /// [`Enthalpy::value`] at every temperature of `t_k`, written over it; quickest for temperatures near each other.
    pub fn values(&self, t_k: &mut [f64]) {
        if self.fusion.is_some_and(|(begin, ..)| t_k.iter().any(|&t| t > begin)) {
            for t in t_k {
                *t = self.value(*t);
            }
        } else {
            self.specific_heat.integrals(t_k);
        }
    }

    /// Derivative in J/(kg K) at `t_k`, from the right at a corner: the effective specific heat, latent heat included.
    pub fn slope(&self, t_k: f64) -> f64 {
        let latent = match self.fusion {
            Some((begin, end, heat)) if t_k >= begin && t_k < end => heat / (end - begin),
            _ => 0.0,
        };
        self.specific_heat.value(t_k) + latent
    }

    /// Liquid part of the mass at `t_k`, 0 to 1; 0 for a material without melting data.
    pub fn liquid_fraction(&self, t_k: f64) -> f64 {
        self.fusion.map_or(0.0, |(begin, end, _)| ((t_k - begin) / (end - begin)).clamp(0.0, 1.0))
    }

    /// Temperature in kelvin at which the enthalpy is `h` in J/kg: the inverse of [`Enthalpy::value`] to round-off.
    ///
    /// Every `h` has one, because `h(T)` rises strictly and is continued linearly; far below the data it may lie under
    /// absolute zero. NaN in, NaN out.
    pub fn temperature(&self, h: f64) -> f64 {
        if h.is_nan() {
            return h;
        }
        let last = self.knots_k.len() - 1;
        let above = self.knots_h.partition_point(|&knot| knot <= h);
        if above == 0 {
            return self.knots_k[0] + (h - self.knots_h[0]) / self.specific_heat.value(self.knots_k[0]);
        }
        if above > last {
            return self.knots_k[last] + (h - self.knots_h[last]) / self.specific_heat.value(self.knots_k[last]);
        }
        self.between(above - 1, h)
    }

    /// Newton's method kept inside the shrinking bracket between knots `i` and `i + 1`, bisection where it leaves it.
    fn between(&self, i: usize, h: f64) -> f64 {
        let (mut low, mut high) = (self.knots_k[i], self.knots_k[i + 1]);
        let share = (h - self.knots_h[i]) / (self.knots_h[i + 1] - self.knots_h[i]);
        let mut t = low + share * (high - low);
        for _ in 0..MOST_STEPS {
            let excess = self.value(t) - h;
            if excess > 0.0 {
                high = t;
            } else {
                low = t;
            }
            let newton = t - excess / self.slope(t);
            if (newton - t).abs() <= ROUND_OFF * t {
                return newton.clamp(self.knots_k[i], self.knots_k[i + 1]);
            }
            let next = if newton > low && newton < high { newton } else { low.midpoint(high) };
            if next <= low || next >= high {
                return next;
            }
            t = next;
        }
        t
    }
}
