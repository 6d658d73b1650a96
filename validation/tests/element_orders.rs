//! Orders of convergence of elements of first and third order; power is quadratic in the field, so an element of order p
//! gives order 2p (J. A. Nitsche's argument).
#![allow(clippy::unwrap_used, clippy::print_stdout, reason = "tests")]

use validation::cases::cylinder_in_field;

/// Observed order of the power of a long cylinder between the coarsest and the finest mesh, and the finest error.
fn observed(order: usize, finenesses: [f64; 3]) -> (f64, f64) {
    let ratio = 6.0;
    let reference = cylinder_in_field::reference_w(ratio, 1.0).unwrap();
    let errors = finenesses.map(|fineness| {
        let mut model = cylinder_in_field::model(ratio, 1.0).unwrap();
        model.mesh.order = order;
        model.mesh.fineness = fineness;
        (cylinder_in_field::power_w(&model).unwrap() - reference).abs() / reference
    });
    println!("order {order}: {errors:?}");
    ((errors[0] / errors[2]).ln() / (finenesses[2] / finenesses[0]).ln(), errors[2])
}

#[test]
fn power_error_falls_with_order_two_for_first_order_elements() {
    let (order, finest) = observed(1, [1.0, 2.0, 4.0]);
    assert!((1.7..=2.6).contains(&order), "power order {order:.3}");
    assert!(finest < 1e-3, "finest power error {finest:.2e}");
}

#[test]
fn power_error_falls_with_order_five_or_more_for_third_order_elements() {
    let (order, finest) = observed(3, [1.0, 2.0, 4.0]);
    assert!(order >= 5.0, "power order {order:.3}");
    assert!(finest < 1e-8, "finest power error {finest:.2e}");
}
