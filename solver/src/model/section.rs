//! What stands in the section: parts, coils and their turns.

use std::sync::Arc;

use mesher::{Outline, Point};

use super::{Face, FaceCondition, Surface};
use crate::material::Material;

/// What a part is there for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Role {
    /// What is to be heated; its power counts as useful.
    Workpiece,
    /// Refractory or insulation between work and coil; heated by conduction.
    Lining,
    /// Heated by the field to heat something else.
    Susceptor,
    /// Holds a melt; heated.
    Crucible,
    /// A conducting screen, flux ring or other body that stays at its own temperature.
    Fixture,
}

impl Role {
    /// True where the temperature of the part is solved for.
    pub fn is_heated(self) -> bool {
        !matches!(self, Self::Fixture)
    }
}

/// A body of revolution of one material.
#[derive(Debug, Clone)]
pub struct Part {
    /// Its name, unique in the job.
    pub name: String,
    /// What it is there for.
    pub role: Role,
    /// Its section in the meridian half plane; may touch the axis.
    pub outline: Outline,
    /// What it is made of.
    pub material: Arc<Material>,
    /// Exchange with the surroundings on every exposed face that has no condition of its own.
    pub surface: Surface,
    /// Conditions of single faces.
    pub faces: Vec<(Face, FaceCondition)>,
    /// Temperature in kelvin at the start.
    pub start_k: f64,
}

/// A coil: turns in series.
#[derive(Debug, Clone)]
pub struct Coil {
    /// Its name, unique in the job.
    pub name: String,
    /// Turns in electrical order, as rings.
    pub turns: Vec<Turn>,
    /// Material of the conductor.
    pub material: Arc<Material>,
    /// Temperature of the conductor in kelvin.
    pub temperature_k: f64,
    /// How current spreads in the conductor.
    pub conductor: ConductorKind,
    /// True where the current runs against the other coils.
    pub reversed: bool,
    /// Cooling water, if any.
    pub water: Option<Water>,
}

/// A turn as a ring.
#[derive(Debug, Clone)]
pub struct Turn {
    /// Outside of the conductor.
    pub outline: Outline,
    /// Its bore, if it is a tube; inside the outline.
    pub bore: Option<Outline>,
    /// Centre of the section, `[r, z]` in metres.
    pub centre: Point,
}

/// How the current spreads over the section of a turn.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum ConductorKind {
    /// As the field decides (solid bar or tube).
    Solid,
    /// Uniformly (stranded, litz).
    Stranded {
        /// Copper area over window area, 0 to 1.
        fill: f64,
    },
}

/// Cooling water of a coil.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Water {
    /// Number of equal paths.
    pub paths: usize,
    /// Inlet temperature in kelvin.
    pub inlet_k: f64,
    /// Flow of one path in m^3/s.
    pub flow_per_path_m3_per_s: f64,
}
