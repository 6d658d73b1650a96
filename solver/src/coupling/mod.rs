//! From a model to results: field solves and heat steps, each as often as needed.
//!
//! A stage is cut into intervals. Through an interval the loss is extrapolated from the last solves; at its end the
//! field is solved again and the extrapolation defect sets the next interval, or sends the run back to its beginning.

mod field;
mod interval;
pub mod loss;
mod record;
mod stage;

use field::FieldSolver;
use record::Recorder;
use stage::HeatRun;

use crate::error::SolveError;
use crate::magnetics::properties::StartTemperatures;
use crate::model::Model;
use crate::observe::{Event, Observer};
use crate::overview::Meshed;
use crate::results::{Outcome, Results};
use crate::warnings;

/// Solves a model.
///
/// # Errors
/// Whatever prevents any result: a section that cannot be meshed, a field that cannot be solved, a hold nothing can
/// meet. What goes wrong later ends the run with its partial results and says so in their outcome.
pub fn run(model: &Model, observer: &dyn Observer) -> Result<Results, SolveError> {
    let meshed = Meshed::new(model, &|| observer.stop_requested())?;
    let mut solver = FieldSolver::new(model, &meshed)?;
    observer.event(&Event::Meshed { triangles: meshed.mesh.triangles().len(), unknowns: solver.operator().unknowns() });
    let mut recorder = Recorder::new(model, warnings::before_solve(model, &meshed));
    recorder.mesh(meshed.mesh.triangles().len(), solver.operator().unknowns());
    if observer.stop_requested() {
        return Err(SolveError::StoppedEarly);
    }
    let outcome = match &model.heating {
        None => {
            let solved = solver.solve(0.0, &StartTemperatures)?;
            let state = solver.scaled(solved, model.supply_hold(), 0.0)?;
            recorder.watch(&solver, &state, 1.0);
            recorder.state("field", 0.0, &solver, &state, 1.0);
            recorder.snapshot("field", 0.0, &solver, &state, 1.0, Vec::new());
            Outcome::Complete
        }
        Some(heating) => HeatRun::new(model, heating, &meshed, &mut solver, observer)?.run(&mut recorder)?,
    };
    let section = meshed.section(model);
    Ok(recorder.finish(outcome, section, &solver))
}
