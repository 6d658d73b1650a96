//! Flux lines: contours of `r A` at the instant of the greatest coil current, drawn over the section.
//! Between a line and the axis runs the flux `2 pi r A`; lines are evenly spaced in it. Convention: `e^{+jwt}`, peak.

use std::f64::consts::PI;

use num_complex::Complex64;
use solver::results::{RegionName, Snapshot};

use super::PictureError;
use super::canvas::Canvas;
use super::fields::check;
use super::frame::{Frame, Margins};
use super::heading::{HEADING, Heading};
use super::image::{Image, Rgb};
use super::layer::{AIR, paint_kinds, pixels, stroke_outlines};
use super::raster::misses;
use super::shape;
use super::sheet::Sheet;
use super::ticks::{round_step, three_digits};
use super::window::Window;

/// Space round the bodies, as a fraction of their extent: lines close outside.
const MARGIN: f64 = 0.3;
/// Most lines between the extremes.
const LINES: usize = 30;
/// Longest piece of a line, fine pixels.
const PIECE: f64 = 10.0;
const LINE: Rgb = [24, 62, 128];

/// Draws the flux lines of a snapshot.
pub(super) fn draw(sheet: &Sheet<'_>, snapshot: &Snapshot, title: String, job: &str) -> Result<Canvas, PictureError> {
    let flux = flux(sheet, snapshot)?;
    let window = Window::round(sheet, MARGIN);
    let frame = Frame::fit(window, Margins { left: 140.0, right: 60.0, top: HEADING, bottom: 110.0 });
    let mut half = frame.half_plane(AIR);
    let view = frame.view();
    paint_kinds(&mut half, &view, sheet);
    stroke_outlines(&mut half, &view, sheet);
    let step = spacing(&mut half, sheet, &flux, |e| pixels(&view, sheet, e));
    let mut canvas = Canvas::new(frame.size[0], frame.size[1])?;
    frame.put(&half, &mut canvas);
    frame.centre_lines(&mut canvas);
    frame.axes(&mut canvas)?;
    let note = if step > 0.0 {
        format!("{} between neighbouring lines, at the greatest coil current", webers(step))
    } else {
        "no flux".to_owned()
    };
    Heading { title, job: job.to_owned(), note }.draw(&mut canvas)?;
    Ok(canvas)
}

/// Flux between each node and the axis, webers, at the instant of the greatest coil current.
fn flux(sheet: &Sheet<'_>, snapshot: &Snapshot) -> Result<Vec<f64>, PictureError> {
    let potential = &snapshot.field.vector_potential_wb_per_m;
    if potential.len() != sheet.points.len() {
        let (expected, found) = (sheet.points.len(), potential.len());
        return Err(PictureError::Length { what: "vector potentials", expected, found });
    }
    check(sheet, "current densities", snapshot.field.current_density_a_per_m2.len())?;
    let turn = instant(sheet, snapshot).conj() * snapshot.field_factor;
    let at = |(p, a): (&[f64; 2], &Complex64)| 2.0 * PI * p[0] * (a * turn).re;
    Ok(sheet.points.iter().zip(potential).map(at).collect())
}

/// Phase factor of the current in the first coil; without a coil that of the greatest potential.
fn instant(sheet: &Sheet<'_>, snapshot: &Snapshot) -> Complex64 {
    let stride = shape::node_count(sheet.order);
    let weights = shape::mean_weights(sheet.order);
    let first = sheet.coils().first().map(|c| c.0);
    let turns = sheet.elements_of(|kind| matches!(kind, RegionName::Turn(coil, _, _) if Some(*coil) == first));
    let mut current = Complex64::ZERO;
    for element in turns {
        let p = sheet.places(element);
        let area = 0.5 * ((p[1][0] - p[0][0]) * (p[2][1] - p[0][1]) - (p[1][1] - p[0][1]) * (p[2][0] - p[0][0])).abs();
        let nodal = &snapshot.field.current_density_a_per_m2[element * stride..(element + 1) * stride];
        current += nodal.iter().zip(weights).map(|(j, w)| j * w).sum::<Complex64>() * area;
    }
    if current.norm() == 0.0 {
        let greater = |a: Complex64, b: &Complex64| if b.norm() > a.norm() { *b } else { a };
        current = snapshot.field.vector_potential_wb_per_m.iter().fold(Complex64::ZERO, greater);
    }
    let size = current.norm();
    if size.is_normal() { current / size } else { Complex64::ONE }
}

/// Draws all lines and returns the flux between neighbours, webers; zero where there is nothing to draw.
fn spacing(image: &mut Image, sheet: &Sheet<'_>, flux: &[f64], places: impl Fn(usize) -> Vec<[f64; 2]>) -> f64 {
    let visible: Vec<(usize, Vec<[f64; 2]>)> =
        (0..sheet.element_count()).map(|e| (e, places(e))).filter(|(_, p)| !misses(image, p)).collect();
    let values = visible.iter().flat_map(|(e, _)| sheet.nodes(*e)).map(|&n| flux[n as usize]).filter(|v| v.is_finite());
    let (low, high) = values.fold((0.0f64, 0.0f64), |(low, high), v| (low.min(v), high.max(v)));
    let step = round_step(high - low, LINES);
    if step > 0.0 {
        for (element, p) in &visible {
            let nodal: Vec<f64> = sheet.nodes(*element).iter().map(|&n| flux[n as usize]).collect();
            for [a, b] in contours(sheet.order, p, &nodal, step) {
                image.stroke(a, b, 3.6, LINE);
            }
        }
    }
    step
}

/// Pieces of the lines at all multiples of `step` but zero, in one element.
fn contours(order: usize, places: &[[f64; 2]], nodal: &[f64], step: f64) -> Vec<[[f64; 2]; 2]> {
    let mut lines = Vec::new();
    if nodal.iter().any(|v| !v.is_finite()) {
        return lines;
    }
    let longest = (0..3).map(|i| {
        let (a, b) = (places[i], places[(i + 1) % 3]);
        (b[0] - a[0]).hypot(b[1] - a[1])
    });
    let pieces = ((longest.fold(0.0, f64::max) / PIECE).ceil() as usize).clamp(1, 40);
    for piece in shape::subdivision(pieces) {
        let value = piece.map(|l| shape::interpolate(order, l, nodal) / step);
        let (low, high) = (value[0].min(value[1]).min(value[2]), value[0].max(value[1]).max(value[2]));
        if low.ceil() > high.floor() {
            continue;
        }
        let corners = piece.map(|l| shape::place(order, l, places));
        for level in (low.ceil() as i64..=high.floor() as i64).filter(|l| *l != 0) {
            lines.extend(crossing(&corners, value, level as f64));
        }
    }
    lines
}

/// The straight piece of a level within a triangle with linear values.
fn crossing(corners: &[[f64; 2]; 3], value: [f64; 3], level: f64) -> Option<[[f64; 2]; 2]> {
    let mut ends = Vec::with_capacity(2);
    for i in 0..3 {
        let j = (i + 1) % 3;
        // Half-open, so that a level through a corner is met by exactly two sides or none.
        if (value[i] < level) != (value[j] < level) {
            let t = (level - value[i]) / (value[j] - value[i]);
            ends.push([0, 1].map(|k| corners[i][k] + t * (corners[j][k] - corners[i][k])));
        }
    }
    (ends.len() == 2).then(|| [ends[0], ends[1]])
}

/// A flux with the prefix that suits it.
fn webers(value: f64) -> String {
    let (scaled, unit) = match value {
        v if v >= 1e-1 => (v, "Wb"),
        v if v >= 1e-4 => (v * 1e3, "mWb"),
        v if v >= 1e-7 => (v * 1e6, "\u{b5}Wb"),
        v => (v * 1e9, "nWb"),
    };
    let digits = three_digits(scaled);
    let short = if digits.contains('.') { digits.trim_end_matches('0').trim_end_matches('.') } else { &digits };
    format!("{short} {unit}")
}

#[cfg(test)]
mod tests {
    use super::{contours, webers};

    #[test]
    fn lines_of_a_quadratic_field_lie_at_its_levels() {
        // psi = x^2 on the triangle (0,0), (100,0), (0,100): lines at x = 10 sqrt(10 k).
        let places = [[0.0, 0.0], [100.0, 0.0], [0.0, 100.0], [50.0, 0.0], [50.0, 50.0], [0.0, 50.0]];
        let nodal: Vec<f64> = places.iter().map(|p| p[0] * p[0]).collect();
        let lines = contours(2, &places, &nodal, 1000.0);
        assert!(!lines.is_empty());
        for [a, b] in &lines {
            for p in [a, b] {
                let level = p[0] * p[0] / 1000.0;
                // Linear interpolation of x^2 over pieces of 10 misses by at most 10^2 / 4.
                assert!((level - level.round()).abs() <= 0.0251, "x = {}", p[0]);
            }
        }
        let total: f64 = lines.iter().map(|[a, b]| (b[0] - a[0]).hypot(b[1] - a[1])).sum();
        let expected: f64 = (1..10).map(|k| 100.0 - (1000.0 * f64::from(k)).sqrt()).sum();
        assert!((total / expected - 1.0).abs() < 0.01, "length {total}, expected {expected}");
    }

    #[test]
    fn no_lines_without_values_or_changes() {
        let places = [[0.0, 0.0], [100.0, 0.0], [0.0, 100.0]];
        assert!(contours(1, &places, &[5.5; 3], 1.0).is_empty());
        assert!(contours(1, &places, &[f64::NAN, 0.0, 9.0], 1.0).is_empty());
    }

    #[test]
    fn fluxes_are_written_with_a_prefix() {
        assert_eq!(webers(2e-5), "20 \u{b5}Wb");
        assert_eq!(webers(0.5), "0.5 Wb");
    }
}
