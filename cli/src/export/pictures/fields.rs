//! Quantities of a snapshot as values on elements, in the units of the maps.
//! Convention: fields are peak phasors; |B| is shown at its peak, current density rms, losses as means over a period.

use num_complex::Complex64;
use solver::constants::ZERO_CELSIUS_K;
use solver::results::{FieldMaps, RegionName, Snapshot};

use super::PictureError;
use super::layer::ElementValues;
use super::map::MapOf;
use super::scale::Spread;
use super::shape;
use super::sheet::Sheet;

/// Loss density in W/cm³.
pub(super) fn loss_density(sheet: &Sheet<'_>, snapshot: &Snapshot) -> Result<MapOf, PictureError> {
    let field = loss_values(sheet, &snapshot.field, snapshot.field_factor)?;
    Ok(MapOf {
        label: "Loss density in W/cm\u{b3}".into(),
        unit: "W/cm\u{b3}",
        gradient: colorous::VIRIDIS,
        spread: Spread::ByRange,
        field,
        leading_parts: Vec::new(),
        least_matters: false,
        remark: "grey: no loss",
    })
}

/// Joule loss density in W/cm^3, shown in bodies with losses.
pub(super) fn loss_values(sheet: &Sheet<'_>, maps: &FieldMaps, factor: f64) -> Result<ElementValues, PictureError> {
    check(sheet, "loss densities", maps.joule_loss_w_per_m3.len())?;
    let values: Vec<f64> = maps.joule_loss_w_per_m3.iter().map(|p| p * factor * factor * 1e-6).collect();
    Ok(where_present(sheet, values))
}

/// Current density in A/mm², rms.
pub(super) fn current_density(sheet: &Sheet<'_>, snapshot: &Snapshot) -> Result<MapOf, PictureError> {
    let density = &snapshot.field.current_density_a_per_m2;
    check(sheet, "current densities", density.len())?;
    let factor = snapshot.field_factor.abs() * std::f64::consts::FRAC_1_SQRT_2 * 1e-6;
    Ok(MapOf {
        label: "Current density in A/mm\u{b2}, rms".into(),
        unit: "A/mm\u{b2} rms",
        gradient: colorous::PLASMA,
        spread: Spread::ByRange,
        field: where_present(sheet, density.iter().map(|j| j.norm() * factor).collect()),
        leading_parts: Vec::new(),
        least_matters: false,
        remark: "grey: no current",
    })
}

/// Largest flux density over a period in tesla.
pub(super) fn flux_density(sheet: &Sheet<'_>, snapshot: &Snapshot) -> Result<MapOf, PictureError> {
    let density = &snapshot.field.flux_density_t;
    check(sheet, "flux densities", density.len())?;
    let factor = snapshot.field_factor.abs();
    let values = density.iter().map(|&b| factor * greatest_over_period(b)).collect();
    Ok(MapOf {
        label: "Flux density in T, peak".into(),
        unit: "T",
        gradient: colorous::CIVIDIS,
        spread: Spread::LinearWithoutOutliers,
        field: ElementValues { values, shown: vec![true; sheet.element_count()] },
        leading_parts: Vec::new(),
        least_matters: false,
        remark: "",
    })
}

/// Half the greater axis of the ellipse that a vector of two phasors runs through.
///
/// `max over t of |Re(b e^{jwt})|^2 = (|b_r|^2 + |b_z|^2 + |b_r^2 + b_z^2|) / 2`, since the square of the real vector is
/// half its constant part and half the real part of `(b . b) e^{2jwt}`.
fn greatest_over_period(b: [Complex64; 2]) -> f64 {
    let constant = b[0].norm_sqr() + b[1].norm_sqr();
    (0.5 * (constant + (b[0] * b[0] + b[1] * b[1]).norm())).sqrt()
}

/// Temperature in °C of nodes in kelvin; the scale goes by `leading_parts` where others are much colder or hotter.
pub(super) fn temperature(
    sheet: &Sheet<'_>,
    kelvin: &[f64],
    label: &str,
    leading_parts: &[usize],
) -> Result<MapOf, PictureError> {
    Ok(MapOf {
        label: format!("{label} in \u{b0}C"),
        unit: "\u{b0}C",
        gradient: colorous::INFERNO,
        spread: Spread::Linear,
        field: temperature_values(sheet, kelvin)?,
        leading_parts: leading_parts.to_vec(),
        least_matters: true,
        remark: "grey: not heated",
    })
}

/// Temperatures in degrees Celsius, shown in heated parts.
pub(super) fn temperature_values(sheet: &Sheet<'_>, kelvin: &[f64]) -> Result<ElementValues, PictureError> {
    if kelvin.len() != sheet.points.len() {
        return Err(PictureError::Length { what: "temperatures", expected: sheet.points.len(), found: kelvin.len() });
    }
    let mut values = Vec::with_capacity(sheet.element_count() * shape::node_count(sheet.order));
    for element in 0..sheet.element_count() {
        values.extend(sheet.nodes(element).iter().map(|&n| kelvin[n as usize] - ZERO_CELSIUS_K));
    }
    let mut field = ElementValues { values, shown: vec![false; sheet.element_count()] };
    // A part is heated where all its nodes have a temperature; a neighbour shares only those on its rim.
    for elements in bodies(sheet) {
        let heated = elements.iter().all(|&e| field.of(sheet, e).iter().all(|t| t.is_finite()));
        show(&mut field, &elements, heated);
    }
    Ok(field)
}

/// Values shown in the parts and coils in which they are not all zero.
fn where_present(sheet: &Sheet<'_>, values: Vec<f64>) -> ElementValues {
    let mut field = ElementValues { values, shown: vec![false; sheet.element_count()] };
    for elements in bodies(sheet) {
        let present = elements.iter().any(|&e| field.of(sheet, e).iter().any(|v| *v > 0.0));
        show(&mut field, &elements, present);
    }
    field
}

/// Elements of each part and of each coil.
fn bodies(sheet: &Sheet<'_>) -> Vec<Vec<usize>> {
    let part = |index: usize| sheet.elements_of(|kind| matches!(kind, RegionName::Part(i, _) if *i == index));
    let coil = |index: usize| sheet.elements_of(|kind| matches!(kind, RegionName::Turn(i, _, _) if *i == index));
    let parts = sheet.parts().into_iter().map(|p| part(p.0));
    parts.chain(sheet.coils().into_iter().map(|c| coil(c.0))).collect()
}

fn show(field: &mut ElementValues, elements: &[usize], shown: bool) {
    for &element in elements {
        field.shown[element] = shown;
    }
}

/// Refuses arrays that do not have one value an element and local node.
pub(super) fn check(sheet: &Sheet<'_>, what: &'static str, found: usize) -> Result<(), PictureError> {
    let expected = sheet.element_count() * shape::node_count(sheet.order);
    if found == expected { Ok(()) } else { Err(PictureError::Length { what, expected, found }) }
}

#[cfg(test)]
mod tests {
    use num_complex::Complex64;

    use super::greatest_over_period;

    #[test]
    fn the_peak_of_a_turning_vector_is_the_greatest_over_the_period() {
        let phasors = [
            [Complex64::new(1.0, 0.0), Complex64::new(0.0, 1.0)],
            [Complex64::new(3.0, 0.0), Complex64::new(4.0, 0.0)],
            [Complex64::new(0.3, -1.2), Complex64::new(-0.7, 0.4)],
        ];
        for b in phasors {
            let at = |k: i32| {
                let turn = Complex64::from_polar(1.0, f64::from(k) * std::f64::consts::PI / 5000.0);
                (b[0] * turn).re.hypot((b[1] * turn).re)
            };
            let sampled = (0..10_000).map(at).fold(0.0, f64::max);
            let found = greatest_over_period(b);
            assert!((found - sampled).abs() < 1e-6 * sampled, "{found}, sampled {sampled}");
        }
    }
}
