//! Fields of curved elements turned into pixels. Each element is cut into flat pieces, fine enough that its curved edges
//! are met within a tenth of a pixel; within a piece every pixel gets the value of the element's own functions.
//! Convention: `View` maps `[r, z]` in metres to pixels, z upwards, pixel rows downwards.

use super::image::{Image, Rgb};
use super::shape;

/// Pixels by which pieces reach over their rims, so that no gap opens between neighbours.
const OVERLAP: f64 = 0.12;
/// Largest distance of a flat piece from its curved edge, pixels.
const FLATNESS: f64 = 0.1;
/// Most pieces along an edge.
const MOST_PIECES: usize = 24;

/// Where a half plane lies on an image.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct View {
    /// Radius at the left rim, metres.
    pub(super) left_r: f64,
    /// Height at the upper rim, metres.
    pub(super) top_z: f64,
    /// Pixels a metre.
    pub(super) scale: f64,
}

impl View {
    pub(super) fn pixel(&self, p: [f64; 2]) -> [f64; 2] {
        [(p[0] - self.left_r) * self.scale, (self.top_z - p[1]) * self.scale]
    }
}

/// Pieces along an edge that keep the curved edges of an element within [`FLATNESS`].
pub(super) fn pieces(order: usize, pixels: &[[f64; 2]]) -> usize {
    if order == 1 {
        return 1;
    }
    let mut farthest = 0.0f64;
    for edge in 0..3 {
        let nodes = shape::edge_nodes(order, edge);
        let (a, b) = (pixels[nodes[0]], pixels[nodes[order]]);
        for (i, &n) in nodes.iter().enumerate() {
            let t = i as f64 / order as f64;
            let straight = [a[0] + t * (b[0] - a[0]), a[1] + t * (b[1] - a[1])];
            farthest = farthest.max((pixels[n][0] - straight[0]).hypot(pixels[n][1] - straight[1]));
        }
    }
    ((farthest / FLATNESS).sqrt().ceil() as usize).clamp(1, MOST_PIECES)
}

/// Paints an element; `colour` is asked for every pixel with the barycentric coordinates of its centre.
pub(super) fn paint(image: &mut Image, order: usize, pixels: &[[f64; 2]], colour: impl Fn([f64; 3]) -> Option<Rgb>) {
    if pixels.iter().flatten().any(|v| !v.is_finite()) || misses(image, pixels) {
        return;
    }
    for piece in shape::subdivision(pieces(order, pixels)) {
        let corners = piece.map(|l| shape::place(order, l, pixels));
        paint_piece(image, corners, piece, &colour);
    }
}

/// True where an element lies beside the image; a curved edge may leave the box of its nodes by a quarter of it.
pub(super) fn misses(image: &Image, pixels: &[[f64; 2]]) -> bool {
    let bound = |k: usize, size: usize| {
        let low = pixels.iter().map(|p| p[k]).fold(f64::INFINITY, f64::min);
        let high = pixels.iter().map(|p| p[k]).fold(f64::NEG_INFINITY, f64::max);
        let slack = 0.25 * (high - low);
        high + slack < 0.0 || low - slack > size as f64
    };
    bound(0, image.width) || bound(1, image.height)
}

fn paint_piece(
    image: &mut Image,
    corners: [[f64; 2]; 3],
    barycentric: [[f64; 3]; 3],
    colour: &impl Fn([f64; 3]) -> Option<Rgb>,
) {
    let [a, b, c] = corners;
    let double_area = (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0]);
    if double_area == 0.0 {
        return;
    }
    let length = |p: [f64; 2], q: [f64; 2]| (q[0] - p[0]).hypot(q[1] - p[1]);
    // A weight of -slack is OVERLAP pixels beyond the edge opposite to its corner.
    let slack = [length(b, c), length(c, a), length(a, b)].map(|l| OVERLAP * l / double_area.abs());
    let range = |k: usize, size: usize| {
        let low = a[k].min(b[k]).min(c[k]) - 0.5 - OVERLAP;
        let high = a[k].max(b[k]).max(c[k]) - 0.5 + OVERLAP;
        let start = low.ceil().clamp(0.0, size as f64) as usize;
        start..(high.floor() + 1.0).clamp(0.0, size as f64) as usize
    };
    let weight = |p: [f64; 2], q: [f64; 2], x: f64, y: f64| {
        ((q[0] - p[0]) * (y - p[1]) - (q[1] - p[1]) * (x - p[0])) / double_area
    };
    let columns = range(0, image.width);
    for row in range(1, image.height) {
        for column in columns.clone() {
            let (x, y) = (column as f64 + 0.5, row as f64 + 0.5);
            let w = [weight(b, c, x, y), weight(c, a, x, y), weight(a, b, x, y)];
            if w.iter().zip(slack).any(|(w, s)| *w < -s) {
                continue;
            }
            let w = clamped(w);
            let l = [0, 1, 2].map(|k| (0..3).map(|i| w[i] * barycentric[i][k]).sum());
            if let Some(rgb) = colour(l) {
                image.set(column, row, rgb);
            }
        }
    }
}

/// Weights brought back into the piece.
fn clamped(w: [f64; 3]) -> [f64; 3] {
    let positive = w.map(|v| v.max(0.0));
    let sum: f64 = positive.iter().sum();
    positive.map(|v| v / sum)
}

#[cfg(test)]
mod tests {
    use super::{View, paint};
    use crate::export::pictures::image::Image;
    use crate::export::pictures::shape;
    use crate::export::pictures::sheet::tests::QUARTER;

    const WHITE: [u8; 3] = [255; 3];
    const BLACK: [u8; 3] = [0; 3];

    #[test]
    fn a_curved_element_covers_its_true_area() {
        let mut image = Image::new(420, 420, WHITE);
        let view = View { left_r: 0.0, top_z: 1.05, scale: 400.0 };
        let pixels: Vec<[f64; 2]> = QUARTER.iter().map(|&p| view.pixel(p)).collect();
        paint(&mut image, 2, &pixels, |_| Some(BLACK));
        let count = image.bytes.chunks(3).filter(|p| *p == BLACK).count() as f64;
        // Under the parabola through three points of the arc: triangle 1/2 plus 2/3 chord x sagitta.
        let chord = 2f64.sqrt();
        let exact = 0.5 + 2.0 / 3.0 * chord * (1.0 - chord / 2.0);
        let area = count / 400f64.powi(2);
        assert!((area / exact - 1.0).abs() < 2e-3, "area {area}, expected {exact}");
    }

    #[test]
    fn pixels_carry_the_quadratic_field_of_their_centres() {
        // An affine element: x = 300 u, y = 300 - 300 v, and a field that is quadratic in the pixel's place.
        let corners = [[0.0, 300.0], [300.0, 300.0], [0.0, 0.0]];
        let middle = |a: usize, b: usize| [0, 1].map(|k| 0.5 * (corners[a][k] + corners[b][k]));
        let pixels = [corners[0], corners[1], corners[2], middle(0, 1), middle(1, 2), middle(2, 0)];
        let field = |p: [f64; 2]| 200.0 * (p[0] / 300.0).powi(2) + 50.0 * (p[1] / 300.0) * (p[0] / 300.0);
        let nodal: Vec<f64> = pixels.iter().map(|&p| field(p)).collect();
        let mut image = Image::new(300, 300, WHITE);
        paint(&mut image, 2, &pixels, |l| Some([shape::interpolate(2, l, &nodal).round() as u8; 3]));
        for (x, y) in [(10, 200), (100, 250), (150, 160), (280, 295)] {
            let expected = field([x as f64 + 0.5, y as f64 + 0.5]).round() as u8;
            assert_eq!(image.pixel(x, y)[0], expected, "at ({x}, {y})");
        }
        assert_eq!(image.pixel(250, 100), WHITE, "outside the element");
    }

    #[test]
    fn neighbours_leave_no_gap() {
        let pixels = |flip: bool| {
            let corner = if flip { [97.3, 88.1] } else { [3.7, 12.9] };
            let (a, b) = ([5.1, 90.2], [95.9, 7.3]);
            let mid = [0.5 * (a[0] + b[0]) + 3.0, 0.5 * (a[1] + b[1]) + 2.0];
            let half = |p: [f64; 2], q: [f64; 2]| [0.5 * (p[0] + q[0]), 0.5 * (p[1] + q[1])];
            [a, b, corner, mid, half(b, corner), half(corner, a)]
        };
        let mut image = Image::new(100, 100, WHITE);
        paint(&mut image, 2, &pixels(false), |_| Some(BLACK));
        paint(&mut image, 2, &pixels(true), |_| Some(BLACK));
        for k in 20..80 {
            assert_eq!(image.pixel(k, 100 - k), BLACK, "gap at {k}");
        }
    }

    #[test]
    fn elements_without_area_or_numbers_paint_nothing() {
        let mut image = Image::new(20, 20, WHITE);
        paint(&mut image, 1, &[[1.0, 1.0], [10.0, 10.0], [19.0, 19.0]], |_| Some(BLACK));
        paint(&mut image, 1, &[[f64::NAN, 1.0], [10.0, 10.0], [19.0, 0.0]], |_| Some(BLACK));
        paint(&mut image, 1, &[[100.0, 1.0], [110.0, 10.0], [119.0, 0.0]], |_| Some(BLACK));
        assert!(image.bytes.iter().all(|&b| b == 255));
    }
}
