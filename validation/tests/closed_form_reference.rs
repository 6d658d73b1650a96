//! Every closed form against multiple-precision values.
//!
//! Convention: SI, peak phasors, `e^{+jwt}`; tolerances are relative to the reference value.
//! Source: `reference/closed_form.json`, made by `reference/closed_form.py` with mpmath 1.3.0.
#![allow(clippy::unwrap_used, clippy::panic, reason = "tests")]

use serde::Deserialize;
use std::collections::BTreeMap;
use validation::closed_form::coil::{Coil, FlatConductor, loop_impedance_change};
use validation::closed_form::cylinder::AxialCylinder;
use validation::closed_form::cylinder_heat::{
    constant_flux_rise, convection_ratio, convection_term, core_surface_factor,
};
use validation::closed_form::efficiency::long_coil_bound;
use validation::closed_form::heat::{LumpedRadiator, half_space_flux_rise, stefan_lambda};
use validation::closed_form::loops::{WireCurrent, mutual_inductance, mutual_inductance_slope, ring_inductance};
use validation::closed_form::plane::slab_factor;
use validation::closed_form::rod::{Rod, impedance_change};
use validation::closed_form::solenoid::{nagaoka_factor, sheet_axis_field, solenoid_inductance};
use validation::closed_form::sphere::UniformFieldSphere;
use validation::closed_form::tube::AxialTube;
use validation::closed_form::wire::internal_impedance_ratios;

/// Tolerance of formulas without an infinite integral.
const FORMULA: f64 = 1e-10;
/// Tolerance of Dodd and Deeds' integrals.
const INTEGRAL: f64 = 1e-9;

#[derive(Deserialize)]
struct Document {
    cases: Vec<Case>,
}

#[derive(Deserialize)]
struct Case {
    #[serde(rename = "case")]
    name: String,
    args: BTreeMap<String, f64>,
    values: BTreeMap<String, String>,
}

impl Case {
    fn arg(&self, name: &str) -> f64 {
        self.args[name]
    }

    fn value(&self, name: &str) -> f64 {
        self.values[name].parse().unwrap()
    }

    fn expect(&self, name: &str, got: f64, relative: f64) {
        self.expect_within(name, got, relative * self.value(name).abs());
    }

    fn expect_within(&self, name: &str, got: f64, absolute: f64) {
        let want = self.value(name);
        let error = (got - want).abs();
        assert!(
            error <= absolute,
            "{} {:?}: {name} = {got:e}, reference {want:e}, error {error:.1e} > {absolute:.1e}",
            self.name,
            self.args
        );
    }
}

/// Runs `check` over all cases of one name, which must be `count` in number.
fn each(name: &str, count: usize, check: impl Fn(&Case)) {
    let document: Document = serde_json::from_str(include_str!("../reference/closed_form.json")).unwrap();
    let cases: Vec<Case> = document.cases.into_iter().filter(|c| c.name == name).collect();
    assert_eq!(cases.len(), count, "cases named {name}");
    for case in &cases {
        check(case);
    }
}

fn coil_of(c: &Case) -> Coil {
    Coil { inner: c.arg("r1"), outer: c.arg("r2"), length: c.arg("length"), turns: c.arg("turns") }
}

fn conductor_of(c: &Case) -> FlatConductor {
    FlatConductor {
        resistivity: c.arg("resistivity"),
        mu_r: c.arg("mu_r"),
        thickness: c.args.get("thickness").copied(),
    }
}

#[test]
fn cylinder_in_an_axial_field_from_a_twentieth_to_three_hundred_skin_depths() {
    each("cylinder_axial", 34, |c| {
        let cylinder =
            AxialCylinder::new(c.arg("radius"), c.arg("resistivity"), c.arg("mu_r"), c.arg("frequency")).unwrap();
        let (h0, r) = (c.arg("h0_peak"), c.arg("r"));
        c.expect("delta", cylinder.delta(), 1e-14);
        c.expect("power", cylinder.power_per_length(h0), FORMULA);
        c.expect("resistance", cylinder.surface_impedance().re, FORMULA);
        c.expect("reactance", cylinder.surface_impedance().im, FORMULA);
        c.expect("p", cylinder.flux_factor().re, FORMULA);
        c.expect("q", -cylinder.flux_factor().im, FORMULA);
        c.expect("j_squared", cylinder.current_density_squared_peak(r, h0).unwrap(), FORMULA);
        let h = cylinder.field_peak(r, h0).unwrap();
        let size = c.value("h_re").hypot(c.value("h_im"));
        c.expect_within("h_re", h.re, FORMULA * size);
        c.expect_within("h_im", h.im, FORMULA * size);
    });
}

#[test]
fn tube_in_an_axial_field_thin_and_thick() {
    each("tube_axial", 5, |c| {
        let tube =
            AxialTube::new(c.arg("inner"), c.arg("outer"), c.arg("resistivity"), c.arg("mu_r"), c.arg("frequency"))
                .unwrap();
        c.expect("power", tube.power_per_length(c.arg("h0_peak")), FORMULA);
        c.expect("resistance", tube.surface_impedance().re, FORMULA);
        c.expect("reactance", tube.surface_impedance().im, FORMULA);
        let size = c.value("bore_re").hypot(c.value("bore_im"));
        c.expect_within("bore_re", tube.bore_field_ratio().re, FORMULA * size);
        c.expect_within("bore_im", tube.bore_field_ratio().im, FORMULA * size);
    });
}

#[test]
fn slab_factor_thin_and_thick() {
    each("slab_factor", 10, |c| {
        c.expect("factor", slab_factor(c.arg("t_over_delta")).unwrap(), FORMULA);
    });
}

#[test]
fn sphere_power_and_moment() {
    each("sphere", 6, |c| {
        let sphere =
            UniformFieldSphere::new(c.arg("radius"), c.arg("resistivity"), c.arg("mu_r"), c.arg("frequency")).unwrap();
        let b0 = c.arg("b0_peak");
        c.expect("power", sphere.power(b0), FORMULA);
        c.expect("moment_re", sphere.moment_peak(b0).re, FORMULA);
        c.expect("moment_im", sphere.moment_peak(b0).im, FORMULA);
    });
}

#[test]
fn round_wire_ratios() {
    each("round_wire", 12, |c| {
        let ratios = internal_impedance_ratios(c.arg("radius_over_delta")).unwrap();
        c.expect("resistance", ratios.resistance, FORMULA);
        c.expect("inductance", ratios.inductance, FORMULA);
    });
}

#[test]
fn coaxial_loops_near_and_far() {
    each("coaxial_loops", 7, |c| {
        let (a, b, d) = (c.arg("a"), c.arg("b"), c.arg("distance"));
        c.expect("mutual", mutual_inductance(a, b, d).unwrap(), FORMULA);
        c.expect_within(
            "slope",
            mutual_inductance_slope(a, b, d).unwrap(),
            if d == 0.0 { 1e-20 } else { FORMULA * c.value("slope").abs() },
        );
    });
}

#[test]
fn rings_solenoids_and_sheets() {
    each("ring", 3, |c| {
        let ring = |current| ring_inductance(c.arg("radius"), c.arg("wire_radius"), current).unwrap();
        c.expect("uniform", ring(WireCurrent::Uniform), FORMULA);
        c.expect("skin", ring(WireCurrent::SurfaceOnly), FORMULA);
    });
    each("nagaoka", 27, |c| {
        c.expect("factor", nagaoka_factor(c.arg("diameter_over_length")).unwrap(), FORMULA);
    });
    each("solenoid", 4, |c| {
        let inductance = solenoid_inductance(c.arg("turns"), c.arg("radius"), c.arg("length")).unwrap();
        c.expect("inductance", inductance, FORMULA);
    });
    each("sheet_axis_field", 4, |c| {
        let b = sheet_axis_field(c.arg("current_per_length"), c.arg("radius"), c.arg("length"), c.arg("z")).unwrap();
        c.expect("b", b, FORMULA);
    });
}

#[test]
fn inductance_of_coils_of_rectangular_section() {
    each("coil_air", 3, |c| {
        c.expect("inductance", coil_of(c).air_inductance().unwrap(), INTEGRAL);
    });
}

#[test]
fn coils_and_loops_above_a_flat_conductor() {
    for (name, count) in [("coil_half_space", 2), ("coil_plate", 2)] {
        each(name, count, |c| {
            let z = coil_of(c).impedance_change(&conductor_of(c), c.arg("lift_off"), c.arg("frequency")).unwrap();
            c.expect("re", z.re, INTEGRAL);
            c.expect("im", z.im, INTEGRAL);
        });
    }
    each("loop_half_space", 2, |c| {
        let z =
            loop_impedance_change(c.arg("radius"), &conductor_of(c), c.arg("lift_off"), c.arg("frequency")).unwrap();
        c.expect("re", z.re, INTEGRAL);
        c.expect("im", z.im, INTEGRAL);
    });
}

#[test]
fn coils_round_a_rod() {
    each("coil_rod", 2, |c| {
        let rod = Rod { radius: c.arg("rod_radius"), resistivity: c.arg("resistivity"), mu_r: c.arg("mu_r") };
        let z = impedance_change(&coil_of(c), &rod, c.arg("frequency")).unwrap();
        c.expect("re", z.re, INTEGRAL);
        c.expect("im", z.im, INTEGRAL);
    });
}

#[test]
fn cylinder_conduction_series() {
    each("cylinder_constant_flux", 19, |c| {
        let theta = constant_flux_rise(c.arg("fo"), c.arg("r_over_radius")).unwrap();
        // At the centre the rise is the small difference of terms of order 1/4: absolute tolerance.
        c.expect_within("theta", theta, 1e-14);
    });
    each("cylinder_convection", 8, |c| {
        let theta = convection_ratio(c.arg("bi"), c.arg("fo"), c.arg("r_over_radius")).unwrap();
        c.expect("theta", theta, FORMULA);
        let first = convection_term(c.arg("bi"), 1).unwrap();
        c.expect("zeta1", first.zeta, FORMULA);
        c.expect("c1", first.coefficient, FORMULA);
    });
    each("core_surface_factor", 8, |c| {
        c.expect("phi", core_surface_factor(c.arg("radius_over_delta")).unwrap(), FORMULA);
    });
}

#[test]
fn lumped_radiation_stefan_and_half_space() {
    each("radiation_time", 5, |c| {
        let body = LumpedRadiator {
            heat_capacity: c.arg("heat_capacity"),
            emissivity: c.arg("emissivity"),
            area: c.arg("area"),
            surroundings: c.arg("surroundings"),
        };
        c.expect("time", body.time(c.arg("start"), c.arg("end")).unwrap(), FORMULA);
    });
    each("stefan_lambda", 9, |c| {
        c.expect("lambda", stefan_lambda(c.arg("stefan")).unwrap(), FORMULA);
    });
    each("stefan_lambda", 9, |c| c.expect("lambda", stefan_lambda(c.arg("stefan")).unwrap(), FORMULA));
    each("half_space_flux", 3, |c| {
        let rise = half_space_flux_rise(
            c.arg("flux"),
            c.arg("conductivity"),
            c.arg("diffusivity"),
            c.arg("depth"),
            c.arg("time"),
        )
        .unwrap();
        c.expect("rise", rise, FORMULA);
    });
}

#[test]
fn long_coil_efficiency() {
    each("long_coil_efficiency", 3, |c| {
        let bound = long_coil_bound(
            c.arg("coil_over_work"),
            c.arg("coil_resistivity"),
            c.arg("work_resistivity"),
            c.arg("mu_r"),
        )
        .unwrap();
        c.expect("efficiency", bound, FORMULA);
    });
}
