//! The commands, one module each, and what they share: reading a job, the thread pool, printing.

mod check;
mod digest;
mod materials;
mod run;
mod schema;

use std::io::Write;
use std::path::Path;

use solver::model::Model;

use crate::Surroundings;
use crate::args::{Arguments, Command, How};
use crate::exit::{Exit, Failure};
use crate::export::folder::OutputError;
use crate::job::Job;
use crate::lower::lower;

/// Does what the command line says.
pub(crate) fn carry_out(
    arguments: &Arguments,
    out: &mut dyn Write,
    err: &mut (dyn Write + Send),
    surroundings: &Surroundings,
) -> Result<Exit, Failure> {
    let how = &arguments.how;
    match &arguments.command {
        Command::Check(check) => check::check(check, how, out, surroundings),
        Command::Run(run) => run::run(run, how, out, err, surroundings),
        Command::Materials(materials) => materials::materials(materials.name.as_deref(), out),
        Command::Schema => schema::schema(out),
    }
}

/// A job as written and as meant.
fn read_job(path: &Path) -> Result<(Job, Model), Failure> {
    let job = Job::read(path)?;
    let model = lower(&job)?;
    Ok((job, model))
}

/// Does the work on the number of threads asked for.
fn on_threads<T: Send>(how: &How, work: impl FnOnce() -> T + Send) -> Result<T, Failure> {
    let Some(threads) = how.threads else { return Ok(work()) };
    let threads = threads.get();
    let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build();
    Ok(pool.map_err(|source| Failure::Threads { threads, source })?.install(work))
}

/// Number of threads that [`on_threads`] works on.
fn thread_count(how: &How) -> usize {
    how.threads.map_or_else(rayon::current_num_threads, std::num::NonZeroUsize::get)
}

/// Text to standard output.
fn print(out: &mut dyn Write, text: &str) -> Result<(), Failure> {
    let written = out.write_all(text.as_bytes()).and_then(|()| out.flush());
    written.map_err(|error| Failure::Output(OutputError::Stdout(error)))
}
