//! Elements of first and third order on the default mesh: power of a long cylinder against the Bessel solution.
//!
//! Tolerance 1 % for the first order, which is a choice for studies only, and 0.1 % for the third, as for the second.

use super::cylinder_in_field::{model, power_w, reference_w};
use crate::check::{CaseError, Check};

pub(super) fn run() -> Result<Vec<Check>, CaseError> {
    let mut checks = Vec::new();
    for (order, tolerance) in [(1, 1e-2), (3, 1e-3)] {
        for (ratio, mu) in [(0.5, 1.0), (2.0, 1.0), (10.0, 1.0), (50.0, 1.0), (10.0, 50.0)] {
            let mut model = model(ratio, mu)?;
            model.mesh.order = order;
            checks.push(Check {
                case: "cylinder in axial field",
                quantity: format!("power at R/delta = {ratio}, mu_r = {mu}, elements of order {order}, W"),
                computed: power_w(&model)?,
                reference: reference_w(ratio, mu)?,
                tolerance,
                source: "Bessel solution of the endless cylinder (W. R. Smythe, Static and Dynamic Electricity, chapter X; from memory)",
            });
        }
    }
    Ok(checks)
}
