//! Conducting, permeable sphere in a uniform alternating field.
//!
//! Convention: SI, peak phasors, `e^{+jwt}`; `x = (1 + j) a/delta`.
//! Source: W. R. Smythe, Static and Dynamic Electricity (from memory), worked out here: inside
//! `A_phi ~ r^{-1/2} I_{3/2}(kappa r) sin(theta)`, outside `(B0/2)(r + D/r^2) sin(theta)`; continuity of `A` and of `H_theta`
//! gives `D/a^3 = (2 mu_r - g)/(mu_r + g)` with `g = x d/dx ln(x i1(x))`.

use super::constants::{MU0, skin_depth};
use super::error::{ClosedFormError, positive};
use num_complex::Complex64;
use std::f64::consts::PI;

const PLACE: &str = "sphere::UniformFieldSphere";
/// Below this `|x|` the logarithmic derivative is summed as a series.
const SERIES_UP_TO: f64 = 2.0;

/// A sphere in a uniform field.
#[derive(Debug, Clone, PartialEq)]
pub struct UniformFieldSphere {
    radius: f64,
    frequency: f64,
    mu_r: f64,
    /// `g - 2`, zero at zero frequency.
    excess: Complex64,
}

impl UniformFieldSphere {
    /// A sphere of `radius` (m), `resistivity` (ohm m) and `mu_r` at `frequency` (Hz).
    ///
    /// # Errors
    /// [`ClosedFormError::Argument`] unless all are positive.
    pub fn new(radius: f64, resistivity: f64, mu_r: f64, frequency: f64) -> Result<Self, ClosedFormError> {
        positive(PLACE, "radius", radius, "m")?;
        let delta = skin_depth(resistivity, mu_r, frequency)?;
        let excess = excess(Complex64::new(1.0, 1.0) * (radius / delta));
        Ok(Self { radius, frequency, mu_r, excess })
    }

    /// Magnetic dipole moment `m = 2 pi a^3 (B0/mu0)(2 mu_r - g)/(mu_r + g)`, A m^2 peak, in a peak field `b0_peak` (T).
    pub fn moment_peak(&self, b0_peak: f64) -> Complex64 {
        let ratio = (2.0 * (self.mu_r - 1.0) - self.excess) / (self.mu_r + 2.0 + self.excess);
        2.0 * PI * self.radius.powi(3) * b0_peak / MU0 * ratio
    }

    /// Power `P = -(w/2) Im(m) B0`, W, in a peak field `b0_peak` (T).
    ///
    /// Evaluated as `3 mu_r Im(g)/|mu_r + g|^2`, which does not cancel at low frequency. Its limit there is
    /// `pi w^2 B0^2 a^5/(15 rho)` for `mu_r = 1`.
    pub fn power(&self, b0_peak: f64) -> f64 {
        let w = 2.0 * PI * self.frequency;
        let imaginary = 3.0 * self.mu_r * self.excess.im / (self.mu_r + 2.0 + self.excess).norm_sqr();
        w * PI * self.radius.powi(3) * b0_peak * b0_peak / MU0 * imaginary
    }
}

/// `g(x) - 2` with `g = x (x i1)'/(x i1)`, `i1(x) = cosh(x)/x - sinh(x)/x^2`.
fn excess(x: Complex64) -> Complex64 {
    if x.norm() <= SERIES_UP_TO {
        // i1 = sum c_k x^{2k+1}, c_k = 1/(2^k k! (2k+3)!!)
        let (mut top, mut bottom, mut term) = (Complex64::ZERO, Complex64::ZERO, Complex64::ONE);
        for k in 0..25 {
            let k = f64::from(k);
            bottom += term;
            top += 2.0 * k * term;
            term = term * x * x / (2.0 * (k + 1.0) * (2.0 * k + 5.0));
        }
        return top / bottom;
    }
    let decay = (-2.0 * x).exp();
    let tanh = (1.0 - decay) / (1.0 + decay);
    (x * x * tanh - x + tanh) / (x - tanh) - 2.0
}
