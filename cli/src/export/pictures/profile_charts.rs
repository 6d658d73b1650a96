//! Charts of profiles of a part at the start and at the ends of stages: across at mid-length, along surface and core.

use solver::results::Snapshot;

use super::canvas::Canvas;
use super::chart::{Panel, Place, Series, style};
use super::fields::{loss_values, temperature_values};
use super::heading::{HEADING, Heading};
use super::profiles::Paths;
use super::sheet::Sheet;
use super::ticks::millimetres;
use super::{PictureError, moment};

const SIZE: [f64; 2] = [1600.0, 1200.0];
const LEFT: f64 = 160.0;
const LEGEND: f64 = 390.0;
/// Dashes of lines along the core.
const CORE: &[f64] = &[9.0, 7.0];

/// Loss density and temperature across the wall at mid-length.
pub(super) fn radial(
    sheet: &Sheet<'_>,
    paths: &Paths,
    moments: &[&Snapshot],
    part: &str,
    job: &str,
) -> Result<Canvas, PictureError> {
    let mut panels = Panels::new("r in mm");
    for (number, snapshot) in moments.iter().enumerate() {
        let points = |values: Vec<f64>| paths.across.iter().zip(values).map(|(p, v)| [shown_mm(p[0]), v]).collect();
        panels.loss.push(line(&moment(snapshot), points(loss_along(sheet, paths, snapshot, &paths.across)?), number));
        if has_temperatures(snapshot, moments) {
            let heat = temperature_values(sheet, &snapshot.temperature_k)?;
            panels.temperature.push(line(&moment(snapshot), points(paths.sample(sheet, &heat, &paths.across)), number));
        }
    }
    let height = millimetres((paths.middle_z * 1e4).round() * 1e-4);
    let note = format!("across the wall, from inside to outside, at z = {height} mm");
    panels.draw(&Heading { title: format!("Radial profile of {part} at mid-length"), job: job.to_owned(), note })
}

/// Loss density along the surface, and temperature along surface and core.
pub(super) fn axial(
    sheet: &Sheet<'_>,
    paths: &Paths,
    moments: &[&Snapshot],
    part: &str,
    job: &str,
) -> Result<Canvas, PictureError> {
    let mut panels = Panels::new("z in mm");
    for (number, snapshot) in moments.iter().enumerate() {
        let points = |path: &[[f64; 2]], values: Vec<f64>| along(path, &values, paths.plane);
        let values = loss_along(sheet, paths, snapshot, &paths.surface)?;
        panels.loss.push(plain(&moment(snapshot), points(&paths.surface, values), number, &[]));
        if !has_temperatures(snapshot, moments) {
            continue;
        }
        let heat = temperature_values(sheet, &snapshot.temperature_k)?;
        for (path, place, dashes) in [(&paths.surface, "surface", &[] as &[f64]), (&paths.core, "core", CORE)] {
            let values = paths.sample(sheet, &heat, path);
            panels.temperature.push(plain(
                &format!("{}, {place}", snapshot.label),
                points(path, values),
                number,
                dashes,
            ));
        }
    }
    let note = "loss density at the outer surface; core: the axis, or the inner surface of a hollow part".to_owned();
    panels.draw(&Heading { title: format!("Axial profile of {part}"), job: job.to_owned(), note })
}

/// Loss density along a path in W/cm³. Between nodes the interpolation of a steep loss may dip below zero; the loss cannot.
fn loss_along(
    sheet: &Sheet<'_>,
    paths: &Paths,
    snapshot: &Snapshot,
    path: &[[f64; 2]],
) -> Result<Vec<f64>, PictureError> {
    let loss = loss_values(sheet, &snapshot.field, snapshot.field_factor)?;
    Ok(paths.sample(sheet, &loss, path).into_iter().map(|p| if p < 0.0 { 0.0 } else { p }).collect())
}

/// True where the temperatures of a snapshot are drawn: those of the start, even all over, only where there are no others.
fn has_temperatures(snapshot: &Snapshot, moments: &[&Snapshot]) -> bool {
    !snapshot.temperature_k.is_empty() && (snapshot.time_s > 0.0 || moments.len() == 1)
}

/// Millimetres, to the micrometre: the place on the surface that a sample just inside stands for.
fn shown_mm(metres: f64) -> f64 {
    (metres * 1e6).round() * 1e-3
}

/// Points over z, with their mirror images below a mirror plane.
fn along(path: &[[f64; 2]], values: &[f64], plane: Option<f64>) -> Vec<[f64; 2]> {
    let upper = || path.iter().zip(values);
    let mut points = Vec::new();
    if let Some(z_m) = plane {
        points.extend(upper().rev().map(|(p, v)| [shown_mm(2.0 * z_m - p[1]), *v]));
    }
    points.extend(upper().map(|(p, v)| [shown_mm(p[1]), *v]));
    points
}

fn line(name: &str, points: Vec<[f64; 2]>, number: usize) -> Series {
    Series { name: Some(name.to_owned()), points, style: style(number) }
}

fn plain(name: &str, points: Vec<[f64; 2]>, number: usize, dashes: &'static [f64]) -> Series {
    let width = [3.0, 4.5, 2.2][number % 3];
    let look = super::chart::Style { dashes, width, ..style(number) };
    Series { name: Some(name.to_owned()), points, style: look }
}

/// Two panels over the same abscissa, or one where there is no temperature.
struct Panels {
    x_label: &'static str,
    loss: Vec<Series>,
    temperature: Vec<Series>,
}

impl Panels {
    fn new(x_label: &'static str) -> Self {
        Self { x_label, loss: Vec::new(), temperature: Vec::new() }
    }

    fn draw(self, heading: &Heading) -> Result<Canvas, PictureError> {
        let mut canvas = Canvas::new(SIZE[0] as usize, SIZE[1] as usize)?;
        let panel = |y_label: &str, series: Vec<Series>, from_zero: bool| Panel {
            x_label: self.x_label.into(),
            y_label: y_label.into(),
            series,
            from_zero,
            ..Panel::default()
        };
        let mut panels = vec![panel("loss density in W/cm\u{b3}", self.loss, true)];
        if !self.temperature.is_empty() {
            panels.push(panel("temperature in \u{b0}C", self.temperature, false));
        }
        let top = HEADING + 10.0;
        let height = (SIZE[1] - top) / panels.len() as f64;
        for (index, panel) in panels.iter().enumerate() {
            let from = [LEFT, top + height * index as f64];
            let to = [SIZE[0] - LEGEND - 20.0, from[1] + height - 105.0];
            let numbered = panel.draw(&mut canvas, Place { from, to })?;
            let legend = [to[0] + 30.0, from[1]];
            panel.legend(&mut canvas, legend, [SIZE[0] - legend[0] - 20.0, to[1] - from[1]], numbered)?;
        }
        heading.draw(&mut canvas)?;
        Ok(canvas)
    }
}
