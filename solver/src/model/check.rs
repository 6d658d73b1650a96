//! What a model must be before it is laid out: numbers that are numbers, within their ranges, and indices that exist.
//!
//! That outlines do not overlap is left to whoever drew them; what lies at r < 0 is cut off.

use super::{ConductorKind, Drive, Face, FaceCondition, Heating, Hold, Mirrors, Model, StageEnd, Surface};
use crate::error::SolveError;

/// One number: where it stands, its value and unit.
struct Given<'a>(&'a str, f64, &'static str);

impl Given<'_> {
    fn require(&self, holds: bool, expected: &'static str) -> Result<(), SolveError> {
        if holds && self.1.is_finite() {
            return Ok(());
        }
        Err(SolveError::Value { place: self.0.to_owned(), value: self.1, unit: self.2, expected })
    }

    fn positive(&self) -> Result<(), SolveError> {
        self.require(self.1 > 0.0, "a number above 0")
    }

    fn not_negative(&self) -> Result<(), SolveError> {
        self.require(self.1 >= 0.0, "a number from 0")
    }

    fn finite(&self) -> Result<(), SolveError> {
        self.require(true, "a finite number")
    }
}

fn missing(place: String, remedy: &'static str) -> Result<(), SolveError> {
    Err(SolveError::Absent { place, remedy })
}

impl Model {
    /// Checks every number and index of the model.
    ///
    /// # Errors
    /// [`SolveError::Value`] or [`SolveError::Absent`] for the first thing found wrong.
    pub fn check(&self) -> Result<(), SolveError> {
        self.check_drive()?;
        self.check_bodies()?;
        self.check_section()?;
        for gauge in &self.gauges {
            if gauge.part >= self.parts.len() {
                missing(format!("part {} of gauge `{}`", gauge.part, gauge.name), "name a part of the model")?;
            }
        }
        self.heating.as_ref().map_or(Ok(()), |h| self.check_heating(h))
    }

    fn check_drive(&self) -> Result<(), SolveError> {
        Given("frequency", self.drive.frequency_hz(), "Hz").positive()?;
        match &self.drive {
            Drive::AppliedField { field_a_per_m_rms, .. } => {
                if !self.coils.is_empty() {
                    missing("a supply for the coils".to_owned(), "drive coils by a supply, or leave them out")?;
                }
                Given("applied field", *field_a_per_m_rms, "A/m").not_negative()
            }
            Drive::Supply { hold, limits, .. } => {
                if self.coils.is_empty() {
                    missing("a coil for the supply".to_owned(), "add a coil, or apply a field")?;
                }
                for (place, limit, unit) in [
                    ("voltage limit", limits.voltage_v_rms, "V"),
                    ("current limit", limits.current_a_rms, "A"),
                    ("power limit", limits.power_w, "W"),
                ] {
                    limit.map_or(Ok(()), |l| Given(place, l, unit).positive())?;
                }
                self.check_hold(*hold)
            }
        }
    }

    fn check_hold(&self, hold: Hold) -> Result<(), SolveError> {
        match hold {
            Hold::CoilCurrent(a) => Given("held coil current", a, "A").not_negative(),
            Hold::CoilVoltage(v) => Given("held coil voltage", v, "V").not_negative(),
            Hold::WorkpiecePower(w) => Given("held workpiece power", w, "W").not_negative(),
            Hold::TerminalPower(w) => Given("held terminal power", w, "W").not_negative(),
            Hold::GaugeTemperature { gauge, at_k } => {
                self.check_gauge(gauge)?;
                Given("held gauge temperature", at_k, "K").positive()
            }
            Hold::Off => Ok(()),
        }
    }

    fn check_gauge(&self, gauge: usize) -> Result<(), SolveError> {
        if gauge < self.gauges.len() { Ok(()) } else { missing(format!("gauge {gauge}"), "name a gauge of the model") }
    }

    fn check_bodies(&self) -> Result<(), SolveError> {
        if self.parts.is_empty() && self.coils.is_empty() {
            missing("any part or coil".to_owned(), "add what is to be heated")?;
        }
        for part in &self.parts {
            Given(&format!("start temperature of part `{}`", part.name), part.start_k, "K").positive()?;
            surface(&part.name, part.surface)?;
            part.faces.iter().try_for_each(|(face, condition)| face_condition(&part.name, *face, *condition))?;
        }
        for coil in &self.coils {
            let place = |what: &str| format!("{what} of coil `{}`", coil.name);
            if coil.turns.is_empty() {
                missing(place("turns"), "give the coil at least one turn")?;
            }
            Given(&place("temperature"), coil.temperature_k, "K").positive()?;
            let sigma = coil.material.electrical_conductivity_s_per_m(coil.temperature_k);
            Given(&place("conductivity"), sigma, "S/m").positive()?;
            if let ConductorKind::Stranded { fill } = coil.conductor {
                Given(&place("fill"), fill, "(no unit)").require(fill > 0.0 && fill <= 1.0, "above 0 and at most 1")?;
            }
            if let Some(water) = coil.water {
                Given(&place("water paths"), water.paths as f64, "paths").positive()?;
                Given(&place("water inlet"), water.inlet_k, "K").positive()?;
                Given(&place("water flow"), water.flow_per_path_m3_per_s, "m^3/s").positive()?;
            }
        }
        Ok(())
    }

    fn check_section(&self) -> Result<(), SolveError> {
        let mesh = &self.mesh;
        Given("mesh fineness", mesh.fineness, "(no unit)").positive()?;
        Given("elements per skin depth", mesh.per_skin_depth, "(no unit)").positive()?;
        if let Some(largest) = mesh.largest_m {
            Given("largest element", largest, "m").positive()?;
        }
        let factor = mesh.boundary_factor;
        Given("boundary factor", factor, "(no unit)").require(factor > 1.0, "a number above 1")?;
        let order = Given("order of the elements", mesh.order as f64, "(no unit)");
        order.require((1..=3).contains(&mesh.order), "1, 2 or 3")?;
        match self.mirrors {
            Mirrors::None => Ok(()),
            Mirrors::One { z_m } => {
                Given("mirror plane", z_m, "m").finite()?;
                self.reaches(z_m, f64::INFINITY, "move the mirror plane into the device")
            }
            Mirrors::Two { lower_m, upper_m } => {
                Given("lower mirror plane", lower_m, "m").finite()?;
                Given("upper mirror plane", upper_m, "m").require(upper_m > lower_m, "above the lower mirror plane")?;
                self.reaches(lower_m, upper_m, "move the mirror planes into the device")
            }
        }
    }

    /// Every turn and at least one body reaches into the slice.
    fn reaches(&self, lower_m: f64, upper_m: f64, remedy: &'static str) -> Result<(), SolveError> {
        let inside = |outline: &mesher::Outline| {
            let (lo, hi) = outline.bounds();
            lo[1] < upper_m && hi[1] > lower_m
        };
        let parts = self.parts.iter().any(|p| inside(&p.outline));
        let turns = self.coils.iter().any(|c| c.turns.iter().any(|t| inside(&t.outline)));
        let reached = if self.coils.is_empty() { parts } else { turns };
        if reached { Ok(()) } else { missing("anything between the mirror planes".to_owned(), remedy) }
    }

    fn check_heating(&self, heating: &Heating) -> Result<(), SolveError> {
        Given("ambient temperature", heating.ambient_k, "K").positive()?;
        Given("error allowed in a heat step", heating.step_tolerance_k, "K").positive()?;
        if heating.stages.is_empty() {
            missing("stages of the heating".to_owned(), "give at least one stage")?;
        }
        if !self.parts.iter().any(|p| p.role.is_heated()) {
            missing("a part that is heated".to_owned(), "add one, or leave the heating out")?;
        }
        for stage in &heating.stages {
            let place = format!("length of stage `{}`", stage.name);
            match stage.end {
                StageEnd::After(s) => Given(&place, s, "s").not_negative()?,
                StageEnd::GaugeReaches { gauge, at_k, at_most_s } => {
                    self.check_gauge(gauge)?;
                    Given(&format!("goal of stage `{}`", stage.name), at_k, "K").positive()?;
                    Given(&place, at_most_s, "s").not_negative()?;
                }
            }
            stage.hold.map_or(Ok(()), |hold| self.check_hold(hold))?;
        }
        Ok(())
    }
}

fn surface(part: &str, surface: Surface) -> Result<(), SolveError> {
    let e = surface.emissivity;
    let emissivity = format!("emissivity of part `{part}`");
    Given(&emissivity, e, "(no unit)").require((0.0..=1.0).contains(&e), "from 0 to 1")?;
    Given(&format!("convection of part `{part}`"), surface.convection_w_per_m2_k, "W/(m^2 K)").not_negative()
}

fn face_condition(part: &str, face: Face, condition: FaceCondition) -> Result<(), SolveError> {
    match condition {
        FaceCondition::Exchange(s) => surface(part, s),
        FaceCondition::HeldAt(k) => Given(&format!("held {face:?} of part `{part}`"), k, "K").positive(),
        FaceCondition::Flux(q) => Given(&format!("flux into {face:?} of part `{part}`"), q, "W/m^2").finite(),
        FaceCondition::Insulated => Ok(()),
    }
}
