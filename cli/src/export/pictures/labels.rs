//! Names of parts written into them, where a name lies on its own part alone.

use solver::results::RegionName;

use super::PictureError;
use super::canvas::{Align, Canvas, lettering};
use super::drawing::TEXT;
use super::frame::Frame;
use super::image::Image;
use super::layer::pixels;
use super::raster::{View, paint};
use super::sheet::{Extent, Sheet};

/// Free space round a name, pixels.
const PAD: f64 = 7.0;
/// Places tried for a name in each direction.
const PLACES: usize = 24;
/// Points of a name's box that must lie on its part, in each direction.
const PROBES: usize = 8;
/// Height of capital letters over the size of the text.
const CAPITALS: f64 = 0.73;

const ON_IT: [u8; 3] = [255; 3];

/// Writes the names of parts into them where they find room: first level, then upright; off the middle, where a mirror plane
/// may be, if there is a choice.
pub(super) fn name_parts(canvas: &mut Canvas, frame: &Frame, sheet: &Sheet<'_>) -> Result<(), PictureError> {
    for (index, name) in sheet.parts() {
        let of_part = |kind: &RegionName| matches!(kind, RegionName::Part(i, _) if *i == index);
        let elements = sheet.elements_of(of_part);
        let Some(extent) = sheet.extent(of_part) else { continue };
        let part = Mask::of(frame, sheet, &elements);
        let size = [canvas.text_width(name, TEXT)? + 2.0 * PAD, CAPITALS * TEXT + 2.0 * PAD];
        let rise = 0.5 * CAPITALS * TEXT;
        if let Some(p) = part.place(frame, &extent, size) {
            let at = frame.place(p);
            canvas.text(name, [at[0], at[1] + rise], lettering(TEXT, Align::Centre))?;
        } else if let Some(p) = part.place(frame, &extent, [size[1], size[0]]) {
            let at = frame.place(p);
            canvas.text_upwards(name, [at[0] + rise, at[1]], lettering(TEXT, Align::Centre))?;
        }
    }
    Ok(())
}

/// The pixels of a part in the half plane.
struct Mask {
    image: Image,
    view: View,
}

impl Mask {
    fn of(frame: &Frame, sheet: &Sheet<'_>, elements: &[usize]) -> Self {
        let (mut image, view) = (frame.half_plane([0; 3]), frame.view());
        for &element in elements {
            paint(&mut image, sheet.order, &pixels(&view, sheet, element), |_| Some(ON_IT));
        }
        Self { image, view }
    }

    /// The middle of a box of `size` pixels of the picture that lies on the part, nearest to the middle of its upper half.
    fn place(&self, frame: &Frame, extent: &Extent, size: [f64; 2]) -> Option<[f64; 2]> {
        let metres = size.map(|pixels| 0.5 * pixels / frame.pixels_per_metre());
        let half = if frame.turned { [metres[1], metres[0]] } else { metres };
        let ranges = [extent.r, extent.z];
        let share = |k: usize| (k as f64 + 0.5) / PLACES as f64;
        let at = |range: [f64; 2], t: f64| range[0] + t * (range[1] - range[0]);
        let mut places: Vec<([usize; 2], f64)> = (0..PLACES * PLACES)
            .map(|k| {
                let (i, j) = (k % PLACES, k / PLACES);
                ([i, j], (share(i) - 0.5).powi(2) + (share(j) - 0.75).powi(2))
            })
            .collect();
        places.sort_by(|a, b| a.1.total_cmp(&b.1));
        let points = places.into_iter().map(|([i, j], _)| [at(ranges[0], share(i)), at(ranges[1], share(j))]);
        points.into_iter().find(|p| self.holds(*p, half))
    }

    fn holds(&self, middle: [f64; 2], half: [f64; 2]) -> bool {
        let share = |k: usize| 2.0 * k as f64 / (PROBES - 1) as f64 - 1.0;
        (0..PROBES * PROBES).all(|k| {
            let p = [middle[0] + share(k % PROBES) * half[0], middle[1] + share(k / PROBES) * half[1]];
            let [x, y] = self.view.pixel(p);
            let inside = x >= 0.0 && y >= 0.0 && x < self.image.width as f64 && y < self.image.height as f64;
            inside && self.image.pixel(x as usize, y as usize) == ON_IT
        })
    }
}
