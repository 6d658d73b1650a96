//! Engineers' units of material data and their factors to SI. Temperatures are written in °C, K or °F.

use super::error::{MaterialError, MaterialFault, celsius};
use crate::constants::ZERO_CELSIUS_K;

/// A physical dimension of material data: its SI unit, the units accepted in words, and their factors.
pub(super) struct Dimension {
    /// SI unit, as messages write it.
    pub(super) si: &'static str,
    accepted: &'static str,
    /// Spelling after [`plain`] and factor to SI.
    factors: &'static [(&'static str, f64)],
}

pub(super) const DENSITY: Dimension = Dimension {
    si: "kg/m3",
    accepted: "kg/m3, g/cm3, t/m3",
    factors: &[("kg/m3", 1.0), ("g/cm3", 1e3), ("t/m3", 1e3)],
};

pub(super) const RESISTIVITY: Dimension = Dimension {
    si: "ohm m",
    accepted: "ohm m, uohm m, uohm cm, nohm m, ohm mm2/m (ohm may be Ω, u may be µ)",
    factors: &[("ohmm", 1.0), ("uohmm", 1e-6), ("uohmcm", 1e-8), ("nohmm", 1e-9), ("ohmmm2/m", 1e-6)],
};

pub(super) const THERMAL_CONDUCTIVITY: Dimension =
    Dimension { si: "W/m/K", accepted: "W/m/K, W/(m K)", factors: &[("W/m/K", 1.0), ("W/mK", 1.0)] };

pub(super) const SPECIFIC_HEAT: Dimension = Dimension {
    si: "J/kg/K",
    accepted: "J/kg/K, J/(kg K), kJ/kg/K, kJ/(kg K), J/g/K",
    factors: &[("J/kg/K", 1.0), ("J/kgK", 1.0), ("kJ/kg/K", 1e3), ("kJ/kgK", 1e3), ("J/g/K", 1e3)],
};

pub(super) const LATENT_HEAT: Dimension =
    Dimension { si: "J/kg", accepted: "kJ/kg, J/g, J/kg", factors: &[("J/kg", 1.0), ("kJ/kg", 1e3), ("J/g", 1e3)] };

pub(super) const POLARISATION: Dimension =
    Dimension { si: "T", accepted: "T, mT", factors: &[("T", 1.0), ("mT", 1e-3)] };

const TEMPERATURES: &str = "°C, K, °F";

impl Dimension {
    /// Factor from `unit` to SI.
    ///
    /// # Errors
    /// A unit that is not one of this dimension.
    pub(super) fn factor(&self, unit: &str) -> Result<f64, MaterialError> {
        let written = plain(unit);
        let found = self.factors.iter().find(|(spelling, _)| *spelling == written);
        let unknown = || MaterialFault::UnknownUnit { written: unit.to_owned(), accepted: self.accepted }.into();
        found.map(|(_, factor)| *factor).ok_or_else(unknown)
    }

    /// Factor of the unit beside a table or segments.
    ///
    /// # Errors
    /// No unit, or one that is not of this dimension.
    pub(super) fn factor_of(&self, unit: Option<&str>) -> Result<f64, MaterialError> {
        match unit {
            Some(unit) => self.factor(unit),
            None => Err(MaterialFault::UnitMissing { accepted: self.accepted }.into()),
        }
    }

    /// SI value of text such as `7850 kg/m3`.
    ///
    /// # Errors
    /// Text that is not a finite number with a unit of this dimension.
    pub(super) fn parse(&self, text: &str) -> Result<f64, MaterialError> {
        let (number, unit) = split(text, self.accepted)?;
        let value = number * self.factor(unit)?;
        if value.is_finite() { Ok(value) } else { Err(MaterialFault::NotFinite { value }.into()) }
    }
}

/// Temperature in kelvin of text such as `1490 °C`.
///
/// # Errors
/// Text that is not a finite number with a unit of temperature; a temperature below absolute zero.
pub(super) fn parse_temperature(text: &str) -> Result<f64, MaterialError> {
    let (number, unit) = split(text, TEMPERATURES)?;
    let kelvin = match plain(unit).as_str() {
        "°C" | "degC" => number + ZERO_CELSIUS_K,
        "K" => number,
        "°F" | "degF" => (number - 32.0) / 1.8 + ZERO_CELSIUS_K,
        _ => {
            return Err(MaterialFault::UnknownUnit { written: unit.to_owned(), accepted: TEMPERATURES }.into());
        }
    };
    if kelvin < 0.0 {
        return Err(MaterialFault::BelowAbsoluteZero { at_c: celsius(kelvin) }.into());
    }
    Ok(kelvin)
}

/// The number at the front of a text and the unit behind it.
fn split<'a>(text: &'a str, accepted: &'static str) -> Result<(f64, &'a str), MaterialError> {
    let trimmed = text.trim();
    let refused = || MaterialFault::NotAQuantity { written: text.to_owned(), accepted };
    let cut = |end: usize| Some((trimmed.get(..end)?.trim_end().parse::<f64>().ok()?, trimmed.get(end..)?.trim()));
    let (number, unit) = (1..=trimmed.len()).rev().find_map(cut).ok_or_else(refused)?;
    if !number.is_finite() {
        return Err(MaterialFault::NotFinite { value: number }.into());
    }
    if unit.is_empty() {
        return Err(refused().into());
    }
    Ok((number, unit))
}

/// One spelling for the many ways a unit is typed.
fn plain(unit: &str) -> String {
    let mut spelled = String::with_capacity(unit.len());
    for c in unit.chars() {
        match c {
            ' ' | '\u{a0}' | '(' | ')' | '·' | '*' | '^' => {}
            '²' => spelled.push('2'),
            '³' => spelled.push('3'),
            // The micro sign and the Greek letter; the Greek letter and the ohm sign.
            '\u{b5}' | '\u{3bc}' => spelled.push('u'),
            '\u{3a9}' | '\u{2126}' => spelled.push_str("ohm"),
            _ => spelled.push(c),
        }
    }
    spelled
}
