//! Choice of the time step from the error of the last ones, in seconds and kelvin.
//!
//! Proportional-integral control, `dt *= 0.9 (tol/e)^0.35 (e_before/tol)^0.2`, within 0.2 and 3: exponents 0.7/k and
//! 0.4/k for an estimate that falls as `dt^k`, k = 2. Source: K. Gustafsson, ACM Trans. Math. Softw. 17 (1991) 533-554.

const SAFETY: f64 = 0.9;
const INTEGRAL: f64 = 0.35;
const PROPORTIONAL: f64 = 0.2;
const LEAST_FACTOR: f64 = 0.2;
const LARGEST_FACTOR: f64 = 3.0;
/// An error below this share of the tolerance counts as this share.
const LEAST_ERROR: f64 = 1e-4;

/// Proposes steps and judges them.
#[derive(Debug, Clone, PartialEq)]
pub struct StepControl {
    tolerance_k: f64,
    step_s: f64,
    error_before: Option<f64>,
    may_grow: bool,
}

impl StepControl {
    /// Control to an error of `tolerance_k` kelvin a step; the first proposal is without limit.
    pub fn new(tolerance_k: f64) -> Self {
        Self { tolerance_k, step_s: f64::INFINITY, error_before: None, may_grow: true }
    }

    /// Step to try next in seconds; infinite where nothing is known, so that the caller's own limit decides.
    pub fn step_s(&self) -> f64 {
        self.step_s
    }

    /// Forgets what it learnt, as after a source was switched.
    pub fn restart(&mut self) {
        *self = Self::new(self.tolerance_k);
    }

    /// True where a step of `dt_s` seconds with an error of `error_k` kelvin may be kept; makes the next proposal.
    ///
    /// `dt_s` may be shorter than was proposed, to meet an event; the old proposal then stands if the error allows.
    pub fn accepts(&mut self, dt_s: f64, error_k: f64) -> bool {
        let error = error_k / self.tolerance_k;
        if error.is_nan() || error > 1.0 {
            self.shorten(dt_s, SAFETY * error.powf(-0.5));
            return false;
        }
        let error = error.max(LEAST_ERROR);
        let mut factor = SAFETY * error.powf(-INTEGRAL) * self.error_before.unwrap_or(error).powf(PROPORTIONAL);
        factor = factor.clamp(LEAST_FACTOR, if self.may_grow { LARGEST_FACTOR } else { 1.0 });
        let stands = dt_s < self.step_s && self.step_s.is_finite() && factor >= 1.0;
        self.step_s = if stands { self.step_s.max(dt_s * factor) } else { dt_s * factor };
        self.error_before = Some(error);
        self.may_grow = true;
        true
    }

    /// Takes note that a step of `dt_s` seconds could not be solved, and proposes a quarter of it.
    pub fn failed(&mut self, dt_s: f64) {
        self.shorten(dt_s, 0.25);
    }

    fn shorten(&mut self, dt_s: f64, factor: f64) {
        let factor = if factor.is_finite() { factor.clamp(LEAST_FACTOR, 0.8) } else { LEAST_FACTOR };
        self.step_s = dt_s * factor;
        self.may_grow = false;
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_step_with_too_large_an_error_is_rejected_and_shortened() {
        let mut c = StepControl::new(2.0);
        assert!(!c.accepts(1.0, 8.0));
        // 0.9 / sqrt(8 / 2), as an error of second order in the step asks.
        assert!((c.step_s() - 0.45).abs() < 1e-12, "{}", c.step_s());
        assert!(c.accepts(0.45, 0.1));
        assert!(c.step_s() <= 0.45, "no growth straight after a rejection: {}", c.step_s());
    }

    #[test]
    fn steps_settle_where_an_error_of_second_order_meets_the_tolerance() {
        let mut c = StepControl::new(2.0);
        let mut dt = 0.01;
        for _ in 0..60 {
            c.accepts(dt, 0.5 * dt * dt);
            dt = c.step_s();
        }
        // 0.5 dt^2 = 2 at dt = 2; the safety factor holds it a little below.
        assert!(dt > 1.2 && dt < 2.0, "settled at {dt}");
    }

    #[test]
    fn a_step_shortened_for_an_event_does_not_shorten_the_next() {
        let mut c = StepControl::new(2.0);
        assert!(c.accepts(10.0, 0.5));
        let proposed = c.step_s();
        assert!(proposed > 10.0);
        assert!(c.accepts(0.01, 0.001));
        assert!(c.step_s() >= proposed);
    }

    #[test]
    fn a_step_grows_at_most_threefold_and_a_failed_one_is_quartered() {
        let mut c = StepControl::new(2.0);
        assert!(c.accepts(1.0, 0.0));
        assert_eq!(c.step_s(), 3.0);
        c.failed(3.0);
        assert_eq!(c.step_s(), 0.75);
    }

    #[test]
    fn an_error_that_is_not_a_number_is_never_accepted() {
        let mut c = StepControl::new(2.0);
        assert!(!c.accepts(1.0, f64::NAN));
        assert!(c.step_s() < 1.0 && c.step_s() > 0.0);
    }
}
