//! Titles of pictures and the colour bar of maps.

use super::PictureError;
use super::canvas::{Align, Canvas, GREY_INK, INK, Lettering, lettering};
use super::frame::{Frame, LABEL_SIZE, Margins, TICK_SIZE};
use super::scale::Scale;

/// Height of the block of titles.
pub(super) const HEADING: f64 = 160.0;
/// Distance of texts from the left rim.
const INDENT: f64 = 36.0;
/// Thickness of a colour bar.
const BAR: f64 = 38.0;
/// Distance of a colour bar from the map: to its right, and below it past the tick labels.
const BAR_GAP: [f64; 2] = [46.0, 112.0];

/// Three lines above a picture.
#[derive(Debug, Clone)]
pub(super) struct Heading {
    /// What is shown, with the moment.
    pub(super) title: String,
    /// Of which job.
    pub(super) job: String,
    /// What to know about it; may be empty.
    pub(super) note: String,
}

impl Heading {
    pub(super) fn draw(&self, canvas: &mut Canvas) -> Result<(), PictureError> {
        let lines =
            [(&self.title, 38.0, 56.0, INK), (&self.job, 27.0, 96.0, GREY_INK), (&self.note, 25.0, 132.0, GREY_INK)];
        for (text, size, baseline, colour) in lines {
            let fitting = canvas.shortened(text, size, canvas.width() - 2.0 * INDENT)?;
            canvas.text(&fitting, [INDENT, baseline], Lettering { size, align: Align::Left, colour })?;
        }
        Ok(())
    }
}

/// Margins of a map with its colour bar, below a wide map and to the right of others.
pub(super) fn map_margins(bar_below: bool) -> Margins {
    let (right, bottom) = if bar_below { (50.0, 275.0) } else { (250.0, 110.0) };
    Margins { left: 140.0, right, top: HEADING, bottom }
}

/// Draws the colour bar of a scale beside or below a map.
pub(super) fn colour_bar(
    canvas: &mut Canvas,
    frame: &Frame,
    scale: &Scale,
    label: &str,
    below: bool,
) -> Result<(), PictureError> {
    if below { bar_below(canvas, frame, scale, label) } else { bar_beside(canvas, frame, scale, label) }
}

/// Colours of `length` steps from the first to the last.
fn strip(scale: &Scale, length: f64, mut step: impl FnMut(f64, [u8; 3])) {
    let count = (2.0 * length) as usize;
    let [low, high] = scale.range;
    for i in 0..count {
        let t = (i as f64 + 0.5) / count as f64;
        let value = if scale.logarithmic { low * (high / low).powf(t) } else { low + t * (high - low) };
        if let Some(colour) = scale.colour(value) {
            step(0.5 * i as f64, colour);
        }
    }
}

/// Ticks of a scale; the end ticks say where values beyond them are cut.
fn marked_ticks(scale: &Scale, count: usize) -> Vec<(f64, String)> {
    let mut ticks = scale.ticks(count);
    let near = |v: f64, end: f64| (scale.fraction(v) - end).abs() < 1e-3;
    if let Some(first) = ticks.first_mut().filter(|t| scale.cut[0] && near(t.0, 0.0)) {
        first.1 = format!("\u{2264} {}", first.1);
    }
    if let Some(last) = ticks.last_mut().filter(|t| scale.cut[1] && near(t.0, 1.0)) {
        last.1 = format!("\u{2265} {}", last.1);
    }
    ticks
}

fn bar_beside(canvas: &mut Canvas, frame: &Frame, scale: &Scale, label: &str) -> Result<(), PictureError> {
    let left = frame.to[0] + BAR_GAP[0];
    let (top, bottom) = (frame.from[1], frame.to[1]);
    strip(scale, bottom - top, |s, colour| canvas.fill([left, bottom - s], [left + BAR, bottom - s - 0.5], colour));
    canvas.frame([left, top], [left + BAR, bottom], 1.5, INK);
    let count = ((bottom - top) / 60.0).clamp(2.0, 12.0) as usize;
    let mut widest = 0.0f64;
    for (value, text) in marked_ticks(scale, count) {
        let y = bottom - scale.fraction(value) * (bottom - top);
        canvas.line([left + BAR, y], [left + BAR + 9.0, y], 1.5, INK);
        widest = widest.max(canvas.text_width(&text, TICK_SIZE)?);
        canvas.text(&text, [left + BAR + 16.0, y + 0.31 * TICK_SIZE], lettering(TICK_SIZE, Align::Left))?;
    }
    let x = left + BAR + 16.0 + widest + 38.0;
    canvas.text_upwards(label, [x, 0.5 * (top + bottom)], lettering(LABEL_SIZE, Align::Centre))
}

fn bar_below(canvas: &mut Canvas, frame: &Frame, scale: &Scale, label: &str) -> Result<(), PictureError> {
    let top = frame.to[1] + BAR_GAP[1];
    let (left, right) = (frame.from[0], frame.to[0]);
    strip(scale, right - left, |s, colour| canvas.fill([left + s, top], [left + s + 0.5, top + BAR], colour));
    canvas.frame([left, top], [right, top + BAR], 1.5, INK);
    let count = ((right - left) / 110.0).clamp(2.0, 12.0) as usize;
    for (value, text) in marked_ticks(scale, count) {
        let x = left + scale.fraction(value) * (right - left);
        canvas.line([x, top + BAR], [x, top + BAR + 9.0], 1.5, INK);
        canvas.text(&text, [x, top + BAR + 38.0], lettering(TICK_SIZE, Align::Centre))?;
    }
    let centre = 0.5 * (left + right);
    canvas.text(label, [centre, top + BAR + 78.0], lettering(LABEL_SIZE, Align::Centre))
}
