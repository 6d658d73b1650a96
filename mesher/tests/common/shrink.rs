//! Makes a failing section smaller while it still fails. Convention: regions are named by their index in the section as drawn.

use mesher::Drawing;

/// The smallest section found that still fails, by leaving out regions, then strips.
pub(crate) fn shrunk(section: &Drawing, fails: &dyn Fn(&Drawing) -> bool) -> (Drawing, Vec<usize>) {
    let mut least = section.clone();
    let mut kept: Vec<usize> = (0..section.regions.len()).collect();
    let mut k = 0;
    while k < kept.len() {
        let mut fewer = least.clone();
        fewer.regions.remove(k);
        if fails(&fewer) {
            least = fewer;
            kept.remove(k);
            k = 0;
        } else {
            k += 1;
        }
    }
    for k in 0..kept.len() {
        let mut bare = least.clone();
        if bare.regions[k].layers.take().is_some() && fails(&bare) {
            least = bare;
        }
    }
    (least, kept)
}

/// The section in words that can be read back: every outline with all digits.
pub(crate) fn described(section: &Drawing) -> String {
    let domain = format!(
        "domain from {:?} {:?}, size {:e}, gradation {}, boundary {:?}",
        section.domain.start(),
        section.domain.pieces(),
        section.domain_size,
        section.gradation,
        section.boundary_size
    );
    let regions = section.regions.iter().map(|r| {
        let (start, pieces) = (r.outline.start(), r.outline.pieces());
        let sizes = format!("interior {:e}, surface {:e}, {:?}", r.interior_size, r.surface_size, r.layers);
        format!("region {} from {start:?} {pieces:?}, {sizes}", r.id.0)
    });
    std::iter::once(domain).chain(regions).collect::<Vec<_>>().join("\n  ")
}
