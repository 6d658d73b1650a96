//! From coils as written to turns. Turns are rings, in electrical order: along the first layer, back along the second.

use mesher::Point;
use solver::model;

use super::amount::{Amount, FLOW, GAP, POSITION, SIZE, TEMPERATURE, WATER, read, read_optional};
use super::conductor::{Section, section};
use super::{defaults, material, profile};
use crate::job::units::Length;
use crate::job::{Coil, Connection, Helix, Pancake, Place, Quantity, Sense, Water, Winding};
use crate::job_error::JobError;

/// Most turns of a job.
const MOST_TURNS: usize = 2000;

/// The coils in the order of the job; their list stands at `list`.
///
/// # Errors
/// Whatever is wrong with a coil alone, too many turns, a turn that touches the axis.
pub(super) fn coils(written: &[Coil], list: &Place) -> Result<Vec<model::Coil>, JobError> {
    let mut coils = Vec::with_capacity(written.len());
    let mut count = 0;
    for coil in written {
        let place = list.key(&coil.name);
        count += turn_count(&coil.winding);
        if count > MOST_TURNS {
            return Err(JobError::TooManyTurns { place: place.key("winding"), count, limit: MOST_TURNS });
        }
        coils.push(lowered(coil, &place)?);
    }
    Ok(coils)
}

fn turn_count(winding: &Winding) -> usize {
    match winding {
        Winding::Helix(helix) => helix.turns as usize * helix.layers as usize,
        Winding::Pancake(pancake) => pancake.turns as usize * pancake.layers as usize,
        Winding::PlacedTurns(centres) => centres.len(),
    }
}

fn lowered(coil: &Coil, place: &Place) -> Result<model::Coil, JobError> {
    let Connection::Series = coil.connection;
    let section = section(&coil.conductor, &place.key("conductor"))?;
    let winding = place.key("winding");
    let centres = match &coil.winding {
        Winding::Helix(helix) => helix_centres(helix, &section, &winding.key("helix"))?,
        Winding::Pancake(pancake) => pancake_centres(pancake, &section, &winding.key("pancake"))?,
        Winding::PlacedTurns(points) => {
            let at = winding.key("placed_turns");
            points.iter().enumerate().map(|(i, p)| profile::point(p, &at.index(i))).collect::<Result<_, _>>()?
        }
    };
    let mut turns = Vec::with_capacity(centres.len());
    for (index, centre) in centres.into_iter().enumerate() {
        let inner = centre[0] - 0.5 * section.radial;
        if inner <= 1e-6 {
            return Err(JobError::TurnOnAxis { place: winding, turn: index + 1, r_mm: 1e3 * inner });
        }
        let turn = section.turn(centre);
        turns.push(turn.map_err(|source| JobError::Outline { place: place.key("conductor"), source })?);
    }
    let water = coil.water.as_ref().map(|written| water(written, &place.key("water"))).transpose()?;
    let temperature = defaults::copper_temperature(coil, place)?;
    Ok(model::Coil {
        name: coil.name.clone(),
        turns,
        material: material::material(&coil.material, &place.key("material"))?,
        temperature_k: read(&temperature, &place.key("temperature"), TEMPERATURE)?.si,
        conductor: section.kind,
        reversed: coil.sense == Sense::Reversed,
        water,
    })
}

fn water(written: &Water, place: &Place) -> Result<model::Water, JobError> {
    Ok(model::Water {
        paths: written.paths as usize,
        inlet_k: read(&written.inlet, &place.key("inlet"), WATER)?.si,
        flow_per_path_m3_per_s: read(&written.flow_per_path, &place.key("flow_per_path"), FLOW)?.si,
    })
}

/// What says how far a row of turns extends.
struct Row<'a> {
    turns: u32,
    /// Size of the conductor along the row, metres.
    conductor: f64,
    /// From copper face to copper face in metres, and what it was written as.
    extent: Option<(f64, Amount)>,
    /// How much more must be written for one metre more of extent: 2 for a diameter.
    written_per_extent: f64,
    pitch: Option<Amount>,
    /// Key of the extent.
    key: &'static str,
    place: &'a Place,
}

impl Row<'_> {
    /// Distance from centre to centre in metres; zero for a single turn.
    fn pitch(&self) -> Result<f64, JobError> {
        let refused = |found| JobError::WindingExtent { place: self.place.clone(), found, extent: self.key };
        let gaps = f64::from(self.turns - 1);
        let (pitch, written, least) = match (&self.extent, &self.pitch) {
            (Some(_), Some(_)) => return Err(refused("how far the turns extend is said twice")),
            (None, None) if self.turns == 1 => return Ok(0.0),
            (None, None) => return Err(refused("how far the turns extend is not said")),
            (None, Some(pitch)) => (pitch.si, pitch, self.conductor),
            (Some((extent, written)), None) if self.turns == 1 => {
                if (extent - self.conductor).abs() > 1e-6 * self.conductor {
                    return Err(JobError::OneTurnExtent {
                        place: written.place.clone(),
                        value: written.text.clone(),
                        conductor_mm: 1e3 * self.conductor,
                        extent: self.key,
                    });
                }
                return Ok(0.0);
            }
            (Some((extent, written)), None) => {
                let missing = self.conductor * f64::from(self.turns) - extent;
                ((extent - self.conductor) / gaps, written, written.si + self.written_per_extent * missing)
            }
        };
        if self.turns > 1 && pitch < self.conductor * (1.0 - 1e-9) {
            return Err(JobError::TightPitch {
                place: written.place.clone(),
                value: written.text.clone(),
                pitch_mm: 1e3 * pitch,
                conductor_mm: 1e3 * self.conductor,
                extent: if self.pitch.is_some() { "pitch" } else { self.key },
                least_mm: 1e3 * least,
            });
        }
        Ok(pitch)
    }
}

fn helix_centres(helix: &Helix, section: &Section, place: &Place) -> Result<Vec<Point>, JobError> {
    let inner = read(&helix.inner_diameter, &place.key("inner_diameter"), SIZE)?.si;
    let length = read_optional(helix.length.as_ref(), &place.key("length"), SIZE)?;
    let pitch = read_optional(helix.pitch.as_ref(), &place.key("pitch"), SIZE)?;
    let (middle, gap) = middle_and_gap(&helix.centre, &helix.layer_gap, place)?;
    let extent = length.map(|length| (length.si, length));
    let row = Row {
        turns: helix.turns,
        conductor: section.axial,
        extent,
        written_per_extent: 1.0,
        pitch,
        key: "length",
        place,
    };
    let pitch = row.pitch()?;
    let lowest = middle - 0.5 * pitch * f64::from(helix.turns - 1);
    Ok(there_and_back(helix.turns, helix.layers, |layer, turn| {
        let r = 0.5 * inner + 0.5 * section.radial + f64::from(layer) * (section.radial + gap);
        [r, lowest + pitch * f64::from(turn)]
    }))
}

fn pancake_centres(pancake: &Pancake, section: &Section, place: &Place) -> Result<Vec<Point>, JobError> {
    let inner = read(&pancake.inner_diameter, &place.key("inner_diameter"), SIZE)?.si;
    let outer = read_optional(pancake.outer_diameter.as_ref(), &place.key("outer_diameter"), SIZE)?;
    let pitch = read_optional(pancake.pitch.as_ref(), &place.key("pitch"), SIZE)?;
    let (middle, gap) = middle_and_gap(&pancake.centre, &pancake.layer_gap, place)?;
    let extent = outer.map(|outer| (0.5 * (outer.si - inner), outer));
    let key = "outer_diameter";
    let row =
        Row { turns: pancake.turns, conductor: section.radial, extent, written_per_extent: 2.0, pitch, key, place };
    let pitch = row.pitch()?;
    let step = section.axial + gap;
    let lowest = middle - 0.5 * step * f64::from(pancake.layers - 1);
    Ok(there_and_back(pancake.turns, pancake.layers, |layer, turn| {
        let r = 0.5 * inner + 0.5 * section.radial + pitch * f64::from(turn);
        [r, lowest + step * f64::from(layer)]
    }))
}

fn middle_and_gap(centre: &Quantity<Length>, gap: &Quantity<Length>, place: &Place) -> Result<(f64, f64), JobError> {
    let middle = read(centre, &place.key("centre"), POSITION)?.si;
    Ok((middle, read(gap, &place.key("layer_gap"), GAP)?.si))
}

/// Centres in electrical order: every second layer runs back.
fn there_and_back(turns: u32, layers: u32, centre: impl Fn(u32, u32) -> Point) -> Vec<Point> {
    let mut centres = Vec::new();
    for layer in 0..layers {
        let there = layer.is_multiple_of(2);
        centres.extend((0..turns).map(|turn| centre(layer, if there { turn } else { turns - 1 - turn })));
    }
    centres
}
