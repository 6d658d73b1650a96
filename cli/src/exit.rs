//! How a command ends: the exit codes, and every failure with the code it leads to.

use mesher::MeshError;
use solver::error::SolveError;
use solver::results::Outcome;

use crate::export::EncodeError;
use crate::export::folder::OutputError;
use crate::export::pictures::PictureError;
use crate::job_error::JobError;

/// Exit code of the program.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Exit {
    /// Done as asked.
    Done = 0,
    /// A mistake in the program itself.
    Bug = 1,
    /// The command line is not understood.
    Usage = 2,
    /// The job cannot be read or makes no sense.
    JobRefused = 3,
    /// The section cannot be meshed.
    MeshImpossible = 4,
    /// The solve did not converge; what came before is kept and marked.
    NotConverged = 5,
    /// Output could not be written.
    OutputNotWritten = 6,
    /// Stopped on request or at a stage limit; partial results are kept and marked.
    StoppedEarly = 7,
}

impl Exit {
    /// The number handed to the system.
    pub fn code(self) -> u8 {
        self as u8
    }

    /// The exit that a finished run leads to.
    pub fn of(outcome: &Outcome) -> Self {
        match outcome {
            Outcome::Complete => Self::Done,
            Outcome::StageLimit { .. } | Outcome::Stopped { .. } => Self::StoppedEarly,
            Outcome::NotConverged { .. } => Self::NotConverged,
        }
    }
}

/// Why a command could not be carried out.
#[derive(Debug, thiserror::Error)]
pub enum Failure {
    /// The job is refused.
    #[error(transparent)]
    Job(#[from] JobError),
    /// The solve failed.
    #[error(transparent)]
    Solve(#[from] SolveError),
    /// The result folder or a file in it cannot be written.
    #[error(transparent)]
    Output(#[from] OutputError),
    /// A result could not be put into its format.
    #[error(transparent)]
    Encode(#[from] EncodeError),
    /// A picture could not be drawn.
    #[error(transparent)]
    Picture(#[from] PictureError),
    /// The threads asked for could not be started.
    #[error("{threads} threads could not be started: {source}; ask for fewer with `--threads N`")]
    Threads {
        /// How many.
        threads: usize,
        /// What the system said.
        source: rayon::ThreadPoolBuildError,
    },
    /// No material of that name.
    #[error("no material is named `{name}`{suggestion}; `coilwright materials` lists all names")]
    UnknownMaterial {
        /// As it was typed.
        name: String,
        /// Empty, or what may have been meant.
        suggestion: String,
    },
}

impl Failure {
    /// The exit code it leads to.
    pub fn exit(&self) -> Exit {
        match self {
            Self::Job(_) => Exit::JobRefused,
            Self::Solve(error) => solve_exit(error),
            Self::Output(_) | Self::Encode(_) | Self::Picture(_) => Exit::OutputNotWritten,
            Self::Threads { .. } | Self::UnknownMaterial { .. } => Exit::Usage,
        }
    }
}

fn solve_exit(error: &SolveError) -> Exit {
    match error {
        SolveError::Mesh(MeshError::Stopped) | SolveError::StoppedEarly => Exit::StoppedEarly,
        SolveError::Mesh(_) | SolveError::Outline(_) => Exit::MeshImpossible,
        SolveError::Linear { .. } | SolveError::HeatStep { .. } => Exit::NotConverged,
        SolveError::Material(_)
        | SolveError::CannotHold { .. }
        | SolveError::TurnOnAxis { .. }
        | SolveError::GaugeOutside { .. }
        | SolveError::Value { .. }
        | SolveError::Absent { .. } => Exit::JobRefused,
    }
}
