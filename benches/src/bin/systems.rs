//! Solves the committed systems for comparison with other solvers: `systems list` names them, `systems write NAME FOLDER` writes the
//! matrix and right-hand sides, `systems serve NAME` answers every line it reads with the times of one run. The name `whole` stands for
//! a field solve from mesh to losses. Convention: seconds of the calls alone; one line of JSON an answer.

use std::io::{BufRead, Write, stdin, stdout};
use std::path::Path;

use benches::systems::{Case, FieldCase, Kind, SystemError, field_model, heat_system};
use benches::{devices, dump, solving, whole};
use serde_json::{Value, json};

/// What can go wrong.
#[derive(Debug, thiserror::Error)]
enum Failure {
    #[error("usage: systems list | systems write NAME FOLDER | systems serve NAME")]
    Usage,
    #[error("there is no system `{0}`; `systems list` names all")]
    NoSuchSystem(String),
    #[error(transparent)]
    System(#[from] SystemError),
    #[error(transparent)]
    Io(#[from] std::io::Error),
}

fn main() -> Result<(), Failure> {
    let arguments: Vec<String> = std::env::args().skip(1).collect();
    match arguments.iter().map(String::as_str).collect::<Vec<_>>()[..] {
        ["list"] => Ok(Case::ALL.iter().try_for_each(|case| writeln!(stdout(), "{}", case.name))?),
        ["write", "whole", folder] => Ok(whole::write(Path::new(folder))?),
        ["write", name, folder] => write(named(name)?, Path::new(folder)),
        ["serve", "whole"] => answer(whole::run),
        ["serve", name] => serve(named(name)?),
        _ => Err(Failure::Usage),
    }
}

fn named(name: &str) -> Result<Case, Failure> {
    Case::named(name).ok_or_else(|| Failure::NoSuchSystem(name.to_owned()))
}

fn write(case: Case, folder: &Path) -> Result<(), Failure> {
    match case.kind {
        Kind::Field { order, fineness } => dump::write(&field(order, fineness)?.system(), folder)?,
        Kind::Heat { size } => {
            dump::write(&heat_system(&devices::bar_heater(1.0).map_err(SystemError::from)?, size)?, folder)?;
        }
    }
    Ok(())
}

fn field(order: usize, fineness: f64) -> Result<FieldCase, SystemError> {
    FieldCase::new(field_model(order, fineness)?)
}

fn serve(case: Case) -> Result<(), Failure> {
    match case.kind {
        Kind::Field { order, fineness } => {
            let mut field = field(order, fineness)?;
            let system = field.system();
            answer(|| {
                let mut times = solving::run(&system)?;
                let (_, seconds) = solving::timed(|| field.operator.matrix(&field.properties).values.len());
                times["assembly_s"] = json!(seconds);
                Ok(times)
            })
        }
        Kind::Heat { size } => {
            let system = heat_system(&devices::bar_heater(1.0).map_err(SystemError::from)?, size)?;
            answer(|| Ok(solving::run(&system)?))
        }
    }
}

/// Runs once for every line that is read.
fn answer(mut run: impl FnMut() -> Result<Value, SystemError>) -> Result<(), Failure> {
    for line in stdin().lock().lines() {
        line?;
        writeln!(stdout(), "{}", run()?)?;
        stdout().flush()?;
    }
    Ok(())
}
