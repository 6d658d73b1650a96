//! Random valid sections: parts of many shapes, each placed freely, against, inside, around, tangent to or on a corner of an earlier one.
//! Convention: metres; a section is a function of its seed alone. Gaps are uniform in the logarithm from 1e-9 to 1 of the section's
//! size, wedges from 0.1 to 60 degrees. Shapes and shares are a choice of our own.

use super::random::Random;
use super::{AIR, drawing, region};
use mesher::{Drawing, Layers, Outline, Piece, Point, RegionId};
use std::f64::consts::{FRAC_PI_2, PI, TAU};

/// Narrowest gap drawn, over the size of the section.
const NARROWEST: f64 = 1e-9;
/// Smallest wedge drawn, in degrees.
const SHARPEST_DEG: f64 = 0.1;

/// The section of a seed.
pub(crate) fn section(seed: u64) -> Drawing {
    let mut random = Random::new(seed);
    let size = random.log_between(1e-3, 10.0);
    let domain = domain(&mut random, size);
    let domain_size = size * random.log_between(0.05, 0.3);
    let mut regions: Vec<mesher::Region> = Vec::new();
    let count = 1 + random.below(6);
    while regions.len() < count {
        let earlier: Vec<Outline> = regions.iter().map(|r| r.outline.clone()).collect();
        let Some((outline, under)) = part(&mut random, size, &earlier) else {
            continue;
        };
        let hole = !regions.is_empty() && random.chance(0.15);
        let id = if hole { AIR } else { RegionId(regions.len() as u32 + 1) };
        let (lo, hi) = outline.bounds();
        let extent = (hi[0] - lo[0]).hypot(hi[1] - lo[1]);
        let surface = extent * random.log_between(0.03, 0.3);
        let interior = surface * random.between(1.0, 3.0);
        let layers = (!hole && random.chance(0.5)).then(|| Layers {
            first: extent * random.log_between(1e-3, 0.1),
            growth: random.between(1.0, 2.0),
            count: 1 + random.below(7),
        });
        let at = if under { random.below(regions.len() + 1) } else { regions.len() };
        regions.insert(at, region(id, outline, interior, surface, layers));
    }
    let mut section = drawing(domain, domain_size, regions);
    section.gradation = random.between(0.3, 0.5);
    section.boundary_size = random.chance(0.3).then(|| domain_size * random.between(0.3, 1.0));
    section
}

fn domain(random: &mut Random, size: f64) -> Outline {
    let outline = match random.below(4) {
        0 => Outline::half_disc(0.1 * size, size),
        1 => Outline::quarter_disc(-0.05 * size, size),
        2 => Outline::rectangle([0.0, -0.6 * size], [0.9 * size, 0.7 * size]),
        _ => Outline::rectangle([0.1 * size, -0.3 * size], [size, 0.3 * size]),
    };
    outline.unwrap()
}

/// The outline of a part, and whether it may be painted under earlier ones; `None` if what was drawn is no outline.
fn part(random: &mut Random, size: f64, earlier: &[Outline]) -> Option<(Outline, bool)> {
    let extent = size * random.log_between(0.02, 0.5);
    if earlier.is_empty() || random.chance(0.25) {
        let at = [size * random.between(-0.05, 0.8), size * random.between(-0.5, 0.5)];
        return Some((free(random, extent, at)?, random.chance(0.2)));
    }
    let host = &earlier[random.below(earlier.len())];
    let gap = if random.chance(0.35) { 0.0 } else { size * random.log_between(NARROWEST, 1.0) };
    match random.below(6) {
        0 | 1 => Some((against(random, host, gap, extent)?, false)),
        2 => Some((tangent(random, host, gap, extent)?, random.chance(0.3))),
        3 => Some((at_corner(random, host, extent)?, false)),
        4 => Some((scaled(random, host, gap)?, true)),
        _ => Some((wedge_beside(random, host, extent)?, false)),
    }
}

/// A shape of about the given extent, turned, at a place or on the axis.
fn free(random: &mut Random, extent: f64, at: Point) -> Option<Outline> {
    let (start, pieces) = shape(random, extent)?;
    let angle = match random.below(10) {
        0..6 => 0.0,
        6..8 => FRAC_PI_2 * random.below(4) as f64,
        _ => random.between(0.0, TAU),
    };
    let on_axis = random.chance(0.2);
    moved(start, &pieces, angle, [if on_axis { 0.0 } else { at[0] }, at[1]])
}

type Loop = (Point, Vec<Piece>);

fn shape(random: &mut Random, extent: f64) -> Option<Loop> {
    let line = |to| Piece::Line { to };
    let outline = match random.below(9) {
        0 => rectangle(random, extent, 1.0),
        1 => {
            let wall = random.log_between(1e-4, 0.1);
            rectangle(random, extent, wall)
        }
        2 => Outline::circle([0.0; 2], 0.5 * extent).ok()?,
        3 => {
            let angle = random.log_between(SHARPEST_DEG, 60.0).to_radians();
            let side = extent * random.between(0.3, 1.0);
            Outline::polygon(&[[0.0; 2], [extent, 0.0], [side * angle.cos(), side * angle.sin()]]).ok()?
        }
        4 => {
            let n = 3 + random.below(7);
            let mut point = |i: usize| {
                let (s, c) = (TAU * i as f64 / n as f64).sin_cos();
                let radius = extent * random.between(0.15, 0.5);
                [radius * c, radius * s]
            };
            let points: Vec<Point> = (0..n).map(&mut point).collect();
            Outline::polygon(&points).ok()?
        }
        5 => sector(random.between(0.1, 1.0) * extent, extent, random.between(0.1, 6.1), 0.0)?,
        6 => segment(extent, random.log_between(0.02, 3.0))?,
        7 => lens(extent, random.log_between(0.05, 3.0), random.log_between(0.05, 3.0))?,
        _ => {
            let step = [extent * random.between(0.2, 0.8), extent * random.between(0.2, 0.8)];
            let corners = [[0.0; 2], [extent, 0.0], [extent, step[1]], step, [step[0], extent], [0.0, extent]];
            let pieces = corners[1..].iter().chain([&corners[0]]).map(|&to| line(to)).collect();
            Outline::new(corners[0], pieces).ok()?
        }
    };
    Some((outline.start(), outline.pieces()))
}

/// A rectangle with sharp or rounded corners, `ratio` as high as it is wide or less.
fn rectangle(random: &mut Random, extent: f64, ratio: f64) -> Outline {
    let height = extent * ratio * random.between(0.2, 1.0);
    let (lo, hi) = ([-0.5 * extent, -0.5 * height], [0.5 * extent, 0.5 * height]);
    let fillet = if random.chance(0.5) { 0.0 } else { height.min(extent) * random.log_between(1e-3, 0.5) };
    Outline::rounded_rectangle(lo, hi, fillet).unwrap()
}

/// The piece of a ring between two radii and over an angle, from angle `from`.
fn sector(inner: f64, outer: f64, angle: f64, from: f64) -> Option<Outline> {
    let at = |radius: f64, angle: f64| [radius * angle.cos(), radius * angle.sin()];
    let arc = |to, counter_clockwise| Piece::Arc { to, centre: [0.0; 2], counter_clockwise };
    let start = at(inner, from);
    let pieces = vec![
        Piece::Line { to: at(outer, from) },
        arc(at(outer, from + angle), true),
        Piece::Line { to: at(inner, from + angle) },
        arc(start, false),
    ];
    Outline::new(start, pieces).ok()
}

/// A chord and an arc that leaves it under half the given turn.
fn segment(chord: f64, turn: f64) -> Option<Outline> {
    let radius = 0.5 * chord / (0.5 * turn).sin();
    let (a, b) = ([-0.5 * chord, 0.0], [0.5 * chord, 0.0]);
    let centre = [0.0, -radius * (0.5 * turn).cos()];
    Outline::new(a, vec![Piece::Line { to: b }, Piece::Arc { to: a, centre, counter_clockwise: true }]).ok()
}

/// Two arcs over one chord.
fn lens(chord: f64, upper: f64, lower: f64) -> Option<Outline> {
    let (a, b) = ([-0.5 * chord, 0.0], [0.5 * chord, 0.0]);
    let depth = |turn: f64| 0.5 * chord / (0.5 * turn).tan();
    let arc = |to, z| Piece::Arc { to, centre: [0.0, z], counter_clockwise: true };
    Outline::new(a, vec![arc(b, depth(lower)), arc(a, -depth(upper))]).ok()
}

/// A part with one side along a piece of the host at the given gap: on all of it or on a stretch.
fn against(random: &mut Random, host: &Outline, gap: f64, extent: f64) -> Option<Outline> {
    let (from, piece) = pick(random, host);
    let whole = random.chance(0.4);
    let (t0, t1) = if whole { (0.0, 1.0) } else { (random.between(-0.3, 0.4), random.between(0.6, 1.3)) };
    match piece {
        Piece::Line { to } => {
            let at = |t: f64, depth: f64| {
                let d = [to[0] - from[0], to[1] - from[1]];
                let length = d[0].hypot(d[1]);
                [from[0] + t * d[0] + depth * d[1] / length, from[1] + t * d[1] - depth * d[0] / length]
            };
            Outline::polygon(&[at(t0, gap), at(t0, gap + extent), at(t1, gap + extent), at(t1, gap)]).ok()
        }
        Piece::Arc { to, centre, counter_clockwise } => {
            let radius = (from[0] - centre[0]).hypot(from[1] - centre[1]);
            let angle = |p: Point| (p[1] - centre[1]).atan2(p[0] - centre[0]);
            let (first, last) = if counter_clockwise { (from, to) } else { (to, from) };
            let turn = (angle(last) - angle(first)).rem_euclid(TAU);
            let (inner, outer) = if counter_clockwise {
                (radius + gap, radius + gap + extent)
            } else {
                (radius - gap - extent, radius - gap)
            };
            let (t0, t1) = if whole { (0.0, 1.0) } else { (random.between(0.0, 0.4), random.between(0.5, 1.0)) };
            let flat = (inner > 0.0).then(|| sector(inner, outer, (t1 - t0) * turn, angle(first) + t0 * turn))??;
            flat.translated(centre).ok()
        }
    }
}

/// A circle that touches a piece of the host from outside or inside, or stays off by the gap.
fn tangent(random: &mut Random, host: &Outline, gap: f64, extent: f64) -> Option<Outline> {
    let index = random.below(host.len());
    let t = random.between(0.1, 0.9);
    let (p, ahead) = (host.point(index, t)?, host.point(index, t + 1e-6)?);
    let d = [ahead[0] - p[0], ahead[1] - p[1]];
    let length = d[0].hypot(d[1]);
    let out = [d[1] / length, -d[0] / length];
    let reach = (0.5 * extent + gap) * if random.chance(0.6) { 1.0 } else { -1.0 };
    Outline::circle([p[0] + reach * out[0], p[1] + reach * out[1]], 0.5 * extent).ok()
}

/// A shape whose first corner is a corner of the host.
fn at_corner(random: &mut Random, host: &Outline, extent: f64) -> Option<Outline> {
    let corner = host.point(random.below(host.len()), 0.0)?;
    let (start, pieces) = shape(random, extent)?;
    let angle = if random.chance(0.5) { FRAC_PI_2 * random.below(4) as f64 } else { random.between(0.0, TAU) };
    let origin = moved(start, &pieces, angle, [0.0; 2])?.start();
    moved(start, &pieces, angle, [corner[0] - origin[0], corner[1] - origin[1]])
}

/// The host again, or drawn smaller or larger about a point inside its box by the gap.
fn scaled(random: &mut Random, host: &Outline, gap: f64) -> Option<Outline> {
    let (lo, hi) = host.bounds();
    let least = (hi[0] - lo[0]).min(hi[1] - lo[1]);
    let factor = if random.chance(0.7) { 1.0 - 2.0 * gap / least } else { 1.0 + 2.0 * gap / least };
    let centre = [0, 1].map(|k| lo[k] + (hi[k] - lo[k]) * random.between(0.4, 0.6));
    let at = |p: Point| [0, 1].map(|k| centre[k] + factor * (p[k] - centre[k]));
    let pieces = host.pieces().into_iter().map(|piece| match piece {
        Piece::Line { to } => Piece::Line { to: at(to) },
        Piece::Arc { to, centre, counter_clockwise } => {
            Piece::Arc { to: at(to), centre: at(centre), counter_clockwise }
        }
    });
    (factor > 0.01 && factor < 4.0).then(|| Outline::new(at(host.start()), pieces.collect()).ok())?
}

/// A triangle that leaves a small wedge open between itself and a straight piece of the host.
fn wedge_beside(random: &mut Random, host: &Outline, extent: f64) -> Option<Outline> {
    let (from, piece) = pick(random, host);
    let to = piece.to();
    let along = (to[1] - from[1]).atan2(to[0] - from[0]);
    let open = random.log_between(SHARPEST_DEG, 60.0).to_radians();
    let second = open + random.log_between(SHARPEST_DEG, 60.0).to_radians();
    let share = if random.chance(0.5) { 0.0 } else { random.between(0.1, 0.9) };
    let tip = [from[0] + share * (to[0] - from[0]), from[1] + share * (to[1] - from[1])];
    let at = |angle: f64| [tip[0] + extent * (along - angle).cos(), tip[1] + extent * (along - angle).sin()];
    (second < PI).then(|| Outline::polygon(&[tip, at(second), at(open)]).ok())?
}

/// A piece of an outline with the point it starts from.
fn pick(random: &mut Random, host: &Outline) -> (Point, Piece) {
    let pieces = host.pieces();
    let index = random.below(pieces.len());
    let from = if index == 0 { host.start() } else { pieces[index - 1].to() };
    (from, pieces[index])
}

fn moved(start: Point, pieces: &[Piece], angle: f64, shift: Point) -> Option<Outline> {
    let (s, c) = if angle == 0.0 { (0.0, 1.0) } else { angle.sin_cos() };
    let at = |p: Point| [shift[0] + c * p[0] - s * p[1], shift[1] + s * p[0] + c * p[1]];
    let pieces = pieces.iter().map(|piece| match *piece {
        Piece::Line { to } => Piece::Line { to: at(to) },
        Piece::Arc { to, centre, counter_clockwise } => {
            Piece::Arc { to: at(to), centre: at(centre), counter_clockwise }
        }
    });
    Outline::new(at(start), pieces.collect()).ok()
}
