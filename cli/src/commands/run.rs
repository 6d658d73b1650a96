//! `coilwright run JOB --out DIR`: from the job to the result folder and a digest of the numbers.

use std::io::Write;
use std::sync::atomic::Ordering;
use std::time::{Duration, Instant};

use solver::results::{Outcome, Results};

use super::{digest, on_threads, print, read_job, thread_count};
use crate::Surroundings;
use crate::args::{How, RunArguments};
use crate::exit::{Exit, Failure};
use crate::export::folder::{Folder, OutputError, inspect};
use crate::export::timings::Timings;
use crate::export::{self, Finished};
use crate::job::Job;
use crate::progress::Progress;

/// Runs a job.
pub(super) fn run(
    arguments: &RunArguments,
    how: &How,
    out: &mut dyn Write,
    err: &mut (dyn Write + Send),
    surroundings: &Surroundings,
) -> Result<Exit, Failure> {
    let begun = Instant::now();
    inspect(&arguments.out, arguments.overwrite)?;
    let (job, model) = read_job(&arguments.job)?;
    let folder = Folder::prepare(&arguments.out, arguments.overwrite)?;
    let read = begun.elapsed();

    let progress = Progress::new(how, surroundings.live, &mut *err, &surroundings.stop);
    let solved = on_threads(how, || solver::run(&model, &progress));
    progress.finish();
    drop(progress);
    let results = solved??;
    let solve = begun.elapsed().saturating_sub(read);

    let finished = Finished { model: &model, results: &results };
    let fields = !arguments.without_fields;
    on_threads(how, || write_folder(folder, &job, finished, (how, fields), (begun, read, solve)))??;
    tell(arguments, how, out, err, finished, surroundings)?;
    Ok(Exit::of(&results.outcome))
}

/// Writes every file, the summary last; those of the fields only where they are wanted.
fn write_folder(
    mut folder: Folder,
    job: &Job,
    run: Finished<'_>,
    (how, fields): (&How, bool),
    (begun, read, solve): (Instant, Duration, Duration),
) -> Result<(), Failure> {
    let results = run.results;
    folder.begin()?;
    folder.write("job.json", &export::json_bytes(&job.filled())?)?;
    folder.write("states.csv", &export::states::table(run)?)?;
    folder.write("history.csv", &export::history::table(run)?)?;
    folder.write("turns.csv", &export::turns::table(run)?)?;
    if fields {
        for (index, snapshot) in results.snapshots.iter().enumerate() {
            folder.write(&export::pvd::snapshot_name(index), &export::vtu::snapshot(results, snapshot)?)?;
        }
        folder.write("run.pvd", &export::pvd::collection(&results.snapshots)?)?;
    }
    let gauges: Vec<String> = run.model.gauges.iter().map(|gauge| gauge.name.clone()).collect();
    for picture in export::pictures::draw_all_named(results, &gauges)? {
        folder.write(&picture.name, &picture.png)?;
    }
    let write = begun.elapsed().saturating_sub(read + solve);
    folder.write("timings.json", &Timings::new(thread_count(how), read, solve, write).bytes()?)?;
    Ok(folder.finish(&export::summary::bytes(run)?)?)
}

/// The digest to standard output, an early end to the error stream. The result is on the disk by now: a pipe that was
/// closed changes nothing.
fn tell(
    arguments: &RunArguments,
    how: &How,
    out: &mut dyn Write,
    err: &mut dyn Write,
    run: Finished<'_>,
    surroundings: &Surroundings,
) -> Result<(), Failure> {
    if !how.quiet {
        let place = format!("\nWritten to {}\n", arguments.out.display());
        match print(out, &(digest::digest(run) + &place)) {
            Err(Failure::Output(OutputError::Stdout(error))) if error.kind() == std::io::ErrorKind::BrokenPipe => {}
            other => other?,
        }
    }
    if let Some(text) = early_end(run.results) {
        let _ = writeln!(err, "{text}; the partial result is kept, and `summary.json` says so");
    } else if surroundings.stop.load(Ordering::Relaxed) {
        let _ = writeln!(err, "the run was complete before it could be stopped");
    }
    Ok(())
}

/// How an incomplete run ended, in words.
fn early_end(results: &Results) -> Option<String> {
    match &results.outcome {
        Outcome::Complete => None,
        Outcome::StageLimit { stage, time_s } => {
            Some(format!("stage `{stage}` reached its longest time at t = {time_s:.3} s, before its goal"))
        }
        Outcome::Stopped { time_s } => Some(format!("stopped on request at t = {time_s:.3} s")),
        Outcome::NotConverged { time_s, reason } => Some(format!("not converged at t = {time_s:.3} s: {reason}")),
    }
}
