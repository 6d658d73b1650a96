//! Units a person may write, by dimension, and what one of each is in SI.
//!
//! Factors are those of the `uom` crate (SI brochure, NIST SP 811). The gallon is the United States one, 231 cubic
//! inches by definition. Only [`crate::lower`] converts; the job as written keeps its text.

use uom::si::electric_current::{ampere, kiloampere, milliampere};
use uom::si::electric_potential::{kilovolt, millivolt, volt};
use uom::si::f64::{
    ElectricCurrent, ElectricPotential, Frequency as UomFrequency, HeatFluxDensity, HeatTransfer as UomHeatTransfer,
    Length as UomLength, MagneticFieldStrength, Power as UomPower, ThermodynamicTemperature, Time as UomTime,
    VolumeRate,
};
use uom::si::frequency::{hertz, kilohertz, megahertz};
use uom::si::heat_flux_density::{
    kilowatt_per_square_meter, megawatt_per_square_meter, watt_per_square_centimeter, watt_per_square_meter,
};
use uom::si::heat_transfer::{kilowatt_per_square_meter_kelvin, watt_per_square_meter_kelvin};
use uom::si::length::{centimeter, foot, inch, meter, micrometer, millimeter};
use uom::si::magnetic_field_strength::{ampere_per_centimeter, ampere_per_meter, ampere_per_millimeter};
use uom::si::power::{kilowatt, megawatt, watt};
use uom::si::thermodynamic_temperature::{degree_celsius, degree_fahrenheit, kelvin};
use uom::si::time::{hour, millisecond, minute, second};
use uom::si::volume_rate::{cubic_meter_per_hour, cubic_meter_per_second, liter_per_minute, liter_per_second};

/// A unit as people write it.
#[derive(Debug, Clone, Copy)]
pub struct Unit {
    /// How it is written in messages and in the schema.
    pub symbol: &'static str,
    /// Other spellings that are accepted, after [`plain`].
    also: &'static [&'static str],
    /// From a number of these to SI.
    to_si: fn(f64) -> f64,
}

impl Unit {
    const fn new(symbol: &'static str, also: &'static [&'static str], to_si: fn(f64) -> f64) -> Self {
        Self { symbol, also, to_si }
    }

    /// `number` of this unit in SI.
    pub fn si(&self, number: f64) -> f64 {
        (self.to_si)(number)
    }

    /// True where `written` is a spelling of this unit.
    pub fn is_written(&self, written: &str) -> bool {
        let written = plain(written);
        written == plain(self.symbol) || self.also.iter().any(|other| *other == written)
    }
}

/// A spelling without spaces, brackets, dots and raised digits, so that `W/(m² K)` and `W/m2K` are the same.
fn plain(written: &str) -> String {
    written
        .chars()
        .filter(|c| !c.is_whitespace() && !matches!(c, '(' | ')' | '^' | '*' | '·' | '.'))
        .map(|c| match c {
            '²' => '2',
            '³' => '3',
            'µ' | 'μ' => 'u',
            other => other,
        })
        .collect()
}

/// A kind of quantity and the units it may be written in.
pub trait Dimension: Copy + std::fmt::Debug + PartialEq + Send + Sync + 'static {
    /// With its article, as in a sentence: `a length`.
    const WHAT: &'static str;
    /// A value that would do.
    const EXAMPLE: &'static str;
    /// Units in the order they are offered.
    const UNITS: &'static [Unit];
}

macro_rules! dimension {
    ($(#[$doc:meta])* $name:ident, $what:literal, $example:literal, [$($unit:expr),+ $(,)?]) => {
        $(#[$doc])*
        #[derive(Debug, Clone, Copy, PartialEq, Eq)]
        pub struct $name;

        impl Dimension for $name {
            const WHAT: &'static str = $what;
            const EXAMPLE: &'static str = $example;
            const UNITS: &'static [Unit] = &[$($unit),+];
        }
    };
}

dimension!(
    /// Lengths and positions; metres in SI.
    Length, "a length", "60 mm", [
        Unit::new("mm", &[], |v| UomLength::new::<millimeter>(v).value),
        Unit::new("cm", &[], |v| UomLength::new::<centimeter>(v).value),
        Unit::new("m", &[], |v| UomLength::new::<meter>(v).value),
        Unit::new("um", &[], |v| UomLength::new::<micrometer>(v).value),
        Unit::new("in", &["inch"], |v| UomLength::new::<inch>(v).value),
        Unit::new("ft", &[], |v| UomLength::new::<foot>(v).value),
    ]
);
dimension!(
    /// Times; seconds in SI.
    Time, "a time", "20 s", [
        Unit::new("s", &["sec"], |v| UomTime::new::<second>(v).value),
        Unit::new("ms", &[], |v| UomTime::new::<millisecond>(v).value),
        Unit::new("min", &[], |v| UomTime::new::<minute>(v).value),
        Unit::new("h", &[], |v| UomTime::new::<hour>(v).value),
    ]
);
dimension!(
    /// Frequencies; hertz in SI.
    Frequency, "a frequency", "3 kHz", [
        Unit::new("Hz", &[], |v| UomFrequency::new::<hertz>(v).value),
        Unit::new("kHz", &[], |v| UomFrequency::new::<kilohertz>(v).value),
        Unit::new("MHz", &[], |v| UomFrequency::new::<megahertz>(v).value),
    ]
);
dimension!(
    /// Temperatures; kelvin in SI.
    Temperature, "a temperature", "1200 °C", [
        Unit::new("°C", &["degC", "℃"], |v| ThermodynamicTemperature::new::<degree_celsius>(v).value),
        Unit::new("K", &[], |v| ThermodynamicTemperature::new::<kelvin>(v).value),
        Unit::new("°F", &["degF", "℉"], |v| ThermodynamicTemperature::new::<degree_fahrenheit>(v).value),
    ]
);
dimension!(
    /// Temperature differences; kelvin.
    TemperatureDifference, "a temperature difference", "2 K", [Unit::new("K", &[], |v| v)]
);
dimension!(
    /// Currents; amperes rms.
    Current, "a current (rms)", "2.5 kA", [
        Unit::new("A", &[], |v| ElectricCurrent::new::<ampere>(v).value),
        Unit::new("kA", &[], |v| ElectricCurrent::new::<kiloampere>(v).value),
        Unit::new("mA", &[], |v| ElectricCurrent::new::<milliampere>(v).value),
    ]
);
dimension!(
    /// Voltages; volts rms.
    Voltage, "a voltage (rms)", "800 V", [
        Unit::new("V", &[], |v| ElectricPotential::new::<volt>(v).value),
        Unit::new("kV", &[], |v| ElectricPotential::new::<kilovolt>(v).value),
        Unit::new("mV", &[], |v| ElectricPotential::new::<millivolt>(v).value),
    ]
);
dimension!(
    /// Powers; watts in SI.
    Power, "a power", "22 kW", [
        Unit::new("kW", &[], |v| UomPower::new::<kilowatt>(v).value),
        Unit::new("W", &[], |v| UomPower::new::<watt>(v).value),
        Unit::new("MW", &[], |v| UomPower::new::<megawatt>(v).value),
    ]
);
dimension!(
    /// Magnetic field strengths; A/m rms.
    FieldStrength, "a magnetic field strength (rms)", "50 kA/m", [
        Unit::new("A/m", &[], |v| MagneticFieldStrength::new::<ampere_per_meter>(v).value),
        Unit::new("kA/m", &[], |v| 1e3 * MagneticFieldStrength::new::<ampere_per_meter>(v).value),
        Unit::new("A/cm", &[], |v| MagneticFieldStrength::new::<ampere_per_centimeter>(v).value),
        Unit::new("A/mm", &[], |v| MagneticFieldStrength::new::<ampere_per_millimeter>(v).value),
    ]
);
dimension!(
    /// Volume flows; m^3/s in SI.
    Flow, "a volume flow", "6 l/min", [
        Unit::new("l/min", &["L/min"], |v| VolumeRate::new::<liter_per_minute>(v).value),
        Unit::new("l/s", &["L/s"], |v| VolumeRate::new::<liter_per_second>(v).value),
        Unit::new("m3/h", &[], |v| VolumeRate::new::<cubic_meter_per_hour>(v).value),
        Unit::new("m3/s", &[], |v| VolumeRate::new::<cubic_meter_per_second>(v).value),
        Unit::new("gal/min", &["gpm"], us_gallons_per_minute),
    ]
);
dimension!(
    /// Heat transfer coefficients; W/(m^2 K) in SI.
    HeatTransfer, "a heat transfer coefficient", "10 W/m2/K", [
        Unit::new("W/m2/K", &["W/m2K"], |v| UomHeatTransfer::new::<watt_per_square_meter_kelvin>(v).value),
        Unit::new("kW/m2/K", &["kW/m2K"], |v| UomHeatTransfer::new::<kilowatt_per_square_meter_kelvin>(v).value),
    ]
);
dimension!(
    /// Heat fluxes; W/m^2 in SI.
    HeatFlux, "a heat flux", "50 kW/m2", [
        Unit::new("W/m2", &[], |v| HeatFluxDensity::new::<watt_per_square_meter>(v).value),
        Unit::new("kW/m2", &[], |v| HeatFluxDensity::new::<kilowatt_per_square_meter>(v).value),
        Unit::new("MW/m2", &[], |v| HeatFluxDensity::new::<megawatt_per_square_meter>(v).value),
        Unit::new("W/cm2", &[], |v| HeatFluxDensity::new::<watt_per_square_centimeter>(v).value),
        Unit::new("kW/cm2", &[], |v| 1e3 * HeatFluxDensity::new::<watt_per_square_centimeter>(v).value),
    ]
);

/// United States gallons a minute in m^3/s.
fn us_gallons_per_minute(value: f64) -> f64 {
    let inch_m = UomLength::new::<inch>(1.0).value;
    UomTime::new::<minute>(1.0).value.recip() * value * 231.0 * inch_m.powi(3)
}

/// Symbols of the units of a dimension, comma separated.
pub fn symbols<D: Dimension>() -> String {
    D::UNITS.iter().map(|unit| unit.symbol).collect::<Vec<_>>().join(", ")
}

#[cfg(test)]
mod tests {
    use super::{Dimension, Flow, HeatFlux, HeatTransfer, Length, Temperature, plain};

    fn si<D: Dimension>(number: f64, symbol: &str) -> Option<f64> {
        D::UNITS.iter().find(|unit| unit.is_written(symbol)).map(|unit| unit.si(number))
    }

    fn close(found: Option<f64>, wanted: f64) -> bool {
        found.is_some_and(|found| (found - wanted).abs() <= 1e-12 * wanted.abs())
    }

    #[test]
    fn units_of_the_trade_convert_by_their_definitions() {
        // Definitions: inch 25.4 mm, US gallon 3.785411784 l (NIST SP 811, appendix B).
        assert!(close(si::<Length>(2.0, "in"), 0.0508));
        assert!(close(si::<Length>(250.0, "µm"), 250e-6));
        assert!(close(si::<Flow>(1.0, "gal/min"), 3.785411784e-3 / 60.0));
        assert!(close(si::<Flow>(6.0, "l/min"), 1e-4));
        assert!(close(si::<HeatFlux>(1.2, "kW/cm2"), 1.2e7));
        assert!(close(si::<HeatFlux>(1.2, "kW/cm²"), 1.2e7));
        assert!(close(si::<Temperature>(20.0, "°C"), 293.15));
        assert!(close(si::<Temperature>(68.0, "°F"), 293.15));
    }

    #[test]
    fn spellings_of_a_compound_unit_are_the_same() {
        for written in ["W/m2/K", "W/(m2 K)", "W/(m²·K)", "W/m^2/K"] {
            assert!(close(si::<HeatTransfer>(10.0, written), 10.0), "{written}: {}", plain(written));
        }
        assert_eq!(si::<HeatTransfer>(1.0, "W/m2"), None);
    }
}
