//! Painting of the half plane before it is mirrored: elements by their values or their kinds, outlines, mesh lines.

use solver::results::RegionName;

use super::image::{Image, Rgb};
use super::raster::{View, misses, paint};
use super::scale::Scale;
use super::shape;
use super::sheet::{Sheet, SheetEdge};

/// Air.
pub(super) const AIR: Rgb = [255; 3];
/// Bodies for which the quantity of a map is not defined.
pub(super) const BLANK: Rgb = [214, 214, 216];
/// Conductors of coils where they are told apart from parts.
pub(super) const COPPER: Rgb = [224, 158, 110];
/// Outlines.
pub(super) const OUTLINE: Rgb = [35, 35, 42];
/// Light colours of parts, in job order; told apart in grey print by their lightness.
const PARTS: [Rgb; 6] =
    [[198, 214, 232], [242, 229, 196], [205, 226, 201], [226, 207, 226], [205, 228, 228], [232, 210, 204]];

/// Colour that tells kinds apart.
pub(super) fn kind_colour(kind: &RegionName) -> Rgb {
    match kind {
        RegionName::Air => AIR,
        RegionName::Part(index, _) => PARTS[index % PARTS.len()],
        RegionName::Turn(..) => COPPER,
    }
}

/// Values on the elements of a sheet.
#[derive(Debug, Clone)]
pub(super) struct ElementValues {
    /// One an element and local node.
    pub(super) values: Vec<f64>,
    /// One an element: true where the values mean something.
    pub(super) shown: Vec<bool>,
}

impl ElementValues {
    /// Values of the nodes of an element.
    pub(super) fn of(&self, sheet: &Sheet<'_>, element: usize) -> &[f64] {
        let stride = shape::node_count(sheet.order);
        &self.values[element * stride..(element + 1) * stride]
    }
}

/// Paints every element in the colour of its kind.
pub(super) fn paint_kinds(image: &mut Image, view: &View, sheet: &Sheet<'_>) {
    for element in 0..sheet.element_count() {
        let colour = kind_colour(sheet.kind(element));
        paint(image, sheet.order, &pixels(view, sheet, element), |_| Some(colour));
    }
}

/// Paints every element with its values, or blank where it has none.
pub(super) fn paint_values(image: &mut Image, view: &View, sheet: &Sheet<'_>, field: &ElementValues, scale: &Scale) {
    for element in 0..sheet.element_count() {
        let blank = if matches!(sheet.kind(element), RegionName::Air) { AIR } else { BLANK };
        let places = pixels(view, sheet, element);
        if field.shown[element] {
            let nodal = field.of(sheet, element);
            paint(image, sheet.order, &places, |l| {
                Some(scale.colour(shape::interpolate(sheet.order, l, nodal)).unwrap_or(blank))
            });
        } else {
            paint(image, sheet.order, &places, |_| Some(blank));
        }
    }
}

/// Draws edges as strokes of `width` fine pixels.
pub(super) fn stroke_edges(
    image: &mut Image,
    view: &View,
    sheet: &Sheet<'_>,
    edges: &[SheetEdge],
    width: f64,
    colour: Rgb,
) {
    for edge in edges {
        let trace: Vec<[f64; 2]> = sheet.trace(edge).into_iter().map(|p| view.pixel(p)).collect();
        if misses(image, &trace) {
            continue;
        }
        for pair in trace.windows(2) {
            image.stroke(pair[0], pair[1], width, colour);
        }
    }
}

/// Outlines of all bodies in a thin dark line.
pub(super) fn stroke_outlines(image: &mut Image, view: &View, sheet: &Sheet<'_>) {
    let edges = sheet.outlines(|kind| !matches!(kind, RegionName::Air));
    stroke_edges(image, view, sheet, &edges, 3.0, OUTLINE);
}

/// Nodes of an element in fine pixels.
pub(super) fn pixels(view: &View, sheet: &Sheet<'_>, element: usize) -> Vec<[f64; 2]> {
    sheet.places(element).into_iter().map(|p| view.pixel(p)).collect()
}
