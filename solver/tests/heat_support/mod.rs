//! Small heat problems for the tests: slices of endless cylinders and bodies in air. SI units.
#![allow(dead_code, reason = "each test file uses a part of this")]
#![allow(clippy::unwrap_used, unreachable_pub, reason = "tests")]

use std::sync::Arc;

use mesher::{Drawing, Limits, Outline, Point, Region, RegionId, triangulate};
use serde_json::{Value, json};
use solver::heat::{HeatProblem, HeatState, StepControl};
use solver::material::Material;
use solver::model::{
    Drive, Face, FaceCondition, Gauge, GaugeKind, Heating, MeshSettings, Mirrors, Model, Part, Role, Stage, StageEnd,
    Surface,
};

/// A source of heat: time, and values at the points.
pub type Source<'a> = &'a dyn Fn(f64, &mut [f64]);

/// Nothing.
pub fn no_source(_: f64, out: &mut [f64]) {
    out.fill(0.0);
}

/// A material with constant properties: density 7800 kg/m^3, specific heat 600 J/(kg K).
pub fn plain(conductivity: f64) -> Arc<Material> {
    material(&json!({
        "name": "plain", "density": "7800 kg/m3",
        "thermal_conductivity": format!("{conductivity} W/m/K"), "specific_heat": "600 J/kg/K",
    }))
}

pub fn material(data: &Value) -> Arc<Material> {
    Arc::new(Material::from_json(data).unwrap())
}

/// Density times specific heat of [`plain`], J/(m^3 K).
pub const PLAIN_CAPACITY: f64 = 7800.0 * 600.0;

pub const INSULATED: Surface = Surface { emissivity: 0.0, convection_w_per_m2_k: 0.0 };

/// A body of rectangular section and what is around it.
#[derive(Clone)]
pub struct Body {
    pub lo: Point,
    pub hi: Point,
    pub material: Arc<Material>,
    pub surface: Surface,
    pub faces: Vec<(Face, FaceCondition)>,
    pub start_k: f64,
    pub ambient_k: f64,
    pub size: f64,
    pub order: usize,
    pub mirrors: Mirrors,
    pub gauges: Vec<Point>,
}

impl Body {
    /// A slice of height `size * 2` of an endless cylinder.
    pub fn cylinder(radius: f64, material: Arc<Material>, size: f64) -> Self {
        Self {
            lo: [0.0, 0.0],
            hi: [radius, 2.0 * size],
            material,
            surface: INSULATED,
            faces: Vec::new(),
            start_k: 293.15,
            ambient_k: 293.15,
            size,
            order: 2,
            mirrors: Mirrors::Two { lower_m: 0.0, upper_m: 2.0 * size },
            gauges: vec![[0.0, size], [radius, size]],
        }
    }

    pub fn model(&self) -> Model {
        let part = Part {
            name: "body".into(),
            role: Role::Workpiece,
            outline: Outline::rectangle(self.lo, self.hi).unwrap(),
            material: Arc::clone(&self.material),
            surface: self.surface,
            faces: self.faces.clone(),
            start_k: self.start_k,
        };
        let gauge = |(i, &at): (usize, &Point)| Gauge {
            name: format!("gauge {i}"),
            kind: GaugeKind::Thermocouple,
            part: 0,
            at,
        };
        let stage = Stage { name: "heat".into(), end: StageEnd::After(1.0), hold: None };
        Model {
            title: "test".into(),
            parts: vec![part],
            coils: Vec::new(),
            drive: Drive::AppliedField { frequency_hz: 50.0, field_a_per_m_rms: 0.0 },
            mirrors: self.mirrors,
            heating: Some(Heating { ambient_k: self.ambient_k, stages: vec![stage], step_tolerance_k: 2.0 }),
            gauges: self.gauges.iter().enumerate().map(gauge).collect(),
            start_k: self.start_k,
            mesh: MeshSettings { order: self.order, ..MeshSettings::default() },
        }
    }

    /// The problem on a mesh with air beside the body; between two mirrors, only outwards and in a bore.
    pub fn problem(&self) -> HeatProblem {
        let model = self.model();
        let air = 3.0 * self.size;
        let (below, above) = match self.mirrors {
            Mirrors::Two { lower_m, upper_m } => (lower_m, upper_m),
            Mirrors::One { z_m } => (z_m, self.hi[1] + air),
            Mirrors::None => (self.lo[1] - air, self.hi[1] + air),
        };
        let drawing = Drawing {
            domain: Outline::rectangle([0.0, below], [self.hi[0] + air, above]).unwrap(),
            domain_region: RegionId(0),
            domain_size: 2.0 * self.size,
            regions: vec![Region {
                id: RegionId(1),
                outline: model.parts[0].outline.clone(),
                interior_size: self.size,
                surface_size: self.size,
                layers: None,
            }],
            gradation: 0.4,
            boundary_size: None,
            line_sizes: Vec::new(),
        };
        let mesh = Arc::new(triangulate(&drawing, &Limits::default(), &|| false).unwrap());
        HeatProblem::new(&mesh, &mesh.nodes(self.order), &[None, Some(0)], &model).unwrap()
    }
}

/// Work done by [`advance`].
#[derive(Debug, Clone, Copy, Default)]
pub struct Work {
    pub steps: usize,
    pub rejected: usize,
    pub newton: usize,
}

/// Steps from `state` to time `end`, at an error of `tolerance` kelvin a step.
pub fn advance(
    problem: &mut HeatProblem,
    mut state: HeatState,
    end: f64,
    tolerance: f64,
    source: Source,
) -> (HeatState, Work) {
    let mut control = StepControl::new(tolerance);
    let mut work = Work::default();
    while state.time_s < end * (1.0 - 1e-12) {
        let left = end - state.time_s;
        let dt = left / (left / control.step_s()).ceil().max(1.0);
        match problem.step(&state, dt, source) {
            Ok(outcome) => {
                work.newton += outcome.newton_iterations;
                if control.accepts(dt, outcome.error_k) {
                    state = outcome.state;
                    work.steps += 1;
                } else {
                    work.rejected += 1;
                }
            }
            Err(failure) => {
                assert!(failure.may_be_cured_by_a_shorter_step(), "{failure}");
                assert!(dt > 1e-9, "{failure}");
                control.failed(dt);
                work.rejected += 1;
            }
        }
        assert!(work.steps + work.rejected < 20_000, "too many steps");
    }
    (state, work)
}

/// Bessel function of the first kind by the trapezoidal rule on Bessel's integral (DLMF 10.9.2), exact to rounding.
pub fn bessel_j(n: i32, x: f64) -> f64 {
    let count = 64 + 2 * x.abs() as usize;
    let term = |k: usize| {
        let a = std::f64::consts::TAU * k as f64 / count as f64;
        (f64::from(n) * a - x * a.sin()).cos()
    };
    (0..count).map(term).sum::<f64>() / count as f64
}

/// The first `count` positive roots of `f`, which must be more than `step` apart.
pub fn roots(f: impl Fn(f64) -> f64, count: usize, step: f64) -> Vec<f64> {
    let mut found = Vec::new();
    let mut x = 1e-6;
    while found.len() < count {
        let (mut a, mut b) = (x, x + step);
        if f(a) * f(b) < 0.0 {
            for _ in 0..100 {
                let m = 0.5 * (a + b);
                if f(a) * f(m) <= 0.0 { b = m } else { a = m }
            }
            found.push(0.5 * (a + b));
        }
        x += step;
    }
    found
}
