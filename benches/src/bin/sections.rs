//! Meshes the committed sections for comparison with other mesh generators: `sections list` names them, `sections boundary NAME`
//! writes the boundary of a mesh as JSON, `sections serve` reads a name a line and answers each with the time and quality of a mesh.
//! Convention: seconds of the call to the mesher alone; one line of JSON an answer.

use std::io::{BufRead, Write, stdin, stdout};
use std::time::Instant;

use benches::angles::Angles;
use benches::boundary::Boundary;
use benches::sections::{Detail, Section};
use mesher::{Drawing, Limits, Mesh, MeshError, OutlineError};
use serde_json::{Value, json};

/// What can go wrong.
#[derive(Debug, thiserror::Error)]
enum Failure {
    #[error("usage: sections list | sections boundary NAME | sections serve")]
    Usage,
    #[error("there is no section `{0}`; `sections list` names all")]
    NoSuchSection(String),
    #[error(transparent)]
    Outline(#[from] OutlineError),
    #[error(transparent)]
    Mesh(#[from] MeshError),
    #[error(transparent)]
    Io(#[from] std::io::Error),
}

fn main() -> Result<(), Failure> {
    let arguments: Vec<String> = std::env::args().skip(1).collect();
    match arguments.iter().map(String::as_str).collect::<Vec<_>>()[..] {
        ["list"] => list(),
        ["boundary", name] => boundary(name),
        ["serve"] => serve(),
        _ => Err(Failure::Usage),
    }
}

fn list() -> Result<(), Failure> {
    for section in Section::ALL {
        for detail in Detail::ALL {
            writeln!(stdout(), "{}/{}", section.name, detail.name())?;
        }
    }
    Ok(())
}

fn boundary(name: &str) -> Result<(), Failure> {
    let drawing = drawing(name)?;
    let mesh = mesh(&drawing)?;
    writeln!(stdout(), "{}", Boundary::of(&mesh).to_json(&drawing))?;
    Ok(())
}

fn serve() -> Result<(), Failure> {
    for line in stdin().lock().lines() {
        let answer = timed(&line?)?;
        writeln!(stdout(), "{answer}")?;
        stdout().flush()?;
    }
    Ok(())
}

fn timed(name: &str) -> Result<Value, Failure> {
    let drawing = drawing(name)?;
    let start = Instant::now();
    let mesh = mesh(&drawing)?;
    let seconds = start.elapsed().as_secs_f64();
    let angles = Angles::of(&mesh);
    Ok(json!({
        "name": name,
        "seconds": seconds,
        "triangles": mesh.triangles().len(),
        "away_from_strips": angles.triangles,
        "min_angle_deg": angles.min_deg,
        "mean_angle_deg": angles.mean_deg,
        "share_below_30": angles.share_below_30,
        "share_30_to_40": angles.share_30_to_40,
    }))
}

fn drawing(name: &str) -> Result<Drawing, Failure> {
    let unknown = || Failure::NoSuchSection(name.to_owned());
    let (section, detail) = name.split_once('/').ok_or_else(unknown)?;
    let section = Section::named(section).ok_or_else(unknown)?;
    let detail = Detail::ALL.into_iter().find(|d| d.name() == detail).ok_or_else(unknown)?;
    Ok(section.drawing(detail)?)
}

fn mesh(drawing: &Drawing) -> Result<Mesh, MeshError> {
    mesher::triangulate(drawing, &Limits::default(), &|| false)
}
