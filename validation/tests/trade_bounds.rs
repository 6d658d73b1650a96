//! Bounds and optima that the trade knows: the efficiency of a real coil, the resistivity that takes most power.
#![allow(clippy::unwrap_used, clippy::print_stdout, reason = "tests")]

use solver::model::Mirrors;
use validation::cases::{cylinder_in_field, first_state};
use validation::closed_form::efficiency::long_coil_bound;
use validation::models;

#[test]
fn efficiency_of_a_short_coil_stays_below_that_of_an_ideal_long_coil() {
    // Plane-skin limit of a long coil, after J. Davies and V. Rudnev (from memory); bores of 80 mm, bar of 60 mm.
    for (resistivity, mu) in
        [(1.7e-8, 1.0), (3e-8, 1.0), (8e-8, 1.0), (3e-7, 1.0), (7.2e-7, 1.0), (1.2e-6, 1.0), (2e-7, 50.0)]
    {
        let bar = models::material(resistivity, mu).unwrap();
        let model = models::bar_in_coil(bar, Mirrors::One { z_m: 0.0 }).unwrap();
        let efficiency = first_state(&model).unwrap().electrical_efficiency.unwrap();
        let bound = long_coil_bound(80.0 / 60.0, 1.9e-8, resistivity, mu).unwrap();
        println!("rho {resistivity}, mu_r {mu}: {efficiency:.4} under {bound:.4}");
        assert!(efficiency < bound, "rho {resistivity}, mu_r {mu}: {efficiency:.4} above {bound:.4}");
        // A coil with gaps and ends loses a part of that, but not most of it (common practice, no source).
        assert!(efficiency > 0.7 * bound, "rho {resistivity}, mu_r {mu}: {efficiency:.4} far below {bound:.4}");
    }
}

#[test]
fn a_bar_takes_most_power_where_its_diameter_is_three_and_a_half_skin_depths() {
    // Largest q = 2 J1(ka)/(ka J0(ka)) at d/delta = 3.5567455, the trade's "about 3.5". With the frequency and the field
    // given, power is proportional to q; it is sought by parabolas through three resistivities, in d/delta.
    let power = |d: f64| cylinder_in_field::power_w(&cylinder_in_field::model(0.5 * d, 1.0).unwrap()).unwrap();
    let (mut middle, mut step) = (3.3, 0.4);
    for _ in 0..3 {
        let [low, mid, high] = [middle - step, middle, middle + step].map(power);
        middle += 0.5 * step * (low - high) / (low - 2.0 * mid + high);
        step *= 0.3;
    }
    println!("largest power at d/delta = {middle:.5}");
    assert!((middle / 3.5567455 - 1.0).abs() < 1e-3, "largest power at d/delta = {middle:.5}");
}
