//! From the supply as written to the drive of the model; rms throughout.

use solver::model;

use super::amount::{CURRENT, FIELD, FREQUENCY, POWER, VOLTAGE, read, read_optional};
use crate::job::{Hold, Job, Limits, Place};
use crate::job_error::{JobError, shown};

/// What drives the field.
///
/// # Errors
/// Neither coils nor an applied field, or both; nothing held; a power nothing can take up; values out of range.
pub(super) fn drive(job: &Job, parts: &[model::Part]) -> Result<model::Drive, JobError> {
    let place = job.place().key("supply");
    let supply = &job.supply;
    let frequency_hz = read(&supply.frequency, &place.key("frequency"), FREQUENCY)?.si;
    if let Some(field) = &supply.applied_field {
        let at = place.key("applied_field");
        let beside =
            [("coils", !job.coils.is_empty()), ("hold", supply.hold.is_some()), ("limits", supply.limits.is_some())];
        if let Some((beside, _)) = beside.into_iter().find(|(_, given)| *given) {
            return Err(JobError::BesideAppliedField { place: at, beside });
        }
        return Ok(model::Drive::AppliedField { frequency_hz, field_a_per_m_rms: read(field, &at, FIELD)?.si });
    }
    if job.coils.is_empty() {
        return Err(JobError::NoSource { place: job.place().key("coils") });
    }
    let Some(written) = &supply.hold else {
        return Err(JobError::NoHold { place });
    };
    let hold = hold(written, parts, &place.key("hold"))?;
    let limits = supply.limits.as_ref().map(|written| limits(written, &place.key("limits"))).transpose()?;
    Ok(model::Drive::Supply { frequency_hz, hold, limits: limits.unwrap_or_default() })
}

/// What is held by the supply or a stage.
///
/// # Errors
/// Values out of range, a power in workpieces of which none conducts.
pub(super) fn hold(written: &Hold, parts: &[model::Part], place: &Place) -> Result<model::Hold, JobError> {
    Ok(match written {
        Hold::CoilCurrent(current) => model::Hold::CoilCurrent(read(current, &place.key("coil_current"), CURRENT)?.si),
        Hold::CoilVoltage(voltage) => model::Hold::CoilVoltage(read(voltage, &place.key("coil_voltage"), VOLTAGE)?.si),
        Hold::WorkpiecePower(power) => {
            let at = place.key("workpiece_power");
            let takes_up =
                |part: &model::Part| part.role == model::Role::Workpiece && part.material.resistivity.is_some();
            if !parts.iter().any(takes_up) {
                return Err(JobError::NothingConducts { place: at, value: shown(power.text()) });
            }
            model::Hold::WorkpiecePower(read(power, &at, POWER)?.si)
        }
        Hold::TerminalPower(power) => model::Hold::TerminalPower(read(power, &place.key("terminal_power"), POWER)?.si),
    })
}

fn limits(written: &Limits, place: &Place) -> Result<model::Limits, JobError> {
    let voltage = read_optional(written.voltage.as_ref(), &place.key("voltage"), VOLTAGE)?;
    let current = read_optional(written.current.as_ref(), &place.key("current"), CURRENT)?;
    let power = read_optional(written.power.as_ref(), &place.key("power"), POWER)?;
    Ok(model::Limits {
        voltage_v_rms: voltage.map(|amount| amount.si),
        current_a_rms: current.map(|amount| amount.si),
        power_w: power.map(|amount| amount.si),
    })
}
