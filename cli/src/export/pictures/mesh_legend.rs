//! The legend of the mesh picture: colours of bodies and strips, numbers of triangles, and a chart of their least angles.

use mesher::{ANGLE_CLASS_DEG, Mesh};
use solver::results::RegionName;

use super::canvas::{Align, Canvas, GREY_INK, INK, Lettering, lettering};
use super::image::Rgb;
use super::layer::{AIR, OUTLINE, kind_colour};
use super::sheet::Sheet;
use super::ticks::three_digits;
use super::{PictureError, grouped};

/// Size of the text and height of a line of the legend.
pub(super) const TEXT: f64 = 25.0;
pub(super) const ENTRY: f64 = 38.0;
/// Most bodies in the legend.
const MOST_ENTRIES: usize = 9;
/// Size of the chart of least angles.
pub(super) const CHART: [f64; 2] = [420.0, 150.0];
/// Height the chart takes with its labels.
pub(super) const CHART_ROOM: f64 = CHART[1] + 130.0;
const CHART_BAR: Rgb = [130, 140, 160];
/// Mixed into the colours of bodies where triangles are in strips.
const STRIP: Rgb = [176, 36, 110];
const STRIP_SHARE: f64 = 0.5;

/// The colour of a body where its triangles are in a strip.
pub(super) fn in_strip(colour: Rgb) -> Rgb {
    mixed(colour, STRIP, STRIP_SHARE)
}

/// A colour between two.
pub(super) fn mixed(from: Rgb, to: Rgb, share: f64) -> Rgb {
    [0, 1, 2].map(|k| (f64::from(from[k]) + share * (f64::from(to[k]) - f64::from(from[k]))).round() as u8)
}

/// A line of the legend: a swatch in two colours, or none, and a text.
pub(super) struct Row {
    swatch: Option<[Rgb; 2]>,
    text: String,
}

/// Colours of bodies and strips with their numbers of triangles, then the shape of triangles outside strips.
pub(super) fn legend_rows(sheet: &Sheet<'_>, mesh: &Mesh) -> Vec<Row> {
    let bodies = bodies(sheet, mesh);
    let more = bodies.len().saturating_sub(MOST_ENTRIES);
    let mut rows = Vec::new();
    for (name, colour, [all, strip]) in bodies.into_iter().take(MOST_ENTRIES) {
        let (second, strips) = if strip > 0 {
            (in_strip(colour), format!(", {} in strips", grouped(strip)))
        } else {
            (colour, String::new())
        };
        let noun = if all == 1 { "triangle" } else { "triangles" };
        rows.push(Row { swatch: Some([colour, second]), text: format!("{name}: {} {noun}{strips}", grouped(all)) });
    }
    let plain = |text: String| Row { swatch: None, text };
    if more > 0 {
        rows.push(plain(format!("and {more} more")));
    }
    let quality = mesh.quality();
    if quality.strip_triangles > 0 {
        rows.push(plain("second colour: strips of thin layers".into()));
    }
    let outside = if quality.strip_triangles > 0 { " outside strips" } else { "" };
    rows.push(plain(format!("least angle{outside} {:.1}\u{b0}", quality.min_angle_deg)));
    rows.push(plain(format!("mean of the least angles {:.1}\u{b0}", quality.mean_min_angle_deg)));
    let edges = [quality.shortest_edge_m, quality.longest_edge_m].map(|m| three_digits(1e3 * m));
    rows.push(plain(format!("edges from {} to {} mm", edges[0], edges[1])));
    rows
}

/// Draws the legend with its upper left corner at `at`.
pub(super) fn legend(canvas: &mut Canvas, rows: &[Row], at: [f64; 2]) -> Result<(), PictureError> {
    let mut baseline = at[1] + 24.0;
    for row in rows {
        let mut left = at[0];
        if let Some([first, second]) = row.swatch {
            canvas.fill([left, baseline - 20.0], [left + 22.0, baseline + 2.0], first);
            canvas.fill([left + 22.0, baseline - 20.0], [left + 44.0, baseline + 2.0], second);
            canvas.frame([left, baseline - 20.0], [left + 44.0, baseline + 2.0], 1.2, OUTLINE);
            left += 58.0;
        }
        let text = canvas.shortened(&row.text, TEXT, canvas.width() - left - 30.0)?;
        let colour = if row.swatch.is_some() { INK } else { GREY_INK };
        canvas.text(&text, [left, baseline], Lettering { size: TEXT, align: Align::Left, colour })?;
        baseline += ENTRY;
    }
    Ok(())
}

/// Draws the triangles outside strips by their least angle, as bars.
pub(super) fn angle_chart(canvas: &mut Canvas, mesh: &Mesh, at: [f64; 2]) -> Result<(), PictureError> {
    let quality = mesh.quality();
    let counts = quality.least_angle_counts;
    let outside = if quality.strip_triangles > 0 { " outside strips" } else { "" };
    let (bottom, width) = (at[1] + 44.0 + CHART[1], CHART[0] / counts.len() as f64);
    let most = counts.into_iter().max().unwrap_or(0).max(1);
    let style = Lettering { size: TEXT, align: Align::Left, colour: GREY_INK };
    canvas.text(&format!("triangles{outside} by least angle"), [at[0], at[1] + 24.0], style)?;
    for (class, &count) in counts.iter().enumerate() {
        let left = at[0] + width * class as f64;
        let high = CHART[1] * count as f64 / most as f64;
        canvas.fill([left + 1.0, bottom - high], [left + width - 1.0, bottom], CHART_BAR);
    }
    canvas.line([at[0], bottom], [at[0] + CHART[0], bottom], 1.5, INK);
    for tick in 0..=4 {
        let angle = 15.0 * f64::from(tick);
        let x = at[0] + angle / ANGLE_CLASS_DEG * width;
        canvas.line([x, bottom], [x, bottom + 8.0], 1.5, INK);
        canvas.text(&format!("{angle}\u{b0}"), [x, bottom + 36.0], lettering(TEXT, Align::Centre))?;
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
