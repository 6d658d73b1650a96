//! The job with every default written out: running it again gives the same model.
//!
//! Constant defaults are in place once a job is read; here the defaults that depend on other keys are added, by the
//! same functions that [`crate::lower`] calls. Materials of the library stay names.

use serde_json::{Value, json};

use super::{Job, Shape};
use crate::lower::defaults;

impl Job {
    /// The job as a JSON value, every default filled in, remarks in their objects.
    pub fn filled(&self) -> Value {
        let mut job = self.clone();
        for part in &mut job.parts {
            part.surface.emissivity = Some(defaults::emissivity_of(&part.surface, &part.material));
            for face in [&mut part.outside, &mut part.inside, &mut part.top, &mut part.bottom] {
                if let Some(super::FaceCondition::Exchange(surface)) = face {
                    surface.emissivity = Some(defaults::emissivity_of(surface, &part.material));
                }
            }
            part.start = Some(defaults::part_start(part, self.heating.as_ref()));
            place_at_origin(&mut part.shape);
        }
        for coil in &mut job.coils {
            let place = self.place().key("coils").key(&coil.name);
            coil.temperature = defaults::copper_temperature(coil, &place).ok();
        }
        let mut value = json!(job);
        for (pointer, text) in &self.remarks {
            if let Some(Value::Object(object)) = value.pointer_mut(pointer) {
                object.insert("note".to_owned(), text.clone());
            }
        }
        value
    }
}

/// Writes the centre out where nothing places a shape.
fn place_at_origin(shape: &mut Shape) {
    let (centre, from, to) = match shape {
        Shape::Cylinder(s) => (&mut s.centre, &s.from, &s.to),
        Shape::Tube(s) => (&mut s.centre, &s.from, &s.to),
        Shape::Disc(s) => (&mut s.centre, &s.from, &s.to),
        Shape::Ring(s) => (&mut s.centre, &s.from, &s.to),
        Shape::Cone(s) => (&mut s.centre, &s.from, &s.to),
        Shape::Sphere(_) | Shape::Profile(_) => return,
    };
    if from.is_none() && to.is_none() {
        centre.get_or_insert_with(super::part::origin);
    }
}
