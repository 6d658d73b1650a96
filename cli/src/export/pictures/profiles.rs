//! Profiles of a part: across its wall at mid-length, and along its surface and its core.
//! Convention: metres; values are taken a ten-millionth of the part's size inside its surface.

use solver::model::Mirrors;
use solver::results::RegionName;

use super::layer::ElementValues;
use super::shape;
use super::sheet::{Extent, Sheet};

/// Points of a profile.
const POINTS: usize = 240;
/// Distance of samples from the surface, as a fraction of the part's size.
const INSIDE: f64 = 1e-7;
/// Barycentric coordinates may be this much below zero in the element of a sample.
const EXACT: f64 = 1e-7;
/// The same for a sample beside a hollow curved surface, whose straight pieces run a little outside the body.
const BESIDE: f64 = 0.02;

/// Where the profiles of a part run.
#[derive(Debug, Clone)]
pub(super) struct Paths {
    elements: Vec<usize>,
    /// Height of the mirror plane where the part reaches to it, so that the paths along it are half as long as the part.
    pub(super) plane: Option<f64>,
    /// Height of mid-length.
    pub(super) middle_z: f64,
    /// Across at mid-length: places from the inner to the outer surface.
    pub(super) across: Vec<[f64; 2]>,
    /// Along the outer surface.
    pub(super) surface: Vec<[f64; 2]>,
    /// Along the axis, or the inner surface of a hollow part.
    pub(super) core: Vec<[f64; 2]>,
}

impl Paths {
    /// The paths of the part with this index; `None` where the mesh has no such part.
    pub(super) fn of(sheet: &Sheet<'_>, part: usize) -> Option<Self> {
        let of_part = |kind: &RegionName| matches!(kind, RegionName::Part(i, _) if *i == part);
        let Extent { r, z } = sheet.extent(of_part)?;
        let outline = outline(sheet, part);
        let slack = INSIDE * (r[1] - r[0]).max(z[1] - z[0]);
        let plane = match sheet.mirrors {
            Mirrors::One { z_m } if z[0] - z_m <= slack => Some(z_m),
            _ => None,
        };
        let middle_z = plane.map_or(0.5 * (z[0] + z[1]), |z_m| z_m + slack);
        let steps = |low: f64, high: f64| (0..=POINTS).map(move |i| low + (high - low) * i as f64 / POINTS as f64);
        let limits = radii(&outline, middle_z);
        let across = limits.map_or_else(Vec::new, |[inner, outer]| {
            steps(inner_start(inner, slack), outer - slack).map(|r| [r, middle_z]).collect()
        });
        let (mut surface, mut core) = (Vec::new(), Vec::new());
        for z in steps(z[0] + slack, z[1] - slack) {
            if let Some([inner, outer]) = radii(&outline, z) {
                surface.push([outer - slack, z]);
                core.push([inner_start(inner, slack), z]);
            }
        }
        Some(Self { elements: sheet.elements_of(of_part), plane, middle_z, across, surface, core })
    }

    /// Values of a field at places of the part; `NaN` where the part has a hole.
    pub(super) fn sample(&self, sheet: &Sheet<'_>, field: &ElementValues, places: &[[f64; 2]]) -> Vec<f64> {
        let mut last: Option<usize> = None;
        let mut at = |&place: &[f64; 2]| {
            let near: Vec<usize> = last.into_iter().collect();
            let found = sheet
                .find(&near, place, EXACT)
                .or_else(|| sheet.find(&self.elements, place, EXACT))
                .or_else(|| sheet.find(&self.elements, place, BESIDE));
            last = found.map(|f| f.0);
            found.map_or(f64::NAN, |(element, l)| shape::interpolate(sheet.order, l, field.of(sheet, element)))
        };
        places.iter().map(&mut at).collect()
    }
}

/// The axis itself, or a little inside an inner surface.
fn inner_start(inner: f64, slack: f64) -> f64 {
    if inner <= slack { 0.0 } else { inner + slack }
}

/// Surface of a part as straight pieces.
fn outline(sheet: &Sheet<'_>, part: usize) -> Vec<[[f64; 2]; 2]> {
    let edges = sheet.outlines(|kind| matches!(kind, RegionName::Part(i, _) if *i == part));
    let mut pieces = Vec::new();
    for edge in edges {
        let trace = sheet.trace(&edge);
        pieces.extend(trace.windows(2).map(|pair| [pair[0], pair[1]]));
    }
    pieces
}

/// Least and greatest radius of a surface at a height; a body that is met once reaches the axis.
fn radii(outline: &[[[f64; 2]; 2]], z: f64) -> Option<[f64; 2]> {
    let mut met = Vec::new();
    for [a, b] in outline {
        if (a[1] < z) != (b[1] < z) {
            met.push(a[0] + (z - a[1]) / (b[1] - a[1]) * (b[0] - a[0]));
        }
    }
    met.sort_by(f64::total_cmp);
    match met.as_slice() {
        [] => None,
        all if all.len() % 2 == 1 => Some([0.0, all[all.len() - 1]]),
        all => Some([all[0], all[all.len() - 1]]),
    }
}

#[cfg(test)]
mod tests {
    #![allow(clippy::unwrap_used, reason = "tests")]

    use solver::model::Mirrors;
    use solver::results::RegionName;

    use super::Paths;
    use crate::export::pictures::layer::ElementValues;
    use crate::export::pictures::sheet::tests::{QUARTER, QUARTER_NODES, sheet};

    #[test]
    fn profiles_of_half_a_ball_run_from_its_axis_to_its_surface() {
        let part = RegionName::Part(3, "ball".into());
        let kinds = [&part];
        let sheet = sheet(2, &QUARTER, &QUARTER_NODES, &kinds, Mirrors::One { z_m: 0.0 }).unwrap();
        let paths = Paths::of(&sheet, 3).unwrap();
        assert!(paths.middle_z.abs() < 1e-5);
        assert_eq!(paths.across[0][0], 0.0);
        assert!((paths.across.last().unwrap()[0] - 1.0).abs() < 1e-4);
        // The sample field is the radius itself, so a profile returns the places' radii.
        let field = ElementValues { values: QUARTER.iter().map(|p| p[0]).collect(), shown: vec![true] };
        for path in [&paths.across, &paths.core] {
            let values = paths.sample(&sheet, &field, path);
            for (value, place) in values.iter().zip(path) {
                assert!((value - place[0]).abs() < 1e-6, "{value} at {place:?}");
            }
        }
        assert!(Paths::of(&sheet, 0).is_none());
    }
}
