//! Laws every solution obeys: orders of convergence, the open boundary, balances, mirror images, any number of threads.
#![allow(clippy::unwrap_used, clippy::print_stdout, reason = "tests")]

use solver::model::{Hold, Mirrors, Model};
use solver::observe::Silent;
use solver::results::{Electrical, Results};
use validation::cases::cylinder_in_field;
use validation::models;

fn field(model: &Model) -> Electrical {
    solver::run(model, &Silent).unwrap().states[0].electrical.clone()
}

fn steel_bar(mirrors: Mirrors) -> Model {
    models::bar_in_coil(models::material(1.2e-6, 1.0).unwrap(), mirrors).unwrap()
}

#[test]
fn power_error_falls_with_order_four_for_second_order_elements() {
    // Power is quadratic in the field, so an element of order p gives order 2p (J. A. Nitsche's argument).
    let ratio = 6.0;
    let reference = cylinder_in_field::reference_w(ratio, 1.0).unwrap();
    let errors: Vec<f64> = [1.0, 2.0, 4.0]
        .into_iter()
        .map(|fineness| {
            let mut model = cylinder_in_field::model(ratio, 1.0).unwrap();
            model.mesh.fineness = fineness;
            (cylinder_in_field::power_w(&model).unwrap() - reference).abs() / reference
        })
        .collect();
    println!("{errors:?}");
    let order = (errors[0] / errors[2]).log2() / 2.0;
    assert!(order >= 3.5, "power order {order:.3}, errors {errors:?}");
    assert!(errors[2] < 1e-6, "finest power error {:.2e}", errors[2]);
}

#[test]
fn resistance_and_inductance_do_not_depend_on_the_radius_of_the_open_boundary() {
    let near = steel_bar(Mirrors::None);
    let mut far = near.clone();
    far.mesh.boundary_factor *= 2.0;
    let (near, far) = (field(&near).terminals.unwrap(), field(&far).terminals.unwrap());
    let (r, l) = (far.resistance_ohm / near.resistance_ohm - 1.0, far.inductance_h / near.inductance_h - 1.0);
    println!("R moved by {r:.2e}, L by {l:.2e}");
    assert!(r.abs() < 1e-4, "R moved by {r:.2e}");
    assert!(l.abs() < 1e-4, "L moved by {l:.2e}");
}

#[test]
fn terminal_power_is_the_sum_of_losses_and_the_poynting_flux_agrees_with_the_work() {
    for (resistivity, mu) in [(1.2e-6, 1.0), (2e-7, 17.0), (3e-8, 1.0)] {
        let model = models::bar_in_coil(models::material(resistivity, mu).unwrap(), Mirrors::None).unwrap();
        let electrical = field(&model);
        assert!(electrical.power_balance_relative <= 1e-9, "balance {:.2e}", electrical.power_balance_relative);
        assert!(electrical.solve_backward_error <= 1e-13, "residual {:.2e}", electrical.solve_backward_error);
        let terminals = electrical.terminals.unwrap();
        let losses = electrical.parts[0].joule_loss_w + electrical.coils[0].loss_w;
        assert!((terminals.power_w / losses - 1.0).abs() <= 1e-9, "{} against {losses}", terminals.power_w);
        let part = &electrical.parts[0];
        let defect = part.poynting_power_w.unwrap() / part.joule_loss_w - 1.0;
        println!("rho {resistivity}, mu_r {mu}: Poynting defect {defect:.2e}");
        assert!(defect.abs() < 5e-3, "Poynting defect {defect:.2e}");
    }
}

#[test]
fn a_mirrored_half_gives_the_numbers_of_the_whole_device() {
    let whole = field(&steel_bar(Mirrors::None));
    let half = field(&steel_bar(Mirrors::One { z_m: 0.0 }));
    let (a, b) = (whole.terminals.unwrap(), half.terminals.unwrap());
    for (name, x, y) in [
        ("R", a.resistance_ohm, b.resistance_ohm),
        ("L", a.inductance_h, b.inductance_h),
        ("workpiece power", whole.workpiece_power_w, half.workpiece_power_w),
        ("energy", whole.stored_energy_j, half.stored_energy_j),
    ] {
        assert!((x / y - 1.0).abs() < 1e-3, "{name}: whole {x:.6e}, mirrored {y:.6e}");
    }
}

#[test]
fn inductance_is_the_stored_energy_of_the_current() {
    // W = 1/4 L |I|^2 on average for a peak current, where the field is that of the current alone (no conductor nearby).
    let electrical = field(&steel_bar(Mirrors::None));
    let t = electrical.terminals.unwrap();
    let from_energy = 2.0 * electrical.stored_energy_j / (t.current_a_rms * t.current_a_rms);
    assert!((from_energy / t.inductance_h - 1.0).abs() < 1e-9, "{from_energy:.6e} against {:.6e}", t.inductance_h);
}

#[test]
fn a_held_quantity_is_what_the_terminals_show() {
    let mut model = steel_bar(Mirrors::None);
    let show = |model: &Model, hold| {
        let mut model = model.clone();
        if let solver::model::Drive::Supply { hold: h, .. } = &mut model.drive {
            *h = hold;
        }
        field(&model)
    };
    model.mesh.fineness = 0.7;
    let t = |hold| show(&model, hold).terminals.unwrap();
    assert!((t(Hold::CoilVoltage(50.0)).voltage_v_rms / 50.0 - 1.0).abs() < 1e-12);
    assert!((t(Hold::TerminalPower(9e3)).power_w / 9e3 - 1.0).abs() < 1e-12);
    assert!((show(&model, Hold::WorkpiecePower(2e4)).workpiece_power_w / 2e4 - 1.0).abs() < 1e-12);
    assert!((t(Hold::CoilCurrent(300.0)).current_a_rms / 300.0 - 1.0).abs() < 1e-12);
}

fn fingerprint(results: &Results) -> Vec<u64> {
    let t = results.states[0].electrical.terminals.unwrap();
    let mut bits = vec![t.resistance_ohm.to_bits(), t.inductance_h.to_bits(), results.counts.triangles as u64];
    bits.extend(results.snapshots[0].field.joule_loss_w_per_m3.iter().map(|p| p.to_bits()));
    bits
}

#[test]
fn results_are_the_same_bits_for_one_and_two_threads() {
    let with = |threads| {
        let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build().unwrap();
        pool.install(|| fingerprint(&solver::run(&steel_bar(Mirrors::None), &Silent).unwrap()))
    };
    assert!(with(1) == with(2), "results differ between one and two threads");
}

#[test]
fn powers_and_energy_scale_with_the_square_of_the_current() {
    let mut model = steel_bar(Mirrors::One { z_m: 0.0 });
    model.mesh.fineness = 0.7;
    let mut at = |amperes| {
        if let solver::model::Drive::Supply { hold, .. } = &mut model.drive {
            *hold = Hold::CoilCurrent(amperes);
        }
        solver::run(&model, &Silent).unwrap()
    };
    let (small, large) = (at(2.0), at(600.0));
    let (a, b) = (&small.states[0].electrical, &large.states[0].electrical);
    let square = 300.0 * 300.0;
    for (what, x, y, factor) in [
        ("workpiece power", a.workpiece_power_w, b.workpiece_power_w, square),
        ("energy", a.stored_energy_j, b.stored_energy_j, square),
        ("coil loss", a.coils[0].loss_w, b.coils[0].loss_w, square),
        ("Poynting power", a.parts[0].poynting_power_w.unwrap(), b.parts[0].poynting_power_w.unwrap(), square),
        ("largest loss", a.parts[0].largest_loss_w_per_m3, b.parts[0].largest_loss_w_per_m3, square),
        (
            "surface power",
            a.parts[0].mean_surface_power_density_w_per_m2,
            b.parts[0].mean_surface_power_density_w_per_m2,
            square,
        ),
        ("field", a.parts[0].largest_field_a_per_m_rms, b.parts[0].largest_field_a_per_m_rms, 300.0),
        ("terminal power", a.terminals.unwrap().power_w, b.terminals.unwrap().power_w, square),
        ("voltage", a.terminals.unwrap().voltage_v_rms, b.terminals.unwrap().voltage_v_rms, 300.0),
        ("resistance", a.terminals.unwrap().resistance_ohm, b.terminals.unwrap().resistance_ohm, 1.0),
        ("loss of a turn", small.turns[3].loss_w, large.turns[3].loss_w, square),
        ("voltage of a turn", small.turns[3].voltage_v_rms, large.turns[3].voltage_v_rms, 300.0),
    ] {
        assert!((y / (factor * x) - 1.0).abs() < 1e-12, "{what}: {x:.6e} at 2 A, {y:.6e} at 600 A");
    }
}
