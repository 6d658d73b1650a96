//! The command line as it is typed. Flags say how to run; the job file alone says what to solve.

use std::num::NonZeroUsize;
use std::path::PathBuf;

use clap::{Args, Parser, Subcommand, ValueEnum};

use crate::export::pictures::CloseUp;
use crate::lower::length_m;

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
    /// Read and validate a job, print what was understood, draw its mesh or section
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
    /// Draw the mesh, its bodies and strips to this PNG file
    #[arg(long, value_name = "PNG")]
    pub draw: Option<PathBuf>,
    /// Draw a square of the mesh alone, such as "30 mm, 100 mm, 5 mm": radius and height of its middle, and its width
    #[arg(long, value_name = "R,Z,WIDTH", requires = "draw", value_parser = close_up, allow_hyphen_values = true)]
    pub close_up: Option<CloseUp>,
    /// Draw the dimensioned section to this PNG file
    #[arg(long, value_name = "PNG")]
    pub draw_section: Option<PathBuf>,
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
    /// Leave out the field files (fields/*.vtu and run.pvd), the largest part of a result
    #[arg(long)]
    pub without_fields: bool,
}

/// Arguments of `materials`.
#[derive(Debug, Args)]
pub struct MaterialsArguments {
    /// A name or alias from the library
    pub name: Option<String>,
}

fn close_up(text: &str) -> Result<CloseUp, String> {
    let items: Vec<&str> = text.split(',').collect();
    let [r, z, width] = items[..] else {
        return Err("expected three lengths with commas between, such as \"30 mm, 100 mm, 5 mm\"".to_owned());
    };
    let wrong = |text: &str| format!("`{}` is not a length with its unit, such as \"5 mm\"", text.trim());
    let length = |text: &str| length_m(text).map_err(|_| wrong(text));
    let (r_m, z_m, width_m) = (length(r)?, length(z)?, length(width)?);
    if width_m < LEAST_CLOSE_UP_M {
        return Err(format!("the width is {width}; it must be at least 0.001 mm"));
    }
    Ok(CloseUp { r_m, z_m, width_m })
}

/// Narrowest square of a mesh that can be asked for, metres.
const LEAST_CLOSE_UP_M: f64 = 1e-6;
/// Most threads that may be asked for.
const MOST_THREADS: usize = 1024;

fn thread_count(text: &str) -> Result<NonZeroUsize, String> {
    let wanted = || format!("expected a whole number from 1 to {MOST_THREADS}");
    let count: NonZeroUsize = text.parse().map_err(|_| wanted())?;
    if count.get() > MOST_THREADS { Err(wanted()) } else { Ok(count) }
}
