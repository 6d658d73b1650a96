//! The part of the section a map shows: bodies with a margin, not the whole meshed space.
//! Convention: metres; the half plane is shown with its mirror image across the axis, and across a single mirror plane.

use solver::model::Mirrors;
use solver::results::RegionName;

use super::sheet::{Extent, Sheet};

/// Only one side of the axis is shown where nothing stands within this fraction of the greatest radius: a thin ring of
/// great diameter would else be two slivers with nothing between.
const EMPTY_MIDDLE: f64 = 0.5;

/// What is shown of the half plane, and which mirror images with it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Window {
    /// Radii shown of the half plane.
    pub(super) r: [f64; 2],
    /// Heights shown of the meshed half.
    pub(super) z: [f64; 2],
    /// True where the other side of the axis is shown as well.
    pub(super) both_sides: bool,
    /// True where the lower rim is a mirror plane whose other side is shown as well.
    pub(super) both_halves: bool,
}

impl Window {
    /// Bodies with a margin, a fraction of their greater extent, or of four times the lesser where that is less. Without bodies the whole mesh; without a mesh a square.
    pub(super) fn round(sheet: &Sheet<'_>, margin: f64) -> Self {
        let bodies = sheet.extent(|kind| !matches!(kind, RegionName::Air)).or_else(|| sheet.extent(|_| true));
        let extent = bodies.unwrap_or(Extent { r: [0.0, 0.1], z: [0.0, 0.1] });
        let height = match sheet.mirrors {
            Mirrors::One { z_m } => 2.0 * (extent.z[1] - z_m),
            _ => extent.z[1] - extent.z[0],
        };
        let width = 2.0 * extent.r[1];
        let greatest = width.max(height).min(4.0 * width.min(height)).max(1e-6);
        let both_sides = extent.r[0] <= EMPTY_MIDDLE * extent.r[1];
        let add =
            margin * if both_sides { greatest } else { greatest.min(4.0 * (extent.r[1] - extent.r[0])).max(1e-6) };
        let low_r = if both_sides { 0.0 } else { (extent.r[0] - add).max(0.0) };
        let (low_z, high_z) = match sheet.mirrors {
            Mirrors::None => (extent.z[0] - add, extent.z[1] + add),
            Mirrors::One { z_m } => (z_m, extent.z[1].max(z_m) + add),
            Mirrors::Two { lower_m, upper_m } => (lower_m, upper_m),
        };
        Self {
            r: [low_r, extent.r[1] + add],
            z: [low_z, high_z],
            both_sides,
            both_halves: matches!(sheet.mirrors, Mirrors::One { .. }),
        }
    }

    /// Radii across the picture, negative on the mirrored side.
    pub(super) fn across(&self) -> [f64; 2] {
        if self.both_sides { [-self.r[1], self.r[1]] } else { self.r }
    }

    /// Heights up the picture.
    pub(super) fn along(&self) -> [f64; 2] {
        if self.both_halves { [2.0 * self.z[0] - self.z[1], self.z[1]] } else { self.z }
    }
}
