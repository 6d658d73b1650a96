//! Profiles: points, arcs, fillets and chamfers in order, closed by a straight line. The geometry is that of [`mesher::Path`].

use mesher::{Outline, OutlineError, Path, Point};

use super::amount::{Amount, POSITION, SIZE, read, read_optional};
use crate::job::{Direction, Place, ProfileArc, ProfileCurve, ProfileStep, SectionPoint};
use crate::job_error::JobError;

/// The outline of a profile whose list of steps stands at `place`.
///
/// # Errors
/// No point to begin with, an arc whose ends are not on one circle, a corner that does not fit, an outline that crosses
/// itself.
pub(super) fn outline(steps: &[ProfileStep], place: &Place) -> Result<Outline, JobError> {
    let mut path: Option<Path> = None;
    let mut corners = Vec::with_capacity(steps.len());
    for (index, step) in steps.iter().enumerate() {
        let step = read_step(step, &place.index(index))?;
        let drawn = match (path, step.arc) {
            (None, None) => Outline::path(step.at),
            (None, Some(_)) => return Err(JobError::ProfileStart { place: place.index(0) }),
            (Some(path), None) => path.line_to(step.at),
            (Some(path), Some((centre, counter_clockwise))) => path.arc_to(step.at, centre, counter_clockwise),
        };
        path = Some(match &step.corner {
            None => drawn,
            Some(Corner::Fillet(radius)) => drawn.fillet(radius.si),
            Some(Corner::Chamfer(size)) => drawn.chamfer(size.si),
        });
        corners.push(step.corner);
    }
    let path = path.ok_or_else(|| JobError::ProfileStart { place: place.index(0) })?;
    path.close().map_err(|error| refusal(error, &corners, place))
}

/// A step of a profile as read.
struct Step {
    at: Point,
    /// Centre and direction of the arc that leads here; a line otherwise.
    arc: Option<(Point, bool)>,
    corner: Option<Corner>,
}

/// What is done to a corner.
enum Corner {
    Fillet(Amount),
    Chamfer(Amount),
}

fn read_step(step: &ProfileStep, place: &Place) -> Result<Step, JobError> {
    match step {
        ProfileStep::To(to) => Ok(Step { at: point(to, place)?, arc: None, corner: None }),
        ProfileStep::Curve(ProfileCurve::Arc(arc)) => arc_step(arc, &place.key("arc")),
        ProfileStep::Curve(ProfileCurve::Fillet(fillet)) => {
            let place = place.key("fillet");
            let corner = Corner::Fillet(read(&fillet.radius, &place.key("radius"), SIZE)?);
            Ok(Step { at: point(&fillet.at, &place.key("at"))?, arc: None, corner: Some(corner) })
        }
        ProfileStep::Curve(ProfileCurve::Chamfer(chamfer)) => {
            let place = place.key("chamfer");
            let corner = Corner::Chamfer(read(&chamfer.size, &place.key("size"), SIZE)?);
            Ok(Step { at: point(&chamfer.at, &place.key("at"))?, arc: None, corner: Some(corner) })
        }
    }
}

fn arc_step(arc: &ProfileArc, place: &Place) -> Result<Step, JobError> {
    let (at, centre) = (point(&arc.to, &place.key("to"))?, point(&arc.centre, &place.key("centre"))?);
    let fillet = read_optional(arc.fillet.as_ref(), &place.key("fillet"), SIZE)?;
    let chamfer = read_optional(arc.chamfer.as_ref(), &place.key("chamfer"), SIZE)?;
    let corner = match (fillet, chamfer) {
        (Some(_), Some(_)) => {
            let [first, second] = ["fillet", "chamfer"].map(str::to_owned);
            return Err(JobError::OneOf { place: place.clone(), first, second });
        }
        (fillet, chamfer) => fillet.map(Corner::Fillet).or(chamfer.map(Corner::Chamfer)),
    };
    Ok(Step { at, arc: Some((centre, arc.direction == Direction::CounterClockwise)), corner })
}

/// A point `[r, z]` in metres.
pub(super) fn point(written: &SectionPoint, place: &Place) -> Result<Point, JobError> {
    let r = read(&written.0, &place.index(0), POSITION)?;
    let z = read(&written.1, &place.index(1), POSITION)?;
    Ok([r.si, z.si])
}

/// The refusal of an outline in the words of the profile: its steps, millimetres, sizes as written.
fn refusal(error: OutlineError, corners: &[Option<Corner>], place: &Place) -> JobError {
    let mm = |at: Point| at.map(|metres| 1e3 * metres);
    match error {
        OutlineError::CornerTooLarge { corner, limit, .. } => {
            // The treatment of the start may stand at a last step that returns to it.
            let step = if corners[corner].is_none() { corners.len() - 1 } else { corner };
            let (Some(Corner::Fillet(amount) | Corner::Chamfer(amount)), limit_mm) = (&corners[step], 1e3 * limit)
            else {
                return JobError::Outline { place: place.clone(), source: error };
            };
            JobError::CornerTooLarge { place: amount.place.clone(), value: amount.text.clone(), limit_mm }
        }
        OutlineError::NoCorner { corner, .. } => JobError::NoCorner { place: place.index(corner) },
        OutlineError::NotOnCircle { piece, start_radius, end_radius, .. } => {
            let place = place.index(piece + 1).key("arc").key("centre");
            JobError::ArcRadii { place, start_mm: 1e3 * start_radius, end_mm: 1e3 * end_radius }
        }
        OutlineError::SelfCrossing { at, .. } => {
            let [r_mm, z_mm] = mm(at);
            JobError::CrossesItself { place: place.clone(), r_mm, z_mm }
        }
        OutlineError::ZeroLength { at, .. } => {
            let [r_mm, z_mm] = mm(at);
            JobError::RepeatedPoint { place: place.clone(), r_mm, z_mm }
        }
        source => JobError::Outline { place: place.clone(), source },
    }
}
