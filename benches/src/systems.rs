//! Sparse symmetric systems as the solver makes them: the field of a bar in its coil (complex, with turn voltages and the open boundary)
//! and heat conduction in the bar (real, positive definite), at growing numbers of unknowns. Convention: SI units.

use std::sync::Arc;

use mesher::Limits;
use num_complex::Complex64;
use solver::SolveError;
use solver::fem::space::Space;
use solver::heat::HeatProblem;
use solver::layout::Layout;
use solver::linalg::{LinalgError, SymmetricMatrix};
use solver::magnetics::open_boundary::Exterior;
use solver::magnetics::operator::Operator;
use solver::magnetics::properties::{PointProperties, StartTemperatures};
use solver::model::{MeshSettings, Model};
use solver::overview::Meshed;
use solver::results::RegionName;

use crate::devices::{DeviceError, bar_heater};

/// Right-hand sides that are solved for together.
pub const COLUMNS: usize = 8;
/// Weight of the conductances in the heat matrix, in seconds: a stage of a step of about a third of a second.
const HEAT_WEIGHT_S: f64 = 0.1;

/// A system that cannot be set up, solved or written.
#[derive(Debug, thiserror::Error)]
pub enum SystemError {
    /// The device was refused.
    #[error(transparent)]
    Device(#[from] DeviceError),
    /// The mesh or the plan was refused.
    #[error(transparent)]
    Solve(#[from] SolveError),
    /// The system could not be solved.
    #[error(transparent)]
    Linear(#[from] LinalgError),
    /// A file could not be written.
    #[error(transparent)]
    File(#[from] std::io::Error),
}

/// What is solved for, and how finely (found by trial for the number of unknowns).
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Kind {
    /// The field, complex symmetric.
    Field {
        /// Order of the elements.
        order: usize,
        /// Fineness of the mesh.
        fineness: f64,
    },
    /// The temperature of the bar, real and positive definite.
    Heat {
        /// Size of the elements in the bar, in metres.
        size: f64,
    },
}

/// A system by name.
#[derive(Debug, Clone, Copy)]
pub struct Case {
    /// Short name: what, order of the elements where it is not 2, thousands of unknowns.
    pub name: &'static str,
    /// What is solved for.
    pub kind: Kind,
}

impl Case {
    /// All systems.
    pub const ALL: [Self; 6] = [
        Self::field("field-17k", 2, 0.3),
        Self::field("field-50k", 2, 1.17),
        Self::field("field-200k", 2, 2.46),
        Self::field("field-800k", 2, 5.03),
        Self::field("field-p1-200k", 1, 3.95),
        Self { name: "heat-200k", kind: Kind::Heat { size: 3.2e-4 } },
    ];

    const fn field(name: &'static str, order: usize, fineness: f64) -> Self {
        Self { name, kind: Kind::Field { order, fineness } }
    }

    /// The case of that name.
    pub fn named(name: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|c| c.name == name)
    }
}

/// The device of a field system.
///
/// # Errors
/// Values the library refuses.
pub fn field_model(order: usize, fineness: f64) -> Result<Model, DeviceError> {
    let model = bar_heater(fineness)?;
    Ok(Model { mesh: MeshSettings { order, ..model.mesh }, ..model })
}

/// A system with what the solver knows of it.
#[derive(Debug, Clone)]
pub struct System<T> {
    /// Its matrix.
    pub matrix: SymmetricMatrix<T>,
    /// A point for every unknown, in metres.
    pub coordinates: Vec<[f64; 2]>,
    /// Unknowns to be eliminated last.
    pub last: Vec<u32>,
    /// [`COLUMNS`] right-hand sides, one after the other.
    pub rhs: Vec<T>,
}

/// A meshed device with its field operator.
#[derive(Debug)]
pub struct FieldCase {
    /// What is solved.
    pub model: Model,
    /// Its mesh.
    pub meshed: Meshed,
    /// Its equations.
    pub operator: Operator,
    /// Materials at the quadrature points.
    pub properties: PointProperties,
}

impl FieldCase {
    /// Meshes a device and sets up its equations.
    ///
    /// # Errors
    /// A section the mesher refuses, or a pattern that cannot be planned.
    pub fn new(model: Model) -> Result<Self, SystemError> {
        let meshed = Meshed::new(&model, &|| false)?;
        let (operator, properties) = field_operator(&model, &meshed)?;
        Ok(Self { model, meshed, operator, properties })
    }

    /// Assembles its system; the right-hand sides are one ampere in each of the first turns.
    pub fn system(&mut self) -> System<Complex64> {
        let space = Arc::clone(self.operator.space());
        let n = self.operator.unknowns();
        let exterior = self.meshed.layout.open_boundary.map(|(radius, z)| Exterior::new(&space, z, radius, false));
        let ring = exterior.map(|x| x.unknowns).unwrap_or_default();
        let mut coordinates = space.points().to_vec();
        coordinates.resize(n, [0.0; 2]);
        let mut rhs = vec![Complex64::default(); COLUMNS * n];
        for (k, column) in rhs.chunks_exact_mut(n).enumerate() {
            for (i, value) in self.operator.turns().source(&space, k) {
                column[i as usize] += value;
            }
        }
        System {
            matrix: self.operator.matrix(&self.properties).clone(),
            coordinates,
            last: ring.into_iter().chain(space.len() as u32..n as u32).collect(),
            rhs,
        }
    }
}

/// The field equations of a meshed device, and its materials at the start.
///
/// # Errors
/// A turn on the axis, or a pattern that cannot be planned.
pub fn field_operator(model: &Model, meshed: &Meshed) -> Result<(Operator, PointProperties), SystemError> {
    let space = Arc::new(Space::new(&meshed.mesh, &meshed.nodes, |_| true));
    let operator = Operator::new(Arc::clone(&space), &meshed.layout.regions, meshed.layout.open_boundary, model)?;
    let properties = PointProperties::new(&space, &meshed.layout.regions, model, &StartTemperatures);
    Ok((operator, properties))
}

/// The heat system of a device's bar at its start, in elements of one size in metres inside the bar; the right-hand sides are waves along
/// the bar, in joules.
///
/// # Errors
/// A section the mesher refuses, or a pattern that cannot be planned.
pub fn heat_system(model: &Model, size: f64) -> Result<System<f64>, SystemError> {
    let Layout { mut drawing, regions, .. } = solver::layout::layout(model)?;
    let of_bar = |r: &RegionName| if let RegionName::Part(p, _) = r { Some(*p) } else { None };
    for region in drawing.regions.iter_mut().filter(|r| of_bar(&regions[r.id.0 as usize]).is_some()) {
        (region.interior_size, region.surface_size) = (size, size);
    }
    let mesh = Arc::new(mesher::triangulate(&drawing, &Limits::default(), &|| false).map_err(SolveError::from)?);
    let heated: Vec<Option<usize>> = regions.iter().map(of_bar).collect();
    let problem = HeatProblem::new(&mesh, &mesh.nodes(model.mesh.order), &heated, model)?;
    let coordinates = problem.space().points().to_vec();
    let rhs = (0..COLUMNS).flat_map(|k| coordinates.iter().map(move |p| (40.0 * k as f64 * p[1]).cos())).collect();
    Ok(System { matrix: problem.matrix(&problem.start(), HEAT_WEIGHT_S), coordinates, last: Vec::new(), rhs })
}
