//! The mesh: every triangle over its body, strips of thin layers in a colour of their own, a close-up where they are thin, a
//! legend and scale bars. Only the meshed half plane is shown; lengths in millimetres.

use mesher::Mesh;
use solver::results::{RegionName, Section};

use super::canvas::{Align, Canvas, INK, PAPER, lettering};
use super::frame::{Frame, Margins, aspect};
use super::heading::{HEADING, Heading};
use super::image::{Image, Rgb};
use super::layer::{AIR, OUTLINE, kind_colour, pixels, stroke_edges};
use super::mesh_legend::{CHART, CHART_ROOM, ENTRY, TEXT, angle_chart, in_strip, legend, legend_rows, mixed};
use super::raster::{View, misses, paint};
use super::sheet::{Extent, Sheet};
use super::ticks::{millimetres, round_step, three_digits};
use super::window::Window;
use super::{PictureError, grouped};

/// Space round the bodies, as a fraction of their extent.
const MARGIN: f64 = 0.05;
/// A map this much wider than high has its legend below.
const FLAT: f64 = 2.4;
/// Side of the close-up.
const INSET: f64 = 410.0;
/// Space taken beside a map, and below it past the labels of its axis.
const BESIDE: f64 = 660.0;
const LABELS: f64 = 110.0;
/// Height of the close-up with its caption.
const UNDER_INSET: f64 = INSET + 76.0;
/// Width of the legend below a map.
const LEGEND_WIDTH: f64 = 520.0;
const MESH_LINE: Rgb = [70, 76, 92];
/// Fine pixels between mesh lines from which on they are drawn in full; closer ones fade, or strips would be all line.
const FULL_LINE: f64 = 9.0;
const LEAST_LINE: f64 = 0.1;
/// A close-up is at most this many times as wide as the strip it shows is thick, and as its thinnest triangle is high.
const STRIP_WIDTHS: f64 = 5.0;
const TRIANGLE_WIDTHS: f64 = 30.0;
/// Name of the close-up.
const TAG: &str = "A";

/// A square of the section, metres.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CloseUp {
    /// Radius of its middle.
    pub r_m: f64,
    /// Height of its middle.
    pub z_m: f64,
    /// Its side.
    pub width_m: f64,
}

impl CloseUp {
    fn window(&self) -> Window {
        let half = 0.5 * self.width_m;
        Window {
            r: [self.r_m - half, self.r_m + half],
            z: [self.z_m - half, self.z_m + half],
            both_sides: false,
            both_halves: false,
        }
    }
}

/// Draws the mesh: all bodies with a close-up of a strip, or the square that is asked for.
pub(super) fn draw(
    section: &Section,
    sheet: &Sheet<'_>,
    close_up: Option<CloseUp>,
    title: &str,
) -> Result<Canvas, PictureError> {
    let mesh = &section.mesh;
    let whole = Window { both_sides: false, both_halves: false, ..Window::round(sheet, MARGIN) };
    let window = close_up.map_or(whole, |c| c.window());
    let inset = if close_up.is_none() { strip_corner(sheet, mesh, &whole) } else { None };
    let rows = legend_rows(sheet, mesh);
    let below = aspect(&window) > FLAT;
    let high = if inset.is_some() { INSET + 50.0 } else { CHART_ROOM }.max(ENTRY * rows.len() as f64);
    let margins = if below {
        Margins { left: 140.0, right: 60.0, top: HEADING, bottom: LABELS + 40.0 + high + 30.0 }
    } else {
        Margins { left: 140.0, right: BESIDE, top: HEADING, bottom: LABELS }
    };
    let frame = Frame::fit(window, margins);
    let column = if below { [60.0, frame.to[1] + LABELS + 40.0] } else { [frame.to[0] + 60.0, frame.from[1]] };
    let right_of_inset = if inset.is_some() { INSET + 60.0 } else { 0.0 };
    let beside = if inset.is_some() { UNDER_INSET } else { 0.0 } + ENTRY * rows.len() as f64 + CHART_ROOM;
    let chart_left = column[0] + right_of_inset + LEGEND_WIDTH;
    let size = if below {
        [frame.size[0].max((chart_left + CHART[0]) as usize + 50), frame.size[1]]
    } else {
        [frame.size[0], frame.size[1].max((column[1] + beside) as usize)]
    };
    let mut canvas = Canvas::new(size[0], size[1])?;
    put_map(&mut canvas, &frame, sheet, mesh);
    frame.axes(&mut canvas)?;
    scale_bar(&mut canvas, &frame, frame.to[1] + 76.0)?;
    if let Some(inset) = inset {
        put_inset(&mut canvas, &frame, inset, column, (sheet, mesh))?;
    }
    let legend_at = match (&inset, below) {
        (None, _) => column,
        (Some(_), true) => [column[0] + right_of_inset, column[1]],
        (Some(_), false) => [column[0], column[1] + UNDER_INSET],
    };
    legend(&mut canvas, &rows, legend_at)?;
    let chart_at =
        if below { [chart_left, column[1]] } else { [legend_at[0], legend_at[1] + ENTRY * rows.len() as f64 + 20.0] };
    angle_chart(&mut canvas, mesh, chart_at)?;
    let note = format!(
        "{} triangles of order {}, {} nodes",
        grouped(sheet.element_count()),
        sheet.order,
        grouped(sheet.points.len())
    );
    Heading { title: "Mesh".into(), job: title.to_owned(), note }.draw(&mut canvas)?;
    Ok(canvas)
}

fn put_map(canvas: &mut Canvas, frame: &Frame, sheet: &Sheet<'_>, mesh: &Mesh) {
    let mut half = frame.half_plane(AIR);
    let view = frame.view();
    let colours: Vec<Rgb> = (0..sheet.element_count()).map(|e| fill(sheet, mesh, e)).collect();
    for (element, &colour) in colours.iter().enumerate() {
        paint(&mut half, sheet.order, &pixels(&view, sheet, element), |_| Some(colour));
    }
    stroke_mesh(&mut half, &view, sheet, &colours);
    let outlines = sheet.outlines(|kind| !matches!(kind, RegionName::Air));
    stroke_edges(&mut half, &view, sheet, &outlines, 3.0, OUTLINE);
    frame.put(&half, canvas);
}

/// Colour of a triangle: that of its body, with that of strips mixed in where it is in one.
fn fill(sheet: &Sheet<'_>, mesh: &Mesh, element: usize) -> Rgb {
    let colour = kind_colour(sheet.kind(element));
    let strip = mesh.strip_triangles().get(element).copied().unwrap_or(false);
    if strip { in_strip(colour) } else { colour }
}

/// Draws all mesh lines, fainter where they are closer than can be told apart.
fn stroke_mesh(image: &mut Image, view: &View, sheet: &Sheet<'_>, colours: &[Rgb]) {
    for edge in sheet.edges() {
        let trace: Vec<[f64; 2]> = sheet.trace(&edge).into_iter().map(|p| view.pixel(p)).collect();
        if misses(image, &trace) {
            continue;
        }
        let beside = [Some(edge.first), edge.second];
        let spacing =
            beside.iter().flatten().map(|&e| least_height(sheet, e) * view.scale).fold(f64::INFINITY, f64::min);
        let colour = mixed(colours[edge.first], MESH_LINE, (spacing / FULL_LINE).clamp(LEAST_LINE, 1.0));
        for pair in trace.windows(2) {
            image.stroke(pair[0], pair[1], 1.4, colour);
        }
    }
}

/// Least height of a triangle, metres.
fn least_height(sheet: &Sheet<'_>, element: usize) -> f64 {
    let [a, b, c] = corners(sheet, element);
    let length = |p: [f64; 2], q: [f64; 2]| (q[0] - p[0]).hypot(q[1] - p[1]);
    2.0 * area([a, b, c]) / length(a, b).max(length(b, c)).max(length(c, a))
}

fn corners(sheet: &Sheet<'_>, element: usize) -> [[f64; 2]; 3] {
    let places = sheet.places(element);
    [places[0], places[1], places[2]]
}

fn area([a, b, c]: [[f64; 2]; 3]) -> f64 {
    0.5 * ((b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0])).abs()
}

/// The outer upper corner of the first body with a strip, a few times as wide as the strip is thick.
fn strip_corner(sheet: &Sheet<'_>, mesh: &Mesh, window: &Window) -> Option<CloseUp> {
    let in_strip = |e: usize| mesh.strip_triangles().get(e).copied().unwrap_or(false);
    let parts = sheet
        .parts()
        .into_iter()
        .map(|(index, _)| sheet.elements_of(|kind| matches!(kind, RegionName::Part(i, _) if *i == index)));
    let turns = sheet.elements_of(|kind| matches!(kind, RegionName::Turn(_, 0, _)));
    let body = parts.chain([turns]).find(|body| body.iter().any(|&e| in_strip(e)))?;
    let strip: Vec<usize> = body.into_iter().filter(|&e| in_strip(e)).collect();
    let places = strip.iter().flat_map(|&e| corners(sheet, e));
    let corner = places.filter(|p| p[1] <= window.z[1]).max_by(|p, q| (p[0] + p[1]).total_cmp(&(q[0] + q[1])))?;
    let thickness = strip_thickness(sheet, mesh, &strip);
    let extent = Extent::of(strip.iter().flat_map(|&e| corners(sheet, e)))?;
    let largest = 0.5 * (window.r[1] - window.r[0]).min(window.z[1] - window.z[0]);
    let body_size = (extent.r[1] - extent.r[0]).max(extent.z[1] - extent.z[0]);
    let least = strip.iter().map(|&e| least_height(sheet, e)).fold(f64::INFINITY, f64::min);
    let width_m = (STRIP_WIDTHS * thickness).min(TRIANGLE_WIDTHS * least).min(body_size).min(largest);
    (width_m > 0.0).then_some(CloseUp { r_m: corner[0] - 0.3 * width_m, z_m: corner[1] - 0.3 * width_m, width_m })
}

/// Area of a strip over the length of the surface it lies on.
fn strip_thickness(sheet: &Sheet<'_>, mesh: &Mesh, strip: &[usize]) -> f64 {
    let mut surface = 0.0;
    for &element in strip {
        for local in 0..3 {
            let same = |other: usize| sheet.kind(other) == sheet.kind(element);
            if mesh.neighbour(element, local).is_some_and(|other| !same(other)) {
                surface += mesh.edge_length(mesh.triangle_edges()[element][local] as usize);
            }
        }
    }
    let total: f64 = strip.iter().map(|&e| area(corners(sheet, e))).sum();
    if surface > 0.0 { total / surface } else { total.sqrt() }
}

/// Draws the close-up at `at` and its rim in the map.
fn put_inset(
    canvas: &mut Canvas,
    main: &Frame,
    inset: CloseUp,
    at: [f64; 2],
    (sheet, mesh): (&Sheet<'_>, &Mesh),
) -> Result<(), PictureError> {
    let window = inset.window();
    let frame = Frame::inside(window, main.turned, at, INSET);
    put_map(canvas, &frame, sheet, mesh);
    canvas.frame(frame.from, frame.to, 2.0, INK);
    scale_bar(canvas, &frame, frame.to[1] + 27.0)?;
    let caption = format!("{TAG}: {} mm wide", three_digits(1e3 * inset.width_m));
    canvas.text(&caption, [frame.from[0], frame.to[1] + 36.0], lettering(TEXT, Align::Left))?;
    let [a, b] = [main.place([window.r[0], window.z[0]]), main.place([window.r[1], window.z[1]])];
    let middle = [0.5 * (a[0] + b[0]), 0.5 * (a[1] + b[1])];
    let half = (0.5 * (b[0] - a[0]).abs()).max(6.0);
    let (low, high) = (middle.map(|v| v - half), middle.map(|v| v + half));
    canvas.frame(low, high, 5.0, PAPER);
    canvas.frame(low, high, 2.2, INK);
    let tag = [high[0] + 8.0, low[1] - 30.0];
    canvas.fill(tag, [tag[0] + 28.0, tag[1] + 30.0], PAPER);
    canvas.frame(tag, [tag[0] + 28.0, tag[1] + 30.0], 1.5, INK);
    canvas.text(TAG, [tag[0] + 14.0, tag[1] + 24.0], lettering(TEXT, Align::Centre))
}

/// A bar of a round length, right-aligned with a map, at height `y` below it.
fn scale_bar(canvas: &mut Canvas, frame: &Frame, y: f64) -> Result<(), PictureError> {
    let per_metre = frame.pixels_per_metre();
    let length = 0.5 * round_step(0.25 * (frame.to[0] - frame.from[0]) / per_metre, 1);
    if length <= 0.0 {
        return Ok(());
    }
    let (left, right) = (frame.to[0] - length * per_metre, frame.to[0]);
    canvas.line([left, y], [right, y], 3.0, INK);
    for x in [left, right] {
        canvas.line([x, y - 8.0], [x, y + 8.0], 2.0, INK);
    }
    canvas.text(&format!("{} mm", millimetres(length)), [left - 12.0, y + 9.0], lettering(TEXT, Align::Right))
}
