//! From a material as written to a material as meant: units to SI, °C to kelvin, every value checked.

use super::curve::Curve;
use super::data::{
    CurveData, EmissivityData, MagneticData, MaterialData, MeltingData, QuantityData, SegmentData, Written,
};
use super::enthalpy::{Enthalpy, Melting};
use super::error::{MaterialError, MaterialFault, Property};
use super::magnetic::Magnetic;
use super::segment::{Pole, Segment};
use super::source::Source;
use super::substance::Material;
use super::units::{self, Dimension};

impl TryFrom<MaterialData> for Material {
    type Error = MaterialError;

    fn try_from(data: MaterialData) -> Result<Self, MaterialError> {
        let name = data.name.clone();
        material(data).map_err(|error| error.in_material(&name))
    }
}

fn material(data: MaterialData) -> Result<Material, MaterialError> {
    if data.name.trim().is_empty() || data.aliases.iter().any(|alias| alias.trim().is_empty()) {
        return Err(MaterialError::from(MaterialFault::NameEmpty).of(Property::Name));
    }
    let (density, density_source) = density(data.density).map_err(|e| e.of(Property::Density))?;
    let resistivity = data.resistivity.map(|c| curve(c, Property::Resistivity, &units::RESISTIVITY)).transpose()?;
    let conductivity = curve(data.thermal_conductivity, Property::ThermalConductivity, &units::THERMAL_CONDUCTIVITY)?;
    let specific_heat = curve(data.specific_heat, Property::SpecificHeat, &units::SPECIFIC_HEAT)?;
    let melting = data.melting.map(melting).transpose()?;
    let enthalpy = Enthalpy::new(&specific_heat, melting.as_ref())?;
    let emissivity = data.emissivity.map(emissivity).transpose().map_err(|e| e.of(Property::Emissivity))?;
    let magnetic = data.magnetic.map(magnetic).transpose()?;
    let (emissivity, emissivity_source) = emissivity.unzip();
    Ok(Material {
        name: data.name,
        aliases: data.aliases,
        description: data.description,
        density_kg_per_m3: density,
        density_source,
        resistivity,
        conductivity,
        specific_heat,
        enthalpy,
        emissivity,
        emissivity_source,
        melting,
        magnetic,
        notes: data.note,
    })
}

fn source(written: Option<Written<String, Source>>) -> Source {
    match written {
        None => Source::unstated(),
        Some(Written::Plain(text)) => Source { text, ..Source::default() },
        Some(Written::Full(source)) => source,
    }
}

fn density(written: Written<String, QuantityData>) -> Result<(f64, Source), MaterialError> {
    let (text, source) = match written {
        Written::Plain(text) => (text, Source::unstated()),
        Written::Full(full) => (full.value, source(full.source)),
    };
    let value = units::DENSITY.parse(&text)?;
    if value <= 0.0 {
        return Err(MaterialFault::NotPositive { value, unit: units::DENSITY.si, at_c: None }.into());
    }
    Ok((value, source))
}

fn emissivity(written: Written<f64, EmissivityData>) -> Result<(f64, Source), MaterialError> {
    let (value, source) = match written {
        Written::Plain(value) => (value, Source::unstated()),
        Written::Full(full) => (full.value, source(full.source)),
    };
    let unit = "";
    if !value.is_finite() {
        Err(MaterialFault::NotFinite { value }.into())
    } else if value < 0.0 {
        Err(MaterialFault::TooLow { value, least: 0.0, unit }.into())
    } else if value > 1.0 {
        Err(MaterialFault::TooHigh { value, greatest: 1.0, unit }.into())
    } else {
        Ok((value, source))
    }
}

fn curve(
    written: Written<String, CurveData>,
    property: Property,
    dimension: &Dimension,
) -> Result<Curve, MaterialError> {
    let data = match written {
        Written::Plain(text) => CurveData { constant: Some(text), ..CurveData::default() },
        Written::Full(data) => data,
    };
    let checked = bare_curve(&data, dimension).and_then(|curve| {
        curve.check_positive(dimension.si)?;
        Ok(curve.with_source(source(data.source)))
    });
    checked.map_err(|error| error.of(property))
}

fn bare_curve(data: &CurveData, dimension: &Dimension) -> Result<Curve, MaterialError> {
    let unit = data.unit.as_deref();
    let zero_k = data.temperature_unit.zero_k();
    match (&data.constant, &data.table, &data.segments) {
        (Some(text), None, None) => {
            if unit.is_some() {
                return Err(MaterialFault::UnitTwice.into());
            }
            Curve::constant(dimension.parse(text)?)
        }
        (None, Some(rows), None) => {
            let factor = dimension.factor_of(unit)?;
            let points: Vec<_> = rows.iter().map(|&[t, value]| (t + zero_k, value * factor)).collect();
            Curve::table(&points)
        }
        (None, None, Some(written)) => {
            let factor = dimension.factor_of(unit)?;
            let segments = written.iter().map(|s| segment(s, zero_k, factor)).collect::<Result<_, _>>()?;
            Curve::segments(segments)
        }
        (constant, table, segments) => {
            let given = [constant.is_some(), table.is_some(), segments.is_some()];
            Err(MaterialFault::FormCount { count: given.iter().filter(|&&g| g).count() }.into())
        }
    }
}

fn segment(data: &SegmentData, zero_k: f64, factor: f64) -> Result<Segment, MaterialError> {
    let polynomial = data.polynomial.iter().map(|a| a * factor).collect();
    let pole = data.pole.as_ref().map(|p| Pole { numerator: p.numerator * factor, at: p.at });
    Segment::new(data.from + zero_k, data.to + zero_k, zero_k, polynomial, pole)
}

fn melting(data: MeltingData) -> Result<Melting, MaterialError> {
    let temperature = |text: &str, property| units::parse_temperature(text).map_err(|e| e.of(property));
    Ok(Melting {
        solidus_k: temperature(&data.solidus, Property::Solidus)?,
        liquidus_k: temperature(&data.liquidus, Property::Liquidus)?,
        latent_heat_j_per_kg: units::LATENT_HEAT.parse(&data.latent_heat).map_err(|e| e.of(Property::LatentHeat))?,
        source: source(data.source),
    })
}

fn magnetic(data: MagneticData) -> Result<Magnetic, MaterialError> {
    let saturation = units::POLARISATION.parse(&data.saturation_polarisation);
    let magnetic = Magnetic {
        relative_permeability_20c: data.relative_permeability_20c,
        saturation_polarisation_t: saturation.map_err(|e| e.of(Property::SaturationPolarisation))?,
        initial_relative_permeability: data.initial_relative_permeability,
        curie_k: units::parse_temperature(&data.curie).map_err(|e| e.of(Property::Curie))?,
        source: source(data.source),
    };
    magnetic.check()?;
    Ok(magnetic)
}
