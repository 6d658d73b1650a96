//! Nothing may stand where something else stands; touching is allowed.

use solver::model::{Coil, Part, Turn};

use super::shapes::extent;
use crate::job::Place;
use crate::job_error::JobError;

/// Checks parts and turns against each other.
///
/// # Errors
/// The first two that overlap, in the order of the job: parts with parts, turns with parts, turns with turns.
pub(super) fn check(parts: &[Part], coils: &[Coil], place: &Place) -> Result<(), JobError> {
    for (index, part) in parts.iter().enumerate() {
        if let Some(other) = parts[..index].iter().find(|other| other.outline.overlaps(&part.outline)) {
            return Err(JobError::PartsOverlap {
                place: place.key("parts").key(&part.name),
                other: other.name.clone(),
                here: extent(&part.outline),
                there: extent(&other.outline),
            });
        }
    }
    let mut before: Vec<(&Coil, usize, &Turn)> = Vec::new();
    for coil in coils {
        let at = place.key("coils").key(&coil.name);
        for (index, turn) in coil.turns.iter().enumerate() {
            let here = || extent(&turn.outline);
            if let Some(part) = parts.iter().find(|part| part.outline.overlaps(&turn.outline)) {
                let (part, there) = (part.name.clone(), extent(&part.outline));
                return Err(JobError::TurnInPart { place: at, turn: index + 1, part, here: here(), there });
            }
            let met = before.iter().find(|(_, _, other)| other.outline.overlaps(&turn.outline));
            if let Some((other, other_index, other_turn)) = met {
                return Err(JobError::TurnsOverlap {
                    place: at,
                    turn: index + 1,
                    other: other.name.clone(),
                    other_turn: other_index + 1,
                    here: here(),
                    there: extent(&other_turn.outline),
                });
            }
            before.push((coil, index, turn));
        }
    }
    Ok(())
}
