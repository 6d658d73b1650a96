//! Maps of a quantity over the full section.

use colorous::Gradient;
use solver::results::RegionName;

use super::PictureError;
use super::canvas::Canvas;
use super::frame::{Frame, aspect, is_turned};
use super::heading::{Heading, colour_bar, map_margins};
use super::layer::{AIR, ElementValues, paint_values, stroke_outlines};
use super::scale::{Scale, Spread};
use super::shape;
use super::sheet::Sheet;
use super::ticks::{millimetres, three_digits};
use super::window::Window;

/// Space round the bodies of a map, as a fraction of their extent.
const MARGIN: f64 = 0.06;
/// A map this much wider than high has its colour bar below.
const FLAT: f64 = 2.2;

/// What a map shows.
#[derive(Debug, Clone)]
pub(super) struct MapOf {
    /// Name and unit, such as `Loss density in W/cm³`.
    pub(super) label: String,
    /// Unit alone.
    pub(super) unit: &'static str,
    pub(super) gradient: Gradient,
    pub(super) spread: Spread,
    pub(super) field: ElementValues,
    /// Parts whose values make the scale where all values would stretch it to more than twice theirs; none for all.
    pub(super) leading_parts: Vec<usize>,
    /// True where the note names the least value too.
    pub(super) least_matters: bool,
    /// What else to know, such as what grey means.
    pub(super) remark: &'static str,
}

/// Draws a map.
pub(super) fn draw(sheet: &Sheet<'_>, map: &MapOf, title: String, job: &str) -> Result<Canvas, PictureError> {
    let window = Window::round(sheet, MARGIN);
    let below = is_turned(&window) || aspect(&window) > FLAT;
    let frame = Frame::fit(window, map_margins(below));
    let scale = scale(sheet, map, &window);
    let mut half = frame.half_plane(AIR);
    let view = frame.view();
    paint_values(&mut half, &view, sheet, &map.field, &scale);
    stroke_outlines(&mut half, &view, sheet);
    let mut canvas = Canvas::new(frame.size[0], frame.size[1])?;
    frame.put(&half, &mut canvas);
    frame.centre_lines(&mut canvas);
    frame.axes(&mut canvas)?;
    colour_bar(&mut canvas, &frame, &scale, &map.label, below)?;
    Heading { title, job: job.to_owned(), note: note(sheet, map) }.draw(&mut canvas)?;
    Ok(canvas)
}

/// The scale of a map.
fn scale(sheet: &Sheet<'_>, map: &MapOf, window: &Window) -> Scale {
    let all = weighted(sheet, &map.field, window, |_| true);
    let whole = Scale::fit(map.gradient, map.spread, &all);
    let leads = |kind: &RegionName| matches!(kind, RegionName::Part(i, _) if map.leading_parts.contains(i));
    let leading = weighted(sheet, &map.field, window, leads);
    if leading.is_empty() {
        return whole;
    }
    let own = Scale::fit(map.gradient, map.spread, &leading);
    let span = |s: &Scale| s.range[1] - s.range[0];
    if span(&own) < 0.5 * span(&whole) { own.within(&all) } else { whole }
}

/// Values of the nodes of elements in the window, each with its share of the area of its element.
fn weighted(
    sheet: &Sheet<'_>,
    field: &ElementValues,
    window: &Window,
    of: impl Fn(&RegionName) -> bool,
) -> Vec<(f64, f64)> {
    let mut pairs = Vec::new();
    let stride = shape::node_count(sheet.order) as f64;
    for element in (0..sheet.element_count()).filter(|&e| field.shown[e] && of(sheet.kind(e))) {
        let places = sheet.places(element);
        let inside =
            |p: &[f64; 2]| p[0] <= window.r[1] && p[0] >= window.r[0] && p[1] <= window.z[1] && p[1] >= window.z[0];
        if !places.iter().any(inside) {
            continue;
        }
        let [a, b, c] = [places[0], places[1], places[2]];
        let area = 0.5 * ((b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0])).abs();
        pairs.extend(field.of(sheet, element).iter().map(|&v| (v, area / stride)));
    }
    pairs
}

/// Extreme values with their places, and the remark.
fn note(sheet: &Sheet<'_>, map: &MapOf) -> String {
    let mut sentences = Vec::new();
    if map.least_matters {
        let leads = |kind: &RegionName| matches!(kind, RegionName::Part(i, _) if map.leading_parts.contains(i));
        let among = |kind: &RegionName| map.leading_parts.is_empty() || leads(kind);
        sentences.extend(extreme(sheet, map, "least", among, |a, b| a < b));
    }
    sentences.extend(extreme(sheet, map, "greatest", |_| true, |a, b| a > b));
    if sentences.is_empty() {
        sentences.push("no values".to_owned());
    }
    if !map.remark.is_empty() {
        sentences.push(map.remark.to_owned());
    }
    sentences.join(" \u{b7} ")
}

fn extreme(
    sheet: &Sheet<'_>,
    map: &MapOf,
    word: &str,
    among: impl Fn(&RegionName) -> bool,
    beats: impl Fn(f64, f64) -> bool,
) -> Option<String> {
    let mut best: Option<(f64, usize, usize)> = None;
    for element in (0..sheet.element_count()).filter(|&e| map.field.shown[e] && among(sheet.kind(e))) {
        for (i, &value) in map.field.of(sheet, element).iter().enumerate() {
            if value.is_finite() && best.is_none_or(|b| beats(value, b.0)) {
                best = Some((value, element, i));
            }
        }
    }
    let (value, element, i) = best?;
    let place = sheet.places(element)[i];
    let at = place.map(|v| millimetres((v * 1e4).round() * 1e-4));
    let body = match sheet.kind(element) {
        RegionName::Air => String::new(),
        RegionName::Part(_, name) => format!(" in {name}"),
        RegionName::Turn(_, turn, coil) => format!(" in {coil}, turn {}", turn + 1),
    };
    Some(format!("{word} {} {}{body} at r = {}, z = {} mm", three_digits(value), map.unit, at[0], at[1]))
}
