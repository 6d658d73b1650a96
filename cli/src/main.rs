//! The program `coilwright`: see the library of this crate.

use std::io::{stderr, stdout};
use std::process::ExitCode;

use coilwright::Surroundings;

fn main() -> ExitCode {
    let surroundings = Surroundings::of_process();
    ExitCode::from(coilwright::run_in(std::env::args_os(), &mut stdout(), &mut stderr(), &surroundings))
}
