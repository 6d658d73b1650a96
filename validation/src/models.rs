//! Small devices that the cases are made of: SI values in, a model of the solver out.

use std::sync::Arc;

use mesher::Outline;
use serde_json::json;
use solver::material::Material;
use solver::model::{
    Coil, ConductorKind, Drive, Hold, Limits, MeshSettings, Mirrors, Model, Part, Role, Surface, Turn,
};

use crate::check::CaseError;
use crate::closed_form::MU0;

/// Temperature of every body that is not heated, kelvin.
pub const START_K: f64 = 293.15;

/// A material with constant properties; `resistivity_ohm_m` infinite for an insulator.
///
/// # Errors
/// Values the library refuses.
pub fn material(resistivity_ohm_m: f64, relative_permeability: f64) -> Result<Arc<Material>, CaseError> {
    thermal_material(resistivity_ohm_m, relative_permeability, 30.0, 500.0, 7800.0)
}

/// A material with constant properties, thermal ones included: W/(m K), J/(kg K), kg/m^3.
///
/// # Errors
/// Values the library refuses.
pub fn thermal_material(
    resistivity_ohm_m: f64,
    relative_permeability: f64,
    conductivity: f64,
    specific_heat: f64,
    density: f64,
) -> Result<Arc<Material>, CaseError> {
    let mut data = json!({
        "name": "constant",
        "density": format!("{density} kg/m3"),
        "thermal_conductivity": format!("{conductivity} W/m/K"),
        "specific_heat": format!("{specific_heat} J/kg/K"),
    });
    if resistivity_ohm_m.is_finite() {
        data["resistivity"] = json!(format!("{resistivity_ohm_m} ohm m"));
    }
    if relative_permeability > 1.0 {
        // Far above any temperature of a case, so that the value at START_K is the one given.
        data["magnetic"] = json!({
            "relative_permeability_20c": relative_permeability,
            "saturation_polarisation": "2 T",
            "initial_relative_permeability": relative_permeability,
            "curie": "1000 °C",
        });
    }
    Ok(Arc::new(Material::from_json(&data)?))
}

/// A workpiece that exchanges nothing with its surroundings.
pub fn part(name: &str, outline: Outline, material: Arc<Material>) -> Part {
    Part {
        name: name.to_owned(),
        role: Role::Workpiece,
        outline,
        material,
        surface: Surface { emissivity: 0.0, convection_w_per_m2_k: 0.0 },
        faces: Vec::new(),
        start_k: START_K,
    }
}

/// A coil of solid turns.
pub fn coil(outlines: Vec<Outline>, material: Arc<Material>, conductor: ConductorKind) -> Coil {
    let turn = |outline: Outline| {
        let (lo, hi) = outline.bounds();
        Turn { centre: [0.5 * (lo[0] + hi[0]), 0.5 * (lo[1] + hi[1])], outline, bore: None }
    };
    Coil {
        name: "coil".to_owned(),
        turns: outlines.into_iter().map(turn).collect(),
        material,
        temperature_k: START_K,
        conductor,
        reversed: false,
        water: None,
    }
}

/// Parts in a uniform axial field of `field_a_per_m_rms`.
pub fn in_field(parts: Vec<Part>, frequency_hz: f64, field_a_per_m_rms: f64, mirrors: Mirrors) -> Model {
    Model { drive: Drive::AppliedField { frequency_hz, field_a_per_m_rms }, ..device(parts, vec![], mirrors) }
}

/// Parts and coils with a coil current of 1 A rms.
pub fn with_coil(parts: Vec<Part>, coils: Vec<Coil>, frequency_hz: f64, mirrors: Mirrors) -> Model {
    let drive = Drive::Supply { frequency_hz, hold: Hold::CoilCurrent(1.0), limits: Limits::default() };
    Model { drive, ..device(parts, coils, mirrors) }
}

fn device(parts: Vec<Part>, coils: Vec<Coil>, mirrors: Mirrors) -> Model {
    Model {
        title: "validation".to_owned(),
        parts,
        coils,
        drive: Drive::AppliedField { frequency_hz: 50.0, field_a_per_m_rms: 1.0 },
        mirrors,
        heating: None,
        gauges: Vec::new(),
        start_k: START_K,
        mesh: MeshSettings::default(),
    }
}

/// Resistivity in ohm m that gives a skin depth in metres at a frequency in hertz.
pub fn resistivity_for(depth_m: f64, frequency_hz: f64, relative_permeability: f64) -> f64 {
    depth_m * depth_m * std::f64::consts::PI * frequency_hz * MU0 * relative_permeability
}

/// A bar of 60 mm by 200 mm in a coil of 12 solid copper turns of 14 mm by 10 mm, at 3 kHz.
///
/// # Errors
/// Values the library refuses.
pub fn bar_in_coil(bar: Arc<Material>, mirrors: Mirrors) -> Result<Model, CaseError> {
    let (turns, length, inner, radial, axial) = (12_usize, 0.24, 0.04, 0.01, 0.014);
    let pitch = (length - axial) / (turns - 1) as f64;
    let turn = |k: usize| {
        let z = -0.5 * length + pitch * k as f64;
        Outline::rounded_rectangle([inner, z], [inner + radial, z + axial], 0.001)
    };
    let outlines = (0..turns).map(turn).collect::<Result<Vec<_>, _>>()?;
    let copper = material(1.9e-8, 1.0)?;
    let billet = part("billet", Outline::rectangle([0.0, -0.1], [0.03, 0.1])?, bar);
    Ok(with_coil(vec![billet], vec![coil(outlines, copper, ConductorKind::Solid)], 3000.0, mirrors))
}
