//! Devices whose solution is timed: a bar in a coil at any fineness, alone and heated. Convention: SI units.

use std::sync::Arc;

use mesher::{Outline, OutlineError};
use serde_json::json;
use solver::material::{Material, MaterialError};
use solver::model::{
    Coil, ConductorKind, Drive, Heating, Hold, Limits, MeshSettings, Mirrors, Model, Part, Role, Stage, StageEnd,
    Surface, Turn,
};

/// A device that cannot be set up.
#[derive(Debug, thiserror::Error)]
pub enum DeviceError {
    /// An outline was refused.
    #[error(transparent)]
    Outline(#[from] OutlineError),
    /// A material was refused.
    #[error(transparent)]
    Material(#[from] MaterialError),
}

fn material(resistivity: &str) -> Result<Arc<Material>, MaterialError> {
    Material::from_json(&json!({
        "name": "constant",
        "density": "7800 kg/m3",
        "thermal_conductivity": "30 W/m/K",
        "specific_heat": "650 J/kg/K",
        "resistivity": resistivity,
    }))
    .map(Arc::new)
}

fn turn(k: usize) -> Result<Turn, OutlineError> {
    let z = -0.12 + 0.0205 * k as f64;
    Ok(Turn {
        outline: Outline::rounded_rectangle([0.04, z], [0.05, z + 0.014], 0.001)?,
        bore: Some(Outline::rectangle([0.0415, z + 0.0015], [0.0485, z + 0.0125])?),
        centre: [0.045, z + 0.007],
    })
}

/// A bar of 60 mm by 200 mm in a coil of 12 tube turns at 3 kHz, 22 kW in the bar.
///
/// # Errors
/// Values the library refuses.
pub fn bar_heater(fineness: f64) -> Result<Model, DeviceError> {
    let bar = Part {
        name: "bar".to_owned(),
        role: Role::Workpiece,
        outline: Outline::rectangle([0.0, -0.1], [0.03, 0.1])?,
        material: material("50 µΩ cm")?,
        surface: Surface { emissivity: 0.8, convection_w_per_m2_k: 10.0 },
        faces: Vec::new(),
        start_k: 293.15,
    };
    let coil = Coil {
        name: "coil".to_owned(),
        turns: (0..12).map(turn).collect::<Result<_, _>>()?,
        material: material("1.9 µΩ cm")?,
        temperature_k: 323.15,
        conductor: ConductorKind::Solid,
        reversed: false,
        water: None,
    };
    Ok(Model {
        title: "bar heater".to_owned(),
        parts: vec![bar],
        coils: vec![coil],
        drive: Drive::Supply { frequency_hz: 3e3, hold: Hold::WorkpiecePower(22e3), limits: Limits::default() },
        mirrors: Mirrors::None,
        heating: None,
        gauges: Vec::new(),
        start_k: 293.15,
        mesh: MeshSettings { fineness, ..MeshSettings::default() },
    })
}

/// The same bar heated for ten seconds.
///
/// # Errors
/// Values the library refuses.
pub fn heated_bar() -> Result<Model, DeviceError> {
    let stage = Stage { name: "heat".to_owned(), end: StageEnd::After(10.0), hold: None };
    let heating = Heating { ambient_k: 298.15, stages: vec![stage], step_tolerance_k: 2.0 };
    Ok(Model { heating: Some(heating), ..bar_heater(1.0)? })
}
