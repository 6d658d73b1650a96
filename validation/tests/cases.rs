//! Every case of the validation holds.
#![allow(clippy::unwrap_used, clippy::print_stdout, reason = "tests")]

#[test]
fn every_checked_quantity_is_within_its_tolerance() {
    let mut failed = Vec::new();
    for case in validation::cases::ALL {
        for check in case().unwrap() {
            println!(
                "{}: {}: {:.6e} against {:.6e}, {:.2e} of {:.0e}",
                check.case,
                check.quantity,
                check.computed,
                check.reference,
                check.difference(),
                check.tolerance
            );
            if !check.passes() {
                failed.push(format!("{}: {}: off by {:.2e}", check.case, check.quantity, check.difference()));
            }
        }
    }
    assert!(failed.is_empty(), "{failed:#?}");
}
