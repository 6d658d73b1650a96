//! Mirror planes: one through a device that is its own mirror image, or two that bound a slice of an endless device.

use mesher::{Outline, Point};
use solver::model::{Coil, Face, Mirrors, Part};

use super::amount::{POSITION, read};
use crate::job::units::Length;
use crate::job::{Place, Quantity};
use crate::job_error::JobError;

/// How far a mirror image may be off, over the size of the body.
const OFF: f64 = 1e-9;

/// The planes of the list that stands at `place`.
///
/// # Errors
/// Heights out of range or in the wrong order.
pub(super) fn planes(written: &[Quantity<Length>], place: &Place) -> Result<Mirrors, JobError> {
    let plane = |index: usize, quantity| read(quantity, &place.index(index), POSITION);
    match written {
        [] => Ok(Mirrors::None),
        [only] => Ok(Mirrors::One { z_m: plane(0, only)?.si }),
        [lower, upper, ..] => {
            let (lower, upper) = (plane(0, lower)?, plane(1, upper)?);
            if upper.si - lower.si < 1e-6 {
                return Err(JobError::PlaneOrder { place: upper.place, value: upper.text, lower_mm: 1e3 * lower.si });
            }
            Ok(Mirrors::Two { lower_m: lower.si, upper_m: upper.si })
        }
    }
}

/// Checks that the device agrees with its planes.
///
/// # Errors
/// A part or turn without a mirror image across the one plane; a part or turn outside the slice; a turn cut off its middle.
pub(super) fn check(mirrors: Mirrors, parts: &[Part], coils: &[Coil], place: &Place) -> Result<(), JobError> {
    match mirrors {
        Mirrors::None => Ok(()),
        Mirrors::One { z_m } => {
            parts.iter().try_for_each(|part| part_is_symmetric(part, z_m, place))?;
            coils.iter().try_for_each(|coil| coil_is_symmetric(coil, z_m, place))
        }
        Mirrors::Two { lower_m, upper_m } => {
            parts.iter().try_for_each(|part| part_is_inside(part, lower_m, upper_m, place))?;
            coils.iter().try_for_each(|coil| coil_is_inside(coil, lower_m, upper_m, place))
        }
    }
}

fn not_symmetric(what: String, z_m: f64, place: Place) -> JobError {
    JobError::NotSymmetric { place, what, plane_mm: 1e3 * z_m }
}

fn part_is_symmetric(part: &Part, z_m: f64, place: &Place) -> Result<(), JobError> {
    let place = place.key("parts").key(&part.name);
    if !is_symmetric(&part.outline, z_m) {
        return Err(not_symmetric(format!("part `{}`", part.name), z_m, place));
    }
    let at = |face: Face| part.faces.iter().find(|(of, _)| *of == face).map(|(_, condition)| *condition);
    if at(Face::Top) == at(Face::Bottom) {
        return Ok(());
    }
    Err(not_symmetric("the condition of `top` or `bottom`".to_owned(), z_m, place))
}

/// True where every piece of an outline has a mirror image among its pieces.
fn is_symmetric(outline: &Outline, z_m: f64) -> bool {
    let (low, high) = outline.bounds();
    let tolerance = OFF * (high[0] - low[0]).hypot(high[1] - low[1]);
    let near = |a: Point, b: Point| (a[0] - b[0]).abs() <= tolerance && (a[1] - b[1]).abs() <= tolerance;
    let image = |p: Point| [p[0], 2.0 * z_m - p[1]];
    let pieces: Vec<[Point; 3]> = (0..outline.len())
        .filter_map(|piece| Some([outline.point(piece, 0.0)?, outline.point(piece, 0.5)?, outline.point(piece, 1.0)?]))
        .collect();
    pieces.iter().all(|[start, middle, end]| {
        let wanted = [image(*end), image(*middle), image(*start)];
        pieces.iter().any(|piece| piece.iter().zip(wanted).all(|(&found, wanted)| near(found, wanted)))
    })
}

fn coil_is_symmetric(coil: &Coil, z_m: f64, place: &Place) -> Result<(), JobError> {
    for (index, turn) in coil.turns.iter().enumerate() {
        let wanted = [turn.centre[0], 2.0 * z_m - turn.centre[1]];
        let (low, high) = turn.outline.bounds();
        let tolerance = 1e-6 * (high[0] - low[0]).max(high[1] - low[1]);
        let met = |at: Point| (at[0] - wanted[0]).abs() <= tolerance && (at[1] - wanted[1]).abs() <= tolerance;
        if !coil.turns.iter().any(|other| met(other.centre)) {
            let place = place.key("coils").key(&coil.name);
            return Err(not_symmetric(format!("turn {} of coil `{}`", index + 1, coil.name), z_m, place));
        }
    }
    Ok(())
}

fn outside(what: String, lower_m: f64, upper_m: f64, place: Place) -> JobError {
    JobError::OutsideSlice { place, what, lower_mm: 1e3 * lower_m, upper_mm: 1e3 * upper_m }
}

fn part_is_inside(part: &Part, lower_m: f64, upper_m: f64, place: &Place) -> Result<(), JobError> {
    let (low, high) = part.outline.bounds();
    if high[1].min(upper_m) - low[1].max(lower_m) > OFF * (high[1] - low[1]) {
        return Ok(());
    }
    let place = place.key("parts").key(&part.name);
    Err(outside(format!("part `{}`", part.name), lower_m, upper_m, place))
}

fn coil_is_inside(coil: &Coil, lower_m: f64, upper_m: f64, place: &Place) -> Result<(), JobError> {
    let place = place.key("coils").key(&coil.name);
    for (index, turn) in coil.turns.iter().enumerate() {
        let (low, high) = turn.outline.bounds();
        let tolerance = 1e-6 * (high[1] - low[1]);
        let what = || format!("turn {} of coil `{}`", index + 1, coil.name);
        if high[1] <= lower_m + tolerance || low[1] >= upper_m - tolerance {
            return Err(outside(what(), lower_m, upper_m, place));
        }
        for plane in [lower_m, upper_m] {
            let cut = low[1] < plane - tolerance && high[1] > plane + tolerance;
            if cut && (turn.centre[1] - plane).abs() > tolerance {
                return Err(not_symmetric(what(), plane, place));
            }
        }
    }
    Ok(())
}
