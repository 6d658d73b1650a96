//! Sections whose meshing is timed: four devices, each as a job asks for it (skin strips, graded sizes) and with elements of one size
//! everywhere, for the rate. Convention: metres; region 0 is air.

mod billet;
mod crucible;
mod pancake;
mod tube;

use mesher::{Drawing, Layers, Outline, OutlineError, Region, RegionId};

/// What surrounds the parts, and fills bores.
pub const AIR: RegionId = RegionId(0);

/// Mean area of the triangles of a mesh of one size over the square of that size (measured; it only turns a wanted number of
/// triangles into a size).
const AREA_PER_SIZE_SQUARED: f64 = 0.36;

/// How finely a section is meshed.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Detail {
    /// Strips of thin layers along conducting surfaces, elements graded from there: 12 000 to 16 000 triangles.
    Skin,
    /// No strips, one size everywhere, for about this many triangles.
    Uniform(usize),
}

impl Detail {
    /// All that are timed.
    pub const ALL: [Self; 3] = [Self::Skin, Self::Uniform(100_000), Self::Uniform(500_000)];

    /// Short name: `skin`, `100k`, `500k`.
    pub fn name(self) -> String {
        match self {
            Self::Skin => "skin".to_owned(),
            Self::Uniform(count) => format!("{}k", count / 1000),
        }
    }
}

/// A device whose section is meshed.
#[derive(Debug, Clone, Copy)]
pub struct Section {
    /// Short name.
    pub name: &'static str,
    graded: fn() -> Result<Drawing, OutlineError>,
}

impl Section {
    /// All sections: a billet heater of 12 hollow turns, a pancake coil of 40 turns over ferrite, a tube 0.1 mm from its liner, a
    /// crucible with round corners.
    pub const ALL: [Self; 4] = [
        Self { name: "billet", graded: billet::drawing },
        Self { name: "pancake", graded: pancake::drawing },
        Self { name: "tube", graded: tube::drawing },
        Self { name: "crucible", graded: crucible::drawing },
    ];

    /// The section of that name.
    pub fn named(name: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|s| s.name == name)
    }

    /// Its drawing.
    ///
    /// # Errors
    /// An outline the mesher refuses.
    pub fn drawing(&self, detail: Detail) -> Result<Drawing, OutlineError> {
        let drawing = (self.graded)()?;
        Ok(match detail {
            Detail::Skin => drawing,
            Detail::Uniform(count) => uniform(drawing, count),
        })
    }
}

/// The drawing without strips and with one size everywhere, for about `count` triangles.
fn uniform(mut drawing: Drawing, count: usize) -> Drawing {
    let size = (drawing.domain.area() / (AREA_PER_SIZE_SQUARED * count as f64)).sqrt();
    drawing.domain_size = size;
    drawing.boundary_size = None;
    for region in &mut drawing.regions {
        region.interior_size = size;
        region.surface_size = size;
        region.layers = None;
    }
    drawing
}

/// Layers for a skin depth in metres: the first a third of it, five of them, each half as thick again as the one outside it.
fn skin(depth: f64) -> Option<Layers> {
    (depth > 0.0).then_some(Layers { first: depth / 3.0, growth: 1.5, count: 5 })
}

/// A region with its sizes in metres inside and along its surface; `depth` is its skin depth, 0 without a strip.
fn region(id: RegionId, outline: Outline, [interior_size, surface_size]: [f64; 2], depth: f64) -> Region {
    Region { id, outline, interior_size, surface_size, layers: skin(depth) }
}

/// Regions in a half disc of air of the given radius about the origin, in metres.
fn in_half_disc(radius: f64, regions: Vec<Region>) -> Result<Drawing, OutlineError> {
    Ok(Drawing {
        domain: Outline::half_disc(0.0, radius)?,
        domain_region: AIR,
        domain_size: radius / 6.0,
        regions,
        gradation: 0.4,
        boundary_size: Some(radius / 14.0),
        line_sizes: Vec::new(),
    })
}
