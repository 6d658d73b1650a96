//! The mesh: every triangle over its body, strips of thin layers in a colour of their own, a close-up where they are thin, a
//! legend and scale bars. Only the meshed half plane is shown; lengths in millimetres.

use mesher::Mesh;
use solver::results::{RegionName, Section};

use super::canvas::{Align, Canvas, GREY_INK, INK, lettering};
use super::frame::{Frame, Margins, aspect, is_turned};
use super::heading::{HEADING, Heading};
use super::image::{Image, Rgb};
use super::layer::{AIR, OUTLINE, kind_colour, pixels, stroke_edges};
use super::raster::{View, misses, paint};
use super::sheet::{Extent, Sheet};
use super::ticks::{millimetres, round_step};
use super::window::Window;
use super::{PictureError, grouped};

/// Space round the bodies, as a fraction of their extent.
const MARGIN: f64 = 0.05;
/// A map this much wider than high has its legend below.
const FLAT: f64 = 1.5;
/// Side of the close-up.
const INSET: f64 = 460.0;
/// Space taken by close-up and legend beside a map, and below it.
const BESIDE: f64 = 660.0;
const BELOW: f64 = 110.0 + 60.0 + INSET + 20.0;
/// Size of the text and height of a line of the legend.
const TEXT: f64 = 25.0;
const ENTRY: f64 = 38.0;
/// Most bodies in the legend.
const MOST_ENTRIES: usize = 9;
const MESH_LINE: Rgb = [70, 76, 92];
/// Mixed into the colours of bodies where triangles are in strips.
const STRIP: Rgb = [176, 36, 110];
const STRIP_SHARE: f64 = 0.5;
/// Fine pixels between mesh lines from which on they are drawn in full; closer ones fade, or strips would be all line.
const FULL_LINE: f64 = 9.0;
const LEAST_LINE: f64 = 0.1;
/// A close-up is this many times as wide as the strip it shows is thick.
const CLOSE_UP_WIDTH: f64 = 5.0;

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
    let below = is_turned(&window) || aspect(&window) > FLAT;
    let margins = match (close_up, below) {
        (Some(_), _) => Margins { left: 140.0, right: BESIDE, top: HEADING, bottom: 110.0 },
        (None, true) => Margins { left: 140.0, right: 60.0, top: HEADING, bottom: BELOW },
        (None, false) => Margins { left: 140.0, right: BESIDE, top: HEADING, bottom: 110.0 },
    };
    let below = below && close_up.is_none();
    let frame = Frame::fit(window, margins);
    let mut canvas = Canvas::new(frame.size[0], frame.size[1])?;
    put_map(&mut canvas, &frame, sheet, mesh);
    frame.axes(&mut canvas)?;
    scale_bar(&mut canvas, &frame)?;
    let column = if below { [60.0, frame.to[1] + 150.0] } else { [frame.to[0] + 60.0, frame.from[1]] };
    let inset = if close_up.is_none() { strip_corner(sheet, mesh, &whole) } else { None };
    let mut legend_at = column;
    if let Some(inset) = inset {
        put_inset(&mut canvas, &frame, inset, column, (sheet, mesh))?;
        legend_at = if below { [column[0] + INSET + 60.0, column[1]] } else { [column[0], column[1] + INSET + 66.0] };
    }
    legend(&mut canvas, sheet, mesh, legend_at)?;
    Heading { title: "Mesh".into(), job: title.to_owned(), note: note(sheet, mesh) }.draw(&mut canvas)?;
    Ok(canvas)
}

fn note(sheet: &Sheet<'_>, mesh: &Mesh) -> String {
    let quality = mesh.quality();
    format!(
        "{} triangles of order {}, {} nodes \u{b7} outside strips least angle {:.1}\u{b0}, mean of the least {:.1}\u{b0} \
         \u{b7} edges {} to {} mm",
        grouped(sheet.element_count()),
        sheet.order,
        grouped(sheet.points.len()),
        quality.min_angle_deg,
        quality.mean_min_angle_deg,
        millimetres(quality.shortest_edge_m),
        millimetres(quality.longest_edge_m),
    )
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
    if strip { mixed(colour, STRIP, STRIP_SHARE) } else { colour }
}

fn mixed(from: Rgb, to: Rgb, share: f64) -> Rgb {
    [0, 1, 2].map(|k| (f64::from(from[k]) + share * (f64::from(to[k]) - f64::from(from[k]))).round() as u8)
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
    let width_m = (CLOSE_UP_WIDTH * thickness).min(body_size).min(largest);
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
    scale_bar(canvas, &frame)?;
    let [a, b] = [main.place([window.r[0], window.z[0]]), main.place([window.r[1], window.z[1]])];
    let middle = [0.5 * (a[0] + b[0]), 0.5 * (a[1] + b[1])];
    let half = (0.5 * (b[0] - a[0]).abs()).max(6.0);
    let (low, high) = (middle.map(|v| v - half), middle.map(|v| v + half));
    canvas.frame(low, high, 4.0, super::canvas::PAPER);
    canvas.frame(low, high, 2.0, INK);
    let from = if main.turned { [middle[0], high[1]] } else { [high[0], middle[1]] };
    let to = if main.turned {
        [frame.from[0] + 0.5 * INSET, frame.from[1]]
    } else {
        [frame.from[0], frame.from[1] + 0.5 * INSET]
    };
    canvas.polyline(&[from, to], 1.2, GREY_INK, &[12.0, 7.0]);
    let text =
        format!("close-up at r = {}, z = {} mm", millimetres(rounded(inset.r_m)), millimetres(rounded(inset.z_m)));
    canvas.text(&text, [frame.from[0], frame.to[1] + 34.0], lettering(TEXT, Align::Left))
}

/// Metres to hundredths of a millimetre.
fn rounded(metres: f64) -> f64 {
    (metres * 1e5).round() * 1e-5
}

/// A bar of a round length in the lower left corner of a map.
fn scale_bar(canvas: &mut Canvas, frame: &Frame) -> Result<(), PictureError> {
    let per_metre = frame.pixels_per_metre();
    let room = frame.to[0] - frame.from[0];
    let length = round_step(0.25 * room / per_metre, 1) * 0.5;
    if length <= 0.0 {
        return Ok(());
    }
    let text = format!("{} mm", millimetres(length));
    let width = (length * per_metre).max(canvas.text_width(&text, TEXT)?);
    let (left, bottom) = (frame.from[0] + 14.0, frame.to[1] - 14.0);
    canvas.fill([left, bottom - 52.0], [left + width + 24.0, bottom], super::canvas::PAPER);
    canvas.frame([left, bottom - 52.0], [left + width + 24.0, bottom], 1.0, GREY_INK);
    let (a, b) = (left + 12.0, left + 12.0 + length * per_metre);
    canvas.line([a, bottom - 12.0], [b, bottom - 12.0], 3.0, INK);
    for x in [a, b] {
        canvas.line([x, bottom - 19.0], [x, bottom - 5.0], 2.0, INK);
    }
    canvas.text(&text, [0.5 * (2.0 * left + 24.0 + width), bottom - 24.0], lettering(TEXT, Align::Centre))
}

/// Colours of bodies and strips with their numbers of triangles.
fn legend(canvas: &mut Canvas, sheet: &Sheet<'_>, mesh: &Mesh, at: [f64; 2]) -> Result<(), PictureError> {
    let room = canvas.width() - at[0] - 80.0;
    let mut baseline = at[1] + 24.0;
    let bodies = bodies(sheet, mesh);
    let more = bodies.len().saturating_sub(MOST_ENTRIES);
    for (name, colour, [all, strip]) in bodies.into_iter().take(MOST_ENTRIES) {
        let both = [[at[0], at[0] + 22.0], [at[0] + 22.0, at[0] + 44.0]];
        let strip_colour = if strip > 0 { mixed(colour, STRIP, STRIP_SHARE) } else { colour };
        for ([left, right], colour) in both.into_iter().zip([colour, strip_colour]) {
            canvas.fill([left, baseline - 20.0], [right, baseline + 2.0], colour);
        }
        canvas.frame([at[0], baseline - 20.0], [at[0] + 44.0, baseline + 2.0], 1.2, OUTLINE);
        let strips = if strip > 0 { format!(", {} in strips", grouped(strip)) } else { String::new() };
        let text = canvas.shortened(&format!("{name}: {}{strips}", grouped(all)), TEXT, room)?;
        canvas.text(&text, [at[0] + 58.0, baseline], lettering(TEXT, Align::Left))?;
        baseline += ENTRY;
    }
    if more > 0 {
        canvas.text(&format!("and {more} more"), [at[0] + 58.0, baseline], lettering(TEXT, Align::Left))?;
        baseline += ENTRY;
    }
    let any = mesh.strip_triangles().iter().any(|&s| s);
    let words: &[&str] = if any {
        &["numbers of triangles; darker:", "strips of thin layers along surfaces"]
    } else {
        &["numbers of triangles; no strips"]
    };
    for line in words {
        canvas.text(
            line,
            [at[0], baseline],
            super::canvas::Lettering { colour: GREY_INK, ..lettering(TEXT, Align::Left) },
        )?;
        baseline += 0.85 * ENTRY;
    }
    Ok(())
}

/// Parts, coils and the air: names, colours, numbers of triangles and of those in strips.
fn bodies(sheet: &Sheet<'_>, mesh: &Mesh) -> Vec<(String, Rgb, [usize; 2])> {
    let count = |of: &dyn Fn(&RegionName) -> bool| {
        let elements = sheet.elements_of(of);
        let strip = elements.iter().filter(|&&e| mesh.strip_triangles().get(e).copied().unwrap_or(false)).count();
        [elements.len(), strip]
    };
    let mut rows = Vec::new();
    for (index, name) in sheet.parts() {
        let counts = count(&|kind| matches!(kind, RegionName::Part(i, _) if *i == index));
        rows.push((name.to_owned(), kind_colour(&RegionName::Part(index, String::new())), counts));
    }
    for (index, name) in sheet.coils() {
        let counts = count(&|kind| matches!(kind, RegionName::Turn(i, _, _) if *i == index));
        rows.push((name.to_owned(), kind_colour(&RegionName::Turn(index, 0, String::new())), counts));
    }
    rows.push(("air".to_owned(), AIR, count(&|kind| matches!(kind, RegionName::Air))));
    rows
}
