//! The dimensioned section. Dimensions are in millimetres, diameters marked so, as on a shop drawing.

use solver::model::Mirrors;
use solver::results::RegionName;

use super::PictureError;
use super::canvas::{Align, Canvas, GREY_INK, INK, lettering};
use super::frame::{Frame, Margins, is_turned};
use super::heading::{HEADING, Heading};
use super::image::Rgb;
use super::labels::name_parts;
use super::layer::{AIR, COPPER, OUTLINE, kind_colour, paint_kinds, stroke_outlines};
use super::sheet::{Extent, Sheet};
use super::ticks::millimetres;
use super::window::Window;

/// Space round the bodies, as a fraction of their extent.
const MARGIN: f64 = 0.05;
/// Distance of neighbouring dimension lines.
const ROW: f64 = 44.0;
/// Most dimension lines on a side.
const MOST_ROWS: usize = 8;
/// Height of a line of the list of bodies.
const ENTRY: f64 = 38.0;
/// Most entries of the list of bodies.
const MOST_ENTRIES: usize = 12;
pub(super) const TEXT: f64 = 25.0;
const LEAST_TEXT: f64 = 17.0;

/// A body with its sizes.
struct Body {
    name: String,
    colour: Rgb,
    extent: Extent,
    /// `Some` for a coil: number of its turns.
    turns: Option<usize>,
}

/// A dimension line: between two places along one direction, drawn off the body's edge.
struct Dimension {
    radial: bool,
    range: [f64; 2],
    /// Where extension lines start, in the other direction.
    edge: f64,
    number: String,
    names: Vec<String>,
}

/// Draws the section with outlines, names and overall dimensions.
pub(super) fn section(sheet: &Sheet<'_>, title: &str) -> Result<Canvas, PictureError> {
    let window = Window::round(sheet, MARGIN);
    let turned = is_turned(&window);
    let bodies = bodies(sheet);
    let (across, along) = dimensions(&bodies, &window);
    let (above, beside) = if turned { (&along, &across) } else { (&across, &along) };
    let entries = bodies.len().min(MOST_ENTRIES + 1) as f64;
    let margins = Margins {
        left: 140.0,
        right: 50.0 + ROW * beside.len() as f64,
        top: HEADING + ROW * above.len() as f64 + 14.0,
        bottom: 125.0 + ENTRY * entries,
    };
    let frame = Frame::fit(window, margins);
    let mut half = frame.half_plane(AIR);
    let view = frame.view();
    paint_kinds(&mut half, &view, sheet);
    stroke_outlines(&mut half, &view, sheet);
    let mut canvas = Canvas::new(frame.size[0], frame.size[1])?;
    frame.put(&half, &mut canvas);
    frame.centre_lines(&mut canvas);
    frame.axes(&mut canvas)?;
    for (row, dimension) in above.iter().enumerate() {
        draw_above(&mut canvas, &frame, dimension, frame.from[1] - 16.0 - ROW * row as f64)?;
    }
    for (row, dimension) in beside.iter().enumerate() {
        draw_beside(&mut canvas, &frame, dimension, frame.to[0] + 50.0 + ROW * row as f64)?;
    }
    name_parts(&mut canvas, &frame, sheet)?;
    list(&mut canvas, &frame, &bodies)?;
    let side = if window.both_sides { "" } else { ", one side of the axis" };
    let note = format!("dimensions in mm, cold{side}");
    Heading { title: "Section".into(), job: title.to_owned(), note }.draw(&mut canvas)?;
    Ok(canvas)
}

/// Parts, then coils, with their sizes in the full section.
fn bodies(sheet: &Sheet<'_>) -> Vec<Body> {
    let mut bodies = Vec::new();
    for (index, name) in sheet.parts() {
        let of_part = |kind: &RegionName| matches!(kind, RegionName::Part(i, _) if *i == index);
        if let Some(extent) = sheet.extent(of_part) {
            let colour = kind_colour(&RegionName::Part(index, String::new()));
            bodies.push(Body {
                name: name.to_owned(),
                colour,
                extent: whole(extent, sheet.mirrors, false),
                turns: None,
            });
        }
    }
    for (index, name) in sheet.coils() {
        let of_coil = |kind: &RegionName| matches!(kind, RegionName::Turn(i, _, _) if *i == index);
        if let Some(extent) = sheet.extent(of_coil) {
            let turns = Some(turn_count(sheet, index));
            let extent = whole(extent, sheet.mirrors, true);
            bodies.push(Body { name: name.to_owned(), colour: COPPER, extent, turns });
        }
    }
    bodies
}

/// The extent with its mirror image, where the two make one body.
fn whole(extent: Extent, mirrors: Mirrors, always: bool) -> Extent {
    match mirrors {
        Mirrors::One { z_m } if always || extent.z[0] - z_m <= 1e-6 * (extent.z[1] - z_m).abs() => {
            Extent { r: extent.r, z: [2.0 * z_m - extent.z[1], extent.z[1]] }
        }
        _ => extent,
    }
}

/// Turns of a coil in the full section; one that a mirror plane cuts counts once.
fn turn_count(sheet: &Sheet<'_>, coil: usize) -> usize {
    let mut lowest: std::collections::BTreeMap<usize, f64> = std::collections::BTreeMap::new();
    for element in 0..sheet.element_count() {
        if let RegionName::Turn(c, turn, _) = sheet.kind(element)
            && *c == coil
        {
            let low = sheet.places(element).iter().fold(f64::INFINITY, |m, p| m.min(p[1]));
            lowest.entry(*turn).and_modify(|z| *z = z.min(low)).or_insert(low);
        }
    }
    match sheet.mirrors {
        Mirrors::One { z_m } => lowest.values().map(|z| if z - z_m <= 1e-9 { 1 } else { 2 }).sum(),
        _ => lowest.len(),
    }
}

/// Dimensions across (diameters) and along (lengths), the shortest first, equal ones on one line.
fn dimensions(bodies: &[Body], window: &Window) -> (Vec<Dimension>, Vec<Dimension>) {
    let (mut across, mut along) = (Vec::new(), Vec::new());
    for Body { name, extent, .. } in bodies {
        let Extent { r, z } = *extent;
        if window.both_sides {
            for radius in if is_hollow(extent) { vec![r[0], r[1]] } else { vec![r[1]] } {
                let number = format!("\u{d8} {}", millimetres(2.0 * radius));
                add(&mut across, Dimension::new(true, [-radius, radius], z[1], &number, name));
            }
        } else {
            add(&mut across, Dimension::new(true, r, z[1], &millimetres(r[1] - r[0]), name));
        }
        add(&mut along, Dimension::new(false, z, r[1], &millimetres(z[1] - z[0]), name));
    }
    for list in [&mut across, &mut along] {
        list.sort_by(|a, b| (a.range[1] - a.range[0]).total_cmp(&(b.range[1] - b.range[0])));
        list.truncate(MOST_ROWS);
    }
    (across, along)
}

impl Dimension {
    fn new(radial: bool, range: [f64; 2], edge: f64, number: &str, name: &str) -> Self {
        Self { radial, range, edge, number: number.to_owned(), names: vec![name.to_owned()] }
    }

    fn text(&self) -> String {
        format!("{} {}", self.number, self.names.join(", "))
    }
}

/// Adds a dimension, or the names of its bodies to an equal one.
fn add(list: &mut Vec<Dimension>, new: Dimension) {
    let near = |a: f64, b: f64| (a - b).abs() <= 1e-7;
    match list.iter_mut().find(|d| near(d.range[0], new.range[0]) && near(d.range[1], new.range[1])) {
        Some(same) => {
            same.names.extend(new.names);
            same.edge = same.edge.max(new.edge);
        }
        None => list.push(new),
    }
}

/// True where a body does not reach the axis.
fn is_hollow(extent: &Extent) -> bool {
    extent.r[0] > 1e-9 + 1e-6 * extent.r[1]
}

/// A horizontal dimension line at height `y`, with extension lines down to the body.
fn draw_above(canvas: &mut Canvas, frame: &Frame, d: &Dimension, y: f64) -> Result<(), PictureError> {
    let end = |v: f64| frame.place(if d.radial { [v, d.edge] } else { [d.edge, v] });
    let (a, b) = (end(d.range[0]), end(d.range[1]));
    for p in [a, b] {
        canvas.line([p[0], p[1].min(frame.to[1]) - 3.0], [p[0], y - 6.0], 1.0, GREY_INK);
    }
    canvas.line([a[0], y], [b[0], y], 1.4, INK);
    arrow(canvas, [a[0], y], [1.0, 0.0]);
    arrow(canvas, [b[0], y], [-1.0, 0.0]);
    let text = canvas.shortened(&d.text(), TEXT, 500.0)?;
    let width = canvas.text_width(&text, TEXT)?;
    if width < b[0] - a[0] - 20.0 {
        return canvas.text(&text, [0.5 * (a[0] + b[0]), y - 8.0], lettering(TEXT, Align::Centre));
    }
    let right = b[0] + 14.0;
    if right + width < canvas.width() - 10.0 {
        canvas.text(&text, [right, y + 8.0], lettering(TEXT, Align::Left))
    } else {
        canvas.text(&text, [a[0] - 14.0, y + 8.0], lettering(TEXT, Align::Right))
    }
}

/// An upright dimension line at `x`, with extension lines back to the body.
fn draw_beside(canvas: &mut Canvas, frame: &Frame, d: &Dimension, x: f64) -> Result<(), PictureError> {
    let end = |v: f64| frame.place(if d.radial { [v, d.edge] } else { [d.edge, v] });
    let (a, b) = (end(d.range[0]), end(d.range[1]));
    for p in [a, b] {
        canvas.line([p[0] + 3.0, p[1]], [x + 6.0, p[1]], 1.0, GREY_INK);
    }
    canvas.line([x, a[1]], [x, b[1]], 1.4, INK);
    arrow(canvas, [x, a[1]], [0.0, -1.0]);
    arrow(canvas, [x, b[1]], [0.0, 1.0]);
    let (low, high) = (a[1].max(b[1]), a[1].min(b[1]));
    let text = canvas.shortened(&d.text(), TEXT, 500.0)?;
    let width = canvas.text_width(&text, TEXT)?;
    if width < low - high - 20.0 {
        return canvas.text_upwards(&text, [x - 8.0, 0.5 * (low + high)], lettering(TEXT, Align::Centre));
    }
    let above = high - 14.0 > width + HEADING;
    let (start, align) = if above { (high - 14.0, Align::Left) } else { (low + 14.0, Align::Right) };
    canvas.text_upwards(&text, [x + 8.0, start], lettering(TEXT, align))
}

/// An arrow head at `tip`, whose line runs on in `direction`.
fn arrow(canvas: &mut Canvas, tip: [f64; 2], direction: [f64; 2]) {
    for side in [-1.0, 1.0] {
        let end = [
            tip[0] + 13.0 * direction[0] + side * 4.0 * direction[1],
            tip[1] + 13.0 * direction[1] + side * 4.0 * direction[0],
        ];
        canvas.line(tip, end, 1.6, INK);
    }
}

/// The list of bodies with their sizes and places, below the map.
fn list(canvas: &mut Canvas, frame: &Frame, bodies: &[Body]) -> Result<(), PictureError> {
    let left = 60.0;
    let mut baseline = frame.to[1] + 125.0;
    for body in bodies.iter().take(MOST_ENTRIES) {
        canvas.fill([left, baseline - 20.0], [left + 34.0, baseline + 2.0], body.colour);
        canvas.frame([left, baseline - 20.0], [left + 34.0, baseline + 2.0], 1.2, OUTLINE);
        let (text, room) = (description(body), canvas.width() - left - 80.0);
        // A long line is set smaller before it is cut.
        let size = (TEXT * room / canvas.text_width(&text, TEXT)?).clamp(LEAST_TEXT, TEXT).floor();
        let text = canvas.shortened(&text, size, room)?;
        canvas.text(&text, [left + 50.0, baseline], lettering(size, Align::Left))?;
        baseline += ENTRY;
    }
    if bodies.len() > MOST_ENTRIES {
        let text = format!("and {} more", bodies.len() - MOST_ENTRIES);
        canvas.text(&text, [left + 50.0, baseline], lettering(TEXT, Align::Left))?;
    }
    Ok(())
}

fn description(body: &Body) -> String {
    let Extent { r, z } = body.extent;
    let turns = match body.turns {
        Some(1) => "1 turn, ".to_owned(),
        Some(n) => format!("{n} turns, "),
        None => String::new(),
    };
    let diameters = if is_hollow(&body.extent) {
        format!("\u{d8} {} inside, \u{d8} {} outside", millimetres(2.0 * r[0]), millimetres(2.0 * r[1]))
    } else {
        format!("\u{d8} {}", millimetres(2.0 * r[1]))
    };
    let length = millimetres(z[1] - z[0]);
    format!(
        "{}: {turns}{diameters}, length {length}, from z = {} to {}",
        body.name,
        millimetres(z[0]),
        millimetres(z[1])
    )
}
