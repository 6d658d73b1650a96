//! Where the columns of a strip stand along a surface: at the feet of the corner steps, then further and further apart up to the surface
//! size. Convention: both sides of a stretch share its columns.

use super::Strips;
use super::junction::Style;
use super::loops::Loop;
use crate::facing::Facing;
use crate::noding::Graph;
use crate::size_field::{SizeField, divide, pieces_of_turn};
use crate::span::Span;

/// Largest part of a stretch that the steps at its ends may take.
const MOST_OF_STRETCH: f64 = 0.8;
/// Growth of the column spacing beyond the steps: ratio, and as a gradation.
const SPACING_GROWTH: f64 = 1.5;
const SPACING_GRADATION: f64 = 0.45;

/// Divides every stretch that carries a strip on either side.
pub(super) fn divide_surfaces(
    graph: &Graph,
    loops: &[Loop],
    field: &SizeField,
    max_turn: f64,
    facing: &mut Facing,
    strips: &mut Strips,
) {
    for (i, stretch) in graph.stretches.iter().enumerate() {
        let mut users: Vec<(&Loop, usize)> = loops
            .iter()
            .flat_map(|l| {
                l.uses.iter().enumerate().filter(|(_, u)| u.stretch == i && !u.bare).map(move |(k, _)| (l, k))
            })
            .collect();
        if users.is_empty() {
            continue;
        }
        users.sort_by(|a, b| a.0.depths[1].total_cmp(&b.0.depths[1]));
        let length = stretch.span.length();
        let [head, tail] = [false, true].map(|at_end| {
            users.iter().map(|&(l, k)| reserve(l, k, at_end)).find(|r| r.len() > 1).unwrap_or_else(|| vec![0.0])
        });
        let [head, tail] = steps(length, head, tail, |x| field.at(stretch.span.at(x / length)));
        let mut middle = middle(&stretch.span, &head, &tail, field, max_turn);
        facing.match_marks(i, &mut middle, |t| field.at(stretch.span.at(t)));
        let mut marks: Vec<f64> = head[..head.len() - 1].iter().map(|x| x / length).collect();
        marks.extend(middle);
        marks.extend(tail[..tail.len() - 1].iter().rev().map(|x| 1.0 - x / length));
        facing.place(i, marks.iter().map(|&t| stretch.span.at(t)));
        let mut chain = vec![stretch.ends[0]];
        for &t in &marks[1..marks.len() - 1] {
            chain.push(strips.add_point(graph, stretch.span.at(t)));
        }
        chain.push(stretch.ends[1]);
        strips.divisions[i] = Some(chain);
    }
}

/// Distances from one end of the stretch (in its own direction) at which columns are to stand for the sake of the junction there.
fn reserve(l: &Loop, k: usize, at_end: bool) -> Vec<f64> {
    let n = l.uses.len();
    let start_of_use = l.uses[k].reversed == at_end;
    let (junction, side) = if start_of_use { (&l.junctions[k], 1) } else { (&l.junctions[(k + 1) % n], 0) };
    match junction.style {
        Style::Steps if junction.matched => {
            let mut feet = Vec::new();
            for foot in &junction.feet[side] {
                match *foot {
                    Some(f) if feet.last().is_none_or(|&last| f > last) => feet.push(f),
                    _ => break,
                }
            }
            feet
        }
        Style::Fan => l.depths.clone(),
        _ => vec![0.0],
    }
}

/// The steps at both ends, without those wider than the surface size (left to the even division) and those that would meet.
fn steps(length: f64, mut head: Vec<f64>, mut tail: Vec<f64>, size: impl Fn(f64) -> f64) -> [Vec<f64>; 2] {
    for (steps, from_end) in [(&mut head, false), (&mut tail, true)] {
        let fits = |w: &[f64]| w[1] - w[0] <= 1.3 * size(if from_end { length - w[1] } else { w[1] });
        let kept = 1 + steps.windows(2).take_while(|w| fits(w)).count();
        steps.truncate(kept);
    }
    while head[head.len() - 1] + tail[tail.len() - 1] > MOST_OF_STRETCH * length {
        if head[head.len() - 1] >= tail[tail.len() - 1] {
            head.pop();
        } else {
            tail.pop();
        }
    }
    [head, tail]
}

/// Parameters of the columns between the steps, those at the last steps included.
fn middle(span: &Span, head: &[f64], tail: &[f64], field: &SizeField, max_turn: f64) -> Vec<f64> {
    let length = span.length();
    let spacing = |steps: &[f64]| match steps {
        [.., a, b] => (b - a) * SPACING_GROWTH,
        _ => f64::INFINITY,
    };
    let (h0, h1) = (spacing(head), spacing(tail));
    let (x0, x1) = (head[head.len() - 1], length - tail[tail.len() - 1]);
    let fewest = (f64::from(pieces_of_turn(span, max_turn)) * (x1 - x0) / length - 1e-9).ceil() as u32;
    divide(span, x0 / length, x1 / length, fewest, |t| {
        let x = t * length;
        field.at(span.at(t)).min(h0 + SPACING_GRADATION * (x - x0)).min(h1 + SPACING_GRADATION * (x1 - x))
    })
}
