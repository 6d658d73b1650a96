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

/// What became of a step.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Verdict {
    /// Keep it; the proposal is for the next one.
    Accepted,
    /// Do it again with the new proposal.
    Rejected,
    /// Its error is too large, and no shorter step is allowed.
    TooShort,
}

/// Proposes steps and judges them.
#[derive(Debug, Clone)]
pub struct StepControl {
    tolerance_k: f64,
    shortest_s: f64,
    longest_s: f64,
    proposal_s: f64,
    error_before: Option<f64>,
    may_grow: bool,
}

impl StepControl {
    /// Control to an error of `tolerance_k` kelvin a step, starting with `first_s` seconds; steps stay within
    /// `shortest_s` and `longest_s`.
    pub fn new(tolerance_k: f64, first_s: f64, shortest_s: f64, longest_s: f64) -> Self {
        let mut control =
            Self { tolerance_k, shortest_s, longest_s, proposal_s: 0.0, error_before: None, may_grow: true };
        control.restart(first_s);
        control
    }

    /// Step to try next, seconds.
    pub fn proposal_s(&self) -> f64 {
        self.proposal_s
    }

    /// Begins anew with `first_s` seconds, as after a source was switched.
    pub fn restart(&mut self, first_s: f64) {
        self.proposal_s = first_s.min(self.longest_s).max(self.shortest_s);
        self.error_before = None;
        self.may_grow = true;
    }

    /// Judges a step of `dt_s` seconds with an error of `error_k` kelvin and makes the next proposal.
    ///
    /// `dt_s` may be shorter than was proposed, to meet an event; the old proposal then stands if the error allows.
    pub fn judge(&mut self, dt_s: f64, error_k: f64) -> Verdict {
        let error = (error_k / self.tolerance_k).max(LEAST_ERROR);
        if !(error <= 1.0) {
            return self.shorten(dt_s, SAFETY * error.powf(-0.5));
        }
        let mut factor = SAFETY * error.powf(-INTEGRAL) * self.error_before.unwrap_or(error).powf(PROPORTIONAL);
        factor = factor.clamp(LEAST_FACTOR, if self.may_grow { LARGEST_FACTOR } else { 1.0 });
        let mut next = dt_s * factor;
        if dt_s < self.proposal_s && factor >= 1.0 {
            next = next.max(self.proposal_s);
        }
        self.proposal_s = next.min(self.longest_s).max(self.shortest_s);
        self.error_before = Some(error);
        self.may_grow = true;
        Verdict::Accepted
    }

    /// Takes note that a step of `dt_s` seconds could not be solved, and proposes a quarter of it.
    pub fn failed(&mut self, dt_s: f64) -> Verdict {
        self.shorten(dt_s, 0.25)
    }

    fn shorten(&mut self, dt_s: f64, factor: f64) -> Verdict {
        if dt_s <= self.shortest_s * (1.0 + 1e-9) {
            return Verdict::TooShort;
        }
        let factor = if factor.is_finite() { factor.clamp(LEAST_FACTOR, 0.8) } else { LEAST_FACTOR };
        self.proposal_s = (dt_s * factor).max(self.shortest_s);
        self.may_grow = false;
        Verdict::Rejected
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn control() -> StepControl {
        StepControl::new(2.0, 1.0, 1e-3, 100.0)
    }

    #[test]
    fn a_step_with_too_large_an_error_is_rejected_and_shortened() {
        let mut c = control();
        assert_eq!(c.judge(1.0, 8.0), Verdict::Rejected);
        // 0.9 / sqrt(8 / 2), as an error of second order in the step asks.
        assert!((c.proposal_s() - 0.45).abs() < 1e-12, "{}", c.proposal_s());
        assert_eq!(c.judge(0.45, 0.1), Verdict::Accepted);
        assert!(c.proposal_s() <= 0.45, "no growth straight after a rejection: {}", c.proposal_s());
    }

    #[test]
    fn steps_settle_where_an_error_of_second_order_meets_the_tolerance() {
        let mut c = control();
        for _ in 0..60 {
            let dt = c.proposal_s();
            c.judge(dt, 0.5 * dt * dt);
        }
        // 0.5 dt^2 = 2 at dt = 2; the safety factor holds it a little below.
        let dt = c.proposal_s();
        assert!(dt > 1.2 && dt < 2.0, "settled at {dt}");
    }

    #[test]
    fn a_step_shortened_for_an_event_does_not_shorten_the_next() {
        let mut c = StepControl::new(2.0, 10.0, 1e-3, 100.0);
        assert_eq!(c.judge(0.01, 0.001), Verdict::Accepted);
        assert!(c.proposal_s() >= 10.0);
    }

    #[test]
    fn an_error_that_is_not_a_number_rejects_down_to_the_shortest_step() {
        let mut c = control();
        let mut verdict = Verdict::Rejected;
        let mut tries = 0;
        while verdict == Verdict::Rejected {
            verdict = c.judge(c.proposal_s(), f64::NAN);
            tries += 1;
            assert!(tries < 20, "must end");
        }
        assert_eq!(verdict, Verdict::TooShort);
    }
}
