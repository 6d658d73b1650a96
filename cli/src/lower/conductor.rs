//! From the section of a conductor to the outlines of its turns, `[r, z]` in metres.

use mesher::{Outline, OutlineError, Point};
use solver::model::{ConductorKind, Turn};

use super::amount::{Amount, GAP, SIZE, read};
use crate::job::units::Length;
use crate::job::{Conductor, Place, Quantity};
use crate::job_error::JobError;

/// The section of a conductor: sizes in metres.
#[derive(Debug, Clone, Copy)]
pub(super) struct Section {
    /// Outside size along z.
    pub(super) axial: f64,
    /// Outside size along r.
    pub(super) radial: f64,
    /// How the current spreads.
    pub(super) kind: ConductorKind,
    wall: Option<f64>,
    corner: Corner,
}

/// How the corners are.
#[derive(Debug, Clone, Copy)]
enum Corner {
    /// Rounded with a radius, or sharp with radius zero.
    Radius(f64),
    /// There are none: the section is a circle.
    Round,
}

/// The section of the conductor that stands at `place`.
///
/// # Errors
/// Sizes out of range, a wall or a corner radius that does not fit.
pub(super) fn section(written: &Conductor, place: &Place) -> Result<Section, JobError> {
    let size = |quantity: &Quantity<Length>, place: &Place, key: &str| read(quantity, &place.key(key), SIZE);
    let solid = ConductorKind::Solid;
    match written {
        Conductor::RectangularTube(tube) => {
            let at = place.key("rectangular_tube");
            let (axial, radial) = (size(&tube.axial, &at, "axial")?.si, size(&tube.radial, &at, "radial")?.si);
            let wall = wall(&size(&tube.wall, &at, "wall")?, axial.min(radial))?;
            let corner = corner(&tube.corner_radius, axial.min(radial), &at)?;
            Ok(Section { axial, radial, kind: solid, wall: Some(wall), corner })
        }
        Conductor::RoundTube(tube) => {
            let at = place.key("round_tube");
            let diameter = size(&tube.diameter, &at, "diameter")?.si;
            let wall = wall(&size(&tube.wall, &at, "wall")?, diameter)?;
            Ok(Section { axial: diameter, radial: diameter, kind: solid, wall: Some(wall), corner: Corner::Round })
        }
        Conductor::SolidBar(bar) => {
            let at = place.key("solid_bar");
            let (axial, radial) = (size(&bar.axial, &at, "axial")?.si, size(&bar.radial, &at, "radial")?.si);
            let corner = corner(&bar.corner_radius, axial.min(radial), &at)?;
            Ok(Section { axial, radial, kind: solid, wall: None, corner })
        }
        Conductor::RoundWire(wire) => {
            let diameter = size(&wire.diameter, &place.key("round_wire"), "diameter")?.si;
            Ok(Section { axial: diameter, radial: diameter, kind: solid, wall: None, corner: Corner::Round })
        }
        Conductor::Stranded(window) => {
            let at = place.key("stranded");
            let (axial, radial) = (size(&window.axial, &at, "axial")?.si, size(&window.radial, &at, "radial")?.si);
            let kind = ConductorKind::Stranded { fill: window.fill };
            Ok(Section { axial, radial, kind, wall: None, corner: Corner::Radius(0.0) })
        }
    }
}

fn wall(wall: &Amount, least_side: f64) -> Result<f64, JobError> {
    if wall.si < 0.5 * least_side * (1.0 - 1e-6) {
        return Ok(wall.si);
    }
    Err(JobError::TooBig {
        place: wall.place.clone(),
        value: wall.text.clone(),
        limit_mm: 500.0 * least_side,
        why: "half of the conductor, or no bore is left",
    })
}

fn corner(radius: &Quantity<Length>, least_side: f64, place: &Place) -> Result<Corner, JobError> {
    let radius = read(radius, &place.key("corner_radius"), GAP)?;
    if radius.si <= 0.5 * least_side * (1.0 + 1e-9) {
        return Ok(Corner::Radius(radius.si));
    }
    Err(JobError::TooBig {
        place: radius.place,
        value: radius.text,
        limit_mm: 500.0 * least_side,
        why: "half of the shorter side",
    })
}

impl Section {
    /// A turn with this section about `centre`.
    ///
    /// # Errors
    /// Sections that are lost in rounding.
    pub(super) fn turn(&self, centre: Point) -> Result<Turn, OutlineError> {
        let outline = self.inset(centre, 0.0)?;
        let bore = self.wall.map(|wall| self.inset(centre, wall)).transpose()?;
        Ok(Turn { outline, bore, centre })
    }

    /// The outline moved inwards by `wall`.
    fn inset(&self, centre: Point, wall: f64) -> Result<Outline, OutlineError> {
        let half = [0.5 * self.radial - wall, 0.5 * self.axial - wall];
        match self.corner {
            Corner::Round => Outline::circle(centre, half[0]),
            Corner::Radius(radius) => {
                let low = [centre[0] - half[0], centre[1] - half[1]];
                let high = [centre[0] + half[0], centre[1] + half[1]];
                Outline::rounded_rectangle(low, high, (radius - wall).max(0.0).min(half[0].min(half[1])))
            }
        }
    }
}
