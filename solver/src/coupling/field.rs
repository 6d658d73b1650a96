//! Field solves as the coupling needs them: temperatures in, a scaled state with losses on the heated elements out.

use std::sync::Arc;

use super::loss::FieldState;
use crate::error::SolveError;
use crate::fem::space::Space;
use crate::magnetics::drive::{PerAmpere, Scaled, scale};
use crate::magnetics::maps::maps;
use crate::magnetics::operator::Operator;
use crate::magnetics::properties::{PointProperties, PointTemperatures};
use crate::magnetics::report::Numbers;
use crate::magnetics::unit_field::UnitField;
use crate::model::{Drive, Hold, Limits, Model};
use crate::overview::Meshed;
use crate::results::{FieldMaps, RegionName};

/// Solves the field of one model again and again.
pub(super) struct FieldSolver<'a> {
    model: &'a Model,
    regions: Vec<RegionName>,
    operator: Operator,
    heated_triangles: Vec<usize>,
    solves: usize,
}

/// A solve before it is scaled to a hold.
pub(super) struct Solved {
    numbers: Arc<Numbers>,
    field: Arc<UnitField>,
    properties: Arc<PointProperties>,
    heated_loss_w_per_m3: Vec<f64>,
}

impl<'a> FieldSolver<'a> {
    pub(super) fn new(model: &'a Model, meshed: &Meshed) -> Result<Self, SolveError> {
        let space = Arc::new(Space::new(&meshed.mesh, &meshed.nodes, |_| true));
        let regions = meshed.layout.regions.clone();
        let operator = Operator::new(space, &regions, meshed.layout.open_boundary, model)?;
        Ok(Self { model, regions, operator, heated_triangles: Vec::new(), solves: 0 })
    }

    pub(super) fn operator(&self) -> &Operator {
        &self.operator
    }

    pub(super) fn solves(&self) -> usize {
        self.solves
    }

    /// Names the triangles whose losses a heat problem wants, in its element order.
    pub(super) fn set_heated(&mut self, triangles: Vec<usize>) {
        self.heated_triangles = triangles;
    }

    pub(super) fn solve(&mut self, time_s: f64, temperatures: &dyn PointTemperatures) -> Result<Solved, SolveError> {
        let space = Arc::clone(self.operator.space());
        let properties = PointProperties::new(&space, &self.regions, self.model, temperatures);
        let field = self.operator.solve(&properties).map_err(|source| SolveError::Linear {
            system: "field",
            time_s,
            source,
        })?;
        self.solves += 1;
        let numbers = Numbers::new(&field, &self.operator, &properties, &self.regions, self.model);
        let heated_loss_w_per_m3 = self.heated_triangles.iter().flat_map(|&t| field.loss(t)).copied().collect();
        Ok(Solved {
            numbers: Arc::new(numbers),
            field: Arc::new(field),
            properties: Arc::new(properties),
            heated_loss_w_per_m3,
        })
    }

    /// Maps of a state, per unit drive.
    pub(super) fn maps(&self, state: &FieldState) -> FieldMaps {
        maps(&state.field, &self.operator, &state.properties, &self.regions, self.model)
    }

    /// Scales a solve to what is held.
    pub(super) fn scaled(&self, solved: Solved, hold: Hold, time_s: f64) -> Result<FieldState, SolveError> {
        let scaled = self.scale(&solved.numbers.per, hold)?;
        Ok(FieldState {
            time_s,
            unit_loss_w_per_m3: solved.heated_loss_w_per_m3,
            numbers: solved.numbers,
            field: solved.field,
            properties: solved.properties,
            scaled,
        })
    }

    /// Drive that a hold asks for; with an applied field, the field itself unless the supply is off.
    pub(super) fn scale(&self, per: &PerAmpere, hold: Hold) -> Result<Scaled, SolveError> {
        match &self.model.drive {
            Drive::Supply { limits, .. } => scale(hold, *limits, per),
            Drive::AppliedField { field_a_per_m_rms, .. } => {
                let on = if hold == Hold::Off { 0.0 } else { 1.0 };
                let peak = on * field_a_per_m_rms * std::f64::consts::SQRT_2;
                Ok(Scaled { peak, limited_by: None })
            }
        }
    }
}

impl Model {
    /// What the supply holds where a stage does not say; for an applied field, a stand-in that leaves it on.
    pub fn supply_hold(&self) -> Hold {
        match &self.drive {
            Drive::Supply { hold, .. } => *hold,
            Drive::AppliedField { field_a_per_m_rms, .. } => Hold::CoilCurrent(*field_a_per_m_rms),
        }
    }

    /// Limits of the supply.
    pub fn supply_limits(&self) -> Limits {
        match &self.drive {
            Drive::Supply { limits, .. } => *limits,
            Drive::AppliedField { .. } => Limits::default(),
        }
    }
}
