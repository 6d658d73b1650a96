//! `timings.json`: where the wall time went. The only file of a result that differs between equal runs.

use std::time::Duration;

use super::{EncodeError, json_bytes};

/// Wall times of a run.
#[derive(Debug, Clone, Copy, PartialEq, serde::Serialize)]
pub struct Timings {
    /// Number of threads.
    pub threads: usize,
    /// Reading and checking the job, seconds.
    pub read_s: f64,
    /// Meshing and solving, seconds.
    pub solve_s: f64,
    /// Drawing and writing all other files, seconds.
    pub write_s: f64,
    /// All of it, seconds.
    pub total_s: f64,
}

impl Timings {
    /// From the three spans.
    pub fn new(threads: usize, read: Duration, solve: Duration, write: Duration) -> Self {
        Self {
            threads,
            read_s: read.as_secs_f64(),
            solve_s: solve.as_secs_f64(),
            write_s: write.as_secs_f64(),
            total_s: (read + solve + write).as_secs_f64(),
        }
    }

    /// The file.
    ///
    /// # Errors
    /// The JSON could not be written.
    pub fn bytes(&self) -> Result<Vec<u8>, EncodeError> {
        json_bytes(self)
    }
}
