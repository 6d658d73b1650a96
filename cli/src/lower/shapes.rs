//! From shapes to outlines in the meridian half plane, `[r, z]` in metres.

use mesher::{Outline, Piece};

use super::amount::{Amount, GAP, POSITION, SIZE, read, read_optional};
use super::profile;
use crate::job::units::Length;
use crate::job::{Cone, Place, Quantity, Shape, Sphere};
use crate::job_error::JobError;

/// The outline of the shape that stands at `place`.
///
/// # Errors
/// Sizes out of range or in the wrong order, a placement that is said twice, an outline that crosses itself or the axis.
pub(super) fn outline(shape: &Shape, place: &Place) -> Result<Outline, JobError> {
    let outline = match shape {
        Shape::Cylinder(s) => {
            let at = place.key("cylinder");
            let axial = Axial { extent: s.length.as_ref(), key: "length", centre: &s.centre, from: &s.from, to: &s.to };
            solid(&s.diameter, axial, &at)
        }
        Shape::Disc(s) => {
            let at = place.key("disc");
            let axial =
                Axial { extent: s.thickness.as_ref(), key: "thickness", centre: &s.centre, from: &s.from, to: &s.to };
            solid(&s.diameter, axial, &at)
        }
        Shape::Tube(s) => {
            let at = place.key("tube");
            let axial = Axial { extent: s.length.as_ref(), key: "length", centre: &s.centre, from: &s.from, to: &s.to };
            hollow(&s.inner_diameter, &s.outer_diameter, axial, &at)
        }
        Shape::Ring(s) => {
            let at = place.key("ring");
            let axial =
                Axial { extent: s.thickness.as_ref(), key: "thickness", centre: &s.centre, from: &s.from, to: &s.to };
            hollow(&s.inner_diameter, &s.outer_diameter, axial, &at)
        }
        Shape::Sphere(s) => sphere(s, &place.key("sphere")),
        Shape::Cone(s) => cone(s, &place.key("cone")),
        Shape::Profile(steps) => profile::outline(steps, &place.key("profile")),
    }?;
    let r_m = outline.bounds().0[0];
    if r_m < 0.0 {
        return Err(JobError::CrossesAxis { place: place.clone(), r_mm: 1e3 * r_m });
    }
    Ok(outline)
}

/// How a shape is placed along the axis.
#[derive(Clone, Copy)]
struct Axial<'a> {
    extent: Option<&'a Quantity<Length>>,
    key: &'static str,
    centre: &'a Option<Quantity<Length>>,
    from: &'a Option<Quantity<Length>>,
    to: &'a Option<Quantity<Length>>,
}

impl Axial<'_> {
    /// Lower and upper end in metres.
    fn ends(&self, place: &Place) -> Result<(f64, f64), JobError> {
        let extent = read_optional(self.extent, &place.key(self.key), SIZE)?;
        let centre = read_optional(self.centre.as_ref(), &place.key("centre"), POSITION)?;
        let from = read_optional(self.from.as_ref(), &place.key("from"), POSITION)?;
        let to = read_optional(self.to.as_ref(), &place.key("to"), POSITION)?;
        let refused = |found| Err(JobError::Placement { place: place.clone(), found, length: self.key });
        match (extent, centre, from, to) {
            (Some(extent), centre, None, None) => {
                let middle = centre.map_or(0.0, |centre| centre.si);
                Ok((middle - 0.5 * extent.si, middle + 0.5 * extent.si))
            }
            (Some(extent), None, Some(from), None) => Ok((from.si, from.si + extent.si)),
            (Some(extent), None, None, Some(to)) => Ok((to.si - extent.si, to.si)),
            (None, None, Some(from), Some(to)) => {
                more(&to, &from, "from")?;
                Ok((from.si, to.si))
            }
            (None, _, _, _) => refused("how long it is does not follow from the keys given"),
            (Some(_), _, _, _) => refused("where it stands is said more than once"),
        }
    }
}

/// Refuses a size that is not more than another.
fn more(larger: &Amount, smaller: &Amount, other: &'static str) -> Result<(), JobError> {
    if larger.si - smaller.si >= 1e-6 {
        return Ok(());
    }
    let (value, limit) = (larger.text.clone(), smaller.text.clone());
    Err(JobError::NotMore { place: larger.place.clone(), value, other, limit })
}

fn solid(diameter: &Quantity<Length>, axial: Axial<'_>, place: &Place) -> Result<Outline, JobError> {
    let diameter = read(diameter, &place.key("diameter"), SIZE)?;
    let (low, high) = axial.ends(place)?;
    made(Outline::rectangle([0.0, low], [0.5 * diameter.si, high]), place)
}

fn hollow(
    inner: &Quantity<Length>,
    outer: &Quantity<Length>,
    axial: Axial<'_>,
    place: &Place,
) -> Result<Outline, JobError> {
    let inner = read(inner, &place.key("inner_diameter"), SIZE)?;
    let outer = read(outer, &place.key("outer_diameter"), SIZE)?;
    more(&outer, &inner, "inner_diameter")?;
    let (low, high) = axial.ends(place)?;
    made(Outline::rectangle([0.5 * inner.si, low], [0.5 * outer.si, high]), place)
}

fn sphere(sphere: &Sphere, place: &Place) -> Result<Outline, JobError> {
    let radius = 0.5 * read(&sphere.diameter, &place.key("diameter"), SIZE)?.si;
    let z = read(&sphere.centre, &place.key("centre"), POSITION)?.si;
    let (bottom, top) = ([0.0, z - radius], [0.0, z + radius]);
    let arc = Piece::Arc { to: top, centre: [0.0, z], counter_clockwise: true };
    made(Outline::new(bottom, vec![arc, Piece::Line { to: bottom }]), place)
}

fn cone(cone: &Cone, place: &Place) -> Result<Outline, JobError> {
    let bottom = 0.5 * read(&cone.bottom_diameter, &place.key("bottom_diameter"), GAP)?.si;
    let top = 0.5 * read(&cone.top_diameter, &place.key("top_diameter"), GAP)?.si;
    let axial =
        Axial { extent: cone.length.as_ref(), key: "length", centre: &cone.centre, from: &cone.from, to: &cone.to };
    let (low, high) = axial.ends(place)?;
    let mut points = vec![[0.0, low], [bottom, low], [top, high], [0.0, high]];
    points.dedup();
    made(Outline::polygon(&points), place)
}

/// An outline, or why it is none, with the place it was drawn from.
pub(super) fn made(outline: Result<Outline, mesher::OutlineError>, place: &Place) -> Result<Outline, JobError> {
    outline.map_err(|source| JobError::Outline { place: place.clone(), source })
}

/// The box around an outline, for messages: `r 0 to 30 mm, z -100 to 100 mm`.
pub(super) fn extent(outline: &Outline) -> String {
    let (low, high) = outline.bounds();
    let mm = |metres: f64| (metres * 1e7).round() / 1e4;
    format!("r {} to {} mm, z {} to {} mm", mm(low[0]), mm(high[0]), mm(low[1]), mm(high[1]))
}
