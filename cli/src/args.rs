//! The command line as it is typed. Flags say how to run; the job file alone says what to solve.

use std::num::NonZeroUsize;
use std::path::PathBuf;

use clap::{Args, Parser, Subcommand, ValueEnum};

const AFTER_HELP: &str = "\
Exit codes: 0 done, 1 bug, 2 usage, 3 job refused, 4 mesh impossible, 5 not converged, 6 output not written,
7 stopped early on request or at a stage limit (partial results are kept and marked).
A computed number is no permission to energise anything.";

/// Induction heating of bodies of revolution: fields, electrical numbers and heating curves.
#[derive(Debug, Parser)]
#[command(name = "coilwright", version, about, after_help = AFTER_HELP, arg_required_else_help = true)]
pub struct Arguments {
    /// What to do.
    #[command(subcommand)]
    pub command: Command,
    /// How to do it.
    #[command(flatten)]
    pub how: How,
}

/// How to run.
#[derive(Debug, Args)]
pub struct How {
    /// Number of threads (default: one a core); the results do not depend on it
    #[arg(long, global = true, value_name = "N", value_parser = thread_count)]
    pub threads: Option<NonZeroUsize>,
    /// How progress is shown on the error stream
    #[arg(long, global = true, value_enum, default_value = "auto", value_name = "HOW")]
    pub progress: ProgressChoice,
    /// Print nothing but errors and an early end
    #[arg(long, short, global = true)]
    pub quiet: bool,
}

/// How progress is shown.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub enum ProgressChoice {
    /// A live line on a terminal, plain lines elsewhere
    Auto,
    /// Plain lines, at most one every two seconds
    Plain,
    /// One JSON object a line for every event
    Json,
    /// Nothing
    Off,
}

/// The commands.
#[derive(Debug, Subcommand)]
pub enum Command {
    /// Read and validate a job, print what was understood, draw the section
    Check(CheckArguments),
    /// Solve a job: fields, losses, heating, maps and tables
    Run(RunArguments),
    /// List the material library, or tabulate one material with its sources
    Materials(MaterialsArguments),
    /// Print the JSON Schema of the job file
    Schema,
}

/// Arguments of `check`.
#[derive(Debug, Args)]
pub struct CheckArguments {
    /// The job file
    pub job: PathBuf,
    /// Draw the section to this PNG file
    #[arg(long, value_name = "PNG")]
    pub draw: Option<PathBuf>,
}

/// Arguments of `run`.
#[derive(Debug, Args)]
pub struct RunArguments {
    /// The job file
    pub job: PathBuf,
    /// The result folder; made if it does not exist
    #[arg(long, value_name = "DIR")]
    pub out: PathBuf,
    /// Replace an earlier result in the folder
    #[arg(long)]
    pub overwrite: bool,
}

/// Arguments of `materials`.
#[derive(Debug, Args)]
pub struct MaterialsArguments {
    /// A name or alias from the library
    pub name: Option<String>,
}

/// Most threads that may be asked for.
const MOST_THREADS: usize = 1024;

fn thread_count(text: &str) -> Result<NonZeroUsize, String> {
    let wanted = || format!("expected a whole number from 1 to {MOST_THREADS}");
    let count: NonZeroUsize = text.parse().map_err(|_| wanted())?;
    if count.get() > MOST_THREADS { Err(wanted()) } else { Ok(count) }
}
