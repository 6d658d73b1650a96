//! From gauges as written to points in parts. A pyrometer's point is where a line meets the outline of its part.

use mesher::{Outline, Piece, Point};
use solver::model::{Gauge, GaugeKind, Mirrors, Part};

use super::amount::{Amount, POSITION, read, read_optional};
use super::shapes::extent;
use crate::job::{Job, Place, Pyrometer, PyrometerFace, Thermocouple, nearest};
use crate::job_error::{JobError, shown};

/// How far from the outline a point still counts as on it, over the diagonal of the part.
const ON_OUTLINE: f64 = 1e-9;

/// The gauges: thermocouples first, then pyrometers, each in the order of the job.
///
/// # Errors
/// A part that is not there or not heated, a point outside its part or the slice, a face that is not there.
pub(super) fn gauges(job: &Job, parts: &[Part], mirrors: Mirrors) -> Result<Vec<Gauge>, JobError> {
    let mut gauges = Vec::with_capacity(job.thermocouples.len() + job.pyrometers.len());
    for written in &job.thermocouples {
        let place = job.place().key("thermocouples").key(&written.name);
        let part = part(&written.part, &written.name, parts, &place)?;
        let at = thermocouple(written, &parts[part], &place)?;
        let at = mirrored(at, &written.name, mirrors, &place)?;
        gauges.push(Gauge { name: written.name.clone(), kind: GaugeKind::Thermocouple, part, at });
    }
    for written in &job.pyrometers {
        let place = job.place().key("pyrometers").key(&written.name);
        let part = part(&written.part, &written.name, parts, &place)?;
        let at = pyrometer(written, &parts[part], &place)?;
        let at = mirrored(at, &written.name, mirrors, &place)?;
        gauges.push(Gauge { name: written.name.clone(), kind: GaugeKind::Pyrometer, part, at });
    }
    Ok(gauges)
}

/// Index of the heated part a gauge belongs to.
fn part(name: &str, gauge: &str, parts: &[Part], place: &Place) -> Result<usize, JobError> {
    let place = place.key("part");
    let Some(index) = parts.iter().position(|part| part.name == name) else {
        let known: Vec<String> = parts.iter().map(|part| part.name.clone()).collect();
        let suggestion = nearest(name, &known);
        return Err(JobError::UnknownName {
            place,
            name: shown(name),
            what: "part",
            suggestion,
            known: known.join(", "),
        });
    };
    if !parts[index].role.is_heated() {
        return Err(JobError::GaugeNotHeated { place, what: gauge.to_owned(), part: name.to_owned() });
    }
    Ok(index)
}

/// The point a gauge has in the space that is solved: above the one plane, between the two.
fn mirrored(at: Point, gauge: &str, mirrors: Mirrors, place: &Place) -> Result<Point, JobError> {
    match mirrors {
        Mirrors::One { z_m } if at[1] < z_m => Ok([at[0], 2.0 * z_m - at[1]]),
        Mirrors::Two { lower_m, upper_m } if at[1] < lower_m || at[1] > upper_m => Err(JobError::OutsideSlice {
            place: place.clone(),
            what: format!("gauge `{gauge}` at z = {:.4} mm", 1e3 * at[1]),
            lower_mm: 1e3 * lower_m,
            upper_mm: 1e3 * upper_m,
        }),
        _ => Ok(at),
    }
}

fn diagonal(outline: &Outline) -> f64 {
    let (low, high) = outline.bounds();
    (high[0] - low[0]).hypot(high[1] - low[1])
}

fn thermocouple(written: &Thermocouple, part: &Part, place: &Place) -> Result<Point, JobError> {
    let r = read(&written.r, &place.key("r"), POSITION)?.si;
    let z = read(&written.z, &place.key("z"), POSITION)?.si;
    let at = [r, z];
    let outline = &part.outline;
    if outline.contains(at) || outline.distance(at) <= ON_OUTLINE * diagonal(outline) {
        return Ok(at);
    }
    Err(JobError::GaugeOutside {
        place: place.clone(),
        r_mm: 1e3 * r,
        z_mm: 1e3 * z,
        part: part.name.clone(),
        extent: extent(outline),
    })
}

fn pyrometer(written: &Pyrometer, part: &Part, place: &Place) -> Result<Point, JobError> {
    let r = read_optional(written.r.as_ref(), &place.key("r"), POSITION)?;
    let z = read_optional(written.z.as_ref(), &place.key("z"), POSITION)?;
    let refused = |found| JobError::PyrometerPoint { place: place.clone(), found };
    let (across, along, face) = match written.face {
        PyrometerFace::Outer | PyrometerFace::Outside => (1, z, "outer"),
        PyrometerFace::Inner | PyrometerFace::Inside => (1, z, "inner"),
        PyrometerFace::Top => (0, r, "top"),
        PyrometerFace::Bottom => (0, r, "bottom"),
    };
    if [&written.r, &written.z][across].is_none() {
        return Err(refused(if across == 1 { "`z` is missing" } else { "`r` is missing" }));
    }
    if [&written.r, &written.z][1 - across].is_some() {
        return Err(refused(if across == 1 { "`r` follows from the face" } else { "`z` follows from the face" }));
    }
    let Some(along) = along else { return Err(refused("the point is not said")) };
    surface_point(written.face, across, &along, part).ok_or_else(|| JobError::NoSuchFace {
        place: along.place.clone(),
        value: along.text.clone(),
        part: part.name.clone(),
        face,
        extent: extent(&part.outline),
    })
}

/// The point of a face on the line where coordinate `across` (0 for r, 1 for z) has the value `along`.
fn surface_point(face: PyrometerFace, across: usize, along: &Amount, part: &Part) -> Option<Point> {
    let tolerance = ON_OUTLINE * diagonal(&part.outline);
    let met = crossings(&part.outline, across, along.si, tolerance);
    let least = met.iter().copied().fold(f64::INFINITY, f64::min);
    let most = met.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    let found = match face {
        PyrometerFace::Outer | PyrometerFace::Outside | PyrometerFace::Top => most,
        PyrometerFace::Inner | PyrometerFace::Inside => {
            if least > tolerance {
                least
            } else {
                f64::NAN
            }
        }
        PyrometerFace::Bottom => least,
    };
    let point = if across == 1 { [found, along.si] } else { [along.si, found] };
    found.is_finite().then_some(point)
}

/// The other coordinate of every point of the outline where coordinate `axis` has a value; ends of pieces that run along
/// that line count.
fn crossings(outline: &Outline, axis: usize, value: f64, tolerance: f64) -> Vec<f64> {
    let other = 1 - axis;
    let mut met = Vec::new();
    let mut from = outline.start();
    for piece in outline.pieces() {
        let to = piece.to();
        for end in [from, to] {
            if (end[axis] - value).abs() <= tolerance {
                met.push(end[other]);
            }
        }
        match piece {
            Piece::Line { .. } => {
                if (from[axis] - value) * (to[axis] - value) < 0.0 {
                    let share = (value - from[axis]) / (to[axis] - from[axis]);
                    met.push(from[other] + share * (to[other] - from[other]));
                }
            }
            Piece::Arc { centre, counter_clockwise, .. } => {
                let radius = (from[0] - centre[0]).hypot(from[1] - centre[1]);
                let off = value - centre[axis];
                let half = (radius * radius - off * off).max(0.0).sqrt();
                for side in [-half, half] {
                    let mut at = centre;
                    at[axis] = value;
                    at[other] += side;
                    if off.abs() <= radius && on_arc(at, from, to, centre, counter_clockwise) {
                        met.push(at[other]);
                    }
                }
            }
        }
        from = to;
    }
    met
}

/// True where a point of the circle lies on the arc.
fn on_arc(at: Point, from: Point, to: Point, centre: Point, counter_clockwise: bool) -> bool {
    let angle = |p: Point| (p[1] - centre[1]).atan2(p[0] - centre[0]);
    let turn = |to: f64| {
        let turned = if counter_clockwise { to - angle(from) } else { angle(from) - to };
        turned.rem_euclid(std::f64::consts::TAU)
    };
    turn(angle(at)) <= turn(angle(to))
}
