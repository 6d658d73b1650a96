//! Induction heating of bodies of revolution: from a job file to fields, electrical numbers and heating curves.
//!
//! [`run`] is the whole program without a process: arguments in, text to two streams, an exit code out. Only this crate
//! prints, reads the clock and touches files; it converts units once, in [`lower`].

pub mod args;
mod commands;
pub mod exit;
pub mod export;
mod figures;
pub mod job;
pub mod job_error;
pub mod lower;
pub mod progress;

use std::any::Any;
use std::ffi::OsString;
use std::io::{IsTerminal, Write};
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

use clap::Parser;

use args::Arguments;
use exit::{Exit, Failure};

/// Exit code after a second Ctrl-C: 128 + 2, as shells report a program ended by the interrupt signal.
const KILLED: i32 = 130;

/// What a command needs to know of the process it runs in.
#[derive(Debug, Default)]
pub struct Surroundings {
    /// True where the error stream is a terminal that can show a live line.
    pub live: bool,
    /// Set from outside to stop long work at its next safe point.
    pub stop: Arc<AtomicBool>,
}

impl Surroundings {
    /// Those of this process: Ctrl-C asks for a stop, a second one kills.
    pub fn of_process() -> Self {
        let stop = Arc::new(AtomicBool::new(false));
        let asked = Arc::clone(&stop);
        let on_interrupt = move || {
            if asked.swap(true, Ordering::SeqCst) {
                #[allow(clippy::exit, reason = "the second Ctrl-C is to end the process at once")]
                std::process::exit(KILLED);
            }
        };
        // Without a handler Ctrl-C ends the process at once, which loses no finished result.
        let _ = ctrlc::set_handler(on_interrupt);
        Self { live: std::io::stderr().is_terminal(), stop }
    }
}

/// Runs a command line (the first item is the name of the program) and returns the exit code.
pub fn run<A>(args: A, out: &mut dyn Write, err: &mut (dyn Write + Send)) -> u8
where
    A: IntoIterator,
    A::Item: Into<OsString> + Clone,
{
    run_in(args, out, err, &Surroundings::default())
}

/// As [`run`], in given surroundings.
pub fn run_in<A>(args: A, out: &mut dyn Write, err: &mut (dyn Write + Send), surroundings: &Surroundings) -> u8
where
    A: IntoIterator,
    A::Item: Into<OsString> + Clone,
{
    let arguments = match Arguments::try_parse_from(args) {
        Ok(arguments) => arguments,
        Err(error) => return not_understood(&error, out, err).code(),
    };
    guarded(err, |err| settle(commands::carry_out(&arguments, out, err, surroundings), err)).code()
}

/// Help and version go to `out`; anything else is a mistake in the command line.
fn not_understood(error: &clap::Error, out: &mut dyn Write, err: &mut dyn Write) -> Exit {
    let text = error.render().to_string();
    if error.use_stderr() {
        let _ = err.write_all(text.as_bytes());
        return Exit::Usage;
    }
    let _ = out.write_all(text.as_bytes());
    Exit::Done
}

/// Tells a failure; a closed pipe on standard output is none.
fn settle(outcome: Result<Exit, Failure>, err: &mut dyn Write) -> Exit {
    match outcome {
        Ok(exit) => exit,
        Err(Failure::Output(export::folder::OutputError::Stdout(error)))
            if error.kind() == std::io::ErrorKind::BrokenPipe =>
        {
            Exit::Done
        }
        Err(failure) => {
            let _ = writeln!(err, "error: {failure}");
            failure.exit()
        }
    }
}

/// Turns a panic into a report of a bug.
fn guarded(err: &mut (dyn Write + Send), work: impl FnOnce(&mut (dyn Write + Send)) -> Exit) -> Exit {
    match catch_unwind(AssertUnwindSafe(|| work(&mut *err))) {
        Ok(exit) => exit,
        Err(payload) => {
            let what = panic_text(payload.as_ref());
            let version = env!("CARGO_PKG_VERSION");
            let _ = writeln!(
                err,
                "error: this is a bug in coilwright {version}, not in your job: {what}\n\
                 Please report it with the job file and this message; no result was completed."
            );
            Exit::Bug
        }
    }
}

fn panic_text(payload: &(dyn Any + Send)) -> &str {
    let text = payload.downcast_ref::<String>().map(String::as_str);
    text.or_else(|| payload.downcast_ref::<&str>().copied()).unwrap_or("no message")
}

#[cfg(test)]
mod tests {
    use std::io;

    use super::export::folder::OutputError;
    use super::{Exit, Failure, guarded, settle};

    #[test]
    fn a_panic_becomes_the_report_of_a_bug() {
        let mut err = Vec::new();
        let exit = guarded(&mut err, |_| panic!("index {} of {}", 3, 2));
        let text = String::from_utf8_lossy(&err);
        assert_eq!(exit, Exit::Bug);
        assert!(text.contains("bug in coilwright") && text.contains("index 3 of 2"), "{text}");
    }

    #[test]
    fn a_closed_pipe_is_no_failure_but_a_full_disk_is() {
        let failed = |kind: io::ErrorKind| Err(Failure::Output(OutputError::Stdout(io::Error::from(kind))));
        assert_eq!(settle(failed(io::ErrorKind::BrokenPipe), &mut Vec::new()), Exit::Done);
        assert_eq!(settle(failed(io::ErrorKind::StorageFull), &mut Vec::new()), Exit::OutputNotWritten);
    }
}
