//! Harmonic eddy currents in the meridian half plane.
//!
//! Unknown `u = A_phi / r` in tesla, peak phasor at `e^{+jwt}`, so `B_r = -r du/dz`, `B_z = 2 u + r du/dr`, and
//!
//! ```text
//! (1)  K(u, v) = int nu [ r^2 u_z v_z + (2 u + r u_r)(2 v + r v_r) ] 2 pi r dr dz
//! (2)  E = -j w (r u - W / r),   W = V_turn / (2 pi j w),   W = 0 outside coils
//! (3)  K(u, v) + j w int sigma (r u - W / r)(r v - Y / r) 2 pi r dr dz = 2 pi I Y     (Y: test value of W)
//! (4)  p = 1/2 sigma |E|^2,   V = j w b^T x,   Re(V I*) / 2 = sum of losses
//! ```
//!
//! The real part of (3) is positive semi-definite and the imaginary part too, so an `L D L^T` factorisation needs no
//! pivoting (N. J. Higham, Math. Comp. 67, 1998). Every integrand is a polynomial times a coefficient: nothing is
//! singular on the axis, and a uniform axial field is represented exactly.

#![allow(
    clippy::inline_always,
    reason = "code inside a run-time dispatch is compiled for its vector unit only if inlined there"
)]

pub mod conductor;
pub mod drive;
mod element_forms;
mod field_rows;
pub mod maps;
pub mod open_boundary;
pub mod operator;
pub mod poynting;
pub mod properties;
pub mod report;
pub mod unit_field;
