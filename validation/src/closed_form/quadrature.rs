//! Adaptive Gauss-Legendre quadrature of complex functions of a real variable.
//!
//! Convention: real and imaginary parts are each held to the relative tolerance, for a loss can be far smaller than the
//! reactance it comes with.
//! Source: panel halving with a 16-point rule (nodes from `gauss-quad`); common practice, no source.

use super::error::ClosedFormError;
use gauss_quad::GaussLegendre;
use num_complex::Complex64;
use std::num::NonZeroUsize;

/// Points per panel.
const POINTS: NonZeroUsize = match NonZeroUsize::new(16) {
    Some(n) => n,
    None => NonZeroUsize::MIN,
};
/// Halvings of one starting panel before the integral is refused.
const HALVINGS: u32 = 40;
/// Starting panels before the integral is refused.
pub(crate) const PANEL_LIMIT: f64 = 4e5;

/// A 16-point rule and the tolerance its halvings are held to.
pub(crate) struct Quadrature {
    place: &'static str,
    rule: GaussLegendre,
    relative: f64,
}

impl Quadrature {
    /// A quadrature for the function called `place`, with a relative tolerance.
    pub(crate) fn new(place: &'static str, relative: f64) -> Self {
        Self { place, rule: GaussLegendre::new(POINTS), relative }
    }

    /// Integral of `f` over one panel by the plain rule.
    pub(crate) fn panel<F>(&self, a: f64, b: f64, f: &mut F) -> Result<Complex64, ClosedFormError>
    where
        F: FnMut(f64) -> Result<Complex64, ClosedFormError>,
    {
        let (half, middle) = (0.5 * (b - a), 0.5 * (a + b));
        let mut total = Complex64::ZERO;
        for &(node, weight) in self.rule.as_node_weight_pairs() {
            total += f(middle + half * node)? * weight;
        }
        Ok(total * half)
    }

    /// Integral of `f` over the panels between consecutive `edges`, each halved until it stops changing.
    pub(crate) fn integrate<F>(&self, edges: &[f64], mut f: F) -> Result<Complex64, ClosedFormError>
    where
        F: FnMut(f64) -> Result<Complex64, ClosedFormError>,
    {
        let mut first = Vec::with_capacity(edges.len());
        let mut size = Complex64::ZERO;
        for pair in edges.windows(2) {
            let value = self.panel(pair[0], pair[1], &mut f)?;
            size += Complex64::new(value.re.abs(), value.im.abs());
            first.push((pair[0], pair[1], value));
        }
        let share = self.relative / first.len().max(1) as f64;
        let allowed = size * share;
        let mut total = Complex64::ZERO;
        for (a, b, value) in first {
            total += self.refine(a, b, value, allowed, &mut f)?;
        }
        Ok(total)
    }

    /// Halves one panel until neither part changes by more than `allowed`, or than round-off of the panel itself.
    fn refine<F>(
        &self,
        a: f64,
        b: f64,
        value: Complex64,
        allowed: Complex64,
        f: &mut F,
    ) -> Result<Complex64, ClosedFormError>
    where
        F: FnMut(f64) -> Result<Complex64, ClosedFormError>,
    {
        let mut stack = vec![(a, b, value, 0_u32)];
        let mut total = Complex64::ZERO;
        while let Some((a, b, coarse, depth)) = stack.pop() {
            let middle = 0.5 * (a + b);
            let left = self.panel(a, middle, f)?;
            let right = self.panel(middle, b, f)?;
            let fine = left + right;
            let change = fine - coarse;
            let round_off = 16.0 * f64::EPSILON * coarse.norm();
            if change.re.abs() <= allowed.re.max(round_off) && change.im.abs() <= allowed.im.max(round_off) {
                total += fine;
            } else if depth < HALVINGS && change.norm().is_finite() {
                stack.push((a, middle, left, depth + 1));
                stack.push((middle, b, right, depth + 1));
            } else {
                return Err(ClosedFormError::Quadrature {
                    place: self.place,
                    at: middle,
                    change: change.norm(),
                    allowed: allowed.norm(),
                    halvings: depth,
                });
            }
        }
        Ok(total)
    }
}

/// Edges of equal panels on `[0, top]`, none wider than `width`.
pub(crate) fn equal_panels(place: &'static str, top: f64, width: f64) -> Result<Vec<f64>, ClosedFormError> {
    let panels = (top / width).ceil().max(1.0);
    if panels.is_nan() || panels > PANEL_LIMIT {
        return Err(ClosedFormError::TooManyPanels { place, panels, limit: PANEL_LIMIT });
    }
    let count = panels as u32;
    Ok((0..=count).map(|i| top * f64::from(i) / panels).collect())
}
