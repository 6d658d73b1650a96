//! The sheet a picture is drawn on: text, lines and boxes at twice the final resolution, then reduced and encoded.
//! Convention: coordinates are pixels of the finished picture, from its upper left corner, y downwards. Text is set in
//! the embedded font `DejaVu Sans` (licence beside it in `assets/`), so a picture needs nothing of the machine it is made on.

use plotters::backend::{BitMapBackend, DrawingBackend};
use plotters::style::{Color, FontDesc, FontFamily, FontStyle, FontTransform, RGBColor, TextStyle, register_font};

use super::image::{Image, Rgb};
use super::{Picture, PictureError};

/// Pixels drawn for one pixel kept, in each direction.
pub(super) const OVERSAMPLING: usize = 2;
const FONT: &[u8] = include_bytes!("../../../assets/DejaVuSans.ttf");
const FONT_NAME: &str = "DejaVu Sans";

/// White paper.
pub(super) const PAPER: Rgb = [255; 3];
/// Text and frames.
pub(super) const INK: Rgb = [25, 25, 30];
/// Text of second rank.
pub(super) const GREY_INK: Rgb = [85, 85, 92];
/// Grid lines.
pub(super) const FAINT: Rgb = [222, 222, 226];

/// Where a text stands relative to its point.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Align {
    Left,
    Centre,
    Right,
}

/// Size in pixels, alignment and colour of a text.
#[derive(Debug, Clone, Copy)]
pub(super) struct Lettering {
    pub(super) size: f64,
    pub(super) align: Align,
    pub(super) colour: Rgb,
}

/// Lettering in the colour of text.
pub(super) fn lettering(size: f64, align: Align) -> Lettering {
    Lettering { size, align, colour: INK }
}

/// A picture in the making.
#[derive(Debug)]
pub(super) struct Canvas {
    image: Image,
}

impl Canvas {
    /// White paper of `width x height` pixels.
    ///
    /// # Errors
    /// The embedded font cannot be read.
    pub(super) fn new(width: usize, height: usize) -> Result<Self, PictureError> {
        register_font(FONT_NAME, FontStyle::Normal, FONT).map_err(|_| PictureError::Font)?;
        Ok(Self { image: Image::new(width * OVERSAMPLING, height * OVERSAMPLING, PAPER) })
    }

    pub(super) fn width(&self) -> f64 {
        (self.image.width / OVERSAMPLING) as f64
    }

    /// The fine pixels, `OVERSAMPLING` to one of the picture.
    pub(super) fn fine_pixels(&mut self) -> &mut Image {
        &mut self.image
    }

    /// A straight line of `width` pixels.
    pub(super) fn line(&mut self, a: [f64; 2], b: [f64; 2], width: f64, colour: Rgb) {
        let f = OVERSAMPLING as f64;
        self.image.stroke([a[0] * f, a[1] * f], [b[0] * f, b[1] * f], width * f, colour);
    }

    /// A broken line through points; `dashes` alternates drawn and blank lengths in pixels, none for an unbroken line.
    pub(super) fn polyline(&mut self, points: &[[f64; 2]], width: f64, colour: Rgb, dashes: &[f64]) {
        let mut index = 0;
        let mut left = dashes.first().copied().unwrap_or(f64::INFINITY);
        for pair in points.windows(2) {
            let (a, b) = (pair[0], pair[1]);
            let length = (b[0] - a[0]).hypot(b[1] - a[1]);
            let mut done = 0.0;
            while length.is_finite() && done < length {
                let step = left.min(length - done);
                let at = |s: f64| [a[0] + s / length * (b[0] - a[0]), a[1] + s / length * (b[1] - a[1])];
                if index % 2 == 0 {
                    self.line(at(done), at(done + step), width, colour);
                }
                done += step;
                left -= step;
                if left <= 0.0 {
                    index += 1;
                    left = dashes[index % dashes.len()].max(0.5);
                }
            }
        }
    }

    /// A filled box.
    pub(super) fn fill(&mut self, from: [f64; 2], to: [f64; 2], colour: Rgb) {
        let range = |a: f64, b: f64, size: usize| {
            let index = |v: f64| (v * OVERSAMPLING as f64).round().clamp(0.0, size as f64) as usize;
            index(a.min(b))..index(a.max(b))
        };
        let (xs, ys) = (range(from[0], to[0], self.image.width), range(from[1], to[1], self.image.height));
        for y in ys {
            for x in xs.clone() {
                self.image.set(x, y, colour);
            }
        }
    }

    /// The rim of a box.
    pub(super) fn frame(&mut self, from: [f64; 2], to: [f64; 2], width: f64, colour: Rgb) {
        let corners = [from, [to[0], from[1]], to, [from[0], to[1]], from];
        self.polyline(&corners, width, colour, &[]);
    }

    /// Fills the space between two curves over the same abscissae.
    pub(super) fn band(&mut self, lower: &[[f64; 2]], upper: &[[f64; 2]], colour: Rgb) -> Result<(), PictureError> {
        let fine = |p: &[f64; 2]| p.map(|v| (v * OVERSAMPLING as f64).round() as i32);
        let outline: Vec<(i32, i32)> = upper.iter().chain(lower.iter().rev()).map(fine).map(|[x, y]| (x, y)).collect();
        let style = ink(colour).filled();
        self.backend()
            .fill_polygon(outline, &style)
            .map_err(|e| PictureError::Draw { what: "a band", reason: e.to_string() })
    }

    fn backend(&mut self) -> BitMapBackend<'_> {
        let size = (self.image.width as u32, self.image.height as u32);
        BitMapBackend::with_buffer(&mut self.image.bytes, size)
    }

    /// A line of text whose baseline starts, is centred or ends at `at`.
    pub(super) fn text(&mut self, text: &str, at: [f64; 2], style: Lettering) -> Result<(), PictureError> {
        let left = at[0] - self.offset(text, style)?;
        let corner = [left, at[1] - 0.5 * style.size];
        self.letter(text, corner, style, FontTransform::None)
    }

    /// A line of text that reads upwards, on a baseline at `at[0]`.
    pub(super) fn text_upwards(&mut self, text: &str, at: [f64; 2], style: Lettering) -> Result<(), PictureError> {
        let start = at[1] + self.offset(text, style)?;
        let corner = [at[0] - 0.5 * style.size, start];
        self.letter(text, corner, style, FontTransform::Rotate270)
    }

    fn offset(&mut self, text: &str, style: Lettering) -> Result<f64, PictureError> {
        Ok(match style.align {
            Align::Left => 0.0,
            Align::Centre => 0.5 * self.text_width(text, style.size)?,
            Align::Right => self.text_width(text, style.size)?,
        })
    }

    fn letter(&mut self, text: &str, at: [f64; 2], style: Lettering, turn: FontTransform) -> Result<(), PictureError> {
        let font = font(style.size).transform(turn);
        let colour = ink(style.colour);
        let text_style = TextStyle::from(font).color(&colour);
        let corner = at.map(|v| (v * OVERSAMPLING as f64).round() as i32);
        let drawn = self.backend().draw_text(text, &text_style, (corner[0], corner[1]));
        drawn.map_err(|e| PictureError::Draw { what: "a text", reason: e.to_string() })
    }

    /// Width of a text in pixels.
    pub(super) fn text_width(&mut self, text: &str, size: f64) -> Result<f64, PictureError> {
        let style = TextStyle::from(font(size));
        let box_size = self.backend().estimate_text_size(text, &style);
        let width = box_size.map_err(|e| PictureError::Draw { what: "a text", reason: e.to_string() })?.0;
        Ok(f64::from(width) / OVERSAMPLING as f64)
    }

    /// The text, shortened with an ellipsis where it is wider than `width` pixels.
    pub(super) fn shortened(&mut self, text: &str, size: f64, width: f64) -> Result<String, PictureError> {
        let one_line: String = text.chars().map(|c| if c.is_control() { ' ' } else { c }).collect();
        let mut kept: Vec<char> = one_line.chars().take(400).collect();
        if kept.len() == one_line.chars().count() && self.text_width(&one_line, size)? <= width {
            return Ok(one_line);
        }
        while !kept.is_empty() {
            let candidate: String = kept.iter().collect::<String>().trim_end().to_owned() + "\u{2026}";
            if self.text_width(&candidate, size)? <= width {
                return Ok(candidate);
            }
            kept.pop();
        }
        Ok(String::new())
    }

    /// Reduces the picture to its final size and encodes it.
    ///
    /// # Errors
    /// The encoder fails.
    pub(super) fn finish(self, name: String) -> Result<Picture, PictureError> {
        let image = self.image.reduced(OVERSAMPLING);
        match encode(&image) {
            Ok(png) => Ok(Picture { name, png }),
            Err(source) => Err(PictureError::Encode { picture: name, source }),
        }
    }
}

fn font(size: f64) -> FontDesc<'static> {
    FontDesc::new(FontFamily::Name(FONT_NAME), size * OVERSAMPLING as f64, FontStyle::Normal)
}

fn ink(colour: Rgb) -> RGBColor {
    RGBColor(colour[0], colour[1], colour[2])
}

fn encode(image: &Image) -> Result<Vec<u8>, png::EncodingError> {
    let mut bytes = Vec::new();
    let mut encoder = png::Encoder::new(&mut bytes, image.width as u32, image.height as u32);
    encoder.set_color(png::ColorType::Rgb);
    encoder.set_depth(png::BitDepth::Eight);
    let mut writer = encoder.write_header()?;
    writer.write_image_data(&image.bytes)?;
    writer.finish()?;
    Ok(bytes)
}

#[cfg(test)]
mod tests {
    #![allow(clippy::unwrap_used, reason = "tests")]

    use super::{Align, Canvas, INK, PAPER, lettering};
    use crate::export::pictures::image::Rgb;

    fn dark(canvas: &mut Canvas, xs: std::ops::Range<usize>, ys: std::ops::Range<usize>) -> usize {
        let image = canvas.fine_pixels();
        let is_dark = |c: Rgb| c.iter().all(|&v| v < 128);
        ys.map(|y| xs.clone().filter(|&x| is_dark(image.pixel(x, y))).count()).sum()
    }

    #[test]
    fn text_stands_on_its_baseline_and_ends_where_it_is_aligned() {
        let mut canvas = Canvas::new(200, 100).unwrap();
        canvas.text("HHH", [100.0, 60.0], lettering(40.0, Align::Right)).unwrap();
        assert!(dark(&mut canvas, 0..200, 60..120) > 200, "no letters above the baseline");
        assert_eq!(dark(&mut canvas, 0..400, 121..200), 0, "letters below the baseline");
        assert_eq!(dark(&mut canvas, 202..400, 0..200), 0, "letters right of the end");
    }

    #[test]
    fn upright_text_is_the_turned_text() {
        let mut canvas = Canvas::new(100, 200).unwrap();
        canvas.text_upwards("HHH", [60.0, 100.0], lettering(40.0, Align::Centre)).unwrap();
        assert!(dark(&mut canvas, 60..120, 100..300) > 200);
        assert_eq!(dark(&mut canvas, 122..200, 0..400), 0, "letters right of the baseline");
    }

    #[test]
    fn a_long_text_is_shortened_to_its_width() {
        let mut canvas = Canvas::new(300, 50).unwrap();
        let title = "a very long title of a job\nwith a line break in it ".repeat(30);
        let short = canvas.shortened(&title, 24.0, 200.0).unwrap();
        assert!(short.ends_with('\u{2026}') && !short.contains('\n'), "{short}");
        assert!(canvas.text_width(&short, 24.0).unwrap() <= 200.0);
        assert_eq!(canvas.shortened("short", 24.0, 200.0).unwrap(), "short");
        assert_eq!(canvas.shortened("short", 24.0, 0.0).unwrap(), "");
    }

    #[test]
    fn dashes_leave_gaps_and_dots_end() {
        let mut canvas = Canvas::new(100, 20).unwrap();
        canvas.polyline(&[[10.0, 10.0], [90.0, 10.0]], 2.0, INK, &[10.0, 10.0]);
        let image = canvas.fine_pixels();
        assert_eq!(image.pixel(2 * 15, 20), INK);
        assert_eq!(image.pixel(2 * 25, 20), PAPER);
        assert_eq!(image.pixel(2 * 35, 20), INK);
    }

    #[test]
    fn the_encoded_picture_decodes_to_its_size() {
        let mut canvas = Canvas::new(64, 32).unwrap();
        canvas.fill([0.0, 0.0], [32.0, 32.0], [10, 20, 30]);
        let picture = canvas.finish("maps/test.png".into()).unwrap();
        let decoder = png::Decoder::new(std::io::Cursor::new(picture.png));
        let mut reader = decoder.read_info().unwrap();
        let mut bytes = vec![0; reader.output_buffer_size().unwrap()];
        let info = reader.next_frame(&mut bytes).unwrap();
        assert_eq!((info.width, info.height), (64, 32));
        assert_eq!(bytes[..3], [10, 20, 30]);
        assert_eq!(bytes[3 * 63..3 * 64], PAPER);
    }
}
