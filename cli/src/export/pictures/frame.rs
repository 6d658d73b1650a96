//! Where a map stands on its picture: equal scales on both axes, and a section much longer than wide laid on its side.
//! Convention: `r` in metres, negative on the mirrored side; picture coordinates as in `canvas`.

use super::PictureError;
use super::canvas::{Align, Canvas, GREY_INK, INK, OVERSAMPLING, lettering};
use super::image::Image;
use super::raster::View;
use super::ticks::{labels, ticks};
use super::window::Window;

/// Usual size of a picture, pixels.
const USUAL: [f64; 2] = [1600.0, 1200.0];
/// Least size, so that titles find room.
const LEAST: [f64; 2] = [1200.0, 640.0];
/// A very long section may widen the picture to this.
const WIDEST: f64 = 3200.0;
/// Height below which a very long section widens its picture.
const THIN: f64 = 200.0;
/// A section is laid on its side where it is this much longer than wide.
const LONG: f64 = 1.25;
/// Size of tick labels.
pub(super) const TICK_SIZE: f64 = 25.0;
/// Size of axis labels.
pub(super) const LABEL_SIZE: f64 = 27.0;

/// Pixels kept free round a map.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Margins {
    pub(super) left: f64,
    pub(super) right: f64,
    pub(super) top: f64,
    pub(super) bottom: f64,
}

/// A map's place.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Frame {
    /// True where z runs from left to right.
    pub(super) turned: bool,
    window: Window,
    /// Fine pixels of the half plane that is painted: along r and along z.
    half: [usize; 2],
    /// Fine pixels a metre.
    scale: f64,
    /// Upper left corner of the map, pixels.
    pub(super) from: [f64; 2],
    /// Lower right corner of the map, pixels.
    pub(super) to: [f64; 2],
    /// Size of the picture, pixels.
    pub(super) size: [usize; 2],
}

/// True where a window is laid on its side.
pub(super) fn is_turned(window: &Window) -> bool {
    let (across, along) = (window.across(), window.along());
    along[1] - along[0] > LONG * (across[1] - across[0])
}

/// Width over height of a window as it is drawn.
pub(super) fn aspect(window: &Window) -> f64 {
    let (across, along) = (window.across(), window.along());
    let ratio = (across[1] - across[0]) / (along[1] - along[0]);
    if is_turned(window) { 1.0 / ratio } else { ratio }
}

impl Frame {
    /// The place of a window with margins round it.
    pub(super) fn fit(window: Window, margins: Margins) -> Self {
        let turned = is_turned(&window);
        let lengths = [window.across(), window.along()].map(|range| range[1] - range[0]);
        let [wide, high] = if turned { [lengths[1], lengths[0]] } else { lengths };
        let beside = margins.left + margins.right;
        let above = margins.top + margins.bottom;
        let room = [USUAL[0] - beside, USUAL[1] - above];
        let mut per_metre = (room[0] / wide).min(room[1] / high);
        if per_metre * high < THIN {
            per_metre = (THIN / high).min((WIDEST - beside) / wide);
        }
        let scale = per_metre * OVERSAMPLING as f64;
        let fine = |range: [f64; 2]| 2 * ((range[1] - range[0]) * scale / 2.0).round().max(1.0) as usize;
        let half = [fine(window.r), fine(window.z)];
        let full = [half[0] * (1 + usize::from(window.both_sides)), half[1] * (1 + usize::from(window.both_halves))];
        let drawn = full.map(|n| (n / OVERSAMPLING) as f64);
        let drawn = if turned { [drawn[1], drawn[0]] } else { drawn };
        let size = [(drawn[0] + beside).max(LEAST[0]), (drawn[1] + above).max(LEAST[1])];
        let from = [
            (margins.left + 0.5 * (size[0] - beside - drawn[0])).floor(),
            (margins.top + 0.5 * (size[1] - above - drawn[1])).floor(),
        ];
        let to = [from[0] + drawn[0], from[1] + drawn[1]];
        Self { turned, window, half, scale, from, to, size: size.map(|v| v.ceil() as usize) }
    }

    /// A square window in a square of `side` pixels whose upper left corner is `at`.
    pub(super) fn inside(window: Window, turned: bool, at: [f64; 2], side: f64) -> Self {
        let scale = side * OVERSAMPLING as f64 / (window.r[1] - window.r[0]);
        let from = at.map(f64::floor);
        let half = [side as usize * OVERSAMPLING; 2];
        Self { turned, window, half, scale, from, to: from.map(|v| v + side), size: [0; 2] }
    }

    /// Pixels of the picture a metre.
    pub(super) fn pixels_per_metre(&self) -> f64 {
        self.scale / OVERSAMPLING as f64
    }

    /// The view of the half plane that is painted.
    pub(super) fn view(&self) -> View {
        View { left_r: self.window.r[0], top_z: self.window.z[0] + self.half[1] as f64 / self.scale, scale: self.scale }
    }

    /// An image of the half plane.
    pub(super) fn half_plane(&self, colour: [u8; 3]) -> Image {
        Image::new(self.half[0], self.half[1], colour)
    }

    /// Place on the picture of a point of the full section.
    pub(super) fn place(&self, p: [f64; 2]) -> [f64; 2] {
        let per_metre = self.scale / OVERSAMPLING as f64;
        let half = self.half.map(|n| (n / OVERSAMPLING) as f64);
        let right =
            if self.window.both_sides { half[0] + p[0] * per_metre } else { (p[0] - self.window.r[0]) * per_metre };
        let below = if self.window.both_halves { half[1] } else { 0.0 };
        let up = below + (p[1] - self.window.z[0]) * per_metre;
        if self.turned { [self.from[0] + up, self.to[1] - right] } else { [self.from[0] + right, self.to[1] - up] }
    }

    /// Puts the half plane and its mirror images on the picture, pixel by pixel, so that the halves are exact images.
    pub(super) fn put(&self, half_plane: &Image, canvas: &mut Canvas) {
        let [nr, nz] = self.half;
        let left = self.from[0] as usize * OVERSAMPLING;
        let top = self.from[1] as usize * OVERSAMPLING;
        let full_r = nr * (1 + usize::from(self.window.both_sides));
        let full_z = nz * (1 + usize::from(self.window.both_halves));
        let column = |i: usize| {
            if !self.window.both_sides {
                i
            } else if i < nr {
                nr - 1 - i
            } else {
                i - nr
            }
        };
        let row = |j: usize| if j < nz { j } else { 2 * nz - 1 - j };
        let fine = canvas.fine_pixels();
        for j in 0..full_z {
            for i in 0..full_r {
                let colour = half_plane.pixel(column(i), row(j));
                let (x, y) = if self.turned { (full_z - 1 - j, full_r - 1 - i) } else { (i, j) };
                fine.set(left + x, top + y, colour);
            }
        }
    }

    /// Frame, ticks in millimetres and labels of both axes.
    pub(super) fn axes(&self, canvas: &mut Canvas) -> Result<(), PictureError> {
        canvas.frame(self.from, self.to, 1.5, INK);
        let (across, along) = (self.window.across(), self.window.along());
        let (below, beside) = if self.turned { (along, across) } else { (across, along) };
        let (name_below, name_beside) = if self.turned { ("z in mm", "r in mm") } else { ("r in mm", "z in mm") };
        self.ticks_below(canvas, below)?;
        self.ticks_beside(canvas, beside)?;
        let centre = [0.5 * (self.from[0] + self.to[0]), 0.5 * (self.from[1] + self.to[1])];
        canvas.text(name_below, [centre[0], self.to[1] + 80.0], lettering(LABEL_SIZE, Align::Centre))?;
        canvas.text_upwards(name_beside, [self.from[0] - 92.0, centre[1]], lettering(LABEL_SIZE, Align::Centre))
    }

    /// Ticks in millimetres; radii are positive on both sides of the axis.
    fn ticks_below(&self, canvas: &mut Canvas, range: [f64; 2]) -> Result<(), PictureError> {
        let count = ((self.to[0] - self.from[0]) / 120.0).clamp(2.0, 14.0) as usize;
        for (value, label) in self.marks(range, count, !self.turned) {
            let x = if self.turned { self.place([0.0, value])[0] } else { self.place([value, 0.0])[0] };
            canvas.line([x, self.to[1]], [x, self.to[1] + 9.0], 1.5, INK);
            canvas.text(&label, [x, self.to[1] + 38.0], lettering(TICK_SIZE, Align::Centre))?;
        }
        Ok(())
    }

    fn ticks_beside(&self, canvas: &mut Canvas, range: [f64; 2]) -> Result<(), PictureError> {
        let count = ((self.to[1] - self.from[1]) / 64.0).clamp(3.0, 12.0) as usize;
        for (value, label) in self.marks(range, count, self.turned) {
            let y = if self.turned { self.place([value, 0.0])[1] } else { self.place([0.0, value])[1] };
            canvas.line([self.from[0] - 9.0, y], [self.from[0], y], 1.5, INK);
            canvas.text(&label, [self.from[0] - 16.0, y + 0.31 * TICK_SIZE], lettering(TICK_SIZE, Align::Right))?;
        }
        Ok(())
    }

    fn marks(&self, range: [f64; 2], count: usize, radial: bool) -> Vec<(f64, String)> {
        let values = ticks(range[0] * 1e3, range[1] * 1e3, count);
        let mut text = labels(&values);
        if radial && self.window.both_sides {
            for label in &mut text {
                *label = label.trim_start_matches('\u{2212}').to_owned();
            }
        }
        values.into_iter().map(|v| v * 1e-3).zip(text).collect()
    }

    /// The axis of revolution as a chain line, and the mirror plane as a broken line.
    pub(super) fn centre_lines(&self, canvas: &mut Canvas) {
        let (across, along) = (self.window.across(), self.window.along());
        if self.window.both_sides {
            let ends = [self.place([0.0, along[0]]), self.place([0.0, along[1]])];
            canvas.polyline(&ends, 1.5, GREY_INK, &[28.0, 6.0, 5.0, 6.0]);
        }
        if self.window.both_halves {
            let z = self.window.z[0];
            let ends = [self.place([across[0], z]), self.place([across[1], z])];
            canvas.polyline(&ends, 1.5, GREY_INK, &[10.0, 8.0]);
        }
    }
}

#[cfg(test)]
mod tests {
    use super::{Frame, Margins};
    use crate::export::pictures::window::Window;

    const MARGINS: Margins = Margins { left: 100.0, right: 200.0, top: 150.0, bottom: 100.0 };

    fn window(radius: f64, height: f64) -> Window {
        Window { r: [0.0, radius], z: [0.0, height], both_sides: true, both_halves: true }
    }

    #[test]
    fn scales_of_both_axes_are_equal() {
        for (radius, height) in [(0.05, 0.02), (0.05, 0.3), (0.05, 4.0), (0.01, 0.01)] {
            let frame = Frame::fit(window(radius, height), MARGINS);
            let o = frame.place([0.0, 0.0]);
            let (a, b) = (frame.place([0.005, 0.0]), frame.place([0.0, 0.005]));
            let (r, z) = ((a[0] - o[0]).hypot(a[1] - o[1]), (b[0] - o[0]).hypot(b[1] - o[1]));
            assert!((r / z - 1.0).abs() < 1e-9, "{r} and {z} pixels for 5 mm");
        }
    }

    #[test]
    fn a_long_section_lies_on_its_side_and_stays_in_the_picture() {
        let frame = Frame::fit(window(0.05, 0.5), MARGINS);
        assert!(frame.turned);
        assert!(frame.to[0] + MARGINS.right <= frame.size[0] as f64 + 1.0);
        assert!(frame.place([0.0, 0.4])[0] > frame.place([0.0, -0.4])[0], "z runs to the right");
        assert!(frame.place([0.04, 0.0])[1] < frame.place([-0.04, 0.0])[1], "r runs upwards");
        assert!(!Frame::fit(window(0.05, 0.05), MARGINS).turned);
    }

    #[test]
    fn pictures_are_bounded_for_any_shape() {
        for (radius, height) in [(1e-5, 10.0), (10.0, 1e-5), (1e-9, 1e-9), (1e3, 1e3)] {
            let frame = Frame::fit(window(radius, height), MARGINS);
            assert!(frame.size[0] <= 3300 && frame.size[1] <= 1300, "{:?}", frame.size);
        }
    }
}
