//! What is to be meshed: a domain, regions painted over it, and sizes. Convention: lengths in metres; later regions are painted over
//! earlier ones; whatever lies outside the domain is dropped.

use crate::error::MeshError;
use crate::ids::{RegionId, distance};
use crate::outline::Outline;

/// A strip of thin layers along the surface of a region, into the region.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Layers {
    /// Thickness of the outermost layer, in metres.
    pub first: f64,
    /// Ratio of each layer to the one outside it, 1 to 4.
    pub growth: f64,
    /// Number of layers wanted; more are added, each at most 1.6 of the last, until they are as thick as the elements are long.
    pub count: usize,
}

/// A part of the section with its own identity and element sizes.
#[derive(Debug, Clone, PartialEq)]
pub struct Region {
    /// Identity given to its triangles.
    pub id: RegionId,
    /// Its outline; what lies outside the domain or under later regions is dropped.
    pub outline: Outline,
    /// Largest element inside, in metres.
    pub interior_size: f64,
    /// Element size along its surface, in metres.
    pub surface_size: f64,
    /// Strip along its surface, if one is wanted.
    pub layers: Option<Layers>,
}

/// A smaller element size along one piece of a region's outline.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LineSize {
    /// Index of the region in the drawing.
    pub region: usize,
    /// Piece of its outline.
    pub piece: usize,
    /// Element size along it, in metres.
    pub size: f64,
}

/// A section to be meshed.
#[derive(Debug, Clone, PartialEq)]
pub struct Drawing {
    /// What is meshed.
    pub domain: Outline,
    /// Identity of whatever no region covers.
    pub domain_region: RegionId,
    /// Largest element anywhere, in metres.
    pub domain_size: f64,
    /// Regions in the order they are painted.
    pub regions: Vec<Region>,
    /// Growth of the element size with distance, metres per metre; 0.3 to 0.5 is usual.
    pub gradation: f64,
    /// Element size along the arcs of the domain outline, in metres; `domain_size` if not given.
    pub boundary_size: Option<f64>,
    /// Pieces of outlines along which elements are to be smaller than their region's size.
    pub line_sizes: Vec<LineSize>,
}

/// What a mesh may cost.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Limits {
    /// Largest number of triangles.
    pub max_triangles: usize,
}

impl Default for Limits {
    fn default() -> Self {
        Self { max_triangles: 2_000_000 }
    }
}

/// Side of a curve: the domain outside every region, or outside the domain altogether, or `1 +` the index of a region.
pub(crate) const DOMAIN: u32 = 0;
pub(crate) const OUTSIDE: u32 = u32::MAX;

impl Drawing {
    /// Extent of the domain, in metres: the diagonal of its box.
    pub(crate) fn extent(&self) -> f64 {
        let (lo, hi) = self.domain.bounds();
        distance(lo, hi)
    }

    /// Refuses sizes that are not positive, not finite or beyond reason.
    pub(crate) fn check(&self) -> Result<(), MeshError> {
        let within = |what, value: f64, above: f64, limit: f64| {
            if value > above && value <= limit {
                Ok(())
            } else {
                Err(MeshError::BadNumber { what, value, above, limit })
            }
        };
        let least = 1e-8 * self.extent();
        let size = |what, value| within(what, value, least, f64::MAX);
        size("the domain's element size in metres", self.domain_size)?;
        within("the gradation", self.gradation, 1e-3, 2.0)?;
        if let Some(boundary) = self.boundary_size {
            size("the element size along the domain's arcs in metres", boundary)?;
        }
        for line in &self.line_sizes {
            size("the element size along a piece of an outline in metres", line.size)?;
            let pieces = self.regions.get(line.region).map_or(0, |r| r.outline.len());
            within(
                "the number of pieces of an outline with a size of its own",
                pieces as f64,
                line.piece as f64,
                f64::MAX,
            )?;
        }
        for region in &self.regions {
            size("a region's interior element size in metres", region.interior_size)?;
            size("a region's surface element size in metres", region.surface_size)?;
            if let Some(layers) = region.layers {
                size("the thickness of the first layer in metres", layers.first)?;
                within("the growth of the layers", layers.growth, 0.999_999, 4.0)?;
                within("the number of layers", layers.count as f64, 0.0, 60.0)?;
            }
        }
        Ok(())
    }

    /// Smallest element size asked for, in metres.
    pub(crate) fn smallest(&self) -> f64 {
        let regions = self.regions.iter().map(|r| r.interior_size.min(r.surface_size));
        regions.chain(self.line_sizes.iter().map(|line| line.size)).fold(self.domain_size, f64::min)
    }

    /// Index into the side convention of the topmost region at a point inside the domain.
    pub(crate) fn side_at(&self, p: [f64; 2]) -> u32 {
        if !self.domain.contains(p) {
            return OUTSIDE;
        }
        let top = self.regions.iter().rposition(|r| r.outline.contains(p));
        top.map_or(DOMAIN, |i| i as u32 + 1)
    }

    pub(crate) fn region_of(&self, side: u32) -> Option<&Region> {
        if side == DOMAIN || side == OUTSIDE { None } else { self.regions.get(side as usize - 1) }
    }

    pub(crate) fn id_of(&self, side: u32) -> RegionId {
        self.region_of(side).map_or(self.domain_region, |r| r.id)
    }
}
