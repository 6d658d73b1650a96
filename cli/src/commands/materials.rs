//! `coilwright materials [NAME]`: the library with the ranges of its data, or one material tabulated with its sources.

use std::io::Write;

use solver::constants::ZERO_CELSIUS_K;
use solver::material::{Curve, Library, Material, Source, library};

use super::print;
use crate::exit::{Exit, Failure};
use crate::figures::{Page, row, significant};

/// Step of the tabulated temperatures, kelvin.
const STEP_K: f64 = 50.0;
/// Rows that a table has at most; beyond, the step is doubled.
const MOST_ROWS: f64 = 40.0;

/// Prints the table of the library, or one material.
pub(super) fn materials(name: Option<&str>, out: &mut dyn Write) -> Result<Exit, Failure> {
    let library = library().map_err(solver::error::SolveError::from)?;
    let text = match name {
        None => list(library),
        Some(name) => sheet(find(library, name)?),
    };
    print(out, &text)?;
    Ok(Exit::Done)
}

fn find<'a>(library: &'a Library, name: &str) -> Result<&'a Material, Failure> {
    let unknown = || {
        let suggestion = library.suggest(name).map_or_else(String::new, |near| format!("; did you mean `{near}`?"));
        Failure::UnknownMaterial { name: name.to_owned(), suggestion }
    };
    library.find(name).map(AsRef::as_ref).ok_or_else(unknown)
}

fn list(library: &Library) -> String {
    let head = ["material", "density", "resistivity", "conductivity", "specific heat", "Curie", "melts", "also called"];
    let degc = "\u{b0}C";
    let mut rows = vec![row(head), row(["", "kg/m3", degc, degc, degc, degc, degc, ""])];
    rows.extend(library.materials().iter().map(|material| {
        vec![
            material.name.clone(),
            significant(material.density_kg_per_m3, 4),
            material.resistivity.as_ref().map_or_else(|| "insulator".to_owned(), range),
            range(&material.conductivity),
            range(&material.specific_heat),
            material.magnetic.as_ref().map_or_else(String::new, |magnetic| degrees(magnetic.curie_k)),
            material.melting.as_ref().map_or_else(String::new, |melting| degrees(melting.solidus_k)),
            material.aliases.join(", "),
        ]
    }));
    let mut page = Page::default();
    page.table(&rows, rows[0].len());
    page.gap();
    page.line("Ranges are those of the data. `coilwright materials NAME` tabulates one, with its sources.");
    page.into_text()
}

fn degrees(kelvin: f64) -> String {
    format!("{:.0}", kelvin - ZERO_CELSIUS_K)
}

/// The range of a curve in degrees Celsius.
fn range(curve: &Curve) -> String {
    curve.range_k().map_or_else(|| "constant".to_owned(), |(from, to)| format!("{} to {}", degrees(from), degrees(to)))
}

fn sheet(material: &Material) -> String {
    let mut page = Page::default();
    page.line(&material.name);
    if !material.aliases.is_empty() {
        page.line(format!("  also called {}", material.aliases.join(", ")));
    }
    if !material.description.is_empty() {
        page.line(format!("  {}", material.description));
    }
    page.gap();
    page.table(&points(material), 2);
    page.gap();
    page.table(&curve_rows(material), 0);
    page.gap();
    page.line("Sources");
    for (property, source) in sources(material) {
        page.line(format!("  {property}: {source}"));
    }
    if let Some(notes) = &material.notes {
        page.gap();
        page.line(format!("Note: {notes}"));
    }
    page.into_text()
}

/// Properties that are single numbers.
fn points(material: &Material) -> Vec<Vec<String>> {
    let mut rows = vec![("density", format!("{} kg/m3", significant(material.density_kg_per_m3, 4)))];
    if let Some(emissivity) = material.emissivity {
        rows.push(("emissivity", significant(emissivity, 2)));
    }
    if let Some(melting) = &material.melting {
        let (solidus, liquidus) = (degrees(melting.solidus_k), degrees(melting.liquidus_k));
        rows.push(("melts", format!("{solidus} to {liquidus} \u{b0}C")));
        rows.push(("latent heat", format!("{} kJ/kg", significant(melting.latent_heat_j_per_kg / 1e3, 3))));
    }
    if let Some(magnetic) = &material.magnetic {
        rows.push(("Curie point", format!("{} \u{b0}C", degrees(magnetic.curie_k))));
        rows.push(("saturation polarisation", format!("{} T", significant(magnetic.saturation_polarisation_t, 3))));
        let initial = significant(magnetic.initial_relative_permeability, 3);
        rows.push(("initial relative permeability", initial));
    }
    rows.into_iter().map(|(name, value)| vec![name.to_owned(), value]).collect()
}

/// The curves over temperature; a dash outside the range of the data.
fn curve_rows(material: &Material) -> Vec<Vec<String>> {
    let mut rows = vec![
        row(["\u{b0}C", "resistivity", "conductivity", "specific heat", "relative"]),
        row(["", "\u{b5}\u{3a9} m", "W/m/K", "J/kg/K", "permeability"]),
    ];
    for kelvin in temperatures(material) {
        let resistivity = material.resistivity.as_ref().map_or_else(|| "-".to_owned(), |curve| at(curve, kelvin, 1e6));
        rows.push(vec![
            degrees(kelvin),
            resistivity,
            at(&material.conductivity, kelvin, 1.0),
            at(&material.specific_heat, kelvin, 1.0),
            significant(material.relative_permeability(kelvin), 4),
        ]);
    }
    rows
}

fn at(curve: &Curve, kelvin: f64, scale: f64) -> String {
    let inside = curve.range_k().is_none_or(|(from, to)| (from - 1e-6..=to + 1e-6).contains(&kelvin));
    if inside { significant(scale * curve.value(kelvin), 4) } else { "-".to_owned() }
}

/// Round temperatures over the widest range of the data, with the ends of every range.
fn temperatures(material: &Material) -> Vec<f64> {
    let curves = material.resistivity.iter().chain([&material.conductivity, &material.specific_heat]);
    let ranges: Vec<(f64, f64)> = curves.filter_map(Curve::range_k).collect();
    let (Some(from), Some(to)) =
        (ranges.iter().map(|r| r.0).reduce(f64::min), ranges.iter().map(|r| r.1).reduce(f64::max))
    else {
        return vec![20.0 + ZERO_CELSIUS_K];
    };
    let mut step = STEP_K;
    while (to - from) / step > MOST_ROWS {
        step *= 2.0;
    }
    let first = ((from - ZERO_CELSIUS_K) / step).ceil() as i64;
    let last = ((to - ZERO_CELSIUS_K) / step).floor() as i64;
    let mut all: Vec<f64> = (first..=last).map(|k| k as f64 * step + ZERO_CELSIUS_K).collect();
    all.extend(ranges.iter().flat_map(|r| [r.0, r.1]));
    all.sort_by(f64::total_cmp);
    all.dedup_by(|a, b| (*a - *b).abs() < 0.5);
    all
}

fn sources(material: &Material) -> Vec<(&'static str, &Source)> {
    let all = [
        ("density", Some(&material.density_source)),
        ("resistivity", material.resistivity.as_ref().map(Curve::source)),
        ("thermal conductivity", Some(material.conductivity.source())),
        ("specific heat", Some(material.specific_heat.source())),
        ("emissivity", material.emissivity_source.as_ref()),
        ("melting", material.melting.as_ref().map(|melting| &melting.source)),
        ("magnetic", material.magnetic.as_ref().map(|magnetic| &magnetic.source)),
    ];
    all.into_iter().filter_map(|(property, source)| source.map(|source| (property, source))).collect()
}
