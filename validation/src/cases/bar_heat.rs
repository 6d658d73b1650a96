//! A long cylinder that is heated through its surface, or cooled by convection, against the series solutions.
//!
//! Tolerance 0.1 % of the temperature rise at each gauge: the step control allows 0.05 K a step and the mesh is the
//! default one. A slice between two mirror planes stands for the endless cylinder.

use mesher::Outline;
use solver::model::{Face, FaceCondition, Gauge, GaugeKind, Heating, Hold, Mirrors, Model, Stage, StageEnd, Surface};
use solver::observe::Silent;

use crate::check::{CaseError, Check};
use crate::closed_form::cylinder_heat::{constant_flux_rise, convection_ratio, core_surface_factor};
use crate::models;

const RADIUS_M: f64 = 0.03;
const CONDUCTIVITY: f64 = 30.0;
const SPECIFIC_HEAT: f64 = 500.0;
const DENSITY: f64 = 7800.0;

fn diffusivity() -> f64 {
    CONDUCTIVITY / (DENSITY * SPECIFIC_HEAT)
}

/// The slice with gauges at core and surface, heated for `fourier R^2 / a` seconds with the supply off or on.
fn slice(condition: Option<FaceCondition>, fourier: f64, resistivity: f64, hold: Hold) -> Result<Model, CaseError> {
    let length = 0.02;
    let outline = Outline::rectangle([0.0, 0.0], [RADIUS_M, length])?;
    let material = models::thermal_material(resistivity, 1.0, CONDUCTIVITY, SPECIFIC_HEAT, DENSITY)?;
    let mut bar = models::part("bar", outline, material);
    bar.faces = condition.map(|c| (Face::Outside, c)).into_iter().collect();
    let mut model = models::in_field(vec![bar], 1000.0, 2e4, Mirrors::Two { lower_m: 0.0, upper_m: length });
    let gauge =
        |name: &str, r| Gauge { name: name.to_owned(), kind: GaugeKind::Thermocouple, part: 0, at: [r, 0.5 * length] };
    model.gauges = vec![gauge("core", 0.0), gauge("surface", RADIUS_M)];
    model.heating = Some(Heating {
        ambient_k: models::START_K,
        stages: vec![Stage {
            name: "heat".to_owned(),
            end: StageEnd::After(fourier * RADIUS_M * RADIUS_M / diffusivity()),
            hold: Some(hold),
        }],
        step_tolerance_k: 0.02,
    });
    Ok(model)
}

/// Gauges at the end, kelvin.
fn end_gauges(model: &Model) -> Result<Vec<f64>, CaseError> {
    let results = solver::run(model, &Silent)?;
    Ok(results.history.last().ok_or(CaseError::Missing("history"))?.gauges_k.clone())
}

fn constant_flux(checks: &mut Vec<Check>) -> Result<(), CaseError> {
    let flux = 2e5;
    for fourier in [0.1, 0.5] {
        let end = end_gauges(&slice(Some(FaceCondition::Flux(flux)), fourier, f64::INFINITY, Hold::Off)?)?;
        for (name, t, x) in [("core", end[0], 0.0), ("surface", end[1], 1.0)] {
            checks.push(Check {
                case: "cylinder with constant surface flux",
                quantity: format!("rise of the {name} at Fo = {fourier}, K"),
                computed: t - models::START_K,
                reference: constant_flux_rise(fourier, x)? * flux * RADIUS_M / CONDUCTIVITY,
                tolerance: 1e-3,
                source: "H. S. Carslaw, J. C. Jaeger, Conduction of Heat in Solids, section 7.8 (from memory)",
            });
        }
    }
    Ok(())
}

fn convection(checks: &mut Vec<Check>) -> Result<(), CaseError> {
    let (biot, start_k) = (1.0, models::START_K + 500.0);
    let exchange =
        FaceCondition::Exchange(Surface { emissivity: 0.0, convection_w_per_m2_k: biot * CONDUCTIVITY / RADIUS_M });
    for fourier in [0.2, 1.0] {
        let mut model = slice(Some(exchange), fourier, f64::INFINITY, Hold::Off)?;
        model.parts[0].start_k = start_k;
        let end = end_gauges(&model)?;
        for (name, t, x) in [("core", end[0], 0.0), ("surface", end[1], 1.0)] {
            checks.push(Check {
                case: "cylinder cooled by convection",
                quantity: format!("excess of the {name} at Bi = 1, Fo = {fourier}, K"),
                computed: t - models::START_K,
                reference: convection_ratio(biot, fourier, x)? * (start_k - models::START_K),
                tolerance: 1e-3,
                source: "H. Gröber's series with the roots of x J1(x) = Bi J0(x) (from memory)",
            });
        }
    }
    Ok(())
}

/// A bar heated by its own eddy currents: core-surface difference in the regular regime.
fn own_currents(checks: &mut Vec<Check>) -> Result<(), CaseError> {
    let ratio = 3.0;
    let resistivity = models::resistivity_for(RADIUS_M / ratio, 1000.0, 1.0);
    let model = slice(None, 1.0, resistivity, Hold::CoilCurrent(1.0))?;
    let results = solver::run(&model, &Silent)?;
    let last = results.history.last().ok_or(CaseError::Missing("history"))?;
    let part = &results.states[0].electrical.parts[0];
    let flux = part.mean_surface_power_density_w_per_m2;
    checks.push(Check {
        case: "cylinder heated by its own eddy currents",
        quantity: "surface less core in the regular regime at R/delta = 3, K".to_owned(),
        computed: last.gauges_k[1] - last.gauges_k[0],
        reference: core_surface_factor(ratio)? * flux * RADIUS_M / (2.0 * CONDUCTIVITY),
        tolerance: 5e-3,
        source: "steady profile of the Bessel loss density, by quadrature of the closed form",
    });
    Ok(())
}

pub(super) fn run() -> Result<Vec<Check>, CaseError> {
    let mut checks = Vec::new();
    constant_flux(&mut checks)?;
    convection(&mut checks)?;
    own_currents(&mut checks)?;
    Ok(checks)
}
