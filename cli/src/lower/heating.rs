//! From the heating as written to its stages.

use solver::model;

use super::amount::{STEP_ERROR, TEMPERATURE, TIME, read, read_optional};
use super::supply;
use crate::job::{HoldWord, Job, Place, Stage, StageHold, nearest};
use crate::job_error::{JobError, shown};

/// The heating, if the job has one.
///
/// # Errors
/// A stage whose end is not said or said twice, a gauge that is not there, values out of range.
pub(super) fn heating(
    job: &Job,
    parts: &[model::Part],
    gauges: &[model::Gauge],
) -> Result<Option<model::Heating>, JobError> {
    let Some(written) = &job.heating else { return Ok(None) };
    let place = job.place().key("heating");
    let around = Around { parts, gauges, applied_field: job.supply.applied_field.is_some() };
    let stages = written.stages.iter().map(|s| around.stage(s, &place.key("stages").key(&s.name)));
    Ok(Some(model::Heating {
        ambient_k: read(&written.ambient, &place.key("ambient"), TEMPERATURE)?.si,
        stages: stages.collect::<Result<_, _>>()?,
        step_tolerance_k: read(&written.step_tolerance, &place.key("step_tolerance"), STEP_ERROR)?.si,
    }))
}

/// What stages refer to.
struct Around<'a> {
    parts: &'a [model::Part],
    gauges: &'a [model::Gauge],
    applied_field: bool,
}

impl Around<'_> {
    fn stage(&self, stage: &Stage, place: &Place) -> Result<model::Stage, JobError> {
        let hold = stage.hold.as_ref().map(|written| self.hold(written, &place.key("hold"))).transpose()?;
        Ok(model::Stage { name: stage.name.clone(), end: self.end(stage, place)?, hold })
    }

    fn end(&self, stage: &Stage, place: &Place) -> Result<model::StageEnd, JobError> {
        let refused = |found| Err(JobError::StageEnd { place: place.clone(), found });
        let duration = read_optional(stage.duration.as_ref(), &place.key("for"), TIME)?;
        let at_most = read_optional(stage.at_most.as_ref(), &place.key("at_most"), TIME)?;
        match (duration, &stage.until, at_most) {
            (Some(duration), None, None) => Ok(model::StageEnd::After(duration.si)),
            (None, Some(until), Some(at_most)) => {
                let at = place.key("until");
                Ok(model::StageEnd::GaugeReaches {
                    gauge: self.gauge(&until.gauge, &at.key("gauge"))?,
                    at_k: read(&until.reaches, &at.key("reaches"), TEMPERATURE)?.si,
                    at_most_s: at_most.si,
                })
            }
            (Some(_), _, _) => refused("the end of the stage is said twice"),
            (None, Some(_), None) => refused("`until` without `at_most` could run for ever"),
            (None, None, Some(_)) => refused("`at_most` alone does not end a stage"),
            (None, None, None) => refused("the end of the stage is not said"),
        }
    }

    fn hold(&self, written: &StageHold, place: &Place) -> Result<model::Hold, JobError> {
        if self.applied_field {
            return Err(JobError::StageHoldInField { place: place.clone() });
        }
        match written {
            StageHold::Word(HoldWord::Off) => Ok(model::Hold::Off),
            StageHold::Supply(hold) => supply::hold(hold, self.parts, place),
            StageHold::Gauge(held) => Ok(model::Hold::GaugeTemperature {
                gauge: self.gauge(&held.gauge, &place.key("gauge"))?,
                at_k: read(&held.at, &place.key("at"), TEMPERATURE)?.si,
            }),
        }
    }

    fn gauge(&self, name: &str, place: &Place) -> Result<usize, JobError> {
        self.gauges.iter().position(|gauge| gauge.name == name).ok_or_else(|| {
            let known: Vec<String> = self.gauges.iter().map(|gauge| gauge.name.clone()).collect();
            JobError::UnknownName {
                place: place.clone(),
                name: shown(name),
                what: "thermocouple or pyrometer",
                suggestion: nearest(name, &known),
                known: known.join(", "),
            }
        })
    }
}
