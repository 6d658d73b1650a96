//! How far bodies stand apart and where they touch. Lengths in metres, in the section; the whole device as it is drawn.
//!
//! The distance of two outlines is the least over the ends of their pieces and, on arcs, over points between that are brought
//! to the least by golden section (J. Kiefer, 1953).

use mesher::{NO_TRIANGLE, Outline};

use crate::mesh_report::Body;
use crate::model::{Coil, ConductorKind, Model, Part};
use crate::overview::Meshed;

/// Points on an arc from which the least distance is looked for.
const ARC_POINTS: usize = 24;
/// Steps of golden section: 0.618^40 is 4e-9.
const STEPS: usize = 40;
/// Bodies nearer than this touch, metres; as near as a dimension can be written and meant.
const TOUCH_M: f64 = 1e-9;

/// Two bodies and what is between them.
#[derive(Debug, Clone, PartialEq)]
pub struct Neighbours {
    /// The two; the same coil twice stands for its turns among themselves.
    pub bodies: [Body; 2],
    /// Least distance; zero where they touch.
    pub gap_m: f64,
    /// Length in the meshed section along which they touch.
    pub contact_m: f64,
}

impl Neighbours {
    /// True where the two touch, in a point at least.
    pub fn touch(&self) -> bool {
        self.contact_m > 0.0 || self.gap_m <= TOUCH_M
    }
}

/// Pairs of bodies that touch, each body with the one nearest to it, and the turns of each coil among themselves.
pub fn neighbours(model: &Model, meshed: &Meshed) -> Vec<Neighbours> {
    let bodies: Vec<(Body, Vec<&Outline>)> = model
        .parts
        .iter()
        .map(|p: &Part| (Body::Part(p.name.clone()), vec![&p.outline]))
        .chain(
            model
                .coils
                .iter()
                .map(|c: &Coil| (Body::Coil(c.name.clone()), c.turns.iter().map(|t| &t.outline).collect())),
        )
        .collect();
    let contacts = contacts(meshed);
    let mut pairs = Vec::new();
    for (i, (one, outlines)) in bodies.iter().enumerate() {
        for (other, others) in &bodies[i..] {
            let gap_m = if one == other { gap_within(outlines) } else { gap(outlines, others) };
            let same = |c: &&([Body; 2], f64)| c.0 == [one.clone(), other.clone()];
            let contact_m = contacts.iter().find(same).map_or(0.0, |c| c.1);
            pairs.push(Neighbours { bodies: [one.clone(), other.clone()], gap_m, contact_m });
        }
    }
    let nearest = |body: &Body| {
        let of = |p: &&Neighbours| p.bodies[0] != p.bodies[1] && p.bodies.contains(body);
        pairs.iter().filter(of).map(|p| p.gap_m).fold(f64::INFINITY, f64::min)
    };
    let least: Vec<(Body, f64)> = bodies.iter().map(|(body, _)| (body.clone(), nearest(body))).collect();
    let is_nearest = |p: &Neighbours| least.iter().any(|(body, gap)| p.bodies.contains(body) && p.gap_m <= *gap);
    let told = |p: &Neighbours| p.gap_m.is_finite() && (p.touch() || p.bodies[0] == p.bodies[1] || is_nearest(p));
    pairs.iter().filter(|p| told(p)).cloned().collect()
}

/// Pairs of bodies of the mesh that have edges in common, in job order, and the length of these.
fn contacts(meshed: &Meshed) -> Vec<([Body; 2], f64)> {
    let (mesh, names) = (&meshed.mesh, &meshed.layout.regions);
    let mut found: Vec<([usize; 2], f64)> = Vec::new();
    for (e, edge) in mesh.edges().iter().enumerate().filter(|(_, e)| e.triangles[1] != NO_TRIANGLE) {
        let [a, b] = edge.triangles.map(|t| mesh.regions()[t as usize].0 as usize);
        if a == b || a == 0 || b == 0 {
            continue;
        }
        let pair = [a.min(b), a.max(b)];
        match found.iter_mut().find(|f| f.0 == pair) {
            Some(same) => same.1 += mesh.edge_length(e),
            None => found.push((pair, mesh.edge_length(e))),
        }
    }
    found.sort_by_key(|f| f.0);
    let mut by_body: Vec<([Body; 2], f64)> = Vec::new();
    for (pair, length) in found {
        let bodies = pair.map(|region| Body::from(&names[region]));
        match by_body.iter_mut().find(|b| b.0 == bodies) {
            Some(same) => same.1 += length,
            None => by_body.push((bodies, length)),
        }
    }
    by_body
}

/// Least distance of two groups of outlines.
fn gap(ones: &[&Outline], others: &[&Outline]) -> f64 {
    let pairs = ones.iter().flat_map(|one| others.iter().map(move |other| (one, other)));
    pairs.fold(f64::INFINITY, |best, (one, other)| least_distance(one, other, best))
}

/// Least distance between two of a group; infinite for one alone.
fn gap_within(outlines: &[&Outline]) -> f64 {
    let pairs = (1..outlines.len()).flat_map(|i| (0..i).map(move |j| (i, j)));
    pairs.fold(f64::INFINITY, |best, (i, j)| least_distance(outlines[i], outlines[j], best))
}

/// The distance of two outlines, or `best` where they are no nearer than that.
fn least_distance(one: &Outline, other: &Outline, best: f64) -> f64 {
    let ((a, b), (c, d)) = (one.bounds(), other.bounds());
    let apart = [0, 1].map(|k| (c[k] - b[k]).max(a[k] - d[k]).max(0.0));
    if apart[0].hypot(apart[1]) >= best {
        return best;
    }
    best.min(distance_from(one, other)).min(distance_from(other, one))
}

/// Least distance of the ends and arcs of one outline from another.
fn distance_from(one: &Outline, other: &Outline) -> f64 {
    let mut least = f64::INFINITY;
    let at = |piece: usize, t: f64| one.point(piece, t).map_or(f64::INFINITY, |p| other.distance(p));
    for piece in 0..one.len() {
        least = least.min(at(piece, 0.0));
        if !one.is_arc(piece) {
            continue;
        }
        let samples: Vec<f64> = (0..=ARC_POINTS).map(|k| at(piece, k as f64 / ARC_POINTS as f64)).collect();
        let nearest = (0..samples.len()).min_by(|&i, &j| samples[i].total_cmp(&samples[j])).unwrap_or(0);
        let share = |k: usize| k as f64 / ARC_POINTS as f64;
        let range = [share(nearest.saturating_sub(1)), share((nearest + 1).min(ARC_POINTS))];
        least = least.min(samples[nearest]).min(golden(range, |t| at(piece, t)));
    }
    least
}

/// Least value of a function with one valley in a range.
fn golden([mut low, mut high]: [f64; 2], value: impl Fn(f64) -> f64) -> f64 {
    let ratio = 0.5 * (5f64.sqrt() - 1.0);
    let (mut a, mut b) = (high - ratio * (high - low), low + ratio * (high - low));
    let (mut at_a, mut at_b) = (value(a), value(b));
    for _ in 0..STEPS {
        if at_a < at_b {
            (high, b, at_b) = (b, a, at_a);
            a = high - ratio * (high - low);
            at_a = value(a);
        } else {
            (low, a, at_a) = (a, b, at_b);
            b = low + ratio * (high - low);
            at_b = value(b);
        }
    }
    at_a.min(at_b)
}

/// Whether a body is bare metal that would pass current to what it touches.
pub(crate) fn is_bare_metal(model: &Model, body: &Body) -> bool {
    match body {
        Body::Air => false,
        Body::Part(name) => {
            let part = model.parts.iter().find(|p| p.name == *name);
            part.is_some_and(|p| p.material.electrical_conductivity_s_per_m(p.start_k) > 0.0)
        }
        Body::Coil(name) => {
            let coil = model.coils.iter().find(|c| c.name == *name);
            coil.is_some_and(|c| matches!(c.conductor, ConductorKind::Solid))
        }
    }
}

#[cfg(test)]
mod tests {
    #![allow(clippy::unwrap_used, reason = "tests")]

    use super::{gap, gap_within, least_distance};
    use mesher::Outline;

    fn circle(centre: [f64; 2], radius: f64) -> Outline {
        Outline::circle(centre, radius).unwrap()
    }

    fn distance(one: &Outline, other: &Outline) -> f64 {
        least_distance(one, other, f64::INFINITY)
    }

    #[test]
    fn distances_of_circles_and_boxes_are_those_of_geometry() {
        let one = circle([0.05, 0.0], 0.01);
        // Centres 50 mm apart, on a line that meets no end of a piece.
        let other = circle([0.08, 0.04], 0.02);
        assert!((distance(&one, &other) - 0.02).abs() < 1e-12);
        let around = circle([0.051, 0.002], 0.03);
        assert!((distance(&one, &around) - (0.02 - 5f64.sqrt() * 1e-3)).abs() < 1e-12, "one inside the other");
        let corner = Outline::rectangle([0.09, 0.03], [0.1, 0.05]).unwrap();
        assert!((distance(&one, &corner) - 0.04).abs() < 1e-12, "a corner at 50 mm from the centre");
        let side = Outline::rectangle([0.07, -0.02], [0.08, 0.03]).unwrap();
        assert!((distance(&one, &side) - 0.01).abs() < 1e-12);
    }

    #[test]
    fn the_nearest_pair_of_two_groups_counts() {
        let turns: Vec<Outline> = (0..5).map(|k| circle([0.05, 0.02 * f64::from(k)], 0.006)).collect();
        let turns: Vec<&Outline> = turns.iter().collect();
        let bar = Outline::rectangle([0.0, 0.071], [0.04, 0.2]).unwrap();
        assert!((gap_within(&turns) - 0.008).abs() < 1e-12);
        assert!((gap(&turns, &[&bar]) - 0.004).abs() < 1e-12);
        assert_eq!(gap_within(&turns[..1]), f64::INFINITY);
    }

    #[test]
    fn what_touches_is_no_distance_apart() {
        let one = Outline::rectangle([0.0, 0.0], [0.03, 0.1]).unwrap();
        let beside = Outline::rectangle([0.03, 0.02], [0.04, 0.05]).unwrap();
        assert_eq!(distance(&one, &beside), 0.0);
        assert!(distance(&circle([0.05, 0.0], 0.01), &circle([0.07, 0.0], 0.01)) < 1e-15);
    }
}
