//! What lies to the left and to the right of a stretch. Convention: an outline that runs along a stretch has its inside on the left of its
//! own way of travel, whatever merging has done to it; only outlines that do not run there are asked for the point.

use crate::drawing::{DOMAIN, Drawing, OUTSIDE};
use crate::ids::{along, left_of};
use crate::outline::Outline;
use crate::span::Span;

/// An outline that runs along a stretch.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) struct Run {
    /// Index of the region; none for the domain.
    pub(crate) region: Option<usize>,
    /// Whether it travels as the stretch does.
    pub(crate) forward: bool,
}

/// Sides of a stretch, left and right: see [`crate::drawing`].
pub(crate) fn sides(drawing: &Drawing, span: &Span, runs: &[Run], tolerance: f64) -> [u32; 2] {
    let inside = |outline: &Outline, region: Option<usize>| {
        let own = || runs.iter().filter(|r| r.region == region);
        let net: i32 = own().map(|r| if r.forward { 1 } else { -1 }).sum();
        let middle = span.at(0.5);
        match net {
            1.. => [true, false],
            ..0 => [false, true],
            // Both edges of a sliver or slit that was merged away: what is beside it counts.
            0 if own().next().is_some() => {
                [outline.contains(along(middle, left_of(span.tangent(0.5)), 8.0 * tolerance)); 2]
            }
            0 => [outline.contains(middle); 2],
        }
    };
    let mut sides = inside(&drawing.domain, None).map(|inside| if inside { DOMAIN } else { OUTSIDE });
    for (k, region) in drawing.regions.iter().enumerate() {
        for (side, inside) in sides.iter_mut().zip(inside(&region.outline, Some(k))) {
            if inside && *side != OUTSIDE {
                *side = k as u32 + 1;
            }
        }
    }
    sides
}
