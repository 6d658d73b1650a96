//! A plain RGB image and the two things drawn straight into it: smooth strokes and weighted pixels.
//! Convention: pixel `(0, 0)` is the upper left one and covers `[0, 1] x [0, 1]`; rows run downwards.

/// Red, green and blue, 0 to 255, in the sRGB colour space.
pub(super) type Rgb = [u8; 3];

/// Rows of pixels, three bytes each.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(super) struct Image {
    pub(super) width: usize,
    pub(super) height: usize,
    pub(super) bytes: Vec<u8>,
}

impl Image {
    pub(super) fn new(width: usize, height: usize, colour: Rgb) -> Self {
        Self { width, height, bytes: colour.repeat(width * height) }
    }

    pub(super) fn pixel(&self, x: usize, y: usize) -> Rgb {
        let at = 3 * (y * self.width + x);
        [self.bytes[at], self.bytes[at + 1], self.bytes[at + 2]]
    }

    pub(super) fn set(&mut self, x: usize, y: usize, colour: Rgb) {
        let at = 3 * (y * self.width + x);
        self.bytes[at..at + 3].copy_from_slice(&colour);
    }

    /// Mixes a colour into a pixel: weight 0 leaves it, 1 replaces it.
    fn mix(&mut self, x: usize, y: usize, colour: Rgb, weight: f64) {
        let at = 3 * (y * self.width + x);
        for (byte, new) in self.bytes[at..at + 3].iter_mut().zip(colour) {
            *byte = (f64::from(*byte) + weight * (f64::from(new) - f64::from(*byte))).round() as u8;
        }
    }

    /// A straight stroke with round ends, smooth at its rim; parts outside the image are left out.
    pub(super) fn stroke(&mut self, a: [f64; 2], b: [f64; 2], width: f64, colour: Rgb) {
        let length = (b[0] - a[0]).hypot(b[1] - a[1]);
        let limit = 4.0 * (self.width + self.height) as f64;
        if !(length.is_finite() && length < limit) {
            return;
        }
        let half = 0.5 * width;
        let reach = half + 1.0;
        let clamped = |low: f64, high: f64, size: usize| {
            let index = |v: f64| v.clamp(0.0, size as f64) as usize;
            index(low.floor())..index(high.ceil())
        };
        let d = [b[0] - a[0], b[1] - a[1]];
        let squared = d[0] * d[0] + d[1] * d[1];
        let ends = [a[0].min(b[0]) - reach, a[0].max(b[0]) + reach];
        for y in clamped(a[1].min(b[1]) - reach, a[1].max(b[1]) + reach, self.height) {
            // Pixels of this row within reach of the endless line, and between the ends of the stroke.
            let middle = a[0] + (y as f64 + 0.5 - a[1]) / d[1] * d[0];
            let beside = (reach + 1.0) * length / d[1].abs();
            let [low, high] =
                if beside.is_finite() && middle.is_finite() { [middle - beside, middle + beside] } else { ends };
            for x in clamped(low.max(ends[0]), high.min(ends[1]), self.width) {
                let p = [x as f64 + 0.5 - a[0], y as f64 + 0.5 - a[1]];
                let t = if squared > 0.0 { ((p[0] * d[0] + p[1] * d[1]) / squared).clamp(0.0, 1.0) } else { 0.0 };
                let distance = (p[0] - t * d[0]).hypot(p[1] - t * d[1]);
                let weight = (half + 0.5 - distance).clamp(0.0, 1.0);
                if weight > 0.0 {
                    self.mix(x, y, colour, weight);
                }
            }
        }
    }

    /// Mean of blocks of `factor x factor` pixels.
    pub(super) fn reduced(&self, factor: usize) -> Self {
        let (width, height) = (self.width / factor, self.height / factor);
        let mut small = Self::new(width, height, [0; 3]);
        let count = factor * factor;
        for y in 0..height {
            for x in 0..width {
                let mut sum = [count / 2; 3];
                for dy in 0..factor {
                    for dx in 0..factor {
                        let pixel = self.pixel(factor * x + dx, factor * y + dy);
                        sum.iter_mut().zip(pixel).for_each(|(s, p)| *s += usize::from(p));
                    }
                }
                small.set(x, y, sum.map(|s| (s / count) as u8));
            }
        }
        small
    }
}

#[cfg(test)]
mod tests {
    use super::Image;

    const WHITE: [u8; 3] = [255; 3];
    const BLACK: [u8; 3] = [0; 3];

    #[test]
    fn a_stroke_covers_its_width_and_nothing_else() {
        let mut image = Image::new(40, 20, WHITE);
        image.stroke([5.0, 10.0], [35.0, 10.0], 4.0, BLACK);
        for y in 0..20 {
            let inside = (8..12).contains(&y);
            assert_eq!(image.pixel(20, y), if inside { BLACK } else { WHITE }, "row {y}");
        }
        assert_eq!(image.pixel(1, 10), WHITE);
    }

    #[test]
    fn strokes_that_leave_the_image_or_are_not_numbers_do_no_harm() {
        let mut image = Image::new(10, 10, WHITE);
        image.stroke([-20.0, 5.0], [30.0, 5.0], 2.0, BLACK);
        assert_eq!(image.pixel(0, 5), BLACK);
        let before = image.clone();
        image.stroke([f64::NAN, 0.0], [5.0, 5.0], 2.0, BLACK);
        image.stroke([0.0, 0.0], [f64::INFINITY, 5.0], 2.0, BLACK);
        image.stroke([-9.0, -9.0], [-5.0, -5.0], 2.0, BLACK);
        assert_eq!(image, before);
    }

    #[test]
    fn reduction_takes_the_mean() {
        let mut image = Image::new(4, 2, BLACK);
        image.set(0, 0, [200, 100, 40]);
        let small = image.reduced(2);
        assert_eq!((small.width, small.height), (2, 1));
        assert_eq!(small.pixel(0, 0), [50, 25, 10]);
        assert_eq!(small.pixel(1, 0), BLACK);
    }
}
