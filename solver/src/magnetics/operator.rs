//! The field system of one mesh: pattern and plan once, values and factor whenever properties or frequency change.

use std::sync::Arc;

use num_complex::Complex64;

use super::conductor::Turns;
use super::element_forms::ElementForms;
use super::open_boundary::{Exterior, slice_source};
use super::properties::PointProperties;
use super::unit_field::UnitField;
use crate::error::SolveError;
use crate::fem::assemble::{Scatter, add_blocks};
use crate::fem::element::PointValues;
use crate::fem::space::Space;
use crate::linalg::{Factor, LinalgError, Pattern, Plan, SymmetricMatrix, checked_solve};
use crate::model::{Drive, Mirrors, Model};
use crate::results::RegionName;

/// Everything of the field problem that does not change with temperature, and room for what does.
#[derive(Debug)]
pub struct Operator {
    space: Arc<Space>,
    turns: Turns,
    omega: f64,
    copies: f64,
    border_of_element: Vec<Option<u32>>,
    exterior: Option<Exterior>,
    exterior_slots: Vec<u32>,
    exterior_block: Vec<f64>,
    scatter: Scatter,
    forms: ElementForms,
    /// Room for element blocks.
    blocks: Vec<Complex64>,
    plan: Arc<Plan>,
    matrix: SymmetricMatrix<Complex64>,
    factor: Option<Factor<Complex64>>,
    /// Source of one ampere in each meshed turn.
    turn_sources: Vec<Vec<(u32, f64)>>,
    source: Vec<Complex64>,
    surfaces_m2: Vec<f64>,
}

impl Operator {
    /// Sets up the system on a space over all regions of the mesh.
    ///
    /// # Errors
    /// A turn on the axis, or a pattern that cannot be planned.
    pub fn new(
        space: Arc<Space>,
        regions: &[RegionName],
        open_boundary: Option<(f64, f64)>,
        model: &Model,
    ) -> Result<Self, SolveError> {
        let turns = Turns::new(&space, regions, model)?;
        let n = space.len() + turns.border_count();
        let half = matches!(model.mirrors, Mirrors::One { .. });
        let exterior = open_boundary.map(|(radius, z)| Exterior::new(&space, z, radius, half));
        let border_of_element = borders(&space, &turns);
        let cliques = element_unknowns(&space, &border_of_element);
        let ring: &[u32] = exterior.as_ref().map_or(&[], |x| &x.unknowns);
        let all = cliques.iter().map(Vec::as_slice).chain((!ring.is_empty()).then_some(ring));
        let pattern = Arc::new(Pattern::from_cliques(n, all));
        let refused = |source| SolveError::Linear { system: "field", time_s: 0.0, source };
        let scatter = Scatter::new(&pattern, cliques.iter().map(Vec::as_slice)).map_err(refused)?;
        let mut exterior_slots = Vec::new();
        pattern.clique_slots(ring, &mut exterior_slots).map_err(refused)?;
        let plan = plan(&pattern, &space, ring, n).map_err(refused)?;
        let matrix = SymmetricMatrix { values: vec![Complex64::ZERO; pattern.nnz()], pattern };
        let mut out = Self {
            omega: std::f64::consts::TAU * model.drive.frequency_hz(),
            copies: if half { 2.0 } else { 1.0 },
            exterior_block: exterior.as_ref().map(Exterior::block).unwrap_or_default(),
            factor: None,
            turn_sources: (0..turns.meshed.len()).map(|k| turns.source(&space, k)).collect(),
            source: vec![Complex64::ZERO; n],
            forms: ElementForms::new(&space, &border_of_element, |e| {
                !matches!(regions[space.region(e).0 as usize], RegionName::Air)
            }),
            blocks: Vec::new(),
            surfaces_m2: space.surface_by_region(regions.len()),
            space,
            turns,
            border_of_element,
            exterior,
            exterior_slots,
            scatter,
            plan,
            matrix,
        };
        out.set_source(model);
        Ok(out)
    }

    /// The space of `u`.
    pub fn space(&self) -> &Arc<Space> {
        &self.space
    }

    /// The turns.
    pub fn turns(&self) -> &Turns {
        &self.turns
    }

    /// Angular frequency in rad/s.
    pub fn omega(&self) -> f64 {
        self.omega
    }

    /// Changes the frequency; plan, stored forms and the memory of the factor remain.
    ///
    /// The mesh remains too: it must be fine enough for the skin depth at `frequency_hz`.
    ///
    /// # Errors
    /// [`SolveError::Value`] where the frequency is not a positive number; the operator is then as before.
    pub fn set_frequency(&mut self, frequency_hz: f64) -> Result<(), SolveError> {
        if !(frequency_hz > 0.0 && frequency_hz.is_finite()) {
            let (place, expected) = ("frequency".to_owned(), "a number above 0");
            return Err(SolveError::Value { place, value: frequency_hz, unit: "Hz", expected });
        }
        self.omega = std::f64::consts::TAU * frequency_hz;
        Ok(())
    }

    /// Meshed sections in the whole device: 2 with one mirror plane, else 1.
    pub fn copies(&self) -> f64 {
        self.copies
    }

    /// Surface of each region towards other regions in the meshed section, m^2.
    pub fn surfaces_m2(&self) -> &[f64] {
        &self.surfaces_m2
    }

    /// Number of unknowns.
    pub fn unknowns(&self) -> usize {
        self.source.len()
    }

    /// Elimination plan of the system.
    pub fn plan(&self) -> &Arc<Plan> {
        &self.plan
    }

    /// Assembles the system with the given properties.
    pub fn matrix(&mut self, properties: &PointProperties) -> &SymmetricMatrix<Complex64> {
        self.assemble(properties);
        &self.matrix
    }

    /// Border unknown of an element's turn, if it is in a solid turn.
    pub fn border_of_element(&self, e: usize) -> Option<u32> {
        self.border_of_element[e]
    }

    /// Source vector of one ampere (peak) through the coils, or of an applied field of 1 A/m (peak).
    pub fn source(&self) -> &[Complex64] {
        &self.source
    }

    /// Source of a unit coil current in meshed turn `k`: `(unknown, value)` pairs.
    pub fn turn_source(&self, k: usize) -> &[(u32, f64)] {
        &self.turn_sources[k]
    }

    /// Quadratic form `u^H K_ext u` of the field outside the sphere, in A^2 H; zero for a slice.
    pub fn exterior_form(&self, x: &[Complex64]) -> f64 {
        let Some(exterior) = &self.exterior else { return 0.0 };
        let mut sum = 0.0;
        let mut k = 0;
        for (i, &a) in exterior.unknowns.iter().enumerate() {
            for (j, &b) in exterior.unknowns[..=i].iter().enumerate() {
                let term = self.exterior_block[k] * (x[a as usize].conj() * x[b as usize]).re;
                sum += if i == j { term } else { 2.0 * term };
                k += 1;
            }
        }
        sum
    }

    /// Solves for one ampere (peak) or 1 A/m (peak) with the given properties.
    ///
    /// # Errors
    /// A factorisation that fails, or a solution that does not satisfy its equations.
    pub fn solve(&mut self, properties: &PointProperties) -> Result<UnitField, LinalgError> {
        self.assemble(properties);
        let factor = match &mut self.factor {
            Some(factor) => {
                factor.refactor(&self.matrix.values)?;
                factor
            }
            none => none.insert(Factor::new(&self.plan, &self.matrix.values)?),
        };
        let solved = checked_solve(&self.matrix, factor, &self.source)?;
        Ok(UnitField::new(self, properties, solved.x, solved.backward_error))
    }

    fn assemble(&mut self, properties: &PointProperties) {
        self.matrix.values.fill(Complex64::ZERO);
        let (space, forms, omega) = (&self.space, &self.forms, self.omega);
        add_blocks(&self.scatter, &mut self.blocks, &mut self.matrix.values, |e, points, out| {
            forms.block(space, e, (properties.sigma(e), properties.nu(e)), omega, points, out);
        });
        for (&slot, &k) in self.exterior_slots.iter().zip(&self.exterior_block) {
            self.matrix.values[slot as usize] += k;
        }
    }

    fn set_source(&mut self, model: &Model) {
        let mut pairs = Vec::new();
        match model.drive {
            Drive::Supply { .. } => {
                for (k, turn) in self.turns.meshed.iter().enumerate() {
                    pairs.extend(self.turn_sources[k].iter().map(|&(i, v)| (i, turn.sign * v)));
                }
            }
            Drive::AppliedField { .. } => match &self.exterior {
                Some(x) => pairs.extend(x.unknowns.iter().copied().zip(x.applied_field_source())),
                None => pairs = slice_source(&self.space),
            },
        }
        for (i, v) in pairs {
            self.source[i as usize] += v;
        }
    }
}

fn borders(space: &Space, turns: &Turns) -> Vec<Option<u32>> {
    let mut out = vec![None; space.element_count()];
    for turn in &turns.meshed {
        for &e in &turn.elements {
            out[e as usize] = turn.border;
        }
    }
    out
}

fn element_unknowns(space: &Space, borders: &[Option<u32>]) -> Vec<Vec<u32>> {
    (0..space.element_count()).map(|e| space.element(e).iter().copied().chain(borders[e]).collect()).collect()
}

fn plan(pattern: &Arc<Pattern>, space: &Space, ring: &[u32], n: usize) -> Result<Arc<Plan>, LinalgError> {
    let mut coordinates = space.points().to_vec();
    coordinates.resize(n, [0.0; 2]);
    let last: Vec<u32> = ring.iter().copied().chain(space.len() as u32..n as u32).collect();
    Plan::new(Arc::clone(pattern), Some(&coordinates), &last).map(Arc::new)
}

/// `(-B_r, B_z)` of basis function `i`: `(r u_z, 2 u + r u_r)`.
pub fn curl(p: &PointValues, i: usize) -> (f64, f64) {
    (p.r * p.gradient[i][1], 2.0 * p.value[i] + p.r * p.gradient[i][0])
}
