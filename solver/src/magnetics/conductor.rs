//! Coil turns: which unknown carries a turn's voltage, and how a coil current drives the field.
//!
//! A solid turn adds the unknown `W = V / (2 pi j w)` and the source `2 pi I`; a stranded turn spreads its current
//! evenly and adds the source `int (I / S) r^2 v 2 pi dr dz` and a resistance. A turn cut by a mirror plane carries
//! half its current in the half that is solved; a turn below the plane is the image of one above.

use crate::error::SolveError;
use crate::fem::assemble::map_elements;
use crate::fem::space::Space;
use crate::model::{ConductorKind, Mirrors, Model};
use crate::results::RegionName;

/// All turns of a model on a space.
#[derive(Debug, Clone)]
pub struct Turns {
    /// Turns that are meshed.
    pub meshed: Vec<MeshedTurn>,
    /// For each coil, for each of its turns, the index into `meshed` of itself or its mirror image.
    pub of_coil: Vec<Vec<usize>>,
}

/// A turn in the mesh.
#[derive(Debug, Clone)]
pub struct MeshedTurn {
    /// Index of its coil.
    pub coil: usize,
    /// Index in its coil.
    pub turn: usize,
    /// Elements of its conductor, ascending.
    pub elements: Vec<u32>,
    /// Part of its current that flows in the meshed section: 1, or 1/2 where a mirror plane cuts it.
    pub share: f64,
    /// +1, or -1 where the current runs against the other coils.
    pub sign: f64,
    /// Border unknown of a solid turn; `None` for a stranded turn.
    pub border: Option<u32>,
    /// Conductor area in the mesh, m^2.
    pub area_m2: f64,
    /// Volume in the mesh, m^3.
    pub volume_m3: f64,
    /// Resistance of a stranded turn's meshed part, ohms; zero for a solid turn.
    pub stranded_resistance_ohm: f64,
}

impl Turns {
    /// Finds the turns of `model` in `space`.
    ///
    /// # Errors
    /// [`SolveError::TurnOnAxis`] where a turn reaches the axis.
    pub fn new(space: &Space, regions: &[RegionName], model: &Model) -> Result<Self, SolveError> {
        let elements = elements_of_turns(space, regions, model);
        let mut meshed = Vec::new();
        let mut of_coil = Vec::new();
        let mut border = space.len() as u32;
        for (c, coil) in model.coils.iter().enumerate() {
            let mut own = Vec::new();
            for (t, turn) in coil.turns.iter().enumerate() {
                if turn.outline.bounds().0[0] <= 0.0 {
                    return Err(SolveError::TurnOnAxis { coil: coil.name.clone(), turn: t + 1 });
                }
                if elements[c][t].is_empty() {
                    own.push(usize::MAX);
                    continue;
                }
                let mut m = measure_turn(space, model, c, t, elements[c][t].clone());
                if coil.conductor == ConductorKind::Solid {
                    m.border = Some(border);
                    border += 1;
                }
                own.push(meshed.len());
                meshed.push(m);
            }
            of_coil.push(own);
        }
        link_images(model, &meshed, &mut of_coil);
        Ok(Self { meshed, of_coil })
    }

    /// Number of border unknowns.
    pub fn border_count(&self) -> usize {
        self.meshed.iter().filter(|t| t.border.is_some()).count()
    }

    /// Sources of a unit coil current in turn `k`: `(unknown, value)` pairs.
    pub fn source(&self, space: &Space, k: usize) -> Vec<(u32, f64)> {
        let turn = &self.meshed[k];
        if let Some(border) = turn.border {
            return vec![(border, std::f64::consts::TAU * turn.share)];
        }
        let density = turn.share / turn.area_m2;
        let blocks = map_elements(turn.elements.len(), |i, points| {
            let e = turn.elements[i] as usize;
            space.fill(e, points);
            let value =
                |n: usize| -> f64 { points.points().iter().map(|p| density * p.r * p.volume * p.value[n]).sum() };
            space.element(e).iter().enumerate().map(|(n, &dof)| (dof, value(n))).collect::<Vec<_>>()
        });
        blocks.into_iter().flatten().collect()
    }
}

fn elements_of_turns(space: &Space, regions: &[RegionName], model: &Model) -> Vec<Vec<Vec<u32>>> {
    let mut out: Vec<Vec<Vec<u32>>> = model.coils.iter().map(|c| vec![Vec::new(); c.turns.len()]).collect();
    for e in 0..space.element_count() {
        if let RegionName::Turn(c, t, _) = &regions[space.region(e).0 as usize] {
            out[*c][*t].push(e as u32);
        }
    }
    out
}

fn measure_turn(space: &Space, model: &Model, c: usize, t: usize, elements: Vec<u32>) -> MeshedTurn {
    let coil = &model.coils[c];
    let sums = map_elements(elements.len(), |i, points| {
        space.fill(elements[i] as usize, points);
        points.points().iter().fold([0.0; 2], |s, p| [s[0] + p.area, s[1] + p.volume])
    });
    let area_m2: f64 = sums.iter().map(|s| s[0]).sum();
    let volume_m3: f64 = sums.iter().map(|s| s[1]).sum();
    let share = if is_cut(model, c, t) { 0.5 } else { 1.0 };
    let stranded_resistance_ohm = match coil.conductor {
        ConductorKind::Solid => 0.0,
        ConductorKind::Stranded { fill } => {
            let sigma = coil.material.electrical_conductivity_s_per_m(coil.temperature_k);
            share * share * volume_m3 / (area_m2 * area_m2 * sigma * fill)
        }
    };
    MeshedTurn {
        coil: c,
        turn: t,
        elements,
        share,
        sign: if coil.reversed { -1.0 } else { 1.0 },
        border: None,
        area_m2,
        volume_m3,
        stranded_resistance_ohm,
    }
}

/// Heights of the mirror planes.
pub fn planes(mirrors: Mirrors) -> Vec<f64> {
    match mirrors {
        Mirrors::None => vec![],
        Mirrors::One { z_m } => vec![z_m],
        Mirrors::Two { lower_m, upper_m } => vec![lower_m, upper_m],
    }
}

fn is_cut(model: &Model, c: usize, t: usize) -> bool {
    let (lo, hi) = model.coils[c].turns[t].outline.bounds();
    let slack = 1e-6 * (hi[1] - lo[1]);
    planes(model.mirrors).iter().any(|z| lo[1] < z - slack && hi[1] > z + slack)
}

/// Gives turns below a mirror plane the index of their image above.
fn link_images(model: &Model, meshed: &[MeshedTurn], of_coil: &mut [Vec<usize>]) {
    let Mirrors::One { z_m } = model.mirrors else { return };
    for (c, own) in of_coil.iter_mut().enumerate() {
        for (t, slot) in own.iter_mut().enumerate().filter(|(_, s)| **s == usize::MAX) {
            let [r, z] = model.coils[c].turns[t].centre;
            let distance = |m: &MeshedTurn| {
                let q = model.coils[m.coil].turns[m.turn].centre;
                (q[0] - r).hypot(q[1] - (2.0 * z_m - z))
            };
            let nearest = meshed
                .iter()
                .enumerate()
                .filter(|(_, m)| m.coil == c)
                .min_by(|a, b| distance(a.1).total_cmp(&distance(b.1)));
            if let Some((k, _)) = nearest {
                *slot = k;
            }
        }
    }
}
