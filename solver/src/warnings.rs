//! What the reader of a result must know, in words.

use mesher::Outline;

use crate::clearance::{is_bare_metal, neighbours};
use crate::constants::ZERO_CELSIUS_K;
use crate::material::{RangeNote, RangeUse};
use crate::mesh_report::{self, Body};
use crate::model::{ConductorKind, Model, Part, Role};
use crate::overview::Meshed;
use crate::results::{Electrical, Warning, WarningKind};

/// A disagreement of the Poynting check that is worth a word; the power of a part is then uncertain by about as much.
const POYNTING_LIMIT: f64 = 0.02;
/// Usual upper limit of the cooling water's outlet temperature, °C (common practice, no source).
const WATER_LIMIT_C: f64 = 60.0;

/// Beyond the end of a table by less than this, a temperature counts as at its end, kelvin: a steep front makes the
/// discrete temperature ripple by a few kelvin about its start value.
const RIPPLE_K: f64 = 5.0;

/// A list of warnings without repeats.
#[derive(Debug, Clone, Default)]
pub struct Warnings {
    list: Vec<Warning>,
}

impl Warnings {
    /// Starts from given warnings.
    pub fn new(list: Vec<Warning>) -> Self {
        Self { list }
    }

    /// Adds a warning unless one with the same kind and text is there.
    pub fn add(&mut self, kind: WarningKind, text: String) {
        let warning = Warning { kind, text };
        if !self.list.contains(&warning) {
            self.list.push(warning);
        }
    }

    /// True where a warning satisfies `test`.
    pub fn any(&self, test: impl Fn(&Warning) -> bool) -> bool {
        self.list.iter().any(test)
    }

    /// The warnings in order of appearance.
    pub fn into_vec(self) -> Vec<Warning> {
        self.list
    }
}

/// Warnings that follow from the model and its mesh.
pub fn before_solve(model: &Model, meshed: &Meshed) -> Vec<Warning> {
    let mut out = Warnings::default();
    if !model.coils.is_empty() {
        let text = "turns are rings: the pitch of the winding and the leads are neglected";
        out.add(WarningKind::RingModel, text.to_owned());
    }
    for coil in model.coils.iter().filter(|c| matches!(c.conductor, ConductorKind::Stranded { .. })) {
        let text = format!(
            "coil `{}`: skin and proximity loss inside the strands is left out; the resistance is that of uniform current",
            coil.name
        );
        out.add(WarningKind::StrandLoss, text);
    }
    for part in &model.parts {
        part_warnings(model, part, &mut out);
    }
    contact_warnings(model, meshed, &mut out);
    let (mesh, regions) = (&meshed.mesh, &meshed.layout.regions);
    for text in mesh_report::notes(mesh, regions).into_iter().chain(mesh_report::moves(mesh, regions)) {
        out.add(WarningKind::Mesh, text);
    }
    out.into_vec()
}

/// What follows from bodies that touch.
fn contact_warnings(model: &Model, meshed: &Meshed, out: &mut Warnings) {
    for pair in neighbours(model, meshed).iter().filter(|n| n.touch()) {
        let coil = pair.bodies.iter().any(|b| matches!(b, Body::Coil(_)));
        if coil && pair.bodies.iter().all(|b| is_bare_metal(model, b)) {
            let what = match &pair.bodies {
                [Body::Coil(one), Body::Coil(other)] if one == other => {
                    format!("turns of coil `{one}` touch each other")
                }
                [one, other] => format!("{} and {} touch", body_words(one), body_words(other)),
            };
            let text = format!(
                "{what} as bare metal: they are solved as if insulated from each other, and in the plant they would be \
                 short-circuited; leave a gap for the insulation"
            );
            out.add(WarningKind::BareContact, text);
        }
        if let [Body::Part(one), Body::Part(other)] = &pair.bodies
            && model.heating.is_some()
            && pair.contact_m > 0.0
            && model.parts.iter().filter(|p| p.name == *one || p.name == *other).all(|p| p.role.is_heated())
        {
            let text = format!(
                "parts `{one}` and `{other}` touch along {:.1} mm of the section: heat passes between them without contact \
                 resistance",
                1e3 * pair.contact_m
            );
            out.add(WarningKind::PerfectContact, text);
        }
    }
}

fn body_words(body: &Body) -> String {
    match body {
        Body::Air => "air".to_owned(),
        Body::Part(name) => format!("part `{name}`"),
        Body::Coil(name) => format!("coil `{name}`"),
    }
}

fn part_warnings(model: &Model, part: &Part, out: &mut Warnings) {
    let mu = part.material.relative_permeability(part.start_k);
    if mu > 1.0 {
        let text = format!(
            "part `{}`: relative permeability {mu:.1} at the start, the same at every field strength; saturation is not \
             followed, so compare it with the field strength found and give `relative_permeability` on the part if it \
             does not fit",
            part.name
        );
        out.add(WarningKind::LinearPermeability, text);
    }
    if let Some(melting) = part.material.melting.as_ref().filter(|m| part.start_k > m.solidus_k) {
        let text = format!(
            "part `{}` starts at {:.0} °C, above its solidus of {:.0} °C: it is solved as a body at rest, flow of the melt \
             is not followed",
            part.name,
            part.start_k - ZERO_CELSIUS_K,
            melting.solidus_k - ZERO_CELSIUS_K
        );
        out.add(WarningKind::Melting, text);
    }
    if model.heating.is_some() && part.role == Role::Lining {
        for inner in model.parts.iter().filter(|p| p.role.is_heated() && encloses(&part.outline, &p.outline)) {
            let text = format!(
                "part `{}` stands inside `{}`: both radiate to the ambient; radiation between them is left out, so the \
                 heat lost is overestimated and the lining stays too cold",
                inner.name, part.name
            );
            out.add(WarningKind::EnclosedRadiation, text);
        }
    }
}

/// True where `outer` stands round `inner`: beyond it in radius and at the same heights.
fn encloses(outer: &Outline, inner: &Outline) -> bool {
    let ((olo, ohi), (ilo, ihi)) = (outer.bounds(), inner.bounds());
    olo[0] >= ihi[0] && olo[1] < ihi[1] && ohi[1] > ilo[1]
}

/// Warnings that follow from one electrical state.
pub fn of_state(electrical: &Electrical, out: &mut Warnings) {
    for part in &electrical.parts {
        let Some(flux) = part.poynting_power_w.filter(|_| part.joule_loss_w > 1e-3 * electrical.workpiece_power_w)
        else {
            continue;
        };
        let defect = (flux - part.joule_loss_w).abs() / part.joule_loss_w;
        if defect > POYNTING_LIMIT {
            let text = format!(
                "part `{}`: the power that flows in through the air differs from its loss by {:.1} %; refine with \
                 `\"mesh\": {{ \"fineness\": 2 }}`",
                part.name,
                100.0 * defect
            );
            out.add(WarningKind::PoyntingCheck, text);
        }
    }
    for coil in &electrical.coils {
        let Some(outlet) = coil.water_outlet_k.map(|t| t - ZERO_CELSIUS_K).filter(|t| *t > WATER_LIMIT_C) else {
            continue;
        };
        let text = format!(
            "coil `{}`: cooling water would leave at more than {WATER_LIMIT_C:.0} °C (first seen {outlet:.0} °C); give it more \
             flow or more paths",
            coil.name
        );
        if !out.any(|w| w.kind == WarningKind::Water && w.text.contains(&format!("`{}`", coil.name))) {
            out.add(WarningKind::Water, text);
        }
    }
}

/// Warnings about material data used outside their range and about melting, from the extremes of a whole run.
pub fn of_temperatures(part: &Part, lowest_k: f64, highest_k: f64, out: &mut Warnings) {
    let far = |note: &RangeNote| match note.side() {
        RangeUse::Below { by_k } | RangeUse::Above { by_k } => by_k > RIPPLE_K,
    };
    for note in part.material.out_of_range(lowest_k, highest_k).into_iter().filter(far) {
        out.add(WarningKind::MaterialRange, format!("part `{}`: {note}", part.name));
    }
    if let Some(melting) = part.material.melting.as_ref().filter(|m| highest_k > m.solidus_k) {
        let text = format!(
            "part `{}` begins to melt: {:.0} °C is above its solidus of {:.0} °C; flow of the melt is not followed",
            part.name,
            highest_k - ZERO_CELSIUS_K,
            melting.solidus_k - ZERO_CELSIUS_K
        );
        out.add(WarningKind::Melting, text);
    }
}
