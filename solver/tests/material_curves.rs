//! Curves, enthalpy and permeability against standards, published shapes and independent integration.
#![allow(clippy::unwrap_used, clippy::expect_used, reason = "tests")]

use solver::material::{Curve, Enthalpy, Melting, Pole, RangeUse, Segment, Source, library, reduced_polarisation};

const ZERO_C: f64 = 273.15;

/// EN 1993-1-2:2005, 3.4.1.2, specific heat of carbon steel in J/(kg K), `theta` in °C: written again, apart from the library.
fn eurocode_specific_heat(theta: f64) -> f64 {
    if theta < 600.0 {
        425.0 + 7.73e-1 * theta - 1.69e-3 * theta.powi(2) + 2.22e-6 * theta.powi(3)
    } else if theta < 735.0 {
        666.0 + 13002.0 / (738.0 - theta)
    } else if theta < 900.0 {
        545.0 + 17820.0 / (theta - 731.0)
    } else {
        650.0
    }
}

/// Adaptive Simpson integration with Richardson's correction (J. N. Lyness, J. ACM 16 (1969) 483).
fn simpson(f: &dyn Fn(f64) -> f64, a: f64, b: f64, tolerance: f64) -> f64 {
    fn rule(f: &dyn Fn(f64) -> f64, a: f64, b: f64) -> f64 {
        (b - a) / 6.0 * (f(a) + 4.0 * f(0.5 * (a + b)) + f(b))
    }
    fn refine(f: &dyn Fn(f64) -> f64, a: f64, b: f64, whole: f64, tolerance: f64, depth: u32) -> f64 {
        let m = 0.5 * (a + b);
        let (left, right) = (rule(f, a, m), rule(f, m, b));
        let defect = left + right - whole;
        if depth == 0 || defect.abs() < 15.0 * tolerance {
            return left + right + defect / 15.0;
        }
        refine(f, a, m, left, 0.5 * tolerance, depth - 1) + refine(f, m, b, right, 0.5 * tolerance, depth - 1)
    }
    refine(f, a, b, rule(f, a, b), tolerance, 40)
}

#[test]
fn carbon_steel_has_the_spot_values_of_the_eurocode() {
    // EN 1993-1-2:2005, 3.4.1.2 and 3.4.1.3, evaluated by hand.
    let steel = library().unwrap().find("C45").unwrap();
    let specific_heat = [
        (20.0, 439.80),
        (400.0, 605.88),
        (600.0, 760.22),
        (700.0, 1008.16),
        (735.0, 5000.0),
        (750.0, 1482.89),
        (800.0, 803.26),
        (900.0, 650.0),
        (1200.0, 650.0),
    ];
    for (celsius, expected) in specific_heat {
        let value = steel.specific_heat.value(celsius + ZERO_C);
        assert!((value - expected).abs() < 0.005_01, "c({celsius} °C) = {value}, expected {expected}");
    }
    for (celsius, expected) in [(20.0, 53.33), (400.0, 40.68), (700.0, 30.69), (800.0, 27.3), (1000.0, 27.3)] {
        let value = steel.conductivity.value(celsius + ZERO_C);
        assert!((value - expected).abs() < 0.005_01, "k({celsius} °C) = {value}, expected {expected}");
    }
    // EN 1993-1-2:2005, Annex C, stainless steel.
    let stainless = library().unwrap().find("1.4301").unwrap();
    for (celsius, c, k) in
        [(20.0, 455.48, 14.854), (400.0, 524.02, 19.680), (800.0, 556.37, 24.760), (1200.0, 598.51, 29.840)]
    {
        let (c_value, k_value) =
            (stainless.specific_heat.value(celsius + ZERO_C), stainless.conductivity.value(celsius + ZERO_C));
        assert!((c_value - c).abs() < 0.0051, "c({celsius} °C) = {c_value}, expected {c}");
        assert!((k_value - k).abs() < 0.000_51, "k({celsius} °C) = {k_value}, expected {k}");
    }
}

#[test]
fn enthalpy_of_steel_is_the_integral_of_the_eurocode_specific_heat() {
    let steel = library().unwrap().find("C45").unwrap();
    let h = |celsius: f64| steel.enthalpy.value(celsius + ZERO_C);
    // The quadrature is split where the standard changes its formula; below 900 °C the lower formula counts up to the end.
    let peak_flank = |theta: f64| 545.0 + 17820.0 / (theta - 731.0);
    let rise = |theta: f64| 666.0 + 13002.0 / (738.0 - theta);
    let parts = [
        simpson(&eurocode_specific_heat, 20.0, 599.999_999_999_999_9, 1e-7),
        simpson(&rise, 600.0, 735.0, 1e-7),
        simpson(&peak_flank, 735.0, 900.0, 1e-7),
        650.0 * 300.0,
    ];
    let mut expected = 0.0;
    for (celsius, part) in [600.0, 735.0, 900.0, 1200.0].into_iter().zip(parts) {
        expected += part;
        let value = h(celsius) - h(20.0);
        assert!((value / expected - 1.0).abs() < 1e-9, "h({celsius} °C) = {value}, quadrature {expected}");
    }
    let flank = simpson(&peak_flank, 735.0, 777.7, 1e-7);
    assert!(((h(777.7) - h(735.0)) / flank - 1.0).abs() < 1e-9, "flank {} against {flank}", h(777.7) - h(735.0));
    assert_eq!(h(20.0), 0.0);
}

#[test]
fn enthalpy_of_steel_at_forging_heat_is_what_its_tables_give() {
    // From memory: heat contents of iron and steel at 1200 °C are tabulated at 800 to 840 kJ/kg.
    let h = library().unwrap().find("C45").unwrap().enthalpy.value(1200.0 + ZERO_C);
    assert!((780e3..860e3).contains(&h), "{h} J/kg");
}

#[test]
fn enthalpy_to_melt_aluminium_and_copper_is_near_the_janaf_tables() {
    // NIST-JANAF tables from memory: H(liquid, melting point) - H(298 K) = 28.7 kJ/mol (Al), 43.0 kJ/mol (Cu).
    for (name, melting_k, molar_j, gram_per_mol) in
        [("aluminium", 933.47, 28.7e3, 26.98), ("copper", 1357.77, 43.0e3, 63.55)]
    {
        let material = library().unwrap().find(name).unwrap();
        let h = material.enthalpy.value(melting_k + 0.5) - material.enthalpy.value(298.15);
        let expected = molar_j / (gram_per_mol * 1e-3);
        assert!((h / expected - 1.0).abs() < 0.03, "{name}: {h} J/kg against {expected}");
    }
}

#[test]
fn enthalpy_rises_strictly_and_its_inverse_gives_the_temperature_back() {
    for material in library().unwrap().materials() {
        let mut last = f64::NEG_INFINITY;
        for step in 0..=3500 {
            let t = 150.0 + f64::from(step);
            let h = material.enthalpy.value(t);
            assert!(h > last, "{}: h does not rise at {t} K", material.name);
            last = h;
            let back = material.enthalpy.temperature(h);
            assert!((back - t).abs() < 1e-9 * t, "{}: {t} K came back as {back} K", material.name);
        }
    }
}

#[test]
fn the_inverse_enthalpy_holds_at_the_peak_of_steel_and_on_either_side_of_every_knot() {
    let steel = library().unwrap().find("C22").unwrap();
    for celsius in [600.0, 734.999, 735.0, 735.001, 899.999, 900.0, 900.001, 1475.0, 1490.0, 1515.0, 2500.0, -100.0] {
        let t = celsius + ZERO_C;
        let back = steel.enthalpy.temperature(steel.enthalpy.value(t));
        assert!((back - t).abs() < 1e-10 * t, "{celsius} °C came back as {} °C", back - ZERO_C);
    }
    assert!(steel.enthalpy.temperature(f64::NAN).is_nan());
}

#[test]
fn the_slope_of_the_enthalpy_is_its_difference_quotient() {
    for name in ["C45", "copper", "aluminium 6082", "1.4401", "graphite"] {
        let material = library().unwrap().find(name).unwrap();
        for celsius in [-50.0, 15.5, 123.4, 555.5, 650.1, 736.0, 1084.3, 1301.7, 1443.3, 2000.0] {
            let (t, step) = (celsius + ZERO_C, 1e-3);
            let quotient = (material.enthalpy.value(t + step) - material.enthalpy.value(t - step)) / (2.0 * step);
            let slope = material.enthalpy.slope(t);
            assert!((quotient / slope - 1.0).abs() < 1e-6, "{name} at {celsius} °C: {slope} against {quotient}");
        }
    }
}

#[test]
fn latent_heat_is_taken_up_whole_and_a_melting_point_is_widened_to_half_a_kelvin_either_side() {
    let source = Source::unstated();
    let melting = Melting { solidus_k: 900.0, liquidus_k: 900.0, latent_heat_j_per_kg: 4e5, source };
    let heat = Curve::constant(1000.0).unwrap();
    let h = Enthalpy::new(&heat, Some(&melting)).unwrap();
    assert_eq!(melting.widened_k(), (899.5, 900.5));
    assert!((h.value(900.5) - h.value(899.5) - 401e3).abs() < 1e-6);
    assert!((h.slope(900.0) - 401e3).abs() < 1e-6);
    assert_eq!(h.slope(899.0), 1000.0);
    assert_eq!(h.slope(901.0), 1000.0);
    assert!((h.temperature(h.value(899.5) + 200.5e3) - 900.0).abs() < 1e-9);
    assert_eq!(h.liquid_fraction(899.0), 0.0);
    assert!((h.liquid_fraction(900.25) - 0.75).abs() < 1e-12);
    assert_eq!(h.liquid_fraction(901.0), 1.0);
}

#[test]
fn a_table_is_linear_between_rows_and_holds_its_ends() {
    let curve = Curve::table(&[(300.0, 2.0), (400.0, 4.0), (800.0, 3.0)]).unwrap();
    assert_eq!(curve.range_k(), Some((300.0, 800.0)));
    assert_eq!([curve.value(100.0), curve.value(300.0), curve.value(800.0), curve.value(2000.0)], [2.0, 2.0, 3.0, 3.0]);
    assert!((curve.value(350.0) - 3.0).abs() < 1e-14);
    assert!((curve.value(600.0) - 3.5).abs() < 1e-14);
    assert_eq!([curve.slope(299.0), curve.slope(300.0), curve.slope(800.0)], [0.0, 0.02, 0.0]);
    assert!((curve.slope(500.0) + 0.0025).abs() < 1e-17);
    // Areas of the trapezia by hand.
    assert!((curve.integral(400.0) - curve.integral(300.0) - 300.0).abs() < 1e-10);
    assert!((curve.integral(800.0) - curve.integral(400.0) - 1400.0).abs() < 1e-10);
    assert!((curve.integral(900.0) - curve.integral(800.0) - 300.0).abs() < 1e-10);
    assert!((curve.integral(300.0) - curve.integral(200.0) - 200.0).abs() < 1e-10);
    assert!(curve.integral(293.15).abs() < 1e-12);
    assert!(curve.value(f64::NAN).is_nan());
}

#[test]
fn a_single_row_is_a_constant_with_a_range() {
    let curve = Curve::table(&[(500.0, 7.0)]).unwrap();
    assert_eq!([curve.value(400.0), curve.value(500.0), curve.value(600.0)], [7.0, 7.0, 7.0]);
    assert_eq!([curve.slope(500.0), curve.slope(f64::NAN)], [0.0, 0.0]);
    assert!((curve.integral(600.0) - 7.0 * (600.0 - 293.15)).abs() < 1e-9);
    assert!((curve.integral(400.0) - 7.0 * (400.0 - 293.15)).abs() < 1e-9);
}

#[test]
fn a_rational_segment_integrates_to_a_logarithm() {
    let pole = Some(Pole { numerator: 3.0, at: 0.0 });
    let curve = Curve::segments(vec![Segment::new(300.0, 900.0, 0.0, vec![], pole).unwrap()]).unwrap();
    // int 3/T dT from 300 to 900 K = 3 ln 3.
    let value = curve.integral(900.0) - curve.integral(300.0);
    assert!((value - 3.0 * 3.0_f64.ln()).abs() < 1e-13, "{value}");
    assert!((curve.slope(450.0) + 3.0 / (450.0 * 450.0)).abs() < 1e-18);
}

#[test]
fn a_formula_that_dips_below_zero_between_its_ends_is_found() {
    // (x - 50)^2 - 1e-3 on 0 to 100 °C: negative only within 0.032 K of 50.3 °C.
    let dip = |centre: f64, depth: f64| {
        let polynomial = vec![centre * centre - depth, -2.0 * centre, 1.0];
        Curve::segments(vec![Segment::new(ZERO_C, ZERO_C + 100.0, ZERO_C, polynomial, None).unwrap()]).unwrap()
    };
    let error = dip(50.3, 1e-3).check_positive("W/m/K").unwrap_err().to_string();
    assert!(error.contains("greater than zero") && error.contains("50."), "{error}");
    dip(50.3, -1e-3).check_positive("W/m/K").unwrap();
}

#[test]
fn the_fall_of_iron_towards_the_curie_point_has_the_published_shape() {
    // M. D. Kuz'min, Phys. Rev. Lett. 94 (2005) 107204, with s = 0.35, p = 4 for iron, tabulated apart for Tc = 1044 K.
    let rows = [
        (293.15 / 1044.0, 0.9809),
        (0.5, 0.9419),
        (0.6, 0.9098),
        (0.7, 0.8613),
        (0.8, 0.7848),
        (0.9, 0.6501),
        (0.95, 0.5272),
        (0.98, 0.3935),
    ];
    for (tau, expected) in rows {
        let value = reduced_polarisation(tau);
        assert!((value - expected).abs() < 1e-4, "m({tau}) = {value}, expected {expected}");
    }
    assert_eq!(reduced_polarisation(1.0), 0.0);
    assert_eq!(reduced_polarisation(0.0), 1.0);
    assert_eq!(reduced_polarisation(-1.0), 1.0);
}

#[test]
fn permeability_of_steel_falls_from_its_cold_value_to_one_at_the_curie_point() {
    let steel = library().unwrap().find("C45").unwrap();
    let magnetic = steel.magnetic.as_ref().unwrap();
    // Saturation over field at 1e5 A/m: 1 + Js/(mu0 H), rounded.
    let expected = 1.0 + magnetic.saturation_polarisation_t / (solver::constants::MU_0 * 1e5);
    let cold = steel.relative_permeability(20.0 + ZERO_C);
    assert!((cold - expected).abs() < 0.8, "{cold} against {expected}");
    assert_eq!(cold, 17.0);
    assert_eq!(steel.relative_permeability(magnetic.curie_k), 1.0);
    assert_eq!(steel.relative_permeability(1500.0), 1.0);
    let mut last = f64::INFINITY;
    for step in 0..150 {
        let mu = steel.relative_permeability(300.0 + 5.0 * f64::from(step));
        assert!(mu < last || mu == 1.0, "permeability does not fall at step {step}");
        last = mu;
    }
    assert_eq!(library().unwrap().find("1.4301").unwrap().relative_permeability(293.15), 1.0);
}

#[test]
fn copper_conducts_as_iec_60028_has_it() {
    // IEC 60028 (1925): 1/58 ohm mm2/m at 20 °C, temperature coefficient 3.93e-3 per K.
    let copper = library().unwrap().find("copper").unwrap();
    let at = |celsius: f64| copper.resistivity.as_ref().unwrap().value(celsius + ZERO_C);
    assert!((at(20.0) * 58e6 - 1.0).abs() < 1e-4, "{}", at(20.0));
    assert!((copper.electrical_conductivity_s_per_m(20.0 + ZERO_C) / 58e6 - 1.0).abs() < 1e-4);
    let coefficient = (at(60.0) / at(20.0) - 1.0) / 40.0;
    assert!((coefficient / 3.93e-3 - 1.0).abs() < 0.01, "{coefficient}");
}

#[test]
fn metals_step_up_in_resistivity_when_they_melt() {
    // T. Iida, R. I. L. Guthrie, The Physical Properties of Liquid Metals (from memory): liquid at the melting point, µΩ cm.
    for (name, melting_k, liquid) in [("copper", 1357.77, 21.0), ("aluminium", 933.47, 24.2), ("iron", 1811.0, 138.0)] {
        let resistivity = library().unwrap().find(name).unwrap().resistivity.as_ref().unwrap();
        let (solid, melt) = (resistivity.value(melting_k - 0.6), resistivity.value(melting_k + 0.6));
        assert!((melt * 1e8 / liquid - 1.0).abs() < 0.01, "{name}: {melt}");
        assert!(melt > 1.05 * solid, "{name}: {solid} to {melt}");
    }
}

#[test]
fn use_outside_the_data_is_noted_on_the_side_it_happens() {
    let steel = library().unwrap().find("C45").unwrap();
    assert!(steel.out_of_range(20.0 + ZERO_C, 1200.0 + ZERO_C).is_empty());
    let notes = steel.out_of_range(-10.0 + ZERO_C, 1250.0 + ZERO_C);
    let said: Vec<_> = notes.iter().map(|n| (n.property.as_str(), n.side())).collect();
    let keys: Vec<_> = said.iter().map(|(key, _)| *key).collect();
    assert_eq!(keys, ["resistivity", "thermal_conductivity", "thermal_conductivity", "specific_heat", "specific_heat"]);
    assert!(matches!(said[0].1, RangeUse::Below { by_k } if (by_k - 30.0).abs() < 1e-9));
    assert!(matches!(said[2].1, RangeUse::Above { by_k } if (by_k - 50.0).abs() < 1e-9));
    assert_eq!(
        notes[2].to_string(),
        "material `C45`: `thermal_conductivity` was used at 1250 °C, its data cover 20 to 1200 °C; the last value was held"
    );
}

#[test]
fn temperatures_taken_together_give_what_each_gives_alone() {
    let library = library().unwrap();
    for name in ["C45", "copper", "aluminium"] {
        let material = library.find(name).unwrap();
        // Inside one segment, across several, at a pole's end, while melting, and outside the data.
        for (from, step) in
            [(300.0, 7.0), (850.0, 0.9), (900.0, 11.0), (1003.0, 1.03), (930.0, 1.0), (1300.0, 20.0), (150.0, 9.0)]
        {
            for count in [1, 4, 9, 16, 25] {
                let t: Vec<f64> = (0..count).map(|i| from + step * f64::from(i)).collect();
                let (mut values, mut integrals, mut enthalpies) = (t.clone(), t.clone(), t.clone());
                material.conductivity.values(&mut values);
                material.specific_heat.integrals(&mut integrals);
                material.enthalpy.values(&mut enthalpies);
                for (i, &t) in t.iter().enumerate() {
                    assert_eq!(values[i], material.conductivity.value(t), "{name} at {t} K");
                    assert_eq!(integrals[i], material.specific_heat.integral(t), "{name} at {t} K");
                    assert_eq!(enthalpies[i], material.enthalpy.value(t), "{name} at {t} K");
                }
            }
        }
    }
    let mut spoilt = [400.0, f64::NAN, 500.0];
    library.find("C45").unwrap().enthalpy.values(&mut spoilt);
    assert!(spoilt[0].is_finite() && spoilt[1].is_nan() && spoilt[2].is_finite());
}
