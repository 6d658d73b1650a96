//! Line charts: panels with round ticks and units, line styles told apart in grey print, a legend beside the panels.
//! Convention: picture coordinates as in `canvas`; a point that is not a number breaks its line.

use super::PictureError;
use super::canvas::{Align, Canvas, FAINT, GREY_INK, INK, Lettering, PAPER, lettering};
use super::image::Rgb;
use super::ticks::{labels, round_range, ticks};

const TICK_SIZE: f64 = 24.0;
const LABEL_SIZE: f64 = 26.0;
/// Distance of lines of the legend.
const LEGEND_ROW: f64 = 38.0;
/// Colours of lines: the palette of Okabe and Ito (Color Universal Design, 2008), which colour-blind readers tell apart.
const COLOURS: [Rgb; 7] =
    [[0, 114, 178], [213, 94, 0], [0, 140, 104], [176, 84, 142], [30, 30, 34], [200, 130, 0], [66, 150, 205]];
/// Drawn and blank lengths of lines in pixels.
const DASHES: [&[f64]; 6] =
    [&[], &[16.0, 8.0], &[4.0, 7.0], &[20.0, 7.0, 4.0, 7.0], &[28.0, 9.0], &[12.0, 6.0, 3.0, 6.0, 3.0, 6.0]];

/// How a line is drawn.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Style {
    pub(super) colour: Rgb,
    pub(super) dashes: &'static [f64],
    pub(super) width: f64,
}

/// The style of the line with this number: neighbours differ in colour and in dashes.
pub(super) fn style(number: usize) -> Style {
    Style { colour: COLOURS[number % COLOURS.len()], dashes: DASHES[number % DASHES.len()], width: 3.0 }
}

/// A lighter colour for the band of a line.
pub(super) fn pale(colour: Rgb) -> Rgb {
    colour.map(|v| (f64::from(v) + 0.78 * (255.0 - f64::from(v))).round() as u8)
}

/// A line.
#[derive(Debug, Clone)]
pub(super) struct Series {
    /// Entry in the legend; none where it is named elsewhere.
    pub(super) name: Option<String>,
    pub(super) points: Vec<[f64; 2]>,
    pub(super) style: Style,
}

/// The space between two values over time: `[x, low, high]`.
#[derive(Debug, Clone)]
pub(super) struct Band {
    pub(super) name: String,
    pub(super) rows: Vec<[f64; 3]>,
    pub(super) colour: Rgb,
}

/// A moment marked by an upright line.
#[derive(Debug, Clone)]
pub(super) struct Mark {
    pub(super) x: f64,
    pub(super) name: String,
}

/// One system of axes.
#[derive(Debug, Clone, Default)]
pub(super) struct Panel {
    pub(super) x_label: String,
    pub(super) y_label: String,
    pub(super) series: Vec<Series>,
    pub(super) bands: Vec<Band>,
    /// True where the scale starts at zero.
    pub(super) from_zero: bool,
    pub(super) marks: Vec<Mark>,
}

/// Where the axes of a panel stand: corners in pixels.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Place {
    pub(super) from: [f64; 2],
    pub(super) to: [f64; 2],
}

impl Panel {
    /// Range over x of everything in the panel, without rounding.
    fn x_range(&self) -> [f64; 2] {
        let lines = self.series.iter().flat_map(|s| s.points.iter()).filter(|p| p[1].is_finite()).map(|p| p[0]);
        span(lines.chain(self.bands.iter().flat_map(|b| b.rows.iter().map(|r| r[0]))))
    }

    fn y_range(&self, count: usize) -> [f64; 2] {
        let lines = self.series.iter().flat_map(|s| s.points.iter().map(|p| p[1]));
        let bands = self.bands.iter().flat_map(|b| b.rows.iter().flat_map(|r| [r[1], r[2]]));
        let zero = self.from_zero.then_some(0.0);
        let [low, high] = span(lines.chain(bands).chain(zero));
        let (low, high) = if self.from_zero && low == 0.0 && high == 0.0 { (0.0, 1.0) } else { (low, high) };
        // Room above, so that a line does not run along the frame.
        round_range(low, high + 0.02 * (high - low), count).into()
    }

    /// Draws the panel; axes of a panel without values run from 0 to 1. True where the marks bear numbers that the legend
    /// must explain.
    pub(super) fn draw(&self, canvas: &mut Canvas, place: Place) -> Result<bool, PictureError> {
        let Place { from, to } = place;
        let x_count = ((to[0] - from[0]) / 110.0).clamp(2.0, 12.0) as usize;
        let y_count = ((to[1] - from[1]) / 50.0).clamp(2.0, 10.0) as usize;
        let x = self.x_range();
        let x = if x[1] - x[0] > 0.0 { x } else { round_range(x[0], x[1], x_count).into() };
        let y = self.y_range(y_count);
        let at = |p: [f64; 2]| {
            [
                from[0] + (p[0] - x[0]) / (x[1] - x[0]) * (to[0] - from[0]),
                to[1] - (p[1] - y[0]) / (y[1] - y[0]) * (to[1] - from[1]),
            ]
        };
        self.grid(canvas, place, [x, y], [x_count, y_count])?;
        for band in &self.bands {
            draw_band(canvas, band, at)?;
        }
        draw_grid(canvas, place, [x, y], [x_count, y_count], at);
        for mark in &self.marks {
            let px = at([mark.x, y[0]])[0];
            canvas.polyline(&[[px, from[1]], [px, to[1]]], 1.5, GREY_INK, &[6.0, 6.0]);
        }
        for series in &self.series {
            for run in series.points.split(|p| !(p[0].is_finite() && p[1].is_finite())) {
                let line: Vec<[f64; 2]> = run.iter().map(|&p| at(p)).collect();
                canvas.polyline(&line, series.style.width, series.style.colour, series.style.dashes);
            }
        }
        canvas.frame(from, to, 1.5, INK);
        let marks: Vec<(f64, &str)> = self.marks.iter().map(|m| (at([m.x, y[0]])[0], m.name.as_str())).collect();
        name_marks(canvas, place, &marks)
    }

    /// Tick labels and names of the axes.
    fn grid(
        &self,
        canvas: &mut Canvas,
        place: Place,
        ranges: [[f64; 2]; 2],
        counts: [usize; 2],
    ) -> Result<(), PictureError> {
        let Place { from, to } = place;
        let fraction = |v: f64, r: [f64; 2]| (v - r[0]) / (r[1] - r[0]);
        let values = ticks(ranges[0][0], ranges[0][1], counts[0]);
        for (value, label) in values.iter().zip(labels(&values)) {
            let px = from[0] + fraction(*value, ranges[0]) * (to[0] - from[0]);
            canvas.line([px, to[1]], [px, to[1] + 8.0], 1.5, INK);
            canvas.text(&label, [px, to[1] + 34.0], lettering(TICK_SIZE, Align::Centre))?;
        }
        let values = ticks(ranges[1][0], ranges[1][1], counts[1]);
        for (value, label) in values.iter().zip(labels(&values)) {
            let py = to[1] - fraction(*value, ranges[1]) * (to[1] - from[1]);
            canvas.line([from[0] - 8.0, py], [from[0], py], 1.5, INK);
            canvas.text(&label, [from[0] - 15.0, py + 0.31 * TICK_SIZE], lettering(TICK_SIZE, Align::Right))?;
        }
        canvas.text(&self.x_label, [0.5 * (from[0] + to[0]), to[1] + 72.0], lettering(LABEL_SIZE, Align::Centre))?;
        let middle = 0.5 * (from[1] + to[1]);
        canvas.text_upwards(&self.y_label, [from[0] - 105.0, middle], lettering(LABEL_SIZE, Align::Centre))
    }

    /// Draws the legend of lines and bands, and of marks where they are numbered, from `at` downwards.
    pub(super) fn legend(
        &self,
        canvas: &mut Canvas,
        at: [f64; 2],
        size: [f64; 2],
        numbered: bool,
    ) -> Result<(), PictureError> {
        let lines =
            self.series.iter().filter_map(|s| s.name.as_ref().map(|name| (Sample::Line(s.style), name.clone())));
        let bands = self.bands.iter().map(|b| (Sample::Band(b.colour), b.name.clone()));
        let marks = self.marks.iter().enumerate().filter(|_| numbered);
        let marks = marks.map(|(i, m)| (Sample::Number(i + 1), m.name.clone()));
        let entries: Vec<(Sample, String)> = lines.chain(bands).chain(marks).collect();
        let room = (size[1] / LEGEND_ROW).max(1.0) as usize;
        let shown = if entries.len() > room { room - 1 } else { entries.len() };
        let mut middle = at[1] + 0.5 * LEGEND_ROW;
        for (sample, name) in &entries[..shown] {
            sample.draw(canvas, [at[0], middle])?;
            entry(canvas, name, [at[0] + 78.0, middle + 8.0], size[0] - 78.0)?;
            middle += LEGEND_ROW;
        }
        if entries.len() > shown {
            let text = format!("and {} more", entries.len() - shown);
            entry(canvas, &text, [at[0] + 78.0, middle + 8.0], size[0] - 78.0)?;
        }
        Ok(())
    }
}

/// What stands before a name in a legend.
enum Sample {
    Line(Style),
    Band(Rgb),
    Number(usize),
}

impl Sample {
    fn draw(&self, canvas: &mut Canvas, at: [f64; 2]) -> Result<(), PictureError> {
        match self {
            Self::Line(style) => {
                canvas.polyline(&[at, [at[0] + 64.0, at[1]]], style.width, style.colour, style.dashes);
            }
            Self::Band(colour) => canvas.fill([at[0], at[1] - 11.0], [at[0] + 64.0, at[1] + 11.0], *colour),
            Self::Number(number) => {
                let style = Lettering { size: TICK_SIZE, align: Align::Right, colour: GREY_INK };
                canvas.text(&number.to_string(), [at[0] + 64.0, at[1] + 8.0], style)?;
            }
        }
        Ok(())
    }
}

fn entry(canvas: &mut Canvas, text: &str, at: [f64; 2], width: f64) -> Result<(), PictureError> {
    let fitting = canvas.shortened(text, TICK_SIZE, width)?;
    canvas.text(&fitting, at, lettering(TICK_SIZE, Align::Left))
}

/// Least and greatest of the finite values; `[0, 1]` without any.
fn span(values: impl Iterator<Item = f64>) -> [f64; 2] {
    let found = values
        .filter(|v| v.is_finite())
        .fold(None, |range: Option<[f64; 2]>, v| Some(range.map_or([v, v], |[low, high]| [low.min(v), high.max(v)])));
    found.unwrap_or([0.0, 1.0])
}

fn draw_grid(
    canvas: &mut Canvas,
    place: Place,
    ranges: [[f64; 2]; 2],
    counts: [usize; 2],
    at: impl Fn([f64; 2]) -> [f64; 2],
) {
    for value in ticks(ranges[0][0], ranges[0][1], counts[0]) {
        let x = at([value, ranges[1][0]])[0];
        canvas.line([x, place.from[1]], [x, place.to[1]], 1.0, FAINT);
    }
    for value in ticks(ranges[1][0], ranges[1][1], counts[1]) {
        let y = at([ranges[0][0], value])[1];
        canvas.line([place.from[0], y], [place.to[0], y], 1.0, FAINT);
    }
}

fn draw_band(canvas: &mut Canvas, band: &Band, at: impl Fn([f64; 2]) -> [f64; 2]) -> Result<(), PictureError> {
    for run in band.rows.split(|r| r.iter().any(|v| !v.is_finite())) {
        if run.len() >= 2 {
            let lower: Vec<[f64; 2]> = run.iter().map(|r| at([r[0], r[1]])).collect();
            let upper: Vec<[f64; 2]> = run.iter().map(|r| at([r[0], r[2]])).collect();
            canvas.band(&lower, &upper, band.colour)?;
        }
    }
    Ok(())
}

/// A name of a mark in its place: the mark's abscissa, left end, width and row.
struct MarkName {
    x: f64,
    left: f64,
    width: f64,
    row: usize,
    text: String,
}

/// Names of marks above the panel, in rows where they stand clear of each other; true where they found room only as
/// numbers, to be explained in the legend. Numbers without room are left out.
fn name_marks(canvas: &mut Canvas, place: Place, marks: &[(f64, &str)]) -> Result<bool, PictureError> {
    let full: Vec<(f64, String)> = marks.iter().map(|&(x, name)| (x, name.to_owned())).collect();
    let mut names = arrange(canvas, place, &full)?;
    let numbered = names.iter().any(|n| n.row >= MARK_ROWS);
    if numbered {
        let numbers: Vec<(f64, String)> = marks.iter().enumerate().map(|(i, m)| (m.0, (i + 1).to_string())).collect();
        names = arrange(canvas, place, &numbers)?;
        names.retain(|n| n.row < MARK_ROWS);
    }
    // Leaders first, from the farthest row down, so that a nearer name covers the leader behind it.
    names.sort_by_key(|n| std::cmp::Reverse(n.row));
    for MarkName { x, left, width, row, text } in names {
        let baseline = place.from[1] - 12.0 - MARK_ROW * row as f64;
        canvas.polyline(&[[x, place.from[1]], [x, baseline + 6.0]], 1.2, GREY_INK, &[]);
        canvas.fill([left - 4.0, baseline - 19.0], [left + width + 4.0, baseline + 6.0], PAPER);
        canvas.text(&text, [left, baseline], Lettering { size: MARK_SIZE, align: Align::Left, colour: GREY_INK })?;
    }
    Ok(numbered)
}

/// Puts each name into the lowest row in which it stands clear of the names before it.
fn arrange(canvas: &mut Canvas, place: Place, names: &[(f64, String)]) -> Result<Vec<MarkName>, PictureError> {
    let mut ends: Vec<f64> = Vec::new();
    let mut arranged = Vec::new();
    for (x, name) in names {
        let text = canvas.shortened(name, MARK_SIZE, 0.6 * (place.to[0] - place.from[0]))?;
        let width = canvas.text_width(&text, MARK_SIZE)?;
        let left = (x - 0.5 * width).min(place.to[0] + 60.0 - width).max(place.from[0] - 60.0);
        let row = ends.iter().position(|&end| end < left).unwrap_or(ends.len());
        if row == ends.len() {
            ends.push(f64::NEG_INFINITY);
        }
        ends[row] = left + width + 18.0;
        arranged.push(MarkName { x: *x, left, width, row, text });
    }
    Ok(arranged)
}

/// Size of names of marks.
const MARK_SIZE: f64 = 23.0;
/// Most rows of names of marks.
pub(super) const MARK_ROWS: usize = 3;
/// Distance of rows of names of marks.
pub(super) const MARK_ROW: f64 = 30.0;

#[cfg(test)]
mod tests {
    #![allow(clippy::unwrap_used, reason = "tests")]

    use super::{Mark, Panel, Place, Series, style};
    use crate::export::pictures::canvas::{Canvas, PAPER};

    const PLACE: Place = Place { from: [150.0, 50.0], to: [750.0, 450.0] };

    fn drawn(points: Vec<[f64; 2]>) -> Canvas {
        let mut canvas = Canvas::new(900, 600).unwrap();
        let series = vec![Series { name: Some("line".into()), points, style: style(0) }];
        let panel = Panel { x_label: "t in s".into(), y_label: "T in \u{b0}C".into(), series, ..Panel::default() };
        panel.draw(&mut canvas, PLACE).unwrap();
        panel.legend(&mut canvas, [770.0, 50.0], [120.0, 300.0], false).unwrap();
        canvas
    }

    #[test]
    fn a_line_runs_where_its_values_are() {
        // The scale ends at 1000, the next tick above 950.
        let mut canvas = drawn(vec![[0.0, 0.0], [100.0, 950.0]]);
        let image = canvas.fine_pixels();
        let y = 450.0 - 400.0 * 0.95 / 3.0;
        assert_eq!(image.pixel(2 * 350, (2.0 * y) as usize), style(0).colour, "at a third of the time");
    }

    #[test]
    fn lines_without_points_numbers_or_extent_draw_their_axes() {
        for points in
            [vec![], vec![[0.0, f64::NAN]], vec![[1.0, 5.0]], vec![[0.0, 5.0], [10.0, 5.0]], vec![[f64::NAN, 1.0]]]
        {
            let mut canvas = drawn(points);
            assert_ne!(canvas.fine_pixels().pixel(2 * 150, 2 * 300), PAPER, "left axis");
        }
    }

    #[test]
    fn names_of_crowded_marks_become_numbers() {
        let marks = |count: usize| {
            let mark = |i: usize| Mark { x: 50.0 + i as f64, name: format!("surface at Curie {i}") };
            (0..count).map(mark).collect::<Vec<_>>()
        };
        let numbered = |count: usize| {
            let points = vec![[0.0, 0.0], [100.0, 1.0]];
            let series = vec![Series { name: None, points, style: style(0) }];
            let panel = Panel { series, marks: marks(count), ..Panel::default() };
            panel.draw(&mut Canvas::new(900, 600).unwrap(), PLACE).unwrap()
        };
        assert!(!numbered(0) && !numbered(3));
        assert!(numbered(4));
    }

    #[test]
    fn neighbouring_styles_differ_in_colour_and_dashes() {
        for number in 0..12 {
            let (a, b) = (style(number), style(number + 1));
            assert_ne!(a.colour, b.colour);
            assert_ne!(a.dashes, b.dashes);
        }
    }
}
